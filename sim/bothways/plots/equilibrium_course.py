"""Equilibrium against temperature: the mole fractions of one charge, major species and traces."""

from collections.abc import Sequence

import numpy as np
from matplotlib.figure import Figure

from ..equilibrium import Equilibrium, equilibria
from ..equilibrium.minimiser import Amounts
from ..errors import InputError, nearest
from ..mechanism import Mechanism
from ..outfile import StrPath
from ..report import pressure_text, volume_text
from ..version import program_version
from . import style
from .composition import linear_panel, log_panel
from .labels import formula
from .panels import draw_panels
from .parts import Array, Curve, Panel, View
from .saving import check_picture, save
from .selection import MOST_MAJOR, MOST_TRACE, NOTABLE, SMALLEST, SPAN, Selection, is_diluent, largest
from .sheet import Words
from .words import capitalised

POINTS = 120
"""Temperatures between two that are given, for a smooth line."""
SHOWN = 5
"""The most species of the charge that are named."""


@style.styled
def equilibrium_course(mechanism: Mechanism, amount: Amounts, temperatures: Sequence[float] | Array, *,
                       pressure: float | None = None, volume: float | None = None, species: Sequence[str] | None = None,
                       width: str = "page", conserved: str | np.ndarray = "elements", title: str = "") -> Figure:
    """The equilibrium composition of a charge against temperature as a figure.

    Parameters
    ----------
    amount : of each species in the charge, (N) or by name [mol].
    temperatures : [K]; two are the ends of a range.
    pressure [Pa] or volume [m3] : what is held.
    species : names; those that matter if none are given.
    width : "page" (180 mm) or "column" (85 mm).
    conserved : "elements", "reactions" or a matrix, as for `equilibrium`.
    """
    size = style.size_named(width)
    T = _range(temperatures)
    charge = _charge(mechanism, amount)
    found = equilibria(mechanism, charge, temperature=T, pressure=pressure, volume=volume, conserved=conserved)
    chosen = _named(mechanism, found, species) if species else _mattering(charge, found)
    facts = "; ".join([f"mechanism {mechanism.name} ({len(mechanism.species)} species)", _held(pressure, volume),
                       _charge_text(mechanism, charge)])
    notes = " ".join(_notes(mechanism, chosen, T))
    heading = capitalised(title or f"equilibrium of {mechanism.name}")
    texts = Words(heading, facts, notes=notes, program=f"bothways {program_version()}")
    return draw_panels(T, _panels(mechanism, found, chosen), [_view(T)], size, texts)


def save_equilibrium_course(mechanism: Mechanism, amount: Amounts, temperatures: Sequence[float] | Array, path: StrPath,
                            replace: bool = False, *, pressure: float | None = None, volume: float | None = None,
                            species: Sequence[str] | None = None, width: str = "page",
                            conserved: str | np.ndarray = "elements", title: str = "") -> None:
    """Draws the equilibrium against temperature and writes it as PNG, SVG or PDF, by the suffix."""
    check_picture(path, replace)
    figure = equilibrium_course(mechanism, amount, temperatures, pressure=pressure, volume=volume, species=species,
                                width=width, conserved=conserved, title=title)
    save(figure, path, replace)


def _range(temperatures: Sequence[float] | Array) -> Array:
    """(nt) [K], rising; a range if two are given."""
    T = np.unique(np.asarray(temperatures, dtype=np.float64))
    if T.ndim != 1 or not T.size or not np.all(np.isfinite(T) & (T > 0)):
        raise InputError("temperatures that cannot be drawn", expected="a list of positive numbers, in K")
    return np.linspace(T[0], T[1], POINTS) if len(T) == 2 else T


def _charge(mechanism: Mechanism, amount: Amounts) -> Array:
    """(N) [mol]."""
    if not hasattr(amount, "items"):
        return np.asarray(amount, dtype=np.float64)
    charge = np.zeros(len(mechanism.species))
    for name, value in amount.items():
        charge[mechanism.index(name)] = value
    return charge


def _named(mechanism: Mechanism, found: Sequence[Equilibrium], species: Sequence[str]) -> Selection:
    for name in species:
        if name not in mechanism.names:
            raise InputError(f"unknown species '{name}'", remedy=nearest(name, mechanism.names))
    chosen = [mechanism.names.index(name) for name in dict.fromkeys(species)]
    if len(chosen) > style.MOST_LINES:
        raise InputError(f"{len(chosen)} species are too many for one figure", expected=f"at most {style.MOST_LINES}")
    top = _mole_fractions(found).max(axis=0)
    major = tuple(k for k in chosen if top[k] >= NOTABLE * max(top[chosen]))
    return Selection(major, tuple(k for k in chosen if k not in major and top[k] > 0))


def _mattering(charge: Array, found: Sequence[Equilibrium]) -> Selection:
    """The most abundant at any temperature, except what is charged and hardly reacts at any."""
    top = _mole_fractions(found).max(axis=0)
    diluent = is_diluent(np.vstack([charge, [state.amount for state in found]]))
    active = (top > 0) & ~diluent
    if not active.any():
        return Selection(largest(top, top > 0, MOST_MAJOR), ())
    major = largest(top, active & (top >= NOTABLE * top[active].max()), MOST_MAJOR)
    rest = active & (top >= SMALLEST)
    rest[list(major)] = False
    rest &= top >= SPAN * max(top[rest], default=0.0)
    return Selection(major, largest(top, rest, MOST_TRACE), largest(top, diluent, len(top)))


def _mole_fractions(found: Sequence[Equilibrium]) -> Array:
    """(nt, N) [-]."""
    return np.array([state.mole_fraction for state in found])


def _panels(mechanism: Mechanism, found: Sequence[Equilibrium], chosen: Selection) -> list[Panel]:
    x, styles = _mole_fractions(found), style.line_styles()
    major, trace = ([Curve(_shown_name(mechanism, k), x[:, k], *next(styles)) for k in some]
                    for some in (chosen.major, chosen.trace))
    return [panel for panel in (linear_panel(major), log_panel(trace)) if panel]


def _shown_name(mechanism: Mechanism, k: int) -> str:
    return formula(mechanism.names[k], float(mechanism.molar_mass[k]))


def _view(T: Array) -> View:
    one = 0.0 if T[-1] > T[0] else 1.0
    return View(float(T[0]) - one, float(T[-1]) + one, "temperature / K")


def _held(pressure: float | None, volume: float | None) -> str:
    return f"constant pressure {pressure_text(pressure)}" if volume is None and pressure is not None else \
        f"constant volume {volume_text(volume or 0.0)}"


def _charge_text(mechanism: Mechanism, charge: Array) -> str:
    x = charge / charge.sum()
    order = [int(k) for k in np.argsort(-x, kind="stable") if x[k] > 0]
    parts = ", ".join(f"{_shown_name(mechanism, k)} {100 * x[k]:.4g} %" for k in order[:SHOWN])
    return f"charge by amount {parts}" + (f" and {len(order) - SHOWN} more" if len(order) > SHOWN else "")


def _notes(mechanism: Mechanism, chosen: Selection, T: Array) -> list[str]:
    """What is left out, and what is drawn though its data do not reach there."""
    notes, left_out = [], [_shown_name(mechanism, k) for k in chosen.diluents]
    if left_out:
        notes.append(f"Not drawn: {', '.join(left_out)} ({'hardly reacts' if len(left_out) == 1 else 'hardly react'}).")
    ranges = {k: mechanism.species[k].fit_range for k in chosen.major + chosen.trace}
    beyond = [_shown_name(mechanism, k) for k, (low, high) in ranges.items() if T[0] < low or T[-1] > high]
    if beyond:
        notes.append(f"Temperatures reach beyond the thermochemical data of {', '.join(beyond)}.")
    return notes
