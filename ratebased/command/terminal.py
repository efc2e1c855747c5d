"""What the command shows on a terminal: progress, warnings as notes; nothing of it on standard output."""
from __future__ import annotations

import sys
import warnings
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import Any


@contextmanager
def progress(text: str) -> Iterator[None]:
    """A line on a terminal while something takes its time; nothing in a pipe."""
    if not sys.stderr.isatty():
        yield
        return
    from tqdm import tqdm

    with tqdm(total=1, desc=text, leave=False, bar_format="{desc} ...") as bar:
        yield
        bar.update()


@contextmanager
def warnings_as_notes() -> Iterator[None]:
    """Warnings as one line each on standard error."""
    with warnings.catch_warnings():
        warnings.simplefilter("default")

        def show(message: Warning | str, category: type[Warning], *rest: Any, **more: Any) -> None:
            print(f"note ({category.__name__}): {message}", file=sys.stderr)

        warnings.showwarning = show
        yield


def written(paths: Sequence[Path]) -> None:
    """Tell which files were written."""
    print(f"written: {', '.join(str(path) for path in paths)}", file=sys.stderr)
