"""Partners, equations, formulas, charges: how the parts of a mechanism are read."""

from typing import Any

import numpy as np
import pytest

import invented
from bothways import InputError, Mechanism, build_mechanism
from bothways.mechanism.elements import ATOMIC_MASS, parse_formula


def small(**changes: Any) -> Mechanism:
    """One reaction of two invented species and an inert one."""
    common = {"form": "constant heat capacity", "at": 500.0, "H": 1.0, "S": 20.0, "cp": 40.0}
    species = {name: {"composition": {"Q": n}, "potential": common} for name, n in (("A", 1), ("A2", 2), ("Z", 3))}
    entry = {"equation": "2 A + M ⇌ A2 + M", "forward": {"law": "Arrhenius", "A": 5.0}} | changes
    head = {"name": "x", "phase": "ideal gas", "standard_pressure": "1 bar"}
    return build_mechanism({"mechanism": head, "elements": {"Q": 0.01}, "species": species, "reaction": [entry]})


FALL_OFF = {"equation": "2 A ⇌ A2", "forward": {"law": "Lindemann", "k_inf": {"A": 1.0}, "k_0": {"A": 1.0}}}


@pytest.mark.parametrize("changes, default, efficiency", [
    ({}, 1.0, {}), ({"collision_efficiency": {"Z": 0.0, "A2": 2.5}}, 1.0, {"Z": 0.0, "A2": 2.5}),
    (FALL_OFF, 1.0, {}), (FALL_OFF | {"collision_partner": "Z"}, 0.0, {"Z": 1.0}), ({"collision_efficiency": {}}, 1.0, {}),
    (FALL_OFF | {"collision_efficiency": {"A": 0}}, 1.0, {"A": 0.0})])
def test_partners(changes: dict, default: float, efficiency: dict) -> None:
    """1 where not named; 0 takes a species out; a single partner takes all others out."""
    partner = small(**changes).reactions[0].terms[0].partner
    assert partner.default == default and dict(partner.efficiency) == efficiency


def test_a_named_partner_in_the_equation_is_a_reactant() -> None:
    r = small(equation="2 A + Z ⇌ A2 + Z").reactions[0]
    assert r.terms[0].partner is None and r.net == {"A": -2, "A2": 1} and not r.equation.partner


def test_partners_of_one_term_win_over_those_of_the_entry() -> None:
    terms = [{"law": "Arrhenius", "A": 1.0}, {"law": "Arrhenius", "A": 2.0, "collision_partner": "Z"}]
    first, second = small(forward=terms, collision_efficiency={"A": 3.0}).reactions[0].terms
    assert (first.partner.default, dict(first.partner.efficiency)) == (1.0, {"A": 3.0})
    assert (second.partner.default, dict(second.partner.efficiency)) == (0.0, {"Z": 1.0})


@pytest.mark.parametrize("text, reactants, products, partner", [
    ("2 A + M ⇌ A2 + M", {"A": 2}, {"A2": 1}, True), ("A + A ⇄ A2", {"A": 2}, {"A2": 1}, False),
    ("A2 + Z = 2 A + Z", {"A2": 1, "Z": 1}, {"A": 2, "Z": 1}, False),
    ("  M  +  A2 ⇌ M + A + A ", {"A2": 1}, {"A": 2}, True)])
def test_equations(text: str, reactants: dict, products: dict, partner: bool) -> None:
    equation = small(equation=text).reactions[0].equation
    assert (dict(equation.reactants), dict(equation.products), equation.partner) == (reactants, products, partner)


# ---- formulas


@pytest.mark.parametrize("formula, atoms", [
    ("CH3OH", {"C": 1, "H": 4, "O": 1}), ("(CH3)2CO", {"C": 3, "H": 6, "O": 1}), ("C(CH3)4", {"C": 5, "H": 12}),
    ("Ni(CO)4", {"Ni": 1, "C": 4, "O": 4}), ("CO", {"C": 1, "O": 1}), ("Co", {"Co": 1}), ("D2O", {"D": 2, "O": 1}),
    ("HDO", {"H": 1, "D": 1, "O": 1}), ("Ca((OH)2)3", {"Ca": 1, "O": 6, "H": 6}), ("C12H26", {"C": 12, "H": 26}),
    ("Q2X", {"Q": 2, "X": 1}), ("He", {"He": 1}), ("HO", {"H": 1, "O": 1})])
def test_formulas(formula: str, atoms: dict[str, int]) -> None:
    assert parse_formula(formula, ATOMIC_MASS | {"Q": 0.01, "X": 0.004}) == atoms


def test_molar_masses() -> None:
    """IUPAC 2021 conventional atomic weights; deuterium 2.0141 g/mol; building blocks as stated."""
    assert ATOMIC_MASS["C"] * 7 + ATOMIC_MASS["H"] * 16 == pytest.approx(0.100205, abs=2e-9)
    assert ATOMIC_MASS["D"] == pytest.approx(2.014101778e-3, abs=1e-12)
    m = build_mechanism(invented.building_blocks())
    assert m.molar_mass[m.index("Q2X2")] == pytest.approx(0.028, rel=1e-15)


def test_charge_of_ions() -> None:
    common = {"form": "constant heat capacity", "at": 500.0, "H": 1.0, "S": 20.0, "cp": 40.0}
    species = {"A": {"formula": "Ar", "potential": common}, "A+": {"formula": "Ar", "charge": 1, "potential": common},
               "B": {"formula": "Kr", "potential": common}, "B-": {"formula": "Kr", "charge": -1, "potential": common}}
    head = {"name": "x", "phase": "ideal gas", "standard_pressure": "1 bar"}
    entry = {"equation": "A+ + B- ⇌ A + B", "forward": {"law": "Arrhenius", "A": 1.0}}
    m = build_mechanism({"mechanism": head, "species": species, "reaction": [entry]})
    assert [s.charge for s in m.species] == [0, 1, 0, -1]
    assert m.element_matrix[-1].tolist() == [0, 1, 0, -1] and not np.any(m.element_matrix @ m.stoichiometry)


def test_formation_and_absolute_entropies_do_not_mix() -> None:
    """G counts from the elements, S from zero: beside each other they would falsify every K."""
    document = invented.building_blocks()
    document["species"]["Q"]["potential"] = {"form": "constant heat capacity", "at": 298.15, "H": 230.0, "G": 186.8, "cp": 0.0212}
    with pytest.raises(InputError, match=r"Q states G \(of formation\), Z an absolute entropy"):
        build_mechanism(document)
