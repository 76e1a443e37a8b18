"""The forms `statistical mechanics` and `structureless particle`: closed forms, kernels against plain functions, mixing."""

import math

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import mathieu_a, mathieu_b

from bothways import Equations, build_case, build_mechanism, run, verdict
from bothways.contents import Contents
from bothways.kernels import molar
from bothways.mechanism import build_tables
from bothways.thermo import Functions
from bothways.thermo.rotor import KELVIN_PER_WAVENUMBER as C2
from bothways.thermo.rotor import Rotor
from test_laws import differences, throughput

R, KB, H, NA = 8.31446261815324, 1.380649e-23, 6.62607015e-34, 6.02214076e23
FORM = {"form": "statistical mechanics"}
ETHANE = {**FORM, "shape": "nonlinear", "B": [2.671, 0.6630], "symmetry": 6, "H0": -68.4e3, "wavenumbers": [
    2954, 1388, 995, 2896, 1379, [2969, 2], [1468, 2], [1190, 2], [2985, 2], [1469, 2], [822, 2]],
    "rotors": [{"barrier": "12.25 kJ/mol", "fold": 3, "B": 10.7}]}
"""Ethane: T. Shimanouchi, NSRDS-NBS 39 (1972); barrier 2.93 kcal/mol of K.S. Pitzer (from memory, as B and H0 are)."""


def mechanism(species, reactions=(), **head):
    """A gas of species name: (formula, potential)."""
    return build_mechanism({"mechanism": {"name": "x", "phase": "ideal gas", "standard_pressure": "1 bar", **head},
                            "elements": {"Q": "10 g/mol", "X": "25 g/mol"}, "reaction": list(reactions),
                            "species": {n: {"formula": f, "potential": p} for n, (f, p) in species.items()}})


def numbers(form, formula="Q", T=500.0, **head):
    """cp/R, h/RT, s/R of one species by the kernels."""
    g, h, cp = (v[0] for v in Contents(mechanism({"A": (formula, form)}, **head)).molar(T))
    return cp, h, h - g


def test_a_structureless_particle_is_translation_alone():
    """Sackur and Tetrode's equation, written down anew: argon 154.846 J/(mol K) at 298.15 K and 1 bar (CODATA 1989)."""
    T, m = 298.15, 39.95e-3 / NA
    s = math.log((2 * math.pi * m * KB * T / H**2) ** 1.5 * KB * T / 1e5) + 2.5
    cp, h, entropy = numbers({"form": "structureless particle", "energy": 1234.0}, "Ar", T)
    assert (cp, h, entropy) == pytest.approx((2.5, 2.5 + 1234.0 / (R * T), s), rel=1e-14)
    assert entropy * R == pytest.approx(154.846, abs=2e-3)


def test_a_linear_molecule_by_its_formula():
    """Rotation, one vibration and two electronic levels; optical isomers and symmetry as logarithms."""
    T, theta, B = 600.0, 1876.05 * C2, 1.6634 * C2
    x, y = theta / T, 119.73 * C2 / T
    form = {**FORM, "shape": "linear", "B": 1.6634, "symmetry": 1, "wavenumbers": [1876.05],
            "electronic": [[2, 0.0], [2, 119.73]], "H298": 91e3}
    cp, h, s = numbers(form, "NO", T)
    n, f = 1 / math.expm1(x), math.exp(-y) / (1 + math.exp(-y))
    assert cp == pytest.approx(3.5 + x * x * n * (n + 1) + y * y * f * (1 - f), rel=1e-13)
    _, start, _ = numbers(form, "NO", 298.15)
    assert start * R * 298.15 == pytest.approx(91e3, rel=1e-13)
    zero = 3.5 * 298.15 + theta / math.expm1(theta / 298.15) + 119.73 * C2 / (1 + math.exp(119.73 * C2 / 298.15))
    assert h == pytest.approx(3.5 + x * n + y * f + (91e3 / R - zero) / T, rel=1e-12)
    m = 30.006e-3 / NA
    q = (2 * math.pi * m * KB * T / H**2) ** 1.5 * KB * T / 1e5 * T / B * 2 * (1 + math.exp(-y)) / (1 - math.exp(-x))
    assert s == pytest.approx(math.log(q) + 3.5 + x * n + y * f, rel=1e-13)


def test_tops_and_their_two_ways_of_writing():
    """One, two or three B of equal value are one molecule; symmetry 12 and two isomers shift s alone."""
    form = {**FORM, "shape": "nonlinear", "symmetry": 1, "H298": 0.0}
    one, two, three = (numbers({**form, "B": B}) for B in ([3.3], [3.3, 3.3], [3.3, 3.3, 3.3]))
    assert one == pytest.approx(two, rel=1e-15) and one == pytest.approx(three, rel=1e-15)
    other = numbers({**form, "B": [3.3], "symmetry": 12, "optical_isomers": 2})
    assert np.subtract(one, other) == pytest.approx([0, 0, math.log(6)], rel=1e-13, abs=1e-15)
    T = 500.0
    rotation = one[2] - numbers({"form": "structureless particle", "energy": 0.0})[2]
    assert rotation == pytest.approx(1.5 + math.log(math.sqrt(math.pi * (T / (3.3 * C2)) ** 3)), rel=1e-13)


@pytest.mark.parametrize("barrier", [0.0, 300.0, 4e3, 12e3])
def test_levels_of_a_twofold_rotor_are_mathieus(barrier):
    """E = V/2 + B a_r(q) and V/2 + B b_r(q), q = V/4B, from SciPy's characteristic values."""
    B = 7.0
    q = barrier / R / (4 * B * C2)
    even, odd = [mathieu_a(r, q) for r in range(30)], [mathieu_b(r, q) for r in range(1, 30)]
    expected = np.sort([*even, *odd])[:40] * B * C2
    levels = [theta for theta, weight in Rotor(barrier, 2, B, 1).ladder() for _ in range(round(weight))][:40]
    assert levels == pytest.approx(expected - expected[0], rel=1e-8, abs=2e-5)


def ladder_functions(rotor, T):
    levels = np.array(rotor.ladder())
    x = levels[:, 0] / T
    w = levels[:, 1] * np.exp(-x)
    q = w.sum()
    return q, (w @ x**2) / q - (w @ x / q) ** 2


def test_a_free_rotor():
    """Without a barrier the classical sum (π T/θ)^(1/2)/σ, R/2 in cp; the sum over m is that to round-off here."""
    q, cp = ladder_functions(Rotor(0.0, 3, 5.3, 3), 300.0)
    assert q == pytest.approx(math.sqrt(math.pi * 300.0 / (5.3 * C2)) / 3, rel=1e-12) and cp == pytest.approx(0.5, rel=1e-10)


def test_a_stiff_rotor_is_an_oscillator():
    """Barrier far above k_B T: ν = n (V B)^(1/2), one in each of n wells, which are alike; the next order is B/4 a quantum."""
    V, B, T = 5e5, 1.0, 300.0
    q, cp = ladder_functions(Rotor(V, 3, B, 3), T)
    x = 3 * math.sqrt(V / R / C2 * B) * C2 / T
    assert q == pytest.approx(1 / (1 - math.exp(-x)), rel=2e-2)
    assert cp == pytest.approx(x * x * math.exp(x) / (math.exp(x) - 1) ** 2, rel=2e-2)


@pytest.mark.parametrize("T", [300.0, 600.0, 2000.0])
def test_a_hindered_rotor_against_the_approximation_of_pitzer_and_gwinn(T):
    """Classical integral times quantum over classical oscillator (J. Chem. Phys. 10 (1942) 428): good to some percent."""
    V, B, n = 12250.0 / R, 10.7 * C2, 3
    q, _ = ladder_functions(Rotor(12250.0, n, 10.7, n), T)
    integral = quad(lambda phi: math.exp(-V / (2 * T) * (1 - math.cos(n * phi))), 0, 2 * math.pi)[0]
    classical = math.sqrt(T / (4 * math.pi * B)) * integral / n
    x = n * math.sqrt(V * B) / T
    zero_point = Rotor(12250.0, n, 10.7, n)
    approximate = classical * x / (1 - math.exp(-x))  # counted from the ground level, as the sum is
    assert zero_point.ladder()[0][0] == 0.0 and q == pytest.approx(approximate, rel=0.03)


def test_ethane_has_the_entropy_that_was_measured():
    """S°(298.15 K) = 229.2 J/(mol K) (NASA/TP-2002-211556 from A. Gurvich et al. 1991), which has the hindered rotor in it;
    as a free rotor it would be 6 higher."""
    form = ETHANE
    assert numbers(form, "C2H6", 298.15)[2] * R == pytest.approx(229.2, abs=0.6)
    free = {**ETHANE, "rotors": [{"barrier": 0.0, "fold": 3, "B": 10.7}]}
    assert numbers(free, "C2H6", 298.15)[2] * R > 233.0


MIXED = {
    "ethane": ("C2H6", ETHANE), "NO": ("NO", {**FORM, "shape": "linear", "B": 1.6634, "symmetry": 1, "wavenumbers": [1876.05],
                                              "electronic": [[2, 0.0], [2, 119.73]], "H0": 90.6e3}),
    "O": ("O", {**FORM, "shape": "atom", "H0": "246.8 kJ/mol", "electronic": [[5, 0], [3, 158.265], [1, 226.977]]}),
    "soft": ("Q", {**FORM, "shape": "nonlinear", "B": [0.1, 0.2, 0.11], "symmetry": 1, "H298": 5.0, "wavenumbers": [1.5, 12]}),
    "fit": ("Q", {"form": "NASA 7-coefficient", "T": [300.0, 1000.0, 3000.0], "a": [
        [3.3, 9e-4, -1.2e-6, 8e-10, -1.5e-13, -1014.8, 3.4], [3.1, 6.5e-4, -5e-8, -9e-12, 1.6e-15, -901.203, 4.6883]]}),
    "point": ("Q", {"form": "structureless particle", "energy": 3.0}),
    "constant": ("Q", {"form": "constant heat capacity", "at": 300.0, "H": 1.0, "S": 150.0, "cp": 30.0})}


@pytest.mark.parametrize("T", [60.0, 298.15, 999.9, 2500.0, 5800.0])
def test_kernels_are_the_plain_functions(T):
    made = mechanism(MIXED)
    g, h, cp = Contents(made).molar(T)
    for k, species in enumerate(made.species):
        plain = Functions(made.ranges(k), species.potential.modes()).cp_h_s(T)
        assert (cp[k], h[k], h[k] - g[k]) == pytest.approx(plain, rel=2e-13, abs=1e-13), species.name


@pytest.mark.parametrize("T", [120.0, 298.15, 900.0, 4000.0])
def test_functions_are_derivatives_of_one_another(T):
    """dg/dT = -s, d(h)/dT = cp, T dcp/dT of the kernels, by central differences of fourth order."""
    tables = build_tables(mechanism(MIXED))
    def values(T):
        out = np.empty((4, len(MIXED)))
        molar.molar_functions(T, 0, tables.ints, tables.floats, *out)
        return out

    step = 1e-3 * T
    a, b, c, d = (values(T + k * step) for k in (-2, -1, 1, 2))
    g, h, cp, slope = values(T)
    def rate(row, times_T):
        w = [(T + k * step) ** times_T for k in (-2, -1, 1, 2)]
        return (a[row] * w[0] - 8 * b[row] * w[1] + 8 * c[row] * w[2] - d[row] * w[3]) / (12 * step)

    assert rate(1, 1) == pytest.approx(cp, rel=1e-8)
    assert rate(0, 1) == pytest.approx(g - h, rel=1e-8, abs=1e-8)
    assert T * rate(2, 0) == pytest.approx(slope, rel=1e-6, abs=1e-8)


REACTIONS = [{"equation": "soft ⇌ fit", "forward": {"law": "Arrhenius", "A": 1e3, "Ea": 1e4}},
             {"equation": "fit ⇌ point", "forward": {"law": "Arrhenius", "A": 2e2, "n": 0.3, "Ea": 2e4}},
             {"equation": "point + soft ⇌ 2 constant", "forward": {"law": "Arrhenius", "A": 7.0, "Ea": 5e3}}]
OF_Q = {name: MIXED[name] for name in ("soft", "fit", "point", "constant")}


@pytest.mark.parametrize("holds, heat", [(v, h) for v in ("volume", "pressure") for h in ("isothermal", "adiabatic")])
def test_J_of_mixed_forms_by_differences(holds, heat):
    """As in test_laws.py: 1e-8 of each column's largest entry and the differences' own round-off."""
    eq = Equations(mechanism(OF_Q, REACTIONS), holds, heat, 2.3e5 if holds == "pressure" else 0.0)
    rng = np.random.default_rng(3)
    for _ in range(10):
        y = np.append(10.0 ** rng.uniform(-1, 2, 4), rng.uniform(400.0, 990.0))
        J, (expected, round_off) = eq.J(0.0, y), differences(lambda y: eq.f(0.0, y), y, throughput(eq, y))
        assert np.all(np.abs(J - expected) <= 1e-8 * np.max(np.abs(expected), axis=0) + round_off)


@pytest.mark.parametrize("holds", ["volume", "pressure"])
def test_a_run_of_mixed_forms_ends_at_its_equilibrium(holds):
    """Adiabatic, so that energies of all forms meet; held against the equilibrium by another route."""
    case = build_case({"vessel": {"heat": "adiabatic", "holds": holds}, "until": {"equilibrium": True},
                       "start": {"temperature": 700.0, "pressure": 1e5, "mole_ratio": {"fit": 1, "soft": 2}}},
                      mechanism=mechanism(OF_Q, REACTIONS))
    trajectory = run(case)
    found = verdict(case, trajectory)
    assert found.kind.value == "at equilibrium" and np.max(np.abs(found.deviation)) < 1e-6
    assert np.max(np.abs(trajectory.energy_residual)) < 1e-10


def test_the_same_species_in_other_forms_has_K_one():
    """A particle as structureless, as an atom and with constant heat capacity; a species' own standard pressure counts."""
    S = R * numbers({"form": "structureless particle", "energy": 700.0}, T=400.0)[2]
    forms = {"a": ("Q", {"form": "structureless particle", "energy": 700.0}),
             "b": ("Q", {**FORM, "shape": "atom", "H298": 700.0 + 2.5 * R * 298.15}),
             "c": ("Q", {"form": "constant heat capacity", "at": 400.0, "H": 700.0 + 2.5 * R * 400, "S": S, "cp": 2.5 * R})}
    made = mechanism(forms, [{"equation": f"{x} ⇌ {y}", "forward": {"law": "Arrhenius", "A": 1.0}} for x, y in ("ab", "bc")])
    for T in (150.0, 800.0, 3000.0):
        assert Contents(made).equilibrium_constants(T) == pytest.approx([1.0, 1.0], rel=1e-12)
    document = made.to_dict()
    document["species"]["b"]["standard_pressure"] = "1 atm"
    shifted = Contents(build_mechanism(document)).equilibrium_constants(800.0)
    assert shifted == pytest.approx([1.0, 1.0], rel=1e-12)  # E = (p°/RT) e^(-g/RT) knows no p°


def test_files_are_read_back_as_they_were():
    made = mechanism(MIXED)
    assert build_mechanism(made.to_dict()) == made
