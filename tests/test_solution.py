"""Ideal solutions: f and J against a plain statement of their equations, potentials, equilibria, verdicts, what is shown."""

import numpy as np
import pytest

from bothways import Equations, build_case, build_mechanism, equilibrium, read_case, verdict
from bothways.batch import run_and_judge
from bothways.contents import Contents
from bothways.endpoint import Kind, target_of
from bothways.report import summary
from solutions import SPECIES, STATES, Plain, document
from test_judge import Bench, towards_equilibrium

NAMES = list(SPECIES)
CHARGE = {"A": 800.0, "B": 30.0, "C": 100.0, "X+": 2.0, "Q-": 2.0, "W": 3.0e4}
CASES = [(state, heat) for state in STATES for heat in ("isothermal", "adiabatic")]


def case_of(state, heat, own=2e5, **more):
    vessel = {"heat": heat, "volume": 2e-3, "inert_heat_capacity": own * 2e-3}
    return build_case({"vessel": vessel, "start": {"temperature": 320.0, "concentration": CHARGE},
                       "until": {"equilibrium": True}} | more, mechanism=build_mechanism(document(state)))


def some_state(case, share=0.4):
    y = towards_equilibrium(case, share)
    return np.append(y[:-2], y[-1])


@pytest.mark.parametrize("state, heat", CASES)
def test_f_and_J_are_those_of_the_plain_statement(state, heat):
    case, plain = case_of(state, heat), Plain(state, heat, 2e5)
    equations = case.equations()
    y = np.array([640.0, 95.0, 130.0, 40.0, 3.0, 5.0, 2.9e4, 341.0])
    f, J = plain.f(y), plain.J(y).astype(float)
    forward, reverse = plain.rates(y[:-1].astype(np.longdouble), np.longdouble(y[-1]))
    own = equations.reaction_rates(y)
    assert np.max(np.abs(own[0] / forward - 1)) < 1e-12 and np.max(np.abs(own[1] / reverse - 1)) < 1e-12
    size = np.abs(plain.f(y)).max()
    assert np.max(np.abs(equations.f(0.0, y) - f)) < 1e-12 * size
    scale = np.abs(J).max(axis=1, keepdims=True) + (np.abs(J).max(axis=1, keepdims=True) == 0)
    assert np.max(np.abs(equations.J(0.0, y) - J) / scale) < 1e-11
    assert np.max(np.abs(equations.J_sparse(0.0, y).toarray() - J) / scale) < 1e-11


def test_the_total_concentration_counts_only_for_mole_fractions():
    """Diluting with an inert solvent leaves the net rates at 1 mol/L alone; of mole fractions it pulls A ⇌ B + C apart."""
    nets = {}
    for state in STATES:
        equations = Equations(build_mechanism(document(state)), "volume", "isothermal")
        for water in (3e4, 6e4):
            forward, reverse = equations.reaction_rates(np.array([800.0, 300.0, 100.0, 1.0, 2.0, 2.0, water, 320.0]))
            nets[state, water] = reverse[0] / forward[0]
    assert nets["1 mol/L", 3e4] == nets["1 mol/L", 6e4]
    total = 800.0 + 300.0 + 100.0 + 1.0 + 2.0 + 2.0
    assert nets["mole fraction", 3e4] / nets["mole fraction", 6e4] == pytest.approx((total + 6e4) / (total + 3e4), rel=1e-13)


@pytest.mark.parametrize("state", STATES)
def test_what_may_not_rise_has_the_chemical_potentials_as_slopes(state):
    """∂G/∂n_i = μ_i and ∂G/∂T = -S at constant volume, by central differences: G holds the solvent's share at 1 mol/L."""
    contents, n, T, V = Contents(build_mechanism(document(state))), np.array(list(range(1, 8)), dtype=float), 330.0, 2e-3
    mu, R = contents.chemical_potentials(n, T, V), 8.31446261815324
    for k in range(7):
        step = np.zeros(7)
        step[k] = 1e-5 * n[k]
        slope = (contents.gibbs(n + step, T, V) - contents.gibbs(n - step, T, V)) / (2 * step[k])
        assert slope == pytest.approx(R * T * mu[k], rel=1e-6, abs=1e-2)
    slope = (contents.gibbs(n, T + 0.01, V) - contents.gibbs(n, T - 0.01, V)) / 0.02
    assert slope == pytest.approx(-contents.entropy(n, T, V), rel=1e-8)


@pytest.mark.parametrize("state, heat", CASES)
def test_the_judge_lets_downhill_steps_pass_and_refuses_uphill_ones(state, heat):
    case = case_of(state, heat)
    bench, near, far = Bench(case), _towards(case, 0.6), _towards(case, 0.4)
    assert bench(far, near)[0]
    passed, _, notes = bench(near, far)
    assert not passed and notes[0] > 0


def _towards(case, share):
    """The bordered state a share of the way to equilibrium, T from the energy of species and inert heat capacity."""
    target, V = target_of(case), case.charge.volume
    part = ((1 - share) * case.charge.amount + share * target.own.amount) / V
    T, contents = case.charge.temperature, Contents(case.mechanism)
    if case.heat == "adiabatic":
        energy = contents.enthalpy(case.charge.amount, T)
        T = float(contents.temperatures_of(energy, part[None] * V, np.array([T]), "volume", case.own_heat_capacity, T)[0])
    return case.equations().bordered_state(np.append(part, T))


@pytest.mark.parametrize("state, heat", CASES)
def test_a_run_lands_at_the_equilibrium(state, heat):
    """Composition and, where it is free, temperature; the potential falls; neither pressure nor charge is made."""
    case = case_of(state, heat)
    run, found = run_and_judge(case)
    assert found.kind is Kind.LANDED and found.largest_deviation < 1e-6, found.sentence
    assert verdict(case, run).kind is Kind.LANDED
    assert np.all(np.diff(run.potential) <= 1e-13 * np.abs(run.potential[0]))
    assert run.potential_name == ("Gibbs energy" if heat == "isothermal" else "negative entropy")
    assert np.all(np.isnan(run.pressure)) and "equilibrium_pressure" not in run.extra
    charges = np.array([row[1] for row in SPECIES.values()])
    assert np.max(np.abs(run.amount @ charges)) < 1e-15 * np.sum(case.charge.amount)
    if heat == "adiabatic":
        energy = [Contents(case.mechanism).enthalpy(n, T) + case.own_heat_capacity * T
                  for n, T in zip(run.amount, run.temperature, strict=True)]
        assert np.ptp(energy) < 1e-12 * case.own_heat_capacity * 320.0 and run.temperature[-1] != 320.0
    text = summary(case, run, found)
    assert "bar" not in text.split("caution")[0] and "mol/L" in text


@pytest.mark.parametrize("state", STATES)
def test_the_equilibrium_is_the_least_of_the_same_function(state):
    """Every reaction's affinity is nil there and G rises whichever way it is left."""
    mechanism = build_mechanism(document(state))
    found = equilibrium(mechanism, {name: c * 2e-3 for name, c in CHARGE.items()}, temperature=320.0, volume=2e-3)
    contents, nu = Contents(mechanism), mechanism.stoichiometry
    mu = contents.chemical_potentials(found.amount, 320.0, 2e-3)
    assert np.max(np.abs(nu.T @ mu)) < 1e-9 and np.isnan(found.pressure) and np.isnan(found.helmholtz_energy)
    assert found.gibbs_energy == contents.gibbs(found.amount, 320.0, 2e-3)
    assert found.entropy == pytest.approx(contents.entropy(found.amount, 320.0, 2e-3), rel=1e-12)
    least = found.gibbs_energy
    for j in range(nu.shape[1]):
        step = 1e-2 * np.min(found.amount[nu[:, j] != 0])
        for sign in (-1, 1):
            assert contents.gibbs(found.amount + sign * step * nu[:, j], 320.0, 2e-3) > least


@pytest.mark.parametrize("state, heat", CASES)
def test_the_slowest_relaxation_is_that_of_J(state, heat):
    case = case_of(state, heat)
    target = target_of(case)
    y = np.append(target.own.amount / case.charge.volume, target.own.temperature)
    values = np.sort(-np.linalg.eigvals(case.equations().J(0.0, y)).real)
    smallest = values[-np.linalg.matrix_rank(case.mechanism.stoichiometry)]
    assert target.relaxation_time(target.own.mole_fraction) * smallest == pytest.approx(1.0, rel=1e-6)


def test_reverse_constants_are_those_of_the_rates():
    c = np.array([640.0, 95.0, 130.0, 40.0, 3.0, 5.0, 2.9e4])
    for state in STATES:
        mechanism = build_mechanism(document(state))
        _, reverse = Equations(mechanism, "volume", "isothermal").reaction_rates(np.append(c, 341.0))
        derived = Contents(mechanism).reverse_constants(341.0, total=float(np.sum(c)))
        product = [np.prod([c[NAMES.index(s)] ** count for s, count in r.equation.products]) for r in mechanism.reactions]
        assert reverse == pytest.approx(derived * product, rel=1e-12)


def test_the_pilot_kettle_keeps_its_energy_and_ends_at_the_jackets_equilibrium():
    """∫UA (T_jacket - T) dt is the change of H with the solvent's heat; left for long, it ends where the jacket's warmth says."""
    case = read_case("coupling-kettle")
    run, found = run_and_judge(case)
    contents, own = Contents(case.mechanism), case.own_heat_capacity
    H = [contents.enthalpy(n, T) + own * T for n, T in zip(run.amount, run.temperature, strict=True)]
    received = run.extra["heat_received"]
    assert received == pytest.approx(np.array(H) - H[0], abs=1e-6 * np.max(np.abs(received)))
    jacket = np.interp(run.time, [0.0, 900.0], [298.15, 328.15])
    dense = np.linspace(0, run.time[-1], 20001)
    flow = 1600.0 * (np.interp(dense, [0.0, 900.0], [298.15, 328.15]) - np.interp(dense, run.time, run.temperature))
    assert received[-1] == pytest.approx(np.sum((flow[1:] + flow[:-1]) / 2 * np.diff(dense)), rel=0.02)
    assert run.temperature.max() > jacket.max() + 15 and np.all(np.diff(run.entropy_produced) >= 0)
    assert found.kind is Kind.NOT_YET and run.amount[-1, case.mechanism.index("A")] < 0.1 * run.amount[0, 0]
    assert f"highest temperature {run.temperature.max():.6g} K" in summary(case, run, found)


@pytest.mark.parametrize("name", ["coupling-kettle", "ester-flask", "butene-basket"])
def test_bundled_cases_end_at_their_equilibrium(name):
    case = read_case(name)
    case = build_case({**case.document, "until": {"equilibrium": True}})
    run, found = run_and_judge(case)
    assert found.kind is Kind.LANDED and found.largest_deviation < 1e-6 and run.complete
    assert "steepest pressure rise" not in run.milestones  # no reaction of butenes changes the amount
