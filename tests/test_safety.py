"""Process-safety figures against closed forms and direct quadrature."""

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import expi

from bothways import build_case, build_mechanism, run
from bothways.constants import GAS_CONSTANT as R
from bothways.report import CAUTION, summary
from bothways.safety import time_to_maximum_rate

CP = 40.0


def batch(rise, theta, A, start, holds="pressure", **more):
    """A → B, first order with k = A exp(-θ/T), that would heat its contents of constant cp by `rise` [K]; K is about e^30."""
    cp = CP if holds == "pressure" else CP + R
    species = {n: {"formula": "Q", "potential": {"form": "constant heat capacity", "at": 400.0, "H": h, "S": s, "cp": cp}}
               for n, h, s in (("A", 0.0, 100.0), ("B", -rise * CP, 400.0))}
    mechanism = build_mechanism({
        "mechanism": {"name": "invented", "phase": "ideal gas", "standard_pressure": "1 bar"}, "elements": {"Q": "20 g/mol"},
        "species": species, "reaction": [{"equation": "A = B", "forward": {"law": "Arrhenius", "A": A, "Ea": R * theta}}]})
    document = {"vessel": {"holds": holds, "volume": "1 L", "heat": "adiabatic"} | more.pop("vessel", {}),
                "start": {"temperature": start, "pressure": 1e5, "mole_ratio": {"A": 1}}, "until": {"time": 1.0},
                "solver": {"rtol": 1e-10}} | more
    return build_case(document, mechanism=mechanism)


def time_of(T, T0, rise, theta, A):
    """t(T) of adiabatic first-order heating, dT/dt = A exp(-θ/T)(T_f - T): with z = θ/T and Ei the exponential integral."""
    z0, z, zf = theta / T0, theta / T, theta / (T0 + rise)
    return (np.exp(zf) * (expi(z0 - zf) - expi(z - zf)) - (expi(z0) - expi(z))) / A


def fastest(T0, rise, theta):
    """T of the fastest rise, from d(dT/dt)/dT = 0: T² = θ (T_f - T)."""
    return 0.5 * (-theta + np.sqrt(theta**2 + 4 * theta * (T0 + rise)))


def test_the_closed_form_is_that_of_quadrature():
    T = fastest(500.0, 300.0, 12000.0)
    by_quadrature = quad(lambda x: np.exp(12000.0 / x) / (1e10 * (800.0 - x)), 500.0, T, epsrel=1e-12)[0]
    assert time_of(T, 500.0, 300.0, 12000.0, 1e10) == pytest.approx(by_quadrature, rel=1e-9)


@pytest.mark.parametrize("holds", ["pressure", "volume"])
def test_time_to_maximum_rate_of_first_order_heating(holds):
    """1e-6 of the closed form; from its own start the same as the milestone of the run."""
    case = batch(300.0, 12000.0, 1e10, 500.0, holds, output={"time_to_maximum_rate_from": [500.0, "200 °C"]})
    result = run(case)
    for T0 in (500.0, 473.15):
        exact = time_of(fastest(T0, 300.0, 12000.0), T0, 300.0, 12000.0, 1e10)
        assert result.milestones[f"time to maximum rate from {T0:g} K"] == pytest.approx(exact, rel=1e-6)
    assert result.milestones["steepest temperature rise"] == pytest.approx(
        result.milestones["time to maximum rate from 500 K"], rel=1e-7)


def test_rise_and_fastest_rates():
    """Rise to the equilibrium, dT/dt = A exp(-θ/T)(T_f - T) at its maximum, dp/dt = p dT/dt/T at constant amount."""
    result = run(batch(300.0, 12000.0, 1e10, 500.0, "volume"))
    T = fastest(500.0, 300.0, 12000.0)
    rate = 1e10 * np.exp(-12000.0 / T) * (800.0 - T)
    assert result.extra["adiabatic_temperature_rise"] == pytest.approx(300.0, rel=1e-7)
    assert result.extra["largest_temperature_rate"] == pytest.approx(rate, rel=1e-6)
    assert result.extra["largest_temperature_rate_time"] == pytest.approx(time_of(T, 500.0, 300.0, 12000.0, 1e10), rel=1e-5)
    assert result.extra["largest_pressure_rate"] == pytest.approx(rate * 1e5 / 500.0, rel=1e-6)


def test_zero_order_heating_by_the_rule_of_thumb():
    """TMR_ad ≈ cp R T₀²/(q Ea) for a reactant that is hardly consumed: 2 T₀/θ above it, to first order in T₀/θ."""
    T0, theta, rise, A = 400.0, 20000.0, 3000.0, 1e12
    case = batch(rise, theta, A, T0)
    rule = CP * R * T0**2 / (rise * CP * A * np.exp(-theta / T0) * R * theta)
    assert time_to_maximum_rate(case, T0) / rule == pytest.approx(1 + 2 * T0 / theta, abs=0.006)


@pytest.mark.parametrize("inertia", [1.5, 3.0])
def test_thermal_inertia_slows_rise_and_rate(inertia):
    """The same closed form with the rise divided by φ (Townsend and Tou 1980); the rise reported is that at φ = 1."""
    case = batch(300.0, 12000.0, 1e10, 500.0, vessel={"thermal_inertia": inertia, "heat": "adiabatic", "holds": "pressure"})
    T = fastest(500.0, 300.0 / inertia, 12000.0)
    exact = time_of(T, 500.0, 300.0 / inertia, 12000.0, 1e10)
    assert time_to_maximum_rate(case, 500.0, inertia) == pytest.approx(exact, rel=1e-6)
    result = run(case)
    assert result.milestones["steepest temperature rise"] == pytest.approx(exact, rel=1e-6)
    assert result.extra["adiabatic_temperature_rise"] == pytest.approx(300.0, rel=1e-7)


def test_what_does_not_run_away():
    """No heat at all, heat taken up, and a rise that is fastest at once."""
    assert time_to_maximum_rate(batch(-20.0, 12000.0, 1e10, 500.0), 500.0) is None
    assert time_to_maximum_rate(batch(5.0, 1000.0, 1e2, 500.0), 500.0) == 0.0
    result = run(batch(-20.0, 12000.0, 1e10, 500.0, output={"time_to_maximum_rate_from": [500.0]}))
    assert "time to maximum rate from 500 K" not in result.milestones


def test_a_jacket_that_fails_at_the_worst_moment():
    """The most heat is held at once where the jacket is cold: T_0 + 300 K; a warm one adds what it gave."""
    cold, warm = (run(batch(300.0, 12000.0, 1e10, 500.0, vessel={"heat": "jacket", "UA": 0.05, "jacket_temperature": T,
                                                                 "holds": "pressure", "volume": "1 L"})) for T in (400.0, 550.0))
    assert cold.extra["cooling_failure_temperature"] == pytest.approx(800.0, rel=1e-6)
    most = np.max(warm.extra["heat_received"])
    amount = 1e5 * 1e-3 / (R * 500.0)
    assert most > 0
    assert warm.extra["cooling_failure_temperature"] == pytest.approx(800.0 + most / (amount * CP), rel=1e-6)


def test_the_report_shows_them_with_the_caution():
    from bothways.batch import run_and_judge

    case = batch(300.0, 12000.0, 1e10, 500.0, "volume", output={"time_to_maximum_rate_from": ["226.85 °C"]})
    text = summary(case, *run_and_judge(case))
    for words in ("adiabatic temperature rise", "300", "largest rate of temperature rise", "largest rate of pressure rise",
                  "time to maximum rate from 500 K", "223.36 ms"):
        assert words in text
    assert CAUTION.split()[0] in text and "caution" in text
