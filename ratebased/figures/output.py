"""Figures as text and as files: the same figure gives the same bytes."""
from __future__ import annotations

import hashlib
import io
import os
import re
from pathlib import Path
from typing import TYPE_CHECKING, Any
from xml.sax.saxutils import escape

from ..errors import InputError
from ..files import write_whole
from .style import STYLE, require_matplotlib

if TYPE_CHECKING:
    from matplotlib.figure import Figure

METADATA: dict[str, dict[str, Any]] = {
    "png": {"Software": None}, "pdf": {"Creator": None, "Producer": None, "CreationDate": None},
    "svg": {"Creator": None, "Date": None, "Format": None, "Type": None}}
FORMATS = ("png", "svg", "pdf")


def figure_svg(figure: Figure) -> str:
    """The figure as an `<svg>` element that can stand in a page beside others.

    No date, no random names: the same figure gives the same text. Letters are outlines, so no font is needed. Names
    inside are unique to the figure. Raises `InputError` if `figure` is no figure.
    """
    text = _rendered(figure, "svg").decode("utf-8")
    text = text[text.index("<svg"):]
    used = set(re.findall(r"(?:url\(#|href=\"#)([^\")]+)", text))
    text = re.sub(r' id="([^"]+)"', lambda m: m.group(0) if m.group(1) in used else "", text)
    own = "f" + hashlib.sha256(text.encode()).hexdigest()[:10] + "-"
    text = re.sub(r'( id="|url\(#|href="#)', lambda m: m.group(1) + own, text)
    title = escape(str(figure.get_label() or "figure"), {'"': "&quot;"})
    return text.replace("<svg ", f'<svg role="img" aria-label="{title}" ', 1)


def save_figure(figure: Figure, path: str | Path) -> Path:
    """Write a figure as .png, .svg or .pdf (by the ending of `path`), whole or not at all; returns the path.

    Raises `InputError`: another ending, a path that cannot be written, no figure.
    """
    path = Path(path)
    kind = path.suffix.lower().lstrip(".")
    if kind not in FORMATS:
        raise InputError(f"path = {str(path)!r}: expected the ending {', '.join('.' + k for k in FORMATS)}")
    if kind == "svg":
        write_whole(path, figure_svg(figure))
        return path
    data = _rendered(figure, kind)
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        part = path.with_name(path.name + ".part")
        part.write_bytes(data)
        os.replace(part, path)
    except OSError as error:
        raise InputError(f"{path}: cannot be written: {error.strerror}") from error
    return path


def _rendered(figure: Figure, kind: str) -> bytes:
    matplotlib = require_matplotlib()
    from matplotlib.figure import Figure

    if not isinstance(figure, Figure):
        raise InputError(f"figure: expected a matplotlib Figure, got {type(figure).__name__}")
    buffer = io.BytesIO()
    with matplotlib.rc_context(STYLE):
        figure.savefig(buffer, format=kind, metadata=METADATA[kind])
    return buffer.getvalue()
