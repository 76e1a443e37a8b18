"""The zero of a function of one variable between two points where its signs differ.

By the method of T.J. Dekker as R.P. Brent made it safe (Algorithms for Minimization without Derivatives, 1973, ch. 4): inverse
quadratic interpolation or a secant where they converge, bisection where not.
"""

import sys
from collections.abc import Callable
from dataclasses import dataclass

_EPS = sys.float_info.epsilon


@dataclass
class _Bracket:
    """The best point b, a point c across the zero, and where b stood before, a; the last two moves."""

    a: float
    b: float
    c: float
    at_a: float
    at_b: float
    at_c: float
    move: float
    before: float

    def sort(self) -> None:
        """Puts b across the zero from c, and the better of the two in b."""
        if (self.at_b > 0) == (self.at_c > 0):
            self.c, self.at_c = self.a, self.at_a
            self.move = self.before = self.b - self.a
        if abs(self.at_c) < abs(self.at_b):
            self.a, self.b, self.c = self.b, self.c, self.b
            self.at_a, self.at_b, self.at_c = self.at_b, self.at_c, self.at_b

    def choose(self, near: float) -> None:
        """The next move: where an interpolation points, if it is well within the bracket and converging; else half-way."""
        half = 0.5 * (self.c - self.b)
        way, ratio = self._interpolated(half)
        slow = abs(self.before) < near or abs(self.at_a) <= abs(self.at_b)
        if slow or 2.0 * way >= min(3.0 * half * ratio - abs(near * ratio), abs(self.before * ratio)):
            self.move = self.before = half
        else:
            self.before, self.move = self.move, way / ratio

    def _interpolated(self, half: float) -> tuple[float, float]:
        """A move from b as way/ratio, way not negative: by the secant, or the inverse parabola where there are three points."""
        s = self.at_b / self.at_a if self.at_a else 0.0
        if self.a == self.c:
            way, ratio = 2.0 * half * s, 1.0 - s
        else:
            q, r = self.at_a / self.at_c, self.at_b / self.at_c
            way = s * (2.0 * half * q * (q - r) - (self.b - self.a) * (r - 1.0))
            ratio = (q - 1.0) * (r - 1.0) * (s - 1.0)
        return (way, -ratio) if way > 0 else (-way, ratio)


def zero(function: Callable[[float], float], start: float, end: float, near: float = 0.0) -> float | None:
    """Where a function changes sign between two points, known to `near` or to round-off; None if it does not."""
    at_start, at_end = function(start), function(end)
    if at_start == 0.0 or at_end == 0.0:
        return start if at_start == 0.0 else end
    if not (at_start < 0 < at_end or at_end < 0 < at_start):
        return None
    z = _Bracket(start, end, start, at_start, at_end, at_start, end - start, end - start)
    while z.at_b != 0.0:
        z.sort()
        close = 2.0 * _EPS * abs(z.b) + 0.5 * near
        if abs(z.c - z.b) <= 2.0 * close:
            break
        z.choose(close)
        z.a, z.at_a = z.b, z.at_b
        z.b += z.move if abs(z.move) > close else close if z.c > z.b else -close
        z.at_b = function(z.b)
    return z.b
