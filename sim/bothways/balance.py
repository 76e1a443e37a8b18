"""The rule that ties both directions of a step, in plain NumPy: K(T), reverse rate constants, affinities.

The compiled kernels apply the same rule without forming a reverse constant (kernels/rates.py); where one is shown, it
comes from here. IUPAC Green Book, 3rd ed., section 2.11, for K and the affinity A = -Σ ν_i μ_i.
"""

import numpy as np

from .constants import GAS_CONSTANT as R


def log_equilibrium_constants(nu: np.ndarray, g: np.ndarray) -> np.ndarray:
    """ln K° of every reaction [-], (reactions), from stoichiometric numbers nu (N, reactions) and g°/RT (N)."""
    return -(nu.T @ g)


def log_concentration_constants(nu: np.ndarray, g: np.ndarray, temperature: float, pressure: float) -> np.ndarray:
    """ln of Kc in powers of mol/m3, (reactions): K° (p°/RT)^Σν, p° [Pa] the standard pressure that g°/RT belongs to."""
    unit = np.log(pressure / (R * temperature))
    return log_equilibrium_constants(nu, g) + nu.sum(axis=0) * unit


def reverse_constants(forward: np.ndarray, nu: np.ndarray, g: np.ndarray, temperature: float, pressure: float) -> np.ndarray:
    """Reverse rate constants, (reactions), of forward ones (m3, mol, s): k_f/Kc."""
    return forward * np.exp(-log_concentration_constants(nu, g, temperature, pressure))


def affinities(nu: np.ndarray, potential: np.ndarray) -> np.ndarray:
    """A/RT = -Σ ν_i μ_i/RT of every reaction [-], (reactions), from μ/RT (N), -inf for absent species.

    -inf where a reactant is absent, +inf where a product is, NaN where both are.
    """
    absent = np.isneginf(potential)
    starved, free = (side.T.astype(float) @ absent > 0 for side in (nu < 0, nu > 0))
    known = -(nu.T @ np.where(absent, 0.0, potential))
    return np.where(starved & free, np.nan, np.where(starved, -np.inf, np.where(free, np.inf, known)))
