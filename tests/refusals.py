"""A small invented mechanism and case as texts, and what every refusal of the command line must be like.

No such element Q, species or reactions exist and no number is measured.
"""

import signal
from collections.abc import Callable
from pathlib import Path
from typing import Any

import h5py
import pytest

from bothways import batch, read_trajectory
from bothways.cli import main

MECHANISM = """\
[mechanism]
name = "small"
phase = "ideal gas"
standard_pressure = "1 bar"
units = ["cm", "mol", "s", "kJ/mol"]
joins = "closed"
sources = ["invented"]

[elements]
Q = "10 g/mol"

[species.Q]
formula = "Q"
source = "invented"
potential = { form = "constant heat capacity", at = 298.15, H = 200.0, S = 0.12, cp = 0.021 }

[species.Q2]
composition = { Q = 2 }
collision_diameter = "3 Å"
[species.Q2.potential]
form = "NASA 7-coefficient"
T = [300.0, 1000.0, 3000.0]
a = [
  [3.3, 9e-4, -1.2e-6, 8e-10, -1.5e-13, -1014.8, 3.4],
  [3.1, 6.5e-4, -5e-8, -9e-12, 1.6e-15, -901.203, 4.6883],
]

[species.O2]
formula = "O2"
potential = { form = "constant heat capacity", at = 298.15, H = 0.0, S = 0.205, cp = 0.03 }

[species.QO]
formula = "QO"
potential = { form = "constant heat capacity", at = 298.15, H = 90.0, S = 0.21, cp = 0.03 }

[species.O]
formula = "O"
potential = { form = "constant heat capacity", at = 298.15, H = 249.0, S = 0.161, cp = 0.0215 }

[species."Q+"]
formula = "Q"
charge = 1
potential = { form = "constant heat capacity", at = 298.15, H = 1200.0, S = 0.12, cp = 0.021 }

[[reaction]]
equation = "2 Q + M ⇌ Q2 + M"
collision_efficiency = { O2 = 2.0, Q2 = 0.0 }
forward = { law = "Arrhenius", A = 1e16, n = -1.0 }

[[reaction]]
equation = "Q + O2 ⇌ QO + O"
published_reverse = { A = 3e13, Ea = 20.0 }
forward = { law = "Arrhenius", A = 8e13, n = 0.1, Ea = 82.0 }

[[reaction]]
equation = "Q + O ⇌ QO"
source = "invented"
[reaction.forward]
law = "Troe"
k_inf = { A = 5e13, n = 0.3 }
k_0 = { A = 6e18, n = -1.8, Ea = 2.0 }
F_cent = { a = 0.62, "T***" = 150.0, "T*" = 2100.0, "T**" = 5000.0 }

[[reaction]]
equation = "Q2 + O2 ⇌ 2 QO"
published_one_way = true
forward = [
  { law = "Arrhenius", A = 9e12, Ea = 90.0 },
  { law = "Arrhenius", A = -2e12, Ea = 94.0 },
]
"""

CASE = """\
[case]
title = "small"
mechanism = "small.toml"

[vessel]
heat = "adiabatic"
holds = "volume"
volume = "1 L"
thermal_inertia = 1.2

[start]
temperature = "1200 K"
pressure = "1 atm"
mole_ratio = { Q = 0.1, O2 = 1 }

[until]
time = "1 us"

[solver]
rtol = 1e-6
atol = 1e-12

[output]
file = "run.h5"
also_at = ["0.1 us", 5e-7]
"""


R1, R2, R3, R4 = ("reaction 1 '2 Q + M ⇌ Q2 + M'", "reaction 2 'Q + O2 ⇌ QO + O'", "reaction 3 'Q + O ⇌ QO'",
                  "reaction 4 'Q2 + O2 ⇌ 2 QO'")
"""How an error names the reactions."""
CONSTANT_Q = 'potential = { form = "constant heat capacity", at = 298.15, H = 200.0, S = 0.12, cp = 0.021 }'
ARRHENIUS_2 = 'forward = { law = "Arrhenius", A = 8e13, n = 0.1, Ea = 82.0 }'


def row(name: str, old: str, new: str, entry: str, *texts: str) -> Any:
    """A parameter set: what is replaced by what, the entry that the error names, texts it holds in this order."""
    return pytest.param(((old, new),), entry, texts, id=name)


def changed(text: str, *changes: tuple[str, str]) -> str:
    """The text with each `old` replaced by `new`; old must stand in it once."""
    for old, new in changes:
        assert text.count(old) == 1, f"{text.count(old)} times in the text: {old}"
        text = text.replace(old, new)
    return text


def meddled(with_step: Callable[[int], Any]) -> Callable[..., Any]:
    """The command's `run_and_judge`, but every step is told to `with_step` first."""
    def run_and_judge(case: Any, told: Callable[..., None]) -> Any:
        def both(steps: int, t: float, temperature: float) -> None:
            with_step(steps)
            told(steps, t, temperature)

        return batch.run_and_judge(case, both)

    return run_and_judge


class Refusals:
    """Runs the command line in a folder of its own; see `line`."""

    def __init__(self, folder: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> None:
        self.folder, self.capsys = folder, capsys
        monkeypatch.chdir(folder)
        monkeypatch.delenv("BOTHWAYS_TRACEBACK", raising=False)

    def write(self, mechanism: str = MECHANISM, case: str = CASE) -> None:
        """The two files of a run."""
        (self.folder / "small.toml").write_text(mechanism, encoding="utf-8")
        (self.folder / "case.toml").write_text(case, encoding="utf-8")

    def content(self) -> dict[str, bytes]:
        """Every file of the folder."""
        return {str(p): p.read_bytes() for p in sorted(self.folder.rglob("*")) if p.is_file()}

    def line(self, *arguments: str, status: int = 2) -> str:
        """The one line on stderr of a command that must fail and leave the folder as it is."""
        before = self.content()
        self.capsys.readouterr()
        assert main(list(arguments) or ["run", "case.toml"]) == status
        out, err = self.capsys.readouterr()
        assert self.content() == before, "something was written"
        assert out == ""
        assert err.startswith("bothways: ") and err.endswith("\n") and err.count("\n") == 1, err
        assert "Traceback" not in err
        assert err[:-1].isprintable(), "control characters"
        return err.removeprefix("bothways: ").rstrip("\n")

    def refused(self, file: str, entry: str, *texts: str, arguments: tuple[str, ...] = ()) -> str:
        """The line names file and entry, tells found and expected or remedy, and holds the texts in this order."""
        line = self.line(*arguments)
        place = f"{file}: {entry}: " if entry else f"{file}: "
        assert line.startswith(place), line
        assert "; " in line.removeprefix(place), f"neither what was expected nor a remedy: {line}"
        position = 0
        for text in texts:
            found = line.find(text, position)
            assert found >= 0, f"'{text}' is missing (or out of order) in: {line}"
            position = found + len(text)
        return line


def assert_kept(refusals: Refusals, status: int, reason: str) -> str:
    """The run ended with `status`; run.h5 is incomplete for that reason. Returns the last line on stderr."""
    assert main(["run", "case.toml"]) == status
    out, err = refusals.capsys.readouterr()
    trajectory = read_trajectory("run.h5")
    assert not trajectory.complete and reason in trajectory.reason
    with h5py.File("run.h5") as file:
        assert file.attrs["complete"] == 0
    assert "(incomplete: " in out and "Traceback" not in err
    last = err.splitlines()[-1]
    assert last.startswith("bothways: case.toml: the run is incomplete: ") and reason in last
    assert "; run.h5 holds it up to there (complete = 0); " in last
    return last


def interrupting(at: int, times: int = 1) -> Callable[[int], None]:
    """For `meddled`: Ctrl-C, so many times, at that step."""
    def with_step(steps: int) -> None:
        if steps == at:
            for _ in range(times):
                signal.raise_signal(signal.SIGINT)

    return with_step
