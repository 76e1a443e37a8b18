"""What is written as TOML reads back as the same document, to the last bit and in type."""

import math
import struct
import tomllib
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from bothways.mechanism.toml_writer import to_toml


def same(a: Any, b: Any) -> bool:
    """Equal in value and type, floats in every bit but a NaN's payload."""
    if type(a) is not type(b):
        return False
    if isinstance(a, dict):
        return a.keys() == b.keys() and all(same(a[k], b[k]) for k in a)
    if isinstance(a, list):
        return len(a) == len(b) and all(map(same, a, b))
    if isinstance(a, float):
        return (math.isnan(a) and math.isnan(b)) or struct.pack("d", a) == struct.pack("d", b)
    return bool(a == b)


TEXTS = st.one_of(st.text(max_size=8), st.sampled_from([
    "", " ", "a.b", "a\nb", "a\n", '"', "'", "\\", '"""', "T***", "CH2(S)", "H3O+", "‡", "µ", "\t", "\r\n", "\x00", "\x7f",
    "\x85", "\u2028", "\ufeff", "𝄞", "#", "=", "[a]", "true", "1", "nan", "-", "_"]))
VALUES = st.recursive(
    st.one_of(st.booleans(), st.integers(), st.floats(), TEXTS),
    lambda inner: st.one_of(st.lists(inner, max_size=3), st.dictionaries(TEXTS, inner, max_size=3),
                            st.lists(st.dictionaries(TEXTS, inner, max_size=2), max_size=3)), max_leaves=12)
DOCUMENTS = st.dictionaries(TEXTS, VALUES, max_size=4)


@settings(max_examples=500, deadline=None)
@given(DOCUMENTS)
def test_any_document_comes_back(document: dict[str, Any]) -> None:
    assert same(tomllib.loads(to_toml(document)), document)


@given(st.floats())
def test_every_float_comes_back_exactly(value: float) -> None:
    assert same(tomllib.loads(to_toml({"x": value, "y": [value]})), {"x": value, "y": [value]})


@pytest.mark.parametrize("document", [
    {}, {"a": {}}, {"a": {"b": {}}}, {"a": {"b": {"c": {"d": {"e": 1}}}}}, {"a": []}, {"a": [{}]}, {"a": [{}, {}]},
    {"a": [[]]}, {"a": [{"b": {"c": 1}}, {"b": [{"c": {"d": 2}}]}]}, {"a": [1, {"b": 2}, [3, {"c": 4}]]},
    {"a": {"b": 1, "c": {"d": 2}, "e": 3}},
    {"a": {"b": {"c": {}}}, "d": 1}, {"a.b": {"c.d": {"e": {}}}}, {"": {"": {"": 0}}}, {"a": {"b": [{"c": 1}]}},
    {"a": 1e22, "b": 1e16, "c": 5e-324, "d": -0.0, "e": 1.7976931348623157e308, "f": 10**30, "g": -(2**63)}])
def test_corner_cases(document: dict[str, Any]) -> None:
    assert same(tomllib.loads(to_toml(document)), document)


def test_tables_keep_their_order() -> None:
    """Species and reactions are numbered in the order of the file."""
    names = ["Z", "A", "M+", "b", "1"]
    document = {"species": {name: {"formula": "H", "potential": {"a": [1.0]}} for name in names},
                "reaction": [{"equation": name} for name in names]}
    again = tomllib.loads(to_toml(document))
    assert list(again["species"]) == names and [r["equation"] for r in again["reaction"]] == names


def test_the_text_is_easy_to_read() -> None:
    forward = {"law": "Troe", "k_0": {"A": 1e13}, "F_cent": {"T***": 1e-30}}
    document = {"mechanism": {"name": "x", "units": ["cm", "K"]},
                "species": {"CH2(S)": {"charge": 0, "potential": {"T": [1.0, 2.0]}}},
                "reaction": [{"equation": "A ⇌ B", "forward": forward}]}
    assert to_toml(document) == """\
[mechanism]
name = "x"
units = ["cm", "K"]

[species."CH2(S)"]
charge = 0
potential = { T = [1.0, 2.0] }

[[reaction]]
equation = "A ⇌ B"

[reaction.forward]
law = "Troe"
k_0 = { A = 10000000000000.0 }
F_cent = { "T***" = 1e-30 }
"""
