"""Faults of a file as such: TOML syntax with line, column and hint; missing, misnamed and unreadable files."""

from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from bothways import BothwaysError, read_mechanism
from bothways import build_mechanism as build
from bothways.mechanism.toml_reader import parse_toml
from refusals import MECHANISM, Refusals, changed, row


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def check(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, *changes))
    refusals.refused("small.toml", entry, *texts)


# ---- syntax

SYNTAX = [
    row("inline table over two lines", '{ law = "Arrhenius", A = 1e16,', '{ law = "Arrhenius",\n A = 1e16,',
        "line 48, column 31", "TOML syntax", "an inline table { … } stands on one line, without a comma before }"),
    row("trailing comma", "n = -1.0 }", "n = -1.0, }", "line 48, column 52", "TOML syntax", "without a comma before }"),
    row("plus in a key", '[species."Q+"]', "[species.Q+]", "line 40, column 11", "TOML syntax",
        "a key with ( ) + * ‡ , / or a space needs quotes"),
    row("asterisks in a key", '"T***" = 150.0', "T*** = 150.0", "line 62, column 23", "TOML syntax",
        "a key with ( ) + * ‡ , / or a space needs quotes"),
    row("bracket in a key", "[species.O]", "[species.O(D)]", "line 36, column 11", "a key with ( )",
        "needs quotes, such as"),
    row("space in a key", "O2 = 2.0,", "O 2 = 2.0,", "line 47, column 28", "needs quotes"),
    row("letters beyond ASCII in a key", "joins =", "Übergänge =", "line 6, column 1", "needs quotes"),
    row("key twice", 'name = "small"', 'name = "small"\nname = "large"', "line 3, column 15", "TOML syntax",
        "stands twice"),
    row("table twice", "[species.O]", "[species.Q2]", "line 36, column 12", "TOML syntax", "stands twice"),
    row("inline and under a header", "[[reaction]]\nequation = \"Q2",
        '[reaction.forward]\nlaw = "x"\n[[reaction]]\nequation = "Q2', "line 64, column 18",
        "both as { … } and under a [table] header; what follows a header belongs to it"),
    row("text without quotes", 'joins = "closed"', "joins = closed", "line 6, column 9", "a text needs quotes"),
    row("unit without quotes", '"1 bar"', "1 bar", "line 4, column 23",
        "a quantity with its unit is a text and needs quotes"),
    row("Fortran exponent", "A = 8e13", "A = 8d13", "line 53, column 37", "numbers are written 5.0, 0.5 or 1e13"),
    row("no digit before the point", "n = 0.3", "n = .3", "line 60, column 25", "numbers are written 5.0, 0.5 or 1e13"),
    row("no value", 'joins = "closed"', "joins =", "line 6, column 8", "state a value for 'joins'"),
    row("no equals sign", 'joins = "closed"', "joins", "line 6, column 6", "a line holds key = value"),
    row("colon", 'joins = "closed"', 'joins: "closed"', "line 6, column 6", "key and value are joined by ="),
    row("two equals signs", 'joins = "closed"', 'joins == "closed"', "line 6, column 8", "joined by a single ="),
    row("comment of another language", 'joins = "closed"', "// joins", "line 6, column 1", "a comment begins with #"),
    row("quote not closed", 'joins = "closed"', 'joins = "closed', "line 6, column 16",
        "a quote or bracket that is not closed"),
    row("bracket not closed", '["invented"]', '["invented"', "line 9, column 1", "a quote or bracket that is not closed"),
    row("end within a value", MECHANISM[-50:], '"""', "end of the file", "a quote or bracket that is not closed"),
    row("backslash", 'joins = "closed"', 'joins = "a\\xb"', "line 6, column 13", "in \"…\" a backslash begins an escape"),
    row("True", "published_one_way = true", "published_one_way = True", "line 66, column 21",
        "true and false are written small"),
    row("a very long integer", "A = 8e13", f"A = {'9' * 5000}", "", "TOML syntax", "expected TOML 1.0",
        "very long numbers"),
    row("deep nesting", '["invented"]', "[" * 5000, "", "TOML syntax", "expected TOML 1.0", "deep nesting"),
]


@pytest.mark.parametrize("changes, entry, texts", SYNTAX)
def test_toml_syntax(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


def test_files_that_are_no_text(refusals: Refusals) -> None:
    refusals.write()
    (refusals.folder / "small.toml").write_bytes(b"name = \"\xff\"")
    refusals.refused("small.toml", "", "not a text in UTF-8 (byte 9)", "expected a TOML file")
    (refusals.folder / "small.toml").unlink()
    (refusals.folder / "small.toml").mkdir()
    refusals.refused("small.toml", "", "cannot be read: Is a directory", "expected a TOML file")


def test_byte_order_mark_and_line_ends_of_other_systems_are_read(tmp_path) -> None:
    path = tmp_path / "m.toml"
    path.write_bytes(b"\xef\xbb\xbf" + MECHANISM.replace("\n", "\r\n").encode())
    assert read_mechanism(path).document == parse_toml(MECHANISM)


# ---- names of files


def test_missing_mechanism_names_the_nearest(refusals: Refusals) -> None:
    refusals.write()
    for stated, found, near in (("smal.toml", "no such file (nearest: small.toml", "smal.toml"),
                                ("folder/x.toml", "no such file", "folder/x.toml")):
        text = (refusals.folder / "case.toml").read_text()
        (refusals.folder / "other.toml").write_text(text.replace("small.toml", stated))
        refusals.refused(near, "", found, "expected a TOML file", arguments=("run", "other.toml"))


@pytest.mark.parametrize("stated, near", [("hydrogen-oxigen", "nearest: hydrogen-oxygen"), ("small", "nearest: small.toml"),
                                          ("Methane", "nearest: methane"), ("zzz", "known: butene-isomers, c1-c4, case.toml")])
def test_missing_bundled_mechanism_names_the_nearest(refusals: Refusals, stated: str, near: str) -> None:
    refusals.write()
    path = refusals.folder / "case.toml"
    path.write_text(path.read_text().replace("small.toml", stated))
    refusals.refused("case.toml", "case.mechanism", f"no bundled mechanism and no file '{stated}' ({near}",
                     "expected a mechanism", "'bothways mechanisms' lists the bundled ones")


@pytest.mark.parametrize("stated", ["a\\u0000b.toml", "x" * 5000, "x" * 5000 + ".toml"])
def test_impossible_file_names(refusals: Refusals, stated: str) -> None:
    refusals.write()
    path = refusals.folder / "case.toml"
    path.write_text(path.read_text().replace("small.toml", stated))
    refusals.line("run", "case.toml")


def test_a_case_where_a_mechanism_is_expected(refusals: Refusals) -> None:
    refusals.write()
    path = refusals.folder / "case.toml"
    path.write_text(path.read_text().replace("small.toml", "case.toml"))
    refusals.refused("case.toml", "", "this is a case", "expected a mechanism")


# ---- damage anywhere


@settings(max_examples=200, deadline=None)
@given(st.data())
def test_any_damage_to_the_text_is_accepted_or_refused_by_one_line(data: st.DataObject) -> None:
    start = data.draw(st.integers(0, len(MECHANISM)))
    cut, new = data.draw(st.integers(0, 30)), data.draw(st.text(max_size=8))
    try:
        build(parse_toml(MECHANISM[:start] + new + MECHANISM[start + cut :], "m.toml"), "m.toml")
    except BothwaysError as err:
        assert str(err).startswith("m.toml: ") and str(err).isprintable()
