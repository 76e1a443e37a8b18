"""How potentials lie in the flat tables: polynomials, modes, and element terms that keep exponents small.

Behind the species stand the transition states, whose element terms are those of their reactants together.
"""

import itertools

import numpy as np

from ..rates.law import Complex
from ..thermo import Modes
from ..thermo.polynomial import Ranges, extended
from .law_tables import ordered_terms
from .model import Mechanism
from .phase import GAS

_REDUCTION_TEMPERATURES = np.array([300.0, 500.0, 1000.0, 2000.0, 3000.0])


def thermal_tables(mechanism: Mechanism, ints: dict, floats: dict) -> None:
    """Adds the potentials to the tables."""
    species, gas = mechanism.species, mechanism.phase == GAS
    shifts = [np.log(mechanism.standard_pressure / s.standard_pressure) if gas else 0.0 for s in species]
    complexes = _complexes(mechanism, ints, floats)
    ranges = [mechanism.ranges(k) for k in range(len(species))] + [c.ranges for c in complexes]
    _polynomials(ranges, shifts + [0.0] * len(complexes), ints, floats)
    _modes([s.potential.modes() for s in species] + [c.modes for c in complexes], ints, floats)
    own = _reduction(mechanism, ints, floats)
    molecules = np.split(own[ints["complex_molecule"]], ints["complex_start"][1:-1])
    floats["reduction"] = np.vstack([own, *(m.sum(axis=0) for m in molecules[: len(complexes)])]).ravel()


def _complexes(mechanism: Mechanism, ints: dict, floats: dict) -> list[Complex]:
    """The transition states in the order of their terms, with the molecules that make each."""
    terms = [(t, j, part) for t, (j, term) in enumerate(ordered_terms(mechanism))
             if isinstance(part := term.law.part(), Complex)]
    molecules = [[mechanism.index(name) for name, count in mechanism.reactions[j].equation.reactants for _ in range(count)]
                 for _, j, _ in terms]
    ints["complex_term"] = np.array([t for t, _, _ in terms], dtype=int)
    ints["complex_start"] = np.cumsum([0] + [len(m) for m in molecules])
    ints["complex_molecule"] = np.array([k for m in molecules for k in m], dtype=int)
    floats["complex_wigner"] = np.array([part.wigner for _, _, part in terms])
    return [part for _, _, part in terms]


def _polynomials(ranges: list[Ranges], shifts: list[float], ints: dict, floats: dict) -> None:
    """Ranges from 0 to infinity; `shifts` come off the entropies, which then belong to one standard pressure."""
    start, tops, rows = [0], [], []
    for own, shift in zip(ranges, shifts, strict=True):
        whole = extended(own)
        shifted = whole.rows.copy()
        shifted[:, 8] -= shift
        tops.append(whole.boundaries[1:])
        rows.append(shifted)
        start.append(start[-1] + len(shifted))
    ints["range_start"] = np.array(start)
    floats["range_top"], floats["range_row"] = np.concatenate(tops), np.vstack(rows).ravel()


def _modes(modes: list[Modes], ints: dict, floats: dict) -> None:
    ladders = [ladder for m in modes for ladder in m.ladders]
    ints["oscillator_start"] = np.cumsum([0] + [len(m.oscillators) for m in modes])
    ints["ladder_start"] = np.cumsum([0] + [len(m.ladders) for m in modes])
    ints["level_start"] = np.cumsum([0] + [len(ladder) for ladder in ladders])
    floats["oscillator"] = np.array([pair for m in modes for pair in m.oscillators]).ravel()
    floats["level"] = np.array([level for ladder in ladders for level in ladder]).ravel()


def _reduction(mechanism: Mechanism, ints: dict, floats: dict) -> np.ndarray:
    """Element terms alpha/T + beta, (N, 2), that bring g/RT near zero; being sums over elements they change no K."""
    atoms = mechanism.element_matrix.T
    design = np.vstack([np.hstack([atoms / t, atoms]) for t in _REDUCTION_TEMPERATURES])
    g = np.concatenate([g_over_RT(ints, floats, t)[: len(atoms)] for t in _REDUCTION_TEMPERATURES])
    weights = np.linalg.lstsq(design, g, rcond=None)[0]
    m = atoms.shape[1]
    return np.column_stack([atoms @ weights[:m], atoms @ weights[m:]])


def g_over_RT(ints: dict, floats: dict, temperature: float) -> np.ndarray:
    """g°/RT of all species, and behind them transition states, in plain NumPy, so that reading a file compiles nothing."""
    first, T = ints["range_start"][:-1], temperature
    place = first + np.add.reduceat(floats["range_top"] <= T, first, dtype=int)
    a = floats["range_row"].reshape(-1, 9)[place].T
    h = -a[0] / T**2 + a[1] * np.log(T) / T + a[2] + a[3] * T / 2 + a[4] * T**2 / 3 + a[5] * T**3 / 4 + a[6] * T**4 / 5
    s = -a[0] / (2 * T**2) - a[1] / T + a[2] * np.log(T) + a[3] * T + a[4] * T**2 / 2 + a[5] * T**3 / 3 + a[6] * T**4 / 4
    return h + a[7] / T - s - a[8] + _g_of_modes(ints, floats, T)


def _g_of_modes(ints: dict, floats: dict, T: float) -> np.ndarray:
    theta, count = floats["oscillator"].reshape(-1, 2).T
    oscillators = count * np.log(-np.expm1(-theta / T))
    theta, weight = floats["level"].reshape(-1, 2).T
    ladders = -np.log(_sums(weight * np.exp(-theta / T), ints["level_start"]))
    return _sums(oscillators, ints["oscillator_start"]) + _sums(ladders, ints["ladder_start"])


def _sums(values: np.ndarray, start: np.ndarray) -> np.ndarray:
    """Sums over the consecutive stretches that begin at `start`, whose last entry is the end."""
    return np.array([values[a:b].sum() for a, b in itertools.pairwise(start)])
