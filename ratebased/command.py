"""The command `ratebased`: words in, objects of the library called, results out."""
from __future__ import annotations

import argparse
import sys
import warnings
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from .errors import ConvergenceError, InputError, NoPhysicalRootError

DONE, NO_SOLUTION, BAD_INPUT = 0, 1, 2

RATE_HELP = """\
Component efficiencies of every stage of a column, from its stage profile and its hardware.

  ratebased rate examples/solvent_recovery/case.toml
  ratebased rate case.toml --out results          # where the files go (default: results beside the case)
  ratebased rate case.toml --format csv > t.csv   # only the table, as CSV, to a pipe

The table goes to standard output; table.csv, table.md and table.json are written into the --out folder.
"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command; returns the exit code: 0 done, 1 no solution, 2 bad input."""
    parser = _parser()
    options = parser.parse_args(arguments)
    run: Callable[[argparse.Namespace], None] | None = getattr(options, "run", None)
    if run is None:
        parser.print_help(sys.stderr)
        return BAD_INPUT
    with _warnings_as_notes():
        try:
            run(options)
        except InputError as error:
            print(f"ratebased: bad input: {error}", file=sys.stderr)
            return BAD_INPUT
        except (ConvergenceError, NoPhysicalRootError) as error:
            print(f"ratebased: no solution: {error}", file=sys.stderr)
            return NO_SOLUTION
        except BrokenPipeError:
            sys.stderr.close()
            return DONE
    return DONE


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(prog="ratebased", description="Multicomponent mass-transfer rates of column "
                                     "stages: component efficiencies, HETPs, rate-based columns.")
    commands = parser.add_subparsers(title="commands", metavar="")
    rate = commands.add_parser("rate", help="component efficiencies from a stage profile and the hardware",
                               description=RATE_HELP, formatter_class=argparse.RawDescriptionHelpFormatter)
    rate.add_argument("case", type=Path, metavar="CASE.toml")
    rate.add_argument("--out", type=Path, metavar="DIR", help="folder for the files (default: results beside the case)")
    rate.add_argument("--format", choices=("text", "csv", "markdown", "json"), default="text",
                      help="what goes to standard output")
    rate.set_defaults(run=_rate)
    return parser


def _rate(options: argparse.Namespace) -> None:
    from .case import read_rate_case
    from .efficiency import efficiency_table, write_package

    with _progress("reading case, building properties"):
        case = read_rate_case(options.case)
    with _progress(f"rating {int(case.profile.contact.sum())} stages"):
        table = efficiency_table(case.profile, case.hardware, case.properties, options=case.options,
                                 uncertainty=case.uncertainty)
    folder = options.out or options.case.parent / "results"
    written = write_package(table, folder, title=case.title, hardware=case.hardware, inputs=case.files)
    print(written[options.format] if options.format != "text" else f"{case.title}\n\n{table}")
    print(f"written: {', '.join(str(folder / name) for name in ('table.csv', 'table.md', 'table.json'))}",
          file=sys.stderr)


@contextmanager
def _progress(text: str) -> Iterator[None]:
    """A line on a terminal while something takes its time; nothing in a pipe."""
    if not sys.stderr.isatty():
        yield
        return
    from tqdm import tqdm

    with tqdm(total=1, desc=text, delay=0.5, leave=False, bar_format="{desc} ... {elapsed}") as bar:
        yield
        bar.update()


@contextmanager
def _warnings_as_notes() -> Iterator[None]:
    """Warnings as one line each on standard error."""
    with warnings.catch_warnings():
        warnings.simplefilter("default")

        def show(message: Warning | str, category: type[Warning], *rest: Any, **more: Any) -> None:
            print(f"note ({category.__name__}): {message}", file=sys.stderr)

        warnings.showwarning = show
        yield


if __name__ == "__main__":
    sys.exit(main())
