"""How the Jacobian's species block is made from the partial derivatives of the rates.

Entry (i, s) of the block is Σ ν_ij ∂w_j/∂c_s at constant total of the partners, and behind the block stands
∂omega_i/∂C, the response to that total. `partial` (kernels/rates.py sets it) holds ∂w/∂c by the four molecules of every
reaction, by the further molecules of long sides, then ∂w/∂[M] of every term (∂w/∂C of laws of pressure), and behind
a zero these Σ ν ∂w/∂[M] over the terms of one partner group for each species they touch: its responses. Then stand ∂w/∂c
of the entries of lumped terms and of their adsorbed species (kernels/lumped.py), and last ∂w/∂C of the reactions whose
reverse rate holds the total concentration (kernels/solution.py).
"""

from collections import defaultdict
from collections.abc import Iterator, Sequence

import numpy as np

from ..kernels.layout import NOT_WANTED, PAD
from .model import Mechanism

Place = tuple[int, int]
Extras = list[tuple[Place, int, float]]
TOTAL = -1
"""The column of dω/dC, which stands behind the block."""


def padded(members: list[int], zero: int) -> list[int]:
    """A list that is summed, brought to its length with a place that holds zero."""
    return members + [zero] * (-len(members) % PAD)


def _signed_lists(rows: Sequence[tuple[list[int], list[int]]], zero: int) -> tuple[np.ndarray, np.ndarray]:
    """Starts (2 rows + 1) and members of lists in pairs: what adds, then what takes away."""
    lists = [padded(part, zero) for row in rows for part in row]
    return np.cumsum([0] + [len(part) for part in lists]), np.array([k for part in lists for k in part])


def jacobian_sums(mechanism: Mechanism, ints: dict, floats: dict) -> None:
    """Adds the block's pattern (columns: species) and the sums to the tables."""
    n, r = len(mechanism.species), len(mechanism.reactions)
    net = [{mechanism.index(name): count for name, count in reaction.net.items()} for reaction in mechanism.reactions]
    extras: Extras = []
    targets = _molecules(net, ints, n, extras)
    _partners(net, ints, floats, 4 * r + len(ints["long_side"]), extras)
    last = _lumped(net, ints, extras)
    extras += [((i, TOTAL), last + q, float(count)) for q, j in enumerate(ints["diluted_reaction"])
               for i, count in net[j].items()]
    wanted = {place for row in targets for place in row if place} | {place for place, _, _ in extras if place[1] != TOTAL}
    columns = sorted(wanted | {(i, i) for i in range(n)}, key=lambda place: (place[1], place[0]))
    where = {place: k for k, place in enumerate(columns)} | {(i, TOTAL): len(columns) + i for i in range(n)}
    ints["block_start"] = np.concatenate([[0], np.cumsum(np.bincount([s for _, s in columns], minlength=n))])
    ints["block_row"] = np.array([i for i, _ in columns])
    bin_of_slot = len(columns) + n
    ints["target"] = np.array([where[place] if place else bin_of_slot + slot for row in targets
                               for slot, place in enumerate(row)])
    ints["extra_place"] = np.array([where[place] for place, _, _ in extras])
    ints["extra_source"] = np.array([source for _, source, _ in extras])
    floats["extra_weight"] = np.array([weight for _, _, weight in extras])


def _molecules(net: list[dict[int, int]], ints: dict, n: int, extras: Extras) -> list[list[Place | None]]:
    """Where the partials by the four molecules go, four rows each; what has no slot there goes to the extras."""
    slots = np.column_stack([ints[key] for key in ("reactant0", "reactant1", "product0", "product1")]).tolist()
    long: dict[int, list[tuple[int, int]]] = defaultdict(list)
    for m, (j, s) in enumerate(zip(ints["long_reaction"], ints["long_species"], strict=True)):
        long[int(j)].append((4 * len(net) + m, int(s)))
    targets: list[list[Place | None]] = []
    for j, molecules in enumerate(slots):
        rows, left = _rows(molecules, net[j])
        columns = [(4 * j + slot, s) for slot, s in enumerate(molecules) if s < n]
        targets.append([(i, s) if i is not None and s < n else None for s in molecules for i in rows])
        extras += [((i, s), source, float(count)) for source, s in columns for i, count in left.items() if count]
        extras += [((i, s), source, float(count)) for source, s in long[j] for i, count in net[j].items()]
    assert not targets or len(targets[0]) == NOT_WANTED
    return targets


def _rows(molecules: list[int], net: dict[int, int]) -> tuple[list[int | None], dict[int, int]]:
    """The species that each of the four molecules changes, by one each, and what is left of the net change.

    A molecule that stands on both sides changes nothing.
    """
    left = dict(net)
    rows: list[int | None] = []
    for slot, species in enumerate(molecules):
        sign = -1 if slot < 2 else 1
        counts = left.get(species, 0) * sign > 0
        rows.append(species if counts else None)
        if counts:
            left[species] -= sign
    return rows, left


def _partners(net: list[dict[int, int]], ints: dict, floats: dict, first: int, extras: Extras) -> None:
    """Responses to the partners of each group, and where they go."""
    responses: dict[tuple[int, int], tuple[list[int], list[int]]] = defaultdict(lambda: ([], []))
    for term, group in terms_of_groups(ints):
        for i, count in net[ints["term_reaction"][term]].items():
            responses[group, i][count < 0].extend([term] * abs(count))
    ints["response_start"], ints["response_term"] = _signed_lists(list(responses.values()), len(ints["term_reaction"]))
    start, behind = ints["group_start"], first + len(ints["term_reaction"]) + 1
    for place, (group, i) in enumerate(responses):
        source = behind + place
        if group == TOTAL or floats["group_default"][group]:
            extras.append(((i, TOTAL), source, 1.0 if group == TOTAL else float(floats["group_default"][group])))
        if group != TOTAL:
            extras += [((i, int(ints["group_species"][e])), source, float(floats["group_excess"][e]))
                       for e in range(start[group], start[group + 1])]


def terms_of_groups(ints: dict) -> Iterator[tuple[int, int]]:
    """Every term with its partner group; what pressure does goes by the total alone."""
    for kind in ("body", "fall", "curve"):
        yield from zip(ints[f"{kind}_term"].tolist(), ints[f"{kind}_group"].tolist(), strict=True)
    for term in (*ints["table_term"].tolist(), *ints["series_term"].tolist()):
        yield term, TOTAL


def _lumped(net: list[dict[int, int]], ints: dict, extras: Extras) -> int:
    """Entries of lumped terms, then their adsorbed species, behind the responses; returns the place behind them."""
    source = 4 * len(net) + len(ints["long_side"]) + len(ints["term_reaction"]) + 1 + len(ints["response_start"]) // 2
    for kind, start in (("lump_species", ints["lump_start"]), ("adsorbed_species", ints["adsorbed_start"])):
        for q, term in enumerate(ints["lump_term"]):
            for s in ints[kind][start[q] : start[q + 1]]:
                extras += [((i, int(s)), source, float(count)) for i, count in net[ints["term_reaction"][term]].items()]
                source += 1
    return source
