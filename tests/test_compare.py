"""Comparison of a reduced mechanism with its parent, against closed forms.

The invented isothermal case A ⇌ B of first order has one: with K from stated enthalpies and entropies,
x_A = e + (1 - e) exp(-k (1 + 1/K) t), e = 1/(1 + K).
"""

import csv
import io
import math

import numpy as np
import pytest
from scipy.integrate import quad

from bothways import InputError, build_case, build_mechanism, read_mechanism
from bothways.compare import MEASURES, compare, read_limits, read_mapping
from bothways.compare.correspondence import correspondence
from bothways.compare.file import variable_of, write_comparison
from bothways.compare.measures import relative
from bothways.compare.tables import csv_text, markdown, terminal_text

R = 8.314462618  # J/(mol K)
T, K_FIRST, DELTA_S = 500.0, 3.0, 10.0  # K, 1/s, J/(mol K); ΔH = 0
K_EQ = math.exp(DELTA_S / R)
E_A = 1.0 / (1.0 + K_EQ)
END = 2.0  # s


def document(k: float = K_FIRST, names: str = "AB", more: dict | None = None, blocks: str = "10 g/mol") -> dict:
    """A ⇌ B of an invented building block, perhaps with further species (names → entropy above A's)."""
    entropy = {names[0]: 0.0, names[1]: DELTA_S, **(more or {})}
    potential = {name: {"form": "constant heat capacity", "at": 298.15, "H": 0.0, "S": 100.0 + s, "cp": 30.0}
                 for name, s in entropy.items()}
    return {"mechanism": {"name": f"turn {k:g}", "phase": "ideal gas", "standard_pressure": "1 bar", "units": ["J/mol"]},
            "elements": {"Q": blocks},
            "species": {name: {"composition": {"Q": 1}, "potential": p} for name, p in potential.items()},
            "reaction": [{"equation": f"{names[0]} = {names[1]}", "forward": {"law": "Arrhenius", "A": k}}]}


def case(mechanism, charge: str = "A", **until):
    return build_case({"vessel": {"heat": "isothermal", "volume": "1 L"}, "solver": {"rtol": 1e-10, "atol": 1e-16},
                       "start": {"temperature": T, "pressure": "1 bar", "mole_ratio": {charge: 1}},
                       "until": until or {"time": END}}, mechanism=mechanism)


def x_of_A(t: float, k: float) -> float:
    return E_A + (1.0 - E_A) * math.exp(-k * (1.0 + 1.0 / K_EQ) * t)


def half_time(k: float) -> float:
    return -math.log((0.5 - E_A) / (1.0 - E_A)) / (k * (1.0 + 1.0 / K_EQ))


@pytest.fixture(scope="module")
def doubled():
    parent = build_mechanism(document())
    return compare(parent, build_mechanism(document(2.0 * K_FIRST)), over=[case(parent)], species=["B"])


def mean_norm(shift: float, species: str) -> float:
    """∫|x - x_parent|dt / ∫x_parent dt of the rate constant doubled, the reduced taken `shift` later."""
    def gap(t: float) -> float:
        return abs(x_of_A(t + shift, 2.0 * K_FIRST) - x_of_A(t, K_FIRST))

    start, end = max(0.0, -shift), min(END, END - shift)
    base = quad(lambda t: x_of_A(t, K_FIRST) if species == "A" else 1.0 - x_of_A(t, K_FIRST), start, end)[0]
    meeting = [-shift] if start < -shift < end else None
    return quad(gap, start, end, points=meeting, limit=200)[0] / base


def test_a_doubled_rate_constant_halves_the_half_conversion_time(doubled) -> None:
    assert half_time(K_FIRST) == pytest.approx(doubled.conditions[0].half_conversion, rel=1e-8)
    assert doubled.judged[0].values("half-conversion")[0] == pytest.approx(-0.5, abs=1e-8)


def test_profile_norms_are_the_closed_form_integrals(doubled) -> None:
    shift = half_time(2.0 * K_FIRST) - half_time(K_FIRST)
    outcome = doubled.judged[0].outcomes[0]
    assert outcome.mean == pytest.approx([mean_norm(0.0, "A"), mean_norm(0.0, "B")], rel=2e-4)
    assert outcome.mean_shifted == pytest.approx([mean_norm(shift, "A"), mean_norm(shift, "B")], rel=2e-4)
    assert outcome.measures["profiles"] == pytest.approx(max(mean_norm(0.0, "A"), mean_norm(0.0, "B")), rel=2e-4)
    assert outcome.largest[0] == pytest.approx(0.25 * (1.0 - E_A), rel=1e-4)  # e^-u - e^-2u is 1/4 at most


def test_what_has_no_meaning_in_an_isothermal_case_without_change_of_amount(doubled) -> None:
    measures = doubled.judged[0].outcomes[0].measures
    assert np.isnan(measures["ignition"]) and measures["temperature"] == 0.0
    assert measures["equilibrium-composition"] == pytest.approx(0.0, abs=1e-14)
    gap = x_of_A(END, 2.0 * K_FIRST) - x_of_A(END, K_FIRST)
    assert measures["end-composition"] == pytest.approx(abs(gap), rel=1e-4)
    landing = max(abs(x_of_A(END, 2 * K_FIRST) / E_A - 1.0), abs((1.0 - x_of_A(END, 2 * K_FIRST)) / (1.0 - E_A) - 1.0))
    assert measures["landing"] == pytest.approx(landing, rel=1e-3)


def test_a_mechanism_differs_from_itself_by_nothing() -> None:
    parent = read_mechanism("hydrogen-oxygen")
    over = [build_case({"vessel": {"holds": holds}, "start": {"temperature": 1100.0, "pressure": "2 bar", "fuel": {"H2": 1},
                        "oxidiser": {"O2": 1, "N2": 3.76}, "equivalence_ratio": 1.0}, "until": {"time": "2 ms"}},
                       mechanism=parent) for holds in ("volume", "pressure")]
    judged = compare(parent, "hydrogen-oxygen", over=over, species=["OH"]).judged[0]
    for measure in MEASURES:
        if measure.name not in ("steps", "landing", "parent-landing"):
            assert judged.values(measure.name).tolist() == [0.0, 0.0], measure.name
    assert judged.values("steps").tolist() == [1.0, 1.0] and not judged.conserved.gained and not judged.conserved.lost


def test_other_names_and_lumped_species() -> None:
    parent = build_mechanism(document())
    renamed = build_mechanism(document(names="XB"))
    found = compare(parent, renamed, over=[case(parent)], mapping={"X": ["A"]})
    assert found.judged[0].values("profiles")[0] == 0.0
    two = document(more={"A2": 0.0})
    two["reaction"].append({"equation": "A = A2", "forward": {"law": "Arrhenius", "A": 1e3}})
    whole = build_mechanism(two)
    same = correspondence(whole, parent, {"A": ["A", "A2"]})
    assert same.group.tolist() == [0, 1, 0] and same.lumped(np.array([0.2, 0.5, 0.3])).tolist() == [0.5, 0.5]


def test_a_dropped_species_counts_whole_and_moves_the_equilibrium() -> None:
    """C of the entropy of B, formed from B at once: the parent ends at 1 : K : K, the reduced mechanism at 1 : K."""
    three = document(more={"C": DELTA_S})
    three["reaction"].append({"equation": "B = C", "forward": {"law": "Arrhenius", "A": 1e4}})
    parent = build_mechanism(three)
    judged = compare(parent, build_mechanism(document()), over=[case(parent, time=20.0)]).judged[0]
    theirs, own = np.array([1.0, K_EQ, K_EQ]) / (1.0 + 2.0 * K_EQ), np.array([E_A, 1.0 - E_A, 0.0])
    expected = 0.5 * np.sum(np.abs(own - theirs))
    for name in ("end-composition", "equilibrium-composition", "full-equilibrium-composition"):
        assert judged.values(name)[0] == pytest.approx(expected, rel=1e-7)
    assert judged.outcomes[0].mean[2] == 1.0 and judged.values("peaks")[0] == -1.0


def test_what_a_reduction_gains_and_loses_in_conserved_combinations() -> None:
    three = document(more={"C": DELTA_S})
    apart = build_mechanism(three)  # C stands apart
    three["reaction"].append({"equation": "B = C", "forward": {"law": "Arrhenius", "A": 1.0}})
    whole = build_mechanism(three)
    gained = compare(whole, apart, over=[case(whole)]).judged[0]
    assert gained.conserved.gained == ("C",) and gained.conserved.lost == ()
    assert gained.values("full-equilibrium-composition")[0] > 0.2
    lost = compare(apart, whole, over=[case(apart)]).judged[0]
    assert lost.conserved.lost == ("C",) and lost.conserved.gained == ()


def test_an_event_that_only_one_has_is_lacking() -> None:
    assert relative(math.nan, 1.0) == relative(1.0, math.nan) == math.inf
    assert math.isnan(relative(math.nan, math.nan)) and relative(3.0, 2.0) == 0.5
    parent = build_mechanism(document())
    judged = compare(parent, build_mechanism(document(1e-3 * K_FIRST)), over=[case(parent)]).judged[0]
    assert judged.values("half-conversion")[0] == math.inf and judged.values("profiles-shifted")[0] == math.inf


# ---- limits, tables, file


def test_limits() -> None:
    limit, kelvin = read_limits(["ignition=10%", "end-temperature=20 K"])
    assert (limit.value, kelvin.value) == (0.1, 20.0) and str(limit) == "ignition 10 %"
    assert limit.keeps(-0.1) and limit.keeps(math.nan) and not limit.keeps(0.1001) and not limit.keeps(-math.inf)
    assert read_limits({"peaks": 0.3})[0].value == 0.3


@pytest.mark.parametrize("text, problem", [
    ("ignition", "'ignition' has no ="), ("ignitoin=1%", "unknown measure 'ignitoin' (nearest: ignition"),
    ("ignition=much", "'much' is not read"), ("ignition=-1%", "expected a number above 0"),
    ("ignition=10 K", "expected a share such as 10%"), ("end-temperature=3%", "expected a temperature difference"),
    ("steps=2", "unknown measure 'steps'")])
def test_limits_that_make_no_sense(text: str, problem: str) -> None:
    with pytest.raises(InputError) as caught:
        read_limits([text])
    assert problem in str(caught.value)


def test_a_limit_stated_twice() -> None:
    with pytest.raises(InputError, match="ignition is limited twice"):
        read_limits(["ignition=10%", "ignition=20%"])


def test_tables_tell_what_was_measured(doubled) -> None:
    parent, reduced = doubled.parent, doubled.judged[0].mechanism
    strict = compare(parent, reduced, over=[case(parent)], limits=["half-conversion=10%"])
    text, table = terminal_text(strict), markdown(strict)
    assert "half-conversion 50 % -50 % 10 % 500 K, 1 bar beyond the limit" in " ".join(text.split())
    assert "not kept by turn 6: half-conversion -50 % at 500 K, 1 bar" in text and len(strict.beyond) == 1
    assert "| half-conversion | 50 % | -50 % |" in table and "| species (reactions) | 2 (1) |" in table
    rows = list(csv.DictReader(io.StringIO(csv_text(strict))))
    assert len(rows) == 1 and float(rows[0]["half-conversion"]) == pytest.approx(-0.5, abs=1e-8)
    assert rows[0]["temperature/K"] == "0.0" and rows[0]["start temperature/K"] == "500.0"


@pytest.mark.parametrize("engine", ["h5netcdf", "netcdf4"])
def test_the_file_opens_with_names_and_units(doubled, tmp_path, engine: str) -> None:
    import xarray

    write_comparison(tmp_path / "c.h5", doubled)
    with xarray.open_dataset(tmp_path / "c.h5", engine=engine) as file:
        assert file["profile_mean"].dims == ("mechanism", "condition", "species")
        assert file["profile_mean"].sel(species="A").values.ravel() == doubled.judged[0].outcomes[0].mean[0]
        assert file["temperature"].values == [500.0] and file["temperature"].attrs["units"] == "K"
        for measure in MEASURES:
            values = file[variable_of(measure.name)]
            assert values.attrs["units"] == measure.units
            np.testing.assert_array_equal(values.values[0], doubled.judged[0].values(measure.name))
    with pytest.raises(InputError, match="exists already"):
        write_comparison(tmp_path / "c.h5", doubled)


# ---- bad input


def refusal(reduced: dict, over=None, **how) -> str:
    parent = build_mechanism(document())
    with pytest.raises(InputError) as caught:
        compare(parent, build_mechanism(reduced), over=over if over is not None else [case(parent)], **how)
    return str(caught.value)


def test_species_without_counterpart() -> None:
    assert "'turn 3' has no species 'X'" in refusal(document(names="XB")) and "--mapping" in refusal(document(names="XB"))
    assert "'turn 3' has no species 'D'" in refusal(document(names="XB"), mapping={"X": ["D"]})
    assert "A of 'turn 3' is claimed by both A and X" in refusal(document(more={"X": 0.0}), mapping={"X": ["A"]})
    assert "unknown species 'Y' (known: A, B)" in refusal(document(), mapping={"Y": ["A"]})


def test_other_elements_and_other_blocks() -> None:
    other = document()
    other["species"]["A"]["composition"] = other["species"]["B"]["composition"] = {"Q": 2}
    assert "A is Q2; expected Q, as A in 'turn 3'" in refusal(other)
    assert "weighs 12 g/mol; expected 10 g/mol" in refusal(document(blocks="12 g/mol"))


def test_another_phase() -> None:
    from dataclasses import replace

    parent = build_mechanism(document())
    with pytest.raises(InputError, match="the phase is 'ideal solution'"):
        correspondence(parent, replace(parent, phase="ideal solution"))


def test_a_charged_species_that_is_lacking_and_no_conditions() -> None:
    parent = build_mechanism(document(more={"C": 0.0}))
    with pytest.raises(InputError, match="C is charged, but 'turn 3' has no such species"):
        compare(parent, build_mechanism(document()), over=[case(parent, "C")])
    assert "no conditions" in refusal(document(), over=[])


def test_mapping_files(tmp_path) -> None:
    file = tmp_path / "map.toml"
    file.write_text('[species]\nX = "A"\nL = ["B", "C"]\n', encoding="utf-8")
    assert read_mapping(file) == {"X": ("A",), "L": ("B", "C")}
    for text, problem in (("[specie]\nX = 'A'", "unknown key 'specie'"), ("[species]", "no names"),
                          ("[species]\nX = []", "an empty list"), ("[species]\nX = 3", "species.X")):
        file.write_text(text, encoding="utf-8")
        with pytest.raises(InputError, match=problem.replace("[", r"\[")):
            read_mapping(file)
