"""Every solution of one interface that a seeded search from many starts finds."""
from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..arguments import positive_scalar, whole_number
from ..errors import InputError
from ..film import krishna_standart
from ..properties.protocol import PropertyModel
from .answer import answer
from .blocks import at_rest, evaluate
from .branch import determinant_sign, zero_flux_sign
from .equilibrium import zero_flux_temperature
from .film_rows import FilmMethod
from .flux import checked, flat
from .newton import newton
from .paths import nothing_yet, physical
from .problem import InterfaceProblem, entries, prepare
from .records import Bulk, InterfaceFlux, InterfaceStatus

Array = NDArray[np.float64]

SAME = 1e-6
"""Roots whose fluxes (relative to the largest) and T_I (relative) differ by less are one."""
PROFILE = 17
"""Places inside each film at which the profile must not be negative."""


def solutions(vapor: Bulk, liquid: Bulk, properties: PropertyModel, P: ArrayLike, *,
              film: FilmMethod = krishna_standart, starts: int = 240, seed: int = 0,
              tolerance: float = 1e-10) -> InterfaceFlux:
    """All distinct physical solutions of one interface, on a leading axis: (roots,) batch.

    Newton from `starts` seeded points: T_I from 60 K below to 60 K above the bulk temperatures, the fluxes zero in a
    third of them and random in the others, the interface compositions those of the bulks or random. Roots with a
    negative fraction at the interface or inside a film are dropped. `status` is SOLVED where the determinant has the
    sign of the zero-flux state, else OTHER_BRANCH; the first kind comes first, then the smaller fluxes. A search proves
    nothing: there may be more.

    Arguments and errors as in `interface_flux`; the bulks must be those of one interface. No root: a batch of length 0.
    """
    tolerance, starts = positive_scalar("tolerance", tolerance), whole_number("starts", starts)
    vapor, liquid, pressure, batch = checked(vapor, liquid, properties, P)
    n = len(properties.names)
    if batch != ():
        raise InputError(f"vapor, liquid, P: `solutions` takes one interface, got a batch of shape {batch}")
    if starts < 3:
        raise InputError(f"starts = {starts}: expected 3 or more")
    one = prepare(flat(vapor, (1,), n), flat(liquid, (1,), n), entries(properties, np.zeros(1, int)),
                  pressure.reshape(1), film)
    many = one.take(np.zeros(starts, int))
    run = newton(many, _starts(many, np.random.default_rng(seed)), many.y, tolerance=tolerance)
    good = np.flatnonzero(physical(many, run))
    roots: list[int] = []
    for k in good:
        if not any(_same(run.z[k], run.z[r], n) for r in roots):
            roots.append(int(k))
    kept = np.array(roots, dtype=int)
    result, connected = _answer(many.take(kept), run.z[kept], run.y[kept], run.iterations[kept], properties.names)
    inside = np.array([_positive(result, r) for r in range(len(kept))], dtype=bool) & result.solved
    order = np.lexsort((np.abs(result.N).max(-1), ~connected))
    order = order[inside[order]]
    again = kept[order]
    return _answer(many.take(again), run.z[again], run.y[again], run.iterations[again], properties.names)[0]


def _starts(problem: InterfaceProblem, rng: np.random.Generator) -> Array:
    B, n = problem.y.shape
    coldest, hottest = np.minimum(problem.T_V, problem.T_L), np.maximum(problem.T_V, problem.T_L)
    low, high = problem.limits
    T = np.clip(rng.uniform(np.maximum(coldest - 60.0, 150.0), hottest + 60.0), low, high)
    z = at_rest(problem, T)
    moving = np.arange(B) % 3 != 0
    size = problem.flux_scale * 10.0 ** rng.uniform(-1.0, 1.5, B)
    z[:, :n] = np.where(moving[:, None] & problem.ordinary, rng.normal(size=(B, n)) * size[:, None], 0.0)
    random = rng.gamma(1.0, 1.0, (B, n)) * problem.condensable
    random /= random.sum(-1, keepdims=True)
    mixed = (rng.uniform(size=(B, 1)) < 0.5) & problem.condensable
    z[:, n:2 * n] = np.where(mixed, random, z[:, n:2 * n])
    z[0] = at_rest(problem, zero_flux_temperature(problem))[0]
    z[1] = at_rest(problem, problem.T_L)[1]
    return z


def _same(a: Array, b: Array, n: int) -> bool:
    largest = max(np.abs(a[:n]).max(), np.abs(b[:n]).max())
    return bool(np.abs(a[:n] - b[:n]).max() <= SAME * largest and abs(a[2 * n] - b[2 * n]) <= SAME * a[2 * n])


def _answer(problem: InterfaceProblem, z: Array, y: Array, iterations: NDArray[np.int64],
            names: tuple[str, ...]) -> tuple[InterfaceFlux, NDArray[np.bool_]]:
    found = nothing_yet(problem)
    connected = np.zeros(len(z), bool)
    if len(z):
        connected = determinant_sign(evaluate(problem, z, y, False).dz) == zero_flux_sign(problem)
    found.z, found.y, found.iterations = z, y, iterations
    found.status = np.where(connected, int(InterfaceStatus.SOLVED), int(InterfaceStatus.OTHER_BRANCH))
    return answer(problem, found, False, (len(z),), names)[0], connected


def _positive(result: InterfaceFlux, root: int) -> bool:
    eta = np.linspace(0.0, 1.0, PROFILE)
    return all(bool(film.profile(eta)[root].min() > -1e-9) for film in (result.vapor_film, result.liquid_film))
