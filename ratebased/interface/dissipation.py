"""Entropy production by diffusion inside one film, in the pair form, which is never negative."""
from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.linalg import expm

from ..film.blocks import film_matrix
from ..properties.protocol import GAS_CONSTANT

Array = NDArray[np.float64]

NODES, WEIGHTS = (0.5 * np.polynomial.legendre.leggauss(8)[0] + 0.5, 0.5 * np.polynomial.legendre.leggauss(8)[1])


def film_dissipation(N: Array, K: Array, bulk: Array, gamma: Array | None, side: int) -> Array:
    """R integral over the film of 1/2 sum_ij K_ij x_i x_j (N_i/x_i - N_j/x_j)^2, W/(m2 K), (...).

    The composition runs from the bulk as Gamma dx/deta = Phi x + phi (side = 1: away from the bulk along the flux, -1:
    against it), integrated by Gauss' rule of eight nodes. With Gamma = 1 it equals R sum N_i ln(x_0,i/x_d,i). A
    component that is absent adds nothing.
    """
    A = side * film_matrix(N, K)
    if gamma is not None:
        extended = np.zeros(np.broadcast_shapes(A.shape, (*gamma.shape[:-2], *A.shape[-2:])))
        extended[..., :-1, :-1] = np.linalg.inv(gamma)
        extended[..., -1, :-1] = -extended[..., :-1, :-1].sum(-2)
        A = extended @ A
    total = np.zeros(np.broadcast_shapes(A.shape[:-2], bulk.shape[:-1]))
    usable = np.asarray(np.isfinite(A).all((-1, -2)))
    A = np.where(usable[..., None, None], A, 0.0)
    for node, weight in zip(NODES, WEIGHTS):
        x = (expm(node * A) @ bulk[..., None])[..., 0]
        product = x[..., :, None] * x[..., None, :]
        cross = N[..., :, None] * x[..., None, :] - N[..., None, :] * x[..., :, None]
        present = product > 1e-300
        pair = np.where(present, K * cross ** 2 / np.where(present, product, 1.0), 0.0)
        total += weight * 0.5 * GAS_CONSTANT * pair.sum((-1, -2))
    return np.where(usable, total, np.nan)
