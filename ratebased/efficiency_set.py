"""Component efficiencies of a column in the form that an equilibrium-stage column can be fed with.

Vaporisation efficiencies with the superheat of the vapour, or Murphree vapour efficiencies with both temperature
offsets, reproduce the column they came from. Only n-1 Murphree efficiencies of a stage are independent at the
bubble-point basis, sum_i E_i (y*_i - y_in,i) = 0, so one component a stage follows from the others: the one with the
largest y, which carries the rounding of the table best.
"""
from __future__ import annotations

from dataclasses import dataclass
from enum import Enum

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .arguments import finite_array
from .errors import InputError
from .properties.protocol import Array


class EfficiencyKind(Enum):
    """What the numbers multiply."""

    MURPHREE_VAPOR = "Murphree vapour"
    VAPORIZATION = "vaporisation"


class EfficiencyBasis(Enum):
    """Temperature at which K of the leaving liquid is taken."""

    BUBBLE_POINT = "bubble point"
    LIQUID_TEMPERATURE = "liquid temperature"


@dataclass(frozen=True, eq=False)
class EfficiencySet:
    """Component efficiencies of S stages.

    Parameters
    ----------
    kind : `EfficiencyKind`.
    values : (S, n). Rows of stages that are not in `given` are ignored: those are equilibrium stages. The entry of the
        dependent component is ignored too.
    dependent : component index a stage, (S,), or -1 for none. Murphree efficiencies at the bubble-point basis need one
        on every stage given; all others have none, the temperature comes with them.
    vapor_offset, liquid_offset : K, (S,): temperature of the leaving vapour and liquid minus the temperature at which K
        is taken (bubble point: T_V - T_bubble, T_L - T_bubble; liquid temperature: T_V - T_L, 0).
    basis : `EfficiencyBasis`; vaporisation efficiencies are taken at the liquid temperature.
    given : (S,) boolean.

    Raises
    ------
    InputError : shapes that disagree, an entry that is used and not finite, a vaporisation efficiency that is not
        positive, a dependent component that is missing, out of range or surplus, a liquid offset at the
        liquid-temperature basis.
    """

    kind: EfficiencyKind
    values: Array
    dependent: NDArray[np.int64]
    vapor_offset: Array
    liquid_offset: Array
    basis: EfficiencyBasis
    given: NDArray[np.bool_]

    def __init__(self, kind: EfficiencyKind, values: ArrayLike, dependent: ArrayLike | None = None,
                 vapor_offset: ArrayLike = 0.0, liquid_offset: ArrayLike = 0.0,
                 basis: EfficiencyBasis | None = None, given: ArrayLike | None = None) -> None:
        if not isinstance(kind, EfficiencyKind):
            raise InputError(f"kind = {kind!r}: expected EfficiencyKind.MURPHREE_VAPOR or EfficiencyKind.VAPORIZATION")
        if basis is not None and not isinstance(basis, EfficiencyBasis):
            raise InputError(f"basis = {basis!r}: expected EfficiencyBasis.BUBBLE_POINT or "
                             "EfficiencyBasis.LIQUID_TEMPERATURE")
        try:
            table = np.array(values, float)
        except (TypeError, ValueError) as error:
            raise InputError(f"values: expected numbers, got {values!r}") from error
        if table.ndim != 2:
            raise InputError(f"values: expected (stages, components), got shape {table.shape}")
        S, n = table.shape
        if basis is None:
            murphree = kind is EfficiencyKind.MURPHREE_VAPOR
            basis = EfficiencyBasis.BUBBLE_POINT if murphree else EfficiencyBasis.LIQUID_TEMPERATURE
        stages = np.ones(S, bool) if given is None else np.asarray(given, bool)
        if stages.shape != (S,):
            raise InputError(f"given: expected {S} entries, got shape {stages.shape}")
        free = np.full(S, -1) if dependent is None else _indices(dependent)
        if free.shape != (S,):
            raise InputError(f"dependent: expected {S} entries, got shape {free.shape}")
        used = stages[:, None] & (np.arange(n) != free[:, None])
        for j, i in np.argwhere(used & ~np.isfinite(table))[:1]:
            raise InputError(f"values[{j}, {i}] = {table[j, i]}: expected a finite number")
        needs = kind is EfficiencyKind.MURPHREE_VAPOR and basis is EfficiencyBasis.BUBBLE_POINT
        if needs:
            for j in np.flatnonzero(stages & ~((free >= 0) & (free < n)))[:1]:
                raise InputError(f"dependent[{j}] = {free[j]}: Murphree efficiencies at the bubble point need the "
                                 f"index of the component that follows from the others, 0 to {n - 1}")
        else:
            for j in np.flatnonzero(stages & (free != -1))[:1]:
                raise InputError(f"dependent[{j}] = {free[j]}: these efficiencies are all independent, expected -1")
        if kind is EfficiencyKind.VAPORIZATION:
            for j, i in np.argwhere(used & ~(table > 0))[:1]:
                raise InputError(f"values[{j}, {i}] = {table[j, i]}: a vaporisation efficiency is positive")
            if basis is not EfficiencyBasis.LIQUID_TEMPERATURE:
                raise InputError("basis: vaporisation efficiencies are taken at the liquid temperature")
        offsets = []
        for name, value in (("vapor_offset", vapor_offset), ("liquid_offset", liquid_offset)):
            array = finite_array(name, value)
            if array.shape not in ((), (S,)):
                raise InputError(f"{name}: expected one number or {S}, got shape {array.shape}")
            offsets.append(np.where(stages, array, 0.0))
        if basis is EfficiencyBasis.LIQUID_TEMPERATURE:
            for j in np.flatnonzero(offsets[1])[:1]:
                raise InputError(f"liquid_offset[{j}] = {offsets[1][j]:g}: zero at the liquid-temperature basis")
        for name, item in (("kind", kind), ("values", table), ("dependent", free), ("vapor_offset", offsets[0]),
                           ("liquid_offset", offsets[1]), ("basis", basis), ("given", stages)):
            object.__setattr__(self, name, item)

    def rounded(self, decimals: int, offset_decimals: int | None = None) -> EfficiencySet:
        """The set as a table with this number of decimals gives it (offsets 0.01 K unless told otherwise)."""
        places = 2 if offset_decimals is None else offset_decimals
        return EfficiencySet(self.kind, np.round(self.values, decimals), self.dependent,
                             np.round(self.vapor_offset, places), np.round(self.liquid_offset, places), self.basis,
                             self.given)

    def tamed(self, low: float = 0.0, high: float = 1.5) -> EfficiencySet:
        """Murphree values outside (low, high) replaced by the median of the others of their stage (1 without any).

        A start for the set itself: equations with values far from one have several solutions, and the column with tame
        values lies close to the right one.
        """
        used = self.given[:, None] & (np.arange(self.values.shape[1]) != self.dependent[:, None])
        tame = used & (self.values > low) & (self.values < high)
        masked = np.where(tame, self.values, np.nan)
        some = tame.any(1)
        middle = np.ones(tame.shape[0])
        middle[some] = np.nanmedian(masked[some], axis=1)
        return EfficiencySet(self.kind, np.where(tame, self.values, middle[:, None]), self.dependent, self.vapor_offset,
                             self.liquid_offset, self.basis, self.given)

    def toward_equilibrium(self, share: float) -> EfficiencySet:
        """Efficiencies and offsets at a share (0..1) of their way from the equilibrium stage: for continuation."""
        return EfficiencySet(self.kind, 1.0 + share * (self.values - 1.0), self.dependent, share * self.vapor_offset,
                             share * self.liquid_offset, self.basis, self.given)


def _indices(dependent: ArrayLike) -> NDArray[np.int64]:
    """Component indices; fractions are an error, never cut."""
    array = finite_array("dependent", dependent)
    for j in np.flatnonzero(array != np.rint(array))[:1]:
        raise InputError(f"dependent[{j}] = {array.flat[j]}: expected the index of a component")
    return array.astype(np.int64)


def uniform_murphree(value: float, y: Array, basis: EfficiencyBasis, given: ArrayLike) -> EfficiencySet:
    """One Murphree vapour efficiency for every component and stage in `given`; no temperature offsets.

    y: estimate of the vapours, (S, n): the most abundant component of a stage follows from the others. All have the
    same efficiency whichever it is; a trace would drown in the rounding of the sum.
    """
    dependent = y.argmax(-1) if basis is EfficiencyBasis.BUBBLE_POINT else np.full(y.shape[0], -1)
    return EfficiencySet(EfficiencyKind.MURPHREE_VAPOR, np.full(y.shape, float(value)), dependent, basis=basis,
                         given=given)
