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

from interface_cases import construct, merged
from plain_interface import PlainInterface, solve_full, solve_lean

from ratebased.film.blocks import resistances
from ratebased.interface import interface_flux

KINDS = ("ordinary", "near-equimolar", "condensation", "evaporation", "subcooled-superheated")
SAMPLE = 100


def plain(case, m):
    v, l, model = case.vapor, case.liquid, case.model
    return PlainInterface(v.composition[m], l.composition[m], v.temperature[m], l.temperature[m],
                          resistances(v.kappa[m], v.molar_density[m]), resistances(l.kappa[m], l.molar_density[m]),
                          v.heat_transfer[m], l.heat_transfer[m], case.P[m], model.alpha[m], model.a[m], model.b[m],
                          model.latent[m], model.vapor_cp[m], model.liquid_cp[m], model.reference_temperature[m])


def main(batch=10_000, repeats=3):
    rng = np.random.default_rng(4)
    warnings.simplefilter("ignore")
    for n in (3, 4, 6):
        case = merged([construct(rng, kind, n, batch // len(KINDS), lean=True) for kind in KINDS], rng)
        problems = [plain(case, m) for m in range(SAMPLE)]
        runs = {"ours": lambda c=case: interface_flux(c.vapor, c.liquid, c.model, c.P, throw=False),
                "script of 3n+1 unknowns": lambda p=problems: [solve_full(q) for q in p],
                "script of (N, T) only": lambda p=problems: [solve_lean(q) for q in p]}
        best, answers = dict.fromkeys(runs, np.inf), {}
        for _ in range(repeats):                             # in turn: the load of the machine changes
            for label, run in runs.items():
                start = time.process_time()
                answers[label] = run()
                best[label] = min(best[label], time.process_time() - start)
        r, ours = answers["ours"], best["ours"] / len(case.P)
        line = f"n={n}: {1e6 * ours:5.1f} us an interface, solved {int(r.solved.sum())} of {len(case.P)}"
        for label in list(runs)[1:]:
            each = best[label] / SAMPLE
            right = sum(good and np.abs(N - r.N[m]).max() < 1e-6 * np.abs(r.N[m]).max()
                        for m, (N, good) in enumerate(answers[label]))
            line += f"; {label} {1e6 * each:.0f} us ({right} of {SAMPLE} right), ratio {each / ours:.0f}"
        print(line, flush=True)


if __name__ == "__main__":
    main(*(int(word) for word in sys.argv[1:]))
