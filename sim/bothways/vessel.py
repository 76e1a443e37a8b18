"""The equations of a closed vessel as plain functions f and J that any ODE library can use.

Plain form: y = (c_1…c_N, T) at constant volume, [mol/m3] and [K], or (n_1…n_N, T) at constant pressure, [mol] and
[K]; y' = f(y). Bordered form: z = (c_1…c_N, C, T) or (n_1…n_N, V, T) with the total concentration C [mol/m3] or
the volume V [m3] as one more unknown and an algebraic row that ties it to the others: M z' = F(z), M the identity
but for a zero at the border (a semi-explicit differential-algebraic system of index 1). Both Jacobians are exact.
"""

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from .apart import fill
from .compiled import in_cache
from .compiling import compiled_before, side_by_side
from .constants import GAS_CONSTANT as _R
from .errors import InputError
from .integrate import DEFAULT_METHOD, Resolvent
from .kernels import equations as kernel
from .mechanism import Mechanism, Tables, build_tables, table_view
from .mechanism.phase import SOLUTION, less, shared
from .schedule import Schedule

if TYPE_CHECKING:
    from scipy.sparse import csc_array

HEAT = ("isothermal", "adiabatic", "given temperature", "jacket")
HOLDS = ("volume", "pressure")


@dataclass(frozen=True)
class Equations:
    """f and J of one mechanism in one kind of closed vessel.

    Parameters
    ----------
    mechanism : the mechanism.
    holds : "volume" or "pressure".
    heat : one of HEAT.
    pressure : [Pa], where it is held.
    heat_capacity : of the vessel itself, sharing the contents' temperature: [J/K], at constant volume per volume
        of contents [J/(m3 K)].
    transfer : UA of the jacket [W/K], at constant volume per volume of contents [W/(m3 K)].
    schedule : given temperature of the contents, or the jacket's, over time [K].

    The time argument of the functions is ignored, but where a schedule is followed; at a corner of it f and J are those
    that hold from there on. Use one object per thread.
    """

    mechanism: Mechanism
    holds: str = "volume"
    heat: str = "adiabatic"
    pressure: float = 0.0
    heat_capacity: float = 0.0
    transfer: float = 0.0
    schedule: Schedule | None = None

    def __post_init__(self) -> None:
        if self.holds not in HOLDS or self.heat not in HEAT:
            raise InputError(f"no vessel that holds '{self.holds}', '{self.heat}'",
                             expected=f"holds: {' or '.join(HOLDS)}; heat: {' or '.join(HEAT)}")
        if self.holds == "pressure" and self.mechanism.phase == SOLUTION:
            raise InputError("a solution at held pressure", expected="holds: volume",
                             remedy="its volume is constant and pressure plays no part")
        if self.holds == "pressure" and not self.pressure > 0:
            raise InputError(f"pressure {self.pressure} Pa", expected="a positive pressure where it is held")
        followed = self.heat in ("given temperature", "jacket")
        if (self.schedule is not None) != followed or (self.transfer > 0) != (self.heat == "jacket"):
            raise InputError(f"heat '{self.heat}' with transfer {self.transfer} and schedule {self.schedule}",
                             expected="a schedule for a given temperature, transfer and a schedule for a jacket")

    @cached_property
    def tables(self) -> Tables:
        """The mechanism as the kernels read it."""
        return build_tables(self.mechanism)

    @cached_property
    def vessel(self) -> np.ndarray:
        """The vessel as the kernels read it."""
        vessel = np.zeros(kernel.VESSEL_SIZE)
        vessel[kernel.HOLDS], vessel[kernel.HEAT] = HOLDS.index(self.holds), HEAT.index(self.heat)
        vessel[kernel.PRESSURE], vessel[kernel.HEAT_CAPACITY] = self.pressure, self.heat_capacity
        if self.heat == "isothermal":
            vessel[kernel.HEAT_CAPACITY] = 1.0  # without effect; species may have none
        vessel[kernel.LESS], vessel[kernel.SHARED] = less(self.mechanism, self.holds), shared(self.mechanism, self.holds)
        vessel[kernel.TRANSFER] = self.transfer
        self.follow(vessel, 0.0)
        return vessel

    def follow(self, vessel: np.ndarray, t: float) -> None:
        """Sets in a vessel array what the schedule says at t [s]."""
        if self.schedule is not None:
            vessel[kernel.RAMP], vessel[kernel.JACKET_TEMPERATURE] = self.schedule.slope(t), self.schedule.value(t)

    @cached_property
    def arguments(self) -> tuple[np.ndarray, ...]:
        """vessel, ints, floats and work, as every kernel takes them."""
        fill()
        return self.vessel, self.tables.ints, self.tables.floats, self.tables.work()

    def prepare(self, say: Callable[[str], None] = lambda text: None, method: str = DEFAULT_METHOD) -> bool:
        """Compiles (or fetches from the cache) the kernels of f and J now; says so first where it will take long.

        method : what else to compile for, where there is nothing compiled yet.
        Returns whether the machine had no compiled kernels.
        """
        first = not compiled_before()
        new = first or (self.schedule is not None and not in_cache("f_of_exchanging"))
        if new:
            say("compiling the numerical kernels, once on this machine (about a minute)")
        if first:
            side_by_side(method)
        y = np.append(np.ones(self.size - 1), 1000.0)
        self.f(0.0, y)
        self.J(0.0, y)
        return new

    @property
    def size(self) -> int:
        """Number of unknowns of the plain form, N + 1."""
        return len(self.mechanism.species) + 1

    def f(self, t: float, y: np.ndarray) -> np.ndarray:
        """dy/dt of the plain form, (N + 1); NaN where T is outside 1 to 1e5 K."""
        out = np.empty(self.size)
        self.follow(self.vessel, t)
        kernel.rates_of_change(_vector(y), *self.arguments, out)
        return out

    def J(self, t: float, y: np.ndarray) -> np.ndarray:
        """∂f/∂y of the plain form, dense, (N + 1, N + 1), [row, column]."""
        out = np.empty((self.size, self.size))
        self.follow(self.vessel, t)
        kernel.jacobian(_vector(y), *self.arguments, self._data, out)
        return out

    def by_time(self, t: float, y: np.ndarray) -> np.ndarray:
        """∂f/∂t of the plain form, (N + 1): what a jacket that grows warmer does."""
        out = np.zeros(self.size)
        if self.heat == "jacket":
            self.f(t, y)  # sets heat capacities and slope
            vessel, ints, _, work = self.arguments
            out[-1] = self.transfer * vessel[kernel.RAMP] / (_R * kernel.heat_capacity_of(_vector(y), vessel, ints, work))
        return out

    def J_sparse(self, t: float, y: np.ndarray) -> "csc_array":
        """∂f/∂y of the plain form on its own sparsity pattern."""
        from scipy.sparse import csc_array  # takes its time to load, and runs need it not

        rows, starts = self.pattern
        columns = np.repeat(np.arange(self.size), np.diff(starts))
        return csc_array((self.J(t, y)[rows, columns], rows, starts), shape=(self.size, self.size))

    def bordered_f(self, t: float, z: np.ndarray) -> np.ndarray:
        """Right-hand side F of the bordered form, (N + 2); the row before last is the algebraic residual."""
        out = np.empty(self.size + 1)
        self.follow(self.vessel, t)
        kernel.bordered_rates_of_change(_vector(z), *self.arguments, out)
        return out

    def bordered_J(self, t: float, z: np.ndarray) -> "csc_array":
        """∂F/∂z of the bordered form on its sparsity pattern, (N + 2, N + 2)."""
        from scipy.sparse import csc_array

        rows, starts = self.bordered_pattern
        return csc_array((self.bordered_values(t, z), rows, starts), shape=(self.size + 1, self.size + 1))

    def bordered_values(self, t: float, z: np.ndarray) -> np.ndarray:
        """The values of `bordered_J`, column by column as `bordered_pattern` lists them."""
        data = np.empty(self.bordered_pattern[0].size)
        self.follow(self.vessel, t)
        kernel.bordered_jacobian(_vector(z), *self.arguments, data)
        return data

    def resolvent(self, t: float, y: np.ndarray, step: float) -> Callable[[np.ndarray], np.ndarray]:
        """v -> (I - step J)⁻¹ v for J at a plain state y, by sparse factors of the bordered form; v: (N + 1)."""
        solve, n = self._resolvent.of(self.bordered_values(t, self.bordered_state(y)), step), self.size - 1
        return lambda v: np.delete(solve(np.concatenate([v[:n], [0.0], v[n:]])), n)

    @cached_property
    def _resolvent(self) -> Resolvent:
        return Resolvent(self.bordered_pattern, self.mass, 2)

    @cached_property
    def mass(self) -> np.ndarray:
        """Diagonal of M in the bordered form: ones, and a zero at the border."""
        diagonal = np.ones(self.size + 1)
        diagonal[-2] = 0.0
        return diagonal

    def bordered_state(self, y: np.ndarray) -> np.ndarray:
        """The bordered state z that belongs to a plain state y."""
        from_state = np.sum(y[:-1])
        if self.holds == "pressure":
            from_state *= _R * y[-1] / self.pressure
        return np.concatenate([y[:-1], [from_state], y[-1:]])

    @cached_property
    def _data(self) -> np.ndarray:
        return np.empty(self.bordered_pattern[0].size)

    @cached_property
    def _block(self) -> tuple[np.ndarray, np.ndarray]:
        """Column starts and rows of the species block."""
        start, rows = (table_view(self.tables, name).astype(np.int64) for name in ("block_start", "block_row"))
        return start, rows

    @cached_property
    def bordered_pattern(self) -> tuple[np.ndarray, np.ndarray]:
        """Row indices and column starts of the bordered Jacobian (compressed columns), its diagonal included."""
        kept = self.mechanism.__dict__  # the same for every vessel of a mechanism
        if "_bordered_pattern" not in kept:
            kept["_bordered_pattern"] = self._new_bordered_pattern()
        return kept["_bordered_pattern"]

    def _new_bordered_pattern(self) -> tuple[np.ndarray, np.ndarray]:
        start, rows = self._block
        n = self.size - 1
        columns = [[*rows[start[s] : start[s + 1]], n, n + 1] for s in range(n)] + [list(range(n + 2))] * 2
        return np.concatenate(columns).astype(np.int32), np.cumsum([0] + [len(c) for c in columns]).astype(np.int32)

    @cached_property
    def pattern(self) -> tuple[np.ndarray, np.ndarray]:
        """Row indices and column starts of the plain Jacobian: rows with a partner or expansion are full."""
        start, rows = self._block
        n, full = self.size - 1, self._full_rows
        columns = [sorted({*rows[start[s] : start[s + 1]].tolist(), *full, n}) for s in range(n)] + [list(range(n + 1))]
        return np.concatenate(columns).astype(np.int32), np.cumsum([0] + [len(c) for c in columns]).astype(np.int32)

    @cached_property
    def _full_rows(self) -> set[int]:
        if self.holds == "pressure":
            return {int(s) for s in table_view(self.tables, "changed_species")}
        places = table_view(self.tables, "extra_place").astype(np.int64) - len(self._block[1])
        return set(places[places >= 0].tolist())

    def reaction_rates(self, y: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Forward and reverse rates [mol/(m3 s)] of every reaction in a plain state, (R) each."""
        forward = np.empty(len(self.mechanism.reactions))
        reverse = np.empty_like(forward)
        kernel.reaction_rates(_vector(y), *self.arguments, forward, reverse)
        return forward, reverse

    def conductances(self, y: np.ndarray) -> np.ndarray:
        """What the net rate of every reaction answers to its A/RT, (R) [mol/(m3 s)], in a plain state at equilibrium.

        The one-way rate there, of a lumped step over Horiuti's σ.
        """
        out = np.empty(len(self.mechanism.reactions))
        kernel.reaction_conductances(_vector(y), *self.arguments, out, np.empty_like(out))
        return out


def _vector(y: np.ndarray) -> np.ndarray:
    """y as the kernels take it; a read-only array would make numba compile everything a second time."""
    return np.require(y, np.float64, ["C_CONTIGUOUS", "WRITEABLE"])
