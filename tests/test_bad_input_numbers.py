"""Wrong numbers in a mechanism: none, infinite, of the wrong sign or unit, out of order, and laws that fail over a range."""

import math
from pathlib import Path

import numpy as np
import pytest

from bothways import InputError
from bothways import build_mechanism as build
from bothways.mechanism.toml_reader import parse_toml
from refusals import ARRHENIUS_2, MECHANISM, R1, R2, R3, R4, Refusals, changed, row


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def check(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, *changes))
    refusals.refused("small.toml", entry, *texts)


# ---- numbers

NUMBERS = {  # path in the document: what may stand there
    ("elements", "Q"): "positive",
    ("species", "Q", "potential", "at"): "positive",
    ("species", "Q", "potential", "H"): "any",
    ("species", "Q", "potential", "S"): "any",
    ("species", "Q2", "potential", "T", 0): "row",
    ("species", "Q2", "potential", "a", 1, 3): "row",
    ("species", "Q2", "composition", "Q"): "positive",
    ("species", "Q2", "collision_diameter"): "positive",
    ("species", "Q+", "charge"): "any",
    ("species", "Q2", "well_depth"): "positive",
    ("species", "Q2", "standard_pressure"): "positive",
    ("reaction", 1, "forward", "T_ref"): "positive",
    ("reaction", 2, "forward", "k_inf", "Ea"): "any",
    ("mechanism", "standard_pressure"): "positive",
    ("reaction", 0, "collision_efficiency", "O2"): "not negative",
    ("reaction", 0, "forward", "A"): "positive",
    ("reaction", 0, "forward", "n"): "any",
    ("reaction", 1, "forward", "Ea"): "any",
    ("reaction", 1, "published_reverse", "A"): "positive",
    ("reaction", 1, "published_reverse", "Ea"): "any",
    ("reaction", 2, "forward", "k_inf", "A"): "positive",
    ("reaction", 2, "forward", "k_0", "A"): "positive",
    ("reaction", 2, "forward", "k_0", "n"): "any",
    ("reaction", 2, "forward", "F_cent"): "positive",
    ("reaction", 2, "forward", "F_cent", "a"): "any",
    ("reaction", 2, "forward", "F_cent", "T***"): "positive",
    ("reaction", 2, "forward", "F_cent", "T*"): "positive",
    ("reaction", 2, "forward", "F_cent", "T**"): "any",
    ("reaction", 3, "forward", 1, "A"): "not zero",
}
WRONG = {"any": [], "row": [], "not zero": [0, 0.0], "not negative": [-1, -1e-300], "positive": [0, 0.0, -0.0, -2, -1e-300]}


def restated(path: tuple, value: object) -> dict:
    """The document of the mechanism with one value replaced."""
    document = parse_toml(MECHANISM)
    place = document
    for key in path[:-1]:
        place = place[key]
    place[path[-1]] = value
    return document


def place_of(path: tuple) -> str:
    """How a line names the place: species and reactions by their names, terms and rows by their numbers."""
    names = {0: R1, 1: R2, 2: R3, 3: R4}
    parts = [names[path[1]], *path[2:]] if path[0] == "reaction" else list(path)
    text = "".join(f"[{p + 1}]" if isinstance(p, int) else f".{p}" for p in parts).removeprefix(".")
    return text.rpartition("[")[0] if isinstance(path[-1], int) else text


@pytest.mark.parametrize("path", NUMBERS, ids=lambda path: ".".join(map(str, path)))
@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf, 10**400, True, "x", [1.0], "nan", "inf K"])
def test_number_that_is_none(path: tuple, value: object) -> None:
    with pytest.raises(InputError) as caught:
        build(restated(path, value), "m.toml")
    line = str(caught.value)
    assert line.startswith(f"m.toml: {place_of(path)}: "), line
    assert "; expected " in line, line
    if not isinstance(value, str):
        assert "is not a finite number" in line or "is not a list" in line, line


@pytest.mark.parametrize("path, value", [(path, v) for path, sign in NUMBERS.items() for v in WRONG[sign]])
def test_number_of_the_wrong_sign(path: tuple, value: float) -> None:
    with pytest.raises(InputError) as caught:
        build(restated(path, value), "m.toml")
    sign = {"positive": "a number above 0", "not zero": "a number other than 0",
            "not negative": "a number that is not negative"}[NUMBERS[path]]
    word = "negative" if value < 0 else "zero"
    assert str(caught.value) == f"m.toml: {place_of(path)}: {value!r} is {word}; expected {sign}; correct the value"


def test_numbers_of_numpy_are_numbers() -> None:
    mechanism = build(restated(("reaction", 1, "forward", "A"), np.float32(8.0)))
    assert mechanism.reactions[1].terms[0].law.A == pytest.approx(8e-6)
    build(restated(("species", "Q2", "composition", "Q"), np.int64(2)))


# ---- ranges and coefficients

RANGES = [
    row("temperatures out of order", "T = [300.0, 1000.0, 3000.0]", "T = [1000.0, 300.0, 3000.0]",
        "species.Q2.potential.T", "[1000.0, 300.0, 3000.0] does not rise, or not from 1 to 100000 K",
        "range boundaries in K, rising, n + 1 for n ranges"),
    row("a temperature twice", "T = [300.0, 1000.0, 3000.0]", "T = [300.0, 1000.0, 1000.0]", "species.Q2.potential.T",
        "does not rise"),
    row("from zero", "T = [300.0, 1000.0, 3000.0]", "T = [0.0, 1000.0, 3000.0]", "species.Q2.potential.T",
        "does not rise, or not from 1 to 100000 K"),
    row("beyond reason", "T = [300.0, 1000.0, 3000.0]", "T = [300.0, 1000.0, 3e6]", "species.Q2.potential.T",
        "[300.0, 1000.0, 3000000.0] does not rise, or not from 1 to 100000 K"),
    row("one temperature", "T = [300.0, 1000.0, 3000.0]", "T = [300.0]", "species.Q2.potential.T", "does not rise"),
    row("too few rows", "T = [300.0, 1000.0, 3000.0]", "T = [300.0, 1000.0, 2000.0, 3000.0]", "species.Q2.potential.a",
        "2 rows of coefficients; expected 3, one for each range of T"),
    row("too few coefficients", "-901.203, 4.6883]", "-901.203]", "species.Q2.potential.a[2]",
        "6 coefficients; expected 7"),
    row("too many coefficients", "-901.203, 4.6883]", "-901.203, 4.6883, 0.0]", "species.Q2.potential.a[2]",
        "8 coefficients; expected 7"),
    row("negative heat capacity", "[3.1, 6.5e-4", "[-3.1, 6.5e-4", "species.Q2.potential", "cp/R is -2.507 at 1000 K",
        "expected cp/R above 1"),
    row("heat capacity below R in a gas", "cp = 0.021 }\n\n[species.Q2]", "cp = 0.008 }\n\n[species.Q2]",
        "species.Q.potential", "cp/R is 0.9622", "expected cp/R above 1"),
    row("overflowing coefficient", "1.6e-15, -901.203", "1.6e300, -901.203", "species.Q2.potential",
        "cp/R is inf at 1000 K"),
    row("absurd enthalpy", "-1014.8, 3.4", "-1014.8e12, 3.4", "species.Q2.potential", "h/RT is -3.383e+12 at 300 K",
        "within ±1e+06"),
]


@pytest.mark.parametrize("changes, entry, texts", RANGES)
def test_range_or_coefficients(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


QUANTITIES = [
    row("unknown unit", '"1 bar"', '"1 bra"', "mechanism.standard_pressure", "'1 bra': unknown unit 'bra' (nearest: bar",
        "a pressure such as \"1.5 Pa\" (units: Pa, hPa, kPa, MPa, bar"),
    row("unit of another kind", '"1 bar"', '"1 K"', "mechanism.standard_pressure",
        "'1 K': K is a unit of temperature, not of pressure"),
    row("no unit", '"1 bar"', '"1"', "mechanism.standard_pressure", "'1' has no unit"),
    row("no number", '"1 bar"', '"one bar"', "mechanism.standard_pressure", "'one bar' is not a number with its unit"),
    row("no space", '"1 bar"', '"1bar"', "mechanism.standard_pressure", "'1bar' is not a number with its unit"),
    row("blank", '"1 bar"', '" "', "mechanism.standard_pressure", "' ' is not a number with its unit"),
    row("not finite", '"1 bar"', '"nan bar"', "mechanism.standard_pressure", "'nan bar' is not a finite number"),
    row("negative", '"1 bar"', '"-1 bar"', "mechanism.standard_pressure",
        "'-1 bar' is negative; expected a number above 0"),
    row("below absolute zero", "at = 298.15, H = 200.0", 'at = "-300 °C", H = 200.0', "species.Q.potential.at",
        "'-300 °C' is negative"),
    row("Celsius for an energy", "H = 200.0", 'H = "25 °C"', "species.Q.potential.H",
        "°C is a unit of temperature, not of molar energy"),
    row("quotes round a number", "A = 8e13", 'A = "8e13"', f"{R2}.forward.A", "'8e13' is not a finite number",
        "leave out the quotes: it has no unit"),
]


@pytest.mark.parametrize("changes, entry, texts", QUANTITIES)
def test_quantity(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


# ---- laws over the range of the fits

LAWS = [
    row("F_cent not positive", "a = 0.62,", "a = -0.5,", f"{R3}.forward", "F_cent is -", "at ",
        "F_cent above 0 and below 1000 over the " "range of the thermochemical data, 200 to 3000 K",
        "correct its numbers"),
    row("F_cent that vanishes", '"T***" = 150.0, "T*" = 2100.0, "T**" = 5000.0', '"T***" = 1e-30, "T*" = 1e-30',
        f"{R3}.forward", "F_cent is 0 at 200 K"),
    row("F_cent that overflows", '"T**" = 5000.0', '"T**" = -1e6', f"{R3}.forward", "F_cent is inf at 200 K"),
    row("F_cent as a number out of reason",
        "F_cent = { a = 0.62, \"T***\" = 150.0, \"T*\" = 2100.0, \"T**\" = 5000.0 }", "F_cent = 2e3", f"{R3}.forward",
        "F_cent is 2000 at 200 K"),
    row("k that overflows with n", "n = -1.8", "n = 500", f"{R3}.forward", "n = 500", "overflows at 200 K",
        "a rate constant below 1e+200"),
    row("k that overflows with Ea", "Ea = 82.0", "Ea = -1e6", f"{R2}.forward",
        "Ea = -1e+09 J/mol (SI) overflows at 200 K"),
    row("k that overflows in between", "A = 8e13, n = 0.1, Ea = 82.0", "A = 1e100, n = -100, Ea = 498.868, T_ref = 27000",
        f"{R2}.forward", "overflows at 600 K"),
    row("A that SI cannot express", "A = 8e13", "A = 1e-320", f"{R2}.forward.A", "1e-320 is 0 in SI units",
        "correct it or the units"),
    row("sum not positive", "A = -2e12, Ea = 94.0", "A = -2e12", R4,
        "the sum of the forward terms is not positive at 300 K", "a positive sum from 300 to 3000 K"),
    row("sum not positive when hot", "A = -2e12, Ea = 94.0", "A = -3e13, Ea = 110.0", R4, "is not positive at 20"),
    row("one term, negative", "A = 8e13", "A = -8e13", f"{R2}.forward.A",
        "-80000000000000.0 is negative; expected a number above 0"),
    row("limit, negative", "k_inf = { A = 5e13", "k_inf = { A = -5e13", f"{R3}.forward.k_inf.A",
        "is negative; expected a number above 0"),
    row("list of one term, negative", ARRHENIUS_2, 'forward = [{ law = "Arrhenius", A = -8e13 }]', f"{R2}.forward[1].A",
        "is negative"),
    row("efficiency out of reason", "O2 = 2.0,", "O2 = 2e5,", f"{R1}.collision_efficiency", "200000 for O2",
        "expected a number from 0 to 10000"),
    row("efficiency, negative", "O2 = 2.0,", "O2 = -2.0,", f"{R1}.collision_efficiency.O2", "-2.0 is negative",
        "expected a number that is not negative"),
]


@pytest.mark.parametrize("changes, entry, texts", LAWS)
def test_law_over_the_range_of_the_fits(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, *changes))
    line = refusals.line("run", "case.toml")
    assert line.startswith(f"small.toml: {entry}"), line
    for text in texts:
        assert text in line, line


def test_a_fault_of_one_term_names_the_term() -> None:
    term = {"law": "Arrhenius", "A": 1.0, "n": 900}
    document = restated(("reaction", 3, "forward", 1), term)
    with pytest.raises(InputError, match=r"reaction 4 'Q2 \+ O2 ⇌ 2 QO'.forward\[2\]: k with .* overflows at 300 K"):
        build(document)


def test_published_fits_that_swing_widely_are_accepted() -> None:
    """a far below 0 and T** near 0: F_cent from 2e-10 to 20 within the range, but positive."""
    for a, T3, T1, T2 in ((-76.6, 221.0, 28.0, 5e4), (1.9816, 5383.7, 4.2932, -0.0795), (-16.33, 200.0, 28.0, 5e6)):
        build(restated(("reaction", 2, "forward", "F_cent"), {"a": a, "T***": T3, "T*": T1, "T**": T2}))
