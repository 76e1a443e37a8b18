"""Mechanisms: the bundled ones as published, file and model the same thing, joins, forward rates."""

import copy
import statistics
import time
import tomllib
from pathlib import Path
from typing import Any

import numpy as np
import pytest

import invented
from bothways import InputError, Mechanism, build_mechanism, bundled_mechanisms, read_mechanism, write_mechanism
from bothways.mechanism import build_tables
from bothways.thermo import at
from reference import Reference

R = 8.31446261815324  # J/(mol K)
INVENTED = {"closed": invented.building_blocks(), "as published": invented.building_blocks_as_published(),
            "in molecules": invented.building_blocks_in_molecules()}
PUBLISHED = {  # species, reactions as the sources count them: every term and every one-way half is one
    "hydrogen-oxygen": (13, 27), "methane": (53, 325), "c1-c4": (111, 784), "n-alkanes": (348, 2163)}


@pytest.fixture(scope="module")
def bundled() -> dict[str, Mechanism]:
    return {name: read_mechanism(name) for name in PUBLISHED}


@pytest.fixture(scope="module")
def blocks() -> Mechanism:
    return build_mechanism(INVENTED["closed"])


def document_of(name: str) -> dict[str, Any]:
    return tomllib.loads(bundled_mechanisms()[name].read_text(encoding="utf-8"))


# ---- the bundled mechanisms


@pytest.mark.parametrize("name", PUBLISHED)
def test_counts_are_those_of_the_sources(bundled: dict[str, Mechanism], name: str) -> None:
    m = bundled[name]
    terms = sum(len(r.terms) for r in m.reactions)
    reverse_halves = sum(r.published_reverse is not None for r in m.reactions)
    assert (len(m.species), terms + reverse_halves) == PUBLISHED[name]
    assert m.name == name and m.phase == "ideal gas" and m.standard_pressure == 101325.0 and m.sources


@pytest.mark.parametrize("name", PUBLISHED)
def test_every_reaction_conserves_elements_and_charge(bundled: dict[str, Mechanism], name: str) -> None:
    m = bundled[name]
    assert not np.any(m.element_matrix @ m.stoichiometry)
    assert np.abs(m.molar_mass @ m.stoichiometry).max() < 1e-16
    assert np.abs(m.stoichiometry).sum(axis=0).min() >= 2


@pytest.mark.parametrize("name", PUBLISHED)
def test_no_equation_stands_twice(bundled: dict[str, Mechanism], name: str) -> None:
    keys = [r.equation.key for r in bundled[name].reactions]
    assert len(set(keys)) == len(keys)


REFERENCE = [  # ΔfH°(298.15 K) [kJ/mol], S°(298.15 K, 1 bar) [J/(mol K)]: CODATA key values (J.D. Cox, D.D. Wagman,
    # V.A. Medvedev, 1989); CH4: L.V. Gurvich et al., Thermodynamic Properties of Individual Substances (1991)
    ("H2O", -241.826, 188.835), ("CO2", -393.51, 213.785), ("CO", -110.53, 197.660), ("O", 249.18, 161.059),
    ("H", 217.998, 114.717), ("N2", 0.0, 191.609), ("O2", 0.0, 205.152), ("H2", 0.0, 130.680), ("CH4", -74.60, 186.371)]


@pytest.mark.parametrize("species, enthalpy, entropy", REFERENCE)
@pytest.mark.parametrize("name", ["methane", "c1-c4"])
def test_species_against_tables(bundled: dict[str, Mechanism], name: str, species: str, enthalpy: float,
                                entropy: float) -> None:
    """Fits of different vintage: within 0.35 kJ/mol and 0.25 J/(mol K). p° = 1 atm lowers S° by R ln 1.01325."""
    m = bundled[name]
    _, h, s = at(m.ranges(m.index(species)), 298.15)
    assert h * R * 298.15 / 1e3 == pytest.approx(enthalpy, abs=0.35)
    assert s * R == pytest.approx(entropy - R * np.log(1.01325), abs=0.25)


def reaction(m: Mechanism, text: str):
    return next(r for r in m.reactions if str(r.equation) == text)


def test_rate_constants_by_hand(bundled: dict[str, Mechanism]) -> None:
    """H + O2 ⇌ O + OH: 1.04e14 cm3/(mol s) exp(-15286 cal/mol/RT) at 1000 K, R = 1.98720426 cal/(mol K)."""
    k = reaction(bundled["hydrogen-oxygen"], "H + O2 ⇌ O + OH").forward_constant(1000.0)
    assert k == pytest.approx(1.04e8 * np.exp(-15286 / (8.31446261815324 / 4.184 * 1000)), rel=1e-13)
    assert k == pytest.approx(4.744e4, rel=1e-3)
    k = reaction(bundled["methane"], "2 O + M ⇌ O2 + M").forward_constant(2000.0, 3.0)
    assert k == pytest.approx(1.2e17 * 1e-12 / 2000 * 3, rel=1e-14)


# ---- documents, files, models


def same_tables(a: Mechanism, b: Mechanism) -> bool:
    first, second = build_tables(a), build_tables(b)
    return bool(np.array_equal(first.ints, second.ints) and np.array_equal(first.floats, second.floats))


def assert_identity(m: Mechanism, path: Path) -> None:
    write_mechanism(m, path)
    again = read_mechanism(path)
    assert again == m and again.document == m.document and list(again.document["species"]) == list(m.names)
    assert same_tables(again, m)
    second = path.with_name("again.toml")
    write_mechanism(again, second)
    assert second.read_bytes() == path.read_bytes()


@pytest.mark.parametrize("name", PUBLISHED)
def test_file_model_file_model(bundled: dict[str, Mechanism], name: str, tmp_path: Path) -> None:
    assert bundled[name].document == document_of(name)
    assert_identity(bundled[name], tmp_path / "m.toml")


@pytest.mark.parametrize("name", INVENTED)
def test_invented_file_model_file_model(name: str, tmp_path: Path) -> None:
    assert_identity(build_mechanism(INVENTED[name]), tmp_path / "m.toml")


@pytest.mark.parametrize("name", PUBLISHED)
def test_a_plain_dict_gives_what_the_file_gives(bundled: dict[str, Mechanism], name: str) -> None:
    document = document_of(name)
    before = copy.deepcopy(document)
    assert build_mechanism(document) == bundled[name]
    assert document == before


def test_text_and_dict_of_an_invented_mechanism(tmp_path: Path) -> None:
    for document in INVENTED.values():
        (tmp_path / "m.toml").write_text(invented.toml_text(document), encoding="utf-8")
        assert read_mechanism(tmp_path / "m.toml") == build_mechanism(document)


def test_a_mechanism_keeps_its_own_document(blocks: Mechanism) -> None:
    given = invented.building_blocks()
    m = build_mechanism(given)
    given["species"].clear()
    m.to_dict()["reaction"].clear()
    assert m.document == INVENTED["closed"] and m == blocks
    assert build_mechanism(m.to_dict()) == m


def test_the_same_mechanism_in_other_units(blocks: Mechanism) -> None:
    other = build_mechanism(INVENTED["in molecules"])
    for a, b in zip(blocks.reactions, other.reactions, strict=True):
        for M in (0.1, 30.0):
            assert a.forward_constant(900.0, M) == pytest.approx(b.forward_constant(900.0, M), rel=1e-12)
    for k in range(len(blocks.names)):
        assert at(blocks.ranges(k), 700.0) == pytest.approx(at(other.ranges(k), 700.0), rel=1e-12)


def test_writing_refuses_and_replaces(blocks: Mechanism, tmp_path: Path) -> None:
    path = tmp_path / "m.toml"
    path.write_text("of someone else")
    with pytest.raises(InputError, match=r"m.toml: the file exists already; .*replace=True"):
        write_mechanism(blocks, path)
    assert path.read_text() == "of someone else"
    write_mechanism(blocks, path, replace=True)
    assert read_mechanism(path) == blocks
    with pytest.raises(InputError, match=r"there is no folder"):
        write_mechanism(blocks, tmp_path / "no" / "m.toml")


LIMITS = {"methane": 0.15, "n-alkanes": 1.0}


@pytest.mark.parametrize("name", LIMITS)
def test_reading_takes_little_time(name: str) -> None:
    """Median of five, in seconds of this process's own computing, so that a busy machine does not count."""
    seconds = []
    for _ in range(5):
        began = time.process_time()
        read_mechanism(name)
        seconds.append(time.process_time() - began)
    assert statistics.median(seconds) < LIMITS[name]


# ---- joins


def jumps(m: Mechanism, k: int) -> list[tuple[float, float]]:
    """Jumps of h/RT and s/R at each inner boundary of species k."""
    ranges = m.ranges(k)
    found = []
    for T in ranges.boundaries[1:-1]:
        (_, h0, s0), (_, h1, s1) = at(ranges, T * (1 - 1e-13)), at(ranges, T)
        found.append((h1 - h0, s1 - s0))
    return found


def test_closed_joins_meet_and_their_shifts_are_reported(blocks: Mechanism) -> None:
    open_m = build_mechanism(INVENTED["as published"])
    assert open_m.join_shifts == ()
    reported = {name for name, _ in blocks.join_shifts}
    for k, name in enumerate(blocks.names):
        gaps, closed = jumps(open_m, k), jumps(blocks, k)
        assert all(abs(x) < 1e-9 for pair in closed for x in pair)
        assert (name in reported) == any(abs(x) > 1e-4 for pair in gaps for x in pair)
        shifts = [shift for other, shift in blocks.join_shifts if other == name]
        if len(gaps) == 1:
            assert (-shifts[0].h, -shifts[0].s) == pytest.approx(gaps[0], abs=1e-9)
            assert shifts[0].temperature == open_m.ranges(k).boundaries[1]


def test_joins_are_closed_where_the_file_does_not_say() -> None:
    document = invented.building_blocks()
    del document["mechanism"]["joins"]
    assert build_mechanism(document).joins == "closed"
    assert same_tables(build_mechanism(document), build_mechanism(INVENTED["closed"]))


def test_published_ranges_that_do_not_meet_are_reported(bundled: dict[str, Mechanism]) -> None:
    """The sources' thermochemistry of c1-c4 is up to 0.78 in h/RT and 3.3 in s/R apart at the common temperature."""
    shifts = [shift for _, shift in bundled["c1-c4"].join_shifts]
    assert max(abs(s.h) for s in shifts) == pytest.approx(0.78, abs=0.01)
    assert max(abs(s.s) for s in shifts) == pytest.approx(3.3, abs=0.05)


# ---- what is recorded only


def test_what_a_source_claims_of_the_reverse_changes_nothing(blocks: Mechanism) -> None:
    document = invented.building_blocks()
    claimed = [e for e in document["reaction"] if e.pop("published_one_way", None) or e.pop("published_reverse", None)]
    assert len(claimed) == 2 and same_tables(build_mechanism(document), blocks)
    reverse = reaction(blocks, "X + Q2X2 ⇌ QX2 + QX").published_reverse
    assert (reverse.A, reverse.n, reverse.Ea) == pytest.approx((1e6, 0.5, 3e5), rel=1e-14)  # dm3/(mol s), kJ/mol
    assert [r.published_one_way for r in blocks.reactions].count(True) == 1
    document["reaction"][3]["published_reverse"] = {"A": 1e9}
    assert not build_mechanism(document) == blocks


# ---- forward rate constants, by an independent route


def expected_constants(reference: Reference, T: float, M: float) -> np.ndarray:
    """k of every reaction as `Reference.rate_constant` gives it, times [M] where + M stands in the equation."""
    k = np.array([reference.rate_constant(j, T, M) for j in range(len(reference.reactions))], dtype=float)
    return k * np.where([r.plus_m for r in reference.reactions], M, 1.0)


GRID = [(300.0, 1e-3), (640.0, 30.0), (1000.0, 0.0), (1333.0, 1e4), (2950.0, 4.0)]


@pytest.mark.parametrize("name", [*PUBLISHED, *INVENTED])
def test_plain_laws_against_the_reference(name: str) -> None:
    """The plain-Python k(T, [M]) of every reaction to 1e-13, against formulas in extended precision."""
    document = INVENTED[name] if name in INVENTED else document_of(name)
    m, reference = build_mechanism(document), Reference(document, np.longdouble)
    for T, M in GRID:
        found = np.array([r.forward_constant(T, M) for r in m.reactions])
        np.testing.assert_allclose(found, expected_constants(reference, T, M), rtol=1e-13, atol=0)
