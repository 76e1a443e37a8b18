"""Pre-exponential factors beyond what transition-state theory allows."""

from collections.abc import Iterator

import numpy as np

from ...constants import BOLTZMANN, PLANCK
from ...constants import GAS_CONSTANT as R
from ..encounters import FORWARD, Encounter, encounters, log_limits
from ..finding import NONE, WARNING, Finding, factor_text, severity_of
from ..survey import Survey, limits_of

NAME = "A-factor"
SOURCE = ("S.W. Benson, Thermochemical Kinetics, 2nd ed., Wiley 1976, for A = (e k_B T/h) exp(ΔS‡/R) and A of bond "
          "fissions; the collision number for two molecules. The allowances are common practice, no source")
SEVERITY = ("by decades above the allowance where it is least exceeded, at most warning; nothing where A is within it at "
            "any temperature")
EXPLANATION = ("A is that of the local Arrhenius line, A(T) = k exp(Ea(T)/RT), Ea(T) = -R dln k/d(1/T). Of one molecule, "
               "ΔS‡ above 80 J/(mol K) is looser than any bond fission known; of two, A above ten times the collision "
               "number needs more than every collision. Both hint at a fit used outside its temperatures, or at wrong "
               "units.")
_LOOSEST = 80.0
"""ΔS‡ [J/(mol K)] allowed of a unimolecular step: A = 9e17 1/s at 1000 K."""


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each forward direction of a single term that exceeds its allowance."""
    one = [e for e in encounters(survey, 1) if _judged(survey, e)] if survey.is_gas else []
    two = [e for e in encounters(survey, 2) if _judged(survey, e)] if survey.is_gas else []
    T = survey.temperatures[:, None]
    loose = 1.0 + np.log(BOLTZMANN * T / PLANCK) + _LOOSEST / R
    for met, allowed in ((one, np.broadcast_to(loose, (len(T), len(one)))),
                         (two, log_limits(survey, two) + 0.5 + np.log(10.0) if two else loose[:, :0])):
        if met:
            yield from _rows(survey, met, (_log_A(survey, met) - allowed) / np.log(10.0))


def _judged(survey: Survey, e: Encounter) -> bool:
    reaction = survey.mechanism.reactions[e.j]
    plain = len(reaction.terms) == 1 and reaction.terms[0].law.part() is None and not reaction.equation.partner
    mixed = set(dict(reaction.equation.reactants)) & set(dict(reaction.equation.products))
    return e.direction == FORWARD and not mixed and (plain or limits_of(reaction) is not None)


def _log_A(survey: Survey, met: list[Encounter]) -> np.ndarray:
    """ln of the local A, (nT, encounters): ln A + n ln T + n of the (high-pressure) expression A T^n exp(-θ/T)."""
    first = [survey.mechanism.reactions[e.j].terms[0].law.expressions()[0] for e in met]
    log_A, n = (np.array(column) for column in list(zip(*first, strict=True))[:2])
    return log_A + n * np.log(survey.temperatures[:, None]) + n


def _rows(survey: Survey, met: list[Encounter], excess: np.ndarray) -> Iterator[Finding]:
    T = survey.temperatures
    for n in np.flatnonzero(np.min(excess, axis=0) > 1e-9):
        k = int(np.argmin(excess[:, n]))
        e, size = met[n], float(excess[k, n])
        A = float(np.exp(_log_A(survey, [e])[k, 0]))
        unit = "s-1" if len(e.molecules) == 1 else "m3 mol-1 s-1"
        text = (f"the local A is {A:.2g} {unit} at {T[k]:.4g} K, {factor_text(size)} above the allowance, and more at the "
                "other temperatures")
        yield Finding(NAME, severity_of(size), survey.reaction_place(e.j), text, size, float(T[k]), NONE, float(T[0]),
                      float(T[-1]), A, unit, reaction=e.j + 1).at_most(WARNING)
