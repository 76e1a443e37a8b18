"""Grids: which cases they state, in which order and with which numbers; what is refused."""

import math
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from scipy.stats import qmc

from bothways import InputError, build_mechanism, read_case, read_mechanism
from bothways.grid import build_grid, bundled_grids, read_grid
from refusals import MECHANISM

BASE = {"grid": {"case": "hydrogen-kettle"}}
RANGE = {"from": 1000.0, "to": 2000.0}


def varied(**tables: Any) -> dict[str, Any]:
    return BASE | {"vary": tables}


def numbers(document: dict[str, Any], key: str) -> list[Any]:
    grid = build_grid(document)
    return [grid.setting(k)[key] for k in range(len(grid))]


# ---- what a grid states


def test_product_the_first_key_slowest() -> None:
    grid = build_grid(varied(start={"pressure": ["1 atm", 2e5], "temperature": ["1000 K", "727 °C", 1100.0]}))
    assert len(grid) == 6 and grid.keys == ("start.pressure", "start.temperature")
    assert [grid.setting(k)["start.pressure"] for k in range(6)] == [101325.0] * 3 + [2e5] * 3
    assert [grid.setting(k)["start.temperature"] for k in range(6)] == pytest.approx([1000.0, 1000.15, 1100.0] * 2)
    case = grid.case(4)
    assert case.charge.pressure == 2e5 and case.charge.temperature == pytest.approx(1000.15) and case.rtol == 1e-8
    with pytest.raises(IndexError):
        grid.setting(6)


def test_cases_are_those_of_a_case_file_with_the_same_words() -> None:
    grid = build_grid(BASE | {"until": {"time": "1 ms"}, "vary": {"start": {"equivalence_ratio": [1.0, 0.5]}}})
    same, other = grid.case(0), read_case("hydrogen-kettle")
    np.testing.assert_array_equal(same.charge.amount, other.charge.amount)
    assert (same.end, other.end, same.charge.volume) == (1e-3, 1e-2, other.charge.volume)
    fuel, oxygen = (same.mechanism.index(name) for name in ("H2", "O2"))
    for k, ratio in enumerate((1.0, 0.5)):
        amount = grid.case(k).charge.amount
        assert amount[fuel] / amount[oxygen] == pytest.approx(2.0 * ratio, rel=1e-14)


@pytest.mark.parametrize("spacing, function", [("linear", lambda x: x), ("logarithmic", math.log),
                                               ("reciprocal", lambda x: 1.0 / x)])
def test_ranges_are_evenly_spaced_between_exact_ends(spacing: str, function: Any) -> None:
    points = numbers(varied(start={"temperature": {**RANGE, "count": 5, "spacing": spacing}}), "start.temperature")
    steps = np.diff([function(x) for x in points])
    assert points[0] == 1000.0 and points[-1] == 2000.0 and np.allclose(steps, steps[0], rtol=1e-12)


def test_falling_ranges() -> None:
    points = numbers(varied(until={"time": {"from": "2 ms", "to": "1 ms", "count": 3}}), "until.time")
    assert points == pytest.approx([2e-3, 1.5e-3, 1e-3])


def test_charges_heat_and_mechanism_vary(tmp_path: Path) -> None:
    (tmp_path / "own.toml").write_text(MECHANISM, encoding="utf-8")
    (tmp_path / "grid.toml").write_text("""
[case]
mechanism = "hydrogen-oxygen"
[start]
temperature = "1000 K"
pressure = "1 bar"
[until]
time = "1 ms"
[vary]
case.mechanism = ["own.toml", "hydrogen-oxygen"]
vessel.heat = ["adiabatic", "isothermal"]
vessel.holds = ["volume", "pressure"]
start.mole_ratio = [{ O2 = 1 }, { O2 = 1, O = 2 }]
""", encoding="utf-8")
    grid = read_grid(tmp_path / "grid.toml")
    assert len(grid) == 16 and set(grid.mechanisms) == {"own.toml", "hydrogen-oxygen"}
    cases = list(grid.cases())
    assert [c.mechanism.name for c in cases] == ["small"] * 8 + ["hydrogen-oxygen"] * 8
    assert [c.heat for c in cases[:8]] == ["adiabatic"] * 4 + ["isothermal"] * 4
    shares = [c.charge.amount[c.mechanism.index("O")] / c.charge.amount.sum() for c in cases[:4]]
    assert shares == pytest.approx([0, 2 / 3, 0, 2 / 3])


def test_species_of_a_charge_vary_alone() -> None:
    document = {"case": {"mechanism": "hydrogen-oxygen"}, "until": {"time": 1.0},
                "start": {"temperature": 1000.0, "concentration": {"O2": 1.0}},
                "vary": {"start": {"concentration": {"H2": ["1 mol/L", 2.0], "N2": [3.0]}}}}
    grid = build_grid(document)
    assert grid.keys == ("start.concentration.H2", "start.concentration.N2")
    amount = grid.case(0).charge.amount
    assert {grid.case(0).mechanism.names[k]: amount[k] for k in np.flatnonzero(amount)} == {"H2": 1e3, "O2": 1.0, "N2": 3.0}


def test_rows_of_a_csv_file(tmp_path: Path) -> None:
    (tmp_path / "rows.csv").write_text("start.temperature / °C, start.pressure ,vessel.heat,start.fuel.H2\r\n"
                                       "726.85, 2 atm,adiabatic,1\r\n\r\n1e3,2e5,isothermal,2\r\n", encoding="utf-8")
    (tmp_path / "grid.toml").write_text('[grid]\ncase = "hydrogen-kettle"\n[rows]\nfile = "rows.csv"\n'
                                        "[vary]\nstart.equivalence_ratio = [1, 2]\n")
    grid = read_grid(tmp_path / "grid.toml")
    assert [list(grid.setting(k).values()) for k in range(len(grid))] == [
        [1000.0, 202650.0, "adiabatic", 1.0, 1.0], [1000.0, 202650.0, "adiabatic", 1.0, 2.0],
        [1273.15, 2e5, "isothermal", 2.0, 1.0], [1273.15, 2e5, "isothermal", 2.0, 2.0]]


@pytest.mark.parametrize("method", ["Sobol", "Latin hypercube"])
def test_samples_are_seeded_and_even(method: str) -> None:
    def sampled(seed: int) -> np.ndarray:
        document = BASE | {"samples": {"method": method, "count": 64, "seed": seed, "start": {
            "temperature": {**RANGE, "spacing": "reciprocal"}, "pressure": {"from": 1e5, "to": 1e7, "spacing": "logarithmic"}}}}
        grid = build_grid(document)
        return np.array([list(grid.setting(k).values()) for k in range(len(grid))])

    points, again, other = sampled(1), sampled(1), sampled(2)
    np.testing.assert_array_equal(points, again)
    assert not np.any(points == other)
    shares = np.column_stack([(1 / points[:, 0] - 1e-3) / -5e-4, np.log10(points[:, 1] / 1e5) / 2.0])
    counts = np.histogram2d(*shares.T, bins=(8, 1), range=((0, 1), (0, 1)))[0]
    assert np.all(counts == 8)  # 64 points of either method hit each of 64 strips once, so each eighth 8 times
    assert qmc.discrepancy(shares) < 0.5 * qmc.discrepancy(np.random.default_rng(0).random((64, 2)))


def test_the_digest_is_that_of_the_contents() -> None:
    one = build_grid(varied(start={"temperature": ["1000 K", 1100]}))
    for document in (varied(start={"temperature": [1000.0, 1100.0]}), varied(start={"temperature": [1000.0, 1100.0]})):
        assert build_grid(document).digest == one.digest
    others = [varied(start={"temperature": [1000.0, 1100.0 + 1e-9]}), varied(start={"temperature": [1100.0, 1000.0]}),
              varied(start={"temperature": [1000.0, 1100.0]}) | {"until": {"time": 2.0}},
              varied(start={"temperature": [1000.0, 1100.0]}) | {"grid": BASE["grid"] | {"trajectories": True}}]
    digests = {build_grid(document).digest for document in others}
    assert len(digests) == 4 and one.digest not in digests
    changed = read_mechanism("hydrogen-oxygen").to_dict()
    changed["reaction"][0]["forward"]["A"] *= 1 + 1e-12
    assert build_grid(varied(start={"temperature": ["1000 K", 1100]}), mechanism=build_mechanism(changed)).digest != one.digest


def test_another_mechanism_instead() -> None:
    grid = read_grid("hydrogen-kettle-map", read_mechanism("methane"))
    assert grid.case(0).mechanism.name == "methane" and len(grid) == 90
    assert read_grid("hydrogen-kettle-map").case(0, read_mechanism("methane")).mechanism.name == "methane"


@pytest.mark.parametrize("name", bundled_grids())
def test_bundled_grids_are_sound_and_marked_invented(name: str) -> None:
    grid = read_grid(name)
    assert "invented" in grid.title and len(list(grid.cases())) == len(grid) > 1


# ---- what is refused

VARY = "[grid]\ncase = \"hydrogen-kettle\"\n[vary]\n"
REFUSED = [
    ("", "nothing varies; expected [vary], [rows] or [samples]"),
    (VARY, "nothing varies"),
    (VARY + "start.temperature = []", "vary.start.temperature: the list is empty; expected at least one value"),
    (VARY + "start.temperature = 1000", "vary.start.temperature: 1000 is neither a list nor a range"),
    (VARY + "start.temprature = [1]", "unknown key 'start.temprature' (nearest: start.temperature"),
    (VARY + "strat.temperature = [1]", "unknown table 'strat' (nearest: start)"),
    (VARY + "start = 1", "vary.start: 1 is not a table"),
    (VARY + 'start.temperature = ["1 bar"]', "vary.start.temperature[1]: '1 bar': bar is a unit of pressure"),
    (VARY + "start.temperature = [1000, true]", "vary.start.temperature[2]: True is not a finite number"),
    (VARY + "start.temperature = [nan]", "vary.start.temperature[1]: nan is not a finite number"),
    (VARY + 'start.equivalence_ratio = ["rich"]', "vary.start.equivalence_ratio[1]: 'rich' is not a finite number"),
    (VARY + "vessel.heat = [1]", "vary.vessel.heat[1]: 1 is not a text"),
    (VARY + "start.mole_ratio = [1]", "vary.start.mole_ratio[1]: 1 is not a table"),
    (VARY + "start.temperature = { from = 1, count = 3 }", "vary.start.temperature: the key 'to' is missing"),
    (VARY + "start.temperature = { from = 1, to = 1, count = 3 }", "from and to are both 1"),
    (VARY + "start.temperature = { from = 1, to = 2, count = 2.5 }",
     "vary.start.temperature.count: 2.5; expected a whole number from 2"),
    (VARY + "start.temperature = { from = 1, to = 2, count = 1e12 }", "1e+12; expected a whole number from 2 to 1000000"),
    (VARY + "start.temperature = { from = 1, to = 2, count = 3, spacing = \"log\" }",
     "'log' is not known (known: linear, logarithmic, reciprocal)"),
    (VARY + "start.temperature = { from = -1, to = 2, count = 3, spacing = \"reciprocal\" }", "-1 with reciprocal spacing"),
    (VARY + "start.temperature = { from = 1, to = 2, count = 3, steps = 3 }", "unknown key 'steps'"),
    (VARY + 'vessel.heat = { from = 1, to = 2, count = 2 }', "expected a list of values: vessel.heat is no quantity"),
    (VARY + 'case.mechanism = ["methan"]', "case.mechanism: no bundled mechanism and no file 'methan' (nearest: methane"),
    (VARY.replace("kettle", "ketle") + "start.temperature = [1]", "grid.case: no bundled case and no file 'hydrogen-ketle'"),
    (VARY.replace("[vary]", 'tile = "x"\n[vary]') + "start.temperature = [1]", "grid: unknown key 'tile' (nearest: title"),
    (VARY.replace("[vary]", "[varies]"), "unknown key 'varies' (nearest: vary"),
    ("[vary]\nstart.temperature = [1000]", "case: the key 'mechanism' is missing"),
    ("[case]\nmechanism = 1\n[vary]\nstart.temperature = [1000]", "case: the mechanism is not a text"),
    (VARY + "start.temperature = [1000]\n[samples]\ncount = 2\nstart.temperature = { from = 1, to = 2 }",
     "start.temperature varies twice"),
    (VARY + "start.fuel = [{ H2 = 1 }]\n[samples]\ncount = 2\nstart.fuel.H2 = { from = 1, to = 2 }", "start.fuel varies twice"),
    (VARY + "[samples]\ncount = 2", "samples: nothing is sampled"),
    (VARY + "[samples]\ncount = 2\nstart.temperature = [1]", "samples.start.temperature: [1] is not a range"),
    (VARY + "[samples]\ncount = 0\nstart.temperature = { from = 1, to = 2 }",
     "samples.count: 0; expected a whole number from 1"),
    (VARY + "[samples]\nseed = -1\ncount = 1\nstart.temperature = { from = 1, to = 2 }", "samples.seed: -1"),
    (VARY + '[samples]\nmethod = "Sobl"\ncount = 1\nstart.temperature = { from = 1, to = 2 }',
     "'Sobl' is not known (nearest: Sobol"),
    (VARY + '[rows]\nfile = "no.csv"', "no.csv: cannot be read (No such file or directory); expected a CSV file"),
    (VARY + "[rows]\n", "rows: the key 'file' is missing"),
]


@pytest.mark.parametrize("text, expected", REFUSED)
def test_refused(tmp_path: Path, text: str, expected: str) -> None:
    path = tmp_path / "grid.toml"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(InputError) as caught:
        read_grid(path)
    assert expected in str(caught.value) and str(tmp_path) in str(caught.value)


ROWS = [
    ("", "rows.csv: is empty"),
    ("start.temperature\n", "rows.csv: there is no row below the header"),
    ("start.temperature,temp\n1,2\n", "rows.csv: column 2: unknown column 'temp'"),
    ("start.temperature,start.temperature\n1,2\n", "two columns 'start.temperature'"),
    ("start.fuel\n1\n", "column 1: 'start.fuel' is a table; expected a column for each species; such as start.fuel.H2"),
    ("start.temperature / bar\n1\n", "column 1: unknown unit 'bar'"),
    ("vessel.heat / K\n1\n", "column 1: unknown unit 'K'"),
    ("start.temperature\n1000\nhot\n", "rows.csv: row 3, column start.temperature: 'hot' is not a number with its unit"),
    ("start.temperature / K\n1000 K\n", "row 2, column start.temperature: '1000 K K'"),
    ("start.temperature,start.pressure\n1000\n", "rows.csv: row 2: 1 cells; expected 2, as in the header"),
    ("start.temperature,start.pressure\n1000,\n", "row 2, column start.pressure: the cell is empty"),
    ("start.equivalence_ratio\nrich\n", "row 2, column start.equivalence_ratio: 'rich' is not a finite number"),
    ("start.pressure\nnan\n", "row 2, column start.pressure: nan is not a finite number"),
    ('start.pressure\n"1\n', "is not a CSV file in UTF-8"),
]


@pytest.mark.parametrize("text, expected", ROWS)
def test_refused_rows(tmp_path: Path, text: str, expected: str) -> None:
    (tmp_path / "rows.csv").write_text(text, encoding="utf-8")
    (tmp_path / "grid.toml").write_text(VARY + '[rows]\nfile = "rows.csv"\n', encoding="utf-8")
    with pytest.raises(InputError) as caught:
        read_grid(tmp_path / "grid.toml")
    assert expected in str(caught.value)


def test_rows_that_are_no_text(tmp_path: Path) -> None:
    (tmp_path / "rows.csv").write_bytes(b"\xff\xfe\x00")
    (tmp_path / "grid.toml").write_text(VARY + '[rows]\nfile = "rows.csv"\n')
    with pytest.raises(InputError, match=r"rows.csv: is not a CSV file in UTF-8"):
        read_grid(tmp_path / "grid.toml")


@pytest.mark.parametrize("tables, expected", [
    ({"start": {"temperature": [1000.0, -1.0]}}, "case 2 of 2 (start.temperature = -1): start.temperature: -1.0 is negative"),
    ({"start": {"temperature": [10.0]}}, "case 1 of 1 (start.temperature = 10): start.temperature: 10 K; expected"),
    ({"vessel": {"heat": ["cold"]}}, "case 1 of 1 (vessel.heat = cold): vessel.heat: 'cold' is not known"),
    ({"start": {"fuel": {"CH4": [1.0]}}}, "case 1 of 1 (start.fuel.CH4 = 1): start.fuel: unknown species 'CH4'"),
    ({"start": {"mole_ratio": [{"H2": 1}]}}, "mole_ratio and fuel are stated"),
])
def test_unsound_cases_are_named(tables: dict[str, Any], expected: str) -> None:
    with pytest.raises(InputError) as caught:
        list(build_grid(varied(**tables)).cases())
    assert expected in str(caught.value)


def test_no_grid_of_that_name() -> None:
    with pytest.raises(InputError, match=r"no bundled grid and no file 'hydrogen-kettle-mop' \(nearest: hydrogen-kettle-map\)"):
        read_grid("hydrogen-kettle-mop")


def test_a_mechanism_given_apart_cannot_vary() -> None:
    with pytest.raises(InputError, match=r"case.mechanism: the mechanism varies; expected a grid without case.mechanism"):
        build_grid(varied(case={"mechanism": ["methane"]}), mechanism=read_mechanism("methane"))
