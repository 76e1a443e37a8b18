"""Comparison over a grid: names, files and objects become what `compare_cases` takes."""

from collections.abc import Iterable, Mapping, Sequence
from concurrent.futures import Executor
from pathlib import Path

from ..case import Case
from ..grid import Grid, read_grid
from ..mechanism import Mechanism, read_mechanism
from .comparison import Comparison, Told, compare_cases
from .correspondence import Names, read_mapping
from .limits import read_limits

Over = str | Path | Grid | Sequence[Case]


def compare(parent: str | Path | Mechanism, *reduced: str | Path | Mechanism, over: Over, species: Sequence[str] = (),
            limits: Iterable[str] | Mapping[str, float | str] = (), mapping: str | Path | Names | None = None,
            executor: Executor | None = None, told: Told | None = None) -> Comparison:
    """Holds reduced mechanisms against their parent in all conditions of a grid.

    parent, reduced : mechanisms, or their names or files. over : a grid, its name or file, or cases of the parent.
    species : names (of the parent) whose profiles and peaks count besides those of the major species.
    limits : "NAME=VALUE" texts or values by name, such as {"ignition": 0.1}; the result's `beyond` lists what is not kept.
    mapping : what a reduced mechanism's species are called in the parent: a file, or names (one, or several where it lumps
        some) by its own names.
    executor, told, errors : see `compare_cases`.
    """
    whole, parts = loaded(parent), [loaded(mechanism) for mechanism in reduced]
    file = mapping if isinstance(mapping, (str, Path)) else None
    names = read_mapping(file) if file is not None else mapping
    return compare_cases(whole, parts, cases_of(over, whole), species, read_limits(limits), names, file,  # type: ignore[arg-type]
                         executor, told)


def loaded(mechanism: str | Path | Mechanism) -> Mechanism:
    """A mechanism, or the one of that name or file."""
    return mechanism if isinstance(mechanism, Mechanism) else read_mechanism(mechanism)


def cases_of(over: Over, parent: Mechanism) -> list[Case]:
    """The conditions of a grid as cases of the parent, every one checked."""
    if isinstance(over, (str, Path)):
        over = read_grid(over, parent)
    return list(over.cases(parent)) if isinstance(over, Grid) else list(over)
