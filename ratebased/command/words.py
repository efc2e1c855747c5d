"""The words of the command line: one parser, and help that teaches by example."""
from __future__ import annotations

import argparse
from pathlib import Path

OVERALL = """\
Multicomponent mass-transfer rates of column stages: component efficiencies, HETPs, rate-based columns.

  ratebased new mycase                       # a commented case with a small profile, to start from
  ratebased rate mycase/case.toml            # its efficiency table
  ratebased rate mycase/case.toml --report   # and a report to read and to print
"""

EXIT = "exit codes: 0 done, 1 no solution, 2 bad input"

RATE = """\
Component efficiencies of every stage of a column, from its stage profile and its hardware.

  ratebased rate examples/solvent_recovery/case.toml
  ratebased rate case.toml --out results          # where the files go (default: results beside the case)
  ratebased rate case.toml --format csv > t.csv   # only the table, as CSV, to a pipe
  ratebased rate case.toml --report               # report.html (one file) and report.md beside the tables

The table goes to standard output; table.csv, table.md and table.json are written into the --out folder.
"""

COLUMN = """\
One column predicted three ways (equilibrium stages with one efficiency, with component efficiencies, mass-transfer
rates) and how far apart the predictions are.

  ratebased column examples/extractive_distillation/case.toml
  ratebased column case.toml --format json | python -m json.tool
  ratebased column case.toml --report             # figures, profiles and sources on one page
  ratebased column case.toml --quick              # leave out the counts of stages (about twenty solutions)

The comparison goes to standard output; comparison.csv, profiles.csv, efficiencies.csv, column.md and column.json are
written into the --out folder.
"""

FLUX = """\
Fluxes through one film, or through one interface between a vapour and a liquid, and what makes them.

  ratebased flux case.toml
  ratebased flux case.toml --format csv           # one row a component
  ratebased flux case.toml --report               # with the parts of every flux drawn
  ratebased new DIR --kind flux                   # a commented interface to start from

The fluxes go to standard output; flux.csv, flux.md and flux.json are written into the --out folder.
"""

CATALOGUE = """\
The published correlations this program can use: what each predicts, for what, its range, scatter and source.

  ratebased catalogue                             # all of them, one line each
  ratebased catalogue sieve                       # those with this word anywhere in their record
  ratebased catalogue packing area                # all words must be there
  ratebased catalogue onda --format json          # everything known about them
"""

NEW = """\
Write a commented case to start from, with data that runs as it is.

  ratebased new mycase                            # a profile to rate: case.toml and profile.csv
  ratebased new mycase --kind column              # a column to predict
  ratebased new mycase --kind flux                # one interface

Nothing that exists is overwritten.
"""

KINDS = ("rate", "column", "flux")
FORMATS = ("text", "csv", "markdown", "json")


def parser() -> argparse.ArgumentParser:
    """The parser of the command; `options.command` is the word given, or None."""
    top = argparse.ArgumentParser(prog="ratebased", description=OVERALL, epilog=EXIT,
                                  formatter_class=argparse.RawDescriptionHelpFormatter)
    commands = top.add_subparsers(title="commands", metavar="", dest="command")

    def add(name: str, short: str, text: str) -> argparse.ArgumentParser:
        return commands.add_parser(name, help=short, description=text, epilog=EXIT,
                                   formatter_class=argparse.RawDescriptionHelpFormatter)

    for name, short, text in (("rate", "component efficiencies from a stage profile and the hardware", RATE),
                              ("column", "a column with equilibrium stages and with rates, compared", COLUMN),
                              ("flux", "fluxes through one film or one interface", FLUX)):
        one = add(name, short, text)
        one.add_argument("case", type=Path, metavar="CASE.toml")
        _output(one, "folder for the files (default: results beside the case)")
        one.add_argument("--report", action="store_true", help="also report.html and report.md into the folder")
        if name == "column":
            one.add_argument("--quick", action="store_true", help="no counts of stages needed")
    catalogue = add("catalogue", "the published correlations, with range, scatter and source", CATALOGUE)
    catalogue.add_argument("words", nargs="*", metavar="WORD", help="only records that hold every word")
    _output(catalogue, "folder for catalogue.csv, catalogue.md and catalogue.json (default: none written)")
    new = add("new", "write a commented case to start from", NEW)
    new.add_argument("folder", type=Path, metavar="DIR")
    new.add_argument("--kind", choices=KINDS, default="rate", help="what the case is for (default: rate)")
    return top


def _output(one: argparse.ArgumentParser, folder: str) -> None:
    one.add_argument("--out", type=Path, metavar="DIR", help=folder)
    one.add_argument("--format", choices=FORMATS, default="text", help="what goes to standard output (default: text)")
