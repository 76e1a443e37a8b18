"""The two directions of every reaction as encounters: which molecules meet in each, and how often they could.

What stands on both sides alike (M, a named partner such as AR in 2 O + AR ⇌ O2 + AR) is a partner: the pair's constant
is then k times the partner's concentration, taken as p/RT.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from .collisions import collision_constant
from .diameters import RULE, size
from .survey import Survey, limits_of, mass_action

FORWARD, REVERSE = "forward", "reverse"


@dataclass(frozen=True)
class Encounter:
    """One direction of reaction j: the molecules that meet (places of species), the number of partners beside them that
    stand on both sides by name, and whether the reaction is in fall-off."""

    j: int
    direction: str
    molecules: tuple[int, ...]
    partners: int
    fall_off: bool


def encounters(survey: Survey, molecules: int) -> Sequence[Encounter]:
    """All directions in which so many molecules meet, mass action only; those with charges are left out (their
    attraction reaches further than any diameter)."""
    if "encounters" not in survey.kept:
        survey.kept["encounters"] = {n: list(_encounters(survey, n)) for n in (1, 2)}
    return survey.kept["encounters"][molecules]


def _encounters(survey: Survey, molecules: int) -> Iterator[Encounter]:
    species = survey.mechanism.species
    for j, reaction in enumerate(survey.mechanism.reactions):
        if not mass_action(reaction):
            continue
        left, right = (dict(side) for side in (reaction.equation.reactants, reaction.equation.products))
        both = {name: min(left[name], right[name]) for name in left if name in right}
        for direction, side in ((FORWARD, left), (REVERSE, right)):
            met, partners = _met(side, both, molecules)
            places = tuple(survey.mechanism.index(name) for name in met)
            if len(places) == molecules and not any(species[k].charge for k in places):
                yield Encounter(j, direction, places, partners, limits_of(reaction) is not None)


def _met(side: dict[str, int], both: dict[str, int], molecules: int) -> tuple[list[str], int]:
    """The molecules of a side, without those on both sides where they are more than looked for."""
    whole = [name for name, count in side.items() for _ in range(count)]
    if len(whole) <= molecules:
        return whole, 0
    own = [name for name, count in side.items() for _ in range(count - both.get(name, 0))]
    return own, len(whole) - len(own)


def log_limits(survey: Survey, pairs: list[Encounter]) -> np.ndarray:
    """ln of the collision constant of every pair [m3/(mol s)], (nT, pairs)."""
    species = survey.mechanism.species
    sizes = [size(s)[:2] for s in species]
    d, depth = (np.array(column) for column in zip(*sizes, strict=True))
    i, k = (np.array([pair.molecules[side] for pair in pairs], dtype=int) for side in (0, 1))
    mass = survey.mechanism.molar_mass
    reduced = mass[i] * mass[k] / (mass[i] + mass[k])
    Z = collision_constant(survey.temperatures[:, None], 0.5 * (d[i] + d[k]), reduced, np.sqrt(depth[i] * depth[k]), i == k)
    return np.log(Z)


def log_constants(survey: Survey, met: list[Encounter], bare: bool) -> np.ndarray:
    """ln of each direction's constant, (nT, np, encounters): as the pressure makes it, or (`bare`) without partners and
    of fall-off the high-pressure limit."""
    j = np.array([e.j for e in met], dtype=int)
    back = np.array([e.direction == REVERSE for e in met], dtype=bool)
    log_k = (survey.log_bare if bare else survey.log_forward)[:, :, j] - np.where(back, survey.log_Kc[:, j], 0.0)[:, None, :]
    partners = np.array([0 if bare else e.partners for e in met])
    return log_k + partners * np.log(survey.partner)[:, :, None]


def decades_above(survey: Survey, pairs: list[Encounter], bare: bool) -> tuple[np.ndarray, np.ndarray]:
    """Decades by which each pair's constant exceeds the collision rate (-inf where unknown), and its ln, (nT, np, pairs)."""
    log_k = log_constants(survey, pairs, bare)
    excess = (log_k - log_limits(survey, pairs)[:, None, :]) / np.log(10.0)
    return np.where(np.isfinite(excess), excess, -np.inf), log_k


def paired(survey: Survey, fall_off: bool) -> list[Encounter]:
    """The pairs held against the collision rate, of reactions in fall-off or of the others."""
    return [e for e in encounters(survey, 2) if e.fall_off == fall_off] if survey.is_gas else []


def all_decades(survey: Survey) -> dict[str, np.ndarray]:
    """The largest decades above the collision rate of every pair, by direction (fall-off by its high-pressure limit)."""
    found: dict[str, list[float]] = {FORWARD: [], REVERSE: []}
    for fall_off in (False, True):
        pairs = paired(survey, fall_off)
        top = np.max(decades_above(survey, pairs, fall_off)[0], axis=(0, 1)) if pairs else []
        for pair, decades in zip(pairs, top, strict=True):
            found[pair.direction].append(float(decades))
    return {direction: np.array(values) for direction, values in found.items()}


def diameter_note(survey: Survey, pair: Encounter) -> str:
    """Which diameters of a pair come from the rule."""
    names = dict.fromkeys(survey.mechanism.names[k] for k in pair.molecules if size(survey.mechanism.species[k])[2] == RULE)
    return f"; diameter of {' and '.join(names)} by rule" if names else ""
