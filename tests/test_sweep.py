"""Sweeps: what the results hold, that every executor gives the same to the bit, and what is refused."""

import json
import multiprocessing
import os
import pickle
import resource
import tomllib
import zlib
from concurrent.futures import Executor, Future, ProcessPoolExecutor, ThreadPoolExecutor
from pathlib import Path
from typing import Any

import h5py
import numpy as np
import pytest
import xarray

from bothways import InputError, SolverError, Sweep, build_grid, build_mechanism, outcome, read_sweep, sweep
from bothways.grid import unpacked
from bothways.integrate import compiled_methods
from bothways.outcome import COURSE, VARIABLES
from bothways.sweep import work as work_module
from bothways.sweep.packing import packed
from bothways.sweep.packing import unpacked as unpacked_row
from sweeps import assert_same, grid_of, in_a_process, record_of


@pytest.fixture(scope="module")
def undisturbed(tmp_path_factory: pytest.TempPathFactory) -> Sweep:
    return sweep(grid_of(trajectories=True), tmp_path_factory.mktemp("sweep") / "r.h5", workers=1)


# ---- what the results hold


def test_each_case_has_the_row_of_its_outcome(undisturbed: Sweep) -> None:
    grid = grid_of(trajectories=True)
    for k in range(len(grid)):
        row = outcome.outcome(grid.case(k), course=True)
        for variable in VARIABLES:
            np.testing.assert_array_equal(undisturbed[variable.name][k], row[variable.name], err_msg=variable.name)
        course = undisturbed.course(k)
        for variable in COURSE:
            np.testing.assert_array_equal(course[variable.name], row["course"][variable.name])
    assert undisturbed["course_steps"].sum() == sum(undisturbed["steps"] + 1)
    assert undisturbed.tally() == {"done": 8} and repr(undisturbed) == "<Sweep of 8 cases: 8 done>"
    water = undisturbed.species.index("H2O")
    np.testing.assert_array_equal(undisturbed.of("end_amount", "H2O"), undisturbed["end_amount"][:, water])


@pytest.mark.parametrize("engine", ["h5netcdf", "netcdf4"])
def test_xarray_opens_the_results(undisturbed: Sweep, engine: Any) -> None:
    with xarray.open_dataset(undisturbed.path, engine=engine) as data:
        assert data.sizes == {"case": 8, "species": 13, "mechanism": 1, "step": int(undisturbed["course_steps"].sum())}
        assert data["end_amount"].dims == ("case", "species") and data["course_amount"].dims == ("step", "species")
        assert data["steepest_rise"].attrs["units"] == "s" and data["start_pressure"].attrs["units"] == "Pa"
        assert list(data["species"].values) == list(undisturbed.species) and data.attrs["complete"] == 1
        assert float(data["end_amount"].sel(species="H2O")[3]) == undisturbed.of("end_amount", "H2O")[3]
        assert list(data["verdict"].values) == list(undisturbed["verdict"])


def test_the_file_alone_repeats_the_sweep(undisturbed: Sweep, tmp_path: Path) -> None:
    with h5py.File(undisturbed.path) as file:
        content = json.loads(file["grid_text"].asstr()[()])
        names, texts = file["mechanism"].asstr()[()], file["mechanism_text"].asstr()[()]
    documents = {name: tomllib.loads(text) for name, text in zip(names, texts, strict=True)}
    again = unpacked(zlib.compress(json.dumps([content, documents]).encode()))
    assert again.digest == undisturbed.digest
    assert_same(sweep(again, tmp_path / "r.h5"), undisturbed)


def test_inputs_and_several_mechanisms(tmp_path: Path) -> None:
    grid = build_grid({
        "case": {"mechanism": "methane"}, "until": {"time": "1 us"}, "vessel": {"heat": "isothermal"},
        "grid": {"peaks": ["OH", "HO2"]},
        "start": {"temperature": "1500 K", "pressure": "1 bar", "amount": {"O2": 1.0}} | {"pressure": 1e5},
        "vary": {"case": {"mechanism": ["methane", "hydrogen-oxygen"]}, "start": {"amount": {"H2": ["1 mmol", 2.0]}},
                 "vessel": {"thermal_inertia": [1.0]}}})
    found = sweep(grid, tmp_path / "r.h5")
    assert found["case_mechanism"] == ("methane", "methane", "hydrogen-oxygen", "hydrogen-oxygen")
    assert list(found["start_amount_H2"]) == [1e-3, 2.0] * 2 and found.variables["start_amount_H2"].units == "mol"
    assert list(found["vessel_thermal_inertia"]) == [1.0] * 4 and set(found["heat"]) == {"isothermal"}
    for k in range(4):
        case = grid.case(k)
        own = [found.species.index(name) for name in case.mechanism.names]
        np.testing.assert_array_equal(found["start_amount"][k, own], case.charge.amount)
        others = np.setdiff1d(np.arange(len(found.species)), own)
        assert np.isnan(found["start_amount"][k, others]).all() and len(others) > 0
    assert np.isnan(found.of("peak_time", "H")).all()


def test_rows_survive_packing() -> None:
    row = outcome.outcome(grid_of().case(3), ["OH"], course=True)
    k, again = unpacked_row(packed(7, row))
    assert k == 7 and again.keys() == row.keys()
    for name in row.keys() - {"course"}:
        np.testing.assert_array_equal(again[name], row[name])
    for name, values in row["course"].items():
        np.testing.assert_array_equal(again["course"][name], values)
    assert len(packed(7, {**row, "course": None})) < 3000


# ---- executors


class Elsewhere(Executor):
    """Workers that share nothing: everything is pickled, and each task may meet a process that knows no grid."""

    def __init__(self, forgetful: int = 3) -> None:
        self.forgetful, self.count, self.sizes = forgetful, 0, []  # type: ignore[var-annotated]

    def submit(self, function: Any, /, *args: Any, **kwargs: Any) -> Future:
        self.count += 1
        if self.count % self.forgetful == 0:
            work_module._grids.clear()
        sent = pickle.dumps((function, args, kwargs))
        self.sizes.append(len(sent))
        function, args, kwargs = pickle.loads(sent)
        future: Future = Future()
        future.set_result(pickle.loads(pickle.dumps(function(*args, **kwargs))))
        return future


@pytest.mark.parametrize("workers", [2, 5])
def test_threads(undisturbed: Sweep, tmp_path: Path, workers: int) -> None:
    assert_same(sweep(grid_of(trajectories=True), tmp_path / "r.h5", workers=workers), undisturbed)
    with ThreadPoolExecutor(workers) as pool:
        assert_same(sweep(grid_of(trajectories=True), tmp_path / "s.h5", executor=pool), undisturbed)


def test_workers_that_know_nothing_are_told(undisturbed: Sweep, tmp_path: Path) -> None:
    elsewhere = Elsewhere(forgetful=4)
    assert_same(sweep(grid_of(trajectories=True), tmp_path / "r.h5", executor=elsewhere), undisturbed)
    small = [size for size in elsewhere.sizes if size < 300]
    assert len(small) == 8 and 0 < len(elsewhere.sizes) - len(small) < 8


@pytest.mark.slow  # the same way as dask.distributed's, which the next test takes
def test_processes(undisturbed: Sweep, tmp_path: Path) -> None:
    with ProcessPoolExecutor(2, multiprocessing.get_context("spawn")) as pool:
        assert_same(sweep(grid_of(trajectories=True), tmp_path / "r.h5", executor=pool), undisturbed)


def test_dask_distributed(undisturbed: Sweep, tmp_path: Path) -> None:
    distributed = pytest.importorskip("distributed")
    with distributed.LocalCluster(n_workers=2, threads_per_worker=1, processes=True, dashboard_address=None) as cluster, \
            distributed.Client(cluster) as client:
        assert_same(sweep(grid_of(trajectories=True), tmp_path / "r.h5", executor=client.get_executor()), undisturbed)


def test_a_lost_worker_ends_the_sweep_but_loses_nothing(undisturbed: Sweep, tmp_path: Path) -> None:
    class Dying(Executor):
        def __init__(self) -> None:
            self.left = 5

        def submit(self, function: Any, /, *args: Any, **kwargs: Any) -> Future:
            future: Future = Future()
            self.left -= 1
            if self.left < 0:
                future.set_exception(RuntimeError("gone"))
            else:
                future.set_result(function(*args))
            return future

    output, grid = tmp_path / "r.h5", grid_of(trajectories=True)
    with pytest.raises(SolverError, match=r"a worker was lost \(RuntimeError: gone\).*the same command goes on from there"):
        sweep(grid, output, executor=Dying())
    seen = []
    assert_same(sweep(grid, output, told=lambda finished, cases: seen.append(finished)), undisturbed)
    assert min(seen) > 5 and not record_of(output).exists()


# ---- failures are rows


def test_a_case_that_fails_is_a_row(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(compiled_methods, "MOST_STEPS", 60)
    found = sweep(grid_of(), tmp_path / "r.h5")
    assert found.tally().keys() == {"done", "gave up"}
    for status, reason, steps in zip(found["status"], found["reason"], found["steps"], strict=True):
        assert ("60 steps were not enough" in reason) == (status == "gave up")
        assert steps < 60 and (status == "done" or steps > 40)  # refused ones count as well


def test_a_fault_in_a_case_is_a_row(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(outcome, "integrate", lambda *a: 1 / 0)
    found = sweep(grid_of(2), tmp_path / "r.h5")
    assert found["status"] == ("failed", "failed") and "ZeroDivisionError" in found["reason"][0]
    assert np.isnan(found["end_temperature"]).all() and np.isfinite(found["start_temperature"]).all()


def test_every_case_is_checked_before_any_is_run(tmp_path: Path) -> None:
    grid = build_grid({**grid_of().base, "vary": {"start": {"pressure": [1e5], "temperature": [1000.0, 10.0]}}})
    with pytest.raises(InputError, match=r"case 2 of 2 \(.*start.temperature = 10\): start.temperature: 10 K; expected"):
        sweep(grid, tmp_path / "r.h5", executor=Elsewhere(0))
    assert not (tmp_path / "r.h5").exists()


# ---- interrupted


def test_an_interrupted_sweep_keeps_what_is_finished(undisturbed: Sweep, tmp_path: Path) -> None:
    output, grid = tmp_path / "r.h5", grid_of(trajectories=True)

    def pressed(finished: int, cases: int) -> None:
        if finished >= 2:
            raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        sweep(grid, output, told=pressed)
    assert record_of(output).exists() and not output.exists()
    ran = []
    assert_same(sweep(grid, output, executor=Noting(ran)), undisturbed)
    assert 0 < len(ran) <= 6


class Noting(Elsewhere):
    def __init__(self, ran: list[int]) -> None:
        super().__init__(forgetful=10**9)
        self.ran = ran

    def submit(self, function: Any, /, *args: Any, **kwargs: Any) -> Future:
        self.ran.append(args[1])
        return super().submit(function, *args, **kwargs)


def test_what_is_done_is_not_done_again(undisturbed: Sweep, tmp_path: Path) -> None:
    output = tmp_path / "r.h5"
    output.write_bytes(Path(undisturbed.path).read_bytes())
    record_of(output).write_bytes(b"left by a death between two steps")
    ran: list[int] = []
    assert_same(sweep(grid_of(trajectories=True), output, executor=Noting(ran)), undisturbed)
    assert ran == [] and not record_of(output).exists()
    with pytest.raises(InputError, match=r"r\.h5: the file exists already"):
        sweep(grid_of(9, trajectories=True), output)
    assert len(sweep(grid_of(trajectories=True), output, executor=Noting(ran), replace=True)) == len(ran) == 8


def test_the_disk_fills_up(undisturbed: Sweep, tmp_path: Path) -> None:
    output, grid = tmp_path / "r.h5", grid_of(trajectories=True)

    def limited(size: int) -> int:
        def run() -> None:
            resource.setrlimit(resource.RLIMIT_FSIZE, (size, size))
            with pytest.raises(InputError, match=r"cannot be written \(.*\)"):
                sweep(grid, output)

        return in_a_process(run)

    assert limited(60_000) == 0  # the record does not fit
    kept = record_of(output).stat().st_size
    assert 10_000 < kept <= 60_000 and not output.exists()
    ran: list[int] = []
    assert_same(sweep(grid, output, executor=Noting(ran)), undisturbed)
    assert 0 < len(ran) < 8 and sorted(os.listdir(tmp_path)) == ["r.h5"]


# ---- refused


def begun(output: Path, grid: Any) -> None:
    """An unfinished sweep."""
    def pressed(finished: int, cases: int) -> None:
        raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        sweep(grid, output, told=pressed)


def test_results_are_not_mixed(tmp_path: Path) -> None:
    output = tmp_path / "r.h5"
    begun(output, grid_of())
    before = record_of(output).read_bytes()
    other = grid_of().mechanisms["hydrogen-oxygen"].to_dict()
    other["reaction"][0]["forward"]["A"] *= 1.01
    document = {**grid_of().base, "vary": {"start": {"pressure": [1e5], "temperature": [1500.0]}}}
    for grid, word in ((grid_of(9), "grid"), (grid_of(until=3e-5), "grid"), (grid_of(trajectories=True), "grid"),
                       (build_grid(document), "grid"),
                       (build_grid(document, mechanism=build_mechanism(other)), "mechanism hydrogen-oxygen")):
        with pytest.raises(InputError, match=rf"r\.h5\.unfinished: holds finished cases of another {word}; .* not mixed"):
            sweep(grid, output)
    assert record_of(output).read_bytes() == before


def test_one_sweep_at_a_time(tmp_path: Path) -> None:
    def within(finished: int, cases: int) -> None:
        with pytest.raises(InputError, match=r"r\.h5\.unfinished: another sweep is writing it"):
            sweep(grid_of(), tmp_path / "r.h5")

    sweep(grid_of(), tmp_path / "r.h5", told=within)


def test_a_record_of_something_else(tmp_path: Path) -> None:
    output = tmp_path / "r.h5"
    record_of(output).write_bytes(b"somebody's notes")
    with pytest.raises(InputError, match=r"r\.h5\.unfinished: is no record of a sweep"):
        sweep(grid_of(), output)
    assert record_of(output).read_bytes() == b"somebody's notes"
    record_of(output).write_bytes(b"bothways sweep record 1\n" + bytes(100_000))
    with pytest.raises(InputError, match=r"is damaged at its start"):
        sweep(grid_of(), output)


def test_files_that_are_no_results(tmp_path: Path, undisturbed: Sweep) -> None:
    (tmp_path / "x.h5").write_text("x")
    with pytest.raises(InputError, match=r"x\.h5: is not an HDF5 file; expected the results of a sweep by bothways"):
        read_sweep(tmp_path / "x.h5")
    with h5py.File(tmp_path / "y.h5", "w") as file:
        file["case"] = [1.0]
    with pytest.raises(InputError, match=r"y\.h5: the attribute Conventions is ''; expected 'bothways-sweep-1'"):
        read_sweep(tmp_path / "y.h5")
    with pytest.raises(InputError, match=r"no variable 'end_temprature' \(nearest: end_temperature"):
        undisturbed["end_temprature"]
    with pytest.raises(InputError, match=r"unknown species 'H2X'; nearest: H2"):
        undisturbed.of("end_amount", "H2X")


def test_memory_does_not_grow_with_the_number_of_cases(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    row = outcome.outcome(grid_of().case(0))
    monkeypatch.setattr(work_module, "_row", lambda grid, k: row)

    def growth(cases: int) -> int:
        def run() -> None:
            grid = grid_of(cases)
            found = grid.case(0)
            start = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
            monkeypatch.setattr(type(grid), "case", lambda self, k: found)
            sweep(grid, tmp_path / f"{cases}.h5", workers=2)
            Path(tmp_path / str(cases)).write_text(str(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss - start))

        assert in_a_process(run) == 0
        return int(Path(tmp_path / str(cases)).read_text())

    few, many = growth(3000), growth(11000)
    assert many - few < 8000 * 1.2, (few, many)  # kB; the grid's own samples are about 0.4 kB a case, a kept row would be 4
