"""Figures as files, and the command that draws them."""

import struct
import subprocess
import sys
import xml.etree.ElementTree

import matplotlib
import pytest

from bothways import cli, plots
from bothways.errors import InputError
from bothways.plots import saving
from courses import decay, ignition
from trajectories import written

# Settings and files


def test_the_callers_settings_neither_matter_nor_change(tmp_path):
    plots.save_course(decay(), tmp_path / "a.svg")
    with matplotlib.rc_context({"font.size": 31.0, "lines.linewidth": 9.0, "axes.grid": True, "svg.fonttype": "none"}):
        plots.save_course(decay(), tmp_path / "b.svg")
        assert matplotlib.rcParams["font.size"] == 31.0
    assert (tmp_path / "a.svg").read_bytes() == (tmp_path / "b.svg").read_bytes()


def test_needs_no_display_and_no_global_figures():
    code = "import sys, bothways.plots; sys.exit('matplotlib.pyplot' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0


def test_the_package_has_its_plots_but_loads_them_when_first_used():
    code = "import sys, bothways; early = 'matplotlib' in sys.modules; bothways.plots.course; sys.exit(early)"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0


@pytest.mark.parametrize("width, pixels", [("page", 180 / 25.4 * 300), ("column", 85 / 25.4 * 300)])
def test_png_has_the_width_at_300_dpi(tmp_path, width, pixels):
    plots.save_course(decay(), tmp_path / "x.png", width=width)
    content = (tmp_path / "x.png").read_bytes()
    assert content.startswith(b"\x89PNG\r\n\x1a\n") and content.endswith(b"IEND\xaeB`\x82")
    assert abs(struct.unpack(">I", content[16:20])[0] - pixels) <= 1


def test_svg_and_pdf_are_whole(tmp_path):
    plots.save_course(decay(), tmp_path / "x.svg")
    plots.save_course(decay(), tmp_path / "x.PDF")
    assert xml.etree.ElementTree.parse(tmp_path / "x.svg").getroot().tag.endswith("svg")
    pdf = (tmp_path / "x.PDF").read_bytes()
    assert pdf.startswith(b"%PDF") and pdf.rstrip().endswith(b"%%EOF")


@pytest.mark.parametrize("suffix", ["png", "svg", "pdf"])
def test_existing_file_is_refused_unless_to_be_replaced_and_then_the_same(tmp_path, suffix):
    path = tmp_path / f"x.{suffix}"
    path.write_text("mine")
    with pytest.raises(InputError, match=r"exists already.*--replace"):
        plots.save_course(decay(), path)
    assert path.read_text() == "mine"
    plots.save_course(decay(), path, replace=True)
    first = path.read_bytes()
    plots.save(plots.course(decay()), path, replace=True)
    assert path.read_bytes() == first != b"mine"


@pytest.mark.parametrize("name, found", [("x.gif", "the suffix is '.gif'; expected .png, .svg, .pdf"),
                                         ("x", "the file name has no suffix; expected .png, .svg, .pdf"),
                                         ("there.png", "exists already"), ("no/x.png", "there is no folder")])
def test_file_that_cannot_be_written_is_refused_before_drawing(tmp_path, name, found, monkeypatch):
    (tmp_path / "there.png").write_text("mine")
    monkeypatch.setattr("bothways.plots.timecourse.course", lambda *a, **k: pytest.fail("drawn"))
    with pytest.raises(InputError, match=found):
        plots.save_course(decay(), tmp_path / name)


def test_failure_leaves_no_file(tmp_path, monkeypatch):
    def fail(*_, **__):
        raise KeyboardInterrupt

    monkeypatch.setattr(saving, "write_whole", fail)
    with pytest.raises(KeyboardInterrupt):
        plots.save_course(decay(), tmp_path / "x.png")
    assert not list(tmp_path.iterdir())


def test_unknown_width_is_refused():
    with pytest.raises(InputError, match="unknown width 'wide'; expected page or column"):
        plots.course(decay(), width="wide")


# Command line


def test_command_draws_beside_the_trajectory(tmp_path, capsys):
    run = written(tmp_path / "run.h5", ignition())
    assert cli.main(["plot", str(run), "--column", "--species", "H2", "OH", "--log"]) == 0
    assert capsys.readouterr().out == f"{tmp_path / 'run.png'}\n"
    assert (tmp_path / "run.png").read_bytes().startswith(b"\x89PNG")


def test_command_passes_its_options(tmp_path, monkeypatch):
    seen = {}
    monkeypatch.setattr(plots, "save_course", lambda run, path, **how: seen.update(how, path=path))
    run = written(tmp_path / "run.h5", decay())
    assert cli.main(["plot", str(run), "--output", str(tmp_path / "o.svg"), "--between", "0.5", "2 min", "--linear",
                     "--replace", "--species", "H2", "--column"]) == 0
    assert seen == {"path": tmp_path / "o.svg", "between": (0.5, 120.0), "time_axis": "linear", "replace": True,
                    "species": ["H2"], "width": "column"}


def test_command_replaces_only_if_asked(tmp_path, capsys):
    run = written(tmp_path / "run.h5", decay())
    (tmp_path / "run.png").write_text("mine")
    assert cli.main(["plot", str(run)]) == 2 and "exists already" in capsys.readouterr().err
    assert (tmp_path / "run.png").read_text() == "mine"
    assert cli.main(["plot", str(run), "--replace"]) == 0 and (tmp_path / "run.png").read_bytes()[1:4] == b"PNG"


@pytest.mark.parametrize("options, message", [
    (["--species", "H22"], "unknown species 'H22'; nearest: H2"),
    (["--between", "1 kg", "2"], "--between: '1 kg' is no time; expected a time"),
    (["--between", "3", "2"], "nothing to draw between 3 s and 2 s"),
    (["--output", "x.bmp"], "x.bmp: the suffix is '.bmp'"),
])
def test_command_reports_bad_input_in_one_line(tmp_path, capsys, monkeypatch, options, message):
    monkeypatch.chdir(tmp_path)
    run = written(tmp_path / "run.h5", decay())
    assert cli.main(["plot", str(run), *options]) == 2
    error = capsys.readouterr().err
    assert message in error and error.count("\n") == 1
    assert [path.name for path in tmp_path.iterdir()] == ["run.h5"]
