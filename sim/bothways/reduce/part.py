"""A part of a mechanism: fewer species, and the reactions that can do with them, as an ordinary document.

A reaction goes with any species of its equation. A removed species is never there to be a collision partner: its
efficiency is left out, and a term whose only partners are removed goes, since it would stand still. So does a lumped step
with an order in a removed species; in a Hougen-Watson denominator such a species counts nothing and is left out.
"""

from collections.abc import Collection
from typing import Any

from ..errors import InputError
from ..mechanism import Mechanism, Reaction, Term

_PARTNER_KEYS = ("collision_efficiency", "collision_partner")


def part_of(mechanism: Mechanism, kept: Collection[str], reactions: Collection[int] | None = None,
            name: str = "") -> dict[str, Any]:
    """The document of the mechanism with the species `kept` alone, and of the reactions those at `reactions`, if given.

    name : of the new mechanism; made from the parent's and the number of species if empty.
    Raises InputError for a name that is no species, and where a stated equilibrium would be lost.
    """
    for species in kept:
        mechanism.index(species)
    _check_equilibria(mechanism, kept, reactions)
    document = mechanism.to_dict()
    document["species"] = {key: data for key, data in document["species"].items() if key in kept}
    pairs = zip(mechanism.reactions, document.get("reaction", []), strict=True)
    parts = [_reaction_part(reaction, data, kept) for j, (reaction, data) in enumerate(pairs)
             if reactions is None or j in reactions]
    document["reaction"] = [data for data in parts if data]
    document["mechanism"]["name"] = name or f"{mechanism.name}-{len(document['species'])}-species"
    document.pop("reduction", None)
    return document


def _check_equilibria(mechanism: Mechanism, kept: Collection[str], reactions: Collection[int] | None) -> None:
    """Potentials that rest on a reaction's stated equilibrium would lose their ground with it."""
    stays = set(survivors(mechanism, kept)) & set(range(len(mechanism.reactions)) if reactions is None else reactions)
    for j, reaction in enumerate(mechanism.reactions):
        if reaction.equilibrium is not None and j not in stays:
            raise InputError(f"'{reaction.equation}' states an equilibrium that potentials rest on, and would be left out",
                             file=mechanism.file, expected="potentials stated with the species",
                             remedy="state them under [species.…] instead, or keep that reaction's species (--keep)")


def survivors(mechanism: Mechanism, kept: Collection[str]) -> list[int]:
    """Places of the reactions that stay with these species."""
    return [j for j, reaction in enumerate(mechanism.reactions) if _stays(reaction, kept)]


def _stays(reaction: Reaction, kept: Collection[str]) -> bool:
    whole = all(name in kept for name, _ in reaction.equation.reactants + reaction.equation.products)
    return whole and any(_alive(term, kept) for term in reaction.terms)


def _alive(term: Term, kept: Collection[str]) -> bool:
    """Whether a term has a partner left, if it needs one, and every species that it has an order in."""
    if term.orders is not None and any(order for name, order in term.orders.forward.items() if name not in kept):
        return False
    return term.partner is None or term.partner.default > 0 or any(
        value > 0 for name, value in term.partner.efficiency.items() if name in kept)


def _reaction_part(reaction: Reaction, data: dict[str, Any], kept: Collection[str]) -> dict[str, Any]:
    """The entry without what is removed; empty if nothing stays."""
    if not _stays(reaction, kept):
        return {}
    alive = [_alive(term, kept) for term in reaction.terms]
    if isinstance(data["forward"], list):
        data["forward"] = [_cleaned(term, kept) for term, stays in zip(data["forward"], alive, strict=True) if stays]
    else:
        data["forward"] = _cleaned(data["forward"], kept)
    if not any(term.partner for term, stays in zip(reaction.terms, alive, strict=True) if stays):
        return {key: value for key, value in data.items() if key not in _PARTNER_KEYS}
    return _cleaned(data, kept)


def _cleaned(table: dict[str, Any], kept: Collection[str]) -> dict[str, Any]:
    """The table without removed species among its partners; a table of efficiencies left empty still means 1 for all."""
    cleaned = _less_adsorbed(dict(table), kept)
    if "orders" in cleaned:
        cleaned["orders"] = {name: order for name, order in cleaned["orders"].items() if name in kept}
    if "collision_efficiency" in cleaned:
        named = cleaned["collision_efficiency"]
        cleaned["collision_efficiency"] = {name: value for name, value in named.items() if name in kept}
    if cleaned.get("collision_partner", next(iter(kept), "")) not in kept:
        del cleaned["collision_partner"]
    return cleaned


def _less_adsorbed(table: dict[str, Any], kept: Collection[str]) -> dict[str, Any]:
    """A forward law without removed species in its adsorption group; without any group it is an Arrhenius law."""
    if "adsorption" not in table:
        return table
    table["adsorption"] = [one for one in table["adsorption"] if one["species"] in kept]
    if table["adsorption"]:
        return table
    rest = {key: value for key, value in table.items() if key not in ("law", "k", "adsorption", "power")}
    return {"law": "Arrhenius", **table["k"], **rest}
