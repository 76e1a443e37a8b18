"""Runs that end early: the solver gives up (status 3) or Ctrl-C (130); the file is kept and says so."""

import os
import re
import select
import signal
import subprocess
import sys
import threading
import time
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from bothways import Equations, build_case, build_mechanism, cli, read_trajectory, run, write_trajectory
from bothways.cli import main
from bothways.mechanism.toml_reader import parse_toml
from refusals import CASE, MECHANISM, Refusals, assert_kept, changed, interrupting, meddled

pytestmark = pytest.mark.usefixtures("ordinary_interrupts")


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


# ---- the solver gives up: status 3, the file is kept


def test_too_many_steps(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    refusals.write()
    for name, module in list(sys.modules.items()):
        if name.startswith("bothways.integrate") and hasattr(module, "MOST_STEPS"):
            monkeypatch.setattr(module, "MOST_STEPS", 7)
    assert "try another [solver] method or rtol" in assert_kept(refusals, 3, "7 steps were not enough")
    assert 7 <= len(read_trajectory("run.h5")) <= 8


RUNAWAY = """\
[mechanism]
name = "runaway"
phase = "ideal gas"
standard_pressure = "1 bar"
[elements]
Q = "10 g/mol"
[species.A]
formula = "Q"
potential = { form = "constant heat capacity", at = 298.15, H = 1.5e6, S = 120, cp = 21 }
[species.B]
formula = "Q"
potential = { form = "constant heat capacity", at = 298.15, H = 0, S = 120, cp = 21 }
[[reaction]]
equation = "A ⇌ B"
forward = { law = "Arrhenius", A = 1e3 }
"""


def test_a_case_that_leaves_every_range_of_temperature(refusals: Refusals) -> None:
    """1.5 MJ/mol set free at 12.7 J/(mol K) would heat the vessel beyond 1e5 K: refused before the run."""
    case = changed(CASE, ("{ Q = 0.1, O2 = 1 }", "{ A = 1 }"), ("thermal_inertia = 1.2", ""), ('"1 us"', '"1 s"'))
    refusals.write(RUNAWAY, case)
    assert "is out of reach" in refusals.line("run", "case.toml")


def test_equations_that_fail(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    """A right-hand side that is NaN from 0.3 us on stops any solver before."""
    def failing(self: Equations, t: float, y: np.ndarray) -> np.ndarray:
        return f(self, t, y) if t < 3e-7 else np.full(y.size, np.nan)

    f = Equations.f
    refusals.write(case=changed(CASE, ("rtol = 1e-6", 'method = "Radau"'), ('also_at = ["0.1 us", 5e-7]', "")))
    monkeypatch.setattr(Equations, "f", failing)
    assert_kept(refusals, 3, "at ")
    assert 1e-8 < read_trajectory("run.h5").time[-1] <= 3e-7


# ---- Ctrl-C: status 130, the file is kept


@pytest.mark.parametrize("at", [1, 5])
def test_ctrl_c_ends_the_run_at_the_end_of_the_step(refusals: Refusals, monkeypatch: pytest.MonkeyPatch, at: int) -> None:
    refusals.write()
    monkeypatch.setattr(cli.run, "run_and_judge", meddled(interrupting(at)))
    assert "run it again for the rest" in assert_kept(refusals, 130, "interrupted at ")
    assert len(read_trajectory("run.h5")) == at + 1
    assert signal.getsignal(signal.SIGINT) is signal.default_int_handler


def test_ctrl_c_after_the_last_step_loses_nothing(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    def pressed(*arguments: Any, **named: Any) -> None:
        signal.raise_signal(signal.SIGINT)
        write_trajectory(*arguments, **named)

    refusals.write()
    monkeypatch.setattr(cli.run, "write_trajectory", pressed)
    assert main(["run", "case.toml"]) == 0
    assert read_trajectory("run.h5").complete


def test_a_second_ctrl_c_does_not_wait(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    def stuck(case: Any, told: Any) -> None:
        interrupting(0, times=2)(0)

    refusals.write()
    monkeypatch.setattr(cli.run, "run_and_judge", stuck)
    assert refusals.line("run", "case.toml", status=130) == "interrupted"


def test_ctrl_c_before_the_run_writes_nothing(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    refusals.write()
    monkeypatch.setattr(cli.run, "read_case", lambda name: signal.raise_signal(signal.SIGINT))
    assert refusals.line("run", "case.toml", status=130) == "interrupted"


def test_ignored_interrupts_stay_ignored(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    refusals.write()
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    monkeypatch.setattr(cli.run, "run_and_judge", meddled(interrupting(3)))
    assert main(["run", "case.toml"]) == 0


def test_runs_outside_the_main_thread(refusals: Refusals) -> None:
    refusals.write()
    statuses: list[int] = []
    thread = threading.Thread(target=lambda: statuses.append(main(["run", "case.toml"])))
    thread.start()
    thread.join(120)
    assert statuses == [0] and read_trajectory("run.h5").complete


def test_keyboard_interrupt_through_told(tmp_path: Path) -> None:
    def told(steps: int, t: float, temperature: float) -> None:
        if steps == 4:
            raise KeyboardInterrupt

    case = build_case(parse_toml(CASE), mechanism=build_mechanism(parse_toml(MECHANISM)))
    trajectory = run(case, told)
    assert not trajectory.complete and trajectory.reason.startswith("interrupted at ") and len(trajectory) == 5
    write_trajectory(tmp_path / "x.h5", trajectory)
    assert not read_trajectory(tmp_path / "x.h5").complete


def long_case(folder: Path) -> None:
    """A case of very many steps, whatever the solver: 200 000 times to land on."""
    times = ", ".join(f"{t:.8g}" for t in np.linspace(0, 1, 200_001)[1:-1])
    text = changed(CASE, ('"1 us"', '"1 s"'), ('["0.1 us", 5e-7]', f"[{times}]"))
    (folder / "case.toml").write_text(text)
    (folder / "small.toml").write_text(MECHANISM)


def read_until(terminal: int, pattern: bytes, seconds: float) -> bytes:
    """What a terminal shows until the pattern matches or nothing more comes."""
    shown, deadline = b"", time.monotonic() + seconds
    while not re.search(pattern, shown) and time.monotonic() < deadline:
        if select.select([terminal], [], [], 1.0)[0]:
            try:
                shown += os.read(terminal, 65536)
            except OSError:  # the other end is closed
                break
    return shown


def test_ctrl_c_in_a_terminal(tmp_path: Path) -> None:
    pty, termios = pytest.importorskip("pty"), pytest.importorskip("termios")
    long_case(tmp_path)
    terminal, other_end = pty.openpty()
    termios.tcsetwinsize(other_end, (24, 100))  # without a size no progress is shown
    process = subprocess.Popen([sys.executable, "-m", "bothways", "run", "case.toml"], cwd=tmp_path, text=True,
                               stdin=subprocess.DEVNULL, stdout=subprocess.PIPE, stderr=other_end)
    os.close(other_end)
    try:
        shown = read_until(terminal, rb"[1-9]\d* steps, ", 240)
        assert b" steps, " in shown, shown
        process.send_signal(signal.SIGINT)
        out = process.communicate(timeout=240)[0]
        shown += read_until(terminal, rb"\A(?!)", 5)
    finally:
        process.kill()
        os.close(terminal)
    assert process.returncode == 130, shown
    assert b"Traceback" not in shown and b"the run is incomplete: interrupted at " in shown
    assert "(incomplete: interrupted at " in out
    trajectory = read_trajectory(tmp_path / "run.h5")
    assert not trajectory.complete and 1 < len(trajectory) < 200_000
    assert sorted(os.listdir(tmp_path)) == ["case.toml", "run.h5", "small.toml"]
