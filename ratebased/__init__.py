"""Multicomponent mass-transfer rates for distillation and absorption stages.

The names below are imported when first used: `import ratebased` alone loads nothing but this file.
"""
from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .column import Column, compare, solve_equilibrium, solve_ratebased
    from .efficiency import EfficiencyTable, RatingOptions, efficiency_table
    from .equipment import FixedCoefficients, RandomPacking, Section, SieveTray
    from .errors import ConvergenceError, InputError, NoSolutionError
    from .film import krishna_standart
    from .interface import Bulk, interface_flux
    from .properties import ConstantVolatility, ThermoProperties, bubble_point, dew_point
    from .stage import exponential_midpoint, integral
    from .stage_profile import ProfileDraw, ProfileFeed, StageProfile

__all__ = [
    "Bulk", "Column", "ConstantVolatility", "ConvergenceError", "EfficiencyTable", "FixedCoefficients", "InputError",
    "NoSolutionError", "ProfileDraw", "ProfileFeed", "RandomPacking", "RatingOptions", "Section", "SieveTray",
    "StageProfile", "ThermoProperties", "bubble_point", "compare", "dew_point", "efficiency_table",
    "exponential_midpoint", "integral", "interface_flux", "krishna_standart", "solve_equilibrium", "solve_ratebased",
]

_ROOMS = {
    "column": ("Column", "compare", "solve_equilibrium", "solve_ratebased"),
    "efficiency": ("EfficiencyTable", "RatingOptions", "efficiency_table"),
    "equipment": ("FixedCoefficients", "RandomPacking", "Section", "SieveTray"),
    "errors": ("ConvergenceError", "InputError", "NoSolutionError"),
    "film": ("krishna_standart",),
    "interface": ("Bulk", "interface_flux"),
    "properties": ("ConstantVolatility", "ThermoProperties", "bubble_point", "dew_point"),
    "stage": ("exponential_midpoint", "integral"),
    "stage_profile": ("ProfileDraw", "ProfileFeed", "StageProfile"),
}
_HOME = {name: room for room, names in _ROOMS.items() for name in names}


def __getattr__(name: str) -> Any:
    if name not in _HOME:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    value = getattr(import_module(f"{__name__}.{_HOME[name]}"), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return __all__
