"""Building blocks of the film equations, batched: matrices, the shooting map and the coth form with its Jacobian.

Notation. K_ij = 1/(c_t kappa_ij), zero on the diagonal. Across a film, eta = 0..1, dx/deta = A(N) x with
A_ij = -N_i K_ij and A_ii = sum_j K_ij N_j. The same matrix with x in place of N is M(x), and A(N) x = -M(x) N. Columns
of both sum to zero, so on composition differences A acts as the (n-1, n-1) rate-factor matrix [Phi] of Krishna and
Standart (1976). Their flux equation, written with the mean composition, is even in [Phi] and free of its inverse:

    M((x0 + xd)/2) N = Gamma C(Z) (x0 - xd),   C(Z) = (Z/2) coth(Z/2) = 1 + Z^2/12 - ...,   Z = Gamma^-1 Phi,

exact for ideal mixtures (Gamma = 1) with constant kappa. It holds where exp[Phi] - [I] is singular, which is the case
in every equimolar film written in n components.

The functions here are kernels: they trust their input. Shapes: N, x (..., n); K (..., n, n); batches broadcast.
"""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..maxwell_stefan import composition_matrix, film_matrix, reduced, resistances
from .spectral import coth_columns, coth_derivative, coth_differences, coth_function, coth_matrix, eigenvectors

__all__ = ["FilmBlocks", "composition_matrix", "coth_blocks", "film_matrix", "linearized_blocks", "reduced",
           "resistances", "shoot"]

Array = NDArray[np.float64]


SMALLEST_SCALE = 1e-10
"""Mole fraction below which the row of a component is no longer scaled up."""


def _taylor_order(norm: float) -> int:
    """Terms of the exponential series that reach rounding for a matrix of this norm."""
    order, term = 1, norm
    while term > 1e-17:
        order += 1
        term *= norm / order
    return order


def shoot(N: Array, K: Array, x: Array, sign: int = 1) -> tuple[Array, Array]:
    """exp(sign A(N)) x and its derivative by N.

    The film is crossed in steps of |A|_1 <= 3, each by the Taylor series in Horner's form, which the derivative shares.

    Returns
    -------
    end : (..., n). From face 0, sign = 1 gives the composition at face delta; from face delta, sign = -1 gives that at
        face 0.
    dend_dN : (..., n, n), entry ij = d end_i/d N_j.
    """
    K, N = sign * K, np.asarray(N)
    A = film_matrix(N, K)
    n = A.shape[-1]
    norm = float(np.abs(A).sum(-2).max(initial=0.0))
    steps = max(1, int(np.ceil(norm / 3.0)))
    order = _taylor_order(norm / steps)
    A, K = A / steps, K / steps
    batch = np.broadcast_shapes(A.shape[:-2], x.shape[:-1])
    start = np.zeros((*batch, n, n + 1))                  # columns: dp/dN, then p itself
    start[..., n] = x
    for _ in range(steps):
        state = start
        for k in range(order, 0, -1):
            p = state[..., n]
            state = A @ state
            state[..., :n] += p[..., None] * K            # dA p = -M(p)
            np.einsum("...ii->...i", state[..., :n])[...] -= (K @ p[..., None])[..., 0]
            state *= 1.0 / k
            state += start
        start = state
    return start[..., n], start[..., :n]


@dataclass(frozen=True)
class FilmBlocks:
    """Residual of the coth form of one film and its exact Jacobian, first n-1 rows (the last follows from the sum).

    residual (..., n-1) : M(x_m) N - Gamma C(Z) (x0 - xd), dimensionless, zero at a solution.
    dN (..., n-1, n) : its derivative by N.
    dx0, dxd (..., n-1, n-1) : column j is the derivative by x0 (by xd) along e_j - e_n.
    size (...) : of the terms of the residual, max_i (sum_j |M_ij N_j| + |(Gamma C D)_i|): the scale to test it against.
    """

    residual: Array
    dN: Array
    dx0: Array
    dxd: Array
    size: Array


def _coth_terms(Z: Array, D: Array, K: Array, right: Array | None, slopes: Array | None,
                scale: Array) -> tuple[Array, Array, Array | None]:
    """C(Z), the columns dC[right dPhi/dN_l] D, (..., m, n), and the columns dC[slopes_j] D, (..., m, j).

    `right` is Gamma^-1 (None: identity).
    """
    m = Z.shape[-1]
    w, V, inverse, bad = eigenvectors(Z, scale)
    c, c1 = coth_differences(w)
    y = (inverse @ D[..., None])[..., 0]
    C = ((V * c[..., None, :]) @ inverse).real
    weight = c1 * y[..., None, :]
    Q = weight @ np.swapaxes(V, -1, -2)                   # (m, m); its last column closes the sums of V
    Q = np.concatenate((Q, -Q.sum(-1, keepdims=True)), axis=-1)
    left = inverse if right is None else inverse @ right
    B = (left * Q[..., :m]) @ K[..., :m, :]
    B[..., :m] -= left * (Q @ K)[..., :m]
    dN = (V @ B).real
    ds = None
    if slopes is not None:
        inner = (inverse[..., None, :, :] @ slopes) @ V[..., None, :, :]
        ds = (V @ np.swapaxes((inner * weight[..., None, :, :]).sum(-1), -1, -2)).real
    if bad.any():
        C, dN, ds = _coth_terms_doubling(Z, D, K, right, slopes, bad, C, dN, ds)
    return C, dN, ds


def _coth_terms_doubling(Z: Array, D: Array, K: Array, right: Array | None, slopes: Array | None,
                         bad: NDArray[np.bool_], C: Array, dN: Array, ds: Array | None
                         ) -> tuple[Array, Array, Array | None]:
    """The terms again, without eigenvectors, where `bad`."""
    m, n = Z.shape[-1], K.shape[-1]
    batch = bad.shape
    C, dN = np.array(np.broadcast_to(C, (*batch, m, m))), np.array(np.broadcast_to(dN, (*batch, m, n)))
    Z, D = np.broadcast_to(Z, (*batch, m, m))[bad], np.broadcast_to(D, (*batch, m))[bad]
    K = np.broadcast_to(K, (*batch, n, n))[bad]
    C[bad] = coth_matrix(Z)
    directions = reduced(film_matrix(np.eye(n), K[..., None, :, :]))       # dPhi/dN_l, (films, n, m, m)
    if right is not None:
        directions = np.broadcast_to(right, (*batch, m, m))[bad][..., None, :, :] @ directions
    dC = coth_derivative(Z[..., None, :, :], directions)
    dN[bad] = np.swapaxes((dC @ D[..., None, :, None])[..., 0], -1, -2)
    if slopes is not None and ds is not None:
        ds = np.array(ds)
        along = np.broadcast_to(slopes, (*batch, m, m, m))[bad]
        dC = coth_derivative(Z[..., None, :, :], along)
        ds[bad] = np.swapaxes((dC @ D[..., None, :, None])[..., 0], -1, -2)
    return C, dN, ds


def coth_blocks(N: Array, K: Array, x0: Array, xd: Array, gamma: Array | None = None,
                gamma_slope: Array | None = None) -> FilmBlocks:
    """Residual and Jacobian of M(x_m) N = Gamma C(Z) (x0 - xd), x_m = (x0 + xd)/2, Z = Gamma^-1 Phi.

    Parameters
    ----------
    N : fluxes from face 0 to face delta, mol/(m2 s), (..., n).
    K : `resistances`, (..., n, n).
    x0, xd : compositions at the faces, (..., n).
    gamma : [Gamma], (..., n-1, n-1); None: identity.
    gamma_slope : (..., n-1, n-1, n-1), entry j = dGamma/dx_j at x_m along e_j - e_n; None: Gamma taken as constant in
        dx0 and dxd.

    Any size of the fluxes; no singular case at zero flux, for a singular or a defective Z.
    """
    D = x0 - xd
    Phi = reduced(film_matrix(N, K))
    M = film_matrix(0.5 * (x0 + xd), K)[..., :-1, :]
    m = Phi.shape[-1]
    if M.ndim != Phi.ndim or M.shape[:-2] != Phi.shape[:-2]:
        batch = np.broadcast_shapes(M.shape[:-2], Phi.shape[:-2])
        Phi, D = np.broadcast_to(Phi, (*batch, m, m)), np.broadcast_to(D, (*batch, m + 1))
        M = np.broadcast_to(M, (*batch, m, m + 1))
    D = D[..., :-1]
    scale = np.maximum(x0, xd)[..., :-1] + SMALLEST_SCALE
    if gamma is None:
        C, dN, _ = _coth_terms(Phi, D, K, None, None, scale)
        GC, drift = C, None
    else:
        right = np.asarray(np.linalg.inv(gamma), dtype=np.float64)
        Z = right @ Phi
        half = None if gamma_slope is None else 0.5 * gamma_slope
        along = None if half is None else (right[..., None, :, :] @ half) @ Z[..., None, :, :]
        C, dN, ds = _coth_terms(Z, D, K, right, along, scale)
        GC, dN, drift = gamma @ C, gamma @ dN, None
        if half is not None and ds is not None:
            CD = C @ D[..., None]
            drift = np.swapaxes((half @ CD[..., None, :, :])[..., 0], -1, -2) - gamma @ ds
    MN = (M @ N[..., None])[..., 0]
    GCD = (GC @ D[..., None])[..., 0]
    size = ((np.abs(M) @ np.abs(N)[..., None])[..., 0] + np.abs(GCD)).max(-1)
    common = -0.5 * Phi if drift is None else -0.5 * Phi - drift
    return FilmBlocks(MN - GCD, M - dN, common - GC, common + GC, size)


def linearized_blocks(N: Array, K: Array, x0: Array, xd: Array, gamma: Array | None = None,
                      gamma_slope: Array | None = None) -> FilmBlocks:
    """The same residual and Jacobian for linearised theory, where Z = N_t Gamma^-1 M(x_m) reduced.

    Toor (1964) and Stewart and Prober (1964): the Fick matrix is frozen at the mean composition, so the rate factor is
    the total flux times the inverse of the low-flux coefficients. Arguments and result as in `coth_blocks`.
    """
    n = N.shape[-1]
    D, x_mean, N_t = x0 - xd, 0.5 * (x0 + xd), N.sum(-1)[..., None, None]
    M = film_matrix(x_mean, K)
    R, M = reduced(M), M[..., :-1, :]
    right = np.eye(n - 1) if gamma is None else np.asarray(np.linalg.inv(gamma), dtype=np.float64)
    Gamma = np.eye(n - 1) if gamma is None else gamma
    Z = N_t * (right @ R)
    tangents = np.eye(n)[:-1] - np.eye(n)[-1]
    along_x = 0.5 * reduced(film_matrix(tangents, K[..., None, :, :]))     # dR/dx_j for one face moved
    moved = right[..., None, :, :] @ (N_t[..., None] * along_x)
    half = 0.5 * (np.zeros((n - 1,) * 3) if gamma_slope is None else gamma_slope)
    moved = moved - (right[..., None, :, :] @ half) @ Z[..., None, :, :]
    per_N_t = np.broadcast_to((right @ R)[..., None, :, :], (*moved.shape[:-3], 1, n - 1, n - 1))
    batch = np.broadcast_shapes(Z.shape[:-2], moved.shape[:-3])
    columns = coth_columns(np.broadcast_to(Z, (*batch, n - 1, n - 1)), np.concatenate((per_N_t, moved), axis=-3),
                           np.broadcast_to(D[..., :-1], (*batch, n - 1)))
    C = coth_function(Z)
    columns = Gamma @ columns
    GC = Gamma @ C
    GCD = (GC @ D[..., :-1, None])[..., 0]
    CD = (C @ D[..., :-1, None])[..., None, :, :]
    drift = columns[..., 1:] + np.swapaxes((half @ CD)[..., 0], -1, -2)
    direct = np.swapaxes((film_matrix(0.5 * tangents, K[..., None, :, :])[..., :-1, :] @ N[..., None, :, None])[..., 0],
                         -1, -2)                          # dM N
    size = ((np.abs(M) @ np.abs(N)[..., None])[..., 0] + np.abs(GCD)).max(-1)
    common = direct - drift
    return FilmBlocks((M @ N[..., None])[..., 0] - GCD, M - columns[..., :1], common - GC, common + GC, size)
