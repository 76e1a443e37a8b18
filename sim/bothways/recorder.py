"""The step monitor of a batch: keeps every accepted state, and works out what is reported of them, all at once.

A reported state has no negative amounts, the elements of the charge, and in an adiabatic vessel the temperature
that the conserved energy gives. The compiled methods' judge has seen to that at each step; for any other solver it
is done here. What the solver's own state had is reported as residuals.
"""

from collections.abc import Callable

import numpy as np

from .case import Case
from .constants import GAS_CONSTANT as R
from .contents import Contents
from .mechanism.phase import GAS
from .vessel import Equations

POTENTIALS = {("isothermal", "volume"): ("Helmholtz energy", "J"), ("isothermal", "pressure"): ("Gibbs energy", "J"),
              ("adiabatic", "volume"): ("negative entropy", "J K-1"),
              ("adiabatic", "pressure"): ("negative entropy", "J K-1")}
"""What may not rise in a closed vessel, by heat and what is held, and its units."""


def potential_of(case: Case) -> tuple[str, str]:
    """Name and units of what may not rise in this case; of a solution as at held pressure (see `Contents.gibbs`)."""
    return POTENTIALS[case.heat, case.holds if case.mechanism.phase == GAS else "pressure"]


class Recorder:
    """Keeps time and state of the start and of every accepted step; `columns` reports them.

    told : called with (steps so far, time [s], temperature [K]) at each step, for progress.
    """

    def __init__(self, case: Case, equations: Equations, told: Callable[[int, float, float], None] | None = None) -> None:
        self.case, self.told = case, told
        self.contents = Contents(case.mechanism, equations.tables)
        charge = case.charge
        part = charge.concentration if case.holds == "volume" else charge.amount
        self.times, self.states = [0.0], [np.append(part, charge.temperature)]

    def accepted(self, t: float, y: np.ndarray) -> None:
        """Keeps the state y of the plain form at time t [s]."""
        self.times.append(t)
        self.states.append(y)
        if self.told:
            self.told(len(self.times) - 1, t, float(y[-1]))

    def course(self) -> dict[str, np.ndarray]:
        """Time, temperature, pressure, volume and amounts of every state, without what is worked out of them."""
        states, charge, case = np.array(self.states), self.case.charge, self.case
        amount = repaired(self._raw(states), case.mechanism.element_matrix, charge.amount)
        amount[0] = charge.amount
        T = self._temperatures(amount, states[:, -1])
        held = np.full(len(T), charge.volume if case.holds == "volume" else charge.pressure)
        other = amount.sum(axis=1) * R * T / held if case.mechanism.phase == GAS else np.full(len(T), np.nan)
        volume, pressure = (held, other) if case.holds == "volume" else (other, held)
        pressure[0] = charge.pressure
        return {"time": np.array(self.times), "temperature": T, "pressure": pressure, "volume": volume, "amount": amount}

    def _raw(self, states: np.ndarray) -> np.ndarray:
        """Amounts [mol] as the solver left them."""
        return states[:, :-1] * (self.case.charge.volume if self.case.holds == "volume" else 1.0)

    def columns(self) -> dict[str, np.ndarray]:
        """The records as the arrays of a trajectory."""
        course, states, charge, case = self.course(), np.array(self.states), self.case.charge, self.case
        potential = self._potential(course["amount"], course["temperature"], course["volume"])
        produced = (potential[0] - potential) / (charge.temperature if case.heat == "isothermal" else 1.0)
        raw = self._raw(states)
        return {**course, "potential": potential, "entropy_produced": produced,
                "element_residual": self._element_residual(raw), "energy_residual": self._energy_residual(raw, states[:, -1])}

    def _temperatures(self, amount: np.ndarray, near: np.ndarray) -> np.ndarray:
        if self.case.heat == "isothermal":
            return np.full(len(near), self.case.charge.temperature)
        case, charge = self.case, self.case.charge
        energy = self.contents.energy(charge.amount, charge.temperature, case.holds)
        T = self.contents.temperatures_of(energy, amount, near, case.holds, case.own_heat_capacity, charge.temperature)
        T[0] = charge.temperature
        return T

    def _element_residual(self, amount: np.ndarray) -> np.ndarray:
        """Largest departure of an element from the charge, relative to what was charged of it.

        Elements that were not charged are held against all atoms.
        """
        atoms, charged = self.case.mechanism.element_matrix, self.case.charge.amount
        size = np.abs(atoms) @ charged
        scale = np.where(size > 0, size, np.sum(size))
        return np.max(np.abs((amount - charged) @ atoms.T) / scale, axis=1)

    def _energy_residual(self, amount: np.ndarray, T: np.ndarray) -> np.ndarray:
        """Departure of U or H from the start, relative to the thermal energy Σ n cp T of the charge; 0 if isothermal."""
        if self.case.heat == "isothermal":
            return np.zeros(len(T))
        case, charge = self.case, self.case.charge
        scale = charge.temperature * self.contents.heat_capacity(charge.amount, charge.temperature, "pressure")
        energy = self.contents.energies(amount, T, case.holds) + case.own_heat_capacity * (T - charge.temperature)
        return (energy - energy[0]) / scale

    def _potential(self, amount: np.ndarray, T: np.ndarray, volume: np.ndarray) -> np.ndarray:
        if self.case.heat == "adiabatic":
            own = self.case.own_heat_capacity * np.log(T / self.case.charge.temperature)
            return -self.contents.entropies(amount, T, volume) - own
        gibbs = self.contents.gibbs_energies(amount, T, volume)
        return gibbs - amount.sum(axis=1) * R * T if potential_of(self.case)[0] == "Helmholtz energy" else gibbs


def repaired(amount: np.ndarray, atoms: np.ndarray, charge: np.ndarray) -> np.ndarray:
    """Amounts (nt, N) [mol] without negatives and with the elements of the charge (N).

    Where the solver left a negative it is set to zero, and the atoms this adds are taken off all species in
    proportion: n_i → n_i (1 + Σ_e λ_e atoms_ei). The change is of the size of the negatives.
    """
    mended = amount.copy()
    for k in np.flatnonzero(np.any(amount < 0, axis=1)):
        kept = np.maximum(amount[k], 0.0)
        matrix = (atoms * kept) @ atoms.T
        multipliers = np.linalg.lstsq(matrix, atoms @ (charge - kept), rcond=1e-12)[0]
        mended[k] = np.maximum(kept * (1.0 + multipliers @ atoms), 0.0)
    return mended
