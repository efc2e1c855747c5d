"""The same column with another number of contact stages, and packed beds on finer grids."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ..efficiency_set import EfficiencySet
from ..equipment.protocol import Contactor
from ..equipment.sections import Section
from ..errors import InputError
from ..properties.protocol import Array, PropertyModel
from ..show import Shown
from .contact import Averaged, ContactorLayout, FlowPattern
from .definition import AnyFeed, Column, ContactorPressure, LiquidFeed, VaporDraw, VaporFeed
from .problem import make_problem
from .profile import Profile
from .ratebased import solve_ratebased
from .search import search_handle

if TYPE_CHECKING:
    import pandas as pd


def stage_map(column: Column, contact_stages: int) -> NDArray[np.int64]:
    """New number (from 1) of each old stage: ends stay ends, contact stages keep their relative place."""
    if contact_stages < 1:
        raise InputError(f"contact_stages = {contact_stages}: expected at least one")
    top = int(column.condenser is not None)
    old = int(column.contact.sum())
    place = np.arange(old) * ((contact_stages - 1) / max(old - 1, 1))
    numbers = np.floor(place + 0.5).astype(np.int64) + 1 + top
    whole = np.empty(column.stages, np.int64)
    whole[column.contact] = numbers
    if top:
        whole[0] = 1
    if column.reboiler is not None:
        whole[-1] = contact_stages + top + 1
    return whole


def resized(column: Column, contact_stages: int) -> Column:
    """The column with another number of contact stages; feeds, draws, duties and pressures keep their relative place.

    Heat losses and segment heights of the new stages are those of the old ones at their place. A column of one contact
    stage keeps its vapour feeds below and all others above.
    """
    numbers = stage_map(column, contact_stages)
    stages = contact_stages + column.stages - int(column.contact.sum())
    old, new = np.linspace(0.0, 1.0, column.stages), np.linspace(0.0, 1.0, stages)
    duties: dict[int, float] = {}
    for j, q in column.duties.items():
        duties[int(numbers[j - 1])] = duties.get(int(numbers[j - 1]), 0.0) + q
    pressure: Array | ContactorPressure
    if isinstance(column.pressure, ContactorPressure):
        pressure = column.pressure
    else:
        pressure = np.interp(new, old, column.pressure)
    height = None if column.segment_height is None else np.interp(new, old, column.segment_height)
    def place(feed: AnyFeed) -> int:
        number = int(numbers[feed.stage - 1])
        single = column.contact.sum() == 1 and column.contact[feed.stage - 1]
        return number + contact_stages - 1 if single and isinstance(feed, VaporFeed) else number

    return Column(stages, [replace(f, stage=place(f)) for f in column.feeds], pressure,
                  condenser=column.condenser, reboiler=column.reboiler, specifications=column.specifications,
                  draws=[replace(d, stage=int(numbers[d.stage - 1])) for d in column.draws], duties=duties,
                  heat_loss=np.interp(new, old, column.heat_loss), segment_height=height)


def resized_efficiency(efficiency: EfficiencySet, column: Column, contact_stages: int) -> EfficiencySet:
    """Each contact stage takes the efficiencies of the old one nearest to its relative place."""
    c = np.flatnonzero(column.contact)
    nearest = c[np.rint(np.linspace(0, c.size - 1, contact_stages)).astype(int)]
    rows = np.concatenate(([0] * int(column.condenser is not None), nearest,
                           [column.stages - 1] * int(column.reboiler is not None))).astype(int)
    return EfficiencySet(efficiency.kind, efficiency.values[rows], efficiency.dependent[rows],
                         efficiency.vapor_offset[rows], efficiency.liquid_offset[rows], efficiency.basis,
                         efficiency.given[rows])


def resized_layout(contactor: ContactorLayout, numbers: NDArray[np.int64], last_of: NDArray[np.int64] | None = None
                   ) -> ContactorLayout:
    """Sections at their new stage numbers; one contactor for all stays."""
    if isinstance(contactor, Contactor):
        return contactor
    sections = [Section(a, b, c) for (a, b), c in contactor.items()] if isinstance(contactor, Mapping) else contactor
    ordered = sorted(sections, key=lambda s: s.first)
    firsts = [int(numbers[max(s.first, 1) - 1]) for s in ordered]
    ends = numbers if last_of is None else last_of
    # a section ends just before the next one begins; one that no stage is left for falls out
    lasts = [first - 1 for first in firsts[1:]] + [int(ends[min(s.last, numbers.size) - 1]) for s in ordered[-1:]]
    return [Section(first, last, s.contactor) for first, last, s in zip(firsts, lasts, ordered) if last >= first]


def halved_segments(column: Column, properties: PropertyModel, P: Array | None = None) -> Column:
    """A packed column with every segment cut in two: vapour feeds enter the lower, liquid feeds the upper half; vapour
    is drawn from the upper, liquid from the lower half; duties and losses are shared; pressures are those of the whole.

    Feeds that are flashed are split into their phases first, at the pressures P of the solved column where they are
    the hardware's own.
    """
    if column.segment_height is None:
        raise InputError("column: trays cannot be cut; a grid is refined in a packed bed")
    problem = make_problem(_without_search(column), properties, P)
    upper, lower = halves(column)
    feeds: list[AnyFeed] = []
    for feed, split in zip(column.feeds, problem.feeds.streams):
        if split.liquid.sum() > 0:
            feeds.append(LiquidFeed(int(upper[feed.stage - 1]), split.liquid, split.temperature))
        if split.vapor.sum() > 0:
            feeds.append(VaporFeed(int(lower[feed.stage - 1]), split.vapor, split.temperature))
    draws = [replace(d, stage=int((upper if isinstance(d, VaporDraw) else lower)[d.stage - 1])) for d in column.draws]
    duties: dict[int, float] = {}
    for j, q in column.duties.items():
        duties[int(upper[j - 1])] = duties[int(lower[j - 1])] = 0.5 * q
    rows = np.repeat(np.arange(column.stages), np.where(column.contact, 2, 1))
    cut = np.where(column.contact, 0.5, 1.0)[rows]
    pressure: Array | ContactorPressure
    if isinstance(column.pressure, ContactorPressure):
        pressure = replace(column.pressure, estimate=0.5 * column.pressure.estimate)
    else:
        pressure = column.pressure[rows]
    return Column(rows.size, feeds, pressure, condenser=column.condenser, reboiler=column.reboiler,
                  specifications=column.specifications, draws=draws, duties=duties,
                  heat_loss=column.heat_loss[rows] * cut, segment_height=column.segment_height[rows] * cut)


def _without_search(column: Column) -> Column:
    """The column with any value in place of a searched specification: for its feeds only."""
    rest = tuple(s for s in column.specifications if s is not column.search)
    if column.search is None:
        return column
    vary, bounds = search_handle(column, column.search, rest)
    return column.with_(specifications=(*rest, vary(bounds[0])))


def halves(column: Column) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """Numbers of the upper and of the lower half of each old stage; an end is its own half."""
    sizes = np.where(column.contact, 2, 1)
    lower = np.cumsum(sizes)
    return lower - sizes + 1, lower


@dataclass(frozen=True, eq=False)
class GridRefinement(Shown):
    """Packed bed on successive grids, each with half the segment height of the one before.

    segments: contact stages, (G,). profiles: one a grid. products: component flows of the end products side by side,
    (G, 2n), mol/s. difference: largest change of a product flow from one grid to the next over all feeds, (G-1,).
    order: log2 of the ratio of successive differences, (G-2,): 2 for averaged bulk states, 1 for mixed ones.
    extrapolated: Richardson's estimate from the two finest grids at order 2 (order 1 where a phase is mixed), (2n,).
    error: of the finest grid, estimated, over all feeds.
    """

    segments: NDArray[np.int64]
    profiles: tuple[Profile, ...]
    products: Array
    difference: Array
    order: Array
    extrapolated: Array
    error: float

    def to_frame(self) -> pd.DataFrame:
        """One row a grid."""
        import pandas as pd
        G = self.segments.size
        difference, order = np.full(G, np.nan), np.full(G, np.nan)
        difference[1:], order[2:] = self.difference, self.order
        return pd.DataFrame({"segments": self.segments, "difference": difference, "order": order})


LARGEST_AREA_CHANGE = 1.5


def _second_order(pattern: FlowPattern) -> bool:
    """Whether the bulk of a short segment is the mean of what enters and what leaves."""
    short = np.array([1e-6])
    shares = np.concatenate((pattern.weight(short), pattern.temperature_weight(short)))
    return bool(np.abs(shares - 0.5).max() < 1e-3)


def refine_grid(column: Column, properties: PropertyModel, contactor: ContactorLayout, *, grids: int = 4,
                vapor: FlowPattern | None = None, liquid: FlowPattern | None = None,
                area_follows_height: bool = True) -> GridRefinement:
    """Solve a packed column on `grids` grids (at least 3) and show the order of its convergence.

    area_follows_height: the contactor's area follows the segment height, as that of a packing does; False for fixed
    coefficients: their area is then halved with each grid.

    The order that the extrapolation takes is that of the flow patterns: 2 where both bulk states tend to the mean of
    entering and leaving state in short segments, else 1.

    Raises
    ------
    InputError : a column of trays, fewer than three grids, an area of the bed that changes from one grid to the next.
    ConvergenceError : as for `solve_ratebased`.
    """
    if grids < 3:
        raise InputError(f"grids = {grids}: an order needs three")
    profiles: list[Profile] = []
    counts: list[int] = []
    share = 1.0
    for level in range(grids):
        if level:
            upper, lower = halves(column)
            P = profiles[-1].P if isinstance(column.pressure, ContactorPressure) else None
            column, contactor = halved_segments(column, properties, P), resized_layout(contactor, upper, lower)
            share *= 1.0 if area_follows_height else 0.5
        profiles.append(solve_ratebased(column, properties, contactor, vapor=vapor, liquid=liquid, area_factor=share))
        counts.append(int(column.contact.sum()))
        areas = [float(p.record().area.sum()) for p in profiles[-2:]]
        if max(areas) > LARGEST_AREA_CHANGE * min(areas):
            raise InputError(f"area_follows_height = {area_follows_height}: the area of the bed goes from "
                             f"{areas[0]:.4g} to {areas[-1]:.4g} m2 when its {counts[-2]} segments are halved; the "
                             f"area of this contactor does{' not' * area_follows_height} follow the height")
    products = np.array([np.concatenate((p.products["top"].flows, p.products["bottom"].flows)) for p in profiles])
    feed = float((profiles[0].feeds.vapor + profiles[0].feeds.liquid).sum())
    difference = np.abs(np.diff(products, axis=0)).max(1) / feed
    safe = np.maximum(difference, 1e-300)
    order = np.log2(safe[:-1] / safe[1:])
    setup = (vapor or Averaged(), liquid or Averaged())
    p = 2.0 if all(_second_order(pattern) for pattern in setup) else 1.0
    correction = (products[-1] - products[-2]) / (2.0 ** p - 1.0)
    return GridRefinement(np.array(counts), tuple(profiles), products, difference, order, products[-1] + correction,
                          float(np.abs(correction).max() / feed))

