"""What a user should know of a run that did not stop it, each thing said once, as warnings."""

import warnings
from collections.abc import Mapping

import numpy as np

from .case import MARGIN_WARN, Case, law_outside, listed, species_outside

TOLD_JOINS = 1e-2
"""Joins shifted by more than this in h/RT or s/R are remarked on."""

TOLD_CHANGES = 12
"""Changes of stated equilibria that are named, at most."""


class Remark(UserWarning):
    """Something a user should know of a run that did not stop it."""


def remark_at_start(case: Case) -> None:
    """Joins that were closed, and species whose data do not reach the temperature at the start."""
    _remark_joins(case)
    _remark_adjusted(case)
    temperature = case.charge.temperature
    _remark_range(species_outside(case.mechanism, temperature, MARGIN_WARN), temperature)


def remark_at_end(case: Case, columns: Mapping[str, np.ndarray]) -> None:
    """Species whose data a run left on its way, beyond those named at its start; rate laws whose window it left."""
    T, p = columns["temperature"], columns["pressure"]
    told = species_outside(case.mechanism, case.charge.temperature, MARGIN_WARN)
    for temperature in (float(np.min(T)), float(np.max(T))):
        left = [name for name in species_outside(case.mechanism, temperature, MARGIN_WARN) if name not in told]
        _remark_range(left, temperature)
        told += left
    problem = law_outside(case.mechanism, min(T), min(p)) or law_outside(case.mechanism, max(T), max(p))
    if problem:
        _say(f"the run left the window of a rate law, whose edge holds there: {problem}")


def _remark_range(names: list[str], temperature: float) -> None:
    if names:
        _say(f"at {temperature:.0f} K the run is outside the range of the thermochemical data of {listed(names)}; "
             "they continue with constant heat capacity")


def _remark_joins(case: Case) -> None:
    """Fits whose ranges do not meet: closed if nothing else was asked for."""
    shifts = case.mechanism.join_shifts
    worst = max(shifts, key=lambda item: max(abs(item[1].h), abs(item[1].s)), default=None)
    if worst is not None and max(abs(worst[1].h), abs(worst[1].s)) > TOLD_JOINS:
        name, shift = worst
        _say(f"the fitted ranges of {len({n for n, _ in shifts})} species do not meet and were closed, by up to "
             f"{abs(shift.h):.2g} in h/RT and {abs(shift.s):.2g} in s/R ({name} at {shift.temperature:.0f} K)")


def _remark_adjusted(case: Case) -> None:
    """Stated equilibria that were changed for their cycles to close."""
    notes = case.mechanism.notes
    if notes:
        more = f" and {len(notes) - TOLD_CHANGES} more" if len(notes) > TOLD_CHANGES else ""
        _say(f"stated equilibria were changed within their uncertainties to close their cycles: {'; '.join(notes[:TOLD_CHANGES])}"
             f"{more}")


def _say(text: str) -> None:
    warnings.warn(text, Remark, stacklevel=5)
