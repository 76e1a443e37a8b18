"""Making a reduced mechanism: graph, threshold, last pass, and the document that says how it came about."""

from collections.abc import Sequence
from concurrent.futures import Executor, ThreadPoolExecutor
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from ..case import Case
from ..compare import Comparison, compare_cases, digest
from ..compare.limits import Limit
from ..compare.measures import BY_NAME
from ..compare.runs import Run, warm
from ..errors import InputError
from ..mechanism import Mechanism, build
from ..version import program_version
from .graph import Graph
from .part import part_of
from .search import Found, by_sensitivity, by_threshold
from .states import net_rates
from .trials import Told, Trials

SOURCES = {
    "DRG": ("T. Lu, C.K. Law, Proc. Combust. Inst. 30 (2005) 1333, doi:10.1016/j.proci.2004.08.145",),
    "DRGEP": ("P. Pepiot-Desjardins, H. Pitsch, Combust. Flame 154 (2008) 67, doi:10.1016/j.combustflame.2007.10.020",
              "K.E. Niemeyer, C.J. Sung, Combust. Flame 158 (2011) 1439, doi:10.1016/j.combustflame.2010.12.010")}
LAST_PASS = ("X.L. Zheng, T.F. Lu, C.K. Law, Proc. Combust. Inst. 31 (2007) 367, doi:10.1016/j.proci.2006.07.182",
             "K.E. Niemeyer, C.J. Sung, M.P. Raju, Combust. Flame 157 (2010) 1760, doi:10.1016/j.combustflame.2009.12.022")


@dataclass(frozen=True, eq=False)
class Reduced:
    """A reduced mechanism, how it was found, and how far it is from its parent in the conditions it was made for.

    importance : (N) of the parent's species [-]. trials : sets of species that were run in the conditions.
    """

    mechanism: Mechanism
    found: Found
    importance: np.ndarray = field(repr=False)
    trials: int
    comparison: Comparison = field(repr=False)


def reduce_cases(parent: Mechanism, cases: Sequence[Case], limits: Sequence[Limit], keep: Sequence[str] = (),
                 method: str = "DRGEP", certain: float = 1.0, margin: float = 1.0, name: str = "",
                 executor: Executor | None = None, told: Told = lambda text: None) -> Reduced:
    """The smallest part of a mechanism that this search finds to keep the limits in the conditions of `cases`.

    keep : species that stay and whose rates of production are followed; by default the charged ones that fall to half
        somewhere. Whatever is charged stays as well, inert or not.
    certain : species of at least this importance are not tried in the last pass; 0 leaves it out.
    margin : share of each limit that the search may use [-], to leave room for conditions it does not see.
    Raises InputError: no conditions, no limits, unknown species; SolverError where the parent's own run fails.
    """
    if executor is None:
        with ThreadPoolExecutor() as own:
            return reduce_cases(parent, cases, limits, keep, method, certain, margin, name, own, told)
    _check(cases, limits, certain, margin)
    targets, graph = [parent.index(species) for species in keep], Graph(parent, method)
    warm(cases[0])
    trials = Trials(parent, cases, limits, executor, margin, told)
    targets = targets or _consumed(parent, trials.runs)
    charged = {parent.names[k] for case in cases for k in np.flatnonzero(case.charge.amount)}
    always = frozenset(charged | {parent.names[k] for k in targets})
    told("relations between species")
    importance = graph.importance(np.concatenate([net_rates(run) for run in trials.runs]), targets)
    found = by_sensitivity(trials, by_threshold(trials, importance, always), importance, always, certain)
    told("comparison with the parent")
    part = build(part_of(parent, found.kept, name=name))
    comparison = compare_cases(parent, [part], cases, limits=limits, executor=executor)
    notes = _provenance(parent, cases, limits, [parent.names[k] for k in targets], method, certain, margin, found)
    mechanism = build({**part.document, "reduction": notes | {"errors": _errors(comparison)}})
    return Reduced(mechanism, found, importance, trials.count, comparison)


def _check(cases: Sequence[Case], limits: Sequence[Limit], certain: float, margin: float) -> None:
    if not cases:
        raise InputError("no conditions", expected="one at least", remedy="state some in the grid")
    if not limits:
        raise InputError("no limit", entry="--limit", expected="how far the reduced mechanism may be off",
                         remedy="such as --limit ignition=10%")
    if not (0.0 <= certain <= 1.0 and 0.0 < margin <= 1.0):
        raise InputError(f"certain {certain:g}, margin {margin:g}", expected="numbers from 0 to 1, the margin above 0",
                         remedy="correct them")


def _consumed(parent: Mechanism, runs: Sequence[Run]) -> list[int]:
    names = dict.fromkeys(name for run in runs for name in run.half_conversions)
    if not names:
        raise InputError("no charged species falls to half in any condition", expected="species whose course counts",
                         remedy="name them with --keep, or let the runs go on for longer")
    return [parent.index(name) for name in names]


def _errors(comparison: Comparison) -> dict[str, float]:
    """The worst of each measure over the conditions, of those that have a meaning."""
    judged = comparison.judged[0]
    worst = {name: judged.worst(name)[0] for name in BY_NAME}
    return {name: float(f"{value:.4g}") for name, value in worst.items() if np.isfinite(value)}


def _provenance(parent: Mechanism, cases: Sequence[Case], limits: Sequence[Limit], keep: Sequence[str], method: str,
                certain: float, margin: float, found: Found) -> dict[str, Any]:
    last = LAST_PASS if certain > 0 else ()
    span = {key: _span([getattr(case.charge, key) for case in cases]) for key in ("temperature", "pressure")}
    return {"parent": parent.name, "parent_sha256": digest(parent), "parent_species": len(parent.species),
            "parent_reactions": len(parent.reactions), "method": method, "sources": [*SOURCES[method], *last],
            "threshold": found.threshold, "certain": certain, "margin": margin, "keep": list(keep),
            "limits": [str(limit) for limit in limits], "removed_in_last_pass": list(found.removed),
            "conditions": len(cases), **span, "program": f"bothways {program_version()}"}


def _span(values: Sequence[float]) -> list[float]:
    return [float(f"{v:.6g}") for v in (min(values), max(values))]
