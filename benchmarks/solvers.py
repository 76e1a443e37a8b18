"""Work and precision of the integrators, side by side in one run, as Markdown tables on stdout.

    python benchmarks/solvers.py [hydrogen-oxygen methane c1-c4 n-alkanes] [--only Rosenbrock,BDF]

Every solver is given the same compiled f and J, and every one the best of three absolute tolerances (parts of rtol, as
mole fractions). Achieved error: the largest relative error of T and of species above mole fraction 1e-3, at five times
around ignition and at the end, against our own method at rtol 1e-11. Times are medians of five of those runs that no other
run of the solver beats in both; those of the others include their callbacks to Python, whose number is given separately with
the time of an empty one, so that nobody wins by it alone. For our own methods the counts are steps; f, J, LU, solves.
"""

import sys
import time
import timeit
import warnings
from collections.abc import Callable, Iterable, Iterator
from itertools import pairwise

import numpy as np
from scipy.integrate import solve_ivp
from scipy.sparse import csc_array

from bothways import Case, build_case
from bothways.integrate import integrate, warm_up
from bothways.monitored import monitored

CASES = {  # fuel, K, pressure, end [s]
    "hydrogen-oxygen": ("H2", 1000.0, "1 atm", 2e-3), "methane": ("CH4", 1400.0, "1 atm", 20e-3),
    "c1-c4": ("C2H4", 1200.0, "1 atm", 20e-3), "n-alkanes": ("NC7H16", 1200.0, "10 atm", 2e-3)}
TOLERANCES = [10.0**-k for k in range(3, 11)]
ATOL_PARTS = (1e-9, 1e-6, 1e-4)
TARGETS = (1e-4, 1e-6)
TOO_LONG, TIGHT_ENOUGH = 5.0, 1e-8
"""A solver that takes longer [s], or has achieved this error, is not asked for tighter tolerances."""
Answer = tuple[np.ndarray, str]
Job = Callable[[], Answer]
"""What is timed; made anew for each run."""
Prepare = Callable[[str, float, float, tuple[float, ...]], Callable[[], Job]]
"""A set, rtol, atol and the instants, to the maker of jobs."""


def case_of(name: str, rtol: float, also_at: tuple[float, ...] = (), atol: float = 1e-12) -> Case:
    """Stoichiometric with air, adiabatic, constant volume."""
    fuel, temperature, pressure, end = CASES[name]
    return build_case({
        "case": {"mechanism": name}, "vessel": {"heat": "adiabatic"}, "until": {"time": end},
        "start": {"temperature": temperature, "pressure": pressure, "fuel": {fuel: 1}, "oxidiser": {"O2": 1, "N2": 3.76},
                  "equivalence_ratio": 1.0},
        "solver": {"rtol": rtol, "atol": atol}, "output": {"also_at": list(also_at)}})


class Kept:
    """A monitor that keeps the states at given times."""

    def __init__(self, times: tuple[float, ...]) -> None:
        self.times, self.states, self.course = times, [], []

    def accepted(self, t: float, y: np.ndarray) -> None:
        """Told of each step."""
        self.course.append((t, y[-1]))
        if t in self.times:
            self.states.append(y)


COUNTS = ("steps", "f_evaluations", "J_evaluations", "factorisations", "solves")


def ours(method: str) -> Prepare:
    """One of our own methods with its judge."""
    def prepare(name: str, rtol: float, atol: float, times: tuple[float, ...]) -> Callable[[], Job]:
        case = case_of(name, rtol, times, atol)
        equations = case.equations()

        def job() -> Job:
            problem, kept = monitored(case, equations).problem, Kept(times)

            def solve() -> Answer:
                counts = integrate(problem, method, kept).counts
                steps, *rest = (str(counts[name]) for name in COUNTS)
                return np.array(kept.states), f"{steps} ({' '.join(rest)})"

            return solve

        warm_up(monitored(case, equations).problem, method)
        return job

    return prepare


def scipys(method: str) -> Prepare:
    """One of scipy's methods, with our f and J."""
    def prepare(name: str, rtol: float, atol: float, times: tuple[float, ...]) -> Callable[[], Job]:
        case = case_of(name, rtol, times, atol)
        problem = monitored(case, case.equations()).problem

        def solve() -> Answer:
            done = solve_ivp(problem.f, (0.0, times[-1]), problem.start, method=method, jac=problem.J, t_eval=times,
                             rtol=rtol, atol=problem.atol)
            return done.y.T, str(done.nfev + done.njev)

        return lambda: solve

    return prepare


def cvode(linear: str) -> Prepare:
    """CVODE of SUNDIALS through scikit-sundae, with our f and J."""
    from sksundae.cvode import CVODE

    def prepare(name: str, rtol: float, atol: float, times: tuple[float, ...]) -> Callable[[], Job]:
        case = case_of(name, rtol, times, atol)
        equations = case.equations()
        problem = monitored(case, equations).problem

        def rates(t: float, y: np.ndarray, out: np.ndarray) -> None:
            out[:] = equations.f(t, y)

        def jacobian(t: float, y: np.ndarray, yp: np.ndarray, out: np.ndarray) -> None:
            out[:] = equations.J(t, y) if linear != "sparse" else equations.J_sparse(t, y).data

        rows, starts = equations.pattern
        pattern = csc_array((np.ones(len(rows)), rows, starts)) if linear == "sparse" else None

        def solve() -> Answer:
            solver = CVODE(rates, jacfn=jacobian, rtol=rtol, atol=problem.atol, max_num_steps=1_000_000, linsolver=linear,
                           sparsity=pattern)
            done = solver.solve(np.array([0.0, *times]), problem.start)
            return done.y[1:], str(int(done.nfev) + int(done.njev))

        return lambda: solve

    return prepare


SOLVERS = {"Rosenbrock": ours("Rosenbrock"), "BDF": ours("BDF"), "scipy BDF": scipys("BDF"), "scipy Radau": scipys("Radau"),
           "LSODA": scipys("LSODA"), "CVODE dense": cvode("dense"), "CVODE LAPACK": cvode("lapackdense"),
           "CVODE sparse": cvode("sparse")}
"""The first is what the ratios are to."""


def instants(name: str) -> tuple[float, ...]:
    """Five times around ignition, and the end."""
    case, kept = case_of(name, 1e-8), Kept(())
    integrate(monitored(case, case.equations()).problem, "Rosenbrock", kept)
    t, T = np.array(kept.course).T
    k = int(np.argmax(np.diff(T) / np.diff(t)))
    return (*(float(t[k] * factor) for factor in (0.5, 0.9, 0.98, 1.02, 1.1)), case.end)


def reference(name: str, times: tuple[float, ...]) -> np.ndarray:
    """The states there, by our own method at rtol 1e-11."""
    return ours("Rosenbrock")(name, 1e-11, 1e-17, times)()()[0]


def error(states: np.ndarray, exact: np.ndarray) -> float:
    """Largest relative error of T and of major species."""
    if states.shape != exact.shape:
        return np.inf
    x = exact[:, :-1] / exact[:, :-1].sum(axis=1, keepdims=True)
    major = np.column_stack([x > 1e-3, np.ones(len(x), dtype=bool)])
    return float(np.max(np.abs(states / np.where(major, exact, 1.0) - 1.0)[major]))


Row = tuple[float, float, str]
"""Achieved error, seconds, counts."""


def timed(job: Job) -> tuple[float, Answer]:
    """Seconds of a run, and what it gave."""
    began = time.perf_counter()
    answer = job()
    return time.perf_counter() - began, answer


def single_runs(name: str, solver: str, times: tuple[float, ...],
                exact: np.ndarray) -> Iterator[tuple[Row, Callable[[], Job]]]:
    """One run at each pair of tolerances, with what makes more of them."""
    for part in ATOL_PARTS:
        for rtol in TOLERANCES:
            try:
                job = SOLVERS[solver](name, rtol, part * rtol, times)
                seconds, (states, calls) = timed(job())
            except Exception as problem:
                print(f"<!-- {name}, {solver}, rtol {rtol:g}, atol {part * rtol:g}: {problem} -->")
                continue
            wrong = error(states, exact)
            yield (wrong, seconds, calls), job
            if seconds > TOO_LONG or wrong < TIGHT_ENOUGH:
                break


def measured(name: str, solver: str, times: tuple[float, ...], exact: np.ndarray, repeats: int = 5) -> list[Row]:
    """Error, median seconds and counts of the runs that no other of the solver beats in both, by a tenth of its time."""
    runs = list(single_runs(name, solver, times, exact))
    kept = [(row, job) for row, job in runs if not any(e < row[0] and 1.1 * s < row[1] for (e, s, _), _ in runs)]
    return [(wrong, float(np.median([timed(job())[0] for _ in range(repeats)])), calls) for (wrong, _, calls), job in kept]


def seconds_at(rows: list[Row], target: float) -> float:
    """Time to reach an achieved error: the best of the runs that do, interpolated in logarithms between neighbours."""
    found = [s for e, s, _ in rows if e <= target]
    ordered = sorted(rows)
    for (e0, s0, _), (e1, s1, _) in pairwise(ordered):
        if e0 <= target < e1 < np.inf and e0 > 0:
            found.append(float(np.exp(np.interp(np.log(target), np.log([e0, e1]), np.log([s0, s1])))))
    return min(found, default=np.inf)


def empty_callback() -> float:
    """Time of a call of f from Python that works nothing out [µs]: T without meaning is answered with NaN at once."""
    equations = case_of("hydrogen-oxygen", 1e-6).equations()
    y = np.zeros(equations.size)
    equations.f(0.0, y)
    return 1e6 * min(timeit.repeat(lambda: equations.f(0.0, y), number=1000, repeat=20)) / 1000


def table(name: str, found: dict[str, list[Row]]) -> Iterator[str]:
    """The Markdown table of one set, ratios to the first solver."""
    yield f"\n## {name}\n\n| solver | " + " | ".join(f"ms to {t:g} | ratio" for t in TARGETS)
    yield " | runs: achieved error, ms, callbacks or counts |\n|---|" + "---|---|" * len(TARGETS) + "---|\n"
    base: list[float] = []
    for solver, rows in found.items():
        needed = [seconds_at(rows, t) for t in TARGETS]
        base = base or needed
        shown = "; ".join(f"{e:.0e}, {1e3 * s:.3g}, {c}" for e, s, c in rows)
        cells = " | ".join(f"{1e3 * s:.3g} | {s / b:.2g}" for s, b in zip(needed, base, strict=True))
        yield f"| {solver} | {cells} | {shown} |\n"


def course(name: str, solvers: Iterable[str]) -> dict[str, list[Row]]:
    """Work and precision of these solvers on one set."""
    times = instants(name)
    exact = reference(name, times)
    return {solver: measured(name, solver, times, exact) for solver in solvers}


def main(arguments: list[str]) -> None:
    """Measures and prints."""
    warnings.simplefilter("ignore")
    solvers = arguments[arguments.index("--only") + 1].split(",") if "--only" in arguments else list(SOLVERS)
    print(f"An empty callback takes {empty_callback():.2f} µs.")
    for name in [a for a in arguments if a in CASES] or list(CASES):
        print("".join(table(name, course(name, solvers))), flush=True)


if __name__ == "__main__":
    main(sys.argv[1:])
