"""Interfaces per second against the plain scripts, ratios in one run.

    OPENBLAS_NUM_THREADS=1 python tests/benchmarks/interface_speed.py [batch] [repeats]

One batch mixes five kinds of constructed interfaces (ordinary, near-equimolar, condensation, evaporation, subcooled or
superheated); the sign test is included. Processor time, the fastest of several repeats of each.
"""
from __future__ import annotations

import sys
import time
import warnings
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

from interface_cases import construct, merged  # noqa: E402
from plain_interface import PlainInterface, solve_full, solve_lean  # noqa: E402

from ratebased.film.blocks import resistances  # noqa: E402
from ratebased.interface import interface_flux  # noqa: E402

KINDS = ("ordinary", "near-equimolar", "condensation", "evaporation", "subcooled-superheated")
SAMPLE = 100


def fastest(function, repeats):
    best = np.inf
    for _ in range(repeats):
        start = time.process_time()
        answer = function()
        best = min(best, time.process_time() - start)
    return best, answer


def plain(case, m):
    v, l, model = case.vapor, case.liquid, case.model
    n = len(model.names)
    return PlainInterface(v.composition[m], l.composition[m], v.temperature[m], l.temperature[m],
                          resistances(v.kappa[m], v.molar_density[m]), resistances(l.kappa[m], l.molar_density[m]),
                          v.heat_transfer[m], l.heat_transfer[m], case.P[m], model.alpha[m], model.a[m], model.b[m],
                          model.latent[m], model.vapor_cp[m], model.liquid_cp[m], model.reference_temperature[m]), n


def main(batch=10_000, repeats=3):
    rng = np.random.default_rng(4)
    warnings.simplefilter("ignore")
    for n in (3, 4, 6):
        case = merged([construct(rng, kind, n, batch // len(KINDS), lean=True) for kind in KINDS], rng)
        seconds, r = fastest(lambda c=case: interface_flux(c.vapor, c.liquid, c.model, c.P, throw=False), repeats)
        ours = seconds / len(case.P)
        line = f"n={n}: {1e6 * ours:6.1f} us an interface, solved {int(r.solved.sum())} of {len(case.P)}"
        for label, script in (("3n+1 unknowns", solve_full), ("(N, T) only", solve_lean)):
            problems = [plain(case, m)[0] for m in range(SAMPLE)]
            seconds, answers = fastest(lambda s=script, p=problems: [s(q) for q in p], repeats)
            right = sum(good and np.abs(N - r.N[m]).max() < 1e-6 * np.abs(r.N[m]).max()
                        for m, (N, good) in enumerate(answers))
            line += f"; script of {label}: {1e6 * seconds / SAMPLE:6.0f} us ({right} of {SAMPLE} right), " \
                    f"ratio {seconds / SAMPLE / ours:5.1f}"
        print(line, flush=True)


if __name__ == "__main__":
    main(*(int(word) for word in sys.argv[1:]))
