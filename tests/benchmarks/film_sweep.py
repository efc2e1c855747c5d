"""How many of 100,000 random films are solved, and how well; 200 of them solved again with high precision.

    OPENBLAS_NUM_THREADS=1 python tests/benchmarks/film_sweep.py [films 100000] [precise 200] [seed 0]

n = 2 to 10, five bootstraps, ten kinds of compositions and coefficients (see `film_cases`): zero and near-zero mole
fractions, pure and equal faces, diffusivity ratios to 1000, flux factors to 30 and beyond.
"""
from __future__ import annotations

import sys
import time
import warnings
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

from film_cases import BOOTSTRAPS, KINDS, Films, newton_change, precise_fluxes, random_films

from ratebased.bootstrap import LinearBootstrap
from ratebased.film import FilmStatus, krishna_standart
from ratebased.film.exact import rate_factors
from ratebased.film.problem import pose

SIZES = range(2, 11)


def main(total: int = 100_000, precise: int = 200, seed: int = 0) -> None:
    """Print the counts."""
    warnings.simplefilter("ignore")
    each = -(-total // len(SIZES))
    counts = np.zeros(len(FilmStatus), dtype=int)
    worst, beyond = 0.0, 0
    checked, right = 0, 0
    for n in SIZES:
        films = random_films(n, each, 1000 * seed + n)
        closure = LinearBootstrap(films.nu, films.s)
        start = time.process_time()
        found = krishna_standart(films.x0, films.xd, films.kappa, 1.0, closure, throw=False)
        spent = time.process_time() - start
        counts += np.bincount(found.status, minlength=len(FilmStatus))
        solved = np.flatnonzero(found.status <= FilmStatus.OTHER_BRANCH)
        change = newton_change(Films(*(getattr(films, f)[solved] for f in films.__dataclass_fields__)), found.N[solved])
        worst, beyond = max(worst, change.max()), beyond + int((change > 1e-10).sum())
        print(f"n={n}: {len(solved)} of {each} solved, {1e6 * spent / each:.1f} us each, iterations median "
              f"{np.median(found.iterations[solved]):.0f}, 99 % {np.quantile(found.iterations[solved], 0.99):.0f}; one "
              f"more Newton step moves N by {change.max():.1e} max|N| at most", flush=True)
        problem = pose(films.x0, films.xd, films.kappa, 1.0, closure)
        radius = np.abs(rate_factors(problem, np.nan_to_num(found.N))).max(-1)
        fit = solved[(radius[solved] < 40) & (np.abs(found.N[solved]).max(-1) > 0)]
        fit = fit[:: max(1, len(fit) // (precise // len(SIZES) + 1))][: -(-precise // len(SIZES))]
        for i in fit:
            exact, sensitivity = precise_fluxes(films, int(i), found.N[i])
            off = np.abs(found.N[i] - exact)
            good = (off <= 1e-10 * np.abs(exact).max() + 20 * sensitivity).all()
            checked, right = checked + 1, right + int(good)
            if not good:
                print(f"   off by {off.max() / np.abs(exact).max():.1e}: {KINDS[films.kind[i]]}, "
                      f"{BOOTSTRAPS[films.closure[i]]}")
    print("; ".join(f"{FilmStatus(k).name.lower()} {v}" for k, v in enumerate(counts) if v))
    print(f"one more Newton step: {beyond} films beyond 1e-10 max|N|, worst {worst:.1e}")
    print(f"high precision: {right} of {checked} within 1e-10 max|N| + 20 half-ulp sensitivities")


if __name__ == "__main__":
    main(*(int(a) for a in sys.argv[1:]))
