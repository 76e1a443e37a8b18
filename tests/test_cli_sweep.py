"""The sweep command: what it prints, writes and returns; what it refuses in one line."""

from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from bothways import cli, outcome, plots, read_sweep
from bothways.cli import main
from bothways.integrate import compiled_methods
from bothways.sweep import work as work_module
from refusals import Refusals
from sweeps import grid_of, record_of
from test_sweep import begun
from test_sweep_killed import GRID


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    found = Refusals(tmp_path, capsys, monkeypatch)
    found.write()
    (tmp_path / "grid.toml").write_text(GRID % 5)
    return found


def test_a_sweep_with_its_figure(refusals: Refusals) -> None:
    Path("grid.toml").write_text((GRID % 5).replace('title = "a test"', 'title = "a test"\nfile = "results/r.h5"'))
    Path("results").mkdir()
    assert main(["sweep", "grid.toml", "--plot", "--workers", "1"]) == 0
    out, err = refusals.capsys.readouterr()
    assert err == "" and out.startswith("grid: a test\n") and "5 done" in out and "model is not a safety case" in out
    assert out.rstrip().endswith("results/r.png") and Path("results/r.png").stat().st_size > 10_000
    found = read_sweep("results/r.h5")
    low, high = np.nanmin(found["steepest_rise"]), np.nanmax(found["steepest_rise"])
    none = int(np.sum(np.isnan(found["steepest_rise"])))
    assert f"rise after {low * 1e9:.5g} ns to {high * 1e6:.5g} µs; none in {none} case" in out and high < 1.9e-5 and none
    assert main(["sweep", "grid.toml"]) == 0
    assert "results/r.h5 holds this sweep already; it was not run again" in refusals.capsys.readouterr().err
    assert main(["plot", "results/r.h5", "--output", "again.svg", "--column"]) == 0 and Path("again.svg").exists()


REFUSED = [
    (("grid.toml", "--workers", "0"), "--workers: 0 workers; expected at least 1"),
    (("grid.toml", "--workers", "two"), "argument --workers: invalid int value: 'two'"),
    (("grid.toml", "--workers", "2", "--scheduler", "x"), "argument --scheduler: not allowed with argument --workers"),
    (("no.toml",), "no.toml: no such file"),
    (("hydrogen-kettle",), "no bundled grid and no file 'hydrogen-kettle' (nearest: hydrogen-kettle-map); expected a grid"),
    (("case.toml",), "unknown key 'output'"),
    (("grid.toml", "--output", "grid.toml", "--replace"), "grid.toml: this file is needed for something else"),
    (("grid.toml", "--output", "no/r.h5"), "there is no folder"),
    (("grid.toml", "--output", "case.toml"), "case.toml: the file exists already"),
    (("grid.toml", "--plot", "x.bmp"), "x.bmp: the suffix is '.bmp'"),
    (("grid.toml", "--plot", "case.toml"), "case.toml: the suffix is '.toml'"),
]


@pytest.mark.parametrize("arguments, text", REFUSED)
def test_refused(refusals: Refusals, arguments: tuple[str, ...], text: str) -> None:
    line = refusals.line("sweep", *arguments)
    assert text in line and "; " in line, line


def test_an_unsound_case_is_named(refusals: Refusals) -> None:
    Path("grid.toml").write_text((GRID % 5).replace("from = 1000.0", "from = 1.0"))
    line = refusals.line("sweep", "grid.toml")
    assert "grid.toml: case " in line and " of 5 (start.temperature = " in line and "expected" in line


def test_a_large_sweep_wants_to_be_asked_for(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    Path("grid.toml").write_text(GRID % 10_001)
    line = refusals.line("sweep", "grid.toml")
    assert "grid.toml: 10001 cases, about " in line and "expected at most 10000 cases unasked; say --yes" in line
    assert not record_of(Path("grid.h5")).exists()
    monkeypatch.setattr(cli.sweep, "UNASKED", 4)
    Path("grid.toml").write_text(GRID % 5)
    assert "5 cases, about " in refusals.line("sweep", "grid.toml")
    assert main(["sweep", "grid.toml", "--yes"]) == 0 and "5 cases, about " in refusals.capsys.readouterr().err


def test_results_of_another_grid(refusals: Refusals) -> None:
    begun(Path("grid.h5"), grid_of())
    assert "grid.h5.unfinished: holds finished cases of another grid" in refusals.line("sweep", "grid.toml")
    record_of(Path("grid.h5")).unlink()
    assert main(["sweep", "grid.toml"]) == 0
    Path("grid.toml").write_text(GRID % 6)
    assert "grid.h5: the file exists already" in refusals.line("sweep", "grid.toml")
    assert len(read_sweep("grid.h5")) == 5
    assert main(["sweep", "grid.toml", "--replace"]) == 0 and len(read_sweep("grid.h5")) == 6


def test_failed_cases_and_verdicts(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(compiled_methods, "MOST_STEPS", 60)
    assert main(["sweep", "grid.toml"]) == 3
    out, err = refusals.capsys.readouterr()
    assert "steps were not enough" in out and "of 5 cases are not done; grid.h5 says why of each" in err
    monkeypatch.undo()
    monkeypatch.chdir(refusals.folder)
    Path("grid.toml").write_text((GRID % 3).replace("time = 2e-5", "time = 1e-12\nequilibrium = true"))
    assert main(["sweep", "grid.toml", "--replace"]) == 1
    assert "the verdict over some cases is not yet at equilibrium" in refusals.capsys.readouterr().err


def test_no_steep_rise_to_draw(refusals: Refusals) -> None:
    Path("grid.toml").write_text((GRID % 3).replace("time = 2e-5", "time = 1e-12"))
    assert main(["sweep", "grid.toml", "--plot"]) == 2
    out, err = refusals.capsys.readouterr()
    assert "no steep rise of temperature or pressure in any case" in out and len(read_sweep("grid.h5")) == 3
    assert "grid.h5: no case has a steep rise of temperature or pressure; expected ignition delays to draw" in err


@pytest.mark.parametrize("more", [("--species", "H2"), ("--approach",), ("--log",), ("--between", "0", "1")])
def test_options_of_runs_do_not_fit_a_sweep(refusals: Refusals, more: tuple[str, ...]) -> None:
    assert main(["sweep", "grid.toml"]) == 0
    refusals.capsys.readouterr()
    assert "grid.h5: these are the results of a sweep" in refusals.line("plot", "grid.h5", *more)


# ---- clusters


def test_a_scheduler_that_does_not_answer(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    pytest.importorskip("distributed")
    monkeypatch.setattr(cli.sweep, "_CONNECT", "0.2s")
    for address in ("tcp://127.0.0.1:9", "nowhere", "xyz://1"):
        line = refusals.line("sweep", "grid.toml", "--scheduler", address)
        assert f"--scheduler: no scheduler answers at '{address}'" in line and "start it, or correct the address" in line


def test_without_the_extra(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(__import__("sys").modules, "distributed", None)
    line = refusals.line("sweep", "grid.toml", "--scheduler", "tcp://127.0.0.1:9")
    assert "--scheduler: the package distributed is not installed" in line and "pip install 'bothways[cluster]'" in line


def test_the_executor_of_a_scheduler_is_used(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    from test_sweep import Elsewhere

    used = Elsewhere()

    class Client:
        def scheduler_info(self) -> dict[str, Any]:
            return {"workers": {"one": 1}}

        def get_executor(self) -> Elsewhere:
            return used

    @contextmanager
    def client(address: str) -> Iterator[Client]:
        assert address == "tcp://there:1"
        yield Client()

    monkeypatch.setattr(cli.sweep, "_client", client)
    assert main(["sweep", "grid.toml", "--scheduler", "tcp://there:1"]) == 0 and used.count >= 5
    monkeypatch.setattr(Client, "scheduler_info", lambda self: {"workers": {}})
    assert "the scheduler has no workers" in refusals.line("sweep", "grid.toml", "--scheduler", "tcp://there:1", "--replace")


# ---- the figure


def test_curves_join_what_differs_in_temperature_alone(refusals: Refusals) -> None:
    grid = (GRID % 5).partition("[samples]")[0] + """
[vary.start]
pressure = ["1 bar", "10 bar"]
equivalence_ratio = [0.5, 1.0]
temperature = { from = 1300.0, to = 1600.0, count = 3 }
"""
    Path("grid.toml").write_text(grid.replace("equivalence_ratio = 0.8\n", "", 1).replace("time = 2e-5", "time = 2e-3"))
    assert main(["sweep", "grid.toml"]) == 0
    found = read_sweep("grid.h5")
    axes = plots.ignition(found).axes[0]
    curves = [line for line in axes.lines if len(line.get_xdata()) == 3]
    assert len(curves) == 4 and axes.get_yscale() == "log"
    names = [text.get_text() for text in axes.get_legend().get_texts()]
    assert names == ["p = 1 bar, φ = 0.5", "p = 1 bar, φ = 1", "p = 10 bar, φ = 0.5", "p = 10 bar, φ = 1"]
    for line, start in zip(curves, (0, 3, 6, 9), strict=True):
        np.testing.assert_allclose(sorted(line.get_xdata()), sorted(1e3 / np.array([1300.0, 1450.0, 1600.0])))
        assert set(np.round(line.get_ydata(), 12)) <= set(np.round(1e3 * found["steepest_rise"][start : start + 3], 12)) | \
            set(np.round(1e6 * found["steepest_rise"][start : start + 3], 12))


def test_a_case_that_cannot_be_run_is_no_end(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(outcome, "integrate", lambda *a: 1 / 0)
    assert main(["sweep", "grid.toml"]) == 3 and work_module is not None
    assert "case 1 of 5 (" in refusals.capsys.readouterr().out
