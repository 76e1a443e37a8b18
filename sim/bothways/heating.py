"""The part of a case's [vessel] that says how it exchanges heat: kind, thermal inertia, given temperature, jacket."""

from dataclasses import dataclass
from itertools import pairwise
from typing import Any

from .entry import Entry
from .errors import shown
from .schedule import Schedule
from .vessel import HEAT

MOST_INERTIA = 1e6
"""Thermal inertia above this [-] is taken for a slip."""
_OWNER = {"temperature": "given temperature", "UA": "jacket", "jacket_temperature": "jacket"}
_EXAMPLE = '[["0 min", "25 °C"], ["40 min", "90 °C"]]'


@dataclass(frozen=True)
class Heating:
    """heat : one of vessel.HEAT. inertia : φ [-]. transfer : UA [W/K]. schedule : see `vessel.Equations`."""

    heat: str
    inertia: float = 1.0
    transfer: float = 0.0
    schedule: Schedule | None = None


def read_heating(vessel: Entry) -> Heating:
    """What the table [vessel] says of heat."""
    heat = vessel.text("heat", "adiabatic", choices=HEAT)
    for key, owner in _OWNER.items():
        if key in vessel.data and heat != owner:
            raise vessel.error(f"{key} is stated for a vessel that is {heat}", expected=f'it with heat = "{owner}"',
                               remedy="correct heat, or leave the key out", key=key)
    inertia = _inertia(vessel, heat)
    if heat == "given temperature":
        return Heating(heat, schedule=_schedule(vessel, "temperature"))
    if heat == "jacket":
        return Heating(heat, inertia, vessel.quantity("UA", "heat transfer", sign="positive"),
                       _schedule(vessel, "jacket_temperature"))
    return Heating(heat, inertia)


def _inertia(vessel: Entry, heat: str) -> float:
    inertia = vessel.number("thermal_inertia", 1.0, "positive")
    if not 1.0 <= inertia <= MOST_INERTIA or (inertia > 1.0 and heat not in ("adiabatic", "jacket")):
        raise vessel.error(f"{inertia:g} for a vessel that is {heat}", key="thermal_inertia", remedy="correct it",
                           expected=f"a number from 1 to {MOST_INERTIA:g} in an adiabatic vessel or a jacket, 1 in others")
    return float(inertia)


def _schedule(vessel: Entry, key: str) -> Schedule:
    """A temperature or a table of temperatures in time."""
    stated: Any = vessel.get(key, what=f"a temperature, or a table in time such as {_EXAMPLE}")
    if not isinstance(stated, (list, tuple)):
        return Schedule((0.0,), (vessel.convert(stated, "temperature", key, "positive"),))
    if not stated:
        raise vessel.error("the table is empty", expected=f"pairs of time and temperature such as {_EXAMPLE}", key=key)
    pairs = [_pair(vessel, row, f"{key}[{k}]") for k, row in enumerate(stated, 1)]
    _check_order(vessel, key, [t for t, _ in pairs])
    return Schedule(tuple(t for t, _ in pairs), tuple(T for _, T in pairs))


def _pair(vessel: Entry, row: object, place: str) -> tuple[float, float]:
    if not isinstance(row, (list, tuple)) or len(row) != 2:
        raise vessel.error(f"{shown(row)} is not a pair", expected='a time and a temperature such as ["40 min", "90 °C"]',
                           remedy="put each pair in brackets of its own", key=place)
    return (vessel.convert(row[0], "time", place, "not negative"), vessel.convert(row[1], "temperature", place, "positive"))


def _check_order(vessel: Entry, key: str, times: list[float]) -> None:
    if times[0] != 0.0:
        raise vessel.error(f"the table begins at {times[0]:g} s", expected="a first time of 0", key=key,
                           remedy="add the temperature at the start")
    for k, (before, after) in enumerate(pairwise(times), 2):
        if not after > before:
            raise vessel.error(f"{after:g} s comes after {before:g} s", expected="rising times", key=f"{key}[{k}]",
                               remedy="sort the table; a jump is stated as a short ramp")


def check_schedule(vessel: Entry, heating: Heating, end: float, to_equilibrium: bool) -> None:
    """An InputError where a table ends before the run does; one to equilibrium holds the table's last temperature."""
    schedule = heating.schedule
    if schedule is None or len(schedule.times) == 1 or to_equilibrium or schedule.end >= end:
        return
    raise vessel.error(f"the table ends at {schedule.end:g} s, before the run does at {end:g} s", key=key_of(heating),
                       expected="a table that covers the run", remedy="add its later temperatures, or correct until.time")


def key_of(heating: Heating) -> str:
    """The key that states the schedule."""
    return "temperature" if heating.heat == "given temperature" else "jacket_temperature"
