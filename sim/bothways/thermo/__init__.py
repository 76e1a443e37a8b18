"""Standard chemical potentials: one file a form, registered here.

A form is a module with NAME (the value of `form` in a file) and read(entry), which returns a frozen object whose
`ranges()` gives the common coefficients of `polynomial`.
"""

from typing import Protocol

from ..entry import Entry
from . import constant_cp, nasa7
from .polynomial import Ranges, at

_FORMS = {module.NAME: module for module in (nasa7, constant_cp)}


class Potential(Protocol):
    """What the standard chemical potential of a species is made from."""

    def ranges(self) -> Ranges:
        """The common coefficients."""


def read_potential(entry: Entry) -> Potential:
    """The potential from its table, by the registered form it names."""
    module = _FORMS[entry.text("form", choices=tuple(_FORMS))]
    potential = module.read(entry)
    entry.done()
    return potential


__all__ = ["Potential", "Ranges", "at", "read_potential"]
