"""A course between accepted steps: quintic Hermite interpolation from exact first and second derivatives.

Whatever solver made the states, y' = f(y) and y'' = J f are known exactly at each, so the interpolant's error is
of sixth order in the step (e.g. E. Hairer, S.P. Nørsett, G. Wanner, Solving Ordinary Differential Equations I,
2nd ed., 1993, II.6).
"""

from collections.abc import Callable

import numpy as np
from scipy.interpolate import BPoly
from scipy.optimize import brentq


class Course:
    """States y (nt, n) at rising times (nt) with their derivatives by the right-hand side f and its Jacobian J."""

    def __init__(self, times: np.ndarray, states: np.ndarray, f: Callable, J: Callable) -> None:
        self.times, self.states, self.f, self.J = times, states, f, J
        self.slopes = np.array([f(t, y) for t, y in zip(times, states, strict=True)])
        self.curvatures = np.array([self.curvature(t, y) for t, y in zip(times, states, strict=True)])

    def curvature(self, t: float, y: np.ndarray) -> np.ndarray:
        """y'' = J f at any state (n)."""
        return self.J(t, y) @ self.f(t, y)

    def between(self, k: int) -> BPoly:
        """The interpolant (of all components) from step k to k + 1."""
        data = [np.array([self.states[j], self.slopes[j], self.curvatures[j]]) for j in (k, k + 1)]
        return BPoly.from_derivatives(self.times[k : k + 2], data)

    def first_crossing(self, values: np.ndarray, component: int, level: float) -> float | None:
        """The first time at which a falling component reaches a level; values: the component at the times."""
        below = np.flatnonzero(values <= level)
        if not below.size or below[0] == 0:
            return None
        k = int(below[0]) - 1
        piece = self.between(k)
        return _root(lambda t: float(piece(t)[component]) - level, self.times[k], self.times[k + 1])

    def peak(self, k: int, rate: Callable[[float, np.ndarray], float]) -> tuple[float, np.ndarray] | None:
        """Time and state at which `rate(t, y)` changes sign around step k, if it does: a maximum there."""
        for first in (k - 1, k):
            if 0 <= first < len(self.times) - 1:
                piece = self.between(first)
                start, end = self.times[first], self.times[first + 1]
                if rate(start, self.states[first]) > 0 >= rate(end, self.states[first + 1]):
                    t = _root(lambda s, piece=piece: rate(s, piece(s)), start, end)
                    return t, piece(t)
        return None


def _root(function: Callable[[float], float], start: float, end: float) -> float:
    if function(start) * function(end) > 0:  # the interpolant rounds a crossing at the very end of a step away
        return end
    return float(brentq(function, start, end, xtol=1e-300, rtol=1e-14))
