"""Thermochemical data used outside the temperatures they were fitted over."""

from collections.abc import Iterator

from ...mechanism.model import Species
from ..finding import NONE, NOTICE, WARNING, Finding
from ..survey import Survey

NAME = "outside the data"
SOURCE = "fits say nothing outside their range; here they continue with constant cp (thermo/polynomial.py)"
SEVERITY = "notice from 10 K outside the working range, warning from 500 K, where a run would be refused (case.py)"
EXPLANATION = ("The working range reaches beyond the species' data. Outside, cp stays at its last value, which is harmless "
               "for some ten kelvin and guesswork for some hundred.")
_NOTICE, _WARNING = 10.0, 500.0


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each species whose data do not reach as far as the working range."""
    for species in survey.mechanism.species:
        below = species.fit_range[0] - survey.temperatures[0]
        above = survey.temperatures[-1] - species.fit_range[1]
        if max(below, above) > _NOTICE:
            yield _row(species, float(below), float(above), survey)


def _row(species: Species, below: float, above: float, survey: Survey) -> Finding:
    low, high = species.fit_range
    worst = float(survey.temperatures[0] if below > above else survey.temperatures[-1])
    text = f"data from {low:.6g} to {high:.6g} K, used at {worst:.6g} K"
    return Finding(NAME, WARNING if max(below, above) > _WARNING else NOTICE, f"species.{species.name}.potential", text, NONE,
                   worst, NONE, NONE, NONE, max(below, above), "K", species=species.name)
