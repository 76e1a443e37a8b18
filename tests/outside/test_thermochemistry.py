"""Heat capacity, entropy and enthalpy of the bundled species against published tables.

What the records are, and what may be expected of them:

- Records dated by letters (L, TPIS, RUS, J, S) fit tables at 1 bar; records of 1986/87 (six digits) fit older tables
  at 1 atm, where S° is lower by R ln 1.01325 = 0.109 J/(mol K). Like is compared with like.
- A fit of four powers over hundreds of kelvin is off in cp by some 0.3 % at its worst temperature (0.28 % for OH, 0.30 %
  for NO say A. Burcat and B. Ruscic, report ANL-05/20, 2005); twice that is allowed, since the table fitted may be an
  older edition. The error waves about zero, so that its integrals are closer: 0.15 % of H° - H°(298.15 K) from 1000 K
  up, 0.04 % of S°.
- JANAF 1998 is a rigid rotor and harmonic oscillator for CH4, and older than Woolley's partition function of H2O
  (J. Res. Natl. Bur. Stand. 92 (1987) 35): these two are held against NASA/TP-2002-211556 instead where they differ.
- JANAF's ΔfH° of OH, HO2, CH2O, CH3 and NO is superseded: formation is held against the Active Thermochemical Tables.
"""

import numpy as np
import pytest
from chemicals.heat_capacity import Cp_dict_JANAF_gas, WebBook_Shomate_gases
from chemicals.reaction import Hfg, S0g

from bothways.contents import Contents

from .janaf import TABLES
from .small import R, atm, bar, bundled, properties

CP, S, H = 6e-3, 4e-4, 1.5e-3
"""Relative departures that fits of the same quantity may show: cp°, S°, H° - H°(298.15 K)."""

HELD = {"hydrogen-oxygen": ["N2", "O2", "H2", "H2O", "CO", "CO2", "H", "O", "OH", "AR"],
        "methane": ["N2", "O2", "H2", "H2O", "CO", "CO2", "H", "O", "N", "OH", "NO", "NH3", "AR"],
        "c1-c4": ["N2", "O2", "H2", "H2O", "CO", "CO2", "H", "O", "OH", "AR"]}
PAIRS = [(name, species) for name, names in HELD.items() for species in names]
NEWER = {("methane", "H2O"), ("c1-c4", "H2O")}  # records on Woolley's partition function: JANAF up to 1000 K only


def _entropy(contents: Contents, species: str, temperature: float) -> float:
    """S° [J/(mol K)] at 1 bar, carried over from 1 atm for the records of 1986 and 1987."""
    old = contents.mechanism.species[contents.mechanism.index(species)].source.isdigit()
    return properties(contents, species, temperature)[2] + R * float(np.log(atm / bar)) * old


@pytest.mark.parametrize("name, species", PAIRS)
def test_against_janaf(name, species):
    contents, (table, _, rows) = bundled(name), TABLES[species]
    start = properties(contents, species, 298.15)[1]
    for T, (cp, s, h) in rows.items():
        if T <= 1000.0 or (name, species) not in NEWER:
            ours = properties(contents, species, T)
            assert ours[0] == pytest.approx(cp, rel=CP), (table, T)
            assert ours[1] - start == pytest.approx(h, rel=H), (table, T)
            assert _entropy(contents, species, T) == pytest.approx(s, rel=S), (table, T)


@pytest.mark.parametrize("name, species", [pair for pair in PAIRS if pair[1] not in ("OH", "NO")])
def test_formation_against_janaf(name, species):
    """JANAF's own uncertainties are 0.04 (H2O), 0.05 (CO2), 0.1 (O, N), 0.17 (CO) and 0.35 kJ/mol (NH3) [M]; these
    records were made from the same values, give or take the rounding of calories: 0.03 kJ/mol."""
    assert properties(bundled(name), species, 298.15)[1] == pytest.approx(TABLES[species][1], abs=0.03)


@pytest.mark.parametrize("name, pressure", [("hydrogen-oxygen", atm), ("methane", bar)])
def test_both_standard_pressures_occur(name, pressure):
    """S°(H) = 114.716 J/(mol K) at 1 bar, 114.607 at 1 atm: monatomic, so no fit stands between."""
    s = properties(bundled(name), "H", 298.15)[2]
    assert s == pytest.approx(114.716 - R * np.log(pressure / bar), abs=0.003)


TP_2002 = {  # B.J. McBride, M.J. Zehe, S. Gordon, NASA/TP-2002-211556: {T [K]: (cp/R, h/RT, s/R)} at 1 bar
    "H2O": {298.15: (4.03965, -97.5509536, 22.710793), 1000.0: (4.9661419, -25.9573512, 27.991633),
            2000.0: (6.2247284, -10.1498893, 31.8621776), 3000.0: (6.8342561, -4.5770459, 34.5172068)},
    "CH4": {298.15: (4.2926554, -30.0931295, 22.41516), 1000.0: (8.861191, -4.3196072, 29.8671753)}}


@pytest.mark.parametrize("name", ["methane", "c1-c4"])
@pytest.mark.parametrize("species", TP_2002)
def test_hot_water_and_methane(species, name):
    start, first = properties(bundled(name), species, 298.15)[1], R * 298.15e-3 * TP_2002[species][298.15][1]
    assert start == pytest.approx(first, abs=0.01)
    for T, (cp, h, s) in TP_2002[species].items():
        ours = properties(bundled(name), species, T)
        assert ours[0] == pytest.approx(R * cp, rel=CP), T
        assert ours[1] - start == pytest.approx(R * T * h * 1e-3 - first, rel=H, abs=1e-9), T
        assert ours[2] == pytest.approx(R * s, rel=S), T


def test_janaf_methane_is_the_cooler_one():
    """The known difference: JANAF's rigid rotor and harmonic oscillator lies below, 2.5 % in cp at 1000 K."""
    cp = properties(bundled("methane"), "CH4", 1000.0)[0]
    assert 0.02 < cp / TABLES["CH4"][2][1000.0][0] - 1 < 0.03


CAS = {"N2": "7727-37-9", "O2": "7782-44-7", "H2": "1333-74-0", "H2O": "7732-18-5", "CO": "630-08-0", "CO2": "124-38-9",
       "CH4": "74-82-8", "H": "12385-13-6", "O": "17778-80-2", "OH": "3352-57-6", "HO2": "3170-83-0", "CH3": "2229-07-4",
       "CH2O": "50-00-0", "HCO": "2597-44-6", "C2H4": "74-85-1", "C2H6": "74-84-0", "CH3OH": "67-56-1", "N": "17778-88-0",
       "NO": "10102-43-9", "NH3": "7664-41-7"}


LIBRARY = ("H2O", "CO", "CO2", "H", "O", "OH", "N", "NO", "NH3")


@pytest.mark.parametrize("name, species", [pair for pair in PAIRS if pair[1] in LIBRARY])
def test_heat_capacity_against_a_property_library(name, species):
    """The JANAF tables that the library `chemicals` carries, at every temperature from 300 to 1000 K."""
    temperatures, heat_capacities = map(np.array, Cp_dict_JANAF_gas[CAS[species]])
    inside = (temperatures >= 300.0) & (temperatures <= 1000.0)
    ours = [properties(bundled(name), species, T)[0] for T in temperatures[inside]]
    assert inside.sum() >= 8
    assert ours == pytest.approx(heat_capacities[inside], rel=CP)


@pytest.mark.parametrize("species", ["N2", "O2", "H2", "CO", "CO2", "CH2O", "HCO", "NO"])
def test_heat_capacity_against_shomate_equations(species):
    """Shomate equations of the NIST Chemistry WebBook (from JANAF 1998), as `chemicals` carries them."""
    mechanism, theirs = bundled("methane"), WebBook_Shomate_gases[CAS[species]]
    for T in (300.0, 600.0, 1000.0, 1500.0, 2000.0):
        assert properties(mechanism, species, T)[0] == pytest.approx(theirs.force_calculate(T), rel=CP), T


def test_entropies_against_a_property_library():
    """Its JANAF entropies at 298.15 K and 1 bar."""
    for species in (*LIBRARY, "C2H4"):
        ours = _entropy(bundled("methane"), species, 298.15)
        assert ours == pytest.approx(S0g(CAS[species], method="JANAF"), rel=S), species


FORMATION = {  # kJ/mol that the sets' own values may be from the Active Thermochemical Tables of later
    0.1: ["H2O", "CO", "CO2", "H", "O", "CH4", "C2H4", "C2H6"], 0.3: ["OH", "HO2", "NO", "HCO", "N", "CH3OH"],
    0.6: ["CH3", "CH2O"]}
OLD_HYDROXYL = 39.35  # [kJ/mol] in the methane set; a known fault of it, kept


@pytest.mark.parametrize("name", HELD)
def test_formation_against_active_thermochemical_tables(name):
    """ATcT 1.112 (B. Ruscic, D.H. Bross), as `chemicals` carries it: the sets are older and were never fitted to it."""
    for allowed, names in FORMATION.items():
        for species in set(names) & set(bundled(name).mechanism.names):
            ours = properties(bundled(name), species, 298.15)[1]
            expected = Hfg(CAS[species], method="ATCT_G") * 1e-3
            if (name, species) == ("methane", "OH"):
                assert ours == pytest.approx(OLD_HYDROXYL, abs=0.01)
            else:
                assert ours == pytest.approx(expected, abs=allowed), species
