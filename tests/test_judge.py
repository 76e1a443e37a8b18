"""The judge of every step: what it mends, what it refuses, and that a planted fault does not pass."""

import ctypes

import numpy as np
import pytest

from bothways import build_case, build_mechanism, read_mechanism, run, verdict
from bothways.contents import Contents
from bothways.endpoint import Kind, target_of
from bothways.kernels import judge
from bothways.monitored import monitored

CLOSURES = [(holds, heat) for holds in ("volume", "pressure") for heat in ("isothermal", "adiabatic")]
R = 8.31446261815324


def case_of(holds="volume", heat="adiabatic", name="methane"):
    fuel = {"methane": "CH4", "hydrogen-oxygen": "H2"}[name]
    return build_case({"case": {"mechanism": name}, "vessel": {"holds": holds, "heat": heat}, "until": {"time": 1.0},
                       "start": {"temperature": 1700.0, "pressure": 1e5,
                                 "mole_ratio": {fuel: 1, "O2": 1.5, "N2": 4, "OH": 1e-3}}})


class Bench:
    """The judge of a case with its ledger, called as the integrators call it."""

    def __init__(self, case):
        self.task = monitored(case, case.equations())
        self.system = self.task.problem.compiled
        kind = ctypes.CFUNCTYPE(ctypes.c_int64, *[ctypes.c_void_p] * 3)
        self._call = kind(self.system.judge)

    def __call__(self, old, new, error=None):
        """Verdict and the new state as mended; states bordered."""
        exchange = np.concatenate([old, new, np.zeros_like(old) if error is None else error])
        notes = np.zeros(4)
        passed = self._call(exchange.ctypes.data, notes.ctypes.data, self.system.context.ctypes.data)
        return bool(passed), exchange[len(old) : 2 * len(old)], notes


def towards_equilibrium(case, share):
    """The bordered state a share of the way from the charge to the equilibrium, T from the energy."""
    target = target_of(case)
    unit = case.charge.volume if case.holds == "volume" else 1.0
    start, end = case.charge.amount / unit, target.own.amount / unit
    part = (1 - share) * start + share * end
    T = case.charge.temperature
    if case.heat == "adiabatic":
        contents = Contents(case.mechanism)
        energy = contents.energy(start, T, case.holds)
        T = float(contents.temperatures_of(energy, part[None], np.array([T]), case.holds)[0])
    return case.equations().bordered_state(np.append(part, T))


@pytest.mark.parametrize("holds, heat", CLOSURES)
def test_downhill_passes_and_uphill_is_refused(holds, heat):
    """Potentials are convex: straight towards the equilibrium they fall, straight away from it they rise."""
    case = case_of(holds, heat)
    bench, near, far = Bench(case), towards_equilibrium(case, 0.6), towards_equilibrium(case, 0.4)
    assert bench(far, near)[0]
    passed, _, notes = bench(near, far)
    assert not passed and notes[0] > 0


def test_an_error_estimate_excuses_a_rise_of_its_own_size():
    case = case_of()
    bench, old, new = Bench(case), towards_equilibrium(case, 0.5), towards_equilibrium(case, 0.5 - 1e-7)
    assert not bench(old, new)[0]
    assert bench(old, new, error=10 * (new - old))[0]
    assert not bench(old, new, error=0.01 * (new - old))[0]


def test_negatives_are_mended_and_totals_kept():
    case = case_of()
    bench, old, new = Bench(case), towards_equilibrium(case, 0.4), towards_equilibrium(case, 0.6)
    k = case.mechanism.index("C")
    new[k] = -1e-13
    passed, mended, _ = bench(old, new)
    atoms, n = case.mechanism.element_matrix, len(case.mechanism.species)
    assert passed and mended[k] == 0 and np.all(mended[:n] >= 0)
    assert np.allclose(atoms @ mended[:n], atoms @ old[:n], rtol=2e-15)
    for name, count in (("C", -0.5), ("O2", -0.5), ("CO", 0.5), ("O", 0.5)):
        new[case.mechanism.index(name)] += count
    assert not bench(old, new)[0]  # half of the carbon would have to be taken off the others


def test_temperature_comes_from_the_energy():
    """Handed in 3 K off, T leaves as what the conserved energy gives, to round-off."""
    case = case_of("pressure")
    bench, old, new = Bench(case), towards_equilibrium(case, 0.4), towards_equilibrium(case, 0.6)
    right = new[-1]
    new[-1] += 3.0
    passed, mended, _ = bench(old, new)
    assert passed and abs(mended[-1] / right - 1) < 1e-13


@pytest.mark.parametrize("holds, heat", CLOSURES)
@pytest.mark.parametrize("share", [0.3, 1e-3])
def test_change_of_potential_is_the_difference_of_totals(holds, heat, share):
    """Where a difference of totals still has digits, it is the change worked out from the changes.

    Adiabatic, C is taken as the mean of its ends: right to the second order of the change of T.
    """
    case = case_of(holds, heat)
    contents = Contents(case.mechanism)
    old, new = towards_equilibrium(case, 0.2), towards_equilibrium(case, 0.2 + share)
    n0, n1, T0, T1 = old[:-2], new[:-2], old[-1], new[-1]
    g0, _, c0 = contents.molar(T0)
    c1 = contents.molar(T1)[2]
    present = n0 > 0
    volume0, volume1 = (n.sum() * R * T / 1e5 if holds == "pressure" else 1.0 for n, T in ((n0, T0), (n1, T1)))
    with np.errstate(divide="ignore"):
        potential = np.where(present, contents.chemical_potentials(n0, T0, volume0), g0)
    Pv = Bench(case).task.problem.compiled.keep[0]
    ours, _ = judge.change_of_potential(n0, n1, T0, T1, potential, potential, c0, c1, Pv)
    if heat == "adiabatic":
        theirs = -(contents.entropy(n1, T1, volume1) - contents.entropy(n0, T0, volume0)) / R
    else:
        total = contents.helmholtz if holds == "volume" else contents.gibbs
        theirs = (total(n1, T1, volume1) - total(n0, T0, volume0)) / (R * T0)
    assert ours < 0 and abs(ours / theirs - 1) < (1e-2 * share if heat == "adiabatic" else 1e-9)


def test_bend_keeps_its_digits():
    """n₁ ln(n₁/n₀) - Δn against extended precision, from changes of 1e-12 to a factor of ten."""
    for x in (1e-12, -1e-9, 1e-5, 9e-4, 1.1e-3, 0.1, -0.9, 9.0):
        n0 = np.longdouble(2.0)
        n1 = n0 * (1 + np.longdouble(float(2.0 * (1 + x)) / 2.0 - 1.0))
        d = (n1 - n0) / n0
        exact = n0 * (d * d / 2 - d**3 / 6 + d**4 / 12) if abs(d) < 1e-6 else n1 * np.log(n1 / n0) - (n1 - n0)
        assert abs(judge.bend(float(n0), float(n1)) / float(exact) - 1) < 1e-9


@pytest.mark.parametrize("off", [1e-4, -1e-4])
def test_a_reverse_rate_that_is_off_ends_elsewhere_and_is_found_out(off):
    """Negative control: one species' potential shifted by 1e-4 RT at 1700 K in the kinetics alone; the verdict tells."""
    document = read_mechanism("hydrogen-oxygen").to_dict()
    right = case_of(heat="isothermal", name="hydrogen-oxygen")
    for row in document["species"]["H2O"]["potential"]["a"]:
        row[5] += off * 1700.0
    wrong = build_case({**right.document, "until": {"time": 1e3}}, mechanism=build_mechanism(document))
    assert verdict(wrong, run(wrong)).kind is Kind.LANDED
    assert verdict(right, run(wrong)).kind is not Kind.LANDED
