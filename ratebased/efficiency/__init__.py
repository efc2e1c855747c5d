"""Component efficiencies and heights of transfer units, as definitions and as a table over a column."""
from .compare_methods import compare_methods, spread
from .definitions import (
    EquilibriumVapor,
    equilibrium_vapor,
    hausen,
    murphree_liquid,
    murphree_vapor,
    small_driving_force,
    vaporization,
)
from .package import write_package
from .rating import PackedRows, RatedRows, RatingOptions, rate_rows
from .table import EfficiencyTable, efficiency_table
from .tray_matrices import (
    VaporPath,
    entrained,
    lewis_efficiency,
    overall_efficiency,
    tray_efficiency,
    weeping,
)
from .uncertainty import Interval, Uncertainty, UncertaintyResult, sample_rows

__all__ = [
    "EfficiencyTable", "EquilibriumVapor", "Interval", "PackedRows", "RatedRows", "RatingOptions", "Uncertainty",
    "UncertaintyResult", "VaporPath", "compare_methods", "efficiency_table", "entrained", "equilibrium_vapor",
    "hausen", "lewis_efficiency", "murphree_liquid", "murphree_vapor", "overall_efficiency", "rate_rows",
    "sample_rows", "small_driving_force", "spread", "tray_efficiency", "vaporization", "weeping", "write_package",
]
