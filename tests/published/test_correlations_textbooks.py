"""Single examples of several textbooks; all from memory unless a row says 'read'."""
from __future__ import annotations

import numpy as np
import pytest
from correlation_rows import Row

from correlations import gas_diffusivity, liquid_diffusivity

PARACHOR = liquid_diffusivity.PARACHOR
BUTANOL = dict(molar_mass_a=0.0741, molar_mass_b=0.029, diffusion_volume_a=91.28e-6, diffusion_volume_b=20.1e-6)
BUTANOL_NOTE = "Geankoplis, Transport Processes and Unit Operations, Example 6.2-5 (inputs read), butanol in air; " \
               "the printed values are 0.3 to 0.4 % above the formula they are computed with"

ROWS = [
    # Seader and Henley, Separation Process Principles (1998)
    Row(gas_diffusivity.fuller,
        dict(temperature=311.2, pressure=2e5, molar_mass_a=0.032, molar_mass_b=0.0781, diffusion_volume_a=16.3e-6,
             diffusion_volume_b=90.96e-6), 0.0495e-4, 1.5e-3,
        "Seader and Henley, Example 3.3, oxygen and benzene at 2 atm, which the book puts into the formula as 2 bar"),
    Row(liquid_diffusivity.wilke_chang,
        dict(temperature=293.0, solvent_viscosity=1.01e-3, solvent_molar_mass=0.018, solute_volume=107e-6,
             association_factor=2.6), 0.89e-9, 5.6e-3, "Seader and Henley, Example 3.5, aniline in water"),
    Row(liquid_diffusivity.hayduk_minhas_parachor,
        dict(temperature=298.0, solvent_viscosity=0.6e-3, solvent_volume=96e-6, solute_parachor=2 * 93.7 * PARACHOR,
             solvent_parachor=205.3 * PARACHOR), 2.15e-9, 2.4e-3,
        "Seader and Henley, Example 3.6, formic acid (dimer) in benzene"),
    # Geankoplis, Transport Processes and Unit Operations, 3rd ed. (1993)
    Row(gas_diffusivity.fuller_1966, dict(temperature=273.0, pressure=101325.0, **BUTANOL), 7.73e-6, 5e-3,
        BUTANOL_NOTE),
    Row(gas_diffusivity.fuller_1966, dict(temperature=298.9, pressure=101325.0, **BUTANOL), 9.05e-6, 5e-3,
        BUTANOL_NOTE),
    Row(gas_diffusivity.fuller_1966, dict(temperature=273.0, pressure=202650.0, **BUTANOL), 3.865e-6, 5e-3,
        BUTANOL_NOTE),
    # Bird, Stewart, Lightfoot, Transport Phenomena
    Row(liquid_diffusivity.wilke_chang,
        dict(temperature=288.0, solvent_viscosity=0.705e-3, solvent_molar_mass=0.07811, solute_volume=140e-6,
             association_factor=1.0), 1.38e-9, 3.6e-3, "Example 17.4-1, trinitrotoluene in benzene"),
    Row(gas_diffusivity.chapman_enskog,
        dict(temperature=296.1, pressure=101325.0, molar_mass_a=0.02801, molar_mass_b=0.04401,
             collision_diameter_a=3.590e-10, collision_diameter_b=3.996e-10, energy_parameter_a=110.0,
             energy_parameter_b=190.0), 0.149e-4, 3.4e-3, "Example 17.3-1, carbon monoxide and dioxide"),
]


@pytest.mark.parametrize("row", ROWS, ids=str)
def test_printed(row):
    row.check()


def test_stagnant_mixture_geankoplis():
    """Methane through argon and helium (4 : 2), D_AB 2.02e-5, D_AC 6.75e-5: printed D_Am 2.635e-5 m2/s."""
    D = np.array([[1.0, 2.02e-5, 6.75e-5], [2.02e-5, 1.0, 7e-5], [6.75e-5, 7e-5, 1.0]])
    assert gas_diffusivity.wilke_blanc([0.4, 0.4, 0.2], D)[0] == pytest.approx(2.635e-5, rel=3e-4)


COVERS = {"gas_diffusivity.wilke_blanc": "test_stagnant_mixture_geankoplis"}
