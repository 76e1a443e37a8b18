"""What every rate law offers, and what reading one needs to know."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple, Protocol


class Expression(NamedTuple):
    """One exponential of the kernels: sign · exp(log_A + n ln T - theta/T), SI units, theta [K]."""

    log_A: float
    n: float
    theta: float
    sign: float


class Broadening(NamedTuple):
    """How a fall-off curve is broadened: `kind` as the kernel counts them, and its parameters (4 numbers)."""

    kind: int
    parameters: tuple[float, float, float, float]


class Fault(NamedTuple):
    """What is wrong with a law, at which temperature [K], and what would be right."""

    problem: str
    temperature: float
    expected: str


@dataclass(frozen=True)
class LawContext:
    """What the reaction tells its law: the reactants' order, whether M stands in the equation, one term of several."""

    order: int
    partner_in_equation: bool = False
    of_several: bool = False


class Law(Protocol):
    """A rate law: plain k for reading and testing, and its parts for the kernels."""

    def k(self, temperature: float, partner: float = 1.0) -> float:
        """The forward rate constant at T [K] and partner concentration [mol/m3], in m3, mol, s of the order."""

    def expressions(self) -> tuple[Expression, ...]:
        """One exponential, or for fall-off two: the high- and the low-pressure limit."""

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """The first fault at one of the rising temperatures [K]; asked once, when a mechanism is read.

        A law tells only what is wrong with itself: that a sum of terms is positive is the reaction's concern.
        """
