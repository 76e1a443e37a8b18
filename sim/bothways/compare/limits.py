"""Limits that a reduction must keep: "ignition=10%", "temperature-shifted=50 K"."""

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

from ..errors import InputError, hint
from ..units import parse_quantity
from .measures import BY_NAME, MEASURES

_EXAMPLE = "such as ignition=10% or temperature-shifted='50 K'"


@dataclass(frozen=True)
class Limit:
    """A measure may be no larger than this either way; value [-] or [K]."""

    measure: str
    value: float

    def __str__(self) -> str:
        return f"{self.measure} {number_text(self.measure, self.value)}"

    def keeps(self, found: float) -> bool:
        """Whether a measured value keeps the limit; one without meaning (NaN) does."""
        return not abs(found) > self.value


def number_text(measure: str, value: float) -> str:
    """A value of a measure with its unit, as tables show it: % or K."""
    if math.isnan(value):
        return "-"
    if math.isinf(value):
        return "lacking"
    if measure == "steps":
        return f"{value:.3g}"
    return f"{_digits(value)} K" if BY_NAME[measure].units == "K" else f"{_digits(100 * value)} %"


def _digits(value: float) -> str:
    """Three digits; whole numbers from 1000 on, and 0 for what is round-off."""
    if abs(value) < 1e-9:
        return "0"
    return f"{value:.0f}" if abs(value) >= 1000 else f"{value:.3g}"


def read_limits(texts: Iterable[str] | Mapping[str, float | str]) -> tuple[Limit, ...]:
    """Limits from texts "NAME=VALUE", or from names with a value (a number, [-] or [K], or a text).

    Raises InputError: unknown name, a value without sense, a measure limited twice.
    """
    pairs = list(texts.items()) if isinstance(texts, Mapping) else [_pair(text) for text in texts]
    limits = [Limit(_name(name), _value(name, value)) for name, value in pairs]
    for k, limit in enumerate(limits):
        if limit.measure in (other.measure for other in limits[:k]):
            raise InputError(f"{limit.measure} is limited twice", entry="--limit", expected="one limit for each measure",
                             remedy="leave out either")
    return tuple(limits)


def _pair(text: str) -> tuple[str, str]:
    name, sign, value = text.partition("=")
    if not sign:
        raise InputError(f"'{text}' has no =", entry="--limit", expected="NAME=VALUE", remedy=_EXAMPLE)
    return name.strip(), value.strip()


def _name(name: str) -> str:
    known: Sequence[str] = [m.name for m in MEASURES if m.limited]
    if name not in known:
        raise InputError(f"unknown measure '{name}'{hint(name, known)}", entry="--limit", expected=", ".join(known),
                         remedy="correct the name")
    return name


def _value(name: str, value: float | str) -> float:
    number = _number(name, value)
    if not (math.isfinite(number) and number > 0):
        raise InputError(f"{name}: {value}", entry="--limit", expected="a number above 0", remedy="correct it")
    return number


def _number(name: str, value: float | str) -> float:
    units = BY_NAME[name].units
    if not isinstance(value, str):
        return float(value)
    try:
        if value.endswith("%") and units == "1":
            return float(value[:-1]) / 100.0
        return parse_quantity(value, "temperature") if units == "K" and value.endswith("K") else float(value)
    except (ValueError, InputError):
        unit = "a share such as 10% or 0.1" if units == "1" else "a temperature difference such as '50 K'"
        raise InputError(f"{name}: '{value}' is not read", entry="--limit", expected=unit, remedy=_EXAMPLE) from None
