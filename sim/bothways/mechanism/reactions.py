"""Reading of the [[reaction]] entries: equation, partners, forward terms, comparison-only keys."""

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from ..entry import Entry
from ..errors import InputError, nearest
from ..rates import Arrhenius, LawContext, read_law, says_fall_off
from ..rates.arrhenius import read_expression
from ..units import UnitSystem
from .equation import Equation, parse_equation
from .model import Partner, Reaction, Species, Term

_REVERSE_WORDS = ("reverse", "backward", "backwards", "reverse_rate", "k_reverse", "k_r", "kr", "rev")


def read_reactions(top: Entry, units: UnitSystem, species: Sequence[Species]) -> tuple[Reaction, ...]:
    """All reactions of a document; raises InputError at the first fault, in one entry or between two."""
    entries = top.get("reaction", [])
    if not isinstance(entries, (list, tuple)):
        raise top.error("'reaction' is not a list of tables", expected="entries [[reaction]]", key="reaction")
    by_name = {s.name: s for s in species}
    reactions: list[Reaction] = []
    seen: dict[tuple, tuple[str, Reaction]] = {}
    for number, data in enumerate(entries, 1):
        reaction, place = _one(data, number, top, units, by_name)
        _compare_with_earlier(reaction, place, seen, top)
        seen[reaction.equation.key] = (place, reaction)
        reactions.append(reaction)
    return tuple(reactions)


def _one(data: Any, number: int, top: Entry, units: UnitSystem,
         species: Mapping[str, Species]) -> tuple[Reaction, str]:
    stated = data.get("equation") if isinstance(data, Mapping) else None
    place = f"reaction {number}" + (f" '{stated}'" if isinstance(stated, str) else "")
    entry = Entry(data, place, top.file, units)
    equation = _equation(entry, species)
    for word in _REVERSE_WORDS:
        if word in entry.data:
            raise entry.error(f"'{word}': a reverse rate is stated", remedy="leave it out, since it follows from the "
                              "forward rate and K(T); published_reverse records one for comparison")
    terms = _terms(entry, equation, species)
    reaction = Reaction(equation, terms, entry.text("source", ""), entry.flag("published_one_way"),
                        _published_reverse(entry, equation))
    entry.done()
    _check_sum(reaction, entry, species)
    return reaction, place


def _equation(entry: Entry, species: Mapping[str, Species]) -> Equation:
    try:
        equation = parse_equation(entry.text("equation"))
    except InputError as err:
        raise entry.error(err.problem, expected=err.expected, remedy=err.remedy) from None
    for name, _ in equation.reactants + equation.products:
        if name not in species:
            raise entry.error(f"unknown species '{name}' ({nearest(name, species)})",
                              remedy="correct the name or add [species.…]; a '+' needs a space on either side")
    if frozenset(equation.reactants) == frozenset(equation.products):
        raise entry.error("both sides are the same", remedy="leave the entry out")
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
        raise entry.error("not balanced: " + ", ".join(wrong) + " on the right-hand side",
                          remedy="correct the equation or the formulas")


def _terms(entry: Entry, equation: Equation, species: Mapping[str, Species]) -> tuple[Term, ...]:
    forward = entry.get("forward", what="a table, or a list of tables, that states the forward law")
    several = isinstance(forward, (list, tuple))
    tables = list(forward) if several else [forward]
    if not tables:
        raise entry.error("no forward term", expected="at least one", key="forward")
    shared = _partner_keys(entry, species)
    terms = []
    for k, data in enumerate(tables, 1):
        place = f"{entry.place}.forward" + (f"[{k}]" if several else "")
        terms.append(_term(entry.sub(data, place), equation, species, shared, len(tables) > 1))
    if shared is not None and not any(term.partner for term in terms):
        raise entry.error("a collision efficiency or partner is stated, but no partner takes part",
                          remedy="write + M on both sides, use a fall-off law, or leave the key out")
    return tuple(terms)


def _term(entry: Entry, equation: Equation, species: Mapping[str, Species], shared: Partner | None,
          several: bool) -> Term:
    fall_off = says_fall_off(entry)
    if fall_off and equation.partner:
        raise entry.error("M stands in the equation of a fall-off reaction",
                          remedy="leave M out of the equation: the law says that a partner takes part")
    order = sum(count for _, count in equation.reactants)
    law = read_law(entry, LawContext(order, equation.partner, several))
    own = _partner_keys(entry, species)
    entry.done()
    if not (fall_off or equation.partner):
        if own is not None:
            raise entry.error("a collision efficiency or partner is stated, but no partner takes part",
                              remedy="write + M on both sides, use a fall-off law, or leave the key out")
        return Term(law)
    return Term(law, own or shared or Partner(1.0, {}))


def _partner_keys(entry: Entry, species: Mapping[str, Species]) -> Partner | None:
    efficiency = entry.named_numbers("collision_efficiency", sign="not negative", default=None)
    single = entry.text("collision_partner", None)
    if efficiency is not None and single is not None:
        raise entry.error("collision_efficiency and collision_partner are both stated", expected="one of them")
    for name in [*(efficiency or {}), *([single] if single else [])]:
        if name not in species:
            raise entry.error(f"unknown species '{name}' ({nearest(name, species)})",
                              key="collision_efficiency" if efficiency else "collision_partner")
    if single is not None:
        return Partner(0.0, {single: 1.0})
    return None if efficiency is None else Partner(1.0, efficiency)


def _published_reverse(entry: Entry, equation: Equation) -> Arrhenius | None:
    if "published_reverse" not in entry.data:
        entry.known.add("published_reverse")
        return None
    table = entry.table("published_reverse")
    order = sum(count for _, count in equation.products) + equation.partner
    reverse = read_expression(table, order, "positive")
    table.done()
    return reverse


def _check_sum(reaction: Reaction, entry: Entry, species: Mapping[str, Species]) -> None:
    """The sum of several terms must be positive over the range of the fits of the species in the reaction."""
    if all(e.sign > 0 for term in reaction.terms for e in term.law.expressions()):
        return
    fits = [species[name].fit_range for name, _ in reaction.equation.reactants + reaction.equation.products]
    low, high = max(200.0, max(f[0] for f in fits)), min(3000.0, min(f[1] for f in fits))
    for temperature in np.geomspace(low, max(low, high), 200):
        for partner in (1e-3, 1.0, 1e3):
            if not reaction.forward_constant(float(temperature), partner) > 0:
                raise entry.error(f"the sum of the forward terms is not positive at {temperature:.0f} K",
                                  expected=f"a positive sum from {low:.0f} to {high:.0f} K", key="forward")


def _compare_with_earlier(reaction: Reaction, place: str, seen: Mapping[tuple, tuple[str, Reaction]],
                          top: Entry) -> None:
    key = reaction.equation.key
    if key in seen:
        raise InputError(f"the same equation stands in {seen[key][0]}", file=top.file, entry=place,
                         remedy="make one entry whose 'forward' is a list of both terms")
    opposite = seen.get((key[1], key[0], key[2]))
    if opposite and reaction.published_one_way and opposite[1].published_one_way:
        raise InputError(f"this and {opposite[0]} are two halves of one reaction, both published one way",
                         file=top.file, entry=place,
                         remedy="make one entry, with the other half as its published_reverse")
