"""Structured packings without a worked number in print: limits, second forms, neighbouring methods.

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
    packing_area,
    packing_coefficients,
    packing_pressure_drop,
)

RHO_V, RHO_L, MU_V, MU_L, SIGMA = 3.0, 660.0, 8.5e-6, 2.6e-4, 0.0145
A, EPS, SIDE, BASE, CRIMP, THETA = 250.0, 0.97, 0.017, 0.0241, 0.0119, np.pi / 4
U_V, U_L = 1.3, 0.005




WALLS = dict(corrugation_base=BASE, corrugation_height=CRIMP, corrugation_side=SIDE)


def test_area_of_sheet_in_weber_and_froude():
    """tsai as 1.34 (We Fr^(-1/3))^0.116 on the film thickness, any velocity; wang with the whole area."""
    perimeter = 4 * SIDE / (BASE * CRIMP)
    for velocity in (0.05, 0.3):
        film = U_L / perimeter / velocity
        We, Fr = RHO_L * velocity ** 2 * film / 0.03, velocity ** 2 / (G * film)
        found = packing_area.tsai(U_L, RHO_L, 0.03, A, **WALLS)
        assert_allclose(found, A * 1.34 * (We * Fr ** (-1 / 3)) ** 0.116, rtol=1e-12)
    ratio = packing_area.wang(U_L, RHO_L, 0.03, perimeter) / perimeter / (found / A)
    assert_allclose(ratio, 1.41 / 1.34, rtol=1e-12)


def test_area_of_sheet_beside_its_neighbours():
    """tsai, wang and henriques_de_brito for the same sheet: within 1.6 times; all grow slowly with the load."""
    tsai = packing_area.tsai(U_L, RHO_L, 0.03, A, **WALLS)
    wang = packing_area.wang(U_L, RHO_L, 0.03, A)
    brito = packing_area.henriques_de_brito(U_L, RHO_L, MU_L, A)
    assert within(tsai, wang, 1.1) and within(tsai, brito, 1.8)
    state = dict(liquid_velocity=U_L, liquid_density=RHO_L, specific_area=A)
    power = 0.116 * 4 / 3
    assert_allclose(slope(packing_area.wang, "liquid_velocity", surface_tension=0.03, **state), power, rtol=1e-5)
    found = slope(packing_area.tsai, "liquid_velocity", surface_tension=0.03, **WALLS, **state)
    assert_allclose(found, power, rtol=1e-5)
    assert_allclose(slope(packing_area.henriques_de_brito, "liquid_velocity", liquid_viscosity=MU_L, **state), 0.3,
                    rtol=1e-5)


def test_henriques_de_brito_typed_out():
    """henriques_de_brito at Re = 1 is 0.465 a."""
    assert_allclose(packing_area.henriques_de_brito(2.5e-4, 1000.0, 1e-3, 250.0), 0.465 * 250.0)


def test_partial_wetting_factor():
    """rocha_bravo_fair_holdup_factor steps up at 0.045 N/m, as printed; powers of Shi and Mersmann.

    rocha_bravo_fair_sheet is a F_SE times it.
    """
    state = dict(liquid_velocity=U_L, liquid_density=RHO_L, liquid_viscosity=MU_L, surface_tension=SIGMA,
                 void_fraction=EPS, corrugation_side=SIDE, corrugation_angle=THETA)
    function = packing_area.rocha_bravo_fair_holdup_factor
    assert_allclose(slope(function, "liquid_velocity", **state), 0.4, rtol=1e-5)
    assert_allclose(slope(function, "liquid_viscosity", **state), 0.2, rtol=1e-5)
    # cos gamma evaluated apart: 0.9 up to the joint, 0.618011 at 0.055 N/m
    wet, dry = function(**dict(state, surface_tension=np.array([0.045, 0.055])))
    assert_allclose(dry / wet, (0.045 / 0.055) ** 0.15 * (1 - 0.93 * 0.9) / (1 - 0.93 * 0.618011), rtol=1e-5)
    edge = function(**dict(state, surface_tension=np.array([0.045, 0.0450001])))
    # cos gamma 0.9 and 0.910639 at the joint, evaluated apart: the printed branches do not meet
    assert_allclose(edge[1] / edge[0], (1 - 0.93 * 0.9) / (1 - 0.93 * 0.910639), rtol=1e-4)
    sheet = packing_area.rocha_bravo_fair_sheet(**state, specific_area=A, surface_factor=0.35)
    assert_allclose(sheet, A * 0.35 * function(**state))


def test_partial_wetting_typed_out():
    """rocha_bravo_fair_holdup_factor and rocha_bravo_fair_sheet with the groups multiplied out."""
    u, S = U_L, SIDE
    We_Fr = u ** 4 * RHO_L / (SIGMA * G)
    Re = u * S * RHO_L / MU_L
    F_t = 29.12 * We_Fr ** 0.15 * S ** 0.359 * Re ** -0.2 * EPS ** -0.6 / (1 - 0.837) * np.sin(THETA) ** -0.3
    state = (u, RHO_L, MU_L, SIGMA)
    assert_allclose(packing_area.rocha_bravo_fair_holdup_factor(*state, EPS, S, THETA), F_t, rtol=1e-12)
    assert_allclose(packing_area.rocha_bravo_fair_sheet(*state, A, EPS, S, THETA, 0.35), 0.35 * F_t * A, rtol=1e-12)


def test_gauze():
    """rocha_bravo_fair_gauze tends to the geometric area of bravo_rocha_fair_gauze as the load vanishes."""
    a = packing_area.rocha_bravo_fair_gauze([1e-30, 0.002], 500.0, 0.009)
    assert_allclose(a[0], packing_area.bravo_rocha_fair_gauze(500.0), rtol=1e-5)
    assert a[1] < a[0]


def test_gauze_typed_out():
    """rocha_bravo_fair_gauze: the loss of area grows with u^0.222; `InputError` once nothing is left."""
    loss = 1 - packing_area.rocha_bravo_fair_gauze(np.array([0.002, 0.004]), 1.0, 0.009)
    assert_allclose(loss[1] / loss[0], 2 ** 0.222)
    with pytest.raises(InputError, match="liquid_velocity"):
        packing_area.rocha_bravo_fair_gauze(0.3, 1.0, 0.009)


def test_film_velocity_of_bravo():
    """bravo_rocha_fair_liquid and bravo_rocha_fair_vapor take 3/2 of the mean velocity of a vertical film."""
    gamma = U_L * BASE * CRIMP / (4 * SIDE + BASE)
    film = np.cbrt(3 * MU_L * gamma / (RHO_L * G))
    surface = 1.5 * gamma / film
    k = packing_coefficients.bravo_rocha_fair_liquid(4e-9, U_L, RHO_L, MU_L, **WALLS)
    assert_allclose(k, 2 * np.sqrt(4e-9 * surface / (np.pi * SIDE)), rtol=1e-12)
    d = 0.0133711
    Re = d * RHO_V * (U_V / (EPS * np.sin(THETA)) + surface) / MU_V
    k = packing_coefficients.bravo_rocha_fair_vapor(4.5e-6, U_V, RHO_V, MU_V, U_L, RHO_L, MU_L, EPS, **WALLS,
                                                    corrugation_angle=THETA)
    assert_allclose(k, 0.0338 * 4.5e-6 / d * Re ** 0.8 * (MU_V / (RHO_V * 4.5e-6)) ** 0.333, rtol=1e-5)


def test_powers_of_the_diffusivity():
    """bravo_rocha_fair_liquid, rocha_bravo_fair_liquid and delft_liquid go with D^(1/2), bravo_rocha_fair_vapor and
    rocha_bravo_fair_vapor with about D^(2/3), delft_vapor in between."""
    liquid = dict(diffusivity=4e-9, liquid_velocity=U_L, liquid_density=RHO_L, liquid_viscosity=MU_L)
    vapor = dict(diffusivity=4.5e-6, vapor_velocity=U_V, vapor_density=RHO_V, vapor_viscosity=MU_V)
    flow = {n: v for n, v in liquid.items() if n != "diffusivity"}
    side = dict(corrugation_side=SIDE, corrugation_angle=THETA, void_fraction=EPS)
    channel = dict(WALLS, corrugation_angle=THETA, void_fraction=EPS)
    found = slope(packing_coefficients.bravo_rocha_fair_liquid, "diffusivity", **liquid, **WALLS)
    assert_allclose(found, 0.5, rtol=1e-5)
    assert_allclose(slope(packing_coefficients.delft_liquid, "diffusivity", **liquid, specific_area=A, **channel), 0.5,
                    rtol=1e-5)
    rocha = dict(diffusivity=4e-9, liquid_velocity=U_L, liquid_holdup=0.07, **side)
    assert_allclose(slope(packing_coefficients.rocha_bravo_fair_liquid, "diffusivity", **rocha), 0.5, rtol=1e-5)
    found = slope(packing_coefficients.bravo_rocha_fair_vapor, "diffusivity", **vapor, **flow, **channel)
    assert_allclose(found, 0.667, rtol=1e-5)
    found = slope(packing_coefficients.rocha_bravo_fair_vapor, "diffusivity", **vapor, liquid_velocity=U_L,
                  liquid_holdup=0.07, **side)
    assert_allclose(found, 0.67, rtol=1e-5)
    found = slope(packing_coefficients.delft_vapor, "diffusivity", **vapor, **flow, specific_area=A,
                  element_height=0.21, **channel)
    assert 0.3 < found < 0.7


def test_rocha_typed_out():
    """rocha_bravo_fair_vapor and rocha_bravo_fair_liquid with velocities worked out first."""
    h, sine = 0.07, np.sin(THETA)
    gas, liquid = U_V / (EPS * (1 - h) * sine), U_L / (EPS * h * sine)
    k = packing_coefficients.rocha_bravo_fair_vapor(4.5e-6, U_V, RHO_V, MU_V, U_L, h, EPS, SIDE, THETA)
    Sh = 0.054 * ((gas + liquid) * RHO_V * SIDE / MU_V) ** 0.8 * (MU_V / RHO_V / 4.5e-6) ** 0.33
    assert_allclose(k * SIDE / 4.5e-6, Sh, rtol=1e-12)
    k = packing_coefficients.rocha_bravo_fair_liquid(4e-9, U_L, h, EPS, SIDE, THETA)
    time = SIDE / (0.9 * liquid)  # one side of the corrugation, renewed once
    assert_allclose(k, 2 * np.sqrt(4e-9 / (np.pi * time)), rtol=1e-12)


def test_structured_coefficients_beside_each_other():
    """delft_vapor and delft_liquid within 2.5 times the other two methods for sheet."""
    geometry = dict(WALLS, corrugation_angle=THETA, void_fraction=EPS)
    k_V = packing_coefficients.delft_vapor(4.5e-6, U_V, RHO_V, MU_V, U_L, RHO_L, MU_L, A, element_height=0.21,
                                           **geometry)
    k_L = packing_coefficients.delft_liquid(4e-9, U_L, RHO_L, MU_L, A, **geometry)
    rocha = packing_coefficients.rocha_bravo_fair_vapor(4.5e-6, U_V, RHO_V, MU_V, U_L, 0.07, EPS, SIDE, THETA)
    assert within(k_V, rocha, 2.5)
    assert within(k_L, packing_coefficients.rocha_bravo_fair_liquid(4e-9, U_L, 0.07, EPS, SIDE, THETA), 2.5)


def test_pressure_drop_of_sheet():
    """rocha_bravo_fair solved by bisection on its two equations; the lowest of its roots; dry without liquid.

    rocha_bravo_fair_dry is quadratic in u where turbulent and linear where laminar; bravo_rocha_fair without liquid is
    within 1.3 times of it.
    """
    F_t = float(packing_area.rocha_bravo_fair_holdup_factor(U_L, RHO_L, MU_L, SIGMA, EPS, SIDE, THETA))
    state = dict(vapor_velocity=U_V, vapor_density=RHO_V, vapor_viscosity=MU_V, liquid_density=RHO_L,
                 liquid_viscosity=MU_L, holdup_factor=F_t, void_fraction=EPS, corrugation_side=SIDE,
                 corrugation_angle=THETA)
    found = packing_pressure_drop.rocha_bravo_fair(liquid_velocity=U_L, **state)
    dry = packing_pressure_drop.rocha_bravo_fair_dry(U_V, RHO_V, MU_V, EPS, SIDE, THETA)

    def residual(dP):
        effective = G * (RHO_L - RHO_V) / RHO_L * (1 - dP / 1025.0)
        h = (4 * F_t / SIDE) ** (2 / 3) * np.cbrt(3 * MU_L * U_L / (RHO_L * np.sin(THETA) * EPS * effective))
        return dry * (1 - (0.614 + 71.35 * SIDE) * h) ** -5 - dP

    assert_allclose(found.pressure_gradient, brentq(residual, float(dry), 500.0, xtol=1e-10), rtol=1e-10)
    assert all(residual(p) > 0 for p in np.linspace(dry, 0.999 * found.pressure_gradient, 50))
    bare = packing_pressure_drop.rocha_bravo_fair(liquid_velocity=1e-18, **state)
    assert_allclose(bare.pressure_gradient, dry, rtol=1e-4)
    with pytest.raises(NoPhysicalRootError, match="flooding"):
        packing_pressure_drop.rocha_bravo_fair(liquid_velocity=U_L, **dict(state, vapor_velocity=2.4))
    older = packing_pressure_drop.bravo_rocha_fair(U_V, RHO_V, MU_V, 1e-15, EPS, **WALLS, corrugation_angle=THETA)
    assert within(older, dry, 1.3)
    velocity = dict(vapor_density=RHO_V, vapor_viscosity=MU_V, void_fraction=EPS, corrugation_side=SIDE,
                    corrugation_angle=THETA)
    function = packing_pressure_drop.rocha_bravo_fair_dry
    assert_allclose(slope(function, "vapor_velocity", vapor_velocity=1e3, **velocity), 2.0, rtol=1e-3)
    assert_allclose(slope(function, "vapor_velocity", vapor_velocity=1e-6, **velocity), 1.0, rtol=1e-3)


def test_pressure_drop_of_sheet_typed_out():
    """rocha_bravo_fair, rocha_bravo_fair_dry and bravo_rocha_fair as friction factors on their own velocities."""
    U = U_V / (EPS * np.sin(THETA))
    Re = U * SIDE * RHO_V / MU_V
    dry = packing_pressure_drop.rocha_bravo_fair_dry(U_V, RHO_V, MU_V, EPS, SIDE, THETA)
    assert_allclose(dry, (0.177 + 88.774 / Re) * RHO_V * U ** 2 / SIDE, rtol=1e-12)
    both = packing_pressure_drop.rocha_bravo_fair(U_V, RHO_V, MU_V, U_L, RHO_L, MU_L, 2.3, EPS, SIDE, THETA)
    K = 0.614 + 71.35 * SIDE
    assert_allclose(both.pressure_gradient * (1 - K * both.liquid_holdup) ** 5, dry, rtol=1e-10)
    d = BASE * CRIMP * (1 / (BASE + 2 * SIDE) + 1 / (2 * SIDE))
    dP = packing_pressure_drop.bravo_rocha_fair(U_V, RHO_V, MU_V, U_L, EPS, **WALLS, corrugation_angle=THETA)
    wet = (1 - 3 * np.sqrt(U_L ** 2 / (d * G))) ** 5
    assert_allclose(dP * wet, (0.171 + 92.7 * MU_V / (d * U * RHO_V)) * RHO_V * U ** 2 / d, rtol=1e-12)
    with pytest.raises(NoPhysicalRootError, match="channels"):
        packing_pressure_drop.bravo_rocha_fair(U_V, RHO_V, MU_V, 0.2, EPS, **WALLS, corrugation_angle=THETA)
