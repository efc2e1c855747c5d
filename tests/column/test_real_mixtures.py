"""Columns of real mixtures from a cold start, no guesses: the examples, a solvent recovery of 40 trays, an absorber
with air.
"""
from __future__ import annotations

import runpy
import tomllib
from pathlib import Path

import numpy as np
import pytest

from ratebased.column import (
    Column,
    DistillateRate,
    Feed,
    LiquidFeed,
    Profile,
    Reboiler,
    RefluxRatio,
    TotalCondenser,
    VaporFeed,
    column_from_mapping,
    feed_back_error,
    solve_equilibrium,
    solve_ratebased,
)
from ratebased.column.contact import ContactorLayout
from ratebased.equipment.packings import RandomPacking
from ratebased.equipment.trays import SieveTray
from ratebased.errors import ConvergenceError, PlausibilityWarning
from ratebased.properties import PropertyModel, ThermoProperties

EXAMPLES = Path(__file__).parents[2] / "examples"


def check(column: Column, mixture: PropertyModel, hardware: ContactorLayout, fed_back: float = 1e-8) -> Profile:
    """Both models solved directly, closed, and the efficiencies fed back."""
    rate = solve_ratebased(column, mixture, hardware)
    assert rate.report.path == "direct" and rate.report.iterations <= 20
    assert rate.report.component_closure < 1e-12 and rate.report.energy_closure < 1e-10
    assert rate.report.smallest_gamma_eigenvalue > 0
    production = rate.entropy_production()
    assert production.closure.max() < 1e-12
    parts = ["vapor_diffusion", "liquid_diffusion", "vapor_conduction", "liquid_conduction"]
    for part in parts + (["vapor_mixing", "liquid_mixing"] if rate.height is None else []):
        assert (getattr(production, part) > -1e-6 * production.total.max()).all(), part
    table = rate.efficiency()
    for efficiency in (table.vaporization_set(), table.murphree_set()):
        assert feed_back_error(solve_equilibrium(column, mixture, efficiency), rate) < fed_back
    return rate


def test_hydrocarbons_by_an_equation_of_state() -> None:
    """K depends on the vapour's composition: both sets are exact all the same."""
    example = runpy.run_path(str(EXAMPLES / "hydrocarbon_column" / "hydrocarbon_column.py"))
    rate = check(example["column"], example["mixture"], example["tray"])
    assert rate.purity("n-butane") > 0.5 and rate.record().hydraulics["flooding"].max() < 0.8


def test_extractive_distillation() -> None:
    """The equilibrium column promises more acetone than the trays deliver; the case file holds the same column."""
    example = runpy.run_path(str(EXAMPLES / "extractive_distillation" / "extractive_distillation.py"))
    column = example["column"](70.0)
    rate = check(column, example["mixture"], example["tray"])
    ideal = solve_equilibrium(column, example["mixture"])
    assert ideal.purity("acetone") > rate.purity("acetone") + 0.01 > 0.85
    case = tomllib.loads((EXAMPLES / "extractive_distillation" / "case.toml").read_text())
    read = column_from_mapping(case["column"], case["mixture"]["components"])
    np.testing.assert_allclose(solve_equilibrium(read, example["mixture"]).x, ideal.x, atol=1e-9)


def test_solvent_recovery_with_forty_trays() -> None:
    mixture = ThermoProperties.from_names(["acetone", "methanol", "ethanol", "water"], "unifac-modified",
                                          T_range=(300.0, 400.0))
    column = Column(42, [Feed(20, [8.0, 6.0, 6.0, 40.0], vapor_fraction=0.0)], 101325.0 + 600.0 * np.arange(42),
                    condenser=TotalCondenser(), reboiler=Reboiler(),
                    specifications=[RefluxRatio(4.0), DistillateRate(20.0)])
    rate = check(column, mixture, SieveTray(diameter=1.9, spacing=0.5, weir_height=0.05, hole_diameter=0.005,
                                            hole_area_fraction=0.1))
    assert rate.purity("water", "bottom") > 0.97


@pytest.mark.filterwarnings("ignore:stage .* transfer units in one segment")
def test_packed_absorber_with_air() -> None:
    mixture = ThermoProperties.from_names(["air", "acetone", "ethanol", "water"], "unifac-modified",
                                          noncondensing=["air"], T_range=(270.0, 340.0))
    column = Column(16, [LiquidFeed(1, [0.0, 0.0, 0.0, 75.0], 291.15),
                         VaporFeed(16, 20.0 * np.array([0.955, 0.02, 0.01, 0.015]), 303.15)],
                    102500.0 + 60.0 * np.arange(16), segment_height=0.3)
    rate = check(column, mixture, RandomPacking(diameter=0.75, specific_area=200.0, void_fraction=0.95))
    assert rate.recovery("acetone", "bottom") > 0.98 and np.abs(rate.record().N[:, 0]).max() < 1e-12
    heights = rate.hetp()
    assert (heights.mean()[1:3] > 0.1).all() and (heights.mean()[1:3] < 3.0).all()


@pytest.mark.parametrize("stages", [10, 16])
def test_a_liquid_that_splits_is_named(stages: int) -> None:
    """Butanol and water part into two liquids: a doubt about the short column, the reason why the long one has none."""
    mixture = ThermoProperties.from_names(["ethanol", "1-butanol", "water"], "unifac-modified", T_range=(300.0, 420.0))
    column = Column(stages, [Feed(stages // 2, [5.0, 15.0, 80.0], vapor_fraction=0.0)], 101325.0,
                    condenser=TotalCondenser(), reboiler=Reboiler(),
                    specifications=[RefluxRatio(2.0), DistillateRate(30.0)])
    if stages == 10:
        with pytest.warns(PlausibilityWarning, match=r"stage \d+: .* would split in two"):
            profile = solve_equilibrium(column, mixture)
        assert profile.report.smallest_gamma_eigenvalue < 0
    else:
        with pytest.raises(ConvergenceError, match=r"liquid of stage \d+ would split in two"):
            solve_equilibrium(column, mixture)
