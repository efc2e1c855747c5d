"""Specifications that are met outside the column's equations, by a bounded search of one of its other specifications.

Purity is no monotone function of the reflux ratio where the contact area is fixed (more vapour, fewer transfer units),
and a middle boiler's purity has a maximum in the distillate rate. So the search walks up from the lower bound, brackets
the first crossing, and tells the best that can be reached when there is none.
"""
from __future__ import annotations

import warnings
from collections.abc import Callable

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
    ReboilerDuty,
    RefluxRatio,
    Searched,
    Specification,
)

GRID = 13
TOLERANCE = 1e-9
"""Relative, of the value specified."""

Solver = Callable[[Column, Profile | None], Profile]


def with_search(column: Column, solve: Solver) -> Profile:
    """The column solved with its searched specification met.

    `solve(column, previous)` solves a column without one; `previous` is the last profile found, a possible start.

    Raises
    ------
    NoSolutionError : the value is not reached within the bounds; the message tells the best found and where.
    """
    wanted = column.search
    assert wanted is not None
    rest = tuple(s for s in column.specifications if s is not wanted)
    vary, bounds = search_handle(column, wanted, rest)
    found: dict[float, Profile] = {}
    problems: list[str] = []

    def gap(log_value: float) -> float:
        with warnings.catch_warnings():                # doubts about a trial are no doubts about the answer
            warnings.simplefilter("ignore", RateBasedWarning)
            profile = solve(column.with_(specifications=(*rest, vary(float(np.exp(log_value))))),
                            next(reversed(found.values()), None))
        found[log_value] = profile
        return measured(profile, wanted) - wanted.value

    grid = np.linspace(np.log(bounds[0]), np.log(bounds[1]), GRID)
    gaps: list[tuple[float, float]] = []
    for point in grid:
        try:
            gaps.append((float(point), gap(float(point))))
        except ConvergenceError as error:
            problems.append(f"{np.exp(point):.4g}: {error}")
            continue
        if len(gaps) > 1 and gaps[-1][1] * gaps[-2][1] <= 0:
            return _refine(gap, gaps[-2][0], gaps[-1][0], found, wanted)
    if not gaps:
        raise NoSolutionError(f"{wanted.name} = {wanted.value:g}: no column was solved between {bounds[0]:g} and "
                              f"{bounds[1]:g}. {problems[0]}")
    crossing = _around_the_best(gap, gaps, wanted)
    if crossing is not None:
        return _refine(gap, *crossing, found, wanted)
    best = min(found, key=lambda p: abs(measured(found[p], wanted) - wanted.value))
    name = vary(1.0).name
    raise NoSolutionError(
        f"{wanted.name} = {wanted.value:g} is not reached with {name} from {bounds[0]:g} to {bounds[1]:g}: the best is "
        f"{measured(found[best], wanted):.6g} at {name} = {np.exp(best):.4g}"
        + (f"; {len(problems)} of {GRID} trial columns were not solved" if problems else ""), best=found[best])


def _around_the_best(gap: Callable[[float], float], gaps: list[tuple[float, float]], wanted: Searched
                     ) -> tuple[float, float] | None:
    """A maximum or minimum between grid points may still cross the value wanted."""
    points = np.array([p for p, _ in gaps])
    signs = np.sign(gaps[0][1])
    k = int(np.argmin([abs(g) for _, g in gaps]))
    if len(points) < 2:
        return None
    low, high = points[max(k - 1, 0)], points[min(k + 1, len(points) - 1)]
    if low == high:
        return None
    try:
        best = minimize_scalar(lambda p: signs * gap(float(p)), bounds=(low, high), method="bounded",
                               options={"xatol": 1e-3})
    except ConvergenceError:
        return None
    if best.fun <= 0:
        return float(low), float(best.x)
    return None


def _refine(gap: Callable[[float], float], low: float, high: float, found: dict[float, Profile],
            wanted: Searched) -> Profile:
    try:
        root = brentq(gap, low, high, xtol=1e-14, rtol=1e-14)
    except ConvergenceError as error:
        raise NoSolutionError(f"{wanted.name} = {wanted.value:g}: bracketed, but a column inside the bracket was not "
                              f"solved. {error}") from error
    if root not in found:
        gap(root)
    return found[root]


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
    if any(isinstance(s, DistillateRate | BottomsRate | BoilupRatio | ReboilerDuty) for s in rest) or not rest:
        return RefluxRatio, ratio
    raise InputError(f"specifications: nothing is left to vary for {wanted.name}")


def measured(profile: Profile, wanted: Searched) -> float:
    """The quantity a searched specification speaks of, in a solved column."""
    if isinstance(wanted, CondenserDuty):
        return profile.duties["condenser"]
    assert isinstance(wanted, ProductPurity | ComponentRecovery)
    flows = profile.products["top" if wanted.product is Product.TOP else "bottom"].flows
    if not 0 <= wanted.component < flows.shape[0]:
        raise InputError(f"{wanted.name}.component = {wanted.component}: expected an index from 0 to "
                         f"{flows.shape[0] - 1}")
    part = float(flows[wanted.component])
    if isinstance(wanted, ProductPurity):
        return part / float(flows.sum())
    return part / float((profile.feeds.vapor + profile.feeds.liquid)[:, wanted.component].sum())
