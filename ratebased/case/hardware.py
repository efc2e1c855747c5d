"""[[hardware]] of a case file: one table a section of the column.

    type = "sieve tray"                  # or "random packing"
    stages = [2, 21]                     # first and last stage; optional where one section holds them all
    method = "AIChE"                     # trays: "AIChE", "Chan-Fair", "Chen-Chuang", "Zuiderweg"; packing: "Onda",
                                         # "Billet-Schultes"
    diameter_m, spacing_m, weir_height_m, hole_diameter_m, hole_area_fraction; optional downcomer_fraction,
    deck_thickness_m, hole_pitch_m, apron_clearance_m, foaming_factor                            (sieve tray)
    packing = "grid ring, metal, 25 mm"  # random packing of the table of generic packings: its fields may be left out
    diameter_m, specific_area_m2_m3, void_fraction, nominal_size_m, critical_surface_tension_N_m; optional
    packing_factor_1_m, billet = {liquid, vapor, holdup, friction, flooding, loading}            (random packing)
"""
from __future__ import annotations

from collections.abc import Callable
from typing import Any

from ..equipment import Contactor, Section
from ..equipment.packings import BilletConstants, BilletSchultes, Onda, RandomPacking
from ..equipment.tray_methods import AIChESieve, ChanFair, ChenChuang, Zuiderweg
from ..equipment.trays import SieveTray
from ..errors import InputError
from ..stage_profile import StageProfile
from ..toml_table import TomlTable

TRAY_METHODS = {"AIChE": AIChESieve(), "Chan-Fair": ChanFair(), "Chen-Chuang": ChenChuang(), "Zuiderweg": Zuiderweg()}
RANDOM_METHODS = {"Onda": Onda(), "Billet-Schultes": BilletSchultes()}


def hardware_from(tables: list[TomlTable], profile: StageProfile) -> tuple[Section, ...]:
    """The sections of a case. Raises `InputError` naming table and key."""
    if not tables:
        raise InputError(f"{profile.source}: the case has no table [[hardware]]")
    sections = []
    for table in tables:
        make: Callable[[TomlTable], Contactor] = table.choice("type", MAKERS)
        if table.has("stages") or len(tables) > 1:
            first, last = table.stages("stages")
        else:
            first, last = int(profile.number[0]), int(profile.number[-1])
        try:
            contactor = make(table)
        except InputError as error:
            raise error if table.where in str(error) else InputError(f"{table.where}: {error}") from error
        table.finish()
        sections.append(Section(first, last, contactor))
    return tuple(sections)


def _sieve_tray(table: TomlTable) -> SieveTray:
    number = table.number
    return SieveTray(
        diameter=number("diameter_m", above=0), spacing=number("spacing_m", above=0),
        weir_height=number("weir_height_m", above=0), hole_diameter=number("hole_diameter_m", above=0),
        hole_area_fraction=number("hole_area_fraction", above=0),
        downcomer_fraction=number("downcomer_fraction", 0.12, above=0),
        deck_thickness=number("deck_thickness_m", 0.002, above=0),
        hole_pitch=table.optional_number("hole_pitch_m", above=0),
        apron_clearance=table.optional_number("apron_clearance_m", above=0),
        foaming_factor=number("foaming_factor", 1.0, above=0),
        method=table.choice("method", TRAY_METHODS, "AIChE"))


def _random_packing(table: TomlTable) -> RandomPacking:
    fields: dict[str, Any] = {}
    named = table.has("packing")
    for key, name in RANDOM_FIELDS.items():
        if table.has(key) or not (named or key == "packing_factor_1_m"):
            fields[name] = table.number(key, above=0)
        table.asked.add(key)
    if table.has("billet"):
        inner = table.table("billet")
        fields["billet"] = BilletConstants(**{key: inner.optional_number(key, above=0) for key in (
            "liquid", "vapor", "holdup", "friction", "flooding", "loading")})
        inner.finish()
    fields["method"] = table.choice("method", RANDOM_METHODS, "Onda")
    diameter = table.number("diameter_m", above=0)
    return RandomPacking.of(table.text("packing"), diameter, **fields) if named else RandomPacking(diameter, **fields)


RANDOM_FIELDS = {"specific_area_m2_m3": "specific_area", "void_fraction": "void_fraction",
                 "nominal_size_m": "nominal_size", "critical_surface_tension_N_m": "critical_surface_tension",
                 "packing_factor_1_m": "packing_factor"}

MAKERS: dict[str, Callable[[TomlTable], Contactor]] = {"sieve tray": _sieve_tray, "random packing": _random_packing}
