"""Dilute packed absorption: Colburn, Trans. AIChE 35 (1939) 211 (from memory).

With pure solvent, y_out/y_in = (1 - S)/(exp(N_OG (1 - S)) - S), S = mV/L; two films in series, 1/N_OG = 1/N_V + S/N_L.
"""
from __future__ import annotations

import numpy as np
import pytest

from ratebased.column import Column, FlowPattern, LiquidFeed, Mixed, VaporFeed, refine_grid, solve_ratebased
from ratebased.equipment import FixedCoefficients
from ratebased.properties import ConstantVolatility

P, T, V, L, m = 101325.0, 300.0, 100.0, 70.0, 0.5
S = m * V / L
C_VAPOR, C_LIQUID = 40.0, 1.0e4
Y_IN = 1e-7


def bed(segments: int, N_OG: float, liquid_share: float = 0.0
        ) -> tuple[Column, ConstantVolatility, FixedCoefficients]:
    """A bed of N_OG transfer units cut into segments; `liquid_share` of the resistance lies in the liquid."""
    mixture = ConstantVolatility(["gas", "solute", "oil"], [1.0, m * P / np.exp(22.0 - 2600.0 / T), 1.0], [0.0, 1.0,
                                                                                                           0.0],
                                 a=22.0, b=2600.0, vapor_heat_capacity=30.0, liquid_heat_capacity=30.0,
                                 reference_temperature=T, condensable=[False, True, True], volatile=[True, True, False],
                                 vapor_molar_density=C_VAPOR, liquid_molar_density=C_LIQUID)
    N_V = N_OG / (1.0 - liquid_share)
    N_L = S * N_OG / liquid_share if liquid_share else 1e7
    kappa_V = 0.02
    area = N_V * V / (C_VAPOR * kappa_V)
    contactor = FixedCoefficients(kappa_V, N_L * L / (C_LIQUID * area), area / segments, h_vapor=100.0, h_liquid=1000.0)
    column = Column(segments, [LiquidFeed(1, [0.0, 0.0, L], T),
                               VaporFeed(segments, [V * (1 - Y_IN), V * Y_IN, 0.0],
                                         T)], P, segment_height=1.0 / segments)
    return column, mixture, contactor


def leaving_share(N_OG: float, liquid_share: float = 0.0) -> float:
    """y_out/y_in, extrapolated from 8, 16 and 32 segments."""
    study = refine_grid(*bed(8, N_OG, liquid_share), grids=3, area_follows_height=False)
    assert study.order[-1] == pytest.approx(2.0, abs=0.1)
    return float(study.extrapolated[1]) / (V * Y_IN)


def colburn(N_OG: float) -> float:
    return (1 - S) / (np.exp(N_OG * (1 - S)) - S)


@pytest.mark.parametrize("N_OG, expected, tolerance", [
    (1.0, 0.463500990822, 1e-6), (3.0, 0.173989763937, 5e-6), (6.0, 0.059051127865, 5e-5)])
def test_vapor_film(N_OG: float, expected: float, tolerance: float) -> None:
    """The tolerance is the error left by Richardson's extrapolation of the two finest grids, fourth order in N/32."""
    assert colburn(N_OG) == pytest.approx(expected, abs=1e-12)
    assert leaving_share(N_OG) == pytest.approx(expected, abs=tolerance)


def test_two_films_in_series() -> None:
    assert leaving_share(3.0, liquid_share=0.4) == pytest.approx(colburn(3.0), abs=5e-6)


@pytest.mark.parametrize("pattern, errors, tolerance", [
    (None, [-8.2e-4, -2.0e-4, -5.1e-5, -1.3e-5], 0.06), (Mixed(), [1.2e-1, 6.4e-2, 3.3e-2, 1.7e-2], 0.06)],
    ids=["averaged", "mixed"])
def test_error_of_a_grid(pattern: FlowPattern | None, errors: list[float], tolerance: float) -> None:
    """y_out/y_in of 4, 8, 16 and 32 segments against the formula: regression values to the digits given."""
    found = []
    for segments in (4, 8, 16, 32):
        profile = solve_ratebased(*bed(segments, 3.0), vapor=pattern, liquid=pattern)
        found.append(profile.products["top"].flows[1] / (V * Y_IN) - colburn(3.0))
    np.testing.assert_allclose(found, errors, rtol=tolerance)
