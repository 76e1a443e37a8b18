"""The command line: one file a verb; results to stdout, progress and remarks to stderr."""

import argparse
import os
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import NoReturn

from ..errors import BothwaysError, InputError

DONE, FAILED_VERDICT, BAD_INPUT, GAVE_UP, FAULT, INTERRUPTED = 0, 1, 2, 3, 4, 130
"""Exit statuses; FAULT is a mistake of the program itself."""
SHOW_FAULT = "BOTHWAYS_TRACEBACK"
"""Environment variable that lets the traceback of such a fault through."""


def main(arguments: Sequence[str] | None = None) -> int:
    """Runs the command line; returns the exit status. Every failure is one line on stderr."""
    _show_any_text()
    try:
        chosen = _parser().parse_args(arguments)
        status = int(chosen.act(chosen))
        print(end="", flush=True)
        return status
    except BothwaysError as err:
        return _failed(str(err), err.exit_status)
    except KeyboardInterrupt:
        return _failed("interrupted", INTERRUPTED)
    except BrokenPipeError:  # whoever read our output has seen enough
        _drop_output()
        return DONE
    except OSError as err:
        _drop_output()
        return _failed(f"{err.filename or 'output'}: {err.strerror}; expected a file or device that can be used", BAD_INPUT)
    except Exception as err:
        if SHOW_FAULT in os.environ:
            raise
        return _failed(f"a fault of the program: {type(err).__name__}: {err}; expected a result or an error that explains "
                       f"itself; please report it, with the output of the same command after 'export {SHOW_FAULT}=1'", FAULT)


def _failed(text: str, status: int) -> int:
    print(f"bothways: {' '.join(text.split())}", file=sys.stderr)
    return status


def _drop_output() -> None:
    """Sends to nowhere what is still to be written to stdout, so that the interpreter's end does not fail on it again."""
    if sys.stdout is not None:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def _show_any_text() -> None:
    """A terminal that lacks a character gets its number instead: no result is lost to an arrow or a micro sign."""
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="backslashreplace")


def spare(path: Path, *others: str | Path) -> None:
    """Refuses to write over a file that is read or written for something else, even where replacing is allowed."""
    if os.path.realpath(path) in map(os.path.realpath, others):
        raise InputError("this file is needed for something else", expected="a file of its own to write",
                         remedy="name another one", file=path)


class _Parser(argparse.ArgumentParser):
    """Reports wrong usage as every other error: one line, exit status 2."""

    def error(self, message: str) -> NoReturn:
        raise InputError(message, remedy=f"'{self.prog} --help' shows what is possible")


def _parser() -> argparse.ArgumentParser:
    from . import audit, compare, equilibrium, mechanisms, plot, reduce, run, sweep

    parser = _Parser(
        prog="bothways", description="What happens in a closed batch reactor, by kinetics that cannot contradict "
        "thermodynamics: every reverse rate is made from the forward rate and the equilibrium constant.",
        epilog="example: bothways run hydrogen-kettle --plot", allow_abbrev=False)
    parser.add_argument("--version", action=_Version, nargs=0, help="show the version and where it is installed")
    verbs = parser.add_subparsers(required=True, metavar="COMMAND")
    for verb in (run, equilibrium, sweep, audit, compare, reduce, plot, mechanisms):
        verb.add_to(verbs)
    return parser


class _Version(argparse.Action):
    def __call__(self, parser, namespace, values, option_string=None):  # type: ignore[no-untyped-def]
        from .. import __version__

        print(f"bothways {__version__} ({Path(__file__).resolve().parents[1]}, Python {sys.version.split()[0]})")
        parser.exit()
