"""From a mechanism as a plain dict to the numbers of ``reference.py``: SI, in NumPy's widest real type.

Written from the description of the file format alone; nothing of the program is imported.
"""

import re
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from reference_laws import Chebyshev, Lumped, PressureTable

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

NOT_COVERED = ("orders", "stoichiometric_number", "equilibrium")  # of a reaction; the first two belong to its terms
FALL_OFF = {"Lindemann": set(), "Troe": {"F_cent", "width"}, "SRI": {"F"}, "activated": {"F_cent", "width", "F"}}


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


# ---- species: rows of a1 ... a7, b1, b2 between boundaries (powers -2 ... 4, and two constants of integration)
# B.J. McBride, M.J. Zehe, S. Gordon, NASA Glenn coefficients, NASA/TP-2002-211556 (2002)


def cp_of(a: Array, T: Any) -> Any:
    """cp/R [-] of rows ``a`` (..., 9)."""
    series = a[..., 2] + T * (a[..., 3] + T * (a[..., 4] + T * (a[..., 5] + T * a[..., 6])))
    return (a[..., 0] / T + a[..., 1]) / T + series


def h_of(a: Array, T: Any) -> Any:
    """h/R [K] of rows ``a`` (..., 9)."""
    series = a[..., 3] / 2 + T * (a[..., 4] / 3 + T * (a[..., 5] / 4 + T * a[..., 6] / 5))
    return a[..., 7] - a[..., 0] / T + a[..., 1] * np.log(T) + T * (a[..., 2] + T * series)


def s_of(a: Array, T: Any) -> Any:
    """s/R [-] of rows ``a`` (..., 9)."""
    series = a[..., 3] + T * (a[..., 4] / 2 + T * (a[..., 5] / 3 + T * a[..., 6] / 4))
    return a[..., 8] - (a[..., 0] / (2 * T) + a[..., 1]) / T + a[..., 2] * np.log(T) + T * series


def constant_cp_row(T: LD, cp: LD, h: LD, s: LD) -> Array:
    """The row (9,) with this constant cp/R that has h/R [K] and s/R at T."""
    return np.array([0, 0, cp, 0, 0, 0, 0, h - cp * T, s - cp * np.log(T)], dtype=LD)


def closed_rows(T: Array, rows: Array) -> Array:
    """The rows with b1 and b2 shifted, upwards from the lowest, so that h and s are continuous."""
    rows = rows.copy()
    for i in range(1, len(rows)):
        rows[i, 7] += h_of(rows[i - 1], T[i]) - h_of(rows[i], T[i])
        rows[i, 8] += s_of(rows[i - 1], T[i]) - s_of(rows[i], T[i])
    return rows


def from_seven(a: Array) -> Array:
    """Rows (m, 9) of rows (m, 7): the two lowest powers are missing."""
    return np.hstack([np.zeros((len(a), 2), dtype=LD), a])


def from_shomate(a: Array) -> Array:
    """Rows (m, 9) of rows A ... H (m, 8) in t = T/1000, J/(mol K) and kJ/mol.

    NIST Chemistry WebBook, doi:10.18434/T4D303: H°(T) - H°(298.15) = A t + ... - E/t + F - H, where H is the
    enthalpy of formation at 298.15 K. On the scale of formation enthalpies it drops out.
    """
    A, B, C, D, E, F, G, _ = a.T
    k = LD(1000)
    return np.array([E * k**2, 0 * E, A, B / k, C / k**2, D / k**3, 0 * D, F * k, G - A * np.log(k)]).T / R


FITS = {"NASA 7-coefficient": (7, from_seven), "NASA 9-coefficient": (9, np.copy), "Shomate": (8, from_shomate)}


def fit(potential: dict[str, Any], joins: str) -> tuple[Array, Array]:
    """Boundaries (n + 1,) and rows (n + 3, 9): below the range, the n rows, above the range."""
    width, to_rows = FITS[potential["form"]]
    T = np.array([quantity(t, LD(1), TEMPERATURE) for t in potential["T"]], dtype=LD)
    rows = to_rows(np.array(potential["a"], dtype=LD).reshape(-1, width))
    if joins == "closed":
        rows = closed_rows(T, rows)
    ends = [(rows[0], T[0]), (rows[-1], T[-1])]
    below, above = (constant_cp_row(t, cp_of(a, t), h_of(a, t), s_of(a, t)) for a, t in ends)
    return T, np.vstack([below, rows, above])


def constant_heat_capacity(potential: dict[str, Any], units: dict[str, LD]) -> tuple[Array, Array]:
    """No boundary and one row (1, 9)."""
    T = quantity(potential["at"], LD(1), TEMPERATURE)
    H = quantity(potential["H"], units["energy"], ENERGY)
    cp = quantity(potential["cp"], units["energy"], ENTROPY)
    if "S" in potential:
        S = quantity(potential["S"], units["energy"], ENTROPY)
    else:
        S = (H - quantity(potential["G"], units["energy"], ENERGY)) / T
    return np.empty(0, dtype=LD), constant_cp_row(T, cp / R, H / R, S / R)[None]


def boundaries_and_rows(potential: dict[str, Any], joins: str, units: dict[str, LD]) -> tuple[Array, Array]:
    """Boundaries (m,) [K] and rows (m + 1, 9) of one species."""
    if potential["form"] in FITS:
        return fit(potential, joins)
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


def known_at(law: dict[str, Any], units: dict[str, LD]) -> dict[str, Any]:
    """A and T_ref of the Arrhenius expression that is k at one temperature."""
    at = quantity(law["at"], LD(1), TEMPERATURE)
    return {"A": LD(law["k"]) * np.exp(quantity(law.get("Ea", 0), units["energy"], ENERGY) / (R * at)), "T_ref": at}


def centre_row(term: dict[str, Any]) -> list[LD]:
    """w0, w3, T***, w1, T*, w2, T** of F_cent = w0 + w3 e^(-T/T***) + w1 e^(-T/T*) + w2 e^(-T**/T).

    The bracket of SRI, a e^(-b/T) + e^(-T/c), has that shape too.
    """
    if "F" in term:
        a, b, c = (LD(term["F"][key]) for key in "abc")
        return [LD(0), LD(1), c, LD(0), LD(1), a, b]
    F = term["F_cent"] if term["law"] == "Troe" else term.get("F_cent", 1)
    if not isinstance(F, dict):
        return [LD(F), LD(0), LD(1), LD(0), LD(1), LD(0), LD(0)]
    a = LD(F["a"])
    return [LD(0), 1 - a, LD(F["T***"]), a, LD(F["T*"]), LD("T**" in F), LD(F.get("T**", 0))]


def pressure_table(term: dict[str, Any], order: int, units: dict[str, LD]) -> PressureTable:
    """Rows by their pressures, which are one where they differ by round-off only (1 atm, 101.325 kPa)."""
    pairs = [(quantity(row["p"], units["pressure"], PRESSURE), arrhenius_row(row, order, units)) for row in term["rows"]]
    p: list[LD] = []
    rows: list[list[list[LD]]] = []
    for pressure, row in sorted(pairs, key=lambda pair: pair[0]):
        if not p or pressure > p[-1] * (1 + LD("1e-12")):
            p.append(pressure)
            rows.append([])
        rows[-1].append(row)
    return PressureTable(np.array(p, dtype=LD), [np.array(one, dtype=LD) for one in rows])


def chebyshev(term: dict[str, Any], order: int, units: dict[str, LD]) -> Chebyshev:
    """The series; its logarithm is that of k in the file's units."""
    T = np.array([quantity(t, LD(1), TEMPERATURE) for t in term["T"]], dtype=LD)
    p = np.array([quantity(one, units["pressure"], PRESSURE) for one in term["p"]], dtype=LD)
    unit = arrhenius_row({"A": 1}, order, units)[0]
    return Chebyshev(T, p, np.array(term["c"], dtype=LD), unit, term.get("clamp", False))


LUMPED = {"orders", "stoichiometric_number", "adsorption"}


def lumped(reaction: Reaction, term: dict[str, Any], names: list[str], units: dict[str, LD]) -> Lumped:
    """Forward orders, net stoichiometric numbers, σ and the adsorption group of a term."""
    orders = {**reaction.reactants, **term.get("orders", {})}
    net = [LD(reaction.products.get(name, 0) - reaction.reactants.get(name, 0)) for name in names]
    group = term.get("adsorption", [])
    powers = [LD(one.get("power", 1)) for one in group]
    K = [arrhenius_row(one["K"], p + 1, units) for one, p in zip(group, powers, strict=True)]
    for row in K:
        row[0] = row[0] * units["time"]
    share = 1 / LD(term.get("stoichiometric_number", 1))
    return Lumped(np.array([LD(orders.get(name, 0)) for name in names]), np.array(net), share,
                  np.array([names.index(one["species"]) for one in group], dtype=int), np.array(powers, dtype=LD),
                  np.array(K, dtype=LD).reshape(-1, 4), LD(term.get("power", 1)))


def order_of(reaction: Reaction, term: dict[str, Any]) -> Any:
    """The order of the forward law: that of the equation, or the sum of the orders stated."""
    return sum({**reaction.reactants, **term.get("orders", {})}.values())


@dataclass
class Terms:
    """The terms of all reactions in one row: which reaction each belongs to, and their numbers."""

    names: list[str]
    units: dict[str, LD]
    reaction: list[int] = field(default_factory=list)
    rate: list[list[LD]] = field(default_factory=list)  # k, or k_inf of a fall-off term
    partnered: list[int] = field(default_factory=list)  # terms that contain [M]
    efficiency: list[list[LD]] = field(default_factory=list)  # of each partnered term
    fall_off: list[int] = field(default_factory=list)  # places in ``partnered``
    activated: list[bool] = field(default_factory=list)  # of each fall-off term, as all that follows
    low: list[list[LD]] = field(default_factory=list)  # k_0
    centre: list[list[LD]] = field(default_factory=list)
    front: list[list[LD]] = field(default_factory=list)  # d and e of SRI
    width: list[str] = field(default_factory=list)
    pressure: list[tuple[int, PressureTable | Chebyshev]] = field(default_factory=list)  # term, law of T and p
    lumped: list[tuple[int, Lumped]] = field(default_factory=list)  # term, what is lumped in it

    def add(self, j: int, reaction: Reaction, term: dict[str, Any]) -> None:
        """Append one term of reaction j."""
        order, law = order_of(reaction, term), term["law"]
        self.reaction.append(j)
        if LUMPED & set(term):
            self.lumped.append((len(self.rate), lumped(reaction, term, self.names, self.units)))
        if law == "known at a temperature":
            term = term | known_at(term, self.units)
        if law in ("Arrhenius", "Hougen-Watson", "known at a temperature"):
            self._add(term.get("k", term), order + reaction.plus_m, partner=term if reaction.plus_m else None)
        elif reaction.plus_m or law not in [*FALL_OFF, "pressure table", "Chebyshev"]:
            raise NotImplementedError(f"{reaction.equation}: {law}")
        elif law in FALL_OFF:
            self._add_fall_off(term, order - (law == "activated"))
        else:
            read = pressure_table if law == "pressure table" else chebyshev
            self.pressure.append((len(self.rate), read(term, order, self.units)))
            self._add({"A": 0}, order)

    def _add(self, law: dict[str, Any], order: int, partner: dict[str, Any] | None = None) -> None:
        self.rate.append(arrhenius_row(law, order, self.units))
        if partner is not None:
            self.partnered.append(len(self.rate) - 1)
            self.efficiency.append(efficiencies(partner, self.names))

    def _add_fall_off(self, term: dict[str, Any], order: int) -> None:
        """``order`` is that of k_inf; k_0 is one higher."""
        stated = {"F_cent", "width", "F"} & set(term)
        if not stated <= FALL_OFF[term["law"]] or {"F_cent", "F"} <= stated:
            raise NotImplementedError(f"{term['law']} with {stated}")
        self._add(term["k_inf"], order, partner=term)
        self.fall_off.append(len(self.partnered) - 1)
        self.activated.append(term["law"] == "activated")
        self.low.append(arrhenius_row(term["k_0"], order + 1, self.units))
        self.centre.append(centre_row(term))
        F = term.get("F", {})
        self.front.append([LD(F.get("d", 1)), LD(F.get("e", 0))])
        self.width.append("SRI" if "F" in term else term.get("width", "Troe"))
