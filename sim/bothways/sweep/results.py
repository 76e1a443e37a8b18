"""The results of a sweep as one self-describing HDF5 file: written from the record slice by slice, and read."""

import json
from collections import Counter
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from itertools import islice
from typing import Any

import numpy as np

from .. import hdf5
from ..errors import InputError, nearest
from ..grid import Grid
from ..grid.keys import kind_of, units_of
from ..hdf5 import SLICE, Variable
from ..outcome import COURSE, SECONDS, VARIABLES, Row
from ..outfile import StrPath, written_aside
from ..units import SI_UNIT
from ..version import program_version
from .packing import unpacked
from .record import Record

_CACHED = 2**22
LAYOUT = "bothways-sweep-1"
KIND = "the results of a sweep by bothways"
_CASE = ("case",)
_OF_ROWS = {"start.temperature", "start.pressure", "vessel.heat", "vessel.holds"}
"""Keys that every row tells by itself."""
_SCALES = (Variable("case", _CASE, "1", "number of the case, from 0"),
           Variable("species", ("species",), "1", "species", text=True),
           Variable("mechanism", ("mechanism",), "1", "name by which the grid states a mechanism", text=True))
_TEXTS = (Variable("mechanism_text", ("mechanism",), "1", "mechanism file (TOML)", text=True),
          Variable("grid_text", (), "1", "base case and factors of the grid (JSON)", text=True))
_STEPS = Variable("course_steps", _CASE, "1", "number of steps in the course of the case; the courses follow one another")
_STEP = Variable("step", ("step",), "1", "number of the step, over all courses")
_UDUNITS = {"mol/m3": "mol m-3", "W/K": "W K-1", "J/K": "J K-1"}


def inputs_of(grid: Grid) -> dict[str, Variable]:
    """The variables of what the grid sets, by key."""
    keys = [*(key for key in grid.keys if key not in _OF_ROWS and key != "case.mechanism"), "case.mechanism"]
    if "start.equivalence_ratio" in grid.keys or "equivalence_ratio" not in grid.base.get("start", {}):
        return {key: _input(key) for key in keys}
    return {key: _input(key) for key in [*keys, "start.equivalence_ratio"]}


def _input(key: str) -> Variable:
    unit = SI_UNIT[units_of(key)] if units_of(key) else "1"
    name = key.replace(".", "_").replace("/", "%2F")
    return Variable(name, _CASE, _UDUNITS.get(unit, unit), f"{key} of the case", text=kind_of(key) in ("text", "table"))


def _value(grid: Grid, key: str, k: int) -> Any:
    if key == "case.mechanism":
        return grid.mechanism_name(k)
    value = grid.setting(k).get(key, grid.base["start"].get("equivalence_ratio"))
    return json.dumps(value) if isinstance(value, dict) else value


def species_of(grid: Grid) -> tuple[str, ...]:
    """The species of all mechanisms, in order of first appearance."""
    return tuple(dict.fromkeys(name for m in grid.mechanisms.values() for name in m.names))


def write_results(path: StrPath, grid: Grid, record: Record, replace: bool = False) -> None:
    """Writes the file, whole or not at all, from a record that holds every case; memory does not grow with their number."""
    cached = _CACHED if grid.trajectories else 0  # courses end anywhere in a slice
    with written_aside(path, replace) as aside, hdf5.created(aside, _attributes(grid), cached) as file:
        for variable, values in _fixed(grid, record):
            hdf5.add_variable(file, variable, values)
        inputs = inputs_of(grid)
        rows = (unpacked(content)[1] for content in record.contents())
        _fill(file, grid, inputs, rows)


def _fixed(grid: Grid, record: Record) -> Iterator[tuple[Variable, Any]]:
    names = list(grid.mechanisms)
    scales = (np.arange(len(grid)), species_of(grid), names)
    yield from zip(_SCALES, scales, strict=True)
    yield from zip(_TEXTS, ([grid.mechanism_texts[name] for name in names], json.dumps(grid.content)), strict=True)
    if grid.trajectories:
        yield _STEP, np.arange(record.steps)


def _attributes(grid: Grid) -> dict[str, Any]:
    """The usual attributes of the root group (NetCDF Users Guide, Attribute Conventions), then ours."""
    program, now = f"bothways {program_version()}", datetime.now(UTC).isoformat(timespec="seconds")
    sources = dict.fromkeys(" ".join(line.split()) for m in grid.mechanisms.values() for line in m.sources)
    return {"Conventions": LAYOUT, "title": grid.title or "Many cases of closed batch reactors",
            "history": f"{now}: written by {program}", "source": program, "references": "\n".join(sources), "complete": 1,
            "grid_sha256": grid.digest, "program_version": program_version()}


def _fill(file: Any, grid: Grid, inputs: dict[str, Variable], rows: Iterator[Row]) -> None:
    own = {variable.name: hdf5.add_empty(file, variable) for variable in (*inputs.values(), *VARIABLES, SECONDS)}
    places = {name: [species_of(grid).index(s) for s in m.names] for name, m in grid.mechanisms.items()}
    if grid.trajectories:
        own["course_steps"] = hdf5.add_empty(file, _STEPS, {"sample_dimension": "step"})
        own |= {f"course_{v.name}": hdf5.add_empty(file, _of_courses(v)) for v in COURSE}
    written = 0
    for start in range(0, len(grid), SLICE):
        some: list[Row] = []  # the slice before is let go first
        some += islice(rows, SLICE)
        stop = start + len(some)
        for key, variable in inputs.items():
            own[variable.name][start:stop] = _plain(variable, [_value(grid, key, k) for k in range(start, stop)])
        whose = [places[grid.mechanism_name(k)] for k in range(start, stop)]
        for variable in (*VARIABLES, SECONDS):
            own[variable.name][start:stop] = _column(variable, some, whose, len(species_of(grid)))
        if grid.trajectories:
            own["course_steps"][start:stop] = [len(row["course"]["time"]) if "course" in row else 0 for row in some]
            written = _fill_courses(own, some, whose, written)


def _of_courses(variable: Variable) -> Variable:
    return Variable(f"course_{variable.name}", variable.dims, variable.units, f"{variable.long_name}, course after course")


def _plain(variable: Variable, values: Sequence[Any]) -> Any:
    return values if variable.text else np.array(values, dtype=float)


def _column(variable: Variable, rows: Sequence[Row], whose: Sequence[list[int]], size: int) -> Any:
    """The values of a variable for some rows; NaN for species that a case's mechanism does not have."""
    if len(variable.dims) == 1:
        return _plain(variable, [row[variable.name] for row in rows])
    values = np.full((len(rows), size), np.nan)
    for k, (row, places) in enumerate(zip(rows, whose, strict=True)):
        values[k, places] = row[variable.name]
    return values


def _fill_courses(own: dict[str, Any], rows: Sequence[Row], whose: Sequence[list[int]], start: int) -> int:
    for row, places in zip(rows, whose, strict=True):
        if "course" not in row:
            continue
        stop = start + len(row["course"]["time"])
        for variable in COURSE:
            values = row["course"][variable.name]
            if values.ndim == 2:
                whole = np.full((len(values), own["course_amount"].shape[1]), np.nan)
                whole[:, places] = values
                values = whole
            own[f"course_{variable.name}"][start:stop] = values
        start = stop
    return start


@dataclass(frozen=True, eq=False, repr=False)
class Sweep:
    """The results of a sweep in their file: `sweep["end_temperature"]` reads a variable.

    variables : by name; what each is and its units. species : names along that axis. title, digest : of the grid.
    """

    path: StrPath
    variables: dict[str, Variable]
    cases: int
    species: tuple[str, ...]
    title: str
    digest: str
    program_version: str

    def __len__(self) -> int:
        return self.cases

    def __repr__(self) -> str:
        return f"<Sweep of {len(self)} cases: {', '.join(f'{count} {status}' for status, count in self.tally().items())}>"

    def __getitem__(self, name: str) -> Any:
        """An array (cases) or (cases, species), SI, NaN where there is none; texts as a tuple (cases)."""
        if name not in self.variables:
            raise InputError(f"no variable '{name}' ({nearest(name, self.variables)})", file=self.path)
        with hdf5.opened(self.path, KIND) as file:
            return hdf5.read_variable(file, self.variables[name])

    def __contains__(self, name: str) -> bool:
        return name in self.variables

    def of(self, name: str, species: str) -> np.ndarray:
        """One species' column (cases) of a variable."""
        if species not in self.species:
            raise InputError(f"unknown species '{species}'", remedy=nearest(species, self.species), file=self.path)
        return self[name][:, self.species.index(species)]

    def tally(self) -> dict[str, int]:
        """The number of cases of each status."""
        return dict(Counter(self["status"]))

    def course(self, k: int) -> dict[str, np.ndarray]:
        """The course of case k: time, temperature, pressure, volume (steps), amount (steps, species)."""
        if _STEPS.name not in self:
            raise InputError("holds no courses", expected="trajectories = true under [grid]", file=self.path)
        steps = self[_STEPS.name]
        start, stop = int(np.sum(steps[:k])), int(np.sum(steps[: k + 1]))
        with hdf5.opened(self.path, KIND) as file:
            return {v.name: hdf5.read_slice(file, _of_courses(v), start, stop) for v in COURSE}


def read_sweep(path: StrPath) -> Sweep:
    """The results in a file that a sweep wrote, read as they are asked for; an InputError for any other file."""
    with hdf5.opened(path, KIND) as file:
        _check_layout(file)
        hdf5.require(file, (*VARIABLES, SECONDS, *_SCALES, *_TEXTS), KIND)
        known = {v.name: v for v in (*VARIABLES, SECONDS)}
        known |= {name: variable for name, variable in _along_cases(file) if name not in known}
        title, digest, version = (str(hdf5.attribute(file, name)) for name in ("title", "grid_sha256", "program_version"))
        return Sweep(path, known, len(file["case"]), hdf5.read_variable(file, _SCALES[1]), title, digest, version)


def _along_cases(file: Any) -> Iterable[tuple[str, Variable]]:
    """The inputs, which differ from grid to grid: whatever lies along the cases alone."""
    for name in file:
        dataset = file[name]
        if name != "case" and hdf5.axes_of(dataset) == _CASE:
            units, long_name = (str(hdf5.attribute(dataset, word)) for word in ("units", "long_name"))
            yield name, Variable(name, _CASE, units, long_name, text=dataset.dtype.kind == "O")


def _check_layout(file: Any) -> None:
    layout = hdf5.layout_of(file)
    if layout != LAYOUT:
        raise InputError(f"the attribute Conventions is '{layout}'", expected=f"'{LAYOUT}', {KIND}")
