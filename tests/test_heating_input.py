"""Every fault of the keys that say how heat is exchanged; what a schedule says; corners in the integrators."""

import numpy as np
import pytest

from bothways import build_case, build_mechanism, read_case
from bothways.integrate import Problem, Status, scipy_methods
from bothways.mechanism.toml_reader import parse_toml
from bothways.schedule import Schedule
from refusals import CASE, MECHANISM, Refusals, changed, row

TABLE = '[["0 us", "1200 K"], ["2 us", 1300]]'
GIVEN = changed(CASE, ('heat = "adiabatic"', f'heat = "given temperature"\ntemperature = {TABLE}'),
                ("thermal_inertia = 1.2\n", ""), ('temperature = "1200 K"\npressure', "pressure"))
TABLE_OF_JACKET = 'jacket_temperature = [[0, "900 K"], ["2 us", 1300]]'
JACKET = changed(CASE, ('heat = "adiabatic"', f'heat = "jacket"\nUA = "2 W/K"\n{TABLE_OF_JACKET}'))
SMALL = build_mechanism(parse_toml(MECHANISM))


@pytest.fixture
def refusals(tmp_path, capsys, monkeypatch):
    return Refusals(tmp_path, capsys, monkeypatch)


def test_the_cases_themselves_are_accepted(refusals):
    refusals.write(case=GIVEN)
    case = read_case("case.toml")
    assert case.charge.temperature == 1200.0 and case.schedule == Schedule((0.0, 2e-6), (1200.0, 1300.0))
    refusals.write(case=JACKET)
    case = read_case("case.toml")
    assert case.transfer == 2.0 and case.schedule.value(1e-6) == pytest.approx(1100.0) and case.thermal_inertia == 1.2


FAULTS_GIVEN = [
    row("no table", f"temperature = {TABLE}", "", "vessel", "the key 'temperature' is missing", "a table in time such as"),
    row("empty", TABLE, "[]", "vessel.temperature", "the table is empty", '["40 min", "90 °C"]'),
    row("not pairs", TABLE, '["0 us", "1200 K"]', "vessel.temperature[1]", "'0 us' is not a pair", "brackets of its own"),
    row("three in a row", '["2 us", 1300]', '["2 us", 1300, 3]', "vessel.temperature[2]", "is not a pair"),
    row("unsorted", TABLE, '[["0 us", "1200 K"], ["3 us", 1300], ["2 us", 1300]]', "vessel.temperature[3]",
        "2e-06 s comes after 3e-06 s", "expected rising times", "sort the table"),
    row("twice the same time", TABLE, '[["0 us", "1200 K"], ["2 us", 1300], ["2 us", 1400]]', "vessel.temperature[3]",
        "a jump is stated as a short ramp"),
    row("late", '"0 us"', '"1 us"', "vessel.temperature", "the table begins at 1e-06 s", "a first time of 0"),
    row("before the start", '"0 us"', '"-1 us"', "vessel.temperature[1]", "'-1 us' is negative"),
    row("shorter than the run", '["2 us", 1300]', '["0.5 us", 1300]', "vessel.temperature",
        "the table ends at 5e-07 s, before the run does at 1e-06 s", "a table that covers the run", "or correct until.time"),
    row("units changed over", '["2 us", 1300]', '["1300 K", "2 us"]', "vessel.temperature[2]", "not of time"),
    row("below zero", "1300", '"-300 °C"', "vessel.temperature[2]", "is negative"),
    row("too hot", "1300", "4000", "vessel.temperature", "4000 K is more than 500 K outside", "Q2"),
    row("another start", "pressure = ", 'temperature = "1201 K"\npressure = ', "vessel.temperature",
        "it begins at 1200 K, and start.temperature is 1201 K", "leave out start.temperature"),
    row("inertia", 'holds = "volume"', 'holds = "volume"\nthermal_inertia = 1.2', "vessel.thermal_inertia",
        "1.2 for a vessel that is given temperature", "1 in others"),
    row("keys of a jacket", 'holds = "volume"', 'holds = "volume"\nUA = 3', "vessel.UA",
        "UA is stated for a vessel that is given temperature", 'it with heat = "jacket"'),
]
FAULTS_JACKET = [
    row("UA negative", '"2 W/K"', "-2", "vessel.UA", "-2 is negative", "a number above 0"),
    row("UA zero", '"2 W/K"', "0", "vessel.UA", "0 is zero"),
    row("UA in another unit", '"2 W/K"', '"2 J/K"', "vessel.UA", "J/K is a unit of heat capacity, not of heat transfer"),
    row("UA not finite", '"2 W/K"', "nan", "vessel.UA", "nan is not a finite number"),
    row("UA missing", 'UA = "2 W/K"\n', "", "vessel", "the key 'UA' is missing", "a heat transfer"),
    row("UA misspelt", "UA =", "Ua =", "vessel", "the key 'UA' is missing", "is 'Ua' meant to be it?"),
    row("no jacket", TABLE_OF_JACKET, "", "vessel", "the key 'jacket_temperature' is missing"),
    row("shorter than the run", '["2 us", 1300]', '["0.5 us", 1300]', "vessel.jacket_temperature", "the table ends at 5e-07 s"),
    row("colder than the arithmetic", '"900 K"', "3", "vessel.jacket_temperature", "3 K; expected ", " K for this mechanism"),
    row("a temperature of the contents", 'UA = "2 W/K"', 'UA = "2 W/K"\ntemperature = 300', "vessel.temperature",
        "temperature is stated for a vessel that is jacket", 'it with heat = "given temperature"'),
]


@pytest.mark.parametrize("changes, entry, texts", FAULTS_GIVEN)
def test_fault_of_a_given_temperature(refusals, changes, entry, texts):
    refusals.write(case=changed(GIVEN, *changes))
    refusals.refused("case.toml", entry, *texts)


@pytest.mark.parametrize("changes, entry, texts", FAULTS_JACKET)
def test_fault_of_a_jacket(refusals, changes, entry, texts):
    refusals.write(case=changed(JACKET, *changes))
    refusals.refused("case.toml", entry, *texts)


ASKED = 'file = "run.h5"'
RUNAWAYS = [
    row("one", ASKED, 'time_to_maximum_rate_from = "60 °C"', "output.time_to_maximum_rate_from", "'60 °C' is not a list",
        'such as ["60 °C", "80 °C"]'),
    row("a time", ASKED, 'time_to_maximum_rate_from = ["60 s"]', "output.time_to_maximum_rate_from[1]", "not of temperature"),
    row("below zero", ASKED, 'time_to_maximum_rate_from = [400, "-300 °C"]', "output.time_to_maximum_rate_from[2]",
        "is negative"),
    row("too hot", ASKED, "time_to_maximum_rate_from = [400, 5000]", "output.time_to_maximum_rate_from[2]",
        "5000 K is more than 500 K"),
    row("misspelt", ASKED, "time_to_maximum_rates_from = [400]", "output", "unknown key 'time_to_maximum_rates_from' (nearest:"),
]


@pytest.mark.parametrize("changes, entry, texts", RUNAWAYS)
def test_fault_of_the_temperatures_of_a_runaway(refusals, changes, entry, texts):
    refusals.write(case=changed(CASE, *changes))
    refusals.refused("case.toml", entry, *texts)


@pytest.mark.parametrize("value", [None, True, "x", {"a": 1}, [[0, None]], [[0, 1000.0], None], [[True, 1000.0]], [[]],
                                   [[0, 10**400]]])
@pytest.mark.parametrize("document, key", [(GIVEN, "temperature"), (JACKET, "jacket_temperature")])
def test_what_is_no_table_is_named(document, key, value):
    changed_document = parse_toml(changed(document, ('mechanism = "small.toml"\n', "")))
    changed_document["vessel"][key] = value
    with pytest.raises(Exception, match=r"vessel\." + key) as caught:
        build_case(changed_document, "c.toml", mechanism=SMALL)
    assert "; expected " in str(caught.value)


def test_a_run_to_equilibrium_needs_no_longer_table(refusals):
    refusals.write(case=changed(GIVEN, ('time = "1 us"', "equilibrium = true"), ('also_at = ["0.1 us", 5e-7]\n', "")))
    assert read_case("case.toml").schedule.value(1e9) == 1300.0


# ---- schedules and corners


def test_a_schedule_says_value_slope_and_corners():
    table = Schedule((0.0, 10.0, 20.0, 30.0, 40.0), (300.0, 320.0, 340.0, 340.0, 340.0))
    assert [table.value(t) for t in (0.0, 5.0, 10.0, 25.0, 40.0, 1e9)] == [300.0, 310.0, 320.0, 340.0, 340.0, 340.0]
    assert [table.slope(t) for t in (0.0, 9.99, 10.0, 20.0, np.nextafter(20.0, 0), 50.0)] == [2.0, 2.0, 2.0, 0.0, 2.0, 0.0]
    assert table.corners == (20.0,) and table.end == 40.0 and not table.constant
    assert Schedule((0.0, 1.0), (300.0, 310.0)).corners == (1.0,)  # held from there on
    assert Schedule((0.0,), (300.0,)).corners == () and Schedule((0.0, 5.0), (3.0, 3.0)).constant


class Kept:
    def __init__(self):
        self.times, self.states = [], []

    def accepted(self, t, y):
        self.times.append(t)
        self.states.append(y)


@pytest.mark.parametrize("method", ["BDF", "Radau"])
def test_solvers_start_anew_at_corners(method):
    """y' = -50 (y - s(t)) with s = t up to 1, then 1 - 3 (t - 1): exact to the tolerance on both sides of the corner."""
    def slope(t):
        return 1.0 if t < 1.0 else -3.0

    def s(t):
        return t if t < 1.0 else 1.0 - 3.0 * (t - 1.0)

    problem = Problem(lambda t, y: np.array([-50.0 * (y[0] - s(t)) + slope(t)]), lambda t, y: np.array([[-50.0]]),
                      np.array([0.0]), 2.0, 1e-9, np.array([1e-12]), corners=(1.0,))
    kept = Kept()
    outcome = scipy_methods.integrate(problem, method, kept)
    assert outcome.status is Status.FINISHED and 1.0 in kept.times
    assert np.max(np.abs(np.array(kept.states)[:, 0] - [s(t) for t in kept.times])) < 1e-8
    assert outcome.counts["steps"] < 60
