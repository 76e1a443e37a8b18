"""What the standard state of mole fractions adds to the balanced rates: the total concentration C in every reverse rate.

With μ_i = g_i + RT ln x_i the activities are a_i = c_i/E_i, E_i = C·exp(-g_i/RT). The scales of the kernels leave C out,
so the products' activities here lack C^-Δν, Δν the change of the amount in the reaction; the forward rates do not.
"""

import math

from ..compiled import compiled
from . import layout as at
from .layout import view

_REACTION = at.offset_slot(at.INTS, "diluted_reaction")
_LONG_REACTION = at.offset_slot(at.INTS, "long_reaction")
_LONG_SIDE = at.offset_slot(at.INTS, "long_side")
_CHANGE = at.offset_slot(at.FLOATS, "amount_change")
_K_TOTAL = at.offset_slot(at.WORK, "k_total")
_REACTANT_SCALE = at.offset_slot(at.WORK, "reactant_scale")
_DILUTION = at.offset_slot(at.WORK, "dilution")
_REVERSE = at.offset_slot(at.WORK, "reverse")
_PARTIAL = at.offset_slot(at.WORK, "partial")


@compiled
def dilute(total, ints, floats, work):
    """Multiplies the products' activities, in `reverse`, by C^-Δν where Δν is not nil; total: C [mol/m3]."""
    reaction, change = view(ints, ints, _REACTION), view(floats, ints, _CHANGE)
    dilution, reverse = view(work, ints, _DILUTION), view(work, ints, _REVERSE)
    if reaction.size == 0:
        return
    log_total = math.log(total)
    for q in range(reaction.size):
        dilution[q] = math.exp(-change[q] * log_total)
        reverse[reaction[q]] *= dilution[q]
    dilution[reaction.size] = 1.0 / total


@compiled
def dilute_partials(ints, floats, work):
    """The same for the partial derivatives by the products; and ∂w/∂C = Δν·reverse rate/C, behind all other partials."""
    reaction, change = view(ints, ints, _REACTION), view(floats, ints, _CHANGE)
    k, scale = view(work, ints, _K_TOTAL), view(work, ints, _REACTANT_SCALE)
    dilution, reverse, out = view(work, ints, _DILUTION), view(work, ints, _REVERSE), view(work, ints, _PARTIAL)
    long_reaction, side = view(ints, ints, _LONG_REACTION), view(ints, ints, _LONG_SIDE)
    first_long, last = 4 * ints[at.REACTIONS], out.size - reaction.size
    for q in range(reaction.size):
        j = reaction[q]
        out[4 * j + 2] *= dilution[q]
        out[4 * j + 3] *= dilution[q]
        for m in range(side.size):
            if long_reaction[m] == j and side[m] == 1:
                out[first_long + m] *= dilution[q]
        out[last + q] = change[q] * (k[j] * (scale[j] * reverse[j])) * dilution[reaction.size]
