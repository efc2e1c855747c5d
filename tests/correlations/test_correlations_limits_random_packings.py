"""Random packings and limits of packed beds without a worked number in print: limits, second forms, neighbours.

Each formula is typed a second time in another form, or the equations it solves are solved by other means; where a
correlation is from memory alone, a neighbouring method bounds it (the factor says how far the two are known to part).
"""
from __future__ import annotations

import numpy as np
import pytest
from limit_tools import G, slope, within
from numpy.testing import assert_allclose
from scipy.optimize import minimize_scalar

from correlations import (
    InputError,
    NoPhysicalRootError,
    packing,
    packing_area,
    packing_coefficients,
    packing_holdup,
    packing_limits,
    packing_pressure_drop,
)

RHO_V, RHO_L, MU_V, MU_L, SIGMA = 3.0, 660.0, 8.5e-6, 2.6e-4, 0.0145
A, EPS, SIDE, BASE, CRIMP, THETA = 250.0, 0.97, 0.017, 0.0241, 0.0119, np.pi / 4
U_V, U_L = 1.3, 0.005




AW = dict(liquid_density=998.0, liquid_viscosity=1e-3)
RING = packing("slotted ring, metal, 50 mm")
BED = {n: RING[n] for n in ("specific_area", "void_fraction")}


def test_area_at_loading_and_flooding():
    """billet_schultes: 1.5 up to loading, 7 times as much at flooding for water, nearly nothing of it at half load."""
    state = dict(liquid_velocity=0.01, surface_tension=0.0728, **AW, **BED)
    areas = [packing_area.billet_schultes(**state, flood_fraction=f) for f in (0.0, 0.5, 1.0)]
    assert_allclose(areas[2] / areas[0], 7.0)
    assert_allclose(areas[1], areas[0], rtol=1e-3)
    assert_allclose(slope(packing_area.billet_schultes, "liquid_velocity", **state), 0.4, rtol=1e-6)


def test_area_typed_out():
    """billet_schultes with the groups multiplied out, and its bounds against the area of onda."""
    u, rho, mu, sigma, a, eps = 0.01, 998.0, 1e-3, 0.0728, BED["specific_area"], BED["void_fraction"]
    d = 4 * eps / a
    ratio = 1.5 * (4 * eps) ** -0.5 * u ** 0.4 * d ** (-0.2 + 0.75 + 0.45) * (rho / mu) ** -0.2 \
        * (rho / sigma) ** 0.75 * G ** 0.45
    found = packing_area.billet_schultes(u, rho, mu, sigma, a, eps)
    assert_allclose(found, a * ratio, rtol=1e-12)
    assert within(found, packing_area.onda(u, rho, mu, sigma, a, 0.075), 1.5)


def test_marangoni_factor():
    """billet_schultes_marangoni_factor is one without a gradient and falls with either sign."""
    assert packing_area.billet_schultes_marangoni_factor(0.0) == 1.0
    assert_allclose(packing_area.billet_schultes_marangoni_factor([-1e6, 1e6]), 0.76)


def test_marangoni_factor_where_the_area_vanishes():
    """billet_schultes_marangoni_factor: 1/2.4e-4 squared is the number from which it would be negative."""
    limit = (1 / 2.4e-4) ** 2
    assert packing_area.billet_schultes_marangoni_factor(0.999 * limit) > 0
    with pytest.raises(InputError, match="marangoni_number"):
        packing_area.billet_schultes_marangoni_factor(1.001 * limit)


def test_sheet_area_by_load():
    """fair_bravo_sheet in percent of flood; bravo_rocha_fair_gauze is the geometric area and the bound of it."""
    percent = np.array([20.0, 60.0, 85.0, 95.0])
    found = packing_area.fair_bravo_sheet(250.0, percent / 100)
    assert_allclose(found[:3], 250 * (0.50 + 0.0058 * percent[:3]))
    assert found[3] == packing_area.bravo_rocha_fair_gauze(250.0) == 250.0


def test_sheet_area_joins():
    """fair_bravo_sheet meets the full area within 1 % at 85 % of flood."""
    assert_allclose(packing_area.fair_bravo_sheet(1.0, [0.85, 0.8501]), 1.0, rtol=0.01)


def test_shulman_liquid_beside_onda():
    """shulman_liquid and onda_liquid for water on 25 mm rings: within a factor 3 (their areas differ the other way)."""
    shulman = packing_coefficients.shulman_liquid(1.9e-9, 0.01, 998.0, 1e-3, 0.0356)
    onda = packing_coefficients.onda_liquid(1.9e-9, 0.01, 998.0, 1e-3, 190.0, 140.0, 0.025)
    assert within(shulman, onda, 3.0)


def test_shulman_liquid_powers():
    """shulman_liquid: k ~ D^0.5, u^0.45, d^-0.55."""
    state = dict(diffusivity=2e-9, liquid_velocity=0.01, liquid_density=998.0, liquid_viscosity=1e-3,
                 sphere_diameter=0.04)
    for argument, power in (("diffusivity", 0.5), ("liquid_velocity", 0.45), ("sphere_diameter", -0.55)):
        assert_allclose(slope(packing_coefficients.shulman_liquid, argument, **state), power, rtol=1e-6)


def test_onda_structure():
    """Onda and co-workers: d ln(k_L a)/d ln L lies in (2/3, 0.8]; the material is inert where sigma_c = sigma."""
    for u in (0.0005, 0.005, 0.02):
        state = dict(liquid_density=998.0, liquid_viscosity=1e-3, specific_area=190.0)

        def product(liquid_velocity, state=state):
            a = packing_area.onda.silent(liquid_velocity, surface_tension=0.0728, critical_surface_tension=0.061,
                                         **state)
            return a * packing_coefficients.onda_liquid(2e-9, liquid_velocity, wetted_area=a, nominal_size=0.025,
                                                        **state)

        assert 2 / 3 < slope(product, "liquid_velocity", liquid_velocity=u) <= 0.8


def test_holdup_between_loading_and_flooding():
    """billet_schultes_above_loading is h_S at no gas and h_Fl at flooding; billet_schultes_flood_holdup is 2.2 h_S for
    water at 293 K."""
    assert_allclose(packing_holdup.billet_schultes_flood_holdup(0.05, 1e-3, 998.2), 0.11)
    assert_allclose(packing_holdup.billet_schultes_above_loading(0.05, 0.11, [0.0, 1.0]), [0.05, 0.11])


def test_holdup_typed_out():
    """billet_schultes_above_loading and billet_schultes_flood_holdup in logarithms."""
    h = packing_holdup.billet_schultes_above_loading(0.05, 0.11, 0.8)
    assert_allclose(np.log((h - 0.05) / 0.06), 13 * np.log(0.8))
    ratio = packing_holdup.billet_schultes_flood_holdup(0.05, 4e-3, 998.2) / 0.11
    assert_allclose(np.log(ratio) / np.log(4), 0.05)


def test_holdup_of_a_vertical_channel():
    """delft with the channels upright is the laminar film on a vertical wall, a (3 mu u/(rho g a))^(1/3)."""
    h = packing_holdup.delft(U_L, RHO_L, MU_L, A, BASE, CRIMP, np.pi / 2 - 1e-7)
    assert_allclose(h, A * np.cbrt(3 * MU_L * U_L / (RHO_L * G * A)), rtol=1e-6)


def test_delft_slope_of_the_liquid():
    """delft: tan(alpha) = cos(90 - theta)/(sin(90 - theta) cos(arctan(B/2h))), 54.91 degrees for the sheet of these
    tests, typed with degrees."""
    rest = np.radians(90 - 45)
    alpha = np.arctan(np.cos(rest) / (np.sin(rest) * np.cos(np.arctan(BASE / (2 * CRIMP)))))
    assert_allclose(np.degrees(alpha), 54.9057, rtol=1e-6)
    h = packing_holdup.delft(U_L, RHO_L, MU_L, A, BASE, CRIMP, THETA)
    assert_allclose(h, A * np.cbrt(3 * MU_L * U_L / (RHO_L * G * A * np.sin(alpha))), rtol=1e-12)


def test_static_holdup():
    """engel_static: 0.033 on fine packing, less on coarse, where drops fall off."""
    h = packing_holdup.engel_static(998.0, 0.0728, [100.0, 200.0, 1e6])
    assert h[0] < h[1] < h[2]
    assert_allclose(h[2], 0.033)


def test_static_holdup_typed_out():
    """engel_static in terms of the capillary length."""
    a, capillary = 150.0, np.sqrt(0.0728 / (998.0 * G))
    assert_allclose(packing_holdup.engel_static(998.0, 0.0728, a), 0.033 * np.exp(-0.22 / (a * capillary) ** 2))


def test_stichlmair_holdup_beside_billet():
    """stichlmair_preloading and the loading holdup of Billet and Schultes for water on 50 mm rings, within 1.6 times;
    stichlmair_above_loading without pressure drop is the same number."""
    h = packing_holdup.stichlmair_preloading(0.01, **BED)
    other = packing_holdup.billet_schultes(0.01, **AW, specific_area=112.6, holdup_constant=0.784)
    assert within(h, other, 1.6)
    assert packing_holdup.stichlmair_above_loading(h, 0.0, 998.0) == h


def test_stichlmair_holdup_solved():
    """stichlmair returns the holdup that stichlmair_preloading and stichlmair_above_loading give at its pressure drop;
    1.09 times at y = 0.05 with the factor 36."""
    bed, friction = dict(specific_area=260.0, void_fraction=0.68), (32.0, 7.0, 1.0)
    wet = packing_pressure_drop.stichlmair(0.5, 5.0, 5e-5, 0.005, 1200.0, 260.0, 0.68, *friction)
    h_0 = packing_holdup.stichlmair_preloading(0.005, **bed)
    h = packing_holdup.stichlmair_above_loading(h_0, wet.pressure_gradient, 1200.0)
    assert_allclose(wet.liquid_holdup, h, rtol=1e-12)
    dP = 0.05 * 1200 * G
    assert_allclose(packing_holdup.stichlmair_above_loading(0.1, dP, 1200.0, loading_factor=36.0), 0.109)

@pytest.mark.parametrize("flow_ratio", [0.5, 5.0, 20.0])
def test_film_under_shear(flow_ratio):
    """billet_schultes_loading and billet_schultes_flooding against the film they stand for.

    A film of thickness s on the area a, sheared by tau = psi rho_V/2 (u_V/(eps - a s))^2, carries
    u_L = a (rho g s^3/3 - tau s^2/2)/mu. Loading: the surface stands still. Flooding: the largest u_V at that u_L.
    """
    rho_V, rho_L, mu_V, mu_L = 1.19, 998.0, 1.82e-5, 1e-3
    a, eps = BED["specific_area"], BED["void_fraction"]
    state = dict(flow_ratio=flow_ratio, vapor_density=rho_V, liquid_density=rho_L, vapor_viscosity=mu_V,
                 liquid_viscosity=mu_L, **BED)
    X = flow_ratio * np.sqrt(rho_V / rho_L)
    low = X <= 0.4

    def psi(C, n):
        return G / C ** 2 * X ** (-2 * n)

    visc = mu_L / mu_V
    C, n = (2.725, -0.326) if low else (0.695 * 2.725 * visc ** 0.1588, -0.723)
    friction = psi(C, n) * visc ** (-0.8 * n)
    u = packing_limits.billet_schultes_loading(**state, loading_constant=2.725)
    u_L = flow_ratio * rho_V / rho_L * u
    s = np.cbrt(12 * mu_L * u_L / (rho_L * G * a))
    tau = friction * rho_V / 2 * (u / (eps - a * s)) ** 2
    assert_allclose(rho_L * G * s ** 2 / 2 - tau * s, 0.0, atol=1e-9 * rho_L * G * s ** 2)
    assert_allclose(a * (rho_L * G * s ** 3 / 3 - tau * s ** 2 / 2) / mu_L, u_L, rtol=1e-9)

    C, n = (1.580, -0.194) if low else (0.6244 * 1.580 * visc ** 0.1028, -0.708)
    friction = psi(C, n) * visc ** (-0.4 * n)
    flood = packing_limits.billet_schultes_flooding(**state, flooding_constant=1.580)
    u_L = flow_ratio * rho_V / rho_L * flood.vapor_velocity

    def gas_squared(h):
        s = h / a
        tau = 2 / s ** 2 * (rho_L * G * s ** 3 / 3 - mu_L * u_L / a)
        return 2 * tau * (eps - h) ** 2 / (friction * rho_V)

    best = minimize_scalar(lambda h: -gas_squared(h), bounds=(eps / 3, eps), method="bounded", options={"xatol": 1e-12})
    assert_allclose(flood.liquid_holdup, best.x, rtol=1e-5)
    assert_allclose(flood.vapor_velocity, np.sqrt(-best.fun), rtol=1e-9)


def test_branches_meet():
    """billet_schultes_loading and billet_schultes_flooding are continuous at X = 0.4 to 1e-4: both branches recalled
    right; and flooding lies above loading."""
    density = dict(vapor_density=1.19, liquid_density=998.0, vapor_viscosity=1.82e-5, liquid_viscosity=1e-3, **BED)
    ratio = 0.4 / np.sqrt(1.19 / 998) * np.array([1 - 1e-9, 1 + 1e-9])
    load = packing_limits.billet_schultes_loading(ratio, **density, loading_constant=2.725)
    flood = packing_limits.billet_schultes_flooding(ratio, **density, flooding_constant=1.580).vapor_velocity
    assert_allclose(load[0], load[1], rtol=1e-4)
    assert_allclose(flood[0], flood[1], rtol=1e-4)
    assert (flood > load).all()


def test_stichlmair_flooding_at_fixed_ratio():
    """stichlmair_flooding is stichlmair_flooding_at_liquid_velocity at its own liquid velocity."""
    bed, friction = (260.0, 0.68), (32.0, 7.0, 1.0)
    ratio = np.array([0.5, 3.0, 30.0])
    flood = packing_limits.stichlmair_flooding(ratio, 5.0, 5e-5, 1200.0, *bed, *friction)
    u_L = ratio * flood.vapor_velocity * 5.0 / 1200.0
    again = packing_limits.stichlmair_flooding_at_liquid_velocity(u_L, 5.0, 5e-5, 1200.0, *bed, *friction)
    assert_allclose(again, flood, rtol=1e-9)


def test_stichlmair_turns_vertical():
    """Below stichlmair_flooding the pressure drop has a solution, with a slope that grows without bound; above none."""
    bed, friction = (260.0, 0.68), (32.0, 7.0, 1.0)
    flood = packing_limits.stichlmair_flooding(3.0, 5.0, 5e-5, 1200.0, *bed, *friction)
    u_L = 3.0 * flood.vapor_velocity * 5.0 / 1200.0

    def dP(fraction):
        return packing_pressure_drop.stichlmair(fraction * flood.vapor_velocity, 5.0, 5e-5, u_L, 1200.0, *bed,
                                                *friction).pressure_gradient

    assert_allclose(dP(1 - 1e-10), flood.pressure_gradient, rtol=1e-4)
    # beside the fold the distance goes with the root of the margin
    gaps = flood.pressure_gradient - np.array([dP(1 - 1e-6), dP(1 - 4e-6)])
    assert_allclose(gaps[1] / gaps[0], 2.0, rtol=1e-2)
    with pytest.raises(NoPhysicalRootError, match="flooding in 2 of 3 entries") as caught:
        dP(np.array([1 + 1e-6, 0.9, 1.2]))
    np.testing.assert_array_equal(caught.value.failed, [True, False, True])
    with pytest.raises(NoPhysicalRootError, match="fills the bed"):
        packing_limits.stichlmair_flooding_at_liquid_velocity(1.0, 5.0, 5e-5, 1200.0, *bed, *friction)


def test_minimum_wetting_rules():
    """schmidt lies well below morris_jackson for water, grows towards flooding, and both scale as stated."""
    a = 112.6
    new = packing_limits.schmidt(998.0, 1e-3, 0.0728, a, [0.0, 0.5, 1.0])
    old = packing_limits.morris_jackson(a)
    assert new[0] < new[1] < new[2] and new[0] < old / 4
    assert_allclose(new[2] / new[0], 0.1 ** -0.5)
    assert_allclose(packing_limits.morris_jackson(2 * a), 2 * old)
    assert_allclose(packing_limits.schmidt(998.0, 1e-3, 0.0728, 4 * a), new[0] / 2)


def test_minimum_wetting_typed_out():
    """morris_jackson is 0.08 m3/(m h) of perimeter; schmidt with C = rho sigma^3/(mu^4 g) in powers."""
    assert_allclose(packing_limits.morris_jackson(112.6) * 3600, 0.08 * 112.6)
    rho, mu, sigma, a = 800.0, 3e-4, 0.02, 200.0
    found = packing_limits.schmidt(rho, mu, sigma, a)
    assert_allclose(found, 7.7e-6 * rho ** (2 / 9) * sigma ** (2 / 3) * mu ** (-8 / 9) * G ** (0.5 - 2 / 9) * a ** -0.5)


@pytest.mark.parametrize("a", [100.0, 250.0])
def test_wet_forms_of_billet_and_schultes(a):
    """For water the exponents of the two forms are 5000 u/a and 13300 u/(a g^0.5) = 4247 u/a."""
    u, rest = 0.01, dict(dry_pressure_gradient=1.0, liquid_holdup=0.05, liquid_velocity=0.01, specific_area=a,
                         void_fraction=0.95)
    bare = (0.95 / 0.90) ** 1.5
    first = packing_pressure_drop.billet_schultes_wet_1993(**rest, liquid_density=1000.0, liquid_viscosity=1e-3)
    second = packing_pressure_drop.billet_schultes_wet_1999(**rest, loading_holdup=0.05)
    assert_allclose(np.log([first / bare, second / bare]), [5000 * u / a, 4247 * u / a], rtol=1e-4)


def test_wet_form_without_load():
    """billet_schultes_wet_1999 without liquid flow is the dry drop through what the holdup leaves free."""
    found = packing_pressure_drop.billet_schultes_wet_1999(100.0, 0.05, 0.05, 1e-12, 200.0, 0.95)
    assert_allclose(found, 100.0 * (0.95 / 0.90) ** 1.5)


def test_capacity_parameter():
    """C_S F_p^0.5 nu^0.05 in ft/s, 1/ft and cSt."""
    C_S = 1.5 / 0.3048 * np.sqrt(1.19 / (998 - 1.19))
    found = packing_limits.capacity_parameter(1.5, 1.19, 998.0, 1e-3, 27 / 0.3048)
    assert_allclose(found, C_S * 27 ** 0.5 * (1 / 0.998) ** 0.05, rtol=1e-6)


def test_kister_gill_in_inches():
    """kister_gill_revised: 0.12 F_p^0.7 inches of water per foot is 98.07 F_p^0.7 Pa/m."""
    assert_allclose(packing_limits.kister_gill_revised(30 / 0.3048), 98.07 * 30 ** 0.7, rtol=1e-3)


def test_kister_gill_of_open_beds():
    """kister_gill_revised stops at two inches of water per foot."""
    assert_allclose(packing_limits.kister_gill_revised(61 / 0.3048), 2 * 817.22, rtol=1e-4)
