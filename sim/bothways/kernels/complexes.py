"""Rate constants from transition states: k = κ (k_B T/h) E‡/ΠE, with E as of the species (rates/transition_state.py).

The complexes stand behind the species in the thermal tables. Tunnelling after Eckart is one of their ladders; Wigner's
is a factor here.
"""

import math

from ..compiled import compiled
from ..constants import BOLTZMANN, PLANCK
from . import layout as at
from .layout import view
from .molar import molar_functions

_TERM = at.offset_slot(at.INTS, "complex_term")
_START = at.offset_slot(at.INTS, "complex_start")
_MOLECULE = at.offset_slot(at.INTS, "complex_molecule")
_WIGNER = at.offset_slot(at.FLOATS, "complex_wigner")
_REDUCTION = at.offset_slot(at.FLOATS, "reduction")
_STANDARD = at.offset_slot(at.FLOATS, "standard")
_GIBBS = at.offset_slot(at.WORK, "complex_gibbs")
_ENTHALPY = at.offset_slot(at.WORK, "complex_enthalpy")
_HEAT_CAPACITY = at.offset_slot(at.WORK, "complex_heat_capacity")
_HEAT_CAPACITY_SLOPE = at.offset_slot(at.WORK, "complex_heat_capacity_slope")
_LOG_SCALE = at.offset_slot(at.WORK, "log_scale")
_SCALE_SLOPE = at.offset_slot(at.WORK, "scale_slope")
_LOG_K = at.offset_slot(at.WORK, "log_k")
_K_SLOPE = at.offset_slot(at.WORK, "k_slope")


@compiled
def set_complexes(T, ints, floats, work):
    """ln k of every term with a transition state, into `log_k`; the scales of the species must stand for T [K]."""
    term = view(ints, ints, _TERM)
    if term.size == 0:
        return
    n = ints[at.SPECIES]
    gibbs, log_k, log_scale = view(work, ints, _GIBBS), view(work, ints, _LOG_K), view(work, ints, _LOG_SCALE)
    molar_functions(T, n, ints, floats, gibbs, view(work, ints, _ENTHALPY), view(work, ints, _HEAT_CAPACITY),
                    view(work, ints, _HEAT_CAPACITY_SLOPE))
    start, molecule, wigner = view(ints, ints, _START), view(ints, ints, _MOLECULE), view(floats, ints, _WIGNER)
    reduction, standard = view(floats, ints, _REDUCTION), view(floats, ints, _STANDARD)
    for q in range(term.size):
        i, u = n + q, wigner[q] / T
        value = math.log(standard[0]) - standard[1] * math.log(T) - (gibbs[q] - reduction[2 * i] / T - reduction[2 * i + 1])
        for m in range(start[q], start[q + 1]):
            value -= log_scale[molecule[m]]
        log_k[term[q]] = value + math.log(BOLTZMANN / PLANCK * T) + math.log1p(u * u / 24.0)


@compiled
def set_complex_slopes(T, ints, floats, work):
    """d ln k/dT of the same terms, into `k_slope`; `set_complexes` and the slopes of the scales must stand for T [K]."""
    term = view(ints, ints, _TERM)
    if term.size == 0:
        return
    n = ints[at.SPECIES]
    enthalpy, k_slope, slope = view(work, ints, _ENTHALPY), view(work, ints, _K_SLOPE), view(work, ints, _SCALE_SLOPE)
    start, molecule, wigner = view(ints, ints, _START), view(ints, ints, _MOLECULE), view(floats, ints, _WIGNER)
    reduction, standard = view(floats, ints, _REDUCTION), view(floats, ints, _STANDARD)
    for q in range(term.size):
        i, rise = n + q, (wigner[q] / T) * (wigner[q] / T) / 24.0
        value = (enthalpy[q] - reduction[2 * i] / T - standard[1]) + 1.0 - 2.0 * rise / (1.0 + rise)
        for m in range(start[q], start[q + 1]):
            value -= T * slope[molecule[m]]
        k_slope[term[q]] = value / T
