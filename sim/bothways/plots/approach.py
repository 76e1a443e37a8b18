"""The approach to equilibrium: how far potential, affinities and composition still are from it, on logarithmic axes."""

import math
from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
from matplotlib.figure import Figure

from ..along import affinities, mechanism_of
from ..case import build_case
from ..constants import GAS_CONSTANT as R
from ..contents import Contents
from ..endpoint import TRACE
from ..errors import InputError
from ..mechanism import Mechanism
from ..outfile import StrPath
from ..trajectory import Trajectory
from . import style
from .labels import formula
from .panels import draw_panels
from .parts import Array, Curve, Panel, View, power_of_ten
from .saving import check_picture, save
from .views import time_view
from .words import case_of, instants, words

LABELS = {"Helmholtz energy": r"$(A - A_\mathrm{eq})$ / J", "Gibbs energy": r"$(G - G_\mathrm{eq})$ / J",
          "negative entropy": r"$(S_\mathrm{eq} - S)$ / (J K$^{-1}$)"}
"""Of the potential above its minimum, by `Trajectory.potential_name`."""
TO_COME = r"$S_\mathrm{produced}$ yet to come / (J K$^{-1}$)"
"""Of vessels that exchange heat: the entropy that is still to be produced by the end of the run."""
NOISE = 16.0 * float(np.finfo(np.float64).eps)
"""A sum over species is known no better than this share of its largest value [-]."""
SAME = 1e-13
"""Mole fractions that agree so well are the same [-]."""
BEGUN = 1e-3
"""The view begins a decade or two before this share of the potential's fall lies behind [-]."""
SHORTEST = 0.04
"""A stretch over less than this share of the time axis is not named [-]."""
HEIGHT = 36.0
"""Of a panel [mm, on a page]."""
LATE, NEARLY, DECADES = 10.0, 1e-6, 5
"""If but this share `NEARLY` of the potential's fall is left at `LATE` times the instant of the steepest rise, a second view
counts from there, over `DECADES`."""


@dataclass(frozen=True)
class Distance:
    """How far a run is from its equilibrium, NaN where round-off hides it; all (nt).

    potential : above its minimum [J or J/K].
    affinity : largest |A|/RT of the reactions whose species are all above TRACE in that state [-]: below, amounts are noise.
    deviation : largest |x/x_eq - 1| of the species above TRACE at equilibrium [-]. furthest : the place of that species.
    """

    potential: Array
    affinity: Array
    deviation: Array
    furthest: np.ndarray


@style.styled
def approach(trajectory: Trajectory, width: str = "page") -> Figure:
    """The approach of a run to its equilibrium as a figure; width : "page" (180 mm) or "column" (85 mm).

    Raises InputError if the trajectory holds no equilibrium.
    """
    size = style.size_named(width)
    found = distance(trajectory)
    views = _views(trajectory, found)
    label = LABELS.get(trajectory.potential_name, TO_COME)
    panels = [_panel(label, (Curve(label, found.potential),)),
              _panel(r"largest |affinity| / $RT$", (Curve("affinity", found.affinity),)),
              replace(_panel(r"furthest $|x/x_\mathrm{eq} - 1|$", _stretches(trajectory, found, views[0])), named=True)]
    texts = words(trajectory, (), views[0], _remarks(trajectory, found))
    return draw_panels(trajectory.time, panels, views, size, texts, instants(trajectory.milestones))


def save_approach(trajectory: Trajectory, path: StrPath, replace: bool = False, width: str = "page") -> None:
    """Draws the approach to equilibrium and writes it as PNG, SVG or PDF, by the suffix."""
    check_picture(path, replace)
    save(approach(trajectory, width), path, replace)


def distance(trajectory: Trajectory) -> Distance:
    """How far every state is from the equilibrium that the trajectory holds."""
    lacking = [name for name in ("amount", "temperature", "volume") if f"equilibrium_{name}" not in trajectory.extra]
    if lacking:
        raise InputError("the trajectory holds no equilibrium", expected="one that a run has written beside its course",
                         remedy="run the case again with this version")
    mechanism, equal = mechanism_of(trajectory), trajectory.extra["equilibrium_amount"]
    fraction = equal / equal.sum()
    seen = np.flatnonzero(fraction > TRACE)
    off = np.abs(trajectory.mole_fraction[:, seen] / fraction[seen] - 1.0)
    return Distance(_potential(trajectory, mechanism), _affinity(trajectory, mechanism),
                    _above(off.max(axis=1), SAME), seen[off.argmax(axis=1)])


def _above(values: Array, floor: float) -> Array:
    return np.where(values > floor, values, np.nan)


def _potential(trajectory: Trajectory, mechanism: Mechanism) -> Array:
    """The potential above its value at equilibrium; where heat is exchanged, above that at the end of the run."""
    if trajectory.potential_name not in LABELS:
        return _above(trajectory.potential - trajectory.potential[-1], NOISE * float(np.max(np.abs(trajectory.potential))))
    n, T, V = (np.asarray(trajectory.extra[f"equilibrium_{name}"])[None] for name in ("amount", "temperature", "volume"))
    contents = Contents(mechanism)
    if trajectory.potential_name == "negative entropy":
        own = build_case(case_of(trajectory), mechanism=mechanism).own_heat_capacity
        least = -contents.entropies(n, T, V)[0] - own * math.log(T[0] / trajectory.temperature[0])
    else:
        least = contents.gibbs_energies(n, T, V)[0]
        least -= n.sum() * R * T[0] if trajectory.potential_name == "Helmholtz energy" else 0.0
    return _above(trajectory.potential - least, NOISE * float(np.max(np.abs(trajectory.potential))))


def _affinity(trajectory: Trajectory, mechanism: Mechanism) -> Array:
    """Largest |A|/RT; its round-off is that of the potentials it is made of."""
    found = affinities(mechanism, trajectory.amount, trajectory.temperature, trajectory.volume)
    lacking = (trajectory.mole_fraction <= TRACE).astype(float) @ (mechanism.stoichiometry != 0) > 0
    size = np.where(np.isfinite(found) & ~lacking, np.abs(found), 0.0) / (R * trajectory.temperature[:, None])
    extra = trajectory.extra
    mu = Contents(mechanism).chemical_potentials(extra["equilibrium_amount"], float(extra["equilibrium_temperature"]),
                                                 float(extra["equilibrium_volume"]))
    floor = NOISE * float(np.max(np.abs(mu[np.isfinite(mu)]), initial=1.0))
    return _above(size.max(axis=1, initial=0.0), floor)


def _views(trajectory: Trajectory, found: Distance) -> list[View]:
    """The time axis, and a second one that counts from the steepest rise if the end comes soon after it."""
    time, lines = trajectory.time, (found.potential, found.affinity, found.deviation)
    seen = np.flatnonzero(np.any(np.isfinite(lines), axis=0) & (time > 0))
    if len(seen) < 2:
        start = float(time[0])
        return [time_view(start, max(float(time[-1]), start + 1e-9))]
    first, soon = (_fallen(time, found.potential, share) for share in (BEGUN, 1.0 - NEARLY))
    start, end = max(float(time[seen[0]]), _decade(first, 1)), float(time[seen[-1]])
    whole = time_view(_decade(min(start, 0.9 * end)), end, "log")
    for name, t in trajectory.milestones.items():
        if name.startswith("steepest") and whole.start < t < min(end, soon) and soon < LATE * t:
            return [whole, time_view(t + 0.4 * _decade(end - t, DECADES - 1), end, "log", t, f"the {name}")]
    return [whole]


def _decade(value: float, before: int = 0) -> float:
    """The power of ten at or below a value, or one that lies so many before."""
    return 10.0 ** (math.floor(math.log10(value)) - before)


def _fallen(time: Array, potential: Array, share: float) -> float:
    """The first time after the start by which the potential has fallen by that share, or round-off hides it [s]."""
    fallen = np.flatnonzero(~(potential > (1.0 - share) * potential[0]) & (time > 0))
    return float(time[fallen[0] if fallen.size else -1])


def _panel(label: str, curves: tuple[Curve, ...]) -> Panel:
    values = np.concatenate([curve.values for curve in curves])
    values = values[np.isfinite(values)]
    low, high = (values.min(), values.max()) if values.size else (SAME, 1.0)
    bottom = math.floor(math.log10(low))
    top = max(math.ceil(math.log10(high) + 0.05), bottom + 1)
    return Panel(label, curves, (10.0**bottom, 10.0**top), HEIGHT, "log", named=False)


def _stretches(trajectory: Trajectory, found: Distance, view: View) -> tuple[Curve, ...]:
    """The deviation in stretches, each of one furthest species; named once each, where that is longest."""
    edges = [0, *(np.flatnonzero(np.diff(found.furthest)) + 1), len(found.furthest) - 1]
    parts = [(int(a), int(b)) for a, b in pairwise(edges) if b > a or len(found.furthest) == 1]
    longest: dict[int, tuple[float, int]] = {}
    for a, b in parts:
        length = _length(trajectory.time, found.deviation, a, b, view)
        longest[found.furthest[a]] = max(longest.get(found.furthest[a], (0.0, a)), (length, a))
    named = {species: a for species, (length, a) in longest.items() if length > SHORTEST}
    styles = dict(zip(named, style.line_styles(), strict=False))
    return tuple(_stretch(trajectory, found, a, b, named, styles) for a, b in parts)


def _length(time: Array, deviation: Array, a: int, b: int, view: View) -> float:
    """The share of a view's axis that a stretch takes [-]."""
    inside = time[a:b + 1][np.isfinite(deviation[a:b + 1])]
    if inside.size < 2 or view.scale != "log":
        return float(inside.size > 0)
    low, high = np.log(np.clip([inside[0], inside[-1]], view.start, view.end))
    return float((high - low) / math.log(view.end / view.start))


def _stretch(trajectory: Trajectory, found: Distance, a: int, b: int, named: dict[int, int], styles: dict[int, tuple]) -> Curve:
    values = np.full(len(found.deviation), np.nan)
    values[a:b + 1] = found.deviation[a:b + 1]
    species = int(found.furthest[a])
    if species not in named:
        return Curve("", values, style.GREY)
    name = formula(trajectory.species[species], float(trajectory.molar_mass[species]))
    return Curve(name if named[species] == a else "", values, *styles[species])


def _remarks(trajectory: Trajectory, found: Distance) -> list[str]:
    """What a reader must know: where curves stop, and what the run's verdict was."""
    verdict = str(trajectory.extra.get("verdict", "")).partition(":")[0]
    hidden = any(np.isnan(line[-1]) for line in (found.potential, found.affinity, found.deviation))
    return [f"Verdict: {verdict}."] * bool(verdict) + [
        "Curves stop where round-off hides the distance."] * hidden + [
        f"Affinities and deviations: of what is above mole fraction {power_of_ten(round(math.log10(TRACE)))}."]
