"""The wet bulb of water in air against adiabatic saturation.

Sources: saturation pressure of water R. W. Hyland and A. Wexler, ASHRAE Trans. 89 (2A) (1983) 500; humidity balance of
adiabatic saturation and enthalpies ASHRAE Handbook Fundamentals (2009) ch. 1, eqs. 6, 32, 35 (all from memory). Wet
bulb and adiabatic saturation agree for a Lewis factor h/(c cp kappa) of one (W. K. Lewis, Trans. ASME 44 (1922) 325);
the heat and mass transfer analogy gives Le^(2/3), Le = alpha/D = 0.858 for water in air (common practice).
"""
from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import brentq

from ratebased.interface import Bulk, interface_flux

P, ICE = 101325.0, 273.15
M_WATER, M_AIR = 0.018015, 0.028966
LE = 0.858


def saturation_pressure(T):
    return np.exp(-5.8002206e3 / T + 1.3914993 - 4.8640239e-2 * T + 4.1764768e-5 * T ** 2 - 1.4452093e-8 * T ** 3
                  + 6.5459673 * np.log(T))


class WetAir:
    """Water and air that does not dissolve; enthalpies of moist-air tables, J/mol."""

    names = ("water", "air")
    molar_mass = np.array([M_WATER, M_AIR])
    condensable, volatile = np.array([True, False]), np.array([True, True])

    def k_value(self, T, P, x, y):
        K = saturation_pressure(np.asarray(T, float)) / np.asarray(P)
        return np.stack((K, np.zeros_like(K)), -1)

    def thermodynamic_factor(self, T, P, x):
        return np.ones((*x.shape[:-1], 1, 1))

    def vapor_enthalpy(self, T, P, y):
        t = np.asarray(T, float) - ICE
        return np.stack((M_WATER * (2.501e6 + 1860.0 * t), M_AIR * 1006.0 * t), -1)

    def liquid_enthalpy(self, T, P, x):
        t = np.asarray(T, float) - ICE
        return np.stack((M_WATER * 4186.0 * t, 0.0 * t), -1)


class EqualHeatCapacities(WetAir):
    """Both gases with the molar heat capacity of air."""

    def vapor_enthalpy(self, T, P, y):
        t = np.asarray(T, float) - ICE
        return np.stack((M_WATER * 2.501e6 + M_AIR * 1006.0 * t, M_AIR * 1006.0 * t), -1)


def adiabatic_saturation(T, y, model):
    """The temperature at which water fed at it saturates the air adiabatically: per mole of dry air, H balance."""
    def gap(t):
        y_s = saturation_pressure(t) / P
        water_in, water_out = y / (1 - y), y_s / (1 - y_s)
        H_in, H_out = model.vapor_enthalpy(T, P, None), model.vapor_enthalpy(t, P, None)
        fed = model.liquid_enthalpy(t, P, None)[0]
        return (H_in[1] + water_in * H_in[0] + (water_out - water_in) * fed) - (H_out[1] + water_out * H_out[0])

    return brentq(gap, ICE - 20.0, T, xtol=1e-11)


def wet_bulb(T, y, model, lewis):
    """T_L = T_I: nothing is conducted into the liquid."""
    kappa, c = 0.03, P / (8.314462618 * T)
    cp = model.vapor_enthalpy(T + 0.5, P, None) - model.vapor_enthalpy(T - 0.5, P, None)
    h = lewis * c * kappa * (y * cp[0] + (1 - y) * cp[1])
    pair = np.array([[0.0, 1.0], [1.0, 0.0]])
    T_L = T
    for _ in range(60):
        r = interface_flux(Bulk(np.array([y, 1 - y]), T, kappa * pair, h, c),
                           Bulk(np.array([1.0, 0.0]), T_L, pair, 10.0, 1.0), model, P)
        if abs(r.T_I - T_L) < 1e-7:
            return float(r.T_I)
        T_L = float(r.T_I)
    raise AssertionError("wet bulb not reached")


AIRS = [(t + ICE, humidity) for t in (10.0, 30.0, 50.0) for humidity in (0.02, 0.3, 0.9)]


@pytest.mark.parametrize("T, humidity", AIRS)
def test_equal_heat_capacities_give_adiabatic_saturation(T, humidity):
    y = humidity * saturation_pressure(T) / P
    model = EqualHeatCapacities()
    assert wet_bulb(T, y, model, 1.0) == pytest.approx(adiabatic_saturation(T, y, model), abs=1e-3)


@pytest.mark.parametrize("T, humidity", AIRS)
def test_lewis_factor_one(T, humidity):
    """Up to 0.015 K below adiabatic saturation, because the heat capacities of water vapour and air differ."""
    y = humidity * saturation_pressure(T) / P
    difference = wet_bulb(T, y, WetAir(), 1.0) - adiabatic_saturation(T, y, WetAir())
    assert -0.016 < difference < 1e-3


@pytest.mark.parametrize("T, humidity, low, high", [(10.0 + ICE, 0.9, 0.005, 0.05), (50.0 + ICE, 0.9, 0.005, 0.06),
                                                    (30.0 + ICE, 0.3, 0.2, 0.7), (50.0 + ICE, 0.02, 0.9, 1.1)])
def test_real_lewis_factor_is_colder(T, humidity, low, high):
    """h from the analogy is smaller: 0.02 K (humid) to 1.0 K (hot and dry) below adiabatic saturation."""
    y = humidity * saturation_pressure(T) / P
    assert low < adiabatic_saturation(T, y, WetAir()) - wet_bulb(T, y, WetAir(), LE ** (2 / 3)) < high


def test_adiabatic_saturation_of_the_handbook_form():
    """The mole balance is the handbook's W = ((2501 - 2.326 t*) W* - 1.006 (t - t*))/(2501 + 1.86 t - 4.186 t*)."""
    T, y = 35.0 + ICE, 0.012
    t_star = adiabatic_saturation(T, y, WetAir()) - ICE
    ratio = M_WATER / M_AIR
    y_s = saturation_pressure(t_star + ICE) / P
    W_star, t = ratio * y_s / (1 - y_s), T - ICE
    W = ((2501 - 2.326 * t_star) * W_star - 1.006 * (t - t_star)) / (2501 + 1.86 * t - 4.186 * t_star)
    assert W == pytest.approx(ratio * y / (1 - y), rel=1e-6)
