"""Errors: one printable line in a fixed order, whatever it is made of, in this process and in others."""

import pickle

import pytest

from bothways import BothwaysError, InputError, SolverError
from bothways.errors import closest, hint, nearest, shown


def test_a_line_tells_where_what_expected_and_remedy() -> None:
    error = InputError("3 is odd", expected="an even number", remedy="add 1", file="a.toml", entry="x.y")
    assert str(error) == "a.toml: x.y: 3 is odd; expected an even number; add 1"
    assert str(InputError("3 is odd")) == "3 is odd"
    assert str(InputError("3 is odd", entry="x", remedy="add 1")) == "x: 3 is odd; add 1"
    assert (error.exit_status, SolverError("x").exit_status) == (2, 3) and isinstance(error, BothwaysError)


@pytest.mark.parametrize("text", ["a\nb", "a\tb", "a \r\n  b", "a\u2028b"])
def test_white_space_never_makes_a_second_line(text: str) -> None:
    assert str(InputError(text, file=text)) == "a b: a b"


def test_control_characters_never_reach_a_terminal() -> None:
    assert str(InputError("a\x1b[31mb\x00\udc80")) == "a\\x1b[31mb\\x00\\udc80"


@pytest.mark.parametrize("kind", [InputError, SolverError])
def test_errors_come_back_from_other_processes(kind: type[BothwaysError]) -> None:
    error = kind("3 is odd", expected="an even number", remedy="add 1", file="a.toml", entry="x.y")
    again = pickle.loads(pickle.dumps(error))
    assert type(again) is kind and str(again) == str(error) and again.entry == "x.y"


def test_nearest_names() -> None:
    names = ["temperature", "pressure", "OH", "HO2", "H2O2"]
    assert closest("temprature", names) == ["temperature"] and closest("oh", names)[0] == "OH"
    assert closest("xyz", names) == []
    assert nearest("presure", names) == "nearest: pressure" and hint("presure", names) == " (nearest: pressure)"
    assert nearest("xyz", names) == "known: H2O2, HO2, OH, pressure, temperature"
    assert nearest("xyz", map(str, range(100))) == "" and hint("xyz", map(str, range(100))) == "" and hint("x", []) == ""


@pytest.mark.parametrize("value, text", [("a", "'a'"), (1.5, "1.5"), ([1, 2], "[1, 2]"), ("x" * 100, "'" + "x" * 58 + "…")])
def test_shown_values_are_short(value: object, text: str) -> None:
    assert shown(value) == text


def test_a_number_that_python_does_not_print_is_shown() -> None:
    assert shown(10**5000) == "a number of too many digits"
