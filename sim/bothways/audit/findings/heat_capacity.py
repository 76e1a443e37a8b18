"""Heat capacities that no molecule of that many atoms can have."""

from collections.abc import Iterator

import numpy as np

from ...constants import BOLTZMANN, PLANCK, SPEED_OF_LIGHT
from ...mechanism.elements import ATOMIC_MASS
from ...mechanism.model import Species
from ..finding import ERROR, NONE, WARNING, Finding, stretch_text
from ..survey import Survey

NAME = "heat capacity"
SOURCE = ("equipartition, and the oscillator of A. Einstein, Ann. Phys. 22 (1907) 180, doi:10.1002/andp.19063270110: N "
          "atoms have 3N - 6 vibrations (3N - 5 if linear), each between 0 and R; no fundamental lies above that of H2, "
          "4401 cm-1 harmonic (K.P. Huber, G. Herzberg, Constants of Diatomic Molecules, 1979); a torsion tends to R/2")
SEVERITY = ("error where cp is not positive or more than 30 % above the classical limit; warning from 10 % above "
            "(anharmonicity and excited states give some per cent; common practice, no source), or below what the stiffest "
            "molecule would have")
EXPLANATION = ("cp/R of an ideal gas starts from translation and rotation (5/2 for atoms, 7/2 linear, 4 bent) and climbs "
               "towards one more for each vibration. A fit above that limit, or one that does not approach it at high "
               "temperature, was extrapolated, mistyped or belongs to another species.")
_HIGHEST = 4401.0  # cm-1
_WARNING, _ERROR = 1.10, 1.30
_SLACK = 0.3
"""cp/R that rotation of light molecules lacks near room temperature, and that low electronic states add to atoms [-]."""


def find(survey: Survey) -> Iterator[Finding]:
    """At most one row for each species of known atoms, within the temperatures of its data."""
    cp = survey.thermo[0]
    for k, species in enumerate(survey.mechanism.species if survey.is_gas else ()):
        T, own = survey.temperatures, cp[:, k]
        inside = (T >= species.fit_range[0] - 1.0) & (T <= species.fit_range[1] + 1.0)
        if np.any(inside) and set(species.composition) <= set(ATOMIC_MASS) and survey.has_own_data(species):
            yield from _rows(species, T[inside], own[inside])


def _rows(species: Species, T: np.ndarray, cp: np.ndarray) -> Iterator[Finding]:
    low, high = bounds(sum(species.composition.values()), T)
    if np.any(cp <= 0):
        yield _row(species, T, cp, cp <= 0, ERROR, "is not positive", int(np.argmin(cp)))
    elif np.any(cp > _WARNING * high):
        k = int(np.argmax(cp / high))
        severity = ERROR if cp[k] > _ERROR * high[k] else WARNING
        yield _row(species, T, cp, cp > high, severity, f"is above the classical limit {high[k]:.4g}", k)
    elif np.any(cp < low):
        k = int(np.argmin(cp - low))
        yield _row(species, T, cp, cp < low, WARNING, f"is below {low[k]:.4g}, what the stiffest such molecule has", k)


def bounds(atoms: int, temperature: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Least and largest cp/R [-] of a molecule of so many atoms at temperatures [K], linear or bent."""
    if atoms == 1:
        return np.full_like(temperature, 2.5 - 0.01), np.full_like(temperature, 2.5 + _SLACK)
    x = 100.0 * PLANCK * SPEED_OF_LIGHT * _HIGHEST / (BOLTZMANN * temperature)
    mode = np.minimum(x**2 * np.exp(-x) / (1.0 - np.exp(-x)) ** 2, 0.5)
    vibrations = 3 * atoms - 5 if atoms == 2 else 3 * atoms - 6
    linear_most = 3.5 + (3 * atoms - 5)
    return 3.5 + vibrations * mode - _SLACK, np.full_like(temperature, linear_most)


def _row(species: Species, T: np.ndarray, cp: np.ndarray, where: np.ndarray, severity: str, what: str, k: int) -> Finding:
    text = f"cp/R is {cp[k]:.4g} at {T[k]:.4g} K and {what} ({stretch_text(T[where][0], T[where][-1])})"
    return Finding(NAME, severity, f"species.{species.name}.potential", text, NONE, float(T[k]), NONE, float(T[where][0]),
                   float(T[where][-1]), float(cp[k]), "1", species=species.name)
