"""Ethanol-water at 1 atm: Carey & Lewis, Ind. Eng. Chem. 24 (1932) 882, as tabulated in handbooks (from memory).

The dilute points are the hardest: below x = 0.1 the bubble temperatures of the two group methods are up to 0.8 K
(modified) and 1.5 K (original) away, above it within 0.3 and 0.45 K.
"""
import numpy as np
import pytest

from ratebased.properties import ThermoProperties

T_C, X, Y = np.array([
    (95.5, .0190, .1700), (89.0, .0721, .3891), (86.7, .0966, .4375), (85.3, .1238, .4704), (84.1, .1661, .5089),
    (82.7, .2337, .5445), (82.3, .2608, .5580), (81.5, .3273, .5826), (80.7, .3965, .6122), (79.8, .5079, .6564),
    (79.7, .5198, .6599), (79.3, .5732, .6841), (78.74, .6763, .7385), (78.41, .7472, .7815),
    (78.15, .8943, .8943)]).T


@pytest.mark.parametrize("activity, mean_y, worst_y, mean_T, worst_T, worst_above", [
    ("unifac", 0.007, 0.030, 0.35, 1.6, 0.45), ("unifac-modified", 0.004, 0.012, 0.2, 0.9, 0.3)])
def test_bubble_points(activity, mean_y, worst_y, mean_T, worst_T, worst_above):
    model = ThermoProperties.from_names(["ethanol", "water"], activity)
    T, y = model.bubble_point(101325.0, np.stack([X, 1 - X], -1))
    deviation = np.abs(y[:, 0] - Y)
    assert deviation.mean() < mean_y and deviation.max() < worst_y
    off = np.abs(T - 273.15 - T_C)
    assert off.mean() < mean_T and off.max() < worst_T and off[X > 0.1].max() < worst_above
