"""What a closed vessel conserves: the elements, and what a mechanism's reactions leave unchanged beyond them."""

import math
from collections.abc import Iterable, Iterator, Mapping
from fractions import Fraction
from itertools import islice

import numpy as np

from ..components import Components
from ..mechanism.model import Mechanism

_TERMS_SHOWN = 8


def conserved_by_elements(mechanism: Mechanism) -> np.ndarray:
    """Atoms of each element in each species, (m, N), integer; then a row of charges where there are any, then the combinations
    whose potentials nothing stated fixes (`Mechanism.undetermined`), between which no equilibrium can be told."""
    atoms = np.rint(mechanism.element_matrix).astype(np.int64)
    return np.vstack([atoms, np.array(mechanism.undetermined, dtype=np.int64).reshape(-1, atoms.shape[1])])


def conserved_by_reactions(mechanism: Mechanism) -> np.ndarray:
    """All that no reaction of the mechanism changes: a basis of the left null space of its stoichiometry, (m, N).

    Small integers: the independent ones among the elements, then the combinations of `extra_conserved`. Without any
    reaction every species is conserved by itself.
    """
    kept = mechanism.__dict__  # exact elimination takes longer than a run; a mechanism never changes
    if "_conserved" not in kept:
        kept["_conserved"] = _conserved(mechanism)
    return kept["_conserved"]


def _conserved(mechanism: Mechanism) -> np.ndarray:
    if not mechanism.reactions:
        return np.eye(len(mechanism.species), dtype=np.int64)
    elements = conserved_by_elements(mechanism)
    span = Span()
    return np.vstack([*(row for row in elements if span.grows(row)), extra_conserved(mechanism)])


def extra_conserved(mechanism: Mechanism) -> np.ndarray:
    """What the reactions conserve beyond the elements, (m, N), integer, the plainest combinations first.

    Together with the elements they span the left null space of the stoichiometry; none is implied by the others.
    """
    elements = conserved_by_elements(mechanism)
    null_space = left_null_space((r.net for r in mechanism.reactions), mechanism.names)
    span = Span()
    extra = len(null_space) - sum(span.grows(row) for row in elements)
    candidates = (row for row in _candidates(mechanism, elements, null_space) if span.grows(row))
    return np.array(list(islice(candidates, extra)), dtype=np.int64).reshape(extra, len(mechanism.species))


def conserves_more(mechanism: Mechanism, there: np.ndarray) -> bool:
    """Whether the reactions conserve more than the elements, among the species that the elements of those there can form.

    there (N) : mask of the species charged.
    """
    elements = conserved_by_elements(mechanism)
    absent = ~np.any(elements[:, there] != 0, axis=1) & np.all(elements >= 0, axis=1)
    formed = ~np.any(elements[absent] != 0, axis=0)
    return _rank(conserved_by_reactions(mechanism)[:, formed]) > _rank(elements[:, formed])


def combination_text(mechanism: Mechanism, row: np.ndarray) -> str:
    """A conserved combination as chemistry: "N2", "2 CH4 + C2H6", "atoms of H", "amount of all species"."""
    plain = _primitive(np.asarray(row).tolist())
    terms = [(count, name) for count, name in zip(plain, mechanism.names, strict=True) if count]
    if len(terms) == len(mechanism.species) > 1 and set(plain) == {1}:
        return "amount of all species"
    if len(terms) > 1:
        for label, own in zip([f"atoms of {e}" for e in mechanism.used_elements] + ["charge"],
                              conserved_by_elements(mechanism), strict=False):
            if plain == _primitive(own.tolist()):
                return label
    shown = terms if len(terms) <= _TERMS_SHOWN + 1 else terms[:_TERMS_SHOWN]
    text = " ".join(f"{'-' if count < 0 else '+'} {'' if abs(count) == 1 else f'{abs(count)} '}{name}"
                    for count, name in shown)
    more = f" + … ({len(terms)} species)" if len(shown) < len(terms) else ""
    return text.removeprefix("+ ") + more


def left_null_space(reactions: Iterable[Mapping[str, int]], names: tuple[str, ...]) -> np.ndarray:
    """An integer basis of all c with Σ_i c_i ν_i = 0 for every reaction, (m, N), by rational elimination.

    Each reaction ties the c of its species; `tied` states one species' c by those of the species still free.
    """
    tied: dict[str, dict[str, Fraction]] = {}
    for net in reactions:
        relation = _substitute({name: Fraction(count) for name, count in net.items()}, tied)
        if not relation:
            continue
        pivot = min(relation, key=lambda name: (abs(relation[name]) != 1, name in tied))
        scale = -relation.pop(pivot)
        tied[pivot] = {name: value / scale for name, value in relation.items()}
        for name, own in tied.items():
            if pivot in own:
                tied[name] = _substitute(own, {pivot: tied[pivot]})
    free = [name for name in names if name not in tied]
    rows = [[tied[name].get(f, 0) if name in tied else int(name == f) for name in names] for f in free]
    return np.array([_primitive(row) for row in rows], dtype=np.int64).reshape(len(free), len(names))


def _substitute(relation: Mapping[str, Fraction], tied: Mapping[str, Mapping[str, Fraction]]) -> dict[str, Fraction]:
    result: dict[str, Fraction] = {}
    for name, value in relation.items():
        for inner, factor in tied.get(name, {name: Fraction(1)}).items():
            result[inner] = result.get(inner, Fraction(0)) + value * factor
    return {name: value for name, value in result.items() if value}


def _primitive(row: Iterable[Fraction | int]) -> list[int]:
    """The smallest integers in the ratios of `row`, the larger part of them positive."""
    values = [Fraction(v) for v in row]
    common = math.lcm(*(v.denominator for v in values))
    whole = [int(v * common) for v in values]
    divisor = math.gcd(*whole) or 1
    sign = -1 if sum(whole) < 0 else 1
    return [sign * v // divisor for v in whole]


def _primitive_rows(numbers: np.ndarray) -> set[tuple[int, ...]]:
    sign = np.where(np.sum(numbers, axis=1) < 0, -1, 1)
    return set(map(tuple, (numbers // (sign * np.gcd.reduce(numbers, axis=1))[:, None]).tolist()))


def _rank(rows: np.ndarray) -> int:
    span = Span()
    return sum(span.grows(row) for row in rows)


class Span:
    """The span of integer rows, kept in echelon form with exact integers."""

    def __init__(self) -> None:
        self._echelon: list[tuple[int, np.ndarray]] = []

    def grows(self, row: np.ndarray) -> bool:
        """Takes a row up; whether it was independent of those before."""
        rest = row.astype(object)
        for pivot, known in self._echelon:
            if rest[pivot]:
                rest = rest * known[pivot] - known * rest[pivot]
        if not np.any(rest):
            return False
        rest = np.array(_primitive(rest.tolist()), dtype=object)
        self._echelon.append((int(np.flatnonzero(rest)[0]), rest))
        return True


def _candidates(mechanism: Mechanism, elements: np.ndarray, null_space: np.ndarray) -> Iterator[np.ndarray]:
    """Conserved combinations, plain ones first: a species that no reaction touches, the atoms within a group of
    species that reactions link, the group's amount where no reaction changes amounts, and then the simplest found by
    exchanging components of the null space."""
    groups = _linked_groups(mechanism)
    yield from sorted((row for group in groups for row in _within(elements, group)), key=_plainness)
    if not any(sum(reaction.net.values()) for reaction in mechanism.reactions):
        yield from (group.astype(np.int64) for group in groups)
    components = Components(null_space, np.arange(null_space.shape[1]))
    found = _primitive_rows(components.numbers)
    for k, j in np.argwhere(components.numbers != 0).tolist():
        if j != components.basis[k]:
            other = components.copy()
            other.exchange(k, j)
            found |= _primitive_rows(other.numbers)
    yield from sorted((np.array(row) for row in found), key=_plainness)


def _plainness(row: np.ndarray) -> tuple:
    return bool(np.any(row < 0)), int(np.count_nonzero(row)), int(np.sum(np.abs(row))), (-np.abs(row)).tolist()


def _within(elements: np.ndarray, group: np.ndarray) -> list[np.ndarray]:
    if np.count_nonzero(group) == 1:
        return [group.astype(np.int64)]
    rows = np.where(group, elements, 0)
    return [np.array(_primitive(row)) for row in rows.tolist() if any(row)]


def _linked_groups(mechanism: Mechanism) -> list[np.ndarray]:
    """Masks (N) of the groups of species that reactions link with one another."""
    group = list(range(len(mechanism.species)))
    for reaction in mechanism.reactions:
        places = {group[mechanism.index(name)] for name in reaction.net}
        group = [min(places) if g in places else g for g in group]
    return [np.array(group) == g for g in sorted(set(group))]
