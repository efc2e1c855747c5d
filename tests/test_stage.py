"""Froth, pools and mixed trays: limits, and the pieces against each other."""
from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from ratebased import ConstantVolatility
from ratebased.equipment import TransferCoefficients
from ratebased.properties import bubble_point
from ratebased.stage import (
    EddyDiffusion,
    FrothPoint,
    PlugFlow,
    Pools,
    WellMixed,
    exponential_midpoint,
    integral,
    tray_from_leaving_liquid,
)
from ratebased.stage.march import march_upstream
from ratebased.stage.matrix_point import augmented_matrix, textbook_matrix
from ratebased.stage.mixing import mixed_tray
from ratebased.stage.pools import pools_in_series

PRESSURE = 101325.0


def mixture(n: int = 3, *, spread: float = 0.0, cp: float = 80.0) -> ConstantVolatility:
    alpha, latent = np.array([2.6, 1.0, 0.4, 1.7])[:n], 3.3e4 * (1 + spread * np.arange(n))
    return ConstantVolatility([f"c{i}" for i in range(n)], alpha, latent, a=22.6, b=4000.0,
                              vapor_heat_capacity=cp, liquid_heat_capacity=1.5 * cp, reference_temperature=350.0,
                              vapor_molar_density=35.0, liquid_molar_density=1.1e4)


def point(model: ConstantVolatility, *, kappa_vapor: object = 0.02, kappa_liquid: object = 2e-4, area: float = 2.0,
          superheat: float = 2.0) -> FrothPoint:
    n = len(model.names)
    x = np.array([[0.3, 0.45, 0.15, 0.1], [0.12, 0.38, 0.4, 0.1]])[:, :n]
    x = x / x.sum(-1, keepdims=True)
    P = np.full(2, PRESSURE)
    T, y = bubble_point(model, P, x)
    y_in = 0.5 * y + 0.5 * x[:, ::-1]
    pairs = np.ones((2, n, n))
    c = TransferCoefficients(kappa_vapor * pairs, kappa_liquid * pairs, np.full(2, 45.0), np.full(2, 1500.0),
                             np.full(2, area), "given")
    return FrothPoint(np.ones(2), y_in, T + superheat, x, T, P, c, np.full(2, 35.0), np.full(2, 1.1e4))


UNEQUAL = np.array([[1.0, 0.4, 1.6], [0.4, 1.0, 1.1], [1.6, 1.1, 1.0]])


def test_point_methods_agree_with_the_integral() -> None:
    """Midpoint within 1 % of the largest change, two half steps within a third of that (measured orders)."""
    model = mixture(spread=0.1)
    p = point(model, kappa_vapor=0.02 * UNEQUAL, kappa_liquid=2e-4 * UNEQUAL, superheat=30.0)
    exact = integral(p, model)
    change = np.abs(exact.y - p.y_in).max()
    one, two = exponential_midpoint(p, model), exponential_midpoint(p, model, steps=2)
    assert np.abs(one.y - exact.y).max() < 0.01 * change
    assert np.abs(two.y - exact.y).max() < 0.35 * np.abs(one.y - exact.y).max()
    assert exact.energy_closure.max() < 1e-9
    assert exact.interface_residual.max() < 1e-9


def test_sensitivities_of_the_midpoint_step() -> None:
    """Against central differences of the step itself, by the vapour and by the liquid."""
    model = mixture(spread=0.1)
    p = point(model, kappa_vapor=0.02 * UNEQUAL, kappa_liquid=2e-4 * UNEQUAL, area=0.6)
    base = exponential_midpoint(p, model)
    n = 3

    def out(q: FrothPoint) -> np.ndarray:
        r = exponential_midpoint(q, model)
        return np.concatenate((r.V[:, None] * r.y, r.T_V[:, None]), -1)

    h = 1e-4
    up, down = out(replace(p, T_L=p.T_L + h)), out(replace(p, T_L=p.T_L - h))
    slope = (up - down) / (2 * h)
    assert np.allclose(base.sensitivity_liquid[..., n], slope, rtol=0.03, atol=1e-4)
    direction = np.array([1.0, -1.0, 0.0])
    slope = (out(replace(p, x=p.x + h * direction)) - out(replace(p, x=p.x - h * direction))) / (2 * h)
    assert np.allclose(base.sensitivity_liquid[..., :n] @ direction, slope, rtol=0.03, atol=2e-3)
    slope = (out(replace(p, T_V_in=p.T_V_in + h)) - out(replace(p, T_V_in=p.T_V_in - h))) / (2 * h)
    assert np.allclose(base.sensitivity_vapor[..., n], slope, rtol=0.03, atol=1e-3)


def test_equal_diffusivities_and_vapor_control_give_equal_efficiencies() -> None:
    """Holds with control in the vapour (equal pairs, liquid without resistance), also with unequal latent heats."""
    for spread in (0.0, 0.15):
        model = mixture(spread=spread)
        p = point(model, kappa_liquid=50.0, superheat=0.0)
        p = replace(p, coefficients=replace(p.coefficients, h_liquid=np.full(2, 1e6)))
        r = integral(p, model)
        _, y_star = bubble_point(model, p.P, p.x)
        E = (r.y - p.y_in) / (y_star - p.y_in)
        assert np.ptp(E, axis=-1).max() < 2e-3


def test_liquid_control_gives_unequal_efficiencies_even_with_equal_diffusivities() -> None:
    """The limit that does not hold: K differs by component, so the resistances in series do."""
    model = mixture()
    p = point(model, kappa_vapor=2.0, kappa_liquid=5e-5)
    r = integral(p, model)
    _, y_star = bubble_point(model, p.P, p.x)
    E = (r.y - p.y_in) / (y_star - p.y_in)
    assert np.ptp(E, axis=-1).min() > 0.05


def test_no_area_no_change_and_much_area_equilibrium() -> None:
    model = mixture(spread=0.1)
    small = exponential_midpoint(point(model, area=1e-9), model)
    p = point(model, area=60.0)
    assert np.abs(small.y - p.y_in).max() < 1e-8
    _, y_star = bubble_point(model, p.P, p.x)
    assert np.abs(integral(p, model).y - y_star).max() < 1e-5


def test_binary_point_is_the_textbook_exponential() -> None:
    """Constant molar overflow, equal latent heats, a liquid without resistance: E = 1 - exp(-kappa_V c_V a/V) exactly.

    Source: Taylor & Krishna, Multicomponent
    Mass Transfer (1993), section 12.1, from memory.
    """
    model = mixture(2, cp=0.0)
    p = point(model, kappa_vapor=0.02, kappa_liquid=100.0, area=1.3, superheat=0.0)
    p = replace(p, coefficients=replace(p.coefficients, h_liquid=np.full(2, 1e7)))
    r = integral(p, model)
    _, y_star = bubble_point(model, p.P, p.x)
    E = (r.y - p.y_in) / (y_star - p.y_in)
    assert np.allclose(E, -np.expm1(-0.02 * 35.0 * 1.3), rtol=2e-5)
    for form in (textbook_matrix, augmented_matrix):
        assert np.allclose(form(p, model).y, r.y, atol=3e-5)


@pytest.mark.parametrize("mixing", [WellMixed(), Pools(np.ones(1)), EddyDiffusion(np.full(1, 1e-6))])
def test_one_pool_is_the_point(mixing: object) -> None:
    model = mixture(spread=0.1)
    p = point(model, kappa_vapor=0.02 * UNEQUAL)
    r = tray_from_leaving_liquid(p, np.full(2, 1.3), model, mixing)
    assert np.allclose(r.y, r.point.y, atol=1e-6)


def test_many_pools_are_plug_flow_and_dispersion_lies_between() -> None:
    z = np.array([[0.3 + 0j, 1.7, -0.4, 1e-5]])
    assert np.allclose(Pools(np.full(1, 1e7)).factor(z), PlugFlow().factor(z), rtol=1e-6)
    assert np.allclose(EddyDiffusion(np.full(1, 1e6)).factor(z), PlugFlow().factor(z), rtol=1e-4)
    for model in (Pools(np.full(1, 2.5)), PlugFlow(), EddyDiffusion(np.full(1, 3.0))):
        small = np.array([[1e-3 * (1 - 1e-9) + 0j, 1e-3 * (1 + 1e-9)]])
        f, s = model.factor(small), model.factor_slope(small)
        assert abs(f[0, 0] - f[0, 1]) < 1e-9 and abs(s[0, 0] - s[0, 1]) < 1e-4


def test_mixed_tray_of_a_scalar_is_the_published_formula() -> None:
    """Case 1 of Lewis, Ind. Eng. Chem. 28 (1936) 399: E_MV = (exp(lambda E) - 1)/lambda; row E = .7, lambda = 1.2."""
    E, lam = 0.7, 1.2
    mean, _ = mixed_tray(PlugFlow(), np.array([[E]]), np.array([[-lam * E]]))
    assert mean[0, 0] == pytest.approx(np.expm1(lam * E) / lam, rel=1e-12)
    assert mean[0, 0] == pytest.approx(1.096972, abs=5e-7)
    mean, _ = mixed_tray(Pools(np.full(1, 3.5)), np.array([[E]]), np.array([[-lam * E]]))
    assert mean[0, 0] == pytest.approx(((1 + lam * E / 3.5) ** 3.5 - 1) / lam, rel=1e-12)


def test_march_upstream_is_the_full_pools_model() -> None:
    """Pools solved from the entering liquid, then marched back from their leaving liquid: the same transfer."""
    model = mixture(spread=0.1)
    p = point(model, kappa_vapor=0.02 * UNEQUAL, area=1.0, superheat=0.0)
    forward = pools_in_series(p, np.full(2, 1.4), model, 4)
    leaving = replace(p, x=forward.x[-1], T_L=forward.T_L[-1])
    L = forward.L[-1]
    outlet = exponential_midpoint(leaving, model)
    back = march_upstream(leaving, outlet, np.arange(2), L, model, np.full(2, 4.0))
    assert back.feasible.all()
    # The march keeps the liquid on its bubble line, the full model gives it an energy balance (2.2 % measured).
    change = np.abs(forward.transferred).max()
    assert np.abs(back.transferred - forward.transferred).max() < 0.03 * change
    tray = tray_from_leaving_liquid(leaving, L, model, Pools(np.full(2, 4.0)))
    assert np.abs(tray.transferred - back.transferred).max() < 0.01 * change


def test_order_of_components_does_not_matter() -> None:
    model = mixture(spread=0.1)
    p = point(model, kappa_vapor=0.02 * UNEQUAL, kappa_liquid=2e-4 * UNEQUAL)
    order = np.array([2, 0, 1])
    other = ConstantVolatility([model.names[i] for i in order], model.volatility[order], model.latent_heat[order],
                               a=model.a, b=model.b, vapor_heat_capacity=80.0, liquid_heat_capacity=120.0,
                               reference_temperature=350.0, vapor_molar_density=35.0, liquid_molar_density=1.1e4)
    c = p.coefficients
    swapped = replace(p, y_in=p.y_in[:, order], x=p.x[:, order], coefficients=replace(
        c, kappa_vapor=c.kappa_vapor[:, order][:, :, order], kappa_liquid=c.kappa_liquid[:, order][:, :, order]))
    L = np.full(2, 1.2)
    one = tray_from_leaving_liquid(p, L, model, Pools(np.full(2, 3.3)))
    two = tray_from_leaving_liquid(swapped, L, other, Pools(np.full(2, 3.3)))
    assert np.abs(one.y[:, order] - two.y).max() < 1e-10
    assert np.abs(one.T_V - two.T_V).max() < 1e-7


def test_a_leaving_liquid_that_does_not_fit_is_marked() -> None:
    """Hardly any liquid: upstream it would hold less than nothing, so the froth at the outlet stands for the tray."""
    model = mixture(spread=0.1)
    p = point(model, kappa_vapor=0.02 * UNEQUAL)
    r = tray_from_leaving_liquid(p, np.full(2, 0.02), model, Pools(np.full(2, 6.0)))
    assert r.unmixed.all()
    assert np.allclose(r.y, r.point.y, rtol=1e-12)
    fits = tray_from_leaving_liquid(p, np.full(2, 2.0), model, Pools(np.full(2, 6.0)))
    assert not fits.unmixed.any()


def test_no_heat_capacity_is_the_limit_of_little() -> None:
    """Constant molar overflow: the froth and the pools without heat capacities against nearly none."""
    none, little = mixture(spread=0.1, cp=0.0), mixture(spread=0.1, cp=1e-4)
    p = point(none, kappa_vapor=0.02 * UNEQUAL)
    one, two = exponential_midpoint(p, none), exponential_midpoint(p, little)
    assert np.allclose(one.y, two.y, atol=2e-4)
    assert np.allclose(one.T_V, two.T_V, atol=1.0)  # that of the interface at the middle state
    equal = mixture(cp=0.0)
    q = point(equal, kappa_vapor=0.02 * UNEQUAL)
    tray = pools_in_series(q, np.full(2, 1.4), equal, 3)
    assert np.allclose(tray.V, 1.0, atol=1e-9) and np.allclose(tray.L, 1.4, atol=1e-9)


def test_integral_without_latent_heat() -> None:
    """Equal enthalpies of both phases leave nothing to scale an energy with: the error control needs its own scale."""
    model = ConstantVolatility(["gas", "solute", "oil"], [1.0, 0.4, 1.0], [0.0] * 3, a=22.6, b=4000.0,
                               vapor_heat_capacity=100.0, liquid_heat_capacity=100.0, condensable=[False, True, True],
                               volatile=[True, True, False])
    pairs, n = np.full((1, 3, 3), 1.0), 1
    c = TransferCoefficients(0.02 * pairs, 2e-4 * pairs, np.full(n, 60.0), np.full(n, 2500.0), np.full(n, 2.0), "given")
    p = FrothPoint(np.ones(n), np.array([[0.9, 0.1, 0.0]]), np.full(n, 350.0), np.array([[0.0, 0.05, 0.95]]),
                   np.full(n, 350.0), np.full(n, PRESSURE), c, np.full(n, 35.0), np.full(n, 1.1e4))
    found = integral(p, model)
    assert found.y[0, 1] < 0.1
    assert np.abs(found.y - exponential_midpoint(p, model).y).max() < 0.01 * np.abs(found.y - p.y_in).max()
