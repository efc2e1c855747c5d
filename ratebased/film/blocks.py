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
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..maxwell_stefan import composition_matrix, film_matrix, reduced, resistances

__all__ = ["FilmBlocks", "composition_matrix", "coth_blocks", "film_matrix", "reduced", "resistances", "shoot"]

Array = NDArray[np.float64]
Spectrum = NDArray[Any]  # real or complex, as the eigenvalues turn out

ILL_CONDITIONED = 1e5
"""Condition number of the eigenvectors of Z above which its functions are taken by doubling instead."""


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


def coth_factor_values(z: Spectrum) -> tuple[Spectrum, Spectrum]:
    """c(z) = (z/2) coth(z/2) and dc/dz, free of overflow; real or complex."""
    flip = np.where(z.real < 0, -1.0, 1.0)
    z = z * flip
    small = np.abs(z) < 0.05
    some = bool(small.any())
    safe = np.where(small, 1.0, z) if some else z
    e = np.exp(-safe)
    d = 1.0 - e
    slope = 0.5 * (1.0 + e) / d
    value = safe * slope
    slope = slope - safe * e / (d * d)
    if some:
        z2 = z * z
        value = np.where(small, 1.0 + z2 / 12.0 * (1.0 - z2 / 60.0 * (1.0 - z2 / 42.0)), value)
        slope = np.where(small, z / 6.0 * (1.0 - z2 / 30.0 * (1.0 - z2 / 28.0)), slope)
    return value, slope * flip


def coth_factor_matrix(Z: Array) -> Array:
    """C(Z) = (Z/2) coth(Z/2) of any square matrices, defective ones included.

    Continued fraction of the scaled matrix, then C(2Z) = C(Z) + (Z^2/4) C(Z)^-1: no exponential, no overflow.
    """
    norm = float(np.abs(Z).sum(-2).max(initial=0.0))
    doublings = max(0, int(np.ceil(np.log2(max(norm, 1e-300)))))
    W: Array = Z @ Z * 0.25 ** (doublings + 1)
    one = np.eye(Z.shape[-1])
    h_last: Spectrum = one
    k_last: Spectrum = np.zeros_like(one)
    h, k = h_last, h_last
    for b in (3.0, 5.0, 7.0, 9.0, 11.0, 13.0):
        h_last, h = h, b * h + W @ h_last
        k_last, k = k, b * k + W @ k_last
    C: Array = np.linalg.solve(k, h)
    for _ in range(doublings):
        tanh_part: Array = np.linalg.solve(C, W)          # W and C commute
        C += tanh_part
        W *= 4.0
    return C


def coth_factor_derivative(Z: Array, E: Array) -> Array:
    """Derivative of C at Z along E, from C([[Z, E], [0, Z]]); same shapes as Z."""
    m = Z.shape[-1]
    Z, E = np.broadcast_arrays(Z, E)
    double = np.zeros((*Z.shape[:-2], 2 * m, 2 * m))
    scale = np.maximum(np.abs(E).sum(-2).max(-1), 1e-300)[..., None, None]
    double[..., :m, :m] = double[..., m:, m:] = Z
    double[..., :m, m:] = E / scale
    derivative: Array = coth_factor_matrix(double)[..., :m, m:] * scale
    return derivative


def _eigenvectors(Z: Array) -> tuple[Spectrum, Spectrum, Spectrum, NDArray[np.bool_]]:
    """Eigenvalues, eigenvectors, their inverse, and a mask of the matrices too near a defective one for them."""
    if Z.shape[-1] == 1:
        one = np.ones_like(Z)
        return Z[..., 0], one, one, np.zeros(Z.shape[:-2], dtype=bool)
    w, V = np.linalg.eig(Z)
    try:
        inverse = np.linalg.inv(V)
    except np.linalg.LinAlgError:                         # one exactly singular V stops the whole batch
        singular = ~(np.linalg.cond(V) < 1e14)
        V = np.where(singular[..., None, None], np.eye(Z.shape[-1]), V)
        inverse = np.linalg.inv(V)
        bad = singular
    else:
        bad = np.zeros(Z.shape[:-2], dtype=bool)
    # the columns of V have unit length: |V|_F = sqrt(m)
    large = np.abs(inverse).max(axis=(-1, -2)) > ILL_CONDITIONED
    return w, V, inverse, bad | large


def _coth_terms(Z: Array, D: Array, K: Array, right: Array | None, slopes: Array | None
                ) -> tuple[Array, Array, Array | None]:
    """C(Z), the columns dC[right dPhi/dN_l] D, (..., m, n), and the columns dC[slopes_j] D, (..., m, j).

    `right` is Gamma^-1 (None: identity).
    """
    m = Z.shape[-1]
    w, V, inverse, bad = _eigenvectors(Z)
    c, dc = coth_factor_values(w)
    y = (inverse @ D[..., None])[..., 0]
    gap = w[..., :, None] - w[..., None, :]
    near = np.abs(gap) <= 1e-5 * (1.0 + np.abs(w[..., :, None]))
    c1 = np.where(near, 0.5 * (dc[..., :, None] + dc[..., None, :]),
                  (c[..., :, None] - c[..., None, :]) / np.where(near, 1.0, gap))
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
    C[bad] = coth_factor_matrix(Z)
    directions = reduced(film_matrix(np.eye(n), K[..., None, :, :]))       # dPhi/dN_l, (films, n, m, m)
    if right is not None:
        directions = np.broadcast_to(right, (*batch, m, m))[bad][..., None, :, :] @ directions
    dC = coth_factor_derivative(Z[..., None, :, :], directions)
    dN[bad] = np.swapaxes((dC @ D[..., None, :, None])[..., 0], -1, -2)
    if slopes is not None and ds is not None:
        ds = np.array(ds)
        along = np.broadcast_to(slopes, (*batch, m, m, m))[bad]
        dC = coth_factor_derivative(Z[..., None, :, :], along)
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
    if gamma is None:
        C, dN, _ = _coth_terms(Phi, D, K, None, None)
        GC, drift = C, None
    else:
        right = np.asarray(np.linalg.inv(gamma), dtype=np.float64)
        Z = right @ Phi
        half = None if gamma_slope is None else 0.5 * gamma_slope
        along = None if half is None else (right[..., None, :, :] @ half) @ Z[..., None, :, :]
        C, dN, ds = _coth_terms(Z, D, K, right, along)
        GC, dN, drift = gamma @ C, gamma @ dN, None
        if half is not None and ds is not None:
            CD = C @ D[..., None]
            drift = np.swapaxes((half @ CD[..., None, :, :])[..., 0], -1, -2) - gamma @ ds
    MN = (M @ N[..., None])[..., 0]
    GCD = (GC @ D[..., None])[..., 0]
    size = ((np.abs(M) @ np.abs(N)[..., None])[..., 0] + np.abs(GCD)).max(-1)
    common = -0.5 * Phi if drift is None else -0.5 * Phi - drift
    return FilmBlocks(MN - GCD, M - dN, common - GC, common + GC, size)
