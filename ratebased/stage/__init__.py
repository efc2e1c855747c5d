"""One stage: the froth of a tray, the mixing of its liquid, a packed segment."""
from .mixing import EddyDiffusion, LiquidMixing, PlugFlow, Pools, WellMixed
from .point import FrothPoint, PointMethod, PointResult, exponential_midpoint, integral
from .segment import SegmentResult, segment_between_ends
from .tray import TrayResult, liquid_temperature, tray_from_leaving_liquid, vapor_temperature

__all__ = [
    "EddyDiffusion", "FrothPoint", "LiquidMixing", "PlugFlow", "PointMethod", "PointResult", "Pools", "SegmentResult",
    "TrayResult", "WellMixed", "exponential_midpoint", "integral", "liquid_temperature", "segment_between_ends",
    "tray_from_leaving_liquid", "vapor_temperature",
]
