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
from .exchange import FURTHER
from .integrate import OWN_METHODS
from .mechanism import table_view
from .mechanism.phase import GAS
from .vessel import Equations

POTENTIALS = {("isothermal", "volume"): ("Helmholtz energy", "J"), ("isothermal", "pressure"): ("Gibbs energy", "J"),
              ("adiabatic", "volume"): ("negative entropy", "J K-1"),
              ("adiabatic", "pressure"): ("negative entropy", "J K-1"),
              ("jacket", "volume"): ("internal energy less entropy times jacket temperature", "J"),
              ("jacket", "pressure"): ("enthalpy less entropy times jacket temperature", "J")}
"""What may not rise in a closed vessel, by heat and what is held, and its units."""
PRODUCED = {"given temperature": ("entropy produced by reaction, negative", "J K-1"),
            "jacket": ("entropy produced, negative", "J K-1")}
"""The same where the temperature, or the jacket's, changes in time."""
HEAT_COLUMNS = ("heat_received", "jacket_temperature")
"""Columns that are there only where heat comes from outside."""


def potential_of(case: Case) -> tuple[str, str]:
    """Name and units of what may not rise in this case; of a solution as at held pressure (see `Contents.gibbs`)."""
    if case.schedule is None or (case.heat == "jacket" and case.schedule.constant):
        return POTENTIALS[case.heat, case.holds if case.mechanism.phase == GAS else "pressure"]
    return PRODUCED[case.heat]


class Recorder:
    """Keeps time and state of the start and of every accepted step; `columns` reports them.

    told : called with (steps so far, time [s], temperature [K]) at each step, for progress.
    """

    def __init__(self, case: Case, equations: Equations, told: Callable[[int, float, float], None] | None = None) -> None:
        self.case, self.told = case, told
        self.contents = Contents(case.mechanism, equations.tables)
        charge = case.charge
        part = charge.concentration if case.holds == "volume" else charge.amount
        further = np.zeros(FURTHER.get(case.heat, 0))
        self.times, self.states = [0.0], [np.concatenate([part, [charge.temperature], further])]
        self._T = part.size

    def accepted(self, t: float, y: np.ndarray) -> None:
        """Keeps the state y of the plain form at time t [s]."""
        self.times.append(t)
        self.states.append(y)
        if self.told:
            self.told(len(self.times) - 1, t, float(y[self._T]))

    def course(self) -> dict[str, np.ndarray]:
        """Time, temperature, pressure, volume and amounts of every state, without what is worked out of them."""
        (raw, raw_T, further), charge, case = self._parts(), self.case.charge, self.case
        amount = repaired(raw, case.mechanism.element_matrix, charge.amount)
        amount[0] = charge.amount
        T = self._temperatures(amount, raw_T, further)
        held = np.full(len(T), charge.volume if case.holds == "volume" else charge.pressure)
        other = amount.sum(axis=1) * R * T / held if case.mechanism.phase == GAS else np.full(len(T), np.nan)
        volume, pressure = (held, other) if case.holds == "volume" else (other, held)
        pressure[0] = charge.pressure
        return {"time": np.array(self.times), "temperature": T, "pressure": pressure, "volume": volume, "amount": amount}

    def _parts(self) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Amounts [mol], temperatures and what stands behind them [per vessel], as the solver left them."""
        states, unit = np.array(self.states), self.case.charge.volume if self.case.holds == "volume" else 1.0
        return states[:, : self._T] * unit, states[:, self._T], states[:, self._T + 1 :] * unit

    def columns(self) -> dict[str, np.ndarray]:
        """The records as the arrays of a trajectory; those of heat received only where a schedule is followed."""
        course, (raw, raw_T, further) = self.course(), self._parts()
        residuals = {"element_residual": self._element_residual(raw),
                     "energy_residual": self._energy_residual(raw, raw_T, course["temperature"], further)}
        return course | residuals | self._heat(course, further) | self._second_law(course, further)

    def _temperatures(self, amount: np.ndarray, near: np.ndarray, further: np.ndarray) -> np.ndarray:
        if self.case.heat in ("isothermal", "given temperature"):
            return self._held()
        if self.case.heat == "adiabatic" and self.case.method in OWN_METHODS:  # their judge has solved for it
            return near.copy()
        case, charge = self.case, self.case.charge
        if case.mechanism.joins != "closed":
            return near  # at a join left as published the energy jumps and T does not
        received = further[:, 0] if case.heat == "jacket" else np.zeros(len(near))
        energy = self.contents.energy(charge.amount, charge.temperature, case.holds) + received
        T = self.contents.temperatures_of(energy, amount, near, case.holds, case.own_heat_capacity, charge.temperature)
        T[0] = charge.temperature
        return T

    def _held(self) -> np.ndarray:
        """The given temperature, or the jacket's, at every time."""
        return np.array([self.case.held_temperature(t) for t in self.times], dtype=float)

    def _energies(self, amount: np.ndarray, T: np.ndarray) -> np.ndarray:
        """Of contents and vessel [J]."""
        own = self.case.own_heat_capacity * (T - self.case.charge.temperature)
        return self.contents.energies(amount, T, self.case.holds) + own

    def _element_residual(self, amount: np.ndarray) -> np.ndarray:
        """Largest departure of an element from the charge, relative to what was charged of it.

        Elements that were not charged are held against all atoms.
        """
        atoms, charged = self.case.mechanism.element_matrix, self.case.charge.amount
        size = np.abs(atoms) @ charged
        scale = np.where(size > 0, size, np.sum(size))
        return np.max(np.abs((amount - charged) @ atoms.T) / scale, axis=1)

    def _energy_residual(self, amount: np.ndarray, raw_T: np.ndarray, T: np.ndarray, further: np.ndarray) -> np.ndarray:
        """Departure of U or H from the start and the heat received, relative to the thermal energy Σ n cp T of the charge.

        0 if isothermal; where the temperature is given, what the solver's differs from it.
        """
        case, charge = self.case, self.case.charge
        if case.heat == "isothermal":
            return np.zeros(len(raw_T))
        scale = charge.temperature * self.contents.heat_capacity(charge.amount, charge.temperature, "pressure")
        if case.heat == "given temperature":
            return raw_T / T - 1.0
        energy = self._energies(amount, raw_T)
        received = further[:, 0] if case.heat == "jacket" else 0.0
        return (energy - energy[0] - received) / scale

    def _heat(self, columns: dict[str, np.ndarray], further: np.ndarray) -> dict[str, np.ndarray]:
        """Heat received since the start [J], and the jacket's temperature."""
        if self.case.heat == "jacket":
            return {"heat_received": further[:, 0], "jacket_temperature": self._held()}
        if self.case.heat == "given temperature":
            energy = self._energies(columns["amount"], columns["temperature"])
            return {"heat_received": energy - energy[0]}
        return {}

    def _second_law(self, columns: dict[str, np.ndarray], further: np.ndarray) -> dict[str, np.ndarray]:
        """What may not rise, and the entropy produced since the start [J/K]."""
        case, state = self.case, tuple(columns[name] for name in ("amount", "temperature", "volume"))
        if case.heat == "given temperature":
            produced = -R * (self._reduced(*state) + further[:, 0])
            return {"potential": -produced, "entropy_produced": produced}
        if case.heat == "isothermal":
            potential = self._free_energy(*state)
            return {"potential": potential, "entropy_produced": (potential[0] - potential) / case.charge.temperature}
        own = case.own_heat_capacity * np.log(columns["temperature"] / case.charge.temperature)
        entropy = self.contents.entropies(*state) + own
        if case.heat == "adiabatic":
            return {"potential": -entropy, "entropy_produced": entropy - entropy[0]}
        produced = entropy - entropy[0] - further[:, 1]
        if case.schedule is None or not case.schedule.constant:
            return {"potential": -produced, "entropy_produced": produced}
        potential = self._energies(*state[:2]) - case.schedule.value(0.0) * entropy
        return {"potential": potential, "entropy_produced": produced}

    def _free_energy(self, amount: np.ndarray, T: np.ndarray, volume: np.ndarray) -> np.ndarray:
        """A or G [J]."""
        gibbs = self.contents.gibbs_energies(amount, T, volume)
        return gibbs - amount.sum(axis=1) * R * T if self.contents.less(self.case.holds) else gibbs

    def _reduced(self, amount: np.ndarray, T: np.ndarray, volume: np.ndarray) -> np.ndarray:
        """Change of A/RT or G/RT since the start [mol], less the element terms that the kernels take off."""
        reduced = self._free_energy(amount, T, volume) / (R * T)
        reduced -= amount @ table_view(self.contents.tables, "reduction")[::2] / T
        return reduced - reduced[0]


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
