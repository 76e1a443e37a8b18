"""Equilibria by other routes: equilibrium constants in many digits, general optimisers, closed forms."""

import mpmath as mp
import numpy as np
import pytest
from scipy.optimize import brentq, minimize

from bothways import build_mechanism
from bothways.contents import Contents
from bothways.equilibrium import GibbsMinimiser, equilibrium
from equilibria import ATM, R, amounts, contents, of_known_potentials

DIGITS = 80


def _optimised(g: np.ndarray, rows: np.ndarray, charge: np.ndarray, log_ratio: mp.mpf, swells: bool) -> list[mp.mpf]:
    """ln n of the least Gibbs (Helmholtz) energy with rows @ n fixed, by Newton's method on amounts and multipliers.

    A general optimiser in 80 digits: starts from equal amounts, keeps a tenth from the boundary, ends where nothing
    changes any more. log_ratio: ln(p/p°), or ln(RT/(V p°)) where the volume is held.
    """
    totals = mp.matrix(rows.tolist()) * mp.matrix(charge.tolist())
    n = [mp.fsum(charge.tolist()) / g.size] * g.size
    for _ in range(400):
        gradient = [mp.mpf(float(g[i])) + mp.log(n[i]) + log_ratio - (mp.log(mp.fsum(n)) if swells else 0)
                    for i in range(g.size)]
        step = _step(n, gradient, rows, totals, swells)
        near = all(abs(d) < v / 100 for d, v in zip(step, n, strict=True))
        share = 1 if near else min([mp.mpf(1)] + [v * 9 / (-10 * d) for d, v in zip(step, n, strict=True) if d < 0])
        n = [v + share * d for d, v in zip(step, n, strict=True)]
        if all(abs(d) < v * mp.mpf("1e-25") for d, v in zip(step, n, strict=True)):
            return [mp.log(v) for v in n]
    raise AssertionError("the optimiser did not end")


def _step(n: list[mp.mpf], gradient: list[mp.mpf], rows: np.ndarray, totals: mp.matrix, swells: bool) -> list[mp.mpf]:
    """The change of amounts that the second derivatives and the linear constraints ask for."""
    size, m = len(n), len(rows)
    system, right = mp.zeros(size + m), mp.zeros(size + m, 1)
    for i in range(size):
        for j in range(size):
            system[i, j] = (1 / n[i] if i == j else 0) - (1 / mp.fsum(n) if swells else 0)
        right[i] = -gradient[i]
    for k in range(m):
        for i in range(size):
            system[size + k, i] = system[i, size + k] = int(rows[k, i])
        right[size + k] = totals[k] - mp.fdot(rows[k].tolist(), n)
    return list(mp.lu_solve(system, right)[:size])


@pytest.mark.parametrize("case", range(10))
def test_against_an_optimiser_in_many_digits(case):
    """Ten cases of hydrogen, oxygen and inerts, 300 to 3500 K, lean to rich, at held pressure or volume."""
    random = np.random.default_rng(case)
    of = contents("hydrogen-oxygen")
    charge = amounts(of.mechanism, {"H2": random.uniform(0.1, 3.0), "O2": 1.0, "N2": random.uniform(0, 4), "AR": 0.1})
    T, swells = float(np.linspace(300.0, 3500.0, 10)[case]), case % 2 == 0
    held = {"pressure": 10 ** random.uniform(-3, 2) * ATM} if swells else {"volume": 10 ** random.uniform(-4, 1)}
    found = equilibrium(of.mechanism, charge, temperature=T, **held)
    present = found.amount > 0
    rows = found.conserved[:, present]
    rows = rows[np.any(rows != 0, axis=1)]
    ratio = (held["pressure"] if swells else R * T / held["volume"]) / of.mechanism.standard_pressure
    with mp.workdps(DIGITS):
        log_n = _optimised(of.molar(T)[0][present], rows, charge[present], mp.log(ratio), swells)
        expected = np.array([float(v) for v in log_n])
    got = found.log_mole_fraction[present] + np.log(np.sum(found.amount))
    assert got == pytest.approx(expected, abs=1e-11)


@pytest.mark.parametrize("swells", [True, False])
def test_against_a_general_optimiser(swells):
    """The least Gibbs (Helmholtz) energy that a quasi-Newton optimiser with linear constraints finds at 3000 K."""
    document = contents("hydrogen-oxygen").mechanism.to_dict()
    document["species"] = {name: document["species"][name] for name in ("H", "H2", "O", "O2", "OH", "H2O")}
    mechanism = build_mechanism(document | {"reaction": []})
    held = {"pressure": ATM} if swells else {"volume": 0.7}
    found = equilibrium(mechanism, {"H2": 2.0, "O2": 1.0}, temperature=3000.0, **held)
    rows, n0 = found.conserved.astype(float), found.amount
    g = Contents(mechanism).molar(3000.0)[0] + np.log(found.pressure / mechanism.standard_pressure / np.sum(n0))

    def potential(n):
        mixing = np.log(n) - (np.log(np.sum(n) / np.sum(n0)) if swells else 1.0)
        return float(n @ (g + mixing)), g + mixing + (0.0 if swells else 1.0)

    start = np.full(n0.size, 0.3)
    start -= np.linalg.pinv(rows) @ (rows @ (start - n0))
    least = minimize(potential, start, jac=True, method="SLSQP", bounds=[(1e-9, None)] * n0.size,
                     constraints={"type": "eq", "fun": lambda n: rows @ (n - n0), "jac": lambda n: rows},
                     options={"ftol": 1e-15, "maxiter": 500})
    assert least.x == pytest.approx(n0, rel=2e-6)
    assert potential(n0)[0] <= least.fun + 1e-12 * abs(least.fun)


@pytest.mark.parametrize("T", [300.0, 700.0, 1500.0, 3000.0])
@pytest.mark.parametrize("excess", [0.0, 1e-25, 1e-9, 0.1])
def test_carbon_dioxide_splits_as_its_constant_says(T, excess):
    """2 CO2 = 2 CO + O2 with oxygen in excess: the cubic in the extent, in 80 digits, from 1e-45 to a half."""
    of = contents("methane")
    document = of.mechanism.to_dict()
    document["species"] = {name: document["species"][name] for name in ("CO2", "CO", "O2")}
    mechanism = build_mechanism(document | {"reaction": []})
    found = equilibrium(mechanism, {"CO2": 1.0, "O2": excess}, temperature=T, pressure=ATM)
    g = Contents(mechanism).molar(T)[0]
    with mp.workdps(DIGITS):
        K = mp.exp(2 * mp.mpf(g[0]) - 2 * mp.mpf(g[1]) - mp.mpf(g[2]))  # at p = p° = 1 atm
        e = mp.mpf(excess)
        low, high = mp.mpf("1e-70"), mp.mpf(1)
        for _ in range(400):  # extent x of CO2 = CO + ½ O2
            x = mp.sqrt(low * high)
            low, high = (x, high) if x**2 * (x / 2 + e) < K * (1 - x) ** 2 * (1 + x / 2 + e) else (low, x)
        extent = float(x)
    assert found.amount[1] == pytest.approx(extent, rel=1e-10)
    assert found.amount[2] == pytest.approx(excess + extent / 2, rel=1e-10)


def test_stoichiometric_hydrogen_and_oxygen_when_cold():
    """2:1 at 300 K: what is left of H2 and O2 follows from K alone, 1e-27; one part in 1e12 more O2 moves H2 by 1e-8."""
    of = contents("hydrogen-oxygen")
    found = equilibrium(of.mechanism, {"H2": 2.0, "O2": 1.0}, temperature=300.0, pressure=of.mechanism.standard_pressure)
    g = dict(zip(of.mechanism.names, of.molar(300.0)[0], strict=True))
    K = float(np.exp(2 * g["H2O"] - 2 * g["H2"] - g["O2"]))
    assert found.fraction("H2") == pytest.approx(2 * found.fraction("O2"), rel=1e-6)  # OH and H2O2 are rarer still
    assert found.fraction("O2") == pytest.approx((K / 4) ** (1 / 3), rel=1e-6)
    lean = equilibrium(of.mechanism, {"H2": 2.0, "O2": 1.0 + 2.0**-40}, temperature=300.0, pressure=ATM)
    assert lean.fraction("O2") == pytest.approx(2.0**-41, rel=1e-9)
    assert lean.fraction("H2") == pytest.approx(np.sqrt(K / 2.0**-41), rel=1e-6)


@pytest.mark.parametrize("K", [1e-12, 0.3, 1e9])
def test_dimer_at_held_pressure_and_volume(K):
    """A2 = 2 A from pure A2: degree of dissociation sqrt(K/(K + 4p)) at held p; 4α²c/(1 - α) = K at held V."""
    RT = R * 400.0
    mechanism = of_known_potentials(400.0, {"A2": ({"N": 2}, 0.0), "A": ({"N": 1}, -0.5 * RT * np.log(K))})
    at_p = equilibrium(mechanism, {"A2": 1.0}, temperature=400.0, pressure=2e5)
    alpha = np.sqrt(K / (K + 8.0))
    assert at_p.amount[1] == pytest.approx(2 * alpha, rel=1e-12)
    assert at_p.amount[0] == pytest.approx(8.0 / (K + 8.0) / (1 + alpha), rel=1e-10)
    at_V = equilibrium(mechanism, {"A2": 1.0}, temperature=400.0, volume=RT / 1e5)  # c RT = 1 bar before dissociation
    alpha = 2 / (1 + np.sqrt(1 + 16 / K)) if K > 1e-3 else K / 8 * (np.sqrt(1 + 16 / K) - 1)
    assert at_V.amount[1] == pytest.approx(2 * alpha, rel=1e-12)


def test_heat_of_an_isomerisation():
    """A = B, equal cp, released h: x_B = K/(1 + K) and T = T0 + x_B·(-ΔH)/cp at held pressure, by bisection."""
    document = of_known_potentials(500.0, {"A": ({"N": 2}, 0.0), "B": ({"N": 2}, 0.0)}).to_dict()
    document["species"]["B"]["potential"] |= {"H": -2e4, "G": -1e3}
    mechanism = build_mechanism(document)
    found = equilibrium(mechanism, {"A": 1.0}, enthalpy=40.0 * (300.0 - 500.0), pressure=1e5)

    def fraction(T):  # ΔS at 500 K = (ΔH - ΔG)/500
        K = np.exp(-(-2e4 - T * (-2e4 + 1e3) / 500.0) / (R * T))
        return K / (1 + K)

    low, high = 300.0, 800.0
    for _ in range(80):
        T = 0.5 * (low + high)
        low, high = (T, high) if 300.0 + fraction(T) * 2e4 / 40.0 > T else (low, T)
    assert found.temperature == pytest.approx(T, rel=1e-12)
    assert found.fraction("B") == pytest.approx(fraction(T), rel=1e-11)


def test_entropy_is_greatest_at_held_energy_and_volume():
    """Along random directions that keep atoms and energy, the entropy falls as the square of the distance."""
    of = contents("methane")
    charge = amounts(of.mechanism, {"CH4": 1.0, "O2": 1.8, "N2": 6.0})
    find = GibbsMinimiser(of.mechanism)
    V, energy = 0.25, of.internal_energy(charge, 400.0)
    found = find.solve(charge, internal_energy=energy, volume=V)
    there = found.mole_fraction > 1e-6
    null = np.linalg.svd(found.conserved[:, there].astype(float))[2][4:]
    random = np.random.default_rng(0)
    best = of.entropy(found.amount, found.temperature, V)
    for _ in range(20):
        direction = np.zeros(53)
        direction[there] = random.normal(size=len(null)) @ null
        direction *= 0.3 * np.min(found.amount[there]) / np.max(np.abs(direction))
        for sign in (1.0, -1.0):
            n = found.amount + sign * direction
            T = brentq(lambda T, n=n: of.internal_energy(n, T) - energy, 1000.0, 4000.0, xtol=1e-10, rtol=1e-14)
            assert of.entropy(n, T, V) < best
