"""Reader of the reference format `efficiency`: points, mixed trays, pools and matrix forms against listed solutions.

The description inside the file defines every number and the tolerance it states.
"""
from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import partial
from typing import Any

import numpy as np

from ratebased import ConstantVolatility
from ratebased.efficiency import murphree_vapor
from ratebased.equipment import TransferCoefficients
from ratebased.properties import bubble_point
from ratebased.stage import FrothPoint, integral
from ratebased.stage.matrix_point import augmented_matrix, textbook_matrix
from ratebased.stage.mixed import mixed_tray_from_feeds
from ratebased.stage.pools import pools_in_series


@dataclass(frozen=True)
class Comparison:
    """One quantity of a case: what the library gives, what the file lists, the tolerance it states."""

    what: str
    found: np.ndarray
    listed: np.ndarray
    tolerance: np.ndarray | float

    @property
    def right(self) -> bool:
        """Within the tolerance."""
        return bool((np.abs(self.found - self.listed) <= self.tolerance).all())


def mixture(data: Mapping[str, Any]) -> ConstantVolatility:
    """The property model of a case."""
    names = [f"c{i + 1}" for i in range(len(data["alpha"]))]
    return ConstantVolatility(names, data["alpha"], data["latent"], a=data["a"], b=data["b"],
                              vapor_heat_capacity=data["cp_V"], liquid_heat_capacity=data["cp_L"],
                              reference_temperature=data["T_ref"], vapor_molar_density=data["c_V"],
                              liquid_molar_density=data["c_L"])


def froth(data: Mapping[str, Any], x: list[float], T_L: float) -> FrothPoint:
    """The entering vapour and coefficients of a case with the liquid (x, T_L)."""
    n = len(data["alpha"])
    unit = np.eye(n)
    c = TransferCoefficients(np.array(data["kappa_V"]) + unit, np.array(data["kappa_L"]) + unit,
                             np.array(data["h_V"]), np.array(data["h_L"]), np.array(data["area"]), "given")
    return FrothPoint(np.array(data["V_in"]), np.array(data["y_in"]), np.array(data["T_V_in"]), np.array(x),
                      np.array(T_L), np.array(data["P"]), c, np.array(data["c_V"]), np.array(data["c_L"]))


def compare(case: Mapping[str, Any]) -> Iterator[Comparison]:
    """Everything a case lists, compared."""
    data = case["inputs"]
    model = mixture(data)
    listed = case["point"]
    point = froth(data, listed["point_x"], listed["point_T_L"])
    found = integral(point, model, rtol=1e-11)
    yield Comparison("point y", found.y, np.array(listed["y_out"]), 1e-9)
    yield Comparison("point T_V", found.T_V, np.array(listed["T_V"]), 1e-6)
    yield Comparison("textbook y", textbook_matrix(point, model).y, np.array(case["matrix_point"]["y_out"]), 1e-8)
    yield Comparison("augmented y", augmented_matrix(point, model).y, np.array(case["augmented_point"]["y_out"]), 1e-8)

    entering = froth(data, data["x_in"], data["T_L_in"])
    V, L = data["V_in"], data["L_in"]
    mixed = mixed_tray_from_feeds(V * entering.y_in, entering.T_V_in, L * entering.x, entering.T_L, entering.P,
                                  entering.coefficients, entering.c_vapor, entering.c_liquid, model)
    yield from _leaving("mixed", case["mixed"], entering, model, mixed.y, mixed.x, mixed.T_V, mixed.T_L)
    for key in case:
        if key.startswith("pools_"):
            tray = pools_in_series(entering, np.array(L), model, int(key[6:]),
                                   method=partial(integral, rtol=1e-8))
            yield from _leaving(key, case[key], entering, model, tray.y, tray.x[-1], tray.T_V, tray.T_L[-1])


def _leaving(what: str, listed: Mapping[str, Any], entering: FrothPoint, model: ConstantVolatility, y: np.ndarray,
             x: np.ndarray, T_V: np.ndarray, T_L: np.ndarray) -> Iterator[Comparison]:
    yield Comparison(f"{what} y", y, np.array(listed["y_out"]), 1e-8)
    yield Comparison(f"{what} x", x, np.array(listed["x_out"]), 1e-8)
    yield Comparison(f"{what} T_V", T_V, np.array(listed["T_V"]), 1e-6)
    yield Comparison(f"{what} T_L", T_L, np.array(listed["T_L"]), 1e-6)
    _, star = bubble_point(model, entering.P, x, T_L)
    driving = np.array(listed["y_star"]) - entering.y_in
    yield Comparison(f"{what} E", murphree_vapor(entering.y_in, y, star), np.array(listed["E_MV"]),
                     1e-8 / np.abs(driving))
