"""Distillation and absorption columns: equilibrium-stage and rate-based, side by side."""
from .back_calculation import ColumnEfficiencies, ColumnHeights
from .compare import Comparison, compare, feed_back_error
from .contact import Averaged, FlowPattern, Mixed, Plug
from .definition import (
    Column,
    ContactorPressure,
    Feed,
    LiquidDraw,
    LiquidFeed,
    PartialCondenser,
    Reboiler,
    TotalCondenser,
    VaporDraw,
    VaporFeed,
)
from .entropy import EntropyProduction
from .equilibrium import solve_equilibrium
from .feeds import FlashResult, flash
from .from_table import column_from_mapping, column_from_table
from .profile import ContactRecord, ProductStream, Profile, SolutionReport
from .ratebased import solve_ratebased
from .resize import GridRefinement, refine_grid, resized
from .specifications import (
    BoilupRatio,
    BottomsRate,
    ComponentRecovery,
    CondenserDuty,
    DistillateRate,
    Product,
    ProductPurity,
    ReboilerDuty,
    RefluxRatio,
)
from .stage_system import Entering, StageBlocks, StageUnknowns, stage_residuals

__all__ = [
    "Averaged", "BoilupRatio", "BottomsRate", "Column", "ColumnEfficiencies", "ColumnHeights", "Comparison",
    "ComponentRecovery", "CondenserDuty", "ContactRecord", "ContactorPressure", "DistillateRate", "Entering",
    "EntropyProduction", "Feed", "FlashResult", "FlowPattern", "GridRefinement", "LiquidDraw", "LiquidFeed", "Mixed",
    "PartialCondenser", "Plug", "Product", "ProductPurity", "ProductStream", "Profile", "Reboiler", "ReboilerDuty",
    "RefluxRatio", "SolutionReport", "StageBlocks", "StageUnknowns", "TotalCondenser", "VaporDraw", "VaporFeed",
    "column_from_mapping", "column_from_table", "compare", "feed_back_error", "flash", "refine_grid", "resized",
    "solve_equilibrium", "solve_ratebased", "stage_residuals",
]
