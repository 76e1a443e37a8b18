"""Fall-off with the broadening of Stewart, Larson and Golden.

F = d [a exp(-b/T) + exp(-T/c)]^X T^e, X = 1/(1 + (log10 P_r)²) (P.H. Stewart, C.W. Larson, D.M. Golden, Combust. Flame
75 (1989) 25, doi:10.1016/0010-2180(89)90084-9). There d = 1 and e = 0; later sets use them to fit.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from ..entry import Entry
from .fall_off import LARGEST_CENTRE, FallOffLaw, read_limits
from .law import OWN_PARTNER, Fault, LawContext

NAME = "SRI"
PARTNER = OWN_PARTNER


@dataclass(frozen=True)
class SriCentre:
    """a [-], b [K], c [K]; d [K^-e] and e [-] of the factor d T^e."""

    a: float
    b: float
    c: float
    d: float = 1.0
    e: float = 0.0

    def __call__(self, temperature: float) -> float:
        """a exp(-b/T) + exp(-T/c), what is raised to the power X."""
        return self.a * math.exp(-self.b / temperature) + math.exp(-temperature / self.c)

    def factor(self, temperature: float) -> float:
        """d T^e."""
        return self.d * temperature**self.e

    def parameters(self) -> tuple[float, ...]:
        """The bracket as weighted exponentials, then ln d and e."""
        return (1.0, 1.0 / self.c, 0.0, 0.0, self.a, self.b, math.log(self.d), self.e)

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """A bracket or a factor that is not positive, or absurdly large, in the range [K]."""
        for temperature in temperatures:
            for name, function in (("a exp(-b/T) + exp(-T/c)", self), ("d T^e", self.factor)):
                value = _value(function, temperature)
                if not 0 < value < LARGEST_CENTRE:
                    return Fault(f"{name} is {value:.4g}", temperature, f"F above 0 and below {LARGEST_CENTRE:g} over the "
                                 f"range of the thermochemical data, {temperatures[0]:g} to {temperatures[-1]:g} K")
        return None


def _value(function, temperature: float) -> float:  # type: ignore[no-untyped-def]
    try:
        return function(temperature)
    except OverflowError:
        return math.inf


def read_sri(entry: Entry) -> SriCentre:
    """F from its table: a, b, c, perhaps d and e."""
    table = entry.table("F")
    centre = SriCentre(table.number("a", sign="not negative"), table.number("b"), table.number("c", sign="positive"),
                       table.number("d", 1.0, "positive"), table.number("e", 0.0))
    table.done()
    return centre


def read(entry: Entry, context: LawContext) -> FallOffLaw:
    """The law from its table."""
    return FallOffLaw(*read_limits(entry, context.order), read_sri(entry), "SRI")
