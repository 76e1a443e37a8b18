"""Charges, givens and checks for the tests of equilibria."""

from collections.abc import Iterator, Mapping
from functools import cache
from typing import Any

import numpy as np
from scipy.constants import R

from bothways import Mechanism, build_mechanism, read_mechanism
from bothways.contents import Contents
from bothways.equilibrium import Equilibrium, GibbsMinimiser

ATM = 101325.0
INERT = ("AR", "HE", "N2")
CLOSURES = ("temperature and volume", "temperature and pressure", "internal energy and volume", "enthalpy and pressure")


@cache
def contents(name: str) -> Contents:
    """Functions of state over a bundled mechanism's species."""
    return Contents(read_mechanism(name))


@cache
def minimiser(name: str, conserved: str) -> GibbsMinimiser:
    """The minimiser over a bundled mechanism's species."""
    return GibbsMinimiser(contents(name).mechanism, conserved)


def amounts(mechanism: Mechanism, by_name: Mapping[str, float]) -> np.ndarray:
    """Amounts (N) [mol] by name."""
    n = np.zeros(len(mechanism.species))
    for name, value in by_name.items():
        n[mechanism.index(name)] = value
    return n


def random_charge(random: np.random.Generator, mechanism: Mechanism) -> np.ndarray:
    """Amounts (N) [mol]: a single species, inerts alone, an element missing, whole numbers, extreme ratios, everything."""
    atoms = mechanism.element_matrix
    size, kind = atoms.shape[1], random.integers(8)
    n = np.zeros(size)
    everything = np.arange(size)
    if kind == 0:
        n[random.choice(everything)] = 1.0
    elif kind == 1:
        inert = [k for k, name in enumerate(mechanism.names) if name in INERT]
        n[random.choice(inert, random.integers(1, len(inert) + 1), replace=False)] = random.random()
    elif kind == 2:
        without = np.flatnonzero(atoms[random.integers(len(atoms))] == 0)
        n[_some(random, without, 1, 6)] = random.random()
    elif kind == 3:
        chosen = _some(random, everything, 2, 8)
        n[chosen] = 10 ** random.uniform(-12, 0, chosen.size)
    elif kind == 4:
        chosen = _some(random, everything, 2, 5)
        n[chosen] = random.integers(1, 6, chosen.size)
    elif kind == 5:
        n[:] = random.random(size)
    elif kind == 6:
        n[:] = 10 ** random.uniform(-30, 0, size)
    else:
        chosen = _some(random, everything, 2, 8)
        n[chosen] = 10 ** random.uniform(-300, 0, chosen.size)
    return n * 10 ** random.uniform(-6, 6)


def _some(random: np.random.Generator, among: np.ndarray, least: int, most: int) -> np.ndarray:
    return random.choice(among, min(len(among), int(random.integers(least, most))), replace=False)


def random_cases(name: str, count: int, seed: int) -> Iterator[tuple[str, np.ndarray, dict[str, float]]]:
    """Conserved rows asked for, charge and what is given: all closures in turn, 300-3500 K, 1e-3-300 atm.

    An energy is that of the charge itself at such a temperature.
    """
    random, of = np.random.default_rng(seed), contents(name)
    for k in range(count):
        n = random_charge(random, of.mechanism)
        while not np.any(n):  # of a small set, leaving out an element may leave nothing
            n = random_charge(random, of.mechanism)
        T, p = random.uniform(300.0, 3500.0), 10 ** random.uniform(-3.0, np.log10(300.0)) * ATM
        V = float(np.sum(n)) * R * T / p
        given = ({"temperature": T, "volume": V}, {"temperature": T, "pressure": p},
                 {"internal_energy": of.internal_energy(n, T), "volume": V},
                 {"enthalpy": of.enthalpy(n, T), "pressure": p})[k % 4]
        yield ("elements", "reactions")[random.integers(2)], n, given


def faults(of: Contents, charge: np.ndarray, given: Mapping[str, float], found: Equilibrium) -> list[str]:
    """What is wrong with an equilibrium, worked out anew from amounts, temperature and species potentials."""
    n, T, p, V = found.amount, found.temperature, found.pressure, found.volume
    wrong = []
    if not balanced(found.conserved, charge, n, 1e-12):
        wrong.append("balance")
    g = of.molar(T)[0]
    present = found.log_mole_fraction > -np.inf
    potential = (g + found.log_mole_fraction + np.log(p / of.mechanism.standard_pressure))[present]
    from_rows = np.nan_to_num(found.element_potentials) @ found.conserved[:, present]
    if not np.max(np.abs(potential - from_rows)) <= 1e-9:
        wrong.append("potentials")
    if not abs(p * V / (np.sum(n) * R * T) - 1) <= 1e-13 or not np.all(n[~present] == 0):
        wrong.append("gas law")
    if not np.all(np.abs(found.mole_fraction - n / np.sum(n)) <= 1e-14):
        wrong.append("mole fractions")
    energies = {"internal_energy": of.internal_energy(n, T), "enthalpy": of.enthalpy(n, T)}
    for key, value in given.items():
        if key in energies:
            if not abs(energies[key] - value) <= 1e-12 * T * found.heat_capacity:
                wrong.append(key)
        elif getattr(found, key) != value:
            wrong.append(key)
    return wrong


def balanced(rows: np.ndarray, before: np.ndarray, after: np.ndarray, tolerance: float) -> bool:
    """Whether every row's total is kept, relative to the sum of the sizes of its terms; exactly, where that is nil."""
    return bool(np.all(np.abs(rows @ after - rows @ before) <= tolerance * (np.abs(rows) @ before)))


def of_known_potentials(temperature: float, species: Mapping[str, tuple[Mapping[str, int], float]],
                        reactions: tuple[str, ...] = (), charge: Mapping[str, int] | None = None) -> Mechanism:
    """A mechanism at 1 bar whose species have a composition and a standard Gibbs energy [J/mol] at one temperature [K]."""
    def entry(name: str, composition: Mapping[str, int], gibbs: float) -> dict[str, Any]:
        potential = {"form": "constant heat capacity", "at": temperature, "H": 0.0, "G": gibbs, "cp": 40.0}
        return {"composition": dict(composition), "charge": (charge or {}).get(name, 0), "potential": potential}

    return build_mechanism({
        "mechanism": {"name": "known potentials", "phase": "ideal gas", "standard_pressure": "1 bar"},
        "species": {name: entry(name, *values) for name, values in species.items()},
        "reaction": [{"equation": equation, "forward": {"law": "Arrhenius", "A": 1.0}} for equation in reactions]})
