"""Stiff test problems of the literature as compiled callbacks: f, J with a full pattern, start, references.

F. Mazzia, C. Magherini, Test Set for Initial Value Problem Solvers, release 2.4 (2008); E. Hairer, G. Wanner, Solving
Ordinary Differential Equations II, 2nd ed. (1996). Reference values as published there; those marked † were
integrated again with Radau IIA at rtol 1e-12 or tighter.
"""

import numpy as np
from numba import carray

from bothways.compiled import callback
from bothways.integrate import CompiledSystem, Problem


def problem(f, J, start, end, rtol, atol, stops=(), judge=0, context=None):
    """A Problem over callbacks with a full pattern and no border."""
    n = len(start)
    start = np.array(start, dtype=float)
    pattern = np.tile(np.arange(n), n), np.arange(0, n * n + 1, n)
    context = np.zeros(1, dtype=np.int64) if context is None else context
    system = CompiledSystem(f.address, J.address, judge, context, pattern, np.ones(n), 0, np.arange(n), start, (f, J))

    def plain_f(t, y):
        out = np.empty(n)
        _call(f, y, out, context)
        return out

    def plain_J(t, y):
        out = np.empty(n * n)
        _call(J, y, out, context)
        return out.reshape(n, n).T.copy()

    tolerances = np.broadcast_to(np.asarray(atol, float), (n,)).copy()
    return Problem(plain_f, plain_J, start, end, rtol, tolerances, tuple(stops), system)


def _call(function, given, out, context):
    import ctypes

    kind = ctypes.CFUNCTYPE(ctypes.c_int64, *[ctypes.c_void_p] * 3)
    given = np.ascontiguousarray(given, dtype=float)
    kind(function.address)(given.ctypes.data, out.ctypes.data, context.ctypes.data)


class Course:
    """A monitor that keeps what it is told."""

    def __init__(self):
        self.times, self.states = [], []

    def accepted(self, t, y):
        self.times.append(t)
        self.states.append(y)

    def at(self, t):
        return self.states[self.times.index(t)]


@callback
def rober_f(y, out, context):
    a, b, c = y[0], y[1], y[2]
    out[0] = -0.04 * a + 1e4 * b * c
    out[2] = 3e7 * b * b
    out[1] = -out[0] - out[2]
    return 1


@callback
def rober_J(y, out, context):
    b, c = y[1], y[2]
    out[0], out[1], out[2] = -0.04, 0.04, 0.0
    out[3], out[4], out[5] = 1e4 * c, -1e4 * c - 6e7 * b, 6e7 * b
    out[6], out[7], out[8] = 1e4 * b, -1e4 * b, 0.0
    return 1


ROBER = {  # †
    0.4: (9.851721138610e-1, 3.386395378975e-5, 1.479402218522e-2),
    40.0: (7.158270687194e-1, 9.185534764559e-6, 2.841637457458e-1),
    4e3: (1.832022577767e-1, 8.942371252775e-7, 8.167968479862e-1),
    4e5: (4.938274520981e-3, 1.984994087955e-8, 9.950617056291e-1),
    1e11: (0.2083340149701255e-7, 0.8333360770334713e-13, 0.9999999791665050),  # Test Set
}


@callback
def orego_f(y, out, context):
    a, b, c = y[0], y[1], y[2]
    out[0] = 77.27 * (b + a * (1.0 - 8.375e-6 * a - b))
    out[1] = (c - (1.0 + a) * b) / 77.27
    out[2] = 0.161 * (a - c)
    return 1


@callback
def orego_J(y, out, context):
    a, b = y[0], y[1]
    out[0], out[1], out[2] = 77.27 * (1.0 - 2 * 8.375e-6 * a - b), -b / 77.27, 0.161
    out[3], out[4], out[5] = 77.27 * (1.0 - a), -(1.0 + a) / 77.27, 0.0
    out[6], out[7], out[8] = 0.0, 1.0 / 77.27, -0.161
    return 1


OREGO = {30.0: (1.000661467180, 1512.778937348, 10358.54312767), 120.0: (1.004118022613, 243.8326079910, 1.008822224049),
         240.0: (1.100849071668, 10.91533805469, 1.085831969811),
         360.0: (0.1000814870318523e1, 0.1228178521549917e4, 0.1320554942846706e3)}


@callback
def hires_f(y, out, context):
    out[0] = -1.71 * y[0] + 0.43 * y[1] + 8.32 * y[2] + 0.0007
    out[1] = 1.71 * y[0] - 8.75 * y[1]
    out[2] = -10.03 * y[2] + 0.43 * y[3] + 0.035 * y[4]
    out[3] = 8.32 * y[1] + 1.71 * y[2] - 1.12 * y[3]
    out[4] = -1.745 * y[4] + 0.43 * y[5] + 0.43 * y[6]
    out[5] = -280.0 * y[5] * y[7] + 0.69 * y[3] + 1.71 * y[4] - 0.43 * y[5] + 0.69 * y[6]
    out[6] = 280.0 * y[5] * y[7] - 1.81 * y[6]
    out[7] = -out[6]
    return 1


@callback
def hires_J(y, out, context):
    J = carray(out, (8, 8))  # [column, row]
    for i in range(64):
        out[i] = 0.0
    J[0, 0], J[1, 0], J[2, 0] = -1.71, 0.43, 8.32
    J[0, 1], J[1, 1] = 1.71, -8.75
    J[2, 2], J[3, 2], J[4, 2] = -10.03, 0.43, 0.035
    J[1, 3], J[2, 3], J[3, 3] = 8.32, 1.71, -1.12
    J[4, 4], J[5, 4], J[6, 4] = -1.745, 0.43, 0.43
    J[3, 5], J[4, 5], J[5, 5], J[6, 5], J[7, 5] = 0.69, 1.71, -280.0 * y[7] - 0.43, 0.69, -280.0 * y[5]
    J[5, 6], J[6, 6], J[7, 6] = 280.0 * y[7], -1.81, 280.0 * y[5]
    J[5, 7], J[6, 7], J[7, 7] = -280.0 * y[7], 1.81, -280.0 * y[5]
    return 1


HIRES = {321.8122: (0.7371312573325668e-3, 0.1442485726316185e-3, 0.5888729740967575e-4, 0.1175651343283149e-2,
                    0.2386356198831331e-2, 0.6238968252742796e-2, 0.2849998395185769e-2, 0.2850001604814231e-2),
         421.8122: (6.70305503582e-4, 1.30996846986e-4, 4.68622315977e-5, 1.04466802055e-3, 5.94883830951e-4,  # †
                    1.39962883394e-3, 1.01449275772e-3, 4.68550724228e-3)}


@callback
def e5_f(y, out, context):
    a, b, c, d = 7.89e-10 * y[0], 1.1e7 * y[0] * y[2], 1.13e9 * y[1] * y[2], 1.13e3 * y[3]
    out[0], out[1], out[3] = -a - b, a - c, b - d
    out[2] = out[1] - out[3]
    return 1


@callback
def e5_J(y, out, context):
    J = carray(out, (4, 4))
    for i in range(16):
        out[i] = 0.0
    A, B, CM, C = 7.89e-10, 1.1e7, 1.13e9, 1.13e3
    J[0, 0], J[2, 0] = -A - B * y[2], -B * y[0]
    J[0, 1], J[1, 1], J[2, 1] = A, -CM * y[2], -CM * y[1]
    J[0, 3], J[2, 3], J[3, 3] = B * y[2], B * y[0], -C
    for k in range(4):
        J[k, 2] = J[k, 1] - J[k, 3]
    return 1


E5 = {10.0: (1.759925949768e-3, 1.384628151937e-11, 7.637003853e-13, 1.308258113e-11),  # †
      1e3: (1.618076999907e-3, 1.382237030499e-10, 8.2515735007e-12, 1.299721295e-10),  # †
      1e5: (7.481320821828e-6, 2.373478155828e-12, 2.212358669e-12, 1.6111948716e-13)}  # †

_POLLU_K = np.array([0.35, 26.6, 1.23e4, 8.6e-4, 8.2e-4, 1.5e4, 1.3e-4, 2.4e4, 1.65e4, 9e3, 0.022, 1.2e4, 1.88, 1.63e4,
                     4.8e6, 3.5e-4, 0.0175, 1e8, 4.44e11, 1.24e3, 2.1, 5.78, 0.0474, 1.78e3, 3.12])
# reactants of the 25 reactions (0: none), then their net effects as (reaction, species, change), counted from 1
_POLLU_REACTANTS = np.array([[1, 0], [2, 4], [5, 2], [7, 0], [7, 0], [7, 6], [9, 0], [9, 6], [11, 2], [11, 1], [13, 0],
                             [10, 2], [14, 0], [1, 6], [3, 0], [4, 0], [4, 0], [16, 0], [16, 0], [17, 6], [19, 0],
                             [19, 0], [1, 4], [19, 1], [20, 0]])
_POLLU_GAINS = {1: "-1-10-14-23-24+2+3+9+11+12+22+25", 2: "-2-3-9-12+1+21", 3: "-15+1+17+19+22", 4: "-2-16-17-23+15",
                5: "-3+4+4+6+7+13+20", 6: "-6-8-14-20+3+18+18", 7: "-4-5-6+13", 8: "+4+5+6+7", 9: "-7-8", 10: "-12+7+9",
                11: "-9-10+8+11", 12: "+9", 13: "-11+10", 14: "-13+12", 15: "+14", 16: "-18-19+16", 17: "-20", 18: "+20",
                19: "-21-22-24+23+25", 20: "-25+24"}


def _pollu_matrix():
    import re

    nu = np.zeros((20, 25))
    for species, terms in _POLLU_GAINS.items():
        for sign, reaction in re.findall(r"([+-])(\d+)", terms):
            nu[species - 1, int(reaction) - 1] += 1.0 if sign == "+" else -1.0
    return nu


_POLLU_NU = _pollu_matrix()


@callback
def pollu_f(y, out, context):
    for i in range(20):
        out[i] = 0.0
    for r in range(25):
        rate = _POLLU_K[r]
        for q in range(2):
            if _POLLU_REACTANTS[r, q] > 0:
                rate *= y[_POLLU_REACTANTS[r, q] - 1]
        for i in range(20):
            out[i] += _POLLU_NU[i, r] * rate
    return 1


@callback
def pollu_J(y, out, context):
    for i in range(400):
        out[i] = 0.0
    for r in range(25):
        a, b = _POLLU_REACTANTS[r, 0], _POLLU_REACTANTS[r, 1]
        for i in range(20):
            if _POLLU_NU[i, r] != 0.0:
                out[20 * (a - 1) + i] += _POLLU_NU[i, r] * _POLLU_K[r] * (y[b - 1] if b > 0 else 1.0)
                if b > 0:
                    out[20 * (b - 1) + i] += _POLLU_NU[i, r] * _POLLU_K[r] * y[a - 1]
    return 1


def _pollu_start():
    y = np.zeros(20)
    y[[1, 3, 6, 7, 8, 16]] = 0.2, 0.04, 0.1, 0.3, 0.01, 0.007
    return y


POLLU = {60.0: (  # J.G. Verwer, SIAM J. Sci. Comput. 15 (1994) 1243, as in the Test Set
    0.5646255480022769e-1, 0.1342484130422339, 0.4139734331099427e-8, 0.5523140207484359e-2, 0.2018977262302196e-6,
    0.1464541863493966e-6, 0.7784249118997964e-1, 0.3245075353396018, 0.7494013383880406e-2, 0.1622293157301561e-7,
    0.1135863833257075e-7, 0.2230505975721359e-2, 0.2087162882798630e-3, 0.1396921016840158e-4, 0.8964884856898295e-2,
    0.4352846369330103e-17, 0.6899219696263405e-2, 0.1007803037365946e-3, 0.1772146513969984e-5, 0.5682943292316392e-4)}

@callback
def smooth_f(y, out, context):
    """Euler's equations of a rigid body, a smooth problem without stiffness (Hairer, Nørsett, Wanner, vol. I, ch. II)."""
    out[0] = -2.0 * y[1] * y[2]
    out[1] = 1.25 * y[0] * y[2]
    out[2] = -0.5 * y[0] * y[1]
    return 1


@callback
def smooth_J(y, out, context):
    out[0], out[1], out[2] = 0.0, 1.25 * y[2], -0.5 * y[1]
    out[3], out[4], out[5] = -2.0 * y[2], 0.0, -0.5 * y[0]
    out[6], out[7], out[8] = -2.0 * y[1], 1.25 * y[0], 0.0
    return 1


PROBLEMS = {
    "ROBER": (rober_f, rober_J, (1.0, 0.0, 0.0), 1e-20, ROBER),
    "OREGO": (orego_f, orego_J, (1.0, 2.0, 3.0), 1e-14, OREGO),
    "HIRES": (hires_f, hires_J, (1.0, 0, 0, 0, 0, 0, 0, 0.0057), 1e-14, HIRES),
    "E5": (e5_f, e5_J, (1.76e-3, 0.0, 0.0, 0.0), 1e-24, E5),
    "POLLU": (pollu_f, pollu_J, tuple(_pollu_start()), 1e-22, POLLU),
}
"""f, J, start, absolute tolerance, reference values by time."""
