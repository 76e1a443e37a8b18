"""Which reactions can proceed from a charge: a matter of what is there, not of how fast."""

from collections.abc import Iterable, Mapping

import numpy as np

from .mechanism import Mechanism, Reaction, Term


def reachable(mechanism: Mechanism, charge: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Masks of the species (N) that can come about and of the reactions that can proceed, either way, from a charge (N).

    A reaction proceeds once one whole side is there and a partner for one of its terms; what it makes may start others.
    A lumped step also needs what its rate vanishes without. Worked out once for each set of species that are there.
    """
    known = mechanism.__dict__.setdefault("_reachable", {})
    key = (charge > 0).tobytes()
    if key not in known:
        known[key] = _reachable(mechanism, charge)
    return known[key]


def _reachable(mechanism: Mechanism, charge: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    present = set(np.flatnonzero(charge > 0).tolist())
    sides = [[{mechanism.index(name) for name, _ in side} for side in (r.equation.reactants, r.equation.products)]
             for r in mechanism.reactions]
    waiting, running = set(range(len(sides))), set()
    while True:
        started = {j for j in waiting if _starts(mechanism, mechanism.reactions[j], sides[j], present)}
        if not started:
            break
        waiting -= started
        running |= started
        present.update(k for j in started for side in sides[j] for k in side)
    return _mask(present, len(mechanism.species)), _mask(running, len(sides))


def _starts(mechanism: Mechanism, reaction: Reaction, sides: list[set[int]], present: set[int]) -> bool:
    return any(_has_side(mechanism, reaction, term, sides, present)
               and (term.partner is None or not term.law.needs_partner
                    or _has_partner(mechanism, term.partner.default, term.partner.efficiency, present))
               for term in reaction.terms)


def _has_side(mechanism: Mechanism, reaction: Reaction, term: Term, sides: list[set[int]], present: set[int]) -> bool:
    if term.orders is not None:
        sides = [{mechanism.index(name) for name in term.orders.needed(reaction.net, forward)} for forward in (True, False)]
    return any(side <= present for side in sides)


def _has_partner(mechanism: Mechanism, default: float, efficiency: Mapping[str, float], present: set[int]) -> bool:
    return any(efficiency.get(mechanism.names[k], default) > 0 for k in present)


def _mask(members: Iterable[int], size: int) -> np.ndarray:
    mask = np.zeros(size, dtype=bool)
    mask[list(members)] = True
    return mask
