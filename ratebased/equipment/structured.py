"""Structured packings of corrugated sheets or gauze: dimensions, limits, and coefficients by a published method."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any, Protocol

import numpy as np

from correlations import Correlation, packing, packing_area, packing_coefficients, packing_limits, packing_pressure_drop

from ..arguments import positive_scalar
from ..errors import InputError
from .calls import Calls
from .heat import analogy
from .packings import BilletConstants, PackedBed, billet_constants, billet_flooding
from .protocol import Array, ContactState, Hydraulics, TransferCoefficients


@dataclass(frozen=True)
class SheetOperation:
    """What the traffic does in a structured packing. holdup -; pressure_gradient Pa/m or None."""

    holdup: Array | None
    pressure_gradient: Array | None


class StructuredTransferMethod(Protocol):
    """Coefficients and interfacial area of a structured packing."""

    correlations: Mapping[str, Correlation[..., Any]]
    """The correlations used, by what for; "vapor", "liquid" and "area" carry the scatter."""

    def __call__(self, bed: StructuredPacking, state: ContactState, calls: Calls) -> tuple[Array, Array, Array]:
        """(kappa_vapor, kappa_liquid) m/s of the pairs and the interfacial area, m2/m3."""
        ...

    def operation(self, bed: StructuredPacking, state: ContactState, calls: Calls) -> SheetOperation: ...


class RochaBravoFair:
    """Rocha, Bravo & Fair (1993, 1996): holdup and pressure drop solved together, coefficients, area of a sheet."""

    correlations: Mapping[str, Correlation[..., Any]] = {
        "vapor": packing_coefficients.rocha_bravo_fair_vapor, "liquid": packing_coefficients.rocha_bravo_fair_liquid,
        "area": packing_area.rocha_bravo_fair_sheet, "pressure drop": packing_pressure_drop.rocha_bravo_fair}

    def operation(self, bed: StructuredPacking, state: ContactState, calls: Calls) -> SheetOperation:
        """Holdup and pressure gradient."""
        vapor_velocity, liquid_velocity = bed.velocities(state)
        factor = calls(packing_area.rocha_bravo_fair_holdup_factor, **_film(state, liquid_velocity),
                       surface_tension=state.liquid.surface_tension, void_fraction=bed.void_fraction,
                       corrugation_side=bed.side, corrugation_angle=bed.angle)
        found = calls.noted(
            packing_pressure_drop.rocha_bravo_fair, vapor_velocity=vapor_velocity,
            vapor_density=state.vapor.mass_density, vapor_viscosity=state.vapor.viscosity,
            **_film(state, liquid_velocity), holdup_factor=factor, void_fraction=bed.void_fraction,
            corrugation_side=bed.side, corrugation_angle=bed.angle)
        return SheetOperation(np.asarray(found[0]), np.asarray(found[1]))

    def __call__(self, bed: StructuredPacking, state: ContactState, calls: Calls) -> tuple[Array, Array, Array]:
        """(kappa_vapor, kappa_liquid, area)."""
        return *self.coefficients(bed, state, calls), self.area(bed, state, calls)

    def coefficients(self, bed: StructuredPacking, state: ContactState, calls: Calls) -> tuple[Array, Array]:
        """(kappa_vapor, kappa_liquid)."""
        vapor_velocity, liquid_velocity = bed.velocities(state)
        holdup = self.operation(bed, state, calls).holdup
        geometry = {"void_fraction": bed.void_fraction, "corrugation_side": bed.side, "corrugation_angle": bed.angle}
        vapor = calls.pairs(
            packing_coefficients.rocha_bravo_fair_vapor, state.vapor.diffusivity, vapor_velocity=vapor_velocity,
            vapor_density=state.vapor.mass_density, vapor_viscosity=state.vapor.viscosity,
            liquid_velocity=liquid_velocity, liquid_holdup=holdup, **geometry)
        liquid = calls.pairs(packing_coefficients.rocha_bravo_fair_liquid, state.liquid.diffusivity,
                             liquid_velocity=liquid_velocity, liquid_holdup=holdup, **geometry)
        return vapor, liquid

    def area(self, bed: StructuredPacking, state: ContactState, calls: Calls) -> Array:
        """Interfacial area per volume."""
        if bed.surface_factor is None:
            raise InputError("surface_factor: the area of Rocha, Bravo & Fair needs the surface factor of the sheet")
        return calls(packing_area.rocha_bravo_fair_sheet, **_film(state, bed.velocities(state)[1]),
                     surface_tension=state.liquid.surface_tension, specific_area=bed.specific_area,
                     void_fraction=bed.void_fraction, corrugation_side=bed.side, corrugation_angle=bed.angle,
                     surface_factor=bed.surface_factor)


class BravoRochaFair:
    """Bravo, Rocha & Fair (1985): gauze, all of it wetted."""

    correlations: Mapping[str, Correlation[..., Any]] = {
        "vapor": packing_coefficients.bravo_rocha_fair_vapor, "liquid": packing_coefficients.bravo_rocha_fair_liquid,
        "area": packing_area.bravo_rocha_fair_gauze, "pressure drop": packing_pressure_drop.bravo_rocha_fair}

    def operation(self, bed: StructuredPacking, state: ContactState, calls: Calls) -> SheetOperation:
        """Pressure gradient; the method has no holdup."""
        vapor_velocity, liquid_velocity = bed.velocities(state)
        drop = calls(packing_pressure_drop.bravo_rocha_fair, vapor_velocity=vapor_velocity,
                     vapor_density=state.vapor.mass_density, vapor_viscosity=state.vapor.viscosity,
                     liquid_velocity=liquid_velocity, void_fraction=bed.void_fraction, corrugation_base=bed.base,
                     corrugation_height=bed.height_of_corrugation, corrugation_side=bed.side,
                     corrugation_angle=bed.angle)
        return SheetOperation(None, drop)

    def __call__(self, bed: StructuredPacking, state: ContactState, calls: Calls) -> tuple[Array, Array, Array]:
        """(kappa_vapor, kappa_liquid, area)."""
        vapor_velocity, liquid_velocity = bed.velocities(state)
        film = _film(state, liquid_velocity)
        channel = {"corrugation_base": bed.base, "corrugation_height": bed.height_of_corrugation,
                   "corrugation_side": bed.side}
        vapor = calls.pairs(
            packing_coefficients.bravo_rocha_fair_vapor, state.vapor.diffusivity, vapor_velocity=vapor_velocity,
            vapor_density=state.vapor.mass_density, vapor_viscosity=state.vapor.viscosity, **film, **channel,
            void_fraction=bed.void_fraction, corrugation_angle=bed.angle)
        liquid = calls.pairs(packing_coefficients.bravo_rocha_fair_liquid, state.liquid.diffusivity, **film, **channel)
        return vapor, liquid, calls(packing_area.bravo_rocha_fair_gauze, specific_area=bed.specific_area)


class TsaiArea(RochaBravoFair):
    """Area of Tsai, Seibert, Eldridge & Rochelle (2011) with the coefficients of Rocha, Bravo & Fair."""

    correlations = {**RochaBravoFair.correlations, "area": packing_area.tsai}

    def area(self, bed: StructuredPacking, state: ContactState, calls: Calls) -> Array:
        """Interfacial area per volume."""
        return calls(packing_area.tsai, liquid_velocity=bed.velocities(state)[1],
                     liquid_density=state.liquid.mass_density, surface_tension=state.liquid.surface_tension,
                     specific_area=bed.specific_area, corrugation_base=bed.base,
                     corrugation_height=bed.height_of_corrugation, corrugation_side=bed.side)


@dataclass(frozen=True)
class StructuredPacking(PackedBed):
    """Corrugated sheets or gauze. base, height_of_corrugation, side: of the channels, m; angle to the horizontal, rad.

    surface_factor: of the sheet's texture (area of Rocha, Bravo & Fair). billet: constants of the packing, for
    flooding. method: `RochaBravoFair()`, `TsaiArea()`, `BravoRochaFair()` (gauze).
    """

    base: float = 0.0241
    height_of_corrugation: float = 0.0119
    side: float = 0.017
    angle: float = 0.7853981633974483
    surface_factor: float | None = None
    billet: BilletConstants | None = None
    method: StructuredTransferMethod = field(default_factory=RochaBravoFair)

    def __post_init__(self) -> None:
        super().__post_init__()
        for name in ("base", "height_of_corrugation", "side"):
            positive_scalar(name, getattr(self, name))
        if not 0 < self.angle < np.pi / 2:
            raise InputError(f"angle = {self.angle}: expected between 0 and pi/2 rad, to the horizontal")

    @classmethod
    def of(cls, name: str, diameter: float, **changes: Any) -> StructuredPacking:
        """A packing of the table of generic packings, as "corrugated sheet, metal, 250 m2/m3, 45 degrees".

        `changes` override its fields. Raises `InputError` for a name that is not there, or a field nobody has.
        """
        entry = packing(name)
        if entry.kind != "structured":
            raise InputError(f"packing = {name!r}: a random packing, expected a structured one")
        fields: dict[str, Any] = {"specific_area": entry["specific_area"], "void_fraction": entry["void_fraction"]}
        for own, key in (("base", "corrugation_base"), ("height_of_corrugation", "corrugation_height"),
                         ("side", "corrugation_side"), ("angle", "corrugation_angle"),
                         ("surface_factor", "surface_factor")):
            if own not in changes and (own != "surface_factor" or key in entry.fields):
                fields[own] = entry[key]
        return cls(diameter=diameter, **{**fields, "billet": billet_constants(entry), **changes})

    @property
    def correlations(self) -> dict[str, Correlation[..., Any]]:
        """The correlations used, by what for."""
        found = dict(self.method.correlations)
        if self.billet is not None and self.billet.flooding is not None:
            found["flooding"] = packing_limits.billet_schultes_flooding
        return found

    def transfer(self, state: ContactState) -> TransferCoefficients:
        """Pair coefficients on the interfacial area of each segment; heat by Chilton-Colburn and penetration."""
        calls = Calls(state.V.shape)
        kappa_V, kappa_L, area = self.method(self, state, calls)
        return TransferCoefficients(
            kappa_vapor=kappa_V, kappa_liquid=kappa_L, h_vapor=analogy(kappa_V, state.vapor, 2.0 / 3.0),
            h_liquid=analogy(kappa_L, state.liquid, 0.5), area=area * self.cross_section * self.height(state),
            basis="interfacial area", notes=calls.notes)

    def hydraulics(self, state: ContactState) -> Hydraulics:
        """Pressure drop and holdup by the method; flooding by the constants of Billet & Schultes where given."""
        calls = Calls(state.V.shape)
        found = self.method.operation(self, state, calls)
        flooding = None
        if self.billet is not None and self.billet.flooding is not None:
            flooding = self.velocities(state)[0] / billet_flooding(self, state, calls)
        drop = found.pressure_gradient
        return Hydraulics(flooding=flooding, liquid_holdup=found.holdup,
                          pressure_drop=None if drop is None else drop * self.height(state), notes=calls.notes)


def _film(state: ContactState, liquid_velocity: Array) -> dict[str, Array]:
    return {"liquid_velocity": liquid_velocity, "liquid_density": state.liquid.mass_density,
            "liquid_viscosity": state.liquid.viscosity}
