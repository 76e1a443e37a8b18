"""Views: which stretch of time a figure shows, and whether its axis is linear or logarithmic.

The rule, for a course none of which is known beforehand:

1. The view ends soon after the last visible change (`settled`), not where the run happens to.
2. The axis is linear, unless the change would be squeezed there and has clearly more room on a logarithmic one.
3. If the change is squeezed even so (an ignition long after the start), a second view beside the first shows the event
   alone, on a linear axis of its own that counts from the instant of the steepest rise.
"""

import math
from collections.abc import Mapping, Sequence

import numpy as np

from ..errors import InputError
from .parts import Array, Panel, View

TIME_AXES = ("linear", "log")
VISIBLE = 0.02
"""A curve has settled when it stays within this share of its panel's height of its end [-]."""
SQUEEZED, CELLS = 0.08, 100
"""The change is squeezed if it is spread over less than this share of the axis [-], counted in so many cells."""
CLEARLY = 3.0
"""A logarithmic axis must have so many times the room of a linear one [-]."""

_UNITS = (("ns", 1e-9), ("µs", 1e-6), ("ms", 1e-3), ("s", 1.0), ("min", 60.0), ("h", 3600.0), ("d", 86400.0))
_SHORTEST = {"min": 300.0, "h": 3.0 * 3600.0, "d": 3.0 * 86400.0}  # seconds and hours are read easily up to here


def time_view(start: float, end: float, scale: str = "linear", origin: float = 0.0, since: str = "") -> View:
    """A view of a stretch of time [s], counted from `origin` [s]; the label in quantity calculus."""
    longest = max(end - origin, origin - start)
    name, unit = time_unit(longest if scale == "linear" else min(longest, 1.0))
    return View(start, end, f"time{f' after {since}' if since else ''} / {name}", scale, origin, unit)


def time_unit(longest: float) -> tuple[str, float]:
    """Name and size [s] of the unit in which `longest` [s] is a number of easy size."""
    fitting = [(name, size) for name, size in _UNITS if longest >= _SHORTEST.get(name, size) * (1.0 - 1e-12)]
    return fitting[-1] if fitting else _UNITS[0]


def time_views(time: Array, panels: Sequence[Panel], milestones: Mapping[str, float], time_axis: str | None = None,
               between: tuple[float, float] | None = None) -> list[View]:
    """One view or two, by the rule above; one if the axis or the stretch `between` two times [s] is asked for."""
    if time_axis is not None and time_axis not in TIME_AXES:
        raise InputError(f"unknown time axis '{time_axis}'", expected=" or ".join(TIME_AXES))
    if between is not None:
        return [_between(time, between, time_axis or "linear")]
    if len(time) < 3 or time_axis:
        return [_whole(time, panels, time_axis or "linear")]
    return _chosen(time, panels, milestones)


def _between(time: Array, between: tuple[float, float], scale: str) -> View:
    start, end = between
    if not (start < end and start < time[-1] and end > time[0]):
        raise InputError(f"nothing to draw between {start:g} s and {end:g} s",
                         expected=f"two times, rising, within {time[0]:g} s to {time[-1]:g} s")
    if scale == "log" and start <= 0:
        raise InputError("a logarithmic time axis cannot start at zero", expected="a first time above zero")
    return time_view(max(start, float(time[0])), min(end, float(time[-1])), scale)


def _whole(time: Array, panels: Sequence[Panel], scale: str) -> View:
    if scale == "log" and np.count_nonzero(time > 0) > 1:
        return time_view(_log_start(time, panels), float(time[-1]), "log")
    start, end = float(time[0]), float(time[-1])
    return time_view(start, end if end > start else start + 1.0)


def _chosen(time: Array, panels: Sequence[Panel], milestones: Mapping[str, float]) -> list[View]:
    clock = change_clock(panels)
    if clock[-1] == 0:
        return [_whole(time, panels, "linear")]
    steepest = {name: t for name, t in milestones.items() if name.startswith("steepest")}
    end = _view_end(time, panels, max(steepest.values(), default=0.0))
    view = time_view(float(time[0]), end)
    log = time_view(_log_start(time, panels), end, "log")
    if room(view, time, clock) >= SQUEEZED:
        return [view]
    if room(log, time, clock) > CLEARLY * room(view, time, clock):
        view = log
    return [view, _event(view, time, clock, steepest)] if room(view, time, clock) < SQUEEZED else [view]


def change_clock(panels: Sequence[Panel]) -> Array:
    """(nt) share of all change that lies behind [-], each linear panel weighing the same; zeros if nothing changes."""
    clocks = [np.zeros_like(panels[0].curves[0].values)]
    for panel in panels:
        if panel.scale == "linear":
            steps = sum(np.abs(np.diff(curve.values, prepend=curve.values[0])) for curve in panel.curves)
            clocks.append(np.cumsum(steps))
    shares = [clock / clock[-1] for clock in clocks if clock[-1] > 0]
    return np.mean(shares, axis=0) if shares else clocks[0]


def room(view: View, time: Array, clock: Array) -> float:
    """The share of the axis over which the change is spread [-]: 1 if evenly, near 0 if in one place.

    With c_j the change in each of n equal cells of the axis, (Σ c_j)²/(n Σ c_j²): the effective number of cells (M. O. Hill,
    Ecology 54 (1973) 427, doi:10.2307/1934352, order 2) over their number.
    """
    space = np.geomspace if view.scale == "log" else np.linspace
    change = np.diff(np.interp(space(view.start, view.end, CELLS + 1), time, clock))
    return float(change.sum() ** 2 / (CELLS * np.sum(change**2))) if change.any() else 0.0


def _when(time: Array, clock: Array, share: float) -> float:
    """The time at which the share of the change lies behind."""
    return float(np.interp(share, clock, time))


def settled(time: Array, panels: Sequence[Panel]) -> float:
    """The first time [s] after which every linear panel looks flat."""
    last = 0
    for panel in panels:
        if panel.scale == "linear":
            near = VISIBLE * (panel.limits[1] - panel.limits[0])
            off = [np.flatnonzero(np.abs(c.values - c.values[-1]) > near) for c in panel.curves]
            last = max([last, *(int(k[-1]) + 1 for k in off if k.size)])
    return float(time[last])


def _view_end(time: Array, panels: Sequence[Panel], steepest: float) -> float:
    """A round time somewhat after the last visible change, or the run's end if that is not much further."""
    end = 1.25 * max(settled(time, panels), steepest)
    rounded = _rounded_up(end)
    return rounded if 0 < rounded < 0.6 * time[-1] else float(time[-1])


def _rounded_up(value: float) -> float:
    """Up to two significant digits."""
    if value <= 0:
        return 0.0
    step = 10.0 ** (math.floor(math.log10(value)) - 1)
    return math.ceil(value / step - 1e-9) * step


def _log_start(time: Array, panels: Sequence[Panel]) -> float:
    """A decade well before the first visible change: the long nothing before it is not worth decades."""
    first = float(time[-1])
    for panel in panels:
        if panel.scale == "linear":
            near = 0.25 * VISIBLE * (panel.limits[1] - panel.limits[0])
            off = [np.flatnonzero(np.abs(c.values - c.values[0]) > near) for c in panel.curves]
            first = min([first, *(float(time[k[0]]) for k in off if k.size)])
    earliest = float(time[time > 0][0])
    return max(earliest, 10.0 ** math.floor(math.log10(max(first, earliest)) - 1.0))


def _event(overview: View, time: Array, clock: Array, steepest: Mapping[str, float]) -> View:
    """The shortest stretch that holds half of the change, with room before it and after."""
    shares = np.linspace(0.0, 0.5, 51)
    early, late = np.interp(shares, clock, time), np.interp(shares + 0.5, clock, time)
    k = int(np.argmin(late - early))
    room_beside = 3.0 * float(late[k] - early[k])
    start, end = max(overview.start, float(early[k]) - room_beside), min(overview.end, float(late[k]) + room_beside)
    inside = {name: t for name, t in steepest.items() if start <= t <= end}
    for name, t in inside.items():
        return time_view(start, end, origin=t, since=f"the {name}")
    return time_view(start, end, origin=_when(time, clock, 0.5), since="half of the change")
