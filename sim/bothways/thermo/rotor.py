"""The energy levels of a hindered rotor in one dimension, solved numerically.

-B d²ψ/dφ² + (V/2)(1 - cos nφ) ψ = E ψ, in the basis e^{imφ}; the cosine couples m and m ± n only, so the matrix falls
into n tridiagonal ones (the problem, treated by Mathieu functions: K.S. Pitzer, W.D. Gwinn, J. Chem. Phys. 10 (1942) 428,
doi:10.1063/1.1723744). The sum over its levels is divided by the rotor's symmetry number. Limits: one cosine as the
barrier, a B that does not change on the way, no coupling with the overall rotation, other rotors or vibrations; spins of
the nuclei are counted classically. Levels reach 40 k_B times 6000 K: up to there the sum has its digits.
"""

from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from ..constants import BOLTZMANN, GAS_CONSTANT, PLANCK, SPEED_OF_LIGHT
from .potential import Ladder

KELVIN_PER_WAVENUMBER = PLANCK * SPEED_OF_LIGHT * 100.0 / BOLTZMANN
"""h c/k_B [K cm]."""
_HIGHEST = 40.0 * 6000.0
_ALIKE = 1e-6
"""Levels closer than this [K] are taken together, which changes q by less than 1e-15 at 100 K."""


@dataclass(frozen=True)
class Rotor:
    """barrier V [J/mol], fold n, B [cm⁻¹], symmetry number of its own."""

    barrier: float
    fold: int
    B: float
    symmetry: int

    def ladder(self) -> Ladder:
        """Levels above the lowest, their weights divided by the symmetry number."""
        return _levels(self.barrier / GAS_CONSTANT, self.fold, self.B * KELVIN_PER_WAVENUMBER, self.symmetry)


@lru_cache(256)
def _levels(V: float, fold: int, B: float, symmetry: int) -> Ladder:
    energies = np.sort(np.concatenate([_block(V, fold, B, first) for first in range(fold)]))
    energies = energies[energies <= V + _HIGHEST] - energies[0]
    start = np.flatnonzero(np.diff(energies, prepend=-np.inf) > _ALIKE)
    counts = np.diff(np.append(start, len(energies)))
    means = np.add.reduceat(energies, start) / counts
    return tuple((float(theta), float(count) / symmetry) for theta, count in zip(means, counts, strict=True))


def _block(V: float, fold: int, B: float, first: int) -> np.ndarray:
    """Eigenvalues [K] of the basis functions m = first + k·fold."""
    from scipy.linalg import eigh_tridiagonal  # takes its time to load, and few mechanisms have rotors

    largest = int(np.sqrt((2 * V + _HIGHEST) / B)) + 8 * fold
    m = np.arange(first - fold * (largest // fold + 1), largest + 1, fold)
    return eigh_tridiagonal(B * m.astype(float) ** 2 + V / 2, np.full(len(m) - 1, -V / 4), eigvals_only=True)
