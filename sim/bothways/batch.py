"""A batch run: the equations of a case integrated under the recorder's eyes, and the trajectory that results."""

import warnings
from collections.abc import Callable
from importlib.metadata import PackageNotFoundError, version
from typing import Any

import numpy as np

from .along import rates_along
from .case import MARGIN_WARN, Case, law_outside, temperatures_outside
from .endpoint import CLOSEST, Target, Verdict, target_of, verdict_of_state
from .integrate import OWN_METHODS, Outcome, Status, integrate
from .mechanism.toml_writer import to_toml
from .milestones import milestones
from .monitored import Monitored, monitored
from .recorder import POTENTIALS, Recorder
from .trajectory import Trajectory
from .vessel import Equations

TOLD_JOINS = 1e-2
"""Joins shifted by more than this in h/RT or s/R are remarked on at a run."""


class Remark(UserWarning):
    """Something a user should know of a run that did not stop it."""


def program_version() -> str:
    """The version of the installed program."""
    try:
        return version("bothways")
    except PackageNotFoundError:
        return "0 (not installed)"


def run(case: Case, told: Callable[[int, float, float], None] | None = None) -> Trajectory:
    """Runs a case to its end and returns the trajectory; see `run_and_judge`."""
    return run_and_judge(case, told)[0]


def run_and_judge(case: Case, told: Callable[[int, float, float], None] | None = None) -> tuple[Trajectory, Verdict]:
    """Runs a case to its end and returns the trajectory, and its end held against the equilibrium.

    told : called with (steps, time [s], temperature [K]) at each accepted step.
    A run that the solver gave up, or that Ctrl-C ended, returns what there is with `complete` false and `reason`
    saying why. Remarks (species outside the range of their data, joins far apart) are given as warnings.
    """
    equations = case.equations()
    _remark_joins(case)
    _remark(case, [case.charge.temperature])
    target = target_of(case)
    task, recorder = monitored(case, equations, _until(case, target)), Recorder(case, equations, told)
    outcome = integrate(task.problem, case.method, recorder)
    columns = recorder.columns()
    _remark(case, list(columns["temperature"][1:]))
    _remark_laws(case, columns)
    last = verdict_of_state(target, *(columns[name][-1] for name in ("amount", "temperature", "volume")))
    return _trajectory(case, equations, columns, task, outcome, last), last


def _until(case: Case, target: Target) -> Callable[[float, np.ndarray], bool] | None:
    """When a run to equilibrium may end: well within the distance that counts as landed."""
    if not case.to_equilibrium:
        return None

    def landed(t: float, y: np.ndarray) -> bool:
        return target.distance(y[:-1] / np.sum(y[:-1]), float(y[-1])) <= 0.3 * CLOSEST

    return landed


def _remark(case: Case, temperatures: list[float]) -> None:
    """Warns of species whose data end more than MARGIN_WARN before the temperatures met, once each way."""
    if not temperatures:
        return
    for temperature in {min(temperatures), max(temperatures)}:
        outside = temperatures_outside(case.mechanism, temperature, MARGIN_WARN)
        if outside:
            warnings.warn(f"at {temperature:.0f} K the run is outside the range of the thermochemical data of {outside}; "
                          "they continue with constant heat capacity", Remark, stacklevel=3)


def _remark_laws(case: Case, columns: dict[str, Any]) -> None:
    """Warns of a rate law whose window of temperature and pressure the run left."""
    T, p = columns["temperature"], columns["pressure"]
    problem = law_outside(case.mechanism, min(T), min(p)) or law_outside(case.mechanism, max(T), max(p))
    if problem:
        warnings.warn(f"the run left the window of a rate law, whose edge holds there: {problem}", Remark, stacklevel=3)


def _remark_joins(case: Case) -> None:
    """Warns of fits whose ranges do not meet: closed if nothing else was asked for."""
    shifts = case.mechanism.join_shifts
    worst = max(shifts, key=lambda item: max(abs(item[1].h), abs(item[1].s)), default=None)
    if worst is not None and max(abs(worst[1].h), abs(worst[1].s)) > TOLD_JOINS:
        name, shift = worst
        warnings.warn(f"the fitted ranges of {len({n for n, _ in shifts})} species do not meet and were closed, by up to "
                      f"{abs(shift.h):.2g} in h/RT and {abs(shift.s):.2g} in s/R ({name} at {shift.temperature:.0f} K)",
                      Remark, stacklevel=3)


def _trajectory(case: Case, equations: Equations, columns: dict[str, Any], task: Monitored, outcome: Outcome,
                last: Verdict) -> Trajectory:
    name, units = POTENTIALS[case.heat, case.holds]
    rise = float(max(np.max(np.diff(columns["potential"]), initial=0.0), 0.0))
    statistics = {"method": case.method, "rtol": case.rtol, "atol": case.atol, "status": outcome.status.value,
                  **outcome.counts, **(task.notes() if case.method in OWN_METHODS else {}), "largest_potential_rise": rise}
    m = case.mechanism
    return Trajectory(
        **columns, potential_name=name, potential_units=units, species=m.names, molar_mass=m.molar_mass,
        reactions=tuple(str(r.equation) for r in m.reactions), mechanism_name=m.name, mechanism_text=to_toml(m.document),
        case_text=to_toml(case.document), sources=m.sources, statistics=statistics,
        milestones=milestones(case, equations, columns), program_version=program_version(),
        complete=outcome.status is Status.FINISHED, reason=outcome.reason, extra=_extra(case, columns, last))


def _extra(case: Case, columns: dict[str, Any], last: Verdict) -> dict[str, Any]:
    """Equilibrium and verdict, and rates and affinities if they were asked for."""
    own = last.target.own
    extra = {"equilibrium_temperature": own.temperature, "equilibrium_pressure": own.pressure,
             "equilibrium_volume": own.volume, "equilibrium_amount": own.amount, "verdict": f"{last.kind.value}: {last.sentence}"}
    if case.rates:
        extra |= rates_along(case.mechanism, columns["amount"], columns["temperature"], columns["volume"])
    return extra
