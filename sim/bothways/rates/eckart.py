"""Tunnelling through Eckart's barrier, as a distribution of thresholds.

P(E) = (cosh S - cosh D)/(cosh S + q) with S = a + b, D = b - a, a = c √E, b = c √(E + V2 - V1), α = 2πV/hν,
c = 2 √(2π/hν)/(1/√α1 + 1/√α2), q = cosh 2√(α1 α2 - π²/4), or cos 2√(π²/4 - α1 α2) (C. Eckart, Phys. Rev. 35 (1930) 1303,
doi:10.1103/PhysRev.35.1303; H.S. Johnston, J. Heicklen, J. Phys. Chem. 66 (1962) 532, doi:10.1021/j100809a040). By parts
∫ P e^(-E/kT) dE/kT = ∫ (dP/dE) e^(-E/kT) dE, so that κ e^(-V/kT) is a sum of e^(-ε/kT) over thresholds ε with weights that
add up to one: a ladder. It is the same read from either side, as detailed balance asks. The motion is taken for one
dimensional and apart from all others, and the curvature at the top and both heights alone make the barrier.
"""

import math
from functools import lru_cache

import numpy as np

from ..thermo.potential import Ladder

_NODES = 12
_PANEL, _PANEL_LOW = 3.0, 0.5
"""Width of a panel in S: the poles of P lie π away from the real axis, so that 12 nodes find every digit; those of a low
barrier (q a cosine) lie nearer."""
_TAIL = 44.0
"""At S larger than the argument of q by this, 1 - P is below 1e-18."""


@lru_cache(64)
def thresholds(V1: float, V2: float, quantum: float) -> Ladder:
    """(ε, weight) with ε [K] above the higher of both sides.

    V1, V2 : barriers [K] seen from either side, positive, in any order. quantum : h c ν‡/k_B [K], ν‡ the imaginary wavenumber.
    """
    V1, V2 = min(V1, V2), max(V1, V2)  # from the higher side the barrier is the smaller one
    product = (2 * math.pi / quantum) ** 2 * V1 * V2 - math.pi**2 / 4
    c = 2 * math.sqrt(2 * math.pi / quantum) / sum(math.sqrt(quantum / (2 * math.pi * V)) for V in (V1, V2))
    last = (2 * math.sqrt(max(product, 0.0)) + _TAIL) / (2 * c)
    root, step = _nodes(last, math.ceil(2 * c * last / (_PANEL if product > 0 else _PANEL_LOW)))
    weight = step * _slope(root, c, V2 - V1, product)
    return tuple((float(e), float(w)) for e, w in zip(root**2, weight / np.sum(weight), strict=True))


def _nodes(last: float, panels: int) -> tuple[np.ndarray, np.ndarray]:
    """Gauss and Legendre's nodes and weights in √E from 0 to `last`, panel by panel."""
    x, w = np.polynomial.legendre.leggauss(_NODES)
    half = 0.5 * last / panels
    left = 2 * half * np.arange(panels)
    return (left[:, None] + half * (1 + x)).ravel(), np.tile(half * w, panels)


def _slope(root: np.ndarray, c: float, difference: float, product: float) -> np.ndarray:
    """dP/d√E: [S' sinh S (q + cosh D) - D' sinh D (q + cosh S)]/(q + cosh S)², every term times e^(-m)."""
    other = np.sqrt(root**2 + difference)
    S, D, by_a, by_b = c * (root + other), c * (other - root), c, c * root / other
    argument = 2 * math.sqrt(abs(product))
    m = np.maximum(S, argument) if product > 0 else S
    q = _cosh(argument, m) if product > 0 else math.cos(argument) * np.exp(-m)
    bottom = q + _cosh(S, m)
    top = (by_a + by_b) * _sinh(S, m) * (q + _cosh(D, m)) + (by_a - by_b) * _sinh(D, m) * bottom
    return top / bottom**2


def _cosh(x, m):  # type: ignore[no-untyped-def]
    return 0.5 * (np.exp(x - m) + np.exp(-x - m))


def _sinh(x, m):  # type: ignore[no-untyped-def]
    return 0.5 * (np.exp(x - m) - np.exp(-x - m))
