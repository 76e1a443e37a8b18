"""bothways plot: a run as a figure: its course, its approach to equilibrium, or one species' rates."""

import argparse
import math
from pathlib import Path

from ..errors import InputError, shown
from ..hdf5 import layout_in
from ..sweep import LAYOUT as SWEEP_LAYOUT
from ..sweep import read_sweep
from ..trajectory import Trajectory, read_trajectory
from ..units import parse_quantity
from . import DONE, VERBS, spare


def add_to(verbs) -> None:  # type: ignore[no-untyped-def]
    """Adds the verb to the parser."""
    parser = verbs.add_parser(
        "plot", help=VERBS["plot"],
        formatter_class=argparse.RawDescriptionHelpFormatter,
        description="Draws temperature, pressure and composition of a trajectory against time. Which species, which\n"
        "stretch of time and whether its axis is linear or logarithmic follow from the course, unless said. Or the approach\n"
        "to equilibrium, or what the reactions contribute to the rate of formation of one species. Of a sweep: its ignition\n"
        "delays against 1000 K/T.",
        epilog="examples:\n  bothways plot hydrogen-kettle.h5\n  bothways plot hydrogen-kettle.h5 --output ignition.pdf "
        "--column --species H2 O2 OH --between '0.49 ms' '0.53 ms'\n"
        "  bothways plot hydrogen-kettle.h5 --contributions OH --output rates-of-OH.svg\n"
        "  bothways plot hydrogen-kettle-map.h5 --output delays.pdf", allow_abbrev=False)
    parser.add_argument("run", metavar="RUN.h5", type=Path, help="a trajectory file, or the results of a sweep")
    parser.add_argument("--output", metavar="FILE", type=Path, help="the picture: .png, .svg or .pdf (default: beside the "
                        "trajectory RUN.png, RUN-approach.png or RUN-contributions.png)")
    _add_kinds(parser)
    parser.add_argument("--species", nargs="+", metavar="NAME", help="the species to draw (default: those that matter)")
    _add_times(parser)
    _add_widths(parser)
    parser.add_argument("--replace", action="store_true", help="overwrite a file that exists")
    parser.set_defaults(act=act)


def _add_kinds(parser: argparse.ArgumentParser) -> None:
    kind = parser.add_mutually_exclusive_group()
    kind.add_argument("--approach", action="store_true", help="draw how far the run is from equilibrium instead")
    kind.add_argument("--contributions", metavar="SPECIES", help="draw the rates of formation of a species by the most "
                      "important reactions instead")


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
    _check_options(chosen)
    from ..plots import check_picture, save_ignition  # matplotlib takes its time to load: no other verb waits for it

    if layout_in(chosen.run) == SWEEP_LAYOUT:
        picture = _picture_of_sweep(chosen)
        check_picture(picture, chosen.replace)
        save_ignition(read_sweep(chosen.run), picture, replace=chosen.replace, width=chosen.width)
        print(picture)
        return DONE
    trajectory = read_trajectory(chosen.run)
    picture = chosen.output or chosen.run.with_name(f"{chosen.run.stem}{_ending(chosen)}.png")
    spare(picture, chosen.run)
    between = (_seconds(chosen.between[0]), _seconds(chosen.between[1])) if chosen.between else None
    check_picture(picture, chosen.replace)
    _draw(trajectory, picture, chosen, between)
    print(picture)
    return DONE


def _picture_of_sweep(chosen: argparse.Namespace) -> Path:
    """The file for a sweep's figure; an InputError for options that ask for a run's."""
    if _ending(chosen) or chosen.species or chosen.between or chosen.time_axis:
        raise InputError("these are the results of a sweep", expected="no options but --output, --column and --replace",
                         remedy="leave the others out", file=chosen.run)
    picture = chosen.output or chosen.run.with_name(f"{chosen.run.stem}.png")
    spare(picture, chosen.run)
    return picture


def _check_options(chosen: argparse.Namespace) -> None:
    """An InputError for options that say how the course is drawn, beside one that asks for another figure."""
    given = {"--species": chosen.species, "--between": chosen.between, f"--{chosen.time_axis}": chosen.time_axis}
    unused = [name for name, value in given.items() if value]
    if _ending(chosen) and unused:
        raise InputError(f"{unused[0]} beside -{_ending(chosen)}", expected="options of the course with the course alone",
                         remedy="leave one out")


def _ending(chosen: argparse.Namespace) -> str:
    return "-approach" if chosen.approach else "-contributions" if chosen.contributions is not None else ""


def _draw(trajectory: Trajectory, picture: Path, chosen: argparse.Namespace, between: tuple[float, float] | None) -> None:
    from .. import plots

    how = {"replace": chosen.replace, "width": chosen.width}
    if chosen.approach:
        plots.save_approach(trajectory, picture, **how)
    elif chosen.contributions is not None:
        plots.save_contributions(trajectory, chosen.contributions, picture, **how)
    else:
        plots.save_course(trajectory, picture, species=chosen.species, time_axis=chosen.time_axis, between=between, **how)


def _seconds(text: str) -> float:
    """A time [s], from a bare number or one with its unit."""
    try:
        seconds = parse_quantity(text if len(text.split()) > 1 else f"{text} s", "time")
    except InputError as err:
        raise InputError(f"{shown(text)} is no time", expected=err.expected, entry="--between") from None
    if not math.isfinite(seconds):
        raise InputError(f"{shown(text)} is not finite", expected="two times within the run", entry="--between")
    return seconds
