"""Contactors laid out over the contact stages of a column, and how the phases flow through a stage."""
from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, fields, replace
from typing import Protocol, runtime_checkable

import numpy as np
from numpy.typing import NDArray

from ..equipment.protocol import Contactor, ContactState, TransferCoefficients
from ..equipment.sections import Hardware, Section, by_contactor, stage_coefficients
from ..equipment.state import contact_state
from ..errors import InputError
from ..properties.protocol import Array, PropertyModel
from .definition import Column

ContactorLayout = Hardware | Mapping[tuple[int, int], Contactor]
"""A contactor, a sequence of `Section`, or a mapping (first, last) stage -> contactor."""


@runtime_checkable
class FlowPattern(Protocol):
    """How a phase flows through a stage: the share of the entering state in the bulk state its film starts from.

    `weight` is asked for the composition with the transfer units of both films in series and for the temperature with
    those of the phase's own heat transfer, h area/(flow cp).
    """

    @property
    def words(self) -> str: ...

    def weight(self, transfer_units: Array) -> Array: ...

    def temperature_weight(self, transfer_units: Array) -> Array: ...


@dataclass(frozen=True)
class Mixed:
    """The phase is mixed on the stage: its bulk has the state that leaves."""

    words: str = "mixed"

    def weight(self, transfer_units: Array) -> Array:
        return np.zeros_like(transfer_units)

    temperature_weight = weight


@dataclass(frozen=True)
class Averaged:
    """The bulk is the arithmetic mean of what enters and what leaves: second order in the height of a packed segment.

    A stage of this kind acts as E = N/(1 + N/2) for N transfer units and would overshoot from N = 2 on. From there the
    entering composition has the share 1/N, so that a phase leaves at the interface's composition at most and no
    fraction turns negative. The temperature may overshoot a little: its share is 3/N from N = 6 on, where it passes the
    interface by half of the way, and by less for larger N. Shorter segments are untouched. (Heat passes the film of a
    liquid ten times as easily as mass, so the liquid's temperature is often so limited.) The column warns of stages
    where the limit is at work: there it is of first order in the height.
    """

    words: str = "mean of entering and leaving state (entering share at most 1/N, of the temperature 3/N)"

    def weight(self, transfer_units: Array) -> Array:
        return 1.0 / np.maximum(transfer_units, 2.0)

    def temperature_weight(self, transfer_units: Array) -> Array:
        return 3.0 / np.maximum(transfer_units, 6.0)


@dataclass(frozen=True)
class Plug:
    """Plug flow past an interface of one state: the bulk is the mean of the exponential approach.

    The share of the entering state is 1/N - 1/(e^N - 1) for N transfer units: E = 1 - exp(-N) when all coefficients are
    equal and the interface does not change, and stable for any N. It tends to the arithmetic mean for small N.
    """

    words: str = "plug flow"

    def weight(self, transfer_units: Array) -> Array:
        N = np.minimum(transfer_units, 500.0)
        small = N < 1e-2
        safe = np.where(small, 1.0, N)
        return np.where(small, 0.5 - N / 12.0, 1.0 / safe - 1.0 / np.expm1(safe))

    temperature_weight = weight


@dataclass(frozen=True)
class Layout:
    """Contactors with the contact stages (index among them) that each of them serves."""

    contactors: tuple[tuple[Contactor, NDArray[np.intp]], ...]
    count: int

    def states(self, properties: PropertyModel, V: Array, L: Array, T_V: Array, T_L: Array, P: Array, y: Array,
               x: Array, height: Array | None) -> list[tuple[Contactor, NDArray[np.intp], ContactState]]:
        """One state a contactor."""
        return [(c, i, contact_state(properties, V[i], L[i], T_V[i], T_L[i], P[i], y[i], x[i],
                                     None if height is None else height[i])) for c, i in self.contactors]


def layout(contactor: ContactorLayout, column: Column) -> Layout:
    """One contactor for all contact stages, sections, or a mapping (first, last) stage -> contactor.

    Raises
    ------
    InputError : a contact stage without contactor or with two, something that is no contactor.
    """
    stages = np.flatnonzero(column.contact) + 1
    if not isinstance(contactor, Contactor | Mapping | Sequence) or isinstance(contactor, str):
        raise InputError(f"contactor = {contactor!r}: expected a contactor, sections or a mapping of stages")
    if isinstance(contactor, Mapping):
        contactor = [Section(first, last, c) for (first, last), c in contactor.items()]
    if isinstance(contactor, Sequence):
        for k, section in enumerate(contactor):
            if not isinstance(section, Section):
                raise InputError(f"contactor[{k}] = {section!r}: expected a Section")
    groups = tuple(by_contactor(contactor, stages))
    for c, _ in groups:
        if not isinstance(c, Contactor):
            raise InputError(f"contactor: {c!r} has no methods transfer and hydraulics")
    return Layout(groups, stages.size)


@dataclass(frozen=True)
class Transfer:
    """Coefficients of all contact stages with the molar densities they go with, mol/m3."""

    coefficients: TransferCoefficients
    c_vapor: Array
    c_liquid: Array


def transfer(states: list[tuple[Contactor, NDArray[np.intp], ContactState]], stages: NDArray[np.intp],
             area_factor: float) -> Transfer:
    """Coefficients of every contact stage, numbered `stages`, from its contactor; the areas times `area_factor`."""
    count = stages.size
    parts = [(i, stage_coefficients(c, state, stages[i]), state) for c, i, state in states]
    if len(parts) == 1:
        _, k, state = parts[0]
        if area_factor != 1.0:
            k = replace(k, area=k.area * area_factor)
        return Transfer(k, state.vapor.molar_density, state.liquid.molar_density)
    notes: dict[str, NDArray[np.bool_]] = {}
    arrays: dict[str, Array] = {}
    for i, k, state in parts:
        values = {f.name: getattr(k, f.name) for f in fields(k) if f.name not in ("basis", "notes")}
        values |= {"c_vapor": state.vapor.molar_density, "c_liquid": state.liquid.molar_density}
        for name, value in values.items():
            rank = 3 if name.startswith("kappa") else 1
            value = np.broadcast_to(value, (i.size, *value.shape[-2:]) if rank == 3 else (i.size,))
            arrays.setdefault(name, np.empty((count, *value.shape[1:])))[i] = value
        for note, where in k.notes.items():
            notes.setdefault(note, np.zeros(count, bool))[i] = where
    c_vapor, c_liquid = arrays.pop("c_vapor"), arrays.pop("c_liquid")
    arrays["area"] = arrays["area"] * area_factor
    basis = "; ".join(dict.fromkeys(k.basis for _, k, _ in parts))
    return Transfer(TransferCoefficients(**arrays, basis=basis, notes=notes), c_vapor, c_liquid)


def film_transfer_units(kappa: Array, c: Array, area: Array, flow: Array, z: Array) -> Array:
    """area c kappa_i/flow of a film for each component, (..., n), kappa_i = (1 - z_i)/sum z_j/kappa_ij (Wilke 1950)."""
    n = kappa.shape[-1]
    off = ~np.eye(n, dtype=bool)
    inverse = np.where(off, 1.0 / np.where(off, kappa, 1.0), 0.0)
    drag = (inverse @ z[..., None])[..., 0]
    plain = inverse.sum(-1) / max(n - 1, 1)
    rest = 1.0 - z
    effective = np.where(rest > 1e-9, rest / np.where(rest > 1e-9, drag, 1.0), 1.0 / np.where(plain > 0, plain, 1.0))
    return np.asarray((area * c / flow)[..., None] * effective)
