"""A batch run: the equations of a case integrated under the recorder's eyes, and the trajectory that results."""

from collections.abc import Callable
from typing import Any

import numpy as np

from .along import rates_along
from .case import Case
from .endpoint import CLOSEST, Target, Verdict, target_of, verdict_of_state
from .integrate import OWN_METHODS, Outcome, Status, integrate, warm_up
from .mechanism.phase import GAS
from .mechanism.toml_writer import to_toml
from .milestones import milestones
from .monitored import Monitored, monitored
from .recorder import HEAT_COLUMNS, Recorder, potential_of
from .remarks import remark_at_end, remark_at_start
from .safety import safety_figures, times_to_maximum_rate
from .trajectory import Trajectory
from .version import program_version
from .vessel import Equations


def prepare(case: Case, say: Callable[[str], None] = lambda text: None) -> bool:
    """Compiles, or fetches from the cache, all that a run of this case uses, so that no run's time holds it.

    say : told before it takes long. Returns whether the machine had no compiled kernels.
    """
    equations = case.equations()
    new = equations.prepare(say, case.method)
    task = monitored(case, equations)
    if case.method in OWN_METHODS:
        warm_up(task.problem, case.method)
    Recorder(case, equations).columns()
    return new


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
    remark_at_start(case)
    target = target_of(case)
    task, recorder = monitored(case, equations, landing(case, target)), Recorder(case, equations, told)
    outcome = integrate(task.problem, case.method, recorder)
    columns = recorder.columns()
    remark_at_end(case, columns)
    last = verdict_of_state(target, *(columns[name][-1] for name in ("amount", "temperature", "volume")))
    return _trajectory(case, equations, columns, task, outcome, last), last


def landing(case: Case, target: Target) -> Callable[[float, np.ndarray], bool] | None:
    """When a run to equilibrium may end: well within the distance that counts as landed, and after the last given corner."""
    if not case.to_equilibrium:
        return None

    n, settled = len(case.mechanism.species), case.schedule.end if case.schedule else 0.0

    def landed(t: float, y: np.ndarray) -> bool:
        return t >= settled and target.distance(y[:n] / np.sum(y[:n]), float(y[n])) <= 0.3 * CLOSEST

    return landed


def _trajectory(case: Case, equations: Equations, columns: dict[str, Any], task: Monitored, outcome: Outcome,
                last: Verdict) -> Trajectory:
    name, units = potential_of(case)
    rise = float(max(np.max(np.diff(columns["potential"]), initial=0.0), 0.0))
    statistics = {"method": case.method, "rtol": case.rtol, "atol": case.atol, "status": outcome.status.value,
                  **outcome.counts, **(task.notes() if case.method in OWN_METHODS else {}), "largest_potential_rise": rise}
    m = case.mechanism
    found = milestones(case, equations, columns) | (times_to_maximum_rate(case) if outcome.status is Status.FINISHED else {})
    required = {name: column for name, column in columns.items() if name not in HEAT_COLUMNS}
    return Trajectory(
        **required, potential_name=name, potential_units=units, species=m.names, molar_mass=m.molar_mass,
        reactions=tuple(str(r.equation) for r in m.reactions), mechanism_name=m.name, mechanism_text=to_toml(m.document),
        case_text=to_toml(case.document), sources=m.sources, statistics=statistics,
        milestones=found, program_version=program_version(),
        complete=outcome.status in (Status.FINISHED, Status.STALLED), reason=outcome.reason,
        extra=_extra(case, equations, columns, last))


def _extra(case: Case, equations: Equations, columns: dict[str, Any], last: Verdict) -> dict[str, Any]:
    """Equilibrium, verdict and figures of safety, and rates and affinities if they were asked for."""
    own = last.target.own
    extra = {"equilibrium_temperature": own.temperature,
             "equilibrium_volume": own.volume, "equilibrium_amount": own.amount, "verdict": f"{last.kind.value}: {last.sentence}"}
    if case.mechanism.phase == GAS:
        extra["equilibrium_pressure"] = own.pressure
    extra |= safety_figures(case, last.target, equations, columns)
    extra |= {name: columns[name] for name in HEAT_COLUMNS if name in columns}
    if case.rates:
        extra |= rates_along(case.mechanism, columns["amount"], columns["temperature"], columns["volume"])
    return extra
