"""Reading of one table of a file: every key asked for by kind, every unknown key an error."""

from collections.abc import Iterable, Mapping, Sequence
from typing import Any

from .errors import InputError, nearest
from .units import UnitSystem, finite, parse_quantity

_SI = UnitSystem()
_REQUIRED: Any = object()
_SIGNS = {"positive": lambda v: v > 0, "not negative": lambda v: v >= 0, "not zero": lambda v: v != 0,
          "any": lambda v: True}


class Entry:
    """A table with the place it stands at; `done` reports the keys nobody asked for.

    Parameters
    ----------
    data : the table as the TOML reader gives it.
    file, place : where it stands, for messages.
    units : units of bare numbers.
    """

    def __init__(self, data: Mapping[str, Any], place: str, file: object = None, units: UnitSystem = _SI) -> None:
        if not isinstance(data, Mapping):
            raise InputError(f"{data!r} is not a table", expected="a table of keys", file=file, entry=place)
        self.data, self.place, self.file, self.units = data, place, file, units
        self.known: set[str] = set()

    def error(self, problem: str, *, expected: str = "", remedy: str = "", key: str = "") -> InputError:
        """An InputError that names this entry (and `key` in it)."""
        entry = f"{self.place}.{key}" if key and self.place else key or self.place
        return InputError(problem, expected=expected, remedy=remedy, file=self.file, entry=entry)

    def get(self, key: str, default: Any = _REQUIRED, what: str = "a value") -> Any:
        """The raw value of `key`, or `default`; an error where it is required and missing."""
        self.known.add(key)
        if key in self.data:
            return self.data[key]
        if default is _REQUIRED:
            raise self.error(f"the key '{key}' is missing", expected=what)
        return default

    def number(self, key: str, default: Any = _REQUIRED, sign: str = "any") -> Any:
        """A finite dimensionless number of the given sign."""
        value = self.get(key, default, "a number")
        return value if value is default else self._checked(float, value, value, key, sign)

    def quantity(self, key: str, kind: str, default: Any = _REQUIRED, sign: str = "any") -> Any:
        """The SI value of a number in file units or a string with its unit."""
        value = self.get(key, default, f"a {kind}")
        return value if value is default else self.convert(value, kind, key, sign)

    def convert(self, value: object, kind: str, key: str, sign: str = "any") -> float:
        """The SI value of one raw quantity."""
        if isinstance(value, str):
            try:
                si = parse_quantity(value, kind)
            except InputError as err:
                raise self.error(err.problem, expected=err.expected, key=key) from None
        elif finite(value):
            si = value * self.units.factor(kind)  # type: ignore[operator]
        else:
            raise self.error(f"{value!r} is not a finite number", expected=f"a {kind}, bare or with its unit", key=key)
        return self._checked(float, si, value, key, sign)

    def _checked(self, kind: type, si: object, stated: object, key: str, sign: str) -> Any:
        if not finite(si):
            raise self.error(f"{stated!r} is not a finite number", expected="a finite number", key=key)
        if not _SIGNS[sign](si):
            raise self.error(f"{stated!r} is {'negative' if si < 0 else 'zero'}",  # type: ignore[operator]
                             expected=f"a number that is {sign}", key=key)
        return kind(si)

    def text(self, key: str, default: Any = _REQUIRED, choices: Sequence[str] = ()) -> Any:
        """A string, one of `choices` if these are given."""
        value = self.get(key, default, "a text" if not choices else " or ".join(f'"{c}"' for c in choices))
        if value is default:
            return value
        if not isinstance(value, str) or not value.strip():
            raise self.error(f"{value!r} is not a text", expected="a text in quotes", key=key)
        if choices and value not in choices:
            raise self.error(f"'{value}' is not known ({nearest(value, choices)})",
                             expected=" or ".join(f'"{c}"' for c in choices), key=key)
        return value

    def flag(self, key: str, default: bool = False) -> bool:
        """true or false."""
        value = self.get(key, default)
        if not isinstance(value, bool):
            raise self.error(f"{value!r} is neither true nor false", expected="true or false", key=key)
        return value

    def texts(self, key: str, default: Any = _REQUIRED) -> tuple[str, ...]:
        """A list of strings."""
        value = self.get(key, default, "a list of texts")
        if not isinstance(value, (list, tuple)) or not all(isinstance(v, str) for v in value):
            raise self.error(f"{value!r} is not a list of texts", expected='["…", "…"]', key=key)
        return tuple(value)

    def numbers(self, key: str, default: Any = _REQUIRED) -> tuple[float, ...]:
        """A list of finite numbers."""
        value = self.get(key, default, "a list of numbers")
        return value if value is default else self.row(value, key)

    def row(self, value: object, key: str) -> tuple[float, ...]:
        """A checked list of finite numbers."""
        if not isinstance(value, (list, tuple)):
            raise self.error(f"{value!r} is not a list", expected="a list of numbers", key=key)
        for number in value:
            if not finite(number):
                raise self.error(f"{number!r} is not a finite number", expected="a list of numbers", key=key)
        return tuple(map(float, value))

    def table(self, key: str, default: Any = _REQUIRED) -> "Entry":
        """A table within this one."""
        value = self.get(key, default, "a table")
        place = f"{self.place}.{key}" if self.place else key
        return Entry(value, place, self.file, self.units)

    def sub(self, data: Any, place: str) -> "Entry":
        """Another table at a place of this one's file."""
        return Entry(data, place, self.file, self.units)

    def named_numbers(self, key: str, kind: str = "", sign: str = "not negative", default: Any = _REQUIRED) -> Any:
        """A table of name → number (or quantity of `kind`)."""
        table = self.get(key, default, "a table of names and numbers")
        if table is default:
            return table
        inner = self.table(key)
        if kind:
            return {name: inner.quantity(name, kind, sign=sign) for name in inner.data}
        return {name: inner.number(name, sign=sign) for name in inner.data}

    def done(self, also: Iterable[str] = ()) -> None:
        """Reports the first key that nobody asked for."""
        known = self.known.union(also)
        for key in self.data:
            if key not in known:
                raise self.error(f"unknown key '{key}' ({nearest(key, known)})",
                                 remedy="correct the key or leave it out")
