"""Stated equilibrium constants that do not close round a cycle."""

from collections.abc import Iterator

import numpy as np

from ...constants import GAS_CONSTANT as R
from ...entry import Entry
from ...mechanism.cycles import Cycle, violated_cycles
from ...mechanism.misfits import misfit_error, part
from ...mechanism.stated_equilibria import System
from ..finding import ERROR, NONE, NOTICE, Finding
from ..survey import Survey

NAME = "cycle of equilibria"
SOURCE = "R. Wegscheider, Monatsh. Chem. 22 (1901) 849, doi:10.1007/BF01517498"
SEVERITY = "error beyond the stated uncertainties, where a run would be refused; notice for each value adjusted within them"
EXPLANATION = ("Going through reactions and back to the start changes nothing, so the product of their K, each to the power "
               "it is gone through, must be 1, and their enthalpies must add up to nil. --repair writes the values of the "
               "smallest weighted change that closes all cycles.")


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each cycle of ln K, ΔH or ΔCp that does not close, one for each value adjusted where all do."""
    system = survey.mechanism.equilibria
    rows = [] if system is None or not system.stated else list(_rows(survey, system))
    yield from rows
    for note in survey.mechanism.notes if not rows else ():
        yield Finding(NAME, NOTICE, "equilibria", f"adjusted within the uncertainties: {note}")


def _rows(survey: Survey, system: System) -> Iterator[Finding]:
    for k in range(3):
        for cycle in violated_cycles(*part(system, k)):
            yield _row(survey, system, k, cycle)


def _row(survey: Survey, system: System, k: int, cycle: Cycle) -> Finding:
    told = misfit_error(Entry(survey.mechanism.document, ""), system, k, cycle)
    off = float(cycle.numbers @ system.at_one_temperature[0])
    decades = abs(off) / float(np.log(10.0)) if k == 0 else NONE
    text = f"{told.problem}; expected {told.expected}; {told.remedy}"
    return Finding(NAME, ERROR, told.entry, text, decades, system.T0, NONE, value=-off, unit="1",
                   gibbs_change=-off * R * system.T0, reaction=system.reactions[cycle.reactions[0]][0])
