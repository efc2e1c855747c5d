"""Damped Newton method on the interface unknowns, a batch at once; finished problems leave the batch."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .blocks import evaluate
from .problem import InterfaceProblem

Array = NDArray[np.float64]

RATE_CAP = 2.0
"""Largest change of |A|_1 in one step, in units of max(1, |A|_1)."""
TEMPERATURE_CAP = 25.0
"""K."""
FRACTION_CAP = 0.5
LARGEST = 200.0
"""|A|_1 beyond which an iterate is given up."""
FLUX_FLOOR = 1e-14
"""Fluxes are never asked for closer than this times c kappa: at a pinch a relative test would never be met."""


@dataclass(frozen=True)
class Iterate:
    """Where a Newton run stands: z (B, 2n+1), the interface vapour y (B, n), converged and iterations (B,)."""

    z: Array
    y: Array
    converged: NDArray[np.bool_]
    iterations: NDArray[np.int64]


def solve_linear(J: Array, F: Array) -> Array:
    """J^-1 F batched; a singular or non-finite matrix gives NaN for its own problem only."""
    good = np.asarray(np.isfinite(J).all((-1, -2)) & np.isfinite(F).all(tuple(range(1, F.ndim))))
    if not good.all():
        J = np.where(good[:, None, None], J, np.eye(J.shape[-1]))
        F = np.where(good.reshape(-1, *[1] * (F.ndim - 1)), F, np.nan)
    right = F if F.ndim == 3 else F[..., None]
    try:
        step = np.linalg.solve(J, right)
    except np.linalg.LinAlgError:                             # one exactly singular matrix stops the whole batch
        largest = np.abs(J).max((-1, -2), keepdims=True)
        step = np.linalg.solve(J + 1e-13 * largest * np.eye(J.shape[-1]), right)
    return np.asarray(step if F.ndim == 3 else step[..., 0])


def newton(problem: InterfaceProblem, z: Array, y: Array, *, tolerance: float, max_iterations: int = 60) -> Iterate:
    """Newton from z (B, 2n+1), the whole step shortened by the caps above.

    Converged: the error left after the last step, e r/(1 - r) with e its size and r the ratio to the one before, is
    below `tolerance`, relative to the largest flux, to T_I and to one for the fractions.
    """
    n, B = problem.n, len(z)
    z, y = z.copy(), y.copy()
    converged, iterations = np.zeros(B, bool), np.full(B, max_iterations)
    active, before = np.arange(B), np.full(B, np.inf)
    low, high = problem.limits
    condensable = problem.condensable
    rate = 2.0 * np.maximum(np.broadcast_to(problem.K_V, (B, n, n)).max((-1, -2)),
                            np.broadcast_to(problem.K_L, (B, n, n)).max((-1, -2)))
    floor = FLUX_FLOOR / tolerance * np.broadcast_to(problem.flux_scale, (B,))
    p = problem
    for iteration in range(1, max_iterations + 1):
        za = z[active]
        with np.errstate(all="ignore"):
            blocks = evaluate(p, za, y[active], False)
            step = -solve_linear(blocks.dz, blocks.residual)
            dN, du, dT = step[:, :n], step[:, n:2 * n], step[:, 2 * n]
            tiny = 1e-300
            t = np.minimum(1.0, RATE_CAP * np.maximum(1.0, blocks.size) / (np.abs(dN).max(-1) * rate[active] + tiny))
            t = np.minimum(t, TEMPERATURE_CAP / (np.abs(dT) + tiny))
            t = np.minimum(t, FRACTION_CAP / (np.abs(du).max(-1) + tiny))
            new = za + t[:, None] * step
            u = np.clip(new[:, n:2 * n], 0.0, 1.0)
            liquid = np.where(condensable, u, 0.0).sum(-1, keepdims=True)
            new[:, n:2 * n] = np.where(condensable, u / np.where(liquid > 0, liquid, 1.0), u)
            new[:, 2 * n] = np.clip(new[:, 2 * n], low, high)
            e = np.maximum(np.abs(dN).max(-1) / (np.abs(new[:, :n]).max(-1) + floor[active]),
                           np.maximum(np.abs(dT) / new[:, 2 * n], np.abs(du).max(-1)))
            ratio = np.minimum(e / before[active], 0.9)
            inside = (new[:, 2 * n] == za[:, 2 * n] + t * dT)
            done = (t == 1.0) & inside & ((e < 1e-13) | ((e * ratio / (1.0 - ratio) < tolerance) & (e < 1e-4)))
            lost = ~np.isfinite(e) | (blocks.size > LARGEST)
        z[active], y[active] = new, blocks.y_I
        before[active] = np.where(t == 1.0, e, np.inf)
        converged[active[done & ~lost]] = True
        leaving = done | lost
        iterations[active[leaving]] = iteration
        if leaving.any():
            active = active[~leaving]
            if not len(active):
                break
            p = problem.take(active)
    return Iterate(z, y, converged, iterations)
