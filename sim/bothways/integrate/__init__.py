"""Implicit solvers behind one small interface: f, J and a step monitor, no chemistry.

`integrate(problem, method, monitor)` is the door; METHODS names what it can do, DEFAULT_METHOD what it does unasked.
"""

from . import scipy_methods
from .interface import Monitor, Outcome, Problem, Status

METHODS = tuple(scipy_methods.METHODS)
DEFAULT_METHOD = "Radau"


def integrate(problem: Problem, method: str, monitor: Monitor) -> Outcome:
    """Integrates a problem with a named method, telling the monitor of every accepted step."""
    return scipy_methods.integrate(problem, method, monitor)


__all__ = ["DEFAULT_METHOD", "METHODS", "Monitor", "Outcome", "Problem", "Status", "integrate"]
