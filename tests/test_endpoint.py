"""The verdicts, runs to equilibrium, and the command that states where a case must end."""

import csv
import warnings

import numpy as np
import pytest

from bothways import Remark, build_case, build_mechanism, bundled_cases, read_case, read_mechanism, read_trajectory, run, verdict
from bothways.batch import run_and_judge
from bothways.case import FOREVER
from bothways.cli import main
from bothways.endpoint import Kind, target_of, verdict_of_state
from bothways.reach import reachable
from test_relaxation import chain, from_ratio


def to_equilibrium(case, **until):
    return build_case({**case.document, "until": {"equilibrium": True, **until}}, mechanism=case.mechanism)


def landed(case):
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        result, last = run_and_judge(to_equilibrium(case))
    assert last.kind is Kind.LANDED, last.sentence
    own = target_of(case).own
    x, seen = result.mole_fraction[-1], own.mole_fraction > 1e-12
    assert np.max(np.abs(x[seen] / own.mole_fraction[seen] - 1)) < 1e-6
    assert abs(result.temperature[-1] / own.temperature - 1) < 1e-7
    assert result.complete and result.extra["verdict"].startswith("at equilibrium")
    return result


FROZEN = ("heptane-bench", "quenched-air")
"""A pool that no step consumes, and what is frozen at room temperature: told, by their own tests."""


@pytest.mark.parametrize("name", [n for n in bundled_cases() if n not in FROZEN])
def test_bundled_cases_land(name):
    """Each species above mole fraction 1e-12 within 1e-6 of the independent equilibrium, T within 1e-7."""
    landed(read_case(name))


@pytest.mark.parametrize("temperature", [1000.0, 1500.0, 2500.0])
def test_methane_lands_at_every_temperature(temperature):
    case = build_case({"case": {"mechanism": "methane"}, "vessel": {"heat": "isothermal"}, "until": {"time": 1.0}, "start": {
        "temperature": temperature, "pressure": 1e5, "fuel": {"CH4": 1}, "oxidiser": {"O2": 1, "N2": 3.76},
        "equivalence_ratio": 1.0}})
    landed(case)


def test_a_pool_without_exit_is_named():
    """n-Heptane's set leaves a pool of a branched diene that no step consumes: not yet, with the species and a long time."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        _, last = run_and_judge(build_case({**read_case("heptane-bench").document, "until": {"time": "1 s"}}))
    assert last.kind is Kind.NOT_YET and "CH2-3-1C5H8" in last.sentence and last.relaxation_time > 1e6


def test_not_yet_tells_how_far():
    case = read_case("wet-peroxide")
    _, last = run_and_judge(case)
    assert last.kind is Kind.NOT_YET and "H2O2 is at mole fraction" in last.sentence and "relaxation takes" in last.sentence
    assert last.least_relaxed(1)[0][1] != 0 and last.table()[0]["species"] == "H2O"


def hydrogen(**changes):
    """The hydrogen set with changes of its document, charged with hydrogen, oxygen and nitrogen."""
    document = read_mechanism("hydrogen-oxygen").to_dict()
    document["reaction"] = [r for r in document["reaction"] if changes.get("keep", lambda r: True)(r["equation"])]
    return build_case({"vessel": {"heat": "isothermal"}, "start": {"temperature": 1500.0, "pressure": 1e5, "mole_ratio":
                       changes.get("charge", {"H2": 2, "O2": 1, "N2": 1, "CO": 0.1, "CO2": 0.2})}, "until": {"time": 1.0}},
                      mechanism=build_mechanism(document))


def test_untouched_species_hold_apart():
    """CO and CO2 are colliders only in this set: the elements would let them react, the reactions cannot."""
    _, last = run_and_judge(to_equilibrium(hydrogen()))
    assert last.kind is Kind.APART
    assert last.apart == ("CO",)  # that of CO2 follows, carbon being conserved; N2 is all there is of nitrogen
    assert "what no reaction changes" in last.sentence and "CO" in last.sentence


def test_a_missing_initiation_step_cannot_start():
    """Chain steps alone: from H2 and O2 none can proceed."""
    case = hydrogen(keep=lambda e: e in ("H + O2 ⇌ O + OH", "O + H2 ⇌ H + OH", "H2 + OH ⇌ H2O + H"))
    result, last = run_and_judge(to_equilibrium(case, time=1.0))
    assert last.kind is Kind.CANNOT_START and "no reaction" in last.sentence
    assert np.array_equal(result.amount[-1], result.amount[0])
    seeded = hydrogen(keep=lambda e: e in ("H + O2 ⇌ O + OH", "O + H2 ⇌ H + OH", "H2 + OH ⇌ H2O + H"),
                      charge={"H2": 2, "O2": 1, "H": 1e-9})
    assert run_and_judge(to_equilibrium(seeded))[1].kind is Kind.APART


def test_a_planted_fault_is_wrong():
    """A state where every reaction is relaxed but which is not the equilibrium of this charge: a fault of the program."""
    case, other = hydrogen(), hydrogen(charge={"H2": 2.1, "O2": 1, "N2": 1, "CO": 0.1, "CO2": 0.2})
    wrong = target_of(other).own
    last = verdict_of_state(target_of(case), wrong.amount, wrong.temperature, case.charge.volume)
    assert last.kind is Kind.WRONG and "fault of the program" in last.sentence


def test_reachable_follows_what_reactions_make():
    mechanism = read_mechanism("hydrogen-oxygen")
    charge = np.zeros(13)
    charge[[mechanism.index("H2"), mechanism.index("O2")]] = 1.0
    species, reactions = reachable(mechanism, charge)
    assert not species[mechanism.index("CO")] and species[mechanism.index("H2O2")] and reactions.sum() > 15
    charge[:] = 0
    charge[mechanism.index("AR")] = 1.0
    assert not reachable(mechanism, charge)[1].any()


def test_verdict_of_a_stored_run(tmp_path):
    case = chain([("A", "B", 1.0), ("B", "C", 0.5)], from_ratio(1.0, 2.0, 3.0), {"A": 1})
    again = verdict(case, run(to_equilibrium(case)))
    assert again.kind is Kind.LANDED and again.largest_deviation < 1e-6
    short = build_case({**case.document, "until": {"time": 0.1}}, mechanism=case.mechanism)
    assert verdict(case, run(short)).kind is Kind.NOT_YET


CASE = """
[case]
mechanism = "hydrogen-oxygen"
[vessel]
heat = "isothermal"
[start]
temperature = "700 K"
pressure = "1 bar"
mole_ratio = { H2O2 = 1, H2O = 4 }
[until]
equilibrium = true
"""


def test_run_to_equilibrium_with_too_short_a_time_fails_with_an_estimate(tmp_path, capsys, monkeypatch):
    monkeypatch.chdir(tmp_path)
    (tmp_path / "bath.toml").write_text(CASE + 'time = "1 s"\n')
    assert main(["run", "bath.toml"]) == 1
    captured = capsys.readouterr()
    assert "not yet at equilibrium" in captured.err and "relaxation takes" in captured.err
    assert read_trajectory("bath.h5").complete and "not yet" in read_trajectory("bath.h5").extra["verdict"]
    (tmp_path / "bath.toml").write_text(CASE)
    assert main(["run", "bath.toml", "--replace"]) == 0
    assert "at equilibrium: each species within" in capsys.readouterr().out


def test_equilibrium_command(tmp_path, capsys, monkeypatch):
    monkeypatch.chdir(tmp_path)
    assert main(["equilibrium", "hydrogen-kettle"]) == 0
    out = capsys.readouterr().out
    own = target_of(read_case("hydrogen-kettle")).own
    assert f"{own.temperature:.6f} K" in out and "H2O " in out
    assert main(["equilibrium", "methane-drum", "--temperatures", "1000", "1500 K", "1226.85 °C", "--csv", "m.csv"]) == 0
    rows = list(csv.DictReader((tmp_path / "m.csv").open()))
    assert [float(r["temperature/K"]) for r in rows] == [1000.0, 1500.0, 1500.0]
    assert rows[1]["x(CO2)"] == rows[2]["x(CO2)"]
    assert abs(sum(float(v) for k, v in rows[0].items() if k.startswith("x(")) - 1) < 1e-12
    assert main(["equilibrium", "methane-drum", "--pressures", "1 bar", "10 bar"]) == 0
    assert main(["equilibrium", "methane-drum", "--temperatures", "hot"]) == 2
    assert main(["equilibrium", "methane-drum", "--pressures", "-1"]) == 2
    assert main(["equilibrium", "methane-drum", "--pressures", "1", "--csv", "m.csv"]) == 2
    assert "--replace" in capsys.readouterr().err


def test_a_relaxation_of_1e25_s_is_followed_and_what_is_slower_is_called_not_yet():
    """The pool of n-heptane's set relaxes in 1e25 s, 1e34 times its fastest step: what is there in amounts above 1e-8 comes to
    its equilibrium on that way, and a last olefin, which only slower steps take, keeps the verdict at not yet."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        result, last = run_and_judge(to_equilibrium(read_case("heptane-bench")))
    assert last.kind is Kind.NOT_YET and last.relaxation_time > 1e20 and "more than double precision" in last.sentence
    assert result.complete and result.time[-1] == FOREVER
    equilibrium = last.target.own.mole_fraction
    seen = equilibrium > 1e-8
    apart = [np.max(np.abs((amount / np.sum(amount) - equilibrium)[seen] / equilibrium[seen]))
             for amount in (result.amount[np.searchsorted(result.time, 1e20)], result.amount[-1])]
    assert apart[0] > 1e-6 > apart[1]
    assert np.max(np.abs(result.element_residual)) < 1e-12


def test_equilibrium_command_minds_the_range_of_the_data(capsys):
    """A little outside is remarked on, far outside refused, as in a run."""
    assert main(["equilibrium", "hydrogen-kettle", "--temperatures", "250"]) == 0
    assert "outside the range of the thermochemical data" in capsys.readouterr().err
    assert main(["equilibrium", "hydrogen-kettle", "--temperatures", "8000"]) == 2
    assert "8000" in capsys.readouterr().err
