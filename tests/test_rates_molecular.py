"""Rate constants from molecules: hard spheres, Eyring's expression, transition states; identities to 1e-12."""

import itertools
import math

import numpy as np
import pytest
from scipy.integrate import quad

from bothways import Equations, build_mechanism, implied_reverse_area
from bothways.contents import Contents
from bothways.errors import InputError
from bothways.rates.eckart import thresholds

R, KB, H, NA, C = 8.31446261815324, 1.380649e-23, 6.62607015e-34, 6.02214076e23, 2.99792458e10  # c in cm/s
C2 = H * C / KB  # [K cm]
TEMPERATURES = [250.0, 298.15, 700.0, 1500.0, 2900.0]
MASS = {"X": 3.0, "Q": 17.0, "Z": 40.0}  # g/mol, invented


def gas(species, *reactions):
    """A gas of invented building blocks X, Q, Z: species name: (composition, potential, more keys)."""
    return build_mechanism({
        "mechanism": {"name": "molecules", "phase": "ideal gas", "standard_pressure": "1 bar", "units": ["kJ/mol"]},
        "elements": {symbol: f"{mass} g/mol" for symbol, mass in MASS.items()},
        "species": {name: {"composition": dict(atoms), "potential": potential, **(more[0] if more else {})}
                    for name, (atoms, potential, *more) in species.items()},
        "reaction": [{"equation": equation, "forward": forward} for equation, forward in reactions]})


def point(energy):
    return {"form": "structureless particle", "energy": energy}


def constants(mechanism, T):
    """Forward and reverse rate constants of every reaction as the equations have them, m3, mol, s."""
    return Equations(mechanism, "volume", "isothermal").reaction_rates(np.append(np.ones(len(mechanism.names)), T))


def reduced(*masses):
    """Reduced mass of two particles [kg]."""
    a, b = (m * 1e-3 / NA for m in masses)
    return a * b / (a + b)


# ---- hard spheres that have no structure: everything in closed form

DE, E0, DIAMETER, P = 12.0, 31.0, "3.7 Å", 0.23
EXCHANGE = gas({"XQ": ({"X": 1, "Q": 1}, point(5.0)), "Z": ({"Z": 1}, point(-2.0)),
                "X": ({"X": 1}, point(9.0)), "QZ": ({"Q": 1, "Z": 1}, point(3.0 + DE - 9.0))},
               ("XQ + Z ⇌ X + QZ", {"law": "hard-sphere collision", "diameter": DIAMETER, "E0": E0, "P": P}))
MU_AB, MU_CD = reduced(20.0, 40.0), reduced(3.0, 57.0)
AREA = P * 3.7e-10**2


@pytest.mark.parametrize("T", TEMPERATURES)
def test_collision_rate_and_its_reverse_in_closed_form(T):
    """k = P N_A π d² √(8 k_B T/π μ) e^(-E0/RT); K = (μ_CD/μ_AB)^(3/2) e^(-ΔE0/RT), whatever the diameter."""
    forward, reverse = constants(EXCHANGE, T)
    k = NA * math.pi * AREA * math.sqrt(8 * KB * T / (math.pi * MU_AB)) * math.exp(-E0 * 1e3 / (R * T))
    K = (MU_CD / MU_AB) ** 1.5 * math.exp(-DE * 1e3 / (R * T))
    assert forward[0] == pytest.approx(k, rel=1e-12) and forward[0] / reverse[0] == pytest.approx(K, rel=1e-12)
    assert Contents(EXCHANGE).equilibrium_constants(T)[0] == pytest.approx(K, rel=1e-12)


@pytest.mark.parametrize("T", TEMPERATURES)
def test_reaction_entropy_is_that_of_the_reduced_masses(T):
    g, h, cp = Contents(EXCHANGE).molar(T)
    nu = EXCHANGE.stoichiometry[:, 0]
    assert nu @ (h - g) == pytest.approx(1.5 * math.log(MU_CD / MU_AB), rel=1e-12)
    assert nu @ cp == pytest.approx(0.0, abs=1e-14) and nu @ h * R * T == pytest.approx(DE * 1e3, rel=1e-12)


@pytest.mark.parametrize("T", TEMPERATURES)
def test_implied_area_of_the_reverse(T):
    """P d² of the derived reverse is the forward one times μ_AB/μ_CD, at any temperature."""
    assert implied_reverse_area(EXCHANGE, 0, T) == pytest.approx(AREA * MU_AB / MU_CD, rel=1e-12)


def test_like_molecules_count_half():
    """2 A: half as many collisions; where the products are alike the implied area is twice the ratio of reduced masses."""
    species = {"A": ({"X": 1, "Q": 1}, point(0.0)), "B": ({"X": 2}, point(0.0)), "C": ({"Q": 2}, point(0.0))}
    law = {"law": "hard-sphere collision", "diameter": "4 Å", "E0": 5.0}
    m = gas(species, ("2 A ⇌ B + C", law), ("B + C ⇌ 2 A", law))
    forward, _ = constants(m, 500.0)
    unlike, like = reduced(6.0, 34.0), reduced(20.0, 20.0)
    k = NA * math.pi * 16e-20 * math.sqrt(8 * KB * 500.0 / math.pi) * math.exp(-5e3 / (R * 500.0))
    assert forward == pytest.approx([0.5 * k / math.sqrt(like), k / math.sqrt(unlike)], rel=1e-12)
    assert implied_reverse_area(m, 0, 500.0) == pytest.approx(0.5 * 16e-20 * like / unlike, rel=1e-12)
    assert implied_reverse_area(m, 1, 500.0) == pytest.approx(2.0 * 16e-20 * unlike / like, rel=1e-12)


def test_diameters_of_the_species_are_averaged():
    species = {"A": ({"X": 1}, point(0.0), {"collision_diameter": "3 Å"}), "B": ({"Q": 1}, point(0.0),
                                                                                 {"collision_diameter": "5 Å"}),
               "AB": ({"X": 1, "Q": 1}, point(-400.0))}
    made = [gas(species, ("A + B ⇌ AB", {"law": "hard-sphere collision", "E0": 1.0, **more}))
            for more in ({}, {"diameter": "4 Å"})]
    assert constants(made[0], 400.0)[0] == pytest.approx(constants(made[1], 400.0)[0], rel=1e-15)
    with pytest.raises(InputError, match="one molecule, or three and more, as products"):
        implied_reverse_area(made[0], 0, 400.0)


def test_implied_area_of_real_molecules_changes_with_temperature():
    """With vibrations K is not that of the masses; the function says what the reverse would be, for any forward law."""
    species = {"A": ({"X": 1}, point(0.0)), "B": ({"Q": 2}, diatomic(900.0)), "C": ({"Q": 1}, point(0.0)),
               "D": ({"X": 1, "Q": 1}, diatomic(1500.0))}
    m = gas(species, ("A + B ⇌ C + D", {"law": "Arrhenius", "A": 1e6, "n": 0.5, "Ea": 50.0}))
    areas = [implied_reverse_area(m, 0, T) for T in (300.0, 2000.0)]
    assert areas[0] > 0 and abs(areas[0] / areas[1] - 1) > 0.1
    T = 300.0
    _, reverse = constants(m, T)
    delta = m.species[3].potential.energy - m.species[1].potential.energy
    per = NA * math.pi * math.sqrt(8 * KB * T / (math.pi * reduced(17.0, 20.0))) * math.exp(-(50e3 - delta) / (R * T))
    assert areas[0] == pytest.approx(reverse[0] / per, rel=1e-12)


def diatomic(wavenumber, **more):
    return {"form": "statistical mechanics", "shape": "linear", "B": 1.3, "symmetry": 1, "wavenumbers": [wavenumber],
            "H298": 0.0, **more}


# ---- Eyring

ISOMERS = {"A": ({"X": 1}, point(0.0)), "B": ({"X": 1}, point(-1.0)), "AA": ({"X": 2}, point(-80.0))}


@pytest.mark.parametrize("T, keys, k", [(298.15, {"dH": 80.0, "dS": 0.0}, 5.99609411239e-2),
                                        (500.0, {"dH": 100.0, "dS": "-50 J/(mol K)"}, 0.910735420228)])
def test_eyrings_numbers(T, keys, k):
    """(k_B T/h) e^(-ΔG‡/RT) worked out to twelve digits apart from this program."""
    m = gas(ISOMERS, ("A ⇌ B", {"law": "Eyring", **keys}))
    assert constants(m, T)[0][0] == pytest.approx(k, rel=1e-11)


def test_eyrings_standard_state():
    """Second order: 1 mol/L is 1000 mol/m3; 1 bar is the concentration p°/RT at each temperature; κ is a factor."""
    keys, T = {"law": "Eyring", "dH": 40.0, "dS": "-90 J/(mol K)"}, 640.0
    k = {state: constants(gas(ISOMERS, ("2 A ⇌ AA", {**keys, "standard_state": state, "kappa": kappa})), T)[0][0]
         for state, kappa in (("1 mol/L", 1.0), ("1 mol/m3", 1.0), ("1 bar", 0.5))}
    bare = KB * T / H * math.exp(-90 / R - 40e3 / (R * T))
    assert k["1 mol/L"] == pytest.approx(bare / 1000, rel=1e-12) and k["1 mol/m3"] == pytest.approx(bare, rel=1e-12)
    assert k["1 bar"] == pytest.approx(0.5 * bare * R * T / 1e5, rel=1e-12)


# ---- transition states

COMPLEX = {"shape": "nonlinear", "B": [0.9, 0.31, 0.25], "symmetry": 1, "optical_isomers": 2, "imaginary": 1100.0,
           "wavenumbers": [220.0, [410.0, 2], 1700.0], "electronic": [[2, 0.0], [2, 300.0]],
           "rotors": [{"barrier": 4.0, "fold": 3, "B": 6.0}]}
TRIPLE = {"XQ": ({"X": 1, "Q": 1}, {**diatomic(1800.0), "H298": -20.0}),
          "Z2": ({"Z": 2}, {**diatomic(320.0), "symmetry": 2, "H298": 4.0}),
          "XZ": ({"X": 1, "Z": 1}, {**diatomic(1300.0), "electronic": [[2, 0.0], [2, 120.0]], "H298": -11.0}),
          "QZ": ({"Q": 1, "Z": 1}, {"form": "NASA 7-coefficient", "T": [200.0, 1000.0, 3500.0], "a": [
              [3.5, 4e-4, 0, 0, 0, 300.0, 6.0], [3.4, 6e-4, 0, 0, 0, 250.0, 6.3]]})}
ALL_EXACT = {**TRIPLE, "QZ": ({"Q": 1, "Z": 1}, {**diatomic(700.0), "H298": 2.0})}
TUNNELLING = ["none", "Wigner", "Eckart"]


def there_and_back(species, tunnelling):
    """XQ + Z2 ⇌ XZ + QZ by the complex, stated once in each direction, with the same enthalpy of its own."""
    law = {"law": "transition state", "tunnelling": tunnelling, "complex": {**COMPLEX, "H298": 60.0}}
    return gas(species, ("XQ + Z2 ⇌ XZ + QZ", law), ("XZ + QZ ⇌ XQ + Z2", law))


@pytest.mark.parametrize("T", TEMPERATURES)
@pytest.mark.parametrize("tunnelling", TUNNELLING)
@pytest.mark.parametrize("species", [TRIPLE, ALL_EXACT], ids=["mixed forms", "statistical"])
def test_reverse_from_K_is_the_theory_worked_out_backwards(species, tunnelling, T):
    forward, reverse = constants(there_and_back(species, tunnelling), T)
    assert forward[0] == pytest.approx(reverse[1], rel=1e-12) and reverse[0] == pytest.approx(forward[1], rel=1e-12)


@pytest.mark.parametrize("T", TEMPERATURES)
def test_E0_counts_from_the_reactants_at_zero(T):
    """The same complex by E0 from either side: both differ by ΔE0 of the species' own energies at 0 K."""
    energies = {s.name: s.potential.energy for s in gas(ALL_EXACT).species}
    delta = energies["XZ"] + energies["QZ"] - energies["XQ"] - energies["Z2"]
    there = {"law": "transition state", "E0": 70.0, "tunnelling": "Eckart", "complex": COMPLEX}
    m = gas(ALL_EXACT, ("XQ + Z2 ⇌ XZ + QZ", there), ("XZ + QZ ⇌ XQ + Z2", {**there, "E0": 70.0 - delta * 1e-3}))
    forward, reverse = constants(m, T)
    assert forward[1] == pytest.approx(reverse[0], rel=1e-12)


def partition(T, mass, thetas=(), vibrations=(), symmetry=1.0, electronic=1.0):
    """q/V of a molecule [1/m3], energies from the ground level: written down anew."""
    q = (2 * math.pi * mass * 1e-3 / NA * KB * T / H**2) ** 1.5 * electronic / symmetry
    if len(thetas) == 1:
        q *= T / thetas[0]
    elif thetas:
        q *= math.sqrt(math.pi * T**3 / math.prod(thetas))
    return q / math.prod(1 - math.exp(-C2 * nu / T) for nu in vibrations)


@pytest.mark.parametrize("T", TEMPERATURES)
def test_against_partition_functions_written_down_anew(T):
    complex_ = {key: value for key, value in COMPLEX.items() if key != "rotors"}
    law = {"law": "transition state", "E0": 70.0, "tunnelling": "Wigner", "complex": complex_}
    forward, _ = constants(gas(ALL_EXACT, ("XQ + Z2 ⇌ XZ + QZ", law)), T)
    levels = 2 + 2 * math.exp(-300 * C2 / T)
    top = partition(T, 100.0, [C2 * B for B in (0.9, 0.31, 0.25)], [220, 410, 410, 1700], 0.5, levels)
    reactants = partition(T, 20.0, [1.3 * C2], [1800]) * partition(T, 80.0, [1.3 * C2], [320], 2)
    k = (1 + (1100 * C2 / T) ** 2 / 24) * KB * T / H * NA * top / reactants * math.exp(-70e3 / (R * T))
    assert forward[0] == pytest.approx(k, rel=1e-12)


@pytest.mark.parametrize("T", TEMPERATURES)
def test_two_spheres_that_touch_are_a_transition_state(T):
    """A linear complex of moment of inertia μ d² without vibrations gives the collision rate (H. Eyring 1935)."""
    d, mu = 3.3e-10, reduced(3.0, 17.0)
    B = H / (8 * math.pi**2 * C * mu * d**2)
    species = {"A": ({"X": 1}, point(0.0)), "B": ({"Q": 1}, point(0.0)), "AB": ({"X": 1, "Q": 1}, point(-90.0))}
    theory = {"law": "transition state", "E0": 20.0, "complex": {"shape": "linear", "B": B, "symmetry": 1, "imaginary": 9.0}}
    spheres = {"law": "hard-sphere collision", "E0": 20.0, "diameter": f"{d} m"}
    k = [constants(gas(species, ("A + B ⇌ AB", law)), T)[0][0] for law in (theory, spheres)]
    assert k[0] == pytest.approx(k[1], rel=1e-12)


def eckart(E, V1, V2, quantum):
    """P(E), E [K] from the side of V1, as 2 sinh 2πa sinh 2πb/(cosh 2π(a + b) + cosh 2πd)."""
    a1, a2, xi = 2 * math.pi * V1 / quantum, 2 * math.pi * V2 / quantum, E / V1
    f = 1 / math.sqrt(a1) + 1 / math.sqrt(a2)
    a, b = 2 * math.sqrt(a1 * xi) / f, 2 * math.sqrt(abs((xi - 1) * a1 + a2)) / f
    d = 2 * math.sqrt(abs(a1 * a2 - math.pi**2 / 4))
    q = math.cosh(d) if a1 * a2 > math.pi**2 / 4 else math.cos(d)
    return 2 * math.sinh(a) * math.sinh(b) / (math.cosh(a + b) + q) if a + b < 600 else 1.0


@pytest.mark.parametrize("V1, V2, quantum", [(6000.0, 6000.0, 1500.0), (9000.0, 3000.0, 1600.0), (800.0, 2500.0, 1900.0),
                                             (300.0, 200.0, 2000.0), (4000.0, 20000.0, 600.0)])
@pytest.mark.parametrize("T", [120.0, 300.0, 1000.0, 5000.0])
def test_eckarts_tunnelling_by_quadrature(V1, V2, quantum, T):
    """κ = ∫ P(E) e^(-(E - V1)/T) dE/T from the higher side on, by SciPy's quadrature in √E, to 1e-9."""
    start = max(0.0, V1 - V2)
    def part(u):
        return eckart(start + u * u, V1, V2, quantum) * math.exp(-(start + u * u - V1) / T) * 2 * u / T

    end = math.sqrt(3 * min(V1, V2) + 9 * quantum + 50 * T)
    edges = np.linspace(0.0, end, 40)
    kappa = sum(quad(part, a, b, epsrel=1e-11, epsabs=0)[0] for a, b in itertools.pairwise(edges))
    levels = np.array(thresholds(V1, V2, quantum))
    assert levels[:, 1] @ np.exp((min(V1, V2) - levels[:, 0]) / T) == pytest.approx(kappa, rel=1e-9)
    assert thresholds(V1, V2, quantum) == thresholds(V2, V1, quantum) and np.all(levels[:, 1] >= 0)


def test_tunnelling_at_its_limits():
    """At high temperature both corrections are Wigner's 1 + u²/24, at low temperature Eckart's is far above it."""
    V, quantum = 12000.0, 1500.0
    levels = np.array(thresholds(V, V, quantum))
    for T, near in ((3000.0, 4e-3), (1500.0, 2.5e-2)):
        assert levels[:, 1] @ np.exp((V - levels[:, 0]) / T) == pytest.approx(1 + (quantum / T) ** 2 / 24, rel=near)
    assert levels[:, 1] @ np.exp((V - levels[:, 0]) / 200.0) > 4 * (1 + (quantum / 200.0) ** 2 / 24)


def test_a_mechanism_of_all_three_is_read_back_as_it_was():
    assert build_mechanism(there_and_back(TRIPLE, "Eckart").to_dict()) == there_and_back(TRIPLE, "Eckart")
    assert build_mechanism(EXCHANGE.to_dict()) == EXCHANGE
