"""Fall-off whose broadening factor exceeds 1 or is not positive."""

from collections.abc import Iterator

import numpy as np

from ...rates.law import Broadening, Curve
from ..finding import ERROR, NONE, NOTICE, Finding, factor_text, severity_of, stretch_text
from ..survey import Survey

NAME = "broadening above 1"
SOURCE = ("R.G. Gilbert, K. Luther, J. Troe, Ber. Bunsenges. Phys. Chem. 87 (1983) 169, doi:10.1002/bbpc.19830870218: F is "
          "a narrowing of Lindemann's curve, 0 < F <= 1")
SEVERITY = ("by decades of the largest F over pressure: error from 10, warning from 2, notice from 1.001; error where not "
            "positive")
EXPLANATION = ("F above 1 lifts the curve above Lindemann's, above 2 even above both of its limits, which no energy "
               "transfer can do. It is usual where a fit of F_cent made for one range of temperatures is used in another.")
_SMALLEST = 1.001


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each term that is so, at the temperature where F is worst."""
    places, parameters = [], []
    for j, reaction in enumerate(survey.mechanism.reactions):
        for k, term in enumerate(reaction.terms):
            numbers = _parameters(term.law.part())
            if numbers:
                places.append((j, k))
                parameters.append(numbers)
    if places:
        yield from _rows(survey, places, *extremes(np.array(parameters), survey.temperatures))


def _parameters(part: object) -> tuple[float, ...]:
    """The eight of the general form (rates/law.py, Curve); empty without a broadening."""
    if isinstance(part, Broadening):
        a, inverse_3, inverse_1, T2 = part.parameters
        return (1.0 - a, inverse_3, a, inverse_1, 1.0, T2, 0.0, 0.0)
    return part.parameters if isinstance(part, Curve) else ()


def extremes(parameters: np.ndarray, temperatures: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Smallest centre and largest F over all pressures [-], (nT, laws) each; parameters (laws, 8).

    F = factor · centre^w with 0 < w <= 1 in every width rule, so it is largest at the centre or in the limits.
    """
    T, (w1, r1, w2, r2, w3, T3, log_d, e) = temperatures[:, None], parameters.T
    with np.errstate(under="ignore", over="ignore"):
        centre = w1 * np.exp(-T * r1) + w2 * np.exp(-T * r2) + w3 * np.exp(-T3 / T)
        factor = np.exp(log_d + e * np.log(T))
    return centre, factor * np.maximum(centre, 1.0)


def _rows(survey: Survey, places: list[tuple[int, int]], centre: np.ndarray, largest: np.ndarray) -> Iterator[Finding]:
    T = survey.temperatures
    for n, (j, term) in enumerate(places):
        wrong, high = ~(centre[:, n] > 0), largest[:, n] > _SMALLEST
        if np.any(wrong):
            k = int(np.argmin(centre[:, n]))
            text = f"F_cent is {centre[k, n]:.3g} at {T[k]:.4g} K, not positive {stretch_text(T[wrong][0], T[wrong][-1])}"
            yield Finding(NAME, ERROR, survey.term_place(j, term), text, NONE, float(T[k]), NONE, float(T[wrong][0]),
                          float(T[wrong][-1]), float(centre[k, n]), "1", reaction=j + 1)
        elif np.any(high):
            yield _row(survey, j, term, largest[:, n], high)


def _row(survey: Survey, j: int, term: int, largest: np.ndarray, high: np.ndarray) -> Finding:
    T, k = survey.temperatures, int(np.argmax(largest))
    decades = float(np.log10(largest[k]))
    severity = severity_of(decades) if decades > 0 else NOTICE
    text = f"F reaches {largest[k]:.3g} at {T[k]:.4g} K ({factor_text(decades)}), above 1 {stretch_text(T[high][0], T[high][-1])}"
    return Finding(NAME, severity, survey.term_place(j, term), text, decades, float(T[k]), NONE, float(T[high][0]),
                   float(T[high][-1]), float(largest[k]), "1", reaction=j + 1)
