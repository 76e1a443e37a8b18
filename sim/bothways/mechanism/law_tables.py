"""How the forward laws lie in the flat tables: terms, expressions, partners, and the blocks of the laws that need more.

A law's `part()` says by its type which block it stands in; `_BLOCKS` has one function for each.
"""

from collections.abc import Callable, Sequence
from typing import Any

import numpy as np

from ..rates import Law
from ..rates.law import AdsorptionGroup, Broadening, Complex, Curve, Expression, PressureNodes, Series
from .model import Mechanism, Partner, Reaction, Term
from .orders import Orders

_INT_KEYS = ("body_term", "body_group", "fall_term", "fall_low", "fall_group", "curve_term", "curve_low",
             "curve_group", "curve_width", "curve_activated", "table_term", "row_expression", "series_term", "series_rows",
             "lump_term", "lump_species", "adsorbed_species", "adsorbed_expression", "plain_term")
_FLOAT_KEYS = ("fall_parameter", "curve_parameter", "node_log_p", "row_sign", "series_window", "column_coefficient",
               "lump_share", "lump_nu", "lump_power", "adsorbed_power", "adsorption_power")
_STARTS = ("table_start", "node_start", "series_start", "column_start", "lump_start", "adsorbed_start")


class _Lists(dict[str, list]):
    """The arrays as they grow: expressions, partner groups, and those of the kernels by name."""

    def __init__(self) -> None:
        super().__init__({key: [] for key in (*_INT_KEYS, *_FLOAT_KEYS)})
        self.update({key: [0] for key in _STARTS})
        self.expressions: list[Expression] = []
        self.groups: dict[tuple, int] = {}


def law_tables(mechanism: Mechanism, ints: dict, floats: dict) -> None:
    """Adds the laws to the tables: the first term of every reaction comes first, in the reactions' order."""
    ordered = ordered_terms(mechanism)
    lists = _Lists()
    lists.expressions = [term.law.expressions()[0] for _, term in ordered]
    for t, (j, term) in enumerate(ordered):
        group = None
        if term.partner is not None:
            group = lists.groups.setdefault(_group_key(mechanism, term.partner), len(lists.groups))
        part = term.law.part()
        if part is not None:
            _BLOCKS[type(part)](lists, t, group, part, _places(lists, t, term.law.expressions()))
        elif group is not None:
            _append(lists, body_term=t, body_group=group)
        if term.orders is not None:
            _lumped(lists, t, mechanism, mechanism.reactions[j], term.orders, term.law)
        elif any(other.orders is not None for other in mechanism.reactions[j].terms):
            _append(lists, plain_term=t)
    ints["term_reaction"] = np.array([j for j, _ in ordered])
    ints.update({key: np.array(lists[key]) for key in (*_INT_KEYS, *_STARTS)})
    floats.update({key: np.array(lists[key]) for key in _FLOAT_KEYS})
    floats["fall_parameter"] = floats["fall_parameter"].reshape(-1, 4).T  # one kind after another
    columns = ([e[k] for e in lists.expressions] for k in range(4))
    floats["log_A"], floats["power"], floats["theta"], sign = (np.array(c, dtype=float) for c in columns)
    floats["term_sign"] = sign[: len(ordered)]
    _groups(list(lists.groups), ints, floats)


def ordered_terms(mechanism: Mechanism) -> list[tuple[int, Term]]:
    """The terms as the tables have them, each with the place of its reaction."""
    first = [(j, r.terms[0]) for j, r in enumerate(mechanism.reactions)]
    return first + [(j, term) for j, r in enumerate(mechanism.reactions) for term in r.terms[1:]]


def _places(lists: _Lists, term: int, expressions: Sequence[Expression]) -> list[int]:
    """Where a law's expressions stand: the first at its term, the others behind all that are there."""
    first = len(lists.expressions)
    lists.expressions += expressions[1:]
    return [term, *range(first, len(lists.expressions))]


def _append(lists: _Lists, **values: float) -> None:
    for key, value in values.items():
        lists[key].append(value)


def _fall_off(lists: _Lists, term: int, group: int, part: Broadening, places: list[int]) -> None:
    _append(lists, fall_term=term, fall_low=places[1], fall_group=group)
    lists["fall_parameter"] += part.parameters


def _curve(lists: _Lists, term: int, group: int, part: Curve, places: list[int]) -> None:
    _append(lists, curve_term=term, curve_low=places[1], curve_group=group, curve_width=part.width,
            curve_activated=int(part.activated))
    lists["curve_parameter"] += part.parameters


def _pressure_table(lists: _Lists, term: int, group: None, part: PressureNodes, places: list[int]) -> None:
    _append(lists, table_term=term, table_start=lists["table_start"][-1] + len(part.log_p))
    lists["node_log_p"] += part.log_p
    lists["node_start"] += [lists["node_start"][-1] + int(n) for n in np.cumsum(part.counts)]
    lists["row_expression"] += places
    lists["row_sign"] += [lists.expressions[place].sign for place in places]


def _series(lists: _Lists, term: int, group: None, part: Series, places: list[int]) -> None:
    rows, columns = len(part.coefficients), len(part.coefficients[0])
    _append(lists, series_term=term, series_rows=rows, series_start=lists["series_start"][-1] + columns)
    lists["series_window"] += part.window
    lists["column_start"] += [lists["column_start"][-1] + rows * (q + 1) for q in range(columns)]
    lists["column_coefficient"] += [c for column in zip(*part.coefficients, strict=True) for c in column]


def _adsorption(lists: _Lists, term: int, group: int | None, part: AdsorptionGroup, places: list[int]) -> None:
    lists["adsorbed_expression"] += places[1:]
    lists["adsorbed_power"] += part.powers
    if group is not None:
        _append(lists, body_term=term, body_group=group)


def _complex(lists: _Lists, term: int, group: None, part: Complex, places: list[int]) -> None:
    """Stands behind the species in the thermal tables."""


_BLOCKS: dict[type, Callable[..., Any]] = {Broadening: _fall_off, Curve: _curve, PressureNodes: _pressure_table,
                                           Series: _series, AdsorptionGroup: _adsorption, Complex: _complex}


def _lumped(lists: _Lists, term: int, mechanism: Mechanism, reaction: Reaction, orders: Orders, law: Law) -> None:
    """Entries of a lumped term, one for each species its orders or Q/K ask for, and of its adsorption group, if any."""
    common = orders.common(reaction.net)
    lists["lump_species"] += [mechanism.index(name) for name in common]
    lists["lump_nu"] += [reaction.net.get(name, 0) for name in common]
    lists["lump_power"] += common.values()
    part = law.part()
    group = part if isinstance(part, AdsorptionGroup) else AdsorptionGroup((), (), 0.0)
    lists["adsorbed_species"] += [mechanism.index(name) for name in group.species]
    _append(lists, lump_term=term, lump_share=1.0 / orders.sigma, adsorption_power=group.power,
            lump_start=len(lists["lump_species"]), adsorbed_start=len(lists["adsorbed_species"]))


def _group_key(mechanism: Mechanism, partner: Partner) -> tuple:
    excess = {mechanism.index(name): value - partner.default for name, value in partner.efficiency.items()}
    return partner.default, tuple(sorted((k, e) for k, e in excess.items() if e))


def _groups(keys: list[tuple], ints: dict, floats: dict) -> None:
    floats["group_default"] = np.array([default for default, _ in keys])
    ints["group_start"] = np.cumsum([0] + [len(named) for _, named in keys])
    ints["group_species"] = np.array([k for _, named in keys for k, _ in named])
    floats["group_excess"] = np.array([e for _, named in keys for _, e in named])
