"""Functions of the rate-factor matrix, batched: C(Z) = (Z/2) coth(Z/2), its derivative, the shape of a film's profile.

Through eigenvalues where the eigenvectors are well conditioned, else by doubling or the matrix exponential.
"""
from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.linalg import expm

from ..maxwell_stefan import solve

Array = NDArray[np.float64]
Spectrum = NDArray[Any]  # real or complex, as the eigenvalues turn out

ILL_CONDITIONED = 1e5
"""Condition number of the eigenvectors of Z above which its functions are taken by doubling instead."""


def coth_values(z: Spectrum) -> tuple[Spectrum, Spectrum]:
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


def coth_matrix(Z: Array) -> Array:
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
    C = solve(k, h)
    for _ in range(doublings):
        C += solve(C, W)                                  # W and C commute
        W *= 4.0
    return C


def coth_derivative(Z: Array, E: Array) -> Array:
    """Derivative of C at Z along E, from C([[Z, E], [0, Z]]); same shapes as Z."""
    m = Z.shape[-1]
    Z, E = np.broadcast_arrays(Z, E)
    double = np.zeros((*Z.shape[:-2], 2 * m, 2 * m))
    scale = np.maximum(np.abs(E).sum(-2).max(-1), 1e-300)[..., None, None]
    double[..., :m, :m] = double[..., m:, m:] = Z
    double[..., :m, m:] = E / scale
    derivative: Array = coth_matrix(double)[..., :m, m:] * scale
    return derivative


def eigenvectors(Z: Array, scale: Array | None = None) -> tuple[Spectrum, Spectrum, Spectrum, NDArray[np.bool_]]:
    """Eigenvalues, eigenvectors, their inverse, and a mask of the matrices too near a defective one for them.

    scale (..., m): size of each component; Z is brought to comparable rows and columns first, a trace keeps its digits.
    """
    if Z.shape[-1] == 1:
        one = np.ones_like(Z)
        return Z[..., 0], one, one, np.zeros(Z.shape[:-2], dtype=bool)
    w, V = np.linalg.eig(Z if scale is None else Z * scale[..., None, :] / scale[..., :, None])
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
    bad = bad | large
    if scale is not None:
        V, inverse = V * scale[..., :, None], inverse / scale[..., None, :]
    return w, V, inverse, bad


def coth_function(Z: Array) -> Array:
    """C(Z) through eigenvalues, by doubling where they will not do."""
    w, V, inverse, bad = eigenvectors(Z)
    C: Array = ((V * coth_values(w)[0][..., None, :]) @ inverse).real
    if bad.any():
        C[bad] = coth_matrix(Z[bad])
    return C


def coth_columns(Z: Array, E: Array, D: Array) -> Array:
    """Directional derivatives dC(Z)[E_j] D, (..., m, j), of directions E (..., j, m, m) on one vector D (..., m)."""
    w, V, inverse, bad = eigenvectors(Z)
    y = (inverse @ D[..., None])[..., 0]
    weight = coth_differences(w)[1] * y[..., None, :]
    inner = (inverse[..., None, :, :] @ E) @ V[..., None, :, :]
    columns: Array = (V @ np.swapaxes((inner * weight[..., None, :, :]).sum(-1), -1, -2)).real
    if bad.any():
        E, D = np.broadcast_to(E, (*bad.shape, *E.shape[-3:])), np.broadcast_to(D, (*bad.shape, D.shape[-1]))
        slope = coth_derivative(Z[bad][..., None, :, :], E[bad])
        columns[bad] = np.swapaxes((slope @ D[bad][..., None, :, None])[..., 0], -1, -2)
    return columns


def coth_differences(w: Spectrum) -> tuple[Spectrum, Spectrum]:
    """c(w_a), (..., m), and (c(w_a) - c(w_b))/(w_a - w_b), (..., m, m), its slope where the two coincide."""
    c, slope = coth_values(w)
    gap = w[..., :, None] - w[..., None, :]
    near = np.abs(gap) <= 1e-5 * (1.0 + np.abs(w[..., :, None]))
    mean_slope = 0.5 * (slope[..., :, None] + slope[..., None, :])
    return c, np.where(near, mean_slope, (c[..., :, None] - c[..., None, :]) / np.where(near, 1.0, gap))


def profile_shape(Z: Array, eta: Array, D: Array) -> Array:
    """(e^(Z eta) - 1)(e^Z - 1)^-1 D for every eta of (p,), (..., p, m): 0 at eta = 0, D at eta = 1, no overflow."""
    w, V, inverse, bad = eigenvectors(Z)
    y = (inverse @ D[..., None])[..., 0]
    w, y = w[..., None, :], y[..., None, :]
    e = eta[:, None]
    rising = w.real > 0                                   # divide through by e^w there
    size = np.where(rising, -w, w)
    small = np.abs(w) < 1e-7
    safe = np.where(small, -1.0, size)
    with np.errstate(over="ignore", invalid="ignore"):
        down = np.expm1(safe * e) / np.expm1(safe)        # argument has a real part below zero
        up = (np.exp(safe * (1.0 - e)) - np.exp(safe)) / (-np.expm1(safe))
    # what the straight line leaves: zero at both faces, whatever the rounding of V
    shape = np.where(small, 0.5 * e * w * (e - 1.0), np.where(rising, up, down) - e)
    shape = np.where((e == 0.0) | (e == 1.0), 0.0, shape)
    values: Array = e * D[..., None, :] + ((shape * y) @ np.swapaxes(V, -1, -2)).real
    for where in np.argwhere(bad):
        i = tuple(where)
        values[i] = [_profile_exponential(np.asarray(Z[i]), float(t)) @ D[i] for t in eta]
    return values


def _profile_exponential(Z: Array, eta: float) -> Array:
    """The same matrix from eta phi(eta Z) phi(Z)^-1, phi(Z) = (e^Z - 1)/Z by one augmented exponential each."""
    m = Z.shape[-1]
    augmented = np.zeros((2 * m, 2 * m))
    augmented[:m, m:] = np.eye(m)
    augmented[:m, :m] = Z
    whole = expm(augmented)[:m, m:]
    part = expm(eta * augmented)[:m, m:]
    return solve(whole.T, part.T).T
