"""From a mechanism as a plain dict to the numbers of ``reference.py``: SI, in NumPy's widest real type.

Written from the description of the file format alone; nothing of the program is imported.
"""

import re
from dataclasses import dataclass, field
from typing import Any

import numpy as np

Array = np.ndarray
LD = np.longdouble

R = LD("8.31446261815324")  # J/(mol K), the product of k_B and N_A, exact
AVOGADRO = LD("6.02214076e23")
LENGTH = {"m": LD(1), "dm": LD("0.1"), "cm": LD("0.01"), "mm": LD("0.001")}
AMOUNT = {"mol": LD(1), "kmol": LD(1000), "molecule": 1 / AVOGADRO}
TIME = {"s": LD(1), "ms": LD("0.001"), "min": LD(60), "h": LD(3600)}
ENERGY = {"J/mol": LD(1), "kJ/mol": LD(1000), "cal/mol": LD("4.184"), "kcal/mol": LD(4184), "K": R,
          "eV": LD("1.602176634e-19") * AVOGADRO}
PRESSURE = {"Pa": LD(1), "kPa": LD(1000), "MPa": LD(1e6), "bar": LD(1e5), "atm": LD(101325)}
ENTROPY = {unit.replace("/mol", "/(mol K)"): size for unit, size in ENERGY.items() if "/mol" in unit}
TEMPERATURE = {"K": LD(1)}

NOT_COVERED = ("orders", "stoichiometric_number", "equilibrium")
LAWS = ("Arrhenius", "Lindemann", "Troe")


# ---- quantities


def quantity(value: float | str, bare: LD, table: dict[str, LD]) -> LD:
    """``value`` in SI: a number in the unit ``bare``, or a string with a unit of ``table``."""
    if not isinstance(value, str):
        return LD(value) * bare
    number, unit = value.split(maxsplit=1)
    return LD(number) * table[unit]


def units_of(document: dict[str, Any]) -> dict[str, LD]:
    """The size in SI of each bare unit; SI where the file names none."""
    tables = {"length": LENGTH, "amount": AMOUNT, "time": TIME, "energy": ENERGY, "pressure": PRESSURE}
    units = {kind: LD(1) for kind in tables}
    for name in document["mechanism"].get("units", []):
        units |= {kind: table[name] for kind, table in tables.items() if name in table}
    return units


# ---- species: rows of a1 ... a7 between boundaries


def cp_of(a: Array, T: Any) -> Any:
    """cp/R [-] of rows ``a`` (..., 7)."""
    return a[..., 0] + T * (a[..., 1] + T * (a[..., 2] + T * (a[..., 3] + T * a[..., 4])))


def h_of(a: Array, T: Any) -> Any:
    """h/R [K] of rows ``a`` (..., 7)."""
    series = a[..., 1] / 2 + T * (a[..., 2] / 3 + T * (a[..., 3] / 4 + T * a[..., 4] / 5))
    return a[..., 5] + T * (a[..., 0] + T * series)


def s_of(a: Array, T: Any) -> Any:
    """s/R [-] of rows ``a`` (..., 7)."""
    series = a[..., 1] + T * (a[..., 2] / 2 + T * (a[..., 3] / 3 + T * a[..., 4] / 4))
    return a[..., 6] + a[..., 0] * np.log(T) + T * series


def constant_cp_row(T: LD, cp: LD, h: LD, s: LD) -> Array:
    """The row (7,) with this constant cp/R that has h/R [K] and s/R at T."""
    return np.array([cp, 0, 0, 0, 0, h - cp * T, s - cp * np.log(T)], dtype=LD)


def closed_rows(T: Array, rows: Array) -> Array:
    """The rows with a6 and a7 shifted, upwards from the lowest, so that h and s are continuous."""
    rows = rows.copy()
    for i in range(1, len(rows)):
        rows[i, 5] += h_of(rows[i - 1], T[i]) - h_of(rows[i], T[i])
        rows[i, 6] += s_of(rows[i - 1], T[i]) - s_of(rows[i], T[i])
    return rows


def nasa7(potential: dict[str, Any], joins: str) -> tuple[Array, Array]:
    """Boundaries (n + 1,) and rows (n + 3, 7): below the range, the n rows, above the range."""
    T, rows = np.array(potential["T"], dtype=LD), np.array(potential["a"], dtype=LD)
    if joins == "closed":
        rows = closed_rows(T, rows)
    ends = [(rows[0], T[0]), (rows[-1], T[-1])]
    below, above = (constant_cp_row(t, cp_of(a, t), h_of(a, t), s_of(a, t)) for a, t in ends)
    return T, np.vstack([below, rows, above])


def constant_heat_capacity(potential: dict[str, Any], units: dict[str, LD]) -> tuple[Array, Array]:
    """No boundary and one row (1, 7)."""
    T = quantity(potential["at"], LD(1), TEMPERATURE)
    H = quantity(potential["H"], units["energy"], ENERGY)
    cp = quantity(potential["cp"], units["energy"], ENTROPY)
    if "S" in potential:
        S = quantity(potential["S"], units["energy"], ENTROPY)
    else:
        S = (H - quantity(potential["G"], units["energy"], ENERGY)) / T
    return np.empty(0, dtype=LD), constant_cp_row(T, cp / R, H / R, S / R)[None]


def boundaries_and_rows(potential: dict[str, Any], joins: str, units: dict[str, LD]) -> tuple[Array, Array]:
    """Boundaries (m,) [K] and rows (m + 1, 7) of one species."""
    if potential["form"] == "NASA 7-coefficient":
        return nasa7(potential, joins)
    if potential["form"] == "constant heat capacity":
        return constant_heat_capacity(potential, units)
    raise NotImplementedError(potential["form"])


# ---- reactions


@dataclass(frozen=True)
class Reaction:
    """One equation: molecules of each species on either side, without M; its terms as in the file."""

    equation: str
    reactants: dict[str, int]
    products: dict[str, int]
    plus_m: bool
    terms: list[dict[str, Any]] = field(repr=False)


def side(text: str) -> dict[str, int]:
    """The molecules of one side, e.g. ``2 H + M``."""
    count: dict[str, int] = {}
    for part in text.split(" + "):
        number, name = re.fullmatch(r"\s*(?:([\d.]+)\s+)?(\S+)\s*", part).groups()
        if float(number or 1) % 1:
            raise NotImplementedError(f"a broken number of molecules: {text}")
        count[name] = count.get(name, 0) + int(float(number or 1))
    return count


def reaction(entry: dict[str, Any]) -> Reaction:
    """One ``[[reaction]]``; its partners are handed down to each term that does not state its own."""
    if any(key in entry for key in NOT_COVERED):
        raise NotImplementedError(entry["equation"])
    reactants, products = (side(text) for text in re.split(r"\s(?:⇌|⇄|=)\s", entry["equation"]))
    plus_m = reactants.pop("M", 0)
    if plus_m > 1 or plus_m != products.pop("M", 0):
        raise NotImplementedError(entry["equation"])
    forward = entry["forward"]
    terms = [with_partners(term, entry) for term in (forward if isinstance(forward, list) else [forward])]
    return Reaction(entry["equation"], reactants, products, bool(plus_m), terms)


def with_partners(term: dict[str, Any], entry: dict[str, Any]) -> dict[str, Any]:
    """The term with the entry's partners, unless it states its own."""
    keys = ("collision_efficiency", "collision_partner")
    own = any(key in term for key in keys)
    return dict(term) if own else term | {key: entry[key] for key in keys if key in entry}


def efficiencies(term: dict[str, Any], names: list[str]) -> list[LD]:
    """What each species counts in [M] [-]."""
    if "collision_partner" in term:
        return [LD(name == term["collision_partner"]) for name in names]
    stated = term.get("collision_efficiency", {})
    return [LD(stated.get(name, 1)) for name in names]


def arrhenius_row(law: dict[str, Any], order: int, units: dict[str, LD]) -> list[LD]:
    """A [SI], n, Ea/R [K], T_ref [K]."""
    per_concentration = units["length"] ** 3 / units["amount"]
    A = LD(law["A"]) * per_concentration ** (order - 1) / units["time"]
    Ea = quantity(law.get("Ea", 0), units["energy"], ENERGY)
    return [A, LD(law.get("n", 0)), Ea / R, quantity(law.get("T_ref", 1), LD(1), TEMPERATURE)]


def centre_row(term: dict[str, Any]) -> list[LD]:
    """w0, w3, T***, w1, T*, w2, T** of F_cent = w0 + w3 e^(-T/T***) + w1 e^(-T/T*) + w2 e^(-T**/T)."""
    F = 1 if term["law"] == "Lindemann" else term["F_cent"]
    if not isinstance(F, dict):
        return [LD(F), LD(0), LD(1), LD(0), LD(1), LD(0), LD(0)]
    a = LD(F["a"])
    return [LD(0), 1 - a, LD(F["T***"]), a, LD(F["T*"]), LD("T**" in F), LD(F.get("T**", 0))]


@dataclass
class Terms:
    """The terms of all reactions in one row: which reaction each belongs to, and their numbers."""

    reaction: list[int] = field(default_factory=list)
    rate: list[list[LD]] = field(default_factory=list)  # k, or k_inf of a fall-off term
    partnered: list[int] = field(default_factory=list)  # terms that contain [M]
    efficiency: list[list[LD]] = field(default_factory=list)  # of each partnered term
    falloff: list[int] = field(default_factory=list)  # places in ``partnered``
    low: list[list[LD]] = field(default_factory=list)  # k_0 of each fall-off term
    centre: list[list[LD]] = field(default_factory=list)

    def add(self, j: int, reaction: Reaction, term: dict[str, Any], names: list[str], units: dict) -> None:
        """Append one term of reaction j."""
        falloff = term["law"] != "Arrhenius"
        if term["law"] not in LAWS or "width" in term or (falloff and reaction.plus_m):
            raise NotImplementedError(f"{reaction.equation}: {term['law']}")
        order = sum(reaction.reactants.values())
        self.reaction.append(j)
        high = term["k_inf"] if falloff else term
        self.rate.append(arrhenius_row(high, order + reaction.plus_m, units))
        if falloff or reaction.plus_m:
            self.partnered.append(len(self.rate) - 1)
            self.efficiency.append(efficiencies(term, names))
        if falloff:
            self.falloff.append(len(self.partnered) - 1)
            self.low.append(arrhenius_row(term["k_0"], order + 1, units))
            self.centre.append(centre_row(term))
