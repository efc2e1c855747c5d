"""Specifications that are met outside the column's equations, by a bounded search of one of its other specifications.

Purity is no monotone function of the reflux ratio where the contact area is fixed (more vapour, fewer transfer units),
and a middle boiler's purity has a maximum in the distillate rate. So the search walks up from the lower bound, brackets
the first crossing, and tells the best that can be reached when there is none.
"""
from __future__ import annotations

import warnings
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.optimize import brentq, minimize_scalar

from ..errors import ConvergenceError, InputError, NoSolutionError, RateBasedWarning
from .definition import Column
from .profile import Profile
from .specifications import (
    BoilupRatio,
    BottomsRate,
    ComponentRecovery,
    CondenserDuty,
    DistillateRate,
    Product,
    ProductPurity,
    RefluxRatio,
    Searched,
    Specification,
)

GRID = 13
TOLERANCE = 1e-9
"""Relative, of the value specified."""

Solver = Callable[[Column, Profile | None], Profile]


@dataclass(frozen=True)
class _Trial:
    profile: Profile
    gap: float
    doubts: tuple[Warning, ...]


def with_search(column: Column, solve: Solver, start: Profile | None = None) -> Profile:
    """The column solved with its searched specification met; warnings are those of the column returned.

    `solve(column, previous)` solves a column without one; `previous` is the last profile found (`start` at first), a
    possible start.

    Raises
    ------
    NoSolutionError : the value is not reached within the bounds; the message tells the best found and where.
    InputError : of the first trial column, when none could be made.
    """
    wanted = column.search
    assert wanted is not None
    chosen = _Search(column, wanted, solve, start).run()
    for doubt in chosen.doubts:
        warnings.warn(doubt, stacklevel=3)
    return chosen.profile


class _Search:
    """Trial columns by the logarithm of the quantity varied."""

    def __init__(self, column: Column, wanted: Searched, solve: Solver, start: Profile | None) -> None:
        self.column, self.wanted, self.solve, self.last = column, wanted, solve, start
        self.rest = tuple(s for s in column.specifications if s is not wanted)
        self.vary, self.bounds = search_handle(column, wanted, self.rest)
        self.found: dict[float, _Trial] = {}

    def run(self) -> _Trial:
        wanted, (low, high) = self.wanted, self.bounds
        points: list[float] = []
        problems: list[tuple[float, Exception]] = []
        for point in np.linspace(np.log(low), np.log(high), GRID):
            try:
                self.gap(float(point))
            except (ConvergenceError, InputError) as error:
                problems.append((float(np.exp(point)), error))
                continue
            points.append(float(point))
            if self._met(points[-1]):
                return self.found[points[-1]]
            if len(points) > 1 and self.gap(points[-1]) * self.gap(points[-2]) < 0:
                return self._refine(points[-2], points[-1])
        if not points:
            if all(isinstance(error, InputError) for _, error in problems):
                raise problems[0][1]
            raise NoSolutionError(f"{wanted.name} = {wanted.value:g}: no column was solved between {low:g} and "
                                  f"{high:g}. {problems[0][0]:.4g}: {problems[0][1]}")
        crossing = self._around_the_best(points)
        if crossing is not None:
            return self._refine(*crossing)
        best = min(self.found, key=lambda p: abs(self.found[p].gap))
        name = self.vary(1.0).name
        raise NoSolutionError(
            f"{wanted.name} = {wanted.value:g} is not reached with {name} from {low:g} to {high:g}: the best is "
            f"{wanted.value + self.found[best].gap:.6g} at {name} = {np.exp(best):.4g}"
            + (f"; {len(problems)} of {GRID} trial columns were not solved" if problems else ""),
            best=self.found[best].profile)

    def gap(self, point: float) -> float:
        """What is measured minus what is wanted."""
        if point not in self.found:
            specifications = (*self.rest, self.vary(float(np.exp(point))))
            with warnings.catch_warnings(record=True) as caught:
                warnings.simplefilter("always")
                profile = self.solve(self.column.with_(specifications=specifications), self.last)
            doubts = []
            for warning in caught:                    # doubts about a trial are no doubts about the answer
                if issubclass(warning.category, RateBasedWarning):
                    doubts.append(warning.message)
                else:
                    warnings.warn(warning.message, stacklevel=2)
            gap = measured(profile, self.wanted) - self.wanted.value
            self.found[point] = _Trial(profile, gap, tuple(d for d in doubts if isinstance(d, Warning)))
            self.last = profile
        return self.found[point].gap

    def _met(self, point: float) -> bool:
        return abs(self.gap(point)) <= TOLERANCE * abs(self.wanted.value)

    def _around_the_best(self, points: list[float]) -> tuple[float, float] | None:
        """A maximum or minimum between grid points may still cross the value wanted."""
        sign = float(np.sign(self.gap(points[0])))
        k = int(np.argmin([abs(self.gap(p)) for p in points]))
        low, high = points[max(k - 1, 0)], points[min(k + 1, len(points) - 1)]
        if low == high:
            return None
        try:
            best = minimize_scalar(lambda p: sign * self.gap(float(p)), bounds=(low, high), method="bounded",
                                   options={"xatol": 1e-3})
        except (ConvergenceError, InputError):
            return None
        return (low, float(best.x)) if best.fun <= 0 else None

    def _refine(self, low: float, high: float) -> _Trial:
        wanted = self.wanted
        try:
            root = float(brentq(self.gap, low, high, xtol=1e-14, rtol=1e-14))
        except (ConvergenceError, InputError) as error:
            raise NoSolutionError(f"{wanted.name} = {wanted.value:g}: bracketed, but a column inside the bracket was "
                                  f"not solved. {error}") from error
        best = min((root, low, high), key=lambda p: abs(self.gap(p)))
        if not self._met(best):
            raise NoSolutionError(f"{wanted.name} = {wanted.value:g}: the column jumps across it at "
                                  f"{self.vary(1.0).name} = {np.exp(root):.6g}, to "
                                  f"{wanted.value + self.gap(best):.6g} at the nearest", best=self.found[best].profile)
        return self.found[best]


def search_handle(column: Column, wanted: Searched, rest: tuple[Specification, ...]
            ) -> tuple[type[RefluxRatio] | type[DistillateRate] | type[BoilupRatio] | type[BottomsRate],
                       tuple[float, float]]:
    """What the search varies: the reflux ratio, or the distillate where that ratio is given; the boil-up ratio of a
    column without condenser."""
    feed = float(sum(f.flows.sum() for f in column.feeds)) - float(sum(d.rate for d in column.draws))
    ratio = wanted.bounds or (0.1, 40.0)
    rate = wanted.bounds or (0.02 * feed, 0.98 * feed)
    if column.condenser is None:
        return BoilupRatio, wanted.bounds or (0.05, 20.0)
    if any(isinstance(s, RefluxRatio) for s in rest):
        return DistillateRate, rate
    return RefluxRatio, ratio


def measured(profile: Profile, wanted: Searched) -> float:
    """The quantity a searched specification speaks of, in a solved column."""
    if isinstance(wanted, CondenserDuty):
        return profile.duties["condenser"]
    assert isinstance(wanted, ProductPurity | ComponentRecovery)
    flows = profile.products["top" if wanted.product is Product.TOP else "bottom"].flows
    part = float(flows[wanted.component])
    if isinstance(wanted, ProductPurity):
        return part / float(flows.sum())
    return part / float((profile.feeds.vapor + profile.feeds.liquid)[:, wanted.component].sum())
