"""Columns that several tests of this folder use; the coefficients are invented."""
from __future__ import annotations

import numpy as np

from ratebased.column import (
    Column,
    DistillateRate,
    LiquidFeed,
    Reboiler,
    RefluxRatio,
    TotalCondenser,
    VaporFeed,
)
from ratebased.equipment import FixedCoefficients
from ratebased.properties import ConstantVolatility

KAPPA_VAPOR = np.array([[1.0, 0.1, 0.09], [0.1, 1.0, 0.015], [0.09, 0.015, 1.0]])
KAPPA_LIQUID = np.array([[1.0, 6e-4, 9e-4], [6e-4, 1.0, 1.5e-4], [9e-4, 1.5e-4, 1.0]])


def ternary(*, sensible: bool = True, latent: tuple[float, float, float] = (27e3, 33e3, 39e3)) -> ConstantVolatility:
    """alpha 4, 2, 1 with unequal latent heats; `sensible` adds heat capacities."""
    return ConstantVolatility(["light", "middle", "heavy"], [4.0, 2.0, 1.0], latent, a=22.5, b=4000.0,
                              vapor_heat_capacity=[75.0, 95.0, 115.0] if sensible else 0.0,
                              liquid_heat_capacity=[135.0, 165.0, 200.0] if sensible else 0.0,
                              reference_temperature=350.0, vapor_molar_density=35.0, liquid_molar_density=9e3)


def trays(area: float = 150.0) -> FixedCoefficients:
    """Strongly coupled pairs."""
    return FixedCoefficients(KAPPA_VAPOR, KAPPA_LIQUID, area, h_vapor=80.0, h_liquid=1500.0)


def distillation(stages: int = 12, R: float = 2.5, D: float = 40.0) -> Column:
    """Subcooled liquid feed and vapour feed, pressure growing downwards."""
    middle = stages // 2
    return Column(stages, [LiquidFeed(middle, [25.0, 25.0, 20.0], 345.0), VaporFeed(middle + 2, [10.0, 10.0, 10.0],
                                                                                    362.0)],
                  101325.0 + 700.0 * np.arange(stages), condenser=TotalCondenser(), reboiler=Reboiler(),
                  specifications=[RefluxRatio(R), DistillateRate(D)])


def absorber_mixture() -> ConstantVolatility:
    """Air that never condenses, two solutes, an oil that never boils."""
    return ConstantVolatility(["air", "first", "second", "oil"], [1.0, 1.2, 0.2, 1.0], [0.0, 20e3, 26e3, 50e3], a=17.0,
                              b=2600.0, vapor_heat_capacity=[29.0, 70.0, 95.0, 200.0],
                              liquid_heat_capacity=[60.0, 120.0, 150.0, 350.0], reference_temperature=298.15,
                              condensable=[False, True, True, True], volatile=[True, True, True, False],
                              vapor_molar_density=40.0, liquid_molar_density=6e3)


def absorber(stages: int = 8, *, packed: bool = False) -> Column:
    """Gas with two solutes against a lean oil."""
    return Column(stages, [LiquidFeed(1, [0.0, 0.0, 0.3, 60.0], 300.0), VaporFeed(stages, [85.0, 10.0, 5.0, 0.0],
                                                                                  308.0)],
                  101325.0, segment_height=0.3 if packed else None)


def absorber_trays(area: float = 25.0) -> FixedCoefficients:
    kappa = np.array([[1.0, .05, .04, .03], [.05, 1.0, .03, .02], [.04, .03, 1.0, .015], [.03, .02, .015, 1.0]])
    return FixedCoefficients(kappa, 5e-3 * kappa, area, h_vapor=60.0, h_liquid=900.0)
