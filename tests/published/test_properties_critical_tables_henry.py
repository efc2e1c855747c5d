"""Gases in water at 25 C: International Critical Tables (1929), as printed in Perry's handbook (from memory).

An older compilation than the one the library's constants come from: the two agree within 6 %.
"""
import pytest

from ratebased.properties import ThermoProperties

ATMOSPHERE = 101325.0
CONSTANTS = {"hydrogen": 7.07e4, "nitrogen": 8.65e4, "oxygen": 4.38e4, "carbon monoxide": 5.80e4,
             "carbon dioxide": 1.64e3, "methane": 4.13e4, "hydrogen sulfide": 545.0}
"""Partial pressure over mole fraction, atm."""


@pytest.mark.parametrize("gas", CONSTANTS)
def test_henry_constant(gas):
    model = ThermoProperties.from_names([gas, "water"], henry=[gas], T_range=(283.0, 333.0))
    K = model.k_value(298.15, ATMOSPHERE, [1e-6, 1 - 1e-6], [0.9, 0.1])[0]
    assert K == pytest.approx(CONSTANTS[gas], rel=0.06)


@pytest.mark.parametrize("gas, heat", [("oxygen", 11.7), ("carbon dioxide", 20.3), ("ammonia", 34.2)])
def test_heat_of_solution(gas, heat):
    """kJ/mol released at 25 C: gas less aqueous enthalpy of formation, NBS tables of 1982, from memory. The van 't Hoff
    slopes, which are rounded to 100 K (1 kJ/mol), give them within 7 %."""
    model = ThermoProperties.from_names([gas, "water"], henry=[gas], T_range=(283.0, 333.0))
    x = [1e-6, 1 - 1e-6]
    released = (model.vapor_enthalpy(298.15, ATMOSPHERE, x) - model.liquid_enthalpy(298.15, ATMOSPHERE, x))[0]
    assert released / 1e3 == pytest.approx(heat, rel=0.07)
