"""Random mechanisms that break nothing: INVENTED species on physical heat capacities, rates below every limit.

Potentials come from rigid rotors and harmonic oscillators with random wavenumbers, fitted in two ranges that meet. Each
forward rate is lowered until it and its reverse are well below the collision rate of small hard spheres.
"""

import itertools
from typing import Any

import numpy as np

Document = dict[str, Any]
R, N_A, K_B, H_P, C = 8.31446261815324, 6.02214076e23, 1.380649e-23, 6.62607015e-34, 299792458.0
MASS = {"C": 12.011, "H": 1.008, "O": 15.999, "N": 14.007}
TEMPERATURES = np.linspace(300.0, 2500.0, 45)
SMALL = 2.5e-10
"""Hard spheres smaller than any that the audit takes [m]."""


class Molecule:
    """Atoms, wavenumbers [1/cm], ΔfH°(298.15 K) [J/mol], and cp, h, s from them."""

    def __init__(self, composition: dict[str, int], wavenumbers: np.ndarray, rotation: float, enthalpy: float) -> None:
        self.composition, self.H = composition, enthalpy
        self.mass = sum(MASS[e] * n for e, n in composition.items()) * 1e-3
        self.theta = 100 * H_P * C / K_B * np.asarray(wavenumbers)
        self.atoms = sum(composition.values())
        self.rigid = 2.5 if self.atoms == 1 else 3.5 if self.atoms == 2 else 4.0
        self.rotation = rotation if self.atoms > 1 else 0.0  # s/R of it at 298.15 K

    def cp(self, T: Any) -> Any:
        x = self.theta / np.asarray(T)[..., None]
        return self.rigid + np.sum(x**2 * np.exp(-x) / (1 - np.exp(-x)) ** 2, axis=-1)

    def entropy(self) -> float:
        """s/R at 298.15 K and 1 bar."""
        T, x = 298.15, self.theta / 298.15
        translation = 2.5 + np.log((2 * np.pi * self.mass / N_A * K_B * T / H_P**2) ** 1.5 * K_B * T / 1e5)
        return float(translation + self.rotation + np.sum(x / np.expm1(x) - np.log1p(-np.exp(-x))))

    def rows(self) -> list[list[float]]:
        """Two ranges of seven coefficients, 200 to 1000 to 3500 K, that meet."""
        low, high = (self._fit(a, b) for a, b in ((200.0, 1000.0), (1000.0, 3500.0)))
        b1 = self.H / R - 298.15 * _h(low, 298.15)
        b2 = self.entropy() - _s(low, 298.15)
        c1, c2 = b1 + 1000.0 * (_h(low, 1000.0) - _h(high, 1000.0)), b2 + _s(low, 1000.0) - _s(high, 1000.0)
        return [[*low, b1, b2], [*high, c1, c2]]

    def _fit(self, low: float, high: float) -> list[float]:
        T = np.linspace(low, high, 60)
        return [float(c) for c in np.polynomial.polynomial.polyfit(T, self.cp(T), 4)]

    def document(self) -> Document:
        return {"composition": self.composition, "source": "invented",
                "potential": {"form": "NASA 7-coefficient", "T": [200.0, 1000.0, 3500.0], "a": self.rows()}}


def _h(a: Any, T: Any) -> Any:
    return sum(c * T**k / (k + 1) for k, c in enumerate(a))


def _s(a: Any, T: Any) -> Any:
    return a[0] * np.log(T) + sum(c * T**k / k for k, c in enumerate(a) if k)


def _g(document: Document, T: np.ndarray) -> np.ndarray:
    """g°/RT of a species at temperatures."""
    low, high = document["potential"]["a"]
    return np.where(T < 1000.0, *(_h(a[:5], T) + a[5] / T - _s(a[:5], T) - a[6] for a in (low, high)))


def random_mechanism(seed: int) -> Document:
    """Parents, their radicals, H and H2; abstractions, recombinations in fall-off, isomerisations, a dissociation by M."""
    random = np.random.default_rng(seed)
    molecules = {"H": Molecule({"H": 1}, np.zeros(0), 0.0, 218e3), "H2": Molecule({"H": 2}, np.array([4300.0]), 1.5, 0.0)}
    for k in range(int(random.integers(2, 5))):
        molecules |= _family(random, f"P{k}", f"R{k}")
    species = {name: molecule.document() for name, molecule in molecules.items()}
    parents = [name for name in molecules if name.startswith("P")]
    reactions = [r for name in parents for r in _reactions(random, name, molecules, species)]
    reactions += [_abstraction(random, [a, f"R{b[1:]}"], [f"R{a[1:]}", b], molecules, species)
                  for a, b in itertools.pairwise(parents)]
    head = {"name": f"invented {seed}", "phase": "ideal gas", "standard_pressure": "1 bar"}
    return {"mechanism": head, "species": species, "reaction": reactions}


def _family(random: np.random.Generator, parent: str, radical: str) -> dict[str, Molecule]:
    """A molecule and what is left without one H: two stiff modes and a soft one fewer, a bond of 350 to 450 kJ/mol."""
    heavy = {e: int(n) for e, n in zip("CNO", random.integers(0, 4, 3), strict=True) if n} or {"C": 1}
    hydrogen = int(random.integers(2, 9))
    atoms = sum(heavy.values()) + hydrogen
    modes = np.sort(random.uniform(300.0, 1500.0, 3 * atoms - 6))
    modes[-hydrogen:] = random.uniform(2800.0, 3500.0, min(hydrogen, len(modes)))
    rotation, H = float(random.uniform(7.0, 12.0)), float(random.uniform(-3e5, 3e5))
    bond = float(random.uniform(350e3, 450e3))
    left = np.delete(modes, [0, len(modes) // 2, len(modes) - 1])
    if atoms == 3:
        left = modes[-1:]
    return {parent: Molecule({**heavy, "H": hydrogen}, modes, rotation, H),
            radical: Molecule({**heavy, "H": hydrogen - 1}, left, rotation, H + bond - 218e3)}


def _reactions(random: np.random.Generator, parent: str, molecules: dict[str, Molecule], species: Document) -> list[Document]:
    radical = f"R{parent[1:]}"
    found = [_abstraction(random, [parent, "H"], [radical, "H2"], molecules, species), _association(random, radical, parent)]
    if random.random() < 0.5:
        found.append({"equation": f"{parent} + M ⇌ {radical} + H + M",
                      "forward": {"law": "Arrhenius", "A": 1e6, "n": float(random.uniform(-1, 0)), "Ea": 460e3}})
    return found


def _association(random: np.random.Generator, radical: str, parent: str) -> Document:
    law = {"law": "Troe", "k_inf": {"A": float(10 ** random.uniform(6.5, 7.5)), "n": float(random.uniform(0.0, 0.2))},
           "k_0": {"A": float(10 ** random.uniform(8, 10)), "n": float(random.uniform(-3.0, -1.0))},
           "F_cent": float(random.uniform(0.2, 0.9))}
    return {"equation": f"{radical} + H ⇌ {parent}", "forward": law}


def _abstraction(random: np.random.Generator, left: list[str], right: list[str], molecules: dict[str, Molecule],
                 species: Document) -> Document:
    """The exothermic way of it, with both directions a tenth of the limit or less."""
    if sum(molecules[s].H for s in left) < sum(molecules[s].H for s in right):
        left, right = right, left
    n, Ea = float(random.uniform(0.0, 1.0)), float(random.uniform(1e4, 6e4))
    T = TEMPERATURES
    shape = T**n * np.exp(-Ea / (R * T))
    log_K = sum(_g(species[s], T) for s in left) - sum(_g(species[s], T) for s in right)
    A = 0.1 * min(np.min(_limit(left, molecules) / shape), np.min(_limit(right, molecules) / (shape * np.exp(-log_K))))
    A *= float(10 ** random.uniform(-3, 0))
    entry: Document = {"equation": f"{' + '.join(left)} ⇌ {' + '.join(right)}",
                       "forward": {"law": "Arrhenius", "A": A, "n": n, "Ea": Ea}}
    if random.random() < 0.5:
        entry["published_reverse"] = _fitted(A * shape * np.exp(-log_K))
    return entry


def _fitted(k: np.ndarray) -> Document:
    """A, n, Ea through ln k over the temperatures, which is good to some per cent."""
    T = TEMPERATURES
    (log_A, n, theta), *_ = np.linalg.lstsq(np.column_stack([np.ones_like(T), np.log(T), -1 / T]), np.log(k), rcond=None)
    return {"A": float(np.exp(log_A)), "n": float(n), "Ea": float(R * theta)}


def _limit(side: list[str], molecules: dict[str, Molecule]) -> np.ndarray:
    """Collision rate constant of small hard spheres [m3/(mol s)]."""
    m = [molecules[name].mass for name in side]
    mu = m[0] * m[1] / (m[0] + m[1])
    return 0.5 * N_A * np.pi * SMALL**2 * np.sqrt(8 * R * TEMPERATURES / (np.pi * mu))
