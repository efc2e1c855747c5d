"""Acetone and methanol parted by water: an extractive column where the equilibrium stage flatters the entrainer.

The azeotrope (about 0.8 acetone at 1 atm) is broken by water fed above the feed. An invented plant of sieve trays; the
same column is in case.toml for the command line.

    python examples/extractive_distillation/extractive_distillation.py
"""
from __future__ import annotations

import numpy as np

from ratebased.column import (
    Column,
    DistillateRate,
    Feed,
    LiquidFeed,
    Reboiler,
    RefluxRatio,
    TotalCondenser,
    feed_back_error,
    solve_equilibrium,
    solve_ratebased,
)
from ratebased.equipment.trays import SieveTray
from ratebased.properties import ThermoProperties

NAMES = ["acetone", "methanol", "water"]
STAGES, WATER_STAGE, FEED_STAGE = 40, 8, 26

mixture = ThermoProperties.from_names(NAMES, "unifac-modified", T_range=(300.0, 390.0))
tray = SieveTray(diameter=2.0, spacing=0.5, weir_height=0.05, hole_diameter=0.005, hole_area_fraction=0.10)


def column(water: float) -> Column:
    """The column with this much water as entrainer, mol/s."""
    return Column(STAGES, [LiquidFeed(WATER_STAGE, [0.0, 0.0, water], 320.0),
                           Feed(FEED_STAGE, [25.0, 25.0, 0.0], vapor_fraction=0.0)],
                  101325.0 + 600.0 * np.arange(STAGES), condenser=TotalCondenser(), reboiler=Reboiler(),
                  specifications=[RefluxRatio(3.0), DistillateRate(24.8)])


def main() -> None:
    print("water mol/s   acetone in the distillate: equilibrium   rate-based   smallest eigenvalue of [Gamma]")
    for water in (50.0, 70.0, 90.0):
        equilibrium = solve_equilibrium(column(water), mixture)
        rate = solve_ratebased(column(water), mixture, tray, start=equilibrium)
        print(f"{water:11.0f}   {equilibrium.purity('acetone'):38.4f}   {rate.purity('acetone'):10.4f}   "
              f"{rate.report.smallest_gamma_eigenvalue:10.3f}")
    table = rate.efficiency()
    print("\nMurphree efficiencies over the trays, lowest and highest:")
    for i, name in enumerate(NAMES):
        print(f"  {name:9s} {np.nanmin(table.murphree[:, i]):6.2f} {np.nanmax(table.murphree[:, i]):6.2f}")
    fed = solve_equilibrium(column(water), mixture, table.vaporization_set().rounded(4))
    print(f"\nthe table with four decimals fed back to the equilibrium column: {feed_back_error(fed, rate):.0e} in x")


if __name__ == "__main__":
    main()
