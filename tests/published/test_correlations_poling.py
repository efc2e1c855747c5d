"""Poling, Prausnitz, O'Connell, The Properties of Gases and Liquids, 5th ed. (2001): all figures from memory."""
from __future__ import annotations

import pytest
from correlation_rows import Row

from correlations import gas_diffusivity, liquid_diffusivity, molar_volume

DEBYE = gas_diffusivity.DEBYE

ROWS = [
    Row(gas_diffusivity.fuller,
        dict(temperature=298.0, pressure=1e5, molar_mass_a=0.07653, molar_mass_b=0.02897, diffusion_volume_a=80.25e-6,
             diffusion_volume_b=19.7e-6), 0.096e-4, 5.3e-3, "Example 11-3, allyl chloride in air"),
    Row(gas_diffusivity.chapman_enskog,
        dict(temperature=590.0, pressure=1e5, molar_mass_a=0.028013, molar_mass_b=0.04401,
             collision_diameter_a=3.798e-10, collision_diameter_b=3.941e-10, energy_parameter_a=71.4,
             energy_parameter_b=195.2), 0.52e-4, 1e-2, "Example 11-1, nitrogen and carbon dioxide"),
    Row(gas_diffusivity.brokaw,
        dict(temperature=323.0, pressure=1e5, molar_mass_a=0.050488, molar_mass_b=0.064064, boiling_volume_a=50.6e-6,
             boiling_volume_b=43.8e-6, boiling_temperature_a=249.1, boiling_temperature_b=263.2,
             dipole_moment_a=1.9 * DEBYE, dipole_moment_b=1.6 * DEBYE), 0.077e-4, 0.10,
        "Example 11-2, methyl chloride and sulphur dioxide: the measured value, 9 % below the method", measured=True),
    Row(liquid_diffusivity.wilke_chang,
        dict(temperature=293.0, solvent_viscosity=1.0e-3, solvent_molar_mass=0.018, solute_volume=140.4e-6,
             association_factor=2.6), 0.77e-9, 1e-2, "ethylbenzene in water; the viscosity is printed as 1.0 cP"),
    Row(molar_volume.tyn_calus, dict(critical_volume=259e-6), 96.5e-6, 0.03, "benzene, measured", measured=True),
    Row(molar_volume.le_bas, dict(increments={"C": 6, "H": 6, "ring of 6": 1}), 96.5e-6, 0.04, "benzene, measured",
        measured=True),
    Row(molar_volume.schroeder, dict(increments={"C": 6, "H": 6, "double bond": 3, "ring": 1}), 96.5e-6, 0.04,
        "benzene, measured", measured=True),
]


@pytest.mark.parametrize("row", ROWS, ids=str)
def test_printed(row):
    row.check()


def test_diffusion_volume_of_allyl_chloride():
    """Example 11-3 prints 80.25."""
    assert gas_diffusivity.diffusion_volume({"C": 3, "H": 5, "Cl": 1}) == pytest.approx(80.25e-6)
