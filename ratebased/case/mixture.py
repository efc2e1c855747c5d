"""[mixture] of a case file: components, activity model, gases that do not dissolve.

    components = ["acetone", "ethanol", "water"]
    activity = "unifac-modified"         # "ideal", "unifac", "unifac-modified"
    noncondensing = ["air"]              # optional: stay in the vapour
    nonvolatile = []                     # optional: stay in the liquid
    henry = ["carbon dioxide"]           # optional: gases dissolved by Henry's law, constants in water
    T_range_K = [280.0, 400.0]           # optional: default 40 K on either side of the profile
"""
from __future__ import annotations

from ..properties import ThermoProperties
from ..stage_profile import StageProfile
from ..toml_table import TomlTable

MARGIN = 40.0
"""K on either side of the profile's temperatures that the property range spans."""


def properties_from(table: TomlTable, profile: StageProfile) -> ThermoProperties:
    """The property model of a profile. Raises `InputError`."""
    names = table.texts("components")
    activity = table.text("activity", "unifac-modified")
    lists = {key: table.texts(key, []) for key in ("noncondensing", "nonvolatile", "henry")}
    if table.has("T_range_K"):
        value = table.take("T_range_K")
        numbers = isinstance(value, list) and len(value) == 2 and all(
            isinstance(item, int | float) and not isinstance(item, bool) for item in value)
        if not numbers or not 0 < value[0] < value[1]:
            raise table.fail("T_range_K", "expected [low, high] in K")
        span = (float(value[0]), float(value[1]))
    else:
        temperatures = [profile.T_L.min(), profile.T_L.max(), profile.T_V.min(), profile.T_V.max(),
                        *(feed.temperature for feed in profile.feeds)]
        span = (float(min(temperatures)) - MARGIN, float(max(temperatures)) + MARGIN)
    table.finish()
    return ThermoProperties.from_names(names, activity, T_range=span, **lists)
