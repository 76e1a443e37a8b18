"""Molecules for ``reference.py``: potentials from partition functions, and the rate laws that are made from molecules.

Written from the formulas alone; nothing of the program is imported. Translation and rotation become a constant heat
capacity, hard spheres and Eyring's expression rows of Arrhenius; what is left is added here. Bare numbers are SI (units
other than those: NotImplementedError), masses are those of building blocks.
"""

from functools import lru_cache
from typing import Any

import numpy as np

from reference import Reference
from reference_file import ENERGY, ENTROPY, LD, PRESSURE, Array, R, quantity, side

K_B, H, N_A, C = LD("1.380649e-23"), LD("6.62607015e-34"), LD("6.02214076e23"), LD(29979245800)
C2 = H * C / K_B  # K cm
LENGTH = {"m": LD(1), "Å": LD("1e-10"), "nm": LD("1e-9")}
CONCENTRATION = {"mol/L": LD(1000), "mol/m3": LD(1)}
PI = LD("3.14159265358979323846264338327950288")
MOLECULAR = ("statistical mechanics", "structureless particle")
Modes = tuple[Array, list[Array]]  # oscillators (θ, degeneracy), ladders of (θ, weight)


def rotor_levels(rotor: dict[str, Any]) -> Array:
    """Eigenvalues of -B d²/dφ² + (V/2)(1 - cos nφ) in the basis e^{imφ}, as one dense matrix."""
    B, n = float(rotor["B"] * C2), rotor["fold"]
    E = _eigenvalues(float(quantity(rotor["barrier"], LD(1), ENERGY) / R), B, n)
    return np.column_stack([E, np.full(len(E), 1 / rotor.get("symmetry", n))]).astype(LD)


@lru_cache(None)  # a transition state asks for its levels at every evaluation
def _eigenvalues(V: float, B: float, n: int) -> Array:
    m = np.arange(-260, 261)
    matrix = np.diag(B * m.astype(float) ** 2 + V / 2)
    for k in range(len(m) - n):
        matrix[k, k + n] = matrix[k + n, k] = -V / 4
    E = np.linalg.eigvalsh(matrix)
    return E[E < 0.9 * B * 260.0**2] - E[0]


def modes_of(potential: dict[str, Any]) -> Modes:
    """What stands besides translation and rotation."""
    pairs = [nu if isinstance(nu, list) else [nu, 1] for nu in potential.get("wavenumbers", [])]
    oscillators = np.array([[C2 * LD(nu), LD(g)] for nu, g in pairs], dtype=LD).reshape(-1, 2)
    electronic = [[C2 * LD(nu), LD(g)] for g, nu in potential.get("electronic", [[1, 0]])]
    return oscillators, [np.array(electronic, dtype=LD), *(rotor_levels(r) for r in potential.get("rotors", []))]


def functions(modes: Modes, T: Any) -> tuple[Any, Any, Any]:
    """cp/R, h/RT, s/R of the modes."""
    oscillators, ladders = modes
    cp = h = s = T * 0
    for theta, g in oscillators:
        x, e = theta / T, np.exp(-theta / T)
        cp, h, s = cp + g * x**2 * e / (1 - e) ** 2, h + g * x * e / (1 - e), s + g * (x * e / (1 - e) - np.log(1 - e))
    for ladder in ladders:
        x, w = ladder[:, 0] / T, ladder[:, 1] * np.exp(-ladder[:, 0] / T)
        q, first, second = w.sum(), (w * x).sum(), (w * x * x).sum()
        cp, h, s = cp + second / q - (first / q) ** 2, h + first / q, s + first / q + np.log(q)
    return cp, h, s


def rigid(potential: dict[str, Any], mass: LD, p: LD) -> tuple[LD, LD]:
    """cp/R and s/R at 1 K of translation and rotation (mass [kg/mol])."""
    s = LD(1.5) * np.log(2 * PI * mass / N_A * K_B / H**2) + np.log(K_B / p) + LD(2.5)
    shape = potential.get("shape", "atom")
    if shape == "atom":
        return LD(2.5), s
    B = potential["B"] if isinstance(potential["B"], list) else [potential["B"]]
    if shape == "linear":
        return LD(3.5), s + 1 - np.log(potential["symmetry"] * C2 * LD(B[0]))
    three = {1: B * 3, 2: [B[0], B[1], B[1]], 3: B}[len(B)]
    rotation = np.sqrt(PI / np.prod([C2 * LD(b) for b in three])) / potential["symmetry"]
    return LD(4), s + LD(1.5) + np.log(rotation * potential.get("optical_isomers", 1))


def energy(potential: dict[str, Any], cp: LD) -> LD:
    """h at 0 K [J/mol]."""
    if potential.get("form") == "structureless particle":
        return quantity(potential["energy"], LD(1), ENERGY)
    T = LD("298.15")
    return quantity(potential["H298"], LD(1), ENERGY) - R * T * (cp + functions(modes_of(potential), T)[1])


class MolecularReference(Reference):
    """``Reference`` that knows molecules."""

    def __init__(self, document: dict[str, Any], precision: type = np.float64) -> None:
        head = document["mechanism"]
        self._standard = quantity(head.get("standard_pressure", "1 bar"), LD(1), PRESSURE | {"Pa": LD(1)})
        self._document, self._complexes = document, []
        species, self._zero, found = {}, {}, []
        for name, one in document["species"].items():
            potential = one["potential"]
            molecular = potential["form"] in MOLECULAR
            if molecular and head.get("units"):
                raise NotImplementedError("molecules in units of the file's own")
            found.append(modes_of(potential) if molecular else (np.empty((0, 2)), []))
            species[name] = {**one, "potential": self._plain(name, one)} if molecular else one
        super().__init__(document | {"species": species, "reaction": self._reactions(document)}, precision)
        self._modes = [(self._kept(o), [self._kept(ladder) for ladder in ladders]) for o, ladders in found]

    def _mass(self, one: dict[str, Any]) -> LD:
        elements = self._document["elements"]
        return sum((quantity(elements[symbol], LD(1), {"g/mol": LD("1e-3")}) * m for symbol, m in one["composition"].items()),
                   LD(0))

    def _plain(self, name: str, one: dict[str, Any]) -> dict[str, Any]:
        """Translation and rotation of a species as a constant heat capacity."""
        p = quantity(one["standard_pressure"], LD(1), PRESSURE) if "standard_pressure" in one else self._standard
        cp, s = rigid(one["potential"], self._mass(one), p)
        self._zero[name] = energy(one["potential"], cp)
        return {"form": "constant heat capacity", "at": LD(1), "H": self._zero[name] + R * cp, "S": R * s, "cp": R * cp}

    def _reactions(self, document: dict[str, Any]) -> list[dict[str, Any]]:
        """The entries with the laws of molecules as rows of Arrhenius; transition states are kept by the place of their
        term."""
        entries, place = [], 0
        for entry in document.get("reaction", []):
            stated = entry["forward"] if isinstance(entry["forward"], list) else [entry["forward"]]
            sides = [side(text) for text in entry["equation"].split(" ⇌ ")] if any(t["law"] in _LAWS for t in stated) else []
            terms = []
            for term in stated:
                make = _LAWS.get(term["law"])
                terms.append(make(self, term, sides, place) if make else term)
                place += 1
            entries.append({**entry, "forward": terms})
        return entries

    def _collision(self, term: dict[str, Any], sides: list[dict[str, int]], place: int) -> dict[str, Any]:
        pair = [self._document["species"][name] for name, m in sides[0].items() for _ in range(m)]
        a, b = (self._mass(one) / N_A for one in pair)
        d = quantity(term["diameter"], LD(1), LENGTH) if "diameter" in term else \
            sum(quantity(one["collision_diameter"], LD(1), LENGTH) for one in pair) / 2
        half = LD("0.5") if len(sides[0]) == 1 else LD(1)
        A = half * LD(term.get("P", 1)) * N_A * PI * d**2 * np.sqrt(8 * K_B * (a + b) / (PI * a * b))
        return {"law": "Arrhenius", "A": A, "n": LD("0.5"), "Ea": quantity(term["E0"], LD(1), ENERGY)}

    def _eyring(self, term: dict[str, Any], sides: list[dict[str, int]], place: int) -> dict[str, Any]:
        order, n = sum(sides[0].values()), LD(1)
        A = LD(term.get("kappa", 1)) * K_B / H * np.exp(quantity(term["dS"], LD(1), ENTROPY) / R)
        state = term.get("standard_state", "1 mol/m3")
        if state.split()[1] in PRESSURE:
            A, n = A * (quantity(state, LD(1), PRESSURE) / R) ** (1 - order), LD(order)
        else:
            A = A * quantity(state, LD(1), CONCENTRATION) ** (1 - order)
        return {"law": "Arrhenius", "A": A, "n": n, "Ea": quantity(term["dH"], LD(1), ENERGY)}

    def _transition(self, term: dict[str, Any], sides: list[dict[str, int]], place: int) -> dict[str, Any]:
        names = [name for name, m in sides[0].items() for _ in range(m)]
        mass = sum((self._mass(self._document["species"][name]) for name in names), LD(0))
        cp, s = rigid(term["complex"], mass, self._standard)
        if "E0" in term:
            top = quantity(term["E0"], LD(1), ENERGY) + sum(self._zero[name] for name in names)
        else:
            top = energy(term["complex"], cp)
        products = [name for name, m in sides[1].items() for _ in range(m)]
        self._complexes.append((place, (names, products), cp, s, top, term))
        return {"law": "Arrhenius", "A": 0}

    # -- what modes and complexes add

    def _with_modes(self, which: int, own: Array, T: Any) -> Array:
        return own + np.array([functions(modes, self._typed(T))[which] for modes in self._modes])

    def cp_R(self, T: Any) -> Array:
        return self._with_modes(0, super().cp_R(T), T)

    def h_RT(self, T: Any) -> Array:
        return self._with_modes(1, super().h_RT(T), T)

    def s_R(self, T: Any) -> Array:
        return self._with_modes(2, super().s_R(T), T)

    def _term_constants(self, at: Any, M: Array, p: Any) -> Array:
        k = super()._term_constants(at, M, p)
        for place, sides, cp, s, top, term in self._complexes:
            k[place] = self._theory(at.T, sides, cp, s, top, term)
        return k

    def _theory(self, T: Any, sides: tuple[list[str], list[str]], cp: LD, s: LD, top: LD, term: dict[str, Any]) -> Any:
        """κ (k_B T/h) E‡/ΠE with E = (p°/RT) e^(-g/RT)."""
        o, ladders = modes_of(term["complex"])
        _, h_modes, s_modes = functions((self._kept(o), [self._kept(ladder) for ladder in ladders]), T)
        kept = self.precision
        g = kept(top / R) / T - kept(s) - kept(cp) * np.log(T) + kept(cp) + h_modes - s_modes
        species = np.log(self._p / (self.R * T)) - self.g_RT(T)
        log_k = np.log(kept(K_B / H) * T) + np.log(kept(self._standard) / (self.R * T)) - g
        return np.exp(log_k - sum(species[self.names.index(name)] for name in sides[0])) * self._kappa(T, sides, top, term)

    def _kappa(self, T: Any, sides: tuple[list[str], list[str]], top: LD, term: dict[str, Any]) -> Any:
        quantum = C2 * LD(term["complex"]["imaginary"])
        if term.get("tunnelling", "none") == "none":
            return 1
        if term["tunnelling"] == "Wigner":
            return 1 + (self.precision(quantum) / T) ** 2 / 24
        barriers = (float((top - sum(self._zero[name] for name in names)) / R) for names in sides)
        return eckart(T, *barriers, float(quantum), self.precision)


_LAWS = {"hard-sphere collision": MolecularReference._collision, "Eyring": MolecularReference._eyring,
         "transition state": MolecularReference._transition}


def eckart(T: Any, V1: float, V2: float, quantum: float, precision: type) -> Any:
    """∫ P(E) e^(-(E - V1)/T) dE/T, E from reactants of barrier V1 [K]: C. Eckart, Phys. Rev. 35 (1930) 1303."""
    u, w = np.polynomial.legendre.leggauss(40)
    start, last = max(0.0, V1 - V2), np.sqrt(3 * max(V1, V2) + 9 * quantum)
    edges = np.linspace(0.0, last, 61)
    half = np.diff(edges)[:, None] / 2
    root, weight = ((edges[:-1, None] + half * (1 + u)).ravel()), (half * w).ravel()
    E = start + root**2
    a1, a2 = 2 * np.pi * V1 / quantum, 2 * np.pi * V2 / quantum
    f = 1 / np.sqrt(a1) + 1 / np.sqrt(a2)
    a, b = 2 * np.sqrt(a1 * E / V1) / f, 2 * np.sqrt(a1 * (E / V1 - 1) + a2) / f
    d = 2 * np.sqrt(abs(a1 * a2 - np.pi**2 / 4))
    q = np.cosh(d) if a1 * a2 > np.pi**2 / 4 else np.cos(d)
    P = 2 * np.sinh(a) * np.sinh(b) / (np.cosh(a + b) + q)
    E, rate = E.astype(precision), (P * weight * 2 * root).astype(precision)
    return (rate * np.exp(-(E - precision(V1)) / T)).sum() / T + np.exp(-(precision(start + last**2) - precision(V1)) / T)
