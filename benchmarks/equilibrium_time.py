"""Time per equilibrium over the bundled mechanisms, as a Markdown table on stdout.

    python benchmarks/equilibrium_time.py [cases per set and closure]

Random charges of fuel, oxidiser and inert, 300-3500 K, 1e-3-300 atm, seeded; for held energies that of the charge itself.
Each case starts from nothing; the last column is a list of 200 temperatures, each starting from the one before.
"""

import sys
import time
from collections.abc import Iterator

import numpy as np

from bothways import read_mechanism
from bothways.constants import ATMOSPHERE, GAS_CONSTANT
from bothways.contents import Contents
from bothways.equilibrium import Equilibrium, GibbsMinimiser

SETS = ("hydrogen-oxygen", "methane", "c1-c4", "n-alkanes")
CLOSURES = ("T, V", "T, p", "U, V", "H, p")


def cases(contents: Contents, count: int, closure: str) -> Iterator[tuple[np.ndarray, dict[str, float]]]:
    """Charges (N) [mol] and what is given."""
    random = np.random.default_rng(1)
    size = len(contents.mechanism.species)
    for _ in range(count):
        n = np.zeros(size)
        n[random.choice(size, min(size, 6), replace=False)] = random.random(min(size, 6))
        T, p = random.uniform(300.0, 3500.0), 10 ** random.uniform(-3.0, np.log10(300.0)) * ATMOSPHERE
        V = float(np.sum(n)) * GAS_CONSTANT * T / p
        yield n, {"T, V": {"temperature": T, "volume": V}, "T, p": {"temperature": T, "pressure": p},
                  "U, V": {"internal_energy": contents.internal_energy(n, T), "volume": V},
                  "H, p": {"enthalpy": contents.enthalpy(n, T), "pressure": p}}[closure]


def timed(minimiser: GibbsMinimiser, n: np.ndarray, given: dict[str, float],
          near: Equilibrium | None = None) -> tuple[Equilibrium, float]:
    """An equilibrium and the seconds it took."""
    start = time.perf_counter()
    found = minimiser.solve(n, **given, near=near)
    return found, time.perf_counter() - start


def along_a_list(minimiser: GibbsMinimiser, contents: Contents) -> float:
    """Median seconds per equilibrium along 200 temperatures from 300 to 3500 K."""
    n, _ = next(cases(contents, 1, "T, p"))
    found, seconds = None, []
    for T in np.linspace(300.0, 3500.0, 200):
        found, spent = timed(minimiser, n, {"temperature": float(T), "pressure": ATMOSPHERE}, found)
        seconds.append(spent)
    return float(np.median(seconds))


def row(name: str, count: int) -> str:
    """One line of the table: median ms, then the slowest."""
    contents = Contents(read_mechanism(name))
    minimiser = GibbsMinimiser(contents.mechanism)
    minimiser.solve(np.ones(len(contents.mechanism.species)), temperature=1000.0, pressure=ATMOSPHERE)
    cells = []
    for closure in CLOSURES:
        results = [timed(minimiser, n, given) for n, given in cases(contents, count, closure)]
        ms = 1e3 * np.array([spent for _, spent in results])
        iterations = np.mean([found.iterations for found, _ in results])
        cells.append(f"{np.median(ms):.2f} ({np.max(ms):.1f}; {iterations:.1f})")
    listed = f"{1e3 * along_a_list(minimiser, contents):.2f}"
    return " | ".join(["", f"{name} ({len(contents.mechanism.species)})", *cells, listed, ""]).strip()


def main(count: int) -> None:
    """Prints the table."""
    print(f"Median ms per equilibrium (slowest; mean Newton iterations), {count} cases each, one thread\n")
    print("| set (species) | " + " | ".join(CLOSURES) + " | T, p along a list |")
    print("|---" * (len(CLOSURES) + 2) + "|")
    for name in SETS:
        print(row(name, count), flush=True)


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 200)
