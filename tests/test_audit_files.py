"""The audit as a command: its table, JSON, rows, figure and repaired mechanism."""

import csv
import json
import tomllib
from pathlib import Path
from typing import Any

import numpy as np
import pytest

import audited
from bothways import InputError, audit, build_mechanism, plots, read_mechanism
from bothways.audit import as_json, repaired, repaired_text, summary, write_rows
from bothways.audit.report import as_csv
from bothways.cli import main
from bothways.mechanism.toml_writer import to_toml


@pytest.fixture(scope="module")
def spoilt() -> Any:
    """An audit with findings of several kinds: an open join, a published reverse, steps published one way."""
    def spoil(document: dict[str, Any]) -> None:
        audited.rows(document, "OH")[1][5] += 2500.0
        audited.entry(document, "H + O2 ⇌ O + OH").update(published_reverse={"A": 1e13})
        for equation in ("O + H2 ⇌ H + OH", "HO2 + H ⇌ 2 OH"):  # K below 1, and K large
            audited.entry(document, equation).update(published_one_way=True)
    return audited.audited(spoil)


def command(capsys: pytest.CaptureFixture[str], *arguments: str) -> tuple[int, str, str]:
    status = main(["audit", *arguments])
    out, err = capsys.readouterr()
    return status, out, err


# ---- the table


def test_the_table_is_worst_first_and_explains_what_it_shows(spoilt: Any) -> None:
    text = summary(spoilt)
    assert text.index("error ") < text.index("warning ") and "open join: at 1000 K" in text
    assert "what 'open join' means" in text and "what 'entropy' means" not in text and "Source:" not in text
    assert max(map(len, text.splitlines())) <= 130
    assert "1 reverse constant: " in text


def test_notices_are_counted_and_shown_with_all(spoilt: Any) -> None:
    counts = spoilt.counts
    short, whole = summary(spoilt), summary(spoilt, every=True)
    assert "not shown (--all shows them)" in short and "not shown" not in whole and "Source:" in whole
    assert whole.count("\nnotice ") == counts["notice"] > 0 and short.count("\nnotice ") == 0


def test_the_table_of_a_sound_mechanism() -> None:
    text = summary(audited.audited())
    assert "0 errors, 0 warnings, 0 notices" in text and len(text.splitlines()) < 6


def test_command(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, err = command(capsys, "thermal-no")
    assert status == 0 and out.startswith("thermal-no: 8 species, 6 reactions, ideal gas\n") and err == ""
    status, out, _ = command(capsys, "methane", "--range", "1000 K", "1500", "--pressures", "2 bar", "1e5")
    assert "1000 to 1500 K; 1, 2 bar" in out and status == int("0 errors" not in out)
    assert command(capsys, "methane")[0] == 1  # it has errors


@pytest.mark.parametrize("arguments, text", [
    (["methan"], "methane"), (["methane", "--range", "300"], "expected 2 arguments"),
    (["methane", "--range", "2500", "300"], "working range"), (["methane", "--range", "300", "hot"], "--range"),
    (["methane", "--pressures", "1 K"], "--pressures"), (["methane", "--rows", "rows.txt"], ".csv or .h5"),
    (["methane", "--plot", "a.bmp"], ".png"), (["methane", "--rows", "no/folder/a.csv"], "no folder"),
    (["methane", "--rows", "a.csv", "--repair", "a.csv"], "two results")])
def test_refusals(capsys: pytest.CaptureFixture[str], tmp_path: Path, monkeypatch: pytest.MonkeyPatch, arguments: list[str],
                  text: str) -> None:
    monkeypatch.chdir(tmp_path)
    status, out, err = command(capsys, *arguments)
    assert status == 2 and out == "" and text in err and err.count("\n") == 1 and not list(tmp_path.iterdir())


def test_nothing_is_overwritten_unasked(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    rows = tmp_path / "rows.csv"
    rows.write_text("mine")
    assert command(capsys, "thermal-no", "--rows", str(rows))[0] == 2 and rows.read_text() == "mine"
    assert command(capsys, "thermal-no", "--rows", str(rows), "--replace")[0] == 0 and rows.read_text() != "mine"


def test_the_mechanism_itself_is_never_overwritten(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    path = tmp_path / "mine.toml"
    path.write_text(to_toml(audited.sound()))
    before = path.read_text()
    status, _, err = command(capsys, str(path), "--repair", str(path), "--replace")
    assert status == 2 and "needed for something else" in err and path.read_text() == before


# ---- for machines


def test_json(capsys: pytest.CaptureFixture[str], spoilt: Any) -> None:
    status, out, _ = command(capsys, "methane", "--json")
    content = json.loads(out)
    assert status == 1 and content["counts"]["error"] > 0 and content["mechanism"] == "methane"
    assert content["temperatures"] == [300.0, 2500.0] and content["agreement"]["within 2"] is None
    assert json.loads(as_json(spoilt))["findings"] == list(spoilt)


def test_rows_as_csv(spoilt: Any, tmp_path: Path) -> None:
    write_rows(spoilt, tmp_path / "rows.csv")
    rows = list(csv.DictReader((tmp_path / "rows.csv").open(encoding="utf-8")))
    assert len(rows) == len(spoilt) and rows[0]["kind"] == spoilt[0]["kind"]
    assert float(rows[0]["temperature / K"]) == spoilt[0]["temperature"] and rows[0]["pressure / Pa"] == ""
    assert as_csv(spoilt) == (tmp_path / "rows.csv").read_text(encoding="utf-8")


@pytest.mark.parametrize("engine", ["h5netcdf", "netcdf4"])
def test_rows_as_hdf5_open_in_xarray(spoilt: Any, tmp_path: Path, engine: str) -> None:
    import xarray

    write_rows(spoilt, tmp_path / "rows.h5")
    with xarray.open_dataset(tmp_path / "rows.h5", engine=engine) as data:
        assert data.sizes == {"finding": len(spoilt)} and data.temperature.attrs["units"] == "K"
        assert list(data.kind.values) == [row["kind"] for row in spoilt]
        expected = [np.nan if row["decades"] is None else row["decades"] for row in spoilt]
        assert data.decades.values == pytest.approx(expected, nan_ok=True)


# ---- the figure


def test_figure(spoilt: Any, tmp_path: Path) -> None:
    plots.save_audit_figure(spoilt, tmp_path / "audit.png")
    assert (tmp_path / "audit.png").stat().st_size > 10_000
    figure = plots.audit_figure(spoilt)
    top, parity, jumps = figure.axes
    counted = sum(patch.get_height() for patch in top.patches)
    assert 0 < counted <= 2 * len(audited.sound()["reaction"])
    assert len(parity.lines) == 4 and sum(p.get_height() for p in jumps.patches) > 0
    with pytest.raises(InputError, match="exists already"):
        plots.save_audit_figure(spoilt, tmp_path / "audit.png")


def test_figure_of_a_mechanism_without_reactions_or_joins() -> None:
    document = audited.sound() | {"reaction": []}
    for species in document["species"].values():
        species["potential"] = {"form": "constant heat capacity", "at": 298.15, "H": 0.0, "S": 60.0, "cp": 8.0}
    texts = [t.get_text() for a in plots.audit_figure(audit(build_mechanism(document))).axes for t in a.texts]
    assert "no reverse constants are published" in texts and "no range joins" in texts


# ---- the repair


def test_repair_closes_the_joins_and_touches_nothing_else() -> None:
    mechanism = read_mechanism("n-alkanes")
    document, changes = repaired(mechanism)
    before = mechanism.to_dict()
    moved = {}
    for name, species in document["species"].items():
        old, new = before["species"][name]["potential"]["a"], species["potential"]["a"]
        assert new[0] == old[0] and [row[:5] for row in new] == [row[:5] for row in old]
        if new != old:
            moved[name] = sum(a != b for row, other in zip(new, old, strict=True) for a, b in zip(row, other, strict=True))
            species["potential"]["a"] = old
    assert document == before and sum(moved.values()) == len(changes) > 46  # h and s of 23 species and more
    assert all("of the range above" in change.text and change.before != change.after for change in changes)
    fresh = build_mechanism(repaired(mechanism)[0] | {"mechanism": before["mechanism"] | {"joins": "as published"}})
    assert not [row for row in audit(fresh).findings if row.kind in ("open join", "jump of K") and "error" in row.severity]
    assert max(row.value for row in audit(fresh).of("open join")) < 1e-4  # what is left are jumps of cp
    assert repaired(fresh)[1] == ()


@pytest.mark.parametrize("form, a, constants", [
    ("NASA 9-coefficient", [[0, 0, 4, 1e-3, 0, 0, 0, -30000, 2], [0, 0, 4, 1e-3, 0, 0, 0, -29000, 1]], (7, 8)),
    ("Shomate", [[30, 7, 0, 0, 0.1, -250, 223, -241], [30, 7, 0, 0, 0.1, -260, 213, -241]], (5, 6))])
def test_repair_of_other_forms(form: str, a: list[list[float]], constants: tuple[int, int]) -> None:
    """Both ranges have the same heat capacity, so closed they are the same."""
    document = audited.sound()
    document["species"]["H2O"]["potential"] = {"form": form, "T": [300.0, 1000.0, 3000.0], "a": a}
    mended, changes = repaired(build_mechanism(document))
    new = mended["species"]["H2O"]["potential"]["a"]
    assert np.array(new[1]) == pytest.approx(np.array(a[0], dtype=float), rel=1e-12) and len(changes) == 2
    assert [k for k, (x, y) in enumerate(zip(new[1], a[1], strict=True)) if x != y] == list(constants)


def test_repair_of_three_ranges_moves_each_upper_one() -> None:
    document = audited.sound()
    row = [3.5, 1e-3, 0.0, 0.0, 0.0]
    a = [[*row, -30000.0, 2.0], [*row, -29000.0, 1.0], [*row, -30000.0, 2.0]]
    document["species"]["H2O"]["potential"] = {"form": "NASA 7-coefficient", "T": [300.0, 800.0, 1500.0, 3000.0], "a": a}
    mended, changes = repaired(build_mechanism(document))
    assert np.array(mended["species"]["H2O"]["potential"]["a"]) == pytest.approx(np.array([a[0]] * 3), rel=1e-12)
    assert [c.entry for c in changes if abs(c.after - c.before) > 1e-9] == ["species.H2O.potential.a[2]"] * 2


def test_repaired_text_keeps_comments_and_spelling() -> None:
    mechanism = read_mechanism("n-alkanes")
    original = Path(str(mechanism.file)).read_text(encoding="utf-8")
    text, changes = repaired_text(mechanism, original)
    differ = [(a, b) for a, b in zip(original.splitlines(), text.splitlines(), strict=True) if a != b]
    assert len(differ) == len({change.entry for change in changes})
    assert all(a.split("a =")[0] == b.split("a =")[0] for a, b in differ)
    assert tomllib.loads(text) == repaired(mechanism)[0]


def test_repaired_text_of_a_file_spelt_otherwise() -> None:
    """A quoted name under a sub-table, numbers with underscores: found all the same; a text that is no match: written anew."""
    document = audited.sound()
    audited.rows(document, "OH")[1][5] += 100.0
    mechanism = build_mechanism(document)
    text = to_toml(document).replace("[species.OH", "[species.\"OH\"")
    edited, changes = repaired_text(mechanism, text)
    assert '[species."OH"' in edited and tomllib.loads(edited) == repaired(mechanism)[0] and len(changes) == 2
    assert tomllib.loads(repaired_text(mechanism, "# nothing")[0]) == repaired(mechanism)[0]
    assert tomllib.loads(repaired_text(mechanism, None)[0]) == repaired(mechanism)[0]


def test_repair_command(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    out_file = tmp_path / "closed.toml"
    status, out, _ = command(capsys, "c1-c4", "--repair", str(out_file))
    assert status == 1 and "a6 of the range above 1000 K from" in out
    assert "open join" not in {row.kind for row in audit(read_mechanism(out_file)).findings if row.severity != "notice"}
