"""compare and reduce as commands and as figures: what is printed, written, drawn and refused."""

from pathlib import Path

import numpy as np
import pytest
from matplotlib import image

from bothways import InputError, build_mechanism, plots, read_mechanism, write_mechanism
from bothways.cli import main
from bothways.compare import compare
from bothways.course import Course
from bothways.reduce import part_of
from test_reduce import hydrogen_case

GRID = """
[case]
mechanism = "hydrogen-oxygen"
[vessel]
volume = "1 L"
[start]
fuel = { H2 = 1 }
oxidiser = { O2 = 1, N2 = 3.76 }
[until]
time = "10 ms"
[vary.start]
temperature = ["1100 K", "1400 K"]
pressure = ["1 atm", "4 atm"]
equivalence_ratio = [0.5, 1.0]
"""
CORE = ["H2", "O2", "H", "O", "OH", "H2O", "HO2", "N2"]


def small(names: list[str] = CORE):
    return build_mechanism(part_of(read_mechanism("hydrogen-oxygen"), names))


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(tmp_path)
    Path("grid.toml").write_text(GRID, encoding="utf-8")
    write_mechanism(small(), "small.toml")
    return tmp_path


def command(capsys: pytest.CaptureFixture[str], *arguments: str) -> tuple[int, str, str]:
    status = main(list(arguments))
    out, err = capsys.readouterr()
    return status, out, err


def test_compare_prints_writes_and_draws(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    files = {"--output": "c.h5", "--csv": "c.csv", "--markdown": "c.md", "--map": "m.png", "--parity": "p.svg",
             "--worst": "w.pdf"}
    options = [word for pair in files.items() for word in pair]
    status, out, err = command(capsys, "compare", "hydrogen-oxygen", "small.toml", "--over", "grid.toml", "--limit",
                               "ignition=50%", *options)
    assert (status, err) == (0, "") and "kept in all conditions" in out and "caution" in out
    assert all((folder / name).stat().st_size > 500 for name in files.values())
    assert "conditions  8: 1100 to 1400 K, 1.0132 to 4.053 bar, φ 0.5 to 1" in out
    assert image.imread("m.png").std() > 0.05


def test_a_limit_that_is_not_kept_is_exit_status_1(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    status, out, _ = command(capsys, "compare", "hydrogen-oxygen", "small.toml", "--over", "grid.toml", "--limit",
                             "ignition=0.01%")
    assert status == 1 and "not kept by hydrogen-oxygen-8-species: ignition" in out


def test_reduce_writes_a_mechanism_that_compare_takes(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    status, out, err = command(capsys, "reduce", "hydrogen-oxygen", "--over", "grid.toml", "--limit", "ignition=5%")
    assert (status, err) == (0, "") and "kept: " in out and "left out by the threshold: " in out
    assert (folder / "hydrogen-oxygen-reduced.toml").exists()
    status, out, _ = command(capsys, "compare", "hydrogen-oxygen", "hydrogen-oxygen-reduced.toml", "--over", "grid.toml",
                             "--limit", "ignition=5%")
    assert status == 0
    status, _, err = command(capsys, "reduce", "hydrogen-oxygen", "--over", "grid.toml", "--limit", "ignition=5%")
    assert status == 2 and "exists already" in err


@pytest.mark.parametrize("arguments, problem", [
    (("compare", "hydrogen-oxygen", "missing.toml", "--over", "grid.toml"), "no such file"),
    (("compare", "hydrogen-oxygen", "small.toml", "--over", "grids"), "no bundled grid"),
    (("compare", "hydrogen-oxygen", "small.toml"), "--over"),
    (("compare", "small.toml", "hydrogen-oxygen", "--over", "grid.toml"), "has no species"),
    (("compare", "hydrogen-oxygen", "methane", "--over", "grid.toml"), "'hydrogen-oxygen' has no species 'C'"),
    (("compare", "hydrogen-oxygen", "small.toml", "--over", "grid.toml", "--species", "H3"), "no species 'H3'"),
    (("compare", "hydrogen-oxygen", "small.toml", "--over", "grid.toml", "--measure", "delay"), "unknown measure 'delay'"),
    (("compare", "hydrogen-oxygen", "small.toml", "--over", "grid.toml", "--map", "m.bmp"), "'.bmp'"),
    (("compare", "hydrogen-oxygen", "small.toml", "--over", "grid.toml", "--csv", "small.toml"), "needed for something else"),
    (("compare", "hydrogen-oxygen", "small.toml", "--over", "grid.toml", "--csv", "x", "--markdown", "x"), "something else"),
    (("compare", "hydrogen-oxygen", "small.toml", "--over", "grid.toml", "--workers", "0"), "0 workers"),
    (("reduce", "hydrogen-oxygen", "--over", "grid.toml"), "no limit"),
    (("reduce", "hydrogen-oxygen", "--over", "grid.toml", "--limit", "ignition=5%", "--certain", "2"), "certain 2"),
    (("reduce", "hydrogen-oxygen", "--over", "grid.toml", "--limit", "ignition=5%", "--output", "grid.toml"), "something else"),
])
def test_bad_input_is_one_line(folder: Path, capsys: pytest.CaptureFixture[str], arguments: tuple[str, ...],
                               problem: str) -> None:
    before = sorted(folder.iterdir())
    status, out, err = command(capsys, *arguments)
    assert status == 2 and out == "" and problem in err and err.count("\n") == 1
    assert sorted(folder.iterdir()) == before


def test_a_very_large_grid_needs_consent(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    many = GRID.replace('temperature = ["1100 K", "1400 K"]', 'temperature = { from = "1000 K", to = "1500 K", count = 2501 }')
    Path("many.toml").write_text(many, encoding="utf-8")
    status, _, err = command(capsys, "compare", "hydrogen-oxygen", "small.toml", "--over", "many.toml")
    assert status == 2 and "10004 conditions" in err and "--yes" in err


# ---- figures


@pytest.fixture(scope="module")
def comparison():
    cases = [hydrogen_case(T, ratio, p) for T in (1100.0, 1300.0) for p in ("1 atm", "4 atm") for ratio in (0.5, 1.0)]
    return compare("hydrogen-oxygen", small(), small([*CORE, "H2O2"]), over=cases, limits={"ignition": 0.02})


def test_the_map_shows_every_condition_in_its_place(comparison) -> None:
    figure = plots.error_map(comparison)
    panels = [axes for axes in figure.axes if axes.collections and axes.get_xlim()[1] > 1000.0]
    assert len(panels) == 4 and [axes.get_title() for axes in panels[:2]] == ["φ = 0.5", "φ = 1"]
    lean = [k for k, c in enumerate(comparison.conditions) if c.equivalence_ratio == 0.5]
    squares = panels[0].collections[0]
    expected = [[comparison.conditions[k].temperature, comparison.conditions[k].pressure / 1e5] for k in lean]
    assert np.asarray(squares.get_offsets()) == pytest.approx(np.array(expected))
    assert np.asarray(squares.get_array()) == pytest.approx(np.clip(comparison.judged[0].values("ignition")[lean], -0.02, 0.02))
    crosses = np.asarray(panels[0].collections[2].get_offsets())
    assert len(crosses) == np.count_nonzero(np.abs(comparison.judged[0].values("ignition")[lean]) > 0.02)


def test_delays_stand_where_they_were_measured(comparison) -> None:
    figure = plots.parity(comparison, width="column")
    left, right = figure.axes[:2]
    theirs = np.array([c.ignition for c in comparison.conditions])
    assert left.lines[0].get_ydata() == pytest.approx(theirs) and left.get_yscale() == "log"
    assert left.lines[0].get_xdata() == pytest.approx([1000.0 / c.temperature for c in comparison.conditions])
    assert left.lines[2].get_ydata() == pytest.approx([o.ignition for o in comparison.judged[1].outcomes])
    assert right.lines[1].get_ydata() == pytest.approx(100.0 * (left.lines[1].get_ydata() / theirs - 1.0))


def test_the_worst_condition_is_drawn(comparison) -> None:
    figure = plots.worst_courses(comparison, "ignition")
    _, k = max((judged.worst("ignition") for judged in comparison.judged), key=lambda row: abs(row[0]))
    assert f"{comparison.conditions[k].temperature:.5g} K" in " ".join(text.get_text() for text in figure.texts)
    assert len(figure.axes[0].lines) == 3  # the parent and two reductions
    with pytest.raises(InputError, match="unknown measure"):
        plots.worst_courses(comparison, "delay")


@pytest.mark.parametrize("measure", ["temperature-shifted", "landing"])
def test_other_measures_can_be_mapped(comparison, measure: str) -> None:
    figure = plots.error_map(comparison, measure)
    assert figure.axes[0].collections[0].norm.vmax == max(np.abs(judged.values(measure)).max() for judged in comparison.judged)


# ---- between steps


def test_a_course_follows_f_where_states_bear_it_out_and_never_runs_away() -> None:
    times = np.array([0.0, 0.5, 1.0, 1.5, 2.0])
    states = np.exp(-times)[:, None]
    smooth = Course(times, states, lambda t, y: -y, lambda t, y: -np.eye(1))
    between = np.linspace(0.0, 2.0, 41)
    assert smooth.at(between)[:, 0] == pytest.approx(np.exp(-between), rel=3e-4)  # h⁴/384 of a cubic
    wild = Course(times, states, lambda t, y: np.array([1e9 * (-1.0) ** round(2 * t)]), lambda t, y: np.zeros((1, 1)))
    assert np.max(np.abs(wild.at(between)[:, 0] - np.exp(-between))) < 0.02
