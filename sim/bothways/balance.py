"""The rule that ties both directions of a step, in plain NumPy: K(T), reverse rate constants, affinities.

The compiled kernels apply the same rule without forming a reverse constant (kernels/rates.py, kernels/lumped.py); where
one is shown, it comes from here. IUPAC Green Book, 3rd ed., section 2.11, for K and the affinity A = -Σ ν_i μ_i.
"""

import numpy as np


def log_equilibrium_constants(nu: np.ndarray, g: np.ndarray) -> np.ndarray:
    """ln K° of every reaction [-], (reactions), from stoichiometric numbers nu (N, reactions) and g°/RT (N)."""
    return -(nu.T @ g)


def log_concentration_constants(nu: np.ndarray, g: np.ndarray, standard: float | np.ndarray) -> np.ndarray:
    """ln of Kc in powers of mol/m3, (reactions): K° c°^Σν, c° [mol/m3] the concentration that g°/RT belongs to.

    In a gas c° = p°/RT; in a solution 1 mol/L, or the total concentration where activities are mole fractions. With g
    (N, nt) and c° (nt) of many temperatures: (reactions, nt).
    """
    change = nu.sum(axis=0).reshape(-1, *[1] * np.ndim(standard))
    return log_equilibrium_constants(nu, g) + np.where(change == 0, 0.0, change * np.log(standard))


def reverse_constants(forward: np.ndarray, nu: np.ndarray, g: np.ndarray, standard: float,
                      sigma: float | np.ndarray = 1.0) -> np.ndarray:
    """Reverse rate constants, (reactions), of forward ones (m3, mol, s): k_f/Kc^(1/σ), σ 1 but for lumped steps."""
    return forward * np.exp(-log_concentration_constants(nu, g, standard) / sigma)


def net_rates(forward: np.ndarray, affinity: np.ndarray, sigma: float | np.ndarray = 1.0) -> np.ndarray:
    """Net rates from forward ones and A/RT: forward·[1 - exp(-A/(σRT))], exp(-A/RT) = Q/K (de Donder's relation)."""
    return -forward * np.expm1(-affinity / sigma)


def affinities(nu: np.ndarray, potential: np.ndarray) -> np.ndarray:
    """A/RT = -Σ ν_i μ_i/RT of every reaction [-], (reactions), from μ/RT (N), -inf for absent species.

    -inf where a reactant is absent, +inf where a product is, NaN where both are.
    """
    absent = np.isneginf(potential)
    starved, free = (side.T.astype(float) @ absent > 0 for side in (nu < 0, nu > 0))
    known = -(nu.T @ np.where(absent, 0.0, potential))
    return np.where(starved & free, np.nan, np.where(starved, -np.inf, np.where(free, np.inf, known)))
