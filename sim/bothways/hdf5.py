"""The only door to the HDF5 library: files whose variables carry named axes, units and a long name.

The layout is that of dimension scales (The HDF Group, HDF5 Dimension Scale Specification and Design Notes),
which netCDF-4 shares: the scales stand in the root group beside the data and are attached to every axis. So
general tools (h5py, xarray, netCDF) name each axis by its scale, where else they would guess from its length.
"""

import contextlib
import math
import re
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Any

import h5py
import numpy as np

from .errors import InputError
from .outfile import StrPath

Note = float | int | str
_TEXT = h5py.string_dtype("utf-8")
_OWN = ("units", "long_name")
_NOTE_NAME = re.compile(r"[^\W_]([^\x00-\x1f\x7f]*[^\s\x00-\x1f\x7f])?")
"""Names that netCDF can write (NetCDF Users Guide, Permitted Characters in NetCDF Names), slash aside."""
_LARGE = 16384
"""Values from which on a variable is packed."""
SLICE = 1024
"""Rows of a variable that is written slice by slice which are packed together."""


@dataclass(frozen=True)
class Variable:
    """One variable of a file: numbers (float64) or text along `dims`, `units` in UDUNITS spelling.

    `field` is where its owner keeps the values in memory, if under another name; an `optional` one may lack.
    """

    name: str
    dims: tuple[str, ...]
    units: str
    long_name: str
    text: bool = False
    optional: bool = False
    field: str = ""

    @property
    def is_scale(self) -> bool:
        """Whether it numbers or names an axis, which then bears its name."""
        return self.dims == (self.name,)


def plain_notes(notes: Mapping[str, Any], entry: str) -> dict[str, Note]:
    """The notes as plain int, float and str; truth as 1 and 0, since netCDF knows no boolean attribute."""
    values = {name: v.item() if isinstance(v, np.generic) else v for name, v in notes.items()}
    for name, value in values.items():
        if not isinstance(value, Note) or not _NOTE_NAME.fullmatch(name) or name in _OWN:
            raise InputError(f"{name!r} = {value!r} cannot be kept", entry=entry,
                             expected="a number or a text by a name that begins with a letter")
    return {name: int(v) if isinstance(v, bool) else v for name, v in values.items()}


def image(variables: Iterable[tuple[Variable, Any]], attributes: Mapping[str, Note],
          notes: Iterable[tuple[Variable, Mapping[str, Note]]]) -> bytes:
    """The bytes of a file. Scales come before what lies along them; notes are attributes of a scalar.

    It is made in memory because the HDF5 library, meeting a full disk, may bring the whole process down.
    """
    # track_order: without it the netCDF library could not append to the file later
    with h5py.File("image", "w", driver="core", backing_store=False, track_order=True) as file:
        file.attrs.update(attributes)
        for variable, values in variables:
            _create_variable(file, variable, np.array(values, dtype=_TEXT if variable.text else np.float64))
        for variable, named in notes:
            attrs = _create_variable(file, variable, np.array(len(named))).attrs
            attrs.update({_without_slash(name): value for name, value in named.items()})
        file.flush()
        return file.id.get_file_image()


def _without_slash(name: str) -> str:
    """Written as in a URL, since netCDF forbids it and names of species may hold it."""
    return name.replace("%", "%25").replace("/", "%2F")


def _create_variable(file: h5py.File, variable: Variable, data: np.ndarray) -> h5py.Dataset:
    packed = data.size >= _LARGE and not variable.text
    packing = {"chunks": True, "compression": "gzip", "shuffle": True} if packed else {}
    dataset = file.create_dataset(variable.name, data=data, track_order=True, **packing)
    dataset.attrs.update(units=variable.units, long_name=variable.long_name)
    if variable.is_scale:
        dataset.make_scale(variable.name)
        return dataset
    for axis, dim in enumerate(variable.dims):
        dataset.dims[axis].attach_scale(file[dim])
    return dataset


@contextlib.contextmanager
def created(path: StrPath, attributes: Mapping[str, Note], cached: int = 0) -> Iterator[h5py.File]:
    """A new file to be filled piece by piece, for what is too large to be made in memory.

    cached : bytes of each variable that the library may keep in memory; 0 is best where whole slices are written.
    """
    with h5py.File(path, "w", track_order=True, rdcc_nbytes=cached) as file:
        file.attrs.update(attributes)
        yield file


def add_variable(file: h5py.File, variable: Variable, values: Any) -> None:
    """A variable with all its values; the scales of its axes must be there."""
    _create_variable(file, variable, np.array(values, dtype=_TEXT if variable.text else np.float64))


def add_empty(file: h5py.File, variable: Variable, attributes: Mapping[str, Note] = MappingProxyType({})) -> h5py.Dataset:
    """A variable whose values are still to be written, slice by slice along its first axis."""
    shape = tuple(len(file[dim]) for dim in variable.dims)
    large = math.prod(shape) >= _LARGE and not variable.text
    packing = {"chunks": (min(SLICE, shape[0]), *shape[1:]), "compression": "gzip", "shuffle": True} if large else {}
    dataset = file.create_dataset(variable.name, shape, _TEXT if variable.text else np.float64, track_order=True, **packing)
    dataset.attrs.update({"units": variable.units, "long_name": variable.long_name, **attributes})
    for axis, dim in enumerate(variable.dims):
        dataset.dims[axis].attach_scale(file[dim])
    return dataset


@contextlib.contextmanager
def opened(path: StrPath, kind: str) -> Iterator[h5py.File]:
    """The file opened for reading; a failure within is an InputError naming it. `kind`: what it should be."""
    try:
        with open(path, "rb"):  # the system's own words for a missing, a forbidden file, a folder
            pass
        if not h5py.is_hdf5(path):
            raise InputError("is not an HDF5 file", expected=kind)
        with h5py.File(path, "r") as file:
            yield file
    except InputError as err:
        raise InputError(err.problem, expected=err.expected, remedy=err.remedy, file=path,
                         entry=err.entry) from err
    except OSError as err:
        raise InputError(f"cannot be read ({err.strerror or err})", expected=kind, file=path) from err
    except (RuntimeError, KeyError, ValueError) as err:  # h5py, of a damaged file
        raise InputError(f"cannot be read ({err})", expected=kind, file=path) from err


def require(file: h5py.File, variables: Iterable[Variable], kind: str) -> None:
    """An InputError naming every variable that the file lacks."""
    missing = [v.name for v in variables if not isinstance(file.get(v.name), h5py.Dataset)]
    if missing:
        raise InputError(f"lacks {', '.join(missing)}", expected=kind)


def read_variable(file: h5py.File, variable: Variable) -> Any:
    """The values: a float64 array, a text or a tuple of texts; InputError if axes or kind are others."""
    dataset = file[variable.name]
    _check_axes(dataset, variable)
    if not variable.text and dataset.dtype.kind in "iuf":
        return np.asarray(dataset[()], dtype=np.float64)
    if not variable.text or h5py.check_string_dtype(dataset.dtype) is None:
        expected = "text" if variable.text else "numbers"
        raise InputError(f"holds {dataset.dtype}", expected=expected, entry=variable.name)
    values = dataset.asstr()[()]
    return tuple(values) if variable.dims else values


def read_slice(file: h5py.File, variable: Variable, start: int, stop: int) -> np.ndarray:
    """A stretch of a variable of numbers along its first axis."""
    _check_axes(file[variable.name], variable)
    return np.asarray(file[variable.name][start:stop], dtype=np.float64)


def axes_of(dataset: h5py.Dataset) -> tuple[str, ...]:
    """The names of a variable's axes."""
    if dataset.is_scale:
        return (str(dataset.name).strip("/"),)
    return tuple(str(axis[0].name).strip("/") if axis else "unnamed" for axis in dataset.dims)


def layout_of(file: h5py.File) -> str:
    """The attribute Conventions, empty if there is none."""
    return str(attribute(file, "Conventions")) if "Conventions" in file.attrs else ""


def layout_in(path: StrPath) -> str:
    """The layout that a file names; empty where it is no HDF5 file or names none."""
    try:
        with opened(path, "") as file:
            return layout_of(file)
    except InputError:
        return ""


def _check_axes(dataset: h5py.Dataset, variable: Variable) -> None:
    names = axes_of(dataset)
    if names != variable.dims:
        raise InputError(f"has the axes ({', '.join(names)})", expected=f"({', '.join(variable.dims)})",
                         entry=variable.name)


def attribute(holder: h5py.File | h5py.Dataset, name: str) -> Note:
    """One attribute as plain int, float or str, however the library that wrote it stores these."""
    if name not in holder.attrs:
        raise InputError(f"lacks the attribute '{name}'", entry=holder.name[1:])
    value = holder.attrs[name]
    if isinstance(value, h5py.Empty):
        return ""
    value = np.asarray(value).reshape(-1)
    if value.size != 1:
        raise InputError(f"{name} holds {value.size} values", expected="one", entry=holder.name[1:])
    plain = value[0].item() if isinstance(value[0], np.generic) else value[0]
    return plain.decode() if isinstance(plain, bytes) else plain


def read_notes(file: h5py.File, variable: Variable) -> dict[str, Note]:
    """The notes kept as attributes of a scalar."""
    dataset = file[variable.name]
    notes = {name: attribute(dataset, name) for name in dataset.attrs
             if name not in _OWN and _NOTE_NAME.fullmatch(name)}
    return {name.replace("%2F", "/").replace("%25", "%"): value for name, value in notes.items()}
