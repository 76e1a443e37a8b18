"""Sweeps: the cases of a grid through any executor, nothing finished ever lost, one file of results."""

from .driver import done_already, finished_before, output_of, sweep
from .results import LAYOUT, Sweep, read_sweep
from .summary import summary_of

__all__ = ["LAYOUT", "Sweep", "done_already", "finished_before", "output_of", "read_sweep", "summary_of", "sweep"]
