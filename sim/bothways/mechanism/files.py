"""Mechanism files: reading, writing, and the bundled ones by name."""

import tomllib
from pathlib import Path
from typing import Any

from ..errors import InputError, nearest
from .model import Mechanism
from .reader import build
from .toml_writer import to_toml

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


def read_toml(path: Path) -> dict[str, Any]:
    """The document of a TOML file; one clear error for a missing, unreadable or malformed file."""
    return parse_toml(read_text(path), path)


def read_text(path: Path) -> str:
    """The text of a UTF-8 file."""
    try:
        return path.read_bytes().decode("utf-8").replace("\r\n", "\n")
    except FileNotFoundError:
        folder = path.parent
        here = [p.name for p in folder.glob("*.toml")] if folder.is_dir() else []
        raise InputError("no such file" + (f" ({nearest(path.name, here)})" if here else ""), file=path) from None
    except UnicodeDecodeError as err:
        raise InputError(f"not a text in UTF-8 (byte {err.start})", expected="a TOML file", file=path) from None
    except OSError as err:
        raise InputError(f"cannot be read: {err.strerror}", file=path) from None


def parse_toml(text: str, file: object = None) -> dict[str, Any]:
    """The document that a TOML text holds; errors tell line and column and what often causes them."""
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as err:
        raise InputError(f"TOML syntax: {err}", file=file, remedy=_hint(str(err), text)) from None


def _hint(message: str, text: str) -> str:
    if "line" not in message:
        return "the end of the file was reached within a value: look for a quote or bracket that is not closed"
    number = int(message.split("line ")[1].split(",")[0])
    lines = text.splitlines()
    line = lines[number - 1] if number <= len(lines) else ""
    if "overwrite" in message or "twice" in message or "Cannot declare" in message:
        return "a key or table stands twice; what follows a [table] header belongs to that table"
    if "{" in line or any("{" in before for before in lines[max(0, number - 3) : number - 1]):
        return "an inline table { … } stands on one line, without a comma before }"
    key = line.split("=")[0]
    if any(c in key for c in "(+*‡⇌,"):
        return "a key with ( + * ‡ or a space needs quotes"
    if "value" in message:
        return "a text needs quotes; a key or a value may be missing here"
    return "look at this line; a key with ( + * ‡ or a space needs quotes"


def read_mechanism(name: str | Path) -> Mechanism:
    """The mechanism in a file, or a bundled one by its name.

    Raises InputError: no such file or name (with the nearest), and every fault that `build` finds.
    """
    path = mechanism_path(name)
    return build(read_toml(path), path)


def mechanism_path(name: str | Path, folder: Path = Path()) -> Path:
    """Where a mechanism stands that is named by bundled name or by a path relative to `folder`."""
    bundled = bundled_mechanisms()
    if str(name) in bundled:
        return bundled[str(name)]
    path = folder / Path(name)
    if path.suffix == ".toml" or "/" in str(name) or path.exists():
        return path
    raise InputError(f"no bundled mechanism '{name}' ({nearest(str(name), bundled)})",
                     remedy="'bothways mechanisms' lists them; a file is named by its path")


def write_mechanism(mechanism: Mechanism, path: str | Path, replace: bool = False) -> None:
    """Writes the mechanism's document as TOML; what is read back is the same mechanism.

    Raises InputError where the file exists and `replace` is false.
    """
    target = Path(path)
    if target.exists() and not replace:
        raise InputError("exists already", file=target, remedy="choose another name, or allow replacing it")
    target.write_text(to_toml(mechanism.document), encoding="utf-8")
