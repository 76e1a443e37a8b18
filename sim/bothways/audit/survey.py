"""What the checks look at: a mechanism's numbers over a range of temperatures and pressures, each worked out once.

Rate constants come from the laws' own plain k(T, [M], p), equilibrium constants from `balance`; where a partner takes
part its concentration is p/RT (every species counting 1). Nothing is compiled.
"""

from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from .. import balance
from ..constants import GAS_CONSTANT as R
from ..mechanism.model import Mechanism, Reaction, Species
from ..mechanism.phase import FRACTION, GAS, standard_concentration
from ..rates.law import Broadening, Curve, Expression, Law
from ..thermo.polynomial import cp_h_s_of, extended
from ..thermo.potential import NO_MODES

POINTS = 23
"""Temperatures looked at: of 300 to 2500 K every hundredth."""


@dataclass(frozen=True, eq=False)
class Survey:
    """A mechanism, temperatures (nT) [K] and pressures (np) [Pa], both rising; arrays follow on demand."""

    mechanism: Mechanism
    temperatures: np.ndarray
    pressures: np.ndarray
    kept: dict = field(default_factory=dict, repr=False)
    """What `encounters` has sorted out already."""

    @property
    def is_gas(self) -> bool:
        """Whether the kinetic theory of gases applies."""
        return self.mechanism.phase == GAS

    def reaction_place(self, j: int) -> str:
        """Where reaction j stands in the file, as errors name it."""
        return f"reaction {j + 1} '{self.mechanism.reactions[j].equation}'"

    def has_own_data(self, species: Species) -> bool:
        """Whether enthalpy and entropy of a species are data of its own, not made from equilibria that reactions state."""
        return not set(self.mechanism.document["species"][species.name].get("potential", {})) <= {"form", "cp"}

    def term_place(self, j: int, k: int) -> str:
        """Where term k of reaction j stands in the file."""
        several = len(self.mechanism.reactions[j].terms) > 1
        return self.reaction_place(j) + (f".forward[{k + 1}]" if several else "")

    @cached_property
    def nu(self) -> np.ndarray:
        """Stoichiometric numbers (N, reactions)."""
        return self.mechanism.stoichiometry

    @cached_property
    def thermo(self) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """cp/R, h/RT and s/R [-], (nT, N) each, as the mechanism uses them, at each species' own standard pressure."""
        own = np.array(cp_h_s_of(self._rows, self.temperatures[:, None]))
        for k, species in enumerate(self.mechanism.species):
            modes = species.potential.modes()
            if modes != NO_MODES:
                own[:, :, k] += np.array([modes.cp_h_s(float(T)) for T in self.temperatures]).T
        return own[0], own[1], own[2]

    @cached_property
    def _rows(self) -> np.ndarray:
        whole = [extended(self.mechanism.ranges(k)) for k in range(len(self.mechanism.species))]
        return np.stack([w.rows[np.searchsorted(w.boundaries[1:-1], self.temperatures, side="right")] for w in whole], axis=1)

    @cached_property
    def gibbs(self) -> np.ndarray:
        """g°/RT [-] at the mechanism's standard state, (nT, N)."""
        _, h, s = self.thermo
        if not self.is_gas:
            return h - s
        own = np.array([species.standard_pressure for species in self.mechanism.species])
        return h - s + np.log(self.mechanism.standard_pressure / own)

    @cached_property
    def log_K(self) -> np.ndarray:
        """ln K° [-], (nT, reactions)."""
        return balance.log_equilibrium_constants(self.nu, self.gibbs.T).T

    @cached_property
    def log_Kc(self) -> np.ndarray:
        """ln Kc in powers of mol/m3, (nT, reactions); NaN where it hangs on a solution's total concentration."""
        size, power = standard_concentration(self.mechanism)
        standard = np.nan if self.mechanism.standard_state == FRACTION else size
        return balance.log_concentration_constants(self.nu, self.gibbs.T, standard * self.temperatures**-power).T

    @cached_property
    def reaction_energy(self) -> np.ndarray:
        """ΔU° [J/mol] of every reaction, (nT, reactions); of a solution ΔH°."""
        _, h, _ = self.thermo
        return R * self.temperatures[:, None] * (h @ self.nu - self.is_gas * self.nu.sum(axis=0))

    @cached_property
    def partner(self) -> np.ndarray:
        """Concentration of a partner that counts 1, p/RT [mol/m3], (nT, np)."""
        return self.pressures / (R * self.temperatures[:, None])

    @cached_property
    def forward(self) -> np.ndarray:
        """Sums of the forward terms, partners included (m3, mol, s), (nT, np, reactions); not positive where they are not."""
        nT, n_p = self.partner.shape
        total = np.zeros((nT, n_p, len(self.mechanism.reactions)))
        with np.errstate(over="ignore", invalid="ignore"):
            for j, reaction in enumerate(self.mechanism.reactions):
                for term in reaction.terms:
                    total[:, :, j] += self.constants(term.law, term.partner is not None)
        return total

    def constants(self, law: Law, partner: bool) -> np.ndarray:
        """k of one law at every temperature and pressure, (nT, np)."""
        if law.part() is None:
            return values(law.expressions()[:1], self.temperatures) * (self.partner if partner else 1.0)
        M = self.partner if partner else np.ones_like(self.partner)
        return np.array([[law.k(float(T), float(m), float(p)) for p, m in zip(self.pressures, row, strict=True)]
                         for T, row in zip(self.temperatures, M, strict=True)])

    @cached_property
    def log_forward(self) -> np.ndarray:
        """ln of `forward`, NaN where that is not positive."""
        return logarithm(self.forward)

    @cached_property
    def log_bare(self) -> np.ndarray:
        """ln of the forward constant without the concentration of M, and of fall-off k_inf: what a reverse constant of
        mass action is compared with; (nT, np, reactions)."""
        log_k = self.log_forward.copy()
        for j, reaction in enumerate(self.mechanism.reactions):
            limits = limits_of(reaction)
            if limits:
                log_k[:, :, j] = logarithm(values(limits[:1], self.temperatures))
            elif reaction.equation.partner:
                log_k[:, :, j] -= np.log(self.partner)
        return log_k


def values(expressions: Sequence[Expression], temperatures: np.ndarray) -> np.ndarray:
    """Exponentials at temperatures (nT) [K], a column each, (nT, expressions)."""
    log_A, n, theta, sign = (np.array(column) for column in zip(*expressions, strict=True))
    T = temperatures[:, None]
    with np.errstate(over="ignore"):
        return sign * np.exp(log_A + n * np.log(T) - theta / T)


def logarithm(numbers: np.ndarray) -> np.ndarray:
    """ln where positive and finite, NaN elsewhere."""
    fine = (numbers > 0) & np.isfinite(numbers)
    return np.where(fine, np.log(np.where(fine, numbers, 1.0)), np.nan)


def mass_action(reaction: Reaction) -> bool:
    """Whether both directions follow the law of mass action, so that a reverse constant exists."""
    return all(term.orders is None for term in reaction.terms)


def limits_of(reaction: Reaction) -> tuple[Expression, Expression] | None:
    """The high- and the low-pressure limit of a reaction whose only term is in fall-off; else None."""
    if len(reaction.terms) != 1:
        return None
    part = reaction.terms[0].law.part()
    if isinstance(part, Broadening) or (isinstance(part, Curve) and not part.activated):
        high, low = reaction.terms[0].law.expressions()[:2]
        return high, low
    return None
