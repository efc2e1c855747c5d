"""What the library asks of a piece of hardware: the state of a stage in, coefficients and hydraulics out."""
from __future__ import annotations

from dataclasses import dataclass, field
from typing import Protocol, runtime_checkable

import numpy as np
from numpy.typing import NDArray

from ..properties.protocol import LiquidTransport, VaporTransport

Array = NDArray[np.float64]


@dataclass(frozen=True)
class ContactState:
    """Traffic and properties on a stage or segment, batched over stages.

    V, L: molar flows mol/s, (...). mean molar masses kg/mol, (...). P: Pa. vapor, liquid: transport properties at the
    bulk states. height: of the segment, m (packings).
    """

    V: Array
    L: Array
    vapor_molar_mass: Array
    liquid_molar_mass: Array
    P: Array
    vapor: VaporTransport
    liquid: LiquidTransport
    height: Array | None = None

    @property
    def vapor_volume_flow(self) -> Array:
        """m3/s."""
        return self.V / self.vapor.molar_density

    @property
    def liquid_volume_flow(self) -> Array:
        """m3/s."""
        return self.L / self.liquid.molar_density

    @property
    def vapor_mass_flow(self) -> Array:
        """kg/s."""
        return self.V * self.vapor_molar_mass

    @property
    def liquid_mass_flow(self) -> Array:
        """kg/s."""
        return self.L * self.liquid_molar_mass


@dataclass(frozen=True)
class TransferCoefficients:
    """Pair mass-transfer and heat-transfer coefficients of a stage.

    kappa_vapor, kappa_liquid m/s, (..., n, n), symmetric. h_vapor, h_liquid W/(m2 K), (...). area m2, (...): the
    reference area they are based on; `basis` says which. notes: one line a remark, such as a correlation used
    outside its range, with a boolean array over the batch saying where it applies.
    """

    kappa_vapor: Array
    kappa_liquid: Array
    h_vapor: Array
    h_liquid: Array
    area: Array
    basis: str
    notes: dict[str, NDArray[np.bool_]] = field(default_factory=dict)


@dataclass(frozen=True)
class Hydraulics:
    """Operating point of a stage against its limits, batched; None where the contactor has no method for it.

    flooding: vapour velocity over flooding velocity at the same L/V. pressure_drop Pa (a stage; a segment of its
    height). clear_liquid m (tray), liquid_holdup m3/m3 (packing). weeping: weep-point hole velocity over hole velocity
    (above one weeps). downcomer: level of the froth in it over spacing and weir height. entrainment: kg of liquid
    carried up by a kg of vapour. notes: as in `TransferCoefficients`.
    """

    flooding: Array | None
    pressure_drop: Array | None = None
    clear_liquid: Array | None = None
    liquid_holdup: Array | None = None
    weeping: Array | None = None
    downcomer: Array | None = None
    entrainment: Array | None = None
    notes: dict[str, NDArray[np.bool_]] = field(default_factory=dict)


LIMITS = ("flooding", "pressure_drop", "clear_liquid", "liquid_holdup", "weeping", "downcomer", "entrainment")
"""The figures of `Hydraulics`, by name."""


@runtime_checkable
class Contactor(Protocol):
    """A tray or a packed segment: `transfer` gives the coefficients, `hydraulics` the operating limits."""

    def transfer(self, state: ContactState) -> TransferCoefficients: ...

    def hydraulics(self, state: ContactState) -> Hydraulics: ...
