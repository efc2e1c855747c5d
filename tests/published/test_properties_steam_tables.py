"""Saturated water: values of the steam tables (IAPWS, rounded, from memory), and the general library `chemicals`."""
import numpy as np
import pytest
from chemicals.iapws import iapws95_Psat, iapws95_rhol_sat

from ratebased.properties import ThermoProperties

# t C, p kPa, latent heat kJ/kg, density kg/m3, viscosity uPa s, conductivity W/(m K), surface tension mN/m
ROWS = [(25, 3.1698, 2441.7, 997.05, 890.0, .6065, 71.97), (50, 12.352, 2381.9, 988.0, 546.8, .6406, 67.94),
        (75, 38.595, 2320.6, 974.8, 377.5, .6635, 63.57), (100, 101.42, 2256.4, 958.35, 281.6, .6775, 58.91)]


@pytest.fixture(scope="module")
def water():
    return ThermoProperties.from_names(["water"], "ideal", T_range=(280.0, 420.0))


@pytest.mark.parametrize("t, p, latent, density, viscosity, conductivity, tension", ROWS)
def test_saturated_water(water, t, p, latent, density, viscosity, conductivity, tension):
    """Pressure, density, tension to the printed rounding; viscosity 0.3, conductivity 0.4, latent heat 0.05 %."""
    T, P, x = t + 273.15, p * 1e3, [1.0]
    assert water.k_value(T, P, x, x)[0] == pytest.approx(1.0, rel=2e-4)
    released = (water.vapor_enthalpy(T, P, x) - water.liquid_enthalpy(T, P, x))[0]
    assert released / water.molar_mass[0] / 1e3 == pytest.approx(latent, rel=5e-4)
    liquid = water.liquid_transport(T, P, x)
    assert liquid.mass_density == pytest.approx(density, rel=1e-4)
    assert liquid.viscosity * 1e6 == pytest.approx(viscosity, rel=3e-3)
    assert liquid.conductivity == pytest.approx(conductivity, rel=4e-3)
    assert liquid.surface_tension * 1e3 == pytest.approx(tension, abs=0.02)


def test_saturation_against_the_reference_equation(water):
    T = np.linspace(285.0, 415.0, 14)
    ones = np.ones((14, 1))
    pressure = np.array([iapws95_Psat(float(t)) for t in T])
    density = np.array([iapws95_rhol_sat(float(t)) for t in T])
    np.testing.assert_allclose(water.k_value(T, pressure, ones, ones)[:, 0], 1.0, rtol=3e-4)
    np.testing.assert_allclose(water.liquid_transport(T, pressure, ones).mass_density, density, rtol=1e-4)
