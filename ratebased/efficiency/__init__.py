"""Component efficiencies and heights of transfer units, as definitions and as a table over a column."""
from .definitions import (
    EquilibriumVapor,
    equilibrium_vapor,
    hausen,
    murphree_liquid,
    murphree_vapor,
    small_driving_force,
    vaporization,
)
from .rating import PackedRows, RatedRows, RatingOptions, rate_rows
from .table import EfficiencyTable, efficiency_table
from .uncertainty import Interval, Uncertainty, UncertaintyResult, sample_rows

__all__ = [
    "EfficiencyTable", "EquilibriumVapor", "Interval", "PackedRows", "RatedRows", "RatingOptions", "Uncertainty",
    "UncertaintyResult", "efficiency_table", "equilibrium_vapor", "hausen", "murphree_liquid", "murphree_vapor",
    "rate_rows", "sample_rows", "small_driving_force", "vaporization",
]
