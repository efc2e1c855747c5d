"""Definitions of component efficiencies: what a binary does, what equilibrium gives, what closes."""
from __future__ import annotations

import numpy as np
import pytest

from ratebased import ConstantVolatility, bubble_point, dew_point
from ratebased.efficiency import equilibrium_vapor, hausen, murphree_liquid, murphree_vapor, vaporization
from ratebased.equipment import TransferCoefficients
from ratebased.stage.equilibrium_stage import equilibrium_stage
from ratebased.stage.mixed import mixed_tray_from_feeds

P = np.full(1, 101325.0)


def mixture(n: int) -> ConstantVolatility:
    latent = [3.1e4, 3.4e4, 3.8e4][:n]
    return ConstantVolatility([f"c{i}" for i in range(n)], [2.6, 1.0, 0.4][:n], latent, a=22.6, b=4000.0,
                              vapor_heat_capacity=80.0, liquid_heat_capacity=130.0, reference_temperature=350.0,
                              vapor_molar_density=35.0, liquid_molar_density=1.1e4)


def streams(n: int) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    x = np.array([[0.45, 0.35, 0.2]])[:, :n]
    y = np.array([[0.3, 0.4, 0.3]])[:, :n]
    x, y = x / x.sum(-1, keepdims=True), y / y.sum(-1, keepdims=True)
    T_L, _ = bubble_point(mixture(n), P, x)
    T_V, _ = dew_point(mixture(n), P, y)
    return 1.0 * y, np.asarray(T_V), 1.3 * x, np.asarray(T_L)


def tray(n: int, area: float) -> tuple[np.ndarray, ...]:
    m = mixture(n)
    g, T_V, l, T_L = streams(n)
    kappa = np.array([[1.0, 0.5, 1.5], [0.5, 1.0, 1.0], [1.5, 1.0, 1.0]])[:n, :n]
    c = TransferCoefficients(0.02 * kappa[None], 2e-4 * kappa[None], np.full(1, 45.0), np.full(1, 1500.0),
                             np.full(1, area), "given")
    r = mixed_tray_from_feeds(g, T_V, l, T_L, P, c, np.full(1, 35.0), np.full(1, 1.1e4), m)
    g_e, l_e, T_e = equilibrium_stage(g, T_V, l, T_L, P, m)
    return r, g, l, g_e, l_e, T_e


def test_binary_efficiencies_are_equal_by_every_definition_but_vaporisation() -> None:
    m = mixture(2)
    r, g, l, g_e, _, _ = tray(2, 2.0)
    y_in, x_in = g / g.sum(), l / l.sum()
    _, star = bubble_point(m, P, r.x)
    for E in (murphree_vapor(y_in, r.y, star), murphree_liquid(m, P, x_in, r.x, r.y),
              hausen(y_in, r.y, g_e / g_e.sum())):
        assert E[0, 0] == pytest.approx(E[0, 1], rel=1e-9)
    eta = vaporization(m.k_value(r.T_L, P, r.x, r.y), r.x, r.y, np.ones(2, bool))
    assert abs(eta[0, 0] - eta[0, 1]) > 1e-3


def test_much_area_is_the_equilibrium_stage() -> None:
    """Area times 1e4: streams of the adiabatic equilibrium stage, every efficiency one."""
    r, g, l, g_e, l_e, T_e = tray(3, 2e4)
    assert np.allclose(r.g, g_e, atol=1e-4) and np.allclose(r.l, l_e, atol=1e-4)
    assert np.allclose(r.T_V, T_e, atol=2e-2)
    assert np.allclose(hausen(g / g.sum(), r.y, g_e / g_e.sum()), 1.0, atol=2e-2)


def test_equilibrium_stage_closes() -> None:
    m = mixture(3)
    g, T_V, l, T_L = streams(3)
    g_e, l_e, T = equilibrium_stage(g, T_V, l, T_L, P, m)
    assert np.allclose(g_e + l_e, g + l, rtol=1e-14)
    y, x = g_e / g_e.sum(), l_e / l_e.sum()
    assert np.allclose(y, m.k_value(T, P, x, y) * x, atol=1e-10)
    H_in = (g * m.vapor_enthalpy(T_V, P, y) + l * m.liquid_enthalpy(T_L, P, x)).sum()
    H_out = (g_e * m.vapor_enthalpy(T, P, y) + l_e * m.liquid_enthalpy(T, P, x)).sum()
    assert H_out == pytest.approx(H_in, abs=1e-6 * abs(H_in))


def test_equilibrium_stage_with_a_gas_that_does_not_condense() -> None:
    m = ConstantVolatility(["gas", "a", "b"], [1.0, 3.0, 0.2], 3e4, a=22.6, b=4000.0, condensable=[False, True, True],
                           vapor_heat_capacity=30.0, liquid_heat_capacity=80.0)
    g, l = np.array([[1.0, 0.05, 0.01]]), np.array([[0.0, 0.1, 1.5]])
    g_e, l_e, T = equilibrium_stage(g, np.full(1, 310.0), l, np.full(1, 300.0), P, m)
    assert l_e[0, 0] == pytest.approx(0.0, abs=1e-12)
    y, x = g_e / g_e.sum(), l_e / l_e.sum()
    assert np.allclose(y[:, 1:], (m.k_value(T, P, x, y) * x)[:, 1:], atol=1e-10)


def test_a_pole_is_infinite_and_nothing_over_nothing_is_zero() -> None:
    y_in, y_out, star = np.array([0.2, 0.3]), np.array([0.3, 0.3]), np.array([0.2, 0.3])
    assert murphree_vapor(y_in, y_out, star).tolist() == [np.inf, 0.0]


def test_vapor_at_the_liquids_temperature_is_not_scaled() -> None:
    """Without a gas y* = K(T_L) x: above one in sum where the liquid is superheated; K belongs to the vapour told."""
    m = ConstantVolatility(["a", "b", "oil"], [3.0, 0.5, 1.0], 3e4, a=22.6, b=4000.0, volatile=[True, True, False])
    P, T, x, y_in = np.full(1, 1e5), np.full(1, 390.0), np.array([[0.4, 0.5, 0.1]]), np.array([[0.7, 0.3, 0.0]])
    star = equilibrium_vapor(m, P, x, T, y_in)
    K = m.k_value(T, P, x, y_in)
    np.testing.assert_allclose(star.composition[:, :2], (K * x)[:, :2], rtol=1e-15)
    assert star.composition.sum() > 1.5 and star.composition[0, 2] == 0.0

    class FollowsVapor(ConstantVolatility):
        def k_value(self, T, P, x, y):  # type: ignore[no-untyped-def]
            return super().k_value(T, P, x, y) * (1.0 + y)

    n = FollowsVapor(["a", "b", "oil"], [3.0, 0.5, 1.0], 3e4, a=22.6, b=4000.0, volatile=[True, True, False])
    y_out = np.array([[0.8, 0.2, 0.0]])
    found = equilibrium_vapor(n, P, x, T, y_in, y_out=y_out)
    np.testing.assert_allclose(found.composition[:, :2], (n.k_value(T, P, x, y_out) * x)[:, :2], rtol=1e-15)
