"""Time of a step against the number of species, over the bundled sets and a generated family, as a Markdown table on stdout.

    python -m benchmarks.family [largest number of species]

The family is invented: a core of eight small species and chains of two building blocks Qa and Qb, S(x, y), which exchange
core species with their neighbours (six reactions a species, one in six with a collision partner); potentials and rate
constants are drawn at random, seeded. Isothermal, constant volume, Rosenbrock method at rtol 1e-6, median of five runs.
"""

import sys
import warnings
from collections.abc import Iterator

import numpy as np

from bothways import Case, build_case, build_mechanism

from .parts import whole
from .solvers import CASES, case_of

SIZES = (50, 100, 200, 500, 1000, 2000)
CORE = [(0, 1), (0, 2), (1, 0), (1, 1), (1, 2), (2, 0), (2, 1), (2, 2)]
WIDTH, PER_SPECIES = 4, 6


def name_of(place: tuple[int, int]) -> str:
    """Name of the species with so many blocks of each kind."""
    return f"S{place[0]}_{place[1]}"


def reactions_of(places: list[tuple[int, int]], rng: np.random.Generator) -> set[tuple]:
    """Exchanges S + a ⇌ S' + b of core species, and losses S (+ M) ⇌ S' + b, conserving the blocks."""
    there, found = set(places), set()
    for x, y in places:
        for _ in range(PER_SPECIES):
            (ax, ay), (bx, by) = (CORE[k] for k in rng.integers(len(CORE), size=2))
            loss = rng.uniform() < 1 / 6
            other = (x - bx, y - by) if loss else (x + ax - bx, y + ay - by)
            if other in there and other != (x, y) and (loss or (ax, ay) != (bx, by)):
                found.add(((x, y), None if loss else (ax, ay), other, (bx, by)))
    return found


def document(size: int, seed: int = 1) -> dict:
    """The mechanism file of this size, as a plain document."""
    rng = np.random.default_rng(seed)
    chains = [(3 + k // WIDTH, k % WIDTH) for k in range(size - len(CORE))]
    places = CORE + chains
    species = {name_of(p): {"composition": {e: n for e, n in zip(("Qa", "Qb"), p, strict=True) if n}, "potential": {
        "form": "constant heat capacity", "at": 298.15, "H": float(rng.normal(0, 2e4)), "S": float(rng.uniform(150, 350)),
        "cp": float(rng.uniform(30, 90))}} for p in places}
    seen, entries = set(), []
    for s, a, other, b in sorted(reactions_of(chains, rng), key=str):
        sides = frozenset([tuple(sorted(map(str, (s, a)))), tuple(sorted(map(str, (other, b))))])
        if sides in seen or sorted(map(str, (s, a))) == sorted(map(str, (other, b))):
            continue
        seen.add(sides)
        left = name_of(s) + (" + M" if a is None else f" + {name_of(a)}")
        right = f"{name_of(other)} + {name_of(b)}" + (" + M" if a is None else "")
        entries.append({"equation": f"{left} ⇌ {right}", "forward": {
            "law": "Arrhenius", "A": float(10.0 ** rng.uniform(0, 6)), "Ea": float(rng.uniform(0, 6e4))}})
    return {"mechanism": {"name": f"invented family, {size} species", "phase": "ideal gas", "standard_pressure": "1 bar"},
            "elements": {"Qa": "12 g/mol", "Qb": "1 g/mol"}, "species": species, "reaction": entries}


def family_case(size: int) -> Case:
    """A run of the member with this number of species."""
    mechanism = build_mechanism(document(size))
    rng = np.random.default_rng(2)
    charge = {name: float(rng.uniform(0.1, 1.0)) for name in mechanism.names[:: max(1, size // 40)]}
    return build_case({"case": {"mechanism": "invented"}, "vessel": {"heat": "isothermal"}, "until": {"time": 1e-2},
                       "start": {"temperature": 800.0, "pressure": "1 bar", "mole_ratio": charge}}, mechanism=mechanism)


def exponent(points: list[tuple[int, float]]) -> float:
    """Slope of ln time against ln species."""
    n, t = np.log(np.array(points)).T
    return float(np.polyfit(n, t, 1)[0])


def report(largest: int = max(SIZES)) -> Iterator[str]:
    """The table, line by line."""
    yield "| mechanism | species | reactions | steps | µs a step |\n|---|---|---|---|---|"
    sets, family = [], []
    for name in CASES:
        case = case_of(name, 1e-6)
        found = whole(case)
        sets.append((len(case.mechanism.species), found["step"]))
        yield f"| {name} | {sets[-1][0]} | {len(case.mechanism.reactions)} | {found['steps']} | {found['step']:.3g} |"
    for size in (n for n in SIZES if n <= largest):
        case = family_case(size)
        found = whole(case, 5)
        family.append((size, found["step"]))
        yield f"| invented family | {size} | {len(case.mechanism.reactions)} | {found['steps']} | {found['step']:.3g} |"
    yield f"\nExponent of the time of a step: {exponent(sets):.2f} over the bundled sets, {exponent(family):.2f} over the family."


def main(arguments: list[str]) -> None:
    """Measures and prints."""
    warnings.simplefilter("ignore")
    for line in report(*map(int, arguments)):
        print(line, flush=True)


if __name__ == "__main__":
    main(sys.argv[1:])
