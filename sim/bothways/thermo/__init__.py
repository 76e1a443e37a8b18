"""Standard chemical potentials: one file a form, registered here.

A form is a module with NAME (the value of `form` in a file) and read(entry), which returns a frozen object whose
`ranges()` gives the common coefficients of `polynomial`.
"""

from typing import Protocol

import numpy as np

from ..entry import Entry
from . import constant_cp, nine_coefficients, seven_coefficients, shomate
from .polynomial import LARGEST, Ranges, at, fault

_FORMS = {module.NAME: module for module in (seven_coefficients, nine_coefficients, shomate, constant_cp)}


class Potential(Protocol):
    """What the standard chemical potential of a species is made from."""

    def ranges(self) -> Ranges:
        """The common coefficients."""


def read_potential(entry: Entry, least_cp: float = 0.0) -> Potential:
    """The potential from its table, by the registered form it names.

    Raises InputError: faults of the table; cp/R not above `least_cp` [-] or values out of reason within the range.
    """
    module = _FORMS[entry.text("form", choices=tuple(_FORMS))]
    potential = module.read(entry)
    entry.done()
    with np.errstate(all="ignore"):  # what leaves the range of floating-point numbers is reported here
        problem = fault(potential.ranges(), least_cp)
    if problem:
        raise entry.error(problem, expected=f"cp/R above {least_cp:g}, and cp/R, h/RT and s/R within ±{LARGEST:g}",
                          remedy="correct the coefficients or the range")
    return potential


__all__ = ["Potential", "Ranges", "at", "read_potential"]
