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
        assert lewis_efficiency(point, S, path)[0, 0] == pytest.approx(value, rel=2e-4), path


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
    assert np.allclose(weeping(E2, S2, 0.0, pools=3), tray_efficiency(E2, S2, Pools(np.array(3.0))))
    assert np.allclose(weeping(E2, S2, 1e-7), tray_efficiency(E2, S2, PlugFlow()), rtol=1e-6)
    assert np.allclose(weeping(E2, S2, 0.4, pools=1), E2)
    assert np.allclose(weeping(E2, S2, 0.3, pools=20000), weeping(E2, S2, 0.3), rtol=1e-4)


def test_entrainment_of_a_scalar_is_colburns() -> None:
    assert entrained(np.array([[0.7]]), 0.1)[0, 0] == pytest.approx(float(colburn_entrainment(0.7, 0.1)), rel=1e-14)


def test_weeping_by_the_balances_of_the_pools() -> None:
    """Liquid and component balances of four pools that weep, solved as one linear system with y* = K x."""
    E, K, V, L, f, p, y_in = 0.7, 1.8, 1.0, 1.5, 0.3, 4, 0.1
    A, b = np.zeros((p, p)), np.zeros(p)
    x_in = 0.4
    for k in range(p):
        above, below = L * (1 - f * k / p), L * (1 - f * (k + 1) / p)
        # above x_(k-1) = below x_k + (f L/p) x_k + (V/p) E (K x_k - y_in)
        A[k, k] = below + f * L / p + V / p * E * K
        b[k] = V / p * E * y_in
        if k:
            A[k, k - 1] = -above
        else:
            b[k] += above * x_in
    x = np.linalg.solve(A, b)
    y_out = y_in + E * (K * x - y_in).mean()
    leaving = (1 - f) * x[-1] + f * x.mean()
    expected = (y_out - y_in) / (K * leaving - y_in)
    S = np.array([[K * V / L]])
    assert weeping(np.array([[E]]), S, f, pools=p)[0, 0] == pytest.approx(expected, rel=1e-12)
    assert 0.7 < expected < tray_efficiency(np.array([[E]]), S, Pools(np.array(4.0)))[0, 0]


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


@pytest.mark.parametrize("mixing, pools", [(Pools(np.array(3.0)), 3), (PlugFlow(), None)])
def test_weeping_with_too_few_eigenvectors(mixing: object, pools: int | None) -> None:
    """[S][E] with one eigenvector only: without weeping the tray of the same mixing, continuous in the fraction."""
    E, S = np.array([[0.7, 0.1], [0.0, 0.7]]), np.eye(2)
    assert np.allclose(weeping(E, S, 0.0, pools=pools), tray_efficiency(E, S, mixing), rtol=1e-7)
    near = weeping(E + np.diag([0.0, 1e-6]), S, 0.3, pools=pools)
    assert np.allclose(weeping(E, S, 0.3, pools=pools), near, rtol=1e-4)


def test_weeping_where_the_stripping_matches_the_loss() -> None:
    """Plug flow at z = -f: the drive falls as (1 - f s)/(1 - f) rises, mean (1 - f)(-ln(1 - f)/f)."""
    f = 0.3
    mean = (1 - f) * -np.log1p(-f) / f
    found = weeping(np.array([[0.5]]), np.array([[-f / 0.5]]), f)[0, 0]
    assert found == pytest.approx(0.5 * mean / (1 - f + f * mean), rel=1e-13)
