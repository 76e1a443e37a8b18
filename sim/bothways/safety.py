"""Figures of process safety: adiabatic temperature rise, fastest rises, time to maximum rate.

Definitions as in the field: the adiabatic temperature rise is what the contents would gain if nothing left them (here up to
their equilibrium, and without the vessel's own heat capacity); the adiabatic time to maximum rate, TMR_ad, is how long they
take from a temperature, fresh and adiabatic, until they heat up fastest; thermal inertia φ slows both rise and rate
(D.I. Townsend, J.C. Tou, Thermochim. Acta 37 (1980) 1, doi:10.1016/0040-6031(80)85001-5; F. Stoessel, Thermal Safety of
Chemical Processes, 2008, ch. 2 and 5; both from memory). They hold for the model, not for the plant: see report.CAUTION.
"""

from collections.abc import Mapping
from dataclasses import replace

import numpy as np

from .case import FOREVER, Case
from .constants import GAS_CONSTANT as R
from .course import Course
from .endpoint import CLOSEST, Target, equilibrium_of, target_of
from .integrate import OWN_METHODS, Status, integrate
from .mechanism.phase import GAS
from .milestones import course_of
from .monitored import monitored
from .recorder import Recorder
from .vessel import Equations

TMR = "time to maximum rate from {:g} K"
"""Milestone of a temperature; {:g} is the temperature."""


def safety_figures(case: Case, target: Target, equations: Equations, columns: Mapping[str, np.ndarray]) -> dict[str, float]:
    """The figures of an adiabatic or jacketed run, by the names of `trajectory.VARIABLES`; empty for others.

    The cooling failure temperature is where the contents would end if their jacket stopped to take heat away at the moment
    when they hold most: the equilibrium of that energy, in the jacketed vessel as it is.
    """
    if case.heat not in ("adiabatic", "jacket") or len(columns["time"]) < 3:
        return {}
    figures = {"adiabatic_temperature_rise": _adiabatic(case, target, 0.0, 1.0) - case.charge.temperature}
    if case.heat == "jacket":
        figures["cooling_failure_temperature"] = _adiabatic(case, target, float(np.max(columns["heat_received"])))
    course = course_of(case, equations, columns)
    for name, found in (("temperature", fastest_heating(course)), ("pressure", _fastest_pressure(case, course))):
        if found is not None:
            figures[f"largest_{name}_rate"], figures[f"largest_{name}_rate_time"] = found[1], found[0]
    return figures


def _adiabatic(case: Case, target: Target, received: float, inertia: float | None = None) -> float:
    """T [K] of the equilibrium that the charge with some heat [J] reaches by itself."""
    own = case if inertia is None else replace(case, thermal_inertia=inertia)
    alone = replace(own, heat="adiabatic", schedule=None, transfer=0.0)
    return equilibrium_of(alone, target.restricted, "reactions", received).temperature


def fastest_heating(course: Course) -> tuple[float, float] | None:
    """Time [s] and rate [K/s] of the fastest rise of temperature; None if it never rises."""
    unit = _temperature(course)
    return course.fastest(course.states[:, -1], lambda y: unit)


def _temperature(course: Course) -> np.ndarray:
    """Weights of a state that give its temperature."""
    return np.append(np.zeros(course.states.shape[1] - 1), 1.0)


def _fastest_pressure(case: Case, course: Course) -> tuple[float, float] | None:
    """Time [s] and rate [Pa/s] of the fastest rise of pressure of a gas at constant volume, p = C R T."""
    if case.mechanism.phase != GAS or case.holds != "volume":
        return None
    C, T = course.states[:, :-1].sum(axis=1), course.states[:, -1]
    return course.fastest(R * C * T, lambda y: R * np.append(np.full(y.size - 1, y[-1]), np.sum(y[:-1])))


def times_to_maximum_rate(case: Case) -> dict[str, float]:
    """Milestones: TMR_ad [s] from each temperature that the case asks for, at φ = 1; nothing where it never heats up."""
    found = {TMR.format(T): time_to_maximum_rate(case, T) for T in case.runaway_from}
    return {name: t for name, t in found.items() if t is not None}


def time_to_maximum_rate(case: Case, temperature: float, inertia: float = 1.0) -> float | None:
    """TMR_ad [s] of the charge from a temperature [K]; 0 where it heats up fastest at once, None where it never does.

    inertia : φ of the vessel around it. The amounts are the case's, and so is the volume, or the pressure that is held.
    """
    alone = _from(case, temperature, inertia)
    equations = alone.equations()
    recorder = Recorder(alone, equations)
    target, n = target_of(alone), len(case.mechanism.species)
    task = monitored(alone, equations, lambda t, y: target.distance(y[:n] / np.sum(y[:n]), float(y[n])) <= CLOSEST)
    outcome = integrate(task.problem, alone.method if alone.method in OWN_METHODS else "Rosenbrock", recorder)
    if outcome.status is Status.INTERRUPTED:
        raise KeyboardInterrupt
    columns = recorder.course()
    if len(columns["time"]) < 3:
        return None
    course = course_of(alone, equations, columns)
    found = course.steepest(_temperature(course))
    if found is None and outcome.status is Status.GAVE_UP and columns["temperature"][-1] > columns["temperature"][0]:
        return float(columns["time"][-1])  # so sudden that a float64 of the time cannot tell its parts apart
    return found[0] if found else None


def _from(case: Case, temperature: float, inertia: float) -> Case:
    c = case.charge
    ratio = temperature / c.temperature if case.mechanism.phase == GAS else 1.0
    pressure, volume = (ratio, 1.0) if case.holds == "volume" else (1.0, ratio)
    charge = replace(c, temperature=temperature, pressure=c.pressure * pressure, volume=c.volume * volume)
    return replace(case, charge=charge, heat="adiabatic", schedule=None, transfer=0.0, thermal_inertia=inertia, end=FOREVER,
                   to_equilibrium=True, also_at=())
