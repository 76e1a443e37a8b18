"""Rules for the step length compared by the steps they take to an achieved error, as a Markdown table on stdout.

    python -m benchmarks.controllers [hydrogen-oxygen methane c1-c4]

A plain NumPy step with the table of the compiled method, so that rules can be exchanged without compiling: how the next
length follows from the errors of this step and the last, the safety factor, the part of the time that a step may shift what
follows (SHIFT_PART of integrate/rosenbrock.py), how the shift is taken, the absolute tolerance. The figure of merit of a
rule is the geometric mean, over eleven tolerances from 3e-3 to 1e-5, of the number of factorisations, refused steps
included, brought to an achieved error of 1e-4 with the fourth root; error and instants are those of benchmarks/solvers.py.
"""

import math
import sys
import warnings
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace

import numpy as np
from scipy.linalg import lapack

from bothways.integrate.rosenbrock_tables import RODAS5P
from bothways.monitored import monitored

from .solvers import case_of, error, instants, reference

SETS = ("hydrogen-oxygen", "methane", "c1-c4")
TOLERANCES = 10.0 ** np.linspace(-2.5, -5.0, 11)
ORDER, SHRINK = 4.0, 0.2
_A, _C, _M, _E = RODAS5P.packed()


@dataclass(frozen=True)
class Rule:
    """How the next step follows from the last; the defaults are those of the compiled method."""

    control: str = "trend"
    safety: float = 0.85
    grow: float = 6.0
    shift_part: float = 0.02
    shift: str = "absolute"
    atol: float = 1e-12


class Problem:
    """One set's ignition, its f and J from Python, instants and states there."""

    def __init__(self, name: str) -> None:
        self.times = instants(name)
        self.exact = reference(name, self.times)
        case = case_of(name, 1e-6, self.times)
        task = monitored(case, case.equations()).problem
        self.f, self.J, self.start, self.total = task.f, task.J, task.start, float(np.sum(task.start[:-1]))


def step(problem: Problem, y: np.ndarray, f: np.ndarray, J: np.ndarray, h: float) -> tuple[np.ndarray, np.ndarray]:
    """New state and error estimate; NaN where a stage has no f."""
    lu, pivots, _ = lapack.dgetrf(np.eye(y.size) / (h * RODAS5P.gamma) - J)
    u = np.zeros((len(_E), y.size))
    for i in range(len(_E)):
        slope = f if i == 0 else problem.f(0.0, y + _A[i, :i] @ u[:i])
        u[i] = lapack.dgetrs(lu, pivots, slope + _C[i, :i] @ u[:i] / h)[0]
    return y + _M[0] @ u, _E[0] @ u


def norm(rule: Rule, rtol: float, total: float, t: float, h: float, f: np.ndarray, old: np.ndarray, new: np.ndarray,
         wrong: np.ndarray) -> float:
    """Error of a step in units of the tolerances, with what it shifts."""
    scale = rule.atol * total + rtol * np.maximum(np.abs(old), np.abs(new))
    scale[-1] = rtol * max(old[-1], new[-1])
    e, d, before = wrong / scale, (new - old) / scale, h * f / scale
    size = math.sqrt(np.mean(e**2))
    if rule.shift == "none" or not d @ d > before @ before:
        return size
    along = abs(e @ d) if rule.shift == "signed" else np.abs(e) @ np.abs(d)
    return max(size, h * along / (d @ d) / (rule.shift_part * rtol * (t + h)))


def factor(rule: Rule, e: float, last: tuple[float, float], h: float) -> float:
    """How much longer the next step may be: the elementary rule, that held back by the trend of the last error
    (Gustafsson 1994), proportional-integral control, or a digital filter (H211b with b = 4, Söderlind 2003)."""
    h_last, e_last = last
    growth = rule.safety * e ** (-1.0 / ORDER)
    if h_last > 0.0 and rule.control == "trend":
        growth = min(growth, rule.safety * h / h_last * (e_last / e**2) ** (1.0 / ORDER))
    if h_last > 0.0 and rule.control == "proportional-integral":
        growth = rule.safety * e ** (-0.7 / ORDER) * e_last ** (0.4 / ORDER)
    if h_last > 0.0 and rule.control == "filter":
        raw = rule.safety**2 * (e * e_last) ** (-1.0 / (4.0 * ORDER)) * (h / h_last) ** -0.25
        growth = 1.0 + math.atan(raw - 1.0)
    return min(max(growth, SHRINK), rule.grow)


def run(problem: Problem, rule: Rule, rtol: float) -> tuple[int, float]:
    """Factorisations and achieved error."""
    t, h, y, last, fresh, refused, count, states = 0.0, 1e-9, problem.start.copy(), (0.0, 0.0), False, False, 0, []
    stops = list(problem.times)
    while stops and count < 5000:
        landing, intended = t + 1.0001 * h >= stops[0], h
        h = stops[0] - t if landing else h
        if not fresh:
            f, J, fresh = problem.f(0.0, y), problem.J(0.0, y), True
        new, wrong = step(problem, y, f, J, h)
        count += 1
        e = norm(rule, rtol, problem.total, t, h, f, y, new, wrong)
        if not e <= 1.0:
            h *= min(max(rule.safety * e ** (-1.0 / ORDER), SHRINK), 0.9) if math.isfinite(e) else 0.1
            refused = True
            continue
        growth = factor(rule, max(e, 1e-10), last, h)
        growth, last, refused = min(growth, 1.0) if refused else growth, (h, max(e, 1e-2)), False
        t, h = (stops.pop(0), max(h * growth, intended)) if landing else (t + h, h * growth)
        y, fresh = np.append(np.maximum(new[:-1], 0.0), new[-1]), False
        if landing:
            states.append(y)
    return count, error(np.array(states), problem.exact)


RULES: dict[str, Callable[[Rule], Rule]] = {
    "as it is": lambda rule: rule,
    "no shift": lambda rule: replace(rule, shift="none"),
    "no shift, atol 1e-14": lambda rule: replace(rule, shift="none", atol=1e-14),
    "shift by its signed sum, part 0.01": lambda rule: replace(rule, shift="signed", shift_part=0.01),
    **{f"shift part {part:g}": lambda rule, part=part: replace(rule, shift_part=part)  # type: ignore[misc]
       for part in (0.01, 0.04, 0.08, 0.3)},
    "elementary rule": lambda rule: replace(rule, control="elementary"),
    "proportional-integral": lambda rule: replace(rule, control="proportional-integral"),
    "digital filter": lambda rule: replace(rule, control="filter"),
    "safety 0.8": lambda rule: replace(rule, safety=0.8),
    "safety 0.9": lambda rule: replace(rule, safety=0.9),
    "atol 1e-10": lambda rule: replace(rule, atol=1e-10),
}


def merit(problem: Problem, rule: Rule) -> float:
    """Factorisations to an achieved error of 1e-4."""
    found = [run(problem, rule, float(rtol)) for rtol in TOLERANCES]
    return math.exp(np.mean([math.log(count) + 0.25 * math.log(wrong / 1e-4) for count, wrong in found]))


def table(names: list[str]) -> Iterator[str]:
    """The Markdown table, line by line."""
    problems = [Problem(name) for name in names]
    yield "| rule | " + " | ".join(names) + " | mean |\n|---|" + "---|" * (len(names) + 1)
    for label, rule in RULES.items():
        figures = [merit(problem, rule(Rule())) for problem in problems]
        mean = math.exp(np.mean(np.log(figures)))
        yield f"| {label} | " + " | ".join(f"{figure:.0f}" for figure in figures) + f" | {mean:.0f} |"


def lines(names: list[str]) -> Iterator[str]:
    """The table and what it shows."""
    yield "Factorisations to an achieved error of 1e-4, geometric means over eleven tolerances.\n"
    yield from table(names)


if __name__ == "__main__":
    warnings.simplefilter("ignore")
    for line in lines(sys.argv[1:] or list(SETS)):
        print(line, flush=True)
