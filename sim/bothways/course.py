"""A course between accepted steps: quintic Hermite interpolation from first and second derivatives.

Whatever solver made the states, y' = f(y) and y'' = J f are known at each, so the interpolant's error is of sixth
order in the step (e.g. E. Hairer, S.P. Nørsett, G. Wanner, Solving Ordinary Differential Equations I, 2nd ed., 1993,
II.6), whatever the solver's own order. But a stiff f answers a state that is off by δ in a mode of rate λ with a slope off
by λδ, and over a step with h|λ| ≫ 1 that would swamp the course. So slope and curvature are first settled:

    v → v - (1 - s)⁵ v,   s = (I - h/20 J)⁻¹, which multiplies a mode by 1/(1 - hλ/20),

which leaves of v what the step resolves, to the fifth power of hλ/20, and of a fast mode 100/(hλ).
"""

from collections.abc import Callable, Sequence
from functools import cached_property, partial

import numpy as np

from .roots import zero

_ENOUGH, _MOST_SECANTS = 1e-9, 8
"""Of a step: far within the error of the interpolant; and how many secants are tried before bisection takes over."""

Apply = Callable[[np.ndarray], np.ndarray]
SETTLING, POWER = 0.05, 5
"""Share of the step in which what is not the course's own has died out [-], and how sharply the two are told apart."""
ROUND_OFF = 1e-12
"""A quantity that changes by less than this part of itself does not rise [-]."""

STEEPER = 3.0
"""A slope up to so many times the steeper of the two chords beside it is borne out by the states [-]: a cubic with such
slopes stays monotone between monotone data (F.N. Fritsch, R.E. Carlson, SIAM J. Numer. Anal. 17 (1980) 238)."""


class Course:
    """States y (nt, n) at rising times (nt) with their derivatives by the right-hand side f and its Jacobian J.

    Derivatives are worked out where they are asked for, once.
    by_time : ∂f/∂t as a function of (t, y) where f depends on time itself. At a corner of f the state stands twice, at
    the corner and at the last number before it: see `with_corners`.
    resolvent : (t, y, a) -> what solves (I - a J) x = v; dense if not given.
    """

    def __init__(self, times: np.ndarray, states: np.ndarray, f: Callable, J: Callable,
                 by_time: Callable[[float, np.ndarray], np.ndarray] | None = None,
                 resolvent: Callable[[float, np.ndarray, float], Apply] | None = None) -> None:
        self.times, self.states, self.f, self.J, self.by_time = times, states, f, J, by_time
        self.resolvent = resolvent or self._dense
        self._slopes: dict[int, np.ndarray] = {}
        self._pieces: dict[int, np.ndarray] = {}

    def slope(self, k: int) -> np.ndarray:
        """y' at step k, (n)."""
        if k not in self._slopes:
            self._slopes[k] = self.f(self.times[k], self.states[k])
        return self._slopes[k]

    def piece(self, k: int) -> np.ndarray:
        """Value, slope·h and curvature·h² at both ends of the step from k to k + 1, without fast modes, (6, n)."""
        if k not in self._pieces:
            h = float(self.times[k + 1] - self.times[k])
            ends = [(self.states[j], *self.derivatives(float(self.times[j]), self.states[j], h)) for j in (k, k + 1)]
            self._pieces[k] = np.array([part * h**power for end in ends for power, part in enumerate(end)])
        return self._pieces[k]

    def derivatives(self, t: float, y: np.ndarray, h: float) -> tuple[np.ndarray, np.ndarray]:
        """y' = f and y'' = J f + ∂f/∂t at any state (n), settled for a step h [s]."""
        solve = self.resolvent(t, y, SETTLING * h)
        slope = settled(self.f(t, y), solve)
        curvature = self.J(t, y) @ slope
        return slope, settled(curvature if self.by_time is None else curvature + self.by_time(t, y), solve)

    def _dense(self, t: float, y: np.ndarray, a: float) -> Apply:
        inverse = np.linalg.inv(np.eye(y.size) - a * self.J(t, y))
        return lambda v: inverse @ v

    def between(self, k: int) -> Callable[[float], np.ndarray]:
        """The interpolant, time [s] -> state (n), from step k to k + 1."""
        start, h, data = self.times[k], self.times[k + 1] - self.times[k], self.piece(k)

        def state(t: float) -> np.ndarray:
            return _hermite((t - start) / h) @ data

        return state

    @cached_property
    def _guarded(self) -> Apply:
        """Cubic Hermite interpolation of the whole course, with f for slope where the states bear it out.

        Cheaper than settling every step. Where f is steeper than the states around are, its slope gives way to that of the
        monotone interpolant of the states (F.N. Fritsch, J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300,
        doi:10.1137/0905021).
        """
        from scipy.interpolate import CubicHermiteSpline, PchipInterpolator  # takes longer to load than a run takes

        secants = np.abs(np.diff(self.states, axis=0) / np.diff(self.times)[:, None])
        nearby = np.maximum(np.vstack([secants[:1], secants]), np.vstack([secants, secants[-1:]]))
        slopes = np.array([self.slope(k) for k in range(len(self.times))])
        calm = PchipInterpolator(self.times, self.states).derivative()(self.times)
        return CubicHermiteSpline(self.times, self.states, np.where(np.abs(slopes) <= STEEPER * nearby, slopes, calm))

    def at(self, times: np.ndarray) -> np.ndarray:
        """The states at rising times (m) within the course, (m, n); never far beyond those of the steps around."""
        return self._guarded(times)

    def first_crossing(self, component: int, level: float) -> float | None:
        """The first time at which a falling component reaches a level."""
        below = np.flatnonzero(self.states[:, component] <= level)
        if not below.size or below[0] == 0:
            return None
        k = int(below[0]) - 1
        a = self._polynomial(k, component)
        return self._time(k, _root(lambda x: _value(a, x) - level, 0.0, 1.0))

    def top(self, component: int) -> tuple[float, np.ndarray]:
        """Time and state at which a component is largest: where the interpolant's slope is zero beside the largest state.

        (Not where f of an interpolated state is: f answers a state slightly off the slow manifold with a fast rate.)
        """
        k = int(np.argmax(self.states[:, component]))
        for first in (k - 1, k):
            if 0 <= first < len(self.times) - 1 and self.piece(first)[1, component] > 0 >= self.piece(first)[4, component]:
                slope = _derivative(self._polynomial(first, component))
                t = self._time(first, _root(partial(_value, slope), 0.0, 1.0))
                return t, self.between(first)(t)
        return float(self.times[k]), self.states[k]

    def steepest(self, weights: np.ndarray) -> tuple[float, float] | None:
        """Time at which the rise of y @ weights is fastest, and that rate over the one at the start (inf if that is not
        positive); None if it never rises beyond round-off, or still faster and faster at the end. Weights (n)."""
        values = self.states @ weights
        means = np.diff(values) / np.diff(self.times)
        highest = float(np.max(means))
        rise = np.max(values - np.minimum.accumulate(values))
        if not highest > 0 or rise <= ROUND_OFF * np.max(np.abs(values)):
            return None
        padded = np.concatenate([[-np.inf], means, [-np.inf]])
        summits = np.flatnonzero((means >= 0.5 * highest) & (means >= padded[:-2]) & (means >= padded[2:]))
        k = max((self._climbed(int(first), weights) for first in summits), key=lambda k: self.slope(k) @ weights)
        if k == len(self.times) - 1:
            return None
        start = float(self.slope(0) @ weights)
        return self._turn(k, weights), float(self.slope(k) @ weights) / start if start > 0 else np.inf

    def _climbed(self, k: int, weights: np.ndarray) -> int:
        """The step beside interval k, and then next to it as long as it rises, with the fastest rise of y @ weights."""
        best = max((k, k + 1), key=lambda j: self.slope(j) @ weights)
        way = 1 if best > k else -1
        while 0 <= best + way < len(self.times) and self.slope(best + way) @ weights > self.slope(best) @ weights:
            best += way
        return best

    def fastest(self, values: np.ndarray, gradient: Callable[[np.ndarray], np.ndarray]) -> tuple[float, float] | None:
        """Time at which a quantity of the state rises fastest, and its rate there; None if it never rises.

        values : (nt) of the quantity at the times. gradient : of it by the state, (n) -> (n).
        """
        span = np.diff(self.times)
        means = np.diff(values) / span
        if not np.max(means) > 0:
            return None
        near = np.flatnonzero(means >= 0.5 * np.max(means))  # a step is too short to hide a faster rise elsewhere
        rates = {int(k): float(gradient(self.states[k]) @ self.slope(int(k))) for k in np.union1d(near, near + 1)}
        k = max(rates, key=rates.__getitem__)
        found = [(float(self.times[k]), rates[k])]
        found += [self._fastest_between(j, gradient) for j in (k - 1, k) if 0 <= j < len(span)]
        return max(found, key=lambda one: one[1])

    def _fastest_between(self, k: int, gradient: Callable[[np.ndarray], np.ndarray]) -> tuple[float, float]:
        """The same within one step, by the derivative of the interpolant: golden section (e.g. R.P. Brent, 1973, ch. 5)."""
        data, h, ratio = self.piece(k), self.times[k + 1] - self.times[k], 0.5 * (np.sqrt(5.0) - 1.0)

        def rate(x: float) -> float:
            return float(gradient(_hermite(x) @ data) @ (_hermite_slope(x) @ data)) / h

        low, high = 0.0, 1.0
        while high - low > 1e-9:
            left, right = high - ratio * (high - low), low + ratio * (high - low)
            low, high = (low, right) if rate(left) > rate(right) else (left, high)
        x = 0.5 * (low + high)
        return self._time(k, x), rate(x)

    def _turn(self, k: int, weights: np.ndarray) -> float:
        """Where the second derivative of y @ weights changes sign beside step k; the time of k if it does not."""
        for first in (k - 1, k):
            if 0 <= first < len(self.times) - 1:
                ends = self.piece(first)[[2, 5]] @ weights
                if ends[0] > 0 >= ends[1]:
                    return self._inflection(first, weights)
        return float(self.times[k])

    def _inflection(self, k: int, weights: np.ndarray) -> float:
        """Where y'' @ weights is zero within step k: by secants from the zero of the quintic, as y'' of a state is dear."""
        piece, h = self.between(k), float(self.times[k + 1] - self.times[k])

        def bend(x: float) -> float:
            t = self._time(k, x)
            return float(self.derivatives(t, piece(t), h)[1] @ weights) * h * h

        curvature = _derivative(_derivative(_quintic(self.piece(k) @ weights)))
        x = _root(partial(_value, curvature), 0.0, 1.0)
        value, slope = bend(x), _value(_derivative(curvature), x)
        for _ in range(_MOST_SECANTS):
            step = -value / slope if slope else np.inf
            if not 0.0 <= x + step <= 1.0:
                break
            x, before = x + step, value
            if abs(step) <= _ENOUGH:
                return self._time(k, x)
            value = bend(x)
            slope = (value - before) / step
        return self._time(k, _root(bend, 0.0, 1.0, _ENOUGH))

    def _polynomial(self, k: int, component: int) -> tuple[float, ...]:
        """The quintic of one component from step k to k + 1, powers of x = 0…1 rising."""
        return _quintic(self.piece(k)[:, component])

    def _time(self, k: int, x: float) -> float:
        return float(self.times[k] + x * (self.times[k + 1] - self.times[k]))


def _quintic(piece: np.ndarray) -> tuple[float, ...]:
    """Coefficients, powers of x = 0…1 rising, from value, slope and curvature at both ends (6)."""
    y0, d0, c0, y1, d1, c1 = (float(value) for value in piece)
    rise = y1 - y0
    return (y0, d0, 0.5 * c0, 10 * rise - 6 * d0 - 4 * d1 - 1.5 * c0 + 0.5 * c1,
            -15 * rise + 8 * d0 + 7 * d1 + 1.5 * c0 - c1, 6 * rise - 3 * d0 - 3 * d1 - 0.5 * c0 + 0.5 * c1)


def settled(v: np.ndarray, solve: Apply) -> np.ndarray:
    """v without what fast modes put into it: see the head of this file."""
    rest = v
    for _ in range(POWER):
        rest = rest - solve(rest)
    return v - rest


def _value(a: tuple[float, ...], x: float) -> float:
    total = 0.0
    for coefficient in reversed(a):
        total = total * x + coefficient
    return total


def _derivative(a: tuple[float, ...]) -> tuple[float, ...]:
    return tuple(power * coefficient for power, coefficient in enumerate(a))[1:]


def with_corners(times: np.ndarray, states: np.ndarray, corners: Sequence[float]) -> tuple[np.ndarray, np.ndarray]:
    """Times and states with those at corners [s] doubled, first for what holds before, then for what holds from there on."""
    at = [k for k in range(1, len(times)) if times[k] in corners]
    return (np.insert(times, at, np.nextafter(times[at], 0.0)), np.insert(states, at, states[at], axis=0))


def _hermite(x: float) -> np.ndarray:
    """Weights of value, slope and curvature at both ends for the quintic at x in 0…1."""
    y = 1.0 - x
    left = np.array([y**3 * (1 + 3 * x + 6 * x**2), y**3 * x * (1 + 3 * x), 0.5 * y**3 * x**2])
    right = np.array([x**3 * (1 + 3 * y + 6 * y**2), -(x**3) * y * (1 + 3 * y), 0.5 * x**3 * y**2])
    return np.concatenate([left, right])


def _hermite_slope(x: float) -> np.ndarray:
    """Derivatives of `_hermite` by x."""
    y = 1.0 - x
    left = np.array([-30 * x**2 * y**2, y**2 * (1 + 2 * x - 15 * x**2), 0.5 * x * y**2 * (2 - 5 * x)])
    right = np.array([30 * x**2 * y**2, x**2 * (1 + 2 * y - 15 * y**2), -0.5 * y * x**2 * (2 - 5 * y)])
    return np.concatenate([left, right])


def _root(function: Callable[[float], float], start: float, end: float, near: float = 0.0) -> float:
    """Where a function changes sign between two times, known to `near` or to round-off; `end` if it does not: the interpolant
    rounds a crossing at the very end of a step away."""
    found = zero(function, start, end, near)
    return end if found is None else found
