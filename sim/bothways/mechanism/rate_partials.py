"""Which partial derivatives of single net rates stand where in `partial` of the kernels' work (kernels/rates.py sets it).

`jacobian_sums.py` sums the same partials over the reactions; here each stays with its reaction, for the method that works by
reactions (integrate/graded.py).
"""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from ..kernels import layout
from .jacobian_sums import TOTAL, terms_of_groups
from .model import Mechanism
from .tables import Tables, build_tables, table_view

Entry = tuple[int, int, int, float]


@dataclass(frozen=True)
class RatePartials:
    """∂w_j/∂c_s = Σ weight·partial[source] over the entries with this reaction and species; N: ∂w_j/∂C at constant c.

    reaction, species, source : (entries) uint32. weight : (entries).
    """

    reaction: np.ndarray
    species: np.ndarray
    source: np.ndarray
    weight: np.ndarray


def rate_partials(mechanism: Mechanism) -> RatePartials:
    """The entries of a mechanism, worked out once."""
    kept = mechanism.__dict__
    if "_rate_partials" not in kept:
        kept["_rate_partials"] = _of(list(_entries(len(mechanism.species), build_tables(mechanism))))
    return kept["_rate_partials"]


def _of(entries: list[Entry]) -> RatePartials:
    reaction, species, source = (np.array([entry[k] for entry in entries], dtype=np.uint32) for k in range(3))
    return RatePartials(reaction, species, source, np.array([entry[3] for entry in entries], dtype=float))


def _entries(n: int, tables: Tables) -> Iterator[Entry]:
    ints = {name: table_view(tables, name).astype(int) for name in layout.INTS}
    floats = {name: table_view(tables, name) for name in ("group_default", "group_excess")}
    r = len(ints["reactant0"])
    yield from _molecules(ints, n, r)
    first = 4 * r + len(ints["long_side"])
    for term, group in terms_of_groups(ints):
        for species, weight in _partners(group, n, ints, floats):
            yield int(ints["term_reaction"][term]), species, first + term, weight
    last = first + len(ints["term_reaction"]) + 1 + len(ints["response_start"]) // 2
    for kind, start in (("lump_species", "lump_start"), ("adsorbed_species", "adsorbed_start")):
        for q, term in enumerate(ints["lump_term"]):
            for e in range(ints[start][q], ints[start][q + 1]):
                yield int(ints["term_reaction"][term]), int(ints[kind][e]), last + e, 1.0
        last += len(ints[kind])
    for q, j in enumerate(ints["diluted_reaction"]):
        yield int(j), n, last + q, 1.0


def _molecules(ints: dict[str, np.ndarray], n: int, r: int) -> Iterator[Entry]:
    for slot, key in enumerate(("reactant0", "reactant1", "product0", "product1")):
        yield from ((j, int(s), 4 * j + slot, 1.0) for j, s in enumerate(ints[key]) if s < n)
    for m, (j, s) in enumerate(zip(ints["long_reaction"], ints["long_species"], strict=True)):
        yield int(j), int(s), 4 * r + m, 1.0


def _partners(group: int, n: int, ints: dict[str, np.ndarray], floats: dict[str, np.ndarray]) -> Iterator[tuple[int, float]]:
    """What a partner is made of: species, or N for the total concentration, with their weights."""
    if group == TOTAL:
        yield n, 1.0
        return
    yield n, float(floats["group_default"][group])
    for e in range(ints["group_start"][group], ints["group_start"][group + 1]):
        yield int(ints["group_species"][e]), float(floats["group_excess"][e])
