"""The command line: one file a verb; results to stdout, progress and remarks to stderr."""

import argparse
import os
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import Any, NoReturn

from ..errors import BothwaysError, InputError

DONE, FAILED_VERDICT, BAD_INPUT, GAVE_UP, FAULT, INTERRUPTED = 0, 1, 2, 3, 4, 130
"""Exit statuses; FAULT is a mistake of the program itself."""
VERBS = {
    "run": "predict a batch's time course",
    "equilibrium": "state where a batch must end",
    "sweep": "run the cases of a grid",
    "audit": "find what is wrong with a mechanism",
    "compare": "judge reduced mechanisms against their parent",
    "reduce": "make a smaller mechanism within stated limits",
    "plot": "draw a run's course, approach to equilibrium or rates; a sweep's ignition delays",
    "mechanisms": "list the bundled mechanisms, cases and grids",
}
"""What can be done, and what --help says of it."""
SHOW_FAULT = "BOTHWAYS_TRACEBACK"
"""Environment variable that lets the traceback of such a fault through."""


def main(arguments: Sequence[str] | None = None) -> int:
    """Runs the command line; returns the exit status. Every failure is one line on stderr."""
    _show_any_text()
    try:
        stated = sys.argv[1:] if arguments is None else arguments
        chosen = _parser(next((word for word in stated if word in VERBS), "")).parse_args(arguments)
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


def _parser(wanted: str | None = None) -> argparse.ArgumentParser:
    """The parser with every verb, or with only the wanted one complete: a verb's module takes its time to load."""
    parser = _Parser(
        prog="bothways", description="What happens in a closed batch reactor, by kinetics that cannot contradict "
        "thermodynamics: every reverse rate is made from the forward rate and the equilibrium constant.",
        epilog="example: bothways run hydrogen-kettle --plot", allow_abbrev=False)
    parser.add_argument("--version", action=_Version, nargs=0, help="show the version and where it is installed")
    verbs = parser.add_subparsers(required=True, metavar="COMMAND")
    for verb, text in VERBS.items():
        if wanted in (verb, None):
            _module(verb).add_to(verbs)
        else:
            verbs.add_parser(verb, help=text)
    return parser


def _module(verb: str) -> Any:
    """The module of a verb."""
    if verb == "run":
        from . import run as module
    elif verb == "equilibrium":
        from . import equilibrium as module  # type: ignore[no-redef]
    elif verb == "sweep":
        from . import sweep as module  # type: ignore[no-redef]
    elif verb == "audit":
        from . import audit as module  # type: ignore[no-redef]
    elif verb == "compare":
        from . import compare as module  # type: ignore[no-redef]
    elif verb == "reduce":
        from . import reduce as module  # type: ignore[no-redef]
    elif verb == "plot":
        from . import plot as module  # type: ignore[no-redef]
    else:
        from . import mechanisms as module  # type: ignore[no-redef]
    return module


class _Version(argparse.Action):
    def __call__(self, parser, namespace, values, option_string=None):  # type: ignore[no-untyped-def]
        from .. import __version__

        print(f"bothways {__version__} ({Path(__file__).resolve().parents[1]}, Python {sys.version.split()[0]})")
        parser.exit()
