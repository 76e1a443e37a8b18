"""What a practitioner looks for in a course: steepest rise, half-conversion, peaks of intermediates."""

from collections.abc import Callable, Mapping

import numpy as np

from .case import Case
from .course import Course
from .vessel import Equations

SMALLEST_PEAK = 1e-7
"""Intermediates whose mole fraction peaks below this are left out [-]."""
FASTER = 2.0
"""A rise is steepest at an instant of its own, not at the start, if its rate grew by this factor."""


def milestones(case: Case, equations: Equations, columns: Mapping[str, np.ndarray]) -> dict[str, float]:
    """Milestones by name: times [s] and peak mole fractions [-].

    "steepest temperature rise", "steepest pressure rise" (isothermal, constant volume), "half-conversion of X" for
    each charged species that falls to half, "peak of X" (time) and "peak mole fraction of X".
    """
    if len(columns["time"]) < 3:
        return {}
    course = Course(columns["time"], _states(case, columns), equations.f, equations.J)
    found = _steepest_rise(case, course) | _half_conversions(case, course)
    return found | _peaks(case, course, columns["amount"])


def _states(case: Case, columns: Mapping[str, np.ndarray]) -> np.ndarray:
    part = columns["amount"] / (case.charge.volume if case.holds == "volume" else 1.0)
    return np.column_stack([part, columns["temperature"]])


def _steepest_rise(case: Case, course: Course) -> dict[str, float]:
    """Where dT/dt (adiabatic) or dp/dt (isothermal, constant volume) is largest, by the zero of its derivative."""
    if case.heat == "adiabatic":
        name, weights = "steepest temperature rise", np.append(np.zeros(course.states.shape[1] - 1), 1.0)
    elif case.holds == "volume":
        name, weights = "steepest pressure rise", np.append(np.ones(course.states.shape[1] - 1), 0.0)
    else:
        return {}
    rates = course.slopes @ weights
    k = int(np.argmax(rates))
    if not rates[k] > FASTER * max(rates[0], 0.0):
        return {}
    peak = course.peak(k, lambda t, y: float(weights @ course.curvature(t, y)))
    return {name: float(peak[0] if peak else course.times[k])}


def _half_conversions(case: Case, course: Course) -> dict[str, float]:
    found = {}
    for k, name in enumerate(case.mechanism.names):
        start = course.states[0, k]
        if start > 0:
            t = course.first_crossing(course.states[:, k], k, 0.5 * start)
            if t is not None:
                found[f"half-conversion of {name}"] = t
    return found


def _rate_of(course: Course, k: int) -> Callable[[float, np.ndarray], float]:
    return lambda t, y: float(course.f(t, y)[k])


def _peaks(case: Case, course: Course, amounts: np.ndarray) -> dict[str, float]:
    """Species that rise from less than half their peak and fall below it again by a tenth."""
    found = {}
    fractions = amounts / amounts.sum(axis=1, keepdims=True)
    for k, name in enumerate(case.mechanism.names):
        x = fractions[:, k]
        top = int(np.argmax(amounts[:, k]))
        high = amounts[top, k]
        if x[top] < SMALLEST_PEAK or amounts[0, k] > 0.5 * high or amounts[-1, k] > 0.9 * high:
            continue
        peak = course.peak(top, _rate_of(course, k))
        t, state = peak if peak else (float(course.times[top]), course.states[top])
        found[f"peak of {name}"] = t
        found[f"peak mole fraction of {name}"] = float(state[k] / np.sum(state[:-1]))
    return found
