"""[[hardware]] of a case file: one table a section of the column.

    type = "sieve tray"       # "bubble-cap tray", "valve tray", "random packing", "structured packing",
                              # "fixed coefficients"
    stages = [2, 21]          # first and last stage; optional where one section holds them all
    method = "AIChE"          # sieve trays: "AIChE", "Chan-Fair", "Chen-Chuang", "Zuiderweg"; random packing: "Onda",
                              # "Billet-Schultes"; structured packing: "Rocha-Bravo-Fair", "Tsai", "Bravo-Rocha-Fair"
    diameter_m, spacing_m, weir_height_m, hole_diameter_m, hole_area_fraction; optional downcomer_fraction,
    deck_thickness_m, hole_pitch_m, apron_clearance_m, foaming_factor                          (trays)
    closed_loss_s2_m, open_loss_s2_m, valve_thickness_m; optional valve_density_kg_m3          (valve tray)
    packing = "grid ring, metal, 25 mm"   # of the table of generic packings: its fields may then be left out
    diameter_m, specific_area_m2_m3, void_fraction, nominal_size_m, critical_surface_tension_N_m; optional
    packing_factor_1_m, billet = {liquid, vapor, holdup, friction, flooding, loading}          (random packing)
    diameter_m, specific_area_m2_m3, void_fraction, base_m, corrugation_height_m, side_m, angle_deg; optional
    surface_factor                                                                             (structured packing)
    kappa_vapor_m_s, kappa_liquid_m_s (one number or {"water / ethanol" = 0.02}), area_m2, heat_vapor_W_m2_K,
    heat_liquid_W_m2_K: measured or own coefficients of one stage                              (fixed coefficients)
"""
from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from typing import Any

from ..equipment import (
    AIChESieve,
    BilletConstants,
    BilletSchultes,
    BravoRochaFair,
    BubbleCapTray,
    ChanFair,
    ChenChuang,
    Contactor,
    FixedCoefficients,
    Onda,
    RandomPacking,
    RochaBravoFair,
    Section,
    SieveTray,
    StructuredPacking,
    TsaiArea,
    ValveTray,
    Zuiderweg,
)
from ..errors import InputError
from ..toml_table import TomlTable

TRAY_METHODS = {"AIChE": AIChESieve(), "Chan-Fair": ChanFair(), "Chen-Chuang": ChenChuang(), "Zuiderweg": Zuiderweg()}
RANDOM_METHODS = {"Onda": Onda(), "Billet-Schultes": BilletSchultes()}
STRUCTURED_METHODS = {"Rocha-Bravo-Fair": RochaBravoFair(), "Tsai": TsaiArea(), "Bravo-Rocha-Fair": BravoRochaFair()}


def hardware_from(tables: list[TomlTable], stages: tuple[int, int], names: Sequence[str], where: str
                  ) -> tuple[Section, ...]:
    """The sections of a case whose rows are numbered from the first to the last of `stages`; where: the file.

    Raises `InputError` naming table and key.
    """
    if not tables:
        raise InputError(f"{where}: the case has no table [[hardware]]")
    sections = []
    for table in tables:
        make: Maker = table.choice("type", MAKERS)
        if table.has("stages") or len(tables) > 1:
            first, last = table.stages("stages")
        else:
            first, last = stages
        try:
            contactor = make(table, names)
        except InputError as error:
            raise error if table.where in str(error) else InputError(f"{table.where}: {error}") from error
        table.finish()
        sections.append(Section(first, last, contactor))
    return tuple(sections)


def _tray_fields(table: TomlTable) -> dict[str, Any]:
    number = table.number
    return {
        "diameter": number("diameter_m", above=0), "spacing": number("spacing_m", above=0),
        "weir_height": number("weir_height_m", above=0), "hole_diameter": number("hole_diameter_m", above=0),
        "hole_area_fraction": number("hole_area_fraction", above=0),
        "downcomer_fraction": number("downcomer_fraction", 0.12, above=0),
        "deck_thickness": number("deck_thickness_m", 0.002, above=0),
        "hole_pitch": table.optional_number("hole_pitch_m", above=0),
        "apron_clearance": table.optional_number("apron_clearance_m", above=0),
        "foaming_factor": number("foaming_factor", 1.0, above=0)}


def _sieve_tray(table: TomlTable, names: Sequence[str]) -> SieveTray:
    return SieveTray(**_tray_fields(table), method=table.choice("method", TRAY_METHODS, "AIChE"))


def _bubble_cap_tray(table: TomlTable, names: Sequence[str]) -> BubbleCapTray:
    return BubbleCapTray(**_tray_fields(table))


def _valve_tray(table: TomlTable, names: Sequence[str]) -> ValveTray:
    return ValveTray(**_tray_fields(table), closed_loss=table.number("closed_loss_s2_m", above=0),
                     open_loss=table.number("open_loss_s2_m", above=0),
                     valve_thickness=table.number("valve_thickness_m", above=0),
                     valve_density=table.number("valve_density_kg_m3", 7900.0, above=0))


def _fields(table: TomlTable, known: dict[str, str], optional: set[str], named: bool) -> dict[str, Any]:
    """The fields given; all but the optional ones must be where no packing of the table is named."""
    fields: dict[str, Any] = {}
    for key, name in known.items():
        if table.has(key) or not (named or key in optional):
            fields[name] = table.number(key, above=0)
        table.asked.add(key)
    return fields


def _random_packing(table: TomlTable, names: Sequence[str]) -> RandomPacking:
    named = table.has("packing")
    fields = _fields(table, RANDOM_FIELDS, {"packing_factor_1_m"}, named)
    if table.has("billet"):
        inner = table.table("billet")
        fields["billet"] = BilletConstants(**{key: inner.optional_number(key, above=0) for key in (
            "liquid", "vapor", "holdup", "friction", "flooding", "loading")})
        inner.finish()
    fields["method"] = table.choice("method", RANDOM_METHODS, "Onda")
    diameter = table.number("diameter_m", above=0)
    return RandomPacking.of(table.text("packing"), diameter, **fields) if named else RandomPacking(diameter, **fields)


def _structured_packing(table: TomlTable, names: Sequence[str]) -> StructuredPacking:
    named = table.has("packing")
    fields = _fields(table, STRUCTURED_FIELDS, {"surface_factor"}, named)
    if "angle" in fields:
        fields["angle"] = math.radians(fields["angle"])
    fields["method"] = table.choice("method", STRUCTURED_METHODS, "Rocha-Bravo-Fair")
    diameter = table.number("diameter_m", above=0)
    if named:
        return StructuredPacking.of(table.text("packing"), diameter, **fields)
    return StructuredPacking(diameter, **fields)


def _fixed(table: TomlTable, names: Sequence[str]) -> FixedCoefficients:
    return FixedCoefficients(table.by_pair("kappa_vapor_m_s", names), table.by_pair("kappa_liquid_m_s", names),
                             table.number("area_m2", above=0), h_vapor=table.number("heat_vapor_W_m2_K", above=0),
                             h_liquid=table.number("heat_liquid_W_m2_K", above=0))


STRUCTURED_FIELDS = {"specific_area_m2_m3": "specific_area", "void_fraction": "void_fraction", "base_m": "base",
                     "corrugation_height_m": "height_of_corrugation", "side_m": "side", "angle_deg": "angle",
                     "surface_factor": "surface_factor"}
RANDOM_FIELDS = {"specific_area_m2_m3": "specific_area", "void_fraction": "void_fraction",
                 "nominal_size_m": "nominal_size", "critical_surface_tension_N_m": "critical_surface_tension",
                 "packing_factor_1_m": "packing_factor"}

Maker = Callable[[TomlTable, Sequence[str]], Contactor]
MAKERS: dict[str, Maker] = {
    "sieve tray": _sieve_tray, "bubble-cap tray": _bubble_cap_tray, "valve tray": _valve_tray,
    "random packing": _random_packing, "structured packing": _structured_packing,
    "fixed coefficients": _fixed}
