"""Joins left as published and rows of pressure tables: located, started anew from, and no going back and forth."""

import warnings

import numpy as np
import pytest

from bothways import Remark, build_case, build_mechanism, read_mechanism, run
from bothways.constants import GAS_CONSTANT as R
from bothways.kernels import surfaces as kernel
from bothways.surfaces import joins, surfaces_of

JOIN = 400.0
HEAD = {"mechanism": {"name": "invented", "phase": "ideal gas", "standard_pressure": "1 bar", "joins": "as published"},
        "elements": {"Q": "20 g/mol"}}


def species(cps, enthalpies, s):
    """Constant cp/R on either side of JOIN, enthalpies there [J/mol] and entropy [J/(mol K)]."""
    rows = [[cp, 0.0, 0.0, 0.0, 0.0, h / R - cp * JOIN, s / R - cp * np.log(JOIN)] for cp, h in zip(cps, enthalpies, strict=True)]
    return {"formula": "Q", "potential": {"form": "NASA 7-coefficient", "T": [200.0, JOIN, 2000.0], "a": rows}}


def heated(jacket, start, method="Rosenbrock", holds="pressure", end=100.0):
    """1 mol whose cp and h jump at JOIN, by R and by half of RT, in a jacket; its reaction does next to nothing."""
    document = HEAD | {"species": {"A": species((4.0, 5.0), (200e3, 200e3), 100.0),
                                   "B": species((4.0, 5.0), (0.0, 0.5 * R * JOIN), 100.0)},
                       "reaction": [{"equation": "A = B", "forward": {"law": "Arrhenius", "A": 1e-200}}]}
    return build_case({"vessel": {"heat": "jacket", "UA": 1.0, "jacket_temperature": jacket, "holds": holds},
                       "start": {"temperature": start, "pressure": 1e5, "amount": {"B": 1.0}}, "until": {"time": end},
                       "solver": {"rtol": 1e-10, "method": method}}, mechanism=build_mechanism(document))


def two_exponentials(t, jacket, start, cps):
    """T' = UA (T_j - T)/C with C by the side of JOIN; and when it is reached."""
    first, second = (cps if start < JOIN else cps[::-1])
    at = first * np.log((start - jacket) / (JOIN - jacket))
    return np.where(t < at, jacket + (start - jacket) * np.exp(-t / first),
                    jacket + (JOIN - jacket) * np.exp(-np.maximum(t - at, 0.0) / second)), at


@pytest.mark.parametrize("method", ["Rosenbrock", "BDF"])
@pytest.mark.parametrize("holds", ["pressure", "volume"])
@pytest.mark.parametrize("jacket, start", [(500.0, 300.0), (300.0, 500.0)])
def test_a_join_is_located_and_the_method_started_anew(jacket, start, holds, method):
    """T to 1e-8 of the closed form on both sides, a step that ends at the join, and the jump of h in the statistics."""
    less = R if holds == "volume" else 0.0
    result = run(heated(jacket, start, method, holds))
    T, at = two_exponentials(result.time, jacket, start, (4 * R - less, 5 * R - less))
    assert result.temperature == pytest.approx(T, rel=1e-8)
    assert np.min(np.abs(result.time / at - 1)) < 1e-8 and np.min(np.abs(result.temperature - JOIN)) < 1e-8
    assert result.statistics["surfaces_crossed"] == 1
    assert result.statistics["largest_jump_of_energy"] == pytest.approx(0.5, rel=1e-9)
    assert result.statistics["rejected"] < 25 and result.statistics["rejected_by_second_law"] == 0


@pytest.mark.parametrize("jacket, start", [(JOIN, 300.0), (JOIN, 500.0), (JOIN + 1e-9, 300.0), (500.0, JOIN), (300.0, JOIN)])
def test_a_state_on_a_join_does_not_go_back_and_forth(jacket, start):
    """Tangent to it, or starting from it: a few crossings at the most, and no more steps than without."""
    result = run(heated(jacket, start, end=1000.0))
    assert result.complete and result.statistics["surfaces_crossed"] <= 3 and result.statistics["steps"] < 150
    assert abs(result.temperature[-1] - jacket) < 1e-3


def test_a_reaction_that_changes_sign_at_a_join_stays_there():
    """A → B is exothermic below the join and endothermic above: T slides along it, within the hysteresis of 2 K."""
    document = HEAD | {"species": {"A": species((4.0, 4.0), (0.0, -40e3), 100.0),
                                   "B": species((4.0, 4.0), (-20e3, -20e3), 400.0)},
                       "reaction": [{"equation": "A = B", "forward": {"law": "Arrhenius", "A": 0.3}}]}
    case = build_case({"vessel": {"heat": "adiabatic", "holds": "pressure"}, "until": {"time": 10.0},
                       "start": {"temperature": 350.0, "pressure": 1e5, "amount": {"A": 1.0}}},
                      mechanism=build_mechanism(document))
    result = run(case)
    reached = result.temperature >= JOIN - 1e-6
    first = int(np.argmax(reached))
    assert result.complete and reached.any() and result.statistics["steps"] < 4000
    assert np.max(np.abs(result.temperature[first:] - JOIN)) < 2.1
    assert result.of("A")[-1] == pytest.approx(np.exp(-3.0), rel=1e-5)


def test_a_published_mechanism_crosses_its_joins():
    """C1-C4 species as published, adiabatic from 900 K: as many crossings as joins on the way, ignition as with them closed."""
    def ignition(joined):
        document = read_mechanism("c1-c4").to_dict()
        document["mechanism"]["joins"] = joined
        case = build_case({"vessel": {"heat": "adiabatic", "holds": "volume"}, "until": {"time": 0.1}, "solver": {"rtol": 1e-7},
                           "start": {"temperature": 950.0, "pressure": 2e6, "mole_ratio": {"C2H4": 1, "O2": 3, "N2": 11.28}}},
                          mechanism=build_mechanism(document))
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", Remark)
            return case, run(case)

    case, result = ignition("as published")
    passed = [T for T in joins(case.mechanism, case.equations().tables) if 950.0 < T < result.temperature[-1]]
    assert result.complete and result.temperature[-1] > 2500
    assert 0 < len(passed) <= result.statistics["surfaces_crossed"] < 3 * len(passed)
    for T in passed:
        assert np.min(np.abs(result.temperature - T)) < 1e-5
    assert np.max(np.abs(result.element_residual)) < 1e-12
    steepest = [one.milestones["steepest temperature rise"] for one in (result, ignition("closed")[1])]
    assert steepest[0] == pytest.approx(steepest[1], rel=0.1)


@pytest.mark.parametrize("method", ["Rosenbrock", "BDF"])
def test_rows_of_a_pressure_table_are_landed_on(method):
    """A ⇌ 2 B at constant volume: p rises through a row where ln k over ln p has a corner; B against a tight Radau run."""
    document = {"mechanism": {"name": "invented", "phase": "ideal gas", "standard_pressure": "1 bar"},
                "elements": {"Q": "20 g/mol"}, "species": {
                    n: {"composition": {"Q": k}, "potential": {"form": "constant heat capacity", "at": 400.0, "H": 0.0, "S": s,
                                                               "cp": 30.0}} for n, k, s in (("A", 2, 1.0), ("B", 1, 90.0))},
                "reaction": [{"equation": "A = 2 B", "forward": {"law": "pressure table", "rows": [
                    {"p": 1e5, "A": 1.0}, {"p": 1.5e5, "A": 30.0}, {"p": 1e6, "A": 0.5}]}}]}

    def courses(method, rtol):
        return run(build_case({"vessel": {"heat": "isothermal", "holds": "volume"}, "until": {"time": 2.0},
                               "start": {"temperature": 500.0, "pressure": 1e5, "mole_ratio": {"A": 1}},
                               "solver": {"method": method, "rtol": rtol}}, mechanism=build_mechanism(document)))

    result, tight = courses(method, 1e-8), courses("Radau", 1e-12)
    assert np.min(np.abs(result.pressure / 1.5e5 - 1)) < 1e-10 and result.statistics["surfaces_crossed"] >= 1
    assert result.of("B")[-1] == pytest.approx(tight.of("B")[-1], rel=1e-7)


def test_no_surfaces_where_nothing_jumps():
    case = heated(500.0, 300.0)
    tables = case.equations().tables
    assert surfaces_of(case, tables, tables.work()) is not None
    methane = build_case({"case": {"mechanism": "methane"}, "until": {"time": 1.0},
                          "start": {"temperature": 900.0, "pressure": 1e5, "mole_ratio": {"CH4": 1}}})
    tables = methane.equations().tables
    assert surfaces_of(methane, tables, tables.work()) is None
    assert surfaces_of(methane, tables, tables.work(), everywhere=True) is not None


def test_shares_and_triggers():
    """One surface at 400 K from below: the share by linear interpolation, at its end 1, and hysteresis after changing over."""
    table = np.array([[kernel.TEMPERATURE, 400.0, -1.0, 400.0, 0.1, 0.1]])
    c = np.ones(2)
    assert kernel.share_before(table, c, 390.0, c, 399.0) == kernel.NEVER
    assert kernel.share_before(table, c, 390.0, c, 410.0) == pytest.approx(0.5)
    assert kernel.share_before(table, c, 390.0, c, 400.0) == 1.0
    kernel.change_over(table, 0)
    assert table[0, kernel.SIDE] == 1.0 and table[0, kernel.TRIGGER] == pytest.approx(399.9)
    assert kernel.share_before(table, c, 400.0, c, 399.95) == kernel.NEVER
    assert kernel.share_before(table, c, 400.0, c, 399.8) == pytest.approx(0.5)
    kernel.arm(table, c, 400.05)
    assert table[0, kernel.TRIGGER] == pytest.approx(399.9)
    kernel.arm(table, c, 401.0)
    assert table[0, kernel.TRIGGER] == 400.0
