"""What an integration is given and what it gives back; f, J and a step monitor, no chemistry."""

from collections.abc import Callable
from dataclasses import dataclass, field
from enum import Enum
from typing import Protocol

import numpy as np


@dataclass(frozen=True)
class Problem:
    """An initial value problem y' = f(t, y) with its Jacobian.

    f : (t, y) -> (n). J : (t, y) -> (n, n), dense.
    start : y at time 0. end : last time [s].
    rtol : relative tolerance [-]. atol : (n) absolute tolerances, units of y.
    stops : rising times within (0, end) that a step must land on [s].
    """

    f: Callable[[float, np.ndarray], np.ndarray]
    J: Callable[[float, np.ndarray], np.ndarray]
    start: np.ndarray
    end: float
    rtol: float
    atol: np.ndarray
    stops: tuple[float, ...] = ()


class Monitor(Protocol):
    """Told of every accepted step, in order."""

    def accepted(self, t: float, y: np.ndarray) -> None:
        """The step that ended at t [s] in state y (n)."""


class Status(Enum):
    """How an integration ended, as a sentence."""

    FINISHED = "finished"
    INTERRUPTED = "interrupted by the user"
    GAVE_UP = "the solver gave up"


@dataclass
class Outcome:
    """How an integration ended, at what time [s], why, and what it took."""

    status: Status
    time: float
    reason: str = ""
    counts: dict[str, int | float] = field(default_factory=dict)


MOST_STEPS = 1_000_000
"""An endless run is refused after so many steps."""
