"""Enthalpies of formation against a reference table."""

from collections.abc import Iterator

import numpy as np

from ...constants import GAS_CONSTANT as R
from ...mechanism.model import Species
from ...thermo import Functions
from ..finding import NONE, Finding, factor_text, severity_of
from ..formation_table import reference
from ..survey import Survey

NAME = "enthalpy of formation"
SOURCE = "audit/formation_table.py: Active Thermochemical Tables, version 1.112"
SEVERITY = ("by what it does to K at 1000 K (or the nearest temperature of the range): error from a factor of 10 (19 "
            "kJ/mol), warning from 2 (5.8 kJ/mol), notice from 1 kJ/mol beyond the reference's uncertainty")
EXPLANATION = ("ΔfH°(298.15 K) differs from the reference. Every K of a reaction that makes or takes this species is off by "
               "exp(ΔH/RT). Mind that a mechanism may be tuned around an old value: change both or neither.")
STANDARD = 298.15
_SMALLEST = 1e3
_USUAL = 1000.0


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each species that the table has and that differs from it."""
    T = float(np.clip(_USUAL, survey.temperatures[0], survey.temperatures[-1]))
    for species in survey.mechanism.species if survey.is_gas else ():
        known = reference(species) if survey.has_own_data(species) else None
        if known is not None and species.fit_range[0] < STANDARD + 50.0:
            difference = stated(species) - known[0]
            if abs(difference) > _SMALLEST + known[1]:
                yield _row(species, known, difference, T)


def stated(species: Species) -> float:
    """ΔfH°(298.15 K) [J/mol] that the species' data, as published, give."""
    return R * STANDARD * Functions(species.potential.ranges(), species.potential.modes()).cp_h_s(STANDARD)[1]


def _row(species: Species, known: tuple[float, float], difference: float, T: float) -> Finding:
    decades = abs(difference) / (R * T * np.log(10.0))
    text = (f"ΔfH°(298.15 K) is {stated(species) / 1e3:.2f} kJ/mol, the reference {known[0] / 1e3:.2f} ± {known[1] / 1e3:.2f}: "
            f"{difference / 1e3:+.2f} kJ/mol, {factor_text(float(decades))} in K at {T:.4g} K")
    return Finding(NAME, severity_of(float(decades)), f"species.{species.name}.potential", text, float(decades), T, NONE,
                   value=stated(species), unit="J mol-1", gibbs_change=-difference, species=species.name)
