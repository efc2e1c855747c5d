"""Binary stepping: McCabe & Thiele, Ind. Eng. Chem. 17 (1925) 605.

The steps are drawn here by hand of a root-finder on straight operating lines; nothing of the column solver is used.
"""
from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from ideal_columns import P, distillation, ideal_mixture
from scipy.interpolate import PchipInterpolator
from scipy.optimize import brentq

from ratebased.column import Feed, solve_equilibrium
from ratebased.properties import ThermoProperties

# Methanol-water at 1 atm, T in C, x and y of methanol: Perry's Chemical Engineers' Handbook (from memory).
TABLE = np.array([
    (100.0, 0.0, 0.0), (96.4, .02, .134), (93.5, .04, .230), (91.2, .06, .304), (89.3, .08, .365), (87.7, .10, .418),
    (84.4, .15, .517), (81.7, .20, .579), (78.0, .30, .665), (75.3, .40, .729), (73.1, .50, .779), (71.2, .60, .825),
    (69.3, .70, .870), (67.6, .80, .915), (66.0, .90, .958), (65.0, .95, .979), (64.5, 1.0, 1.0)])


def bottoms_gap(x_D: float, equilibrium: Callable[[float], float], R: float, z: float, D: float, trays: int, feed: int,
                efficiency: float = 1.0) -> float:
    """Step down from a distillate composition: the vapour that must rise from the reboiler less what its liquid gives.

    One mole of saturated liquid feed.
    """
    x_B = (z - D * x_D) / (1.0 - D)
    y = x_D
    for tray in range(1, trays + 1):
        below = float(tray >= feed)
        slope, shift = (R * D + below) / ((R + 1) * D), (D * x_D - z * below) / ((R + 1) * D)

        def leaving(x: float, y: float = y, slope: float = slope, shift: float = shift) -> float:
            entering = slope * x + shift
            return entering + efficiency * (equilibrium(x) - entering) - y
        try:
            x = brentq(leaving, 0.0, 1.0, xtol=1e-15)
        except ValueError:
            return 1.0 if y < 0.5 else -1.0
        y = slope * x + shift
    return y - equilibrium(x_B)


def stepped(equilibrium: Callable[[float], float], *, R: float, z: float, D: float, trays: int, feed: int,
            efficiency: float = 1.0) -> float:
    """The distillate composition of the drawn steps: the root nearest to the largest one possible, where every stage
    lies between 0 and 1."""
    grid = np.linspace(z + 1e-6, min(1.0, z / D) - 1e-9, 400)
    gaps = [bottoms_gap(float(x), equilibrium, R, z, D, trays, feed, efficiency) for x in grid]
    for k in range(len(grid) - 1):
        if gaps[k] > 0 >= gaps[k + 1] or gaps[k] < 0 <= gaps[k + 1]:
            root = brentq(bottoms_gap, grid[k], grid[k + 1], args=(equilibrium, R, z, D, trays, feed, efficiency),
                          xtol=1e-14)
            if abs(bottoms_gap(root, equilibrium, R, z, D, trays, feed, efficiency)) < 1e-8:
                return float(root)
    raise AssertionError("no steps found")


def ideal(x: float) -> float:
    return 2.5 * x / (1 + 1.5 * x)


@pytest.mark.parametrize("efficiency, x_D", [(None, 0.946587527009), (0.7, 0.901462381426)])
def test_constant_volatility(efficiency: float | None, x_D: float) -> None:
    """alpha 2.5, z 0.5, R 2, D/F 0.5, nine trays with the feed on the fifth."""
    assert stepped(ideal, R=2.0, z=0.5, D=0.5, trays=9, feed=5, efficiency=efficiency or 1.0) == pytest.approx(
        x_D, abs=1e-10)
    column = distillation(9, feed_tray=5, z=[0.5, 0.5], D=50.0, R=2.0)
    profile = solve_equilibrium(column, ideal_mixture([2.5, 1.0]), efficiency)
    assert profile.purity(0) == pytest.approx(x_D, abs=1e-10)
    assert profile.purity(0, "bottom") == pytest.approx(1.0 - x_D, abs=1e-10)


def test_methanol_water() -> None:
    """Ten trays, feed on the sixth, z 0.4, R 1.2: steps drawn on the published data against the column with UNIFAC.

    The steps assume constant molar overflow; the molar latent heats of methanol and water differ by 15 %, and the data
    scatter by 0.005 in y. Together they allow 0.01 in the distillate.
    """
    curve = PchipInterpolator(TABLE[:, 1], TABLE[:, 2])
    drawn = stepped(lambda x: float(curve(x)), R=1.2, z=0.4, D=0.4, trays=10, feed=6)
    mixture = ThermoProperties.from_names(["methanol", "water"], "unifac", T_range=(320.0, 400.0))
    column = distillation(10, feed_tray=6, z=[0.4, 0.6], D=40.0, R=1.2).with_(
        feeds=[Feed(7, [40.0, 60.0], vapor_fraction=0.0)], pressure=P)
    profile = solve_equilibrium(column, mixture)
    assert profile.purity(0) == pytest.approx(drawn, abs=0.01)
