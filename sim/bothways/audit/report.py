"""An audit as text, JSON, CSV or HDF5."""

import csv
import io
import json
import textwrap
from collections import Counter
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import Any

import numpy as np

from ..errors import InputError
from ..hdf5 import Variable, image
from ..outfile import StrPath, check_writable, write_whole
from .audit import Audit
from .finding import FIELDS, NOTICE, NUMBERS, SEVERITIES, UNITS, Finding
from .findings import CHECKS

SHOWN_OF_A_KIND = 3
"""Rows of one kind and severity that the short table shows."""
FORMATS = (".csv", ".h5")
_WIDTH, _ASIDE = 100, 26


def summary(audit: Audit, every: bool = False) -> str:
    """The report for a terminal: what was looked at, the rows, and what they mean; notices only if `every`."""
    rows = list(audit.findings) if every else list(_foremost(audit.findings))
    lines = [*_head(audit), "", *_table(rows), *_left_out(audit.findings, rows)]
    return "\n".join([*lines, *_meanings({row.kind for row in rows}, every)]) + "\n"


def _head(audit: Audit) -> list[str]:
    m, survey = audit.survey.mechanism, audit.survey
    T, p = survey.temperatures, ", ".join(f"{value / 1e5:.4g}" for value in survey.pressures)
    pressures = f"; {p} bar" * survey.is_gas
    lines = [f"{m.name}: {len(m.species)} species, {len(m.reactions)} reaction{'s' * (len(m.reactions) != 1)}, {m.phase}",
             f"{'looked at':<12}{T[0]:g} to {T[-1]:g} K{pressures}",
             f"{'found':<12}" + ", ".join(f"{n} {severity}{'s' * (n != 1)}" for severity, n in audit.counts.items())]
    agreement = audit.agreement
    if agreement["published"]:
        lines.append(f"{'published':<12}{agreement['published']:.0f} reverse constant{'s' * (agreement['published'] != 1)}: "
                     f"{100 * agreement['within 2']:.0f} % within a factor of 2 of the derived, "
                     f"{100 * agreement['within 10']:.0f} % within 10")
    return lines


def _foremost(findings: Sequence[Finding]) -> Iterator[Finding]:
    """Errors and warnings, a few of each kind."""
    seen: Counter = Counter()
    for row in findings:
        seen[row.kind, row.severity] += 1
        if row.severity != NOTICE and seen[row.kind, row.severity] <= SHOWN_OF_A_KIND:
            yield row


def _table(rows: Sequence[Finding]) -> Iterator[str]:
    if rows:
        yield f"{'':<9}{'decades':>8}{'T / K':>7}"
    for row in rows:
        size = "" if np.isnan(row.decades) else f"{row.decades:.1f}"
        temperature = "" if np.isnan(row.temperature) else f"{row.temperature:.4g}"
        yield f"{row.severity:<9}{size:>8}{temperature:>7}  {row.entry}"
        yield from _indented(f"{row.kind}: {row.text}")
        if row.likely:
            yield from _indented(f"likely: {row.likely}")


def _indented(text: str) -> list[str]:
    return textwrap.wrap(text, _WIDTH, initial_indent=" " * _ASIDE, subsequent_indent=" " * _ASIDE, break_long_words=False)


def _left_out(findings: Sequence[Finding], rows: Sequence[Finding]) -> Iterator[str]:
    """How many rows of each kind are not shown."""
    rest = Counter((f.severity, f.kind) for f in findings)
    rest.subtract(Counter((row.severity, row.kind) for row in rows))
    if any(rest.values()):
        yield ""
        yield "not shown (--all shows them)"
    for severity in SEVERITIES:
        parts = [f"{n} {kind}" for (s, kind), n in rest.items() if s == severity and n]
        yield from textwrap.wrap(", ".join(parts), _WIDTH, initial_indent=f"{severity + 's':<10}", subsequent_indent=" " * 10)


def _meanings(kinds: set[str], sources: bool) -> Iterator[str]:
    for check in CHECKS:
        if check.NAME in kinds:
            yield ""
            yield f"what '{check.NAME}' means"
            yield from textwrap.wrap(check.EXPLANATION, _WIDTH - 2, initial_indent="  ", subsequent_indent="  ")
            yield from textwrap.wrap(f"Severity: {check.SEVERITY}.", _WIDTH - 2, initial_indent="  ", subsequent_indent="  ")
            if sources:
                yield from textwrap.wrap(f"Source: {check.SOURCE}.", _WIDTH - 2, initial_indent="  ", subsequent_indent="  ")


def as_json(audit: Audit) -> str:
    """The whole audit as a JSON text; numbers that a row does not have are null."""
    survey = audit.survey
    agreement = {key: None if np.isnan(v) else v for key, v in audit.agreement.items()}
    content = {"mechanism": survey.mechanism.name, "temperatures": survey.temperatures[[0, -1]].tolist(),
               "pressures": survey.pressures.tolist(), "counts": audit.counts, "agreement": agreement, "findings": list(audit)}
    return json.dumps(content, ensure_ascii=False, indent=1)


def check_rows_file(path: StrPath, replace: bool = False) -> None:
    """An InputError unless rows can be written there."""
    if Path(path).suffix.lower() not in FORMATS:
        raise InputError(f"the suffix is '{Path(path).suffix}'", expected=" or ".join(FORMATS), file=path)
    check_writable(path, replace)


def write_rows(audit: Audit, path: StrPath, replace: bool = False) -> None:
    """All rows as CSV or HDF5, by the suffix; a file that exists is an InputError unless `replace`."""
    check_rows_file(path, replace)
    content = as_csv(audit).encode() if Path(path).suffix.lower() == ".csv" else as_hdf5(audit)
    write_whole(path, content, replace)


def as_csv(audit: Audit) -> str:
    """All rows as CSV, units in the header."""
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow([f"{name} / {UNITS[name]}" if name in UNITS else name for name in FIELDS])
    for row in audit:
        writer.writerow(["" if row[name] is None else row[name] for name in FIELDS])
    return text.getvalue()


_LONG_NAMES = {"kind": "kind of finding", "severity": "severity", "entry": "place in the mechanism file",
               "text": "what is wrong",
               "decades": "decades by which a rate or equilibrium constant is off",
               "temperature": "temperature where it is worst",
               "pressure": "pressure where it is worst", "from_temperature": "lowest temperature where it holds",
               "to_temperature": "highest temperature where it holds", "value": "the number that tells most about it",
               "unit": "unit of value", "gibbs_change": "change of standard reaction Gibbs energy that would mend it",
               "likely": "what is likelier at fault",
               "reaction": "number of the reaction, 0 if none", "species": "name of the species"}


def as_hdf5(audit: Audit) -> bytes:
    """All rows as the bytes of a self-describing HDF5 file: a variable a column, along the axis `finding`."""
    survey, axis = audit.survey, ("finding",)
    variables: list[tuple[Variable, Any]] = [
        (Variable("finding", axis, "1", "number of the finding, the worst first"), np.arange(1.0, len(audit) + 1.0))]
    for name in FIELDS:
        column = [getattr(finding, name) for finding in audit.findings]
        variables.append((Variable(name, axis, UNITS.get(name, "1"), _LONG_NAMES[name], text=name not in NUMBERS), column))
    title = f"audit of {survey.mechanism.name}, {survey.temperatures[0]:g} to {survey.temperatures[-1]:g} K"
    return image(variables, {"Conventions": "CF-1.11", "title": title, "references": "; ".join(survey.mechanism.sources)}, [])
