"""The step monitor of a batch: turns each accepted state into a reported one and keeps its balances.

A reported state has no negative amounts, the elements of the charge, and in an adiabatic vessel the temperature
that the conserved energy gives. What the solver's own state had is recorded as residuals.
"""

from collections.abc import Callable

import numpy as np

from .case import Case
from .constants import GAS_CONSTANT as R
from .contents import Contents
from .vessel import Equations

POTENTIALS = {("isothermal", "volume"): ("Helmholtz energy", "J"), ("isothermal", "pressure"): ("Gibbs energy", "J"),
              ("adiabatic", "volume"): ("negative entropy", "J K-1"),
              ("adiabatic", "pressure"): ("negative entropy", "J K-1")}
"""What may not rise in a closed vessel, by heat and what is held, and its units."""


class Recorder:
    """Records time, reported state, potential and residuals at every accepted step.

    told : called with (steps so far, time [s], temperature [K]) at each step, for progress.
    """

    def __init__(self, case: Case, equations: Equations, told: Callable[[int, float, float], None] | None = None) -> None:
        self.case, self.told = case, told
        self.contents = Contents(case.mechanism, equations.tables)
        self.own = case.own_heat_capacity
        charge = case.charge
        self.atoms = case.mechanism.element_matrix
        self.totals = self.atoms @ charge.amount
        self._absolute = np.abs(self.atoms) @ charge.amount
        self.energy = self.contents.energy(charge.amount, charge.temperature, case.holds)
        self._energy_scale = R * charge.temperature * float(
            charge.amount @ np.abs(self.contents.molar(charge.temperature)[2]))
        self.rows: list[tuple[float, ...]] = []
        self.amounts: list[np.ndarray] = []
        self._record(0.0, charge.amount, charge.temperature, 0.0, 0.0)

    def accepted(self, t: float, y: np.ndarray) -> None:
        """Records the state y of the plain form at time t [s]."""
        raw = y[:-1] * self.case.charge.volume if self.case.holds == "volume" else y[:-1]
        element = self._element_residual(raw)
        amount = repaired(raw, self.atoms, self.totals)
        temperature, energy = float(y[-1]), 0.0
        if self.case.heat == "adiabatic":
            energy = self._energy_residual(raw, temperature)
            temperature = self.contents.temperature_of(self.energy, amount, temperature, self.case.holds, self.own,
                                                       self.case.charge.temperature)
        self._record(t, amount, temperature, element, energy)
        if self.told:
            self.told(len(self.rows) - 1, t, temperature)

    def _element_residual(self, amount: np.ndarray) -> float:
        """Largest departure of an element from the charge, relative to what was charged of it.

        Elements that were not charged are held against all atoms.
        """
        scale = np.where(self._absolute > 0, self._absolute, np.sum(self._absolute))
        return float(np.max(np.abs(self.atoms @ amount - self.totals) / scale))

    def _energy_residual(self, amount: np.ndarray, temperature: float) -> float:
        """Departure of U or H from the start, relative to the thermal energy Σ n cp T of the charge."""
        now = self.contents.energy(amount, temperature, self.case.holds)
        return (now + self.own * (temperature - self.case.charge.temperature) - self.energy) / self._energy_scale

    def _record(self, t: float, amount: np.ndarray, T: float, element: float, energy: float) -> None:
        charge = self.case.charge
        total = float(np.sum(amount))
        volume = charge.volume if self.case.holds == "volume" else total * R * T / charge.pressure
        pressure = total * R * T / volume if self.case.holds == "volume" else charge.pressure
        potential = self._potential(amount, T, volume)
        if not self.rows:
            self._first_potential = potential
        produced = self._first_potential - potential
        if self.case.heat == "isothermal":
            produced /= charge.temperature
        self.rows.append((t, T, pressure, volume, potential, produced, element, energy))
        self.amounts.append(amount)

    def _potential(self, amount: np.ndarray, T: float, volume: float) -> float:
        if self.case.heat == "adiabatic":
            own = self.own * np.log(T / self.case.charge.temperature)
            return -self.contents.entropy(amount, T, volume) - float(own)
        if self.case.holds == "volume":
            return self.contents.helmholtz(amount, T, volume)
        return self.contents.gibbs(amount, T, volume)

    def columns(self) -> dict[str, np.ndarray]:
        """The records as the arrays of a trajectory."""
        names = ("time", "temperature", "pressure", "volume", "potential", "entropy_produced", "element_residual",
                 "energy_residual")
        table = np.array(self.rows)
        return {name: table[:, k].copy() for k, name in enumerate(names)} | {"amount": np.array(self.amounts)}

    def largest_rise(self) -> float:
        """The largest rise of the potential from one record to the next; zero if it only fell."""
        potential = np.array([row[4] for row in self.rows])
        return float(max(np.max(np.diff(potential), initial=0.0), 0.0))


def repaired(amount: np.ndarray, atoms: np.ndarray, totals: np.ndarray) -> np.ndarray:
    """Amounts (N) [mol] without negatives and with the elements' totals kept.

    Where the solver left a negative it is set to zero, and the atoms this adds are taken off all species in
    proportion: n_i → n_i (1 + Σ_e λ_e atoms_ei). The change is of the size of the negatives.
    """
    if np.min(amount) >= 0:
        return amount
    kept = np.maximum(amount, 0.0)
    matrix = (atoms * kept) @ atoms.T
    multipliers = np.linalg.lstsq(matrix, totals - atoms @ kept, rcond=1e-12)[0]
    return np.maximum(kept * (1.0 + multipliers @ atoms), 0.0)
