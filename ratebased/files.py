"""Results as files: written whole or not at all, byte-identical for the same inputs."""
from __future__ import annotations

import hashlib
import json
import math
import os
from collections.abc import Sequence
from importlib.metadata import version
from pathlib import Path
from typing import TYPE_CHECKING, Any

from .errors import InputError

if TYPE_CHECKING:
    from .efficiency import EfficiencyTable

SIGNIFICANT = ".10g"


def write_whole(path: Path, text: str) -> None:
    """Write beside, then rename: an interrupted write leaves the old file or none."""
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        part = path.with_name(path.name + ".part")
        part.write_text(text, encoding="utf-8", newline="\n")
        os.replace(part, path)
    except OSError as error:
        raise InputError(f"{path}: cannot be written: {error.strerror}") from error


def checksum(paths: Sequence[Path]) -> dict[str, str]:
    """SHA-256 of each input file by name."""
    return {path.name: hashlib.sha256(path.read_bytes()).hexdigest() for path in paths}


def write_table(table: EfficiencyTable, folder: Path, *, title: str, inputs: Sequence[Path] = ()) -> dict[str, str]:
    """table.csv, table.md and table.json in `folder`; returns their texts by format."""
    from .efficiency.table import CAUTION

    frame = table.to_frame()
    csv = frame.to_csv(index=False, float_format=f"%{SIGNIFICANT}", lineterminator="\n")
    sums = checksum(inputs)
    record = {
        "title": title, "caution": CAUTION, "legend": table.legend(), "version": version("ratebased"),
        "inputs_sha256": sums, "components": list(table.rows.names), "murphree_basis": table.rows.star_basis,
        "odd_rows": table.remarkable(),
        "rows": [{key: _plain(value) for key, value in row.items()} for row in frame.to_dict("records")]}
    texts = {
        "csv": csv,
        "markdown": f"# {title}\n\n{table.to_markdown()}\n" + "".join(
            f"Input {name}: SHA-256 {digest}\n" for name, digest in sums.items()),
        "json": json.dumps(record, indent=1, ensure_ascii=False, allow_nan=False) + "\n"}
    for name, key in (("table.csv", "csv"), ("table.md", "markdown"), ("table.json", "json")):
        write_whole(folder / name, texts[key])
    return texts


def _plain(value: Any) -> Any:
    """A JSON value: numpy scalars as Python's, empty cells as null, ten significant digits."""
    if hasattr(value, "item"):
        value = value.item()
    if isinstance(value, float):
        return float(format(value, SIGNIFICANT)) if math.isfinite(value) else None
    return value
