"""Ranges of a quantity and how points spread over them; lists of values; seeded samples over several ranges."""

import inspect
import warnings
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..entry import Entry
from ..errors import shown
from .keys import Value, kind_of, leaves, read_value

SPACINGS: dict[str, tuple[Callable, Callable]] = {
    "linear": (lambda x: x, lambda x: x), "logarithmic": (np.log, np.exp), "reciprocal": (np.reciprocal, np.reciprocal)}
"""Evenly spaced in x, ln x or 1/x (as on an Arrhenius plot): the function and its inverse."""
SAMPLERS = {"Latin hypercube": "LatinHypercube", "Sobol": "Sobol"}
"""Names in `scipy.stats.qmc`. M.D. McKay, R.J. Beckman, W.J. Conover, Technometrics 21 (1979) 239,
doi:10.1080/00401706.1979.10489755; I.M. Sobol', USSR Comput. Math. Math. Phys. 7 (4) (1967) 86,
doi:10.1016/0041-5553(67)90144-9, scrambled."""
MOST_POINTS = 1_000_000
"""Of one range or one set of samples."""


@dataclass(frozen=True)
class Range:
    """Two different ends (SI) and the spacing between them."""

    start: float
    end: float
    spacing: str

    def at(self, shares: np.ndarray) -> np.ndarray:
        """Points at shares (n) 0…1 of the way, the ends exactly as stated."""
        there, back = SPACINGS[self.spacing]
        a, b = there(np.array([self.start, self.end]))
        points = np.where(shares == 0.0, self.start, np.where(shares == 1.0, self.end, back(a + (b - a) * shares)))
        return np.clip(points, min(self.start, self.end), max(self.start, self.end))


def values_of(entry: Entry, key: str, stated: Any) -> list[Value]:
    """The values that a list, a range or a single value states for a key under [vary]."""
    if isinstance(stated, Mapping):
        inner = entry.sub(stated, entry._at(key))
        span, count = read_range(inner, key), whole_number(inner, "count", 2)
        inner.done()
        return span.at(np.linspace(0.0, 1.0, count)).tolist()
    if not isinstance(stated, (list, tuple)):
        raise entry.error(f"{shown(stated)} is neither a list nor a range", key=key, remedy="put it in brackets",
                          expected="a list of values or { from = …, to = …, count = … }")
    if not stated:
        raise entry.error("the list is empty", expected="at least one value", remedy="add one, or leave the key out", key=key)
    return [read_value(entry, key, value, f"{key}[{k}]") for k, value in enumerate(stated, 1)]


def read_range(inner: Entry, key: str) -> Range:
    """The range that a table states for a key; further keys of the table are left to the caller."""
    if kind_of(key) in ("text", "table"):
        raise inner.error("a range", expected=f"a list of values: {key} is no quantity", remedy="list them in brackets")
    spacing = inner.text("spacing", "linear", choices=tuple(SPACINGS))
    start, end = (_end(inner, key, name) for name in ("from", "to"))
    if start == end:
        raise inner.error(f"from and to are both {start:g}", expected="two different ends",
                          remedy="correct one, or list the value")
    if spacing != "linear" and min(start, end) <= 0.0:
        raise inner.error(f"{min(start, end):g} with {spacing} spacing", expected="ends above 0",
                          remedy='use spacing = "linear"')
    return Range(start, end, spacing)


def _end(inner: Entry, key: str, name: str) -> float:
    return float(read_value(inner, key, inner.get(name, what="an end of the range"), name))  # type: ignore[arg-type]


def whole_number(entry: Entry, key: str, least: int, default: Any = None) -> int:
    """A whole number from `least` to MOST_POINTS."""
    value = entry.number(key) if default is None else entry.number(key, default)
    if value != int(value) or not least <= value <= MOST_POINTS:
        raise entry.error(f"{value:g}", expected=f"a whole number from {least} to {MOST_POINTS}", remedy="correct it", key=key)
    return int(value)


def read_samples(entry: Entry) -> tuple[tuple[str, ...], list[tuple[Value, ...]]]:
    """Keys and values of the samples that the table [samples] states: method, count, seed and a range for each key."""
    own = ("method", "count", "seed")
    method = entry.text("method", "Latin hypercube", choices=tuple(SAMPLERS))
    count, seed = whole_number(entry, "count", 1), whole_number(entry, "seed", 0, 0)
    ranges = {}
    for key, stated in leaves(entry, also=own).items():
        if not isinstance(stated, Mapping):
            raise entry.error(f"{shown(stated)} is not a range", expected="{ from = …, to = … }", remedy="correct it", key=key)
        inner = entry.sub(stated, entry._at(key))
        ranges[key] = read_range(inner, key)
        inner.done()
    if not ranges:
        raise entry.error("nothing is sampled", expected="a range for at least one key", remedy="such as start.temperature = "
                          '{ from = "1000 K", to = "1500 K" }')
    shares = _shares(method, len(ranges), count, seed)
    columns = [span.at(shares[:, k]).tolist() for k, span in enumerate(ranges.values())]
    return tuple(ranges), list(zip(*columns, strict=True))


def _shares(method: str, dimensions: int, count: int, seed: int) -> np.ndarray:
    """Points (count, dimensions) of the unit cube, the same for the same seed."""
    from scipy.stats import qmc  # takes longer to load than all else

    sampler = getattr(qmc, SAMPLERS[method])
    name = "rng" if "rng" in inspect.signature(sampler).parameters else "seed"  # renamed in SciPy 1.15
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", UserWarning)  # of Sobol' points not a power of 2 in number, which balance less
        return sampler(d=dimensions, **{name: np.random.default_rng(seed)}).random(count)
