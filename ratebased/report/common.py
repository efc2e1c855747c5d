"""Sections that every report has: correlations with their sources, hardware, inputs and versions; pictures."""
from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import fields, is_dataclass
from importlib import import_module
from importlib.metadata import PackageNotFoundError, version
from importlib.util import find_spec
from pathlib import Path
from typing import Any

from ..case.hardware import RANDOM_METHODS, STRUCTURED_METHODS, TRAY_METHODS
from ..efficiency.package import correlation_rows
from ..equipment import Section as HardwareSection
from ..files import checksum
from .blocks import Block, Bullets, Paragraph, Picture, Section, Table, words

PACKAGES = ("ratebased", "numpy", "scipy", "thermo", "pandas")


def correlations_section(hardware: Sequence[HardwareSection]) -> Section:
    """Every correlation behind the figures, with range, scatter and source."""
    rows = correlation_rows(hardware)
    if not rows:
        return Section("correlations", "Correlations", (Paragraph("No correlation was used: the coefficients were "
                                                                  "given as numbers."),))
    keys = ("for", "correlation", "range", "scatter", "confidence", "source")
    table = Table(("for", "correlation", "range of validity", "scatter", "constants", "source"),
                  tuple(words(*(row[key] for key in keys)) for row in rows),
                  "Scatter is the published mean deviation from the data behind the correlation.")
    return Section("correlations", "Correlations and their sources", (table,))


def inputs_section(hardware: Sequence[HardwareSection], files: Sequence[Path], more: Sequence[str] = ()) -> Section:
    """What went in: hardware in words, files with their checksums, versions."""
    described = [f"Stages {s.first} to {s.last}: {contactor_words(s.contactor)}." for s in hardware]
    sums = Table(("file", "SHA-256"), tuple(words(name, digest) for name, digest in checksum(files).items()))
    used = ", ".join(f"{name} {number}" for name, number in versions().items())
    blocks: list[Block] = [Bullets((*described, *more))] if described or more else []
    return Section("inputs", "Inputs", (*blocks, sums, Paragraph(f"Computed with {used}.")))


def versions() -> dict[str, str]:
    """Installed version of each package that a result depends on."""
    found = {}
    for name in PACKAGES:
        try:
            found[name] = version(name)
        except PackageNotFoundError:
            found[name] = "not installed"
    return found


UNITS = {"diameter": "m", "spacing": "m", "weir_height": "m", "hole_diameter": "m", "deck_thickness": "m",
         "hole_pitch": "m", "apron_clearance": "m", "specific_area": "m2/m3", "nominal_size": "m", "base": "m",
         "height_of_corrugation": "m", "side": "m", "critical_surface_tension": "N/m", "packing_factor": "1/m",
         "area": "m2"}


METHOD_WORDS = {type(method): word for methods in (TRAY_METHODS, RANDOM_METHODS, STRUCTURED_METHODS)
                for word, method in methods.items()}


def contactor_words(contactor: object) -> str:
    """A contactor with its dimensions, as a person would write them down."""
    kind = _spaced(type(contactor).__name__)
    if not is_dataclass(contactor):
        return kind
    parts = []
    for field in fields(contactor):
        value = getattr(contactor, field.name)
        if value is None:
            continue
        name, unit = field.name.replace("_", " "), UNITS.get(field.name, "")
        if field.name == "angle":
            parts.append(f"angle {math.degrees(value):g} degrees")
        elif isinstance(value, bool | int | float):
            parts.append(f"{name} {value:.4g} {unit}".rstrip())
        elif isinstance(value, str):
            parts.append(f"{name} {value}")
        elif type(value) in METHOD_WORDS:
            parts.append(f"method {METHOD_WORDS[type(value)]}")
    return f"{kind}: {', '.join(parts)}" if parts else kind


def _spaced(name: str) -> str:
    """SieveTray -> Sieve tray."""
    return "".join(f" {c.lower()}" if c.isupper() and i else c for i, c in enumerate(name))


def pictures(draw: Sequence[tuple[str, str, Sequence[Any]]]) -> tuple[Picture, ...]:
    """Figures by name of the function in `ratebased.figures`, what each shows, and its arguments.

    Empty where matplotlib is not installed.
    """
    if find_spec("matplotlib") is None or find_spec("ratebased.figures") is None:
        return ()
    module = import_module("ratebased.figures")
    found = []
    for name, shows, arguments in draw:
        function: Callable[..., Any] = getattr(module, name)
        found.append(Picture(module.figure_svg(function(*arguments)), shows))
    return tuple(found)
