"""The command `ratebased`: words in, objects of the library called, results out."""
from __future__ import annotations

import os
import sys
from argparse import Namespace
from collections.abc import Callable, Sequence
from importlib import import_module

# Before numpy is loaded: the matrices are tiny, and threads of a linear-algebra library only wait for each other.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

from numpy.linalg import LinAlgError

from ..errors import ConvergenceError, InputError, NoPhysicalRootError
from .terminal import warnings_as_notes
from .words import parser

DONE, NO_SOLUTION, BAD_INPUT = 0, 1, 2
INTERRUPTED = 130


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command; returns the exit code: 0 done, 1 no solution, 2 bad input."""
    words = parser()
    options = words.parse_args(arguments)
    if options.command is None:
        words.print_help(sys.stderr)
        return BAD_INPUT
    run: Callable[[Namespace], None] = import_module(f".{options.command}", __name__).run
    with warnings_as_notes():
        try:
            run(options)
        except InputError as error:
            print(f"ratebased: bad input: {_line(error)}", file=sys.stderr)
            return BAD_INPUT
        except (ConvergenceError, NoPhysicalRootError) as error:
            print(f"ratebased: no solution: {_line(error)}", file=sys.stderr)
            return NO_SOLUTION
        except (ArithmeticError, LinAlgError) as error:
            print(f"ratebased: no solution: the numbers of the case lead beyond what can be computed with "
                  f"({type(error).__name__}: {_line(error)})", file=sys.stderr)
            return NO_SOLUTION
        except BrokenPipeError:
            os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())   # nobody reads: nothing more to flush
            return DONE
        except KeyboardInterrupt:
            print("ratebased: interrupted", file=sys.stderr)
            return INTERRUPTED
    return DONE


def _line(error: Exception) -> str:
    return " ".join(str(error).split())
