"""The equations of a vessel that exchanges heat, with what it takes up from outside as further unknowns.

Plain form: y = (c or n, T, Y) where the temperature is given, (c or n, T, Q, Σ) in a jacket; bordered form with the
border before T and the jacket's temperature at the end. kernels/exchange.py says what Y, Q and Σ are.
"""

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from .kernels import exchange as kernel
from .schedule import Schedule
from .vessel import Equations

if TYPE_CHECKING:
    from scipy.sparse import csc_array

FURTHER = {"given temperature": 1, "jacket": 2}
"""Unknowns behind T in the plain form, by the vessel's heat."""


@dataclass(frozen=True)
class ExchangingEquations:
    """f and J of equations that follow a schedule, extended; functions of (t, y) as those of `Equations`."""

    equations: Equations

    @property
    def _jacket(self) -> bool:
        return self.equations.heat == "jacket"

    @property
    def bordered_size(self) -> int:
        """Number of unknowns of the bordered form."""
        return self.equations.size + (4 if self._jacket else 2)

    @cached_property
    def places(self) -> np.ndarray:
        """Where the unknowns of the plain form stand in the bordered one."""
        n = self.equations.size - 1
        return np.array([*range(n), *range(n + 1, n + 2 + FURTHER[self.equations.heat])])

    @cached_property
    def mass(self) -> np.ndarray:
        """Ones, and a zero at the border."""
        return np.append(self.equations.mass, np.ones(self.bordered_size - self.equations.size - 1))

    def bordered_state(self, t: float, y: np.ndarray) -> np.ndarray:
        """The bordered state that belongs to a plain one at t [s]."""
        n = self.equations.size
        end = [self._schedule.value(t)] if self._jacket else []
        return np.concatenate([self.equations.bordered_state(y[:n]), y[n:], end])

    def f(self, t: float, y: np.ndarray) -> np.ndarray:
        """dy/dt of the plain form."""
        return self.bordered_f(t, self.bordered_state(t, y))[self.places]

    def J(self, t: float, y: np.ndarray) -> np.ndarray:
        """∂f/∂y of the plain form, dense: the border is eliminated."""
        B, border = self.bordered_J(t, self.bordered_state(t, y)).toarray(), self.equations.size - 1
        column, row = B[self.places, border], B[border, self.places]
        return B[np.ix_(self.places, self.places)] - np.outer(column, row / B[border, border])

    def bordered_f(self, t: float, z: np.ndarray) -> np.ndarray:
        """Right-hand side of the bordered form."""
        self.equations.follow(self.equations.vessel, t)
        out = np.empty(self.bordered_size)
        kernel.exchanging_rates_of_change(z.astype(float), *self.equations.arguments, out)
        return out

    def bordered_J(self, t: float, z: np.ndarray) -> "csc_array":
        """Its Jacobian on its sparsity pattern."""
        from scipy.sparse import csc_array  # takes its time to load, and runs of the own methods need it not

        self.equations.follow(self.equations.vessel, t)
        rows, starts = self.pattern
        data, base = np.empty(rows.size), np.empty(self.equations.bordered_pattern[0].size)
        kernel.exchanging_jacobian(z.astype(float), *self.equations.arguments, base, data)
        return csc_array((data, rows, starts), shape=(self.bordered_size, self.bordered_size))

    @cached_property
    def pattern(self) -> tuple[np.ndarray, np.ndarray]:
        """Row indices and column starts of the bordered Jacobian."""
        rows, starts = self.equations.bordered_pattern
        columns = [list(part) for part in np.split(rows, starts[1:-1])]
        n = self.equations.size - 1
        if self._jacket:
            columns[n + 1] += [n + 2, n + 3]
            columns += [[n + 2], [n + 3], [n + 1, n + 2, n + 3, n + 4]]
        else:
            columns = [column if k == n else [*column, n + 2] for k, column in enumerate(columns)] + [[n + 2]]
        return np.concatenate(columns).astype(np.int32), np.cumsum([0] + [len(c) for c in columns]).astype(np.int32)

    def enter(self, vessel: np.ndarray, t: float, z: np.ndarray) -> None:
        """Brings a vessel array and the bordered state at t [s] to the schedule as it goes on from there."""
        self.equations.follow(vessel, t)
        z[-1 if self._jacket else self.equations.size] = self._schedule.value(t)

    @property
    def _schedule(self) -> Schedule:
        assert self.equations.schedule is not None
        return self.equations.schedule
