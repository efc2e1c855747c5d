"""Reference files: one reader a format, each turning a case into calls of the library and comparing the answers.

A reader takes a case of its format and yields a `Comparison` for every quantity the file lists, with the tolerance the
file states. `READERS` names the module and function of each; they are loaded when a file of that format turns up.
"""
from __future__ import annotations

import json
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field
from importlib import import_module
from pathlib import Path
from typing import Any

READERS = {
    "film": ("reference_film", "compare_film"),
    "film_nonideal": ("reference_film", "compare_nonideal"),
    "film_multiplicity": ("reference_film", "compare_multiplicity"),
    "interface": ("reference_interface", "compare_interface"),
    "interface_multiplicity": ("reference_interface", "compare_multiplicity"),
    "efficiency": ("reference_efficiency", "compare"),
    "column": ("reference_column", "compare_column"),
    "packed": ("reference_column", "compare_packed"),
}


@dataclass
class Count:
    """How the cases of one file came out: right, wrong (beyond a tolerance), error (an exception)."""

    right: int = 0
    wrong: int = 0
    error: int = 0
    remarks: list[str] = field(default_factory=list)

    def __str__(self) -> str:
        return f"{self.right} right, {self.wrong} wrong, {self.error} error"


def reader(name: str) -> Callable[[Mapping[str, Any]], Iterator[Any]]:
    """The reader of a format."""
    module, function = READERS[name]
    found: Callable[[Mapping[str, Any]], Iterator[Any]] = getattr(import_module(module), function)
    return found


def reference_files(folder: Path) -> list[Path]:
    """The JSON files of a folder that hold one of the formats."""
    return [path for path in sorted(folder.glob("*.json")) if file_format(path) in READERS]


def file_format(path: Path) -> str | None:
    """The key `format` of a file."""
    content = json.loads(path.read_text())
    return content.get("format") if isinstance(content, dict) else None


def run_file(path: Path) -> Count:
    """Compare every case of a file."""
    content = json.loads(path.read_text())
    read = reader(content["format"])
    count = Count()
    cases = content["cases"]
    for key, case in cases.items() if isinstance(cases, dict) else enumerate(cases):
        name = case.get("id") or case.get("name") or str(key)
        try:
            missed = [comparison.what for comparison in read(case) if not comparison.right]
        except Exception as error:                        # counted, and shown with its kind
            count.error += 1
            count.remarks.append(f"{name}: {type(error).__name__}: {error}")
            continue
        if missed:
            count.wrong += 1
            count.remarks.append(f"{name}: {', '.join(missed)}")
        else:
            count.right += 1
    return count
