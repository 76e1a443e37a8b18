"""The method that works by reactions: its bases, its derivatives, its order, and that it agrees with the method by species."""

import ctypes
import warnings

import numpy as np
import pytest

import bothways.integrate.compiled_methods as driver
from bothways import Remark, build_case, build_mechanism
from bothways.batch import run_and_judge
from bothways.compiled import JIT
from bothways.endpoint import Kind
from bothways.integrate import stepping
from bothways.integrate.grading import grade_reactions, grade_species, in_order
from bothways.kernels import judge
from bothways.monitored import monitored
from bothways.reach import reachable
from invented import building_blocks
from invented_laws import every_law
from invented_lumped import lumped_steps
from networks import CLOSURES, network
from test_relaxation import chain, from_ratio

pytestmark = pytest.mark.skipif(not JIT, reason="callbacks have no address in interpreted kernels")
SETS = {"building blocks": building_blocks, "every law": every_law, "lumped steps": lumped_steps}


def random_network(seed):
    """ν of 24 random reactions of up to four of 9 species, none beyond rank 6; speeds and amounts over 40 decades."""
    rng = np.random.default_rng(seed)
    own = rng.integers(-2, 3, (9, 6)) * (rng.random((9, 6)) < 0.5)
    nu = (own @ (rng.integers(-1, 2, (6, 24)) * (rng.random((6, 24)) < 0.4))).astype(float)
    return nu, 10.0 ** rng.uniform(-20, 20, 24), 10.0 ** rng.uniform(-40, 0, 9)


def greedy(columns, order):
    """Columns that raise the rank, asked in this order: by singular values, apart from any elimination."""
    taken = []
    for k in order:
        if np.linalg.matrix_rank(columns[:, [*taken, k]], tol=1e-8) > len(taken):
            taken.append(int(k))
    return taken


@pytest.mark.parametrize("seed", range(12))
def test_the_bases_are_greedy_and_reproduce_everything(seed):
    """ν = ν_B Z with nothing faster in a row than its own reaction; E = ν_B L with no species scarcer than its own."""
    nu, speed, amount = random_network(seed)
    combined, basis = np.empty_like(nu), np.empty(9, dtype=np.int64)
    rank = grade_reactions(nu, speed, combined, basis)
    assert basis[:rank].tolist() == greedy(nu, np.argsort(-speed)) and rank == np.linalg.matrix_rank(nu)
    assert np.allclose(nu[:, basis[:rank]] @ combined[:rank], nu, rtol=0, atol=1e-12)
    mixed = combined[:rank] != 0
    assert all(np.max(speed[mixed[k]]) <= speed[basis[k]] for k in range(rank))
    spread, places = np.empty((rank, 9 + rank)), np.empty(rank, dtype=np.int64)
    grade_species(nu, basis, amount, spread, places)
    assert places.tolist() == greedy(nu[:, basis[:rank]].T, np.argsort(amount))
    E, L = spread[:, :9].T, spread[:, 9:].T
    assert np.allclose(nu[:, basis[:rank]] @ L, E, rtol=0, atol=1e-12) and np.array_equal(E[places], np.eye(rank))
    assert all(np.min(amount[E[:, k] != 0]) >= amount[places[k]] for k in range(rank))
    assert in_order(combined, basis, rank, speed, 1) and in_order(spread, places, rank, amount, -1)
    assert not in_order(combined, basis, rank, 1.0 / speed, 1)


def a_case(name, holds, heat, seed=0):
    """A charge of every species of a set."""
    mechanism = build_mechanism(SETS[name]())
    amount = dict(zip(mechanism.names, 10.0 ** np.random.default_rng(seed).uniform(-4, 0, len(mechanism.names)), strict=True))
    return build_case({"vessel": {"heat": heat, "holds": holds}, "until": {"time": 1.0},
                       "start": {"temperature": 1300.0, "pressure": 3e5, "mole_ratio": amount}}, mechanism=mechanism)


@pytest.mark.parametrize("holds, heat", CLOSURES)
@pytest.mark.parametrize("name", SETS)
def test_rates_and_slopes_by_reaction_sum_to_f_and_J(name, holds, heat):
    """ν w = f, b·ν w = dT/dt and ν ∂w/∂n = ∂f/∂n + ∂f/∂T·bᵀ, T following from the amounts."""
    case = a_case(name, holds, heat)
    equations, system = case.equations(), monitored(case, case.equations()).problem.compiled
    by, (n, r) = system.by_reaction(), case.mechanism.stoichiometry.shape
    y, size = system.start[system.places], by.reaction.size
    x, w, slopes = np.append(y[:n], y[n] + 20.0 * (heat == "adiabatic")), np.empty(r + 1), np.empty(size + 2 * r + 2 * n)
    assert called(by.rates, x, w, by.context) == called(by.slopes, x, slopes, by.context) == 1
    d, q, a, b = np.split(slopes[size:], [r, 2 * r, 2 * r + n])
    K = np.outer(d, a) + np.outer(q, b)
    np.add.at(K, (by.reaction[by.species < n], by.species[by.species < n]), slopes[:size][by.species < n])
    f, J = equations.f(0.0, y), equations.J(0.0, y)
    forward, reverse = (np.abs(rate) for rate in equations.reaction_rates(y))
    volume = 1.0 if holds == "volume" else np.sum(y[:n]) * 8.31446261815324 * y[n] / case.charge.pressure
    gross = np.abs(by.nu) @ (forward + reverse) * volume
    assert abs(w[r] / y[n] - 1.0) < 1e-13 and np.all(np.abs(by.nu @ w[:r] - f[:n]) <= 1e-12 * gross)
    assert abs(b @ f[:n] - f[n]) <= 1e-12 * (np.abs(b) @ gross)
    expected = J[:n, :n] + np.outer(J[:n, n], b)
    worst = np.abs(by.nu) @ np.abs(K) + np.abs(expected)
    assert np.all(np.abs(by.nu @ K - expected) <= 1e-9 * worst)


def called(address, given, out, context):
    """The callback at an address."""
    kind = ctypes.CFUNCTYPE(ctypes.c_int64, *[ctypes.c_void_p] * 3)
    return kind(address)(given.ctypes.data, out.ctypes.data, context.ctypes.data)


@pytest.mark.parametrize("holds, heat", CLOSURES)
def test_order_of_convergence(holds, heat):
    """Fixed steps on a gentle network: slope 5 within 0.15."""
    case = network(104, 1.0, 1.0, (holds, heat))
    equations = case.equations()
    end = 1.0 / np.max(np.abs(np.linalg.eigvals(equations.J(0.0, monitored(case, equations).problem.start))))
    exact = fixed(case, end, 256)
    counts = (6, 9, 12, 16)
    errors = [np.max(np.abs(fixed(case, end, count) - exact)) for count in counts]
    slope = -np.polyfit(np.log(counts), np.log(errors), 1)[0]
    assert abs(slope - 5.0) < 0.15 and errors[-1] < 1e-5 * np.max(exact), (slope, errors)


def fixed(case, end, count):
    """The state (n, T) at `end` after so many steps by reactions."""
    stepper = driver.RosenbrockStepper(monitored(case, case.equations()).problem)
    assert stepper.change_over()
    stepper.rtol, stepper.atol = 1e30, np.minimum(stepper.atol, 1e300)
    for k in range(count):
        stepper.memory[:] = 0.0
        stepper.memory[stepping.TIME], stepper.memory[stepping.STEP] = k * end / count, end / count
        status, written = stepper.advance((k + 1) * end / count)
        assert status == stepping.REACHED and written == 1
    return stepper.z[stepper.system.places]


@pytest.mark.parametrize("holds, heat", CLOSURES)
def test_agrees_with_the_method_by_species(holds, heat, monkeypatch):
    """Hydrogen and air through ignition: the same ends, and the same course at times on the way, within the tolerance."""
    case = build_case({"case": {"mechanism": "hydrogen-oxygen"}, "vessel": {"heat": heat, "holds": holds},
                       "start": {"temperature": 1100.0, "pressure": "2 bar", "mole_ratio": {"H2": 2, "O2": 1, "N2": 3.76}},
                       "until": {"equilibrium": True}, "output": {"also_at": [1e-5, 1e-4, 3e-4, 1e-3]}, "solver": {"rtol": 1e-8}})
    monkeypatch.setattr(driver, "PATIENCE", 10**6)
    plain = run_and_judge(case)[0]
    monkeypatch.setattr(driver, "PATIENCE", 0)
    by_reaction, last = run_and_judge(case)
    steps = by_reaction.statistics
    assert last.kind is Kind.LANDED and 0 < steps["graded_steps"] <= steps["steps"] and plain.statistics["graded_steps"] == 0
    for t in (*case.also_at, None):
        one, other = (state_at(run, t) for run in (plain, by_reaction))
        assert np.max(np.abs(one - other) / (np.abs(one) + 1e-9)) < 1e-5


def state_at(run, t):
    """Mole fractions and T (in thousands of kelvins) at a time that a step landed on, or at the end."""
    k = -1 if t is None else int(np.argmin(np.abs(run.time - t)))
    return np.append(run.amount[k] / np.sum(run.amount[k]), run.temperature[k] / 1000.0)


@pytest.mark.parametrize("seed", [478, 1157])
def test_what_cannot_come_about_stays_away(seed, monkeypatch):
    """Also by species: a little of an autocatalyst that round-off made would grow to amounts that matter."""
    monkeypatch.setattr(driver, "PATIENCE", 10**6)
    monkeypatch.setattr(driver, "DROWNED", np.inf)
    monkeypatch.setattr(driver, "MOST_STEPS_IF_ASKED", 500)
    case = network(seed, 20.0, 4.0)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        result = run_and_judge(case)[0]
    there, _ = reachable(case.mechanism, case.charge.amount)
    assert result.statistics["graded_steps"] == 0 and not there.all() and np.all(result.amount[:, ~there] == 0.0)


@pytest.mark.parametrize("slow", [1e-16, 1e-20, 1e-24])
def test_a_slow_step_behind_a_fast_one_keeps_its_time(slow):
    """A ⇌ B ⇌ C at 1 : 2 : 3, k = 1 and `slow`: c = ½ (1 - exp(-4/3 slow t)) once A and B are at their equilibrium, to within
    `slow`; 16 to 24 decades, at every step with more C than the tolerance asks for."""
    case = chain([("A", "B", 1.0), ("B", "C", slow)], from_ratio(1.0, 2.0, 3.0), {"A": 1})
    result, last = run_and_judge(build_case({**case.document, "until": {"equilibrium": True}}, mechanism=case.mechanism))
    c, exact = result.mole_fraction[:, 2], -0.5 * np.expm1(-4.0 / 3.0 * slow * result.time)
    seen = exact > 1e-9
    assert last.kind is Kind.LANDED and result.statistics["graded_steps"] > 0 and np.sum(seen) > 10
    assert np.max(np.abs(c[seen] / exact[seen] - 1.0)) < 1e-4


@pytest.mark.parametrize("seed, decades", [(1, 20.0), (55, 20.0), (529, 20.0), (1269, 30.0)])
def test_what_the_method_by_species_cannot_do(seed, decades, monkeypatch):
    """Networks whose rates lie 20 and 30 decades apart land from the first step on, in fewer steps than patience lasts.

    529: round-off may not bring about what no reaction can make. 55, 1269: totals that round-off decides are not mended.
    """
    monkeypatch.setattr(driver, "PATIENCE", 0)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        result, last = run_and_judge(network(seed, decades, 4.0))
    assert last.kind in (Kind.LANDED, Kind.APART) and result.statistics["graded_steps"] < 800
    assert np.max(np.abs(result.element_residual)) < 1e-13
    assert result.statistics["rejected_by_second_law"] < 0.05 * result.statistics["steps"]


@pytest.mark.parametrize("seed", [160, 832, 1678, 1743])
def test_what_drowns_is_noticed_before_it_does_harm(seed):
    """30 decades: by species steps go on growing past what they no longer see, up to the last time, and end elsewhere.

    832: two species that only take each other start from nothing; set to zero again and again they would stay there.
    """
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        result, last = run_and_judge(network(seed, 30.0, 4.0))
    assert last.kind in (Kind.LANDED, Kind.APART) and last.largest_deviation < 1e-6 and 0 < result.statistics["graded_steps"]


def test_mending_leaves_alone_what_only_round_off_tells():
    """Two totals whose difference holds traces alone, and which are off by round-off of the abundant: traces stay."""
    rows = np.array([[1.0, 1.0, 0.0, 2.0], [1.0, 0.0, 1.0, 0.0]])
    amount = np.array([0.0873, 3e-17, 8e-14, 2e-19])
    totals = rows @ amount * (1.0 + np.array([6e-15, -6e-15]))
    before = amount.copy()
    assert judge.mend(amount, rows, totals, np.zeros((2, 2)), np.zeros(2), np.zeros(2), np.zeros(judge.LEDGER_HEAD))
    assert np.max(np.abs(amount / before - 1.0)) < 1e-5


def test_of_totals_that_nearly_agree_the_smallest_is_kept():
    """A total of 3e-3 that two of about 10 repeat but for traces: their round-off is not its own."""
    rows = np.array([[1.0, 0.0, 1.0, 0.0], [1.0, 1.0, 0.0, 1e-12], [0.0, 1.0, 0.0, 0.0]])
    amount = np.array([3e-3, 10.0, 1e-15, 1e-9])
    totals = rows @ amount + np.array([3e-16, 4e-15, -4e-15])
    order = [1, 2, 0]
    assert judge.mend(amount, rows[order], totals[order], np.zeros((3, 3)), np.zeros(3), np.zeros(3), np.zeros(judge.LEDGER_HEAD))
    assert abs(rows[0] @ amount / totals[0] - 1.0) < 1e-15
