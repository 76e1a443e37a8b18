"""The condition in which reductions are furthest off: their courses over the parent's."""

from collections.abc import Sequence
from typing import Any

import numpy as np
from matplotlib.figure import Figure

from ..compare import Comparison
from ..compare.limits import number_text
from ..compare.tables import condition_text
from ..errors import InputError
from . import style
from .composition import linear_panel
from .labels import formula
from .of_comparisons import check_measure, facts, program
from .panels import draw_panels
from .parts import Array, Curve, Panel
from .sheet import Words
from .views import time_views
from .words import NOT_A_SAFETY_CASE


@style.styled
def worst_courses(comparison: Comparison, measure: str = "ignition", width: str = "page") -> Figure:
    """Temperature and major species of the condition with the largest error: the parent's solid, the reductions' dashed."""
    size = style.size_named(width)
    check_measure(measure)
    k, worst = _worst_condition(comparison, measure)
    pairs = [comparison.pair(judged, k) for judged in comparison.judged]
    failed = [pair.reduced.failure for pair in pairs if pair.reduced.failure]
    runs = [pair for pair in pairs if not pair.reduced.failure]
    parent = pairs[0].parent
    end = min(run.time[-1] for run in (parent, *(pair.reduced for pair in runs)))
    times = np.unique(np.concatenate([run.time[run.time <= end] for run in (parent, *(pair.reduced for pair in runs))]))
    chosen = _drawn_species(parent.mole_fractions(times))
    panels = [p for p in (_temperature_panel(parent, runs, times), _species_panel(parent, runs, times, chosen)) if p]
    events = {"steepest rise (parent)": parent.ignition} if np.isfinite(parent.ignition) else {}
    views = time_views(times, panels, events)
    dashes = ", ".join(f"{pair.reduced.case.mechanism.name} {_DASH_NAMES[j % 3]}" for j, pair in enumerate(runs))
    notes = f"Solid: {comparison.parent.name}; {dashes}. {' '.join(failed)} {NOT_A_SAFETY_CASE}"
    title = f"Worst condition by {measure} ({number_text(measure, worst)}): {condition_text(comparison.conditions[k])}"
    return draw_panels(times, panels, views, size, Words(title, facts(comparison), notes=notes, program=program()))


_DASHED: tuple[Any, ...] = ((0, (4.0, 1.4)), (0, (1.2, 1.2)), (0, (4.0, 1.2, 1.2, 1.2)))
_DASH_NAMES = ("dashed", "dotted", "dash-dotted")


def _worst_condition(comparison: Comparison, measure: str) -> tuple[int, float]:
    found = [judged.worst(measure) for judged in comparison.judged]
    known = [(abs(value), k, value) for value, k in found if k >= 0 and not comparison.conditions[k].failure]
    if not known:
        raise InputError(f"{measure} has no meaning in any condition", expected="a measure that has", remedy="name another "
                         "one (--measure)")
    _, k, value = max(known)
    return k, value


def _drawn_species(x: Array) -> list[int]:
    """The species whose share changes most, six at most; what is charged and hardly reacts is left out."""
    change = np.ptp(x, axis=0)
    change[change <= 0.05 * x[0]] = 0.0
    return [int(k) for k in np.argsort(-change)[:6] if change[k] >= 0.05 * change.max()]


def _temperature_panel(parent: Any, pairs: Sequence[Any], times: Array) -> Panel | None:
    own = parent.temperatures(times)
    others = [pair.reduced.temperatures(times) for pair in pairs]
    low, high = float(min(map(np.min, (own, *others)))), float(max(map(np.max, (own, *others))))
    if high - low < 1e-3 * low:
        return None
    rim = 0.06 * (high - low)
    curves = [Curve("", own), *(Curve("", T, style.BLACK, _DASHED[j % 3]) for j, T in enumerate(others))]
    return Panel("temperature / K", tuple(curves), (low - rim, high + rim), 30.0, named=False)


def _species_panel(parent: Any, pairs: Sequence[Any], times: Array, chosen: Sequence[int]) -> Panel:
    colours, x, m = list(style.PALETTE.values()), parent.mole_fractions(times), parent.case.mechanism
    curves = [Curve(formula(m.names[k], float(m.molar_mass[k])), x[:, k], colours[j]) for j, k in enumerate(chosen)]
    for dash, pair in enumerate(pairs):
        own = pair.reduced.mole_fractions(times)
        for j, k in enumerate(chosen):
            place = pair.same.group[k]
            values = own[:, place] if place >= 0 else np.zeros(len(times))
            curves.append(Curve("", values, colours[j], _DASHED[dash % 3]))
    return linear_panel(curves)
