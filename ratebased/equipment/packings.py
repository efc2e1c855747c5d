"""Packed beds: dimensions, operation, limits, and the coefficients by a published method."""
from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any, Protocol

import numpy as np

from correlations import (
    Correlation,
    Packing,
    packing,
    packing_area,
    packing_coefficients,
    packing_holdup,
    packing_limits,
    packing_pressure_drop,
)

from ..arguments import positive_scalar
from ..errors import InputError
from .calls import Calls
from .heat import analogy
from .protocol import Array, ContactState, Hydraulics, TransferCoefficients


@dataclass(frozen=True)
class BilletConstants:
    """Constants of one packing in the method of Billet & Schultes; the ones a method needs must be given."""

    liquid: float | None = None
    vapor: float | None = None
    holdup: float | None = None
    friction: float | None = None
    flooding: float | None = None
    loading: float | None = None

    def need(self, name: str) -> float:
        """A constant, or an error that names the one that is missing."""
        value: float | None = getattr(self, name)
        if value is None:
            raise InputError(f"billet: the constant {name} of this packing is missing")
        return value


@dataclass(frozen=True)
class PackedBed:
    """A bed of packing; lengths m.

    diameter of the column; specific_area m2/m3; void_fraction. billet: constants of the packing for the methods of
    Billet & Schultes (holdup, pressure drop, flooding), where known.
    """

    diameter: float
    specific_area: float
    void_fraction: float

    def __post_init__(self) -> None:
        positive_scalar("diameter", self.diameter)
        positive_scalar("specific_area", self.specific_area)
        if not 0 < self.void_fraction < 1:
            raise InputError(f"void_fraction = {self.void_fraction}: expected a number between 0 and 1")

    @property
    def cross_section(self) -> float:
        """m2."""
        return math.pi * self.diameter**2 / 4.0

    def velocities(self, state: ContactState) -> tuple[Array, Array]:
        """Superficial velocities of vapour and liquid, m/s."""
        return state.vapor_volume_flow / self.cross_section, state.liquid_volume_flow / self.cross_section

    def height(self, state: ContactState) -> Array:
        """Height of the segments, m. Raises `InputError` where the state has none."""
        if state.height is None:
            raise InputError("a packed bed needs the height of its segments (column height_m of the profile)")
        return state.height


def billet_constants(entry: Packing) -> BilletConstants | None:
    """The constants the table has for a packing, None where it has none."""
    found = {key: entry[f"{key}_constant"] for key in ("liquid", "vapor", "holdup", "friction", "flooding", "loading")
             if f"{key}_constant" in entry.fields}
    return BilletConstants(**found) if found else None


class RandomTransferMethod(Protocol):
    """Coefficients and interfacial area of a random packing."""

    exponent: float
    """p of kappa_V ~ D^p, for the heat-transfer analogy of the vapour."""

    correlations: Mapping[str, Correlation[..., Any]]
    """The correlations used, by what for; "vapor", "liquid" and "area" carry the scatter."""

    def __call__(self, bed: RandomPacking, state: ContactState, calls: Calls) -> tuple[Array, Array, Array]:
        """(kappa_vapor, kappa_liquid) m/s of the pairs and the interfacial area, m2/m3."""
        ...


class Onda:
    """Onda, Takeuchi & Okumoto (1968): wetted area as interfacial area, both coefficients."""

    exponent = 2.0 / 3.0
    correlations: Mapping[str, Correlation[..., Any]] = {
        "vapor": packing_coefficients.onda_vapor, "liquid": packing_coefficients.onda_liquid,
        "area": packing_area.onda}

    def __call__(self, bed: RandomPacking, state: ContactState, calls: Calls) -> tuple[Array, Array, Array]:
        """(kappa_vapor, kappa_liquid, area)."""
        vapor_velocity, liquid_velocity = bed.velocities(state)
        area = calls(packing_area.onda, liquid_velocity=liquid_velocity, liquid_density=state.liquid.mass_density,
                     liquid_viscosity=state.liquid.viscosity, surface_tension=state.liquid.surface_tension,
                     specific_area=bed.specific_area, critical_surface_tension=bed.critical_surface_tension)
        return *self.coefficients(bed, state, calls, vapor_velocity, liquid_velocity, area), area

    @staticmethod
    def coefficients(bed: RandomPacking, state: ContactState, calls: Calls, vapor_velocity: Array,
                     liquid_velocity: Array, wetted_area: Array) -> tuple[Array, Array]:
        """(kappa_vapor, kappa_liquid) for a wetted area."""
        vapor = calls.pairs(
            packing_coefficients.onda_vapor, state.vapor.diffusivity, vapor_velocity=vapor_velocity,
            vapor_density=state.vapor.mass_density, vapor_viscosity=state.vapor.viscosity,
            specific_area=bed.specific_area, nominal_size=bed.nominal_size)
        liquid = calls.pairs(
            packing_coefficients.onda_liquid, state.liquid.diffusivity, liquid_velocity=liquid_velocity,
            liquid_density=state.liquid.mass_density, liquid_viscosity=state.liquid.viscosity,
            specific_area=bed.specific_area, wetted_area=wetted_area, nominal_size=bed.nominal_size)
        return vapor, liquid


class BravoFair(Onda):
    """Effective area of Bravo & Fair (1982) with the coefficients of Onda, Takeuchi & Okumoto. bed_height: m, a bed."""

    correlations = {**Onda.correlations, "area": packing_area.bravo_fair}

    def __init__(self, bed_height: float) -> None:
        self.bed_height = positive_scalar("bed_height", bed_height)

    def __call__(self, bed: RandomPacking, state: ContactState, calls: Calls) -> tuple[Array, Array, Array]:
        """(kappa_vapor, kappa_liquid, area)."""
        vapor_velocity, liquid_velocity = bed.velocities(state)
        wetted = super().__call__(bed, state, calls)[2]
        area = calls(packing_area.bravo_fair, liquid_velocity=liquid_velocity, liquid_viscosity=state.liquid.viscosity,
                     surface_tension=state.liquid.surface_tension, vapor_velocity=vapor_velocity,
                     vapor_density=state.vapor.mass_density, vapor_viscosity=state.vapor.viscosity,
                     specific_area=bed.specific_area, bed_height=self.bed_height)
        return *self.coefficients(bed, state, calls, vapor_velocity, liquid_velocity, wetted), area


class BilletSchultes:
    """Billet & Schultes (1999): area, holdup and both coefficients from the constants of the packing."""

    exponent = 2.0 / 3.0
    correlations: Mapping[str, Correlation[..., Any]] = {
        "vapor": packing_coefficients.billet_schultes_vapor, "liquid": packing_coefficients.billet_schultes_liquid,
        "area": packing_area.billet_schultes, "holdup": packing_holdup.billet_schultes}

    def __call__(self, bed: PackedBed, state: ContactState, calls: Calls) -> tuple[Array, Array, Array]:
        """(kappa_vapor, kappa_liquid, area)."""
        constants = billet_of(bed)
        vapor_velocity, liquid_velocity = bed.velocities(state)
        film = {"liquid_velocity": liquid_velocity, "liquid_density": state.liquid.mass_density,
                "liquid_viscosity": state.liquid.viscosity, "specific_area": bed.specific_area}
        holdup = calls(packing_holdup.billet_schultes, **film, holdup_constant=constants.need("holdup"))
        area = calls(packing_area.billet_schultes, **film, surface_tension=state.liquid.surface_tension,
                     void_fraction=bed.void_fraction)
        vapor = calls.pairs(
            packing_coefficients.billet_schultes_vapor, state.vapor.diffusivity, vapor_velocity=vapor_velocity,
            vapor_density=state.vapor.mass_density, vapor_viscosity=state.vapor.viscosity, liquid_holdup=holdup,
            specific_area=bed.specific_area, void_fraction=bed.void_fraction,
            vapor_constant=constants.need("vapor"))
        liquid = calls.pairs(
            packing_coefficients.billet_schultes_liquid, state.liquid.diffusivity, liquid_velocity=liquid_velocity,
            liquid_holdup=holdup, specific_area=bed.specific_area, void_fraction=bed.void_fraction,
            liquid_constant=constants.need("liquid"))
        return vapor, liquid, area


def billet_of(bed: PackedBed) -> BilletConstants:
    """The constants of a bed, or an error that says they are missing."""
    constants: BilletConstants | None = getattr(bed, "billet", None)
    if constants is None:
        raise InputError("billet: this method needs the constants of the packing (BilletConstants)")
    return constants


@dataclass(frozen=True)
class RandomPacking(PackedBed):
    """Dumped packing.

    nominal_size m; critical_surface_tension of its material, N/m (steel 0.075, ceramic 0.061,
    polyethylene 0.033); packing_factor of the generalised flooding line, 1/m, or None (then flooding is not given
    unless `billet` has the constant); method: `Onda()`, `BravoFair(bed_height)`, `BilletSchultes()`.
    """

    nominal_size: float = 0.025
    critical_surface_tension: float = 0.075
    packing_factor: float | None = None
    billet: BilletConstants | None = None
    method: RandomTransferMethod = field(default_factory=Onda)

    def __post_init__(self) -> None:
        super().__post_init__()
        positive_scalar("nominal_size", self.nominal_size)
        positive_scalar("critical_surface_tension", self.critical_surface_tension)
        if self.packing_factor is not None:
            positive_scalar("packing_factor", self.packing_factor)

    @classmethod
    def of(cls, name: str, diameter: float, **changes: Any) -> RandomPacking:
        """A packing of the table of generic packings, as "grid ring, metal, 25 mm"; `changes` override its fields.

        Raises `InputError` for a name that is not there, or a field nobody has.
        """
        entry = packing(name)
        if entry.kind != "random":
            raise InputError(f"packing = {name!r}: a structured packing, expected a random one")
        fields: dict[str, Any] = {key: entry[key] for key in (
            "specific_area", "void_fraction", "nominal_size", "critical_surface_tension")}
        if "packing_factor" in entry.fields:
            fields["packing_factor"] = entry["packing_factor"]
        return cls(diameter=diameter, **{**fields, "billet": billet_constants(entry), **changes})

    def transfer(self, state: ContactState) -> TransferCoefficients:
        """Pair coefficients on the interfacial area of each segment.

        Heat by analogy: Chilton-Colburn in the vapour, penetration in the liquid.
        """
        calls = Calls(state.V.shape)
        kappa_V, kappa_L, area = self.method(self, state, calls)
        return TransferCoefficients(
            kappa_vapor=kappa_V, kappa_liquid=kappa_L, h_vapor=analogy(kappa_V, state.vapor, self.method.exponent),
            h_liquid=analogy(kappa_L, state.liquid, 0.5), area=area * self.cross_section * self.height(state),
            basis="interfacial area", notes=calls.notes)

    @property
    def correlations(self) -> dict[str, Correlation[..., Any]]:
        """The correlations used, by what for."""
        found = dict(self.method.correlations)
        if self.billet is not None and self.billet.flooding is not None:
            found["flooding"] = packing_limits.billet_schultes_flooding
        elif self.packing_factor is not None:
            found["flooding"] = packing_limits.generalized_flooding
        if self.billet is not None and self.billet.friction is not None:
            found["pressure drop"] = packing_pressure_drop.billet_schultes_wet_1993
        return found

    def hydraulics(self, state: ContactState) -> Hydraulics:
        """Flooding by the constants of Billet & Schultes where given, else by the generalised line; holdup and pressure
        drop where the constants allow."""
        calls = Calls(state.V.shape)
        vapor_velocity, liquid_velocity = self.velocities(state)
        flooding = drop = holdup = None
        b = self.billet
        if b is not None and b.flooding is not None:
            flooding = vapor_velocity / billet_flooding(self, state, calls)
        elif self.packing_factor is not None:
            flooding = vapor_velocity / calls(
                packing_limits.generalized_flooding, flow_ratio=state.liquid_mass_flow / state.vapor_mass_flow,
                vapor_density=state.vapor.mass_density, liquid_density=state.liquid.mass_density,
                liquid_viscosity=state.liquid.viscosity, packing_factor=self.packing_factor)
        if b is not None and b.holdup is not None:
            holdup = calls(packing_holdup.billet_schultes, liquid_velocity=liquid_velocity,
                           liquid_density=state.liquid.mass_density, liquid_viscosity=state.liquid.viscosity,
                           specific_area=self.specific_area, holdup_constant=b.holdup)
            if b.friction is not None:
                drop = self.height(state) * billet_pressure_gradient(self, state, holdup, calls)
        return Hydraulics(flooding=flooding, pressure_drop=drop, liquid_holdup=holdup, notes=calls.notes)


def billet_flooding(bed: PackedBed, state: ContactState, calls: Calls) -> Array:
    """Flooding velocity of the vapour at the same L/V, m/s (Billet & Schultes 1999)."""
    arguments = {
        "flow_ratio": state.liquid_mass_flow / state.vapor_mass_flow, "vapor_density": state.vapor.mass_density,
        "liquid_density": state.liquid.mass_density, "vapor_viscosity": state.vapor.viscosity,
        "liquid_viscosity": state.liquid.viscosity, "specific_area": bed.specific_area,
        "void_fraction": bed.void_fraction, "flooding_constant": billet_of(bed).need("flooding")}
    return np.asarray(calls.noted(packing_limits.billet_schultes_flooding, **arguments).vapor_velocity)


def billet_pressure_gradient(bed: PackedBed, state: ContactState, holdup: Array, calls: Calls) -> Array:
    """Pressure drop of the irrigated bed, Pa/m (Billet & Schultes 1993)."""
    vapor_velocity, liquid_velocity = bed.velocities(state)
    dry = calls(packing_pressure_drop.billet_schultes_dry, vapor_velocity=vapor_velocity,
                vapor_density=state.vapor.mass_density, vapor_viscosity=state.vapor.viscosity,
                specific_area=bed.specific_area, void_fraction=bed.void_fraction,
                friction_constant=billet_of(bed).need("friction"), column_diameter=bed.diameter)
    return calls(packing_pressure_drop.billet_schultes_wet_1993, dry_pressure_gradient=dry, liquid_holdup=holdup,
                 liquid_velocity=liquid_velocity, liquid_density=state.liquid.mass_density,
                 liquid_viscosity=state.liquid.viscosity, specific_area=bed.specific_area,
                 void_fraction=bed.void_fraction)
