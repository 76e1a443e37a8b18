"""A trajectory: what one run gave, in memory and as a self-describing HDF5 file.

One table, `VARIABLES`, says what the file holds. Writer, reader and the checks of shape all follow it: a new
variable is one new line there (and, unless optional, one field of `Trajectory`).
"""

import dataclasses
import hashlib
from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import UTC, datetime
from typing import Any

import numpy as np
from numpy.typing import NDArray

from . import hdf5
from .errors import InputError, nearest
from .hdf5 import Variable
from .outfile import StrPath, check_writable, write_whole

__all__ = ["LAYOUT", "VARIABLES", "Trajectory", "check_writable", "read_trajectory", "write_trajectory"]

Array = NDArray[np.float64]

LAYOUT = "bothways-trajectory-1"
"""The layout's name in `Conventions`. CF is not claimed: its coordinates are numbers, `species` is text."""

_TIME, _TS, _TR = ("time",), ("time", "species"), ("time", "reaction")

VARIABLES: tuple[Variable, ...] = (
    Variable("time", _TIME, "s", "time since the start"),
    Variable("species", ("species",), "1", "species", text=True),
    Variable("reaction", ("reaction",), "1", "reaction equation", text=True, field="reactions"),
    Variable("temperature", _TIME, "K", "temperature"),
    Variable("pressure", _TIME, "Pa", "pressure"),
    Variable("volume", _TIME, "m3", "volume"),
    Variable("amount", _TS, "mol", "amount of substance"),
    Variable("potential", _TIME, "", ""),  # units and long name are the trajectory's to say
    Variable("entropy_produced", _TIME, "J K-1", "entropy produced since the start"),
    Variable("element_residual", _TIME, "1", "largest relative departure of an element from the charge"),
    Variable("energy_residual", _TIME, "1", "relative departure of the conserved energy from the start"),
    Variable("molar_mass", ("species",), "kg mol-1", "molar mass"),
    Variable("mechanism_text", (), "1", "mechanism file (TOML)", text=True),
    Variable("case_text", (), "1", "case file (TOML)", text=True),
    Variable("rate_forward", _TR, "mol m-3 s-1", "forward rate of reaction", optional=True),
    Variable("rate_reverse", _TR, "mol m-3 s-1", "reverse rate of reaction", optional=True),
    Variable("affinity", _TR, "J mol-1", "affinity of reaction", optional=True),
    Variable("heat_received", _TIME, "J", "heat received from outside since the start", optional=True),
    Variable("jacket_temperature", _TIME, "K", "temperature of the jacket", optional=True),
    Variable("adiabatic_temperature_rise", (), "K", "adiabatic temperature rise of the charge up to equilibrium", optional=True),
    Variable("cooling_failure_temperature", (), "K", "highest equilibrium temperature if the jacket failed", optional=True),
    Variable("largest_temperature_rate", (), "K s-1", "largest rate of temperature rise", optional=True),
    Variable("largest_temperature_rate_time", (), "s", "time of the largest rate of temperature rise", optional=True),
    Variable("largest_pressure_rate", (), "Pa s-1", "largest rate of pressure rise", optional=True),
    Variable("largest_pressure_rate_time", (), "s", "time of the largest rate of pressure rise", optional=True),
    Variable("equilibrium_temperature", (), "K", "temperature at equilibrium", optional=True),
    Variable("equilibrium_pressure", (), "Pa", "pressure at equilibrium", optional=True),
    Variable("equilibrium_volume", (), "m3", "volume at equilibrium", optional=True),
    Variable("equilibrium_amount", ("species",), "mol", "amount of substance at equilibrium", optional=True),
    Variable("verdict", (), "1", "the end of the run held against equilibrium", text=True, optional=True),
)
"""Every variable of the file, the scales first."""

_REQUIRED = {v.name: v for v in VARIABLES if not v.optional}
_OPTIONAL = {v.name: v for v in VARIABLES if v.optional}
_NOTES = (Variable("statistics", (), "1", "number of solver statistics, each an attribute of this variable"),
          Variable("milestones", (), "1", "number of milestones, each an attribute of this variable"))
_ATTRIBUTES = ("mechanism_name", "program_version", "created", "reason")
_KIND = "a trajectory written by bothways"


def _now() -> str:
    return datetime.now(UTC).isoformat(timespec="seconds")


@dataclass(frozen=True, eq=False, repr=False, kw_only=True)
class Trajectory:
    """The states of one run at its accepted steps, with all that is needed to repeat it; SI throughout.

    Arrays are kept as read-only views.

    Parameters
    ----------
    time : (nt,) [s], increasing.
    temperature, pressure, volume : (nt,) [K], [Pa], [m3]; the pressure of a solution is NaN.
    amount : (nt, ns) [mol].
    potential : (nt,) [`potential_units`: "J" or "J K-1"], the function of state named by `potential_name`
        ("Helmholtz energy", "Gibbs energy", "negative entropy") that may not rise in this vessel.
    entropy_produced : (nt,) [J/K].
    element_residual : (nt,) [-], largest relative departure of any element from the charge.
    energy_residual : (nt,) [-], relative departure of the conserved energy; zero where none is conserved.
    species, molar_mass : ns names; (ns,) [kg/mol].
    reactions : nr equations.
    mechanism_text, case_text : the files (TOML) as they were read.
    sources : references of the data, one line each.
    statistics : what the solver did: numbers and words by name.
    milestones : by name, times [s] and peak mole fractions [-]; see `milestones.milestones`.
    complete, reason : whether the run reached its end, and if not why.
    created : ISO 8601 time, now if not given.
    extra : optional variables of `VARIABLES` by name, such as `affinity` (nt, nr) [J/mol].
    """

    time: Array
    temperature: Array
    pressure: Array
    volume: Array
    amount: Array
    potential: Array
    potential_name: str
    potential_units: str
    entropy_produced: Array
    element_residual: Array
    energy_residual: Array
    species: tuple[str, ...]
    molar_mass: Array
    reactions: tuple[str, ...]
    mechanism_name: str
    mechanism_text: str
    case_text: str
    sources: tuple[str, ...]
    statistics: Mapping[str, float | int | str]
    program_version: str
    complete: bool
    reason: str = ""
    milestones: Mapping[str, float | int] = field(default_factory=dict)
    extra: Mapping[str, Any] = field(default_factory=dict)
    created: str = field(default_factory=_now)

    def __post_init__(self) -> None:
        lines = (" ".join(source.split()) for source in self.sources)
        self._set(species=tuple(self.species), reactions=tuple(self.reactions),
                  sources=tuple(filter(None, lines)))
        self._set(**{note.name: hdf5.plain_notes(getattr(self, note.name), note.name) for note in _NOTES})
        self._set(**{v.name: self._array(v, _values(self, v)) for v in _REQUIRED.values() if not v.text})
        self._set(extra={name: self._extra(name, value) for name, value in self.extra.items()})

    def _set(self, **values: Any) -> None:
        for name, value in values.items():
            object.__setattr__(self, name, value)

    def _extra(self, name: str, value: Any) -> Any:
        if name not in _OPTIONAL:
            raise InputError(f"unknown variable '{name}'", remedy=nearest(name, _OPTIONAL), entry="extra")
        return str(value) if _OPTIONAL[name].text else self._array(_OPTIONAL[name], value)

    def _array(self, variable: Variable, value: Any) -> Array:
        """A read-only float64 view of `value`, which must have the shape that its axes ask for."""
        array = np.asarray(value, dtype=np.float64).view()
        array.flags.writeable = False
        shape = tuple(len(_values(self, _REQUIRED[dim])) for dim in variable.dims)
        if array.shape != shape:
            raise InputError(f"the shape is {array.shape}", entry=variable.name,
                             expected=f"{shape} for the axes ({', '.join(variable.dims)})")
        return array

    def __len__(self) -> int:
        return len(self.time)

    def __repr__(self) -> str:
        state = "complete" if self.complete else f"incomplete: {self.reason}"
        size = f"{len(self)} times, {len(self.species)} species"
        return f"<Trajectory of {self.mechanism_name}: {size}, {state}>"

    def of(self, species: str) -> Array:
        """The amount of one species (nt,) [mol]."""
        if species not in self.species:
            raise InputError(f"unknown species '{species}'", remedy=nearest(species, self.species))
        return self.amount[:, self.species.index(species)]

    @property
    def mole_fraction(self) -> Array:
        """(nt, ns) [-]."""
        return self.amount / self.amount.sum(axis=1, keepdims=True)

    @property
    def mass_fraction(self) -> Array:
        """(nt, ns) [-]."""
        mass = self.amount * self.molar_mass
        return mass / mass.sum(axis=1, keepdims=True)

    @property
    def concentration(self) -> Array:
        """(nt, ns) [mol/m3]."""
        return self.amount / self.volume[:, None]

    @property
    def density(self) -> Array:
        """(nt,) [kg/m3]."""
        return self.amount @ self.molar_mass / self.volume


def _values(trajectory: Trajectory, variable: Variable) -> Any:
    """What `trajectory` keeps for `variable`; None if that is optional and lacking."""
    if variable.optional:
        return trajectory.extra.get(variable.name)
    return getattr(trajectory, variable.field or variable.name)


def write_trajectory(path: StrPath, trajectory: Trajectory, replace: bool = False) -> None:
    """Writes the file, whole or not at all; one that exists is an InputError unless `replace`."""
    table = [(_described(v, trajectory), _values(trajectory, v)) for v in VARIABLES]
    present = [(variable, values) for variable, values in table if values is not None]
    notes = [(note, getattr(trajectory, note.name)) for note in _NOTES]
    write_whole(path, hdf5.image(present, _attributes(trajectory), notes), replace)


def _described(variable: Variable, trajectory: Trajectory) -> Variable:
    if variable.name == "pressure" and np.all(np.isnan(trajectory.pressure)):
        return dataclasses.replace(variable, long_name="pressure (NaN: it plays no part in a solution)")
    if variable.name != "potential":
        return variable
    name, units = trajectory.potential_name, trajectory.potential_units
    return dataclasses.replace(variable, units=units, long_name=name)


def _attributes(trajectory: Trajectory) -> dict[str, Any]:
    """The root group's attributes: the usual ones (NetCDF Users Guide, Attribute Conventions), then ours."""
    program = f"bothways {trajectory.program_version}"
    return {"Conventions": LAYOUT, "title": f"Closed batch reactor, mechanism {trajectory.mechanism_name}",
            "history": f"{trajectory.created}: written by {program}", "source": program,
            "references": "\n".join(trajectory.sources), "complete": int(trajectory.complete),
            **{name: getattr(trajectory, name) for name in _ATTRIBUTES}, **_hashes(trajectory)}


def _hashes(trajectory: Trajectory) -> dict[str, str]:
    texts = {"mechanism_sha256": trajectory.mechanism_text, "case_sha256": trajectory.case_text}
    return {name: hashlib.sha256(text.encode()).hexdigest() for name, text in texts.items()}


def read_trajectory(path: StrPath) -> Trajectory:
    """The trajectory of a file that `write_trajectory` wrote; an InputError for any other file."""
    with hdf5.opened(path, _KIND) as file:
        _check_layout(file)
        hdf5.require(file, [*_REQUIRED.values(), *_NOTES], _KIND)
        trajectory = Trajectory(**_fields(file))
        _check_hashes(file, trajectory)
        return trajectory


def _fields(file: Any) -> dict[str, Any]:
    """The arguments of `Trajectory`, from the file."""
    fields = {v.field or v.name: hdf5.read_variable(file, v) for v in _REQUIRED.values()}
    fields |= {note.name: hdf5.read_notes(file, note) for note in _NOTES}
    fields |= {name: hdf5.attribute(file, name) for name in _ATTRIBUTES}
    fields["extra"] = {name: hdf5.read_variable(file, v) for name, v in _OPTIONAL.items() if name in file}
    fields["complete"] = hdf5.attribute(file, "complete") == 1
    fields["sources"] = str(hdf5.attribute(file, "references")).split("\n")
    fields["potential_name"] = hdf5.attribute(file["potential"], "long_name")
    fields["potential_units"] = hdf5.attribute(file["potential"], "units")
    return fields


def _check_layout(file: Any) -> None:
    conventions = hdf5.layout_of(file)
    if LAYOUT not in conventions.replace(",", " ").split():
        raise InputError(f"the attribute Conventions is '{conventions}'", expected=f"'{LAYOUT}', {_KIND}")


def _check_hashes(file: Any, trajectory: Trajectory) -> None:
    """An InputError if a text is not the one that the run had: then the file would not repeat it."""
    for name, value in _hashes(trajectory).items():
        if hdf5.attribute(file, name) != value:
            raise InputError(f"the text was altered: {name} is another", expected="the text as written")
