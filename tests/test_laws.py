"""Every forward law: the kernels' k against the plain statement in rates/, J against differences, units by hand."""

import warnings

import numpy as np
import pytest

from bothways import Equations, build_case, build_mechanism, run
from bothways.constants import GAS_CONSTANT as R
from bothways.reach import reachable
from laws import LAWS, document, law_of

CLOSURES = [(holds, heat) for holds in ("volume", "pressure") for heat in ("isothermal", "adiabatic")]
PRESSURE = 2.3e5


def equations(laws, holds="volume", heat="isothermal", **more):
    """Equations of the two-species mechanism A ⇌ 2 B, or 2 B ⇌ A, with these forward terms."""
    return Equations(build_mechanism(document(laws, **more)), holds, heat, PRESSURE if holds == "pressure" else 0.0)


def states(count, seed):
    """Plain states of A, B and Z: amounts over many decades, one species absent in every third."""
    rng = np.random.default_rng(seed)
    for k in range(count):
        part = 10.0 ** rng.uniform(-6, 4, 3)
        if k % 3 == 2:
            part[k % 2] = 0.0
        yield np.append(part, rng.uniform(320.0, 2900.0))


def partner_of(term, c):
    """The partner's concentration [mol/m3] in a state of A, B, Z; 1 where none takes part."""
    if term.partner is None:
        return 1.0
    return sum(term.partner.efficiency.get(name, term.partner.default) * x for name, x in zip("ABZ", c, strict=True))


@pytest.mark.parametrize("name", LAWS)
def test_k_of_the_kernels_is_the_plain_one(name):
    """Forward rate over the concentrations, to 1e-12; ln k up to 60 takes the last digits of exp."""
    eq = equations(LAWS[name])
    terms = eq.mechanism.reactions[0].terms
    for y in states(40, seed=4):
        c, T = y[:3], y[3]
        pressure = np.sum(c) * R * T
        expected = sum(t.law.k(T, partner_of(t, c), pressure) for t in terms) * c[1] ** 2
        assert eq.reaction_rates(y)[0][0] == pytest.approx(expected, rel=1e-12)


def differences(function, y, throughput):
    """∂f/∂y by central differences of fourth order, column by column, and what round-off of f leaves of that.

    throughput: size of the terms that f is a difference of.
    """
    h = 3e-4 * y
    def at(k, m):
        return function(y + m * h[k] * np.eye(len(y))[k])

    columns = [(at(k, -2) - 8 * at(k, -1) + 8 * at(k, 1) - at(k, 2)) / (12 * h[k]) for k in range(len(y))]
    return np.column_stack(columns), 1e-14 * np.asarray(throughput)[:, None] / h


def throughput(eq, y):
    """Size of the terms of f [its own units]: forward plus reverse rate, and what they would heat."""
    rate = np.sum(eq.reaction_rates(y)) * (1.0 if eq.holds == "volume" else np.sum(y[:-1]) * R * y[-1] / PRESSURE)
    heating = rate * 1e5 / (np.sum(y[:-1]) * R) if eq.heat == "adiabatic" else 0.0
    return np.array([2 * rate] * (len(y) - 1) + [heating])


@pytest.mark.parametrize("holds, heat", CLOSURES)
@pytest.mark.parametrize("name", LAWS)
def test_J_by_differences(name, holds, heat):
    """1e-8 of each column's largest entry (and the differences' own round-off), away from corners."""
    eq = equations(LAWS[name], holds, heat)
    rng = np.random.default_rng(8)
    checked = 0
    while checked < 12:
        y = np.append(10.0 ** rng.uniform(-3, 4) * 10.0 ** rng.uniform(-1, 1, 3), rng.uniform(380.0, 2400.0))
        if near_a_corner(y, holds):
            continue
        J, (expected, round_off) = eq.J(0.0, y), differences(lambda y: eq.f(0.0, y), y, throughput(eq, y))
        scale = np.max(np.abs(expected), axis=0)
        assert np.all(np.abs(J - expected) <= 1e-8 * scale + round_off)
        checked += 1


def near_a_corner(y, holds):
    """Whether a step of 2e-3 crosses a row of the tables below, or the edge of the windows."""
    pressure = np.sum(y[:3]) * R * y[3] if holds == "volume" else PRESSURE
    corners = [*(abs(np.log(pressure / p)) for p in (1e3, 3e4, 1e5, 2e6)), *(abs(np.log(y[3] / T)) for T in (350, 2500))]
    return min(corners) < 4e-3


@pytest.mark.parametrize("holds", ["volume", "pressure"])
@pytest.mark.parametrize("name", LAWS)
def test_bordered_form_by_differences(name, holds):
    """The border's own column, with a border that does not fit the state: 1e-8."""
    eq = equations(LAWS[name], holds, "adiabatic")
    y = np.array([3.0, 0.7, 11.0, 900.0])
    z = eq.bordered_state(y) * np.array([1, 1, 1, 1.04, 1])
    terms = throughput(eq, y)
    B = eq.bordered_J(0.0, z).toarray()
    expected, round_off = differences(lambda z: eq.bordered_f(0.0, z), z, [*terms[:3], 10.0, terms[3]])
    assert np.all(np.abs(B - expected) <= 1e-8 * np.max(np.abs(expected), axis=0) + round_off)


@pytest.mark.parametrize("name", LAWS)
def test_net_rate_vanishes_at_equilibrium_whatever_the_law(name):
    eq = equations(LAWS[name])
    T = 700.0
    forward, reverse = eq.reaction_rates(np.array([1.0, 1.0, 5.0, T]))
    ratio = np.sqrt(forward[0] / reverse[0])  # c_B for c_A = 1 is smaller by that
    forward, reverse = eq.reaction_rates(np.array([1.0, 1.0 / ratio, 5.0, T]))
    assert forward[0] == pytest.approx(reverse[0], rel=1e-13)


@pytest.mark.parametrize("name", [name for name, terms in LAWS.items() if "collision_partner" in terms[0]])
def test_whether_a_reaction_runs_without_its_partner(name):
    """An activated channel does, at k_0; fall-off and several terms of it do not, or by the other terms."""
    eq = equations(LAWS[name])
    runs = eq.reaction_rates(np.array([0.0, 1.0, 0.0, 700.0]))[0][0] > 0
    assert runs == bool(reachable(eq.mechanism, np.array([0.0, 1.0, 0.0]))[1][0])
    assert runs == (name in ("activated, JPL, one partner", "several terms"))


# ---- by hand


def test_known_at_a_temperature_by_hand():
    """k itself there; n-butane's 31.1 per hour at 360 K with 65.7 kJ/mol (H.S. Fogler, test_butane.py) at 330 K."""
    law = law_of({"law": "known at a temperature", "k": 31.1, "at": 360.0, "Ea": "65.7 kJ/mol"}, units=["h"])
    k = law_of({"law": "known at a temperature", "k": 2.0, "at": "25 °C", "n": 1.5})
    assert law.k(360.0) == pytest.approx(31.1 / 3600, rel=1e-14)
    assert law.k(330.0) == pytest.approx(31.1 / 3600 * np.exp(65700 / R * (1 / 360 - 1 / 330)), rel=1e-13)
    assert k.k(596.3) == pytest.approx(2.0 * 2**1.5, rel=1e-14)


def test_sri_by_hand():
    """At P_r = 1 X is 1: F = d (a e^(-b/T) + e^(-T/c)) T^e; at P_r = 10 the bracket's square root."""
    law = law_of({"law": "SRI", "k_inf": {"A": 10.0}, "k_0": {"A": 2.0}, "F": {"a": 0.5, "b": 300.0, "c": 600.0}})
    bracket = 0.5 * np.exp(-0.5) + np.exp(-1.0)
    assert law.k(600.0, 5.0) == pytest.approx(5.0 * bracket, rel=1e-14)
    assert law.k(600.0, 50.0) == pytest.approx(10 / 1.1 * np.sqrt(bracket), rel=1e-14)
    law = law_of({"law": "SRI", "k_inf": {"A": 10.0}, "k_0": {"A": 2.0}, "F": {"a": 0.5, "b": 300.0, "c": 600.0, "d": 0.9,
                                                                             "e": 0.1}})
    assert law.k(600.0, 5.0) == pytest.approx(5.0 * bracket * 0.9 * 600**0.1, rel=1e-14)


def test_width_rules_by_hand():
    """F = F_cent^(1/(1 + (log P_r/N)²)): N = 0.75 - 1.27 log 0.4 (IUPAC), or 1 with F_cent = 0.6 (JPL), here at P_r = 10."""
    limits = {"law": "Troe", "k_inf": {"A": 10.0}, "k_0": {"A": 2.0}}
    N = 0.75 - 1.27 * np.log10(0.4)
    iupac, jpl = law_of({**limits, "F_cent": 0.4, "width": "IUPAC"}), law_of({**limits, "width": "JPL"})
    assert iupac.k(300.0, 50.0) == pytest.approx(10 / 1.1 * 0.4 ** (1 / (1 + 1 / N**2)), rel=1e-14)
    assert jpl.k(300.0, 50.0) == pytest.approx(10 / 1.1 * np.sqrt(0.6), rel=1e-14)
    assert law_of({**limits, "F_cent": 0.5, "width": "JPL"}).k(300.0, 5.0) == pytest.approx(5 * 0.5, rel=1e-14)


def test_activated_limits_and_orders():
    """k is k_0 at low pressure, k_inf/[M] at high; in cm, k_0 of the reaction's order 2, k_inf of order 1."""
    law = law_of({"law": "activated", "k_inf": {"A": 10.0}, "k_0": {"A": 2.0}})
    assert law.k(300.0, 0.0) == 2.0 and law.k(300.0, 5.0) == pytest.approx(1.0, rel=1e-15)
    assert law.k(300.0, 1e12) == pytest.approx(1e-11, rel=1e-9)
    law = law_of({"law": "activated", "k_inf": {"A": 10.0}, "k_0": {"A": 2e6}}, units=["cm", "mol", "s"])
    assert law.k(300.0, 5.0) == pytest.approx(1.0, rel=1e-14)


def test_pressure_table_by_hand():
    """The geometric mean at the geometric mean of two pressures; the ends beyond; rows at one pressure add up."""
    rows = [{"p": "1 bar", "A": 3.0}, {"p": 1e3, "A": 2.0}, {"p": 1e5, "A": -1.0}, {"p": 1e3, "A": 6.0, "n": 0.0}]
    law = law_of({"law": "pressure table", "rows": [*rows[1:], {"p": 1e5, "A": 3.0}]})
    assert law.k(500.0, pressure=1e4) == pytest.approx(4.0, rel=1e-14)
    assert [law.k(500.0, pressure=p) for p in (1.0, 1e3, 1e5, 1e9)] == pytest.approx([8.0, 8.0, 2.0, 2.0])
    assert law_of({"law": "pressure table", "rows": rows[:1]}).k(500.0, pressure=7.0) == 3.0


def test_chebyshev_by_hand():
    """Corners, where every polynomial is ±1, and the middle, where φ_2 is 0 and φ_3 is -1; 1e-6 from cm3 to m3."""
    stated = {"law": "Chebyshev", "T": [500.0, 1000.0], "p": ["0.1 bar", "10 bar"], "clamp": True,
              "c": [[8.0, 0.5], [1.0, -0.2], [0.1, 0.03]]}
    law, cm = law_of(stated), law_of(stated, units=["cm"])
    assert np.log10(law.k(1000.0, pressure=1e6)) == pytest.approx(8 + 0.5 + 1 - 0.2 + 0.1 + 0.03, rel=1e-14)
    assert np.log10(law.k(500.0, pressure=1e4)) == pytest.approx(8 - 0.5 - 1 - 0.2 + 0.1 - 0.03, rel=1e-14)
    assert np.log10(law.k(2000.0 / 3, pressure=1e5)) == pytest.approx(8 - 0.1, rel=1e-14)
    assert law.k(300.0, pressure=1e2) == pytest.approx(law.k(500.0, pressure=1e4), rel=1e-14)
    assert cm.k(700.0, pressure=2e5) == pytest.approx(1e-6 * law.k(700.0, pressure=2e5), rel=1e-13)


def test_held_pressure_is_the_pressure_of_the_laws():
    """At constant pressure k of a table answers to the vessel's pressure, whatever amount is in it."""
    eq = equations(LAWS["pressure table"], "pressure")
    law = eq.mechanism.reactions[0].terms[0].law
    for scale in (1e-3, 1.0, 40.0):
        y = np.array([1.0, 2.0, 3.0, 0.0]) * scale + np.array([0, 0, 0, 650.0])
        volume = 6.0 * scale * R * 650.0 / PRESSURE
        forward = eq.reaction_rates(y)[0][0]
        assert forward == pytest.approx(law.k(650.0, pressure=PRESSURE) * (2.0 * scale / volume) ** 2, rel=1e-12)


def test_pattern_of_a_pressure_law_is_full_where_the_volume_is_held():
    """k answers to every species through the total: no entry of J may be missing from the sparse pattern."""
    eq = equations(LAWS["Chebyshev"], "volume", "adiabatic")
    y = np.array([3.0, 0.7, 11.0, 900.0])
    assert np.array_equal(eq.J_sparse(0.0, y).toarray(), eq.J(0.0, y)) and eq.J(0.0, y)[0, 2] != 0


@pytest.mark.parametrize("clamp, told", [(False, True), (True, False)])
def test_a_run_that_leaves_the_window_is_remarked_on(clamp, told):
    """2 B ⇌ A warms the gas beyond the window's 700 K; the edge holds there, and the run goes on."""
    series = {"law": "Chebyshev", "T": [350.0, 700.0], "p": [1e3, 1e7], "c": [[4.0, 0.1]], "clamp": clamp}
    case = build_case({"start": {"temperature": "600 K", "pressure": "1 bar", "mole_ratio": {"B": 1, "Z": 1}},
                       "until": {"time": "1 s"}}, mechanism=build_mechanism(document([series])))
    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always")
        trajectory = run(case)
    remarks = [str(w.message) for w in caught if "left the window of a rate law" in str(w.message)]
    assert trajectory.complete and trajectory.temperature[-1] > 715 and bool(remarks) == told
    assert not told or "'2 B ⇌ A': T is" in remarks[0]
