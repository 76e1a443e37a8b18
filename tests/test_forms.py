"""The polynomial forms: what they say against printed values, and all of them on one scale; the sets that use them."""

import numpy as np
import pytest

from bothways import Equations, build_mechanism, read_mechanism
from bothways.constants import GAS_CONSTANT as R
from bothways.contents import Contents
from bothways.thermo import at
from bothways.thermo.nine_coefficients import NineCoefficients
from bothways.thermo.shomate import Shomate

WATER = (30.09200, 6.832514, 6.793435, -2.534480, 0.082139, -250.8810, 223.3967, -241.8264)
"""H2O(g), 500 to 1700 K: NIST Chemistry WebBook, SRD 69, from M.W. Chase, NIST-JANAF Tables, 4th ed., 1998."""
JANAF_WATER = {500.0: (35.226, 206.534, 6.925), 1000.0: (41.268, 232.738, 26.000), 1500.0: (47.090, 250.620, 48.151)}
"""T: cp°, S° [J/(mol K)], H° - H°(298.15 K) [kJ/mol]; table H-064, ΔfH°(298.15 K) = -241.826 kJ/mol."""


@pytest.mark.parametrize("T, cp, s, h", [(T, *values) for T, values in JANAF_WATER.items()])
def test_shomate_gives_the_table_it_was_fitted_to(T, cp, s, h):
    """To the fit's own 0.01 J/(mol K) and 0.01 kJ/mol; h stands on the scale of formation, so H is not subtracted."""
    ours = np.array(at(Shomate((500.0, 1700.0), (WATER,)).ranges(), T)) * R
    assert ours[0] == pytest.approx(cp, abs=0.02) and ours[2] == pytest.approx(s, abs=0.02)
    assert ours[1] * T / 1e3 == pytest.approx(-241.826 + h, abs=0.02)


def test_shomate_by_its_own_formula():
    A, B, C, D, E, F, G, _ = WATER
    t = 1.234
    cp, h, s = np.array(at(Shomate((500.0, 1700.0), (WATER,)).ranges(), 1000 * t)) * R
    assert cp == pytest.approx(A + B * t + C * t**2 + D * t**3 + E / t**2, rel=1e-14)
    assert h * t == pytest.approx(A * t + B * t**2 / 2 + C * t**3 / 3 + D * t**4 / 4 - E / t + F, rel=1e-14)
    assert s == pytest.approx(A * np.log(t) + B * t + C * t**2 / 2 + D * t**3 / 3 - E / (2 * t**2) + G, rel=1e-14)


def test_nine_coefficients_give_the_reports_own_values():
    """NO of NASA/TP-2002-211556: ΔfH°(298.15 K) = 91271.31 J/mol on its record; R = 8.314510 there."""
    contents = Contents(read_mechanism("thermal-no"))
    g, h, cp = (values[contents.mechanism.index("NO")] for values in contents.molar(298.15))
    assert h * 8.314510 * 298.15 == pytest.approx(91271.31, abs=0.05)
    assert (h - g) * 8.314510 == pytest.approx(210.75, abs=0.01) and cp * 8.314510 == pytest.approx(29.86, abs=0.01)


def test_nine_coefficients_by_their_formula():
    a1, a2, a3, a4, a5, a6, a7, b1, b2 = row = (1e4, -150.0, 3.4, 2e-3, -1e-6, 3e-10, -4e-14, 9e3, 6.7)
    T = 700.0
    cp, h, s = at(NineCoefficients((200.0, 1000.0), (row,)).ranges(), T)
    assert cp == pytest.approx(a1 / T**2 + a2 / T + a3 + a4 * T + a5 * T**2 + a6 * T**3 + a7 * T**4, rel=1e-14)
    assert h == pytest.approx(-a1 / T**2 + a2 * np.log(T) / T + a3 + a4 * T / 2 + a5 * T**2 / 3 + a6 * T**3 / 4
                              + a7 * T**4 / 5 + b1 / T, rel=1e-14)
    assert s == pytest.approx(-a1 / (2 * T**2) - a2 / T + a3 * np.log(T) + a4 * T + a5 * T**2 / 2 + a6 * T**3 / 3
                              + a7 * T**4 / 4 + b2, rel=1e-14)


def test_one_species_in_four_forms_is_one_species():
    """The same cp, h and s written in each form: K of A ⇌ B is 1 for every pair at every temperature in range."""
    a, b, H, S = 3.5, 1.2e-3, -12e3, 23.0  # cp/R = a + b T; h/RT, s/R with constants H and S
    shomate = [R * a, R * b * 1e3, 0, 0, 0, R * H / 1e3, R * (S + a * np.log(1000.0)), 0]
    forms = {"seven": {"form": "NASA 7-coefficient", "T": [200, 2000], "a": [[a, b, 0, 0, 0, H, S]]},
             "nine": {"form": "NASA 9-coefficient", "T": [200, 2000], "a": [[0, 0, a, b, 0, 0, 0, H, S]]},
             "Shomate": {"form": "Shomate", "T": [200, 2000], "a": [shomate]}}
    reactions = [{"equation": f"{x} ⇌ {y}", "forward": {"law": "Arrhenius", "A": 1.0}}
                 for x, y in (("seven", "nine"), ("nine", "Shomate"), ("Shomate", "seven"))]
    mechanism = build_mechanism({"mechanism": {"name": "one", "phase": "ideal gas", "standard_pressure": "1 bar"},
                                 "elements": {"Q": "10 g/mol"}, "reaction": reactions,
                                 "species": {name: {"formula": "Q", "potential": form} for name, form in forms.items()}})
    for T in (250.0, 777.0, 1900.0, 2400.0):
        forward, reverse = Equations(mechanism, "volume", "isothermal").reaction_rates(np.array([1.0, 1.0, 1.0, T]))
        assert np.allclose(forward / reverse, 1.0, rtol=1e-12, atol=0)


N2O4 = {273.15: 0.017141, 298.15: 0.14232, 333.15: 1.606, 400.0: 49.52}  # K of N2O4 ⇌ 2 NO2 [bar]
NO = {1500.0: 3.008e-3, 2000.0: 1.8830e-2, 2500.0: 5.653e-2, 3000.0: 0.11737}  # K of ½ N2 + ½ O2 ⇌ NO
"""From NASA/TP-2002-211556's polynomials, evaluated apart from this program, to the last digit shown."""


@pytest.mark.parametrize("T, K", N2O4.items())
def test_nitrogen_dioxide_has_the_reports_equilibrium(T, K):
    eq = Equations(read_mechanism("nitrogen-dioxide"), "volume", "isothermal")
    forward, reverse = eq.reaction_rates(np.array([1.0, 1.0, 30.0, T]))
    assert forward[0] / reverse[0] * R * T / 1e5 == pytest.approx(K, rel=1e-4)


@pytest.mark.parametrize("T, K", NO.items())
def test_thermal_no_has_the_reports_equilibrium(T, K):
    """N2 + O2 ⇌ 2 NO is the second step less the first: its K from their rates."""
    eq = Equations(read_mechanism("thermal-no"), "volume", "isothermal")
    forward, reverse = eq.reaction_rates(np.append(np.ones(8), T))
    constants = forward / reverse
    assert np.sqrt(constants[1] / constants[0]) == pytest.approx(K, rel=2e-4)


def test_dissociation_of_dinitrogen_tetroxide_as_the_evaluation_states_it():
    """At 298 K and 1 bar of N2, M = 40.36 mol/m3: k_0[M], k_inf and F by hand from the stated expressions [1/s]."""
    law = read_mechanism("nitrogen-dioxide").reactions[0].terms[0].law
    M = 1e5 / (R * 298.0)
    low = 1.3e-5 * (298 / 300) ** -3.8 * np.exp(-6400 / 298) * M * 6.02214076e23 * 1e-6
    high = 1.15e16 * np.exp(-6460 / 298)
    F = 0.4 ** (1 / (1 + (np.log10(low / high) / (0.75 - 1.27 * np.log10(0.4))) ** 2))
    assert law.k(298.0, M) == pytest.approx(low / (1 + low / high) * F, rel=1e-12)
