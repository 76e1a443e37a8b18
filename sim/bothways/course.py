"""A course between accepted steps: quintic Hermite interpolation from exact first and second derivatives.

Whatever solver made the states, y' = f(y) and y'' = J f are known exactly at each, so the interpolant's error is
of sixth order in the step (e.g. E. Hairer, S.P. Nørsett, G. Wanner, Solving Ordinary Differential Equations I,
2nd ed., 1993, II.6).
"""

from collections.abc import Callable

import numpy as np


class Course:
    """States y (nt, n) at rising times (nt) with their derivatives by the right-hand side f and its Jacobian J."""

    def __init__(self, times: np.ndarray, states: np.ndarray, f: Callable, J: Callable) -> None:
        self.times, self.states, self.f, self.J = times, states, f, J
        self.slopes = np.array([f(t, y) for t, y in zip(times, states, strict=True)])
        self.curvatures = np.array([self.curvature(t, y) for t, y in zip(times, states, strict=True)])

    def curvature(self, t: float, y: np.ndarray) -> np.ndarray:
        """y'' = J f at any state (n)."""
        return self.J(t, y) @ self.f(t, y)

    def between(self, k: int) -> Callable[[float], np.ndarray]:
        """The interpolant, time [s] -> state (n), from step k to k + 1."""
        start, h = self.times[k], self.times[k + 1] - self.times[k]
        data = np.array([v for j in (k, k + 1) for v in (self.states[j], h * self.slopes[j], h * h * self.curvatures[j])])

        def state(t: float) -> np.ndarray:
            return _hermite((t - start) / h) @ data

        return state

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
                    return self._turn(piece, rate, start, end)
        return None

    def _turn(self, piece: Callable[[float], np.ndarray], rate: Callable[[float, np.ndarray], float], start: float,
              end: float) -> tuple[float, np.ndarray]:
        t = _root(lambda s: rate(s, piece(s)), start, end)
        return t, piece(t)


def _hermite(x: float) -> np.ndarray:
    """Weights of value, slope and curvature at both ends for the quintic at x in 0…1."""
    y = 1.0 - x
    left = np.array([y**3 * (1 + 3 * x + 6 * x**2), y**3 * x * (1 + 3 * x), 0.5 * y**3 * x**2])
    right = np.array([x**3 * (1 + 3 * y + 6 * y**2), -(x**3) * y * (1 + 3 * y), 0.5 * x**3 * y**2])
    return np.concatenate([left, right])


def _root(function: Callable[[float], float], start: float, end: float) -> float:
    """Where a function changes sign between two times: regula falsi with Illinois weights, bisection as safeguard.

    M. Dowell, P. Jarratt, BIT 11 (1971) 168, doi:10.1007/BF01934364.
    """
    a, b, at_a, at_b = start, end, function(start), function(end)
    if at_a * at_b > 0:  # the interpolant rounds a crossing at the very end of a step away
        return end
    for k in range(200):
        if at_b == 0 or abs(b - a) <= 4e-16 * max(abs(a), abs(b)):
            break
        t = b - at_b * (b - a) / (at_b - at_a) if k % 4 else 0.5 * (a + b)
        at_t = function(t)
        if at_t * at_b < 0:
            a, at_a = b, at_b
        else:
            at_a *= 0.5
        b, at_b = t, at_t
    return b
