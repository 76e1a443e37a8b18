"""Sweeps killed at any moment: the same call goes on, loses nothing, repeats nothing, and ends with the same results."""

import os
import random
import signal
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path

import pytest

from bothways import Sweep, read_sweep, sweep
from bothways.sweep import driver
from bothways.sweep import work as work_module
from bothways.sweep.packing import number_of
from bothways.sweep.record import _FRAME, _MAGIC, Record, _frame
from sweeps import assert_same, grid_of, in_a_process, record_of, size_of

CASES = 200


@pytest.fixture(scope="module")
def undisturbed(tmp_path_factory: pytest.TempPathFactory) -> Sweep:
    return sweep(grid_of(CASES), tmp_path_factory.mktemp("sweep") / "r.h5", workers=1)


def frames(path: Path) -> list[tuple[int, int]]:
    """Case and end of every whole frame after the head, as the file itself shows them."""
    found = []
    with path.open("rb") as file:
        file.read(len(_MAGIC))
        _frame(file)
        while (content := _frame(file)) is not None:
            found.append((number_of(content), file.tell()))
    return found


def logged(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Notes every case that a worker begins, in a file that survives the worker."""
    log = os.open(path, os.O_WRONLY | os.O_APPEND | os.O_CREAT)
    row = work_module._row

    def noting(grid: object, k: int) -> dict:
        os.write(log, f"{k}\n".encode())
        return row(grid, k)  # type: ignore[arg-type]

    monkeypatch.setattr(work_module, "_row", noting)


def begun_in(path: Path) -> list[int]:
    return [int(line) for line in path.read_text().split()] if path.exists() else []


FULL = 240_000
"""About the size of a whole record [bytes]."""


def moment(output: Path, chance: random.Random) -> Callable[[], bool]:
    """A random moment: some time after the record grew by a random part of its whole, which may be when it is done."""
    wanted = size_of(record_of(output)) + chance.uniform(-0.1, 0.4) * FULL
    longer = chance.uniform(0.0, 0.01)
    reached: list[float] = []

    def come() -> bool:
        if size_of(record_of(output)) >= wanted:
            reached.append(time.monotonic())
        return bool(reached) and time.monotonic() - reached[0] >= longer

    return come


def survive(output: Path, kills: int, seed: int, monkeypatch: pytest.MonkeyPatch) -> int:
    """Kills sweeps at random moments until so many were killed, then lets one end; the number of kills that left a record."""
    log, seen, killed, met = output.with_suffix(".log"), 0, 0, 0
    logged(log, monkeypatch)
    chance = random.Random(seed)
    while killed < kills:
        before = {k for k, _ in frames(record_of(output))} if record_of(output).exists() else set()
        ended = in_a_process(lambda: sweep(grid_of(CASES), output, workers=2), moment(output, chance))
        assert ended in (-signal.SIGKILL, 0)
        begun, seen = begun_in(log)[seen:], len(begun_in(log))
        assert not before & set(begun), "a case was run again though its row was kept"
        killed += ended != 0
        if ended == 0 or not record_of(output).exists():
            output.unlink(missing_ok=True)
            continue
        kept = [k for k, _ in frames(record_of(output))]
        assert len(kept) == len(set(kept)) and before <= set(kept), "a kept row was lost, or is there twice"
        assert len(set(begun) - set(kept)) <= 8, "more than was in hand was lost"
        met += len(kept) > 0
    assert in_a_process(lambda: sweep(grid_of(CASES), output, workers=2)) == 0
    return met


def test_killed_at_random_moments(undisturbed: Sweep, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    output = tmp_path / "r.h5"
    assert survive(output, 8, 1, monkeypatch) >= 4
    assert_same(read_sweep(output), undisturbed)
    assert _leftovers(tmp_path)


def _leftovers(folder: Path) -> bool:
    """A kill may leave the half-written file aside of the results, never more."""
    return all(name.startswith(".bothways-") for name in set(os.listdir(folder)) - {"r.h5", "r.log"})


@pytest.mark.slow
def test_fifty_kills(undisturbed: Sweep, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    output = tmp_path / "r.h5"
    assert survive(output, 50, 2, monkeypatch) >= 25
    assert_same(read_sweep(output), undisturbed)


def test_killed_while_the_results_are_written(undisturbed: Sweep, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    output = tmp_path / "r.h5"
    write, discard = driver.write_results, Record.discard

    def dying(when: str) -> Callable:
        def replaced(*arguments: object, **more: object) -> None:
            if when == "before":
                os.kill(os.getpid(), signal.SIGKILL)
            write(*arguments, **more)  # type: ignore[arg-type]
            os.kill(os.getpid(), signal.SIGKILL)

        return replaced

    for when in ("before", "after"):
        monkeypatch.setattr(driver, "write_results", dying(when))
        assert in_a_process(lambda: sweep(grid_of(CASES), output)) == -signal.SIGKILL
        assert record_of(output).exists() and output.exists() == (when == "after")
    monkeypatch.setattr(driver, "write_results", write)
    logged(tmp_path / "log", monkeypatch)
    assert_same(sweep(grid_of(CASES), output), undisturbed)
    assert begun_in(tmp_path / "log") == [] and not record_of(output).exists() and discard is Record.discard


def test_a_record_torn_anywhere(tmp_path: Path) -> None:
    """Cut at every byte of its last frame and at many others, or with its tail overwritten: whole frames count, and no other."""
    grid, output = grid_of(6), tmp_path / "r.h5"
    expected = sweep(grid, tmp_path / "whole.h5")

    def stop(finished: int, cases: int) -> None:
        if finished >= 4:
            raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        sweep(grid, output, workers=1, told=stop)
    whole = record_of(output).read_bytes()
    ends = [end for _, end in frames(record_of(output))]
    head = ends[0] - (ends[1] - ends[0])
    cuts = {*range(ends[-2], len(whole), 97), *range(0, len(whole), 331), 0, 3, len(_MAGIC), head, *ends}
    for cut in sorted(cuts):
        for tail in (b"", bytes(40), b"\xff" * _FRAME.size, whole[cut : cut + 8][::-1] if cut < len(whole) - 8 else b""):
            record_of(output).write_bytes(whole[:cut] + tail)
            if cut < len(_MAGIC) and tail:
                continue
            record = Record(record_of(output), driver._identity(grid), len(grid))
            count, size = record.count, record_of(output).stat().st_size
            record.close()
            assert count == sum(end <= cut for end in ends), (cut, tail)
            assert size == max([end for end in ends if end <= cut], default=size)
    record_of(output).write_bytes(whole[: ends[1] + 5])
    assert_same(sweep(grid, output), expected)


# ---- the command in processes of its own

GRID = """
[grid]
title = "a test"
[case]
mechanism = "hydrogen-oxygen"
[start]
fuel = { H2 = 1 }
oxidiser = { O2 = 1, N2 = 3.76 }
equivalence_ratio = 0.8
[until]
time = 2e-5
[samples]
count = %d
seed = 1
[samples.start]
temperature = { from = 1000.0, to = 2000.0, spacing = "reciprocal" }
pressure = { from = "1 bar", to = "20 bar", spacing = "logarithmic" }
"""


def command(folder: Path, *more: str) -> subprocess.Popen[str]:
    arguments = [sys.executable, "-m", "bothways", "sweep", "grid.toml", *more]
    return subprocess.Popen(arguments, cwd=folder, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)


def ended_after(process: subprocess.Popen[str], record: Path, size: int, sent: int) -> tuple[int, str, str]:
    """Sends a signal once the record has grown to that size; exit status and output."""
    limit = time.monotonic() + 60.0
    while process.poll() is None and not (record.exists() and record.stat().st_size >= size) and time.monotonic() < limit:
        time.sleep(0.002)
    process.send_signal(sent)
    out, err = process.communicate(timeout=60)
    return process.returncode, out, err


def test_the_command_killed_and_interrupted(undisturbed: Sweep, tmp_path: Path) -> None:
    (tmp_path / "grid.toml").write_text(GRID % CASES)
    output = tmp_path / "grid.h5"
    status, _, _ = ended_after(command(tmp_path), record_of(output), 20_000, signal.SIGKILL)
    assert status == -signal.SIGKILL
    first = len(frames(record_of(output)))
    status, out, err = ended_after(command(tmp_path), record_of(output), record_of(output).stat().st_size + 20_000, signal.SIGINT)
    assert status == 130 and out == ""
    kept = len(frames(record_of(output)))
    assert kept > first > 0
    assert f"{first} of 200 cases were finished before; going on" in err
    assert f"interrupted: {kept} of 200 cases are finished and kept; the same command goes on from there" in err
    done = command(tmp_path)
    out, err = done.communicate(timeout=120)
    assert done.returncode == 0 and f"{kept} of 200 cases were finished before" in err and "200 done" in out
    assert_same(read_sweep(output), undisturbed)
