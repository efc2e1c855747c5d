"""Component efficiencies of a stage, each with its formula. Arrays (..., n), vapour enters below and leaves above."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..properties.protocol import Array, Mask, PropertyModel
from ..properties.saturation import bubble_point, dew_point

NEAR_EQUILIBRIUM = 0.01
"""Default of `driving_force_limit`: below it |y* - y_in| is less than K is known to."""


@dataclass(frozen=True)
class EquilibriumVapor:
    """The vapour y* that a Murphree efficiency is measured against.

    composition: y*, (..., n); sums to one, but at the liquid's own temperature without a gas to sum K_i x_i.
    temperature: where it was taken, K, (...). basis: "bubble point" or "liquid temperature".
    """

    composition: Array
    temperature: Array
    basis: str


def equilibrium_vapor(properties: PropertyModel, P: Array, x: Array, T_L: Array, y_in: Array, *,
                      y_out: Array | None = None, at_liquid_temperature: bool | None = None) -> EquilibriumVapor:
    """The vapour in equilibrium with the liquid that leaves a stage.

    At the bubble point of that liquid and the pressure of the stage, so that sum y* = 1. With a masked component, or
    where `at_liquid_temperature` is set, at the liquid's own temperature: y*_i = K_i(T_L) x_i for the components in
    both phases; the non-condensing ones share the rest of one in the proportion of y_in. Without any of them sum y* is
    not one: above it the liquid is superheated. That is what the equilibrium rows of a column ask of Murphree
    efficiencies at the liquid's temperature. A bubble point means nothing in an absorber.

    y_out: the vapour that K belongs to where it depends on one and no bubble point is taken; None: y_in.
    """
    ordinary = properties.condensable & properties.volatile
    own = not ordinary.all() if at_liquid_temperature is None else at_liquid_temperature
    if not own:
        T, y = bubble_point(properties, P, x, T_L)
        return EquilibriumVapor(y, T, "bubble point")
    K = properties.k_value(T_L, P, x, y_in if y_out is None else y_out)
    y = np.where(ordinary, K * x, 0.0)
    gas = np.where(properties.condensable, 0.0, y_in)
    share = gas.sum(-1, keepdims=True)
    rest = 1.0 - y.sum(-1, keepdims=True)
    return EquilibriumVapor(y + gas / np.where(share > 0, share, 1.0) * rest, T_L, "liquid temperature")


def small_driving_force(y_in: Array, y_star: Array, limit: float = NEAR_EQUILIBRIUM) -> Mask:
    """Where |y* - y_in| <= limit max(y*, y_in): a Murphree efficiency means nothing there (an absent component too)."""
    return np.abs(y_star - y_in) <= limit * np.maximum(y_star, y_in)


def murphree_vapor(y_in: Array, y_out: Array, y_star: Array) -> Array:
    """E_i = (y_out - y_in)_i/(y* - y_in)_i; zero where both differences vanish, infinite at a pole.

    Source: Murphree, Ind. Eng. Chem. 17 (1925) 747.
    """
    return _ratio(y_out - y_in, y_star - y_in)


def murphree_liquid(properties: PropertyModel, P: Array, x_in: Array, x_out: Array, y_out: Array,
                    T_guess: Array | None = None) -> Array:
    """E_i = (x_in - x_out)_i/(x_in - x*)_i, x* in equilibrium with the leaving vapour at its dew point."""
    _, x_star = dew_point(properties, P, y_out, T_guess)
    return _ratio(x_in - x_out, x_in - x_star)


def vaporization(K: Array, x_out: Array, y_out: Array, ordinary: Mask) -> Array:
    """eta_i = y_out,i/(K_i x_out,i), K at the temperature of the leaving liquid; one for masked or absent components.

    Bounded where Murphree's efficiency has a pole. Source: Holland, Multicomponent Distillation, 1963 (from memory).
    """
    return np.where(ordinary & (x_out > 0), _ratio(y_out, K * x_out), 1.0)


def hausen(y_in: Array, y_out: Array, y_equilibrium: Array) -> Array:
    """E_i = (y_out - y_in)_i/(y_e - y_in)_i, y_e the vapour of an equilibrium stage with the same two entering streams.

    Source: Hausen, Chem.-Ing.-Tech. 25 (1953) 595 (from memory).
    """
    return _ratio(y_out - y_in, y_equilibrium - y_in)


def _ratio(numerator: Array, denominator: Array) -> Array:
    """numerator/denominator; zero over zero is zero, a pole is infinite with the sign of its numerator."""
    zero = denominator == 0
    value = numerator / np.where(zero, 1.0, denominator)
    return np.where(zero, np.where(numerator == 0, 0.0, np.copysign(np.inf, numerator)), value)
