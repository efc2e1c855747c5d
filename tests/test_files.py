"""Files are written whole or not at all."""
from __future__ import annotations

import os
from pathlib import Path

import pytest

from ratebased.errors import InputError
from ratebased.files import write_whole


@pytest.mark.parametrize("stopped_in", ["write_text", "replace"])
def test_an_interrupt_leaves_the_old_file(stopped_in: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Stopped half-way through the text, or before the rename: the old file stands, and nothing beside it."""
    target = tmp_path / "table.csv"
    write_whole(target, "old\n")

    def half(path: Path, text: str, **more: object) -> None:
        path.write_bytes(text[:2].encode())
        raise KeyboardInterrupt

    def never(*paths: object) -> None:
        raise KeyboardInterrupt

    if stopped_in == "write_text":
        monkeypatch.setattr(Path, "write_text", half)
    else:
        monkeypatch.setattr(os, "replace", never)
    with pytest.raises(KeyboardInterrupt):
        write_whole(target, "new and longer\n")
    assert target.read_text() == "old\n"
    assert list(tmp_path.iterdir()) == [target]


def test_the_error_names_the_file(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("")
    with pytest.raises(InputError, match="table.csv: cannot be written"):
        write_whole(tmp_path / "file" / "table.csv", "")
