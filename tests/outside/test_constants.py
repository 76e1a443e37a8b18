"""Constants, units and atomic weights against the collections of others."""

import pytest
import scipy.constants
from chemicals.elements import periodic_table

from bothways import constants
from bothways.mechanism.elements import ATOMIC_MASS
from bothways.units import UNITS, parse_quantity, unit_system

EXACT = {  # BIPM, The International System of Units, 9th ed., 2019; R = N_A k_B multiplied out by hand
    "AVOGADRO": ("Avogadro constant", 6.02214076e23), "BOLTZMANN": ("Boltzmann constant", 1.380649e-23),
    "PLANCK": ("Planck constant", 6.62607015e-34), "SPEED_OF_LIGHT": ("speed of light in vacuum", 299792458.0),
    "ELEMENTARY_CHARGE": ("elementary charge", 1.602176634e-19),
    "GAS_CONSTANT": ("molar gas constant", 8.31446261815324), "ATMOSPHERE": ("standard atmosphere", 101325.0)}


def test_the_vintage_of_the_library_is_codata_2022():
    """P.J. Mohr et al., Rev. Mod. Phys. 97 (2025) 025002 [M]: m_u = 1.66053906892(52)e-27 kg; in CODATA 2018 ...660(50)."""
    assert scipy.constants.physical_constants["atomic mass constant"][:2] == (1.66053906892e-27, "kg")


@pytest.mark.parametrize("name", EXACT)
def test_constants_are_those_of_codata(name):
    """All of them are exact, so equal to the last digit; R as its 15 digits are printed."""
    codata, by_hand = EXACT[name]
    value, _, uncertainty = scipy.constants.physical_constants[codata]
    assert uncertainty == 0.0
    assert getattr(constants, name) == by_hand == pytest.approx(value, rel=4e-16)


def test_no_constant_is_left_unchecked():
    public = {name for name, value in vars(constants).items() if name.isupper() and isinstance(value, float)}
    assert public == {*EXACT, "THERMOCHEMICAL_CALORIE"}
    assert constants.THERMOCHEMICAL_CALORIE == scipy.constants.calorie == 4.184


DEFINED = {  # kind: {quantity: SI value}; exact definitions of BIPM (2019) and NIST Special Publication 811 (2008)
    "pressure": {"1 atm": 101325.0, "1 bar": 1e5, "760 Torr": 101325.0, "2 MPa": 2e6, "1 mbar": 100.0, "3 hPa": 300.0},
    "temperature": {"25 °C": 298.15, "-273.15 °C": 0.0, "300 K": 300.0},
    "time": {"1 h": 3600.0, "1 d": 86400.0, "2 min": 120.0, "1 us": 1e-6, "1 µs": 1e-6},
    "length": {"3.4 Å": 3.4e-10, "1 nm": 1e-9},
    "volume": {"1 L": 1e-3, "1 cm3": 1e-6},
    "amount": {"6.02214076e23 molecule": 1.0, "1 kmol": 1e3},
    "concentration": {"1 mol/L": 1e3, "1 mol/cm3": 1e6, "1 kmol/m3": 1e3},
    "molar energy": {"1 kcal/mol": 4184.0, "1 K": 8.31446261815324, "1 kJ/mol": 1e3, "1 eV": 96485.33212331002},
    "molar heat capacity": {"1 cal/(mol K)": 4.184}}


@pytest.mark.parametrize("kind", DEFINED)
def test_units_are_what_they_are_defined_to_be(kind):
    for text, si in DEFINED[kind].items():
        assert parse_quantity(text, kind) == pytest.approx(si, rel=4e-16, abs=0.0), text


def test_units_that_scipy_knows_too():
    c = scipy.constants
    theirs = {"pressure": {"atm": c.atm, "bar": c.bar, "Torr": c.torr}, "volume": {"L": c.liter},
              "length": {"Å": c.angstrom}, "molar energy": {"eV": c.eV * c.N_A, "kcal/mol": c.kilo * c.calorie},
              "time": {"d": c.day}, "mass": {"t": c.metric_ton}}
    for kind, units in theirs.items():
        assert {unit: UNITS[kind][unit] for unit in units} == pytest.approx(units, rel=4e-16)


def test_rate_constants_in_molecules():
    """1 cm3/(molecule s) = N_A 1e-6 m3/(mol s); 1 cm6/(molecule2 s) = N_A² 1e-12 m6/(mol2 s)."""
    units = unit_system(["cm", "molecule", "s"])
    assert units.rate_factor(1) == 1.0
    assert units.rate_factor(2) == pytest.approx(6.02214076e17, rel=1e-15)
    assert units.rate_factor(3) == pytest.approx(6.02214076e23**2 * 1e-12, rel=1e-15)


IUPAC_2021 = {  # T. Prohaska et al., Pure Appl. Chem. 94 (2022) 573, doi:10.1515/pac-2019-0603 [g/mol]: abridged
    # standard atomic weights as printed [M]; all our values were once compared with a stored copy of that table
    "H": "1.0080", "He": "4.0026", "Li": "6.94", "B": "10.81", "C": "12.011", "N": "14.007", "O": "15.999", "F": "18.998",
    "Ne": "20.180", "Na": "22.990", "Mg": "24.305", "Al": "26.982", "Si": "28.085", "P": "30.974", "S": "32.06",
    "Cl": "35.45", "Ar": "39.95", "K": "39.098", "Ca": "40.078", "Fe": "55.845", "Zn": "65.38", "Se": "78.971",
    "Br": "79.904", "Mo": "95.95", "I": "126.90", "Xe": "131.29", "Hg": "200.59", "Pb": "207.2"}


@pytest.mark.parametrize("symbol", IUPAC_2021)
def test_atomic_masses_are_the_abridged_standard_ones(symbol):
    printed = IUPAC_2021[symbol]
    decimals = len(printed.partition(".")[2])
    assert f"{ATOMIC_MASS[symbol] * 1e3:.{decimals}f}" == printed


def test_all_atomic_masses_against_an_older_table():
    """`chemicals` carries the IUPAC values of 2009 and before; since then none has moved by more than 1.6e-4."""
    theirs = {symbol: periodic_table[symbol].MW for symbol in ATOMIC_MASS if symbol != "D"}
    assert {s: m * 1e3 for s, m in ATOMIC_MASS.items() if s != "D"} == pytest.approx(theirs, rel=2e-4)


def test_deuterium_is_a_deuteron_and_an_electron():
    """CODATA 2022 masses in u less the ionisation energy, 13.602 eV; 1 u = 1 g/mol within 2e-9."""
    def particle(name: str) -> float:
        return scipy.constants.physical_constants[f"{name} mass in u"][0]

    bound = 13.602 * scipy.constants.eV / scipy.constants.c**2 / scipy.constants.atomic_mass
    assert ATOMIC_MASS["D"] * 1e3 == pytest.approx(particle("deuteron") + particle("electron") - bound, rel=2e-9)
