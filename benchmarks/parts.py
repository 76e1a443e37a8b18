"""Time of the parts of a step: f, J, sparse LU, solve and judge, as a Markdown table on stdout.

    python -m benchmarks.parts

Each part is called from a compiled loop in a state along the ignition of benchmarks/solvers.py, as the integrators call it;
least time of many repeats. Beside them the bare time of as many scalar exponentials as the set has reactions, LAPACK's dense
LU and solve of a matrix of the same size, and the shares of the parts in a whole run of the Rosenbrock method.
"""

import time
import warnings
from collections.abc import Callable, Iterator

import numba
import numpy as np
from scipy.linalg import lapack

from bothways import Case
from bothways.compiled import call
from bothways.integrate import integrate, warm_up
from bothways.integrate.compiled_methods import RosenbrockStepper
from bothways.integrate.sparse_lu import factor, solve
from bothways.integrate.stepping import STEP, set_matrix
from bothways.monitored import monitored

from .solvers import CASES, Kept, case_of

REPEATS, STAGES = 200, 8


@numba.njit(nogil=True)
def exponentials(x, times):  # type: ignore[no-untyped-def]
    """Scalar exponentials, one after another."""
    total = 0.0
    for _ in range(times):
        for value in x:
            total += np.exp(value)
    return total


@numba.njit(nogil=True)
def right_hand_sides(f, z, out, context, times):  # type: ignore[no-untyped-def]
    """f with another temperature at each call."""
    T = z[-1]
    for k in range(times):
        z[-1] = T * (1.0 + (k % 2) * 1e-9)
        call(f, z, out, context)
    z[-1] = T


@numba.njit(nogil=True)
def with_jacobians(f, J, z, out, values, context, times):  # type: ignore[no-untyped-def]
    """f and J in one state, another temperature at each call."""
    T = z[-1]
    for k in range(times):
        z[-1] = T * (1.0 + (k % 2) * 1e-9)
        call(f, z, out, context)
        call(J, z, values, context)
    z[-1] = T


@numba.njit(nogil=True)
def factorisations(values, order, start, column, diagonal, target, lu, row, times):  # type: ignore[no-untyped-def]
    """Numeric factorisations."""
    for _ in range(times):
        factor(values, order, start, column, diagonal, target, lu, row)


@numba.njit(nogil=True)
def solutions(lu, order, start, column, diagonal, right, x, times):  # type: ignore[no-untyped-def]
    """Triangular solves."""
    for _ in range(times):
        solve(lu, order, start, column, diagonal, right, x)


@numba.njit(nogil=True)
def judgements(judge, exchange, shown, verdict, context, times):  # type: ignore[no-untyped-def]
    """The judge, shown the same step again and again."""
    for _ in range(times):
        exchange[:] = shown
        call(judge, exchange, verdict, context)


def microseconds(work: Callable[..., object], *arguments: object, times: int = 1) -> float:
    """Least time of one of `times` repetitions inside a call [µs]."""
    work(*arguments)
    best = np.inf
    for _ in range(REPEATS):
        began = time.perf_counter()
        work(*arguments)
        best = min(best, time.perf_counter() - began)
    return 1e6 * best / times


def dense(n: int) -> float:
    """LAPACK's LU and one solve of an (n, n) matrix [µs]."""
    matrix = np.asfortranarray(np.eye(n) * n + np.random.default_rng(1).normal(size=(n, n)))
    right = np.ones(n)

    def once() -> None:
        factors, pivots, _ = lapack.dgetrf(matrix)
        lapack.dgetrs(factors, pivots, right)

    return microseconds(once)


def parts(name: str) -> dict[str, float]:
    """Microseconds of each part for one set, and of a whole run a step."""
    case = case_of(name, 1e-6)
    stepper = RosenbrockStepper(monitored(case, case.equations()).problem)
    stepper.begin()
    for _ in range(2):
        stepper.advance(case.end)
    s, p, z = stepper.system, stepper.plan, stepper.z.copy()
    out, values = np.empty(z.size), np.empty(len(stepper.rows))
    M = len(case.mechanism.reactions)
    n = max(1, 20000 // M)
    found = {"exponentials": microseconds(exponentials, np.linspace(-30.0, 5.0, M), n, times=n)}
    found["f"] = microseconds(right_hand_sides, s.f, z, out, s.context, n, times=n)
    found["f and J"] = microseconds(with_jacobians, s.f, s.J, z, out, values, s.context, n, times=n)
    matrix = np.empty(values.size)
    set_matrix(values, stepper.own, s.mass, 5.0 / stepper.memory[STEP], matrix)
    lu, row, x = np.zeros(p.fill), np.zeros(z.size), np.empty(z.size)
    found["LU"] = microseconds(factorisations, matrix, p.order, p.start, p.column, p.diagonal, p.target, lu, row, n, times=n)
    found["solve"] = microseconds(solutions, lu, p.order, p.start, p.column, p.diagonal, out, x, 4 * n, times=4 * n)
    shown = np.concatenate([z, z * (1.0 + 1e-9), np.zeros(z.size)])
    found["judge"] = microseconds(judgements, s.judge, shown.copy(), shown, np.zeros(4), s.context, n, times=n)
    found["dense LU and solve"] = dense(z.size)
    return found | whole(case)


def whole(case: Case, repeats: int = 9) -> dict[str, float]:
    """Median time of a run a step [µs], and its steps."""
    equations, seconds, steps = case.equations(), [], 1
    warm_up(monitored(case, equations).problem, "Rosenbrock")
    for _ in range(repeats):
        task = monitored(case, equations)
        began = time.perf_counter()
        steps = integrate(task.problem, "Rosenbrock", Kept(())).counts["steps"]
        seconds.append(time.perf_counter() - began)
    return {"step": 1e6 * float(np.median(seconds)) / steps, "steps": steps}


def report() -> Iterator[str]:
    """The table, line by line."""
    yield "| set | M exp | f | f and J | LU | solve | judge | dense LU and solve | whole step | steps |"
    yield "|---|---|---|---|---|---|---|---|---|---|"
    remarks = []
    for name in CASES:
        t = parts(name)
        yield (f"| {name} | " + " | ".join(f"{t[key]:.3g}" for key in (
            "exponentials", "f", "f and J", "LU", "solve", "judge", "dense LU and solve", "step", "steps")) + " |")
        shares = {"f and J": t["f and J"], "further f": (STAGES - 2) * t["f"], "LU": t["LU"], "solves": STAGES * t["solve"],
                  "judge": t["judge"]}
        rest = t["step"] - sum(shares.values())
        remarks.append(f"{name}: f {t['f'] / t['exponentials']:.2f} × the exponentials; f and J {t['f and J'] / t['f']:.2f} f; "
                       f"dense LU and solve {t['dense LU and solve'] / (t['LU'] + t['solve']):.1f} × the sparse ones; of a step: "
                       + ", ".join(f"{key} {100 * value / t['step']:.0f} %" for key, value in shares.items())
                       + f", rest {100 * rest / t['step']:.0f} %")
    yield "\nMicroseconds; " + f"a step has one f with J, {STAGES - 2} further f, one LU, {STAGES} solves.\n"
    yield from (f"- {remark}" for remark in remarks)


def main() -> None:
    """Measures and prints."""
    warnings.simplefilter("ignore")
    for line in report():
        print(line, flush=True)


if __name__ == "__main__":
    main()
