"""What every rate law offers, and what reading one needs to know."""

from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass, field
from typing import ClassVar, NamedTuple, Protocol

from ..thermo import Modes, Ranges
from .participants import Side

IN_EQUATION, OWN_PARTNER, PRESSURE = "in the equation", "of its own", "pressure"
"""Where a law's partner stands: as M in the equation if at all, in the law itself, or nowhere since pressure counts."""


class Expression(NamedTuple):
    """One exponential of the kernels: sign · exp(log_A + n ln T - theta/T), SI units, theta [K]."""

    log_A: float
    n: float
    theta: float
    sign: float


class Broadening(NamedTuple):
    """A fall-off curve after Lindemann or Troe: a, 1/T***, 1/T*, T** of its F_cent; F_cent is 1 after Lindemann."""

    parameters: tuple[float, float, float, float]


class Curve(NamedTuple):
    """Any other curve between two limits: width rule as the kernel counts them, whether it is that of a chemically
    activated channel, and the centre's parameters (8 numbers, see kernels/fall_off.py)."""

    width: int
    activated: bool
    parameters: tuple[float, ...]


class PressureNodes(NamedTuple):
    """A pressure table: rising ln p (p in Pa), and how many of the law's expressions, in order, belong to each."""

    log_p: tuple[float, ...]
    counts: tuple[int, ...]


class Series(NamedTuple):
    """A Chebyshev series of ln k: window (1/T low and high end, ln p low and high end), rows in T, columns in p."""

    window: tuple[float, float, float, float]
    coefficients: tuple[tuple[float, ...], ...]


class AdsorptionGroup(NamedTuple):
    """A denominator (1 + Σ K c^p)^power: its species and powers p; the K's are the law's expressions behind the first."""

    species: tuple[str, ...]
    powers: tuple[float, ...]
    power: float


class Complex(NamedTuple):
    """A transition state: its ranges, modes and standard pressure [Pa], and h c ν‡/k_B [K] where tunnelling is Wigner's."""

    ranges: Ranges
    modes: Modes
    standard_pressure: float
    wigner: float


class Fault(NamedTuple):
    """What is wrong with a law, at which temperature [K], and what would be right."""

    problem: str
    temperature: float
    expected: str


@dataclass(frozen=True)
class Setting:
    """What a mechanism's head tells its laws: joins, standard pressure [Pa] of a gas, standard concentration [mol/m3] of a
    solution, atomic numbers of the elements."""

    joins: str = "closed"
    standard_pressure: float = float("nan")
    standard_concentration: float | None = None
    atomic_numbers: Mapping[str, int] = field(default_factory=dict)


@dataclass(frozen=True)
class LawContext:
    """What the reaction tells its law: its forward order, whether M stands in the equation, one of several terms that may
    be negative; both sides, the mechanism's species and its setting."""

    order: float
    partner_in_equation: bool = False
    of_several: bool = False
    reactants: Side = ()
    products: Side = ()
    species: Collection[str] = ()
    setting: Setting = Setting()


class Law(Protocol):
    """A rate law: plain k for reading and testing, and its parts for the kernels.

    needs_partner : whether k vanishes where the term's partner is absent.
    """

    needs_partner: ClassVar[bool] = True

    def k(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """The forward rate constant at T [K], partner concentration [mol/m3] and pressure [Pa]; m3, mol, s."""

    def expressions(self) -> tuple[Expression, ...]:
        """One exponential; of a curve two, the high- and the low-pressure limit; of a pressure table one a row."""

    def part(self) -> Broadening | Curve | PressureNodes | Series | AdsorptionGroup | Complex | None:
        """What the kernels need besides the expressions; None where k is the expression itself (times a partner)."""
        return None

    def outside(self, temperature: float, pressure: float) -> str:
        """What is wrong with starting a run at T [K] and p [Pa]; empty where the law holds there."""
        return ""

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """The first fault at one of the rising temperatures [K]; asked once, when a mechanism is read.

        A law tells only what is wrong with itself: that a sum of terms is positive is the reaction's concern.
        """
