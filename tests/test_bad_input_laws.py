"""Faults of the laws and forms that the other files leave out: one line, exit status 2 (see refusals.py)."""

from pathlib import Path
from typing import Any

import pytest

from refusals import ARRHENIUS_2, CONSTANT_Q, MECHANISM, R1, R3, Refusals, changed

TROE = MECHANISM[MECHANISM.index("[reaction.forward]") : MECHANISM.index("\n[[reaction]]\nequation = \"Q2 + O2")]
ARRHENIUS_1 = 'collision_efficiency = { O2 = 2.0, Q2 = 0.0 }\nforward = { law = "Arrhenius", A = 1e16, n = -1.0 }'
LIMITS = "k_inf = { A = 5e13 }, k_0 = { A = 6e18, n = -1.8 }"


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def law(name: str, keys: str, entry: str, *texts: str) -> Any:
    """The fall-off reaction with another law: its keys, the entry an error names within it, texts in this order."""
    return pytest.param(keys, f"{R3}.forward{entry}", texts, id=name)


FALL_OFF = [
    law("SRI without F", f'law = "SRI", {LIMITS}', "", "the key 'F' is missing", "a table"),
    law("SRI with F_cent", f'law = "SRI", {LIMITS}, F_cent = 0.5, F = {{ a = 1, b = 1, c = 1 }}', "",
        "unknown key 'F_cent'"),
    law("F a number", f'law = "SRI", {LIMITS}, F = 0.5', ".F", "0.5 is not a table"),
    law("no c", f'law = "SRI", {LIMITS}, F = {{ a = 0.5, b = 300 }}', ".F", "the key 'c' is missing"),
    law("unknown key of F", f'law = "SRI", {LIMITS}, F = {{ a = 0.5, b = 300, c = 9, f = 1 }}', ".F", "unknown key 'f'"),
    law("c zero", f'law = "SRI", {LIMITS}, F = {{ a = 0.5, b = 300, c = 0 }}', ".F.c", "0 is zero", "a number above 0"),
    law("a negative", f'law = "SRI", {LIMITS}, F = {{ a = -0.5, b = 300, c = 9 }}', ".F.a", "-0.5 is negative"),
    law("d negative", f'law = "SRI", {LIMITS}, F = {{ a = 0.5, b = 3, c = 9, d = -1 }}', ".F.d", "-1 is negative"),
    law("e a text", f'law = "SRI", {LIMITS}, F = {{ a = 0.5, b = 3, c = 9, e = "1" }}', ".F.e",
        "'1' is not a finite number"),
    law("b beyond reason", f'law = "SRI", {LIMITS}, F = {{ a = 0.5, b = -1e6, c = 9 }}', "",
        "a exp(-b/T) + exp(-T/c) is inf at 200 K", "F above 0 and below 1000"),
    law("bracket vanishes", f'law = "SRI", {LIMITS}, F = {{ a = 0, b = 3, c = 1e-3 }}', "",
        "a exp(-b/T) + exp(-T/c) is 0 at 200 K", "F above 0"),
    law("e beyond reason", f'law = "SRI", {LIMITS}, F = {{ a = 0.5, b = 3, c = 9, e = 200 }}', "", "d T^e is inf at 200 K"),
    law("width unknown", f'law = "Troe", {LIMITS}, F_cent = 0.6, width = "Iupac"', ".width", "'Iupac' is not known",
        'expected "IUPAC" or "JPL"'),
    law("width a number", f'law = "Troe", {LIMITS}, F_cent = 0.6, width = 1', ".width", "1 is not a text"),
    law("width of Lindemann's", f'law = "Lindemann", {LIMITS}, width = "JPL"', "", "unknown key 'width'"),
    law("IUPAC without F_cent", f'law = "Troe", {LIMITS}, width = "IUPAC"', "", "the key 'F_cent' is missing"),
    law("activated with two broadenings", f'law = "activated", {LIMITS}, F_cent = 0.5, F = {{ a = 1, b = 1, c = 1 }}', "",
        "F and F_cent are both stated", "one broadening"),
    law("activated without k_0", 'law = "activated", k_inf = { A = 1 }', "", "the key 'k_0' is missing"),
    law("activated, k_0 negative", 'law = "activated", k_inf = { A = 1 }, k_0 = { A = -1 }', ".k_0.A", "-1 is negative"),
    law("activated, F_cent negative", f'law = "activated", {LIMITS}, F_cent = -0.5', ".F_cent", "-0.5 is negative"),
    law("activated, unknown key", f'law = "activated", {LIMITS}, k_2 = 1', "", "unknown key 'k_2'"),
]

KNOWN = [
    law("no k", 'law = "known at a temperature", at = 300', "", "the key 'k' is missing"),
    law("no temperature", 'law = "known at a temperature", k = 1', "", "the key 'at' is missing"),
    law("k zero", 'law = "known at a temperature", k = 0, at = 300', ".k", "0 is zero"),
    law("at negative", 'law = "known at a temperature", k = 1, at = -5', ".at", "-5 is negative"),
    law("at in another kind of unit", 'law = "known at a temperature", k = 1, at = "5 bar"', ".at", "bar is a unit of pressure"),
    law("Ea beyond reason", 'law = "known at a temperature", k = 1, at = 300, Ea = 9e3', "", "Ea/RT = 3608 at 300 K",
        "within ±400"),
    law("A of another law", 'law = "known at a temperature", k = 1, at = 300, A = 2', "", "unknown key 'A'"),
]

ROW = "{ p = 1e5, A = 5e13, n = 0.3 }"
WINDOW = 'law = "Chebyshev", T = [300, 2500], p = ["0.1 bar", "100 bar"]'
PRESSURE = [
    law("no rows", 'law = "pressure table"', "", "the key 'rows' is missing"),
    law("rows a table", f'law = "pressure table", rows = {ROW}', ".rows", "is not a list", "[{ p = 1e5,"),
    law("empty rows", 'law = "pressure table", rows = []', ".rows", "no rows", "a list such as"),
    law("row a number", 'law = "pressure table", rows = [1]', ".rows[1]", "1 is not a table"),
    law("row without p", f'law = "pressure table", rows = [{ROW}, {{ A = 1 }}]', ".rows[2]", "the key 'p' is missing"),
    law("row without A", 'law = "pressure table", rows = [{ p = 1 }]', ".rows[1]", "the key 'A' is missing"),
    law("p negative", 'law = "pressure table", rows = [{ p = -1, A = 1 }]', ".rows[1].p", "-1 is negative"),
    law("p in another kind of unit", 'law = "pressure table", rows = [{ p = "1 K", A = 1 }]', ".rows[1].p",
        "K is a unit of temperature"),
    law("A negative alone", f'law = "pressure table", rows = [{ROW}, {{ p = 2e5, A = -1 }}]', ".rows[2].A",
        "-1 is negative"),
    law("sum of rows negative", f'law = "pressure table", rows = [{ROW}, {{ p = 1e5, A = -1e15 }}]', "",
        "the rows at 100000 Pa add up to -", "a positive sum"),
    law("k overflows", 'law = "pressure table", rows = [{ p = 1, A = 1, n = 90 }]', "", "overflows", "below 1e+200"),
    law("unknown key of a row", 'law = "pressure table", rows = [{ p = 1, A = 1, T0 = 3 }]', ".rows[1]", "unknown key 'T0'"),
    law("partner of a table", f'law = "pressure table", rows = [{ROW}], collision_partner = "O2"', "",
        "collision efficiency or partner is stated, but no partner takes part"),
    law("no window", 'law = "Chebyshev", c = [[1]]', "", "the key 'T' is missing"),
    law("no coefficients", WINDOW, "", "the key 'c' is missing"),
    law("window falls", 'law = "Chebyshev", T = [2500, 300], p = [1, 2], c = [[1]]', ".T", "[2500, 300] is no window",
        "lowest and highest temperature, rising"),
    law("window of one", 'law = "Chebyshev", T = [300, 2500], p = [1], c = [[1]]', ".p", "[1] is no window"),
    law("window not positive", 'law = "Chebyshev", T = [300, 2500], p = [0, 1], c = [[1]]', ".p", "0 is zero"),
    law("window a number", 'law = "Chebyshev", T = 300, p = [0, 1], c = [[1]]', ".T", "300 is not a list"),
    law("ragged rows", f"{WINDOW}, c = [[1, 2], [3]]", ".c", "rows of 2, 1 coefficients", "all of the same length"),
    law("empty c", f"{WINDOW}, c = []", ".c", "rows of no coefficients"),
    law("c not rows", f"{WINDOW}, c = [1, 2]", ".c[1]", "1 is not a list"),
    law("c a text", f'{WINDOW}, c = [["1"]]', ".c[1]", "'1' is not a finite number"),
    law("c beyond reason", f"{WINDOW}, c = [[900.0]]", "", "the coefficients add up to", "log10 k within ±200"),
    law("clamp a text", f'{WINDOW}, c = [[1]], clamp = "yes"', ".clamp", "'yes' is neither true nor false"),
    law("unknown key of a series", f"{WINDOW}, c = [[1]], clamped = true", "", "unknown key 'clamped' (nearest: clamp)"),
]


@pytest.mark.parametrize("keys, entry, texts", [*FALL_OFF, *PRESSURE, *KNOWN])
def test_law(refusals: Refusals, keys: str, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, (TROE, f"forward = {{ {keys} }}\n")))
    refusals.refused("small.toml", entry, *texts)


@pytest.mark.parametrize("keys, what", [(f'law = "pressure table", rows = [{ROW}]', "law of pressure"),
                                        (f"{WINDOW}, c = [[9]]", "law of pressure"),
                                        (f'law = "SRI", {LIMITS}, F = {{ a = 1, b = 1, c = 1 }}', "fall-off reaction"),
                                        (f'law = "activated", {LIMITS}', "fall-off reaction")])
def test_no_M_beside_a_law_that_says_it_all(refusals: Refusals, keys: str, what: str) -> None:
    refusals.write(changed(MECHANISM, (ARRHENIUS_1, f"forward = {{ {keys} }}")))
    refusals.refused("small.toml", f"{R1}.forward", f"M stands in the equation of a {what}", "leave M out")


@pytest.mark.parametrize("window, what", [("T = [300, 1100], p = [1e3, 1e7]", "T is 1200 K, outside the Chebyshev window"),
                                          ("T = [300, 2500], p = [1e3, 1e4]", "p is 101325 Pa, outside")])
def test_a_start_outside_the_window(refusals: Refusals, window: str, what: str) -> None:
    law = f'forward = {{ law = "Chebyshev", {window}, c = [[9.0, 0.1]] }}'
    refusals.write(changed(MECHANISM, (ARRHENIUS_2, law)))
    refusals.refused("case.toml", "start", "'Q + O2 ⇌ QO + O'", what, "a start where the law holds", "clamp = true")


NASA_9 = 'form = "NASA 9-coefficient", T = [200, 1000, 6000]'
FORMS = [
    ("NASA 9, one row", f"{NASA_9}, a = [[0, 0, 2.5, 0, 0, 0, 0, 2e4, 4]]", ".a", "1 rows of coefficients"),
    ("NASA 9, seven numbers", f"{NASA_9}, a = [[2.5, 0, 0, 0, 0, 2e4, 4], [2.5, 0, 0, 0, 0, 2e4, 4]]", ".a[1]",
     "7 coefficients; expected 9"),
    ("NASA 9 without T", 'form = "NASA 9-coefficient", a = []', "", "the key 'T' is missing"),
    ("NASA 9, cp negative", 'form = "NASA 9-coefficient", T = [200, 1000], a = [[0, 0, -2.5, 0, 0, 0, 0, 2e4, 4]]', "",
     "cp/R is -2.5 at 200 K"),
    ("Shomate, nine numbers", 'form = "Shomate", T = [298, 1000], a = [[20, 0, 0, 0, 0, 100, 130, 0, 0]]', ".a[1]",
     "9 coefficients; expected 8"),
    ("Shomate, T falls", 'form = "Shomate", T = [1000, 298], a = [[20, 0, 0, 0, 0, 100, 130, 0]]', ".T", "does not rise"),
    ("Shomate in J", 'form = "Shomate", T = [298, 1000], a = [[20, 0, 0, 0, 0, 1e8, 130, 0]]', "", "h/RT is"),
    ("Shomate, unknown key", 'form = "Shomate", T = [298, 1000], a = [[20, 0, 0, 0, 0, 100, 130, 0]], H = 1', "",
     "unknown key 'H'"),
]


@pytest.mark.parametrize("keys, entry, text", [pytest.param(*rest, id=name) for name, *rest in FORMS])
def test_form(refusals: Refusals, keys: str, entry: str, text: str) -> None:
    refusals.write(changed(MECHANISM, (CONSTANT_Q, f"potential = {{ {keys} }}")))
    refusals.refused("small.toml", f"species.Q.potential{entry}", text)
