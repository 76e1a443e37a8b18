"""A case: what is charged, into which vessel, until when. Read from a TOML file or a plain dict, checked whole."""

import math
import os
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import numpy as np

from .charge import Charge, read_charge
from .contents import Contents
from .entry import REQUIRED, Entry
from .errors import InputError, hint
from .heating import Heating, check_schedule, key_of, read_heating
from .integrate import DEFAULT_METHOD
from .kernels.equations import HIGHEST_TEMPERATURE
from .mechanism import Mechanism, bundled_cases, read_mechanism
from .mechanism.equation import Equation
from .mechanism.files import mechanism_path, read_toml
from .mechanism.model import copy_document
from .mechanism.phase import SOLUTION
from .rates import Law
from .schedule import Schedule
from .solver_keys import read_solver
from .vessel import HOLDS, Equations

MARGIN_WARN, MARGIN_ERROR = 10.0, 500.0
"""Temperatures so far outside a fit's range [K] are remarked on, or refused."""
RUNAWAYS = "time_to_maximum_rate_from"
FOREVER = 1e30
"""The last time [s] of a run to equilibrium that states none."""


@dataclass(frozen=True)
class Case:
    """One batch, SI: volume [m3] and pressure [Pa] at the start, times [s].

    own_heat_capacity : [J/K] of the vessel, from the thermal inertia of adiabatic calorimetry, and of what is inert.
    inert_heat_capacity : [J/K] of a solvent that is no species, or anything else that shares the temperature.
    atol : mole fraction below which accuracy is not asked [-].
    rates : whether rates and affinities of every reaction go to the file.
    to_equilibrium : whether the run goes on until it has landed at equilibrium, at the latest until `end`.
    runaway_from : temperatures [K] from which the adiabatic time to maximum rate is asked for.
    most_steps : steps after which a run is given up, 0: the solver's own limit. longest : the same in seconds of computing.
    transfer : UA of a jacket [W/K]. schedule : the given temperature of the contents, or the jacket's [K].
    """

    mechanism: Mechanism
    holds: str
    heat: str
    charge: Charge
    end: float
    rtol: float = 1e-6
    atol: float = 1e-12
    method: str = DEFAULT_METHOD
    thermal_inertia: float = 1.0
    output: Path | None = None
    also_at: tuple[float, ...] = ()
    rates: bool = False
    to_equilibrium: bool = False
    inert_heat_capacity: float = 0.0
    transfer: float = 0.0
    schedule: Schedule | None = None
    runaway_from: tuple[float, ...] = ()
    most_steps: int = 0
    longest: float = math.inf
    document: Mapping[str, Any] = field(default_factory=dict, repr=False)
    file: object = field(default=None, repr=False, compare=False)

    def held_temperature(self, t: float) -> float | None:
        """The temperature [K] that the contents are brought to, or drawn to, at t [s]; None of an adiabatic vessel."""
        if self.heat == "isothermal":
            return self.charge.temperature
        return None if self.schedule is None else self.schedule.value(t)

    @property
    def own_heat_capacity(self) -> float:
        """Heat capacity of the vessel itself [J/K], (φ - 1) times that of the contents at the start, and of what is inert."""
        inert = self.inert_heat_capacity
        if self.thermal_inertia == 1.0:
            return inert
        c = self.charge
        contents = inert + Contents(self.mechanism).heat_capacity(c.amount, c.temperature, self.holds)
        return inert + (self.thermal_inertia - 1.0) * contents

    def equations(self) -> Equations:
        """f and J of this case's vessel."""
        unit = self.charge.volume if self.holds == "volume" else 1.0
        return Equations(self.mechanism, self.holds, self.heat, self.charge.pressure, self.own_heat_capacity / unit,
                         self.transfer / unit, self.schedule)


def read_case(name: str | Path) -> Case:
    """The case in a file, or a bundled one by its name.

    Raises InputError: no such file or name (with the nearest), and every fault in case or mechanism.
    """
    bundled = bundled_cases()
    if str(name) in bundled:
        return build_case(read_toml(bundled[str(name)]), bundled[str(name)])
    path = Path(name)
    if not os.path.exists(path) and path.suffix != ".toml" and "/" not in str(name):
        known = [*bundled, *(p.name for p in Path().glob("*.toml"))]
        raise InputError(f"no bundled case and no file '{name}'{hint(name, known)}", expected="a case",
                         remedy="'bothways mechanisms' lists the bundled cases")
    return build_case(read_toml(path), path)


def build_case(document: Mapping[str, Any], file: object = None, mechanism: Mechanism | None = None) -> Case:
    """The case that a document states, with the keys of a case file.

    mechanism : used instead of the one the key case.mechanism names, which may then be left out.
    """
    top = Entry(document, "", file)
    if "case" not in top.data and "species" in top.data:
        raise top.error("this is a mechanism", expected="a case", remedy="name it under [case] in a case file")
    top.expect("case", "vessel", "start", "until", "solver", "output")
    mechanism = _mechanism(top, mechanism)
    holds, heating, volume, inert = _vessel(top, mechanism.phase)
    start = top.table("start")
    charge = read_charge(start, mechanism, holds, volume, _given_start(heating))
    _check_temperature(start, mechanism, charge.temperature)
    _check_laws(start, mechanism, charge)
    end, to_equilibrium = _end(top)
    _check_heating(top.table("vessel", {}), mechanism, heating, charge.temperature)
    check_schedule(top.table("vessel", {}), heating, end, to_equilibrium)
    rtol, atol, method, most_steps, longest = read_solver(top)
    case = Case(mechanism, holds, heating.heat, charge, end, rtol, atol, method, heating.inertia, *_output(top, file, end),
                to_equilibrium, inert, heating.transfer, heating.schedule, _runaways(top.table("output", {}), mechanism),
                most_steps, longest, document=copy_document(document), file=file)
    _check_heat_capacity(top, case)
    return case


def _vessel(top: Entry, phase: str) -> tuple[str, Heating, float | None, float]:
    """What is held, how heat is exchanged, volume [m3] if stated, and inert heat capacity [J/K]."""
    vessel = top.table("vessel", {})
    holds, heating = vessel.text("holds", "volume", choices=HOLDS), read_heating(vessel)
    volume = vessel.quantity("volume", "volume", None, "positive")
    inert = _solution_keys(vessel, holds) if phase == SOLUTION else 0.0
    vessel.done()
    return holds, heating, volume, inert


def _given_start(heating: Heating) -> float | None:
    """The temperature at the start [K] where [vessel] gives it."""
    return heating.schedule.value(0.0) if heating.heat == "given temperature" and heating.schedule else None


def _check_heating(vessel: Entry, mechanism: Mechanism, heating: Heating, start: float) -> None:
    """A given temperature begins where the charge is, and stays where the data reach, as a jacket's does."""
    if heating.schedule is None:
        return
    key, values = key_of(heating), heating.schedule.values
    if heating.heat == "given temperature" and abs(values[0] - start) > 1e-9 * start:
        raise vessel.error(f"it begins at {values[0]:g} K, and start.temperature is {start:g} K", key=key,
                           expected="the same", remedy="leave out start.temperature, or correct either")
    for T in values:
        _check_temperature(vessel, mechanism, T, key)


def _solution_keys(vessel: Entry, holds: str) -> float:
    """The heat capacity [J/K] of what is inert in a solution, whose vessel holds its volume."""
    if holds != "volume":
        raise vessel.error("a solution at held pressure", expected='holds = "volume"', key="holds",
                           remedy="leave it out: a solution's volume is constant and pressure plays no part")
    return vessel.quantity("inert_heat_capacity", "heat capacity", 0.0, "not negative")


def _check_heat_capacity(top: Entry, case: Case) -> None:
    """A solution whose temperature is free must have a positive heat capacity (a species alone may have a negative one)."""
    if case.mechanism.phase != SOLUTION or case.heat in ("isothermal", "given temperature"):
        return
    c = case.charge
    total = Contents(case.mechanism).heat_capacity(c.amount, c.temperature, case.holds) + case.own_heat_capacity
    if not total > 0:
        raise top.error(f"the heat capacity of the charge is {total:.4g} J/K", expected="a positive one", key="vessel",
                        remedy="state inert_heat_capacity, the solvent's, or charge the solvent as a species")


def _mechanism(top: Entry, given: Mechanism | None) -> Mechanism:
    head = top.table("case", {}) if given else top.table("case")
    head.text("title", "")
    name = head.text("mechanism", "") if given else head.text("mechanism")
    head.done()
    if given:
        return given
    folder = Path(str(top.file)).parent if top.file else Path()
    try:
        return read_mechanism(mechanism_path(name, folder))
    except InputError as err:
        if err.file is None:
            raise head.error(err.problem, expected=err.expected, remedy=err.remedy, key="mechanism") from None
        raise


def _end(top: Entry) -> tuple[float, bool]:
    """The last time [s], and whether the run may stop before, once at equilibrium."""
    until = top.table("until")
    to_equilibrium = until.flag("equilibrium")
    end = until.quantity("time", "time", FOREVER if to_equilibrium else REQUIRED, sign="positive")
    until.done()
    return end, to_equilibrium


def _output(top: Entry, file: object, end: float) -> tuple[Path | None, tuple[float, ...], bool]:
    output = top.table("output", {})
    name = output.text("file", None)
    times, rates = _times(output, end), output.flag("rates")
    output.known.add(RUNAWAYS)
    output.done()
    if not name:
        return None, times, rates
    bundled = file in bundled_cases().values()
    folder = Path(str(file)).parent if file and not bundled else Path()
    return folder / name, times, rates


def _runaways(output: Entry, mechanism: Mechanism) -> tuple[float, ...]:
    """The temperatures [K] from which the adiabatic time to maximum rate is asked for."""
    found = []
    for k, stated in enumerate(output.items(RUNAWAYS, (), '["60 °C", "80 °C"]'), 1):
        place = f"{RUNAWAYS}[{k}]"
        found.append(output.convert(stated, "temperature", place, "positive"))
        _check_temperature(output, mechanism, found[-1], place)
    return tuple(dict.fromkeys(found))


def _times(output: Entry, end: float) -> tuple[float, ...]:
    """The times [s] of also_at, rising."""
    stated = output.items("also_at", (), '["1 ms", "2 ms"]')
    times = [output.convert(t, "time", f"also_at[{k}]", "positive") for k, t in enumerate(stated, 1)]
    for k, t in enumerate(times, 1):
        if t > end:
            raise output.error(f"{t:g} s is after the end", expected=f"a time up to until.time, {end:g} s",
                               remedy="correct either", key=f"also_at[{k}]")
    return tuple(sorted(set(times)))


def _check_temperature(start: Entry, mechanism: Mechanism, temperature: float, key: str = "temperature") -> None:
    lowest = Equations(mechanism).tables.lowest_temperature
    if not lowest <= temperature < HIGHEST_TEMPERATURE:
        expected = f"{lowest:g} to {HIGHEST_TEMPERATURE:g} K for this mechanism"
        if lowest > HIGHEST_TEMPERATURE:
            expected = "potentials nearer to each other: no temperature is possible with this mechanism"
        raise start.error(f"{temperature:g} K", expected=expected, key=key,
                          remedy="beyond, rates and equilibrium constants leave the range of the arithmetic")
    outside = listed(species_outside(mechanism, temperature, MARGIN_ERROR))
    if outside:
        raise start.error(f"{temperature:g} K is more than {MARGIN_ERROR:g} K outside the thermochemical data "
                          f"of {outside}", expected="a temperature nearer to the range of the data", key=key,
                          remedy="correct it, or use a mechanism whose data reach there")


def _check_laws(start: Entry, mechanism: Mechanism, charge: Charge) -> None:
    problem = law_outside(mechanism, charge.temperature, charge.pressure)
    if problem:
        raise start.error(problem, expected="a start where the law holds",
                          remedy="correct it, or state clamp = true in the law, which keeps the edge's value")


def law_outside(mechanism: Mechanism, temperature: float, pressure: float) -> str:
    """The first rate law that says nothing at T [K] and p [Pa], and why, as text; empty if all hold."""
    for equation, law in _bounded_laws(mechanism):
        problem = law.outside(temperature, pressure)
        if problem:
            return f"'{equation}': {problem}"
    return ""


def _bounded_laws(mechanism: Mechanism) -> list[tuple[Equation, Law]]:
    """The rate laws that do not hold everywhere, found once."""
    kept = mechanism.__dict__
    if "_bounded_laws" not in kept:
        kept["_bounded_laws"] = [(r.equation, term.law) for r in mechanism.reactions for term in r.terms
                                 if type(term.law).outside is not Law.outside]
    return kept["_bounded_laws"]


def species_outside(mechanism: Mechanism, temperature: float, margin: float) -> list[str]:
    """The species whose data end more than `margin` [K] before a temperature [K]."""
    return [s.name for s in mechanism.species
            if not s.fit_range[0] - margin <= temperature <= s.fit_range[1] + margin]


def listed(names: list[str]) -> str:
    """Some names as text, the first six of many."""
    return ", ".join(names[:6]) + (f" and {len(names) - 6} more" if len(names) > 6 else "")


def charged(case: Case) -> dict[str, float]:
    """Mole fractions of what is charged."""
    x = case.charge.amount / np.sum(case.charge.amount)
    return {name: float(x[k]) for k, name in enumerate(case.mechanism.names) if x[k] > 0}
