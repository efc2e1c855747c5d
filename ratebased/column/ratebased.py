"""The rate-based column: balances of each phase, two films and the interface of every contact stage, one Newton
iteration.

The interface unknowns are condensed stage by stage inside the global step (simultaneous, not nested). It starts from
the equilibrium column, so no guess is asked of the user.
"""
from __future__ import annotations

import warnings
from dataclasses import dataclass, replace

import numpy as np

from ..arguments import positive_scalar
from ..equipment.protocol import LIMITS
from ..errors import ApproximationWarning, ConvergenceError, InputError
from ..interface import InterfaceBlocks
from ..properties.protocol import Array, PropertyModel
from .banded import block_tridiagonal
from .contact import Averaged, ContactorLayout, FlowPattern, Mixed, film_transfer_units, layout, transfer
from .definition import Column, ContactorPressure
from .equilibrium import (
    LARGEST_TEMPERATURE_STEP,
    MAX_ITERATIONS,
    TOLERANCE,
    Progress,
    check_start,
    solve_state,
    stage_rows,
    state_of,
)
from .failure import convergence_error
from .problem import Problem, make_problem
from .profile import ContactRecord, Profile
from .rate_system import (
    RateSetup,
    RateState,
    RateSystem,
    Shares,
    flow_shares,
    overall_transfer_units,
    rate_system,
    short_shares,
    updated_condenser_vapor,
)
from .result import make_profile
from .search import with_search
from .start import dry_margin, masked, starting_state
from .steps import TINY, after_draw, limited

PRESSURE_TOLERANCE = 1e-11
"""Relative change of the pressures at which the hydraulics and the column agree."""
MAX_PRESSURE_ROUNDS = 30
HOLD_SLOPES = 1e-3
"""Scaled residual below which derivatives of the films by the bulk states are not computed anew."""
REFRESH_SHARES = 1e-3
"""Scaled residual below which the shares of the entering states follow the iterate; above it they are held."""
LARGEST_SEGMENT = 2.0
"""Transfer units of a packed segment above which a warning is given."""
LARGEST_OFFSET = 0.1
"""K between a bulk temperature of limited share and the mean of both ends, above which a warning is given."""


@dataclass(frozen=True)
class RateOutcome:
    """Where an iteration ended; `system` is that of the last state evaluated."""

    state: RateState
    converged: bool
    iterations: int
    residual: float
    worst: str
    reason: str = ""
    shares: Shares | None = None
    films: InterfaceBlocks | None = None


def solve_ratebased(column: Column, properties: PropertyModel, contactor: ContactorLayout, *,
                    vapor: FlowPattern | None = None, liquid: FlowPattern | None = None,
                    start: Profile | None = None, area_factor: float = 1.0,
                    progress: Progress | None = None) -> Profile:
    """The column with mass and heat transfer rates on its contact stages.

    Parameters
    ----------
    column, properties : the column and its mixture.
    contactor : hardware of all contact stages; or sections, or a mapping (first, last) stage -> contactor.
    vapor, liquid : how each phase flows through a stage. None: `Mixed` on trays, `Averaged` (the mean of what enters
        and what leaves, second order in the height) on packed segments. `Plug` is an exponential mean.
    start : a profile of the same column shape to start from (equilibrium or rate-based); None solves the equilibrium
        column first.
    area_factor : multiplies the contactor's areas, to study how far the result depends on them.
    progress : called with iteration number and scaled residual.

    Returns
    -------
    Profile : with `contact`: fluxes mol/(m2 s) from vapour to liquid, interface states, hydraulics.

    Raises
    ------
    InputError, ConvergenceError, NoSolutionError : as for `solve_equilibrium`; heat-transfer coefficients must be
        positive.

    Sources: Krishnamurthy & Taylor, AIChE J. 31 (1985) 449 (nonequilibrium stages); Krishna & Standart, AIChE J. 22
    (1976) 383 (films). Coefficients are taken at the bulk states and refreshed in every iteration; their derivatives
    are left out of the Jacobian.
    """
    if column.search is not None:
        check_start(column, properties, start)
        return with_search(column, lambda trial, last: solve_ratebased(
            trial, properties, contactor, vapor=vapor, liquid=liquid, start=last, area_factor=area_factor,
            progress=progress), start)
    check_start(column, properties, start)
    packed = column.segment_height is not None
    default: FlowPattern = Averaged() if packed else Mixed()
    own_pressure = isinstance(column.pressure, ContactorPressure)
    problem = make_problem(column, properties, start.P if start is not None and own_pressure else None)
    setup = RateSetup(problem, layout(contactor, column), _pattern("vapor", vapor, default),
                      _pattern("liquid", liquid, default), positive_scalar("area_factor", area_factor))
    state = _given_start(setup, start) if start is not None else None
    path, outcome = _solve(setup, state, progress)
    if own_pressure:
        setup, outcome = _with_pressure_drop(setup, outcome, progress)
        problem = setup.problem
    positive = _lifted(problem, outcome.state)
    setup = replace(setup, shares=outcome.shares)
    system = rate_system(setup, positive, outcome.films)
    _warn_coarse(setup, positive, system, outcome.shares)
    record = _record(setup, positive, system)
    s = outcome.state
    return make_profile(problem, s.v, s.T_V, s.l, s.T_L, "rate-based", outcome.iterations, outcome.residual, path,
                        record, float(system.blocks.films.size.max()))


def _pattern(name: str, given: FlowPattern | None, default: FlowPattern) -> FlowPattern:
    if given is None:
        return default
    if isinstance(given, type) or not isinstance(given, FlowPattern):
        raise InputError(f"{name} = {given!r}: expected a flow pattern, Mixed(), Averaged() or Plug()")
    return given


def _warn_coarse(setup: RateSetup, state: RateState, system: RateSystem, shares: Shares | None) -> None:
    """A stage whose bulk is a mean of both ends overshoots when it is too long: its share is limited then."""
    if shares is None:
        return
    units = overall_transfer_units(setup.problem, state, system.transfer)
    c, blocks = setup.problem.contact, system.blocks
    for phase, pattern, number, share, heat, T, T_bulk in (
            ("vapour", setup.vapor, units[0], shares.y, shares.T_V, state.T_V[c], blocks.T_V_bulk),
            ("liquid", setup.liquid, units[1], shares.x, shares.T_L, state.T_L[c], blocks.T_L_bulk)):
        if not isinstance(pattern, Averaged):
            continue
        holds_heat = heat > 1e-8                     # a phase without heat capacity has the interface's temperature
        off = np.where(holds_heat, np.abs((0.5 - heat) * (T_bulk - T)) / np.where(holds_heat, heat, 1.0), 0.0)
        if (share < 0.5).any():
            j = int(np.argmin(share))
            warnings.warn(f"stage {int(c[j]) + 1}: {number[j]:.2g} transfer units in one segment, keep them below "
                          f"{LARGEST_SEGMENT:g}: use more segments (the share of the entering {phase} is limited to "
                          f"{share[j]:.2g})", ApproximationWarning, stacklevel=3)
        elif (off > LARGEST_OFFSET).any():
            j = int(np.argmax(off))
            warnings.warn(f"stage {int(c[j]) + 1}: the share of the entering {phase}'s temperature is limited to "
                          f"{heat[j]:.2g}, {off[j]:.2g} K from the mean of its ends: more than six heat transfer units "
                          "in one segment, use more segments", ApproximationWarning, stacklevel=3)


# ---------------------------------------------------------------------------------------------------- start
def _start_from(setup: RateSetup, v: Array, T_V: Array, l: Array, T_L: Array) -> RateState:
    """Interface at the bulk liquid; N from the balances, damped by what a film could pass at most."""
    problem = setup.problem
    c = problem.contact
    v, l = masked(problem, np.maximum(v, TINY), np.maximum(l, TINY))
    V, L = v[c].sum(1), l[c].sum(1)
    y, x = v[c] / V[:, None], l[c] / L[:, None]
    height = problem.column.segment_height
    states = setup.layout.states(problem.properties, V, L, T_V[c], T_L[c], problem.P[c], y, x,
                                 None if height is None else height[c])
    k = transfer(states, c + 1, setup.area_factor)
    if not ((np.asarray(k.coefficients.h_vapor) > 0).all() and (np.asarray(k.coefficients.h_liquid) > 0).all()):
        raise InputError("contactor: heat-transfer coefficients must be positive in both phases, the temperatures are "
                         "undetermined otherwise")
    area = np.broadcast_to(k.coefficients.area, (c.size,))
    unit = np.ones(c.size)
    even = np.full_like(x, 1.0 / problem.n)
    conductance = np.minimum(
        np.median(film_transfer_units(k.coefficients.kappa_vapor, k.c_vapor, unit, unit, even), -1),
        np.median(film_transfer_units(k.coefficients.kappa_liquid, k.c_liquid, unit, unit, even), -1))
    v_in = problem.feeds.vapor.copy()
    v_in[:-1] += after_draw(v, problem.vapor_draw)[0][1:]
    N = (v_in - v)[c] / (area + V / conductance)[:, None]
    N = np.where(problem.ordinary, N, 0.0)
    u = np.where(problem.gas, y, np.maximum(x, TINY))
    z = np.concatenate((N, u, T_L[c][:, None]), -1)
    return RateState(v, T_V.copy(), l, T_L.copy(), z, y, v[:1] / v[:1].sum())


def _lifted(problem: Problem, state: RateState) -> RateState:
    """A converged state as the start of another solve: rounding below zero lifted to the floor."""
    n = problem.n
    v, l = masked(problem, np.maximum(state.v, TINY), np.maximum(state.l, TINY))
    z = state.z.copy()
    z[:, n:2 * n] = np.maximum(z[:, n:2 * n], TINY)
    return replace(state, v=v, l=l, z=z)


def _given_start(setup: RateSetup, start: Profile) -> RateState:
    problem = setup.problem
    bulk = state_of(problem, stage_rows(problem, None), start)
    T_V = np.where(problem.column.contact, start.T_V, start.T_L)
    state = _start_from(setup, bulk.v, T_V, bulk.l, start.T_L)
    if start.contact is None:
        return state
    r = start.contact
    u = np.where(problem.gas, r.y_I, np.maximum(r.x_I, TINY))
    return replace(state, z=np.concatenate((r.N, u, r.T_I[:, None]), -1), y_I=r.y_I)


# ---------------------------------------------------------------------------------------------------- solve
def _solve(setup: RateSetup, state: RateState | None, progress: Progress | None) -> tuple[str, RateOutcome]:
    """Direct Newton from the equilibrium column, then continuation in the contact area."""
    problem = setup.problem
    tried = []
    if state is not None:
        outcome = newton(setup, state, progress=progress)
        if outcome.converged:
            return "from the profile given", outcome
        tried.append(f"Newton from the profile given ended at {outcome.reason}")
    equilibrium, _, rows = solve_state(problem, None, None)
    T_L = equilibrium.T + rows.liquid_offset

    def first(factor: float) -> RateState:
        at_ends = np.where(problem.column.contact, equilibrium.T, T_L)
        return _start_from(replace(setup, area_factor=factor * setup.area_factor), equilibrium.v, at_ends,
                           equilibrium.l, T_L)

    outcome = newton(setup, first(1.0), progress=progress)
    if outcome.converged:
        return "direct", outcome
    direct = outcome
    tried.append(f"Newton from the equilibrium column ended at {outcome.reason}, residual {outcome.residual:.2g}")
    outcome = _area_continuation(setup, first, progress)
    if outcome.converged:
        return "continuation in the contact area", outcome
    tried.append(f"continuation in the contact area: {outcome.reason}")
    margin = dry_margin(problem, starting_state(problem))
    raise convergence_error("rate-based column", tried, direct.worst, direct.residual, margin, direct.state)


def newton(setup: RateSetup, state: RateState, *, tolerance: float = TOLERANCE, limit: int = MAX_ITERATIONS,
           progress: Progress | None = None) -> RateOutcome:
    """Newton's method with all steps scaled so that no bulk temperature moves more than 10 K; one plain step at the
    end.
    """
    problem = setup.problem
    S, n = problem.S, problem.n
    m = 2 * n + 2
    means = bool(short_shares(setup).any())
    shares = flow_shares(setup, state)
    width = 3 * n + 2 if means else 2 * n + 1
    band = block_tridiagonal(S, m, n + 1, n + 1, width, width)
    reason, residual, worst, iteration = "the iteration limit", np.inf, "", 0
    floor = 1e2 * np.finfo(float).eps
    low, high = problem.temperature_limits
    films: InterfaceBlocks | None = None
    for iteration in range(1, limit + 1):
        try:
            if means and residual < REFRESH_SHARES:
                shares = flow_shares(setup, state)
            system = rate_system(replace(setup, shares=shares), state, films if residual < HOLD_SLOPES else None)
        except np.linalg.LinAlgError:
            reason = "a singular interface"
            break
        except InputError as error:                       # an iterate that hardware or properties refuse
            if iteration == 1:
                raise
            reason = f"a state that was refused ({error})"
            break
        residual, worst = _measure(problem, system)
        films = system.blocks.films
        if progress is not None:
            progress(iteration, residual)
        if not np.isfinite(residual):
            reason = "a residual that is not finite"
            break
        try:
            d = band.solve(system.diagonal, system.lower, system.upper, -system.rhs)
        except np.linalg.LinAlgError:
            reason = "a singular Jacobian"
            break
        if not np.isfinite(d).all():
            reason = "a step that is not finite"
            break
        dz = _interface_step(problem, system, d)
        dv, dT_V, dl, dT_L = d[:, :n], d[:, n], d[:, n + 1:m - 1], d[:, m - 1]
        V, L = state.v.sum(1, keepdims=True), state.l.sum(1, keepdims=True)
        relative = max(np.abs(dv / V).max(), np.abs(dl / L).max(), np.abs(dT_V).max() / 100, np.abs(dT_L).max() / 100)
        rounding = max(1e-6, floor * float((V + L).max()) / problem.F)
        if residual < tolerance or (residual < rounding and relative < 1e-10):
            final = replace(state, v=state.v + dv, T_V=state.T_V + dT_V, l=state.l + dl, T_L=state.T_L + dT_L,
                            z=state.z + dz, y_I=system.blocks.films.y_I)
            least = min(final.v.min(), final.l.min()) / problem.F
            if least > -1e-10 and final.z[:, n:2 * n].min() > -1e-9:
                return RateOutcome(final, True, iteration, residual, worst, shares=shares, films=films)
        largest = max(float(np.abs(dT_V).max()), float(np.abs(dT_L).max()))
        f = min(1.0, LARGEST_TEMPERATURE_STEP / largest) if largest > 0 else 1.0
        z = state.z + f * dz
        z[:, n:2 * n] = limited(state.z[:, n:2 * n], f * dz[:, n:2 * n])
        dT_I = np.clip(f * dz[:, 2 * n], -LARGEST_TEMPERATURE_STEP, LARGEST_TEMPERATURE_STEP)
        z[:, 2 * n] = np.clip(state.z[:, 2 * n] + dT_I, low, high)
        state = RateState(limited(state.v, f * dv), np.clip(state.T_V + f * dT_V, low, high), limited(state.l, f * dl),
                          np.clip(state.T_L + f * dT_L, low, high), z, system.blocks.films.y_I, state.y_condenser)
        state = replace(state, y_condenser=updated_condenser_vapor(problem, state))
    return RateOutcome(state, False, iteration, residual, worst, reason)


def _interface_step(problem: Problem, system: RateSystem, d: Array) -> Array:
    n, c = problem.n, problem.contact
    dz = -system.z0 - (system.z_own @ d[c][..., None])[..., 0]
    if system.z_below is not None:
        below = np.zeros((problem.S, n + 1))
        below[:-1] = d[1:, :n + 1]
        dz -= (system.z_below @ below[c][..., None])[..., 0]
    if system.z_above is not None:
        above = np.zeros((problem.S, n + 1))
        above[1:] = d[:-1, n + 1:]
        dz -= (system.z_above @ above[c][..., None])[..., 0]
    return dz


def _measure(problem: Problem, system: RateSystem) -> tuple[float, str]:
    """Largest scaled row and its name."""
    n, names = problem.n, problem.properties.names
    bulk, interface = np.abs(system.bulk), np.abs(system.interface)
    worst_bulk, worst_interface = float(bulk.max()), float(interface.max())
    if not np.isfinite(worst_bulk + worst_interface):
        return np.inf, "a row that is not finite"
    if worst_bulk >= worst_interface:
        j, row = np.unravel_index(int(bulk.argmax()), bulk.shape)
        phase, k = ("liquid", int(row)) if row <= n else ("vapour", int(row) - n - 1)
        if not problem.column.contact[j]:
            return worst_bulk, f"stage {j + 1} ({problem.column.kinds[j]}), row {int(row) + 1}"
        return worst_bulk, f"stage {j + 1}, {phase} " + (f"balance of {names[k]}" if k < n else "energy balance")
    j, row = np.unravel_index(int(interface.argmax()), interface.shape)
    words = ["vapour film"] * (n - 1) + ["liquid film"] * (n - 1) + ["sum of y at the interface",
                                                                    "sum of x at the interface", "interface energy"]
    return worst_interface, f"stage {int(problem.contact[j]) + 1}, {words[int(row)]}"


def _area_continuation(setup: RateSetup, first: object, progress: Progress | None) -> RateOutcome:
    """Large areas first (near equilibrium), then down by factors of three, smaller ones where a step fails."""
    assert callable(first)
    factor, ratio = 30.0, 3.0
    outcome: RateOutcome | None = None
    reached = np.inf
    for _ in range(25):
        if outcome is None:
            guess = first(factor)
        else:
            guess = _lifted(setup.problem, outcome.state)
            guess.z[:, :setup.problem.n] *= reached / factor
        trial = newton(replace(setup, area_factor=factor * setup.area_factor), guess,
                       tolerance=TOLERANCE if factor == 1.0 else 1e-5, limit=40,
                       progress=progress)
        if trial.converged:
            outcome, reached = trial, factor
            if factor == 1.0:
                return outcome
        elif outcome is None:
            factor *= 10.0
            continue
        else:
            ratio = ratio ** 0.5
        factor = max(1.0, reached / ratio)
    if outcome is None:
        return replace(trial, reason="not solved at any larger area either")
    return replace(outcome, converged=False, reason=f"no solution found below {reached:.3g} times the area")


# ---------------------------------------------------------------------------------------------------- hydraulics
def _hydraulics(setup: RateSetup, state: RateState) -> dict[str, Array]:
    problem = setup.problem
    c = problem.contact
    V, L = state.v[c].sum(1), state.l[c].sum(1)
    height = problem.column.segment_height
    states = setup.layout.states(problem.properties, V, L, state.T_V[c], state.T_L[c], problem.P[c],
                                 np.maximum(state.v[c], 0) / V[:, None], np.maximum(state.l[c], 0) / L[:, None],
                                 None if height is None else height[c])
    values: dict[str, Array] = {}
    counts = dict.fromkeys(LIMITS, 0)
    for hardware, i, one in states:
        limits = hardware.hydraulics(one)
        for name in LIMITS:
            value = getattr(limits, name)
            if value is None:
                continue
            counts[name] += i.size
            values.setdefault(name, np.zeros(c.size))[i] = np.broadcast_to(value, (i.size,))
    return {name: value for name, value in values.items() if counts[name] == c.size}


def _with_pressure_drop(setup: RateSetup, outcome: RateOutcome, progress: Progress | None
                        ) -> tuple[RateSetup, RateOutcome]:
    """Pressures from the contactor's pressure drop, by substitution: the column is solved again at each set of them."""
    pressure = setup.problem.column.pressure
    assert isinstance(pressure, ContactorPressure)
    for _ in range(MAX_PRESSURE_ROUNDS):
        drop = _hydraulics(setup, _lifted(setup.problem, outcome.state)).get("pressure_drop")
        if drop is None:
            raise InputError("pressure: the contactor has no pressure-drop method on every contact stage; give the "
                             "pressures")
        drops = np.zeros(setup.problem.S)
        drops[setup.problem.contact] = drop
        P = pressure.top + np.concatenate(([0.0], np.cumsum(0.5 * (drops[:-1] + drops[1:]))))
        change = float(np.max(np.abs(P / setup.problem.P - 1.0)))
        if change < PRESSURE_TOLERANCE:
            return setup, outcome
        setup = replace(setup, problem=setup.problem.at_pressure(P))
        s = outcome.state
        outcome = newton(setup, _lifted(setup.problem, s), progress=progress)
        if not outcome.converged:
            raise convergence_error("rate-based column at the contactor's pressure drop", [f"Newton: {outcome.reason}"],
                                    outcome.worst, outcome.residual, None, outcome.state)
    raise ConvergenceError(f"pressure: the pressures still change by {change:.2g} after {MAX_PRESSURE_ROUNDS} rounds",
                           best=outcome.state, residual=change)


def _record(setup: RateSetup, state: RateState, system: RateSystem) -> ContactRecord:
    problem = setup.problem
    n, blocks, k = problem.n, system.blocks, system.transfer.coefficients
    numbers = problem.contact + 1
    notes = {note: numbers[np.broadcast_to(where, numbers.shape)] for note, where in k.notes.items()
             if np.asarray(where).any()}
    films = blocks.films
    x_I, y_I = (np.where(never, 0.0, np.maximum(z, 0.0)) for z, never in ((films.x_I, problem.gas),
                                                                         (films.y_I, problem.heavy)))
    return ContactRecord(
        stage=numbers, T_I=state.z[:, 2 * n], x_I=x_I, y_I=y_I, N=np.where(problem.ordinary, state.z[:, :n], 0.0),
        energy_flux=films.E_L, area=np.broadcast_to(k.area, numbers.shape).copy(),
        y_bulk=np.where(problem.heavy, 0.0, blocks.y_bulk), T_V_bulk=blocks.T_V_bulk,
        x_bulk=np.where(problem.gas, 0.0, blocks.x_bulk), T_L_bulk=blocks.T_L_bulk,
        hydraulics=_hydraulics(setup, state), notes=notes, basis=k.basis,
        pattern=f"vapour {setup.vapor.words}, liquid {setup.liquid.words}")
