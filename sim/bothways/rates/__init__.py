"""Forward rate laws: one file a law, registered here.

A law is a module or class with NAME (the value of `law` in a file), PARTNER (where its partner stands: see law.py) and
read(entry, context), which returns a frozen object after `law.Law`; LUMPED where it is always that of a lumped step.
"""

from ..entry import Entry
from . import (
    activated,
    arrhenius,
    chebyshev,
    collision,
    eyring,
    fall_off,
    hougen_watson,
    known_rate,
    pressure_table,
    sri,
    transition_state,
)
from .arrhenius import Arrhenius
from .fall_off import FallOffLaw
from .law import IN_EQUATION, OWN_PARTNER, PRESSURE, Fault, Law, LawContext, Setting

_LAWS = {law.NAME: law for law in (arrhenius, fall_off.Lindemann, fall_off.Troe, sri, activated, pressure_table, chebyshev,
                                   collision, eyring, transition_state, hougen_watson, known_rate)}


def read_law(entry: Entry, context: LawContext) -> Law:
    """The law that a table names; the caller asks for the keys beside it and closes the entry."""
    return law_named(entry).read(entry, context)


def partner_of(entry: Entry) -> str:
    """Where the partner of the law that a table names stands: IN_EQUATION, OWN_PARTNER or PRESSURE."""
    return law_named(entry).PARTNER


def is_lumped(entry: Entry) -> bool:
    """Whether the law that a table names is that of a lumped step, whatever stands beside it."""
    return getattr(law_named(entry), "LUMPED", False)


def law_named(entry: Entry):
    """The registered law of a table."""
    return _LAWS[entry.text("law", choices=tuple(_LAWS))]


__all__ = ["IN_EQUATION", "OWN_PARTNER", "PRESSURE", "Arrhenius", "FallOffLaw", "Fault", "Law", "LawContext", "Setting",
           "is_lumped", "partner_of", "read_law"]
