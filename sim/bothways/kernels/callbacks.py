"""The vessel equations behind bare addresses, for the compiled integrators.

`context` (int64) holds the addresses of vessel, ints, floats and work, and their lengths. States are bordered,
z = (species, border, T); the border's value is not read: it follows from the others.
"""

import numpy as np
from numba import carray

from ..compiled import callback, compiled, float64_pointer, uint32_pointer
from . import layout as at
from .equations import VESSEL_SIZE, border_of, bordered_jacobian, rates_of_change
from .layout import put

VESSEL, INTS, FLOATS, WORK, N_INTS, N_FLOATS, N_WORK, N_DATA = range(8)
CONTEXT_SIZE = 8


def context_of(vessel: np.ndarray, ints: np.ndarray, floats: np.ndarray, work: np.ndarray, data: int) -> np.ndarray:
    """The context of these arrays; they must outlive it. data: number of values of the bordered Jacobian."""
    addresses = [array.ctypes.data for array in (vessel, ints, floats, work)]
    return np.array([*addresses, ints.size, floats.size, work.size, data], dtype=np.int64)


@compiled
def tables_of(context):
    """vessel, ints, floats and work of a context, and the number of values of its Jacobian."""
    c = carray(context, (CONTEXT_SIZE,))
    return (carray(float64_pointer(c[VESSEL]), (VESSEL_SIZE,)), carray(uint32_pointer(c[INTS]), (c[N_INTS],)),
            carray(float64_pointer(c[FLOATS]), (c[N_FLOATS],)), carray(float64_pointer(c[WORK]), (c[N_WORK],)), c[N_DATA])


@callback
def f_of_bordered(z_pointer, out_pointer, context):
    """The plain right-hand side at its places of a bordered vector; zero at the border."""
    vessel, ints, floats, work, _ = tables_of(context)
    n = ints[at.SPECIES]
    z, out = carray(z_pointer, (n + 2,)), carray(out_pointer, (n + 2,))
    y = np.empty(n + 1)
    put(z[:n], y)
    y[n] = z[n + 1]
    rates_of_change(y, vessel, ints, floats, work, out[: n + 1])
    out[n + 1] = out[n]
    out[n] = 0.0
    return 1


@callback
def J_of_bordered(z_pointer, out_pointer, context):
    """Values of the bordered Jacobian."""
    vessel, ints, floats, work, size = tables_of(context)
    n = ints[at.SPECIES]
    z, out = carray(z_pointer, (n + 2,)), carray(out_pointer, (size,))
    y = np.empty(n + 2)
    put(z[:n], y)
    y[n] = z[n + 1]
    y[n], y[n + 1] = border_of(y, n, vessel), z[n + 1]
    bordered_jacobian(y, vessel, ints, floats, work, out)
    return 1
