"""The bubble line of a liquid: temperature, vapour, and how both move with the composition."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..properties.differences import k_value_derivatives
from ..properties.protocol import Array, PropertyModel
from ..properties.saturation import bubble_point


@dataclass(frozen=True)
class BubbleLine:
    """At the bubble point of x, batched.

    temperature K, (...). vapor: y*, (..., n). vapor_slope: dy*_i/dn_j, (..., n, n), and temperature_slope: dT_b/dn_j,
    K, (..., n), both along the line by the mole numbers of the liquid at one mole in all (so x times them is zero;
    differences of columns are derivatives by fractions).
    """

    temperature: Array
    vapor: Array
    vapor_slope: Array
    temperature_slope: Array

    @property
    def equilibrium_matrix(self) -> Array:
        """[K_eq]_ij = dy*_i/dx_j - dy*_i/dx_n, (..., n-1, n-1)."""
        return np.asarray((self.vapor_slope[..., :, :-1] - self.vapor_slope[..., :, -1:])[..., :-1, :])


def bubble_line(properties: PropertyModel, P: Array, x: Array, T_guess: Array) -> BubbleLine:
    """The bubble line at x. From sum y* = 1 with y*_i = K_i x_i and dx_i/dn_j = delta_ij - x_i."""
    T, y = bubble_point(properties, P, x, T_guess)
    d = k_value_derivatives(properties, T, P, x, y)
    K = properties.k_value(T, P, x, y)
    unit = np.eye(x.shape[-1])
    # y_i = K_i x_i: (I - diag(y) dlnK/dy) dy = y dlnK/dx + K dx + y dlnK/dT dT, and sum dy = 0 gives dT.
    A = unit - y[..., None] * d.vapor
    by_mole = np.linalg.solve(A, d.liquid * y[..., None] + K[..., None] * (unit - x[..., None]))
    rise = np.linalg.solve(A, (y * d.temperature)[..., None])[..., 0]
    slope = -by_mole.sum(-2) / rise.sum(-1)[..., None]
    return BubbleLine(T, y, by_mole + rise[..., None] * slope[..., None, :], slope)
