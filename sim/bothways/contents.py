"""Energy, entropy and potentials of a vessel's contents, from species potentials alone."""

from typing import Any

import numpy as np

from .balance import log_equilibrium_constants, reverse_constants
from .constants import GAS_CONSTANT as R
from .kernels.molar import molar_functions, molar_functions_at
from .mechanism import Mechanism, Tables, build_tables
from .mechanism.phase import FRACTION, PER_LITRE, less, shared, standard_concentration

Array = Any
"""A float or an array of floats."""


class Contents:
    """Functions of state of an ideal-gas mixture or ideal solution over a mechanism's species.

    amounts n are (N) [mol], temperatures [K], volumes [m3].
    """

    def __init__(self, mechanism: Mechanism, tables: Tables | None = None) -> None:
        self.mechanism = mechanism
        self.tables = tables or build_tables(mechanism)

    def molar(self, temperature: float) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """g°/RT, h°/RT and cp°/R of every species [-], (N) each, at the mechanism's standard pressure."""
        out = np.empty((4, len(self.mechanism.species)))
        molar_functions(temperature, 0, self.tables.ints, self.tables.floats, *out)
        return out[0], out[1], out[2]

    def equilibrium_constants(self, temperature: float) -> np.ndarray:
        """K° of every reaction of the mechanism [-], (reactions), at its standard pressure; inf where ln K passes 709."""
        with np.errstate(over="ignore"):
            return np.exp(self.log_equilibrium_constants(temperature))

    def log_equilibrium_constants(self, temperature: float) -> np.ndarray:
        """ln K° of every reaction of the mechanism [-], (reactions), at its standard pressure."""
        return log_equilibrium_constants(self.mechanism.stoichiometry, self.molar(temperature)[0])

    def reverse_constants(self, temperature: float, partner: float = 1.0, total: float = np.nan) -> np.ndarray:
        """Derived reverse rate constants (m3, mol, s), (reactions), the forward ones at a partner's [mol/m3].

        total : concentration of the solution [mol/m3], which counts where activities are mole fractions.
        Those of lumped steps belong to their reverse orders; NaN where terms of several kinds stand in one reaction.
        """
        m = self.mechanism
        forward = np.array([r.forward_constant(temperature, partner) for r in m.reactions])
        return reverse_constants(forward, m.stoichiometry, self.molar(temperature)[0], self.standard(temperature, total),
                                 np.array([r.sigma for r in m.reactions]))

    def standard(self, temperature: float, total: float = np.nan) -> float:
        """The concentration at activity one (and g_i) [mol/m3]: p°/RT, 1 mol/L or the total concentration."""
        if self.mechanism.standard_state == FRACTION:
            return total
        size, power = standard_concentration(self.mechanism)
        return float(size * temperature**-power)

    def less(self, holds: str) -> float:
        """See `phase.less`."""
        return less(self.mechanism, holds)

    def shared(self, holds: str) -> bool:
        """See `phase.shared`."""
        return shared(self.mechanism, holds)

    def log_activity_unit(self, total: Array, temperature: Array, volume: Array) -> Array:
        """ln(a_i/n_i) [ln 1/mol]: of RT/(V p°), 1/(V c°) or 1/Σn; total amount [mol], temperature [K], volume [m3]."""
        if self.mechanism.standard_state == FRACTION:
            return -np.log(total)
        size, power = standard_concentration(self.mechanism)
        return power * np.log(temperature) - np.log(volume * size)

    def enthalpy(self, n: np.ndarray, temperature: float) -> float:
        """H [J]."""
        return float(R * temperature * (n @ self.molar(temperature)[1]))

    def internal_energy(self, n: np.ndarray, temperature: float) -> float:
        """U [J]; of a solution U = H."""
        return self.energy(n, temperature, "volume")

    def heat_capacity(self, n: np.ndarray, temperature: float, holds: str) -> float:
        """C_V or C_p [J/K]."""
        return float(R * (n @ (self.molar(temperature)[2] - self.less(holds))))

    def energy(self, n: np.ndarray, temperature: float, holds: str) -> float:
        """What an adiabatic vessel conserves: U where the volume is held, H where the pressure is and of solutions [J]."""
        return float(R * temperature * (n @ (self.molar(temperature)[1] - self.less(holds))))

    def chemical_potentials(self, n: np.ndarray, temperature: float, volume: float) -> np.ndarray:
        """μ_i/RT [-], (N); -inf for an absent species."""
        with np.errstate(divide="ignore"):
            return self.molar(temperature)[0] + np.log(n) + self.log_activity_unit(np.sum(n), temperature, volume)

    def gibbs(self, n: np.ndarray, temperature: float, volume: float) -> float:
        """G [J]: Σ n_i μ_i, and at a standard state of 1 mol/L Σ n_i (μ_i - RT), which holds the solvent's share.

        In a dilute solution the solvent's potential falls by RT Σ x_i of the solutes (Raoult), so its n μ changes by
        -RT Σ n_i: dG = Σ μ_i dn_i at constant volume, as it must (e.g. K. Denbigh, The Principles of Chemical
        Equilibrium, 4th ed., 1981, ch. 9).
        """
        return float(self.gibbs_energies(n[None, :], np.array([temperature]), np.array([volume]))[0])

    def helmholtz(self, n: np.ndarray, temperature: float, volume: float) -> float:
        """A = G - pV [J] of a gas."""
        return self.gibbs(n, temperature, volume) - float(np.sum(n)) * R * temperature

    def entropy(self, n: np.ndarray, temperature: float, volume: float) -> float:
        """S = (H - G)/T [J/K]."""
        return (self.enthalpy(n, temperature) - self.gibbs(n, temperature, volume)) / temperature

    def molar_at(self, temperatures: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """g°/RT, h°/RT and cp°/R at many temperatures (nt), (nt, N) each."""
        out = np.empty((4, len(temperatures), len(self.mechanism.species)))
        molar_functions_at(np.ascontiguousarray(temperatures), self.tables.ints, self.tables.floats, *out)
        return out[0], out[1], out[2]

    def energies(self, n: np.ndarray, temperatures: np.ndarray, holds: str) -> np.ndarray:
        """`energy` of many states: n (nt, N), temperatures (nt) [J]."""
        return R * temperatures * np.einsum("ki,ki->k", n, self.molar_at(temperatures)[1] - self.less(holds))

    def gibbs_energies(self, n: np.ndarray, temperatures: np.ndarray, volumes: np.ndarray) -> np.ndarray:
        """G of many states [J]."""
        return R * temperatures * self._gibbs_over_RT(n, temperatures, volumes, self.molar_at(temperatures)[0])

    def entropies(self, n: np.ndarray, temperatures: np.ndarray, volumes: np.ndarray) -> np.ndarray:
        """S = (H - G)/T of many states [J/K]."""
        g, h, _ = self.molar_at(temperatures)
        return R * (np.einsum("ki,ki->k", n, h) - self._gibbs_over_RT(n, temperatures, volumes, g))

    def _gibbs_over_RT(self, n: np.ndarray, T: np.ndarray, volumes: np.ndarray, g: np.ndarray) -> np.ndarray:
        total = n.sum(axis=1)
        log_n = np.log(np.where(n > 0, n, 1.0))  # n ln n is zero for an absent species
        log_a = log_n + self.log_activity_unit(total, T, volumes)[:, None]
        solvent = total if self.mechanism.standard_state == PER_LITRE else 0.0
        return np.einsum("ki,ki->k", n, g) + np.sum(n * log_a, axis=1) - solvent

    def temperatures_of(self, energy: np.ndarray, n: np.ndarray, near: np.ndarray, holds: str,
                        own_heat_capacity: float = 0.0, reference: float = 0.0) -> np.ndarray:
        """The temperatures [K] at which contents n (nt, N) and vessel hold energies (nt) [J]: Newton from near guesses.

        own_heat_capacity [J/K] is the vessel's, counted from the reference temperature [K].
        """
        T, less, before = near.astype(float), self.less(holds), np.inf
        for _ in range(50):
            _, h, cp = self.molar_at(T)
            held = R * T * np.einsum("ki,ki->k", n, h - less) + own_heat_capacity * (T - reference)
            step = (energy - held) / (R * np.einsum("ki,ki->k", n, cp - less) + own_heat_capacity)
            T = np.clip(T + step, 0.5 * T, 2.0 * T)
            size = float(np.max(np.abs(step) / T))
            if size <= 4e-16 or (size >= before and size < 1e-13):  # round-off moves it about from here on
                break
            before = size
        return T
