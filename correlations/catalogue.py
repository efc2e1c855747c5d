"""The records of all correlations."""
from __future__ import annotations

from . import (  # noqa: F401  importing a module registers its correlations
    gas_diffusivity,
    heat_transfer,
    liquid_diffusivity,
    mixing,
    mixture_diffusivity,
    molar_volume,
    overall,
    packing_area,
    packing_coefficients,
    packing_holdup,
    packing_limits,
    packing_pressure_drop,
    tray_hydraulics,
    tray_limits,
    tray_transfer,
)
from .record import REGISTRY, Record


def catalogue() -> tuple[Record, ...]:
    """One record for each public correlation, in the order of their names (`module.function`)."""
    return tuple(REGISTRY[name].record for name in sorted(REGISTRY))
