"""Trays without a worked number in print: limits, second forms, neighbouring methods.

Each formula is typed a second time in another form, or the equations it solves are solved by other means; where a
correlation is from memory alone, a neighbouring method bounds it (the factor says how far the two are known to part).
"""
from __future__ import annotations

import numpy as np
import pytest
from limit_tools import G, slope, within
from numpy.testing import assert_allclose
from scipy.optimize import brentq

from correlations import (
    InputError,
    NoPhysicalRootError,
    mixing,
    tray_hydraulics,
    tray_limits,
    tray_transfer,
)

RHO_V, RHO_L, MU_V, MU_L, SIGMA = 3.0, 660.0, 8.5e-6, 2.6e-4, 0.0145
A, EPS, SIDE, BASE, CRIMP, THETA = 250.0, 0.97, 0.017, 0.0241, 0.0119, np.pi / 4
U_V, U_L = 1.3, 0.005




U, WEIR, LOAD = 0.9, 0.05, 0.008


def test_bennett_mixing_and_entrainment():
    """Benitez, Example 4.9, evaluated apart: bennett_tray_efficiency 0.836829, with entrainment 0.811775
    (bennett_entrainment_correction); bennett_eddy_diffusivity 0.076538 m2/s at 0.391 m (g = 9.8 there)."""
    E = mixing.bennett_tray_efficiency(0.809274, 0.660392, 0.463535)
    assert_allclose(E, 0.836829, rtol=1e-5)
    assert_allclose(mixing.bennett_entrainment_correction(E, 0.809274, 0.660392, 0.57, 0.05), 0.811775, rtol=1e-5)
    assert_allclose(mixing.bennett_eddy_diffusivity(0.391), 0.076538, rtol=1e-3)


def test_mixing_limits():
    """bennett_tray_efficiency is the point efficiency of a mixed tray and within 3 % of gerster;
    bennett_entrainment_correction and colburn_entrainment change nothing without entrainment; bennett_eddy_diffusivity
    within 4 times the AIChE value on the tray of these tests."""
    assert_allclose(mixing.bennett_tray_efficiency(0.7, 1.2, 0.0), 0.7)
    assert_allclose(mixing.bennett_tray_efficiency(0.7, 1.2, 5.0), mixing.gerster(0.7, 1.2, 5.0), rtol=0.03)
    assert mixing.bennett_entrainment_correction(0.8, 0.7, 1.2, 1.1, 0.0) == 0.8
    assert mixing.colburn_entrainment(0.8, 0.0) == 0.8
    aiche = mixing.aiche_eddy_diffusivity(U, LOAD, WEIR)
    assert within(mixing.bennett_eddy_diffusivity(0.0886), aiche, 4.0)


def test_colburn_as_resistances():
    """colburn_entrainment: 1/E_a = 1/E + psi/(1 - psi)."""
    assert_allclose(1 / mixing.colburn_entrainment(0.7, 0.1), 1 / 0.7 + 0.1 / 0.9)


def test_colwell_without_vapor():
    """colwell_clear_liquid without vapour is weir and crest; its equation holds, without and with a low weir."""
    state = dict(vapor_density=RHO_V, liquid_density=RHO_L, hole_area_fraction=0.1)
    still = tray_hydraulics.colwell_clear_liquid(WEIR, LOAD, 1e-9, **state)
    crest = brentq(lambda x: x - 0.485897 * (LOAD / (0.61 + 0.08 * x / WEIR)) ** (2 / 3), 1e-4, 0.2)
    assert_allclose(still, WEIR + crest, rtol=1e-4)
    for weir in (0.0, 0.002, 0.05):
        h = tray_hydraulics.colwell_clear_liquid(weir, LOAD, U, **state, weeping_fraction=0.1)
        Fr = RHO_V * U ** 2 / (G * h * (RHO_L - RHO_V))
        alpha = 1 / (1 + 12.6 * Fr ** 0.4 * 10 ** 0.25)
        over = h / alpha - weir
        C = 0.61 + 0.08 * over / weir if weir and over < 8.135 * weir else 1.06 * (1 + weir / over) ** 1.5
        assert_allclose(over, 0.485897 * (LOAD * 0.9 / (C * alpha)) ** (2 / 3), rtol=1e-9)


def test_liquid_heights_beside_each_other():
    """colwell_clear_liquid and hofhuis_zuiderweg_clear_liquid within 1.6 times the height of Bennett and co-workers."""
    bennett = tray_hydraulics.bennett_clear_liquid(WEIR, LOAD, U, RHO_V, RHO_L)
    colwell = tray_hydraulics.colwell_clear_liquid(WEIR, LOAD, U, RHO_V, RHO_L, 0.1)
    hofhuis = tray_hydraulics.hofhuis_zuiderweg_clear_liquid(WEIR, 0.0366, 0.0674, 1.33333)
    assert within(colwell, bennett, 1.6) and within(hofhuis, bennett, 1.6)


def test_hofhuis_typed_out():
    """hofhuis_zuiderweg_clear_liquid: the fourth power is 0.1296 h_w^2 p FP/b."""
    h = tray_hydraulics.hofhuis_zuiderweg_clear_liquid(0.05, 0.03, 0.1, 1.5)
    assert_allclose(h ** 4, 0.1296 * 0.05 ** 2 * 0.03 * 0.1 / 1.5)


def test_residual_heads():
    """bennett_residual_head within 4 times bubble_residual_head, and the smaller the larger the hole."""
    state = dict(liquid_density=RHO_L, surface_tension=SIGMA)
    d = np.array([0.003, 0.012])
    one = tray_hydraulics.bennett_residual_head(**state, vapor_density=RHO_V, hole_diameter=d)
    two = tray_hydraulics.bubble_residual_head(**state, hole_diameter=d)
    assert within(one, two, 4.0) and one[1] < one[0]


def test_residual_head_typed_out():
    """bennett_residual_head in powers: sigma^(2/3), d^(-1/3)."""
    state = dict(liquid_density=RHO_L, vapor_density=RHO_V, surface_tension=SIGMA, hole_diameter=0.006)
    function = tray_hydraulics.bennett_residual_head
    assert_allclose(slope(function, "surface_tension", **state), 2 / 3, rtol=1e-6)
    assert_allclose(slope(function, "hole_diameter", **state), -1 / 3, rtol=1e-6)
    found = function(**dict(state, vapor_density=1e-12))
    assert_allclose(found, 4.7244094 * (SIGMA / (RHO_L * G)) ** (2 / 3) * 0.006 ** (-1 / 3), rtol=1e-7)


def test_orifice_coefficients():
    """leibson_orifice_coefficient and thickness_orifice_coefficient are two fits of one chart, within 5.5 %."""
    ratio = np.array([1.0, 2.5, 4.0, 6.35])
    chart = tray_hydraulics.leibson_orifice_coefficient(ratio, 1.0)
    other = tray_hydraulics.thickness_orifice_coefficient(ratio, 1.0, 0.10)
    assert_allclose(other, chart, rtol=0.055)


def test_orifice_coefficient_of_thin_plates():
    """thickness_orifice_coefficient of a thin plate with few holes is near a sharp orifice, 0.6;
    leibson_orifice_coefficient falls with d/l up to 11.8."""
    assert_allclose(tray_hydraulics.thickness_orifice_coefficient(1.0, 1e-6, 1e-6), 0.6, rtol=0.06)
    C = tray_hydraulics.leibson_orifice_coefficient(np.linspace(1, 11, 20), 1.0)
    assert (np.diff(C) < 0).all()


def test_valves():
    """valve_dry_head: the weight of the disc at low rates, the open orifice at high ones, the larger of the two; 0.92
    in/(ft/s)^2 of a common deck is 251.5 s2 mm/m2."""
    state = dict(vapor_density=RHO_V, liquid_density=RHO_L, closed_loss=0.05, open_loss=0.2515, valve_thickness=1.5e-3,
                 valve_density=7800.0)
    low, high = tray_hydraulics.valve_dry_head(np.array([1e-6, 12.0]), **state)
    assert_allclose(low, 1.35 * 1.5e-3 * 7800 / RHO_L, rtol=1e-6)
    assert_allclose(high, 0.92 * 0.0254 * (12.0 / 0.3048) ** 2 * RHO_V / RHO_L, rtol=1e-3)


def test_valves_switch():
    """valve_dry_head is continuous where the valves are just open."""
    u = np.sqrt(1.35 * 1.5e-3 * 7800 / RHO_V / (0.25 - 0.05)) * np.array([1 - 1e-9, 1 + 1e-9])
    head = tray_hydraulics.valve_dry_head(u, RHO_V, RHO_L, 0.05, 0.25, 1.5e-3, 7800.0)
    assert_allclose(head[0], head[1], rtol=1e-8)


def test_two_fits_of_fairs_chart():
    """lygeros_magoulas_flooding lies 2 to 13 % above fair_flooding over the chart."""
    t, X = np.array([0.61, 0.61, 0.5, 0.5]), np.array([0.1, 0.3, 0.1, 1.0])
    state = (t, SIGMA, RHO_V, RHO_L, 0.10)
    ratio = tray_limits.lygeros_magoulas_flooding(X, *state) / tray_limits.fair_flooding(X, *state)
    assert (ratio > 1.02).all() and (ratio < 1.13).all()


def test_lygeros_magoulas_limits():
    """lygeros_magoulas_flooding flattens at small flow parameters and falls to 0.0105 m/s at large ones."""
    u = tray_limits.lygeros_magoulas_flooding([1e-6, 1e-5, 1e3], 0.5, 0.020, RHO_V, RHO_L, 0.10)
    scale = np.sqrt((RHO_L - RHO_V) / RHO_V)
    assert_allclose(u[0], u[1], rtol=1e-3)
    assert_allclose(u[2], 0.0105 * scale)


def test_zuiderweg_regimes():
    """zuiderweg_spray_area and zuiderweg_emulsion_area meet at the group 0.636352; zuiderweg_emulsion_number is
    FP/(b h)."""
    group = 0.636352
    u = np.sqrt(group * SIGMA / (RHO_V * 0.03 * 0.1))
    state = (u, RHO_V, 0.03, 0.1, SIGMA, 0.1)
    spray, emulsion = tray_transfer.zuiderweg_spray_area(*state), tray_transfer.zuiderweg_emulsion_area(*state)
    assert_allclose(spray, emulsion, rtol=1e-5)
    assert_allclose(tray_transfer.zuiderweg_emulsion_number(0.1, 1.25, 0.04), 2.0)


def test_zuiderweg_areas_typed_out():
    """zuiderweg_spray_area and zuiderweg_emulsion_area at a group of one, hole area 10 %."""
    u = np.sqrt(SIGMA / (RHO_V * 0.03 * 0.1))
    state = (u, RHO_V, 0.03, 0.1, SIGMA, 0.1)
    found = [tray_transfer.zuiderweg_spray_area(*state), tray_transfer.zuiderweg_emulsion_area(*state)]
    assert_allclose(found, np.array([40, 43]) * 10 ** 0.3)


def test_zuiderweg_coefficients():
    """zuiderweg_liquid and zuiderweg_liquid_by_viscosity within 10 % for light hydrocarbons; zuiderweg_vapor 0.13/rho
    for dense vapour, greatest at 1 kg/m3, an error where negative."""
    assert_allclose(tray_transfer.zuiderweg_liquid(4e-9), tray_transfer.zuiderweg_liquid_by_viscosity(MU_L), rtol=0.10)
    assert_allclose(tray_transfer.zuiderweg_vapor(80.0), 0.13 / 80, rtol=0.01)
    k = tray_transfer.zuiderweg_vapor.silent(np.array([0.9, 1.0, 1.1]))
    assert k[1] > k[0] and k[1] > k[2]
    with pytest.raises(InputError, match="vapor_density"):
        tray_transfer.zuiderweg_vapor.silent(0.4)


def test_zuiderweg_units_beside_aiche():
    """zuiderweg_vapor times zuiderweg_spray_area, and zuiderweg_liquid or zuiderweg_liquid_by_viscosity on the same
    area, within 2 times the transfer units of the AIChE manual."""
    area = tray_transfer.zuiderweg_spray_area(U, RHO_V, 0.0278, 0.0674, SIGMA, 0.1)
    N_G = tray_transfer.zuiderweg_vapor(RHO_V) * area / U
    aiche = tray_transfer.aiche_vapor_units(U, RHO_V, MU_V, 4.5e-6, WEIR, LOAD)
    assert within(N_G, aiche, 2.0)
    u_L = LOAD * 1.33333
    aiche = tray_transfer.aiche_sieve_liquid_units(4e-9, U, RHO_V, 3.15)
    for k in (tray_transfer.zuiderweg_liquid(4e-9), tray_transfer.zuiderweg_liquid_by_viscosity(MU_L)):
        assert within(k * area / u_L, aiche, 3.5)


def test_zuiderweg_weeping():
    """zuiderweg_weep_point grows with hole area and the root of the liquid height."""
    state = dict(clear_liquid_height=0.03, hole_area_fraction=0.1, vapor_density=RHO_V, liquid_density=RHO_L)
    assert_allclose(slope(tray_limits.zuiderweg_weep_point, "clear_liquid_height", **state), 0.5, rtol=1e-6)
    assert_allclose(slope(tray_limits.zuiderweg_weep_point, "hole_area_fraction", **state), 1.0, rtol=1e-6)


def test_zuiderweg_weeping_beside_froude():
    """zuiderweg_weep_point is the hole Froude number 0.45, froude_weep_point 0.5."""
    u = tray_limits.zuiderweg_weep_point(0.03, 0.1, RHO_V, RHO_L) / 0.1
    assert_allclose(u, 0.9 * tray_limits.froude_weep_point(0.03, RHO_V, RHO_L), rtol=5e-3)


def test_chen_chuang_beside_aiche():
    """chen_chuang_vapor_units and chen_chuang_liquid_units within 2.1 times those of the AIChE manual."""
    state = dict(active_velocity=U, vapor_density=RHO_V, liquid_density=RHO_L, liquid_viscosity=MU_L,
                 surface_tension=SIGMA, hole_area_fraction=0.1, clear_liquid_height=0.0332)
    N_G = tray_transfer.chen_chuang_vapor_units(4.5e-6, **state)
    N_L = tray_transfer.chen_chuang_liquid_units(4e-9, **state, molar_flow_ratio=1.0, vapor_molar_mass=0.08,
                                                 liquid_molar_mass=0.08)
    assert within(N_G, tray_transfer.aiche_vapor_units(U, RHO_V, MU_V, 4.5e-6, WEIR, LOAD), 2.1)
    assert within(N_L, tray_transfer.aiche_sieve_liquid_units(4e-9, U, RHO_V, 3.11), 2.1)


def test_chen_chuang_ratio_of_the_films():
    """chen_chuang_liquid_units over chen_chuang_vapor_units is (14/11)(M V/(M L)) (D_L rho_L/(D_V rho_V))^(1/2)."""
    state = dict(active_velocity=U, vapor_density=RHO_V, liquid_density=RHO_L, liquid_viscosity=MU_L,
                 surface_tension=SIGMA, hole_area_fraction=0.1, clear_liquid_height=0.0332)
    N_G = tray_transfer.chen_chuang_vapor_units(4.5e-6, **state)
    N_L = tray_transfer.chen_chuang_liquid_units(4e-9, **state, molar_flow_ratio=1.2, vapor_molar_mass=0.07,
                                                 liquid_molar_mass=0.08)
    assert_allclose(N_L / N_G, 14 / 11 * 1.2 * 0.07 / 0.08 * np.sqrt(4e-9 * RHO_L / (4.5e-6 * RHO_V)))


def test_weir_too_short_for_its_liquid():
    """treybal_effective_weir: a crest that fills the segment is an error, a short crest leaves the weir whole."""
    assert_allclose(tray_hydraulics.treybal_effective_weir(1e-9, 0.875, 1.25), 1.0, rtol=1e-4)
    with pytest.raises(NoPhysicalRootError, match="1 of 2 entries") as caught:
        tray_hydraulics.treybal_effective_weir([0.005, 5.0], 0.875, 1.25)
    np.testing.assert_array_equal(caught.value.failed, [False, True])
    with pytest.raises(InputError, match="weir_length"):
        tray_hydraulics.treybal_effective_weir(0.005, 1.3, 1.25)
