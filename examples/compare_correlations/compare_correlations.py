"""How far published correlations part for one packed bed and one sieve tray.

Prints, side by side, every prediction of the pair coefficients kappa, the interfacial area, the holdup, the pressure
drop and flooding that applies to the two cases, with the spread of each quantity; draws them if matplotlib is there.

    python compare_correlations.py [FIGURE.png]
"""
from __future__ import annotations

import sys
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from correlations import (
    Correlation,
    packing,
    packing_area,
    packing_coefficients,
    packing_holdup,
    packing_limits,
    packing_pressure_drop,
    tray_hydraulics,
    tray_limits,
    tray_transfer,
)

# An invented rectification of three light hydrocarbons near 2 bar: the state at one height, the same for both cases.
FLUIDS = dict(vapor_density=4.6, vapor_viscosity=8.4e-6, liquid_density=615.0, liquid_viscosity=2.1e-4,
              surface_tension=0.0135)
VAPOR_DIFFUSIVITY = np.array([[1.0, 3.6e-6, 3.1e-6], [3.6e-6, 1.0, 2.7e-6], [3.1e-6, 2.7e-6, 1.0]])
LIQUID_DIFFUSIVITY = np.array([[1.0, 5.3e-9, 4.6e-9], [5.3e-9, 1.0, 3.9e-9], [4.6e-9, 3.9e-9, 1.0]])
PAIRS = ((0, 1), (0, 2), (1, 2))
FLOW_RATIO = 1.1
"""Liquid over vapour, by mass."""
RATIO = FLUIDS["vapor_density"] / FLUIDS["liquid_density"]

# The packed bed: 25 mm slotted metal rings, 1.2 m wide, beds of 4 m
RING = packing("slotted ring, metal, 25 mm")
BED_VAPOR = 0.55
BED_LIQUID = FLOW_RATIO * RATIO * BED_VAPOR
PACKING_FACTOR = 157.0
"""1/m, common practice for this form and size."""

# The tray: sieve, spacing 0.5 m, weir 50 mm, holes of 6 mm in a deck of 3 mm, 10 % of the active area
ACTIVE_VELOCITY = 0.75
NET_VELOCITY = 0.66
TRAY = dict(weir_height=0.050, hole_area_fraction=0.10, hole_diameter=0.006)
WEIR_PER_AREA, PATH = 1.25, 0.8
LIQUID_ON_AREA = FLOW_RATIO * RATIO * ACTIVE_VELOCITY
"""Liquid volume flow per active area, m/s."""
WEIR_LOAD = LIQUID_ON_AREA / WEIR_PER_AREA
SPACING, PITCH, DECK = 0.5, 0.018, 0.003
HOLE_VELOCITY = ACTIVE_VELOCITY / TRAY["hole_area_fraction"]
FLOW_PARAMETER = FLOW_RATIO * np.sqrt(RATIO)


@dataclass(frozen=True)
class Prediction:
    """One figure (or one for each pair) of one method, with what its record says."""

    quantity: str
    method: str
    values: tuple[float, ...]
    remark: str


@dataclass(frozen=True)
class Case:
    """Everything known about one case, by the argument names of the correlations."""

    known: dict[str, Any]
    unverified: frozenset[str] = frozenset()
    """Those of them that are constants nobody has seen in print."""

    def arguments(self, function: Correlation[..., Any], more: dict[str, Any]) -> dict[str, Any]:
        """Those of the known figures, and `more`, that the correlation takes."""
        names = function.record.parameters
        return {name: value for name, value in {**FLUIDS, **self.known, **more}.items() if name in names}

    def value(self, function: Correlation[..., Any], **more: Any) -> Any:
        """The plain result."""
        return function.silent(**self.arguments(function, more))

    def predict(self, quantity: str, function: Correlation[..., Any], pick: Callable[[Any], Any] = np.asarray,
                **more: Any) -> Prediction:
        """The result as a row; `pick` turns it into the figures wanted.

        Nothing is warned about: the remark carries what lies outside the range, the scatter and unverified constants.
        """
        arguments = self.arguments(function, more)
        figures = np.asarray(pick(function.silent(**arguments)))
        record = function.record
        remarks = [f"outside: {name}" for name in record.outside(**arguments)]
        if record.validity.mean_error is not None:
            remarks.append(f"scatter {100 * record.validity.mean_error:.0f} %")
        if record.validity.confidence.unverified:
            remarks.append("unverified constants")
        if self.unverified & set(arguments):
            remarks.append("unverified packing constants")
        values = tuple(float(figures[p]) for p in PAIRS) if figures.ndim == 2 else (float(figures),)
        return Prediction(quantity, record.name, values, "; ".join(remarks))


def packed_bed() -> list[Prediction]:
    """All predictions for the rings."""
    case = Case(dict(
        vapor_velocity=BED_VAPOR, liquid_velocity=BED_LIQUID, flow_ratio=FLOW_RATIO, column_diameter=1.2,
        bed_height=4.0, packing_factor=PACKING_FACTOR, dry_packing_factor=PACKING_FACTOR,
        **{name: field.value for name, field in RING.fields.items()}),
        frozenset(name for name, field in RING.fields.items() if field.confidence.unverified))
    value, call = case.value, case.predict

    flood = value(packing_limits.billet_schultes_flooding)
    fraction = BED_VAPOR / flood.vapor_velocity
    loading = value(packing_holdup.billet_schultes)
    at_flood = value(packing_holdup.billet_schultes_flood_holdup, loading_holdup=loading)
    holdup = packing_holdup.billet_schultes_above_loading.silent(loading, at_flood, fraction)
    wet = dict(dry_pressure_gradient=value(packing_pressure_drop.billet_schultes_dry), liquid_holdup=holdup,
               loading_holdup=loading)
    wetted = value(packing_area.onda)
    vapor, liquid = dict(diffusivity=VAPOR_DIFFUSIVITY), dict(diffusivity=LIQUID_DIFFUSIVITY)
    per_area, per_flood = "area, 1/m", "flooding velocity, m/s"
    return [
        call("kappa vapour, mm/s", packing_coefficients.onda_vapor, lambda k: 1e3 * k, **vapor),
        call("kappa vapour, mm/s", packing_coefficients.billet_schultes_vapor, lambda k: 1e3 * k, **vapor,
             liquid_holdup=holdup),
        call("kappa liquid, mm/s", packing_coefficients.onda_liquid, lambda k: 1e3 * k, **liquid, wetted_area=wetted),
        call("kappa liquid, mm/s", packing_coefficients.billet_schultes_liquid, lambda k: 1e3 * k, **liquid,
             liquid_holdup=holdup),
        call(per_area, packing_area.onda),
        call(per_area, packing_area.bravo_fair),
        call(per_area, packing_area.billet_schultes, flood_fraction=fraction),
        call(per_area, packing_area.wang),
        call("holdup, -", packing_holdup.billet_schultes_above_loading, loading_holdup=loading, flood_holdup=at_flood,
             flood_fraction=fraction),
        call("holdup, -", packing_pressure_drop.stichlmair, lambda r: r.liquid_holdup),
        call("pressure drop, Pa/m", packing_pressure_drop.billet_schultes_wet_1993, **wet),
        call("pressure drop, Pa/m", packing_pressure_drop.billet_schultes_wet_1999, **wet),
        call("pressure drop, Pa/m", packing_pressure_drop.stichlmair, lambda r: r.pressure_gradient),
        call("pressure drop, Pa/m", packing_pressure_drop.robbins),
        call(per_flood, packing_limits.billet_schultes_flooding, lambda r: r.vapor_velocity),
        call(per_flood, packing_limits.generalized_flooding),
        call(per_flood, packing_limits.kessler_wankat_flooding),
        call(per_flood, packing_limits.stichlmair_flooding, lambda r: r.vapor_velocity),
    ]


def tray() -> list[Prediction]:
    """All predictions for the sieve tray; coefficients as kappa times area per active area."""
    case = Case(dict(
        active_velocity=ACTIVE_VELOCITY, net_velocity=NET_VELOCITY, hole_velocity=HOLE_VELOCITY, weir_load=WEIR_LOAD,
        flow_parameter=FLOW_PARAMETER, weir_per_area=WEIR_PER_AREA, path_length=PATH, tray_spacing=SPACING, pitch=PITCH,
        deck_thickness=DECK, hole_to_net_area=0.088, friction_factor=0.006, molar_flow_ratio=1 / FLOW_RATIO,
        vapor_molar_mass=0.08, liquid_molar_mass=0.08, **TRAY))
    value, call = case.value, case.predict

    clear = value(tray_hydraulics.bennett_clear_liquid)
    density = value(tray_hydraulics.bennett_froth_density)
    vapor_time = value(tray_hydraulics.vapor_residence_time, clear_liquid_height=clear, froth_density=density)
    liquid_time = value(tray_hydraulics.liquid_residence_time, clear_liquid_height=clear)
    fraction = NET_VELOCITY / value(tray_limits.fair_flooding)
    orifice = value(tray_hydraulics.leibson_orifice_coefficient)
    residual = value(tray_hydraulics.bubble_residual_head)
    shallow = value(tray_hydraulics.hofhuis_zuiderweg_clear_liquid)
    spray = value(tray_transfer.zuiderweg_spray_area, clear_liquid_height=shallow)
    vapor, liquid = dict(diffusivity=VAPOR_DIFFUSIVITY), dict(diffusivity=LIQUID_DIFFUSIVITY)
    vapor_film, liquid_film = "kappa a vapour per active area, m/s", "kappa a liquid per active area, mm/s"
    height, drop, flooding = "clear liquid, mm", "pressure drop, Pa", "flooding velocity on the net area, m/s"

    def pressure(dry: Any) -> Any:
        return tray_hydraulics.tray_pressure_drop.silent(dry, clear, residual, FLUIDS["liquid_density"])

    def with_dry(h: Any) -> Any:
        dry = value(tray_hydraulics.sieve_dry_head, orifice_coefficient=orifice)
        return tray_hydraulics.tray_pressure_drop.silent(dry, h, residual, FLUIDS["liquid_density"])

    every_pair = np.ones((3, 3))  # Zuiderweg's vapour coefficient knows no diffusivity
    return [
        call(vapor_film, tray_transfer.aiche_vapor_units, lambda N: N * ACTIVE_VELOCITY, **vapor),
        call(vapor_film, tray_transfer.chan_fair_vapor, lambda ka: ka * vapor_time * ACTIVE_VELOCITY, **vapor,
             flood_fraction=fraction, clear_liquid_height=clear),
        call(vapor_film, tray_transfer.chen_chuang_vapor_units, lambda N: N * ACTIVE_VELOCITY, **vapor,
             clear_liquid_height=clear),
        call(vapor_film, tray_transfer.zuiderweg_vapor, lambda k: k * spray * every_pair),
        call(liquid_film, tray_transfer.aiche_sieve_liquid_units, lambda N: 1e3 * N * LIQUID_ON_AREA, **liquid,
             liquid_residence_time=liquid_time),
        call(liquid_film, tray_transfer.chan_fair_liquid, lambda ka: 1e3 * ka * liquid_time * LIQUID_ON_AREA, **liquid),
        call(liquid_film, tray_transfer.chen_chuang_liquid_units, lambda N: 1e3 * N * LIQUID_ON_AREA, **liquid,
             clear_liquid_height=clear),
        call(liquid_film, tray_transfer.zuiderweg_liquid, lambda k: 1e3 * k * spray, **liquid),
        call("area per active area, -", tray_transfer.zuiderweg_spray_area, clear_liquid_height=shallow),
        call("area per active area, -", tray_transfer.zuiderweg_emulsion_area, clear_liquid_height=shallow),
        call(height, tray_hydraulics.bennett_clear_liquid, lambda h: 1e3 * h),
        call(height, tray_hydraulics.colwell_clear_liquid, lambda h: 1e3 * h),
        call(height, tray_hydraulics.aiche_sieve_clear_liquid, lambda h: 1e3 * h),
        call(height, tray_hydraulics.hofhuis_zuiderweg_clear_liquid, lambda h: 1e3 * h),
        call(drop + " (dry part varied)", tray_hydraulics.sieve_dry_head, pressure, orifice_coefficient=orifice),
        call(drop + " (dry part varied)", tray_hydraulics.treybal_dry_head, pressure),
        call(drop + " (liquid varied)", tray_hydraulics.bennett_clear_liquid, with_dry),
        call(drop + " (liquid varied)", tray_hydraulics.colwell_clear_liquid, with_dry),
        call(drop + " (liquid varied)", tray_hydraulics.aiche_sieve_clear_liquid, with_dry),
        call(flooding, tray_limits.fair_flooding),
        call(flooding, tray_limits.lygeros_magoulas_flooding),
        call(flooding, tray_limits.kister_haas_flooding),
    ]


def grouped(predictions: list[Prediction]) -> dict[str, list[Prediction]]:
    """Predictions by quantity, in order."""
    found: dict[str, list[Prediction]] = {}
    for prediction in predictions:
        found.setdefault(prediction.quantity, []).append(prediction)
    return found


def spread(group: list[Prediction]) -> float:
    """Largest over smallest prediction of one quantity, the worst pair counting."""
    table = np.array([prediction.values for prediction in group])
    return float((table.max(0) / table.min(0)).max())


def print_table(title: str, predictions: list[Prediction]) -> None:
    print(f"\n{title}\n{'-' * len(title)}")
    for quantity, group in grouped(predictions).items():
        header = "  pairs 1-2, 1-3, 2-3" if len(group[0].values) == 3 else ""
        print(f"\n{quantity}{header}; largest over smallest {spread(group):.2f}")
        for prediction in group:
            figures = "".join(f"{v:10.4g}" for v in prediction.values)
            print(f"  {prediction.method:<46}{figures}  {prediction.remark}")


def draw(cases: dict[str, list[Prediction]], path: Path) -> None:
    """Each prediction over the median of its quantity (first pair), one row a quantity."""
    import matplotlib

    matplotlib.use("Agg")
    import matplotlib.pyplot as plt

    figure, axes = plt.subplots(len(cases), 1, figsize=(11, 12), layout="constrained")
    for axis, (title, predictions) in zip(axes, cases.items()):
        groups = grouped(predictions)
        for row, group in enumerate(groups.values()):
            values = np.array([prediction.values[0] for prediction in group])
            ratio = values / np.median(values)
            axis.plot(ratio, np.full(ratio.size, row), "-", color="0.7", zorder=1)
            for rank, i in enumerate(np.argsort(ratio)):
                axis.plot(ratio[i], row, "o", color="tab:blue")
                axis.annotate(group[i].method.split(".")[1], (ratio[i], row), fontsize=7,
                              ha="right" if rank % 2 else "left", xytext=(0, (6, -13, 15, -22)[rank % 4]),
                              textcoords="offset points")
        axis.set_yticks(range(len(groups)), list(groups))
        axis.set_xscale("log")
        axis.set_xlim(0.3, 2.6)
        axis.set_xticks([0.3, 0.5, 0.7, 1.0, 1.4, 2.0], ["0.3", "0.5", "0.7", "1", "1.4", "2"])
        axis.minorticks_off()
        axis.margins(y=0.12)
        axis.set_xlabel("prediction over the median of its row")
        axis.set_title(title)
        axis.invert_yaxis()
        axis.grid(axis="x", alpha=0.3)
    figure.savefig(path, dpi=130)
    plt.close(figure)


def main(path: Path = Path("compare_correlations.png")) -> None:
    """Print both tables and draw the figure where matplotlib is installed."""
    cases = {f"Packed bed: {RING.name}": packed_bed(), "Sieve tray": tray()}
    for title, predictions in cases.items():
        print_table(title, predictions)
    try:
        draw(cases, path)
    except ImportError:
        print("\nmatplotlib is not installed: no figure")
    else:
        print(f"\nfigure: {path}")


if __name__ == "__main__":
    main(*(Path(argument) for argument in sys.argv[1:2]))
