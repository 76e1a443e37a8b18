"""Where the right-hand side goes on in another way because of the state: fits that do not meet, rows of pressure tables.

`table` (surfaces, SIZE) has for each the kind of quantity, its PLACE, the SIDE the state is on (-1 below, 1 above), the
TRIGGER at which it changes over, and the WIDTH of what is no change. Mostly trigger and place are the same. A state that has
just changed over changes back only at a width beyond the place, until it has been further away than that: so one that sits
on a surface, or touches it, does not go back and forth.
"""

import math

from ..compiled import compiled
from ..constants import GAS_CONSTANT as R

KIND, PLACE, SIDE, TRIGGER, WIDTH, FIRST_WIDTH = range(6)
SIZE = 6
TEMPERATURE, LOG_PRESSURE = 0.0, 1.0
NEAR = 1e-12
"""Of the place (or of 1, where that is larger); a state nearer than this is there."""
NEVER = 2.0
MOST = 20.0
"""Widths grow to so many times the first."""


@compiled
def quantity(kind, amount, T):
    """What a surface is a value of: T [K], or ln of the pressure [Pa] of a gas of these concentrations [mol/m3]."""
    if kind == TEMPERATURE:
        return T
    total = 0.0
    for i in range(amount.size):
        total += amount[i]
    return math.log(total * R * T)


@compiled
def share_before(table, old, T0, new, T1):
    """The share of a step after which the first surface is reached, 1 if that is at its end, NEVER if there is none."""
    first = NEVER
    for k in range(table.shape[0]):
        after, trigger = quantity(table[k, KIND], new, T1), table[k, TRIGGER]
        beyond, near = table[k, SIDE] * (trigger - after), NEAR * max(1.0, abs(trigger))
        if beyond > near:
            before = quantity(table[k, KIND], old, T0)
            first = min(first, max(0.0, (trigger - before) / (after - before)) if after != before else 1.0)
        elif beyond >= -near:
            first = min(first, 1.0)
    return first


@compiled
def arm(table, amount, T):
    """Surfaces that a state has left behind by their width trigger at their place again."""
    for k in range(table.shape[0]):
        if table[k, SIDE] * (quantity(table[k, KIND], amount, T) - table[k, PLACE]) > table[k, WIDTH]:
            table[k, TRIGGER], table[k, WIDTH] = table[k, PLACE], table[k, FIRST_WIDTH]


@compiled
def change_over(table, k):
    """Puts the state on the other side of surface k; one that falls back has its width doubled, up to a limit."""
    if table[k, TRIGGER] != table[k, PLACE]:
        table[k, WIDTH] = min(2.0 * table[k, WIDTH], MOST * table[k, FIRST_WIDTH])
    table[k, SIDE] = -table[k, SIDE]
    table[k, TRIGGER] = table[k, PLACE] - table[k, SIDE] * table[k, WIDTH]
