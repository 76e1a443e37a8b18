"""Limits on a run: each of five ways to end early leaves a readable file and a sentence that says what to do."""

import math
from dataclasses import replace
from pathlib import Path

import pytest

from bothways import InputError, build_case, build_mechanism, cli, read_case, read_trajectory
from bothways.batch import run_and_judge
from bothways.case import Case
from bothways.cli import main
from bothways.integrate import METHODS, OWN_METHODS, compiled_methods
from bothways.mechanism.toml_reader import parse_toml
from bothways.outcome import outcome
from bothways.report import summary
from refusals import CASE, MECHANISM, Refusals, assert_kept, changed, interrupting, meddled


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def limited(keys: str, method: str, end: str = '"1 s"', until: str = "") -> str:
    """The case with further keys of [solver]."""
    return changed(CASE, ("rtol = 1e-6", f'rtol = 1e-6\nmethod = "{method}"\n{keys}'), ('"1 us"', f"{end}\n{until}"))


@pytest.mark.parametrize("method", METHODS)
def test_a_limit_on_steps(refusals: Refusals, method: str) -> None:
    refusals.write(case=limited("most_steps = 11", method))
    assert_kept(refusals, 3, "11 steps were not enough; raise most_steps, loosen rtol or shorten the time")
    kept = read_trajectory("run.h5")
    tried = kept.statistics["steps"] + (kept.statistics["rejected"] if method in OWN_METHODS else 0)
    assert tried == 11 and len(kept) == kept.statistics["steps"] + 1
    assert kept.statistics["status"] == "the solver gave up"


@pytest.mark.parametrize("method", METHODS)
def test_a_limit_on_the_time_of_computing(refusals: Refusals, method: str) -> None:
    """Too short a time for any run: it ends at the first look at the clock, in the midst or at a time to land on."""
    refusals.write(case=limited('longest = "1 ns"', method))
    assert_kept(refusals, 3, "it has taken the 1e-09 s of computing that it may; raise longest, loosen rtol or shorten")
    kept = read_trajectory("run.h5")
    assert 0 < kept.time[-1] <= 1e-7 and 2 <= len(kept) <= 1 + compiled_methods.CHUNK


@pytest.mark.parametrize("method", METHODS)
def test_limits_that_are_not_reached_change_nothing(refusals: Refusals, method: str) -> None:
    refusals.write(case=limited('most_steps = 100000\nlongest = "10 min"', method, '"1 us"'))
    case = read_case("case.toml")
    assert (case.most_steps, case.longest) == (100_000, 600.0)
    assert main(["run", "case.toml"]) == 0 and read_trajectory("run.h5").complete
    assert read_trajectory("run.h5").time[-1] == 1e-6


@pytest.mark.parametrize("method", OWN_METHODS)
def test_an_end_reached_late_is_an_end(refusals: Refusals, method: str) -> None:
    """What has come to its end in the same few steps is not called incomplete for the clock."""
    case = changed(limited('longest = "1 ns"', method, '"1e-12 s"'), ('also_at = ["0.1 us", 5e-7]', ""))
    refusals.write(case=case)
    assert main(["run", "case.toml"]) == 0 and read_trajectory("run.h5").complete


@pytest.mark.parametrize("method", METHODS)
def test_a_run_to_equilibrium_has_the_same_limits(refusals: Refusals, method: str) -> None:
    refusals.write(case=limited("most_steps = 11", method, until="equilibrium = true"))
    assert_kept(refusals, 3, "11 steps were not enough")


@pytest.mark.parametrize("method", OWN_METHODS)
def test_a_step_that_becomes_too_small(refusals: Refusals, monkeypatch: pytest.MonkeyPatch, method: str) -> None:
    """As if a step under a tenth of the time reached no longer moved the clock."""
    monkeypatch.setattr(compiled_methods, "SMALLEST_STEP", 0.1)
    refusals.write(case=limited("", method))
    assert_kept(refusals, 3, "the step became too small to move on; ")
    assert "loosen rtol, or raise atol" in read_trajectory("run.h5").reason


def beyond(name: str) -> Case:
    """The case in a file with tolerances far beyond those a case file may ask for."""
    return replace(read_case(name), rtol=1e-18, atol=1e-60)


def test_tolerances_that_cannot_be_met(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    refusals.write(case=limited("most_steps = 2000", "Rosenbrock", '"0.1 ms"'))
    monkeypatch.setattr(cli.run, "read_case", beyond)
    assert "loosen rtol" in assert_kept(refusals, 3, "at ")


def test_backward_differentiation_works_to_what_round_off_lets_it(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    """It does not fight round-off with ever shorter steps (see `bdf.TIGHTEST`), and so meets its end."""
    refusals.write(case=limited("most_steps = 20000", "BDF", '"0.1 ms"'))
    monkeypatch.setattr(cli.run, "read_case", beyond)
    assert main(["run", "case.toml"]) == 0 and read_trajectory("run.h5").complete


@pytest.mark.usefixtures("ordinary_interrupts")
@pytest.mark.parametrize("method", METHODS)
def test_ctrl_c(refusals: Refusals, monkeypatch: pytest.MonkeyPatch, method: str) -> None:
    refusals.write(case=limited("", method))
    monkeypatch.setattr(cli.run, "run_and_judge", meddled(interrupting(5)))
    assert "run it again for the rest" in assert_kept(refusals, 130, "interrupted at ")
    assert len(read_trajectory("run.h5")) == 6


def test_a_row_of_many_cases_tells_of_the_limit() -> None:
    document = parse_toml(changed(limited("most_steps = 11", "BDF"), ('mechanism = "small.toml"\n', "")))
    row = outcome(build_case(document, mechanism=build_mechanism(parse_toml(MECHANISM))))
    assert row["status"] == "gave up" and "11 steps were not enough; raise most_steps" in row["reason"]
    assert math.isfinite(row["end_temperature"])


def test_limits_can_be_varied() -> None:
    from bothways.grid.keys import units_of

    assert units_of("solver.longest") == "time" and units_of("solver.most_steps") == ""
    with pytest.raises(InputError, match="whole number"):
        build_case({**parse_toml(CASE), "case": {}, "solver": {"most_steps": 2.5}},
                   mechanism=build_mechanism(parse_toml(MECHANISM)))


@pytest.mark.parametrize("method", METHODS)
def test_the_summary_tells_how_the_second_law_was_kept(refusals: Refusals, method: str) -> None:
    refusals.write(case=limited("", method, '"1 us"'))
    assert main(["run", "case.toml"]) == 0
    text = " ".join(refusals.capsys.readouterr().out.split())
    s = read_trajectory("run.h5").statistics
    if method in OWN_METHODS:
        assert f"second law kept at {s['steps']} steps, {s['rejected_by_second_law']} more refused by it" in text
        assert f"totals mended {s['mendings']} time" in text
    else:
        assert "second law not watched by Radau; " in text


@pytest.mark.parametrize("heat, unit", [("isothermal", "RT"), ("adiabatic", "R")])
def test_the_summary_tells_what_the_second_law_refused(heat: str, unit: str) -> None:
    """Rises are kept for the whole charge, of 1 mol/L here: 3 mol/m3 is 0.003 of it."""
    document = changed(CASE, ('"adiabatic"', f'"{heat}"'), ("thermal_inertia = 1.2\n", ""), ('mechanism = "small.toml"\n', ""),
                       ('pressure = "1 atm"\n', ""),
                       ("mole_ratio = { Q = 0.1, O2 = 1 }", "concentration = { Q = 100, O2 = 900 }"))
    case = build_case(parse_toml(document), mechanism=build_mechanism(parse_toml(MECHANISM)))
    trajectory, found = run_and_judge(case)
    statistics = {**trajectory.statistics, "rejected_by_second_law": 4, "largest_rise_refused": 3.0, "mendings": 1, "steps": 21}
    text = " ".join(summary(case, replace(trajectory, statistics=statistics), found).split())
    assert (f"second law kept at 21 steps, 4 more refused by it, the largest rise 3.0e-03 {unit} per mole; totals mended 1 time "
            in text)
