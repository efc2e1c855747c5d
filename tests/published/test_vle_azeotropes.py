"""Azeotropes at 1 atm: Horsley, Azeotropic Data III (1973), and Gmehling et al., Azeotropic Data (1994), from memory.

The second figure of each row is the mole fraction of the first component. Published measurements spread over about
0.3 K and 0.01 in x; the tolerance is that of modified UNIFAC, a predictive method: 1 K and 0.025.
"""
import numpy as np
import pytest
from scipy.optimize import brentq

from ratebased.properties import ThermoProperties

ROWS = [
    ("ethanol", "water", .894, 78.2), ("acetone", "methanol", .795, 55.6), ("ethanol", "benzene", .448, 67.9),
    ("ethanol", "ethyl acetate", .46, 71.8), ("acetone", "chloroform", .345, 64.5), ("methanol", "benzene", .61, 57.5),
    ("2-propanol", "water", .686, 80.3), ("benzene", "cyclohexane", .54, 77.5), ("1-propanol", "water", .432, 87.7),
    ("methanol", "n-hexane", .51, 50.0), ("acetone", "n-hexane", .64, 49.8), ("ethanol", "n-heptane", .66, 71.0),
    ("methanol", "methyl acetate", .34, 53.9)]


@pytest.mark.parametrize("one, two, x, t", ROWS, ids=[f"{row[0]}, {row[1]}" for row in ROWS])
def test_azeotrope(one, two, x, t):
    model = ThermoProperties.from_names([one, two], "unifac-modified")
    grid = np.linspace(0.02, 0.98, 49)
    excess = model.bubble_point(101325.0, np.stack([grid, 1 - grid], -1))[1][:, 0] - grid
    crossing = np.flatnonzero(excess[:-1] * excess[1:] < 0)
    assert len(crossing) == 1
    k = int(crossing[0])
    found = brentq(lambda x1: model.bubble_point(101325.0, [x1, 1 - x1])[1][0] - x1, grid[k], grid[k + 1])
    assert found == pytest.approx(x, abs=0.025)
    assert model.bubble_point(101325.0, [found, 1 - found])[0] - 273.15 == pytest.approx(t, abs=1.0)
