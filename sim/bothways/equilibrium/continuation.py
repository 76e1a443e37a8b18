"""The composition at given potentials: Newton's method from a good start, led there by continuation where it fails.

After S.B. Pope, Combust. Flame 139 (2004) 222, doi:10.1016/j.combustflame.2004.07.008: a composition that is
positive for every species is the equilibrium of Gibbs functions made for it. From there the Gibbs functions, and
here the charge too, are moved to the given ones. Every problem on the way is well posed, its solution unique and a
smooth function of the place, and the Jacobian is regular there: with small enough steps Newton's method follows.
The first step tries the whole way, which nearly always succeeds.
"""

import numpy as np

from ..components import Components
from ..errors import SolverError
from .newton import Point, Task, solve
from .vertex import leave_mixing_out

_ITERATIONS = 25
_LEAST_SHARE = 0.1
_MOST_STEPS = 20000
_WHOLE_WAY = 20.0


def compose(task: Task, components: Components, near: Point | None = None) -> tuple[Point, int]:
    """The point that solves `task`, and the number of Newton iterations.

    components : any, over the possible species; unchanged.
    near : a point to try first, such as the solution of a similar task.
    """
    spent = 0
    if near is not None:
        point = near.copy()
        done, spent = solve(point, task, _ITERATIONS)
        if done:
            return point, spent
    point, count = follow(task, *positive_start(task, components.copy()))
    return point, spent + count


def positive_start(task: Task, components: Components) -> tuple[Point, Task]:
    """A composition positive for every species, and the task that it solves exactly; exchanges `components`.

    Least Σ n g first, then a little of everything, so that the start is not far from the end.
    """
    at_vertex = leave_mixing_out(components, task.g, task.charge)
    amount = np.full(task.charge.size, _LEAST_SHARE * np.sum(task.charge) / task.charge.size)
    amount[components.basis] += at_vertex
    log_n, log_total = np.log(amount), float(np.log(np.sum(amount)))
    start = Task((log_total if task.swells else 0.0) - log_n, amount, task.swells)
    return Point(components, log_n[components.basis], log_total), start


def follow(end: Task, point: Point, start: Task) -> tuple[Point, int]:
    """The point that solves `end`, by continuation from `point`, which solves `start`; and the iterations spent.

    `left` is the share of the start in charge and Gibbs functions: 1 at the start, 0 at the end. It falls by
    exp(-pace) in a step; the first step tries the whole way.
    """
    left, pace, spent = 1.0, np.inf, 0
    for _ in range(_MOST_STEPS):
        trial, share = point.copy(), left * float(np.exp(-pace))
        done, count = solve(trial, _between(start, end, share), _ITERATIONS)
        spent += count
        if not done:
            pace = min(0.5 * pace, 1.0)
            continue
        point, left = trial, share
        if left == 0.0:
            return point, spent
        pace = 2.0 * pace if pace < _WHOLE_WAY else np.inf
    raise SolverError("the equilibrium composition was not reached", remedy="please report this case")


def _between(start: Task, end: Task, left: float) -> Task:
    if left == 0.0:
        return end
    return Task(left * start.g + (1.0 - left) * end.g, left * start.charge + (1.0 - left) * end.charge, end.swells)
