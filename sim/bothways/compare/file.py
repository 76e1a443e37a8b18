"""A comparison as a self-describing HDF5 file: every measure of every reduced mechanism in every condition."""

from typing import Any

import numpy as np

from .. import hdf5
from ..hdf5 import Variable
from ..mechanism.toml_writer import to_toml
from ..outfile import StrPath, write_whole
from .comparison import Comparison, digest
from .measures import MEASURES

LAYOUT = "bothways-comparison-1"
"""The layout's name in `Conventions`."""

_C, _MC, _MCS = ("condition",), ("mechanism", "condition"), ("mechanism", "condition", "species")
_PROFILES = (("mean", "∫|x - x_parent|dt / ∫x_parent dt at equal times"),
             ("mean_shifted", "the same at equal times from the ignition (else half-conversion) of each"),
             ("largest", "largest |x - x_parent| over largest x_parent"),
             ("peak", "largest x over largest x_parent, less 1"))


def variable_of(measure: str) -> str:
    """The name under which the file holds a measure."""
    return "measure_" + measure.replace("-", "_")


def write_comparison(path: StrPath, comparison: Comparison, replace: bool = False, version: str = "") -> None:
    """Writes the file, whole or not at all; one that exists is an InputError unless `replace`."""
    table = [*_conditions(comparison), *_mechanisms(comparison), *_measures(comparison)]
    attributes: dict[str, hdf5.Note] = {
        "Conventions": LAYOUT, "title": f"Reduced mechanisms against {comparison.parent.name}", "source": f"bothways {version}",
        "parent_name": comparison.parent.name, "parent_sha256": digest(comparison.parent),
        "limits": ", ".join(map(str, comparison.limits)), "limits_kept": int(not comparison.beyond)}
    write_whole(path, hdf5.image(table, attributes, []), replace)


def _conditions(comparison: Comparison) -> list[tuple[Variable, Any]]:
    c = comparison.conditions
    numbers = (("temperature", "K", "temperature at the start"), ("pressure", "Pa", "pressure at the start"),
               ("equivalence_ratio", "1", "equivalence ratio"), ("ignition", "s", "ignition delay with the parent"),
               ("half_conversion", "s", "first half-conversion of a charged species with the parent"),
               ("steps", "1", "accepted steps with the parent"))
    rows: list[tuple[Variable, Any]] = [
        (Variable("condition", _C, "1", "number of the condition"), np.arange(1, len(c) + 1)),
        (Variable("mechanism", ("mechanism",), "1", "reduced mechanism", text=True), _distinct(comparison)),
        (Variable("species", ("species",), "1", "species of the parent", text=True), comparison.parent.names)]
    rows += [(Variable(f"parent_{name}" if name in ("ignition", "half_conversion", "steps") else name, _C, units, text),
              [getattr(condition, name) for condition in c]) for name, units, text in numbers]
    return [*rows, (Variable("parent_failure", _C, "1", "why the parent's run failed", text=True), [x.failure for x in c]),
            (Variable("parent_text", (), "1", "parent mechanism (TOML)", text=True), to_toml(comparison.parent.document)),
            (Variable("case_text", _C, "1", "case file (TOML)", text=True),
             [to_toml(case.document) for case in comparison.cases])]


def _distinct(comparison: Comparison) -> list[str]:
    """Names of the reduced mechanisms, numbered where two share one."""
    names = [judged.mechanism.name for judged in comparison.judged]
    return [f"{name} ({names[: k + 1].count(name)})" if names.count(name) > 1 else name for k, name in enumerate(names)]


def _mechanisms(comparison: Comparison) -> list[tuple[Variable, Any]]:
    dims, judged = ("mechanism",), comparison.judged
    return [(Variable("mechanism_text", dims, "1", "reduced mechanism (TOML)", text=True),
             [to_toml(j.mechanism.document) for j in judged]),
            (Variable("number_of_species", dims, "1", "number of species"), [len(j.mechanism.species) for j in judged]),
            (Variable("number_of_reactions", dims, "1", "number of reactions"), [len(j.mechanism.reactions) for j in judged]),
            (Variable("cost", dims, "1", "time of a run over that with the parent"), [j.cost for j in judged]),
            (Variable("gained", dims, "1", "conserved by it and not by the parent", text=True),
             [", ".join(j.conserved.gained) for j in judged]),
            (Variable("lost", dims, "1", "conserved by the parent and not by it", text=True),
             [", ".join(j.conserved.lost) for j in judged]),
            (Variable("failure", _MC, "1", "why its run failed", text=True), [[o.failure for o in j.outcomes] for j in judged])]


def _measures(comparison: Comparison) -> list[tuple[Variable, Any]]:
    outcomes = [j.outcomes for j in comparison.judged]
    rows: list[tuple[Variable, Any]] = [(Variable("ignition_delay", _MC, "s", "ignition delay"),
                                         [[o.ignition for o in row] for row in outcomes])]
    rows += [(Variable(variable_of(m.name), _MC, m.units, m.text), [[o.measures[m.name] for o in row] for row in outcomes])
             for m in MEASURES]
    return rows + [(Variable(f"profile_{name}", _MCS, "1", text), [[getattr(o, name) for o in row] for row in outcomes])
                   for name, text in _PROFILES]
