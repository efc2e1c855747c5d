"""Random films over the whole range the solver is meant for, and a check of an answer that is not the solver's own."""
from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ratebased.film.blocks import coth_blocks, film_matrix, reduced, resistances

Array = NDArray[np.float64]

BOOTSTRAPS = ("equimolar", "stagnant", "flux ratio", "latent heat", "total flux")
KINDS = ("plain", "traces", "zeros", "pure faces", "equal faces", "one equal fraction", "wide diffusivities",
         "equal diffusivities", "high flux", "low flux")


@dataclass(frozen=True)
class Films:
    """A batch of films, c_t = 1; kind and closure index `KINDS` and `BOOTSTRAPS`."""

    x0: Array
    xd: Array
    kappa: Array
    nu: Array
    s: Array
    kind: NDArray[np.int64]
    closure: NDArray[np.int64]

    def __len__(self) -> int:
        return len(self.x0)


def random_films(n: int, count: int, seed: int) -> Films:
    """Every kind of composition and every bootstrap in equal numbers, diffusivity ratios to 1e3, flux factors to 30."""
    rng = np.random.default_rng(seed)
    kind, closure = rng.integers(0, len(KINDS), count), rng.integers(0, len(BOOTSTRAPS), count)
    films = np.arange(count)

    def of(name: str) -> NDArray[np.bool_]:
        return kind == KINDS.index(name)

    x0, xd = (rng.dirichlet(np.full(n, 0.7), count) for _ in range(2))
    for x in (x0, xd):
        few = rng.random((count, n)) < 0.4
        x[few & of("traces")[:, None]] *= 10.0 ** rng.uniform(-12, -3, np.count_nonzero(few & of("traces")[:, None]))
        gone = few & of("zeros")[:, None]
        gone[films, x.argmax(-1)] = False
        x[gone] = 0.0
        pure = of("pure faces") & (rng.random(count) < 0.6)
        x[pure] = np.eye(n)[rng.integers(0, n, np.count_nonzero(pure))]
        x /= x.sum(-1, keepdims=True)
    xd[of("equal faces")] = x0[of("equal faces")]
    same = of("one equal fraction")
    j = rng.integers(0, n, count)
    rest = 1.0 - xd[films, j]
    wanted = np.where(same, x0[films, j], xd[films, j])
    scale = np.where(rest > 0, (1.0 - wanted) / np.where(rest > 0, rest, 1.0), 1.0)
    xd = np.where(same[:, None], xd * scale[:, None], xd)
    xd[films[same], j[same]] = wanted[same]
    low = of("low flux")
    share = 10.0 ** rng.uniform(-12, -3, count)[:, None]
    xd = np.where(low[:, None], x0 + share * (xd - x0), xd)
    xd /= xd.sum(-1, keepdims=True)

    span = np.select([of("wide diffusivities"), of("equal diffusivities")], [np.log(1e3), 0.0], np.log(30.0))
    kappa = np.exp(rng.uniform(0.0, 1.0, (count, n, n)) * span[:, None, None])
    kappa = np.triu(kappa, 1)
    kappa += np.swapaxes(kappa, -1, -2) + np.eye(n)

    nu, s = np.ones((count, n)), np.zeros(count)
    k = rng.integers(0, n, count)
    stagnant = closure == 1
    nu[stagnant] = np.eye(n)[k[stagnant]]
    ratio = closure == 2
    low_z, high_z = (f(x0[films, k], xd[films, k]) for f in (np.minimum, np.maximum))
    inside = rng.random(count) < 0.05                     # a ratio inside the range of x: no single solution
    z = np.where(rng.random(count) < 0.5, high_z + rng.exponential(1.0, count), low_z - rng.exponential(1.0, count))
    z = np.where(inside, 0.5 * (low_z + high_z), z)
    nu[ratio] = np.eye(n)[k[ratio]] - z[ratio, None]
    latent = closure == 3
    nu[latent] = rng.uniform(2e4, 5e4, (np.count_nonzero(latent), n))
    total = closure == 4
    # flux factors N_t/(c_t kappa) to 30 for the kind of that name, to 3 else
    size = np.where(of("high flux"), 30.0, 3.0) * rng.uniform(-1.0, 1.0, count)
    s[total] = (size * kappa[:, 0, 1])[total]
    thin = of("high flux") & ~total & (closure != 0)      # a bootstrap sum that falls by e^-30 across the film
    for i in np.flatnonzero(thin & stagnant):
        if 0 < x0[i, k[i]] < 1:
            x0[i, k[i]] *= np.exp(-rng.uniform(0, 27.0))
            x0[i] /= x0[i].sum()
    return Films(x0, xd, kappa, nu, s, kind, closure)


def newton_change(films: Films, N: Array) -> Array:
    """max|dN|/max|N| of one more Newton step of the coth form, (M), the most abundant component eliminated.

    Where a stagnant component changes more than a thousandfold its equation is the integrated one, sum_j K_kj N_j =
    ln(xd_k/x0_k): the mean-composition form holds no information on a mole fraction of 1e-12 against one.
    """
    M, n = films.x0.shape
    rows = np.arange(M)
    k = np.abs(films.nu).argmax(-1)
    a, b = films.x0[rows, k], films.xd[rows, k]
    log_law = (np.count_nonzero(films.nu, axis=-1) == 1) & (films.s == 0) & (np.minimum(a, b) < 1e-3 * np.maximum(a, b))
    weight = films.x0 + films.xd
    weight[rows[log_law], k[log_law]] = -1.0
    order = np.argsort(np.arange(n) == weight.argmax(-1)[:, None], axis=1, kind="stable")

    def moved(x: Array) -> Array:
        return np.take_along_axis(x, order, axis=1)

    x0, xd, nu, N = moved(films.x0), moved(films.xd), moved(films.nu), moved(N)
    K = resistances(films.kappa, np.ones(M))[rows[:, None, None], order[:, :, None], order[:, None, :]]
    blocks = coth_blocks(N, K, x0, xd)
    J = np.concatenate((blocks.dN, nu[:, None, :]), axis=1)
    right = np.concatenate((-blocks.residual, (films.s - (nu * N).sum(-1))[:, None]), axis=1)
    place = (order == k[:, None]).argmax(-1)
    at = rows[log_law]
    J[at, place[at]] = K[at, place[at]]
    right[at, place[at]] = np.log(b[at] / a[at]) - (K[at, place[at]] * N[at]).sum(-1)
    step = np.linalg.solve(J, right[:, :, None])[:, :, 0]
    size = np.abs(N).max(-1)
    return np.abs(step).max(-1) / np.where(size > 0, size, 1.0)


def precise_fluxes(films: Films, i: int, start: Array) -> tuple[Array, Array]:
    """Film i solved with mpmath, exp(A/2) x0 - exp(-A/2) xd = 0 and nu . N = s to 40 digits and more.

    For rate factors up to 40. The exponentials act by their Taylor series in enough digits for |A|; the correction of N
    is taken with the Jacobian of the coth form in double precision, which decides the rate of convergence and not the
    answer. The most abundant component makes both sums one exactly. Returns N and its change when every mole fraction
    moves by half a unit in the last place: no solver in double precision can be asked for less. Raises RuntimeError
    where the iteration does not settle.
    """
    import mpmath

    n = films.x0.shape[1]
    order = np.argsort(np.arange(n) == (films.x0[i] + films.xd[i]).argmax(), kind="stable")
    a, b, weights = films.x0[i][order], films.xd[i][order], films.nu[i][order]
    kappa, N = films.kappa[i][order][:, order], start[order]
    K = resistances(kappa, 1.0)
    blocks = coth_blocks(N, K, a, b)
    inverse = np.linalg.inv(np.vstack((blocks.dN, weights)))
    A = film_matrix(N, K)
    w, V = np.linalg.eig(reduced(A))
    half = np.where(np.abs(w) < 1e-8, 1e-8, 0.5 * w)
    unshoot = ((V * (half / np.sinh(half))) @ np.linalg.inv(V)).real           # the two residuals differ by sinhc(A/2)
    norm = float(np.abs(A).sum(0).max())
    with mpmath.workdps(60 + int(norm)):
        mpf = mpmath.mpf
        x0, xd = ([*(mpf(v) for v in x[:-1]), 1 - sum(mpf(v) for v in x[:-1])] for x in (a, b))
        exact_K = [[mpf(0) if p == q else 1 / mpf(kappa[p, q]) for q in range(n)] for p in range(n)]
        nu, s = [mpf(v) for v in weights], mpf(films.s[i])
        M = [mpf(float(v)) for v in N]
        for _ in range(12):
            drag = [sum(exact_K[p][q] * M[q] for q in range(n)) for p in range(n)]

            def action(x: list, sign: int, drag: list = drag, M: list = M) -> list:
                total, term = list(x), list(x)
                for k in range(1, 40 * int(norm + 10)):
                    pull = [sum(exact_K[p][q] * term[q] for q in range(n)) for p in range(n)]
                    term = [sign * (drag[p] * term[p] - M[p] * pull[p]) / (2 * k) for p in range(n)]
                    total = [u + v for u, v in zip(total, term)]
                    if k > norm and max(abs(v) for v in term) < mpf(10) ** -(50 + int(norm)):
                        return total
                raise RuntimeError("series does not end")

            missed = [u - v for u, v in zip(action(x0, 1), action(xd, -1))]
            closure = sum(u * v for u, v in zip(nu, M)) - s
            scale = max(*(abs(v) for v in missed), abs(closure), mpf(10) ** -300)
            right = np.append(-unshoot @ [float(v / scale) for v in missed[:-1]], float(closure / scale))
            step = inverse @ right
            M = [v - mpf(float(d)) * scale for v, d in zip(M, step)]
            if np.abs(step).max() * scale < mpf(10) ** -30 * max(abs(v) for v in M):
                break
        else:
            raise RuntimeError("no convergence in high precision")
        fluxes = np.array([float(v) for v in M])
    moves = np.zeros(n)
    for slope, x in ((blocks.dx0, a), (blocks.dxd, b)):
        moves += np.abs(inverse[:, :-1] @ slope) @ (x[:-1] * 2.0**-53)
    back = np.argsort(order)
    return fluxes[back], moves[back]
