"""Starting profiles: constant molar overflow and bubble-point sweeps, or sum-rates sweeps; and the dry-section
estimate.

Sources: bubble-point and sum-rates methods of Wang & Henke, Hydrocarbon Process. 45 (1966) 155 and Burningham & Otto,
Hydrocarbon Process. 46 (1967) 163 (both from memory); used here for a start only.
"""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.linalg import solve_banded

from ..properties.protocol import Array
from .problem import Problem
from .specifications import BoilupRatio, BottomsRate, DistillateRate, ReboilerDuty, RefluxRatio
from .steps import TINY

SWEEPS = 30
SWEEP_TOLERANCE = 1.0
"""K. Sweeps end when no temperature moves by more."""
BOILING_STEPS = 2


@dataclass(frozen=True)
class State:
    """Component flows leaving each stage before draws, (S, n), and temperatures, (S,). In a total condenser v is the
    liquid distillate and T the bubble point."""

    v: Array
    T: Array
    l: Array


def starting_state(problem: Problem) -> State:
    """A first profile without any guess from the user."""
    V, L = overflow(problem)
    if problem.top is None and problem.bottom is None:
        return _sum_rates(problem, V, L)
    return _bubble_sweeps(problem, V, L)


def condensing_state(problem: Problem) -> State:
    """A second start for columns without ends, where the gas condenses rather than dissolves: every liquid boils."""
    return _bubble_sweeps(problem, *overflow(problem))


def _feed_latent_heat(problem: Problem) -> float:
    z = problem.feed_components / problem.F
    properties, T, P = problem.properties, np.asarray(problem.mean_feed_temperature), np.asarray(problem.P.mean())
    x, y = np.where(problem.gas, 0.0, z), np.where(problem.heavy, 0.0, z)
    latent = properties.vapor_enthalpy(T, P, y / y.sum()) - properties.liquid_enthalpy(T, P, x / x.sum())
    weight = np.where(problem.ordinary, z, 0.0)
    return max(float(weight @ latent / weight.sum()), 1e3)


def _top_rates(problem: Problem) -> tuple[float, float]:
    """Distillate and reflux ratio, estimated at constant molar overflow where they are results."""
    F = problem.F
    vapor_in, drawn_vapor = float(problem.feeds.vapor.sum()), float(problem.vapor_draw.sum())
    available = F - float(problem.liquid_draw.sum()) - drawn_vapor
    net = vapor_in - drawn_vapor
    heat = float(problem.duty.sum()) / _feed_latent_heat(problem)
    net += heat
    top, bottom = problem.top, problem.bottom
    if bottom is None:
        if isinstance(top, RefluxRatio):
            return max(net, 0.02 * F) / (1.0 + top.value), top.value
        assert isinstance(top, DistillateRate)
        return top.value, max(net / top.value - 1.0, 0.05)
    boilup = bottom.value / _feed_latent_heat(problem) if isinstance(bottom, ReboilerDuty) else 0.0
    if isinstance(top, RefluxRatio):
        R = top.value
        if isinstance(bottom, BottomsRate):
            return available - bottom.value, R
        if isinstance(bottom, BoilupRatio):
            D = (bottom.value * available + net) / (R + 1.0 + bottom.value)
        else:
            D = (boilup + net) / (R + 1.0)
        return float(np.clip(D, 0.02 * F, available - 0.02 * F)), R
    assert isinstance(top, DistillateRate)
    D = top.value
    if isinstance(bottom, BoilupRatio):
        boilup = bottom.value * (available - D)
    return D, max((boilup + net) / D - 1.0, 0.05)


def overflow(problem: Problem) -> tuple[Array, Array]:
    """Total flows V, L leaving each stage at constant molar overflow, (S,), floored at 2 % of the feed."""
    S, F = problem.S, problem.F
    fl, fv = problem.feeds.liquid.sum(1), problem.feeds.vapor.sum(1)
    floor = 0.02 * F
    V, L = np.zeros(S), np.zeros(S)
    if problem.top is not None:
        D, R = _top_rates(problem)
        V[0], L[0] = D, R * D
        L[1:] = R * D + np.cumsum(fl[1:] - problem.liquid_draw[:-1])
        V[1:] = (R + 1.0) * D + np.concatenate(([0.0], np.cumsum(problem.vapor_draw[2:] - fv[1:-1])))
        if problem.reboiler:
            B = F - D - problem.liquid_draw.sum() - problem.vapor_draw.sum()
            bottom = problem.bottom
            L[-1] = bottom.value if isinstance(bottom, BottomsRate) else max(B, floor)
            if V[-1] <= floor:
                L[-2] = max(L[-2], L[-1] + floor)
    elif problem.bottom is not None:
        boilup = _boilup(problem)
        V = boilup + np.cumsum((fv - problem.vapor_draw)[::-1])[::-1]
        L = np.cumsum(fl - problem.liquid_draw)
        L[-1] = max(L[-1] - boilup, floor)
        if isinstance(problem.bottom, BottomsRate):
            L[-1] = problem.bottom.value
    else:
        L, V = np.cumsum(fl), np.cumsum(fv[::-1])[::-1]
    first = 1 if problem.top is not None else 0
    V[first:] = np.maximum(V[first:], floor)
    last = S - 1 if problem.reboiler else S
    L[first:last] = np.maximum(L[first:last], floor)
    return V, L


def _boilup(problem: Problem) -> float:
    liquid = float(problem.feeds.liquid.sum() - problem.liquid_draw.sum())
    bottom = problem.bottom
    if isinstance(bottom, BoilupRatio):
        return 0.9 * bottom.value * liquid / (1.0 + 0.9 * bottom.value)
    if isinstance(bottom, BottomsRate):
        return max(liquid - bottom.value, 0.02 * problem.F)
    assert isinstance(bottom, ReboilerDuty)
    return min(bottom.value / _feed_latent_heat(problem), 0.95 * liquid)


def _liquid_profile(problem: Problem, K: Array, V: Array, L: Array) -> tuple[Array, Array]:
    """Component flows v, l at given K and total flows: one tridiagonal system a component."""
    S, n = problem.S, problem.n
    feed = problem.feeds.vapor + problem.feeds.liquid
    ratio = np.where(problem.gas, 1e10, np.where(problem.heavy, 1e-30, V[:, None] * np.maximum(K, 1e-30) / L[:, None]))
    if problem.total_condenser:
        ratio[0] = V[0] / L[0]
    l = np.empty((S, n))
    band = np.zeros((3, S))
    liquid_share = 1.0 - np.minimum(problem.liquid_draw / np.maximum(L, 1e-9), 0.95)
    vapor_share = 1.0 - np.minimum(problem.vapor_draw / np.maximum(V, 1e-9), 0.95)
    for i in range(n):
        band[1] = 1.0 + ratio[:, i]
        band[2, :-1] = -liquid_share[:-1]
        band[0, 1:] = -(ratio[:, i] * vapor_share)[1:]
        l[:, i] = solve_banded((1, 1), band, feed[:, i], check_finite=False)
    l = np.maximum(l, TINY)
    v = np.maximum(ratio * l, TINY)
    return v, l


def masked(problem: Problem, v: Array, l: Array) -> tuple[Array, Array]:
    """Flows with exact zeros where a component is never in the phase."""
    l = np.where(problem.gas, 0.0, l)
    if problem.heavy.any():
        keep = np.zeros_like(v, bool)
        if problem.total_condenser:
            keep[0] = True
        v = np.where(problem.heavy & ~keep, 0.0, v)
    return v, l


def _boiling(problem: Problem, x: Array, T: Array, y: Array) -> tuple[Array, Array]:
    """Nearly bubble points of the condensable part: Newton steps of ln(sum K x) in 1/T, in which it is nearly straight.

    An oil raises the boiling point without limit: here it counts for half of the liquid at most.
    """
    shares = np.where(problem.gas, 0.0, x)
    if problem.heavy.any():
        volatile = np.where(problem.heavy, 0.0, shares).sum(-1, keepdims=True)
        heavy = shares.sum(-1, keepdims=True) - volatile
        cap = np.minimum(1.0, volatile / np.maximum(heavy, 1e-300))
        shares = np.where(problem.heavy, shares * cap, shares)
    shares = shares / shares.sum(-1, keepdims=True)
    low, high = problem.temperature_limits
    properties, P = problem.properties, problem.P
    for _ in range(BOILING_STEPS):
        Kx = np.where(problem.ordinary, properties.k_value(T, P, shares, y), 0.0) * shares
        total = Kx.sum(-1)
        y = Kx / total[:, None]
        near = np.minimum(T + 0.05, high) - np.where(T + 0.05 > high, 0.05, 0.0)
        other = np.where(problem.ordinary, properties.k_value(near, P, shares, y), 0.0) * shares
        slope = np.log(other.sum(-1) / total) / (1.0 / near - 1.0 / T)         # minus a latent heat over R
        inverse = 1.0 / T - np.log(total) / np.minimum(slope, -500.0)
        T = np.clip(1.0 / np.maximum(inverse, 1e-6), np.maximum(T - 60.0, low), np.minimum(T + 60.0, high))
    return T, y


def _bubble_sweeps(problem: Problem, V: Array, L: Array) -> State:
    S = problem.S
    z = np.where(problem.gas, 0.0, problem.feed_components)
    x = np.tile(z / z.sum(), (S, 1))
    vapor = np.where(problem.heavy, 0.0, problem.feed_components)
    y = np.tile(vapor / vapor.sum(), (S, 1))
    low, high = problem.temperature_limits
    T = np.full(S, np.clip(problem.mean_feed_temperature, low, high))
    for _ in range(4):
        T, y = _boiling(problem, x, T, y)
    v, l = y, x
    for _ in range(SWEEPS):
        K = problem.properties.k_value(T, problem.P, x, y)
        v, l = _liquid_profile(problem, K, V, L)
        _, inside = masked(problem, v, l)
        x = inside / inside.sum(-1, keepdims=True)
        new, y = _boiling(problem, x, T, y)
        change = np.abs(new - T).max()
        T = new
        if change < SWEEP_TOLERANCE:
            break
    K = np.where(problem.gas, 0.0, problem.properties.k_value(T, problem.P, x, y))
    vapor = np.where(problem.gas, v / v.sum(-1, keepdims=True), np.maximum(K * x, TINY))
    if problem.total_condenser:
        vapor[0] = x[0]
    vapor = vapor / vapor.sum(-1, keepdims=True)
    v, l = masked(problem, np.maximum(vapor * V[:, None], TINY), np.maximum(x * L[:, None], TINY))
    return State(v, T, l)


def _sum_rates(problem: Problem, V: Array, L: Array) -> State:
    S = problem.S
    T = np.full(S, problem.mean_feed_temperature)
    liquid, vapor = problem.feeds.liquid.sum(0), problem.feeds.vapor.sum(0)
    x, y = np.tile(liquid / liquid.sum(), (S, 1)), np.tile(vapor / vapor.sum(), (S, 1))
    v, l = y * V[:, None], x * L[:, None]
    for _ in range(SWEEPS):
        K = problem.properties.k_value(T, problem.P, x, y)
        v, l = masked(problem, *_liquid_profile(problem, K, V, L))
        new_L, new_V = l.sum(1), v.sum(1)
        change = max(float(np.abs(new_L / L - 1.0).max()), float(np.abs(new_V / V - 1.0).max()))
        L, V = new_L, new_V
        x, y = l / L[:, None], v / V[:, None]
        if change < 1e-3:
            break
    return State(v, T, l)


def dry_margin(problem: Problem, start: State) -> float | None:
    """Smallest section flow over the distillate, estimated by energy envelopes from the top on the starting profile.

    At or below zero the specifications seem to leave a section without vapour or liquid. None where the reflux is not
    specified.
    """
    if problem.top is None or not problem.reboiler:
        return None
    D, R = _top_rates(problem)
    properties, P = problem.properties, problem.P
    y, x = start.v / start.v.sum(1, keepdims=True), start.l / start.l.sum(1, keepdims=True)
    HV, HL = (properties.vapor_enthalpy(start.T, P, y) * y).sum(1), (properties.liquid_enthalpy(start.T, P,
                                                                                                x) * x).sum(1)
    reflux = properties.liquid_enthalpy(start.T[:1] - problem.subcooling, P[:1], x[:1])[0] @ x[0]
    distillate = D * (reflux if problem.total_condenser else HV[0])
    condenser = distillate + R * D * reflux - (R + 1.0) * D * HV[1]
    feeds = problem.feeds
    moles = np.cumsum(feeds.liquid.sum(1) + feeds.vapor.sum(1) - problem.liquid_draw - problem.vapor_draw)
    heat = np.cumsum(feeds.liquid_enthalpy + feeds.vapor_enthalpy + problem.duty - problem.liquid_draw * HL
                     - problem.vapor_draw * HV) + condenser
    j = np.arange(1, problem.S - 1)
    rise = HV[j + 1] - HL[j]
    V = (distillate + (moles[j] - D) * HL[j] - heat[j]) / np.where(np.abs(rise) > 1e-300, rise, 1e-300)
    L = V + moles[j] - D
    return float(min(V.min(), L.min()) / D)
