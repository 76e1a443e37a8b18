"""One case as a row: the same numbers as a run's trajectory; what goes wrong is told in the row."""

import pickle
import warnings
from concurrent.futures import ThreadPoolExecutor

import numpy as np
import pytest

from bothways import InputError, Remark, build_case, read_case, run, verdict
from bothways import outcome as module
from bothways.case import Case
from bothways.endpoint import target_of
from bothways.integrate import compiled_methods
from bothways.outcome import COURSE, VARIABLES, outcome
from bothways.trajectory import Trajectory


def ran(case: Case) -> Trajectory:
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        return run(case)


@pytest.mark.parametrize("name", ["hydrogen-kettle", "methane-drum", "brown-flask", "wet-peroxide", "hot-air"])
def test_a_row_holds_the_numbers_of_the_run(name: str) -> None:
    case = read_case(name)
    whole, row = ran(case), outcome(case, case.mechanism.names, course=True)
    assert set(row) == {v.name for v in VARIABLES} | {"seconds", "course"} and set(row["course"]) == {v.name for v in COURSE}
    for variable in COURSE:
        np.testing.assert_array_equal(row["course"][variable.name], getattr(whole, variable.name))
        np.testing.assert_array_equal(row[f"end_{variable.name}"], getattr(whole, variable.name)[-1])
    for what in ("temperature", "pressure", "volume", "amount"):
        np.testing.assert_allclose(row[f"equilibrium_{what}"], whole.extra[f"equilibrium_{what}"], rtol=1e-10)  # another start
    judged = verdict(case, whole)
    assert row["verdict"] == judged.kind.value and abs(row["largest_deviation"] - judged.largest_deviation) < 1e-10
    assert (row["status"], row["reason"], row["steps"]) == ("done", "", whole.statistics["steps"])


@pytest.mark.parametrize("name", ["hydrogen-kettle", "methane-drum"])
def test_milestones_stand_at_their_species(name: str) -> None:
    case = read_case(name)
    row, found = outcome(case, ["OH", "H2O2"]), ran(case).milestones
    at = case.mechanism.index
    assert row["steepest_rise"] == found["steepest temperature rise"]
    for variable, word in (("half_conversion", "half-conversion of"), ("peak_time", "peak of"),
                           ("peak_mole_fraction", "peak mole fraction of")):
        for k, species in enumerate(case.mechanism.names):
            expected = np.nan if "peak" in word and species not in ("OH", "H2O2") else found.get(f"{word} {species}", np.nan)
            np.testing.assert_equal(row[variable][k], expected)
    assert np.isfinite(row["peak_time"][at("H2O2")]) and np.isnan(row["peak_time"][at("HO2")])


def test_a_rise_still_growing_at_the_end_is_no_milestone() -> None:
    case = read_case("hydrogen-kettle")
    instant = ran(case).milestones["steepest temperature rise"]
    for share, reached in ((0.9, False), (1.0 - 1e-4, False), (1.0 + 1e-3, True)):
        row = outcome(build_case({**case.document, "until": {"time": share * instant}}))
        assert np.isfinite(row["steepest_rise"]) == reached
        assert not reached or row["steepest_rise"] == pytest.approx(instant, rel=1e-6)


def test_rows_are_the_same_from_threads_and_after_pickling() -> None:
    case = read_case("hydrogen-kettle")
    alone = outcome(case)
    with ThreadPoolExecutor(4) as pool:
        rows = [*pool.map(outcome, [case] * 8), pickle.loads(pickle.dumps(alone))]
    for row in rows:
        for variable in VARIABLES:
            np.testing.assert_array_equal(row[variable.name], alone[variable.name])


def test_a_solver_that_gives_up_leaves_its_last_state(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(compiled_methods, "MOST_STEPS", 7)
    row = outcome(read_case("hydrogen-kettle"))
    assert row["status"] == "gave up" and "7 steps were not enough" in row["reason"]
    assert 0 < row["end_time"] < 1e-3 and row["end_amount"].sum() > 0 and row["verdict"] == "not yet at equilibrium"


def test_faults_are_told_in_the_row(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "integrate", lambda *a: 1 / 0)
    row = outcome(read_case("hydrogen-kettle"))
    assert (row["status"], row["reason"]) == ("failed", "a fault of the program: ZeroDivisionError: division by zero")
    assert np.isnan(row["end_temperature"]) and np.isnan(row["end_amount"]).all() and row["verdict"] == ""


def test_ctrl_c_is_no_outcome(monkeypatch: pytest.MonkeyPatch) -> None:
    def pressed(*unused: object) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(module.Recorder, "accepted", pressed)
    with pytest.raises(KeyboardInterrupt):
        outcome(read_case("hydrogen-kettle"))


def test_no_equilibrium_is_told_in_the_row(monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*unused: object) -> None:
        raise InputError("no equilibrium", expected="one")

    monkeypatch.setattr(module, "target_of", refuse)
    row = outcome(read_case("hydrogen-kettle"))
    assert (row["status"], row["reason"]) == ("failed", "no equilibrium; expected one") and np.isnan(row["steps"])


@pytest.mark.parametrize("name", ["hydrogen-kettle", "methane-drum", "brown-flask"])
def test_a_guess_only_saves_time(name: str) -> None:
    """Whatever state the search starts from, the equilibrium is the same."""
    case = read_case(name)
    plain, random = target_of(case).own, np.random.default_rng(1)
    amount = case.charge.amount
    guesses = [(amount, case.charge.temperature), (plain.amount, plain.temperature), (plain.amount, 0.5 * plain.temperature),
               (np.zeros_like(amount), 1000.0), *((random.random(amount.size) * s, 1500.0) for s in (1e-9, 1.0, 1e9))]
    for guess in guesses:
        found = target_of(case, guess).own
        assert found.temperature == pytest.approx(plain.temperature, rel=1e-12)
        np.testing.assert_allclose(found.amount, plain.amount, rtol=1e-9, atol=0.0)
    near = target_of(case, (plain.amount, plain.temperature)).own.iterations
    assert near <= plain.iterations and near <= 3
