# mypy: disable-error-code="no-any-return"
"""Composition dependence of Maxwell-Stefan diffusivities in liquids, binary and multicomponent."""
from __future__ import annotations

import numpy as np

from .record import Values, correlation
from .validity import UNKNOWN, Array, Confidence, Validity

_IDEAL = f"{UNKNOWN}; mixtures close to ideal"


@correlation("Maxwell-Stefan diffusivity", "liquids, binary", "m2 s-1", Validity(
    {}, None, "vignes_1966", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def vignes(mole_fraction_1: Values, dilute_1_in_2: Values, dilute_2_in_1: Values) -> Array:
    """Maxwell-Stefan diffusivity of a binary by Vignes [m2/s]: D = D12o^x2 D21o^x1, D12o that of 1 dilute in 2."""
    x = mole_fraction_1
    return dilute_1_in_2 ** (1 - x) * dilute_2_in_1 ** x


@correlation("Maxwell-Stefan diffusivity", "liquids, binary", "m2 s-1", Validity(
    {}, None, "caldwell_babb_1956", Confidence.CROSS_CHECKED, range_note=_IDEAL, error_note=UNKNOWN))
def caldwell_babb(mole_fraction_1: Values, dilute_1_in_2: Values, dilute_2_in_1: Values) -> Array:
    """Maxwell-Stefan diffusivity of a binary by Caldwell and Babb [m2/s]: D = x2 D12o + x1 D21o."""
    return (1 - mole_fraction_1) * dilute_1_in_2 + mole_fraction_1 * dilute_2_in_1


@correlation("Maxwell-Stefan diffusivity", "liquids, binary", "m2 s-1", Validity(
    {}, None, "darken_1948", Confidence.CROSS_CHECKED, range_note=_IDEAL, error_note=UNKNOWN))
def darken(mole_fraction_1: Values, tracer_1: Values, tracer_2: Values) -> Array:
    """Maxwell-Stefan diffusivity of a binary by Darken [m2/s]: D = x2 D1* + x1 D2*, tracers at the composition."""
    return (1 - mole_fraction_1) * tracer_1 + mole_fraction_1 * tracer_2


@correlation("Maxwell-Stefan diffusivity", "liquids, binary", "m2 s-1", Validity(
    {}, None, "leffler_cullinan_1970", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def leffler_cullinan(mole_fraction_1: Values, dilute_1_in_2: Values, dilute_2_in_1: Values, viscosity_1: Values,
                     viscosity_2: Values, mixture_viscosity: Values) -> Array:
    """Maxwell-Stefan diffusivity of a binary by Leffler and Cullinan [m2/s]: D mu = (D12o mu2)^x2 (D21o mu1)^x1."""
    x = mole_fraction_1
    return (dilute_1_in_2 * viscosity_2) ** (1 - x) * (dilute_2_in_1 * viscosity_1) ** x / mixture_viscosity


@correlation("Maxwell-Stefan pair diffusivities", "liquids", "m2 s-1", Validity(
    {}, None, "kooijman_taylor_1991", Confidence.VERIFIED, range_note=UNKNOWN, error_note=UNKNOWN))
def generalized_vignes(mole_fraction: Values, limit_diffusivity: Values) -> Array:
    """Pair diffusivities of a liquid by the generalised Vignes form [m2/s], shape (..., n, n).

    D_ij = prod_k (D_ij at x_k = 1)^x_k. The limits for k = j and k = i are the dilute diffusivities of i in j and of j
    in i; a closure gives those for the other k.
    """
    x = mole_fraction[..., None, None, :]
    return np.exp((x * np.log(limit_diffusivity)).sum(-1))


def _log_dilute(dilute_diffusivity: Array) -> Array:
    """Logarithm with the diagonal, which carries no meaning, at zero."""
    n = dilute_diffusivity.shape[-1]
    return np.log(np.where(np.eye(n, dtype=bool), 1.0, dilute_diffusivity))


def _diagonal_one(diffusivity: Array) -> Array:
    return np.where(np.eye(diffusivity.shape[-1], dtype=bool), 1.0, diffusivity)


@correlation("Maxwell-Stefan pair diffusivities", "liquids", "m2 s-1", Validity(
    {}, None, "kooijman_taylor_1991", Confidence.CROSS_CHECKED, range_note=UNKNOWN, error_note=UNKNOWN))
def kooijman_taylor(mole_fraction: Values, dilute_diffusivity: Values) -> Array:
    """Generalised Vignes with the closure of Kooijman and Taylor [m2/s], shape (..., n, n), symmetric, diagonal 1.

    D_ij at x_k = 1 is (D_ik,o D_jk,o)^(1/2): both species dilute in the third.
    """
    x = mole_fraction
    logs = _log_dilute(dilute_diffusivity)
    # sum_k x_k/2 (l_ik + l_jk) over all k holds the terms k = j (l_ij/2) and k = i (l_ji/2); complete them to x_j l_ij
    # and x_i l_ji. The diagonal of l is zero, so neither sum has a term of its own index.
    half = 0.5 * (logs * x[..., None, :]).sum(-1)
    own = 0.5 * logs * x[..., None, :]
    total = half[..., :, None] + half[..., None, :] + own + np.swapaxes(own, -1, -2)
    return _diagonal_one(np.exp(total))


@correlation("Maxwell-Stefan pair diffusivities", "liquids", "m2 s-1", Validity(
    {}, None, "wesselingh_krishna_1990", Confidence.CROSS_CHECKED, range_note=UNKNOWN, error_note=UNKNOWN))
def wesselingh_krishna(mole_fraction: Values, dilute_diffusivity: Values) -> Array:
    """Generalised Vignes with the closure of Wesselingh and Krishna [m2/s], shape (..., n, n), symmetric, diagonal 1.

    D_ij = D_ij,o^((1 + x_j - x_i)/2) D_ji,o^((1 + x_i - x_j)/2): third species act through their dilution alone.
    """
    x = mole_fraction
    logs = _log_dilute(dilute_diffusivity)
    part = 0.5 * (1 + x[..., None, :] - x[..., :, None]) * logs
    return _diagonal_one(np.exp(part + np.swapaxes(part, -1, -2)))
