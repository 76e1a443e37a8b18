"""A comparison as text: for the terminal, as Markdown, and as CSV (a row a condition and mechanism)."""

import csv
import io
import textwrap
from collections.abc import Sequence

import numpy as np

from ..report import CAUTION, counted, pressure_text
from .comparison import Comparison, Condition, Judged
from .limits import number_text
from .measures import MEASURES

_SHOWN = 6


def condition_text(condition: Condition) -> str:
    """A condition in words: T, and p and the equivalence ratio where it has them."""
    pressure = "" if np.isnan(condition.pressure) else f", {pressure_text(condition.pressure)}"
    ratio = "" if np.isnan(condition.equivalence_ratio) else f", φ {condition.equivalence_ratio:.4g}"
    return f"{condition.temperature:.5g} K{pressure}{ratio}"


def terminal_text(comparison: Comparison) -> str:
    """The comparison as a table about 100 columns wide, a block a reduced mechanism."""
    lines = [f"{'parent':<12}{_size(comparison, None)}", f"{'conditions':<12}{_span(comparison.conditions)}"]
    for judged in comparison.judged:
        lines += ["", f"{'reduced':<12}{_size(comparison, judged)}", *_facts(comparison, judged), *_measures(comparison, judged)]
    return "\n".join([*lines, *_verdict(comparison), *_caution(comparison.conditions)])


def _caution(conditions: Sequence[Condition]) -> list[str]:
    """The caution where anything ignites."""
    if all(np.isnan(condition.ignition) for condition in conditions):
        return []
    text = f"a reduced mechanism departs from its parent, and the parent from the mixture as it is; {CAUTION}"
    return ["", *textwrap.wrap(text, 100, initial_indent=f"{'caution':<12}", subsequent_indent=" " * 12)]


def _size(comparison: Comparison, judged: Judged | None) -> str:
    m = judged.mechanism if judged else comparison.parent
    text = f"{m.name}: {len(m.species)} species, {counted(len(m.reactions), 'reaction')}"
    return text + (f"; a run takes {judged.cost:.3g} of the parent's time" if judged else "")


def _span(conditions: Sequence[Condition]) -> str:
    T, p, ratio = (np.array([getattr(c, name) for c in conditions]) for name in ("temperature", "pressure", "equivalence_ratio"))
    parts = [f"{len(conditions)}: {_ends(T)} K", "" if np.any(np.isnan(p)) else f"{_ends(p / 1e5)} bar",
             "" if np.all(np.isnan(ratio)) else f"φ {_ends(ratio[~np.isnan(ratio)])}"]
    return ", ".join(filter(None, parts))


def _ends(values: np.ndarray) -> str:
    low, high = f"{np.min(values):.5g}", f"{np.max(values):.5g}"
    return low if low == high else f"{low} to {high}"


def _facts(comparison: Comparison, judged: Judged) -> list[str]:
    facts = [("gained", judged.conserved.gained, "conserved by it, not by the parent: "),
             ("lost", judged.conserved.lost, "conserved by the parent, not by it: ")]
    lines = [f"{name:<12}{text}{', '.join(what[:_SHOWN])}{' …' if len(what) > _SHOWN else ''}"
             for name, what, text in facts if what]
    for k, reason in list(judged.failures.items())[:_SHOWN]:
        lines.append(f"{'failed':<12}{condition_text(comparison.conditions[k])}: {reason}")
    return lines


def _measures(comparison: Comparison, judged: Judged) -> list[str]:
    lines = [f"{'':<12}{'measure':<30}{'typical':>11}{'worst':>11}{'limit':>9}   worst at"]
    limits = {limit.measure: limit for limit in comparison.limits}
    for measure in MEASURES:
        worst, k = judged.worst(measure.name)
        limit = limits.get(measure.name)
        shown = number_text(limit.measure, limit.value) if limit else ""
        where = condition_text(comparison.conditions[k]) if k >= 0 and worst != 0 else ""
        mark = "  beyond the limit" if limit and not limit.keeps(worst) else ""
        lines.append(f"{'':<12}{measure.name:<30}{number_text(measure.name, judged.typical(measure.name)):>11}"
                     f"{number_text(measure.name, worst):>11}{shown:>9}   {where}{mark}".rstrip())
    return lines


def _verdict(comparison: Comparison) -> list[str]:
    if not comparison.limits:
        return []
    asked = ", ".join(map(str, comparison.limits))
    beyond = [f"{judged.mechanism.name}: {limit.measure} {number_text(limit.measure, worst)} at "
              f"{condition_text(comparison.conditions[k])}" for judged, limit, worst, k in comparison.beyond]
    return ["", f"{'limits':<12}{asked}: " + ("kept in all conditions" if not beyond else "not kept by " + "; ".join(beyond))]


def markdown(comparison: Comparison) -> str:
    """The worst and the typical error of every measure, a column pair a reduced mechanism, with what the measures are."""
    names = [judged.mechanism.name for judged in comparison.judged]
    head = ["| |" + "".join(f" {name}, typical | worst |" for name in names), "|---|" + "---|---|" * len(names)]
    rows = [("species (reactions)", [f"{len(j.mechanism.species)} ({len(j.mechanism.reactions)}) | " for j in comparison.judged]),
            ("time of a run, of the parent's", [f"{j.cost:.3g} | " for j in comparison.judged])]
    for m in MEASURES:
        rows.append((m.name, [f"{number_text(m.name, j.typical(m.name))} | {number_text(m.name, j.worst(m.name)[0])}"
                              for j in comparison.judged]))
    table = [f"| {name} |" + "".join(f" {cell} |" for cell in cells) for name, cells in rows]
    parent = comparison.parent
    first = (f"Parent: {parent.name}, {len(parent.species)} species, {len(parent.reactions)} reactions. Conditions: "
             f"{_span(comparison.conditions)}. Typical: root of the mean square over the conditions.")
    notes = [f"- {m.name}: {m.text}." for m in MEASURES]
    held = [f"- {j.mechanism.name} {word} what is conserved: {', '.join(what)}." for j in comparison.judged
            for word, what in (("gains", j.conserved.gained), ("loses", j.conserved.lost)) if what]
    return "\n".join([first, "", *head, *table, "", *held, *notes]) + "\n"


def csv_text(comparison: Comparison) -> str:
    """Every measure of every mechanism in every condition."""
    text = io.StringIO()
    rows = csv.writer(text, lineterminator="\n")
    measures = (f"{m.name}/{m.units}" if m.units != "1" else m.name for m in MEASURES)
    rows.writerow(["mechanism", "start temperature/K", "start pressure/Pa", "equivalence ratio", "parent ignition/s",
                   "ignition/s", *measures, "failure"])
    for judged in comparison.judged:
        for c, outcome in zip(comparison.conditions, judged.outcomes, strict=True):
            rows.writerow([judged.mechanism.name, c.temperature, c.pressure, c.equivalence_ratio, c.ignition, outcome.ignition,
                           *(outcome.measures[m.name] for m in MEASURES), outcome.failure])
    return text.getvalue()


