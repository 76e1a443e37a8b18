"""The keys of [solver]: method, tolerances, and how many steps and how long a run may take."""

import math

from .entry import Entry
from .integrate import DEFAULT_METHOD, METHODS

LARGEST_COUNT = 1e15
"""Beyond any number of steps that can be waited for, and still a whole number in double precision."""


def read_solver(top: Entry) -> tuple[float, float, str, int, float]:
    """rtol, atol, method, most steps (0: the solver's own limit), and longest time of computing [s]."""
    solver = top.table("solver", {})
    rtol, atol = solver.number("rtol", 1e-6, "positive"), solver.number("atol", 1e-12, "positive")
    for key, value, low, high in (("rtol", rtol, 1e-13, 1e-2), ("atol", atol, 1e-40, 1e-3)):
        if not low <= value <= high:
            raise solver.error(f"{value:g} is out of range", expected=f"a number from {low:g} to {high:g}", key=key)
    method = solver.text("method", DEFAULT_METHOD, choices=METHODS)
    most_steps, longest = _most_steps(solver), solver.quantity("longest", "time", None, "positive")
    solver.done()
    return rtol, atol, method, most_steps, longest or math.inf


def _most_steps(solver: Entry) -> int:
    count = solver.number("most_steps", None, "positive")
    if count is None:
        return 0
    if count != int(count) or count > LARGEST_COUNT:
        raise solver.error(f"{count:g} is no possible number of steps", expected=f"a whole number up to {LARGEST_COUNT:g}",
                           remedy="correct it", key="most_steps")
    return int(count)
