"""Dilute absorption: Kremser, Natl. Petroleum News 22 (1930) 43; trays with an efficiency as in Treybal, Mass-Transfer
Operations, 3rd ed. 1980, ch. 8 (both from memory): N_e = N ln(1 + E (1/A - 1))/ln(1/A)."""
from __future__ import annotations

import numpy as np
import pytest

from ratebased.column import Column, LiquidFeed, VaporFeed, solve_equilibrium
from ratebased.properties import ConstantVolatility

A, TRAYS, P, T = 1.4, 6, 101325.0, 300.0
V = 100.0
K = 0.7
L = A * K * V


def absorbed(efficiency: float | None, y_in: float = 1e-8) -> float:
    """Share of the solute that a dilute gas loses; gas and solvent never leave their phase, nothing carries heat."""
    mixture = ConstantVolatility(["gas", "solute", "oil"], [1.0, K * P / np.exp(22.0 - 2600.0 / T), 1.0], [0.0, 1.0,
                                                                                                           0.0],
                                 a=22.0, b=2600.0, vapor_heat_capacity=30.0, liquid_heat_capacity=30.0,
                                 reference_temperature=T, condensable=[False, True, True], volatile=[True, True, False])
    column = Column(TRAYS, [LiquidFeed(1, [0.0, 0.0, L], T), VaporFeed(TRAYS, [V * (1 - y_in), V * y_in, 0.0], T)], P)
    profile = solve_equilibrium(column, mixture, efficiency)
    return 1.0 - float(profile.products["top"].flows[1]) / (V * y_in)


def kremser(stages: float) -> float:
    return (A ** (stages + 1) - A) / (A ** (stages + 1) - 1.0)


def test_equilibrium_trays() -> None:
    assert kremser(TRAYS) == pytest.approx(0.958077213054, abs=1e-12)
    assert absorbed(None) == pytest.approx(kremser(TRAYS), abs=1e-7)


def test_murphree_trays() -> None:
    stages = TRAYS * np.log(1 + 0.6 * (1 / A - 1)) / np.log(1 / A)
    assert stages == pytest.approx(3.3533625251, abs=1e-10)
    assert kremser(stages) == pytest.approx(0.879757674153, abs=1e-12)
    assert absorbed(0.6) == pytest.approx(kremser(stages), abs=1e-7)


def test_the_formula_is_the_dilute_limit() -> None:
    """The error is proportional to the solute's fraction in the gas."""
    errors = [abs(absorbed(None, y) - kremser(TRAYS)) for y in (1e-3, 1e-4)]
    assert errors[0] / errors[1] == pytest.approx(10.0, rel=0.02)
