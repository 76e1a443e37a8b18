"""Reading of one table of a file: every key asked for by kind, every unknown key an error."""

import unicodedata
from collections.abc import Collection, Iterable, Mapping, Sequence
from typing import Any, Optional

from .errors import InputError, closest, hint, shown
from .units import UnitSystem, finite, parse_quantity

_SI = UnitSystem()
REQUIRED: Any = object()
_SIGNS = {"positive": lambda v: v > 0, "not negative": lambda v: v >= 0, "not zero": lambda v: v != 0,
          "any": lambda v: True}
_NUMBER = {"positive": "a number above 0", "not negative": "a number that is not negative",
           "not zero": "a number other than 0", "any": "a finite number"}


class Entry:
    """A table with the place it stands at; `done` reports the keys nobody asked for.

    Parameters
    ----------
    data : the table as the TOML reader gives it.
    file, place : where it stands, for messages.
    units : units of bare numbers.
    above : the table that holds this one, if any.
    """

    def __init__(self, data: Mapping[str, Any], place: str, file: object = None, units: UnitSystem = _SI,
                 above: Optional["Entry"] = None) -> None:
        self.data, self.place, self.file, self.units, self.above = data, place, file, units, above
        self.known: set[str] = set()
        if not isinstance(data, Mapping):
            raise self.error(f"{shown(data)} is not a table", expected="a table of keys")
        for key in data:
            if not isinstance(key, str):
                raise self.error(f"the key {shown(key)} is not a text", expected="keys that are texts")

    def error(self, problem: str, *, expected: str = "", remedy: str = "", key: str = "") -> InputError:
        """An InputError that names this entry (and `key` in it)."""
        return InputError(problem, expected=expected, remedy=remedy, file=self.file, entry=self._at(key))

    def _at(self, key: str) -> str:
        return f"{self.place}.{key}" if key and self.place else key or self.place

    def unknown(self, what: str, name: str, known: Iterable[str], *, key: str = "", remedy: str = "") -> InputError:
        """An InputError for a name of some kind that is not among the known ones."""
        close, remedy = hint(name, known), remedy or f"correct the {what}"
        if self.above is not None and name in self.above.known:
            close, remedy = "", (f"it belongs to {self.above.place or 'the top of the file'}: put it before this table's "
                                 "header, since what follows a [table] header belongs to that table")
        return self.error(f"unknown {what} {shown(name)}{close}", remedy=remedy, key=key)

    def get(self, key: str, default: Any = REQUIRED, what: str = "a value") -> Any:
        """The raw value of `key`, or `default`; an error where it is required and missing."""
        self.known.add(key)
        if key not in self.data:
            return self._missing(key, what) if default is REQUIRED else default
        if self.data[key] is None:
            raise self.error("the value is None", expected=what, remedy="or leave the key out", key=key)
        return self.data[key]

    def _missing(self, key: str, what: str) -> Any:
        close = closest(key, [other for other in self.data if other not in self.known])
        remedy = f"is '{close[0]}' meant to be it?" if close else "add it"
        raise self.error(f"the key '{key}' is missing", expected=what, remedy=remedy)

    def number(self, key: str, default: Any = REQUIRED, sign: str = "any") -> Any:
        """A finite dimensionless number of the given sign."""
        value = self.get(key, default, "a number")
        return value if value is default else self._checked(value, value, key, sign)

    def quantity(self, key: str, kind: str, default: Any = REQUIRED, sign: str = "any") -> Any:
        """The SI value of a number in file units or a string with its unit."""
        value = self.get(key, default, f"a {kind}")
        return value if value is default else self.convert(value, kind, key, sign)

    def convert(self, value: object, kind: str, key: str, sign: str = "any") -> float:
        """The SI value of one raw quantity."""
        if isinstance(value, str):
            try:
                si = parse_quantity(value, kind)
            except InputError as err:
                raise self.error(err.problem, expected=err.expected, remedy="correct number or unit", key=key) from None
        elif finite(value):
            si = value * self.units.factor(kind)  # type: ignore[operator]
        else:
            raise self.error(f"{shown(value)} is not a finite number", key=key,
                             expected=f"a {kind}, bare or as a text with its unit")
        return self._checked(si, value, key, sign)

    def _checked(self, si: Any, stated: object, key: str, sign: str) -> float:
        if not finite(si):
            remedy = "leave out the quotes: it has no unit" if isinstance(stated, str) else "correct the value"
            raise self.error(f"{shown(stated)} is not a finite number", expected=_NUMBER[sign], remedy=remedy, key=key)
        if not _SIGNS[sign](si):
            raise self.error(f"{shown(stated)} is {'negative' if si < 0 else 'zero'}", expected=_NUMBER[sign],
                             remedy="correct the value", key=key)
        return float(si)

    def text(self, key: str, default: Any = REQUIRED, choices: Sequence[str] = ()) -> Any:
        """A string, one of `choices` if these are given."""
        listed = " or ".join([f'"{c}"' for c in choices]) if choices else ""
        value = self.get(key, default, listed or "a text")
        if value is default:
            return value
        if not isinstance(value, str) or not value.strip():
            raise self.error(f"{shown(value)} is not a text", expected=listed or "a text in quotes", key=key)
        if choices and value not in choices:
            raise self.error(f"'{value}' is not known{hint(value, choices)}", expected=listed, key=key)
        self._check_characters(value, key)
        return value

    def _check_characters(self, text: str, key: str) -> None:
        character = odd_character(text)
        if character:
            raise self.error(f"{shown(text)} holds {character!r}", expected="a text without control characters", key=key)

    def flag(self, key: str, default: bool = False) -> bool:
        """true or false."""
        value = self.get(key, default)
        if not isinstance(value, bool):
            raise self.error(f"{shown(value)} is neither true nor false", expected="true or false", key=key)
        return value

    def items(self, key: str, default: Any = REQUIRED, example: str = "") -> tuple[Any, ...]:
        """The raw members of a list."""
        value = self.get(key, default, example)
        if not isinstance(value, (list, tuple)):
            raise self.error(f"{shown(value)} is not a list", expected=f"a list such as {example}", key=key)
        return tuple(value)

    def texts(self, key: str, default: Any = REQUIRED) -> tuple[str, ...]:
        """A list of strings."""
        values = self.items(key, default, '["…", "…"]')
        for value in values:
            if not isinstance(value, str):
                raise self.error(f"{shown(value)} is not a text", expected='texts such as ["…", "…"]', key=key)
            self._check_characters(value, key)
        return values

    def numbers(self, key: str, default: Any = REQUIRED) -> tuple[float, ...]:
        """A list of finite numbers."""
        value = self.get(key, default, "a list of numbers")
        return value if value is default else self.row(value, key)

    def row(self, value: object, key: str) -> tuple[float, ...]:
        """A checked list of finite numbers."""
        if not isinstance(value, (list, tuple)):
            raise self.error(f"{shown(value)} is not a list", expected="a list of numbers", key=key)
        for number in value:
            if not finite(number):
                raise self.error(f"{shown(number)} is not a finite number", expected="a list of finite numbers", key=key)
        return tuple(map(float, value))

    def table(self, key: str, default: Any = REQUIRED) -> "Entry":
        """A table within this one."""
        return self.sub(self.get(key, default, "a table"), self._at(key))

    def sub(self, data: Any, place: str) -> "Entry":
        """A table within this one, stated at a place of its own."""
        return Entry(data, place, self.file, self.units, self)

    def named_numbers(self, key: str, what: str, names: Collection[str] | None = None, kind: str = "",
                      sign: str = "not negative", default: Any = REQUIRED) -> Any:
        """A table of name → number (or quantity of `kind`); `what` a name stands for, and the known `names`."""
        if self.get(key, default, f"a table of numbers, one for each {what}") is default:
            return default
        inner = self.table(key)
        for name in inner.data:
            if names is not None and name not in names:
                raise inner.unknown(what, name, names)
        if kind:
            return {name: inner.quantity(name, kind, sign=sign) for name in inner.data}
        return {name: inner.number(name, sign=sign) for name in inner.data}

    def expect(self, *keys: str) -> None:
        """Reports the first key that is none of these, before any is read."""
        self.known.update(keys)
        self.done()

    def done(self, also: Iterable[str] = ()) -> None:
        """Reports the first key that nobody asked for."""
        known = self.known.union(also)
        for key in self.data:
            if key not in known:
                raise self.unknown("key", key, known, remedy="correct the key or leave it out")


def odd_character(text: str) -> str:
    """The first character of a text that neither a file nor a terminal can take: a control one, half of a pair."""
    if text.isprintable():
        return ""
    return next((c for c in text if unicodedata.category(c) in ("Cc", "Cs") and c not in "\n\r\t"), "")
