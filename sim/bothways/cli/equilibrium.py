"""bothways equilibrium: where a case must end, by a route that shares no kinetics."""

import argparse
import csv
import io
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import numpy as np

from ..case import MARGIN_ERROR, MARGIN_WARN, Case, listed, read_case, species_outside
from ..contents import Contents
from ..endpoint import Target, target_of
from ..equilibrium import Equilibrium, equilibria
from ..errors import InputError
from ..mechanism.phase import SOLUTION
from ..outfile import check_writable, write_whole
from ..report import pressure_text, volume_text
from ..units import parse_quantity
from . import DONE, VERBS, spare

SHOWN_ABOVE = 1e-12
"""Species below this mole fraction everywhere are left out of tables [-]."""
_COLUMNS = 6


def add_to(verbs) -> None:  # type: ignore[no-untyped-def]
    """Adds the verb to the parser."""
    parser = verbs.add_parser(
        "equilibrium", help=VERBS["equilibrium"], formatter_class=argparse.RawDescriptionHelpFormatter,
        description="Works out the equilibrium of a case's charge in its vessel, from the species' chemical potentials alone.\n"
        "With a list of temperatures or pressures: a table, each at that temperature or pressure, the rest as the case says.",
        epilog="examples:\n  bothways equilibrium hydrogen-kettle\n"
        "  bothways equilibrium methane-drum --temperatures 1000 1500 '2000 K' --csv methane.csv\n"
        "  bothways equilibrium methane-drum --temperatures 600 3000 --plot methane.pdf", allow_abbrev=False)
    parser.add_argument("case", metavar="CASE", help="a case file, or the name of a bundled case")
    parser.add_argument("--elements", action="store_true", help="hold only the elements, not what else the reactions conserve")
    lists = parser.add_mutually_exclusive_group()
    lists.add_argument("--temperatures", nargs="+", metavar="T", help="temperatures (K, or quoted with their unit)")
    lists.add_argument("--pressures", nargs="+", metavar="P", help="pressures (Pa, or quoted with their unit)")
    parser.add_argument("--csv", metavar="FILE", type=Path, help="write the composition of every state as CSV")
    parser.add_argument("--plot", metavar="FILE", type=Path, help="draw the composition against the temperatures (PNG, SVG or "
                        "PDF); two temperatures are the ends of a range")
    parser.add_argument("--replace", action="store_true", help="overwrite a file that exists")
    parser.set_defaults(act=act)


def act(chosen: argparse.Namespace) -> int:
    """Carries out the verb."""
    case = read_case(chosen.case)
    if chosen.csv is not None:
        check_writable(chosen.csv, chosen.replace)
    if chosen.plot is not None:
        _check_plot(chosen)
    if chosen.pressures is not None and case.mechanism.phase == SOLUTION:
        raise InputError("pressures for a solution", expected="--temperatures, or neither", entry="--pressures",
                         remedy="leave it out: pressure plays no part in a solution")
    target = target_of(case)
    found = _found(case, target, chosen)
    _check_ranges(case, found, chosen.temperatures is not None)
    print("\n".join(_single(case, target, found[0], chosen) if len(found) == 1 else _table(found)))
    if chosen.csv is not None:
        write_whole(chosen.csv, _csv(found).encode(), chosen.replace)
        print(f"{'file':<14}{chosen.csv}")
    if chosen.plot is not None:
        _draw(case, found, chosen)
        print(f"{'plot':<14}{chosen.plot}")
    return DONE


def _check_ranges(case: Case, found: Sequence[Equilibrium], stated: bool) -> None:
    """Says which states lie outside the thermochemical data, as `run` does; a stated one far outside is refused."""
    ends = sorted({f([e.temperature for e in found]) for f in (min, max)})
    for temperature in ends:
        far = species_outside(case.mechanism, temperature, MARGIN_ERROR)
        if far and stated:
            raise InputError(f"{temperature:g} K is more than {MARGIN_ERROR:g} K outside the thermochemical data of "
                             f"{listed(far)}", entry="--temperatures", remedy="correct it",
                             expected="a temperature nearer to the range of the data")
        left = species_outside(case.mechanism, temperature, MARGIN_WARN)
        if left:
            print(f"bothways: note: {temperature:.0f} K is outside the range of the thermochemical data of {listed(left)}; "
                  "they continue with constant heat capacity", file=sys.stderr)


def _check_plot(chosen: argparse.Namespace) -> None:
    from ..plots import check_picture

    if chosen.temperatures is None:
        raise InputError("--plot without --temperatures", expected="temperatures to draw the equilibrium against",
                         remedy="such as --temperatures 600 3000")
    spare(chosen.plot, *([chosen.csv] if chosen.csv else []))
    check_picture(chosen.plot, chosen.replace)


def _draw(case: Case, found: Sequence[Equilibrium], chosen: argparse.Namespace) -> None:
    from ..plots import save_equilibrium_course

    c = case.charge
    held: dict[str, Any] = {"volume": c.volume} if case.holds == "volume" else {"pressure": c.pressure}
    save_equilibrium_course(case.mechanism, c.amount, [state.temperature for state in found], chosen.plot, chosen.replace,
                            conserved="elements" if chosen.elements else found[0].conserved,
                            title=str(case.document.get("case", {}).get("title", "")), **held)


def _found(case: Case, target: Target, chosen: argparse.Namespace) -> list[Equilibrium]:
    single = target.full if chosen.elements else target.own
    conserved = "elements" if chosen.elements else target.own.conserved
    if chosen.temperatures is None and chosen.pressures is None:
        return [single]
    c = case.charge
    if chosen.temperatures is not None:
        held = {"volume": c.volume} if case.holds == "volume" else {"pressure": c.pressure}
        return equilibria(case.mechanism, c.amount, conserved=conserved,
                          temperature=_quantities(chosen.temperatures, "temperature"), **held)
    pressures = _quantities(chosen.pressures, "pressure")
    temperature = case.held_temperature(case.end)
    if temperature is not None:
        return equilibria(case.mechanism, c.amount, conserved=conserved, temperature=temperature, pressure=pressures)
    enthalpy = Contents(case.mechanism).enthalpy(c.amount, c.temperature)
    return equilibria(case.mechanism, c.amount, conserved=conserved, enthalpy=enthalpy, pressure=pressures,
                      own_heat_capacity=case.own_heat_capacity, reference_temperature=c.temperature)


def _quantities(words: Sequence[str], kind: str) -> list[float]:
    values = []
    for word in words:
        try:
            value = float(word)
        except ValueError:
            value = parse_quantity(word, kind)
        if not (np.isfinite(value) and value > 0):
            raise InputError(f"{kind} {word}", expected="a positive number", entry=f"--{kind}s", remedy="correct it")
        values.append(value)
    return values


def _single(case: Case, target: Target, found: Equilibrium, chosen: argparse.Namespace) -> list[str]:
    c, elements = case.charge, chosen.elements
    heat_held = case.heat if chosen.temperatures is None else "given temperature"
    held = case.holds if chosen.pressures is None else "pressure"
    heat = found.enthalpy - Contents(case.mechanism).enthalpy(c.amount, c.temperature)
    if abs(heat) < 1e-12 * found.heat_capacity * found.temperature:
        heat = 0.0  # round-off of a difference of totals
    lines = [f"{'equilibrium':<14}{case.mechanism.name}, {'elements' if elements else 'what the reactions conserve'} held; "
             f"{heat_held}, constant {held}",
             f"{'state':<14}{found.temperature:.6f} K, {_pressure(found)}{volume_text(found.volume)}",
             f"{'change of H':<14}{heat:.6g} J from the charge"]
    if target.apart and not elements:
        lines.append(f"{'held apart by':<14}{', '.join(target.apart)} (without that, --elements: "
                     f"{target.full.temperature:.6g} K)")
    lines.append(f"{'':<14}{'mole fraction':>16}{'amount / mol':>16}")
    names, x = case.mechanism.names, found.mole_fraction
    lines += [f"{names[k]:<14}{x[k]:>16.6e}{found.amount[k]:>16.6e}" for k in np.argsort(-x) if x[k] > SHOWN_ABOVE]
    return lines


def _table(found: Sequence[Equilibrium]) -> list[str]:
    """T, p and the most abundant species of several equilibria, a line a state."""
    x = np.array([e.mole_fraction for e in found])
    top = np.argsort(-x.max(axis=0))[:_COLUMNS]
    names = found[0].mechanism.names
    gas = found[0].mechanism.phase != SOLUTION
    lines = [f"{'T / K':>10}{'p / bar' if gas else '':>12}" + "".join(f"{names[k]:>12}" for k in top)]
    return lines + [f"{e.temperature:>10.2f}{format(e.pressure / 1e5, '.5g') if gas else '':>12}"
                    + "".join(f"{e.mole_fraction[k]:>12.4e}" for k in top) for e in found]


def _pressure(found: Equilibrium) -> str:
    return "" if found.mechanism.phase == SOLUTION else f"{pressure_text(found.pressure)}, "


def _csv(found: Sequence[Equilibrium]) -> str:
    text = io.StringIO()
    rows = csv.writer(text, lineterminator="\n")
    rows.writerow(["temperature/K", "pressure/Pa", "volume/m3", "enthalpy/J", *(f"x({n})" for n in found[0].mechanism.names)])
    rows.writerows([e.temperature, e.pressure, e.volume, e.enthalpy, *e.mole_fraction.tolist()] for e in found)
    return text.getvalue()
