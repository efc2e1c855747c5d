"""Rows of condenser and reboiler, the same in both column models."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..properties.differences import k_value_derivatives
from ..properties.protocol import Array, Mask
from .problem import Problem
from .specifications import BoilupRatio, BottomsRate, DistillateRate, ReboilerDuty, RefluxRatio
from .steps import fractions


@dataclass(frozen=True)
class EquilibriumPart:
    """K x of a set of stages and its derivatives by component flows v, l (before draws) and temperature.

    Kx (S, n); by_T (S, n); by_v, by_l (S, n, n). y, x and their derivatives dy, dx by v and l. V, L totals.
    """

    V: Array
    y: Array
    dy: Array
    L: Array
    x: Array
    dx: Array
    K: Array
    Kx: Array
    by_T: Array
    by_v: Array
    by_l: Array


def equilibrium_part(problem: Problem, P: Array, v: Array, T: Array, l: Array, y: Array | None = None,
                     held: Mask | None = None) -> EquilibriumPart:
    """`y` replaces the vapour's composition in K; where `held`, K does not follow v."""
    V, y_out, dy = fractions(v)
    L, x, dx = fractions(l)
    vapor = y_out if y is None else y
    K = np.where(problem.ordinary, problem.properties.k_value(T, P, x, vapor), 0.0)
    slope = k_value_derivatives(problem.properties, T, P, x, vapor)
    Kx = K * x
    by_l = K[..., None] * dx + Kx[..., None] * slope.liquid / L[..., None, None]
    by_v = Kx[..., None] * slope.vapor / V[..., None, None]
    if held is not None:
        by_v = np.where(held[:, None, None], 0.0, by_v)
    return EquilibriumPart(V, y_out, dy, L, x, dx, K, Kx, Kx * slope.temperature, by_v, by_l)


def one_stage(part: EquilibriumPart, j: int) -> EquilibriumPart:
    """The part of one stage, arrays (1, ...)."""
    return EquilibriumPart(*(getattr(part, name)[j:j + 1] for name in part.__dataclass_fields__))


@dataclass(frozen=True)
class EndRows:
    """n equilibrium rows and one specification row of an end stage, scaled, with derivatives by v, T, l.

    energy: the specification is a duty, the stage keeps its energy balance in place of `residual[n]`.
    """

    residual: Array
    by_v: Array
    by_T: Array
    by_l: Array
    energy: bool


def bubble_vapor(problem: Problem, P: Array, T: Array, l: Array, y: Array) -> Array:
    """K x of liquids, normalised, with K at the last estimate `y` of that vapour."""
    x = l / l.sum(-1, keepdims=True)
    Kx = np.where(problem.ordinary, problem.properties.k_value(T, P, x, y), 0.0) * x
    vapor: Array = Kx / Kx.sum(-1, keepdims=True)
    return vapor


def condenser_rows(problem: Problem, part: EquilibriumPart, v: Array, l: Array) -> EndRows:
    """Rows of stage 1; arrays of one stage, (1, n). Total: v is the liquid distillate, T the bubble point."""
    n, fe = problem.n, 1.0 / problem.F
    one = np.eye(n)
    r, by_v, by_T, by_l = np.zeros(n + 1), np.zeros((n + 1, n)), np.zeros(n + 1), np.zeros((n + 1, n))
    spec = problem.top
    if not problem.total_condenser:
        _equilibrium_rows(problem, part, v, l, r, by_v, by_T, by_l)
        if isinstance(spec, RefluxRatio):
            r[n] = (l[0].sum() - spec.value * v[0].sum()) * fe
            by_v[n], by_l[n] = -spec.value * fe, fe
        else:
            assert isinstance(spec, DistillateRate)
            r[n], by_v[n] = (v[0].sum() - spec.value) * fe, fe
        return EndRows(r, by_v, by_T, by_l, False)
    if isinstance(spec, RefluxRatio):
        r[:n] = (spec.value * v[0] - l[0]) * fe
        by_v[:n], by_l[:n] = spec.value * fe * one, -fe * one
    else:
        assert isinstance(spec, DistillateRate)
        k = int(np.argmax(v[0]))
        r[:n] = part.y[0] - part.x[0]
        by_v[:n], by_l[:n] = part.dy[0], -part.dx[0]
        r[k], by_v[k], by_l[k] = (v[0].sum() - spec.value) * fe, fe, 0.0
    r[n] = part.Kx[0].sum() - 1.0
    by_T[n], by_l[n] = part.by_T[0].sum(), part.by_l[0].sum(0)
    return EndRows(r, by_v, by_T, by_l, False)


def reboiler_rows(problem: Problem, part: EquilibriumPart, v: Array, l: Array) -> EndRows:
    """Rows of the last stage; arrays of one stage, (1, n)."""
    n, fe = problem.n, 1.0 / problem.F
    r, by_v, by_T, by_l = np.zeros(n + 1), np.zeros((n + 1, n)), np.zeros(n + 1), np.zeros((n + 1, n))
    _equilibrium_rows(problem, part, v, l, r, by_v, by_T, by_l)
    spec = problem.bottom
    if isinstance(spec, BoilupRatio):
        r[n] = (v[0].sum() - spec.value * l[0].sum()) * fe
        by_v[n], by_l[n] = fe, -spec.value * fe
    elif isinstance(spec, BottomsRate):
        r[n], by_l[n] = (l[0].sum() - spec.value) * fe, fe
    return EndRows(r, by_v, by_T, by_l, isinstance(spec, ReboilerDuty))


def _equilibrium_rows(problem: Problem, part: EquilibriumPart, v: Array, l: Array, r: Array, by_v: Array,
                      by_T: Array, by_l: Array) -> None:
    """y = K x; a non-condensing component has no liquid, a non-volatile one no vapour."""
    fe = 1.0 / problem.F
    o = np.flatnonzero(problem.ordinary)
    r[o] = (part.y - part.Kx)[0, o]
    by_v[o], by_T[o], by_l[o] = (part.dy - part.by_v)[0, o], -part.by_T[0, o], -part.by_l[0, o]
    for mask, flow, slope in ((problem.gas, l, by_l), (problem.heavy, v, by_v)):
        for k in np.flatnonzero(mask):
            r[k], slope[k, k] = flow[0, k] * fe, fe
