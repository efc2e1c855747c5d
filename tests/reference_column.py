"""Readers of the reference formats `column` and `packed`: a case of a file turned into calls of the library.

The description inside each file defines every number and the tolerance it states.
"""
from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from ratebased.column import (
    BoilupRatio,
    Column,
    DistillateRate,
    LiquidDraw,
    LiquidFeed,
    PartialCondenser,
    Reboiler,
    RefluxRatio,
    TotalCondenser,
    VaporDraw,
    VaporFeed,
)
from ratebased.efficiency_set import EfficiencyKind, EfficiencySet
from ratebased.properties import ConstantVolatility


def mixture(data: Mapping[str, Any]) -> ConstantVolatility:
    """The property model of a case; alpha = 0 is a component without vapour."""
    alpha = np.array(data["alpha"], float)
    return ConstantVolatility(
        [f"c{i + 1}" for i in range(alpha.size)], alpha, data["latent"], a=data["a"], b=data["b"],
        vapor_heat_capacity=data["cp_vapor"], liquid_heat_capacity=data["cp_liquid"], reference_temperature=data["T_ref"],
        volatile=alpha > 0, vapor_molar_density=data.get("c_vapor"), liquid_molar_density=data.get("c_liquid", 1e4))


def column(data: Mapping[str, Any]) -> Column:
    """The column of a case."""
    kinds = data["kinds"]
    feeds: list[LiquidFeed | VaporFeed] = []
    for feed in data["feeds"]:
        if "liquid" in feed:
            feeds.append(LiquidFeed(feed["stage"], feed["liquid"], feed["liquid_T"]))
        if "vapor" in feed:
            feeds.append(VaporFeed(feed["stage"], feed["vapor"], feed["vapor_T"]))
    draws: list[LiquidDraw | VaporDraw] = []
    draws += [LiquidDraw(int(j), rate) for j, rate in data.get("liquid_draws", {}).items()]
    draws += [VaporDraw(int(j), rate) for j, rate in data.get("vapor_draws", {}).items()]
    words = {"distillate": DistillateRate, "reflux_ratio": RefluxRatio, "boilup_ratio": BoilupRatio}
    condenser = {"total_condenser": TotalCondenser(), "partial_condenser": PartialCondenser()}.get(kinds[0])
    return Column(len(kinds), feeds, data["P"], condenser=condenser,
                  reboiler=Reboiler() if kinds[-1] == "reboiler" else None,
                  specifications=[words[word](value) for word, value in data["spec"].items()], draws=draws,
                  duties={int(j): q for j, q in data.get("duties", {}).items()})


def efficiency(data: Mapping[str, Any]) -> EfficiencySet | None:
    """The efficiencies that a case gives to its equilibrium trays."""
    if "murphree" in data:
        table = np.array(data["murphree"], float)
        missing = np.isnan(table)
        return EfficiencySet(EfficiencyKind.MURPHREE_VAPOR, np.where(missing, 1.0, table),
                             dependent=np.argmax(missing, axis=1))
    if "vaporization_efficiency" in data:
        given = np.array([kind == "tray" for kind in data["kinds"]])
        eta = np.array(data["vaporization_efficiency"], float)
        eta[:, np.array(data["alpha"]) == 0] = 1.0
        return EfficiencySet(EfficiencyKind.VAPORIZATION, eta, vapor_offset=np.array(data["superheat"], float),
                             given=given)
    return None
