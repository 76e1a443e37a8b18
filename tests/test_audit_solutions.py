"""Audits of solutions: what the kinetic theory of gases says is not asked, the rest is."""

from typing import Any

import numpy as np
import pytest

import solutions
from bothways import audit, build_mechanism
from bothways.audit import summary

R = 8.31446261815324


@pytest.mark.parametrize("state", solutions.STATES)
def test_a_solution_is_looked_over(state: str) -> None:
    result = audit(build_mechanism(solutions.document(state)))
    T = result.survey.temperatures
    assert (T[0], T[-1]) == (273.15, 373.15) and "bar" not in summary(result).splitlines()[1]
    gas = {"faster than collisions", "heat capacity", "entropy", "A-factor", "enthalpy of formation"}
    assert not gas & {row.kind for row in result.findings} and result.passed


def derived(state: str, j: int, T: float) -> Any:
    """k_f/K_c of a reaction whose amount does not change or whose standard state is 1 mol/L, from the definitions."""
    plain = solutions.Plain(state, "isothermal")
    equation, A, Ea = solutions.REACTIONS[j]
    left, right = plain.sides(equation)
    h, s = plain.H + plain.cp * (T - 298.15), plain.S + plain.cp * np.log(T / 298.15)
    K = np.exp(-((right - left) @ (h - T * s)) / (R * T)) * 1000.0 ** float(np.sum(right - left))
    return float(A * np.exp(-Ea / (R * T)) / K)


def test_published_reverse_in_a_solution() -> None:
    document = solutions.document("1 mol/L")
    document["reaction"][0]["published_reverse"] = {"A": 3.0 * derived("1 mol/L", 0, 320.0)}
    [row] = audit(build_mechanism(document), temperatures=(320.0, 320.0)).of("published reverse")
    assert row.value == pytest.approx(3.0, rel=1e-9) and row.severity == "warning"


def test_a_constant_that_hangs_on_the_total_concentration_is_not_compared() -> None:
    document = solutions.document("mole fraction")
    document["reaction"][0]["published_reverse"] = {"A": 1.0}
    result = audit(build_mechanism(document))
    assert not list(result.of("published reverse")) and result.agreement["published"] == 0


def test_one_way_in_a_solution() -> None:
    document = solutions.document("1 mol/L")
    document["reaction"][0]["published_one_way"] = True
    [row] = audit(build_mechanism(document)).of("published one way")
    assert "all at activity one" in row.text and np.isnan(row.pressure)
