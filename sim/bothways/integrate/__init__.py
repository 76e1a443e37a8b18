"""Implicit solvers behind one small interface: f, J and a step monitor, no chemistry.

`integrate(problem, method, monitor)` is the door; METHODS names what it can do, DEFAULT_METHOD what it does unasked.
"""

from . import compiled_methods, scipy_methods
from .interface import ByReaction, CompiledSystem, Monitor, Outcome, Problem, Status
from .resolvent import Resolvent

OWN_METHODS = tuple(compiled_methods.STEPPERS)
METHODS = (*OWN_METHODS, *scipy_methods.METHODS)
DEFAULT_METHOD = "Rosenbrock"


def integrate(problem: Problem, method: str, monitor: Monitor) -> Outcome:
    """Integrates a problem with a named method, telling the monitor of every accepted step."""
    if method not in OWN_METHODS:
        return scipy_methods.integrate(problem, method, monitor)
    return compiled_methods.integrate(problem, method, monitor)


def warm_up(problem: Problem, method: str = DEFAULT_METHOD) -> None:
    """Compiles one of the own methods by one step too short to matter, told to nobody."""
    stepper = compiled_methods.STEPPERS[method](problem)
    stepper.begin()
    stepper.advance(1e-30)


__all__ = ["DEFAULT_METHOD", "METHODS", "OWN_METHODS", "ByReaction", "CompiledSystem", "Monitor", "Outcome", "Problem",
           "Resolvent", "Status", "integrate", "warm_up"]
