"""Cases a second of a sweep against the bare integrator, as a Markdown table on stdout.

    python benchmarks/sweep_rate.py [cases [repeats [workers]]]

Ignition of methane and of hydrogen in air, adiabatic at constant volume, 1000-2000 K (evenly in 1/T), 1-20 atm, equivalence
ratio 0.5-2, Sobol' points, up to 0.1 s. Bare: the problems of the same cases, made beforehand, through the integrator with a
monitor that keeps nothing; on two threads each takes half of them. All are timed side by side in turns, and the least of the
repeats counts. CPU: of the process, seconds a case.
"""

import sys
import tempfile
import time
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

from bothways import Grid, build_grid, sweep
from bothways.batch import prepare
from bothways.integrate import integrate
from bothways.monitored import Monitored, monitored

FUELS = {"methane": "CH4", "hydrogen-oxygen": "H2"}


def grid_of(mechanism: str, count: int, **grid: object) -> Grid:
    """The conditions of this benchmark."""
    return build_grid({
        "grid": grid, "case": {"mechanism": mechanism}, "until": {"time": 0.1},
        "start": {"fuel": {FUELS[mechanism]: 1}, "oxidiser": {"O2": 1, "N2": 3.76}},
        "samples": {"method": "Sobol", "count": count, "seed": 1, "start": {
            "temperature": {"from": 1000.0, "to": 2000.0, "spacing": "reciprocal"},
            "pressure": {"from": "1 atm", "to": "20 atm", "spacing": "logarithmic"},
            "equivalence_ratio": {"from": 0.5, "to": 2.0}}}})


class Nothing:
    """A monitor that keeps nothing."""

    def accepted(self, t: float, y: object) -> None:
        """Nothing."""


def bare(tasks: list[Monitored], workers: int) -> None:
    """The integrations alone."""
    def run(some: list[Monitored]) -> None:
        for task in some:
            integrate(task.problem, "Rosenbrock", Nothing())

    if workers == 1:
        return run(tasks)
    with ThreadPoolExecutor(workers) as pool:
        list(pool.map(run, [tasks[k::workers] for k in range(workers)]))


def timed(action: Callable[[], object]) -> tuple[float, float]:
    """Wall and processor seconds."""
    wall, cpu = time.perf_counter(), time.process_time()
    action()
    return time.perf_counter() - wall, time.process_time() - cpu


def measured(mechanism: str, count: int, repeats: int, workers: int) -> dict[str, tuple[float, float]]:
    """Least wall and processor seconds of each way."""
    grid = grid_of(mechanism, count)
    cases = list(grid.cases())
    prepare(cases[0])
    ways: dict[str, Callable[[], object]] = {}
    with tempfile.TemporaryDirectory() as folder:
        for number in dict.fromkeys((1, workers)):
            ways[f"bare, {number}"] = lambda n=number: bare([monitored(c, c.equations()) for c in cases], n)
            ways[f"sweep, {number}"] = lambda n=number: sweep(grid, Path(folder) / "r.h5", workers=n, replace=True)
        best = {way: (float("inf"), float("inf")) for way in ways}
        for _ in range(repeats):
            for way, action in ways.items():
                best[way] = tuple(map(min, best[way], timed(action)))  # type: ignore[assignment]
    return best


def main(count: int, repeats: int, workers: int) -> None:
    """Prints the table."""
    print(f"{count} cases, least of {repeats}\n")
    print("| set | way, workers | cases/s | CPU ms a case | to bare | to 1 worker |")
    print("|---|---|---|---|---|---|")
    for mechanism in FUELS:
        best = measured(mechanism, count, repeats, workers)
        for way, (wall, cpu) in best.items():
            kind, number = way.split(", ")
            to_bare, to_one = best[f"bare, {number}"][0] / wall, best[f"{kind}, 1"][0] / wall
            print(f"| {mechanism} | {way} | {count / wall:.1f} | {1e3 * cpu / count:.2f} | {to_bare:.3f} | {to_one:.2f} |",
                  flush=True)


if __name__ == "__main__":
    stated = [int(word) for word in sys.argv[1:]]
    main(*(stated + [1000, 3, 2][len(stated) :]))
