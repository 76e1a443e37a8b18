"""What an integration is given and what it gives back; f, J and a step monitor, no chemistry."""

import math
from collections.abc import Callable
from dataclasses import dataclass, field
from enum import Enum
from typing import Protocol

import numpy as np


@dataclass(frozen=True)
class ByReaction:
    """The same system as dn/dt = ν w: n the first unknowns, T the last, which follows from them. For integrate/graded.py.

    rates, slopes : addresses of `callback`s over (n | T), with outputs (w (R) | T) and (entries | d (R) | q (R) | a (N) |
        b (N)): ∂w/∂n = entries + d aᵀ + q bᵀ, b = ∂T/∂n. They return 0 where there is no T.
    context : (int64) handed to both, and to the judge. keep : what the addresses in it belong to.
    nu : (N, R), zero columns for reactions that cannot proceed. reaction, species : (entries) uint32; entries with
        species N are zero.
    """

    rates: int
    slopes: int
    context: np.ndarray
    nu: np.ndarray
    reaction: np.ndarray
    species: np.ndarray
    keep: tuple = ()


@dataclass(frozen=True)
class CompiledSystem:
    """The same problem behind addresses, for the compiled methods; z are its unknowns, y among them.

    f, J, judge : addresses of `callback`s over (z, f(z)), (z, values of ∂f/∂z by `pattern`) and
        (z old | z new | error estimate, notes (4)). The judge may mend the new state, and returns STAND if the step may
        stand, REFUSED if not, CROSSED if the right-hand side goes on in another way from a share notes[1] of the step
        on (1: from its end on): the method must land there, tell `enter`, and start anew. Address 0: none.
    context : (int64) handed to each of them. keep : what the addresses in it belong to.
    pattern : row indices and column starts (compressed columns) of ∂f/∂z, its diagonal included.
    mass : (nz) 1 for unknowns with a derivative, 0 for those tied by a linear row of ∂f/∂z.
    tail : so many unknowns at the end have full rows and columns.
    places : (n) where the unknowns y stand in z. start : (nz) z at time 0.
    by_reaction : makes the form by reactions, if there is one; asked only where a method cannot go on without.
    """

    f: int
    J: int
    judge: int
    context: np.ndarray
    pattern: tuple[np.ndarray, np.ndarray]
    mass: np.ndarray
    tail: int
    places: np.ndarray
    start: np.ndarray
    keep: tuple = ()
    enter: Callable[[float, np.ndarray], None] | None = None
    by_reaction: Callable[[], ByReaction] | None = None


@dataclass(frozen=True)
class Problem:
    """An initial value problem y' = f(t, y) with its Jacobian.

    f : (t, y) -> (n). J : (t, y) -> (n, n), dense. compiled : the same for the compiled methods.
    start : y at time 0. end : last time [s].
    rtol : relative tolerance [-]. atol : (n) absolute tolerances, units of y.
    stops : rising times within (0, end) that a step must land on [s].
    corners : rising times at which f goes on in another way: f(t) there is already that, and methods start anew [s].
    until : (t, y) -> whether the integration may end here, asked after accepted steps, of some solvers only now and then.
    most_steps : so many steps, of the own methods refused ones included; 0: as many as the method allows.
    longest : how long it may take by the clock [s]; looked at between steps, of the own methods every few.
    """

    f: Callable[[float, np.ndarray], np.ndarray]
    J: Callable[[float, np.ndarray], np.ndarray]
    start: np.ndarray
    end: float
    rtol: float
    atol: np.ndarray
    stops: tuple[float, ...] = ()
    compiled: CompiledSystem | None = None
    until: Callable[[float, np.ndarray], bool] | None = None
    corners: tuple[float, ...] = ()
    most_steps: int = 0
    longest: float = math.inf

    @property
    def landings(self) -> tuple[tuple[float, bool], ...]:
        """Every time to land on, the end included, and whether it is a corner to go on from."""
        turns = {t for t in self.corners if 0 < t < self.end}
        return tuple((t, t in turns) for t in sorted({*self.stops, *turns, self.end}))


class Monitor(Protocol):
    """Told of every accepted step, in order."""

    def accepted(self, t: float, y: np.ndarray) -> None:
        """The step that ended at t [s] in state y (n)."""


class Status(Enum):
    """How an integration ended, as a sentence."""

    FINISHED = "finished"
    INTERRUPTED = "interrupted by the user"
    GAVE_UP = "the solver gave up"
    STALLED = "what was left to do is too slow for double precision to resolve"


@dataclass
class Outcome:
    """How an integration ended, at what time [s], why, and what it took."""

    status: Status
    time: float
    reason: str = ""
    counts: dict[str, int | float] = field(default_factory=dict)


MOST_STEPS = 1_000_000
"""An endless run is refused after so many steps."""
NOT_ENOUGH = "{steps} steps were not enough; raise most_steps, loosen rtol or shorten the time"
OUT_OF_TIME = "it has taken the {longest:g} s of computing that it may; raise longest, loosen rtol or shorten the time"
STEP_TOO_SMALL = ("the step became too small to move on; the tolerances may be tighter than double precision can meet: "
                  "loosen rtol, or raise atol")
"""What is said, and what to do, where an integration gives up."""
MOST_STEPS_IF_ASKED = 20_000
"""The same for a problem that asks whether to end: what has not come by then will not."""
MOST_REFUSED = 150
"""So many steps refused by the judge mean that round-off drives them: what is left is too slow to be told from it."""
