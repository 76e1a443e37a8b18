"""The verdict: the end of a run held against an equilibrium that shares no kinetics with it.

Two equilibria are worked out: the one the elements allow, and the one the mechanism's own stoichiometry allows from this
charge. The run must land on the second; where that differs from the first, what keeps them apart is named.
"""

from dataclasses import dataclass, field, replace
from enum import Enum
from functools import cached_property
from typing import Any

import numpy as np

from .along import affinities
from .case import Case
from .constants import GAS_CONSTANT as R
from .contents import Contents
from .equilibrium import Equilibrium, combination_text, conserves_more, equilibrium, extra_conserved
from .errors import InputError
from .mechanism import Mechanism
from .mechanism.phase import less
from .reach import reachable
from .relaxation import further_rows, relaxation_times
from .trajectory import Trajectory
from .vessel import Equations

TRACE = 1e-12
"""Species below this mole fraction at equilibrium are not compared [-]."""
CLOSEST = 1e-6
"""Relative deviation from equilibrium that counts as landed, or ten times rtol where that is larger [-]."""
RESOLVED = 1e15
"""Where the slowest relaxation takes this many times the fastest, round-off of the fast drowns the slow [-]."""
RELAXED = 1e-9
"""Where every |A|/RT is below this the reactions have nothing left to do [-]."""


class Kind(Enum):
    """The five verdicts."""

    LANDED = "at equilibrium"
    NOT_YET = "not yet at equilibrium"
    APART = "held apart from full equilibrium"
    CANNOT_START = "cannot start"
    WRONG = "wrong"


@dataclass(frozen=True)
class Target:
    """Where a case must end, before it is run.

    own : the equilibrium of the reactions that can proceed from the charge; full : that of the elements.
    running : (reactions) mask of those that can proceed. restricted : the mechanism with these alone.
    """

    case: Case
    own: Equilibrium
    full: Equilibrium
    running: np.ndarray
    restricted: Mechanism

    def deviations(self, mole_fraction: np.ndarray) -> np.ndarray:
        """x/x_eq - 1 of each species (N), 0 of those that are traces in both."""
        return _relative(mole_fraction, self.own.mole_fraction)

    def distance(self, mole_fraction: np.ndarray, temperature: float) -> float:
        """The largest deviation of a species or of T [-]."""
        return max(float(np.max(np.abs(self.deviations(mole_fraction)))), abs(temperature / self.own.temperature - 1.0))

    @cached_property
    def apart(self) -> tuple[str, ...]:
        """What keeps own and full equilibrium apart, as chemistry; empty where they agree."""
        gap = max(np.max(np.abs(_relative(self.own.mole_fraction, self.full.mole_fraction))),
                  abs(self.own.temperature / self.full.temperature - 1.0))
        if gap < CLOSEST:
            return ()
        extra = [row for row in extra_conserved(self.restricted) if self._matters(row)]
        return tuple(combination_text(self.restricted, row) for row in extra)

    def _matters(self, row: np.ndarray) -> bool:
        """Whether the full equilibrium would change this combination."""
        charge, size = self.case.charge.amount, np.abs(row) @ (self.case.charge.amount + self.full.amount)
        return bool(abs(row @ (self.full.amount - charge)) > 1e-9 * size)

    def relaxation_time(self, mole_fraction: np.ndarray) -> float:
        """The slowest relaxation time at the own equilibrium [s]; 0 where nothing can change, inf if unresolved."""
        times = self.relaxation_times(mole_fraction)
        return float(times[0]) if times.size else 0.0

    def relaxation_times(self, mole_fraction: np.ndarray) -> np.ndarray:
        """All relaxation times at the own equilibrium [s], the slowest first.

        Species that are traces both there and in the state (N) follow the others.
        """
        case, own = self.case, self.own
        equations = Equations(self.restricted, "volume", "isothermal")
        rates = equations.conductances(np.append(own.amount / own.volume, own.temperature)) * own.volume
        present, nu = own.amount > 0, self.restricted.stoichiometry
        rank = int(np.sum(present)) - int(np.linalg.matrix_rank(own.conserved[:, present].astype(float)))
        contents = Contents(self.restricted)
        rows = further_rows(contents, own.amount, own.temperature, case.holds, case.heat, case.own_heat_capacity)
        capacity = contents.heat_capacity(own.amount, own.temperature, case.holds) + case.own_heat_capacity
        return relaxation_times(nu, rates, own.amount, rank, rows,
                                (own.mole_fraction < TRACE) & (mole_fraction < TRACE),
                                case.transfer / capacity if case.transfer else 0.0)


def _relative(x: np.ndarray, reference: np.ndarray) -> np.ndarray:
    seen = (reference > TRACE) | (x > TRACE)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(seen, x / reference - 1.0, 0.0)


def target_of(case: Case, guess: tuple[np.ndarray, float] | None = None) -> Target:
    """Where a case must end.

    guess : amounts (N) [mol] and temperature [K] to start the search from, such as where a run did end. The equilibrium is
        unique and its search ends by criteria of its own, so that this saves time and moves round-off alone.
    """
    start = _started(case.mechanism, case.charge.amount > 0)
    try:
        own = equilibrium_of(case, start.restricted, "reactions", guess=guess)
        full = equilibrium_of(case, start.restricted, "elements", guess=guess) if start.conserves_more else own
        return Target(case, own, full, start.running, start.restricted)
    except InputError as err:
        raise InputError(f"no equilibrium: {err.problem}", expected=err.expected, file=case.file, entry="start",
                         remedy=err.remedy or "correct the charge or its temperature") from None


@dataclass(frozen=True)
class _Started:
    """What can proceed from what is there: mask (reactions), the mechanism with these alone, and whether they conserve
    more than the elements among the species that the elements there can form."""

    running: np.ndarray
    restricted: Mechanism
    conserves_more: bool


def _started(mechanism: Mechanism, there: np.ndarray) -> _Started:
    """What can proceed from the species (N, mask) there, worked out once: it takes longer than a small run."""
    known = mechanism.__dict__.setdefault("_started", {})
    key = there.tobytes()
    if key not in known:
        _, running = reachable(mechanism, there.astype(float))
        kept = tuple(r for r, goes in zip(mechanism.reactions, running, strict=True) if goes)
        restricted = mechanism if running.all() else replace(mechanism, reactions=kept)
        known[key] = _Started(running, restricted, conserves_more(restricted, there))
    return known[key]


def equilibrium_of(case: Case, restricted: Mechanism, conserved: str, received: float = 0.0,
                   guess: tuple[np.ndarray, float] | None = None) -> Equilibrium:
    """Where a case ends whose mechanism is `restricted` to what can proceed; received : heat that came from outside [J].

    conserved : "reactions" or "elements", what is held. guess : see `target_of`.
    """
    c = case.charge
    held: dict[str, Any] = {"volume": c.volume} if case.holds == "volume" else {"pressure": c.pressure}
    temperature = case.held_temperature(case.end)
    if temperature is not None:
        return equilibrium(restricted, c.amount, temperature=temperature, conserved=conserved, guess=guess, **held)
    energy = Contents(case.mechanism).energy(c.amount, c.temperature, case.holds) + received
    held["internal_energy" if less(case.mechanism, case.holds) else "enthalpy"] = energy
    return equilibrium(restricted, c.amount, conserved=conserved, own_heat_capacity=case.own_heat_capacity,
                       reference_temperature=c.temperature, guess=guess, **held)


@dataclass(frozen=True)
class Verdict:
    """How the end of a run compares.

    mole_fraction : (N) at the end. deviation : (N) x/x_eq - 1 of species above TRACE there or at equilibrium, 0 of others.
    temperature_deviation : T/T_eq - 1. affinity : (reactions) A/RT at the end, NaN where a species is absent.
    apart : what keeps it from the elements' equilibrium.
    """

    kind: Kind
    target: Target = field(repr=False)
    mole_fraction: np.ndarray = field(repr=False)
    deviation: np.ndarray = field(repr=False)
    temperature_deviation: float
    affinity: np.ndarray = field(repr=False)
    apart: tuple[str, ...]

    @cached_property
    def frozen(self) -> tuple[str, ...]:
        """Equations of the reactions that cannot proceed from this charge."""
        reactions = self.target.case.mechanism.reactions
        return tuple(str(r.equation) for r, goes in zip(reactions, self.target.running, strict=True) if not goes)

    @cached_property
    def relaxation_time(self) -> float:
        """The slowest relaxation time at the equilibrium [s]."""
        return self.target.relaxation_time(self.mole_fraction)

    @property
    def furthest(self) -> int:
        """The place of the species furthest off: by amount among those far off, else by relative deviation."""
        size = np.abs(self.deviation)
        far = size > 1.0
        gap = np.abs(self.mole_fraction - self.target.own.mole_fraction)
        return int(np.argmax(np.where(far, gap, 0.0) if far.any() else size))

    @property
    def largest_deviation(self) -> float:
        """Of a species or of T, absolute [-]."""
        return max(float(np.max(np.abs(self.deviation))), abs(self.temperature_deviation))

    @property
    def sentence(self) -> str:
        """The verdict in a sentence."""
        return _SENTENCES[self.kind](self)

    def table(self) -> list[dict[str, float | str]]:
        """Plain records, one a species: mole fraction at the end and at equilibrium, deviation; the most abundant first."""
        own, end = self.target.own.mole_fraction, self.mole_fraction
        return [{"species": self.target.case.mechanism.names[k], "run": float(end[k]), "equilibrium": float(own[k]),
                 "deviation": float(self.deviation[k])}
                for k in np.argsort(-np.maximum(own, end)) if max(own[k], end[k]) > TRACE]

    def least_relaxed(self, count: int = 5) -> list[tuple[str, float]]:
        """The reactions with the largest |A|/RT at the end, with it."""
        size = np.where(np.isfinite(self.affinity), np.abs(self.affinity), -1.0)
        reactions = self.target.case.mechanism.reactions
        return [(str(reactions[j].equation), float(self.affinity[j])) for j in np.argsort(-size)[:count] if size[j] >= 0]


def verdict(case: Case, trajectory: Trajectory) -> Verdict:
    """The verdict over the end of a run of this case."""
    return verdict_of_state(target_of(case), trajectory.amount[-1], float(trajectory.temperature[-1]),
                            float(trajectory.volume[-1]))


def verdict_of_state(target: Target, amount: np.ndarray, temperature: float, volume: float) -> Verdict:
    """The verdict over a state: amount (N) [mol], temperature [K], volume [m3]."""
    case = target.case
    fraction = amount / np.sum(amount)
    deviation = target.deviations(fraction)
    affinity = affinities(case.mechanism, amount[None], np.array([temperature]), np.array([volume]))[0] / (R * temperature)
    kind = _kind(target, amount, temperature, affinity)
    return Verdict(kind, target, fraction, deviation, temperature / target.own.temperature - 1.0, affinity, target.apart)


def tolerance(case: Case) -> float:
    """The distance from equilibrium that counts as landed [-]."""
    return max(CLOSEST, 10.0 * case.rtol)


def _kind(target: Target, amount: np.ndarray, temperature: float, affinity: np.ndarray) -> Kind:
    outside = target.case.schedule is not None
    if not target.running.any() and (target.apart or not outside):
        return Kind.CANNOT_START if target.apart else Kind.LANDED
    distance = target.distance(amount / np.sum(amount), temperature)
    if distance <= tolerance(target.case):
        return Kind.APART if target.apart else Kind.LANDED
    at_work = np.abs(affinity[target.running])
    if outside:
        at_work = np.append(at_work, abs(temperature / target.own.temperature - 1.0))
    if not np.any(np.isnan(at_work)) and np.max(at_work) < min(RELAXED, 1e-3 * distance):
        return Kind.WRONG
    return Kind.NOT_YET


def _landed(v: Verdict) -> str:
    return f"each species within {v.largest_deviation:.1e} of the equilibrium worked out apart from the kinetics"


def _not_yet(v: Verdict) -> str:
    worst = v.least_relaxed(1)
    where = f"; least relaxed is {worst[0][0]} with A/RT = {worst[0][1]:.3g}" if worst else ""
    times = v.target.relaxation_times(v.mole_fraction)
    time = float(times[0]) if times.size else 0.0
    slowest = f"takes {time:.3g} s" if np.isfinite(time) else "is slower than double precision resolves"
    if times.size and np.isfinite(time) and time > RESOLVED * times[-1]:
        slowest += f", {time / times[-1]:.0e} times the fastest: more than double precision is sure to resolve"
    return f"{_off(v)}{where}; near equilibrium the slowest relaxation {slowest}"


def _off(v: Verdict) -> str:
    k = v.furthest
    x, x_eq = v.mole_fraction[k], v.target.own.mole_fraction[k]
    return f"{v.target.case.mechanism.names[k]} is at mole fraction {x:.4g} instead of {x_eq:.4g}"


def _apart(v: Verdict) -> str:
    return f"{_landed(v)}; the elements alone would allow another, which is kept away by " + _why(v)


def _why(v: Verdict) -> str:
    kept = ", ".join(v.apart[:4]) + (f" and {len(v.apart) - 4} more" if len(v.apart) > 4 else "")
    return f"what no reaction changes: {kept}" + _never(len(v.frozen))


def _never(frozen: int) -> str:
    return f"; {frozen} reaction{'' if frozen == 1 else 's'} never start{'s' if frozen == 1 else ''}" if frozen else ""


_SENTENCES = {
    Kind.LANDED: _landed, Kind.NOT_YET: _not_yet, Kind.APART: _apart,
    Kind.CANNOT_START: lambda v: "no reaction of the mechanism can proceed from this charge: of each, both sides lack a "
                                 "species, or every partner is missing. Charge a little of one, or add the step that makes it",
    Kind.WRONG: lambda v: f"every reaction is relaxed, yet {_off(v)}: this is a fault of the program; please report it "
                          "with the file",
}
