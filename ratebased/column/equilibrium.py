"""The equilibrium-stage column: component balances, equilibrium and energy of all stages in one Newton iteration.

Unknowns of a stage: v (n), T, l (n), component flows leaving before side draws. Balances are scaled by the feed, never
by the internal flows: the products must be right. The Jacobian is analytic, d ln K/dx included, and block tridiagonal.
"""
from __future__ import annotations

import warnings
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from ..arguments import finite_scalar
from ..efficiency_set import EfficiencyBasis, EfficiencyKind, EfficiencySet, uniform_murphree
from ..errors import InputError, PlausibilityWarning
from ..properties.differences import liquid_heat_capacity, vapor_heat_capacity
from ..properties.protocol import Array, Mask, PropertyModel
from .banded import block_tridiagonal
from .definition import Column
from .ends import EquilibriumPart, bubble_vapor, condenser_rows, equilibrium_part, one_stage, reboiler_rows
from .failure import convergence_error, unstable_liquid
from .problem import Problem, make_problem
from .profile import Profile
from .result import equilibrium_profile
from .search import with_search
from .specifications import RefluxRatio
from .start import State, condensing_state, dry_margin, masked, starting_state
from .steps import TINY, after_draw, fractions, limited

TOLERANCE = 1e-10
MAX_ITERATIONS = 100
LARGEST_TEMPERATURE_STEP = 10.0
"""K. Each stage's own temperature step is cut to it; 20 and 30 do as well, 50 loses one column in twenty."""

LARGEST_REFLUX = 1e5

Progress = Callable[[int, float], None]
"""Called after each iteration with its number and the scaled residual."""


@dataclass(frozen=True)
class StageRows:
    """Equilibrium rows y - direct y_in - factor K x = 0 of every stage, and what stands beside them.

    bubble: component whose row is sum K x = 1, (S,), or -1. vapor_offset, liquid_offset: K, added to T in enthalpies.
    """

    direct: Array
    factor: Array
    bubble: Array
    vapor_offset: Array
    liquid_offset: Array


def stage_rows(problem: Problem, efficiency: EfficiencySet | None) -> StageRows:
    """The efficiencies laid out over all stages; ends and stages without efficiencies are equilibrium stages."""
    S, n = problem.S, problem.n
    direct, factor = np.zeros((S, n)), np.ones((S, n))
    bubble = np.full(S, -1)
    vapor, liquid = np.zeros(S), np.zeros(S)
    liquid[0] -= problem.subcooling
    if efficiency is not None:
        if efficiency.values.shape != (S, n):
            raise InputError(f"efficiency.values: expected shape ({S}, {n}), got {efficiency.values.shape}")
        t = problem.contact[efficiency.given[problem.contact]]
        used = np.arange(n) != efficiency.dependent[t][:, None]
        values = np.where(used, efficiency.values[t], 1.0)
        factor[t] = values
        if efficiency.kind is EfficiencyKind.MURPHREE_VAPOR:
            direct[t] = 1.0 - values
        bubble[t] = efficiency.dependent[t]
        for j in t[(bubble[t] >= 0) & ~problem.ordinary[bubble[t]]][:1]:
            raise InputError(f"efficiency.dependent[{j}] = {bubble[j]}: {problem.properties.names[bubble[j]]} is not "
                             "in both phases")
        vapor[t], liquid[t] = efficiency.vapor_offset[t], efficiency.liquid_offset[t]
    return StageRows(direct, factor, bubble, vapor, liquid)


@dataclass(frozen=True)
class System:
    """Scaled residual (S, m) and Jacobian blocks (S, m, m) of an equilibrium column."""

    residual: Array
    diagonal: Array
    lower: Array
    upper: Array


def held_rows(problem: Problem, rows: StageRows) -> Mask:
    """Stages whose K belongs to the bubble vapour of the liquid and not to the vapour that leaves: a total condenser,
    Murphree efficiencies at the bubble point. That vapour is held within an iteration."""
    held = rows.bubble >= 0
    held[0] |= problem.total_condenser
    return held


def equilibrium_system(problem: Problem, rows: StageRows, state: State, y_held: Array) -> System:
    """Rows of a stage: n balances, n equilibrium (or specification) rows, energy.

    y_held: bubble vapours of the last iterate, (S, n), for K on the stages of `held_rows`.
    """
    S, n = problem.S, problem.n
    m, h = 2 * n + 1, 2 * n
    v, T, l = state.v, state.T, state.l
    fe, ee = 1.0 / problem.F, 1.0 / problem.energy_scale
    D, lower, upper = np.zeros((S, m, m)), np.zeros((S, m, m)), np.zeros((S, m, m))
    r = np.zeros((S, m))
    rising, d_rising = after_draw(v, problem.vapor_draw)
    falling, d_falling = after_draw(l, problem.liquid_draw)
    v_in, l_in = problem.feeds.vapor.copy(), problem.feeds.liquid.copy()
    v_in[:-1] += rising[1:]
    l_in[1:] += falling[:-1]
    held = held_rows(problem, rows)
    if held.any():
        y_for_k = np.where(held[:, None], y_held, v / v.sum(1, keepdims=True))
        part = equilibrium_part(problem, problem.P, v, T, l, y_for_k, held)
    else:
        part = equilibrium_part(problem, problem.P, v, T, l)
    _balance_rows(r, D, lower, upper, n, fe, v + l - v_in - l_in, d_rising, d_falling)
    _equilibrium_rows(problem, rows, part, r, D, upper, v, l, v_in, d_rising)
    # energy
    T_V, T_L = T + rows.vapor_offset, T + rows.liquid_offset
    HV, CV = _vapor(problem, T_V, part.y)
    HL, CL = _liquid(problem, T_L, part.x)
    r[:, h] = ((v * HV).sum(1) + (l * HL).sum(1) - problem.feeds.vapor_enthalpy - problem.feeds.liquid_enthalpy
               - problem.duty) * ee
    r[:-1, h] -= (rising * HV).sum(1)[1:] * ee
    r[1:, h] -= (falling * HL).sum(1)[:-1] * ee
    D[:, h, :n], D[:, h, n], D[:, h, n + 1:] = HV * ee, ((v * CV).sum(1) + (l * CL).sum(1)) * ee, HL * ee
    upper[:-1, h, :n] = -(HV[1:, None, :] @ d_rising[1:])[:, 0] * ee
    upper[:-1, h, n] = -(rising * CV).sum(1)[1:] * ee
    lower[1:, h, n + 1:] = -(HL[:-1, None, :] @ d_falling[:-1])[:, 0] * ee
    lower[1:, h, n] = -(falling * CL).sum(1)[:-1] * ee
    _end_rows(problem, part, r, D, lower, upper, v, l)
    return System(r, D, lower, upper)


def _vapor(problem: Problem, T: Array, y: Array) -> tuple[Array, Array]:
    H = np.broadcast_to(problem.properties.vapor_enthalpy(T, problem.P, y), y.shape)
    return H, vapor_heat_capacity(problem.properties, T, problem.P, y)


def _liquid(problem: Problem, T: Array, x: Array) -> tuple[Array, Array]:
    H = np.broadcast_to(problem.properties.liquid_enthalpy(T, problem.P, x), x.shape)
    return H, liquid_heat_capacity(problem.properties, T, problem.P, x)


def _balance_rows(r: Array, D: Array, lower: Array, upper: Array, n: int, fe: float, open_balance: Array,
                  d_rising: Array, d_falling: Array) -> None:
    one = np.eye(n) * fe
    r[:, :n] = open_balance * fe
    D[:, :n, :n] = one
    D[:, :n, n + 1:] = one
    upper[:-1, :n, :n] = -d_rising[1:] * fe
    lower[1:, :n, n + 1:] = -d_falling[:-1] * fe


def _equilibrium_rows(problem: Problem, rows: StageRows, part: EquilibriumPart, r: Array, D: Array, upper: Array,
                      v: Array, l: Array, v_in: Array, d_rising: Array) -> None:
    n, fe = problem.n, 1.0 / problem.F
    e = slice(n, 2 * n)
    b = rows.factor
    r[:, e] = part.y - b * part.Kx
    D[:, e, :n] = part.dy - b[..., None] * part.by_v
    D[:, e, n] = -b * part.by_T
    D[:, e, n + 1:] = -b[..., None] * part.by_l
    t = np.flatnonzero(rows.direct.any(1))
    if t.size:
        _, y_in, dy_in = fractions(v_in[t])
        a = rows.direct[t]
        r[t, e] -= a * y_in
        above = t < problem.S - 1
        j = t[above]
        upper[j, e, :n] = -(a[..., None] * dy_in)[above] @ d_rising[j + 1]
    for k in np.flatnonzero(problem.gas):
        r[:, n + k], D[:, n + k, :], upper[:, n + k, :] = l[:, k] * fe, 0.0, 0.0
        D[:, n + k, n + 1 + k] = fe
    for k in np.flatnonzero(problem.heavy):
        r[:, n + k], D[:, n + k, :], upper[:, n + k, :] = v[:, k] * fe, 0.0, 0.0
        D[:, n + k, k] = fe
    at = np.flatnonzero(rows.bubble >= 0)
    if at.size:
        row = n + rows.bubble[at]
        r[at, row] = part.Kx[at].sum(1) - 1.0
        D[at, row, :n], D[at, row, n] = part.by_v[at].sum(1), part.by_T[at].sum(1)
        D[at, row, n + 1:] = part.by_l[at].sum(1)
        upper[at, row] = 0.0


def _end_rows(problem: Problem, part: EquilibriumPart, r: Array, D: Array, lower: Array, upper: Array, v: Array,
              l: Array) -> None:
    n = problem.n
    e, h = slice(n, 2 * n), 2 * n
    for j, present, make in ((0, problem.top is not None, condenser_rows),
                             (problem.S - 1, problem.bottom is not None, reboiler_rows)):
        if not present:
            continue
        one = one_stage(part, j)
        end = make(problem, one, v[j:j + 1], l[j:j + 1])
        r[j, e], D[j, e, :n], D[j, e, n], D[j, e, n + 1:] = (end.residual[:n], end.by_v[:n], end.by_T[:n],
                                                             end.by_l[:n])
        if not end.energy:
            r[j, h], D[j, h, :n], D[j, h, n], D[j, h, n + 1:] = (end.residual[n], end.by_v[n], end.by_T[n],
                                                                 end.by_l[n])
            lower[j, h], upper[j, h] = 0.0, 0.0


@dataclass(frozen=True)
class NewtonOutcome:
    """Where a Newton iteration ended: converged, or `reason`; residual of the last state and the worst row; path: the
    way it was reached."""

    state: State
    converged: bool
    iterations: int
    residual: float
    worst: str
    reason: str = ""
    path: str = "direct"


def _worst(residual: Array, names: tuple[str, ...]) -> str:
    finite = np.where(np.isfinite(residual), np.abs(residual), np.inf)
    j, row = np.unravel_index(int(np.argmax(finite)), finite.shape)
    n = len(names)
    if row < n:
        what = f"balance of {names[row]}"
    elif row < 2 * n:
        what = f"equilibrium of {names[row - n]}"
    else:
        what = "energy balance or specification"
    return f"stage {j + 1}, {what}"


def newton(problem: Problem, rows: StageRows, state: State, *, damped: bool = False, limit: int = MAX_ITERATIONS,
           progress: Progress | None = None) -> NewtonOutcome:
    """Newton's method from `state`; one plain step at the end closes the (linear) balances to rounding.

    damped: all steps shortened by one factor, so that no temperature moves more than 5 K and no total flow by more than
    half of itself; slower, for columns whose flows run away.
    """
    S, n = problem.S, problem.n
    m = 2 * n + 1
    band = block_tridiagonal(S, m, n, n + 1, 2 * m - 1 - n, m + n)
    held, y_held = np.flatnonzero(held_rows(problem, rows)), state.v / state.v.sum(1, keepdims=True)
    names = problem.properties.names
    reason, residual, worst = "the iteration limit", np.inf, ""
    floor = 1e2 * np.finfo(float).eps
    low, high = problem.temperature_limits
    offsets = np.stack((np.zeros(S), rows.vapor_offset, rows.liquid_offset))
    low, high = low - offsets.min(0), high - offsets.max(0)
    state = replace(state, T=np.clip(state.T, low, high))
    for iteration in range(1, limit + 1):
        if held.size:
            y_held[held] = bubble_vapor(problem, problem.P[held], state.T[held], state.l[held], y_held[held])
        system = equilibrium_system(problem, rows, state, y_held)
        residual, worst = float(np.abs(system.residual).max()), _worst(system.residual, names)
        if progress is not None:
            progress(iteration, residual)
        if not np.isfinite(residual):
            reason = "a residual that is not finite"
            break
        try:
            step = band.solve(system.diagonal, system.lower, system.upper, -system.residual)
        except np.linalg.LinAlgError:
            reason = "a singular Jacobian"
            break
        if not np.isfinite(step).all():
            reason = "a step that is not finite"
            break
        dv, dT, dl = step[:, :n], step[:, n], step[:, n + 1:]
        V, L = state.v.sum(1, keepdims=True), state.l.sum(1, keepdims=True)
        relative = max(np.abs(dv / V).max(), np.abs(dl / L).max(), np.abs(dT).max() / 100.0)
        rounding = max(1e-6, floor * float((V + L).max()) / problem.F)
        if residual < TOLERANCE or (residual < rounding and relative < 1e-10):
            final = State(state.v + dv, state.T + dT, state.l + dl)
            least = min(final.v.min(), final.l.min()) / problem.F
            if least > -1e-10:
                return NewtonOutcome(final, True, iteration, residual, worst)
        if damped:
            size = max(float(np.abs(dT).max()) / 5.0, float(np.abs(dv.sum(1, keepdims=True) / V).max()) / 0.5,
                       float(np.abs(dl.sum(1, keepdims=True) / L).max()) / 0.5)
            dv, dT, dl = (d / max(1.0, size) for d in (dv, dT, dl))
        T = np.clip(state.T + np.clip(dT, -LARGEST_TEMPERATURE_STEP, LARGEST_TEMPERATURE_STEP), low, high)
        state = State(limited(state.v, dv), T, limited(state.l, dl))
    at_limit = np.flatnonzero((state.T <= low) | (state.T >= high))
    if at_limit.size:
        reason += f" (stage {at_limit[0] + 1} at the limit of the property model's range, {state.T[at_limit[0]]:.1f} K)"
    return NewtonOutcome(state, False, limit if reason.startswith("the iteration") else iteration, residual, worst,
                         reason)


def solve_equilibrium(column: Column, properties: PropertyModel, efficiency: EfficiencySet | float | None = None, *,
                      start: Profile | None = None, progress: Progress | None = None) -> Profile:
    """The column with equilibrium stages, or with component efficiencies on its contact stages.

    Parameters
    ----------
    column, properties : the column and its mixture. No guess is needed.
    efficiency : None; an `EfficiencySet` with one row a stage; or one number, the Murphree vapour efficiency of every
        component on every contact stage. Any sign.
    start : a profile of the same column shape to try first; None starts from constant molar overflow.
    progress : called with iteration number and scaled residual.

    Returns
    -------
    Profile : flows mol/s (net of side draws), temperatures K, products, duties W (heat added to the column).

    Raises
    ------
    InputError : column and property model that do not fit.
    ConvergenceError : what was tried, the worst stage and equation, and the dry-section estimate; `best` is the last
        state. NoSolutionError : a searched specification that is out of reach; it tells the best that can be reached.

    With a searched specification `start` serves the first trial column and `progress` is called by all of them.

    Source: simultaneous Newton on component flows, Naphtali & Sandholm, AIChE J. 17 (1971) 148; balances, equilibrium
    and energy written in mole fractions and solved as a band.
    """
    if column.search is not None:
        check_start(column, properties, start)
        return with_search(column, lambda trial, last: solve_equilibrium(trial, properties, efficiency, start=last,
                                                                         progress=progress), start)
    check_start(column, properties, start)
    problem = make_problem(column, properties)
    given = _efficiency_set(problem, efficiency)
    if start is not None:
        rows = stage_rows(problem, given)
        outcome = newton(problem, rows, state_of(problem, rows, start), progress=progress)
        if outcome.converged:
            return equilibrium_profile(problem, rows, outcome.state, outcome.iterations, outcome.residual,
                                       "from the profile given")
    state, outcome, rows = solve_state(problem, given, progress)
    return equilibrium_profile(problem, rows, state, outcome.iterations, outcome.residual, outcome.path)


def _efficiency_set(problem: Problem, efficiency: EfficiencySet | float | None) -> EfficiencySet | None:
    if efficiency is None or isinstance(efficiency, EfficiencySet):
        return efficiency
    value = finite_scalar("efficiency", efficiency)
    if value == 0.0:
        raise InputError(f"efficiency = {efficiency}: expected a finite number other than zero")
    masked = not problem.ordinary.all()
    basis = EfficiencyBasis.LIQUID_TEMPERATURE if masked else EfficiencyBasis.BUBBLE_POINT
    v = starting_state(problem).v
    return uniform_murphree(value, v / v.sum(1, keepdims=True), basis, problem.column.contact)


def check_start(column: Column, properties: PropertyModel, start: Profile | None) -> None:
    """Raise an `InputError` for a start of another size or of other components."""
    if start is None:
        return
    if not isinstance(start, Profile):
        raise InputError(f"start = {start!r}: expected a Profile")
    S, n = column.stages, len(properties.names)
    if start.x.shape != (S, n):
        raise InputError(f"start: a profile of {start.x.shape[0]} stages and {start.x.shape[1]} components, the column "
                         f"has {S} and {n}")
    if start.names != tuple(properties.names):
        raise InputError(f"start: a profile of {', '.join(start.names)}, the mixture is {', '.join(properties.names)}")


def state_of(problem: Problem, rows: StageRows, profile: Profile) -> State:
    """The unknowns that a profile stands for."""
    v = (profile.V + profile.vapor_draw)[:, None] * profile.y
    if problem.total_condenser:
        v[0] = profile.products["top"].flows
    l = (profile.L + profile.liquid_draw)[:, None] * profile.x
    return positive(problem, State(v, profile.T_L - rows.liquid_offset, l))


def solve_state(problem: Problem, efficiency: EfficiencySet | None, progress: Progress | None = None
                ) -> tuple[State, NewtonOutcome, StageRows]:
    """The solved state; falls back on shortened steps, on continuation in the efficiencies and in the reflux ratio."""
    rows = stage_rows(problem, efficiency)
    start = starting_state(problem)
    margin = dry_margin(problem, start)
    if margin is not None and margin <= 0:
        warnings.warn(f"the specifications seem to leave a section without vapour or liquid (smallest section flow "
                      f"{margin:.2g} times the distillate, an estimate)", PlausibilityWarning, stacklevel=3)
    if isinstance(problem.top, RefluxRatio) and problem.top.value > LARGEST_REFLUX:
        warnings.warn(f"RefluxRatio = {problem.top.value:g}: products are lost in the rounding of the internal flows; "
                      "total reflux is a problem of its own", PlausibilityWarning, stacklevel=3)
    tried = []
    if efficiency is not None and efficiency.kind is EfficiencyKind.MURPHREE_VAPOR:
        tamed = stage_rows(problem, efficiency.tamed())
        odd = not np.array_equal(tamed.factor, rows.factor)
        tame = newton(problem, tamed, start, progress=progress) if odd else None
        if tame is not None and tame.converged:
            outcome = newton(problem, rows, positive(problem, tame.state), progress=progress)
            if outcome.converged:
                outcome = replace(outcome, iterations=tame.iterations + outcome.iterations,
                                  path="from the column with odd efficiencies replaced")
                return outcome.state, outcome, rows
            tried.append(f"Newton from the column with odd efficiencies replaced: residual {outcome.residual:.2g}")
    outcome = newton(problem, rows, start, progress=progress)
    if outcome.converged:
        return outcome.state, outcome, rows
    tried.append(f"Newton from constant molar overflow ended at {outcome.reason}, residual {outcome.residual:.2g}")
    first = outcome
    if margin is not None and margin <= 0:
        raise convergence_error("equilibrium column", tried, first.worst, first.residual, margin, first.state)
    outcome = newton(problem, rows, start, damped=True, progress=progress)
    if outcome.converged:
        return outcome.state, replace(outcome, path="shortened steps"), rows
    tried.append(f"shortened steps: {outcome.reason}, residual {outcome.residual:.2g}")
    if efficiency is not None:
        outcome = _efficiency_continuation(problem, efficiency, start, progress)
        if outcome.converged:
            return outcome.state, replace(outcome, path="continuation from equilibrium stages"), rows
        tried.append(f"continuation from equilibrium stages: {outcome.reason}")
    if problem.top is None and problem.bottom is None and efficiency is None:
        outcome = newton(problem, rows, condensing_state(problem), progress=progress)
        if outcome.converged:
            return outcome.state, replace(outcome, path="from bubble points of the liquids"), rows
        tried.append(f"Newton from bubble points of the liquids: {outcome.reason}")
    if isinstance(problem.top, RefluxRatio) and efficiency is None:
        outcome = _reflux_continuation(problem, rows, progress)
        if outcome.converged:
            return outcome.state, replace(outcome, path="continuation in the reflux ratio"), rows
        tried.append(f"continuation in the reflux ratio: {outcome.reason}")
    raise convergence_error("equilibrium column", tried, first.worst, first.residual, margin, first.state,
                            unstable_liquid(problem, start.T, start.l))


def _efficiency_continuation(problem: Problem, efficiency: EfficiencySet, start: State, progress: Progress | None
                             ) -> NewtonOutcome:
    outcome = newton(problem, stage_rows(problem, None), start, progress=progress)
    if not outcome.converged:
        return replace(outcome, reason="equilibrium stages themselves were not solved")
    share, step = 0.0, 0.25
    while step > 0.01:
        target = min(1.0, share + step)
        trial = newton(problem, stage_rows(problem, efficiency.toward_equilibrium(target)),
                       positive(problem, outcome.state), limit=40, progress=progress)
        if not trial.converged:
            step *= 0.5
            continue
        outcome, share = trial, target
        if share == 1.0:
            return outcome
    return replace(outcome, converged=False, reason=f"stopped at {100 * share:.0f} % of the way")


def _reflux_continuation(problem: Problem, rows: StageRows, progress: Progress | None) -> NewtonOutcome:
    assert isinstance(problem.top, RefluxRatio)
    wanted = problem.top.value
    outcome: NewtonOutcome | None = None
    for factor in (2.0, 5.0):
        easier = replace(problem, top=RefluxRatio(wanted * factor))
        trial = newton(easier, rows, starting_state(easier), progress=progress)
        outcome = trial
        if trial.converged:
            break
    assert outcome is not None
    if not outcome.converged:
        return replace(outcome, reason=f"not solved at {5 * wanted:g} either")
    reached, ratio = wanted * factor, 1.5
    while ratio > 1.01:
        target = max(wanted, reached / ratio)
        trial = newton(replace(problem, top=RefluxRatio(target)), rows, positive(problem, outcome.state), limit=40,
                       progress=progress)
        if not trial.converged:
            ratio = ratio ** 0.5
            continue
        outcome, reached = trial, target
        if reached == wanted:
            return outcome
    return replace(outcome, converged=False, reason=f"no solution found below {reached:.4g}, {wanted:.4g} asked")


def positive(problem: Problem, state: State) -> State:
    """A converged state as the start of another solve: rounding below zero lifted to the floor."""
    v, l = masked(problem, np.maximum(state.v, TINY), np.maximum(state.l, TINY))
    return State(v, state.T, l)
