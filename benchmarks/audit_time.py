"""Time of a whole audit of the bundled mechanisms, as a Markdown table on stdout.

    python benchmarks/audit_time.py [repeats]

Least and median of the repeats, each on a mechanism read anew, so that nothing is kept from the one before; the first
column is that reading. Nothing needs compiling.
"""

import sys
import time

import numpy as np

from bothways import audit, bundled_mechanisms, read_mechanism


def timed(name: str) -> tuple[float, float, int]:
    """Seconds of reading and of the audit, and the number of findings."""
    start = time.perf_counter()
    mechanism = read_mechanism(name)
    read = time.perf_counter()
    found = audit(mechanism)
    return read - start, time.perf_counter() - read, len(found)


def row(name: str, repeats: int) -> str:
    """One line of the table."""
    m = read_mechanism(name)
    runs = [timed(name) for _ in range(repeats)]
    read, spent = (np.array([run[k] for run in runs]) for k in (0, 1))
    return (f"| {name} ({len(m.species)}, {len(m.reactions)}) | {read.min():.3f} | {spent.min():.3f} | {np.median(spent):.3f} | "
            f"{runs[0][2]} |")


def main(repeats: int) -> None:
    """Prints the table."""
    print("| set (species, reactions) | reading / s | audit, least / s | audit, median / s | findings |")
    print("|---|---|---|---|---|")
    for name in bundled_mechanisms():
        print(row(name, repeats), flush=True)


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 5)
