"""The design package: the table with its inputs, correlations, ranges, residuals, versions and checksums, as files."""
from __future__ import annotations

import json
import math
from collections.abc import Sequence
from importlib.metadata import version
from pathlib import Path
from typing import Any

from correlations import Correlation
from correlations.bibliography import REFERENCES

from ..equipment import Hardware, Section
from ..files import SIGNIFICANT, checksum, write_whole
from .table import CAUTION, EfficiencyTable


def correlation_rows(hardware: Hardware) -> list[dict[str, str]]:
    """What each contactor's figures come from: role, correlation, range, scatter, confidence, source."""
    contactors = [hardware] if not isinstance(hardware, Sequence) else [s.contactor for s in hardware]
    rows: dict[tuple[str, str], dict[str, str]] = {}
    for contactor in contactors:
        used: dict[str, Correlation[..., Any]] = getattr(contactor, "correlations", {})
        for role, function in used.items():
            validity = function.record.validity
            rows[role, function.record.name] = {
                "for": role, "correlation": function.record.name, "range": validity.describe_range(),
                "scatter": validity.describe_error(), "confidence": validity.confidence.value,
                "source": str(REFERENCES[validity.source])}
    return list(rows.values())


def hardware_rows(hardware: Hardware) -> list[str]:
    """Each contactor with its dimensions, in words."""
    if isinstance(hardware, Sequence):
        return [f"stages {s.first} to {s.last}: {s.contactor!r}" for s in hardware if isinstance(s, Section)]
    return [repr(hardware)]


def write_package(table: EfficiencyTable, folder: Path, *, title: str, hardware: Hardware | None = None,
                  inputs: Sequence[Path] = ()) -> dict[str, str]:
    """table.csv, table.md and table.json in `folder`, each written whole; returns their texts by format."""
    frame = table.to_frame()
    sums = checksum(inputs)
    used = [] if hardware is None else correlation_rows(hardware)
    versions = {name: version(name) for name in ("ratebased", "numpy", "scipy", "thermo", "pandas")}
    record = {
        "title": title, "caution": CAUTION, "legend": table.legend(), "versions": versions, "inputs_sha256": sums,
        "components": list(table.rows.names), "murphree_basis": table.rows.star_basis, "odd_rows": table.remarkable(),
        "assumed_scatter": [] if table.uncertainty is None else list(table.uncertainty.assumed),
        "correlations": used,
        "rows": [{key: plain(value) for key, value in row.items()} for row in frame.to_dict("records")]}
    lines = [f"# {title}", "", table.to_markdown()]
    if used:
        lines += ["## Correlations", "", "| for | correlation | range | scatter | confidence | source |",
                  "|---|---|---|---|---|---|"]
        lines += ["| " + " | ".join(row[key] for key in ("for", "correlation", "range", "scatter", "confidence",
                                                         "source")) + " |" for row in used]
        lines.append("")
    lines += ["## Inputs and versions", ""]
    lines += [f"- {name}: SHA-256 {digest}" for name, digest in sums.items()]
    lines += [f"- {name} {number}" for name, number in versions.items()]
    texts = {
        "csv": frame.to_csv(index=False, float_format=f"%{SIGNIFICANT}", lineterminator="\n"),
        "markdown": "\n".join(lines) + "\n",
        "json": json.dumps(record, indent=1, ensure_ascii=False, allow_nan=False) + "\n"}
    for name, key in (("table.csv", "csv"), ("table.md", "markdown"), ("table.json", "json")):
        write_whole(folder / name, texts[key])
    return texts


def plain(value: Any) -> Any:
    """A JSON value: numpy scalars as Python's, empty cells as null, ten significant digits."""
    if hasattr(value, "item"):
        value = value.item()
    if isinstance(value, float):
        return float(format(value, SIGNIFICANT)) if math.isfinite(value) else None
    return value
