"""Every case of every reference file of a folder: `pytest tests/test_references.py --references DIR`."""
from __future__ import annotations

from pathlib import Path

from reference_cases import run_file


def test_reference_file(reference_file: Path, reference_counts: dict[str, str]) -> None:
    """Nothing wrong, no error."""
    count = run_file(reference_file)
    reference_counts[reference_file.name] = str(count)
    assert not count.wrong and not count.error, "\n".join(count.remarks[:20])
