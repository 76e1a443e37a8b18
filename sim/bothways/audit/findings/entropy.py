"""Standard entropies that are negative, or less than translation alone gives."""

from collections.abc import Iterator

import numpy as np

from ...constants import AVOGADRO, BOLTZMANN, PLANCK
from ...constants import GAS_CONSTANT as R
from ...mechanism.elements import ATOMIC_MASS
from ...mechanism.model import Species
from ..finding import ERROR, NONE, Finding, stretch_text
from ..survey import Survey

NAME = "entropy"
SOURCE = ("the third law, and the translational entropy of O. Sackur, Ann. Phys. 40 (1913) 67, "
          "doi:10.1002/andp.19133450103, and H. Tetrode, Ann. Phys. 38 (1912) 434, doi:10.1002/andp.19123430708")
SEVERITY = "error: rotation, vibration and electronic states can only add to translation"
EXPLANATION = ("The entropy of an ideal gas is at least that of point masses as heavy as its molecules. A fit below it has "
               "a wrong last coefficient, and every K with this species is wrong by the same factor.")
_SLACK = 0.01
"""s/R that fits and older constants may lack [-]."""


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each species of known atoms, of an absolute entropy, that falls short."""
    s = survey.thermo[2]
    for k, species in enumerate(survey.mechanism.species if survey.is_gas else ()):
        if set(species.composition) <= set(ATOMIC_MASS) and _is_absolute(survey, species):
            least = translational(survey.temperatures, species.molar_mass, species.standard_pressure)
            short = s[:, k] < np.maximum(least, 0.0) - _SLACK
            if np.any(short):
                yield _row(species, survey.temperatures, s[:, k], least, short)


def translational(temperature: np.ndarray, molar_mass: float, pressure: float) -> np.ndarray:
    """s/R [-] of point masses [kg/mol] at temperatures [K] and a pressure [Pa] (Sackur-Tetrode)."""
    m, kT = molar_mass / AVOGADRO, BOLTZMANN * temperature
    return 2.5 + np.log((2.0 * np.pi * m * kT / PLANCK**2) ** 1.5 * kT / pressure)


def _is_absolute(survey: Survey, species: Species) -> bool:
    """Whether s counts from zero: not where a Gibbs energy of formation was stated."""
    return survey.has_own_data(species) and "G" not in survey.mechanism.document["species"][species.name]["potential"]


def _row(species: Species, T: np.ndarray, s: np.ndarray, least: np.ndarray, short: np.ndarray) -> Finding:
    k = int(np.argmin(s - least))
    lacking = float(least[k] - s[k])
    what = "is negative" if s[k] < 0 else f"is below {R * least[k]:.4g} of translation alone"
    text = f"S° is {R * s[k]:.4g} J/(mol K) at {T[k]:.4g} K and {what} ({stretch_text(T[short][0], T[short][-1])})"
    return Finding(NAME, ERROR, f"species.{species.name}.potential", text, lacking / np.log(10.0), float(T[k]), NONE,
                   float(T[short][0]), float(T[short][-1]), float(R * s[k]), "J mol-1 K-1", species=species.name)
