"""The ways to a solution in their order, and the test of the branch it lies on."""
from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from ..film.blocks import coth_blocks
from ..maxwell_stefan import film_matrix, reduced
from . import shooting
from .blocks import at_rest, evaluate
from .branch import continuation, determinant_sign, zero_flux_sign
from .equilibrium import zero_flux_temperature
from .newton import Iterate, newton
from .problem import InterfaceProblem
from .records import InterfaceStatus

Array = NDArray[np.float64]

PHYSICAL = -1e-10
"""Fractions below this make an answer unphysical; closer to zero they are rounding and set to zero."""
WARM_ITERATIONS = 12


@dataclass
class Found:
    """Where the search stands, on one batch axis.

    z (B, 2n+1) and y (B, n), the interface vapour. status, iterations (B,). shot: found by the fast path, with its
    residual and |A|_1. tested: on the branch of zero flux by the sign test, or started from an earlier answer. reached:
    fraction of the way a continuation came.
    """

    z: Array
    y: Array
    status: NDArray[np.int64]
    iterations: NDArray[np.int64]
    shot: NDArray[np.bool_]
    tested: NDArray[np.bool_]
    residual: Array
    size: Array
    reached: Array

    def accept(self, problem: InterfaceProblem, index: NDArray[np.int64], run: Iterate, label: InterfaceStatus) -> None:
        """Take the physical answers of a run on the problems `index`, and the last iterates of the others."""
        good = physical(problem, run)
        self.status[index[good]] = int(label)
        self.z[index], self.iterations[index] = run.z, run.iterations
        self.y[index] = np.where(good[:, None], run.y, self.y[index])


def nothing_yet(problem: InterfaceProblem) -> Found:
    B, n = len(problem.y), problem.n
    return Found(np.full((B, 2 * n + 1), np.nan), problem.y.copy(), np.full(B, int(InterfaceStatus.FAILED)),
                 np.zeros(B, np.int64), np.zeros(B, bool), np.zeros(B, bool), np.full(B, np.nan), np.full(B, np.nan),
                 np.zeros(B))


def physical(problem: InterfaceProblem, run: Iterate) -> NDArray[np.bool_]:
    """Converged with no negative fraction, at the interface or inside a film."""
    n = problem.n
    good = run.converged & (run.z[:, n:2 * n].min(-1) >= PHYSICAL) & (run.y.min(-1) >= PHYSICAL)
    return good & inside(problem, run.z, good)


def inside(problem: InterfaceProblem, z: Array, candidates: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """False where a profile turns out of the simplex between its ends.

    Told by an imaginary part beyond pi among the eigenvalues of [Phi]; only films of such a size can have it.
    """
    n = problem.n
    good = candidates.copy()
    if n > 2 and problem.exact_films:
        for K in (problem.K_V, problem.K_L):
            index = np.flatnonzero(good)
            A = film_matrix(z[index, :n], K[index])
            large = np.abs(A).sum(-2).max(-1) > np.pi
            index, A = index[large], A[large]
            good[index] = np.abs(np.linalg.eigvals(reduced(A)).imag).max(-1, initial=0.0) <= np.pi
    return good


def find(problem: InterfaceProblem, restart: Iterate | None, tolerance: float) -> Found:
    """From the earlier answer where there is one; the fast path; from zero flux; from T_L; by continuation.

    Other film methods start from the answer of the exact one, and keep to its branch.
    """
    if not problem.exact_films and restart is None:
        exact = find(replace(problem, rows=coth_blocks), None, tolerance)
        found = find(problem, Iterate(exact.z, exact.y, exact.status <= InterfaceStatus.OTHER_BRANCH, exact.iterations),
                     tolerance)
        other = (exact.status == InterfaceStatus.OTHER_BRANCH) & (found.status == InterfaceStatus.SOLVED)
        found.status[other] = int(InterfaceStatus.OTHER_BRANCH)
        return found
    found = nothing_yet(problem)
    warm = np.zeros(len(problem.y), bool) if restart is None else restart.converged
    if len(problem.y) >= shooting.WORTHWHILE and shooting.applicable(problem):
        shot = shooting.solve(problem, tolerance, restart.z if restart is not None and warm.all() else None)
        large = shot.solved & (shot.size > np.pi)
        if large.any():
            index = np.flatnonzero(large)
            shot.solved[index] = inside(problem.take(index), shot.z[index], np.ones(len(index), bool))
        found.status[shot.solved] = int(InterfaceStatus.SOLVED)
        found.z, found.y, found.iterations = shot.z, np.where(shot.solved[:, None], shot.y_I, found.y), shot.iterations
        found.shot, found.residual, found.size = shot.solved, shot.residual, shot.size
        found.tested = shot.solved & shot.connected
    index = np.flatnonzero(warm & (found.status == InterfaceStatus.FAILED))
    if restart is not None and len(index):
        part = problem.take(index)
        found.accept(part, index, newton(part, restart.z[index], restart.y[index], tolerance=tolerance,
                                         max_iterations=WARM_ITERATIONS), InterfaceStatus.SOLVED)
    found.tested |= warm & (found.status == InterfaceStatus.SOLVED)
    for label in (InterfaceStatus.SOLVED, InterfaceStatus.SECOND_START, InterfaceStatus.CONTINUATION):
        index = np.flatnonzero(found.status == InterfaceStatus.FAILED)
        if not len(index):
            break
        left = problem.take(index)
        if label == InterfaceStatus.CONTINUATION:
            run, found.reached[index] = continuation(left, tolerance)
        else:
            T = zero_flux_temperature(left, 1e-2) if label == InterfaceStatus.SOLVED else left.T_L
            run = newton(left, at_rest(left, T), left.y, tolerance=tolerance)
        found.accept(left, index, run, label)
    _test_branch(problem, found, tolerance)
    return found


def _test_branch(problem: InterfaceProblem, found: Found, tolerance: float) -> None:
    """The sign test; where it fails the root connected with zero flux is sought, else the status says so."""
    index = np.flatnonzero((found.status <= InterfaceStatus.CONTINUATION) & ~found.tested)
    if not len(index):
        return
    p = problem.take(index)
    expected = zero_flux_sign(p)
    other = determinant_sign(evaluate(p, found.z[index], found.y[index], False).dz) != expected
    if not other.any():
        return
    p, index = p.take(other), index[other]
    run, _ = continuation(p, tolerance)
    good = physical(p, run) & (determinant_sign(evaluate(p, run.z, run.y, False).dz) == expected[other])
    found.status[index] = np.where(good, int(InterfaceStatus.CONTINUATION), int(InterfaceStatus.OTHER_BRANCH))
    kept = index[good]
    found.z[kept], found.y[kept], found.iterations[kept] = run.z[good], run.y[good], run.iterations[good]
    found.shot[kept] = False
