"""An equilibrium and its functions of state."""

from dataclasses import dataclass

import numpy as np

from ..constants import GAS_CONSTANT as R
from ..contents import Contents
from ..mechanism.model import Mechanism
from ..mechanism.phase import GAS
from .closures import Held, State, Stock


@dataclass(frozen=True, repr=False, eq=False)
class Equilibrium:
    """The composition of least Gibbs energy, and the state it is in.

    amount : (N) [mol]; exactly 0 for species that the charge cannot turn into.
    mole_fraction, log_mole_fraction : (N) [-]; the logarithm is -inf for those, and finite where the fraction underflows.
    temperature [K], pressure [Pa] (NaN of a solution), volume [m3].
    conserved : (m, N) what was conserved. element_potentials : (m) [-], λ with μ_i/RT = Σ_k conserved[k, i] λ_k for every
        species present; 0 for rows that follow from the others, NaN for rows of which the charge holds nothing.
    gibbs_energy, enthalpy, internal_energy [J], entropy [J/K] : of the contents, without the vessel; of a solution see
        `Contents.gibbs`, and its internal energy is taken for its enthalpy.
    heat_capacity [J/K] : dU/dT or dH/dT of the contents along equilibrium at held volume or pressure.
    iterations : Newton's, of the composition.
    balance_residual : largest change of a conserved total, relative to the sum of the sizes of its terms.
    potential_residual : largest |μ_i/RT - Σ_k conserved[k, i] λ_k| of a species present.
    energy_residual : what is missing in energy, as a relative change of temperature; 0 where the temperature is given.
    """

    mechanism: Mechanism
    amount: np.ndarray
    mole_fraction: np.ndarray
    log_mole_fraction: np.ndarray
    temperature: float
    pressure: float
    volume: float
    conserved: np.ndarray
    element_potentials: np.ndarray
    gibbs_energy: float
    enthalpy: float
    internal_energy: float
    entropy: float
    heat_capacity: float
    iterations: int
    balance_residual: float
    potential_residual: float
    energy_residual: float
    state: State

    @property
    def helmholtz_energy(self) -> float:
        """A = G - pV [J]; NaN of a solution."""
        return self.gibbs_energy - self.pressure * self.volume

    def fraction(self, name: str) -> float:
        """The mole fraction of a species by name [-]."""
        return float(self.mole_fraction[self.mechanism.index(name)])

    def __repr__(self) -> str:
        major = [k for k in np.argsort(-self.mole_fraction)[:5] if self.mole_fraction[k] > 0]
        shown = ", ".join(f"{self.mechanism.names[k]} {self.mole_fraction[k]:.4g}" for k in major)
        return f"<Equilibrium {self.mechanism.name}: {self.temperature:.6g} K, {self.pressure:.6g} Pa; {shown}, …>"


def finish(mechanism: Mechanism, stock: Stock, held: Held, state: State, conserved: np.ndarray,
           charged: np.ndarray) -> Equilibrium:
    """The result of a state; conserved (m, N), charged (N) [mol]."""
    T = state.temperature
    log_total = _log_sum(state.log_amount)
    log_x = state.log_amount - log_total
    n = np.exp(state.log_amount) * stock.scale
    volume, pressure = _space(stock.contents, held, float(np.sum(n)) * R * T)
    g, h, _ = stock.molar(T)
    unit = stock.contents.log_activity_unit(np.exp(log_total) * stock.scale, T, volume)
    potential = g + state.log_amount + np.log(stock.scale) + unit
    by_row, potential_residual = _row_potentials(stock, conserved[:, stock.possible], state, potential)
    amount = _spread(stock, n, 0.0)
    G, H = stock.contents.gibbs(amount, T, volume), R * T * float(n @ h)
    work = pressure * volume if stock.contents.mechanism.phase == GAS else 0.0
    return Equilibrium(
        mechanism, amount, _spread(stock, np.exp(log_x), 0.0), _spread(stock, log_x, -np.inf),
        T, pressure, volume, conserved, by_row, G, H, H - work, (H - G) / T,
        R * stock.scale * state.heat_capacity, state.iterations, _balance_residual(conserved, amount, charged),
        potential_residual, state.energy_misfit, state)


def _space(contents: Contents, held: Held, total_RT: float) -> tuple[float, float]:
    """Volume [m3] and pressure [Pa] from what is held and Σn·RT [J]; the pressure of a solution is NaN."""
    if contents.mechanism.phase != GAS:
        return held.value, np.nan
    return (held.value, total_RT / held.value) if held.what == "volume" else (total_RT / held.value, held.value)


def _log_sum(log_values: np.ndarray) -> float:
    top = np.max(log_values)
    return float(top + np.log(np.sum(np.exp(log_values - top))))


def _spread(stock: Stock, values: np.ndarray, elsewhere: float) -> np.ndarray:
    whole = np.full(stock.possible.size, elsewhere)
    whole[stock.possible] = values
    return whole


def _row_potentials(stock: Stock, rows: np.ndarray, state: State, potential: np.ndarray) -> tuple[np.ndarray, float]:
    """λ of every conserved row, (m), from the potentials of the components; and the largest misfit.

    rows (m, n) : over the possible species.
    """
    carrying, basis = stock.components.independent_rows, state.point.components.basis
    found = np.linalg.solve(rows[carrying][:, basis].T.astype(float), potential[basis])
    by_row = np.where(np.any(rows != 0, axis=1), 0.0, np.nan)
    by_row[carrying] = found
    return by_row, float(np.max(np.abs(potential - found @ rows[carrying])))


def _balance_residual(conserved: np.ndarray, amount: np.ndarray, charged: np.ndarray) -> float:
    size = np.abs(conserved) @ charged
    there = size > 0
    return float(np.max(np.abs(conserved @ amount - conserved @ charged)[there] / size[there]))
