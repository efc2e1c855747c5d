"""Random columns and absorbers: share solved by both models, iterations, closure, feed-back of the efficiencies.

    OPENBLAS_NUM_THREADS=1 python tests/benchmarks/column_sweep.py [columns] [absorbers]

Columns that the dry-section estimate flags are counted apart, tried all the same.
"""
from __future__ import annotations

import sys
import time
import warnings
from collections import Counter
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "column"))

from random_columns import absorber, distillation, solve

from ratebased.column import feed_back_error, solve_equilibrium
from ratebased.errors import ConvergenceError, InputError


def spread(values):
    """Median, 95th percentile, largest."""
    return " / ".join(f"{q:.3g}" for q in np.percentile(values, [50, 95, 100], method="higher"))


def sweep(title, make, wanted):
    """Seeds from zero until `wanted` columns have passed the estimate."""
    counts, iterations, closures, paths = Counter(), {"equilibrium": [], "rate": []}, [], Counter()
    fed = {"vaporisation": [], "Murphree": []}
    start, seed = time.perf_counter(), -1
    while counts["passed"] < wanted:
        seed += 1
        outcome = solve(make(seed))
        name = "flagged" if outcome.flagged else "passed"
        counts[name] += 1
        for model in ("equilibrium", "rate"):
            profile = getattr(outcome, model)
            if profile is None:
                continue
            counts[f"{name} {model}"] += 1
            iterations[model].append(profile.report.iterations)
            closures.append((profile.report.component_closure, profile.report.energy_closure))
        if not outcome.flagged:
            for error in outcome.errors:
                print(f"  seed {seed}, {outcome.case.kind}, {outcome.case.column.stages} stages: {error}")
        if outcome.rate is None:
            continue
        paths[outcome.rate.report.path] += 1
        table = outcome.rate.efficiency()
        for kind, make_set in (("vaporisation", table.vaporization_set), ("Murphree", table.murphree_set)):
            try:
                efficiency = make_set()
            except InputError as error:                   # a pole
                print(f"  seed {seed}, {kind} set: {error}")
                continue
            try:
                again = solve_equilibrium(outcome.case.column, outcome.case.properties, efficiency)
                fed[kind].append(feed_back_error(again, outcome.rate))
                right = fed[kind][-1] < 1e-8
            except ConvergenceError:
                counts[f"{kind} fed back, not solved"] += 1
                right = False
            if not right:                                 # odd sets have several solutions
                again = solve_equilibrium(outcome.case.column, outcome.case.properties, efficiency,
                                          start=outcome.rate)
                print(f"  seed {seed}, {kind} fed back from cold ends elsewhere; from the rate-based profile: "
                      f"{feed_back_error(again, outcome.rate):.1e}")
    print(f"{title}: {seed + 1} seeds, {counts['passed']} passed the estimate, {time.perf_counter() - start:.0f} s")
    print(f"  solved, equilibrium / rate-based: {counts['passed equilibrium']} / {counts['passed rate']} of "
          f"{counts['passed']}; of {counts['flagged']} flagged {counts['flagged equilibrium']} / "
          f"{counts['flagged rate']}; {dict(paths)}")
    for model, values in iterations.items():
        print(f"  iterations, {model}: {spread(values)} (median / 95 % / largest)")
    worst = np.max(closures, axis=0)
    print(f"  closure, worst: components {worst[0]:.1e} of their own feed, energy {worst[1]:.1e}")
    for kind, values in fed.items():
        off = int((np.array(values) > 1e-8).sum())
        print(f"  {kind} fed back from cold, max|x - x_rate|: {spread(values)}; above 1e-8: {off}; not solved: "
              f"{counts[f'{kind} fed back, not solved']}")


def main(columns=400, absorbers=100):
    warnings.simplefilter("ignore")
    sweep("distillation", distillation, columns)
    sweep("absorption", absorber, absorbers)


if __name__ == "__main__":
    main(*(int(argument) for argument in sys.argv[1:]))
