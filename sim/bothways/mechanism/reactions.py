"""Reading of the [[reaction]] entries: equation, partners, forward terms, comparison-only keys."""

import re
from collections.abc import Mapping, Sequence
from dataclasses import replace
from functools import lru_cache
from typing import Any

import numpy as np

from ..constants import GAS_CONSTANT
from ..entry import Entry
from ..errors import InputError, hint
from ..rates import OWN_PARTNER, PRESSURE, Arrhenius, LawContext, Setting, is_lumped, partner_of, read_law
from ..rates.arrhenius import read_expression
from ..units import UnitSystem
from .equation import Equation, parse_equation
from .model import Partner, Reaction, Species, Term, net_of
from .orders import read_orders
from .stated import read_equilibrium

_REVERSE_WORDS = re.compile(r"reverse|backward|(^|_)(rev|k_?(r|b|rev))(_|$)", re.IGNORECASE)
LARGEST_EFFICIENCY = 1e4
"""A collision efficiency above this [-] is taken for a slip."""
_UNLIMITED = 200.0, 3000.0
"""Temperatures [K] that laws are checked over where the potentials' data have no ends."""


def read_reactions(top: Entry, units: UnitSystem, species: Sequence[Species], setting: Setting) -> tuple[Reaction, ...]:
    """All reactions of a document; raises InputError at the first fault, in one entry or between two."""
    entries = top.get("reaction", [])
    if not isinstance(entries, (list, tuple)):
        raise top.error("'reaction' is not a list of tables", expected="entries [[reaction]]", key="reaction")
    by_name, fits = {s.name: s for s in species}, {s.name: s.fit_range for s in species}
    seen: dict[tuple, tuple[str, Reaction]] = {}
    for number, data in enumerate(entries, 1):
        entry = _entry(data, number, top, units)
        reaction = _one(entry, by_name, setting)
        _check_laws(reaction, entry, fits)
        _compare_with_earlier(reaction, entry, seen)
        seen[reaction.equation.key] = (entry.place, reaction)
    return tuple(reaction for _, reaction in seen.values())


def _entry(data: Any, number: int, top: Entry, units: UnitSystem) -> Entry:
    stated = data.get("equation") if isinstance(data, Mapping) else None
    return Entry(data, f"reaction {number}" + (f" '{stated}'" if isinstance(stated, str) else ""), top.file, units)


def _one(entry: Entry, species: Mapping[str, Species], setting: Setting) -> Reaction:
    equation = _equation(entry, species)
    _refuse_reverse(entry)
    _refuse_orders(entry)
    source, one_way = entry.text("source", ""), entry.flag("published_one_way")
    reverse = _published_reverse(entry, equation)
    terms = _terms(entry, equation, species, setting)
    reaction = Reaction(equation, terms, source, one_way, reverse, read_equilibrium(entry))
    entry.done()
    return reaction


def _refuse_reverse(entry: Entry) -> None:
    for key in entry.data:
        if key != "published_reverse" and _REVERSE_WORDS.search(key):
            raise entry.error(f"'{key}': a reverse rate is stated", expected="forward rates only",
                              remedy="leave it out, since it follows from the forward rate and K(T); published_reverse "
                                     "beside 'equation' records one for comparison")


def _refuse_orders(entry: Entry) -> None:
    for key in ("orders", "stoichiometric_number"):
        if key in entry.data:
            raise entry.error(f"'{key}' stands beside the equation", expected=f"'{key}' in the forward law it belongs to",
                              remedy=f"write forward = {{ law = \"…\", …, {key} = … }}")


def _equation(entry: Entry, species: Mapping[str, Species]) -> Equation:
    text = entry.text("equation")
    try:
        equation = parse_equation(text)
    except InputError as err:
        raise entry.error(err.problem, expected=err.expected, remedy=err.remedy) from None
    for name, _ in equation.reactants + equation.products:
        if name not in species:
            raise entry.error(f"unknown species '{name}'{hint(name, species)}",
                              remedy="correct the name or add [species.…]; a '+' needs a space on either side")
    if frozenset(equation.reactants) == frozenset(equation.products):
        raise entry.error("both sides are the same", expected="a reaction", remedy="leave the entry out")
    _check_balance(entry, equation, species)
    return equation


def _check_balance(entry: Entry, equation: Equation, species: Mapping[str, Species]) -> None:
    excess: dict[str, int] = {}
    for sign, side in ((-1, equation.reactants), (1, equation.products)):
        for name, count in side:
            s = species[name]
            for symbol, atoms in (*s.composition.items(), ("charge", s.charge)):
                excess[symbol] = excess.get(symbol, 0) + sign * count * atoms
    wrong = [f"{symbol} {value:+d}" for symbol, value in excess.items() if value]
    if wrong:
        raise entry.error("not balanced: " + ", ".join(wrong) + " on the right-hand side", expected="no difference",
                          remedy="correct the equation or the formulas")


def _terms(entry: Entry, equation: Equation, species: Mapping[str, Species], setting: Setting) -> tuple[Term, ...]:
    forward = entry.get("forward", what="a table, or a list of tables, that states the forward law")
    several = isinstance(forward, (list, tuple))
    tables = list(forward) if several else [forward]
    if not tables:
        raise entry.error("no forward term", expected="at least one", remedy="state the forward law", key="forward")
    shared = _partner_keys(entry, species)
    terms = []
    reactants, products = (tuple((species[name], count) for name, count in side)
                           for side in (equation.reactants, equation.products))
    order = sum(count for _, count in equation.reactants)
    context = LawContext(order, equation.partner, len(tables) > 1, reactants, products, species, setting)
    for k, data in enumerate(tables, 1):
        place = f"{entry.place}.forward" + (f"[{k}]" if several else "")
        terms.append(_term(entry.sub(data, place), equation, context, species, shared))
    if shared is not None and not any(term.partner for term in terms):
        raise _needless(entry)
    return tuple(terms)


def _needless(entry: Entry) -> InputError:
    return entry.error("a collision efficiency or partner is stated, but no partner takes part", expected="a partner",
                       remedy="write + M on both sides, use a fall-off law, or leave the key out")


_WHY_NO_M = {OWN_PARTNER: ("fall-off reaction", "the law says that a partner takes part"),
             PRESSURE: ("law of pressure", "the pressure, whatever the gas is made of, stands for partners")}


def _term(entry: Entry, equation: Equation, context: LawContext, species: Mapping[str, Species],
          shared: Partner | None) -> Term:
    _refuse_reverse(entry)
    kind = partner_of(entry)
    if context.partner_in_equation and kind in _WHY_NO_M:
        of, why = _WHY_NO_M[kind]
        raise entry.error(f"M stands in the equation of a {of}", expected="no M",
                          remedy=f"leave M out of the equation: {why}")
    orders = read_orders(entry, equation, net_of(equation), species, is_lumped(entry))
    order = sum(orders.forward.values()) if orders else context.order
    law = read_law(entry, replace(context, order=order, of_several=context.of_several and not orders))
    own = _partner_keys(entry, species)
    entry.done()
    if not (kind == OWN_PARTNER or context.partner_in_equation):
        if own is not None:
            raise _needless(entry)
        return Term(law, None, orders)
    return Term(law, own or shared or Partner(1.0, {}), orders)


def _partner_keys(entry: Entry, species: Mapping[str, Species]) -> Partner | None:
    efficiency = entry.named_numbers("collision_efficiency", "species", species, default=None)
    for name, value in (efficiency or {}).items():
        if value > LARGEST_EFFICIENCY:
            raise entry.error(f"{value:g} for {name}", expected=f"a number from 0 to {LARGEST_EFFICIENCY:g}",
                              remedy="correct the value", key="collision_efficiency")
    single = entry.text("collision_partner", None)
    if efficiency is not None and single is not None:
        raise entry.error("collision_efficiency and collision_partner are both stated", expected="one of them",
                          remedy="leave out either")
    if single is not None and single not in species:
        raise entry.unknown("species", single, species, key="collision_partner")
    if single is not None:
        return Partner(0.0, {single: 1.0})
    return None if efficiency is None else Partner(1.0, efficiency)


def _published_reverse(entry: Entry, equation: Equation) -> Arrhenius | None:
    if entry.get("published_reverse", None) is None:
        return None
    table = entry.table("published_reverse")
    order = sum(count for _, count in equation.products) + equation.partner
    reverse = read_expression(table, order, "positive")
    table.done()
    return reverse


def _check_laws(reaction: Reaction, entry: Entry, fits: Mapping[str, tuple[float, float]]) -> None:
    """Each law must be sound, and the sum of several terms positive, over the range of the reaction's own fits."""
    own = [fits[name] for name, _ in reaction.equation.reactants + reaction.equation.products]
    low, high = max(fit[0] for fit in own) or _UNLIMITED[0], min(fit[1] for fit in own)
    temperatures = _grid(low, high if np.isfinite(high) else max(_UNLIMITED[1], 2 * low))
    for k, term in enumerate(reaction.terms, 1):
        fault = term.law.fault(temperatures)
        if fault:
            raise entry.error(f"{fault.problem} at {fault.temperature:.4g} K", expected=fault.expected,
                              remedy="correct its numbers", key="forward" + (f"[{k}]" if len(reaction.terms) > 1 else ""))
    plain = tuple(term for term in reaction.terms if term.orders is None)  # lumped ones are positive each by itself
    if len(reaction.terms) > 1 and any(e.sign < 0 for term in plain for e in term.law.expressions()):
        _check_sum(replace(reaction, terms=plain), entry, temperatures)


@lru_cache
def _grid(low: float, high: float) -> tuple[float, ...]:
    return tuple(float(T) for T in np.geomspace(low, max(low, high), 100))


def _check_sum(reaction: Reaction, entry: Entry, temperatures: Sequence[float]) -> None:
    for temperature in temperatures:
        for partner in (1e-3, 1.0, 1e3):
            pressure = partner * GAS_CONSTANT * temperature
            if not reaction.forward_constant(temperature, partner, pressure) > 0:
                raise entry.error(f"the sum of the forward terms is not positive at {temperature:.4g} K",
                                  expected=f"a positive sum from {temperatures[0]:g} to {temperatures[-1]:g} K",
                                  remedy="correct the terms", key="forward")


def _compare_with_earlier(reaction: Reaction, entry: Entry, seen: Mapping[tuple, tuple[str, Reaction]]) -> None:
    key = reaction.equation.key
    if key in seen:
        raise entry.error(f"the same equation stands in {seen[key][0]}", expected="one entry for one equation",
                          remedy="make one entry whose 'forward' is a list of both terms")
    opposite = seen.get((key[1], key[0], key[2]))
    if opposite and reaction.published_one_way and opposite[1].published_one_way:
        raise entry.error(f"this and {opposite[0]} are two halves of one reaction, both published one way",
                          expected="one entry for one reaction",
                          remedy="make one entry, with the other half as its published_reverse")
