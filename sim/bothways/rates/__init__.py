"""Forward rate laws: one file a law, registered here.

A law is a module or class with NAME (the value of `law` in a file), FALL_OFF (whether the law itself says that a
partner takes part) and read(entry, context), which returns a frozen object after `law.Law`.
"""

from ..entry import Entry
from . import arrhenius, falloff
from .arrhenius import Arrhenius
from .falloff import FallOff
from .law import Fault, Law, LawContext

_LAWS = {law.NAME: law for law in (arrhenius, falloff.Lindemann, falloff.Troe)}


def read_law(entry: Entry, context: LawContext) -> Law:
    """The law that a table names; the caller asks for the keys beside it and closes the entry."""
    return law_named(entry).read(entry, context)


def says_fall_off(entry: Entry) -> bool:
    """Whether the law that a table names has a partner of its own."""
    return law_named(entry).FALL_OFF


def law_named(entry: Entry):
    """The registered law of a table."""
    return _LAWS[entry.text("law", choices=tuple(_LAWS))]


__all__ = ["Arrhenius", "FallOff", "Fault", "Law", "LawContext", "read_law", "says_fall_off"]
