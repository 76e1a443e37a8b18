"""The command line: one file a verb; results to stdout, progress and remarks to stderr."""

import argparse
import sys
from collections.abc import Sequence

from ..errors import BothwaysError

DONE, BAD_INPUT, INTERRUPTED = 0, 2, 130


def main(arguments: Sequence[str] | None = None) -> int:
    """Runs the command line; returns the exit status."""
    parser = _parser()
    try:
        chosen = parser.parse_args(arguments)
        return int(chosen.act(chosen))
    except BothwaysError as err:
        print(f"bothways: {err}", file=sys.stderr)
        return err.exit_status
    except KeyboardInterrupt:
        print("bothways: interrupted", file=sys.stderr)
        return INTERRUPTED
    except BrokenPipeError:
        return DONE


def _parser() -> argparse.ArgumentParser:
    from . import mechanisms, run

    parser = argparse.ArgumentParser(
        prog="bothways", description="What happens in a closed batch reactor, by kinetics that cannot contradict "
        "thermodynamics: every reverse rate is made from the forward rate and the equilibrium constant.",
        epilog="example: bothways run hydrogen-kettle --plot")
    parser.add_argument("--version", action=_Version, nargs=0, help="show the version and where it is installed")
    verbs = parser.add_subparsers(required=True, metavar="COMMAND")
    for verb in (run, mechanisms):
        verb.add_to(verbs)
    return parser


class _Version(argparse.Action):
    def __call__(self, parser, namespace, values, option_string=None):  # type: ignore[no-untyped-def]
        from pathlib import Path

        from .. import __version__

        print(f"bothways {__version__} ({Path(__file__).resolve().parents[1]}, Python {sys.version.split()[0]})")
        parser.exit()
