"""Potentials of species from the equilibrium constants that reactions state.

With γ = g/RT₀, η = h/RT₀ and κ = cp/R of a species at T₀, g/RT = γ + η (T₀/T - 1) + κ φ(T), φ = 1 - T₀/T - ln(T/T₀): ln K,
ΔH and ΔCp of a reaction are linear in them. Data of species stand as they are; the rest follows from the reactions,
exactly where these are independent, else by least squares weighted with the uncertainties. Before that every cycle must close
within them, in each of the three (cycles.py). Only differences matter: what no reaction fixes is made as small as can be.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from ..constants import GAS_CONSTANT as R
from ..entry import Entry
from ..thermo import Functions
from ..thermo.constant_cp import ConstantHeatCapacity
from ..thermo.polynomial import closed
from ..thermo.unstated import Unstated
from .cycles import least_squares, null_space
from .misfits import refuse_misfits
from .model import Reaction, Species
from .stated import StatedEquilibrium

_TOLD = 1e-3
"""Changes below this part of their uncertainty are not told [-]."""


@dataclass(frozen=True)
class Resolved:
    """The species with potentials; what was changed to close cycles, as text; combinations that nothing fixes, (m, N); the
    system that was solved, if any."""

    species: tuple[Species, ...]
    notes: tuple[str, ...] = ()
    undetermined: tuple[tuple[int, ...], ...] = ()
    system: "System | None" = None


def resolve(top: Entry, species: tuple[Species, ...], reactions: Sequence[Reaction], pressure: float, joins: str,
            lenient: bool = False) -> Resolved:
    """Gives potentials to the species that state none; pressure [Pa] is the mechanism's standard one (NaN of a solution).

    lenient : adjust by least squares what does not close within the uncertainties either, instead of refusing it.
    Raises InputError: cycles that do not close, reactions whose K follows from nothing.
    """
    open_places = [i for i, s in enumerate(species) if isinstance(s.potential, Unstated)]
    system = System(species, reactions, open_places, pressure, joins)
    if not open_places and not system.stated:
        return Resolved(species)
    free = null_space(system.nu[open_places].T) if open_places else np.zeros((0, 0), dtype=np.int64)
    _check_determined(top, species, reactions, open_places, free)
    if not lenient:
        refuse_misfits(top, system)
    y = least_squares(system.design, system.right, system.spread)
    whole = np.zeros((len(free), len(species)), dtype=np.int64)
    whole[:, open_places] = free
    return Resolved(_with_potentials(system, y), _notes(system, system.design @ y - system.right),
                    tuple(map(tuple, whole.tolist())), system)


class System:
    """The linear system: rows for ln K, ΔH/RT₀ and ΔCp/R of every reaction that states an equilibrium.

    nu : (N, S) stoichiometric numbers of these. open_places : species without data (n).
    The columns of `design` (3 S, 2 n + free heat capacities) are γ, η and κ.
    """

    def __init__(self, species: Sequence[Species], reactions: Sequence[Reaction], open_places: list[int], pressure: float,
                 joins: str) -> None:
        self.species, self.open_places, self.pressure, self.joins = species, open_places, pressure, joins
        places = {s.name: i for i, s in enumerate(species)}
        self.reactions = [(number, r) for number, r in enumerate(reactions, 1) if r.equilibrium]
        self.stated: list[StatedEquilibrium] = [r.equilibrium for _, r in self.reactions if r.equilibrium]
        self.nu = np.zeros((len(species), len(self.reactions)), dtype=np.int64)
        for j, (_, reaction) in enumerate(self.reactions):
            for name, count in reaction.net.items():
                self.nu[places[name], j] = count
        self.T = np.array([s.at for s in self.stated])
        self.T0 = float(np.median(self.T)) if self.stated else 298.15

    @cached_property
    def fixed_cp(self) -> np.ndarray:
        """cp/R of the open species where it is stated, else NaN, (n)."""
        potentials = [self.species[i].potential for i in self.open_places]
        return np.array([np.nan if p.cp is None else p.cp / R for p in potentials if isinstance(p, Unstated)])

    @cached_property
    def nu_open(self) -> np.ndarray:
        """Stoichiometric numbers of the open species, (n, S)."""
        return self.nu[self.open_places]

    @cached_property
    def _known(self) -> np.ndarray:
        """Σ ν of g/RT, h/RT and cp/R at each reaction's own temperature over the species with data, (3, S)."""
        sums = np.zeros((3, len(self.stated)))
        for i, s in enumerate(self.species):
            if i in self.open_places or not np.any(self.nu[i]):
                continue
            ranges = s.potential.ranges()
            functions = Functions(closed(ranges)[0] if self.joins == "closed" else ranges, s.potential.modes())
            shift = np.log(self.pressure / s.standard_pressure) if np.isfinite(self.pressure) else 0.0
            for j in np.flatnonzero(self.nu[i]):
                cp, h, entropy = functions.cp_h_s(float(self.T[j]))
                sums[:, j] += self.nu[i, j] * np.array([h - entropy + shift, h, cp])
        return sums

    @cached_property
    def own(self) -> np.ndarray:
        """ln K, ΔH/RT₀ and ΔCp/R that are left for the open species, (3, S), at each reaction's own temperature."""
        g, h, cp = self._known
        change = np.array([self._heat_capacity(j, s) for j, s in enumerate(self.stated)])
        log_K = np.array([np.log(s.K) for s in self.stated])
        dH = np.array([s.dH / (R * self.T0) for s in self.stated])
        return np.array([log_K + g, dH - h * self.T / self.T0, change - cp])

    def _heat_capacity(self, j: int, stated: StatedEquilibrium) -> float:
        """ΔCp/R: as stated, else that of the species if all are known, else nil."""
        nu = self.nu_open[:, j]
        if stated.dCp is not None:
            return stated.dCp / R
        return 0.0 if np.any(np.isnan(self.fixed_cp[nu != 0])) else float(
            self._known[2, j] + nu @ np.nan_to_num(self.fixed_cp))

    @property
    def _phi(self) -> np.ndarray:
        return 1.0 - self.T0 / self.T - np.log(self.T / self.T0)

    @cached_property
    def at_one_temperature(self) -> np.ndarray:
        """ΔG/RT₀, ΔH/RT₀ and ΔCp/R of the open species' part at T₀, (3, S)."""
        log_K, dH, dCp = self.own
        dH0 = dH - dCp * (self.T - self.T0) / self.T0
        return np.array([-log_K - dH0 * (self.T0 / self.T - 1.0) - dCp * self._phi, dH0, dCp])

    @cached_property
    def spreads(self) -> np.ndarray:
        """Uncertainties of ln K, ΔH/RT₀ and ΔCp/R as stated, (3, S)."""
        return np.array([s.spread for s in self.stated]).reshape(-1, 3).T / np.array([[1.0], [R * self.T0], [R]])

    @cached_property
    def allowed(self) -> np.ndarray:
        """How far ΔG/RT₀, ΔH/RT₀ and ΔCp/R at T₀ may be off within the uncertainties, (3, S), round-off included."""
        K, H, Cp = self.spreads
        away = np.abs(self.T - self.T0) / self.T0
        bounds = np.array([K + H * np.abs(self.T0 / self.T - 1.0) + Cp * np.abs(self._phi), H + Cp * away, Cp])
        return bounds + 1e-12 * (1.0 + np.abs(self.at_one_temperature))

    @cached_property
    def design(self) -> np.ndarray:
        """Rows of ln K, then ΔH/RT₀, then ΔCp/R."""
        nu, zero = self.nu_open.T.astype(float), np.zeros(self.nu_open.T.shape)
        warm, phi = (self.T0 / self.T - 1.0)[:, None], self._phi[:, None]
        away = ((self.T - self.T0) / self.T0)[:, None]
        rows = np.vstack([np.hstack([-nu, -nu * warm, -nu * phi]), np.hstack([zero, nu, nu * away]), np.hstack([zero, zero, nu])])
        return rows[:, np.append(np.ones(2 * len(self.fixed_cp), dtype=bool), np.isnan(self.fixed_cp))]

    @cached_property
    def right(self) -> np.ndarray:
        """What `design` times (γ, η, κ) shall be, (3 S)."""
        fixed = self.nu_open.T @ np.nan_to_num(self.fixed_cp)
        log_K, dH, dCp = self.own
        return np.concatenate([log_K + fixed * self._phi, dH - fixed * (self.T - self.T0) / self.T0, dCp - fixed])

    @cached_property
    def spread(self) -> np.ndarray:
        """Uncertainties of the rows, (3 S)."""
        return self.spreads.ravel()


def _check_determined(top: Entry, species: Sequence[Species], reactions: Sequence[Reaction], open_places: list[int],
                      free: np.ndarray) -> None:
    """Every reaction between open species must follow from those that state an equilibrium."""
    names = [species[i].name for i in open_places]
    for number, reaction in enumerate(reactions, 1):
        nu = np.array([reaction.net.get(name, 0) for name in names], dtype=np.int64)
        loose = free[free @ nu != 0] if len(free) else free
        if len(loose):
            lacking = [name for name, c, count in zip(names, np.any(loose != 0, axis=0), nu, strict=True) if c and count]
            raise top.error(f"K follows neither from data of {' and '.join(lacking)} nor from the equilibria stated",
                            expected="potentials of all its species, or an equilibrium constant",
                            key=f"reaction {number} '{reaction.equation}'",
                            remedy="add equilibrium = { K = …, at = …, dH = … } here, or [species.….potential]")


def _with_potentials(system: System, y: np.ndarray) -> tuple[Species, ...]:
    n, T0 = len(system.open_places), system.T0
    gamma, eta, kappa = y[:n], y[n : 2 * n], np.array(system.fixed_cp)
    kappa[np.isnan(kappa)] = y[2 * n :]
    species = list(system.species)
    for k, i in enumerate(system.open_places):
        own = np.log(system.pressure / species[i].standard_pressure) if np.isfinite(system.pressure) else 0.0
        form = ConstantHeatCapacity(T0, float(eta[k] * R * T0), float(R * (eta[k] - gamma[k] + own)), float(R * kappa[k]))
        species[i] = replace(species[i], potential=form)
    return tuple(species)


def _notes(system: System, changes: np.ndarray) -> tuple[str, ...]:
    """What was changed for the cycles to close, a text each."""
    notes = []
    for j, (_, reaction) in enumerate(system.reactions):
        s, (dK, dH, dCp) = system.stated[j], changes.reshape(3, -1)[:, j]
        told = np.abs(changes.reshape(3, -1)[:, j]) > _TOLD * system.spreads[:, j]
        where = f"of '{reaction.equation}'"
        if told[0]:
            notes.append(f"K {where} at {s.at:g} K: {s.K:.6g} to {s.K * np.exp(dK):.6g}")
        if told[1]:
            notes.append(f"ΔH {where}: {s.dH / 1e3:.6g} to {s.dH / 1e3 + dH * R * system.T0 / 1e3:.6g} kJ/mol")
        if told[2]:
            notes.append(f"ΔCp {where}: {s.dCp or 0.0:.6g} to {(s.dCp or 0.0) + dCp * R:.6g} J/(mol K)")
    return tuple(notes)

