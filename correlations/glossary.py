"""The arguments of all correlations: one name, one meaning, one unit, one domain.

A unit is written as powers of kg, m, s, K, mol, N, Pa, J, W, C, separated by spaces, a minus sign in the exponent
('kg m-3'); '-' is dimensionless. A domain of None marks an argument that is not a plain number.
"""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .validity import Array, Mask


@dataclass(frozen=True)
class Domain:
    """Interval an argument must lie in; `open_low`, `open_high`: the bound itself is excluded."""

    low: float
    high: float
    open_low: bool
    open_high: bool
    words: str

    def contains(self, value: Array) -> Mask:
        """True where `value` is inside; NaN is not."""
        above = value > self.low if self.open_low else value >= self.low
        below = value < self.high if self.open_high else value <= self.high
        return np.asarray(above & below)


POSITIVE = Domain(0.0, np.inf, True, True, "a finite number above zero")
NOT_NEGATIVE = Domain(0.0, np.inf, False, True, "a finite number not below zero")
FINITE = Domain(-np.inf, np.inf, True, True, "a finite number")
FRACTION = Domain(0.0, 1.0, False, False, "a number from 0 to 1")
BELOW_ONE = Domain(0.0, 1.0, False, True, "a number from 0 to below 1")
INSIDE = Domain(0.0, 1.0, True, True, "a number between 0 and 1")
ABOVE_ZERO_TO_ONE = Domain(0.0, 1.0, True, False, "a number above 0, at most 1")
ANGLE = Domain(0.0, np.pi / 2, True, True, "an angle between 0 and pi/2")


@dataclass(frozen=True)
class Quantity:
    """An argument: what it is, its unit, where it may lie."""

    meaning: str
    unit: str
    domain: Domain | None = POSITIVE
    diagonal_ignored: bool = False
    """A matrix over pairs on the last two axes, whose diagonal may hold anything: it is set to one."""


_Q = Quantity

GLOSSARY: dict[str, Quantity] = {
    # state and composition
    "temperature": _Q("temperature", "K"),
    "pressure": _Q("pressure", "Pa"),
    "mole_fraction": _Q("mole fractions, components on the last axis, sum 1", "-", FRACTION),
    "mole_fraction_1": _Q("mole fraction of component 1 of a binary", "-", FRACTION),
    "density": _Q("mass density of the phase", "kg m-3"),
    "heat_capacity": _Q("heat capacity of the phase at constant pressure", "J kg-1 K-1"),
    "conductivity": _Q("thermal conductivity of the phase", "W m-1 K-1"),
    "diffusivity": _Q("diffusivity in the phase the coefficient belongs to (a pair's, for pair coefficients)",
                      "m2 s-1"),
    "vapor_density": _Q("mass density of the vapour", "kg m-3"),
    "liquid_density": _Q("mass density of the liquid", "kg m-3"),
    "vapor_viscosity": _Q("viscosity of the vapour", "Pa s"),
    "liquid_viscosity": _Q("viscosity of the liquid", "Pa s"),
    "water_viscosity": _Q("viscosity of water at 293 K", "Pa s"),
    "water_density": _Q("density of water at 293 K", "kg m-3"),
    "water_surface_tension": _Q("surface tension of water at 293 K", "N m-1"),
    "surface_tension": _Q("surface tension", "N m-1"),
    "vapor_diffusivity": _Q("diffusivity in the vapour", "m2 s-1"),
    "liquid_diffusivity": _Q("diffusivity in the liquid", "m2 s-1"),
    "vapor_molar_density": _Q("molar density of the vapour", "mol m-3"),
    "liquid_molar_density": _Q("molar density of the liquid", "mol m-3"),
    # pure components and pairs
    "molar_mass_a": _Q("molar mass of species A", "kg mol-1"),
    "molar_mass_b": _Q("molar mass of species B", "kg mol-1"),
    "diffusion_volume_a": _Q("diffusion volume of species A", "m3 mol-1"),
    "diffusion_volume_b": _Q("diffusion volume of species B", "m3 mol-1"),
    "collision_diameter_a": _Q("Lennard-Jones collision diameter of species A", "m"),
    "collision_diameter_b": _Q("Lennard-Jones collision diameter of species B", "m"),
    "energy_parameter_a": _Q("Lennard-Jones energy over Boltzmann's constant of species A", "K"),
    "energy_parameter_b": _Q("Lennard-Jones energy over Boltzmann's constant of species B", "K"),
    "reduced_temperature": _Q("temperature over the energy parameter of the pair", "-"),
    "dipole_moment_a": _Q("dipole moment of species A", "C m", NOT_NEGATIVE),
    "dipole_moment_b": _Q("dipole moment of species B", "C m", NOT_NEGATIVE),
    "boiling_temperature": _Q("normal boiling temperature", "K"),
    "boiling_temperature_a": _Q("normal boiling temperature of species A", "K"),
    "boiling_temperature_b": _Q("normal boiling temperature of species B", "K"),
    "boiling_volume": _Q("molar volume of the liquid at its normal boiling point", "m3 mol-1"),
    "boiling_volume_a": _Q("molar volume of liquid A at its normal boiling point", "m3 mol-1"),
    "boiling_volume_b": _Q("molar volume of liquid B at its normal boiling point", "m3 mol-1"),
    "critical_volume": _Q("critical molar volume", "m3 mol-1"),
    "solute_volume": _Q("molar volume of the solute at its normal boiling point", "m3 mol-1"),
    "solvent_volume": _Q("molar volume of the solvent at its normal boiling point", "m3 mol-1"),
    "solute_surface_tension": _Q("surface tension of the solute at its normal boiling point", "N m-1"),
    "solvent_surface_tension": _Q("surface tension of the solvent at its normal boiling point", "N m-1"),
    "solute_parachor": _Q("parachor of the solute, V sigma^(1/4)", "m3 mol-1 N0.25 m-0.25"),
    "solvent_parachor": _Q("parachor of the solvent, V sigma^(1/4)", "m3 mol-1 N0.25 m-0.25"),
    "solvent_viscosity": _Q("viscosity of the solvent", "Pa s"),
    "solvent_molar_mass": _Q("molar mass of the solvent", "kg mol-1"),
    "association_factor": _Q("association factor of the solvent (water 2.6, methanol 1.9, ethanol 1.5, others 1)", "-"),
    "mixture_viscosity": _Q("viscosity of the mixture", "Pa s"),
    "component_viscosity": _Q("viscosity of each pure solvent, components last", "Pa s"),
    "component_molar_mass": _Q("molar mass of each solvent, components last", "kg mol-1"),
    "component_association_factor": _Q("association factor of each solvent, components last", "-"),
    "component_diffusivity": _Q("diffusivity of the solute infinitely dilute in each solvent, components last",
                                "m2 s-1"),
    "pair_diffusivity": _Q("pair diffusivities (..., n, n), symmetric, diagonal ignored", "m2 s-1",
                           diagonal_ignored=True),
    "dilute_diffusivity": _Q("[..., i, j]: i infinitely dilute in j (..., n, n), diagonal ignored", "m2 s-1",
                             diagonal_ignored=True),
    "limit_diffusivity": _Q("[..., i, j, k]: pair i-j as k becomes pure (..., n, n, n), symmetric in i and j",
                            "m2 s-1"),
    "dilute_1_in_2": _Q("diffusivity of 1 infinitely dilute in 2", "m2 s-1"),
    "dilute_2_in_1": _Q("diffusivity of 2 infinitely dilute in 1", "m2 s-1"),
    "tracer_1": _Q("tracer diffusivity of 1 at the composition meant", "m2 s-1"),
    "tracer_2": _Q("tracer diffusivity of 2 at the composition meant", "m2 s-1"),
    "viscosity_1": _Q("viscosity of pure 1", "Pa s"),
    "viscosity_2": _Q("viscosity of pure 2", "Pa s"),
    "atoms": _Q("count of each element", "mapping", None),
    "increments": _Q("keyword: count of each structural increment of the method", "mapping", None),
    "rings": _Q("count of rings", "integer", None),
    "double_bonds": _Q("count of double bonds", "integer", None),
    "triple_bonds": _Q("count of triple bonds", "integer", None),
    # packings
    "vapor_velocity": _Q("superficial velocity of the vapour", "m s-1"),
    "liquid_velocity": _Q("superficial velocity of the liquid", "m s-1"),
    "flow_ratio": _Q("liquid over vapour mass flow, L/V", "-"),
    "flow_parameter": _Q("(L/V) (rho_V/rho_L)^(1/2), mass flows", "-"),
    "specific_area": _Q("geometric area of the packing per bed volume", "m-1"),
    "void_fraction": _Q("void fraction of the packing", "-", INSIDE),
    "nominal_size": _Q("nominal size of a piece", "m"),
    "sphere_diameter": _Q("diameter of the sphere of the same surface as a piece", "m"),
    "critical_surface_tension": _Q("critical surface tension of the packing material", "N m-1"),
    "wetted_area": _Q("wetted area per bed volume", "m-1"),
    "bed_height": _Q("height of one bed", "m"),
    "column_diameter": _Q("column diameter (infinite: no wall correction)", "m",
                          Domain(0.0, np.inf, True, False, "a number above zero")),
    "packing_factor": _Q("packing factor of the flooding and pressure-drop charts", "m-1"),
    "dry_packing_factor": _Q("packing factor from the dry pressure drop", "m-1"),
    "pressure_gradient": _Q("pressure drop per bed height", "Pa m-1", NOT_NEGATIVE),
    "flood_pressure_gradient": _Q("pressure drop per bed height at flooding", "Pa m-1"),
    "dry_pressure_gradient": _Q("dry pressure drop per bed height", "Pa m-1", NOT_NEGATIVE),
    "liquid_holdup": _Q("liquid volume per bed volume", "-", BELOW_ONE),
    "loading_holdup": _Q("liquid holdup up to the loading point", "-", BELOW_ONE),
    "preloading_holdup": _Q("liquid holdup at negligible gas flow", "-", BELOW_ONE),
    "flood_holdup": _Q("liquid holdup at flooding", "-", BELOW_ONE),
    "flood_fraction": _Q("vapour velocity over flooding velocity, same L/V", "-", FRACTION),
    "wetting_rate": _Q("minimum liquid flow per perimeter of packing", "m2 s-1"),
    "holdup_constant": _Q("C_h of Billet and Schultes", "-"),
    "loading_constant": _Q("C_S of Billet and Schultes", "-"),
    "flooding_constant": _Q("C_Fl of Billet and Schultes", "-"),
    "friction_constant": _Q("C_P of Billet and Schultes", "-"),
    "liquid_constant": _Q("C_L of Billet and Schultes", "-"),
    "vapor_constant": _Q("C_V of Billet and Schultes", "-"),
    "laminar_friction": _Q("C1 of Stichlmair, Bravo and Fair", "-", NOT_NEGATIVE),
    "transition_friction": _Q("C2 of Stichlmair, Bravo and Fair", "-", NOT_NEGATIVE),
    "turbulent_friction": _Q("C3 of Stichlmair, Bravo and Fair", "-", NOT_NEGATIVE),
    "loading_factor": _Q("factor of the squared pressure drop in the holdup above loading", "-", NOT_NEGATIVE),
    "corrugation_base": _Q("base of the triangular channel, B", "m"),
    "corrugation_height": _Q("crimp height, h", "m"),
    "corrugation_side": _Q("side of the corrugation, S", "m"),
    "corrugation_angle": _Q("angle of the channels to the horizontal", "rad", ANGLE),
    "element_height": _Q("height of one packing element", "m"),
    "holdup_factor": _Q("correction of holdup for partial wetting, F_t", "-"),
    "surface_factor": _Q("surface enhancement factor of the sheet, F_SE", "-"),
    "renewal_factor": _Q("surface renewal factor, C_E", "-"),
    "wet_constant": _Q("constant of the wet-to-dry correction", "-"),
    "marangoni_number": _Q("Marangoni number of the film", "-", FINITE),
    # trays
    "active_velocity": _Q("vapour velocity on the active (bubbling) area", "m s-1"),
    "net_velocity": _Q("vapour velocity on the net area (tower less one downcomer)", "m s-1"),
    "hole_velocity": _Q("vapour velocity in the holes", "m s-1"),
    "weir_load": _Q("liquid volume flow per length of weir", "m2 s-1"),
    "weir_height": _Q("height of the outlet weir", "m", NOT_NEGATIVE),
    "weir_length": _Q("length of the outlet weir", "m"),
    "weir_factor": _Q("factor of the crest for the constriction by the wall, F_w", "-"),
    "weir_crest": _Q("height of liquid over the weir", "m", NOT_NEGATIVE),
    "active_area": _Q("active (bubbling) area of the tray", "m2"),
    "weir_per_area": _Q("weir length over bubbling area", "m-1"),
    "path_length": _Q("length of the liquid's path over the active area", "m"),
    "liquid_flow": _Q("liquid volume flow", "m3 s-1"),
    "clear_liquid_height": _Q("height of clear liquid on the tray", "m"),
    "froth_height": _Q("height of the froth", "m"),
    "froth_density": _Q("relative froth density, clear liquid height over froth height", "-", INSIDE),
    "liquid_residence_time": _Q("mean residence time of the liquid on the tray", "s"),
    "hole_area_fraction": _Q("hole area over active area", "-", INSIDE),
    "hole_diameter": _Q("diameter of the holes", "m"),
    "pitch": _Q("pitch of the holes, triangular", "m"),
    "deck_thickness": _Q("thickness of the deck", "m"),
    "friction_factor": _Q("Fanning friction factor of the vapour in the hole", "-"),
    "hole_to_net_area": _Q("hole area over net area", "-", INSIDE),
    "orifice_coefficient": _Q("orifice coefficient of the holes", "-"),
    "tray_spacing": _Q("tray spacing", "m"),
    "foaming_factor": _Q("derating factor for foaming, 1 for none", "-", ABOVE_ZERO_TO_ONE),
    "weeping_fraction": _Q("share of the liquid that weeps", "-", BELOW_ONE),
    "weir_constant": _Q("constant of the weir formula, K", "m-0.3333333333333333 s0.6666666666666666"),
    "dry_head": _Q("dry pressure drop as height of clear liquid", "m", NOT_NEGATIVE),
    "residual_head": _Q("residual pressure drop as height of clear liquid", "m", NOT_NEGATIVE),
    "entrainment_ratio": _Q("entrained liquid over vapour, mass flows", "-", NOT_NEGATIVE),
    "total_head": _Q("pressure drop of the tray as height of clear liquid", "m", NOT_NEGATIVE),
    "gradient_head": _Q("liquid gradient over the tray, height of clear liquid", "m", NOT_NEGATIVE),
    "underflow_head": _Q("head loss under the downcomer apron", "m", NOT_NEGATIVE),
    "apron_area": _Q("area under the downcomer apron", "m2"),
    "downcomer_area": _Q("cross-section of the downcomer", "m2"),
    "backup": _Q("height of clear liquid in the downcomer", "m", NOT_NEGATIVE),
    "downcomer_froth_density": _Q("relative froth density in the downcomer", "-", ABOVE_ZERO_TO_ONE),
    "closed_loss": _Q("loss constant of the closed valve, h = K u_h^2 rho_V/rho_L", "s2 m-1"),
    "open_loss": _Q("loss constant of the open valve, h = K u_h^2 rho_V/rho_L", "s2 m-1"),
    "valve_thickness": _Q("thickness of the valve disc", "m"),
    "valve_density": _Q("density of the valve material", "kg m-3"),
    "sinnott_constant": _Q("K2 of the weep-point chart", "kg0.5 m-0.5 s-1"),
    "stripping_factor": _Q("lambda = m V/L, molar flows", "-"),
    "equilibrium_slope": _Q("m = dy*/dx", "-"),
    "vapor_units": _Q("number of transfer units of the vapour film", "-"),
    "liquid_units": _Q("number of transfer units of the liquid film", "-"),
    "overall_units": _Q("number of overall vapour-side transfer units", "-"),
    "point_efficiency": _Q("point efficiency", "-"),
    "dry_efficiency": _Q("Murphree efficiency without entrainment", "-"),
    "tray_efficiency": _Q("Murphree tray efficiency", "-"),
    "peclet_number": _Q("Peclet number of the liquid, Z^2/(D_E t_L)", "-", NOT_NEGATIVE),
    "leading_constant": _Q("leading constant of the correlation", "-"),
    "pools": _Q("number of liquid pools in series, any real number from 1", "-",
                Domain(1.0, np.inf, False, True, "a finite number from 1")),
    "eddy_diffusivity": _Q("eddy diffusivity of the liquid along the flow path", "m2 s-1"),
    "entrainment": _Q("entrained liquid over entrained plus liquid flow", "-", BELOW_ONE),
    "liquid_molar_mass": _Q("mean molar mass of the liquid", "kg mol-1"),
    "vapor_molar_mass": _Q("mean molar mass of the vapour", "kg mol-1"),
    "molar_flow_ratio": _Q("vapour over liquid molar flow", "-"),
    "relative_volatility": _Q("relative volatility of the key components", "-"),
    "equilibrium_ratio": _Q("K value of the solute", "-"),
    # coefficients
    "coefficient": _Q("mass-transfer coefficient of the film, same basis as the heat-transfer coefficient", "m s-1"),
}
