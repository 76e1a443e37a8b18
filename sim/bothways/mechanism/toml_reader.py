"""Reading of TOML files: one clear error for a missing, unreadable or malformed one, with what often causes it."""

import re
import tomllib
from pathlib import Path
from typing import Any

from ..errors import InputError, hint

_PLACE = re.compile(r" \(at (?:line (\d+), column (\d+)|end of document)\)$")
_INLINE = "an inline table { … } stands on one line, without a comma before }"
_QUOTED_KEY = "a key with ( ) + * ‡ , / or a space needs quotes, such as \"CH2(S)\""
_TWICE = "a key or table stands twice, or both as { … } and under a [table] header; what follows a header belongs to it"
_NUMBER = "numbers are written 5.0, 0.5 or 1e13; a quantity with its unit is a text and needs quotes, such as \"1 atm\""
_OPEN = "look for a quote or bracket that is not closed"


def read_toml(path: Path) -> dict[str, Any]:
    """The document of a TOML file; one clear error for a missing, unreadable or malformed file."""
    return parse_toml(read_text(path), path)


def read_text(path: Path) -> str:
    """The text of a UTF-8 file, its lines ended by a line feed alone."""
    try:
        return path.read_bytes().decode("utf-8-sig").replace("\r\n", "\n")
    except FileNotFoundError:
        here = [p.name for p in path.parent.glob("*.toml")] if path.parent.is_dir() else []
        raise InputError(f"no such file{hint(path.name, here)}", expected="a TOML file", remedy="correct the name",
                         file=path) from None
    except UnicodeDecodeError as err:
        raise InputError(f"not a text in UTF-8 (byte {err.start + 1})", expected="a TOML file", file=path) from None
    except (OSError, ValueError) as err:  # ValueError: a null character in the name
        raise InputError(f"cannot be read: {getattr(err, 'strerror', err)}", expected="a TOML file", file=path) from None


def parse_toml(text: str, file: object = None) -> dict[str, Any]:
    """The document that a TOML text holds; errors tell line and column and what often causes them."""
    try:
        return tomllib.loads(text)
    except (ValueError, RecursionError) as err:  # ValueError: also integers of thousands of digits
        raise _syntax_error(err, text, file) from None


def _syntax_error(err: Exception, text: str, file: object) -> InputError:
    place = _PLACE.search(str(err))
    problem = f"TOML syntax: {_PLACE.sub('', str(err))}"
    if place is None:
        return InputError(problem, file=file, expected="TOML 1.0", remedy="look for very long numbers or deep nesting")
    if place.group(1) is None:
        return InputError(problem, file=file, entry="end of the file", expected="TOML 1.0", remedy=_OPEN)
    number, column = int(place.group(1)), int(place.group(2))
    line = [*text.split("\n"), ""][number - 1]
    return InputError(problem, file=file, entry=f"line {number}, column {column}", expected="TOML 1.0",
                      remedy=_remedy(problem, line, line[column - 1 :]))


def _remedy(problem: str, line: str, rest: str) -> str:
    """What to do about a problem at the start of `rest` of a line; the first rule that fits."""
    key = line.partition("=")[0].strip()
    rules = (
        (r"overwrite|twice|mutate", rest[:1] not in tuple("(+*‡"), _TWICE),
        (r"inline table|key part", rest[:1] in ("", "}"), _INLINE),
        (r"'='|key part|end of a table", rest[:1] == ":", "key and value are joined by ="),
        (r"'='", "=" not in line, "a line holds key = value, or a comment after #"),
        (r"'='|key part|end of a table|twice", True, _QUOTED_KEY),
        (r"Invalid statement", line.lstrip().startswith("/"), "a comment begins with #"),
        (r"Invalid statement", True, _QUOTED_KEY),
        (r"Unclosed", rest[:1].isalnum() or rest[:1] == ".", _NUMBER),
        (r"Unclosed|Unterminated|Illegal character '\\n'", True, _OPEN),
        (r"Unescaped|hex|escape", "\\" in line, "in \"…\" a backslash begins an escape: write '…', or / in file names"),
        (r"value", rest[:1].isalpha(), "a text needs quotes; true and false are written small"),
        (r"value", rest[:1] == "=", "key and value are joined by a single ="),
        (r"value", rest[:1] in ("", "#"), f"state a value for '{key}'"),
        (r"value|newline", True, _NUMBER),
    )
    return next((text for pattern, fits, text in rules if fits and re.search(pattern, problem)), "look at this line")
