"""Published reverse rate constants against those that the forward rate and K(T) give."""

from collections.abc import Iterator

import numpy as np

from ...constants import GAS_CONSTANT as R
from ..finding import NONE, Finding, factor_text, severity_of
from ..survey import Survey, logarithm, mass_action, values

NAME = "published reverse"
SOURCE = "the principle of detailed balance: R.C. Tolman, Proc. Natl. Acad. Sci. USA 11 (1925) 436, doi:10.1073/pnas.11.7.436"
SEVERITY = "by decades apart: error from a factor of 10, warning from 2, notice below"
EXPLANATION = ("A source that states both directions states an equilibrium constant. Where it is not that of the "
               "thermochemistry, either rate, or the ΔG in the column 'gibbs_change', is wrong. A run uses the derived one.")


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each reaction with a published reverse."""
    for j, log_ratio in ratios(survey).items():
        decades = np.abs(log_ratio) / np.log(10.0)
        k = int(np.argmax(decades))
        T, ratio = survey.temperatures, log_ratio[k]
        error = float(R * T[k] * ratio)
        side = "above" if ratio > 0 else "below"
        text = (f"the published reverse is {factor_text(float(decades[k]))} {side} the derived one at {T[k]:.4g} K "
                f"(ratios {np.exp(log_ratio.min()):.3g} to {np.exp(log_ratio.max()):.3g}); it implies a ΔG° of reaction "
                f"{abs(error) / 1e3:.2g} kJ/mol {'higher' if error > 0 else 'lower'} than the data's")
        size = float(decades[k])
        yield Finding(NAME, severity_of(size), survey.reaction_place(j), text, size, float(T[k]), NONE, float(T[0]), float(T[-1]),
                      float(np.exp(ratio)), "1", error, "either rate constant, or ΔG° of reaction", j + 1)


def pairs(survey: Survey) -> dict[int, tuple[np.ndarray, np.ndarray]]:
    """ln of the published and of the derived reverse constant by reaction, (nT) each; of tables in pressure at the highest."""
    found = {}
    for j, reaction in enumerate(survey.mechanism.reactions):
        if reaction.published_reverse is not None and mass_action(reaction):
            published = logarithm(values(reaction.published_reverse.expressions(), survey.temperatures)[:, 0])
            derived = survey.log_bare[:, -1, j] - survey.log_Kc[:, j]
            if np.any(np.isfinite(published - derived)):
                found[j] = published, derived
    return found


def ratios(survey: Survey) -> dict[int, np.ndarray]:
    """ln(published/derived) by reaction, (nT); temperatures without a number count as agreeing."""
    return {j: np.nan_to_num(published - derived) for j, (published, derived) in pairs(survey).items()}


