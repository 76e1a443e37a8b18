"""Quantities with units against their definitions, and the units of bare numbers in a mechanism."""

import math
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from bothways import InputError, build_mechanism
from bothways.constants import AVOGADRO, ELEMENTARY_CHARGE, GAS_CONSTANT
from bothways.units import SI_UNIT, UNITS, UnitSystem, finite, parse_quantity, unit_system

DEFINED = {  # BIPM SI brochure (2019); NIST SP 811 (2008) for atm, Torr and the thermochemical calorie
    "pressure": {"3 Pa": 3.0, "5 hPa": 500.0, "101.325 kPa": 101325.0, "2.5 MPa": 2.5e6, "1 bar": 1e5, "5 mbar": 500.0,
                 "1 atm": 101325.0, "760 Torr": 101325.0},
    "temperature": {"298.15 K": 298.15, "20 mK": 0.02, "25 °C": 298.15, "-25.5 °C": 247.65, "25 degC": 298.15},
    "time": {"2 s": 2.0, "4 ms": 4e-3, "4 us": 4e-6, "4 \u00b5s": 4e-6, "4 \u03bcs": 4e-6, "7 ns": 7e-9, "3 min": 180.0,
             "2 h": 7200.0, "1 d": 86400.0},
    "length": {"2 m": 2.0, "2 dm": 0.2, "2 cm": 0.02, "2 mm": 2e-3, "2 um": 2e-6, "2 \u00b5m": 2e-6, "2 \u03bcm": 2e-6,
               "2 nm": 2e-9, "250 pm": 2.5e-10, "3.4 \u00c5": 3.4e-10, "3.4 \u212b": 3.4e-10},
    "volume": {"2 m3": 2.0, "2 m³": 2.0, "0.5 L": 5e-4, "0.5 l": 5e-4, "20 mL": 2e-5, "20 ml": 2e-5, "1 dm3": 1e-3,
               "3 cm3": 3e-6, "3 cm³": 3e-6},
    "amount": {"2 mol": 2.0, "5 mmol": 5e-3, "3 kmol": 3e3, "6.02214076e23 molecule": 1.0},
    "mass": {"2 kg": 2.0, "2 g": 2e-3, "4 mg": 4e-6, "3 t": 3e3},
    "molar mass": {"0.018 kg/mol": 0.018, "18.015 g/mol": 0.018015, "18.015 kg/kmol": 0.018015},
    "molar energy": {"2 J/mol": 2.0, "92 kJ/mol": 92e3, "1 cal/mol": 4.184, "1 kcal/mol": 4184.0,
                     "1 K": 8.31446261815324, "1 eV": 96485.33212331001},
    "molar heat capacity": {"2 J/(mol K)": 2.0, "0.03 kJ/(mol K)": 30.0, "1 cal/(mol K)": 4.184, "1 kcal/(mol K)": 4184.0},
    "concentration": {"2 mol/m3": 2.0, "2 mol/m³": 2.0, "2 mol/L": 2e3, "2 mmol/L": 2.0, "2 kmol/m3": 2e3,
                      "1e-6 mol/cm3": 1.0},
    "heat capacity": {"3 J/K": 3.0, "3 kJ/K": 3e3},
    "heat transfer": {"2 W/K": 2.0, "2 kW/K": 2e3},
}


@pytest.mark.parametrize("kind, text", [(kind, text) for kind, table in DEFINED.items() for text in table])
def test_definitions(kind: str, text: str) -> None:
    assert parse_quantity(text, kind) == pytest.approx(DEFINED[kind][text], rel=4e-16)


@pytest.mark.parametrize("kind", UNITS)
def test_every_unit_is_held_against_its_definition(kind: str) -> None:
    assert {text.split(" ", 1)[1] for text in DEFINED[kind]} == set(UNITS[kind])


@pytest.mark.parametrize("kind", UNITS)
def test_the_first_unit_of_a_kind_is_the_si_unit(kind: str) -> None:
    assert UNITS[kind][SI_UNIT[kind]] == 1.0


@given(st.floats(allow_nan=False, allow_infinity=False, width=32), st.data())
def test_any_number_with_any_unit(value: float, data: st.DataObject) -> None:
    kind = data.draw(st.sampled_from(list(UNITS)))
    unit = data.draw(st.sampled_from(list(UNITS[kind])))
    offset = Fraction(27315, 100) if unit in ("°C", "degC") else 0
    exact = Fraction(value) * Fraction(UNITS[kind][unit]) + offset
    text = data.draw(st.sampled_from(["{} {}", "  {} {}", "{}   {}  ", "{}\t{}"])).format(repr(value), unit)
    assert parse_quantity(text, kind) == pytest.approx(float(exact), rel=1e-15, abs=1e-13 if offset else 0)


@pytest.mark.parametrize("text, kind, found", [
    ("1", "pressure", r"'1' has no unit; expected a pressure such as \"1.5 Pa\" \(units: Pa, hPa, kPa, MPa, bar, mbar, atm"),
    ("1bar", "pressure", "'1bar' is not a number with its unit; expected a pressure such as"),
    ("bar", "pressure", "'bar' is not a number with its unit"), ("", "pressure", "'' is not a number with its unit"),
    ("1,5 bar", "pressure", "'1,5 bar' is not a number"), ("1 Bar", "pressure", r"unknown unit 'Bar' \(nearest: bar"),
    ("1 psi", "pressure", "'1 psi': unknown unit 'psi'"), ("1 bar bar", "pressure", "unknown unit 'bar bar'"),
    ("1 s", "pressure", "'1 s': s is a unit of time, not of pressure"),
    ("1 °C", "molar energy", "°C is a unit of temperature, not of molar energy"),
    ("25 C", "temperature", r"unknown unit 'C' \(nearest: °C"), ("1 kJ", "molar energy", "unknown unit 'kJ'")])
def test_what_is_no_quantity(text: str, kind: str, found: str) -> None:
    with pytest.raises(InputError, match=found):
        parse_quantity(text, kind)


@pytest.mark.parametrize("value, answer", [
    (1, True), (1.5, True), (-0.0, True), (10**300, True), (np.float64(2), True), (np.float32(2), True),
    (np.int64(2), True), (Fraction(1, 3), True), (math.nan, False), (math.inf, False), (-math.inf, False),
    (10**400, False), (True, False),
    (np.True_, False), ("1", False), (None, False), ([1.0], False), (1j, False), (np.array([1.0]), False)])
def test_finite(value: object, answer: bool) -> None:
    assert finite(value) is answer


# ---- bare numbers of a mechanism file

METRE = {"m": 1.0, "dm": 0.1, "cm": 0.01, "mm": 0.001}
MOLE = {"mol": 1.0, "kmol": 1000.0, "molecule": 1 / 6.02214076e23}
SECOND = {"s": 1.0, "ms": 1e-3, "min": 60.0}


def mechanism(order: int, names: list[str], **law: object):
    """order A ⇌ 1 B of invented species, B being `order` A."""
    common = {"form": "constant heat capacity", "at": 500.0, "H": 1.0, "S": 20.0, "cp": 40.0}
    species = {"A": {"composition": {"Q": 1}, "potential": common}, "B": {"composition": {"Q": order}, "potential": common},
               "C": {"composition": {"Q": order}, "potential": common}}
    units = {"units": [*names, "J/mol"]}
    head = {"name": "x", "phase": "ideal gas", "standard_pressure": "1 bar"} | units
    left = "C" if order == 1 else f"{order} A"
    entry = {"equation": f"{left} ⇌ B", "forward": law or {"law": "Arrhenius", "A": 7.0}}
    return build_mechanism({"mechanism": head, "elements": {"Q": 0.01}, "species": species, "reaction": [entry]})


@pytest.mark.parametrize("length", METRE)
@pytest.mark.parametrize("amount", MOLE)
@pytest.mark.parametrize("time", SECOND)
@pytest.mark.parametrize("order", [1, 2, 3, 4])
def test_units_of_A(length: str, amount: str, time: str, order: int) -> None:
    """7 (length³/amount)^(order-1)/time, from the sizes of the units; the order they are named in is no matter."""
    expected = 7.0 * (METRE[length] ** 3 / MOLE[amount]) ** (order - 1) / SECOND[time]
    for names in ([length, amount, time], [time, length, amount]):
        law = mechanism(order, names).reactions[0].terms[0].law
        assert law.A == pytest.approx(expected, rel=3e-15)


def test_a_litre_and_a_molecule_by_hand() -> None:
    """1 L/(mol s) is 1e-3 m3/(mol s); 1 cm3/(molecule s) is 6.02214076e17 m3/(mol s); squared for the third order."""
    assert UnitSystem(length="dm").rate_factor(2) == pytest.approx(1e-3, rel=1e-15)
    assert UnitSystem(length="cm", amount="molecule").rate_factor(2) == pytest.approx(6.02214076e17, rel=1e-15)
    assert UnitSystem(length="cm", amount="molecule").rate_factor(3) == pytest.approx(6.02214076e17**2, rel=1e-15)
    assert UnitSystem(length="cm").rate_factor(3) == pytest.approx(1e-12, rel=1e-15)
    assert UnitSystem(length="cm").rate_factor(1) == 1.0


def test_limits_of_fall_off_and_partners_have_their_own_order() -> None:
    limits = {"k_inf": {"A": 3.0}, "k_0": {"A": 5.0}}
    law = mechanism(1, ["cm", "mol", "s"], law="Lindemann", **limits).reactions[0].terms[0].law
    assert law.k_inf.A == 3.0 and law.k_0.A == pytest.approx(5e-6, rel=1e-15)
    law = mechanism(2, ["cm", "mol", "s"], law="Lindemann", **limits).reactions[0].terms[0].law
    assert law.k_inf.A == pytest.approx(3e-6, rel=1e-15) and law.k_0.A == pytest.approx(5e-12, rel=1e-15)


@pytest.mark.parametrize("unit, size", [("J/mol", 1.0), ("kJ/mol", 1e3), ("cal/mol", 4.184), ("kcal/mol", 4184.0),
                                        ("K", GAS_CONSTANT), ("eV", ELEMENTARY_CHARGE * AVOGADRO)])
def test_units_of_energies(unit: str, size: float) -> None:
    """Ea and H in the unit itself, S and cp in the unit per kelvin; a text with its own unit is not touched."""
    assert unit_system([unit]).factor("molar energy") == size and unit_system([unit]).factor("molar heat capacity") == size
    potential = {"form": "constant heat capacity", "at": 300.0, "H": 3.0, "S": 5.0, "cp": 30.0 / size}
    species = {name: {"composition": {"Q": 1}, "potential": potential} for name in ("A", "B")}
    head = {"name": "x", "phase": "ideal gas", "standard_pressure": 1, "units": [unit, "atm"]}
    forward = [{"law": "Arrhenius", "A": 1.0, "Ea": 2.0}, {"law": "Arrhenius", "A": 1.0, "Ea": "2 kJ/mol"}]
    built = build_mechanism({"mechanism": head, "elements": {"Q": 0.01}, "species": species,
                             "reaction": [{"equation": "A ⇌ B", "forward": forward}]})
    first, second = (term.law for term in built.reactions[0].terms)
    assert first.Ea == pytest.approx(2 * size, rel=1e-15) and second.Ea == 2000.0
    made = built.species[0].potential
    assert (made.H, made.S, made.cp) == pytest.approx((3 * size, 5 * size, 30.0), rel=1e-15)
    assert built.standard_pressure == 101325.0


def test_units_left_out_are_si() -> None:
    system = unit_system([])
    assert [system.factor(kind) for kind in ("length", "amount", "time", "molar energy", "pressure")] == [1.0] * 5
    assert system.rate_factor(3) == 1.0
    assert unit_system(["cm"]).factor("volume") == pytest.approx(1e-6, rel=1e-15)
    assert unit_system(["cm"]).factor("temperature") == 1.0


@pytest.mark.parametrize("names, found", [
    (["cm", "m"], "two units of length: cm and m; expected one of each kind"), (["g"], "unknown unit 'g'"),
    ([3], "unknown unit 3"), (["cal"], r"unknown unit 'cal' \(nearest: .*cal/mol"),
    ([["cm"]], r"unknown unit \['cm'\]"), (["°C"], "unknown unit '°C'")])
def test_wrong_units_of_a_file(names: list, found: str) -> None:
    with pytest.raises(InputError, match=found):
        unit_system(names)


def test_an_order_beyond_floating_point_numbers_is_no_exception() -> None:
    assert UnitSystem(length="m", amount="molecule").rate_factor(40) == math.inf
    assert UnitSystem(length="cm", amount="kmol").rate_factor(99) == 0.0
