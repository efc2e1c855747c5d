"""The comparison script runs, covers what it says and keeps quiet."""
from __future__ import annotations

import runpy
from pathlib import Path

import pytest

SCRIPT = Path(__file__).parents[2] / "examples" / "compare_correlations" / "compare_correlations.py"


@pytest.fixture(scope="module")
def example():
    return runpy.run_path(str(SCRIPT))


def test_every_quantity_has_two_methods(example):
    for case in ("packed_bed", "tray"):
        groups = example["grouped"](example[case]())
        words = " ".join(groups)
        assert all(word in words for word in ("kappa", "area", "pressure drop", "flooding"))
        for quantity, group in groups.items():
            assert len(group) >= 2, quantity
            assert 1.0 <= example["spread"](group) < 5.0, quantity
            assert all(value > 0 for row in group for value in row.values)


def test_tables_and_figure(example, tmp_path, capsys):
    example["main"](tmp_path / "figure.png")
    printed = capsys.readouterr().out
    assert "packing_area.onda" in printed and "tray_limits.kister_haas_flooding" in printed
    assert "unverified constants" in printed and "outside: tension_ratio" in printed
    assert (tmp_path / "figure.png").stat().st_size > 10_000
