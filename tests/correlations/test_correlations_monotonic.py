"""Which way a prediction goes: signs every engineer knows, over the typical ranges."""
from __future__ import annotations

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from typical_arguments import INTERVALS, sample

from correlations import NoPhysicalRootError
from correlations.record import REGISTRY

SIGNS = {
    "gas_diffusivity.fuller": {"temperature": 1, "pressure": -1, "diffusion_volume_a": -1, "molar_mass_b": -1},
    "gas_diffusivity.chapman_enskog": {"temperature": 1, "pressure": -1, "collision_diameter_a": -1,
                                       "energy_parameter_b": -1},
    "gas_diffusivity.wilke_lee": {"temperature": 1, "pressure": -1, "collision_diameter_b": -1},
    "gas_diffusivity.brokaw": {"temperature": 1, "pressure": -1},
    "gas_diffusivity.neufeld_collision_integral": {"reduced_temperature": -1},
    "liquid_diffusivity.wilke_chang": {"temperature": 1, "solvent_viscosity": -1, "solute_volume": -1},
    "liquid_diffusivity.hayduk_minhas_aqueous": {"temperature": 1},
    "liquid_diffusivity.tyn_calus": {"temperature": 1, "solvent_viscosity": -1, "solute_parachor": -1},
    "liquid_diffusivity.siddiqi_lucas_organic": {"temperature": 1, "solvent_viscosity": -1, "solute_volume": -1},
    "packing_area.onda": {"liquid_velocity": 1, "surface_tension": -1, "critical_surface_tension": 1},
    "packing_area.billet_schultes": {"liquid_velocity": 1, "flood_fraction": 1},
    "packing_area.tsai": {"liquid_velocity": 1, "surface_tension": -1},
    "packing_coefficients.onda_vapor": {"vapor_velocity": 1, "diffusivity": 1},
    "packing_coefficients.onda_liquid": {"liquid_velocity": 1, "diffusivity": 1, "liquid_viscosity": -1},
    "packing_coefficients.billet_schultes_vapor": {"vapor_velocity": 1, "diffusivity": 1, "liquid_holdup": 1},
    "packing_coefficients.billet_schultes_liquid": {"liquid_velocity": 1, "diffusivity": 1, "liquid_holdup": -1},
    "packing_coefficients.rocha_bravo_fair_vapor": {"vapor_velocity": 1, "diffusivity": 1},
    "packing_coefficients.delft_vapor": {"vapor_velocity": 1, "diffusivity": 1},
    "packing_holdup.billet_schultes": {"liquid_velocity": 1, "liquid_viscosity": 1, "specific_area": 1},
    "packing_holdup.stichlmair_preloading": {"liquid_velocity": 1, "specific_area": 1, "void_fraction": -1},
    "packing_pressure_drop.billet_schultes_dry": {"vapor_velocity": 1, "void_fraction": -1, "friction_constant": 1},
    "packing_pressure_drop.billet_schultes_wet_1999": {"liquid_velocity": 1, "liquid_holdup": 1},
    "packing_pressure_drop.stichlmair": {"vapor_velocity": 1, "liquid_velocity": 1, "specific_area": 1},
    "packing_pressure_drop.rocha_bravo_fair": {"vapor_velocity": 1, "liquid_velocity": 1, "liquid_viscosity": 1},
    "packing_pressure_drop.robbins": {"vapor_velocity": 1, "liquid_velocity": 1, "dry_packing_factor": 1},
    "packing_limits.billet_schultes_loading": {"flow_ratio": -1, "loading_constant": 1},
    "packing_limits.billet_schultes_flooding": {"flow_ratio": -1, "flooding_constant": 1, "vapor_density": -1},
    "packing_limits.stichlmair_flooding": {"flow_ratio": -1, "turbulent_friction": -1},
    "packing_limits.generalized_flooding": {"flow_ratio": -1, "packing_factor": -1, "liquid_viscosity": -1},
    "packing_limits.kister_gill": {"packing_factor": 1},
    "tray_hydraulics.bennett_clear_liquid": {"weir_height": 1, "weir_load": 1, "active_velocity": -1},
    "tray_hydraulics.colwell_clear_liquid": {"weir_height": 1, "weir_load": 1, "active_velocity": -1},
    "tray_hydraulics.sieve_dry_head": {"hole_velocity": 1, "orifice_coefficient": -1},
    "tray_hydraulics.treybal_effective_weir": {"liquid_flow": -1},
    "tray_limits.fair_flooding": {"tray_spacing": 1, "surface_tension": 1, "flow_parameter": -1, "vapor_density": -1},
    "tray_limits.kister_haas_flooding": {"tray_spacing": 1, "weir_load": -1, "surface_tension": 1},
    "tray_limits.hunt_entrainment": {"net_velocity": 1, "tray_spacing": -1, "clear_liquid_height": 1},
    "tray_limits.lockett_banik_weeping": {"hole_velocity": -1, "clear_liquid_height": 1},
    "tray_transfer.aiche_vapor_units": {"weir_height": 1, "active_velocity": -1, "diffusivity": 1},
    "tray_transfer.chan_fair_vapor": {"diffusivity": 1, "clear_liquid_height": -1},
    "mixing.gerster": {"point_efficiency": 1, "stripping_factor": 1, "peclet_number": 1},
    "mixing.pools_in_series": {"point_efficiency": 1, "stripping_factor": 1, "pools": 1},
    "mixing.colburn_entrainment": {"dry_efficiency": 1, "entrainment": -1},
    "heat_transfer.chilton_colburn": {"coefficient": 1, "conductivity": 1, "diffusivity": -1},
    "overall.oconnell": {"relative_volatility": -1, "liquid_viscosity": -1},
}
CASES = [(name, argument, sign) for name, signs in SIGNS.items() for argument, sign in signs.items()]
HOLDUP_AND_DROP = {"packing_pressure_drop.stichlmair": 1, "packing_pressure_drop.rocha_bravo_fair": 1}
"""Results of several fields: which one is meant, if not the first."""


@pytest.mark.parametrize("name, argument, sign", CASES, ids=lambda v: str(v))
@settings(max_examples=8, deadline=None, derandomize=True)
@given(seed=st.integers(0, 10 ** 6), at=st.floats(0.0, 0.9), step=st.floats(0.01, 0.1))
def test_sign(name, argument, sign, seed, at, step):
    function = REGISTRY[name]
    arguments = sample(function.record, np.random.default_rng(seed))
    low, high = INTERVALS[argument]
    arguments[argument] = low + (high - low) * np.array([at, at + step])
    try:
        value = function.silent(**arguments)
    except NoPhysicalRootError:
        assume(False)
    if isinstance(value, tuple):
        value = value[HOLDUP_AND_DROP.get(name, 0)]
    assert sign * (value[1] - value[0]) >= 0
