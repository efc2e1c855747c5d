"""What a column is: stages, feeds, draws, ends, pressures and specifications, checked when it is made.

Stages are numbered from the top, starting at 1. A condenser is stage 1, a reboiler the last stage; all others are
contact stages (trays, or packed segments when a segment height is given).
"""
from __future__ import annotations

import warnings
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..arguments import finite_array, finite_scalar, positive_array, positive_scalar, whole_number
from ..errors import InputError, PlausibilityWarning
from .specifications import (
    BottomsRate,
    DistillateRate,
    RefluxRatio,
    Searched,
    Specification,
    check_specifications,
)

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Feed:
    """A feed flashed at the pressure of its stage.

    stage: number from the top. flows: component flows, mol/s, (n,). Exactly one of temperature, K, and vapor_fraction,
    0..1 of the moles, is given. Its vapour joins the vapour that enters the stage from below, its liquid the liquid
    that enters from above.
    """

    stage: int
    flows: Array
    temperature: float | None = None
    vapor_fraction: float | None = None

    def __init__(self, stage: int, flows: ArrayLike, temperature: float | None = None,
                 vapor_fraction: float | None = None) -> None:
        if (temperature is None) == (vapor_fraction is None):
            raise InputError(f"feed to stage {stage}: give either temperature or vapor_fraction")
        if temperature is not None:
            temperature = positive_scalar("temperature", temperature)
        if vapor_fraction is not None:
            vapor_fraction = finite_scalar("vapor_fraction", vapor_fraction)
            if not 0.0 <= vapor_fraction <= 1.0:
                raise InputError(f"vapor_fraction = {vapor_fraction}: expected a number from 0 to 1")
        _set(self, stage=_feed_stage(stage), flows=feed_flows(f"flows of the feed to stage {stage}", flows),
             temperature=temperature, vapor_fraction=vapor_fraction)


@dataclass(frozen=True, eq=False)
class LiquidFeed:
    """A feed that is liquid as given, subcooled or not: no flash. flows mol/s, (n,); temperature K."""

    stage: int
    flows: Array
    temperature: float

    def __init__(self, stage: int, flows: ArrayLike, temperature: float) -> None:
        _set(self, stage=_feed_stage(stage), flows=feed_flows(f"flows of the feed to stage {stage}", flows),
             temperature=positive_scalar("temperature", temperature))


@dataclass(frozen=True, eq=False)
class VaporFeed:
    """A feed that is vapour as given, superheated or not: no flash. flows mol/s, (n,); temperature K."""

    stage: int
    flows: Array
    temperature: float

    def __init__(self, stage: int, flows: ArrayLike, temperature: float) -> None:
        _set(self, stage=_feed_stage(stage), flows=feed_flows(f"flows of the feed to stage {stage}", flows),
             temperature=positive_scalar("temperature", temperature))


AnyFeed = Feed | LiquidFeed | VaporFeed


@dataclass(frozen=True)
class LiquidDraw:
    """A side stream of the liquid leaving a contact stage: rate mol/s, its composition and temperature."""

    stage: int
    rate: float

    def __post_init__(self) -> None:
        _check_draw(self)


@dataclass(frozen=True)
class VaporDraw:
    """A side stream of the vapour leaving a contact stage: rate mol/s, its composition and temperature."""

    stage: int
    rate: float

    def __post_init__(self) -> None:
        _check_draw(self)


@dataclass(frozen=True)
class TotalCondenser:
    """All the vapour from stage 2 condenses; reflux and distillate are liquid. subcooling: below the bubble point,
    K.
    """

    subcooling: float = 0.0

    def __post_init__(self) -> None:
        _set(self, subcooling=finite_scalar("subcooling", self.subcooling))
        if self.subcooling < 0:
            raise InputError(f"subcooling = {self.subcooling}: expected zero or a positive number of kelvin")


@dataclass(frozen=True)
class PartialCondenser:
    """An equilibrium stage: vapour distillate, liquid reflux."""


@dataclass(frozen=True)
class Reboiler:
    """A kettle reboiler: an equilibrium stage, liquid bottoms."""


@dataclass(frozen=True)
class ContactorPressure:
    """Pressures from the contactor's own pressure drop: found while the rate-based column is solved.

    top: pressure of stage 1, Pa. estimate: drop of one contact stage, Pa, for the equilibrium column and the start.
    """

    top: float
    estimate: float = 0.0

    def __post_init__(self) -> None:
        _set(self, top=positive_scalar("top", self.top), estimate=finite_scalar("estimate", self.estimate))
        if self.estimate < 0:
            raise InputError(f"estimate = {self.estimate}: expected zero or a positive pressure drop")


@dataclass(frozen=True, eq=False)
class Column:
    """A distillation, absorption, stripping or reboiled absorption column.

    Parameters
    ----------
    stages : number of stages, condenser and reboiler included.
    feeds : `Feed` (flashed), `LiquidFeed`, `VaporFeed`; any number.
    pressure : Pa, one number, one a stage, or `ContactorPressure`.
    condenser : `TotalCondenser`, `PartialCondenser` or None.
    reboiler : `Reboiler` or None.
    specifications : with condenser and reboiler two, with one of them one, else none. `RefluxRatio`, `DistillateRate`,
        `BottomsRate`, `BoilupRatio` and `ReboilerDuty` are solved with the column; one `CondenserDuty`,
        `ProductPurity` or `ComponentRecovery` may take the place of one of them and is met by an outer bounded search.
    draws : `LiquidDraw`, `VaporDraw` on contact stages.
    duties : heat added to the liquid of a contact stage, W, by stage number.
    heat_loss : W lost from a contact stage, one number or one a stage (entries of condenser and reboiler ignored).
    segment_height : m, one number or one a stage: the contact stages are segments of a packed bed. None: trays.

    Raises
    ------
    InputError : what is missing, surplus or impossible, by name: specifications against the degrees of freedom, a
        stage number outside the column, draws and products above the feed, an end that no liquid or vapour reaches.

    Warns
    -----
    PlausibilityWarning : liquid draws above what reflux and feeds bring, at constant molar overflow. Coolers and
        subcooled streams condense more: the column is tried.
    """

    stages: int
    feeds: tuple[AnyFeed, ...]
    pressure: Array | ContactorPressure
    condenser: TotalCondenser | PartialCondenser | None = None
    reboiler: Reboiler | None = None
    specifications: tuple[Specification, ...] = ()
    draws: tuple[LiquidDraw | VaporDraw, ...] = ()
    duties: Mapping[int, float] = field(default_factory=dict)
    heat_loss: Array = field(default_factory=lambda: np.zeros(()))
    segment_height: Array | None = None

    def __init__(self, stages: int, feeds: Sequence[AnyFeed], pressure: ArrayLike | ContactorPressure, *,
                 condenser: TotalCondenser | PartialCondenser | None = None, reboiler: Reboiler | None = None,
                 specifications: Sequence[Specification] = (), draws: Sequence[LiquidDraw | VaporDraw] = (),
                 duties: Mapping[int, float] | None = None, heat_loss: ArrayLike = 0.0,
                 segment_height: ArrayLike | None = None) -> None:
        stages = whole_number("stages", stages)
        _check_kinds(feeds, condenser, reboiler, specifications, draws, duties)
        ends = (condenser is not None) + (reboiler is not None)
        if stages - ends < 1:
            raise InputError(f"stages = {stages}: no contact stage is left beside condenser and reboiler")
        profile: Array | ContactorPressure
        if isinstance(pressure, ContactorPressure):
            profile = pressure
        else:
            profile = _per_stage("pressure", positive_array("pressure", pressure), stages)
        height = None
        if segment_height is not None:
            height = _per_stage("segment_height", positive_array("segment_height", segment_height), stages)
        heat = {whole_number("stage of a duty", j): finite_scalar(f"duties[{j}]", q) for j, q in (duties or {}).items()}
        _set(self, stages=stages, feeds=tuple(feeds), pressure=profile, condenser=condenser, reboiler=reboiler,
             specifications=tuple(specifications), draws=tuple(draws), duties=heat,
             heat_loss=_per_stage("heat_loss", finite_array("heat_loss", heat_loss), stages), segment_height=height)
        self._check_places()
        check_specifications(self.specifications, condenser is not None, reboiler is not None,
                             self.feeds[0].flows.shape[0])
        self._check_rates()
        self._check_ends()

    # ------------------------------------------------------------------------------------------------ what it is
    @property
    def contact(self) -> NDArray[np.bool_]:
        """(stages,): true on contact stages."""
        mask = np.ones(self.stages, bool)
        if self.condenser is not None:
            mask[0] = False
        if self.reboiler is not None:
            mask[-1] = False
        return mask

    @property
    def kinds(self) -> tuple[str, ...]:
        """One word a stage: condenser, tray, segment, reboiler."""
        words = ["segment" if self.segment_height is not None else "tray"] * self.stages
        if self.condenser is not None:
            words[0] = "condenser"
        if self.reboiler is not None:
            words[-1] = "reboiler"
        return tuple(words)

    @property
    def pressures(self) -> Array:
        """Pa, (stages,); with `ContactorPressure` its estimate."""
        if isinstance(self.pressure, ContactorPressure):
            drops = np.where(self.contact, self.pressure.estimate, 0.0)
            return self.pressure.top + np.concatenate(([0.0], np.cumsum(0.5 * (drops[:-1] + drops[1:]))))
        return self.pressure

    @property
    def draw_rates(self) -> tuple[Array, Array]:
        """Liquid and vapour side draws, mol/s, (stages,) each."""
        rates = np.zeros((2, self.stages))
        for draw in self.draws:
            rates[int(isinstance(draw, VaporDraw)), draw.stage - 1] += draw.rate
        return rates[0], rates[1]

    @property
    def stage_duties(self) -> Array:
        """Heat added to the liquid of each contact stage, losses taken off, W, (stages,)."""
        heat = np.where(self.contact, -self.heat_loss, 0.0)
        for stage, duty in self.duties.items():
            heat[stage - 1] += duty
        return heat

    @property
    def search(self) -> Searched | None:
        """The specification met by an outer search, if there is one."""
        return next((s for s in self.specifications if isinstance(s, Searched)), None)

    def with_(self, **changes: Any) -> Column:
        """The same column with some arguments changed; with other `stages`, what is the same on all goes along."""
        if "stages" in changes:
            for name in ("pressure", "heat_loss", "segment_height"):
                value = getattr(self, name)
                if name not in changes and isinstance(value, np.ndarray) and np.ptp(value) == 0.0:
                    changes[name] = float(value[0])
        return replace(self, **changes)

    # ------------------------------------------------------------------------------------------------ checks
    def _check_places(self) -> None:
        if not self.feeds:
            raise InputError("feeds: a column needs at least one")
        n = self.feeds[0].flows.shape[0]
        for k, feed in enumerate(self.feeds):
            self._check_stage(f"feeds[{k}].stage", feed.stage)
            if feed.flows.shape != (n,):
                raise InputError(f"feeds[{k}].flows: {feed.flows.shape[0]} components, feeds[0] has {n}")
        total = sum(feed.flows for feed in self.feeds)
        for i in np.flatnonzero(np.asarray(total) == 0):
            raise InputError(f"feeds: component {i} is in no feed; leave it out of the property model")
        contact = self.contact
        for k, draw in enumerate(self.draws):
            self._check_stage(f"draws[{k}].stage", draw.stage)
            if not contact[draw.stage - 1]:
                raise InputError(f"draws[{k}].stage = {draw.stage}: side draws are taken from contact stages")
        for stage in self.duties:
            self._check_stage(f"duties[{stage}]", stage)
            if not contact[stage - 1]:
                raise InputError(f"duties[{stage}]: the duty of condenser or reboiler is a specification")

    def _check_stage(self, name: str, stage: int) -> None:
        if not 1 <= stage <= self.stages:
            raise InputError(f"{name} = {stage}: the column has stages 1 to {self.stages}")

    def _check_rates(self) -> None:
        feed = float(sum(f.flows.sum() for f in self.feeds))
        drawn = float(sum(d.rate for d in self.draws))
        if drawn >= feed:
            raise InputError(f"draws: {drawn:g} mol/s in all, the feeds bring {feed:g} mol/s")
        for s in self.specifications:
            if isinstance(s, DistillateRate | BottomsRate) and s.value + drawn >= feed:
                raise InputError(f"{s.name} = {s.value:g} mol/s: with the side draws ({drawn:g} mol/s) nothing of the "
                                 f"feed ({feed:g} mol/s) is left for the other product")
        by = {type(s): s for s in self.specifications}
        if DistillateRate in by and RefluxRatio in by and self.reboiler is not None:
            self._warn_of_liquid_draws(by[RefluxRatio].value * by[DistillateRate].value)

    def _warn_of_liquid_draws(self, reflux: float) -> None:
        """Liquid left below the draws at constant molar overflow, every feed that is not vapour counted as liquid."""
        brought = np.zeros(self.stages)
        for feed in self.feeds:
            if not isinstance(feed, VaporFeed):
                brought[feed.stage - 1] += feed.flows.sum()
        liquid, drawn = reflux + np.cumsum(brought), np.cumsum(self.draw_rates[0])
        dry = np.flatnonzero(liquid[:-1] <= drawn[:-1])
        if dry.size:
            j = int(dry[0])
            warnings.warn(f"draws: the liquid draws down to stage {j + 1} take {drawn[j]:g} mol/s, reflux and feeds "
                          f"above bring {liquid[j]:g} mol/s: the section below runs dry unless liquid condenses above",
                          PlausibilityWarning, stacklevel=4)

    def _check_ends(self) -> None:
        top = [f for f in self.feeds if f.stage == 1]
        bottom = [f for f in self.feeds if f.stage == self.stages]
        if self.condenser is None and not any(_may_hold_liquid(f) for f in top):
            raise InputError("feeds: no condenser and no liquid feed to stage 1, the top section must run dry")
        if self.reboiler is None and not any(_may_hold_vapor(f) for f in bottom):
            raise InputError(f"feeds: no reboiler and no vapour feed to stage {self.stages}, the bottom section gets "
                             "no vapour")


def _may_hold_liquid(feed: AnyFeed) -> bool:
    return isinstance(feed, LiquidFeed) or (isinstance(feed, Feed) and feed.vapor_fraction != 1.0)


def _may_hold_vapor(feed: AnyFeed) -> bool:
    return isinstance(feed, VaporFeed) or (isinstance(feed, Feed) and feed.vapor_fraction != 0.0)


def _check_kinds(feeds: object, condenser: object, reboiler: object, specifications: object, draws: object,
                 duties: object) -> None:
    """A word or a class in the place of an object would be another column."""
    ends: tuple[tuple[str, object, tuple[type, ...]], ...] = (
        ("condenser", condenser, (TotalCondenser, PartialCondenser)), ("reboiler", reboiler, (Reboiler,)))
    lists: tuple[tuple[str, object, tuple[type, ...]], ...] = (
        ("feeds", feeds, (Feed, LiquidFeed, VaporFeed)), ("draws", draws, (LiquidDraw, VaporDraw)),
        ("specifications", specifications, (object,)))
    for name, value, kinds in ends:
        if value is not None and not isinstance(value, kinds):
            raise InputError(f"{name} = {value!r}: expected {' or '.join(f'{k.__name__}()' for k in kinds)} or None")
    for name, value, kinds in lists:
        if not isinstance(value, Sequence) or isinstance(value, str):
            raise InputError(f"{name} = {value!r}: expected a list")
        for k, item in enumerate(value):
            if not isinstance(item, kinds):
                raise InputError(f"{name}[{k}] = {item!r}: expected {' or '.join(k.__name__ for k in kinds)}")
    if duties is not None and not isinstance(duties, Mapping):
        raise InputError(f"duties = {duties!r}: expected a mapping from stage number to W")


def _check_draw(draw: LiquidDraw | VaporDraw) -> None:
    _set(draw, stage=whole_number("stage of a draw", draw.stage), rate=positive_scalar("rate of a draw", draw.rate))


def _feed_stage(stage: int) -> int:
    return whole_number("stage of a feed", stage)


def _set(record: object, **values: Any) -> None:
    for name, value in values.items():
        object.__setattr__(record, name, value)


def feed_flows(name: str, flows: ArrayLike) -> Array:
    """Component flows, (n,), checked and copied: none negative, not all zero."""
    array = finite_array(name, flows)
    if array.ndim != 1 or array.size < 1:
        raise InputError(f"{name}: expected one number a component, got shape {array.shape}")
    for i in np.flatnonzero(array < 0):
        raise InputError(f"{name}[{i}] = {array[i]}: a flow cannot be negative")
    if array.sum() <= 0:
        raise InputError(f"{name}: all zero")
    return array.copy()


def _per_stage(name: str, array: Array, stages: int) -> Array:
    if array.shape not in ((), (stages,)):
        raise InputError(f"{name}: expected one number or {stages}, got shape {array.shape}")
    return np.broadcast_to(array, (stages,)).copy()

