"""Distillation and absorption columns: equilibrium-stage and rate-based, side by side."""
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
from .contact import Averaged, FlowPattern, Mixed, Plug
from .equilibrium import solve_equilibrium
from .feeds import FlashResult, flash
from .ratebased import solve_ratebased
from .profile import ContactRecord, ProductStream, Profile, SolutionReport
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

__all__ = [
    "BoilupRatio", "BottomsRate", "Column", "ComponentRecovery", "CondenserDuty", "ContactRecord", "ContactorPressure",
    "DistillateRate", "Feed", "FlashResult", "LiquidDraw", "LiquidFeed", "PartialCondenser", "Product", "ProductPurity",
    "ProductStream", "Profile", "Reboiler", "RefluxRatio", "ReboilerDuty", "SolutionReport", "TotalCondenser",
    "VaporDraw", "VaporFeed", "flash", "solve_equilibrium",
]
