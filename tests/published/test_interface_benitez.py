"""Distillation of methanol and water: two films, Wilson equilibrium, latent heats as the bootstrap.

Source of the data: J. Benitez, Principles and Modern Applications of Mass Transfer Operations, 2nd ed. 2009, example
3.6 (p. 175): P = 101.3 kPa, F_G = 1.7 and F_L = 14.9 mol/(m2 s), y = 0.36, x = 0.20, latent heats 33.3 and 41.3 kJ/mol,
Wilson and Antoine constants as below. The book rounds N_A/(N_A + N_B) = 1/(1 - 33.3/41.3) = 5.1625 to 5.155 and prints
the film equation y_I = 5.155 - 4.795 [4.955/(5.155 - x_I)]^(F_L/F_G). The figures compared are that equation solved
with the Wilson equilibrium to six digits (recomputed from the book's inputs, not printed there).
"""
from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import brentq

from ratebased.interface import Bulk, interface_flux

P, F_G, F_L = 101.3e3, 1.7, 14.9


class MethanolWater:
    """Wilson activity in the equilibrium only: the book's liquid film is ideal. Latent heats constant, no sensible."""

    names = ("methanol", "water")
    molar_mass = np.array([0.03204, 0.018015])
    condensable = volatile = np.array([True, True])

    def __init__(self, latent):
        self.latent = np.asarray(latent, float)

    @staticmethod
    def activity(T, x):
        x1, x2 = x[..., 0], x[..., 1]
        L12 = 18.07 / 40.73 * np.exp(-107.38 / (1.987 * T))
        L21 = 40.73 / 18.07 * np.exp(-469.5 / (1.987 * T))
        common = L12 / (x1 + L12 * x2) - L21 / (x2 + L21 * x1)
        return np.exp(np.stack((-np.log(x1 + L12 * x2) + x2 * common, -np.log(x2 + L21 * x1) - x1 * common), -1))

    @staticmethod
    def saturation(T):
        return 1e3 * np.exp(np.stack((16.5938 - 3644.3 / (T - 33.0), 16.2620 - 3800.0 / (T - 47.0)), -1))

    def k_value(self, T, P, x, y):
        T = np.asarray(T, float)
        return self.activity(T, x) * self.saturation(T) / np.asarray(P)[..., None]

    def thermodynamic_factor(self, T, P, x):
        return np.ones((*x.shape[:-1], 1, 1))

    def vapor_enthalpy(self, T, P, y):
        return self.latent + 0.0 * np.asarray(T, float)[..., None]

    def liquid_enthalpy(self, T, P, x):
        return np.zeros(2) + 0.0 * np.asarray(T, float)[..., None]


def solve(latent):
    """No conduction to speak of, so that the latent heats alone close the fluxes."""
    pair = np.array([[0.0, 1.0], [1.0, 0.0]])
    return interface_flux(Bulk(np.array([0.36, 0.64]), 360.0, F_G * pair, 1e-9, 1.0),
                          Bulk(np.array([0.20, 0.80]), 355.0, F_L * pair, 1e-9, 1.0), MethanolWater(latent), P)


def test_worked_interface():
    """With latent heats whose ratio gives the book's rounded 5.155."""
    r = solve([41.3e3 * (1.0 - 1.0 / 5.155), 41.3e3])
    assert r.N[0] / r.N.sum() == pytest.approx(5.155, rel=1e-9)
    assert r.x_I[0] == pytest.approx(0.177221, abs=1e-6)
    assert r.y_I[0] == pytest.approx(0.548942, abs=1e-6)
    assert r.T_I == pytest.approx(356.4649, abs=1e-4)
    assert r.N[0] == pytest.approx(-0.352304, abs=2e-6)
    np.testing.assert_allclose(MethanolWater.activity(r.T_I, r.x_I), [1.523988, 1.034849], atol=1e-6)


def test_film_equation_as_printed():
    r = solve([41.3e3 * (1.0 - 1.0 / 5.155), 41.3e3])
    assert r.y_I[0] == pytest.approx(5.155 - 4.795 * (4.955 / (5.155 - r.x_I[0])) ** (F_L / F_G), rel=1e-9)


def test_latent_heats_as_given():
    """Unrounded ratio 5.1625: the same equations solved by bracketing on x_I."""
    psi = 1.0 / (1.0 - 33.3 / 41.3)
    model = MethanolWater([33.3e3, 41.3e3])

    def temperature(x):
        return brentq(lambda T: (model.k_value(T, P, np.array([x, 1 - x]), None) * [x, 1 - x]).sum() - 1, 330, 375,
                      xtol=1e-12)

    def gap(x):
        y = model.k_value(temperature(x), P, np.array([x, 1 - x]), None)[0] * x
        return psi - (psi - 0.36) * ((psi - 0.20) / (psi - x)) ** (F_L / F_G) - y

    x = brentq(gap, 0.1, 0.2, xtol=1e-14)
    r = solve([33.3e3, 41.3e3])
    assert r.x_I[0] == pytest.approx(x, abs=1e-10)
    assert r.T_I == pytest.approx(temperature(x), abs=1e-8)
    assert r.N[0] == pytest.approx(psi * F_G * np.log((psi - r.y_I[0]) / (psi - 0.36)), rel=1e-9)
