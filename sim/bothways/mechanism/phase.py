"""The phases a mechanism can be of, and what an ideal solution asks of its file.

In a solution activities are concentrations over the standard state: a_i = c_i/(1 mol/L), or the mole fraction x_i of
the species that the mechanism lists. The vessel's volume is constant (constant density), and pressure plays no part.
"""

from ..constants import GAS_CONSTANT
from ..entry import Entry
from .model import Mechanism

GAS, SOLUTION = "ideal gas", "ideal solution"
PHASES = (GAS, SOLUTION)
PER_LITRE, FRACTION = "1 mol/L", "mole fraction"
STANDARD_STATES = (PER_LITRE, FRACTION)
LITRE = 1000.0
"""1 mol/L in mol/m3."""


def read_standard(head: Entry, phase: str) -> tuple[float, str]:
    """Standard pressure [Pa] of a gas, or standard state of a solution; the other is NaN or empty."""
    other = "standard_state" if phase == GAS else "standard_pressure"
    if other in head.data:
        why = "a gas has a standard_pressure" if phase == GAS else "pressure plays no part in a solution"
        raise head.error(f"'{other}' is stated for an {phase}", expected=f"no {other}", remedy=f"leave it out: {why}", key=other)
    if phase == GAS:
        return head.quantity("standard_pressure", "pressure", sign="positive"), ""
    return float("nan"), head.text("standard_state", choices=STANDARD_STATES)


def standard_concentration(mechanism: Mechanism) -> tuple[float, float]:
    """s and e of the standard concentration s·T^-e [mol/m3]: p°/RT of a gas, 1 mol/L, or (mole fractions) 1 mol/m3.

    For mole fractions it only stands in for the total concentration, which the kernels supply (kernels/solution.py).
    """
    if mechanism.phase == GAS:
        return mechanism.standard_pressure / GAS_CONSTANT, 1.0
    return (LITRE, 0.0) if mechanism.standard_state == PER_LITRE else (1.0, 0.0)


def less(mechanism: Mechanism, holds: str) -> float:
    """What is taken off h/RT and cp/R to give the energy that an adiabatic vessel conserves: 1 for U, 0 for H.

    Of a solution it is H: pressure work is ignored.
    """
    return 1.0 if holds == "volume" and mechanism.phase == GAS else 0.0


def shared(mechanism: Mechanism, holds: str) -> bool:
    """Whether ln a_i holds the total amount: in a gas at held pressure, and where activities are mole fractions."""
    return holds == "pressure" if mechanism.phase == GAS else mechanism.standard_state == FRACTION
