"""The rate at which molecules meet: no elementary step of two neutral molecules is much faster.

Hard spheres: Z = π d² √(8 k_B T/πμ) N_A, d the mean of both diameters, μ the reduced mass; for Lennard-Jones molecules
times the reduced collision integral Ω(2,2)* at T* = T/√(ε₁ε₂) (J.O. Hirschfelder, C.F. Curtiss, R.B. Bird, Molecular
Theory of Gases and Liquids, Wiley 1954; the two ways of combining are theirs too). Of like molecules, half as many
different pairs meet.
"""

import numpy as np

from ..constants import AVOGADRO, BOLTZMANN


def collision_integral(reduced_temperature: np.ndarray) -> np.ndarray:
    """Ω(2,2)* of the Lennard-Jones 12-6 potential at T* = k_B T/ε [-], within 0.1 % for T* from 0.3 to 100.

    P.D. Neufeld, A.R. Janzen, R.A. Aziz, J. Chem. Phys. 57 (1972) 1100, doi:10.1063/1.1678363, without the small
    oscillating terms.
    """
    x = np.asarray(reduced_temperature, dtype=float)
    return 1.16145 * x**-0.14874 + 0.52487 * np.exp(-0.77320 * x) + 2.16178 * np.exp(-2.43787 * x)


def collision_constant(temperature: np.ndarray, diameter: np.ndarray, reduced_mass: np.ndarray,
                       well_depth: np.ndarray | float = 0.0, like: np.ndarray | bool = False) -> np.ndarray:
    """The rate constant of collisions [m3/(mol s)]; all arguments broadcast.

    temperature [K]; diameter of the pair [m]; reduced_mass [kg/mol]; well_depth of the pair [K], 0 for hard spheres;
    like : whether the two are of one species, which halves the number of different pairs.
    """
    T, depth = np.asarray(temperature, dtype=float), np.asarray(well_depth, dtype=float)
    speed = np.sqrt(8.0 * BOLTZMANN * AVOGADRO * T / (np.pi * reduced_mass))
    soft = np.where(depth > 0, collision_integral(T / np.where(depth > 0, depth, T)), 1.0)
    return AVOGADRO * np.pi * np.asarray(diameter) ** 2 * speed * soft * np.where(like, 0.5, 1.0)
