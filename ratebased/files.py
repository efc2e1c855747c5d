"""Results as files: written whole or not at all."""
from __future__ import annotations

import contextlib
import hashlib
import os
from collections.abc import Sequence
from pathlib import Path

from .errors import InputError

SIGNIFICANT = ".10g"
"""Digits of every figure in a file: the same inputs give the same bytes."""


def write_whole(path: Path, text: str) -> None:
    """Write beside, then rename: an interrupted write leaves the old file or none, and nothing beside it."""
    part = path.with_name(f"{path.name}.{os.getpid()}.part")
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        part.write_text(text, encoding="utf-8", newline="\n")
        os.replace(part, path)
    except OSError as error:
        raise InputError(f"{path}: cannot be written: {error.strerror}") from error
    finally:
        with contextlib.suppress(OSError):
            part.unlink()


def checksum(paths: Sequence[Path]) -> dict[str, str]:
    """SHA-256 of each input file by name, with its folder where two have the same name."""
    names = [path.name for path in paths]
    return {path.name if names.count(path.name) == 1 else f"{path.parent.name}/{path.name}":
            hashlib.sha256(path.read_bytes()).hexdigest() for path in paths}
