"""Mechanism files: reading, writing, and the bundled ones by name."""

import os
from pathlib import Path

from ..errors import InputError, hint
from ..outfile import write_whole
from .model import Mechanism
from .reader import build
from .toml_reader import parse_toml, read_toml
from .toml_writer import to_toml

__all__ = ["bundled_cases", "bundled_folder", "bundled_mechanisms", "mechanism_path", "parse_toml", "read_mechanism",
           "read_toml", "write_mechanism"]

_HERE = Path(__file__).resolve()
_FOLDERS = (_HERE.parents[1] / "bundled", _HERE.parents[3] / "mechanisms")  # installed, or a source tree


def bundled_folder() -> Path:
    """The folder of the bundled mechanism and case files."""
    for folder in _FOLDERS:
        if folder.is_dir():
            return folder
    raise InputError("the bundled mechanisms are missing", remedy="install bothways again")


def bundled_mechanisms() -> dict[str, Path]:
    """Names and files of the bundled mechanisms."""
    return {path.stem: path for path in sorted(bundled_folder().glob("*.toml"))}


def bundled_cases() -> dict[str, Path]:
    """Names and files of the bundled cases."""
    return {path.stem: path for path in sorted((bundled_folder() / "cases").glob("*.toml"))}


def read_mechanism(name: str | Path, lenient: bool = False) -> Mechanism:
    """The mechanism in a file, or a bundled one by its name; `lenient` as for `build`.

    Raises InputError: no such file or name (with the nearest), and every fault that `build` finds.
    """
    path = mechanism_path(name)
    return build(read_toml(path), path, lenient)


def mechanism_path(name: str | Path, folder: Path = Path()) -> Path:
    """Where a mechanism stands that is named by bundled name or by a path relative to `folder`."""
    bundled = bundled_mechanisms()
    if str(name) in bundled:
        return bundled[str(name)]
    path = folder / Path(name)
    if path.suffix == ".toml" or "/" in str(name) or os.path.exists(path):
        return path
    known = [*bundled, *(p.name for p in folder.glob("*.toml"))]
    raise InputError(f"no bundled mechanism and no file '{name}'{hint(name, known)}", expected="a mechanism",
                     remedy="'bothways mechanisms' lists the bundled ones; a file is named by its path")


def write_mechanism(mechanism: Mechanism, path: str | Path, replace: bool = False) -> None:
    """Writes the mechanism's document as TOML; what is read back is the same mechanism.

    Raises InputError where the file cannot be written, or exists and `replace` is false.
    """
    write_whole(path, to_toml(mechanism.document).encode(), replace)
