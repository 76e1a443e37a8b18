"""The command line: help and usage, what goes to stdout and what to stderr, which files are written and which spared."""

import argparse
import os
import re
import shlex
import subprocess
import sys
from pathlib import Path
from typing import Any

import h5py
import numpy as np
import pytest

from bothways import InputError, bundled_cases, bundled_mechanisms, cli, read_case, read_trajectory, write_trajectory
from bothways.cli import _parser, main
from refusals import CASE, MECHANISM, Refusals, changed, meddled
from trajectories import made

VERBS = next(list(a.choices) for a in _parser()._actions if isinstance(a, argparse._SubParsersAction))


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def shell(*arguments: str, **options: Any) -> subprocess.CompletedProcess[str]:
    """The command in a process of its own."""
    command = [sys.executable, "-m", "bothways", *arguments]
    return subprocess.run(command, capture_output="stdout" not in options, text=True, timeout=300, check=False, **options)


# ---- help and usage


def help_of(capsys: pytest.CaptureFixture[str], *arguments: str) -> str:
    with pytest.raises(SystemExit) as done:
        main([*arguments, "--help"])
    assert done.value.code == 0
    out, err = capsys.readouterr()
    assert err == ""
    return out


@pytest.mark.parametrize("verb", [*VERBS, ""])
def test_help_shows_examples_that_can_be_parsed(capsys: pytest.CaptureFixture[str], verb: str) -> None:
    text = help_of(capsys, *filter(None, [verb]))
    examples = re.findall(r"^(?:example:)?\s*bothways (\S.*)$", text[text.index("example") :], re.MULTILINE)
    assert examples and all(verb in example for example in examples)
    for example in examples:
        _parser().parse_args(shlex.split(example))


def test_examples_name_bundled_cases(capsys: pytest.CaptureFixture[str]) -> None:
    texts = [help_of(capsys), help_of(capsys, "run")]
    names = re.findall(r"bothways run (\S+)", "".join(text[text.index("example") :] for text in texts))
    assert {name for name in names if not name.endswith(".toml")} <= set(bundled_cases())


def test_version_tells_where_it_is_installed(capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit) as done:
        main(["--version"])
    assert done.value.code == 0
    python = re.escape(sys.version.split()[0])
    assert re.fullmatch(rf"bothways \d+\.\d+\S* \(.*bothways, Python {python}\)\n", capsys.readouterr().out)


@pytest.mark.parametrize("arguments, text", [
    (["rnu"], r"invalid choice: 'rnu' \(choose from .*run.*mechanisms.*\); 'bothways --help' shows what is possible"),
    (["--verbose"], r"--verbose|required"),
    (["run"], r"the following arguments are required: CASE; 'bothways run --help' shows what is possible"),
    (["run", "case.toml", "--replac"], r"unrecognized arguments: --replac"),
    (["run", "case.toml", "--outptu", "x"], r"unrecognized arguments: --outptu x"),
    (["run", "case.toml", "--output"], r"argument --output: expected one argument; 'bothways run --help' shows"),
    (["run", "case.toml", "other.toml"], r"unrecognized arguments: other.toml"),
    (["mechanisms", "methane"], r"unrecognized arguments: methane")])
def test_wrong_usage(refusals: Refusals, arguments: list[str], text: str) -> None:
    refusals.write()
    assert re.search(text, refusals.line(*arguments))


def test_one_line_and_the_status_in_a_process_of_its_own(tmp_path: Path) -> None:
    done = shell("run", "hydrogen-ketle", cwd=tmp_path)
    assert (done.returncode, done.stdout, done.stderr.count("\n")) == (2, "", 1) and os.listdir(tmp_path) == []
    assert done.stderr.startswith("bothways: no bundled case and no file 'hydrogen-ketle' (nearest: hydrogen-kettle")


def test_no_verb(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sys, "argv", ["bothways"])
    assert main() == 2
    assert "the following arguments are required: COMMAND" in refusals.capsys.readouterr().err


def test_mechanisms_lists_what_is_bundled(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["mechanisms"]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    for name in (*bundled_mechanisms(), *bundled_cases()):
        assert re.search(rf"^{name} +", out, re.MULTILINE), name


# ---- a run that ends well


def test_run_prints_a_summary_and_writes_the_trajectory(refusals: Refusals) -> None:
    refusals.write()
    assert main(["run", "case.toml"]) == 0
    out, err = refusals.capsys.readouterr()
    assert out.startswith("case: small\n") and out.rstrip().endswith("run.h5") and err == ""
    trajectory = read_trajectory("run.h5")
    assert trajectory.complete and trajectory.reason == "" and set(os.listdir()) == {"small.toml", "case.toml", "run.h5"}


def test_replace_replaces(refusals: Refusals) -> None:
    refusals.write()
    (refusals.folder / "run.h5").write_text("old")
    assert main(["run", "case.toml", "--replace"]) == 0
    assert read_trajectory("run.h5").complete


def test_without_a_stated_file_the_output_is_named_after_the_case(refusals: Refusals) -> None:
    refusals.write(case=changed(CASE, ('file = "run.h5"\n', "")))
    assert main(["run", "case.toml"]) == 0
    assert read_trajectory("case.h5").complete


# ---- files to write


def test_existing_output_is_not_overwritten(refusals: Refusals) -> None:
    refusals.write()
    for name, arguments in (("run.h5", ()), ("other.h5", ("--output", "other.h5"))):
        (refusals.folder / name).write_text("of someone else")
        refusals.refused(name, "", "the file exists already; name another one, or say --replace",
                         arguments=("run", "case.toml", *arguments))


NEEDED = "this file is needed for something else; expected a file of its own to write; name another one"


@pytest.mark.parametrize("output, text", [
    ("no/such/run.h5", "there is no folder"), (".", "is no regular file"), ("small.toml", NEEDED), ("case.toml", NEEDED),
    ("/", "is no regular file"), ("", "is no regular file"), ("case.toml/run.h5", ""), ("x" * 300 + ".h5", "cannot be")])
@pytest.mark.parametrize("also", [(), ("--replace",), ("--replace", "--plot")])
def test_unwritable_output(refusals: Refusals, output: str, text: str, also: tuple) -> None:
    refusals.write()
    line = refusals.line("run", "case.toml", "--output", output, *also)
    assert text in line and "; " in line, line


def test_output_of_the_case_stands_beside_the_case(refusals: Refusals) -> None:
    refusals.write(case=changed(CASE, ('"run.h5"', '"no/such/run.h5"')))
    assert "there is no folder" in refusals.line("run", "case.toml")
    refusals.write(case=changed(CASE, ('"run.h5"', '"a\\u0000b.h5"')))
    refusals.refused("case.toml", "output.file", "holds '\\x00'")


@pytest.mark.parametrize("plot, text", [
    ("run.h5", NEEDED), ("x.bmp", "the suffix is '.bmp'"), ("no/such/x.png", "there is no folder"),
    ("old.png", "the file exists already"), ("plot", "the file name has no suffix")])
def test_unwritable_picture(refusals: Refusals, plot: str, text: str) -> None:
    refusals.write()
    (refusals.folder / "old.png").write_text("of someone else")
    line = refusals.line("run", "case.toml", "--plot", plot)
    assert text in line and "; " in line, line


def test_output_that_appears_during_the_run_is_not_overwritten(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    refusals.write()
    monkeypatch.setattr(cli.run, "run_and_judge", meddled(lambda steps: Path("run.h5").write_text("of someone else")))
    assert main(["run", "case.toml"]) == 2
    assert "run.h5: the file exists already" in refusals.capsys.readouterr().err
    assert Path("run.h5").read_text() == "of someone else"


PLOTS = [
    ((".",), "cannot be read (Is a directory); expected a trajectory written by bothways"),
    (("no.h5",), "no.h5: cannot be read (No such file or directory); expected a trajectory written by bothways"),
    (("case.toml",), "case.toml: is not an HDF5 file; expected a trajectory written by bothways"),
    (("run.h5", "--output", "x.bmp"), "x.bmp: the suffix is '.bmp'; expected .png"),
    (("run.h5", "--output", "no/x.png"), "there is no folder"),
    (("run.h5", "--output", "old.png"), "the file exists already"),
    (("run.png",), "run.png: this file is needed for something else"),
    (("run.png", "--replace"), "run.png: this file is needed for something else"),
    (("run.h5", "--output", "x.png", "--species", "Qx"), "unknown species 'Qx'; known: H2, H2O, O2"),
    (("run.h5", "--between", "1"), "argument --between: expected 2 arguments; 'bothways plot --help'"),
    (("run.h5", "--between", "0", "soon"), "--between: 'soon' is no time; expected a time such as"),
    (("run.h5", "--between", "0", "1 K"), "--between: '1 K' is no time; expected a time such as"),
    (("run.h5", "--between", "nan", "1"), "--between: 'nan' is not finite; expected two times"),
    (("run.h5", "--output", "x.png", "--between", "5", "6"), "nothing to draw between 5 s and 6 s; expected two times"),
    (("run.h5", "--linear", "--log"), "argument --log: not allowed with argument --linear"),
]


@pytest.mark.parametrize("arguments, text", PLOTS)
def test_what_cannot_be_plotted(refusals: Refusals, arguments: tuple[str, ...], text: str) -> None:
    refusals.write()
    for name in ("run.h5", "run.png"):
        write_trajectory(name, made(time=np.linspace(0.0, 1.0, 6)))
    Path("old.png").write_text("of someone else")
    line = refusals.line("plot", *arguments)
    assert text in line and "; " in line, line


def test_trajectories_of_other_programs_are_refused(tmp_path: Path) -> None:
    for name, content in (("text.h5", b"time,temperature\n0,1000\n"), ("empty.h5", b"")):
        (tmp_path / name).write_bytes(content)
        with pytest.raises(InputError, match=rf"{name}: is not an HDF5 file; expected a trajectory written by bothways"):
            read_trajectory(tmp_path / name)
    with h5py.File(tmp_path / "foreign.h5", "w") as file:
        file["time"] = np.arange(3.0)
        file.attrs["Conventions"] = "CF-1.11"
    with pytest.raises(InputError, match=r"foreign.h5: .*'CF-1.11'; expected .*a trajectory written by bothways"):
        read_trajectory(tmp_path / "foreign.h5")


# ---- output that cannot be shown, faults of our own


def test_a_reader_that_has_seen_enough_is_no_failure(tmp_path: Path) -> None:
    reading, writing = os.pipe()
    os.close(reading)
    done = shell("mechanisms", stdout=writing, stderr=subprocess.PIPE)
    os.close(writing)
    assert (done.returncode, done.stderr) == (0, "")


@pytest.mark.skipif(not os.path.exists("/dev/full"), reason="no device that is always full")
def test_a_full_disk_behind_stdout() -> None:
    with open("/dev/full", "w") as full:
        done = shell("mechanisms", stdout=full, stderr=subprocess.PIPE)
    assert done.returncode == 2
    assert done.stderr == "bothways: output: No space left on device; expected a file or device that can be used\n"


def test_characters_that_a_terminal_lacks(tmp_path: Path) -> None:
    (tmp_path / "small.toml").write_text(MECHANISM, encoding="utf-8")
    (tmp_path / "case.toml").write_text(CASE.replace('"small"', '"μ ⇌"'), encoding="utf-8")
    done = shell("run", "case.toml", cwd=tmp_path, env=os.environ | {"PYTHONIOENCODING": "ascii", "PYTHONUTF8": "0"})
    assert done.returncode == 0 and done.stdout.startswith("case: \\u03bc \\u21cc\n") and done.stderr == ""


def test_a_fault_of_the_program_is_one_line_unless_asked_for(refusals: Refusals, monkeypatch: pytest.MonkeyPatch) -> None:
    refusals.write()
    monkeypatch.setattr(cli.run, "read_case", lambda name: 1 / 0)
    line = refusals.line("run", "case.toml", status=4)
    assert line.startswith("a fault of the program: ZeroDivisionError: division by zero; expected ") and "report it" in line
    monkeypatch.setenv("BOTHWAYS_TRACEBACK", "1")
    with pytest.raises(ZeroDivisionError):
        main(["run", "case.toml"])


def test_read_case_of_a_bundled_name() -> None:
    assert read_case("hydrogen-kettle").mechanism.name == "hydrogen-oxygen"
