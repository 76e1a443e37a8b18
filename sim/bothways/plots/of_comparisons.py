"""What the figures of a comparison share: words, a check, a logarithmic axis."""

import math

import numpy as np
from matplotlib.axes import Axes
from matplotlib.ticker import NullFormatter

from ..compare import MEASURES, Comparison
from ..errors import InputError
from ..version import program_version
from .parts import Array


def check_measure(measure: str) -> None:
    """Refuses a name that is no measure."""
    names = [m.name for m in MEASURES]
    if measure not in names:
        raise InputError(f"unknown measure '{measure}'", expected=", ".join(names))


def log_axis(axes: Axes, which: str, values: Array, rim: float) -> None:
    """A logarithmic axis round some values; less than a decade is numbered at 1, 2 and 5."""
    low, high = float(np.min(values)) / rim, float(np.max(values)) * rim
    axes.set(**{f"{which}scale": "log", f"{which}lim": (low, high)})
    axis = axes.yaxis if which == "y" else axes.xaxis
    if high / low < 300.0:
        powers = range(math.floor(math.log10(low)), math.ceil(math.log10(high)) + 1)
        axis.set_ticks([m * 10.0**k for k in powers for m in (1, 2, 5) if low <= m * 10.0**k <= high])
        axis.set_major_formatter(lambda x, _: f"{x:.3g}")
    axis.set_minor_formatter(NullFormatter())


def facts(comparison: Comparison) -> str:
    """The mechanisms and their sizes."""
    sizes = [f"{m.name} ({len(m.species)} species, {len(m.reactions)} reactions)"
             for m in (comparison.parent, *(judged.mechanism for judged in comparison.judged))]
    return "; ".join(sizes)


def program() -> str:
    """Name and version, for the foot."""
    return f"bothways {program_version()}"
