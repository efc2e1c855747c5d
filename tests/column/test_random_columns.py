"""A small share of the random columns of tests/benchmarks/column_sweep.py: every one the dry-section estimate
passes.
"""
from __future__ import annotations

import pytest
from random_columns import absorber, distillation, solve

from ratebased.column import feed_back_error, solve_equilibrium
from ratebased.errors import PlausibilityWarning, RateBasedWarning


@pytest.mark.slow
@pytest.mark.parametrize("make, seeds", [(distillation, range(0, 8)), (absorber, range(0, 12))],
                         ids=["distillation", "absorption"])
@pytest.mark.filterwarnings("ignore::ratebased.errors.RateBasedWarning")
def test_random_columns(make: object, seeds: range) -> None:
    assert callable(make) and issubclass(PlausibilityWarning, RateBasedWarning)
    solved = 0
    for seed in seeds:
        outcome = solve(make(seed))
        if outcome.flagged:
            assert all("leave a section without vapour or liquid" in e for e in outcome.errors)
            continue
        assert not outcome.errors, f"seed {seed}: {outcome.errors}"
        for profile in (outcome.equilibrium, outcome.rate):
            assert profile is not None
            assert profile.report.component_closure < 1e-12 and profile.report.energy_closure < 1e-10
        fed = solve_equilibrium(outcome.case.column, outcome.case.properties,
                                outcome.rate.efficiency().vaporization_set())
        assert feed_back_error(fed, outcome.rate) < 1e-8
        solved += 1
    assert solved >= len(seeds) - 2


@pytest.mark.slow
@pytest.mark.parametrize("seed", [362, 366, 403, 404])
@pytest.mark.filterwarnings("ignore::ratebased.errors.RateBasedWarning")
def test_traces_with_the_most_transfer_units(seed: int) -> None:
    # Mole fractions of 1e-16 and less decide the shares of these beds; an iterate's y_I/x_I went round in circles.
    outcome = solve(distillation(seed))
    assert outcome.rate is not None, outcome.errors
    assert outcome.rate.report.iterations < 20
