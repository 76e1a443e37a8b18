"""How the entries of the Jacobian's species block are summed from the partial derivatives of the rates.

Entry (i, s) of the block is Σ ν_ij ∂w_j/∂c_s at constant total of the partners, and behind the block stands
∂omega_i/∂C, the response to that total. Both are sums over `partial`, whose places kernels/rates.py sets: six
molecules a reaction, the further molecules of long sides, then ∂w/∂[M] of every term (∂w/∂C of laws of pressure).
"""

from collections import defaultdict

import numpy as np

from .model import Mechanism

Sums = dict[tuple[int, int], list[tuple[int, float]]]


def jacobian_sums(mechanism: Mechanism, ints: dict, floats: dict) -> None:
    """Adds the block's pattern (columns: species) and the sums to the tables."""
    n = len(mechanism.species)
    net = [[(mechanism.index(name), count) for name, count in r.net.items()] for r in mechanism.reactions]
    block: Sums = defaultdict(list)
    total: Sums = defaultdict(list)
    for i in range(n):
        block[i, i] = []  # the integrators' matrices have a full diagonal
    _add_molecules(n, net, ints, block)
    _add_partners(net, ints, floats, block, total)
    columns = sorted(block, key=lambda place: (place[1], place[0]))
    counts = np.bincount([s for _, s in columns], minlength=n) if columns else np.zeros(n, dtype=int)
    ints["block_start"] = np.concatenate([[0], np.cumsum(counts)])
    ints["block_row"] = np.array([i for i, _ in columns])
    lists = [block[place] for place in columns] + [total.get((i, 0), []) for i in range(n)]
    ints["sum_start"] = np.cumsum([0] + [len(entries) for entries in lists])
    ints["sum_source"] = np.array([source for entries in lists for source, _ in entries])
    floats["sum_weight"] = np.array([weight for entries in lists for _, weight in entries])


def _add_molecules(n: int, net: list, ints: dict, block: Sums) -> None:
    molecules = np.column_stack([ints["reactant"].reshape(-1, 3), ints["product"].reshape(-1, 3)])
    for j, row in enumerate(molecules):
        for slot, s in enumerate(row):
            if s < n:
                for i, count in net[j]:
                    block[i, int(s)].append((6 * j + slot, float(count)))
    long = zip(ints["long_reaction"], ints["long_species"], strict=True)
    for m, (j, s) in enumerate(long):
        for i, count in net[j]:
            block[i, int(s)].append((6 * len(net) + m, float(count)))


def _add_partners(net: list, ints: dict, floats: dict, block: Sums, total: Sums) -> None:
    first = 6 * len(net) + len(ints["long_side"])
    pairs = [*zip(ints["body_term"], ints["body_group"], strict=True),
             *zip(ints["fall_term"], ints["fall_group"], strict=True),
             *zip(ints["curve_term"], ints["curve_group"], strict=True)]
    start = ints["group_start"]
    for term, group in pairs:
        for i, count in net[ints["term_reaction"][term]]:
            source = first + int(term)
            if floats["group_default"][group]:
                total[i, 0].append((source, count * floats["group_default"][group]))
            for e in range(start[group], start[group + 1]):
                block[i, int(ints["group_species"][e])].append((source, count * floats["group_excess"][e]))
    for term in (*ints["table_term"], *ints["series_term"]):  # what pressure does: by the total alone
        for i, count in net[ints["term_reaction"][term]]:
            total[i, 0].append((first + int(term), float(count)))
