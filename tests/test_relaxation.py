"""Relaxation times against the exact ones of closed forms, and their steadiness."""

import numpy as np
import pytest

from bothways import build_case, build_mechanism
from bothways.endpoint import target_of
from bothways.relaxation import singular_values

HEAD = {"mechanism": {"name": "invented", "phase": "ideal gas", "standard_pressure": "1 bar"},
        "elements": {"Q": "20 g/mol"}}


def chain(constants, g, start, temperature=500.0):
    """Isomers A, B, C… of one building block with ΔG° = g [J/mol] and first-order steps (from, to, k)."""
    names = "ABCDE"[: len(g)]
    species = {n: {"formula": "Q", "potential": {"form": "constant heat capacity", "at": temperature, "H": 0.0,
                                                 "G": value, "cp": 30.0}} for n, value in zip(names, g, strict=True)}
    document = {**HEAD, "species": species,
                "reaction": [{"equation": f"{a} = {b}", "forward": {"law": "Arrhenius", "A": k}} for a, b, k in constants]}
    return build_case({"vessel": {"heat": "isothermal"},
                       "start": {"temperature": temperature, "pressure": "1 bar", "mole_ratio": start},
                       "until": {"time": 1.0}}, mechanism=build_mechanism(document))


def slowest(case):
    target = target_of(case)
    return target.relaxation_time(target.own.mole_fraction)


def from_ratio(*ratios):
    """G of each species whose equilibrium amounts stand in these ratios, at 500 K."""
    return [-8.31446261815324 * 500.0 * np.log(r) for r in ratios]


def test_consecutive_steps():
    """A ⇌ B ⇌ C, k = 1, 0.3, 0.5, 0.2 1/s: eigenvalues -0.510102051443364 and -1.48989794855664 (closed form)."""
    case = chain([("A", "B", 1.0), ("B", "C", 0.5)], from_ratio(1.0, 1 / 0.3, 0.5 / 0.3 / 0.2), {"A": 1})
    assert abs(slowest(case) * 0.510102051443364 - 1) < 1e-8


def test_cycle():
    """A three-species cycle at ratios 1:2:4: the slower eigenvalue is -1.26606100623285 (closed form)."""
    case = chain([("A", "B", 1.0), ("B", "C", 0.8), ("C", "A", 0.15)], from_ratio(1.0, 2.0, 4.0), {"A": 1})
    assert abs(slowest(case) * 1.26606100623285 - 1) < 1e-8


def dissociation(holds):
    """N2O4 ⇌ 2 NO2 as building blocks with K = 0.148428 bar at 298.15 K, first order with kf = 1 1/s."""
    g = -8.31446261815324 * 298.15 * np.log(0.148428)
    species = {n: {"composition": {"Q": k}, "potential": {"form": "constant heat capacity", "at": 298.15, "H": h, "G": value,
                                                          "cp": 40.0}}
               for n, k, h, value in (("D", 2, 0.0, 0.0), ("N", 1, 28.6e3, 0.5 * g))}
    document = {**HEAD, "species": species,
                "reaction": [{"equation": "D = 2 N", "forward": {"law": "Arrhenius", "A": 1.0}}]}
    return build_case({"vessel": {"heat": "isothermal", "holds": holds}, "start": {"temperature": 298.15, "pressure": "1 atm",
                       "mole_ratio": {"D": 1}}, "until": {"time": 1.0}}, mechanism=build_mechanism(document))


def test_dissociation_at_constant_volume():
    """1/τ = kf + 4 kr [NO2]e = 10.4987939588 kf (closed form, p0 = 1 atm)."""
    assert abs(slowest(dissociation("volume")) * 10.4987939588 - 1) < 1e-8


def test_dissociation_at_constant_pressure():
    """kf t = α_e artanh(α/α_e) - (α_e²/2) ln(1 - α²/α_e²) (closed form): the time in which α_e - α halves near the end."""
    alpha = 0.18795741135671
    h = 1e-6 * alpha
    times = [alpha * np.arctanh(a / alpha) - alpha**2 / 2 * np.log(1 - (a / alpha) ** 2) for a in (alpha - 2 * h, alpha - h)]
    slope = np.log(2.0) / (times[1] - times[0])
    assert abs(slowest(dissociation("pressure")) * slope - 1) < 1e-5


@pytest.mark.parametrize("heat, holds", [("adiabatic", "volume"), ("adiabatic", "pressure"), ("isothermal", "pressure")])
def test_against_the_eigenvalues_of_J(heat, holds):
    """Where double precision still resolves them, the eigenvalues of J at equilibrium tell the same."""
    case = build_case({"case": {"mechanism": "hydrogen-oxygen"}, "vessel": {"heat": heat, "holds": holds},
                       "start": {"temperature": 2500.0, "pressure": 1e5, "mole_ratio": {"H2": 2, "O2": 1}},
                       "until": {"time": 1.0}})
    target = target_of(case)
    part = target.own.amount / (case.charge.volume if holds == "volume" else 1.0)
    J = case.equations().J(0.0, np.append(part, target.own.temperature))
    values = np.sort(-np.linalg.eigvals(J).real)
    smallest = values[values > 1e-6 * values[-1]][0]
    assert abs(slowest(case) * smallest - 1) < 1e-5


def test_methane_does_not_depend_on_the_order_of_species():
    """1000 K, where eigenvalues of J drown: the same to 1e-6 with species and reactions reversed."""
    from bothways import read_mechanism

    document = read_mechanism("methane").to_dict()
    turned = {**document, "species": dict(reversed(document["species"].items())), "reaction": document["reaction"][::-1]}
    times = []
    for each in (document, turned):
        case = build_case({"vessel": {"heat": "isothermal"}, "start": {"temperature": 1000.0, "pressure": 1e5, "mole_ratio":
                          {"CH4": 1, "O2": 2, "N2": 7.52}}, "until": {"time": 1.0}}, mechanism=build_mechanism(each))
        times.append(slowest(case))
    assert abs(times[0] / times[1] - 1) < 1e-6 and times[0] > 1.0


def test_small_singular_values_keep_their_digits():
    """A matrix scaled over 40 decades by rows and columns: its values against 60-digit arithmetic."""
    import mpmath

    rng = np.random.default_rng(4)
    core = rng.integers(-2, 3, (5, 8)).astype(float)
    matrix = np.logspace(-10, 10, 5)[:, None] * core * np.logspace(8, -12, 8)
    with mpmath.workdps(80):
        exact = sorted((float(v) for v in mpmath.svd_r(mpmath.matrix(matrix.tolist()), compute_uv=False)), reverse=True)
    assert np.allclose(singular_values(matrix), exact, rtol=1e-9)
