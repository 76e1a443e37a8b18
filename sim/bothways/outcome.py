"""One case as a row of plain numbers: a pure function, the same wherever it is called, for those who run many.

What a row holds is the table `VARIABLES`; what a full course holds besides, `COURSE`. Rows can be pickled and are small.
"""

from collections.abc import Callable, Collection
from typing import Any

import numpy as np

from .batch import landing
from .case import Case
from .endpoint import target_of, verdict_of_state
from .errors import BothwaysError
from .hdf5 import Variable
from .integrate import Outcome, Status, integrate
from .milestones import milestones
from .monitored import monitored
from .recorder import Recorder

_CASE, _SPECIES, _STEP = ("case",), ("case", "species"), ("step",)
DONE, GAVE_UP, FAILED = "done", "gave up", "failed"
"""What became of a case: done; the solver gave up, and the row holds the last state; it could not be run at all."""
COUNTS = ("steps", "rejected", "f_evaluations", "J_evaluations", "factorisations", "solves")

VARIABLES: tuple[Variable, ...] = (
    Variable("status", _CASE, "1", "what became of the case", text=True),
    Variable("reason", _CASE, "1", "why the case is not done; empty if it is", text=True),
    Variable("heat", _CASE, "1", "isothermal or adiabatic", text=True),
    Variable("holds", _CASE, "1", "what the vessel holds, volume or pressure", text=True),
    Variable("start_temperature", _CASE, "K", "temperature at the start"),
    Variable("start_pressure", _CASE, "Pa", "pressure at the start"),
    Variable("start_volume", _CASE, "m3", "volume at the start"),
    Variable("start_amount", _SPECIES, "mol", "amount of substance at the start"),
    Variable("steepest_rise", _CASE, "s", "time of the steepest rise of temperature, isothermal: of pressure"),
    Variable("half_conversion", _SPECIES, "s", "time at which half of the charged species is gone"),
    Variable("peak_time", _SPECIES, "s", "time of the largest amount of the intermediate"),
    Variable("peak_mole_fraction", _SPECIES, "1", "mole fraction of the intermediate at its peak"),
    Variable("end_time", _CASE, "s", "time at the end"),
    Variable("end_temperature", _CASE, "K", "temperature at the end"),
    Variable("end_pressure", _CASE, "Pa", "pressure at the end"),
    Variable("end_volume", _CASE, "m3", "volume at the end"),
    Variable("end_amount", _SPECIES, "mol", "amount of substance at the end"),
    Variable("equilibrium_temperature", _CASE, "K", "temperature at equilibrium"),
    Variable("equilibrium_pressure", _CASE, "Pa", "pressure at equilibrium"),
    Variable("equilibrium_volume", _CASE, "m3", "volume at equilibrium"),
    Variable("equilibrium_amount", _SPECIES, "mol", "amount of substance at equilibrium"),
    Variable("verdict", _CASE, "1", "the end held against equilibrium", text=True),
    Variable("largest_deviation", _CASE, "1", "largest relative deviation of a mole fraction or T from equilibrium at the end"),
    *(Variable(name, _CASE, "1", f"{name.replace('_', ' ')} of the solver") for name in COUNTS),
)
"""Every number or text of a row; NaN, or an empty text, where there is none."""
COURSE: tuple[Variable, ...] = (
    Variable("time", _STEP, "s", "time since the start"), Variable("temperature", _STEP, "K", "temperature"),
    Variable("pressure", _STEP, "Pa", "pressure"), Variable("volume", _STEP, "m3", "volume"),
    Variable("amount", ("step", "species"), "mol", "amount of substance"),
)
SECONDS = Variable("seconds", _CASE, "s", "time the solver took: the one number that differs from run to run")

Row = dict[str, Any]
"""Values by the names in VARIABLES, "seconds", and, where it is asked for, "course": a dict by the names in COURSE.

Along "species": an array (N) in the order of the case's mechanism. In a course: arrays (steps) and (steps, N).
"""


def outcome(case: Case, peaks: Collection[str] = (), course: bool = False,
            told: Callable[[int, float, float], None] | None = None) -> Row:
    """Runs a case; milestones, end, equilibrium, verdict and statistics as a row.

    peaks : species whose peaks are looked for. course : whether the row shall hold the states at all steps.
    told : called at each step, see `Recorder`.
    What goes wrong is told in the row ("status", "reason"), not raised; only Ctrl-C is. May be called from many threads.
    """
    row = empty_row(case)
    try:
        return row | _run(case, peaks, course, told)
    except BothwaysError as err:
        return row | {"status": FAILED, "reason": str(err)}
    except Exception as err:  # a case is not the end of a sweep
        return row | {"status": FAILED, "reason": f"a fault of the program: {type(err).__name__}: {err}"}


def empty_row(case: Case) -> Row:
    """A row of a case's start, and of nothing else."""
    c, size = case.charge, len(case.mechanism.names)
    nothing: Row = {v.name: "" if v.text else np.full(size, np.nan) if v.dims == _SPECIES else np.nan for v in VARIABLES}
    return nothing | {"seconds": np.nan, "heat": case.heat, "holds": case.holds, "start_temperature": c.temperature,
                      "start_pressure": c.pressure, "start_volume": c.volume, "start_amount": c.amount}


def _run(case: Case, peaks: Collection[str], course: bool, told: Callable[[int, float, float], None] | None) -> Row:
    equations = case.equations()
    recorder = Recorder(case, equations, told)
    target = target_of(case) if case.to_equilibrium else None
    done = integrate(monitored(case, equations, landing(case, target) if target else None).problem, case.method, recorder)
    if done.status is Status.INTERRUPTED:
        raise KeyboardInterrupt
    states = recorder.course()
    end = {name: values[-1] for name, values in states.items()}
    target = target or target_of(case, (end["amount"], float(end["temperature"])))
    own, last = target.own, verdict_of_state(target, end["amount"], float(end["temperature"]), float(end["volume"]))
    return {"status": GAVE_UP if done.status is Status.GAVE_UP else DONE, "reason": done.reason,
            **_milestones(case, milestones(case, equations, states, peaks)),
            **{f"end_{name}": value if name == "amount" else float(value) for name, value in end.items()},
            "equilibrium_temperature": own.temperature, "equilibrium_pressure": own.pressure,
            "equilibrium_volume": own.volume, "equilibrium_amount": own.amount, "verdict": last.kind.value,
            "largest_deviation": last.largest_deviation, **_counts(done), **({"course": states} if course else {})}


def _counts(done: Outcome) -> Row:
    return {name: float(done.counts.get(name, np.nan)) for name in (*COUNTS, "seconds")}


def _milestones(case: Case, found: dict[str, float]) -> Row:
    """The milestones as numbers and arrays (N)."""
    steepest = next((t for name, t in found.items() if name.startswith("steepest")), np.nan)
    words = {"half_conversion": "half-conversion of", "peak_time": "peak of", "peak_mole_fraction": "peak mole fraction of"}
    return {"steepest_rise": steepest, **{name: np.array([found.get(f"{word} {species}", np.nan) for species in
                                                          case.mechanism.names]) for name, word in words.items()}}
