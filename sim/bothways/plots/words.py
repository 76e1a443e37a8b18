"""What a figure says in words: title, facts, notes; taken from the trajectory and from nowhere else."""

import tomllib
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from ..report import notable, pressure_text, time_text
from ..trajectory import Trajectory
from .parts import View
from .sheet import Words

NOT_A_SAFETY_CASE = "A model is not a safety case."


def words(trajectory: Trajectory, left_out: Sequence[str], shown: View, remarks: Sequence[str] = ()) -> Words:
    """Header and footer; left_out : names of the species that are charged, hardly react and are not drawn."""
    notes = " ".join([*remarks, *_notes(trajectory, left_out, shown)])
    return Words(_title(trajectory), _facts(trajectory), _alert(trajectory), notes, f"bothways {trajectory.program_version}")


def instants(milestones: Mapping[str, float]) -> dict[str, float]:
    """The instants worth a mark [s], by their text."""
    return {f"{name}, {time_text(float(t))}": float(t) for name, t in milestones.items() if name.startswith("steepest")}


def case_of(trajectory: Trajectory) -> dict[str, Any]:
    """The case's document; empty if its text is none."""
    try:
        return tomllib.loads(trajectory.case_text)
    except tomllib.TOMLDecodeError:
        return {}


def _title(trajectory: Trajectory) -> str:
    """The case's title, or one made from the mechanism's name."""
    title = str(case_of(trajectory).get("case", {}).get("title", "")) or f"{trajectory.mechanism_name}: course of a batch"
    return capitalised(title)


def capitalised(title: str) -> str:
    """Begun with a capital unless the first word is a symbol or carries one (n-heptane, pH)."""
    first = title.split(" ", 1)[0]
    return title[:1].upper() + title[1:] if first.isalpha() and first.islower() else title


def _facts(trajectory: Trajectory) -> str:
    """Mechanism, vessel, start."""
    vessel = case_of(trajectory).get("vessel", {})
    held = [str(vessel.get("heat", "")), f"constant {vessel['holds']}" if "holds" in vessel else ""]
    p = float(trajectory.pressure[0])
    start = f"{trajectory.temperature[0]:.6g} K{'' if np.isnan(p) else f' and {pressure_text(p)}'} at the start"
    size = f"{len(trajectory.species)} species, {len(trajectory.reactions)} reaction{'s' * (len(trajectory.reactions) != 1)}"
    mechanism = f"mechanism {trajectory.mechanism_name} ({size})"
    return "; ".join(filter(None, (mechanism, ", ".join(filter(None, held)), start)))


def _alert(trajectory: Trajectory) -> str:
    if trajectory.complete:
        return ""
    reason = f": {trajectory.reason}" if trajectory.reason else ""
    return f"Incomplete run, ended at {time_text(float(trajectory.time[-1]))}{reason}"


def _notes(trajectory: Trajectory, left_out: Sequence[str], shown: View) -> list[str]:
    parts = []
    if left_out:
        parts.append(f"Not drawn: {', '.join(left_out)} ({'hardly reacts' if len(left_out) == 1 else 'hardly react'}).")
    if shown.end < trajectory.time[-1]:
        parts.append(f"The run goes on to {time_text(float(trajectory.time[-1]))}.")
    if notable(trajectory):
        parts.append(NOT_A_SAFETY_CASE)
    return parts
