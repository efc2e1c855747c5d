"""Every case of the tray and point references, to the tolerances the file states."""
from __future__ import annotations

import json
from pathlib import Path

import pytest
from reference_efficiency import compare

CASES = json.loads((Path(__file__).parent / "data" / "efficiency_reference.json").read_text())["cases"]


@pytest.mark.parametrize("case", CASES, ids=[f"{case['id']}-{case['tag'].replace(' ', '_')}" for case in CASES])
def test_reference(case: dict[str, object]) -> None:
    wrong = [f"{c.what}: {c.found} against {c.listed}" for c in compare(case) if not c.right]
    assert not wrong
