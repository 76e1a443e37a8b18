"""Vessels of given temperature and in a jacket: f and J against the reference, closed forms, balances, second law."""

import numpy as np
import pytest

import solutions
from bothways import Equations, build_case, build_mechanism, read_mechanism, run
from bothways.batch import run_and_judge
from bothways.constants import GAS_CONSTANT as R
from bothways.contents import Contents
from bothways.endpoint import Kind, target_of, verdict_of_state
from bothways.exchange import ExchangingEquations
from bothways.mechanism import table_view
from bothways.schedule import Schedule
from invented import building_blocks
from invented_laws import every_law
from reference import Reference
from test_judge import Bench

PRESSURE, UA, RAMP, NOW = 3.0e5, 40.0, 200.0, 0.5
RISING = Schedule((0.0, 1.0), (900.0, 900.0 + RAMP))
KINDS = [(holds, heat) for holds in ("volume", "pressure") for heat in ("given temperature", "jacket")]
SETS = {"invented": building_blocks(), "every law": every_law(), "hydrogen-oxygen": read_mechanism("hydrogen-oxygen").to_dict()}


# ---- f and J


def equations_of(document, holds, heat):
    jacket = {"heat_capacity": 7.0, "transfer": UA} if heat == "jacket" else {}
    return Equations(build_mechanism(document), holds, heat, PRESSURE, schedule=RISING, **jacket)


def states(n, further, seed):
    rng = np.random.default_rng(seed)
    for _ in range(4):
        yield np.concatenate([10.0 ** rng.uniform(-8, 1, n), [rng.uniform(400.0, 2500.0)], rng.normal(size=further)])


class Expected:
    """The extended equations from the reference's parts, for any real or complex type."""

    def __init__(self, document, holds, heat, alpha, precision=np.float64):
        self.reference, self.holds, self.heat, self.alpha = Reference(document, precision), holds, heat, alpha

    def f(self, y):
        n, T = self.reference.n, y[self.reference.n]
        amounts, jacket = y[:n], RISING.value(NOW)
        if self.heat == "jacket":
            own, size = self.reference.derivative(y[: n + 1], self.holds, "adiabatic", PRESSURE, 7.0, transfer=UA, jacket=jacket)
            heat = UA * (jacket - T)
            return np.concatenate([own, [heat, heat / jacket]]), np.append(size, [UA * (jacket + abs(T))] * 2)
        own, size = self.reference.derivative(y[: n + 1], self.holds, "isothermal", PRESSURE, ramp=RAMP)
        less = 1.0 if self.holds == "volume" else 0.0
        parts = amounts * (self.reference.h_RT(T) - self.alpha / T - less)
        return np.append(own, np.sum(parts) * RAMP / T), np.append(size, np.sum(abs(parts)) * RAMP / abs(T))

    def J(self, y):
        J = np.empty((y.size, y.size))
        for k in range(y.size):
            h = 1e-30 * max(abs(y[k]), 1e-20)
            J[:, k] = self.f(y + 1j * h * (np.arange(y.size) == k))[0].imag / h
        return J


@pytest.mark.parametrize("holds, heat", KINDS)
@pytest.mark.parametrize("name", SETS)
def test_f_and_J_agree_with_the_reference(name, holds, heat):
    """f to 1e-12 of its absolute contributions; J to 1e-8 of the largest entry of each column and each row."""
    equations = equations_of(SETS[name], holds, heat)
    alpha = table_view(equations.tables, "reduction")[::2]
    ours, exact = ExchangingEquations(equations), Expected(SETS[name], holds, heat, alpha, np.longdouble)
    differentiated, n = Expected(SETS[name], holds, heat, alpha), len(equations.mechanism.species)
    for y in states(n, ours.places.size - n - 1, seed=4):
        theirs, size = exact.f(y.astype(np.longdouble))
        assert np.all(np.abs(ours.f(NOW, y) - theirs) <= 1e-12 * size + 1e-300)
        assert np.all(np.abs(equations.f(NOW, y[: n + 1]) - theirs[: n + 1]) <= 1e-12 * size[: n + 1] + 1e-300)
        J, slopes = ours.J(NOW, y), differentiated.J(y)
        assert np.all(np.abs(J - slopes) <= 1e-8 * np.max(np.abs(slopes), axis=0))
        assert np.all(np.abs(J - slopes)[n:] <= 1e-8 * np.max(np.abs(slopes), axis=1, keepdims=True)[n:] + 1e-300)


@pytest.mark.parametrize("holds, heat", KINDS)
def test_bordered_and_plain_forms_are_the_same_system(holds, heat):
    equations = equations_of(SETS["hydrogen-oxygen"], holds, heat)
    ours, n = ExchangingEquations(equations), len(equations.mechanism.species)
    for y in states(n, ours.places.size - n - 1, seed=9):
        z = ours.bordered_state(NOW, y)
        F, B = ours.bordered_f(NOW, z), ours.bordered_J(NOW, z).toarray()
        assert np.array_equal(F[ours.places], ours.f(NOW, y)) and abs(F[n]) <= 1e-13 * np.sum(y[:n])
        if heat == "jacket":
            assert F[-1] == pytest.approx(RAMP, rel=1e-15)
            hotter = z + np.append(np.zeros(z.size - 1), 1e10)
            by_jacket = (ours.bordered_f(NOW, hotter) - F)[n + 1 : n + 3] / 1e10  # linear in T_j
            assert B[n + 1 : n + 3, -1] == pytest.approx(by_jacket, rel=1e-8)
            assert B[n + 3, -1] == pytest.approx(UA * y[n] / z[-1] ** 2, rel=1e-13)
            assert equations.by_time(NOW, y[: n + 1])[-1] == pytest.approx(by_jacket[0] * RAMP, rel=1e-8)


# ---- closed forms: a contents of constant heat capacity that does not react



def isomers(step):
    """A and B, the second `step` [J/mol] away."""
    return {n: {"formula": "Q", "potential": {"form": "constant heat capacity", "at": 400.0, "H": h, "S": 100.0, "cp": 40.0}}
            for n, h in (("A", 0.0), ("B", step))}


HELD = {"mechanism": {"name": "invented", "phase": "ideal gas", "standard_pressure": "1 bar"}, "elements": {"Q": "20 g/mol"},
        "species": isomers(-30e3),
        "reaction": [{"equation": "A = B", "forward": {"law": "Arrhenius", "A": 1e9, "Ea": 80e3}}]}


def inert(vessel, end=100.0, rtol=1e-10, holds="volume", **more):
    """1 mol of B alone in a mechanism whose reaction does next to nothing: it is 30 kJ/mol downhill from A."""
    document = HELD | {"reaction": [{"equation": "A = B", "forward": {"law": "Arrhenius", "A": 1e-200}}]}
    return build_case({"vessel": {"holds": holds} | vessel, "until": {"time": end}, "solver": {"rtol": rtol} | more,
                       "start": {"pressure": 1e5, "amount": {"B": 1.0}} | ({"temperature": 400.0} if vessel["heat"] == "jacket"
                                                                          else {})}, mechanism=build_mechanism(document))


def lag(t, schedule, T, rate):
    """T' = rate·(T_j(t) - T) for a table of T_j, piece by piece."""
    for k, start in enumerate(schedule.times):
        end = schedule.times[k + 1] if k + 1 < len(schedule.times) else np.inf
        span, s = min(t, end) - start, schedule.slope(start)
        behind = schedule.values[k] - s / rate
        T = behind + s * span + (T - behind) * np.exp(-rate * span)
        if t <= end:
            return T
    raise AssertionError


JACKETS = {"constant": 300.0, "table": [[0, 300.0], ["20 s", 450.0], ["30 s", 450.0], ["31 s", 350.0], ["100 s", 350.0]]}


@pytest.mark.parametrize("method", ["Rosenbrock", "BDF", "Radau"])
@pytest.mark.parametrize("holds", ["volume", "pressure"])
@pytest.mark.parametrize("jacket", JACKETS)
def test_contents_follow_a_jacket_as_newton_said(jacket, holds, method):
    """T to 1e-8 of the closed form, heat from it; entropy produced by heat conduction alone where T_j is constant."""
    case = inert({"heat": "jacket", "UA": 3.0, "jacket_temperature": JACKETS[jacket], "thermal_inertia": 1.5}, holds=holds,
                 method=method)
    capacity = 1.5 * (40.0 - (R if holds == "volume" else 0.0))
    result = run(case)
    T = np.array([lag(t, case.schedule, 400.0, 3.0 / capacity) for t in result.time])
    assert result.temperature == pytest.approx(T, rel=1e-8) and set(case.schedule.corners) <= set(result.time)
    assert result.extra["heat_received"] == pytest.approx(capacity * (T - 400.0), rel=1e-7, abs=1e-5)
    assert np.all(np.diff(result.entropy_produced) >= -1e-12 * capacity)
    if jacket == "constant":
        produced = capacity * (np.log(T / 400.0) - (T - 400.0) / 300.0)
        if holds == "pressure":
            assert result.entropy_produced == pytest.approx(produced, rel=1e-7, abs=1e-7)


@pytest.mark.parametrize("heat", ["given temperature", "jacket"])
def test_energy_closes(heat):
    """U less what was received is that of the start to 1e-12 of the thermal energy, ignition and corners included."""
    case, result = kettle(heat)
    contents = Contents(case.mechanism)
    energy = np.array([contents.internal_energy(n, T) for n, T in zip(result.amount, result.temperature, strict=True)])
    thermal = R * result.temperature * result.amount.sum(axis=1)
    assert np.max(np.abs(energy - energy[0] - result.extra["heat_received"]) / thermal) < 1e-12
    assert result.statistics["largest_potential_rise"] <= 1e-12 * abs(result.potential[-1])


# ---- given temperatures, and reactions


def kettle(heat, end=0.02, method="Rosenbrock", rtol=1e-8, holds="volume", **solver):
    vessel = {"given temperature": {"temperature": [[0, 900.0], ["5 ms", 1200.0], ["8 ms", 1200.0], ["20 ms", 700.0]]},
              "jacket": {"UA": 2.0, "jacket_temperature": [[0, 900.0], ["2 ms", 1100.0], ["20 ms", 800.0]]}}[heat]
    start = {"pressure": 2e5, "mole_ratio": {"H2": 2, "O2": 1, "N2": 3.76}}
    case = build_case({"case": {"mechanism": "hydrogen-oxygen"}, "until": {"time": end},
                       "vessel": {"heat": heat, "holds": holds, "volume": "1 L"} | vessel,
                       "start": start | ({"temperature": 1000.0} if heat == "jacket" else {}),
                       "solver": {"rtol": rtol, "method": method} | solver})
    return case, run(case)


def test_a_given_temperature_is_kept_to_the_last_digit():
    case, result = kettle("given temperature")
    assert np.array_equal(result.temperature, [case.schedule.value(t) for t in result.time])
    assert {5e-3, 8e-3} <= set(result.time)
    assert np.max(np.abs(result.energy_residual)) < 1e-12
    assert result.pressure == pytest.approx(result.amount.sum(axis=1) * R * result.temperature / 1e-3, rel=1e-13)


@pytest.mark.parametrize("holds, heat", KINDS)
def test_other_solver_other_road_same_end(holds, heat):
    """SciPy's method integrates the plain form with time in it, ours the bordered one without."""
    ours, theirs = (kettle(heat, method=method, holds=holds)[1] for method in ("Rosenbrock", "Radau"))
    assert ours.mole_fraction[-1] == pytest.approx(theirs.mole_fraction[-1], rel=2e-4, abs=1e-12)
    assert ours.extra["heat_received"][-1] == pytest.approx(theirs.extra["heat_received"][-1], rel=1e-6)
    assert ours.entropy_produced[-1] == pytest.approx(theirs.entropy_produced[-1], rel=1e-6)


def test_a_table_that_stays_is_an_isothermal_vessel():
    start = {"pressure": 2e5, "mole_ratio": {"H2": 2, "O2": 1, "N2": 3.76}}
    given, isothermal = (run(build_case({"case": {"mechanism": "hydrogen-oxygen"}, "vessel": vessel, "until": {"time": 2e-3},
                                         "start": start | more, "solver": {"rtol": 1e-9}}))
                         for vessel, more in (({"heat": "given temperature", "temperature": 1100.0}, {}),
                                              ({"heat": "isothermal"}, {"temperature": 1100.0})))
    assert given.mole_fraction[-1] == pytest.approx(isothermal.mole_fraction[-1], rel=1e-7, abs=1e-13)
    assert given.entropy_produced[-1] == pytest.approx(isothermal.entropy_produced[-1], rel=1e-8)


@pytest.mark.parametrize("heat", ["given temperature", "jacket"])
@pytest.mark.parametrize("holds", ["volume", "pressure"])
def test_entropy_produced_is_that_of_reactions_and_of_heat_conduction(holds, heat):
    """Σ_j ∫A_j dξ_j/T, and ∫UA (T_j - T)(1/T - 1/T_j) dt, by the trapezoidal rule over the run's many steps."""
    case, _ = kettle(heat)
    case = build_case({**case.document, "vessel": {**case.document["vessel"], "holds": holds}, "solver": {"rtol": 1e-11},
                       "output": {"rates": True, "also_at": list(np.linspace(0, 0.02, 501)[1:-1])}})
    result = run(case)
    T, V = result.temperature, result.volume
    rates, A = result.extra["rate_forward"] - result.extra["rate_reverse"], result.extra["affinity"]
    produced = V / T * np.sum(np.where(rates == 0, 0.0, rates * np.where(np.isfinite(A), A, 0.0)), axis=1)
    if heat == "jacket":
        jacket = result.extra["jacket_temperature"]
        produced += case.transfer * (jacket - T) * (1.0 / T - 1.0 / jacket)
    assert result.entropy_produced[-1] == pytest.approx(np.trapezoid(produced, result.time), rel=1e-3)


# ---- the judge


def test_heat_that_flows_from_cold_to_hot_is_refused():
    case = inert({"heat": "jacket", "UA": 3.0, "jacket_temperature": 500.0})
    bench, further = Bench(case), ExchangingEquations(case.equations())
    part = case.charge.concentration
    capacity = part.sum() * (40.0 - R)

    def state(T):
        heat = capacity * (T - 400.0)
        return further.bordered_state(0.0, np.concatenate([part, [T, heat, heat / 500.0]]))

    assert bench(state(420.0), state(430.0))[0]
    assert not bench(state(430.0), state(420.0))[0]
    assert bench(state(430.0), state(420.0), error=2 * (state(430.0) - state(420.0)))[0]


def test_reactions_that_run_uphill_in_a_ramp_are_refused():
    document = HELD | {"species": isomers(-5e3)}
    case = build_case({"vessel": {"heat": "given temperature", "temperature": [[0, 400.0], [10, 500.0]]}, "until": {"time": 10},
                       "start": {"pressure": 1e5, "mole_ratio": {"A": 1, "B": 1}}}, mechanism=build_mechanism(document))
    bench, further, c = Bench(case), ExchangingEquations(case.equations()), case.charge.concentration[0]

    def state(share, T):
        """Y along a straight line of amounts and T from the start, h/RT = h/(RT) as stated above, α as the kernels take it."""
        alpha = table_view(further.equations.tables, "reduction")[::2]
        s = np.linspace(0.0, 1.0, 2001)[:, None]
        amounts = np.hstack([c - share * c * s, c + share * c * s])
        temperatures = 400.0 + (T - 400.0) * s
        h = (np.array([0.0, -5e3]) + 40.0 * (temperatures - 400.0)) / R - alpha
        y = np.sum(amounts * (h / temperatures - 1.0), axis=1) / temperatures[:, 0]
        return further.bordered_state(0.0, np.concatenate([amounts[-1], [T, np.trapezoid(y, temperatures[:, 0])]]))

    assert bench(state(0.0, 400.0), state(0.1, 405.0))[0]
    assert not bench(state(0.0, 400.0), state(-0.1, 405.0))[0]
    assert bench(state(0.0, 400.0), state(0.0, 405.0), error=np.full(5, 1e-9 * c))[0]


# ---- the end


@pytest.mark.parametrize("holds", ["volume", "pressure"])
def test_a_run_to_equilibrium_ends_at_the_jackets_temperature(holds):
    case = build_case({"case": {"mechanism": "hydrogen-oxygen"}, "until": {"equilibrium": True},
                       "vessel": {"heat": "jacket", "UA": 0.5, "jacket_temperature": [[0, 900.0], [0.01, 1500.0], [0.02, 1900.0]],
                                  "holds": holds, "volume": "1 L"},
                       "start": {"temperature": 950.0, "pressure": 2e5, "mole_ratio": {"H2": 2, "O2": 1, "N2": 3.76}}})
    result, last = run_and_judge(case)
    assert last.kind is Kind.LANDED and result.complete and result.time[-1] > 0.02
    assert result.temperature[-1] == pytest.approx(1900.0, rel=1e-6)
    assert result.statistics["rejected_by_second_law"] < 20


def test_a_run_to_equilibrium_waits_for_the_end_of_the_table():
    """A ⇌ B starts near its equilibrium at a temperature to which the table returns."""
    case = build_case({"vessel": {"heat": "given temperature", "temperature": [[0, 900.0], [1, 600.0], [2, 900.0]]},
                       "until": {"equilibrium": True},
                       "start": {"pressure": 1e5, "mole_ratio": {"A": 1, "B": float(np.exp(30e3 / (R * 900.0)))}}},
                      mechanism=build_mechanism(HELD))
    result, last = run_and_judge(case)
    assert result.time[-1] >= 2.0 and last.kind is Kind.LANDED


def test_contents_still_on_their_way_to_the_jackets_temperature_are_no_fault():
    case = inert({"heat": "jacket", "UA": 3.0, "jacket_temperature": 300.0})
    state = case.charge.amount, 350.0, case.charge.volume
    target = target_of(case)
    at_T = np.array([[np.exp(-30e3 / (R * 350.0))], [1.0]])[:, 0]
    assert verdict_of_state(target, at_T / at_T.sum(), 350.0, case.charge.volume).kind is Kind.NOT_YET
    assert verdict_of_state(target, *state).kind is Kind.NOT_YET


@pytest.mark.parametrize("holds", ["volume", "pressure"])
def test_slowest_relaxation_in_a_jacket_is_that_of_J(holds):
    """A ⇌ B with its heat, coupled to a jacket: eigenvalues of the reference's J at equilibrium."""
    case = build_case({"vessel": {"heat": "jacket", "UA": 0.3, "jacket_temperature": 700.0, "holds": holds, "volume": "1 L"},
                       "until": {"time": 1}, "start": {"temperature": 650.0, "pressure": 1e5, "mole_ratio": {"A": 1}}},
                      mechanism=build_mechanism(HELD))
    target, reference = target_of(case), Reference(HELD)
    own, unit = target.own, case.charge.volume if holds == "volume" else 1.0
    y = np.append(own.amount / (own.volume if holds == "volume" else 1.0), 700.0)
    J = np.empty((3, 3))
    for k in range(3):
        h = 1e-30
        J[:, k] = reference.derivative(y + 1j * h * (np.arange(3) == k), holds, "adiabatic", own.pressure, transfer=0.3 / unit,
                                       jacket=700.0)[0].imag / h
    rates = np.sort(-np.linalg.eigvals(J).real)
    assert target.relaxation_time(own.mole_fraction) == pytest.approx(1.0 / rates[1], rel=1e-8)


# ---- solutions

CHARGE = {"A": 1e3, "B": 20.0, "C": 500.0, "D": 20.0, "X+": 20.0, "Q-": 20.0, "W": 2e4}


@pytest.mark.parametrize("state", solutions.STATES)
@pytest.mark.parametrize("heat", ["given temperature", "jacket"])
def test_solutions_exchange_heat_as_well(heat, state):
    """Energy of contents and solvent closes, and the entropy produced is that of reactions and of heat conduction."""
    table = [[0, 300.0], [40, 340.0], [100, 320.0]]
    vessel = {"given temperature": {"temperature": table}, "jacket": {"UA": 15.0, "jacket_temperature": table}}[heat]
    case = build_case({"vessel": {"heat": heat, "volume": "2 L", "inert_heat_capacity": 3e3} | vessel, "until": {"time": 100.0},
                       "start": {"concentration": CHARGE}
                       | ({"temperature": 300.0} if heat == "jacket" else {}), "solver": {"rtol": 1e-10},
                       "output": {"rates": True, "also_at": list(np.linspace(0, 100, 2001)[1:-1])}},
                      mechanism=build_mechanism(solutions.document(state)))
    result, contents = run(case), Contents(case.mechanism)
    T = result.temperature
    energy = contents.energies(result.amount, T, "volume") + 3e3 * (T - 300.0)
    assert np.max(np.abs(energy - energy[0] - result.extra["heat_received"])) < 1e-11 * np.max(np.abs(energy))
    assert np.all(np.diff(result.entropy_produced) > -1e-9) and result.entropy_produced[-1] > 0
    rates, A = result.extra["rate_forward"] - result.extra["rate_reverse"], result.extra["affinity"]
    produced = result.volume / T * np.sum(np.where(rates == 0, 0.0, rates * np.where(np.isfinite(A), A, 0.0)), axis=1)
    if heat == "jacket":
        jacket = result.extra["jacket_temperature"]
        produced += 15.0 * (jacket - T) * (1.0 / T - 1.0 / jacket)
    assert result.entropy_produced[-1] == pytest.approx(np.trapezoid(produced, result.time), rel=1e-3)
