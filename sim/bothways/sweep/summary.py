"""The summary of a sweep as text."""

from collections import Counter

import numpy as np

from ..grid import Grid
from ..outcome import DONE
from ..report import CAUTION, NOTABLE_RISE, counted, time_text, wrapped
from .results import Sweep

_SHOWN = 5


def summary_of(grid: Grid, found: Sweep, name: str) -> str:
    """The summary, a line a fact."""
    sizes = " × ".join(f"{', '.join(f.keys)} ({len(f.settings)})" for f in grid.factors)
    sections = [("grid", wrapped(f"{counted(len(found), 'case')}: {sizes}", 84)),
                ("mechanism", [f"{m.name}: {len(m.species)} species, {counted(len(m.reactions), 'reaction')}"
                               for m in grid.mechanisms.values()]),
                ("steepest", [_steepest(found)]), ("verdicts", [_counted(found["verdict"])]), ("cases", _cases(grid, found))]
    if np.nanmax(found["end_temperature"] - found["start_temperature"], initial=0.0) > NOTABLE_RISE["temperature"]:
        sections.append(("caution", wrapped(CAUTION)))
    lines = [f"{name}: {found.title}"]
    for word, content in sections:
        lines += [f"{word if k == 0 else '':<12}{line}" for k, line in enumerate(content)]
    return "\n".join(lines)


def _steepest(found: Sweep) -> str:
    times = found["steepest_rise"][np.isfinite(found["steepest_rise"])]
    none = len(found) - times.size
    if not times.size:
        return "no steep rise of temperature or pressure in any case"
    span = f"rise after {time_text(float(times.min()))} to {time_text(float(times.max()))}"
    return span + (f"; none in {counted(none, 'case')}" if none else "")


def _counted(values: tuple[str, ...]) -> str:
    return ", ".join(f"{count} {value or 'none'}" for value, count in Counter(values).most_common())


def _cases(grid: Grid, found: Sweep) -> list[str]:
    seconds = float(np.nansum(found["seconds"]))
    lines = [f"{_counted(found['status'])}; {float(np.nansum(found['steps'])):.0f} steps, {seconds:.3g} s in the solver"]
    failed = [k for k, status in enumerate(found["status"]) if status != DONE]
    lines += [f"{grid.label(k)}: {found['status'][k]}: {found['reason'][k]}" for k in failed[:_SHOWN]]
    return lines + ([f"and {len(failed) - _SHOWN} more"] if len(failed) > _SHOWN else [])
