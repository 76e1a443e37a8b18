"""Reduced mechanisms made from a larger one: by relation graphs, within limits measured as `compare` does."""

from collections.abc import Iterable, Mapping, Sequence
from concurrent.futures import Executor
from pathlib import Path

from ..compare import cases_of, read_limits
from ..compare.conditions import Over, loaded
from ..mechanism import Mechanism
from .graph import METHODS
from .part import part_of
from .reduction import Reduced, reduce_cases
from .trials import Told


def reduce(parent: str | Path | Mechanism, *, over: Over, limits: Iterable[str] | Mapping[str, float | str],
           keep: Sequence[str] = (), method: str = "DRGEP", certain: float = 1.0, margin: float = 1.0, name: str = "",
           executor: Executor | None = None, told: Told = lambda text: None) -> Reduced:
    """A part of a mechanism that keeps the limits in all conditions of a grid, as small as this search finds.

    parent : a mechanism, or its name or file. over : a grid, its name or file, or cases.
    limits : such as {"ignition": 0.1} or ["ignition=10%"]; whatever is not limited may go wrong.
    keep, method, certain, margin, executor, told, errors : see `reduce_cases`.
    """
    whole = loaded(parent)
    return reduce_cases(whole, cases_of(over, whole), read_limits(limits), keep, method, certain, margin, name, executor, told)


__all__ = ["METHODS", "Reduced", "part_of", "reduce", "reduce_cases"]
