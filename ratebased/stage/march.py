"""The liquid's path over a tray marched upstream from the outlet, pool by pool: nothing linearised.

A pool is mixed, so what it gives is known from the liquid that leaves it: l_(k-1) = l_k - R(l_k)/p, from the last pool
to the first. A real number of pools ends with a smaller one at the inlet.
"""
from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from ..equipment.protocol import Array
from ..interface.problem import entries
from ..properties.protocol import PropertyModel
from ..properties.saturation import bubble_point
from .point import FrothPoint, PointResult, exponential_midpoint

LEAST_SHARE = 1e-9
ROUNDING = 1e-12
"""Of the flow: what a component may be missing by rounding."""


@dataclass(frozen=True)
class MarchResult:
    """transferred mol/s, (B, n) and energy W, (B): means over the tray. feasible: false where a liquid upstream would
    have to hold less than nothing of a component, so that no such tray exists, (B).
    """

    transferred: Array
    energy: Array
    feasible: NDArray[np.bool_]


def march_upstream(point: FrothPoint, outlet: PointResult, index: NDArray[np.int64], liquid_flow: Array,
                   properties: PropertyModel, pools: Array) -> MarchResult:
    """Transfer of trays of `pools` (B) pools each, their leaving liquids given; one batch axis.

    outlet: the froth at the leaving liquids, of a larger batch of which `index` picks these. Upstream froths by
    `exponential_midpoint` with the coefficients of the point.
    """
    whole = (properties.condensable & properties.volatile).all()
    offset = point.T_L - bubble_point(properties, point.P, point.x, point.T_L)[0] if whole else np.zeros_like(point.T_L)
    l, T = liquid_flow[:, None] * point.x, point.T_L.copy()
    feasible = np.ones(T.shape, bool)
    transferred, energy = np.zeros_like(l), np.zeros_like(T)
    left = np.ones_like(T)
    rate, heat = outlet.transferred[index], outlet.energy[index]
    while True:
        share = np.where(feasible, np.minimum(1.0 / pools, left), 0.0)
        transferred += share[:, None] * rate
        energy += share * heat
        left = left - share
        upstream = l - share[:, None] * rate
        feasible &= (upstream >= -ROUNDING * liquid_flow[:, None]).all(-1)
        upstream = np.maximum(upstream, 0.0)
        active = np.flatnonzero(feasible & (left > LEAST_SHARE))
        if not active.size:
            return MarchResult(transferred, energy, feasible)
        l = np.where(feasible[:, None], upstream, l)
        x = l[active] / l[active].sum(-1, keepdims=True)
        model = entries(properties, active)
        if whole:
            T[active] = bubble_point(model, point.P[active], x, T[active])[0] + offset[active]
        part = exponential_midpoint(replace(taken(point, active), x=x, T_L=T[active]), model)
        rate, heat = np.zeros_like(l), np.zeros_like(T)
        rate[active], heat[active] = part.transferred, part.energy


def taken(point: FrothPoint, index: NDArray[np.int64]) -> FrothPoint:
    """Some points of a batch with one axis."""
    c = point.coefficients
    some = replace(c, kappa_vapor=c.kappa_vapor[index], kappa_liquid=c.kappa_liquid[index], h_vapor=c.h_vapor[index],
                   h_liquid=c.h_liquid[index], area=c.area[index], notes={})
    return FrothPoint(point.V_in[index], point.y_in[index], point.T_V_in[index], point.x[index], point.T_L[index],
                      point.P[index], some, point.c_vapor[index], point.c_liquid[index])
