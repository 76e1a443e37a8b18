"""What is conserved, which species are possible, and how species are formed from components: all exact."""

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import linprog

from bothways import InputError, bundled_mechanisms
from bothways.components import Components
from bothways.equilibrium import (
    combination_text,
    conserved_by_elements,
    conserved_by_reactions,
    equilibrium,
    extra_conserved,
)
from bothways.equilibrium.possible import possible_species
from equilibria import ATM, R, amounts, balanced, contents, of_known_potentials


def _rank(rows: np.ndarray) -> int:
    return int(np.linalg.matrix_rank((rows @ rows.T).astype(float), hermitian=True)) if rows.size else 0


def _texts(mechanism):
    return [combination_text(mechanism, row) for row in extra_conserved(mechanism)]


@pytest.mark.parametrize("name", bundled_mechanisms())
def test_conserved_rows_of_bundled_mechanisms(name):
    """No reaction changes them, they are as many as the stoichiometry leaves, and as many elements as are independent come
    first: of butenes alone, C and H are one condition, not two."""
    mechanism = contents(name).mechanism
    rows, elements = conserved_by_reactions(mechanism), conserved_by_elements(mechanism)
    assert rows.dtype == elements.dtype == np.int64
    assert not np.any(rows @ mechanism.stoichiometry) and not np.any(elements @ mechanism.stoichiometry)
    assert len(rows) == _rank(rows) == len(mechanism.species) - _rank(mechanism.stoichiometry)
    first, rest = np.split(rows, [_rank(elements)])
    places = [elements.tolist().index(row) for row in first.tolist()]
    assert places == sorted(places) and _rank(first) == len(first)
    assert np.array_equal(rest, extra_conserved(mechanism))
    assert np.max(np.abs(rows)) <= 40


def test_extra_conserved_of_bundled_mechanisms():
    """CO is a collision partner only in the hydrogen set; species that stand in no reaction in the larger ones."""
    texts = {name: _texts(contents(name).mechanism) for name in bundled_mechanisms()}
    assert texts["hydrogen-oxygen"] == ["CO"] and texts["methane"] == []
    assert texts["c1-c4"] == ["C6H5C2H"]
    assert sorted(texts["n-alkanes"]) == ["C2H5-4-1C7H13", "C3H7-3-1C6H11", "CH3-4-1C8H15"]


HYDROGEN = {"H2": ({"H": 2}, 0.0), "O2": ({"O": 2}, 0.0), "H": ({"H": 1}, 1e5), "O": ({"O": 1}, 1e5),
            "OH": ({"O": 1, "H": 1}, 2e4), "H2O": ({"H": 2, "O": 1}, -2e5)}
EXTRA = {
    "all linked": (("H2 = 2 H", "O2 = 2 O", "H + O = OH", "H + OH = H2O"), []),
    "number of molecules": (("H + O2 = OH + O", "O + H2 = OH + H", "OH + H2 = H2O + H"), ["amount of all species"]),
    "numbers of molecules in part": (("H + O2 = OH + O", "OH + H2 = H2O + H"), ["amount of all species", "H2 + H2O"]),
    "two groups": (("H2 = 2 H", "O2 = 2 O"), ["OH", "H2O"]),
    "one reaction": (("2 H2 + O2 = 2 H2O",), ["H", "O", "OH"]),
}


@pytest.mark.parametrize("case", EXTRA)
def test_extra_conserved_as_chemistry(case):
    """The plainest combinations: single species where there are some, no negative numbers where they can be avoided."""
    reactions, expected = EXTRA[case]
    mechanism = of_known_potentials(1000.0, HYDROGEN, reactions)
    rows = conserved_by_reactions(mechanism)
    assert not np.any(rows @ mechanism.stoichiometry)
    assert len(rows) == len(HYDROGEN) - _rank(mechanism.stoichiometry)
    assert _texts(mechanism) == expected


def test_nothing_reacts():
    mechanism = of_known_potentials(1000.0, HYDROGEN)
    assert np.array_equal(conserved_by_reactions(mechanism), np.eye(6))
    found = equilibrium(mechanism, {"H2": 2.0, "O2": 1.0}, temperature=1000.0, pressure=ATM, conserved="reactions")
    assert np.array_equal(found.amount, amounts(mechanism, {"H2": 2.0, "O2": 1.0}))


def test_texts():
    mechanism = of_known_potentials(1000.0, HYDROGEN)
    assert combination_text(mechanism, np.array([1, 0, 0, 0, 0, 0])) == "H2"
    assert combination_text(mechanism, np.array([2, 0, 0, 0, 0, 0])) == "H2"
    assert combination_text(mechanism, np.array([0, 2, 0, 1, 0, -3])) == "2 O2 + O - 3 H2O"
    assert combination_text(mechanism, conserved_by_elements(mechanism)[0]) == "atoms of H"
    large = contents("methane").mechanism
    every_second = (np.arange(53) % 2).astype(int)
    assert combination_text(large, every_second).endswith("+ … (26 species)")


def test_elements_and_reactions_part_where_a_species_is_left_out():
    """With N2 linked to nothing, NO cannot form: x(NO) is 0 for the reactions, and what K says for the elements."""
    species = HYDROGEN | {"N2": ({"N": 2}, 0.0), "NO": ({"N": 1, "O": 1}, 7e4)}
    mechanism = of_known_potentials(2000.0, species, ("H2 = 2 H", "O2 = 2 O", "H + O = OH", "H + OH = H2O"))
    charge = {"O2": 1.0, "N2": 4.0}
    whole = equilibrium(mechanism, charge, temperature=2000.0, pressure=1e5)
    kept = equilibrium(mechanism, charge, temperature=2000.0, pressure=1e5, conserved="reactions")
    assert _texts(mechanism) == ["N2"]
    assert kept.fraction("NO") == 0.0 and kept.amount[mechanism.index("N2")] == pytest.approx(4.0, rel=1e-15)
    K = np.exp(-7e4 / (R * 2000.0))
    assert whole.fraction("NO") / np.sqrt(whole.fraction("N2") * whole.fraction("O2")) == pytest.approx(K, rel=1e-12)


CORNERS = {
    # with neither hydrogen nor a richer species in the list, methane has nothing to turn into
    "richest in H": ({"CH4": ({"C": 1, "H": 4}, 0.0), "C2H6": ({"C": 2, "H": 6}, 0.0), "C2H4": ({"C": 2, "H": 4}, 0.0)},
                     {"CH4": 1.0}, {"CH4"}),
    "between": ({"CH4": ({"C": 1, "H": 4}, 0.0), "C2H6": ({"C": 2, "H": 6}, 0.0), "C2H4": ({"C": 2, "H": 4}, 0.0)},
                {"C2H6": 1.0}, {"CH4", "C2H6", "C2H4"}),
    "two open directions": ({"CO": ({"C": 1, "O": 1}, 0.0), "CO2": ({"C": 1, "O": 2}, 0.0), "O2": ({"O": 2}, 0.0),
                             "H2": ({"H": 2}, 0.0), "H2O": ({"H": 2, "O": 1}, 0.0), "CH4": ({"C": 1, "H": 4}, 0.0)},
                            {"CH4": 1.0, "O2": 1e-12}, {"CH4", "O2", "CO", "CO2", "H2", "H2O"}),
    "dependent elements": ({"CO": ({"C": 1, "O": 1}, 0.0), "C2O2": ({"C": 2, "O": 2}, 0.0)}, {"CO": 1.0}, {"CO", "C2O2"}),
}


@pytest.mark.parametrize("case", CORNERS)
def test_corners(case):
    """What the totals force to nil is exactly 0, the rest positive, and the totals are kept."""
    species, charge, possible = CORNERS[case]
    mechanism = of_known_potentials(1000.0, species)
    for held in ({"pressure": ATM}, {"volume": 1e-3}):
        found = equilibrium(mechanism, charge, temperature=1000.0, **held)
        assert {name for name, n in zip(mechanism.names, found.amount, strict=True) if n > 0} == possible
        assert balanced(found.conserved, amounts(mechanism, charge), found.amount, 1e-14)
        assert found.potential_residual < 1e-12


def test_ions():
    """Charge is conserved like an element, though of either sign: H2 = 2 H and H2 = H+ + H-, each by its K."""
    gibbs = {"H2": 0.0, "H": 3e4, "H+": 5e4, "H-": 4e4}
    numbers = {"H2": 2, "H": 1, "H+": 1, "H-": 1}
    mechanism = of_known_potentials(2000.0, {name: ({"H": numbers[name]}, gibbs[name]) for name in gibbs},
                                    charge={"H+": 1, "H-": -1})
    x = equilibrium(mechanism, {"H2": 1.0}, temperature=2000.0, pressure=1e5)
    RT = R * 2000.0
    assert x.fraction("H") ** 2 / x.fraction("H2") == pytest.approx(np.exp(-6e4 / RT), rel=1e-12)
    assert x.fraction("H+") * x.fraction("H-") / x.fraction("H2") == pytest.approx(np.exp(-9e4 / RT), rel=1e-12)
    assert x.fraction("H+") == pytest.approx(x.fraction("H-"), rel=1e-14)
    charged = equilibrium(mechanism, {"H2": 1.0, "H+": 0.5}, temperature=2000.0, volume=1.0)
    assert charged.amount[2] - charged.amount[3] == pytest.approx(0.5, rel=1e-14)


small = st.integers(min_value=-2, max_value=3)


@settings(max_examples=150, deadline=None)
@given(st.integers(2, 4).flatmap(lambda m: st.lists(st.lists(small, min_size=m, max_size=m), min_size=m, max_size=8)),
       st.sets(st.integers(0, 7), min_size=1, max_size=3))
def test_possible_species_by_linear_programming(columns, charged):
    """The largest amount of each species that the totals allow is positive exactly where the species is possible."""
    rows = np.array(columns).T
    n = np.zeros(rows.shape[1])
    n[[k % rows.shape[1] for k in charged]] = 1.0
    allowed, components = possible_species(rows, n)
    for k, possible in enumerate(allowed):
        objective = -(np.arange(n.size) == k).astype(float)
        best = linprog(objective, A_eq=rows, b_eq=rows @ n, bounds=(0, 1e3))
        assert (-best.fun > 1e-6) == possible
    inner = rows[:, allowed]
    assert components.basis.size == _rank(inner)
    _check_formation(components, inner)


def _check_formation(components: Components, rows: np.ndarray) -> None:
    """Each column is the sum of its components' columns, exactly."""
    formation = [[Fraction(int(v), int(components.divisor)) for v in row] for row in components.numbers]
    for j in range(rows.shape[1]):
        for row in rows.tolist():
            assert sum(formation[k][j] * row[b] for k, b in enumerate(components.basis.tolist())) == row[j]


@settings(max_examples=60, deadline=None)
@given(st.lists(st.lists(st.integers(-40, 40), min_size=4, max_size=4), min_size=6, max_size=9), st.integers(0, 2**31))
def test_exchanges_stay_exact(columns, seed):
    """After many exchanges the numbers are still the formation of every species, to the last digit."""
    rows, random = np.array(columns).T, np.random.default_rng(seed)
    components = Components(rows, np.arange(rows.shape[1]))
    for _ in range(30):
        choices = np.argwhere(components.numbers != 0)
        if choices.size == 0:
            break
        k, j = choices[random.integers(len(choices))]
        if j not in components.basis:
            components.exchange(int(k), int(j))
    _check_formation(components, rows)


def test_large_numbers_leave_machine_integers():
    """Minors beyond 64 bits are kept exact as well."""
    rows = np.array([[10**9 + 7, 3, 5, 1], [2, 10**9 + 9, 7, 1], [1, 8, 10**9 + 21, 1]])
    components = Components(rows, np.array([0, 1, 2, 3]))
    _check_formation(components, rows)
    fourth = [3.0 * float(Fraction(int(v), int(components.divisor))) for v in components.numbers[:, 3]]
    totals = components.totals(np.array([1.0, 2.0, 0.25, 3.0]))
    assert totals == pytest.approx(np.array([1.0, 2.0, 0.25]) + fourth, rel=1e-15)


def test_totals_are_exact_differences():
    """2 mol H2 with 1 mol O2 leave nothing beside H2O; the next number after 2 leaves just its excess."""
    rows = np.array([[2, 0, 2], [0, 2, 1]])
    components = Components(rows, np.array([2, 0, 1]))
    assert components.totals(np.array([2.0, 1.0, 0.0])).tolist() == [2.0, 0.0]
    assert components.totals(np.array([np.nextafter(2.0, 3.0), 1.0, 0.0])).tolist() == [2.0, np.spacing(2.0)]


@settings(max_examples=100, deadline=None)
@given(st.lists(st.lists(st.integers(-40, 40), min_size=3, max_size=3), min_size=4, max_size=8),
       st.lists(st.floats(1e-30, 1e3), min_size=8, max_size=8))
def test_totals_are_correct_to_the_last_digit(columns, charge):
    components = Components(np.array(columns).T, np.arange(len(columns)))
    totals = components.totals(np.array(charge[: len(columns)]))
    for row, total in zip(components.numbers.tolist(), totals, strict=True):
        exact = sum(a * Fraction(c) for a, c in zip(row, charge, strict=False)) / int(components.divisor)
        assert total == pytest.approx(float(exact), rel=3e-16, abs=0.0)


LESS_NITROGEN = np.where(np.arange(7)[:, None] == 2, 1, conserved_by_reactions(contents("hydrogen-oxygen").mechanism))
BAD_ROWS = {
    "no such word": ("atoms", r"conserved 'atoms'; expected elements, reactions or a matrix"),
    "wrong width": (np.eye(3), r"shape \(3, 3\); expected rows of 13 integers"),
    "a species left out": (np.eye(13)[:12], r"species '.*' holds nothing that is conserved|does not conserve element"),
    "no integers": (np.full((1, 13), 0.5), r"no integers"),
    "an element left out": (LESS_NITROGEN, r"does not conserve element N; expected rows that imply every element"),
}


@pytest.mark.parametrize("fault", BAD_ROWS)
def test_bad_conserved_rows_are_refused(fault):
    conserved, message = BAD_ROWS[fault]
    mechanism = contents("hydrogen-oxygen").mechanism
    with pytest.raises(InputError, match=message):
        equilibrium(mechanism, {"H2": 1.0}, temperature=1000.0, pressure=ATM, conserved=conserved)


def test_conserved_rows_of_ones_own():
    """Rows that keep H2O2 apart besides the elements: as if no reaction led there."""
    mechanism = contents("hydrogen-oxygen").mechanism
    rows = np.vstack([conserved_by_elements(mechanism), np.array(mechanism.names) == "H2O2"])
    charge = {"H2": 1.0, "H2O2": 0.1}
    found = equilibrium(mechanism, charge, temperature=1000.0, pressure=ATM, conserved=rows)
    assert found.amount[mechanism.index("H2O2")] == pytest.approx(0.1, rel=1e-14)
    assert equilibrium(mechanism, charge, temperature=1000.0, pressure=ATM).fraction("H2O2") < 1e-9


def test_a_solution_has_no_pressure():
    mechanism = replace(contents("hydrogen-oxygen").mechanism, phase="ideal solution", standard_state="1 mol/L")
    with pytest.raises(InputError, match="given: temperature, pressure; expected temperature with volume, or enthalpy"):
        equilibrium(mechanism, {"H2": 1.0}, temperature=300.0, pressure=ATM)
