"""A batch of film problems as the solvers see it: checked, on one batch axis, with the tests for existence."""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from enum import IntEnum
from functools import cached_property
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..arguments import batch_shape, finite_array, mole_fractions, pair_matrix, positive_array
from ..bootstrap import Bootstrap
from ..errors import InputError
from ..maxwell_stefan import resistances

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]
Codes = NDArray[np.int8]
Counts = NDArray[np.int64]
Composition = Callable[[Array], Array]
"""A function of the mole fractions (..., n) that gives a matrix (..., m, m) for each."""

ZERO_SUM = 1e-14
"""nu . x counts as zero below this fraction of sum |nu_i| x_i: what rounding leaves of a sum that cancels."""


class FilmStatus(IntEnum):
    """What became of one film of a batch; `MESSAGES` says it in words."""

    CONVERGED = 0
    OTHER_BRANCH = 1
    NO_SOLUTION = 2
    UNDETERMINED = 3
    UNSTABLE = 4
    NOT_CONVERGED = 5


class Solved(NamedTuple):
    """What a solver gives back for M films: fluxes (M, n), `FilmStatus` codes, iterations, and where flux is so high
    that the film model itself is doubtful (None: not looked at)."""

    N: Array
    status: Codes
    steps: Counts
    high: Mask | None = None


MESSAGES = {
    FilmStatus.CONVERGED: "solved",
    FilmStatus.OTHER_BRANCH: "solved, on a branch separated by a fold from the zero-flux film: other solutions exist",
    FilmStatus.NO_SOLUTION: "no single finite solution: the bootstrap sum nu_i x_i is zero at one face or has opposite "
                            "signs at the two faces (a component with no flux that is absent at one face, a flux ratio "
                            "inside the range of its mole fraction, latent heats of mixed sign). There are none or "
                            "two; `solutions` looks for them",
    FilmStatus.UNDETERMINED: "the bootstrap sum nu_i x_i is zero at both faces (a component with no flux that is "
                             "absent from the film): the total flux is undetermined, choose another bootstrap",
    FilmStatus.UNSTABLE: "unstable mixture: [Gamma] has an eigenvalue that is not positive",
    FilmStatus.NOT_CONVERGED: "no solution found",
}


@dataclass(frozen=True)
class FilmProblem:
    """M films of n components on one axis.

    x0, xd, nu (M, n); s (M); gamma (M, n-1, n-1) or None. kappa (M, n, n), m/s, and c_t (M), mol/m3, may be views that
    repeat one entry. shape: the batch shape the results go back to.
    """

    x0: Array
    xd: Array
    kappa: Array
    c_t: Array
    nu: Array
    s: Array
    gamma: Array | None
    shape: tuple[int, ...]

    def __len__(self) -> int:
        return len(self.x0)

    @property
    def n(self) -> int:
        """Number of components."""
        return int(self.x0.shape[-1])

    @cached_property
    def K(self) -> Array:
        """1/(c_t kappa), (M, n, n), zero diagonal."""
        return resistances(self.kappa, self.c_t)

    def take(self, index: NDArray[np.intp] | Mask) -> FilmProblem:
        """The films of `index`, on one axis."""
        gamma = None if self.gamma is None else self.gamma[index]
        part = self.x0[index]
        return FilmProblem(part, self.xd[index], self.kappa[index], self.c_t[index], self.nu[index], self.s[index],
                           gamma, (len(part),))


def reordered(problem: FilmProblem, order: NDArray[np.intp]) -> FilmProblem:
    """The films with component order[m, i] of film m in place i, [Gamma] referred to the new last component."""
    def moved(array: Array) -> Array:
        return np.take_along_axis(array, order, axis=1)

    films = np.arange(len(problem))[:, None, None]
    gamma = problem.gamma
    if gamma is not None:
        n = problem.n
        every = np.concatenate((np.eye(n - 1), -np.ones((1, n - 1))))      # all deviations from the first n-1
        change = every[order[:, :-1]]
        gamma = change @ gamma @ np.linalg.inv(change)
    return FilmProblem(moved(problem.x0), moved(problem.xd), problem.kappa[films, order[:, :, None], order[:, None, :]],
                       problem.c_t, moved(problem.nu), problem.s, gamma, problem.shape)


def order_with_last(last: NDArray[np.intp], n: int) -> NDArray[np.intp]:
    """The component orders (M, n) that put component last[m] at the end and keep the rest as it is."""
    return np.argsort(np.arange(n) == last[:, None], axis=1, kind="stable")


def flattened(array: Array, shape: tuple[int, ...], keep: int) -> Array:
    """`array` broadcast to the batch `shape`, its batch axes made one, the last `keep` kept; a view if possible."""
    tail = array.shape[array.ndim - keep:]
    if array.shape[: array.ndim - keep] == shape and len(shape) == 1:
        return array
    if array.ndim == keep:
        return np.broadcast_to(array, (int(np.prod(shape)), *tail))
    return np.broadcast_to(array, (*shape, *tail)).reshape(-1, *tail)


def pose(x0: ArrayLike, xd: ArrayLike, kappa: ArrayLike, c_t: ArrayLike, bootstrap: Bootstrap,
         gamma: ArrayLike | None = None) -> FilmProblem:
    """Check the arguments of a film method and put them on one batch axis. Raises InputError."""
    x0 = checked_fractions("x0", x0)
    n = x0.shape[-1]
    if n < 2:
        raise InputError(f"x0: a film needs two components or more, got {n}")
    xd = checked_fractions("xd", xd, n)
    kappa = checked_pairs(kappa, n)
    c_t = positive_array("c_t", c_t)
    if isinstance(bootstrap, type) or not hasattr(bootstrap, "linear_form"):
        raise InputError(f"bootstrap: expected an object of `ratebased.bootstrap`, Equimolar() say, got {bootstrap!r}")
    nu, s = bootstrap.linear_form(n)
    shapes = {"x0": x0.shape[:-1], "xd": xd.shape[:-1], "kappa": kappa.shape[:-2], "c_t": c_t.shape,
              "nu": nu.shape[:-1], "s": s.shape}
    if gamma is not None:
        gamma = finite_array("gamma", gamma)
        if gamma.shape[-2:] != (n - 1, n - 1):
            raise InputError(f"gamma: expected shape (..., {n - 1}, {n - 1}), got {gamma.shape}")
        shapes["gamma"] = gamma.shape[:-2]
    shape = batch_shape(**shapes)
    return FilmProblem(flattened(x0, shape, 1), flattened(xd, shape, 1), flattened(kappa, shape, 2),
                       flattened(c_t, shape, 0), flattened(nu, shape, 1), flattened(s, shape, 0),
                       None if gamma is None else flattened(gamma, shape, 2), shape)


def checked_fractions(name: str, x: ArrayLike, n: int | None = None) -> Array:
    """`mole_fractions`, without a copy where the sums are one to rounding."""
    if isinstance(x, np.ndarray) and x.dtype == np.float64 and x.ndim and x.size and (n is None or x.shape[-1] == n):
        total = x @ np.ones(x.shape[-1])
        if x.min() >= 0 and np.abs(total - 1.0).max() <= 1e-15:
            return x
    return mole_fractions(name, x, n)


def checked_pairs(kappa: ArrayLike, n: int) -> Array:
    """`kappa` as (..., n, n): the check of `pair_matrix` in pieces that stay in cache, and no copy if it passes."""
    if isinstance(kappa, np.ndarray) and kappa.dtype == np.float64 and kappa.shape[-2:] == (n, n):
        rows, columns = np.triu_indices(n, 1)
        flat = kappa.reshape(-1, n * n)
        step = max(1, 60000 // (n * n))
        for start in range(0, len(flat), step):
            part = flat[start:start + step]
            upper = part.take(rows * n + columns, axis=1)
            if not (upper.min() > 0 and upper.max() < np.inf
                    and np.array_equal(upper, part.take(columns * n + rows, axis=1))):
                break
        else:
            return kappa
    return pair_matrix("kappa", kappa, n)


def existence(problem: FilmProblem) -> Codes:
    """`CONVERGED` where a solution may be looked for, else `NO_SOLUTION` or `UNDETERMINED`.

    For s = 0, N tends to N_t x0 (N_t xd) as N_t goes to plus (minus) infinity, so nu . N changes sign between the two
    exactly when nu . x has one sign at both faces: then the number of solutions is odd, else even. Binary films and
    equal diffusivities: one, or none.
    """
    nu, x0, xd = problem.nu, problem.x0, problem.xd
    status = np.zeros(len(problem), dtype=np.int8)
    a, b = np.einsum("mi,mi->m", nu, x0), np.einsum("mi,mi->m", nu, xd)
    product = a * b
    if product.min(initial=1.0) > 0 and nu.min(initial=0.0) >= 0:   # nothing cancels
        return status
    weight = np.abs(nu)
    zero0 = np.abs(a) <= ZERO_SUM * (weight * x0).sum(-1)
    zerod = np.abs(b) <= ZERO_SUM * (weight * xd).sum(-1)
    closed = problem.s == 0
    status[closed & ((product < 0) | (zero0 ^ zerod))] = FilmStatus.NO_SOLUTION
    status[zero0 & zerod] = FilmStatus.UNDETERMINED
    return status


def film_names(mask: Mask, shape: tuple[int, ...]) -> str:
    """The first films of a flat mask by their batch index, for messages."""
    if not shape:
        return "the film"
    found = np.flatnonzero(mask)
    first = [str([int(i) for i in np.unravel_index(k, shape)]) for k in found[:3]]
    return f"{len(found)} of {mask.size} films, first {', '.join(first)}"
