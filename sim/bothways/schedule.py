"""A quantity that follows a table in time: linear between the times stated, the last value held from then on."""

from bisect import bisect_right
from dataclasses import dataclass


@dataclass(frozen=True)
class Schedule:
    """times [s], rising from 0, and the values there; one value is a constant.

    At a corner `slope` is that of the piece that begins there.
    """

    times: tuple[float, ...]
    values: tuple[float, ...]

    @property
    def end(self) -> float:
        """The last time stated [s]."""
        return self.times[-1]

    @property
    def corners(self) -> tuple[float, ...]:
        """The times after 0 at which the slope changes [s]."""
        pieces = [self.slope(t) for t in self.times]
        return tuple(t for t, before, after in zip(self.times[1:], pieces, pieces[1:], strict=False) if before != after)

    @property
    def constant(self) -> bool:
        """Whether the value never changes."""
        return len(set(self.values)) == 1

    def value(self, t: float) -> float:
        """The value at t [s]."""
        k = self._piece(t)
        if k == len(self.times) - 1:
            return self.values[k]
        share = (t - self.times[k]) / (self.times[k + 1] - self.times[k])
        return (1.0 - share) * self.values[k] + share * self.values[k + 1]

    def slope(self, t: float) -> float:
        """The derivative by time at t [1/s of the value's unit], 0 from the last time on."""
        k = self._piece(t)
        if k == len(self.times) - 1:
            return 0.0
        return (self.values[k + 1] - self.values[k]) / (self.times[k + 1] - self.times[k])

    def _piece(self, t: float) -> int:
        return max(bisect_right(self.times, t) - 1, 0)
