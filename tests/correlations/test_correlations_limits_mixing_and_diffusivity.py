"""Mixing, diffusivity, heat, overall efficiency without a worked number in print: limits, second forms, neighbours.

Each formula is typed a second time in another form, or the equations it solves are solved by other means; where a
correlation is from memory alone, a neighbouring method bounds it (the factor says how far the two are known to part).
"""
from __future__ import annotations

import numpy as np
import pytest
from limit_tools import G, slope
from numpy.testing import assert_allclose
from scipy.integrate import solve_bvp, solve_ivp

from correlations import (
    gas_diffusivity,
    heat_transfer,
    liquid_diffusivity,
    mixing,
    mixture_diffusivity,
    overall,
    packing_coefficients,
    tray_hydraulics,
)

RHO_V, RHO_L, MU_V, MU_L, SIGMA = 3.0, 660.0, 8.5e-6, 2.6e-4, 0.0145
A, EPS, SIDE, BASE, CRIMP, THETA = 250.0, 0.97, 0.017, 0.0241, 0.0119, np.pi / 4
U_V, U_L = 1.3, 0.005




def test_films_in_series():
    """overall_vapor_units and point_efficiency against the balance of the vapour rising through mixed liquid."""
    N_G, N_L, m, G_over_L = 1.9, 3.1, 1.1, 0.9
    x, y_in = 0.3, 0.1

    def rate(_, y):
        # N_G (y_I - y) = N_L (L/G)(x - y_I/m): both films carry the same
        y_I = (N_G * y + N_L / G_over_L * x) / (N_G + N_L / (G_over_L * m))
        return N_G * (y_I - y)

    y = solve_ivp(rate, (0, 1), [y_in], rtol=1e-11, atol=1e-13).y[0, -1]
    N = mixing.overall_vapor_units(N_G, N_L, m * G_over_L)
    assert_allclose(mixing.point_efficiency(N), (y - y_in) / (m * x - y_in), rtol=1e-9)


@pytest.mark.parametrize("Pe", [0.3, 5.0, 40.0])
def test_axial_dispersion(Pe):
    """gerster against the dispersion equation w''/Pe - w' - lambda E w = 0, w = 1 and w' = 0 at the outlet.

    Also peclet_number and pools_from_peclet at their ends.
    """
    E, lam = 0.7, 1.2

    def equations(z, w):
        return np.vstack([w[1], Pe * (w[1] + lam * E * w[0])])

    def ends(_, outlet):
        return np.array([outlet[0] - 1, outlet[1]])

    z = np.linspace(0, 1, 41)
    solution = solve_bvp(equations, ends, z, np.vstack([np.ones_like(z), -np.ones_like(z)]), tol=1e-10,
                         max_nodes=100000)
    nodes, weights = np.polynomial.legendre.leggauss(40)
    mean = weights @ solution.sol((nodes + 1) / 2)[0] / 2
    assert_allclose(mixing.gerster(E, lam, Pe), E * mean, rtol=1e-7)
    assert mixing.gerster(E, lam, 0.0) == E
    assert_allclose(mixing.gerster(E, lam, 1e9), mixing.lewis_plug_flow(E, lam), rtol=1e-6)
    assert_allclose(mixing.peclet_number(2.0, 0.5, 4.0), 2.0)
    assert mixing.pools_from_peclet(0.0) == 1.0


@pytest.mark.parametrize("n", [1, 2, 5])
def test_pools_marched(n):
    """pools_in_series against balances over n mixed pools; lewis_plug_flow is its limit."""
    E, lam = 0.7, 1.2
    w, total = 1.0, 0.0  # x over the outlet's x*, from the outlet upstream: L (w_in - w) = (lambda E/n) L w
    for _ in range(n):
        total += E * w / n
        w *= 1 + lam * E / n
    assert_allclose(mixing.pools_in_series(E, lam, n), total, rtol=1e-13)
    assert_allclose(mixing.pools_in_series(E, lam, 1e9), mixing.lewis_plug_flow(E, lam), rtol=1e-7)


def test_tray_definitions():
    """froth_height, the residence times and the sums of heads: volumes over flows, pressures added."""
    h, phi, width, length, q, area, V = 0.03, 0.4, 0.6, 0.8, 0.004, 0.48, 0.4
    froth = tray_hydraulics.froth_height(h, phi)
    assert_allclose(froth * phi, h)
    assert_allclose(tray_hydraulics.liquid_residence_time(h, length, q / width), h * width * length / q)
    assert_allclose(tray_hydraulics.vapor_residence_time(h, phi, V / area), (froth - h) * area / V)
    dP = tray_hydraulics.tray_pressure_drop(0.04, h, 0.002, 700.0)
    assert_allclose(dP, 700.0 * G * (0.04 + h + 0.002))
    backup = tray_hydraulics.downcomer_backup(0.072, 0.05, 0.02, 0.01, 0.003)
    assert_allclose(backup, 0.155)
    assert_allclose(tray_hydraulics.downcomer_froth_height(backup, 0.5), 0.310)
    assert_allclose(tray_hydraulics.downcomer_residence_time(0.1, backup, q), 0.1 * backup / q)

def test_lennard_jones_estimates_against_fitted_sets():
    """wilke_lee_parameters for N2 and CO2 against the fitted 3.798/71.4 and 3.941/195.2 (angstrom, K)."""
    found = gas_diffusivity.wilke_lee_parameters([31.2e-6, 34.0e-6], [77.4, 194.7])
    assert_allclose(found.collision_diameter, [3.798e-10, 3.941e-10], rtol=0.04)
    assert_allclose(found.energy_parameter, [71.4, 195.2], rtol=0.26)


def test_lennard_jones_estimate_of_the_treybal_example():
    """wilke_lee_parameters: 1.18 V^(1/3) nm with V in m3/kmol is the same rule; 0.45989 nm for ethanol."""
    found = gas_diffusivity.wilke_lee_parameters(59.2e-6, 351.4)
    assert_allclose(found.collision_diameter, 0.45989e-9, rtol=2e-4)
    assert_allclose(found.energy_parameter, 1.15 * 351.4)


def test_lewis_number_one():
    """chilton_colburn and penetration: h = k rho c_p where heat and matter diffuse alike."""
    k, rho, cp, D = 0.02, 1.2, 1006.0, 2.2e-5
    state = (k, rho, cp, rho * cp * D, D)
    assert_allclose([heat_transfer.chilton_colburn(*state), heat_transfer.penetration(*state)], k * rho * cp)


def test_heat_by_substituting_the_thermal_diffusivity():
    """A mass-transfer correlation with the thermal diffusivity put in gives h/(rho c_p): 2/3 for the gas film of
    Onda and co-workers (chilton_colburn), 1/2 for their liquid film (penetration)."""
    rho, mu, cp, lam, D = 1.2, 1.8e-5, 1006.0, 0.026, 2.2e-5
    gas = (1.0, rho, mu, 190.0, 0.025)
    k, h = packing_coefficients.onda_vapor(D, *gas), packing_coefficients.onda_vapor(lam / (rho * cp), *gas) * rho * cp
    assert_allclose(heat_transfer.chilton_colburn(k, rho, cp, lam, D), h, rtol=1e-12)
    rho, mu, cp, lam, D = 998.0, 1e-3, 4180.0, 0.6, 2e-9
    liquid = (0.01, rho, mu, 190.0, 140.0, 0.025)
    k, h = packing_coefficients.onda_liquid(D, *liquid), packing_coefficients.onda_liquid(lam / (rho * cp), *liquid)
    assert_allclose(heat_transfer.penetration(k, rho, cp, lam, D), h * rho * cp, rtol=1e-12)


def test_paraffins_against_wilke_chang():
    """hayduk_minhas_paraffin for n-heptane in n-hexane, 25 C, and its fall with viscosity."""
    D = liquid_diffusivity.hayduk_minhas_paraffin(298.15, [0.294e-3, 3.03e-3], 162.8e-6)
    assert_allclose(D[0], liquid_diffusivity.wilke_chang(298.15, 0.294e-3, 0.08618, 162.8e-6), rtol=0.20)
    assert_allclose(np.log(D[1] / D[0]) / np.log(3.03 / 0.294), 10.2 / 162.8 - 0.791, rtol=1e-9)


def test_paraffin_formula_in_logarithms():
    """hayduk_minhas_paraffin typed as ln D."""
    T, mu, V = 330.0, 0.5, 120.0
    ln = np.log(13.3e-12) + 1.47 * np.log(T) + (10.2 / V - 0.791) * np.log(mu) - 0.71 * np.log(V)
    assert_allclose(liquid_diffusivity.hayduk_minhas_paraffin(T, mu * 1e-3, V * 1e-6), np.exp(ln), rtol=1e-12)


def test_mixed_solvent_of_one():
    """wilke_chang_mixture with one solvent is wilke_chang; in SI the constant is 5.87803e-17."""
    one = liquid_diffusivity.wilke_chang_mixture(300.0, [1.0, 0.0], 1e-3, [0.018, 0.046], [2.6, 1.5], 6e-5)
    assert_allclose(one, liquid_diffusivity.wilke_chang(300.0, 1e-3, 0.018, 6e-5, 2.6), rtol=1e-12)


def test_mixed_solvent_in_si():
    """wilke_chang_mixture typed in SI."""
    found = liquid_diffusivity.wilke_chang_mixture(300.0, [0.4, 0.6], 1e-3, [0.018, 0.046], [2.6, 1.5], 6e-5)
    M = 0.4 * 2.6 * 0.018 + 0.6 * 1.5 * 0.046
    assert_allclose(found, 5.87803e-17 * M ** 0.5 * 300 / (1e-3 * 6e-5 ** 0.6), rtol=1e-6)


@pytest.mark.parametrize("function", [mixture_diffusivity.caldwell_babb, mixture_diffusivity.darken])
def test_ends_of_the_composition(function):
    """caldwell_babb, darken and leffler_cullinan: D12o at x1 = 0, D21o at x1 = 1."""
    assert_allclose(function([0.0, 1.0], 2e-9, 5e-9), [2e-9, 5e-9])
    ends = mixture_diffusivity.leffler_cullinan([0.0, 1.0], 2e-9, 5e-9, 3e-4, 6e-4, [6e-4, 3e-4])
    assert_allclose(ends, [2e-9, 5e-9])


def test_binary_forms_among_each_other():
    """leffler_cullinan with one viscosity is vignes; caldwell_babb lies above it by 1/2 x1 x2 (ln D12o/D21o)^2, first
    order; darken with composition-independent tracers is caldwell_babb."""
    x, one, two = np.linspace(0.1, 0.9, 5), 2.0e-9, 2.1e-9
    vignes = mixture_diffusivity.vignes(x, one, two)
    assert_allclose(mixture_diffusivity.leffler_cullinan(x, one, two, 5e-4, 5e-4, 5e-4), vignes, rtol=1e-13)
    caldwell = mixture_diffusivity.caldwell_babb(x, one, two)
    assert_allclose(caldwell / vignes - 1, 0.5 * x * (1 - x) * np.log(two / one) ** 2, rtol=2e-2)
    assert_allclose(mixture_diffusivity.darken(x, one, two), caldwell)


def test_closures_reduce_to_the_binary():
    """kooijman_taylor, wesselingh_krishna and generalized_vignes of two components are vignes."""
    dilute = np.array([[np.nan, 2e-9], [5e-9, 0.0]])
    x = np.array([[0.2, 0.8], [1.0, 0.0], [0.0, 1.0]])
    for function in (mixture_diffusivity.kooijman_taylor, mixture_diffusivity.wesselingh_krishna):
        assert_allclose(function(x, dilute)[:, 0, 1], mixture_diffusivity.vignes(x[:, 0], 2e-9, 5e-9))
    limits = np.ones((2, 2, 2))
    limits[0, 1] = limits[1, 0] = [5e-9, 2e-9]
    assert_allclose(mixture_diffusivity.generalized_vignes(x, limits)[:, 0, 1],
                    mixture_diffusivity.vignes(x[:, 0], 2e-9, 5e-9))


def test_closures_as_limits_of_the_general_form():
    """generalized_vignes with the limits written out pair by pair gives kooijman_taylor and wesselingh_krishna."""
    random = np.random.default_rng(3)
    n = 4
    dilute, x = random.uniform(1, 5, (n, n)), random.dirichlet(np.ones(n), 6)
    taylor, krishna = np.ones((n, n, n)), np.ones((n, n, n))
    for i, j, k in np.ndindex(n, n, n):
        if i != j:
            own = dilute[i, j] if k == j else dilute[j, i] if k == i else None
            taylor[i, j, k] = own or np.sqrt(dilute[i, k] * dilute[j, k])
            krishna[i, j, k] = own or np.sqrt(dilute[i, j] * dilute[j, i])
    off = ~np.eye(n, dtype=bool)
    for function, limits in ((mixture_diffusivity.kooijman_taylor, taylor),
                             (mixture_diffusivity.wesselingh_krishna, krishna)):
        found = function(x, dilute)
        assert_allclose(found[:, off], mixture_diffusivity.generalized_vignes(x, limits)[:, off], rtol=1e-12)
        assert_allclose(found, np.swapaxes(found, -1, -2))

def test_fits_of_the_distillation_curve():
    """oconnell and oconnell_lockett fit one curve: within 2.2 % of each other for alpha mu from 0.3 to 1 mPa s."""
    mu = np.linspace(0.3e-3, 1.0e-3, 8)
    assert_allclose(overall.oconnell_lockett(1.0, mu), overall.oconnell(1.0, mu), rtol=0.0221)
    assert_allclose(overall.oconnell_polynomial(1.0, mu), overall.oconnell(1.0, mu), rtol=0.05)


def test_viscous_liquids_are_slower():
    """oconnell and oconnell_lockett fall with viscosity and volatility alike, by the powers -0.226 and -0.245.

    oconnell_absorber falls with X: slope -0.199 at X = 1.
    """
    state = dict(relative_volatility=2.0, liquid_viscosity=4e-4)
    for argument in state:
        assert_allclose(slope(overall.oconnell, argument, **state), -0.226, rtol=1e-6)
        assert_allclose(slope(overall.oconnell_lockett, argument, **state), -0.245, rtol=1e-6)
    unit = dict(equilibrium_ratio=1.0, liquid_molar_mass=1e-3, liquid_viscosity=1e-3,
                liquid_density=0.45359237 / 0.3048 ** 3)
    assert_allclose(overall.oconnell_absorber(**unit), 10 ** -0.403, rtol=1e-9)
    assert_allclose(slope(overall.oconnell_absorber, "equilibrium_ratio", **unit), -0.199, rtol=1e-4)


def test_absorber_in_us_units():
    """oconnell_absorber typed in cP and lb/ft3, natural logarithms."""
    K, M, mu, rho = 12.0, 180.0, 1.4, 52.0
    X = np.log(K * M * mu / rho) / np.log(10)
    percent = np.exp(np.log(10) * (1.597 - 0.199 * X - 0.0896 * X ** 2))
    found = overall.oconnell_absorber(K, M * 1e-3, mu * 1e-3, rho * 0.45359237 / 0.3048 ** 3)
    assert_allclose(100 * found, percent, rtol=1e-7)
