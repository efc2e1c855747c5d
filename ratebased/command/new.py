"""`ratebased new`: a commented case to start from."""
from __future__ import annotations

from argparse import Namespace
from pathlib import Path

from ..errors import InputError
from ..files import write_whole
from .terminal import written

TEMPLATES = Path(__file__).parents[1] / "case" / "template"
FILES = {"rate": {"rate.toml": "case.toml", "profile.csv": "profile.csv"}, "column": {"column.toml": "case.toml"},
         "flux": {"flux.toml": "case.toml"}}


def run(options: Namespace) -> None:
    """Write the files of a kind of case. Raises `InputError` where one exists already."""
    targets = {options.folder / target: source for source, target in FILES[options.kind].items()}
    for path in targets:
        if path.exists():
            raise InputError(f"{path}: exists already, nothing was written")
    texts = {path: (TEMPLATES / source).read_text(encoding="utf-8") for path, source in targets.items()}
    for path, text in texts.items():
        write_whole(path, text)
    written(list(targets))
    print(f"ratebased {options.kind} {options.folder / 'case.toml'}")
