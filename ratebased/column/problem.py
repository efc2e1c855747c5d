"""A column with its property model, resolved into the arrays that the equations use."""
from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from ..errors import InputError
from ..properties.protocol import Array, Mask, PropertyModel
from .definition import Column, TotalCondenser
from .feeds import StageFeeds, stage_feeds
from .specifications import (
    BoilupRatio,
    BottomsRate,
    DistillateRate,
    ReboilerDuty,
    RefluxRatio,
    Searched,
)

TopRow = RefluxRatio | DistillateRate
BottomRow = BoilupRatio | BottomsRate | ReboilerDuty


@dataclass(frozen=True)
class Problem:
    """Arrays over the S stages, components last; flows mol/s, enthalpy flows and duties W.

    top, bottom: the specification that stands in the equations of condenser and reboiler. F: all feeds. energy_scale:
    F times the largest heat of vaporisation. contact: indices of the contact stages.
    """

    column: Column
    properties: PropertyModel
    P: Array
    feeds: StageFeeds
    liquid_draw: Array
    vapor_draw: Array
    duty: Array
    contact: NDArray[np.intp]
    F: float
    energy_scale: float
    ordinary: Mask
    gas: Mask
    heavy: Mask
    top: TopRow | None
    bottom: BottomRow | None

    @property
    def S(self) -> int:
        return self.column.stages

    @property
    def n(self) -> int:
        return self.ordinary.shape[0]

    @property
    def total_condenser(self) -> bool:
        return isinstance(self.column.condenser, TotalCondenser)

    @property
    def reboiler(self) -> bool:
        return self.column.reboiler is not None

    @property
    def subcooling(self) -> float:
        condenser = self.column.condenser
        return condenser.subcooling if isinstance(condenser, TotalCondenser) else 0.0

    @property
    def temperature_limits(self) -> tuple[float, float]:
        """Range of the property model, K; wide open where it states none."""
        low, high = getattr(self.properties, "T_range", (1.0, 1e5))
        return float(low), float(high)

    @property
    def feed_components(self) -> Array:
        """Component flows of all feeds, (n,)."""
        total: Array = (self.feeds.vapor + self.feeds.liquid).sum(0)
        return total

    @property
    def mean_feed_temperature(self) -> float:
        """Of the streams that enter, weighted by their flows."""
        flows = np.array([s.vapor.sum() + s.liquid.sum() for s in self.feeds.streams])
        return float(flows @ np.array([s.temperature for s in self.feeds.streams]) / flows.sum())

    def at_pressure(self, P: Array) -> Problem:
        """The same problem at other pressures, its feeds flashed again."""
        return replace(self, P=P, feeds=stage_feeds(self.column.feeds, P, self.properties))


def make_problem(column: Column, properties: PropertyModel, P: Array | None = None) -> Problem:
    """Check the column against the property model and flash its feeds.

    Raises
    ------
    InputError : component counts that differ, a non-condensing component in a column with a total condenser, an end
        stage that the flashed feeds leave without liquid or vapour, a searched specification (the caller resolves it).
    """
    P = column.pressures if P is None else P
    condensable = np.asarray(properties.condensable, bool)
    volatile = np.asarray(properties.volatile, bool)
    if isinstance(column.condenser, TotalCondenser) and not condensable.all():
        names = ", ".join(properties.names[i] for i in np.flatnonzero(~condensable))
        raise InputError(f"condenser: {names} never condenses, a total condenser cannot work; use PartialCondenser")
    feeds = stage_feeds(column.feeds, P, properties)
    if column.condenser is None and feeds.liquid[0].sum() <= 0:
        raise InputError("feeds: the feed to stage 1 flashes to vapour alone, the top section must run dry")
    if column.reboiler is None and feeds.vapor[-1].sum() <= 0:
        raise InputError(f"feeds: the feed to stage {column.stages} flashes to liquid alone, the bottom section gets "
                         "no vapour")
    liquid_draw, vapor_draw = column.draw_rates
    F = float(feeds.vapor.sum() + feeds.liquid.sum())
    top, bottom = _end_specifications(column, F)
    ordinary = condensable & volatile
    duty = column.stage_duties
    if isinstance(bottom, ReboilerDuty):
        duty[-1] = bottom.value
    problem = Problem(column, properties, P, feeds, liquid_draw, vapor_draw, duty,
                      np.flatnonzero(column.contact), F, 1.0, ordinary, ~condensable, ~volatile, top, bottom)
    return replace(problem, energy_scale=F * _largest_latent_heat(problem))


def _largest_latent_heat(problem: Problem) -> float:
    properties = problem.properties
    T, P = np.asarray(problem.mean_feed_temperature), np.asarray(problem.P.mean())
    z = problem.feed_components / problem.F
    x, y = np.where(problem.gas, 0.0, z), np.where(problem.heavy, 0.0, z)
    x, y = x / max(x.sum(), 1e-300), y / max(y.sum(), 1e-300)
    latent = properties.vapor_enthalpy(T, P, y) - properties.liquid_enthalpy(T, P, x)
    return max(float(np.max(np.where(problem.ordinary, latent, 0.0))), 1e3)


def _end_specifications(column: Column, F: float) -> tuple[TopRow | None, BottomRow | None]:
    """One row for each end: of two specifications of one end, a rate becomes the other product's by the balance."""
    drawn = sum(d.rate for d in column.draws)
    top: TopRow | None = None
    bottom: BottomRow | None = None
    rate: DistillateRate | BottomsRate | None = None
    for s in column.specifications:
        if isinstance(s, Searched):
            raise InputError(f"specifications: {s.name} is met by a search; solve the column through solve_equilibrium "
                             "or solve_ratebased")
        if isinstance(s, DistillateRate | BottomsRate):
            rate = s
        elif isinstance(s, RefluxRatio):
            top = s
        else:
            bottom = s
    if rate is not None:
        other = F - drawn - rate.value
        if column.condenser is not None and (top is None or column.reboiler is None):
            top = rate if isinstance(rate, DistillateRate) else DistillateRate(other)
        else:
            bottom = rate if isinstance(rate, BottomsRate) else BottomsRate(other)
    return top, bottom
