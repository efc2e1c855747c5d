"""Light hydrocarbons at 7 bar on sieve trays: what one efficiency for all components gets wrong.

An invented plant: butanes and propane over pentanes, equilibrium and transport by the Peng-Robinson equation of state
and corresponding correlations. The column is predicted three ways and the differences are told in words.

    python examples/hydrocarbon_column/hydrocarbon_column.py [folder for the profiles]
"""
from __future__ import annotations

import sys
from pathlib import Path

import numpy as np

from ratebased.column import Column, DistillateRate, Feed, Reboiler, RefluxRatio, TotalCondenser, compare
from ratebased.equipment.trays import SieveTray
from ratebased.properties import CubicProperties

NAMES = ["propane", "isobutane", "n-butane", "isopentane", "n-pentane"]
STAGES, FEED_STAGE = 32, 15

mixture = CubicProperties.from_names(NAMES, T_range=(280.0, 430.0))
feed = Feed(FEED_STAGE, 60.0 * np.array([0.05, 0.15, 0.30, 0.22, 0.28]), vapor_fraction=0.3)
column = Column(STAGES, [feed], 7.0e5 + 800.0 * np.arange(STAGES), condenser=TotalCondenser(), reboiler=Reboiler(),
                specifications=[RefluxRatio(1.8), DistillateRate(30.0)])
tray = SieveTray(diameter=1.5, spacing=0.6, weir_height=0.05, hole_diameter=0.006, hole_area_fraction=0.10)


def main(folder: Path | None = None) -> None:
    comparison = compare(column, mixture, tray)
    rate = comparison.profiles["rate-based"]
    print(comparison.to_frame().set_index("model").T.to_string(float_format="{:.4f}".format))
    print(f"\none efficiency: {comparison.efficiency:.3f} ({comparison.efficiency_source})\n")
    print("\n".join(comparison.differences))
    print("\ncomponent efficiencies of every fifth tray (blank where the driving force is too small):")
    table = comparison.table.to_frame()
    print(table[["stage"] + [f"E_{name}" for name in NAMES]].iloc[::5].to_string(index=False,
                                                                                 float_format="{:.3f}".format))
    print(f"\nflooding at most {rate.record().hydraulics['flooding'].max():.2f}; entropy production of the trays "
          f"{rate.entropy_production().total.sum():.1f} W/K; balances close to {rate.report.component_closure:.0e}")
    if folder is not None:
        folder.mkdir(parents=True, exist_ok=True)
        for name, profile in comparison.profiles.items():
            profile.save(folder / name.replace(", ", "_").replace(" ", "_"))


if __name__ == "__main__":
    main(Path(sys.argv[1]) if len(sys.argv) > 1 else None)
