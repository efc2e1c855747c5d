"""Typical values of every argument of the correlations, for sweeps over all of them."""
from __future__ import annotations

from collections.abc import Mapping

import numpy as np

INTERVALS: Mapping[str, tuple[float, float]] = {
    "temperature": (280.0, 420.0), "pressure": (5e4, 3e5), "mole_fraction_1": (0.05, 0.95), "density": (0.8, 1000.0),
    "heat_capacity": (1000.0, 4200.0), "conductivity": (0.02, 0.6),
    "diffusivity": (1e-9, 1e-5), "vapor_density": (0.8, 8.0), "liquid_density": (600.0, 1100.0),
    "vapor_viscosity": (8e-6, 2e-5), "liquid_viscosity": (2e-4, 2e-3), "water_viscosity": (9e-4, 1.1e-3),
    "water_density": (990.0, 1000.0), "water_surface_tension": (0.070, 0.074), "surface_tension": (0.012, 0.07),
    "vapor_diffusivity": (3e-6, 2e-5), "liquid_diffusivity": (1e-9, 5e-9), "vapor_molar_density": (30.0, 60.0),
    "liquid_molar_density": (5e3, 5e4), "molar_mass_a": (0.002, 0.2), "molar_mass_b": (0.002, 0.2),
    "diffusion_volume_a": (6e-6, 1e-4), "diffusion_volume_b": (6e-6, 1e-4), "collision_diameter_a": (2.6e-10, 6e-10),
    "collision_diameter_b": (2.6e-10, 6e-10), "energy_parameter_a": (50.0, 600.0), "energy_parameter_b": (50.0, 600.0),
    "reduced_temperature": (0.4, 50.0), "dipole_moment_a": (0.0, 6e-30), "dipole_moment_b": (0.0, 6e-30),
    "boiling_temperature": (200.0, 450.0), "boiling_temperature_a": (200.0, 450.0),
    "boiling_temperature_b": (200.0, 450.0), "boiling_volume": (2e-5, 2e-4), "boiling_volume_a": (2e-5, 2e-4),
    "boiling_volume_b": (2e-5, 2e-4), "critical_volume": (8e-5, 6e-4), "solute_volume": (2e-5, 2e-4),
    "solvent_volume": (2e-5, 2e-4), "solute_surface_tension": (0.012, 0.06), "solvent_surface_tension": (0.012, 0.06),
    "solute_parachor": (9e-6, 6e-5), "solvent_parachor": (9e-6, 6e-5), "solvent_viscosity": (2e-4, 3e-3),
    "solvent_molar_mass": (0.018, 0.2), "association_factor": (1.0, 2.6), "mixture_viscosity": (2e-4, 3e-3),
    "dilute_1_in_2": (1e-9, 5e-9), "dilute_2_in_1": (1e-9, 5e-9), "tracer_1": (1e-9, 5e-9), "tracer_2": (1e-9, 5e-9),
    "viscosity_1": (2e-4, 3e-3), "viscosity_2": (2e-4, 3e-3), "vapor_velocity": (0.3, 0.7),
    "liquid_velocity": (0.002, 0.01), "flow_ratio": (0.5, 5.0), "flow_parameter": (0.02, 0.5),
    "specific_area": (130.0, 350.0), "void_fraction": (0.85, 0.97), "nominal_size": (0.025, 0.05),
    "sphere_diameter": (0.02, 0.05), "critical_surface_tension": (0.033, 0.075), "wetted_area": (50.0, 250.0),
    "bed_height": (1.0, 5.0), "column_diameter": (0.9, 2.0), "packing_factor": (40.0, 190.0),
    "dry_packing_factor": (40.0, 190.0), "pressure_gradient": (50.0, 600.0), "flood_pressure_gradient": (900.0, 1200.0),
    "dry_pressure_gradient": (50.0, 300.0), "liquid_holdup": (0.03, 0.12), "loading_holdup": (0.03, 0.12),
    "preloading_holdup": (0.03, 0.12), "flood_holdup": (0.13, 0.2), "flood_fraction": (0.35, 0.85),
    "wetting_rate": (2e-5, 4e-5), "holdup_constant": (0.4, 1.3), "loading_constant": (2.5, 3.5),
    "flooding_constant": (1.5, 2.5), "friction_constant": (0.3, 1.3), "liquid_constant": (0.8, 1.6),
    "vapor_constant": (0.3, 0.45), "laminar_friction": (0.1, 5.0), "transition_friction": (1.0, 4.0),
    "turbulent_friction": (0.4, 2.0), "loading_factor": (20.0, 36.0), "corrugation_base": (0.02, 0.03),
    "corrugation_height": (0.010, 0.014), "corrugation_side": (0.012, 0.018), "corrugation_angle": (0.6, 1.1),
    "element_height": (0.18, 0.25), "holdup_factor": (0.8, 1.3), "surface_factor": (0.3, 0.42),
    "renewal_factor": (0.8, 1.0), "wet_constant": (2.5, 3.5), "marangoni_number": (-1e4, 1e4),
    "active_velocity": (0.4, 1.2), "net_velocity": (0.4, 1.2), "hole_velocity": (3.0, 12.0),
    "weir_load": (0.002, 0.012), "weir_height": (0.03, 0.08), "weir_length": (0.5, 0.85), "weir_factor": (1.0, 1.1),
    "weir_crest": (0.01, 0.04),
    "active_area": (0.4, 2.0), "weir_per_area": (0.8, 2.0), "path_length": (0.4, 1.2), "liquid_flow": (5e-4, 3e-3),
    "clear_liquid_height": (0.02, 0.06), "froth_height": (0.15, 0.4), "froth_density": (0.2, 0.6),
    "liquid_residence_time": (1.0, 8.0), "hole_area_fraction": (0.07, 0.15), "hole_diameter": (0.004, 0.0125),
    "pitch": (0.0126, 0.04), "deck_thickness": (0.001, 0.0039), "friction_factor": (0.005, 0.01),
    "hole_to_net_area": (0.05, 0.13), "orifice_coefficient": (0.6, 0.85), "tray_spacing": (0.4, 0.75),
    "foaming_factor": (0.6, 1.0), "weeping_fraction": (0.0, 0.2), "weir_constant": (0.4, 0.55),
    "dry_head": (0.01, 0.06), "residual_head": (0.001, 0.005), "total_head": (0.04, 0.12), "gradient_head": (0.0, 0.01),
    "underflow_head": (0.003, 0.02), "apron_area": (0.01, 0.05), "downcomer_area": (0.05, 0.2), "backup": (0.1, 0.3),
    "downcomer_froth_density": (0.3, 0.7), "closed_loss": (0.02, 0.08), "open_loss": (0.2, 0.3),
    "valve_thickness": (1e-3, 2e-3), "valve_density": (7500.0, 8000.0), "sinnott_constant": (28.0, 31.0),
    "stripping_factor": (0.5, 2.0), "equilibrium_slope": (0.3, 2.0), "vapor_units": (0.5, 3.0),
    "liquid_units": (1.0, 8.0), "overall_units": (0.3, 2.5), "point_efficiency": (0.4, 0.9),
    "dry_efficiency": (0.4, 1.2), "tray_efficiency": (0.4, 1.2), "peclet_number": (0.5, 60.0), "pools": (1.0, 20.0),
    "leading_constant": (2.03e4, 4e4), "eddy_diffusivity": (1e-3, 1e-2), "entrainment": (0.0, 0.2),
    "entrainment_ratio": (0.0, 0.1), "liquid_molar_mass": (0.018, 0.2), "vapor_molar_mass": (0.018, 0.2),
    "molar_flow_ratio": (0.5, 2.0), "relative_volatility": (1.1, 4.0), "equilibrium_ratio": (0.5, 100.0),
    "coefficient": (1e-4, 0.05),
}
"""Every plain numeric argument; chosen so that any combination is physical (below flooding, vapour lighter, ...)."""

NESTED = {"mole_fraction", "pair_diffusivity", "dilute_diffusivity", "limit_diffusivity", "component_viscosity",
          "component_molar_mass", "component_association_factor", "component_diffusivity", "increments"}
"""Arguments with a component axis or that are no numbers: tested by hand."""


def plain(record) -> bool:
    """Whether all arguments of a correlation are plain numbers."""
    return not NESTED & set(record.parameters)


def sample(record, random: np.random.Generator, shape: tuple[int, ...] = ()) -> dict[str, np.ndarray]:
    """All arguments of a correlation, defaults included, drawn between their typical bounds."""
    return {name: random.uniform(*INTERVALS[name], shape) for name in record.parameters}
