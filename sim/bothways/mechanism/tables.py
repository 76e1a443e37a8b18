"""The flat tables of a mechanism for the compiled kernels (see kernels/layout.py for their order)."""

from dataclasses import dataclass

import numpy as np

from ..kernels import layout
from ..kernels.elementary import GROUP
from .jacobian_sums import jacobian_sums, padded
from .law_tables import law_tables
from .model import Mechanism
from .phase import FRACTION, standard_concentration
from .thermal_tables import g_over_RT, thermal_tables

_LARGEST_SUM = 650.0  # of ln E over one side; exp overflows at 709


@dataclass(frozen=True)
class Tables:
    """ints (uint32) and floats (float64) as the kernels read them, and the length of `work`.

    lowest_temperature : below this [K] the exponentials of a side would overflow.
    """

    ints: np.ndarray
    floats: np.ndarray
    work_size: int
    lowest_temperature: float

    def work(self) -> np.ndarray:
        """Fresh scratch for one caller."""
        return np.full(self.work_size, np.nan)


def build_tables(mechanism: Mechanism) -> Tables:
    """The tables of a mechanism, built once."""
    kept = mechanism.__dict__
    if "_tables" not in kept:
        kept["_tables"] = _build(mechanism)
    return kept["_tables"]


def _build(mechanism: Mechanism) -> Tables:
    ints: dict[str, np.ndarray] = {}
    floats: dict[str, np.ndarray] = {"standard": np.array(standard_concentration(mechanism))}
    thermal_tables(mechanism, ints, floats)
    sides = _sides(mechanism, ints)
    law_tables(mechanism, ints, floats)
    _stoichiometry(mechanism, ints, floats)
    jacobian_sums(mechanism, ints, floats)
    packed_ints, packed_floats, work_size = _pack(mechanism, ints, floats)
    return Tables(packed_ints, packed_floats, work_size, _lowest_temperature(ints, floats, sides))


def _sides(mechanism: Mechanism, ints: dict) -> list[list[list[int]]]:
    """Molecules of each side: two in the tables, padded with N; the rest in the lists of long sides."""
    n = len(mechanism.species)
    sides: list[list[list[int]]] = [[], []]
    long: list[tuple[int, int, int]] = []
    for j, reaction in enumerate(mechanism.reactions):
        for side, terms in enumerate((reaction.equation.reactants, reaction.equation.products)):
            molecules = [mechanism.index(name) for name, count in terms for _ in range(count)]
            sides[side].append(molecules)
            long += [(j, k, side) for k in molecules[2:]]
    for key, lists in zip(("reactant", "product"), sides, strict=True):
        for place in (0, 1):
            ints[f"{key}{place}"] = np.array([[*m, n, n][place] for m in lists])
    for column, key in enumerate(("long_reaction", "long_species", "long_side")):
        ints[key] = np.array([row[column] for row in long])
    return sides


def _stoichiometry(mechanism: Mechanism, ints: dict, floats: dict) -> None:
    """Reactions that change each species; by length, since loops of one length after another are fast."""
    r, lists = len(mechanism.reactions), [[] for _ in mechanism.species]  # type: tuple[int, list[list[int]]]
    for j, reaction in enumerate(mechanism.reactions):
        for name, count in reaction.net.items():
            lists[mechanism.index(name)] += [j if count > 0 else r + 1 + j] * abs(count)
    kept = sorted(((s, padded(members, r)) for s, members in enumerate(lists) if members), key=lambda item: len(item[1]))
    ints["changed_species"] = np.array([s for s, _ in kept])
    ints["changed_start"] = np.cumsum([0] + [len(members) for _, members in kept])
    ints["changed_reaction"] = np.array([j for _, members in kept for j in members])
    _dilution(mechanism, ints, floats)


def _dilution(mechanism: Mechanism, ints: dict, floats: dict) -> None:
    """Reactions that change the amount, where activities are mole fractions."""
    changes = [sum(r.net.values()) if mechanism.standard_state == FRACTION else 0 for r in mechanism.reactions]
    ints["diluted_reaction"] = np.flatnonzero(changes)
    floats["amount_change"] = np.array([change for change in changes if change])
    places = {j: place for place, j in enumerate(ints["diluted_reaction"], 1)}
    ints["lump_diluted"] = np.array([places.get(ints["term_reaction"][t], 0) for t in ints["lump_term"]])


def _pack(mechanism: Mechanism, ints: dict, floats: dict) -> tuple[np.ndarray, np.ndarray, int]:
    sizes = {"SPECIES": len(mechanism.species), "REACTIONS": len(mechanism.reactions),
             "EXPRESSIONS": len(floats["log_A"]), "TERMS": len(ints["term_reaction"]),
             "BODIES": len(ints["body_term"]), "FALL_OFFS": len(ints["fall_term"]),
             "GROUPS": len(floats["group_default"]), "LONG": len(ints["long_side"]),
             "BLOCK": len(ints["block_row"]), "CURVES": len(ints["curve_term"]), "COLUMNS": len(ints["column_start"]) - 1,
             "RESPONSES": len(ints["response_start"]) // 2, "DILUTED": len(ints["diluted_reaction"]),
             "LUMPS": len(ints["lump_term"]), "LUMP_ENTRIES": len(ints["lump_species"]) + len(ints["adsorbed_species"]),
             "COMPLEXES": len(ints["complex_term"])}
    header = [sizes[name] for name in layout.SIZES]
    lengths = [[np.size(ints[name]) for name in layout.INTS], [np.size(floats[name]) for name in layout.FLOATS],
               _work_lengths(sizes)]
    for first, list_of_lengths in zip((layout.HEADER, 0, 0), lengths, strict=True):
        header += list(first + np.cumsum([0, *list_of_lengths]))
    all_ints = np.concatenate([header] + [np.asarray(ints[name]).ravel() for name in layout.INTS])
    all_floats = np.concatenate([np.asarray(floats[name], dtype=float).ravel() for name in layout.FLOATS])
    return all_ints.astype(np.uint32), all_floats, sum(lengths[2])


def _work_lengths(sizes: dict[str, int]) -> list[int]:
    n, r, t, x, fall = (sizes[k] for k in ("SPECIES", "REACTIONS", "TERMS", "EXPRESSIONS", "FALL_OFFS"))
    curves, columns = sizes["CURVES"], sizes["COLUMNS"]
    by_name = {"seen": 5, "active": 9 * n, "log_scale": n + 1, "scale": n + 1, "inverse_scale": n + 1, "scale_slope": n + 1,
               "activity": n + 1, "curve_centre": curves, "curve_centre_slope": curves, "curve_factor": curves,
               "pressure": 1, "column": columns, "column_slope": columns,
               "log_k": x, "k_limit": x, "k_slope": x, "centre_exponent": 3 * fall, "centre_part": 3 * fall,
               "partner": sizes["GROUPS"], "log_partner": sizes["GROUPS"], "k": t, "k_by_T": t, "k_by_M": t,
               "partial": 4 * r + sizes["LONG"] + t + 1 + sizes["RESPONSES"] + sizes["LUMP_ENTRIES"] + sizes["DILUTED"],
               "dilution": sizes["DILUTED"] + 1, "net": 2 * r + 1, "net_by_T": 2 * r + 1,
               "block": sizes["BLOCK"] + n + layout.NOT_WANTED}
    by_name |= {name: GROUP for name in layout.WORK if name.startswith("spare_")}
    by_name |= dict.fromkeys(("lump_bare", "lump_forward", "lump_reverse"), sizes["LUMPS"])
    by_name |= dict.fromkeys(("gibbs", "enthalpy", "heat_capacity", "heat_capacity_slope", "omega", "omega_by_T",
                              "concentration", "energy", "border_column"), n)
    by_name |= dict.fromkeys(("log_centre", "log_centre_slope", "log_broadening", "broadening", "centre", "fall_ratio",
                              "fall_share", "fall_log_ratio", "fall_partner", "fall_reduced", "fall_by_reduced",
                              "fall_by_centre"), fall)
    by_name |= dict.fromkeys(("complex_gibbs", "complex_enthalpy", "complex_heat_capacity", "complex_heat_capacity_slope"),
                             sizes["COMPLEXES"])
    return [by_name.get(name, r) for name in layout.WORK]


def _lowest_temperature(ints: dict, floats: dict, sides: list[list[list[int]]]) -> float:
    """The lowest temperature [K] on a grid at which no side's sum of ln E leaves the range of exp."""
    n = len(ints["range_start"]) - 1 - len(ints["complex_term"])
    reduction = floats["reduction"].reshape(-1, 2)[:n]
    size, power = floats["standard"]
    longest = max((len(m) for both in sides for m in both), default=1)
    padded = np.array([m + [n] * (longest - len(m)) for both in sides for m in both], dtype=int).reshape(-1, longest)
    for T in (50.0, 75.0, 100.0, 125.0, 150.0, 175.0, 200.0, 250.0, 300.0, 400.0, 500.0):
        log_scale = np.log(size) - power * np.log(T) - g_over_RT(ints, floats, T)[:n] + reduction @ [1 / T, 1.0]
        sums = np.append(log_scale, 0.0)[padded].sum(axis=1)
        if np.max(np.abs(np.concatenate([log_scale, sums]))) < _LARGEST_SUM:
            return T
    return np.inf


def table_view(tables: Tables, name: str) -> np.ndarray:
    """A named array of the packed tables."""
    names, array = (layout.INTS, tables.ints) if name in layout.INTS else (layout.FLOATS, tables.floats)
    slot = layout.offset_slot(names, name)
    return array[tables.ints[slot] : tables.ints[slot + 1]]
