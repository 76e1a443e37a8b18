"""Standard chemical potentials: one file a form, registered here.

A form is a module with NAME (the value of `form` in a file) and read(entry, substance), which returns a frozen object
after `potential.Potential`: its `ranges()` gives the common coefficients of `polynomial`, its `modes()` what stands besides.
"""

import numpy as np

from ..entry import Entry
from . import constant_cp, nine_coefficients, seven_coefficients, shomate, statistical_reader, structureless
from .polynomial import LARGEST, Ranges, at, fault
from .potential import Functions, Modes, Potential, Substance

_FORMS = {module.NAME: module for module in (seven_coefficients, nine_coefficients, shomate, constant_cp,
                                             statistical_reader, structureless)}


def read_potential(entry: Entry, substance: Substance, least_cp: float = 0.0) -> Potential:
    """The potential from its table, by the registered form it names.

    Raises InputError: faults of the table; cp/R not above `least_cp` [-] or values out of reason within the range.
    """
    module = _FORMS[entry.text("form", choices=tuple(_FORMS))]
    potential: Potential = module.read(entry, substance)
    entry.done()
    with np.errstate(all="ignore"):  # what leaves the range of floating-point numbers is reported here
        problem = fault(potential.ranges(), least_cp)
    if problem:
        raise entry.error(problem, expected=f"cp/R above {least_cp:g}, and cp/R, h/RT and s/R within ±{LARGEST:g}",
                          remedy="correct the coefficients or the range")
    return potential


__all__ = ["Functions", "Modes", "Potential", "Ranges", "Substance", "at", "read_potential"]
