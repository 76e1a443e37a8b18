"""f and J of the compiled kernels against the plain NumPy statement of reference.py, every law, all four closures."""

import os
import subprocess
import sys

import numpy as np
import pytest

from bothways import Equations, build_mechanism, read_mechanism
from bothways.constants import GAS_CONSTANT
from bothways.contents import Contents
from bothways.mechanism import build_tables, table_view
from invented import building_blocks, building_blocks_as_published, building_blocks_in_molecules
from invented_laws import every_law, every_law_as_published, every_law_in_molecules
from invented_lumped import lumped_steps
from invented_molecules import molecules
from reference_molecules import MolecularReference as Reference

SETS = {
    "invented": building_blocks,
    "invented, as published": building_blocks_as_published,
    "invented, in molecules": building_blocks_in_molecules,
    "every law": every_law,
    "every law, as published": every_law_as_published,
    "every law, in molecules": every_law_in_molecules,
    "lumped steps": lumped_steps,
    "molecules": molecules,
    **{name: (lambda name=name: read_mechanism(name).to_dict()) for name in ("hydrogen-oxygen", "methane", "c1-c4", "n-alkanes")},
}
CLOSURES = [(holds, heat) for holds in ("volume", "pressure") for heat in ("isothermal", "adiabatic")]
PRESSURE = 3.0e5
_made: dict = {}


def pair(name):
    """The mechanism and its reference, made once."""
    if name not in _made:
        document = SETS[name]()
        _made[name] = build_mechanism(document), Reference(document, np.longdouble), Reference(document)
    return _made[name]


def equations_of(mechanism, holds, heat, own=0.0):
    return Equations(mechanism, holds, heat, PRESSURE if holds == "pressure" else 0.0, own)


def states(n, holds, count, seed):
    """Random plain states: amounts over many decades, and in every other one species that are absent."""
    rng = np.random.default_rng(seed)
    for k in range(count):
        part = 10.0 ** rng.uniform(-12, 1, n)
        if k % 2:
            part[rng.random(n) < 0.4] = 0.0
            part[int(rng.integers(n))] = 1.0
        yield np.append(part, rng.uniform(320.0, 2900.0))


@pytest.mark.parametrize("holds, heat", CLOSURES)
@pytest.mark.parametrize("name", SETS)
def test_f_agrees_with_the_reference(name, holds, heat):
    """1e-12 of the sum of absolute contributions; the reference is worked out in extended precision."""
    mechanism, exact, _ = pair(name)
    own = 7.0 if heat == "adiabatic" else 0.0
    equations = equations_of(mechanism, holds, heat, own)
    for y in states(len(mechanism.species), holds, 6 if name == "n-alkanes" else 20, seed=11):
        ours = equations.f(0.0, y)
        theirs, scale = exact.derivative(y.astype(np.longdouble), holds, heat, PRESSURE, own)
        assert np.all(np.abs(ours - theirs) <= 1e-12 * scale + 1e-300)


@pytest.mark.parametrize("holds, heat", CLOSURES)
@pytest.mark.parametrize("name", SETS)
def test_J_agrees_with_complex_step_differences(name, holds, heat):
    """1e-8 of the largest entry of each column."""
    mechanism, _, reference = pair(name)
    own = 7.0 if heat == "adiabatic" else 0.0
    equations = equations_of(mechanism, holds, heat, own)
    for y in states(len(mechanism.species), holds, 2 if name == "n-alkanes" else 6, seed=5):
        ours, theirs = equations.J(0.0, y), reference.jacobian(y, holds, heat, PRESSURE, own)
        scale = np.max(np.abs(theirs), axis=0)
        assert np.all(np.abs(ours - theirs) <= 1e-8 * scale)


ALONE = [document | {"reaction": [entry]} for document in (building_blocks(), every_law(), lumped_steps(), molecules())
         for entry in document["reaction"]]


@pytest.mark.parametrize("document", ALONE, ids=[one["reaction"][0]["equation"] for one in ALONE])
def test_each_reaction_alone_agrees_with_the_reference(document):
    """No fast reaction hides a slow one: forward and reverse rate to 1e-12 of themselves, f and J as above."""
    mechanism, exact = build_mechanism(document), Reference(document, np.longdouble)
    rng = np.random.default_rng(21)
    for k in range(12):
        y = np.append(10.0 ** rng.uniform(-4, 1, len(mechanism.species)), rng.uniform(320.0, 2900.0))
        wide, (holds, heat), pressure = y.astype(np.longdouble), CLOSURES[k % 4], 10.0 ** rng.uniform(3.0, 8.2)
        equations = Equations(mechanism, holds, heat, pressure if holds == "pressure" else 0.0, 0.0)
        theirs, scale = exact.derivative(wide, holds, heat, pressure)
        assert np.all(np.abs(equations.f(0.0, y) - theirs) <= 1e-12 * scale)
        J = exact.jacobian(wide, holds, heat, pressure)
        size = np.max(np.abs(J), axis=0) + 1e-5 * np.max(scale) / np.sum(y[:-1])  # a column may be a difference that is 0
        assert np.all(np.abs(equations.J(0.0, y) - J) <= 1e-8 * size)
        if holds == "volume":
            for rate, right in zip(equations.reaction_rates(y), exact.net_rates(wide[:-1], wide[-1]), strict=True):
                assert rate == pytest.approx(float(right[0]), rel=1e-12, abs=1e-300)


@pytest.mark.parametrize("holds, heat", CLOSURES)
@pytest.mark.parametrize("name", ["invented", "every law", "methane"])
def test_sparse_and_bordered_forms_are_the_same_system(name, holds, heat):
    """J on its own pattern equals the dense one; eliminating the border gives the plain f and J."""
    mechanism, _, _ = pair(name)
    equations = equations_of(mechanism, holds, heat)
    n = len(mechanism.species)
    for y in states(n, holds, 4, seed=3):
        dense = equations.J(0.0, y)
        assert np.array_equal(equations.J_sparse(0.0, y).toarray(), dense)
        z = equations.bordered_state(y)
        F, B = equations.bordered_f(0.0, z), equations.bordered_J(0.0, z).toarray()
        plain = [*range(n), n + 1]
        assert abs(F[n]) <= 1e-14 * np.sum(y[:n])
        assert np.allclose(F[plain], equations.f(0.0, y), rtol=1e-13, atol=0)
        kept, taken = B[np.ix_(plain, plain)], np.outer(B[plain, n], B[n, plain]) / B[n, n]
        round_off = 1e-15 * (np.abs(kept) + np.abs(taken))  # where the two cancel, that of their difference stays
        assert np.all(np.abs(kept - taken - dense) <= 1e-12 * np.max(np.abs(dense), axis=0) + round_off + 1e-300)


@pytest.mark.parametrize("holds", ["volume", "pressure"])
def test_bordered_jacobian_by_differences(holds):
    """The border's own column and row, which the plain form does not show, against central differences."""
    equations = equations_of(read_mechanism("methane"), holds, "adiabatic")
    y = np.append(np.linspace(0.1, 1.0, 53), 1500.0)
    z = equations.bordered_state(y) * np.append(np.ones(53), [1.03, 1.0])
    B = equations.bordered_J(0.0, z).toarray()
    for k in (0, 13, 52, 53, 54):
        h = 1e-5 * z[k]
        up, down = z.copy(), z.copy()
        up[k], down[k] = z[k] + h, z[k] - h
        slope = (equations.bordered_f(0.0, up) - equations.bordered_f(0.0, down)) / (2 * h)
        assert np.all(np.abs(slope - B[:, k]) <= 1e-7 * np.max(np.abs(B[:, k])))


def test_elements_are_left_null_vectors_of_f_and_J():
    """What a Rosenbrock or Newton step needs to keep elements to round-off."""
    mechanism = read_mechanism("c1-c4")
    equations = equations_of(mechanism, "volume", "adiabatic")
    y = np.append(np.full(111, 0.3), 1700.0)
    J, atoms = equations.J(0.0, y)[:-1], mechanism.element_matrix
    assert np.all(np.abs(atoms @ J) <= 1e-13 * (np.abs(atoms) @ np.abs(J)))


def test_net_rates_vanish_to_round_off_at_equilibrium():
    """Compositions a_i = Π exp(λ_e)^atoms are at equilibrium with every reaction, whatever its law."""
    mechanism = read_mechanism("methane")
    equations = equations_of(mechanism, "volume", "isothermal")
    T = 1600.0
    g = Contents(mechanism).molar(T)[0]
    rng = np.random.default_rng(2)
    for _ in range(5):
        multipliers = np.linalg.lstsq(mechanism.element_matrix.T, g, rcond=None)[0] + rng.normal(0, 1.0, 5)
        c = np.exp(mechanism.element_matrix.T @ multipliers - g) * mechanism.standard_pressure / (GAS_CONSTANT * T)
        forward, reverse = equations.reaction_rates(np.append(c, T))
        assert np.all(np.abs(forward - reverse) <= 3e-13 * forward)


def test_a_wrong_reverse_rate_is_seen():
    """Negative control: a species potential shifted by 1 J/mol moves f beyond what the comparison allows."""
    document = building_blocks()
    mechanism = build_mechanism(document)
    reacting = {name for r in mechanism.reactions for name in r.net}
    k = next(mechanism.index(n) for n in sorted(reacting)
             if document["species"][n]["potential"]["form"] == "constant heat capacity")
    equations = equations_of(mechanism, "volume", "isothermal")
    tables = build_tables(mechanism)
    row = table_view(tables, "range_start")[k]
    table_view(tables, "range_row")[9 * row + 7] += 1.0 / 8.314
    object.__setattr__(equations, "tables", tables)
    y = next(states(len(mechanism.species), "volume", 1, seed=1))
    exact, scale = Reference(document, np.longdouble).derivative(y.astype(np.longdouble), "volume", "isothermal")
    assert np.any(np.abs(equations.f(0.0, y) - exact) > 1e-12 * scale)


def test_states_without_meaning_give_nan_and_not_a_crash():
    equations = equations_of(read_mechanism("hydrogen-oxygen"), "volume", "adiabatic")
    for T in (np.nan, np.inf, -5.0, 0.0, 1e9):
        y = np.append(np.ones(13), T)
        assert np.all(np.isnan(equations.f(0.0, y))) and np.all(np.isnan(equations.J(0.0, y)))


SCRIPT = """
import numpy as np
from bothways import Equations, build_mechanism
from invented import building_blocks
from invented_laws import every_law
for m in (build_mechanism(building_blocks()), build_mechanism(every_law())):
    n = len(m.species)
    for holds in ("volume", "pressure"):
        e = Equations(m, holds, "adiabatic", 2e5)
        y = np.append(np.linspace(0.0, 1.0, n), 900.0)
        bordered = e.bordered_J(0.0, e.bordered_state(y)).data
        print(*(x.tobytes().hex() for x in (e.f(0.0, y), e.J(0.0, y), bordered)))
"""


@pytest.mark.parametrize("switch", [{"NUMBA_BOUNDSCHECK": "1"}, {"NUMBA_DISABLE_JIT": "1"}])
def test_bounds_are_kept_and_interpreted_kernels_agree(switch, tmp_path):
    """The same kernels with bounds checked, and interpreted: indices stay inside, and nothing hangs on the compiler."""
    def run(extra):
        environment = {**os.environ, **extra, "PYTHONPATH": os.pathsep.join(sys.path)}
        done = subprocess.run([sys.executable, "-c", SCRIPT], env=environment, capture_output=True, text=True, check=True)
        return [np.frombuffer(bytes.fromhex(word)) for word in done.stdout.split()]

    for plain, other in zip(run({}), run({**switch, "NUMBA_CACHE_DIR": str(tmp_path)}), strict=True):
        assert np.allclose(plain, other, rtol=1e-12, atol=1e-12 * np.max(np.abs(plain)))


@pytest.mark.parametrize("fraction", [1e-3, 1e-9, 1e-15])
def test_partners_beside_much_of_a_species_that_is_none(fraction):
    """A species of efficiency 0 makes up nearly all: [M] must come from the rest, not from a difference of totals."""
    mechanism, exact, _ = pair("invented")
    y = np.append(np.full(len(mechanism.species), fraction), 900.0)
    y[mechanism.index("QX2")] = 1.0
    forward, _ = equations_of(mechanism, "volume", "isothermal").reaction_rates(y)
    theirs, _ = exact.net_rates(y[:-1].astype(np.longdouble), np.longdouble(900.0))
    j = [str(r.equation) for r in mechanism.reactions].index("Q + X ⇌ QX")
    assert abs(forward[j] / theirs[j] - 1) < 1e-12
