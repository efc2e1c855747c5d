"""Every case of the column and packed-bed references, to the tolerances the files state."""
from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from reference_column import compare_column, compare_packed

DATA = Path(__file__).parent / "data"


def cases(name: str) -> dict[str, Any]:
    return json.loads((DATA / name).read_text())["cases"]


COLUMNS, BEDS = cases("column_reference.json"), cases("packed_reference.json")


@pytest.mark.parametrize("name", COLUMNS)
def test_column(name: str) -> None:
    wrong = [f"{c.what}: {c.found} against {c.listed}" for c in compare_column(COLUMNS[name]) if not c.right]
    assert not wrong


@pytest.mark.parametrize("name", BEDS)
def test_packed_bed(name: str) -> None:
    wrong = [f"{c.what}: {c.found} against {c.listed}" for c in compare_packed(BEDS[name]) if not c.right]
    assert not wrong
