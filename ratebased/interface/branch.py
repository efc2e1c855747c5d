"""The zero-flux state of a liquid, the sign test against it, and the continuation from it.

A bulk vapour in equilibrium with the bulk liquid, both at its boiling point T_0, exchanges nothing: a known solution.
Followed from there the branch is the one an engineer means; a fold in between changes the sign of the determinant of
the Jacobian. An equal sign is no proof (an even number of folds).
"""
from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from .blocks import at_rest, evaluate
from .equilibrium import zero_flux_temperature
from .newton import Iterate, newton
from .problem import InterfaceProblem

Array = NDArray[np.float64]

FIRST_STEP, LEAST_STEP, MOST_STEPS = 0.05, 1e-5, 150


@dataclass(frozen=True)
class ZeroFlux:
    """The bulk vapour y (B, n) and temperature T (B,) with which the bulk liquid exchanges nothing."""

    y: Array
    T: Array


def zero_flux_state(problem: InterfaceProblem) -> ZeroFlux:
    """y_0 = K x (non-condensing components as in the bulk vapour) and T_0."""
    T = zero_flux_temperature(problem)
    x, y = problem.x, problem.y
    K = np.where(problem.ordinary, problem.properties.k_value(T, problem.P, x, y), 0.0)
    y_0 = np.where(problem.condensable, K * x, y)
    for _ in range(20):                                       # only where K depends on the vapour
        total = y_0.sum(-1, keepdims=True)
        y_0 = np.where(total > 0, y_0 / np.where(total > 0, total, 1.0), y)
        K = np.where(problem.ordinary, problem.properties.k_value(T, problem.P, x, y_0), 0.0)
        new = np.where(problem.condensable, K * x, y)
        if np.abs(new - y_0).max(initial=0.0) < 1e-12:
            break
        y_0 = new
    total = y_0.sum(-1, keepdims=True)
    return ZeroFlux(np.where(total > 0, y_0 / np.where(total > 0, total, 1.0), y), T)


def between(problem: InterfaceProblem, origin: ZeroFlux, t: Array) -> InterfaceProblem:
    """The problem a fraction t (B,) of the way from the zero-flux state to the bulks asked for."""
    y = origin.y + t[:, None] * (problem.y - origin.y)
    T_V, T_L = origin.T + t * (problem.T_V - origin.T), origin.T + t * (problem.T_L - origin.T)
    model = problem.properties
    return replace(problem, y=y, T_V=T_V, T_L=T_L, H_V=np.asarray(model.vapor_enthalpy(T_V, problem.P, y)),
                   H_L=np.asarray(model.liquid_enthalpy(T_L, problem.P, problem.x)))


def determinant_sign(dz: Array) -> Array:
    """Sign of det(dz), zero where it is not finite."""
    sign, _ = np.linalg.slogdet(np.where(np.isfinite(dz).all((-1, -2), keepdims=True), dz, 0.0))
    return np.asarray(sign, dtype=float)


def zero_flux_sign(problem: InterfaceProblem, origin: ZeroFlux | None = None) -> Array:
    """Sign of the determinant at the zero-flux solution of the same liquids, (B,)."""
    if origin is None:
        origin = zero_flux_state(problem)
    at_zero = between(problem, origin, np.zeros(len(origin.T)))
    return determinant_sign(evaluate(at_zero, at_rest(at_zero, origin.T), origin.y, False).dz)


def continuation(problem: InterfaceProblem, tolerance: float) -> tuple[Iterate, Array]:
    """Follow the solution from the zero-flux state to the bulks asked for; also the fraction of the way reached.

    Iterations are those of all steps together.
    """
    origin = zero_flux_state(problem)
    B = len(origin.T)
    t, step = np.zeros(B), np.full(B, FIRST_STEP)
    z, y, count = at_rest(between(problem, origin, t), origin.T), origin.y.copy(), np.zeros(B, np.int64)
    for _ in range(MOST_STEPS):
        active = np.flatnonzero((t < 1.0) & (step > LEAST_STEP))
        if not len(active):
            break
        aim = np.minimum(1.0, t[active] + step[active])
        there = between(problem.take(active), ZeroFlux(origin.y[active], origin.T[active]), aim)
        run = newton(there, z[active], y[active], tolerance=tolerance, max_iterations=15)
        count[active] += run.iterations
        good = active[run.converged]
        z[good], y[good], t[good] = run.z[run.converged], run.y[run.converged], aim[run.converged]
        step[active] *= np.where(run.converged, 1.5, 0.4)
    return Iterate(z, y, t >= 1.0, count), t
