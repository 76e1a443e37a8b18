"""What is known to be in the bundled sets is found in them; thermal NO against published pairs."""

from typing import Any

import numpy as np
import pytest

from bothways import audit, build_mechanism, read_mechanism
from bothways.audit import Audit
from bothways.audit.findings.published_reverse import pairs
from bothways.audit.survey import Survey


@pytest.fixture(scope="module")
def n_alkanes() -> Audit:
    return audit(read_mechanism("n-alkanes"))


def test_open_joins_of_n_alkanes(n_alkanes: Audit) -> None:
    """Counted from the published coefficients apart from the program: 23 species miss by more than 0.01 in h/RT or s/R, the
    worst by 0.784 in h/RT and 3.30 in s/R; 18 of them meet at 1000 K instead."""
    document = read_mechanism("n-alkanes").to_dict()
    missed, elsewhere, worst = [], 0, np.zeros(2)
    for name, species in document["species"].items():
        potential = species["potential"]
        for k, T in enumerate(potential["T"][1:-1]):
            gap = np.abs(_h_and_s(potential["a"][k + 1], T) - _h_and_s(potential["a"][k], T))
            worst = np.maximum(worst, gap)
            if gap.max() >= 0.01:
                missed.append(name)
                there = np.abs(_h_and_s(potential["a"][k + 1], 1000.0) - _h_and_s(potential["a"][k], 1000.0))
                elsewhere += T != 1000.0 and there.max() < 1e-3
    rows = [row for row in n_alkanes.of("open join") if row.value >= 0.01]
    assert sorted(row.species for row in rows) == sorted(missed) and len(missed) == 23
    assert sum("1000 K instead" in row.text for row in rows) == elsewhere == 18
    assert worst == pytest.approx([0.784, 3.30], abs=5e-3)
    assert {row.species for row in rows if row.severity == "error"} == {"CH3CHCHCHO", "C2H3CHOCH2"}


def _h_and_s(a: list[float], T: float) -> np.ndarray:
    """h/RT and s/R of a NASA 7-coefficient range."""
    h = a[0] + a[1] * T / 2 + a[2] * T**2 / 3 + a[3] * T**3 / 4 + a[4] * T**4 / 5 + a[5] / T
    s = a[0] * np.log(T) + a[1] * T + a[2] * T**2 / 2 + a[3] * T**3 / 3 + a[4] * T**4 / 4 + a[6]
    return np.array([h, s])


def test_broadening_of_n_alkanes(n_alkanes: Audit) -> None:
    """F_cent from its own formula on the published numbers: above 1.5 in 246 fall-off terms, up to 20 at 300 K."""
    T = np.linspace(300.0, 2500.0, 23)
    largest = []
    for reaction in read_mechanism("n-alkanes").to_dict()["reaction"]:
        terms = reaction["forward"] if isinstance(reaction["forward"], list) else [reaction["forward"]]
        largest += [float(np.max(_centre(term["F_cent"], T))) for term in terms if "F_cent" in term]
    rows = list(n_alkanes.of("broadening above 1"))
    assert len(rows) == sum(value > 1.001 for value in largest) and max(row.value for row in rows) == pytest.approx(max(largest))
    assert sum(row.value > 1.5 for row in rows) == 246 and 19.5 < max(largest) < 20.5


def _centre(c: Any, T: np.ndarray) -> np.ndarray:
    """F_cent of a number or of a, T***, T*, T**."""
    if not isinstance(c, dict):
        return np.full_like(T, c)
    F = (1 - c["a"]) * np.exp(-T / c["T***"]) + c["a"] * np.exp(-T / c["T*"])
    return F + (np.exp(-c["T**"] / T) if "T**" in c else 0.0)


def test_one_way_steps_and_other_marks_of_n_alkanes(n_alkanes: Audit) -> None:
    document = read_mechanism("n-alkanes").to_dict()
    assert len(list(n_alkanes.of("published one way"))) == sum("published_one_way" in r for r in document["reaction"]) == 74
    assert len(list(n_alkanes.of("stated both ways round"))) == 2
    assert {row.species for row in n_alkanes.of("takes no part")} > {"AR", "N2"}
    copied = [row for row in n_alkanes.of("same data") if row.severity == "error"]
    assert [row.species for row in copied] == ["SXC5H11"] and "SXC5H9" in copied[0].text  # identical as published
    assert document["species"]["SXC5H11"]["potential"] == document["species"]["SXC5H9"]["potential"]
    [worst] = [row for row in n_alkanes.of("faster than collisions") if row.decades > 20]
    assert worst.likely == "the thermochemistry of SXC5H11 (same data)"


def test_methane_has_the_old_enthalpy_of_OH() -> None:
    result = audit(read_mechanism("methane"))
    [row] = [row for row in result.of("enthalpy of formation") if row.species == "OH"]
    assert row.value == pytest.approx(39.35e3, abs=10) and "37.50 ± 0.03" in row.text and row.severity == "notice"
    assert len(list(result.of("published one way"))) == 16
    assert not list(result.of("conserved besides the elements"))


@pytest.mark.parametrize("name", ["hydrogen-oxygen", "thermal-no", "nitrogen-dioxide"])
def test_small_bundled_sets_have_no_error(name: str) -> None:
    assert audit(read_mechanism(name)).passed


# k = A T^n exp(-θ/T), cm3 mol s, of both directions: R.K. Hanson, S. Salimian in Combustion Chemistry (ed. W.C. Gardiner),
# Springer 1984, ch. 6 (as two public files carry them; the last reverse from memory)
HANSON = {"O + N2 ⇌ NO + N": ((1.8e14, 0.0, 38370.0), (3.8e13, 0.0, 425.0), (1.05, 1.09)),
          "N + O2 ⇌ NO + O": ((1.8e10, 1.0, 4680.0), (3.81e9, 1.0, 20820.0), (1.07, 1.11)),
          "N + OH ⇌ NO + H": ((7.1e13, 0.0, 450.0), (1.7e14, 0.0, 24560.0), (1.23, 1.44))}


def zeldovich() -> Audit:
    document = read_mechanism("thermal-no").to_dict()
    document["reaction"] = [{"equation": equation, "forward": {"law": "Arrhenius", "A": A, "n": n, "Ea": Ea},
                             "published_reverse": {"A": B, "n": m, "Ea": Eb}}
                            for equation, ((A, n, Ea), (B, m, Eb), _) in HANSON.items()]
    return audit(build_mechanism(document), temperatures=(1500.0, 3000.0))


def test_thermal_NO_published_and_derived_reverse_constants() -> None:
    """k_f/k_r over K of NASA/TP-2002-211556, which is derived over published: 1.05 to 1.09, 1.07 to 1.11, 1.23 to 1.44
    from 1500 to 3000 K (worked out from that report's tables apart from the program, to two decimals)."""
    result = zeldovich()
    found = pairs(result.survey)
    for j, (_, _, (low, high)) in enumerate(HANSON.values()):
        published, derived = found[j]
        ratio = np.exp(derived - published)
        ends = sorted([float(ratio.min()), float(ratio.max())])
        assert ends == pytest.approx([low, high], abs=0.02), list(HANSON)[j]
    rows = list(result.of("published reverse"))
    assert len(rows) == 3 and all(row.severity == "notice" for row in rows) and [row.reaction for row in rows] == [3, 2, 1]
    assert result.agreement == {"published": 3.0, "within 2": 1.0, "within 10": 1.0}


def test_survey_agrees_with_the_kernels() -> None:
    """Forward constants of every reaction of a set, plain and compiled, in pure N2 at p/RT (each partner by its efficiency)."""
    from bothways import Equations

    m = read_mechanism("methane")
    T, p = 1234.0, 3e5
    survey = Survey(m, np.array([T]), np.array([p]))
    c = np.full(len(m.names), 1e-3)
    c *= p / (8.31446261815324 * T) / c.sum()
    forward, _ = Equations(m, "volume", "isothermal").reaction_rates(np.append(c, T))
    for j, reaction in enumerate(m.reactions):
        if not any(term.partner for term in reaction.terms):
            order = sum(count for _, count in reaction.equation.reactants)
            assert survey.forward[0, 0, j] * c[0] ** order == pytest.approx(forward[j], rel=1e-11)
