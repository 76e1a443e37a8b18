"""Conditions listed in a CSV file: a column for each varied key, a row for each condition."""

import csv
import re
from pathlib import Path

from ..entry import Entry
from ..errors import InputError
from ..units import UNITS
from .keys import Value, kind_of, read_value, units_of, unknown_key

_HEADER = re.compile(r"(?P<key>.*\S)\s+/\s+(?P<unit>\S+)")


def read_rows(entry: Entry) -> tuple[tuple[str, ...], list[tuple[Value, ...]]]:
    """Keys and values of the CSV file that the table [rows] names; its path is relative to the grid file.

    Raises InputError naming row (as an editor counts lines, the header being line 1) and column of what is wrong.
    """
    path = (Path(str(entry.file)).parent if entry.file else Path()) / entry.text("file")
    entry.done()
    lines = _lines(path)
    columns = [_column(Entry({}, f"column {k}", path), header.strip()) for k, header in enumerate(lines[0][1], 1)]
    _check_columns(path, [key for key, _ in columns])
    rows = [_row(path, number, columns, cells) for number, cells in lines[1:]]
    if not rows:
        raise InputError("there is no row below the header", expected="a condition a row", remedy="add one", file=path)
    return tuple(key for key, _ in columns), rows


def _lines(path: Path) -> list[tuple[int, list[str]]]:
    """Number and cells of the lines that hold anything."""
    try:
        with path.open(encoding="utf-8-sig", newline="") as file:
            reader = csv.reader(file, strict=True)
            lines = [(reader.line_num, cells) for cells in reader if any(cell.strip() for cell in cells)]
    except OSError as err:
        raise InputError(f"cannot be read ({err.strerror or err})", expected="a CSV file", file=path) from None
    except (UnicodeDecodeError, csv.Error) as err:
        raise InputError(f"is not a CSV file in UTF-8 ({err})", expected="commas between cells", file=path) from None
    if not lines:
        raise InputError("is empty", expected="a header such as start.temperature,start.pressure", file=path)
    return lines


def _column(entry: Entry, header: str) -> tuple[str, str]:
    """Key and unit of a column: "start.temperature" (bare numbers are SI) or "start.temperature / °C"."""
    stated = _HEADER.fullmatch(header)
    key, unit = (stated["key"], stated["unit"]) if stated else (header, "")
    if kind_of(key) in ("", "table"):
        raise unknown_key(entry, key, "column") if not kind_of(key) else entry.error(
            f"'{key}' is a table", expected="a column for each species", remedy=f"such as {key}.H2")
    if unit and unit not in UNITS.get(units_of(key), {}):
        raise entry.unknown("unit", unit, UNITS.get(units_of(key), {}), remedy=f"correct the unit of {key}")
    return key, unit


def _check_columns(path: Path, keys: list[str]) -> None:
    twice = next((key for key in keys if keys.count(key) > 1), None)
    if twice:
        raise InputError(f"two columns '{twice}'", expected="each key once", remedy="leave one out", file=path)


def _row(path: Path, number: int, columns: list[tuple[str, str]], cells: list[str]) -> tuple[Value, ...]:
    if len(cells) != len(columns):
        raise InputError(f"{len(cells)} cells", expected=f"{len(columns)}, as in the header", remedy="correct the row",
                         file=path, entry=f"row {number}")
    return tuple(_cell(Entry({}, f"row {number}, column {key}", path), key, unit, text.strip())
                 for (key, unit), text in zip(columns, cells, strict=True))


def _cell(entry: Entry, key: str, unit: str, text: str) -> Value:
    if not text:
        raise entry.error("the cell is empty", expected="a value", remedy="fill it in, or leave the row out")
    if kind_of(key) == "text":
        return text
    if unit:
        return entry.convert(f"{text} {unit}", units_of(key), "")
    number = _number(text)
    if number is None and units_of(key):
        return entry.convert(text, units_of(key), "")
    return read_value(entry, key, text if number is None else number)


def _number(text: str) -> float | None:
    try:
        return float(text)
    except ValueError:
        return None
