"""Lumped steps: orders, Horiuti's number, adsorption, against formulas typed here; f and J stand in test_equations."""

import warnings

import numpy as np
import pytest

import solutions
from bothways import Equations, Remark, build_case, build_mechanism
from bothways.along import affinities
from bothways.balance import net_rates
from bothways.batch import run_and_judge
from bothways.constants import GAS_CONSTANT as R
from bothways.contents import Contents
from bothways.endpoint import Kind, target_of
from bothways.reach import reachable
from invented_lumped import lumped_steps

CLOSURES = [(holds, heat) for holds in ("volume", "pressure") for heat in ("isothermal", "adiabatic")]
EPSILON = 1e-9  # mol/m3, below which a power starts smoothly


def document(equation, forward, units=()):
    """INVENTED isomers and dimers of one building block: A, B, C are Q, D is Q2; Z takes no part."""
    data = {"A": (1, 0.0, 250.0), "B": (1, -8.0, 245.0), "C": (1, -3.0, 240.0), "D": (2, -60.0, 330.0), "Z": (1, 5.0, 200.0)}
    species = {name: {"composition": {"X" if name == "Z" else "Q": count}, "potential": {
        "form": "constant heat capacity", "at": "300 K", "H": f"{H} kJ/mol", "S": f"{S} J/(mol K)", "cp": "60 J/(mol K)"}}
        for name, (count, H, S) in data.items()}
    reactions = [(equation, forward)] if isinstance(equation, str) else list(zip(equation, forward, strict=True))
    return {"mechanism": {"name": "lumped", "phase": "ideal gas", "standard_pressure": "1 bar", "units": list(units)},
            "elements": {"Q": "40 g/mol", "X": "30 g/mol"}, "species": species,
            "reaction": [{"equation": e, "forward": f} for e, f in reactions]}


def built(equation, forward, units=()):
    return build_mechanism(document(equation, forward, units))


def rates(mechanism, c, T):
    forward, reverse = Equations(mechanism, "volume", "isothermal").reaction_rates(np.append(c, T))
    return forward[0], reverse[0]


def log_Kc(mechanism, T):
    """ln Kc of the first reaction, mol/m3, from g = h - T s of the species as typed above."""
    data = mechanism.to_dict()["species"]
    g = [float(s["potential"]["H"].split()[0]) * 1e3 + 60 * (T - 300)
         - T * (float(s["potential"]["S"].split()[0]) + 60 * np.log(T / 300)) for s in data.values()]
    nu = mechanism.stoichiometry[:, 0]
    return -(nu @ np.array(g)) / (R * T) + nu.sum() * np.log(1e5 / (R * T))


C = np.array([3.0, 0.4, 7.0, 0.02, 11.0])
"""Concentrations of A, B, C, D, Z [mol/m3]."""


@pytest.mark.parametrize("orders, sigma", [({"A": 1.5, "B": -0.5}, 1.0), ({"A": 0.5, "Z": 0.7, "C": 0.2}, 2.0),
                                           ({"A": 2.5}, 0.5), ({"A": 1.0, "B": -0.25}, 4.0)])
def test_rates_by_hand(orders, sigma):
    """A ⇌ B at 450 K: k Πc^α and its product with (Q/K)^(1/σ)."""
    m = built("A ⇌ B", {"law": "Arrhenius", "A": 7.0, "Ea": 1e4, "orders": orders, "stoichiometric_number": sigma})
    forward, reverse = rates(m, C, 450.0)
    expected = 7.0 * np.exp(-1e4 / (R * 450)) * np.prod([C["ABCDZ".index(name)] ** a for name, a in orders.items()])
    assert forward == pytest.approx(expected, rel=1e-13)
    assert reverse == pytest.approx(expected * (C[1] / C[0] / np.exp(log_Kc(m, 450.0))) ** (1 / sigma), rel=1e-12)


def test_hougen_watson_by_hand():
    """2 A ⇌ D: k c_A² (1 - Q/K)/(1 + K_A √c_A + K_Z c_Z)²; numbers per litre and minute."""
    law = {"law": "Hougen-Watson", "k": {"A": 3.0}, "power": 2, "adsorption": [
        {"species": "A", "K": {"A": 0.9, "Ea": -5e3}, "power": 0.5}, {"species": "Z", "K": {"A": 20.0}}]}
    m = built("2 A ⇌ D", law, units=["dm", "min"])
    a, d, z, T = C[0] / 1000, C[3] / 1000, C[4] / 1000, 380.0
    group = 1 + 0.9 * np.exp(5e3 / (R * T)) * np.sqrt(a) + 20.0 * z
    forward, reverse = rates(m, C, T)
    assert forward == pytest.approx(3.0 * a**2 / group**2 * 1000 / 60, rel=1e-13)
    assert reverse / forward == pytest.approx((C[3] / C[0] ** 2) / np.exp(log_Kc(m, T)), rel=1e-12)
    assert d > 0


def test_units_follow_the_sum_of_the_orders():
    """An order of 1.5 in all, with M one higher: k in (L/mol)^0.5/min, and (L/mol)^1.5/min."""
    plain = built("A ⇌ B", {"law": "Arrhenius", "A": 60.0, "orders": {"A": 1.5}}, units=["dm", "min"])
    with_M = built("A + M ⇌ B + M", {"law": "Arrhenius", "A": 60.0, "orders": {"A": 1.5}}, units=["dm", "min"])
    assert rates(plain, C, 400.0)[0] == pytest.approx(1000 * (C[0] / 1000) ** 1.5, rel=1e-13)
    assert rates(with_M, C, 400.0)[0] == pytest.approx(1000 * (C[0] / 1000) ** 1.5 * C.sum() / 1000, rel=1e-13)


LAWS = [{"orders": {"A": 1.5, "B": -0.5}}, {"orders": {"A": 0.5}, "stoichiometric_number": 2},
        {"orders": {"A": 0.25, "C": 0.5}, "stoichiometric_number": 4}, {"stoichiometric_number": 0.5, "orders": {"A": 2}},
        {"orders": {"A": 1.2, "B": 0.3}, "stoichiometric_number": 3}]


@pytest.mark.parametrize("more", LAWS)
def test_the_net_rate_has_the_sign_of_the_affinity_and_vanishes_with_it(more):
    """Also where concentrations lie far below the smooth start: sign at 1 ± 1e-9 of equilibrium, 1e-14 of the rates in it."""
    m = built("A ⇌ B", {"law": "Arrhenius", "A": 7.0, **more})
    K = np.exp(log_Kc(m, 400.0))
    for a in 10.0 ** np.arange(-18.0, 4.0):
        for factor in (1 - 1e-9, 1.0, 1 + 1e-9):
            forward, reverse = rates(m, np.array([a, a * K * factor, 0.3, 0.0, 0.0]), 400.0)
            assert forward > 0 and reverse > 0
            if factor == 1.0:
                assert abs(forward - reverse) <= 2e-13 * forward
            else:
                assert (forward > reverse) == (factor < 1)


@pytest.mark.parametrize("more", LAWS)
def test_zero_concentrations(more):
    """Without A or B f and J are finite; from A alone it goes forward; from B alone back if the rate asks for no A."""
    m = built("A ⇌ B", {"law": "Arrhenius", "A": 7.0, **more})
    eq, orders = Equations(m, "volume", "isothermal"), m.reactions[0].terms[0].orders
    for c in ([1, 0, 1, 0, 0], [0, 1, 1, 0, 0], [0, 0, 1, 0, 0], [0, 0, 0, 0, 1], [1, -1e-13, 1, 0, 0],
              [-1e-13, 1, -1e-20, 0, 0]):
        y = np.array([*c, 400.0], dtype=float)
        assert np.all(np.isfinite(eq.f(0.0, y))) and np.all(np.isfinite(eq.J(0.0, y)))
    needs_B, needs_A = (orders.common(m.reactions[0].net).get(name, 0) > 0 for name in "BA")
    assert (eq.f(0.0, np.array([1.0, 0, 1, 0, 0, 400]))[1] > 0) == (not needs_B)
    assert (eq.f(0.0, np.array([0.0, 1, 1, 0, 0, 400]))[0] > 0) == (not needs_A)
    for charge in np.eye(5)[:3] + np.array([0, 0, 1, 0, 0.0]):
        runs = any(r > 0 for r in rates(m, charge, 400.0))
        assert bool(reachable(m, charge)[1][0]) == runs


def test_net_rate_follows_from_the_affinity():
    """De Donder's relation in plain NumPy against the kernels, for every reaction that has one σ."""
    m = build_mechanism(lumped_steps())
    n, T = np.linspace(0.1, 2.0, len(m.species)), 900.0
    forward, reverse = Equations(m, "volume", "isothermal").reaction_rates(np.append(n, T))
    affinity = affinities(m, n[None], np.array([T]), np.ones(1))[0] / (R * T)
    sigma = np.array([r.sigma for r in m.reactions])
    expected = np.where(affinity > 0, net_rates(forward, affinity, sigma), -net_rates(reverse, -affinity, sigma))
    known = np.isfinite(sigma)
    assert np.allclose(expected[known], (forward - reverse)[known], rtol=1e-8)  # one is in the smooth start of (Q/K)^(1/2)
    assert list(sigma[2:5]) == [2.0, 0.5, 3.0] and np.isnan(sigma[7])  # mass action beside a lumped term, each with σ = 1


def test_derived_reverse_constant_belongs_to_the_reverse_orders():
    m = built("A ⇌ B", {"law": "Arrhenius", "A": 7.0, "orders": {"A": 1.5, "B": -0.25}, "stoichiometric_number": 2})
    _, reverse = rates(m, C, 400.0)
    assert Contents(m).reverse_constants(400.0)[0] * C[0] ** 1.0 * C[1] ** 0.25 == pytest.approx(reverse, rel=1e-12)


# ---- verdicts


def case_of(m, charge, holds="volume", heat="isothermal", **until):
    return build_case({"vessel": {"heat": heat, "holds": holds}, "start": {"temperature": 400.0, "pressure": 2e5,
                       "mole_ratio": charge}, "until": until or {"equilibrium": True}}, mechanism=m)


def test_a_charge_without_reactants_cannot_start():
    """A rate of order 2 in A is zero without A, whatever there is of B."""
    m = built("A ⇌ B", {"law": "Arrhenius", "A": 7.0, "orders": {"A": 2.0}})
    result, last = run_and_judge(case_of(m, {"B": 1.0}, equilibrium=True, time=10.0))
    assert last.kind is Kind.CANNOT_START and np.array_equal(result.amount[0], result.amount[-1])
    assert run_and_judge(case_of(m, {"B": 1.0, "A": 1e-6}))[1].kind is Kind.APART  # C, D and Z by themselves


def test_a_catalyst_that_is_missing_is_noticed():
    m = built("A ⇌ B", {"law": "Arrhenius", "A": 7.0, "orders": {"Z": 0.5}})
    assert run_and_judge(case_of(m, {"A": 1.0}, equilibrium=True, time=10.0))[1].kind is Kind.CANNOT_START


@pytest.mark.parametrize("holds, heat", CLOSURES)
@pytest.mark.parametrize("more", LAWS)
def test_every_closure_lands(more, holds, heat):
    """Beside a dimerisation over a surface; from A alone, order below one and inhibition included."""
    surface = {"law": "Hougen-Watson", "k": {"A": 2e-4}, "power": 2, "adsorption": [{"species": "D", "K": {"A": 0.1}}]}
    m = built(["A ⇌ B", "2 A ⇌ D", "B ⇌ C"], [{"law": "Arrhenius", "A": 7.0, **more}, surface, {"law": "Arrhenius", "A": 1.0}])
    charge = {"A": 1.0, "B": 1e-3} if more["orders"].get("B", 0) > 0 else {"A": 1.0}
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        result, last = run_and_judge(case_of(m, {**charge, "C": 0.01}, holds, heat))
    assert last.kind is Kind.LANDED, last.sentence
    assert np.all(np.diff(result.potential) <= 1e-13 * np.abs(result.potential[0]))
    assert last.largest_deviation < 1e-6


@pytest.mark.parametrize("more", LAWS)
def test_relaxation_time_against_the_slope_of_f(more):
    """At the equilibrium of A ⇌ B the rate of return per displacement is 1/τ: a difference of f across it."""
    m = built("A ⇌ B", {"law": "Arrhenius", "A": 7.0, **more})
    case = case_of(m, {"A": 1.0, "B": 0.1, "C": 0.5})
    target = target_of(case)
    own, volume = target.own.amount, case.charge.volume
    h = 1e-4 * own[0] / volume

    def f(shift):
        return case.equations().f(0.0, np.append(own / volume + shift * np.array([1, -1, 0, 0, 0]), 400.0))[0]

    slope = -(f(h) - f(-h)) / (2 * h)
    assert target.relaxation_time(target.own.mole_fraction) * slope == pytest.approx(1.0, rel=1e-6)


def test_a_list_of_mass_action_and_lumped_terms_relaxes_by_both():
    terms = [{"law": "Arrhenius", "A": 3.0}, {"law": "Arrhenius", "A": 7.0, **LAWS[1]}]
    times = [target_of(case).relaxation_time(target_of(case).own.mole_fraction)
             for case in (case_of(built("A ⇌ B", forward), {"A": 1.0}) for forward in (terms, terms[:1], terms[1:]))]
    assert 1 / times[0] == pytest.approx(1 / times[1] + 1 / times[2], rel=1e-10)


def test_order_of_a_half_runs_out_in_finite_time():
    """dc/dt = -k √c: c₀ (1 - t/t₀)² with t₀ = 2 √c₀/k; then the trace that K = e^60 leaves, far below the smooth start."""
    data = document("A ⇌ B", {"law": "Arrhenius", "A": 2.0, "orders": {"A": 0.5}, "stoichiometric_number": 2})
    data["species"]["B"]["potential"]["H"] = "-200 kJ/mol"
    start = np.sqrt(2e5 / (R * 400.0))
    for share in (0.5, 0.9, 3.0):
        result, last = run_and_judge(case_of(build_mechanism(data), {"A": 1.0, "C": 1e-9}, time=share * start))
        left = result.amount[-1, 0] / result.amount[0, 0]
        assert left == pytest.approx((1 - share) ** 2, rel=1e-4) if share < 1 else left < 1e-18
    assert last.kind is Kind.APART and last.largest_deviation < 1e-6  # C and D by themselves


# ---- solutions


def with_own_orders(data, **more):
    """The same mechanism, its laws stated as lumped ones with the equations' own orders."""
    forward = [{**r["forward"], "stoichiometric_number": 1, **more} for r in data["reaction"]]
    return {**data, "reaction": [{**r, "forward": f} for r, f in zip(data["reaction"], forward, strict=True)]}


@pytest.mark.parametrize("heat", ["isothermal", "adiabatic"])
@pytest.mark.parametrize("state", solutions.STATES)
def test_with_the_equations_own_orders_it_is_mass_action(state, heat):
    """Long sides, a species on both sides, mole fractions: f and J of both statements, 1e-12."""
    plain, lumped = (Equations(build_mechanism(data), "volume", heat, heat_capacity=2e5)
                     for data in (solutions.document(state), with_own_orders(solutions.document(state))))
    y = np.array([640.0, 95.0, 130.0, 40.0, 3.0, 5.0, 2.9e4, 341.0])
    assert np.allclose(lumped.f(0.0, y), plain.f(0.0, y), rtol=1e-12, atol=1e-13 * np.abs(plain.f(0.0, y)).max())
    J = plain.J(0.0, y)
    assert np.all(np.abs(lumped.J(0.0, y) - J) <= 1e-12 * np.abs(J).max(axis=1, keepdims=True))


@pytest.mark.parametrize("state", solutions.STATES)
def test_mole_fractions_count_under_the_root_as_well(state):
    """σ = 2: the ratio of the one-way rates is the root of that of mass action, and J agrees with differences of f."""
    data = solutions.document(state)
    data["reaction"] = data["reaction"][:1]
    halved = with_own_orders(data, stoichiometric_number=2)
    plain, lumped = (Equations(build_mechanism(d), "volume", "isothermal") for d in (data, halved))
    y = np.array([640.0, 95.0, 130.0, 40.0, 3.0, 5.0, 2.9e4, 341.0])
    (ahead, back), (ahead_2, back_2) = (eq.reaction_rates(y) for eq in (plain, lumped))
    assert ahead_2[0] == pytest.approx(ahead[0], rel=1e-13)
    assert back_2[0] / ahead_2[0] == pytest.approx(np.sqrt(back[0] / ahead[0]), rel=1e-13)
    h, J = 1e-3 * y, lumped.J(0.0, y)
    for k, step in enumerate(np.diag(h)):
        at = [lumped.f(0.0, y + m * step)[0] for m in (-2, -1, 1, 2)]
        round_off = 1e-15 * np.abs(ahead_2[0] + back_2[0]) / h[k]
        assert J[0, k] == pytest.approx((at[0] - 8 * at[1] + 8 * at[2] - at[3]) / (12 * h[k]), rel=1e-8, abs=4 * round_off)
