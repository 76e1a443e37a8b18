"""Equilibria against published ones: worked examples of textbooks, flames, dissociation, synthesis of ammonia.

[M]: printed numbers from memory of the cited work; [R]: recomputed by an independent program from the polynomials of
NASA/TP-2002-211556 or from NIST-JANAF tables.
"""

from collections.abc import Mapping, Sequence
from functools import cache

import numpy as np
import pytest

from bothways import Mechanism, build_mechanism
from bothways.contents import Contents
from bothways.equilibrium import Equilibrium, equilibrium

from .small import R, atm, bar, bundled
from .tp2002 import ROWS, potential

AIR = {"O2": 1.0, "N2": 3.76}
PRODUCTS = ("H2", "O2", "H", "O", "OH", "H2O", "HO2", "H2O2", "N2", "NO", "N", "NO2", "N2O", "NH3")


def _gas(species: Mapping[str, Mapping[str, int]], **potentials: Mapping[str, object]) -> Mechanism:
    """Species by their atoms at 1 bar, each with its own potential table or an indifferent one."""
    plain = {"form": "constant heat capacity", "at": 298.15, "H": 0.0, "S": 200.0, "cp": 40.0}
    return build_mechanism({
        "mechanism": {"name": "published", "phase": "ideal gas", "standard_pressure": "1 bar"},
        "species": {name: {"composition": dict(atoms), "potential": potentials.get(name, plain)}
                    for name, atoms in species.items()}})


@cache
def _glenn(*names: str) -> Contents:
    """Species with the potentials of NASA/TP-2002-211556."""
    return Contents(_gas({name: ROWS[name][0] for name in names}, **{name: potential(name) for name in names}))


def _at(temperature: float, gibbs: Mapping[str, tuple[Mapping[str, int], float]]) -> Mechanism:
    """Species by their atoms and their Gibbs energies of formation [kJ/mol] at one temperature [K]."""
    tables = {name: {"form": "constant heat capacity", "at": temperature, "H": 0.0, "G": 1e3 * float(value), "cp": 40.0}
              for name, (_, value) in gibbs.items()}
    return _gas({name: atoms for name, (atoms, _) in gibbs.items()}, **tables)


def _fractions(found: Equilibrium, names: Sequence[str]) -> list[float]:
    return [found.fraction(name) for name in names]


CARBON = {"CH4": {"C": 1, "H": 4}, "H2O": {"H": 2, "O": 1}, "CO": {"C": 1, "O": 1}, "CO2": {"C": 1, "O": 2}, "H2": {"H": 2},
          "O2": {"O": 2}}

# J.M. Smith, H.C. Van Ness, M.M. Abbott, Introduction to Chemical Engineering Thermodynamics, chapter on chemical-reaction
# equilibria, the example of minimised Gibbs energy [M]: 2 mol CH4 with 3 mol H2O at 1000 K and 1 bar; ΔfG° [kJ/mol].
REFORMING = {
    "as stated": ((19.720, -192.420, -200.240, -395.790), (0.0195831, 0.0979739, 0.1742706, 0.0370721, 0.6711003)),
    "JANAF": ((19.492, -192.590, -200.275, -395.886), (0.0201632, 0.0988255, 0.1740909, 0.0369296, 0.6699908)),  # [R]
}


@pytest.mark.parametrize("data", REFORMING)
def test_steam_reforming(data):
    """To the digits of the exact solution of the statement; R = 8.314 there moves x by 2e-5."""
    names = ("CH4", "H2O", "CO", "CO2", "H2")
    gibbs, expected = REFORMING[data]
    ours = [value * (R / 8.314 if data == "as stated" else 1.0) for value in gibbs]
    mechanism = _at(1000.0, {name: (CARBON[name], g) for name, g in zip(names, [*ours, 0.0], strict=True)})
    found = equilibrium(mechanism, {"CH4": 2.0, "H2O": 3.0}, temperature=1000.0, pressure=bar)
    assert _fractions(found, names) == pytest.approx(expected, abs=1e-7 if data == "as stated" else 2e-6)
    if data == "as stated":  # the book's own digits
        assert _fractions(found, names) == pytest.approx((0.0196, 0.0980, 0.1743, 0.0371, 0.6711), abs=5e-5)


# Shift CO + H2O = CO2 + H2, Shomate functions of the NIST Chemistry WebBook: ΔG°(1000 K) = -3.0080 kJ/mol, K = 1.43589
# (J. Kitchin, Water gas shift equilibria via the NIST WebBook, 2013); extent sqrt(K)/(1 + sqrt(K)) in an equimolar feed.
@pytest.mark.parametrize("pressure", [0.1 * bar, 50 * bar])
def test_water_gas_shift(pressure):
    mechanism = _at(1000.0, {"CO": (CARBON["CO"], 0.0), "H2O": (CARBON["H2O"], 0.0), "CO2": (CARBON["CO2"], -3.0080),
                             "H2": (CARBON["H2"], 0.0)})
    found = equilibrium(mechanism, {"CO": 1.0, "H2O": 1.0}, temperature=1000.0, pressure=pressure)
    CO, H2O, CO2, H2 = found.mole_fraction
    assert CO2 * H2 / (CO * H2O) == pytest.approx(1.43589, abs=1.1e-5)
    assert found.amount[2] == pytest.approx(0.54510, abs=5e-6)


# S.R. Turns, An Introduction to Combustion, Example 2.7 [M]: mole fraction of CO from CO2 at 0.1, 1, 10, 100 atm; and ΔfG°
# of CO and CO2 [kJ/mol] of the NIST-JANAF tables C-093 and C-095 (M.W. Chase Jr., 4th ed., 1998).
CO_FROM_CO2 = {1500.0: (7.755e-4, 3.601e-4, 1.672e-4, 7.76e-5), 2000.0: (0.0315, 0.0149, 6.96e-3, 3.243e-3),
               2500.0: (0.2260, 0.1210, 0.0602, 0.0289), 3000.0: (0.5038, 0.3581, 0.2144, 0.1138)}
FORMATION = {1500.0: (-243.740, -396.288), 2000.0: (-286.034, -396.333), 2500.0: (-327.358, -396.062),
             3000.0: (-367.826, -395.461)}


@pytest.mark.parametrize("T", CO_FROM_CO2)
def test_dissociation_of_carbon_dioxide(T):
    """The book's table, of an earlier edition of the data, is met within 0.4 %."""
    CO, CO2 = FORMATION[T]
    mechanism = _at(T, {"CO2": (CARBON["CO2"], CO2), "CO": (CARBON["CO"], CO), "O2": (CARBON["O2"], 0.0)})
    found = [equilibrium(mechanism, {"CO2": 1.0}, temperature=T, pressure=p * atm).fraction("CO") for p in (0.1, 1, 10, 100)]
    assert found == pytest.approx(CO_FROM_CO2[T], rel=4e-3)


# N2 + 3 H2 to ammonia, ideal gas, per cent NH3 [R] from TP-2002; beside them the measured A.T. Larson, R.L. Dodge, J. Am.
# Chem. Soc. 45 (1923) 2918 [M], which real gases meet within 8 %.
AMMONIA = {(10, 350): (7.93, 7.35), (10, 400): (4.08, 3.85), (10, 500): (1.27, 1.20), (30, 400): (10.63, 10.09),
           (50, 350): (25.77, 25.11), (50, 450): (9.48, 9.17), (100, 400): (24.97, 24.91), (100, 500): (10.47, 10.40)}


@pytest.mark.parametrize("p, celsius", AMMONIA)
def test_ammonia(p, celsius):
    ideal, measured = AMMONIA[p, celsius]
    gas = _glenn("N2", "H2", "NH3")
    found = equilibrium(gas.mechanism, {"N2": 1.0, "H2": 3.0}, temperature=celsius + 273.15, pressure=p * atm)
    assert 100 * found.fraction("NH3") == pytest.approx(ideal, abs=0.0051)
    assert 100 * found.fraction("NH3") == pytest.approx(measured, rel=0.08)


# J.M. Smith, H.C. Van Ness, M.M. Abbott, ibid., a problem on ammonia from the stoichiometric mixture: y(300 K, 1 bar),
# and T for y = 0.5 at 1 and 100 bar. Book answers [M] 0.9369, 399.5 K, 577.6 K; [R] from TP-2002 0.9344, 399.45, 578.11.
def test_ammonia_problem():
    gas, feed = _glenn("N2", "H2", "NH3"), {"N2": 1.0, "H2": 3.0}
    y = [equilibrium(gas.mechanism, feed, temperature=T, pressure=p * bar).fraction("NH3")
         for T, p in ((300.0, 1), (399.45, 1), (578.11, 100))]
    assert y == pytest.approx([0.9344, 0.5, 0.5], abs=1e-4)
    assert y == pytest.approx([0.9369, 0.5, 0.5], abs=3e-3)


# N2O4 = 2 NO2. Degree of dissociation at 1 atm [R] from TP-2002; exact arithmetic at 298.15 K for JANAF's K = 0.148428 bar
# (tables N-007 and N-032); measured L. Harris, K.L. Churney, J. Chem. Phys. 47 (1967) 1703: K(298.16 K) = 0.1452 bar.
N2O4 = {273.15: 0.0649, 298.15: 0.1842, 318.15: 0.3610, 350.0: 0.7185, 400.0: 0.9614}


@pytest.mark.parametrize("T", N2O4)
def test_dissociation_of_n2o4(T):
    found = equilibrium(_glenn("N2O4", "NO2").mechanism, {"N2O4": 1.0}, temperature=T, pressure=atm)
    assert 1 - found.amount[0] == pytest.approx(N2O4[T], abs=5.1e-5)


def test_dissociation_of_n2o4_at_held_pressure_and_volume():
    T, K = 298.15, 0.148428
    gibbs = -0.5 * R * T * np.log(K) / 1e3
    mechanism = _at(T, {"N2O4": ({"N": 2, "O": 4}, 0.0), "NO2": ({"N": 1, "O": 2}, gibbs)})
    held_p = equilibrium(mechanism, {"N2O4": 1.0}, temperature=T, pressure=atm)
    held_V = equilibrium(mechanism, {"N2O4": 1.0}, temperature=T, volume=R * T / atm)
    assert 1 - held_p.amount[0] == pytest.approx(0.187957411, abs=1e-9)
    assert 1 - held_V.amount[0] == pytest.approx(0.173931284, abs=1e-9)
    assert held_V.pressure / atm == pytest.approx(1.173931284, abs=1e-9)
    measured = equilibrium(_glenn("N2O4", "NO2").mechanism, {"N2O4": 1.0}, temperature=298.16, pressure=bar)
    K_ours = measured.fraction("NO2") ** 2 / measured.fraction("N2O4")
    assert K_ours == pytest.approx(0.1452, rel=0.03)  # ΔH of the two data sets differs by 0.2 kJ/mol


# Hot air and hot steam at 3000 K and 1 atm, mole fractions [R] from TP-2002.
HOT_AIR = {"N2": 0.75162, "O2": 0.16211, "NO": 0.040971, "O": 0.045260, "N": 1.198e-5, "NO2": 2.114e-5, "N2O": 2.288e-6}
HOT_STEAM = {"H2O": 0.64054, "H2": 0.13432, "OH": 0.098791, "H": 0.057581, "O2": 0.044941, "O": 0.023830}


@pytest.mark.parametrize("charge, expected", [({"N2": 0.79, "O2": 0.21}, HOT_AIR), ({"H2O": 1.0}, HOT_STEAM)])
def test_hot_air_and_steam(charge, expected):
    found = equilibrium(_glenn(*expected).mechanism, charge, temperature=3000.0, pressure=atm)
    assert _fractions(found, list(expected)) == pytest.approx(list(expected.values()), rel=2e-4)


# n-Butane = isobutane from TP-2002 [R].
@pytest.mark.parametrize("T, K", [(298.15, 7.2477), (400.0, 2.7975), (600.0, 1.1000), (1000.0, 0.53212)])
def test_isomers_of_butane(T, K):
    found = equilibrium(_glenn("n-C4H10", "i-C4H10").mechanism, {"n-C4H10": 1.0}, temperature=T, pressure=atm)
    assert found.fraction("i-C4H10") / found.fraction("n-C4H10") == pytest.approx(K, rel=2e-5)


# Adiabatic flames, stoichiometric with O2 + 3.76 N2, from 298.15 K and 1 atm. T at held pressure, T and p/p0 at held
# volume [R] from TP-2002; textbooks at held pressure [M]: S.R. Turns, An Introduction to Combustion, table B.1; C.K. Law,
# Combustion Physics; J. Warnatz, U. Maas, R.W. Dibble, Combustion.
FLAMES = {"H2": (0.5, 2378.43, 2746.29, 7.9992, 2380.0), "CO": (0.5, 2384.01, 2699.97, 7.9658, None),
          "CH4": (2.0, 2223.96, 2584.89, 8.7954, 2225.0), "C2H4": (3.0, 2367.98, 2733.10, 9.3832, 2369.0),
          "NH3": (0.75, 2071.20, 2454.84, 8.7404, None), "n-C4H10": (6.5, 2267.96, 2631.89, 9.4013, 2270.0)}


def _flame(fuel: str, oxygen: float, nitrogen: float = 3.76, pressure: float = atm, holds: str = "pressure") -> Equilibrium:
    """Burnt gas of one mole of fuel with oxygen [mol] from 298.15 K, in the species of the table of flames."""
    carbon = ("CO", "CO2", "CH4", "CH3") if "C" in fuel else ()
    names = tuple(dict.fromkeys((*PRODUCTS, *carbon, fuel)))
    gas = _glenn(*names)
    charge = np.array([(name == fuel) + oxygen * (name == "O2") + oxygen * nitrogen * (name == "N2") for name in names])
    if holds == "pressure":
        return equilibrium(gas.mechanism, charge, enthalpy=gas.enthalpy(charge, 298.15), pressure=pressure)
    volume = float(np.sum(charge)) * R * 298.15 / pressure
    return equilibrium(gas.mechanism, charge, internal_energy=gas.internal_energy(charge, 298.15), volume=volume)


@pytest.mark.parametrize("fuel", FLAMES)
def test_adiabatic_flames(fuel):
    oxygen, at_pressure, at_volume, rise, textbook = FLAMES[fuel]
    held_p, held_V = _flame(fuel, oxygen), _flame(fuel, oxygen, holds="volume")
    assert held_p.temperature == pytest.approx(at_pressure, abs=0.1)
    assert held_V.temperature == pytest.approx(at_volume, abs=0.1)
    assert held_V.pressure / atm == pytest.approx(rise, rel=1e-4)
    if textbook is not None:
        assert held_p.temperature == pytest.approx(textbook, abs=5.0)


# The same [R] with oxygen alone, under pressure, lean and rich.
@pytest.mark.parametrize("fuel, oxygen, nitrogen, p, T", [
    ("H2", 0.5, 0.0, 1, 3074.51), ("CH4", 2.0, 0.0, 1, 3050.12), ("CH4", 2.0, 0.0, 20, 3449.6), ("CO", 0.5, 0.0, 1, 2976.8),
    ("CH4", 2.0, 3.76, 10, 2266.8), ("CH4", 2.0, 3.76, 50, 2286.9), ("H2", 0.5, 3.76, 20, 2451.9),
    ("CH4", 2.0 / 0.6, 3.76, 1, 1664.3), ("CH4", 2.0 / 1.4, 3.76, 1, 1978.3), ("H2", 0.5 / 1.2, 3.76, 1, 2362.7)])
def test_more_flames(fuel, oxygen, nitrogen, p, T):
    assert _flame(fuel, oxygen, nitrogen, p * atm).temperature == pytest.approx(T, abs=0.1)


# J. Warnatz, U. Maas, R.W. Dibble, Combustion, table of flame compositions [M]: CH4 with air, printed to a digit or three.
BURNT = {"N2": (0.709, 1e-3), "H2O": (0.18, 6e-3), "CO2": (0.085, 1e-3), "CO": (0.009, 5e-4), "O2": (0.004, 8e-4),
         "H2": (0.004, 5e-4), "OH": (0.003, 5e-4), "NO": (0.002, 5e-4), "H": (4e-4, 5e-5), "O": (2e-4, 5e-5)}


def test_composition_of_a_methane_flame():
    found = _flame("CH4", 2.0)
    for name, (fraction, rounding) in BURNT.items():
        assert found.fraction(name) == pytest.approx(fraction, abs=rounding), name


@pytest.mark.parametrize("fuel, oxygen, textbook", [("H2", 0.5, 2380.0), ("CH4", 2.0, 2225.0), ("C2H4", 3.0, 2369.0)])
def test_flames_of_a_bundled_mechanism(fuel, oxygen, textbook):
    """The bundled methane set's own thermochemistry meets the textbooks (as above) within 5 K."""
    of = bundled("methane")
    charge = {fuel: 1.0, "O2": oxygen, "N2": 3.76 * oxygen}
    n = np.array([charge.get(name, 0.0) for name in of.mechanism.names])
    found = equilibrium(of.mechanism, n, enthalpy=of.enthalpy(n, 298.15), pressure=atm)
    assert found.temperature == pytest.approx(textbook, abs=5.0)


# S.R. Turns, ibid., Examples 2.5 and 2.6 [M]: CH4 with air, complete combustion, constant cp. Book 2318 and 2889 K; exact
# arithmetic with its data 2316.90 K, and 2886.62 K with its R = 8.315 J/(mol K) at held volume.
TURNS = {"CO2": ({"C": 1, "O": 2}, -393.546, 56.21), "H2O": ({"H": 2, "O": 1}, -241.847, 43.87),
         "N2": ({"N": 2}, 0.0, 33.71), "CH4": ({"C": 1, "H": 4}, -74.831, 35.0), "O2": ({"O": 2}, 0.0, 30.0)}


def test_complete_combustion():
    tables = {name: {"form": "constant heat capacity", "at": 298.0, "H": f"{H!r} kJ/mol", "S": 200.0, "cp": cp}
              for name, (_, H, cp) in TURNS.items()}
    gas = Contents(_gas({name: atoms for name, (atoms, _, _) in TURNS.items()}, **tables))
    charge = np.array([0.0, 0.0, 7.52, 1.0, 2.0])
    held_p = equilibrium(gas.mechanism, charge, enthalpy=gas.enthalpy(charge, 298.0), pressure=atm)
    held_V = equilibrium(gas.mechanism, charge, internal_energy=gas.internal_energy(charge, 298.0),
                         volume=10.52 * R * 298.0 / atm)
    assert held_p.temperature == pytest.approx(2316.90, abs=0.01)
    assert held_V.temperature == pytest.approx(2886.62, abs=0.2)
    assert held_p.amount[:3] == pytest.approx([1.0, 2.0, 7.52], rel=1e-6)
