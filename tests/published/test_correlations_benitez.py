"""Benitez, Principles and Modern Applications of Mass Transfer Operations, 2nd ed. (2009).

Inputs and results read in print, except where a row says 'from memory'.
"""
from __future__ import annotations

import math

import pytest
from correlation_rows import Row

from correlations import (
    gas_diffusivity,
    liquid_diffusivity,
    mixture_diffusivity,
    overall,
    packing_coefficients,
    packing_holdup,
    packing_limits,
    packing_pressure_drop,
    tray_hydraulics,
    tray_limits,
    tray_transfer,
)

# Example 4.4 (p. 237): ethanol from carbon dioxide into water, 50 mm metal grid ring, D = 0.738 m
RING = dict(specific_area=92.3, void_fraction=0.977)
LIQUID = dict(liquid_velocity=0.00193, liquid_density=986.0, liquid_viscosity=6.31e-4)
GAS = dict(vapor_velocity=2.68, vapor_density=1.923, vapor_viscosity=1.45e-5)
KMOL_PER_M3 = 110e3 / (8314 * 303)
SCHMIDT = 0.88708

# Examples 4.6 to 4.9 (p. 255 to 264): a sieve tray for the same service
TRAY = dict(vapor_density=1.923, liquid_density=986.0)
ACTIVE_VELOCITY = 1.145 / 0.614

ROWS = [
    Row(gas_diffusivity.wilke_lee,
        dict(temperature=303.0, pressure=110e3, molar_mass_a=0.04607, molar_mass_b=0.04401,
             collision_diameter_a=4.53e-10, collision_diameter_b=3.94e-10, energy_parameter_a=362.6,
             energy_parameter_b=195.2), 0.085e-4, 6e-3, "Example 4.4: two digits"),
    Row(gas_diffusivity.neufeld_collision_integral, dict(reduced_temperature=1.2830), 1.282, 4e-4, "Example 1.6"),
    Row(gas_diffusivity.wilke_lee,
        dict(temperature=273.0, pressure=1e5, molar_mass_a=0.076, molar_mass_b=0.029, collision_diameter_a=4.483e-10,
             collision_diameter_b=3.620e-10, energy_parameter_a=467.0, energy_parameter_b=97.0), 0.0894e-4, 0.085,
        "Example 1.6, carbon disulphide in air, measured; the scatter of the method is 8 to 9 %", measured=True),
    Row(liquid_diffusivity.wilke_chang,
        dict(temperature=288.0, solvent_viscosity=1.153e-3, solvent_molar_mass=0.01802, solute_volume=60.887e-6,
             association_factor=2.26), 1.0e-9, 0.05, "Example 1.8, ethanol in water, measured", measured=True),
    Row(liquid_diffusivity.hayduk_minhas_aqueous,
        dict(temperature=303.0, solvent_viscosity=0.631e-3, solute_volume=60.887e-6), 1.91e-9, 2.6e-3, "Example 4.4"),
    Row(liquid_diffusivity.hayduk_minhas,
        dict(temperature=313.0, solvent_viscosity=0.264e-3, solute_volume=2 * 62.377e-6, solvent_volume=76.977e-6,
             solute_surface_tension=26.1849e-3, solvent_surface_tension=19.9588e-3), 4.04e-9, 0.06,
        "Example 1.9, acetic acid (dimer) in acetone, measured; scatter of the method 14 %", measured=True),
    Row(liquid_diffusivity.perkins_geankoplis,
        dict(mole_fraction=[0.793, 0.207], component_diffusivity=[1.3166e-9, 9.953e-10],
             component_viscosity=[0.894e-3, 1.043e-3], mixture_viscosity=2.35e-3), 5.71e-10, 0.04,
        "Example 1.13, acetic acid in aqueous ethanol, measured", measured=True),
    Row(mixture_diffusivity.vignes,
        dict(mole_fraction_1=0.7808, dilute_1_in_2=2.75e-9, dilute_2_in_1=4.15e-9), 3.35e-9 / 0.871, 0.02,
        "Example 1.10, acetone and benzene: measured Fick diffusivity over the thermodynamic factor given",
        measured=True),
    Row(packing_holdup.billet_schultes, dict(specific_area=92.3, holdup_constant=0.876, **LIQUID), 0.017, 2.9e-2,
        "Example 4.4: two digits"),
    Row(packing_holdup.billet_schultes_hydraulic_area, dict(specific_area=92.3, holdup_constant=0.876, **LIQUID), 58.8,
        1e-2, "Example 4.4: inputs rounded to three digits on the way"),
    Row(packing_coefficients.billet_schultes_liquid,
        dict(diffusivity=1.91e-9, liquid_velocity=0.00193, liquid_holdup=0.017, liquid_constant=1.168, **RING),
        0.00733 / 58.8, 2e-2, "Example 4.4: k_L a over a; holdup rounded to two digits"),
    Row(packing_coefficients.billet_schultes_vapor,
        dict(diffusivity=0.085e-4, liquid_holdup=0.017, vapor_constant=0.408, **GAS, **RING),
        0.191 / 58.8 / KMOL_PER_M3 * SCHMIDT ** (-1 / 3), 1e-2,
        "Example 4.4: k_y a over a and c; the book has Sc^(2/3) where the paper has Sc^(1/3), taken back here"),
    Row(packing_limits.kister_gill, dict(packing_factor=16 / 0.3048), 93.9 * 16 ** 0.7, 2e-3,
        "p. 231: the constant of the metric form, 93.9"),
    Row(tray_limits.fair_flooding,
        dict(flow_parameter=0.016, tray_spacing=0.5, surface_tension=0.070, hole_area_fraction=0.1008,
             foaming_factor=0.9, **TRAY), 1.145 / (0.8 * 0.9 * 0.615 / 0.8), 2e-3,
        "Example 4.6: 80 % of flooding on the net area (0.9 of the tower), active area 0.615 m2 (0.8 of the tower)"),
    Row(tray_hydraulics.bennett_froth_density, dict(active_velocity=ACTIVE_VELOCITY, **TRAY), 0.274, 3e-3,
        "Example 4.7"),
    Row(tray_hydraulics.bennett_clear_liquid,
        dict(weir_height=0.05, weir_load=8.15e-4 / 0.719, active_velocity=ACTIVE_VELOCITY, **TRAY), 0.0173, 8e-3,
        "Example 4.7; the book's K_s is rounded to two digits"),
    Row(tray_hydraulics.bennett_two_phase_height,
        dict(clear_liquid_height=0.0173, froth_density=0.274, hole_diameter=0.005, active_velocity=ACTIVE_VELOCITY,
             hole_area_fraction=0.101, **TRAY), 0.391, 1.3e-2, "Example 4.8; the book's K_s is rounded to two digits"),
    Row(tray_limits.bennett_entrainment,
        dict(froth_height=0.391, tray_spacing=0.5, clear_liquid_height=0.0173, hole_diameter=0.005, **TRAY), 0.05,
        2e-2, "Example 4.8: one digit"),
    Row(tray_transfer.bennett_overall_units,
        dict(vapor_density=1.923, vapor_viscosity=1.45e-5, hole_velocity=18.48, clear_liquid_height=0.0173,
             froth_density=0.274, hole_diameter=0.005, hole_area_fraction=0.101, vapor_diffusivity=0.085e-4,
             liquid_diffusivity=1.91e-9, equilibrium_slope=0.57, vapor_molar_density=1.923 / 0.04404,
             liquid_molar_density=986 / 0.01863), -math.log(1 - 0.809), 2e-3,
        "Example 4.9: point efficiency 0.809 (from memory)"),
]


@pytest.mark.parametrize("row", ROWS, ids=str)
def test_printed(row):
    row.check()


def test_pressure_drop_of_the_design():
    """Example 4.4: D = 0.738 m was found for 300 Pa/m."""
    dry = packing_pressure_drop.billet_schultes_dry(friction_constant=0.421, column_diameter=0.738, **GAS, **RING)
    wet = packing_pressure_drop.billet_schultes_wet_1993(dry, 0.017, **LIQUID, **RING)
    assert wet == pytest.approx(300.0, rel=1e-2)


def test_real_trays():
    """Example 6.7 (p. 358): 20 equilibrium trays need 34 real ones."""
    E = overall.oconnell_polynomial(0.591176 / 0.247354, 0.247354e-3)
    assert math.ceil(20 / E) == 34


def test_hole_froude_number():
    """Example 4.8: Fr = 1.98 at 18.48 m/s, above 0.5, so no weeping."""
    u = tray_limits.froude_weep_point(0.0173, **TRAY)
    assert 18.48 / u * 0.5 == pytest.approx(1.98, rel=3e-3)


COVERS = {"packing_pressure_drop.billet_schultes_dry": "test_pressure_drop_of_the_design",
          "packing_pressure_drop.billet_schultes_wet_1993": "test_pressure_drop_of_the_design",
          "overall.oconnell_polynomial": "test_real_trays",
          "tray_limits.froude_weep_point": "test_hole_froude_number"}
