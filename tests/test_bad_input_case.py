"""Every fault of a case file: one line with file, entry, found, expected, remedy; exit status 2; nothing written."""

import math
import warnings
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from bothways import BothwaysError, InputError, Mechanism, Remark, build_case, build_mechanism, read_case, run
from bothways.cli import main
from bothways.mechanism.toml_reader import parse_toml
from mutations import mutated
from refusals import CASE, MECHANISM, Refusals, changed, row

RATIO = "mole_ratio = { Q = 0.1, O2 = 1 }"
SMALL = build_mechanism(parse_toml(MECHANISM))


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def check(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    refusals.write(case=changed(CASE, *changes))
    refusals.refused("case.toml", entry, *texts)


def test_the_case_itself_is_accepted(refusals: Refusals) -> None:
    refusals.write()
    case = read_case("case.toml")
    assert case.end == 1e-6 and case.also_at == (1e-7, 5e-7) and case.thermal_inertia == 1.2


SYNTAX = [
    row("inline table over two lines", "{ Q = 0.1, O2", "{ Q = 0.1,\n O2", "line 14, column 24", "TOML syntax",
        "an inline table { … } stands on one line, without a comma before }"),
    row("key that needs quotes", "{ Q = 0.1,", "{ CH2(S) = 0.1,", "line 14, column 19", "TOML syntax",
        "a key with ( ) + * ‡ , / or a space needs quotes"),
    row("unit without quotes", '"1 us"', "1 us", "line 17, column 10",
        "a quantity with its unit is a text and needs quotes"),
    row("table twice", "[solver]", "[vessel]", "line 19, column 8", "a key or table stands twice"),
]


@pytest.mark.parametrize("changes, entry, texts", SYNTAX)
def test_toml_syntax(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


def test_missing_case_names_the_nearest(refusals: Refusals) -> None:
    refusals.write()
    for name, texts in {"hydrogen-ketle": ("no bundled case and no file 'hydrogen-ketle' (nearest: hydrogen-kettle",),
                        "case": ("no bundled case and no file 'case' (nearest: case.toml",),
                        "small": ("no bundled case and no file 'small' (nearest: small.toml",),
                        "cas.toml": ("cas.toml: no such file (nearest: case.toml", "expected a TOML file"),
                        "no/such/case": ("no/such/case: no such file; expected a TOML file",),
                        "x" * 5000: ("no bundled case and no file 'xxx", "'bothways mechanisms' lists")}.items():
        line = refusals.line("run", name)
        assert all(text in line for text in texts), line


def test_a_mechanism_where_a_case_is_expected(refusals: Refusals) -> None:
    refusals.write()
    refusals.refused("small.toml", "", "this is a mechanism; expected a case; name it under [case] in a case file",
                     arguments=("run", "small.toml"))


KEYS = [
    row("top", "[vessel]", "[vesel]", "", "unknown key 'vesel' (nearest: vessel)", "correct the key or leave it out"),
    row("case", 'title = "small"', 'titel = "small"', "case", "unknown key 'titel' (nearest: title)"),
    row("vessel", "volume = ", "volumen = ", "vessel", "unknown key 'volumen' (nearest: volume)"),
    row("start", 'pressure = "1 atm"', 'pressure = "1 atm"\ntemperatur = 3', "start", "unknown key 'temperatur'",
        "nearest: temperature"),
    row("until", 'time = "1 us"', 'time = "1 us"\ntimes = 3', "until", "unknown key 'times' (nearest: time)"),
    row("solver", "rtol =", "rtoll =", "solver", "unknown key 'rtoll' (nearest: rtol"),
    row("output", "also_at =", "at =", "output", "unknown key 'at'"),
    row("under the wrong header", 'time = "1 us"', 'time = "1 us"\npressure = 3', "until", "unknown key 'pressure'"),
    row("under the header of the charge", 'pressure = "1 atm"\n' + RATIO, '[start.mole_ratio]\nQ = 1\npressure = "1 atm"',
        "start", "the key 'pressure' is missing"),
    row("under a header that holds species", RATIO, "[start.mole_ratio]\nQ = 1\npressure = 3", "start.mole_ratio",
        "unknown species 'pressure'; it belongs to start: put it before this table's header, since what follows a [table] "
        "header belongs to that table"),
    row("no case", '[case]\ntitle = "small"\nmechanism = "small.toml"', "", "",
        "the key 'case' is missing; expected a table; add it"),
    row("no mechanism", "mechanism =", "mechanisme =", "case", "the key 'mechanism' is missing; expected a text",
        "is 'mechanisme' meant to be it?"),
    row("no temperature", 'temperature = "1200 K"', "", "start",
        "the key 'temperature' is missing; expected a temperature; add it"),
    row("no pressure", "pressure = ", "presure = ", "start", "the key 'pressure' is missing; expected a pressure",
        "is 'presure' meant to be it?"),
    row("no end", '[until]\ntime = "1 us"', "", "", "the key 'until' is missing; expected a table"),
    row("no time", 'time = "1 us"', "", "until", "the key 'time' is missing; expected a time; add it"),
]


@pytest.mark.parametrize("changes, entry, texts", KEYS)
def test_key(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


CHARGES = [
    row("unknown species", "{ Q = 0.1,", "{ q = 0.1,", "start.mole_ratio", "unknown species 'q' (nearest: Q",
        "correct the species"),
    row("species of no kin", "{ Q = 0.1,", "{ XYZ = 0.1,", "start.mole_ratio",
        "unknown species 'XYZ' (known: O, O2, Q, Q+, Q2, QO)"),
    row("negative", "{ Q = 0.1,", "{ Q = -0.1,", "start.mole_ratio.Q", "-0.1 is negative",
        "a number that is not negative"),
    row("zero", RATIO, "mole_ratio = { Q = 0, O2 = 0.0 }", "start.mole_ratio", "the charge is empty",
        "at least one species in a positive amount"),
    row("empty", RATIO, "mole_ratio = {}", "start.mole_ratio", "the charge is empty"),
    row("none", RATIO, "", "start",
        "no charge is stated; expected one of mole_ratio, mass_ratio, amount, concentration, or fuel", "add one"),
    row("none, misspelt", "mole_ratio", "mol_ratio", "start", "no charge is stated",
        "is 'mol_ratio' meant to be mole_ratio?"),
    row("two", RATIO, RATIO + "\nmass_ratio = { Q = 1 }", "start", "mole_ratio and mass_ratio are stated",
        "leave the others out"),
    row("too large", "{ Q = 0.1,", "{ Q = 1e308, Q2 = 1e308,", "start.mole_ratio", "amount 0 mol",
        "positive, finite values"),
    row("amounts, volume and pressure", RATIO, 'amount = { Q = "1 mol" }', "start",
        "amounts, temperature, volume and pressure are all stated; expected three of them",
        "leave out vessel.volume or start.pressure"),
    row("concentrations and pressure", RATIO, 'concentration = { Q = "1 mol/L" }', "start",
        "concentrations, temperature and pressure are all stated; expected two of them", "leave out start.pressure"),
    row("amount of another kind", RATIO, 'amount = { Q = "1 g" }', "start.amount.Q",
        "'1 g': g is a unit of mass, not of amount"),
    row("negative amount", RATIO, 'amount = { Q = "-1 mol" }', "start.amount.Q", "'-1 mol' is negative"),
    row("unknown unit of a concentration", RATIO, 'concentration = { Q = "1 M" }', "start.concentration.Q",
        "unknown unit 'M'", "a concentration such as"),
    row("fuel alone", RATIO, "fuel = { Q = 1 }", "start",
        "the key 'oxidiser' is missing; expected a table of numbers, one for each species"),
    row("fuel and oxidiser alone", RATIO, "fuel = { Q = 1 }\noxidiser = { O2 = 1 }", "start",
        "the key 'equivalence_ratio' is missing"),
    row("oxidiser without fuel", RATIO, RATIO + "\noxidiser = { O2 = 1 }", "start", "unknown key 'oxidiser'"),
    row("ratio of zero", RATIO, "fuel = { O = 1 }\noxidiser = { O2 = 1 }\nequivalence_ratio = 0",
        "start.equivalence_ratio", "0 is zero; expected a number above 0"),
    row("fuel that does not burn", RATIO, "fuel = { O = 1 }\noxidiser = { O2 = 1 }\nequivalence_ratio = 1", "start.fuel",
        "this fuel needs no oxygen", "a fuel that burns and an oxidiser that carries oxygen"),
    row("fuel whose products are not known", RATIO, "fuel = { Q = 1 }\noxidiser = { O2 = 1 }\nequivalence_ratio = 1",
        "start.fuel", "Q holds Q, whose complete products are not known", "state a mole_ratio"),
]


@pytest.mark.parametrize("changes, entry, texts", CHARGES)
def test_charge(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


def test_oxidiser_without_oxygen() -> None:
    document = {"case": {"mechanism": "hydrogen-oxygen"}, "until": {"time": 1}}
    start = {"temperature": 1000, "pressure": 1e5, "fuel": {"H2": 1}, "oxidiser": {"N2": 1}, "equivalence_ratio": 1}
    with pytest.raises(InputError, match=r"start.oxidiser: this oxidiser brings no oxygen; expected"):
        build_case(document | {"start": start})


VALUES = [
    row("temperature zero", '"1200 K"', "0", "start.temperature", "0 is zero; expected a number above 0"),
    row("temperature below absolute zero", '"1200 K"', '"-300 °C"', "start.temperature", "'-300 °C' is negative"),
    row("temperature nan", '"1200 K"', "nan", "start.temperature", "nan is not a finite number"),
    row("temperature in bar", '"1200 K"', '"1200 bar"', "start.temperature",
        "bar is a unit of pressure, not of temperature"),
    row("temperature in an unknown unit", '"1200 K"', '"1200 C"', "start.temperature", "unknown unit 'C' (nearest: °C"),
    row("pressure zero", '"1 atm"', '"0 atm"', "start.pressure", "'0 atm' is zero"),
    row("pressure negative", '"1 atm"', "-1e5", "start.pressure", "-100000.0 is negative"),
    row("pressure infinite", '"1 atm"', "inf", "start.pressure", "inf is not a finite number",
        "a pressure, bare or as a text"),
    row("volume zero", '"1 L"', "0.0", "vessel.volume", "0.0 is zero"),
    row("volume as a length", '"1 L"', '"1 m"', "vessel.volume", "m is a unit of length, not of volume"),
    row("time zero", '"1 us"', '"0 s"', "until.time", "'0 s' is zero; expected a number above 0"),
    row("time negative", '"1 us"', '"-1 s"', "until.time", "'-1 s' is negative"),
    row("time without a unit", '"1 us"', '"1"', "until.time", "'1' has no unit",
        "a time such as \"1.5 s\" (units: s, ms, us"),
    row("inertia below one", "= 1.2", "= 0.5", "vessel.thermal_inertia", "0.5 for a vessel that is adiabatic",
        "a number from 1 to 1e+06 in an adiabatic vessel"),
    row("inertia out of reason", "= 1.2", "= 1e300", "vessel.thermal_inertia", "1e+300 for a vessel",
        "a number from 1 to 1e+06"),
    row("inertia of a bath", '"adiabatic"', '"isothermal"', "vessel.thermal_inertia",
        "1.2 for a vessel that is isothermal", "1 in others"),
    row("rtol too small", "rtol = 1e-6", "rtol = 1e-20", "solver.rtol", "1e-20 is out of range",
        "a number from 1e-13 to 0.01"),
    row("rtol negative", "rtol = 1e-6", "rtol = -1e-6", "solver.rtol", "-1e-06 is negative"),
    row("atol too large", "atol = 1e-12", "atol = 1", "solver.atol", "1 is out of range"),
    row("most_steps zero", "rtol = 1e-6", "most_steps = 0", "solver.most_steps", "0 is zero; expected a number above 0"),
    row("most_steps in part", "rtol = 1e-6", "most_steps = 10.5", "solver.most_steps", "10.5 is no possible number of steps",
        "expected a whole number up to 1e+15"),
    row("most_steps beyond", "rtol = 1e-6", "most_steps = 1e300", "solver.most_steps", "1e+300 is no possible number"),
    row("most_steps misspelt", "rtol = 1e-6", "most_step = 10", "solver", "unknown key 'most_step' (nearest: most_steps"),
    row("longest zero", "rtol = 1e-6", 'longest = "0 s"', "solver.longest", "'0 s' is zero; expected a number above 0"),
    row("longest in kelvin", "rtol = 1e-6", 'longest = "10 K"', "solver.longest", "K is a unit of temperature, not of time"),
    row("also_at zero", '["0.1 us", 5e-7]', '["0 s"]', "output.also_at[1]", "'0 s' is zero"),
    row("also_at after the end", '["0.1 us", 5e-7]', "[1e-7, 5]", "output.also_at[2]", "5 s is after the end",
        "a time up to until.time, 1e-06 s"),
    row("also_at in kelvin", '["0.1 us", 5e-7]', '["1 K"]', "output.also_at[1]",
        "K is a unit of temperature, not of time"),
]


@pytest.mark.parametrize("changes, entry, texts", VALUES)
def test_value(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


NUMBERS = ["vessel.volume", "vessel.thermal_inertia", "start.temperature", "start.pressure", "start.mole_ratio.Q",
           "until.time", "solver.rtol", "solver.atol", "solver.most_steps", "solver.longest", "start.mass_ratio.Q",
           "start.amount.Q", "start.concentration.Q",
           "start.fuel.Q", "start.oxidiser.O2", "start.equivalence_ratio"]


@pytest.mark.parametrize("place", NUMBERS)
@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf, 10**400, True, [1.0], "x", "nan"])
def test_number_that_is_none(place: str, value: object) -> None:
    table, key, *name = place.split(".")
    document = parse_toml(changed(CASE, ('mechanism = "small.toml"\n', "")))
    if name or key == "equivalence_ratio":
        del document["start"]["mole_ratio"]
    if key in ("fuel", "oxidiser", "equivalence_ratio"):
        document["start"] |= {"fuel": {"O": 1}, "oxidiser": {"O2": 1}, "equivalence_ratio": 1}
    document[table][key] = {name[0]: value} if name else value
    with pytest.raises(InputError) as caught:
        build_case(document, "c.toml", mechanism=SMALL)
    assert str(caught.value).startswith(f"c.toml: {place}: ") and "; expected " in str(caught.value)


KINDS = [
    row("open vessel", '"adiabatic"', '"open"', "vessel.heat", "'open' is not known", '"isothermal" or "adiabatic"'),
    row("misspelt", '"adiabatic"', '"adiabatik"', "vessel.heat", "'adiabatik' is not known (nearest: adiabatic)"),
    row("what it holds", '"volume"', '"enthalpy"', "vessel.holds", "'enthalpy' is not known",
        'expected "volume" or "pressure"'),
    row("method", "rtol = 1e-6", 'method = "Euler"', "solver.method", "'Euler' is not known", "expected "),
    row("heat as a number", '"adiabatic"', "3", "vessel.heat", "3 is not a text"),
    row("title as a number", 'title = "small"', "title = 3", "case.title", "3 is not a text; expected a text in quotes"),
    row("mechanism as a list", '"small.toml"', '["small.toml"]', "case.mechanism", "['small.toml'] is not a text"),
    row("vessel as a list", "[vessel]", "[[vessel]]", "vessel", "is not a table; expected a table of keys"),
    row("start as a list", "[start]", "[[start]]", "start", "is not a table"),
    row("solver as a value", "[solver]\nrtol = 1e-6\natol = 1e-12\n", "[until.x]", "until", "unknown key 'x'"),
    row("charge as a list", RATIO, 'mole_ratio = ["Q"]', "start.mole_ratio", "['Q'] is not a table"),
    row("amount as a text", "{ Q = 0.1,", '{ Q = "0.1",', "start.mole_ratio.Q", "'0.1' is not a finite number",
        "leave out the quotes"),
    row("temperature as a list", '"1200 K"', "[1200]", "start.temperature", "[1200] is not a finite number"),
    row("truth for a pressure", '"1 atm"', "true", "start.pressure", "True is not a finite number"),
    row("also_at as a time", '["0.1 us", 5e-7]', '"1 ms"', "output.also_at", "'1 ms' is not a list",
        'a list such as ["1 ms", "2 ms"]'),
    row("file as a number", 'file = "run.h5"', "file = 3", "output.file", "3 is not a text"),
]


@pytest.mark.parametrize("changes, entry, texts", KINDS)
def test_kind_or_type(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


# ---- temperatures outside the data: the fit of Q2 reaches from 300 to 3000 K


def hotter(temperature: float) -> str:
    """The case from another temperature, for a nanosecond."""
    return changed(CASE, ('"1200 K"', str(temperature)), ('"1 us"', '"1 ns"'), ('also_at = ["0.1 us", 5e-7]', ""))


@pytest.mark.parametrize("temperature", [3501.0, 5000.0])
def test_more_than_500_K_outside_is_refused(refusals: Refusals, temperature: float) -> None:
    refusals.write(case=hotter(temperature))
    refusals.refused("case.toml", "start.temperature", f"{temperature:g} K is more than 500 K outside the thermochemical "
                     "data of Q2", "expected a temperature nearer to the range of the data")


def test_up_to_500_K_outside_runs_with_a_note(refusals: Refusals) -> None:
    refusals.write(case=hotter(3499.0))
    assert main(["run", "case.toml"]) == 0
    err = refusals.capsys.readouterr().err
    assert ("bothways: note: at 3499 K the run is outside the range of the thermochemical data of Q2; they continue with "
            "constant heat capacity\n") in err


@pytest.mark.parametrize("temperature, noted", [(3009.0, False), (3011.0, True)])
def test_the_note_begins_10_K_outside(temperature: float, noted: bool) -> None:
    document = parse_toml(changed(hotter(temperature), ("adiabatic", "isothermal"), ("thermal_inertia = 1.2", "")))
    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always")
        run(build_case(document, mechanism=SMALL))
    assert {w.category for w in caught} == ({Remark} if noted else set())


@pytest.mark.parametrize("temperature, text", [(20.0, r"20 K; expected \d+ to 100000 K for this mechanism"),
                                               (1e5, r"100000 K; expected .* to 100000 K"), (1e300, "1e\\+300 K; expected")])
def test_temperatures_beyond_the_arithmetic(temperature: float, text: str) -> None:
    document = parse_toml(changed(CASE, ('"1200 K"', str(temperature))))
    with pytest.raises(InputError, match=f"start.temperature: {text}"):
        build_case(document, mechanism=without_fits())


def without_fits() -> Mechanism:
    """The small mechanism without Q2, whose data alone have ends."""
    document = parse_toml(MECHANISM)
    del document["species"]["Q2"]
    document["reaction"] = [r for r in document["reaction"] if "Q2" not in r["equation"]]
    return build_mechanism(document)


# ---- anything anywhere


@settings(max_examples=300, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(st.data())
def test_any_value_anywhere_is_accepted_or_refused_by_one_line(data: st.DataObject) -> None:
    document = mutated(parse_toml(CASE) | {"case": {"title": "small"}}, data)
    try:
        case = build_case(document, "c.toml", mechanism=SMALL)
    except BothwaysError as err:
        assert str(err).startswith("c.toml: ") and str(err).isprintable() and "; " in str(err)
    else:
        charge = case.charge
        assert all(math.isfinite(x) and x > 0 for x in (charge.temperature, charge.pressure, charge.volume, case.end))
        assert math.isfinite(sum(charge.amount)) and min(charge.amount) >= 0 < max(charge.amount)
        assert math.isfinite(case.own_heat_capacity)
