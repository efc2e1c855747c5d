"""Rating the rows of a stage profile: what each contact stage would do to the vapour that enters it.

Held fixed for a tray: pressure, the entering vapour, the leaving liquid (composition and temperature), because the
efficiency is defined by them; the leaving vapour is computed. Held fixed for a packed segment: the mean bulk states
of its ends.
"""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field, fields, replace
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from ..equipment import (
    LIMITS,
    Contactor,
    ContactState,
    Hardware,
    Hydraulics,
    TransferCoefficients,
    by_contactor,
    contact_state,
    stage_coefficients,
)
from ..errors import InputError
from ..interface import InterfaceFlux
from ..properties.protocol import Array, Mask, PropertyModel
from ..stage import (
    FrothPoint,
    LiquidMixing,
    PlugFlow,
    PointMethod,
    Pools,
    SegmentResult,
    TrayResult,
    WellMixed,
    exponential_midpoint,
    liquid_temperature,
    segment_between_ends,
    tray_from_leaving_liquid,
    vapor_temperature,
)
from ..stage.tray import STRETCHES
from ..stage_profile import StageProfile
from .definitions import (
    NEAR_EQUILIBRIUM,
    equilibrium_vapor,
    murphree_vapor,
    small_driving_force,
    vaporization,
)

LONG = "segment too long: it would lose nine tenths of a component; use shorter ones"
UNMIXED = ("the leaving liquid does not fit: upstream it would hold less than nothing of a component; rated over the "
           "leaving liquid alone")


@dataclass(frozen=True)
class RatingOptions:
    """How the rows are rated.

    point : the vapour through the froth, `exponential_midpoint` (the fast default) or `integral` (the yardstick).
    mixing : of the liquid along a tray; None takes pools in series with the number the contactor's own Peclet number
        gives, (Pe + 2)/2, and one pool where it has none.
    driving_force_limit : a Murphree efficiency is flagged where |y* - y_in| is below it times max(y*, y_in).
    at_liquid_temperature : basis of y*; None takes the bubble point, and the liquid's temperature with masked
        components.
    local_coefficients : re-evaluate the coefficients at the local state up the froth.
    """

    point: PointMethod = exponential_midpoint
    mixing: LiquidMixing | None = None
    driving_force_limit: float = NEAR_EQUILIBRIUM
    at_liquid_temperature: bool | None = None
    local_coefficients: bool = False


@dataclass(frozen=True)
class Entering:
    """Streams entering contact rows: vapour from below with vapour feeds, liquid from above with liquid feeds."""

    V: Array
    y: Array
    T_V: Array
    L: Array
    x: Array
    T_L: Array


@dataclass(frozen=True)
class PackedRows:
    """Transfer units of packed segments, arrays over the packed rows.

    position: index among the rated rows. height m. N_OV, N_V, N_L: numbers of overall, vapour-film and liquid-film
    transfer units of each component, signed, over the segment; H_OV, H_V, H_L: their heights, m. HETP m. stripping:
    S_i = m_i V/L with m_i the slope of y* between the ends. undefined: where HETP has no value (S or N_OV not positive,
    or a driving force too small; it is infinite there). A component that does not move has no units and infinite
    heights.
    """

    position: NDArray[np.int64]
    height: Array
    N_OV: Array
    N_V: Array
    N_L: Array
    H_OV: Array
    H_V: Array
    H_L: Array
    stripping: Array
    HETP: Array
    undefined: Mask


@dataclass(frozen=True)
class RatedRows:
    """Contact rows of a profile, rated; arrays over rows (R) and components (R, n).

    ordinary: components in both phases, (n). number, kind; P Pa; T_L, T_V_in, T_V (of the computed vapour), T_bubble
    (of the leaving liquid, None on the liquid-temperature basis), K; V_in, V_out, L mol/s; x, y_in, y_out, y_star,
    y_profile. murphree; point_murphree: of the froth over the leaving liquid; flagged: a driving force too small for
    either; vaporization; dependent: the component with the largest y_out, to be left out when n-1 are used. flux
    mol/(m2 s), transferred mol/s, energy W; area m2 and its basis. interface_residual, energy_residual: of the
    interfaces; component_closure, energy_closure: of the
    balances. vapor_entropy_share: of the vapour film at the middle of the froth. hydraulics; pools: number in series.
    interfaces: (rows, interface at the middle of the froth or of the segment) of each group. notes: remark -> rows.
    """

    names: tuple[str, ...]
    ordinary: Mask
    number: NDArray[np.int64]
    kind: tuple[str, ...]
    P: Array
    T_L: Array
    T_V_in: Array
    T_V: Array
    T_bubble: Array | None
    V_in: Array
    V_out: Array
    L: Array
    x: Array
    y_in: Array
    y_out: Array
    y_star: Array
    y_profile: Array
    murphree: Array
    point_murphree: Array
    flagged: Mask
    vaporization: Array
    dependent: NDArray[np.int64]
    flux: Array
    transferred: Array
    energy: Array
    area: Array
    area_basis: tuple[str, ...]
    star_basis: str
    interface_residual: Array
    energy_residual: Array
    component_closure: Array
    energy_closure: Array
    vapor_entropy_share: Array
    hydraulics: Hydraulics
    pools: Array
    packed: PackedRows | None
    interfaces: tuple[tuple[NDArray[np.int64], InterfaceFlux], ...]
    notes: dict[str, Mask] = field(default_factory=dict)


def entering_streams(profile: StageProfile, properties: PropertyModel) -> tuple[NDArray[np.int64], Entering]:
    """Row indices of the contact stages and the streams that enter them.

    Raises `InputError` where a stage has no vapour or no liquid entering (its feed is missing).
    """
    S, n = profile.x.shape
    g, l = np.zeros((S, n)), np.zeros((S, n))
    HV, HL = np.zeros(S), np.zeros(S)
    T_V, T_L = profile.T_V.copy(), profile.T_L.copy()
    vapor, liquid = profile.V[:, None] * profile.y, profile.L[:, None] * profile.x
    g[:-1], l[1:] = vapor[1:], liquid[:-1]
    T_V[:-1], T_L[1:] = profile.T_V[1:], profile.T_L[:-1]
    HV[:-1] = (vapor * properties.vapor_enthalpy(profile.T_V, profile.P, profile.y)).sum(-1)[1:]
    HL[1:] = (liquid * properties.liquid_enthalpy(profile.T_L, profile.P, profile.x)).sum(-1)[:-1]
    mixed = np.zeros((2, S), bool)
    for feed in profile.feeds:
        row = profile.row_of(feed.stage, "feed")
        T, P = np.asarray(feed.temperature), profile.P[row]
        vaporous = feed.phase == "vapor"
        flows, heats, temperatures = (g, HV, T_V) if vaporous else (l, HL, T_L)
        enthalpy = properties.vapor_enthalpy if vaporous else properties.liquid_enthalpy
        mixed[0 if vaporous else 1, row] = flows[row].any()
        if not flows[row].any():
            temperatures[row] = feed.temperature
        flows[row] += feed.flow * np.asarray(feed.composition)
        heats[row] += feed.flow * (np.asarray(feed.composition) * enthalpy(T, P, np.asarray(feed.composition))).sum()
    rows = np.flatnonzero(profile.contact)
    for flows, words in ((g, "vapour"), (l, "liquid")):
        dry = rows[~(flows[rows].sum(-1) > 0)]
        if dry.size:
            raise InputError(f"{profile.source}: no {words} enters stage {profile.number[dry[0]]}: list its feed, or "
                             "add the row it comes from")
    for into, flows, heats, T, solve in ((mixed[0], g, HV, T_V, vapor_temperature), (mixed[1], l, HL, T_L,
                                                                                 liquid_temperature)):
        at = np.flatnonzero(into)
        if at.size:
            T[at] = solve(properties, profile.P[at], flows[at], heats[at], T[at])
    V, L = g[rows].sum(-1), l[rows].sum(-1)
    return rows, Entering(V, g[rows] / V[:, None], T_V[rows], L, l[rows] / L[:, None], T_L[rows])


def contact_rows(profile: StageProfile, properties: PropertyModel) -> tuple[NDArray[np.int64], Entering, Mask]:
    """Rows to rate, the streams that enter them, and which are packed; checks that profile and model fit each other."""
    if tuple(properties.names) != profile.names:
        raise InputError(f"properties: components {list(properties.names)}, but the profile has {list(profile.names)}")
    rows, entering = entering_streams(profile, properties)
    packed = np.array([profile.kind[row] == "segment" for row in rows])
    if packed.any() and profile.height is None:
        raise InputError(f"{profile.source}: rows of kind segment need a column height_m")
    return rows, entering, packed


def rate_rows(profile: StageProfile, hardware: Hardware, properties: PropertyModel,
              options: RatingOptions | None = None) -> RatedRows:
    """Rate every contact row of a profile, all rows of one contactor in one vectorised pass.

    Raises `InputError` (profile, hardware, properties that do not match), `ConvergenceError` (an interface without a
    solution). Source of the method: Krishna & Standart 1976 for the films, pools in series after Gerster et al. 1958.
    """
    options = options or RatingOptions()
    rows, entering, packed = contact_rows(profile, properties)
    number = profile.number[rows]
    kind = tuple(profile.kind[row] for row in rows)
    bulk = bulk_states(profile, rows, entering, packed)
    total = Collected(rows.size, len(profile.names))
    heights: list[PackedRows] = []
    for contactor, index in by_contactor(hardware, number):
        for member, is_packed in ((index[~packed[index]], False), (index[packed[index]], True)):
            if member.size:
                group = RowGroup(profile, rows, entering, bulk, member, contactor, properties)
                if is_packed:
                    segment = group.segments()
                    heights.append(packed_rows(member, group, profile.x[rows[member]], profile.T_L[rows[member]],
                                               segment, options))
                    total.add(member, group, segment, np.ones(member.size))
                else:
                    total.add(member, group, *group.trays(options))
    y_out, T_V, V_out = total.y, total.T_V, total.V
    P, T_L, x = profile.P[rows], profile.T_L[rows], profile.x[rows]
    star = equilibrium_vapor(properties, P, x, T_L, entering.y, y_out=y_out,
                             at_liquid_temperature=options.at_liquid_temperature)
    ordinary = properties.condensable & properties.volatile
    K = properties.k_value(T_L, P, x, y_out)
    murphree = murphree_vapor(entering.y, y_out, star.composition)
    g_in = entering.V[:, None] * entering.y
    closure = np.abs(g_in - total.transferred - V_out[:, None] * y_out).max(-1) / entering.V
    return RatedRows(
        names=profile.names, ordinary=ordinary, number=number, kind=kind, P=P, T_L=T_L, T_V_in=entering.T_V, T_V=T_V,
        T_bubble=star.temperature if star.basis == "bubble point" else None, V_in=entering.V, V_out=V_out,
        L=total.L, x=x, y_in=entering.y, y_out=y_out, y_star=star.composition, y_profile=profile.y[rows],
        murphree=murphree, point_murphree=murphree_vapor(entering.y, total.y_point, star.composition),
        flagged=small_driving_force(entering.y, star.composition, options.driving_force_limit),
        vaporization=vaporization(K, x, y_out, ordinary), dependent=y_out.argmax(-1), flux=total.flux,
        transferred=total.transferred, energy=total.energy, area=total.area, area_basis=tuple(total.basis),
        star_basis=star.basis, interface_residual=total.films, energy_residual=total.heat,
        component_closure=closure, energy_closure=total.energy_closure, vapor_entropy_share=total.share,
        hydraulics=total.hydraulics(), pools=total.pools,
        packed=_joined(heights), interfaces=tuple(total.interfaces),
        notes=total.notes)


class StateChange(Protocol):
    """A change of what a group of rows is rated with, as a sample of uncertain inputs makes it."""

    def state(self, state: ContactState) -> ContactState: ...

    def coefficients(self, coefficients: TransferCoefficients) -> TransferCoefficients: ...


@dataclass(frozen=True)
class BulkStates:
    """Bulk states the coefficients are evaluated at, over the contact rows."""

    y: Array
    T_V: Array
    V: Array
    x: Array
    T_L: Array
    L: Array


def bulk_states(profile: StageProfile, rows: NDArray[np.int64], entering: Entering, packed: Mask) -> BulkStates:
    """Vapour: mean of the ends. Liquid: the leaving one on a tray, the mean of the ends in a segment. Before draws."""
    y = (entering.y + profile.y[rows]) / 2
    T_V = (entering.T_V + profile.T_V[rows]) / 2
    leaving = {"vapor": profile.V[rows].copy(), "liquid": profile.L[rows].copy()}
    for draw in profile.draws:
        leaving[draw.phase][rows == profile.row_of(draw.stage, "draw")] += draw.flow
    L, V = leaving["liquid"], (entering.V + leaving["vapor"]) / 2
    both = packed[:, None]
    x = np.where(both, (entering.x + profile.x[rows]) / 2, profile.x[rows])
    T_L = np.where(packed, (entering.T_L + profile.T_L[rows]) / 2, profile.T_L[rows])
    return BulkStates(y, T_V, V, x, T_L, np.where(packed, (entering.L + L) / 2, L))


class RowGroup:
    """Rows that share a contactor and a kind."""

    def __init__(self, profile: StageProfile, rows: NDArray[np.int64], entering: Entering, bulk: BulkStates,
                 member: NDArray[np.int64], contactor: Contactor, properties: PropertyModel,
                 change: StateChange | None = None) -> None:
        """`member` picks rows, a row may come more than once; `change` alters state and coefficients of each."""
        self.member, self.contactor, self.properties, self.change = member, contactor, properties, change
        self.P = profile.P[rows[member]]
        self.entering = Entering(*(getattr(entering, name)[member] for name in ("V", "y", "T_V", "L", "x", "T_L")))
        self.bulk = BulkStates(*(getattr(bulk, name)[member] for name in ("y", "T_V", "V", "x", "T_L", "L")))
        height = None if profile.height is None else profile.height[rows[member]]
        b = self.bulk
        self.state: ContactState = contact_state(properties, b.V, b.L, b.T_V, b.T_L, self.P, b.y, b.x, height)
        if change is not None:
            self.state = change.state(self.state)
        stages = profile.number[rows[member]]
        self.coefficients: TransferCoefficients = stage_coefficients(contactor, self.state, stages)
        if change is not None:
            self.coefficients = change.coefficients(self.coefficients)

    def trays(self, options: RatingOptions, *, start: InterfaceFlux | None = None, tolerance: float = 1e-10,
              stretches: int = STRETCHES) -> tuple[TrayResult, Array]:
        """Leaving vapour of each tray and the number of pools; `start`, `tolerance` as in `FrothPoint`."""
        e, b, state = self.entering, self.bulk, self.state
        point = FrothPoint(e.V, e.y, e.T_V, b.x, b.T_L, self.P, self.coefficients, state.vapor.molar_density,
                           state.liquid.molar_density, start, tolerance)
        mixing, pools = options.mixing, np.ones(e.V.shape)
        peclet: Callable[[ContactState], Array] | None = getattr(self.contactor, "peclet", None)
        if mixing is None and peclet is not None:
            pools = (peclet(state) + 2.0) / 2.0
            mixing = Pools(pools)
        elif mixing is not None:
            mixing = mixing.taken(self.member)
            pools = np.broadcast_to(np.inf if isinstance(mixing, PlugFlow) else mixing.pools, pools.shape)
        local = self.local if options.local_coefficients else None
        return tray_from_leaving_liquid(point, b.L, self.properties, mixing or WellMixed(), method=options.point,
                                        local=local, stretches=stretches), pools

    def local(self, V: Array, y: Array, T_V: Array) -> TransferCoefficients:
        """Coefficients at a local state of the vapour, over the leaving liquid."""
        b = self.bulk
        state = contact_state(self.properties, V, b.L, T_V, b.T_L, self.P, y, b.x)
        if self.change is None:
            return self.contactor.transfer(state)
        return self.change.coefficients(self.contactor.transfer(self.change.state(state)))

    def segments(self) -> SegmentResult:
        """Vapour leaving each segment."""
        e, b, state = self.entering, self.bulk, self.state
        return segment_between_ends(e.V, e.y, e.T_V, (b.y, b.T_V), (b.x, b.T_L), self.P, self.coefficients,
                                    state.vapor.molar_density, state.liquid.molar_density, self.properties)


class Collected:
    """Arrays over all rows, filled group by group."""

    def __init__(self, R: int, n: int) -> None:
        self.y, self.y_point, self.transferred, self.flux = (np.zeros((R, n)) for _ in range(4))
        self.V, self.T_V, self.L, self.energy, self.area, self.pools = (np.zeros(R) for _ in range(6))
        self.films, self.heat, self.energy_closure, self.share = (np.zeros(R) for _ in range(4))
        self.basis = [""] * R
        self.interfaces: list[tuple[NDArray[np.int64], InterfaceFlux]] = []
        self.limits: dict[str, Array] = {}
        self.notes: dict[str, Mask] = {}

    def add(self, member: NDArray[np.int64], group: RowGroup, result: TrayResult | SegmentResult, pools: Array) -> None:
        coefficients = group.coefficients
        self.y[member], self.V[member], self.T_V[member] = result.y, result.V, result.T_V
        self.y_point[member] = result.point.y if isinstance(result, TrayResult) else result.y
        self.transferred[member], self.energy[member] = result.transferred, result.energy
        self.area[member], self.pools[member] = coefficients.area, pools
        self.flux[member] = result.transferred / coefficients.area[..., None]
        self.L[member] = group.bulk.L
        interface = result.point.middle if isinstance(result, TrayResult) else result.interface
        if isinstance(result, TrayResult):
            self.films[member], self.heat[member] = result.interface_residual, result.energy_residual
            self.energy_closure[member] = result.point.energy_closure
            if result.unmixed.any():
                self.notes.setdefault(UNMIXED, np.zeros(self.V.size, bool))[member] = result.unmixed
        else:
            self.films[member], self.heat[member] = interface.residual, interface.energy_residual
        if isinstance(result, SegmentResult) and result.long.any():
            self.notes.setdefault(LONG, np.zeros(self.V.size, bool))[member] = result.long
        self.share[member] = interface.vapor_entropy_share
        self.interfaces.append((member, interface))
        for row in member:
            self.basis[row] = coefficients.basis
        hydraulics = group.contactor.hydraulics(group.state)
        for name in LIMITS:
            value = getattr(hydraulics, name)
            if value is not None:
                self.limits.setdefault(name, np.full(self.V.size, np.nan))[member] = value
        for note, where in {**hydraulics.notes, **coefficients.notes}.items():
            self.notes.setdefault(note, np.zeros(self.V.size, bool))[member] |= where

    def hydraulics(self) -> Hydraulics:
        """Limits of all rows; a row whose contactor has no method for one holds NaN there (an empty cell)."""
        found = Hydraulics(flooding=None)
        for name, values in self.limits.items():
            found = replace(found, **{name: values})  # type: ignore[arg-type]
        return found


def packed_rows(position: NDArray[np.int64], group: RowGroup, x_out: Array, T_out: Array, result: SegmentResult,
                options: RatingOptions) -> PackedRows:
    """Transfer units and HETP of each component from what segments do between their ends.

    At the mean states, with V dy_i = -(N_i - y_i N_t) area: N_OV,i = dy_i/(y* - y)_i, N_V,i = dy_i/(y_I - y)_i, N_L,i =
    (N_i - x_i N_t) area/(L (x_I - x)_i); H = Z/N. HETP_i = H_OV,i ln S_i/(S_i - 1), S_i = m_i V/L, m_i the slope of y*
    between the ends. The same as Z/N_eq,i with N_eq,i = ln(1 + E_i (S_i - 1))/ln S_i and the Murphree efficiency E_i
    that N_OV,i gives a segment of straight lines (Colburn 1939). x_out, T_out: the liquid that leaves below.
    """
    e, bulk, P, properties = group.entering, group.bulk, group.P, group.properties
    assert group.state.height is not None
    Z = group.state.height

    def star(x: Array, T: Array) -> Array:
        return equilibrium_vapor(properties, P, x, T, e.y,
                                 at_liquid_temperature=options.at_liquid_temperature).composition

    star_mean, star_out, star_in = star(bulk.x, bulk.T_L), star(x_out, T_out), star(e.x, e.T_L)
    with np.errstate(divide="ignore", invalid="ignore"):
        dy = result.composition_slope / bulk.V[:, None]
        S = (star_in - star_out) / (e.x - x_out) * (bulk.V / bulk.L)[:, None]
        N_OV = dy / (star_mean - bulk.y)
        N_V = dy / (result.interface.y_I - bulk.y)
        N, area = result.interface.N, group.coefficients.area[:, None]
        dx = area * (N - bulk.x * N.sum(-1, keepdims=True)) / bulk.L[:, None]
        N_L = dx / (result.interface.x_I - bulk.x)
        heights = [Z[:, None] / N for N in (N_OV, N_V, N_L)]
        near = np.abs(S - 1.0) < 1e-6
        HETP = heights[0] * np.where(near, 1.0, np.log(np.where(S > 0, S, 1.0)) / np.where(near, 1.0, S - 1.0))
    small = small_driving_force(bulk.y, star_mean, options.driving_force_limit)
    undefined = ~((S > 0) & (N_OV > 0) & np.isfinite(HETP)) | small
    # Nothing over nothing (an absent component) is no unit and an infinite height; a pole is infinite.
    units = [np.where(np.isnan(value), 0.0, value) for value in (N_OV, N_V, N_L)]
    heights = [np.where(np.isnan(value), np.inf, value) for value in heights]
    return PackedRows(position, Z, units[0], units[1], units[2], heights[0], heights[1], heights[2],
                      np.where(np.isfinite(S), S, 0.0), np.where(undefined, np.inf, HETP), undefined)


def _joined(parts: list[PackedRows]) -> PackedRows | None:
    if not parts:
        return None
    order = np.argsort(np.concatenate([part.position for part in parts]))
    return PackedRows(**{f.name: np.concatenate([getattr(part, f.name) for part in parts])[order]
                         for f in fields(PackedRows)})
