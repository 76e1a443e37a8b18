"""Solutions against closed forms and published constants: rate laws with stated equilibria, esters, ions, adiabatic runs.

Tolerances: the runs ask rtol = 1e-10; allowed is 1e-8 of the largest amount.
"""

import mpmath
import numpy as np
import pytest

from bothways import build_case, build_mechanism, equilibrium, read_mechanism, run
from bothways.contents import Contents

from .small import course
from .test_closed_forms import (
    REACHED,
    RISE,
    T0,
    THETA,
    A,
    T,
    cycle,
    one_way_chain,
    reversible_chain,
    reversible_first_order,
    reversible_second_order,
)

STATED = {  # K of the reactions in order; of the ring the third follows from the others
    reversible_first_order: [4.0], reversible_second_order: [4.0], reversible_chain: [1 / 0.3, 0.5 / 0.2],
    one_way_chain: [1e40, 1e40], cycle: [2.0, 2.0, None]}


def head(state):
    return {"name": "in solution", "phase": "ideal solution", "standard_state": state, "units": ["dm", "mol", "s", "K"]}


@pytest.mark.parametrize("state", ["1 mol/L", "mole fraction"])
@pytest.mark.parametrize("form", STATED, ids=lambda form: form.__name__)
def test_closed_forms_with_stated_equilibria(form, state):
    """The same reactions in solution, without any data of species: only K of the reactions. Δν = 0 in all of them."""
    known = form()
    document = known.mechanism.to_dict() | {"mechanism": head(state)}
    document["species"] = {name: {"composition": data["composition"]} for name, data in document["species"].items()}
    for reaction, K in zip(document["reaction"], STATED[form], strict=True):
        if K:
            reaction["equilibrium"] = {"K": K, "at": T, "dH": 0.0}
    start = {"temperature": T, "concentration": {s: f"{c} mol/L" for s, c in known.start.items()}}
    found, at = course(build_mechanism(document), {"heat": "isothermal", "volume": "1 L"}, start, known.times, "Rosenbrock")
    for species, expected in known.expected.items():
        assert found.amount[at, found.species.index(species)] == pytest.approx(expected, rel=0, abs=1e-8), species


def dissociation(state, K):
    """A ⇌ 2 B of first order, kf = 1 1/s."""
    return build_mechanism({"mechanism": head(state), "elements": {"Q": 0.02},
                            "species": {"A": {"formula": "Q2"}, "B": {"formula": "Q"}, "S": {"formula": "H2O"}},
                            "reaction": [{"equation": "A ⇌ 2 B", "forward": {"law": "Arrhenius", "A": 1.0},
                                          "equilibrium": {"K": K, "at": 298.15, "dH": 0.0}}]})


@pytest.mark.parametrize("c, solvent, state", [(0.4, 0.0, "1 mol/L"), (0.4, 3.0, "1 mol/L"), (1e-9, 4.0, "mole fraction"),
                                               (0.4, 0.0, "mole fraction")])
def test_dissociation_in_solution(c, solvent, state):
    """A ⇌ 2 B from pure A. 1 mol/L: dx/dt = (c - x) - (2x)²/K. Mole fractions: [B]² comes divided by the total C; with the
    solvent in great excess C is constant, and without one C = c + x: dx/dt = (c - x) - 4 x²/(K (c + x)), integrated with 30
    digits. Quadratic roots r1 < 0 < r2: x = r2 (1 - E)/(1 - (r2/r1) E), E = exp(-(r2 - r1) q t)."""
    K, times = 0.3, [0.2, 0.7, 2.0]
    found, at = course(dissociation(state, K), {"heat": "isothermal", "volume": "1 L"},
                       {"temperature": 298.15, "concentration": {"A": f"{c} mol/L", "S": f"{solvent} mol/L"}}, times,
                       "Rosenbrock", atol=1e-30)
    with mpmath.workdps(30):
        if state == "mole fraction" and not solvent:  # t(x) by quadrature, inverted at the program's own x
            def time_of(x):
                return mpmath.quad(lambda s: 1 / ((c - s) - 4 * s * s / (K * (c + s))), [0, x])

            expected = [mpmath.findroot(lambda x, t=t: time_of(x) - t, found.amount[k, 1] / 2)
                        for t, k in zip(times, at, strict=True)]
        else:
            q = mpmath.mpf(4) / (K * (solvent + c if state == "mole fraction" else 1))
            r1, r2 = ((-1 + sign * mpmath.sqrt(1 + 4 * q * c)) / (2 * q) for sign in (-1, 1))
            expected = [r2 * (1 - E) / (1 - r2 / r1 * E) for E in (mpmath.exp(-(r2 - r1) * q * t) for t in times)]
    assert found.amount[at, 1] / 2 == pytest.approx(np.array(expected, dtype=float), rel=1e-8)


@pytest.mark.parametrize("inert", [0.0, 0.7])
@pytest.mark.parametrize("state", ["1 mol/L", "mole fraction"])
def test_adiabatic_first_order(state, inert):
    """t(T) of an adiabatic A → B with constant heat capacity (the numbers of the gases' test), which the species hold or, to a
    share, the inert part of the charge. Compared is the time at which each temperature is reached."""
    cp, c = 100.0, 1000.0  # [J/(mol K)], [mol/m3]
    form = {"form": "constant heat capacity", "cp": f"{cp * (1 - inert)} J/(mol K)"}
    m = build_mechanism({"mechanism": head(state), "elements": {"Q": 0.02},
                         "species": {s: {"formula": "Q", "potential": form} for s in "AB"},
                         "reaction": [{"equation": "A ⇌ B", "forward": {"law": "Arrhenius", "A": A, "Ea": THETA},
                                       "equilibrium": {"K": 1e30, "at": T0 + RISE, "dH": f"{-RISE * cp} J/mol"}}]})
    vessel = {"heat": "adiabatic", "volume": 1.0, "inert_heat_capacity": inert * cp * c}
    found, at = course(m, vessel, {"temperature": T0, "concentration": {"A": c}}, list(REACHED), "Rosenbrock")
    expected = np.array(list(REACHED.values()))
    late = (expected - found.temperature[at]) / (A * np.exp(-THETA / expected) * (T0 + RISE - expected))
    assert late == pytest.approx(0.0, abs=1e-8 * 0.22)


def test_esterification():
    """K = 4 of acid and alcohol to ester and water (Berthelot and Pean de Saint-Gilles 1862; from memory): one to one ends at two
    thirds, one acid to three alcohols at 0.90283245929, both from x²/((1 - x)(m - x)) = 4."""
    m = read_mechanism("ethyl-acetate")
    assert Contents(m).equilibrium_constants(298.15)[0] == pytest.approx(4.0, rel=1e-13)
    for ratio, x in ((1.0, 2 / 3), (3.0, 0.90283245929)):
        charge = {"CH3COOH": "2 mol/L", "C2H5OH": f"{2 * ratio} mol/L"}
        case = build_case({"vessel": {"heat": "isothermal"}, "start": {"temperature": 298.15, "concentration": charge},
                           "until": {"time": "1 h"}}, mechanism=m)
        found = equilibrium(m, case.charge.amount, temperature=298.15, volume=1.0)
        assert found.amount[2] / case.charge.amount[0] == pytest.approx(x, rel=1e-11)
        done = run(build_case({**case.document, "until": {"equilibrium": True}}, mechanism=m))
        assert done.amount[-1, 2] / case.charge.amount[0] == pytest.approx(x, rel=1e-6)


def test_butene_isomers():
    """K at 500 K of NASA/TP-2002-211556 as other evaluations of the same polynomials give them, to the five figures stated;
    cis and trans the right way round: S°(298.15 K) near 301.3 and 296.3 J/(mol K)."""
    contents = Contents(read_mechanism("butene-isomers"))
    K = dict(zip((str(r.equation) for r in contents.mechanism.reactions), contents.equilibrium_constants(500.0), strict=True))
    assert K["cis-2-C4H8 ⇌ trans-2-C4H8"] == pytest.approx(1.4269, abs=5e-5)
    assert K["1-C4H8 ⇌ trans-2-C4H8"] == pytest.approx(3.1298, abs=5e-5)
    assert K["1-C4H8 ⇌ cis-2-C4H8"] == pytest.approx(3.1298 / 1.4269, rel=5e-5)
    g, h, _ = contents.molar(298.15)
    assert 8.314462618 * (h - g)[1:] == pytest.approx([301.31, 296.33], abs=0.1)


WEAK, WATER = 1.75e-5, 1.0e-14
"""Acid constant of acetic acid and ionic product of water at 25 °C over 1 mol/L (CRC Handbook; from memory)."""


@pytest.mark.parametrize("acid", [0.1, 1e-4, 1e-7])
def test_weak_acid_in_water(acid):
    """[H+]³ + Ka [H+]² - (Kw + Ka c)[H+] - Ka Kw = 0, charge balance included (e.g. W. Stumm, J.J. Morgan, Aquatic Chemistry,
    3rd ed., 1996, ch. 3). The solvent is a species; its activity is its concentration over 1 mol/L, so Kw/55.3 is stated."""
    water = 55.3
    m = build_mechanism({"mechanism": head("1 mol/L"), "species": {
        "HA": {"formula": "C2H4O2"}, "A-": {"formula": "C2H3O2", "charge": -1}, "H+": {"formula": "H", "charge": 1},
        "OH-": {"formula": "OH", "charge": -1}, "H2O": {"formula": "H2O"}}, "reaction": [
            {"equation": "HA ⇌ H+ + A-", "forward": {"law": "Arrhenius", "A": 8e5},
             "equilibrium": {"K": WEAK, "at": 298.15, "dH": 0.0}},
            {"equation": "H2O ⇌ H+ + OH-", "forward": {"law": "Arrhenius", "A": 2.5e-5},
             "equilibrium": {"K": WATER / water, "at": 298.15, "dH": 0.0}}]})
    case = build_case({"vessel": {"heat": "isothermal", "volume": "1 L"}, "until": {"equilibrium": True}, "start": {
        "temperature": 298.15, "concentration": {"HA": f"{acid} mol/L", "H2O": f"{water} mol/L"}}}, mechanism=m)
    done = run(case)
    protons = max(float(r) for r in np.roots([1.0, WEAK, -(WATER + WEAK * acid), -WEAK * WATER]).real)
    found = equilibrium(m, case.charge.amount, temperature=298.15, volume=1e-3)
    for amounts in (found.amount, done.amount[-1]):
        assert amounts[2] == pytest.approx(protons, rel=3e-6)  # water used up: up to [OH-]/55.3
        assert abs(amounts[2] - amounts[1] - amounts[3]) < 1e-15 * water
