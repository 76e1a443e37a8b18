"""Sizes and errors of reduced mechanisms, as Markdown tables on stdout.

    python benchmarks/reduction.py [methane] [n-heptane]

Each is made on one grid and judged by `compare` on seeded quasi-random conditions of the same range that the search did
not see. Errors are the worst of all conditions. Methane: a few minutes for each row; n-heptane: a quarter of an hour.
"""

import sys
import time
from typing import Any

from bothways import read_mechanism
from bothways.compare import compare
from bothways.grid import Grid, build_grid
from bothways.mechanism import Mechanism
from bothways.reduce import Reduced, reduce

AIR = {"O2": 1, "N2": 3.76}
SETS: dict[str, dict[str, Any]] = {
    "methane": {"parent": "methane", "fuel": "CH4", "time": "5 s", "T": (1000.0, 2000.0, 4), "p": ("1 atm", "5 atm", "20 atm"),
                "ratio": (0.5, 1.0, 2.0), "unseen": 64},
    "n-heptane": {"parent": "n-alkanes", "fuel": "NC7H16", "time": "0.2 s", "T": (1100.0, 1800.0, 3), "p": ("1 atm", "20 atm"),
                  "ratio": (0.5, 2.0), "unseen": 16, "in full only": True}}
IGNITION = ("ignition=10%", "ignition=30%")
END = "end-temperature=20 K"
MARGIN = 0.9


def grid(what: dict[str, Any], parent: Mechanism, unseen: bool) -> Grid:
    """The conditions of the search, or those it does not see."""
    low, high, count = what["T"]
    document: dict[str, Any] = {
        "vessel": {"heat": "adiabatic", "holds": "volume"}, "until": {"time": what["time"]},
        "start": {"fuel": {what["fuel"]: 1}, "oxidiser": AIR}}
    spread = {"temperature": {"from": low, "to": high, "spacing": "reciprocal"}}
    if unseen:
        pressure = {"from": what["p"][0], "to": what["p"][-1], "spacing": "logarithmic"}
        ratio = {"from": what["ratio"][0], "to": what["ratio"][-1], "spacing": "logarithmic"}
        samples = {"method": "Sobol", "count": what["unseen"], "seed": 7,
                   "start": {**spread, "pressure": pressure, "equivalence_ratio": ratio}}
        return build_grid({**document, "samples": samples}, mechanism=parent)
    vary = {"pressure": list(what["p"]), "equivalence_ratio": list(what["ratio"]),
            "temperature": {**spread["temperature"], "count": count}}
    return build_grid({**document, "vary": {"start": vary}}, mechanism=parent)


def row(limits: tuple[str, ...], method: str, last: bool, made: Reduced, seconds: float, unseen: Any) -> str:
    """One line of the table."""
    judged = unseen.judged[0]
    small, seen = made.mechanism, made.comparison.judged[0]
    cells = [", ".join(limits).replace("=", " "), f"{method}{', last pass' if last else ''}",
             f"{len(small.species)} ({len(small.reactions)})", f"{100 * seen.worst('ignition')[0]:.1f} %",
             f"{100 * judged.worst('ignition')[0]:.1f} %", f"{judged.worst('end-temperature')[0]:.0f} K",
             f"{judged.worst('equilibrium-temperature')[0]:.0f} K", f"{judged.cost:.2f}", str(made.trials), f"{seconds:.0f}"]
    return "| " + " | ".join(cells) + " |"


def judge(name: str) -> None:
    """The table of one parent."""
    what = SETS[name]
    parent = read_mechanism(what["parent"])
    seen, unseen = grid(what, parent, False), grid(what, parent, True)
    print(f"\n{name}: {len(parent.species)} species, {len(parent.reactions)} reactions; made on {len(seen)} conditions, judged "
          f"on {len(unseen)} others; margin {MARGIN}\n")
    print("| limits | method | species (reactions) | ignition, seen | ignition, unseen | T at the end | T of own equilibrium | "
          "time of a run, of the parent's | trials | search / s |\n|" + "---|" * 10, flush=True)
    alone = [] if what.get("in full only") else [(limit,) for limit in IGNITION]
    for limits in [*alone, *((limit, END) for limit in IGNITION)]:
        for method, last in (("DRG", False), ("DRGEP", False), ("DRGEP", True)):
            if not last and END in limits:
                continue
            start = time.perf_counter()
            made = reduce(parent, over=seen, limits=limits, method=method, certain=1.0 if last else 0.0, margin=MARGIN)
            seconds = time.perf_counter() - start
            print(row(limits, method, last, made, seconds, compare(parent, made.mechanism, over=unseen)), flush=True)
            print(f"    {' '.join(made.mechanism.names)}", file=sys.stderr)


if __name__ == "__main__":
    for name in sys.argv[1:] or SETS:
        judge(name)
