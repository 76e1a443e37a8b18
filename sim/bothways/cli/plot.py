"""bothways plot: the course of a run as a figure."""

import argparse
import math
from pathlib import Path

from ..errors import InputError, shown
from ..trajectory import read_trajectory
from ..units import parse_quantity
from . import DONE, spare


def add_to(verbs) -> None:  # type: ignore[no-untyped-def]
    """Adds the verb to the parser."""
    parser = verbs.add_parser(
        "plot", help="draw a run's course", formatter_class=argparse.RawDescriptionHelpFormatter,
        description="Draws temperature, pressure and composition of a trajectory against time. Which species, which\n"
        "stretch of time and whether its axis is linear or logarithmic follow from the course, unless said.",
        epilog="examples:\n  bothways plot hydrogen-kettle.h5\n  bothways plot hydrogen-kettle.h5 --output ignition.pdf "
        "--column --species H2 O2 OH --between '0.49 ms' '0.53 ms'", allow_abbrev=False)
    parser.add_argument("run", metavar="RUN.h5", type=Path, help="a trajectory file")
    parser.add_argument("--output", metavar="FILE", type=Path, help="the picture: .png, .svg or .pdf (default: RUN.png "
                        "beside the trajectory)")
    parser.add_argument("--species", nargs="+", metavar="NAME", help="the species to draw (default: those that matter)")
    _add_times(parser)
    _add_widths(parser)
    parser.add_argument("--replace", action="store_true", help="overwrite a file that exists")
    parser.set_defaults(act=act)


def _add_times(parser: argparse.ArgumentParser) -> None:
    axis = parser.add_mutually_exclusive_group()
    axis.add_argument("--linear", dest="time_axis", action="store_const", const="linear",
                      help="one linear time axis, over the whole run")
    axis.add_argument("--log", dest="time_axis", action="store_const", const="log",
                      help="one logarithmic time axis, over the whole run")
    parser.add_argument("--between", nargs=2, metavar=("START", "END"), help="draw this stretch of time alone, such as "
                        "'0.4 ms' '0.6 ms' (a bare number is in s)")


def _add_widths(parser: argparse.ArgumentParser) -> None:
    width = parser.add_mutually_exclusive_group()
    width.add_argument("--page", dest="width", action="store_const", const="page", default="page",
                       help="180 mm wide (default)")
    width.add_argument("--column", dest="width", action="store_const", const="column", help="85 mm wide")


def act(chosen: argparse.Namespace) -> int:
    """Carries out the verb."""
    from ..plots import check_picture, save_course  # matplotlib takes its time to load: no other verb waits for it

    trajectory = read_trajectory(chosen.run)
    picture = chosen.output or chosen.run.with_suffix(".png")
    spare(picture, chosen.run)
    between = (_seconds(chosen.between[0]), _seconds(chosen.between[1])) if chosen.between else None
    check_picture(picture, chosen.replace)
    save_course(trajectory, picture, replace=chosen.replace, species=chosen.species,
                time_axis=chosen.time_axis, width=chosen.width, between=between)
    print(picture)
    return DONE


def _seconds(text: str) -> float:
    """A time [s], from a bare number or one with its unit."""
    try:
        seconds = parse_quantity(text if len(text.split()) > 1 else f"{text} s", "time")
    except InputError as err:
        raise InputError(f"{shown(text)} is no time", expected=err.expected, entry="--between") from None
    if not math.isfinite(seconds):
        raise InputError(f"{shown(text)} is not finite", expected="two times within the run", entry="--between")
    return seconds
