"""Tray efficiencies by matrices: the scalar rows of the three cases of Lewis, limits, corrections."""
from __future__ import annotations

import numpy as np
import pytest

from correlations.mixing import colburn_entrainment
from ratebased import InputError
from ratebased.efficiency.tray_matrices import (
    VaporPath,
    entrained,
    lewis_efficiency,
    overall_efficiency,
    tray_efficiency,
    weeping,
)
from ratebased.stage import EddyDiffusion, PlugFlow, Pools, WellMixed

# E, lambda: case 1, case 2, case 3. Cases 1 and 2 from the closed forms of Lewis, Ind. Eng. Chem. 28 (1936) 399;
# case 3 by a numerical solution of his equations that shares no code with this one (a regression value).
LEWIS = [
    (0.5, 0.5, 0.568051, 0.576079, 0.566660), (0.5, 1.5, 0.744667, 0.774683, 0.730841),
    (0.7, 0.8, 0.938341, 0.986256, 0.917855), (0.7, 1.2, 1.096972, 1.176895, 1.051505),
    (0.7, 2.0, 1.527600, 1.692083, 1.399265), (0.9, 0.5, 1.136624, 1.215551, 1.097488),
    (0.9, 1.2, 1.620566, 1.843502, 1.454291),
]


@pytest.mark.parametrize(("E", "lam", "one", "two", "three"), LEWIS)
def test_three_cases_of_lewis(E: float, lam: float, one: float, two: float, three: float) -> None:
    point, S = np.array([[E]]), np.array([[lam]])
    for path, value in ((VaporPath.MIXED, one), (VaporPath.SAME_DIRECTION, two), (VaporPath.ALTERNATING, three)):
        trays = 41 if path is not VaporPath.MIXED else 9
        assert lewis_efficiency(point, S, path, trays=trays)[0, 0] == pytest.approx(value, rel=2e-4), path


E2 = np.array([[0.62, 0.08], [-0.05, 0.74]])
S2 = np.array([[1.3, -0.1], [0.2, 0.7]])


def test_matrices_that_commute_are_scalars_on_their_eigenvectors() -> None:
    V = np.array([[1.0, 0.4], [-0.3, 1.0]])
    e, s = np.array([0.5, 0.8]), np.array([1.4, 0.6])
    E, S = V @ np.diag(e) @ np.linalg.inv(V), V @ np.diag(s) @ np.linalg.inv(V)
    found = np.linalg.eigvals(tray_efficiency(E, S, Pools(np.array(3.0))))
    scalar = ((1 + s * e / 3) ** 3 - 1) / s
    assert np.allclose(np.sort(found.real), np.sort(scalar))
    two = lewis_efficiency(E, S, VaporPath.SAME_DIRECTION, trays=31)
    alone = [lewis_efficiency(np.array([[a]]), np.array([[b]]), VaporPath.SAME_DIRECTION, trays=31)[0, 0]
             for a, b in zip(e, s)]
    assert np.allclose(np.sort(np.linalg.eigvals(two).real), np.sort(alone), rtol=1e-6)


def test_pools_by_the_balances_themselves() -> None:
    """p pools with constant [E] and [K_eq], solved one by one from the outlet, against the closed form."""
    p, drive = 4, np.array([0.05, -0.02])
    here, mean = drive.copy(), np.zeros(2)
    for _ in range(p):
        step = E2 @ here
        mean += step / p
        here = here + S2 @ step / p
    assert np.allclose(tray_efficiency(E2, S2, Pools(np.array(4.0))) @ drive, mean, rtol=1e-12)


def test_limits() -> None:
    assert np.allclose(tray_efficiency(E2, S2, WellMixed()), E2)
    assert np.allclose(tray_efficiency(E2, S2, Pools(np.array(1e8))), tray_efficiency(E2, S2, PlugFlow()), rtol=1e-6)
    assert np.allclose(tray_efficiency(E2, S2, EddyDiffusion(np.array(1e-7))), E2, rtol=1e-6)
    assert np.allclose(entrained(E2, 0.0), E2)
    assert np.allclose(weeping(E2, S2, Pools(np.array(3.0)), 0.0), tray_efficiency(E2, S2, Pools(np.array(3.0))))
    assert np.allclose(weeping(E2, S2, WellMixed(), 0.4), E2)


def test_entrainment_of_a_scalar_is_colburns() -> None:
    assert entrained(np.array([[0.7]]), 0.1)[0, 0] == pytest.approx(float(colburn_entrainment(0.7, 0.1)), rel=1e-14)


def test_weeping_lowers_the_efficiency() -> None:
    plain = tray_efficiency(np.array([[0.7]]), np.array([[1.2]]), PlugFlow())
    wet = weeping(np.array([[0.7]]), np.array([[1.2]]), PlugFlow(), 0.3)
    assert 0.7 < wet[0, 0] < plain[0, 0]


def test_overall_efficiency() -> None:
    """Straight lines, E_MV = 0.7: the closed form of Lewis (1936), to one in the tenth digit."""
    for S, value in ((0.5, 0.6214883768), (0.8, 0.6759007323), (1.25, 0.7227103210), (2.0, 0.7655347464)):
        assert float(overall_efficiency(np.array(0.7), np.array(S))) == pytest.approx(value, abs=1e-10)
    assert float(overall_efficiency(np.array(0.7), np.array(1.0))) == 0.7


def test_bad_arguments() -> None:
    with pytest.raises(InputError, match="entrainment = 1"):
        entrained(E2, 1.0)
    with pytest.raises(InputError, match="expected square"):
        tray_efficiency(np.ones(3), S2, WellMixed())
    with pytest.raises(InputError, match="expected matrices of size 2"):
        tray_efficiency(E2, np.eye(3), WellMixed())
    with pytest.raises(InputError, match="1 \\+ E \\(S - 1\\) is not positive"):
        overall_efficiency(np.array(4.0), np.array(0.5))
