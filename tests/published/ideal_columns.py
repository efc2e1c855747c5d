"""Columns of constant molar overflow, the ground that the classical formulas stand on."""
from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ratebased.column import Column, DistillateRate, LiquidFeed, Reboiler, RefluxRatio, TotalCondenser
from ratebased.properties import ConstantVolatility

LATENT = 32e3
P = 101325.0


def ideal_mixture(alpha: Sequence[float]) -> ConstantVolatility:
    """Constant relative volatility, equal latent heats, no sensible heat."""
    return ConstantVolatility([f"c{i + 1}" for i in range(len(alpha))], alpha, LATENT, a=22.5, b=4000.0,
                              reference_temperature=350.0, vapor_molar_density=35.0, liquid_molar_density=9e3)


def distillation(trays: int, *, feed_tray: int, z: Sequence[float], D: float, R: float, F: float = 100.0) -> Column:
    """Total condenser, trays, reboiler; saturated liquid feed to a tray counted from the top."""
    return Column(trays + 2, [LiquidFeed(feed_tray + 1, F * np.asarray(z), 350.0)], P, condenser=TotalCondenser(),
                  reboiler=Reboiler(), specifications=[RefluxRatio(R), DistillateRate(D)])
