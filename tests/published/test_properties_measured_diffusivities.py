"""Diffusivities of whole models against measured ones.

Tolerances are the scatter of the correlations: 10 % in gases, 20 % in water.
"""
import pytest

from ratebased.properties import ThermoProperties


@pytest.mark.parametrize("gas, measured", [("oxygen", 2.10e-9), ("nitrogen", 1.88e-9), ("carbon dioxide", 1.92e-9)])
def test_gases_in_water_at_25_c(gas, measured):
    """Cussler, Diffusion, 2nd ed. 1997, table of section 5.2 (from memory)."""
    model = ThermoProperties.from_names([gas, "water"], henry=[gas], T_range=(285.0, 320.0))
    D = model.liquid_transport(298.15, 101325.0, [1e-7, 1 - 1e-7]).diffusivity[0, 1]
    assert D == pytest.approx(measured, rel=0.20)


@pytest.mark.parametrize("vapor, measured", [
    ("methanol", 0.152e-4), ("ethanol", 0.1181e-4), ("acetone", 0.1049e-4), ("benzene", 0.0932e-4),
    ("toluene", 0.0849e-4)])
def test_vapors_in_air_at_25_c(vapor, measured):
    """At 1 atm; Lugg, Anal. Chem. 40 (1968) 1072, one apparatus for all (from memory)."""
    model = ThermoProperties.from_names([vapor, "air"], "ideal", noncondensing=["air"], T_range=(270.0, 340.0))
    D = model.vapor_transport(298.15, 101325.0, [0.01, 0.99]).diffusivity[0, 1]
    assert D == pytest.approx(measured, rel=0.10)
