"""Random INVENTED networks of reactions: balanced, with random potentials and rate constants over many decades."""

import itertools
from collections import defaultdict
from typing import Any

import numpy as np

from bothways import build_case, build_mechanism

BLOCKS = {"Q": "10 g/mol", "X": "16 g/mol", "Z": "25 g/mol", "J": "40 g/mol"}
CLOSURES = [(holds, heat) for holds in ("volume", "pressure") for heat in ("isothermal", "adiabatic")]


def _species(rng: np.random.Generator, T: float, spread: float) -> dict[str, Any]:
    """3 to 40 species of one to four building blocks, a few atoms each; g/RT at T within ± spread beside the blocks' own."""
    count, symbols = int(rng.integers(3, 41)), list(BLOCKS)[: int(rng.integers(1, 5))]
    own = {s: rng.uniform(-30, 30) for s in symbols}
    species = {}
    for k in range(count):
        atoms = rng.integers(0, 4, len(symbols))
        if not atoms.any():
            atoms[rng.integers(len(symbols))] = 1
        g = sum(own[s] * a for s, a in zip(symbols, atoms, strict=True)) + spread * rng.uniform(-1, 1)
        S, cp = rng.uniform(180, 240), rng.uniform(25, 120)
        potential = {"form": "constant heat capacity", "at": T, "H": 8.31446261815324 * T * g + T * S, "S": S, "cp": cp}
        species[f"S{k}"] = {"composition": {s: int(a) for s, a in zip(symbols, atoms, strict=True) if a}, "potential": potential}
    return species


def _equations(species: dict[str, Any], rng: np.random.Generator, most: int) -> list[str]:
    """Equations between single species and pairs of the same atoms, in random order, none twice."""
    sides = defaultdict(list)
    names = list(species)
    for side in [(a,) for a in names] + list(itertools.combinations_with_replacement(names, 2)):
        atoms: dict[str, int] = defaultdict(int)
        for name in side:
            for symbol, n in species[name]["composition"].items():
                atoms[symbol] += n
        sides[tuple(sorted(atoms.items()))].append(side)
    pairs = [pair for same in sides.values() for pair in itertools.combinations(same, 2) if not set(pair[0]) & set(pair[1])]
    chosen = rng.permutation(len(pairs))[:most]
    return [" ⇌ ".join(" + ".join(side) for side in (pairs[k] if rng.random() < 0.5 else pairs[k][::-1])) for k in chosen]


def network(seed: int, decades: float, spread: float, closure: tuple[str, str] | None = None) -> Any:
    """The case of a seed: mechanism, closure (in turn if none is given), charge of some of its species; to its equilibrium.

    decades : that the rate constants span. spread : of g/RT.
    """
    rng = np.random.default_rng(seed)
    T = float(rng.uniform(400.0, 2000.0))
    species = _species(rng, T, spread)
    equations = _equations(species, rng, int(rng.integers(1, 4 * len(species))))
    forward = [{"law": "Arrhenius", "A": float(10.0 ** (decades * rng.uniform(-0.5, 0.5)))}
               for _ in equations]
    document = {"mechanism": {"name": f"network {seed}", "phase": "ideal gas", "standard_pressure": "1 bar"},
                "elements": BLOCKS, "species": species,
                "reaction": [{"equation": e, "forward": f} for e, f in zip(equations, forward, strict=True)]}
    holds, heat = closure or CLOSURES[seed % 4]
    present = rng.random(len(species)) < rng.choice([0.2, 0.6, 1.0])
    present[rng.integers(len(species))] = True
    amount = {name: float(10.0 ** rng.uniform(-3, 0)) for name, here in zip(species, present, strict=True) if here}
    return build_case({"vessel": {"heat": heat, "holds": holds}, "start": {"temperature": T, "pressure": "1 bar",
                       "mole_ratio": amount}, "until": {"equilibrium": True}}, mechanism=build_mechanism(document))
