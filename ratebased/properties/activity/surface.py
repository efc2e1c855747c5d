"""Surface-fraction mixing: the equations UNIQUAC and the UNIFAC methods share.

Segments (groups, or whole molecules in UNIQUAC) of area Q_k, v_ik of them in molecule i, interact through
psi_mk(T). With area fractions theta:

    E_k = sum_m theta_m psi_mk,  ln Gamma_k / Q_k = 1 - ln E_k - sum_m psi_km theta_m / E_m

and ln gamma_i = sum_k v_ik Q_k (ln Gamma_k/Q_k in the mixture minus the same in pure i), plus the combinatorial part of
Staverman and Guggenheim. Abrams & Prausnitz, AIChE J. 21 (1975) 116; Fredenslund, Jones & Prausnitz, AIChE J. 21
(1975) 1086.
"""
from __future__ import annotations

import numpy as np

from ..jet import Jet
from ..protocol import Array

HALF_COORDINATION = 5.0


def combinatorial(x: Array, r: Array, q: Array, r_exponent: float) -> Array:
    """Staverman-Guggenheim ln gamma, (..., n); `r_exponent` 1, or 3/4 in the modified method (Weidlich & Gmehling,
    Ind. Eng. Chem. Res. 26 (1987) 1372)."""
    V, F, W = _fractions(x, r, q, r_exponent)
    ratio = V / F
    return 1.0 - W + np.log(W) - HALF_COORDINATION * q * (1.0 - ratio + np.log(ratio))


def combinatorial_mole_derivatives(x: Array, r: Array, q: Array, r_exponent: float) -> Array:
    """d ln gamma_i / d n_j of the combinatorial part at one mole in all, (..., n, n)."""
    V, F, W = _fractions(x, r, q, r_exponent)
    outer = (1.0 - W)[..., :, None] * (1.0 - W)[..., None, :]
    return outer - HALF_COORDINATION * (q * (1.0 - V / F))[..., :, None] * (F - V)[..., None, :]


def _fractions(x: Array, r: Array, q: Array, r_exponent: float) -> tuple[Array, Array, Array]:
    V = r / (x @ r)[..., None]
    F = q / (x @ q)[..., None]
    if r_exponent == 1.0:
        return V, F, V
    power = r ** r_exponent
    return V, F, power / (x @ power)[..., None]


def segment_activity(theta: Array, psi: Jet) -> Jet:
    """ln Gamma_k / Q_k for area fractions theta (..., m, G) and interactions psi (..., G, G): (..., m, G)."""
    E = theta @ psi
    inverse = E.reciprocal()
    return -(E.log(inverse) + (inverse * theta) @ psi.transpose()) + 1.0


def residual_mole_derivatives(x: Array, areas: Array, psi: Array) -> Array:
    """d ln gamma_i / d n_j of the residual part at one mole in all, (..., n, n); `areas` (n, G) = v_ik Q_k.

    Pure-component terms do not depend on composition.
    """
    amount = x @ areas
    total = amount.sum(-1)[..., None]
    theta = amount / total
    E = (theta[..., None, :] @ psi)[..., 0, :]
    w = theta / E
    molecule = areas.sum(-1)[:, None]
    total = total[..., None]
    e = (areas @ psi / E[..., None, :] - molecule) / total
    dw = (areas / E[..., None, :] - molecule * w[..., None, :]) / total - w[..., None, :] * e
    # rows j, columns k of d ln Gamma_k/d n_j; the sum over the groups of i gives J_ji, which is symmetric
    by_segment = e + dw @ np.ascontiguousarray(np.swapaxes(psi, -1, -2))
    derivative: Array = -by_segment @ areas.T
    return derivative
