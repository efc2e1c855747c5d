"""Assembly of the rate-based column: stage blocks, interfaces condensed, rows of condenser and reboiler.

Bulk rows of a stage, liquid half first: n balances, energy of the liquid, then of the vapour. The interface unknowns of
a contact stage follow from its own bulk unknowns and, where a bulk state is a mean of both ends, from its neighbours'.
"""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..interface import InterfaceBlocks
from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import Array
from .contact import FlowPattern, Layout, Transfer, film_transfer_units, transfer
from .ends import bubble_vapor, condenser_rows, equilibrium_part, one_stage, reboiler_rows
from .problem import Problem
from .stage_system import Caloric, Entering, StageBlocks, StageUnknowns, stage_residuals
from .steps import after_draw


@dataclass(frozen=True)
class RateState:
    """Bulk unknowns of the S stages, interface unknowns z = (N, u, T_I) of the C contact stages; y_I of the last
    iterate, y_condenser: bubble vapour of a total condenser."""

    v: Array
    T_V: Array
    l: Array
    T_L: Array
    z: Array
    y_I: Array
    y_condenser: Array


@dataclass(frozen=True)
class Shares:
    """Share of the entering state in the bulk state of the C contact stages: compositions and temperatures, (C,)."""

    y: Array
    x: Array
    T_V: Array
    T_L: Array

    def any(self) -> bool:
        """Whether any bulk state depends on what enters."""
        return bool(self.y.any() or self.x.any() or self.T_V.any() or self.T_L.any())


@dataclass(frozen=True)
class RateSetup:
    """What does not change while the column is solved: contactors, flow patterns, factor on all areas; shares of the
    entering states, which the solver sets from its start."""

    problem: Problem
    layout: Layout
    vapor: FlowPattern
    liquid: FlowPattern
    area_factor: float = 1.0
    shares: Shares | None = None


@dataclass(frozen=True)
class RateSystem:
    """Condensed residual and blocks (S, m[, m]), the largest scaled row before condensation and where it is; the
    interface step is -(z0 + z_own d + z_below d_below + z_above d_above)."""

    rhs: Array
    diagonal: Array
    lower: Array
    upper: Array
    bulk: Array
    interface: Array
    z0: Array
    z_own: Array
    z_below: Array | None
    z_above: Array | None
    blocks: StageBlocks
    transfer: Transfer


@dataclass(frozen=True)
class PhaseLinks:
    """One phase between neighbours: net flows (S, n) and their derivative by the flows before draws (S, n, n); partial
    molar enthalpies H and heat capacities cp of what leaves; share of the neighbour's stream in the mixing temperature
    of what enters, (S,), and the derivative of that temperature by the neighbour's flows, (S, n)."""

    net: Array
    slope: Array
    H: Array
    cp: Array
    share: Array
    temperature_slope: Array


def entering(problem: Problem, state: RateState) -> tuple[Entering, Entering, PhaseLinks, PhaseLinks]:
    """What enters each stage from below and from above, with what the band needs to know of vapour and liquid."""
    properties, feeds = problem.properties, problem.feeds
    rising, d_rising = after_draw(state.v, problem.vapor_draw)
    falling, d_falling = after_draw(state.l, problem.liquid_draw)
    y, x = state.v / state.v.sum(1, keepdims=True), state.l / state.l.sum(1, keepdims=True)
    HV = np.broadcast_to(properties.vapor_enthalpy(state.T_V, problem.P, y), y.shape)
    HL = np.broadcast_to(properties.liquid_enthalpy(state.T_L, problem.P, x), x.shape)
    CV = vapor_heat_capacity(properties, state.T_V, problem.P, y)
    CL = liquid_heat_capacity(properties, state.T_L, problem.P, x)
    v_in, hv_in = feeds.vapor.copy(), feeds.vapor_enthalpy.copy()
    l_in, hl_in = feeds.liquid.copy(), feeds.liquid_enthalpy.copy()
    v_in[:-1] += rising[1:]
    l_in[1:] += falling[:-1]
    hv_in[:-1] += (rising * HV).sum(1)[1:]
    hl_in[1:] += (falling * HL).sum(1)[:-1]
    T_V_in, share_V, slope_V = _mixing(feeds.vapor, feeds.vapor_temperature, rising, CV, state.T_V, 1)
    T_L_in, share_L, slope_L = _mixing(feeds.liquid, feeds.liquid_temperature, falling, CL, state.T_L, -1)
    return (Entering(v_in, T_V_in, hv_in), Entering(l_in, T_L_in, hl_in),
            PhaseLinks(rising, d_rising, HV, CV, share_V, slope_V),
            PhaseLinks(falling, d_falling, HL, CL, share_L, slope_L))


def _mixing(feed: Array, T_feed: Array, flow: Array, cp: Array, T: Array, shift: int) -> tuple[Array, Array, Array]:
    """Mixing temperature of the neighbour's stream and the feed, weighed by heat capacity flows (by moles when there
    are none); share of the neighbour, (S,), and derivative by its flows, (S, n). shift = 1: the neighbour is below."""
    S = T.shape[0]
    own, last = (slice(0, S - 1), slice(1, S)) if shift > 0 else (slice(1, S), slice(0, S - 1))
    weights = cp if cp.any() else np.ones_like(cp)
    brought = np.zeros(S)
    T_neighbour, cp_neighbour = np.zeros(S), np.ones_like(cp)
    brought[own] = (flow * weights).sum(1)[last]
    T_neighbour[own], cp_neighbour[own] = T[last], weights[last]
    added = np.where(feed.any(1), (feed * cp_neighbour).sum(1), 0.0)
    total = np.where(brought + added > 0, brought + added, 1.0)
    mixed = (brought * T_neighbour + added * T_feed) / total
    slope = (T_neighbour - mixed)[:, None] * cp_neighbour / total[:, None]
    return mixed, brought / total, slope


def rate_system(setup: RateSetup, state: RateState, held: InterfaceBlocks | None = None) -> RateSystem:
    """Residual and condensed blocks at a state; `held` as for `stage_residuals`."""
    problem = setup.problem
    S, n = problem.S, problem.n
    m = 2 * n + 2
    c = problem.contact
    vapor_in, liquid_in, vapor, liquid = entering(problem, state)
    shares = flow_shares(setup, state) if setup.shares is None else setup.shares
    coefficients = _coefficients(setup, state, vapor_in, liquid_in, shares)
    unknowns = StageUnknowns(state.v[c], state.T_V[c], state.l[c], state.T_L[c], state.z[:, :n], state.z[:, n:2 * n],
                             state.z[:, 2 * n])
    blocks = stage_residuals(
        unknowns, _take(vapor_in, c), _take(liquid_in, c), problem.properties, problem.P[c],
        coefficients.coefficients, coefficients.c_vapor, coefficients.c_liquid, duty=problem.duty[c],
        vapor_weight=shares.y, liquid_weight=shares.x, vapor_temperature_weight=shares.T_V,
        liquid_temperature_weight=shares.T_L, flow_scale=problem.F, energy_scale=problem.energy_scale,
        y_interface=state.y_I, leaving=Caloric(vapor.H[c], vapor.cp[c], liquid.H[c], liquid.cp[c]),
        held=held)
    bulk = np.zeros((S, m))
    D, lower, upper = np.zeros((S, m, m)), np.zeros((S, m, m)), np.zeros((S, m, m))
    bulk[c], D[c] = blocks.bulk, blocks.bulk_by_bulk

    # the entering streams by the neighbours' unknowns: flows, temperature, enthalpy
    below, above = _stream_slopes(vapor, 1), _stream_slopes(liquid, -1)
    upper[c, :, :n + 1] = blocks.bulk_by_vapor_in @ below[c]
    lower[c, :, n + 1:] = blocks.bulk_by_liquid_in @ above[c]
    z_below = None if blocks.interface_by_vapor_in is None else blocks.interface_by_vapor_in @ below[c]
    z_above = None if blocks.interface_by_liquid_in is None else blocks.interface_by_liquid_in @ above[c]

    # interfaces condensed: dz = -(z0 + z_own d + ...)
    right = [blocks.interface[..., None], blocks.interface_by_bulk]
    right += [block for block in (z_below, z_above) if block is not None]
    solved = np.asarray(np.linalg.solve(blocks.interface_by_interface, np.concatenate(right, -1)), dtype=np.float64)
    z0, z_own = solved[..., 0], solved[..., 1:m + 1]
    place = m + 1
    D[c] -= blocks.bulk_by_interface @ z_own
    rhs = bulk.copy()
    rhs[c] -= (blocks.bulk_by_interface @ z0[..., None])[..., 0]
    if z_below is not None:
        z_below = solved[..., place:place + n + 1]
        place += n + 1
        upper[c, :, :n + 1] -= blocks.bulk_by_interface @ z_below
    if z_above is not None:
        z_above = solved[..., place:]
        lower[c, :, n + 1:] -= blocks.bulk_by_interface @ z_above
    _end_rows(problem, state, vapor_in, liquid_in, vapor, liquid, bulk, D, lower, upper)
    ends = np.flatnonzero(~problem.column.contact)
    rhs[ends] = bulk[ends]
    interface = blocks.interface.copy()
    interface[:, :2 * n - 2] /= blocks.films.terms[:, None]
    return RateSystem(rhs, D, lower, upper, bulk, interface, z0, z_own, z_below, z_above, blocks, coefficients)


def _take(stream: Entering, index: NDArray[np.intp]) -> Entering:
    return Entering(stream.flows[index], stream.temperature[index], stream.enthalpy[index])


def _coefficients(setup: RateSetup, state: RateState, vapor_in: Entering, liquid_in: Entering, shares: Shares
                  ) -> Transfer:
    """Coefficients at the bulk states."""
    problem = setup.problem
    c = problem.contact
    V, L = state.v[c].sum(1), state.l[c].sum(1)
    y, x = state.v[c] / V[:, None], state.l[c] / L[:, None]
    T_V, T_L, height = state.T_V[c], state.T_L[c], problem.column.segment_height
    if shares.y.any() or shares.T_V.any():
        V_in = vapor_in.flows[c].sum(1)
        y = y + shares.y[:, None] * (vapor_in.flows[c] / V_in[:, None] - y)
        T_V, V = T_V + shares.T_V * (vapor_in.temperature[c] - T_V), V + shares.y * (V_in - V)
    if shares.x.any() or shares.T_L.any():
        L_in = liquid_in.flows[c].sum(1)
        x = x + shares.x[:, None] * (liquid_in.flows[c] / L_in[:, None] - x)
        T_L, L = T_L + shares.T_L * (liquid_in.temperature[c] - T_L), L + shares.x * (L_in - L)
    states = setup.layout.states(problem.properties, V, L, T_V, T_L, problem.P[c], y, x,
                                 None if height is None else height[c])
    return transfer(states, c + 1, setup.area_factor)


def short_shares(setup: RateSetup) -> Shares:
    """Shares of a stage of half a transfer unit: all zero where both phases are mixed."""
    short = np.full(setup.problem.contact.size, 0.5)
    return Shares(setup.vapor.weight(short), setup.liquid.weight(short), setup.vapor.temperature_weight(short),
                  setup.liquid.temperature_weight(short))


def flow_shares(setup: RateSetup, state: RateState) -> Shares:
    """Shares of the entering states by the flow patterns, from the transfer units at a state.

    The coefficients behind those are taken at the bulk states of a short stage. The shares of a solution are those of
    its own state; their derivatives are left out of the Jacobian.
    """
    problem = setup.problem
    c = problem.contact
    first = short_shares(setup)
    if not first.any():
        return first
    vapor_in, liquid_in, vapor, liquid = entering(problem, state)
    result = _coefficients(setup, state, vapor_in, liquid_in, first)
    units_V, units_L = overall_transfer_units(problem, state, result)
    k = result.coefficients
    area = np.broadcast_to(k.area, (c.size,))

    def heat(h: Array, flows: Array, cp: Array) -> Array:
        conductance = h * area
        return np.asarray(conductance / np.maximum((flows * cp).sum(1), 1e-9 * conductance))

    return Shares(setup.vapor.weight(units_V), setup.liquid.weight(units_L),
                  setup.vapor.temperature_weight(heat(k.h_vapor, state.v[c], vapor.cp[c])),
                  setup.liquid.temperature_weight(heat(k.h_liquid, state.l[c], liquid.cp[c])))


def overall_transfer_units(problem: Problem, state: RateState, transferred: Transfer) -> tuple[Array, Array]:
    """Transfer units of vapour and liquid with both films in series, of the component that has most, (C,).

    1/N_OV = 1/N_V + S/N_L and N_OL = S N_OV with the stripping factor S = K V/L, K from the interface.
    """
    k, c, n = transferred.coefficients, problem.contact, problem.n
    V, L = state.v[c].sum(1), state.l[c].sum(1)
    area = np.broadcast_to(k.area, V.shape)
    vapor = film_transfer_units(k.kappa_vapor, transferred.c_vapor, area, V, state.v[c] / V[:, None])
    liquid = film_transfer_units(k.kappa_liquid, transferred.c_liquid, area, L, state.l[c] / L[:, None])
    # Not y_I/x_I: of a trace an iterate's ratio is noise, and a trace can have the most units.
    x_I, y_I = state.z[:, n:2 * n], state.y_I
    K = problem.properties.k_value(state.z[:, 2 * n], problem.P[c], x_I / x_I.sum(1, keepdims=True),
                                   y_I / y_I.sum(1, keepdims=True))
    S = np.maximum(K, 1e-12) * (V / L)[:, None]
    units = np.where(problem.ordinary, 1.0 / (1.0 / vapor + S / liquid), 0.0)
    return np.asarray(units.max(1)), np.asarray((S * units).max(1))


def _stream_slopes(phase: PhaseLinks, shift: int) -> Array:
    """(S, n+2, n+1): flows, temperature and enthalpy of an entering stream by the neighbour's flows and temperature."""
    S, n = phase.net.shape
    result = np.zeros((S, n + 2, n + 1))
    own, last = (slice(0, S - 1), slice(1, S)) if shift > 0 else (slice(1, S), slice(0, S - 1))
    result[own, :n, :n] = phase.slope[last]
    result[own, n, :n] = (phase.temperature_slope[own, None, :] @ phase.slope[last])[:, 0]
    result[own, n, n] = phase.share[own]
    result[own, n + 1, :n] = (phase.H[last, None, :] @ phase.slope[last])[:, 0]
    result[own, n + 1, n] = (phase.net * phase.cp).sum(1)[last]
    return result


def _end_rows(problem: Problem, state: RateState, vapor_in: Entering, liquid_in: Entering, rising: PhaseLinks,
              falling: PhaseLinks, r: Array, D: Array, lower: Array, upper: Array) -> None:
    """Condenser: balance in the vapour half; reboiler: balance and energy in the liquid half. T_V = T_L closes."""
    n, fe, ee = problem.n, 1.0 / problem.F, 1.0 / problem.energy_scale
    m = 2 * n + 2
    HV, CV, HL, CL = rising.H, rising.cp, falling.H, falling.cp
    iv, iTV, il, iTL = slice(0, n), n, slice(n + 1, m - 1), m - 1
    liquid, vapor = (slice(0, n), n), (slice(n + 1, m - 1), m - 1)
    one = np.eye(n) * fe
    ends = [j for j, present in ((0, problem.top is not None), (problem.S - 1, problem.reboiler)) if present]
    if not ends:
        return
    v_ends, l_ends, T_ends = state.v[ends], state.l[ends], state.T_L[ends]
    y_ends = v_ends / v_ends.sum(1, keepdims=True)
    if problem.total_condenser:
        T_ends = T_ends + np.array([problem.subcooling, 0.0])[:len(ends)]
        y_ends[0] = state.y_condenser[0]
    parts = equilibrium_part(problem, problem.P[ends], v_ends, T_ends, l_ends, y_ends)
    for k, j in enumerate(ends):
        (balance, closing), (rows, spec) = (vapor, liquid) if j == 0 else (liquid, vapor)
        if j > 0:
            spec, closing = closing, spec
        only = slice(j, j + 1)
        v, l = state.v[only], state.l[only]
        part = one_stage(parts, k)
        end = condenser_rows(problem, part, v, l) if j == 0 else reboiler_rows(problem, part, v, l)
        r[j, balance] = (v + l - vapor_in.flows[only] - liquid_in.flows[only])[0] * fe
        D[j, balance, iv], D[j, balance, il] = one, one
        if j == 0:
            upper[0, balance, iv] = -rising.slope[1] * fe
        else:
            lower[j, balance, il] = -falling.slope[j - 1] * fe
        r[j, rows], D[j, rows, iv] = end.residual[:n], end.by_v[:n]
        D[j, rows, il], D[j, rows, iTL] = end.by_l[:n], end.by_T[:n]
        r[j, closing], D[j, closing, iTV], D[j, closing, iTL] = (state.T_V[j] - state.T_L[j]) / 100.0, 0.01, -0.01
        if not end.energy:
            r[j, spec], D[j, spec, iv], D[j, spec, il] = end.residual[n], end.by_v[n], end.by_l[n]
            D[j, spec, iTL] = end.by_T[n]
            continue
        heat = v[0] @ HV[j] + l[0] @ HL[j] - vapor_in.enthalpy[j] - liquid_in.enthalpy[j] - problem.duty[j]
        r[j, spec] = heat * ee
        D[j, spec, iv], D[j, spec, iTV] = HV[j] * ee, v[0] @ CV[j] * ee
        D[j, spec, il], D[j, spec, iTL] = HL[j] * ee, l[0] @ CL[j] * ee
        lower[j, spec, il] = -(HL[j - 1] @ falling.slope[j - 1]) * ee
        lower[j, spec, iTL] = -(falling.net[j - 1] @ CL[j - 1]) * ee


def updated_condenser_vapor(problem: Problem, state: RateState) -> Array:
    """Bubble vapour of the condensate, with K at its last estimate."""
    if not problem.total_condenser:
        return state.y_condenser
    return bubble_vapor(problem, problem.P[:1], state.T_L[:1] + problem.subcooling, state.l[:1], state.y_condenser)
