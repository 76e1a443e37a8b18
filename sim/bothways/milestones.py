"""What a practitioner looks for in a course: steepest rise, half-conversion, peaks of intermediates."""

from collections.abc import Collection, Mapping

import numpy as np

from .case import Case
from .course import Course, with_corners
from .mechanism.phase import GAS
from .vessel import Equations

SMALLEST_PEAK = 1e-7
"""Intermediates whose mole fraction peaks below this are left out [-]."""
FASTER = 2.0
"""A rise is steepest at an instant of its own, not at the start, if its rate grew by this factor."""


def milestones(case: Case, equations: Equations, columns: Mapping[str, np.ndarray],
               peaks: Collection[str] | None = None) -> dict[str, float]:
    """Milestones by name: times [s] and peak mole fractions [-].

    "steepest temperature rise", "steepest pressure rise" (isothermal, constant volume), "half-conversion of X" for
    each charged species that falls to half, "peak of X" (time) and "peak mole fraction of X" of intermediates.
    columns : time (nt), amount (nt, N) and temperature (nt). peaks : the species whose peaks are looked for; all if None.
    """
    if len(columns["time"]) < 3:
        return {}
    course = course_of(case, equations, columns)
    found = steepest_rise(case, course) | half_conversions(case, course)
    return found | _peaks(case, course, columns["amount"], case.mechanism.names if peaks is None else peaks)


def course_of(case: Case, equations: Equations, columns: Mapping[str, np.ndarray]) -> Course:
    """The course of a run between its steps, in the plain form of its equations."""
    times, states = columns["time"], _states(case, columns)
    if case.schedule is None:
        return Course(times, states, equations.f, equations.J, resolvent=equations.resolvent)
    times, states = with_corners(times, states, case.schedule.corners)
    return Course(times, states, equations.f, equations.J, equations.by_time, equations.resolvent)


def _states(case: Case, columns: Mapping[str, np.ndarray]) -> np.ndarray:
    part = columns["amount"] / (case.charge.volume if case.holds == "volume" else 1.0)
    return np.column_stack([part, columns["temperature"]])


def steepest_rise(case: Case, course: Course) -> dict[str, float]:
    """Where dT/dt (adiabatic) or dp/dt (isothermal, constant volume) is largest, by the zero of its derivative."""
    if case.heat in ("adiabatic", "jacket"):
        name, weights = "steepest temperature rise", np.append(np.zeros(course.states.shape[1] - 1), 1.0)
    elif case.heat == "isothermal" and case.holds == "volume" and case.mechanism.phase == GAS:
        name, weights = "steepest pressure rise", np.append(np.ones(course.states.shape[1] - 1), 0.0)
    else:
        return {}
    found = course.steepest(weights)
    return {name: found[0]} if found and found[1] > FASTER else {}


def half_conversions(case: Case, course: Course) -> dict[str, float]:
    """When each charged species that falls to half its charge has done so [s]."""
    found = {}
    for k in np.flatnonzero(course.states[0, :-1] > 0):
        t = course.first_crossing(int(k), 0.5 * course.states[0, k])
        if t is not None:
            found[f"half-conversion of {case.mechanism.names[k]}"] = t
    return found


def _peaks(case: Case, course: Course, amounts: np.ndarray, names: Collection[str]) -> dict[str, float]:
    """Species that rise from less than half their peak and fall below it again by a tenth."""
    found = {}
    for k in (case.mechanism.index(name) for name in names):
        top = int(np.argmax(amounts[:, k]))
        high = amounts[top, k]
        if high < SMALLEST_PEAK * np.sum(amounts[top]) or amounts[0, k] > 0.5 * high or amounts[-1, k] > 0.9 * high:
            continue
        t, state = course.top(k)
        found[f"peak of {case.mechanism.names[k]}"] = t
        found[f"peak mole fraction of {case.mechanism.names[k]}"] = float(state[k] / np.sum(state[:-1]))
    return found
