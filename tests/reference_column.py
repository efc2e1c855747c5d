"""Readers of the reference formats `column` and `packed`: a case of a file turned into calls of the library.

The description inside each file defines every number and the tolerance it states.
"""
from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

import numpy as np
from reference_efficiency import Comparison

from ratebased.column import (
    BoilupRatio,
    Column,
    DistillateRate,
    LiquidDraw,
    LiquidFeed,
    PartialCondenser,
    Profile,
    Reboiler,
    RefluxRatio,
    TotalCondenser,
    VaporDraw,
    VaporFeed,
    solve_equilibrium,
    solve_ratebased,
)
from ratebased.efficiency_set import EfficiencyKind, EfficiencySet
from ratebased.equipment import FixedCoefficients
from ratebased.properties import ConstantVolatility


def mixture(data: Mapping[str, Any]) -> ConstantVolatility:
    """The property model of a case; alpha = 0 is a component without vapour."""
    alpha = np.array(data["alpha"], float)
    return ConstantVolatility(
        [f"c{i + 1}" for i in range(alpha.size)], alpha, data["latent"], a=data["a"], b=data["b"],
        vapor_heat_capacity=data["cp_vapor"], liquid_heat_capacity=data["cp_liquid"],
        reference_temperature=data["T_ref"],
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


def contactor(data: Mapping[str, Any], share: float = 1.0) -> FixedCoefficients:
    """The coefficients of a case; `share` of its area on each stage."""
    return FixedCoefficients(data["kappa_vapor"], data["kappa_liquid"], share * data["area"], h_vapor=data["h_vapor"],
                             h_liquid=data["h_liquid"])


def compare_column(case: Mapping[str, Any]) -> Iterator[Comparison]:
    """Everything a case of format `column` lists, compared."""
    data, listed = case["input"], case["profile"]
    if data["model"] == "rate":
        found = solve_ratebased(column(data), mixture(data), contactor(data))
        yield from _rate_based(found, data, listed)
    else:
        found = solve_equilibrium(column(data), mixture(data), efficiency(data))
    yield Comparison("x", found.x, np.array(listed["x"]), 1e-9)
    yield Comparison("y", found.y, np.array(listed["y"]), 1e-9)
    yield Comparison("T_L", found.T_L, np.array(listed["T_L"]), 1e-7)
    yield Comparison("T_V", found.T_V, np.array(listed["T_V"]), 1e-7)
    for name in ("L", "V"):
        values = np.array(listed[name])
        yield Comparison(name, getattr(found, name), values, 1e-9 * np.abs(values))
    for name, stream in case["products"].items():
        flows = np.array(stream["flows"])
        yield Comparison(f"product {name}", found.products[name].flows, flows, 1e-9 * flows.sum())
    for name, duty in case["duties"].items():
        yield Comparison(name, np.array(found.duties[name.removesuffix("_duty")]), np.array(duty), 1e-9 * abs(duty))
    yield Comparison("iterations beyond 20", np.array(max(found.report.iterations - 20, 0)), np.array(0), 0)


def _rate_based(found: Profile, data: Mapping[str, Any], listed: Mapping[str, Any]) -> Iterator[Comparison]:
    record = found.record()
    trays = record.stage - 1

    def rows(name: str) -> np.ndarray:
        values = [listed[name][j] for j in trays]
        return np.array([[np.nan if v is None else v for v in row] if isinstance(row, list) else row for row in values],
                        float)

    N = rows("N")
    yield Comparison("N", record.N, N, 1e-9 * np.abs(N).max(-1, keepdims=True))
    yield Comparison("x_I", record.x_I, rows("x_I"), 1e-9)
    yield Comparison("y_I", record.y_I, rows("y_I"), 1e-9)
    yield Comparison("T_I", record.T_I, rows("T_I"), 1e-7)
    table = found.efficiency(at_liquid_temperature=False)
    driving = table.y_star - table.y_in
    E = rows("murphree")
    both = np.array(data["alpha"]) > 0
    yield Comparison("E (y* - y_in)", (table.exact_murphree * driving)[:, both], (E * driving)[:, both], 1e-9)
    yield Comparison("vaporisation efficiency", table.vaporization[:, both], rows("vaporization_efficiency")[:, both],
                     1e-8 * rows("vaporization_efficiency")[:, both])
    yield Comparison("superheat", table.superheat, rows("superheat"), 2e-7)
    yield Comparison("T_bubble", table.T_reference, rows("T_bubble"), 1e-7)


def packed_bed(data: Mapping[str, Any], segments: int) -> Column:
    """The section of a case cut into segments."""
    feed = data["feeds"][0]
    return Column(segments, [LiquidFeed(1, feed["liquid"], feed["liquid_T"]),
                             VaporFeed(segments, feed["vapor"], feed["vapor_T"])], data["P"][0],
                  segment_height=1.0 / segments)


def compare_packed(case: Mapping[str, Any]) -> Iterator[Comparison]:
    """Second order, the outlets at 16 segments and Richardson's extrapolation of 16 and 32, as the file states."""
    data = case["input"]
    listed = np.concatenate((case["gas_out"], case["liquid_out"]))
    temperatures = np.array([case["gas_out_T"], case["liquid_out_T"]])
    feed = listed.sum()
    flows, outlets = {}, {}
    for segments in (8, 16, 32):
        found = solve_ratebased(packed_bed(data, segments), mixture(data), contactor(data, 1.0 / segments))
        flows[segments] = np.concatenate((found.products["top"].flows, found.products["bottom"].flows))
        outlets[segments] = np.array([found.T_V[0], found.T_L[-1]])
    error = {segments: np.abs(flow - listed).max() / feed for segments, flow in flows.items()}
    yield Comparison("outlets at 16 segments", flows[16], listed, 6e-5 * feed)
    yield Comparison("error ratio from 8 to 16 segments", np.array(error[8] / error[16]), np.array(4.0), 0.2)
    yield Comparison("extrapolated outlets", (4 * flows[32] - flows[16]) / 3, listed, 1e-7 * feed)
    yield Comparison("extrapolated temperatures", (4 * outlets[32] - outlets[16]) / 3, temperatures, 1e-4)
