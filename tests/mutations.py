"""One random damage to a plain document: a value anywhere replaced, left out, doubled or renamed."""

import copy
import datetime
from collections.abc import Iterator
from typing import Any

from hypothesis import strategies as st

EXTREMES = st.sampled_from([10**400, 1e308, 5e-324, -1e300, 0.0, -0.0])
NUMBERS = st.one_of(st.floats(), st.integers(-3, 3), st.integers(), EXTREMES)
KNOWN_WORDS = st.sampled_from([
    "1 atm", "-1 bar", "nan K", "1e400 K", "5e-324 s", "25 °C", "-300 °C", "1 kJ/mol", "A ⇌ B", "Q + O ⇌ QO", "Q → O",
    "M", "=", "Q2", "NASA 7-coefficient", "constant heat capacity", "Troe", "Lindemann", "Arrhenius", "pressure",
    "isothermal", "fuel", "amount", "\0", "\ud800", "small.toml", "/", ""])
WORDS = st.one_of(st.text(max_size=6), KNOWN_WORDS)
LEAVES = st.one_of(NUMBERS, WORDS, st.booleans(), st.none(), st.just(datetime.date(2020, 1, 1)), st.just(1j))
VALUES = st.recursive(LEAVES, lambda inner: st.one_of(st.lists(inner, max_size=3),
                                                      st.dictionaries(WORDS, inner, max_size=3)), max_leaves=6)


def places(value: Any, path: tuple = ()) -> Iterator[tuple]:
    """Every place of a document, as keys and numbers from the top."""
    if path:
        yield path
    members = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    for key, inner in members:
        yield from places(inner, (*path, key))


def mutated(document: dict[str, Any], data: st.DataObject) -> dict[str, Any]:
    """A copy with one or two damages."""
    changed = copy.deepcopy(document)
    for _ in range(data.draw(st.integers(1, 2))):
        _damage(changed, data.draw(st.sampled_from(list(places(changed)))), data)
    return changed


def _like(value: Any) -> st.SearchStrategy[Any]:
    """Values of the same kind, so that some damages get past the first check."""
    if isinstance(value, (int, float)) and not isinstance(value, bool):
        return st.one_of(NUMBERS, st.floats(1e-6, 1e6).map(lambda factor: value * factor))
    return WORDS if isinstance(value, str) else VALUES


def _damage(document: Any, path: tuple, data: st.DataObject) -> None:
    holder = document
    for key in path[:-1]:
        holder = holder[key]
    how = data.draw(st.sampled_from(["replaced", "replaced", "alike", "alike", "left out", "renamed", "doubled"]))
    if how == "replaced":
        holder[path[-1]] = data.draw(VALUES)
    elif how == "alike":
        holder[path[-1]] = data.draw(_like(holder[path[-1]]))
    elif how == "left out":
        del holder[path[-1]]
    elif isinstance(holder, list):
        holder.append(copy.deepcopy(holder[path[-1]]))
    else:
        value = holder[path[-1]] if how == "doubled" else holder.pop(path[-1])
        holder[data.draw(WORDS)] = copy.deepcopy(value)
