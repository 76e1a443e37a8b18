"""The collision limit itself, against numbers from outside."""

import numpy as np
import pytest

from bothways import read_mechanism
from bothways.audit.collisions import collision_constant, collision_integral
from bothways.audit.diameters import RULE, STATED, TABLE, estimate, size
from bothways.mechanism.elements import ATOMIC_MASS, parse_formula

L_PER_M3 = 1e3
# Lennard-Jones diameters [Å] of Poling, Prausnitz, O'Connell 2001, app. B, and molar masses [g/mol] from IUPAC 2021
SIGMA = {"N2": (3.798, 28.014), "H2": (2.827, 2.016), "O2": (3.467, 31.998), "I2": (5.160, 253.80894),
         "HI": (4.211, 127.91247), "NO": (3.492, 30.006)}
# π d² √(8 k_B T/πμ) in L/(mol s), closed form evaluated with 30 digits; for like molecules without the factor 1/2
HARD_SPHERES = [("N2", "N2", 298.15, 1.832072636e11), ("H2", "O2", 300.0, 3.428974147e11), ("H2", "O2", 1000.0, 6.260421631e11),
                ("H2", "I2", 700.0, 8.213287802e11), ("HI", "HI", 700.0, 1.614975666e11), ("O2", "N2", 300.0, 1.627908044e11),
                ("NO", "O2", 298.15, 1.462457983e11)]


@pytest.mark.parametrize("a, b, T, expected", HARD_SPHERES)
def test_hard_spheres(a: str, b: str, T: float, expected: float) -> None:
    (d1, m1), (d2, m2) = SIGMA[a], SIGMA[b]
    d, mu = 0.5e-10 * (d1 + d2), 1e-3 * m1 * m2 / (m1 + m2)
    assert float(collision_constant(T, d, mu)) * L_PER_M3 == pytest.approx(expected, rel=1e-9)
    assert float(collision_constant(T, d, mu, like=True)) * L_PER_M3 == pytest.approx(0.5 * expected, rel=1e-9)


def test_the_textbook_collision_of_hydrogen_and_ethene() -> None:
    """σ = 0.46 nm² at 628 K: 7.365e11 L/(mol s) (Atkins, Physical Chemistry, table of collision theory; from memory)."""
    d, mu = np.sqrt(0.46e-18 / np.pi), 1e-3 * 2.016 * 28.054 / 30.070
    assert float(collision_constant(628.0, d, mu)) * L_PER_M3 == pytest.approx(7.365e11, rel=1e-3)


@pytest.mark.parametrize("reduced, expected", [(1.0, 1.593), (2.0, 1.176), (5.0, 0.9268), (10.0, 0.8244)])
def test_collision_integral(reduced: float, expected: float) -> None:
    """Tabulated by Hirschfelder, Curtiss and Bird 1954, table I-M, as revised by L. Monchick, E.A. Mason, J. Chem. Phys. 35
    (1961) 1676, doi:10.1063/1.1732130 (values from memory)."""
    assert float(collision_integral(np.array(reduced))) == pytest.approx(expected, rel=3e-3)


CAS = {"H2": "1333-74-0", "O2": "7782-44-7", "N2": "7727-37-9", "CO": "630-08-0", "CO2": "124-38-9", "CH4": "74-82-8",
       "C2H2": "74-86-2", "C2H4": "74-85-1", "C2H6": "74-84-0", "H2O": "7732-18-5", "H2O2": "7722-84-1", "NO": "10102-43-9",
       "N2O": "10024-97-2", "NH3": "7664-41-7", "HCN": "74-90-8", "AR": "7440-37-1", "C3H8": "74-98-6"}


@pytest.mark.parametrize("name", CAS)
def test_table_of_diameters_is_that_of_a_library(name: str) -> None:
    """Poling et al. as a property library carries them."""
    from chemicals.lennard_jones import Stockmayer, molecular_diameter

    m = read_mechanism("methane")
    d, depth, origin = size(m.species[m.index(name)])
    method = "Poling et al. (2001)"
    expected = molecular_diameter(CASRN=CAS[name], method=method), Stockmayer(CASRN=CAS[name], method=method)
    assert (d * 1e10, depth) == pytest.approx(expected, rel=1e-12) and origin == TABLE


# Poling et al. 2001, app. B [Å]: what the rule for other molecules should come near
@pytest.mark.parametrize("formula, diameter", [
    ("CH4", 3.758), ("C2H2", 4.033), ("C2H4", 4.163), ("C2H6", 4.443), ("C3H6", 4.678), ("C3H8", 5.118), ("C5H12", 5.784),
    ("C6H14", 5.949), ("C6H6", 5.349), ("C6H12", 6.182)])
def test_the_rule_for_diameters(formula: str, diameter: float) -> None:
    assert estimate(parse_formula(formula, ATOMIC_MASS))[0] * 1e10 == pytest.approx(diameter, rel=0.15)


def test_a_stated_diameter_counts_before_the_table() -> None:
    document = read_mechanism("hydrogen-oxygen").to_dict()
    document["species"]["H2"]["collision_diameter"] = "3 Å"
    from bothways import build_mechanism

    m = build_mechanism(document)
    assert size(m.species[m.index("H2")]) == (pytest.approx(3e-10), 0.0, STATED)
    assert size(m.species[m.index("O2")])[2] == TABLE and size(m.species[m.index("HO2")])[2] == RULE
