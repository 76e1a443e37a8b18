"""Fall-off between the low- and the high-pressure limit: Lindemann's and Troe's, with the width rules in use.

k = k_inf P_r/(1 + P_r) F, P_r = k_0 [M]/k_inf (F.A. Lindemann, Trans. Faraday Soc. 17 (1922) 598;
C.N. Hinshelwood, Proc. R. Soc. A 113 (1926) 230). F = 1, or after R.G. Gilbert, K. Luther, J. Troe, Ber.
Bunsenges. Phys. Chem. 87 (1983) 169, doi:10.1002/bbpc.19830870218, with
log F = log F_cent / (1 + [(log P_r + c)/(N - 0.14 (log P_r + c))]²), c = -0.4 - 0.67 log F_cent,
N = 0.75 - 1.27 log F_cent, F_cent = (1 - a) exp(-T/T***) + a exp(-T/T*) + exp(-T**/T).

Two evaluations use narrower rules with the same limits: IUPAC log F = log F_cent / (1 + [log P_r/N]²) with the N above
(R. Atkinson et al., Atmos. Chem. Phys. 4 (2004) 1461, doi:10.5194/acp-4-1461-2004), and JPL
log F = log F_cent / (1 + [log P_r]²) with F_cent = 0.6 (J.B. Burkholder et al., JPL Publication 19-5, 2019).
"""

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Protocol

from ..entry import Entry
from .arrhenius import Arrhenius, read_expression
from .law import OWN_PARTNER, Broadening, Curve, Expression, Fault, Law, LawContext

_NO_THIRD_TERM = 1e300  # [K] exp(-T**/T) and its slope vanish, without an infinity times zero
_AT_ONCE = 1e-30  # [K] exp(-T/T*) vanishes: what is left of F_cent is the constant 1 - a
SMALLEST_PARTNER = 1e-300
"""Below this [mol/m3] the broadening no longer changes; k stays linear in the partner."""
SMALLEST_CENTRE = 1e-30
"""F_cent is kept above this [-]; a file whose F_cent is not positive in the fits' range does not load."""

LARGEST_CENTRE = 1e3
"""F_cent above this [-] is taken for a slip. Published fits reach 20 where they are of no account."""
JPL_CENTRE = 0.6
"""F_cent of the JPL evaluations [-]."""


def _troe(log_reduced: float, log_centre: float) -> float:
    x = log_reduced - 0.4 - 0.67 * log_centre
    d = 0.75 - 1.27 * log_centre - 0.14 * x
    return d**2 / (d**2 + x**2)


def _iupac(log_reduced: float, log_centre: float) -> float:
    return 1.0 / (1.0 + (log_reduced / (0.75 - 1.27 * log_centre)) ** 2)


def _plain(log_reduced: float, log_centre: float) -> float:
    return 1.0 / (1.0 + log_reduced**2)


WIDTHS: dict[str, Callable[[float, float], float]] = {"Troe": _troe, "IUPAC": _iupac, "JPL": _plain, "SRI": _plain}
"""log F/log F_cent as a function of log10 P_r and log10 F_cent, by the rule's name."""
NUMBER_OF_WIDTH = {"Troe": 0, "IUPAC": 1, "JPL": 2, "SRI": 2}
"""The rules as kernels/fall_off.py counts them."""


class AnyCentre(Protocol):
    """The centre of a broadening: its value by T, a factor of F beside it, and both as the kernels take them."""

    def __call__(self, temperature: float) -> float:
        """F_cent [-] at a temperature [K]."""

    def factor(self, temperature: float) -> float:
        """What F is multiplied by besides [-]."""

    def parameters(self) -> tuple[float, ...]:
        """The 8 numbers of `Curve`: three weighted exponentials, ln of the factor's constant and its power of T."""

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """What is wrong with it in the range of temperatures [K]."""


@dataclass(frozen=True)
class Centre:
    """F_cent(T): a [-], T***, T*, T** [K]; T** may be absent."""

    a: float
    T3: float
    T1: float
    T2: float | None = None

    def __call__(self, temperature: float) -> float:
        """F_cent at a temperature [K]."""
        T = temperature
        value = (1 - self.a) * math.exp(-T / self.T3) + self.a * math.exp(-T / self.T1)
        return value + (0.0 if self.T2 is None else math.exp(-self.T2 / T))

    def factor(self, temperature: float) -> float:
        """1: nothing stands beside Troe's centre."""
        return 1.0

    def parameters(self) -> tuple[float, ...]:
        """(weight, 1/T) of both falling terms, weight and temperature of the rising one, no factor."""
        T2 = _NO_THIRD_TERM if self.T2 is None else self.T2
        return (1.0 - self.a, 1.0 / self.T3, self.a, 1.0 / self.T1, 1.0, T2, 0.0, 0.0)

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """F_cent not positive, or absurdly large, within the range."""
        if self._surely_positive(temperatures[-1]):
            return None
        for temperature in temperatures:
            value = self._value(temperature)
            if not 0 < value < LARGEST_CENTRE:
                return Fault(f"F_cent is {value:.4g}", temperature, f"F_cent above 0 and below {LARGEST_CENTRE:g} over the "
                             f"range of the thermochemical data, {temperatures[0]:g} to {temperatures[-1]:g} K")
        return None

    def _surely_positive(self, high: float) -> bool:
        """Whether two terms that are never negative are still positive at the highest temperature [K]."""
        never_negative = 0 <= self.a <= 1 and (self.T2 is None or self.T2 >= 0)
        return never_negative and (1 - self.a) * math.exp(-high / self.T3) + self.a * math.exp(-high / self.T1) > 0

    def _value(self, temperature: float) -> float:
        try:
            return self(temperature)
        except OverflowError:
            return math.inf


@dataclass(frozen=True)
class FallOffLaw(Law):
    """Both limits, and F_cent with its width rule (None: Lindemann)."""

    k_inf: Arrhenius
    k_0: Arrhenius
    centre: AnyCentre | None = None
    width: str = "Troe"

    def k(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """k at T [K] and partner concentration [mol/m3]."""
        k_inf, k_0 = self.k_inf.k(temperature), self.k_0.k(temperature)
        reduced = k_0 * partner / k_inf
        return k_0 * partner / (1 + reduced) * self.broadening_factor(temperature, reduced)

    def broadening_factor(self, temperature: float, reduced: float) -> float:
        """F [-] at T [K] and reduced pressure P_r [-]."""
        if self.centre is None:
            return 1.0
        log_centre = math.log10(max(self.centre(temperature), SMALLEST_CENTRE))
        log_reduced = math.log10(max(reduced, SMALLEST_PARTNER))
        return self.centre.factor(temperature) * 10.0 ** (log_centre * WIDTHS[self.width](log_reduced, log_centre))

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """Overflow of a limit, or an F_cent that is not positive."""
        centre = self.centre.fault(temperatures) if self.centre else None
        return centre or self.k_inf.fault(temperatures) or self.k_0.fault(temperatures)

    def expressions(self) -> tuple[Expression, ...]:
        """High- and low-pressure limit."""
        return self.k_inf.expressions() + self.k_0.expressions()

    def part(self) -> Broadening | Curve:
        """Parameters (a, 1/T***, 1/T*, T**) of Lindemann's and Troe's; any other as a general curve."""
        c = self.centre
        if c is None:
            return Broadening((1.0, 0.0, 0.0, _NO_THIRD_TERM))
        if self.width == "Troe" and isinstance(c, Centre):
            return Broadening((c.a, 1.0 / c.T3, 1.0 / c.T1, _NO_THIRD_TERM if c.T2 is None else c.T2))
        return self.curve()

    def curve(self, activated: bool = False) -> Curve:
        """The curve in the general form, which has every width and the chemically activated channel."""
        parameters = UNBROADENED if self.centre is None else self.centre.parameters()
        return Curve(NUMBER_OF_WIDTH[self.width], activated, parameters)


UNBROADENED = (1.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0)
"""Parameters of a centre that is 1 at every temperature: F = 1."""


def read_limits(entry: Entry, order_of_k_inf: float) -> tuple[Arrhenius, Arrhenius]:
    """k_inf and k_0 from their tables, k_0 one order higher."""
    limits = []
    for key, order in (("k_inf", order_of_k_inf), ("k_0", order_of_k_inf + 1)):
        table = entry.table(key)
        limits.append(read_expression(table, order, "positive"))
        table.done()
    return limits[0], limits[1]


class Lindemann:
    """Registration of the law without broadening."""

    NAME, PARTNER = "Lindemann", OWN_PARTNER

    @staticmethod
    def read(entry: Entry, context: LawContext) -> FallOffLaw:
        """The law from its table."""
        return FallOffLaw(*read_limits(entry, context.order))


class Troe:
    """Registration of the law with Troe's centre, in any of the three widths."""

    NAME, PARTNER = "Troe", OWN_PARTNER

    @staticmethod
    def read(entry: Entry, context: LawContext) -> FallOffLaw:
        """The law from its table."""
        return FallOffLaw(*read_limits(entry, context.order), *read_broadening(entry))


def read_broadening(entry: Entry) -> tuple[Centre, str]:
    """F_cent and the width rule; the JPL evaluations' own centre need not be stated."""
    width = entry.text("width", "Troe", choices=("IUPAC", "JPL"))
    if width == "JPL" and "F_cent" not in entry.data:
        entry.known.add("F_cent")
        return _constant(JPL_CENTRE), width
    return read_centre(entry), width


def _constant(value: float) -> Centre:
    return Centre(1.0 - value, math.inf, _AT_ONCE)


def read_centre(entry: Entry) -> Centre:
    """F_cent: a number, or a table of a, T***, T* and perhaps T**."""
    if not isinstance(entry.get("F_cent", what="a number or { a, \"T***\", \"T*\", \"T**\" }"), Mapping):
        return _constant(entry.number("F_cent", sign="positive"))
    table = entry.table("F_cent")
    centre = Centre(table.number("a"), table.number("T***", sign="positive"), table.number("T*", sign="positive"),
                    table.number("T**", None))
    table.done()
    return centre
