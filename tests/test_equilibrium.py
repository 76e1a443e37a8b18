"""Equilibria: what each closure must satisfy, on random charges and on chosen ones."""

import ast
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

import equilibria as at
from bothways import InputError, build_mechanism
from bothways.contents import Contents
from bothways.equilibrium import GibbsMinimiser, conserved_by_elements, continuation, equilibria, equilibrium
from bothways.equilibrium.newton import Task, solve
from bothways.equilibrium.possible import possible_species
from equilibria import ATM, R, amounts, contents, minimiser

SHARES = {"hydrogen-oxygen": 0.3, "methane": 0.3, "c1-c4": 0.2, "n-alkanes": 0.1, "thermal-no": 0.05,
          "nitrogen-dioxide": 0.05}
AIR = {"O2": 1.0, "N2": 3.76}


def _all_hold(total: int, seed: int) -> None:
    for name, share in SHARES.items():
        for k, (conserved, charge, given) in enumerate(at.random_cases(name, round(share * total), seed)):
            found = minimiser(name, conserved).solve(charge, **given)
            assert not at.faults(contents(name), charge, given, found), (name, k, conserved, given, found)


def test_ten_thousand_random_equilibria():
    _all_hold(10_000, seed=4)


@pytest.mark.slow
def test_a_hundred_thousand_random_equilibria():
    _all_hold(100_000, seed=5)


def test_a_wrong_composition_is_found_faulty():
    """The checks above can fail: a shift of 1e-11 of one species shows, and one of 1e-8 in ln x."""
    of = contents("methane")
    charge, given = amounts(of.mechanism, {"CH4": 1.0, "O2": 1.5, "N2": 5.6}), {"temperature": 2000.0, "pressure": ATM}
    found = minimiser("methane", "elements").solve(charge, **given)
    assert at.faults(of, charge, given, found) == []
    shifted = replace(found, amount=found.amount * (1 + 1e-11 * (np.arange(53) == of.mechanism.index("CO"))))
    assert "balance" in at.faults(of, charge, given, shifted)
    shifted = replace(found, log_mole_fraction=found.log_mole_fraction + 1e-8 * (np.arange(53) == 4))
    assert at.faults(of, charge, given, shifted) == ["potentials"]


@pytest.mark.parametrize("charge", [{"CH4": 1.0, "O2": 2.0, "N2": 7.52}, {"C2H6": 1.0, "NH3": 0.2}])
def test_four_closures_meet_in_one_state(charge):
    """T, V of the state at T, p lead back to it, and so do its U, V and H, p."""
    find = minimiser("methane", "elements")
    first = find.solve(charge, temperature=2300.0, pressure=3 * ATM)
    for given in ({"temperature": 2300.0, "volume": first.volume},
                  {"internal_energy": first.internal_energy, "volume": first.volume},
                  {"enthalpy": first.enthalpy, "pressure": 3 * ATM}):
        again = find.solve(charge, **given)
        assert again.temperature == pytest.approx(2300.0, rel=1e-12)
        assert again.log_mole_fraction == pytest.approx(first.log_mole_fraction, abs=1e-10)
        assert again.entropy == pytest.approx(first.entropy, rel=1e-11)
        assert again.gibbs_energy == pytest.approx(first.gibbs_energy, rel=1e-11)


def test_functions_of_state_follow_from_the_gibbs_energy():
    """S = -∂G/∂T, V = ∂G/∂p, C_p = ∂H/∂T along equilibrium, by central differences."""
    find, charge = minimiser("methane", "elements"), {"CH4": 1.0, **AIR}

    def near(T, p):
        return find.solve(charge, temperature=T, pressure=p)

    here, T, p = near(2400.0, ATM), 2400.0, ATM
    slope_T = (near(T + 0.1, p).gibbs_energy - near(T - 0.1, p).gibbs_energy) / 0.2
    slope_p = (near(T, p + 1).gibbs_energy - near(T, p - 1).gibbs_energy) / 2
    heat = (near(T + 0.1, p).enthalpy - near(T - 0.1, p).enthalpy) / 0.2
    assert (-slope_T, slope_p, heat) == pytest.approx((here.entropy, here.volume, here.heat_capacity), rel=1e-7)
    fixed = find.solve(charge, temperature=T, volume=here.volume)
    warmer, cooler = (find.solve(charge, temperature=T + d, volume=here.volume) for d in (0.1, -0.1))
    assert (warmer.internal_energy - cooler.internal_energy) / 0.2 == pytest.approx(fixed.heat_capacity, rel=1e-7)
    slope = (warmer.helmholtz_energy - cooler.helmholtz_energy) / 0.2
    assert -slope == pytest.approx(fixed.entropy, rel=1e-7)


def test_same_elements_same_equilibrium():
    find = minimiser("methane", "elements")
    reactants = find.solve({"CH4": 1.0, "O2": 2.0}, temperature=2500.0, pressure=ATM)
    products = find.solve({"CO2": 1.0, "H2O": 2.0}, temperature=2500.0, pressure=ATM)
    assert products.log_mole_fraction == pytest.approx(reactants.log_mole_fraction, abs=1e-12)


@pytest.mark.parametrize("given", [{"temperature": 700.0, "pressure": ATM}, {"enthalpy": -4.0e5, "pressure": ATM}])
def test_order_of_species_does_not_matter(given):
    document = contents("methane").mechanism.to_dict()
    order = np.random.default_rng(1).permutation(list(document["species"]))
    shuffled = build_mechanism(document | {"species": {name: document["species"][name] for name in order}})
    charge = {"CH4": 1.0, "O2": 2.0, "N2": 7.52}
    first, second = (equilibrium(m, charge, **given) for m in (contents("methane").mechanism, shuffled))
    places = [shuffled.index(name) for name in contents("methane").mechanism.names]
    assert second.log_mole_fraction[places] == pytest.approx(first.log_mole_fraction, abs=1e-10)
    assert second.temperature == pytest.approx(first.temperature, rel=1e-12)


@pytest.mark.parametrize("factor", [1e-9, 0.3, 1e9])
def test_amounts_scale(factor):
    find, charge = minimiser("methane", "elements"), amounts(contents("methane").mechanism, {"C2H4": 1.0, "O2": 2.0})
    one = find.solve(charge, temperature=1500.0, pressure=ATM)
    other = find.solve(charge * factor, temperature=1500.0, pressure=ATM)
    assert other.mole_fraction == pytest.approx(one.mole_fraction, rel=1e-12, abs=1e-300)
    for key in ("amount", "volume", "gibbs_energy", "enthalpy", "internal_energy", "entropy", "heat_capacity"):
        assert getattr(other, key) == pytest.approx(factor * getattr(one, key), rel=1e-12, abs=1e-300)


def test_absent_elements_leave_their_species_out_exactly():
    found = minimiser("methane", "elements").solve({"H2": 1.0, "O2": 1.0}, temperature=2000.0, pressure=ATM)
    mechanism = found.mechanism
    other = np.any(found.conserved[[mechanism.used_elements.index(e) for e in ("C", "N", "Ar")]] != 0, axis=0)
    assert np.all(found.amount[other] == 0) and np.all(np.isneginf(found.log_mole_fraction[other]))
    assert np.all(found.amount[~other] > 0)
    assert np.array_equal(np.isnan(found.element_potentials), [e in ("C", "N", "Ar") for e in mechanism.used_elements])


def test_inerts_alone():
    """Nothing can happen: the charge itself, whatever is given; U = 3/2 nRT + const of a monatomic gas."""
    find, charge = minimiser("hydrogen-oxygen", "elements"), {"AR": 2.0, "HE": 1.0}
    found = find.solve(charge, temperature=500.0, pressure=ATM)
    assert found.amount[found.amount > 0] == pytest.approx([2.0, 1.0], rel=1e-15)
    hotter = find.solve(charge, internal_energy=found.internal_energy + 1.5 * 3.0 * R * 100.0, volume=1.0)
    assert hotter.temperature == pytest.approx(600.0, rel=1e-12)


def test_vessel_takes_its_share_of_the_heat():
    of = contents("hydrogen-oxygen")
    charge = amounts(of.mechanism, {"H2": 2.0, **AIR})
    start = of.internal_energy(charge, 300.0)
    given = {"internal_energy": start + 50.0 * (300.0 - 298.15), "volume": 0.1}
    found = minimiser("hydrogen-oxygen", "elements").solve(charge, own_heat_capacity=50.0, **given)
    assert of.internal_energy(found.amount, found.temperature) + 50.0 * (found.temperature - 300.0) \
        == pytest.approx(start, abs=1e-6)
    alone = minimiser("hydrogen-oxygen", "elements").solve(charge, internal_energy=start, volume=0.1)
    assert alone.temperature > found.temperature + 300.0
    shifted = minimiser("hydrogen-oxygen", "elements").solve(
        charge, own_heat_capacity=50.0, reference_temperature=300.0, internal_energy=start, volume=0.1)
    assert shifted.temperature == pytest.approx(found.temperature, rel=1e-12)


def test_traces_below_the_range_of_floats():
    """At 60 K carbon atoms are rarer than 1e-308: their logarithm stands, their fraction is zero."""
    found = minimiser("methane", "elements").solve({"CH4": 1.0, "H2": 1.0}, temperature=60.0, pressure=ATM)
    C, H = found.mechanism.index("C"), found.mechanism.index("H")
    assert found.mole_fraction[C] == 0.0 and -2000 < found.log_mole_fraction[C] < -1000
    g = contents("methane").molar(60.0)[0]
    H2 = found.mechanism.index("H2")
    assert found.log_mole_fraction[H] == pytest.approx(0.5 * (found.log_mole_fraction[H2] + g[H2]) - g[H], rel=1e-12)


def test_lists_and_single_equilibria_agree():
    mechanism, charge = contents("methane").mechanism, {"CH4": 1.0, "O2": 2.0, "N2": 7.52}
    temperatures = np.linspace(300.0, 3500.0, 9)
    listed = equilibria(mechanism, charge, temperature=temperatures, pressure=ATM)
    assert [found.temperature for found in listed] == list(temperatures)
    for found, T in zip(listed, temperatures, strict=True):
        alone = equilibrium(mechanism, charge, temperature=T, pressure=ATM)
        assert found.log_mole_fraction == pytest.approx(alone.log_mole_fraction, abs=1e-10)
    H = contents("methane").enthalpy(amounts(mechanism, charge), 298.15)
    pressures = [0.1 * ATM, ATM, 10 * ATM]
    rising = [found.temperature for found in equilibria(mechanism, charge, enthalpy=H, pressure=pressures)]
    assert rising == sorted(rising) and rising[2] - rising[0] > 50.0
    assert len(equilibria(mechanism, charge, temperature=1000.0, pressure=ATM)) == 1


@pytest.mark.parametrize("charge", [{"CH4": 1.0, "O2": 2.0}, {"NO2": 1.0, "HCN": 2.0},
                                    {"H": 1.0, "C2H2": 1e-60, "O": 1e-200}])
@pytest.mark.parametrize("given", [{"temperature": 600.0, "pressure": ATM}, {"temperature": 2500.0, "volume": 20.0}])
def test_continuation_leads_to_the_same_composition(monkeypatch, charge, given):
    """Refused the whole way, it goes a dozen steps through other Gibbs functions and charges, and ends the same."""
    direct = equilibrium(contents("methane").mechanism, charge, **given)
    tasks, counts = [], []

    def reluctant(point, task, most, solve=continuation.solve):
        tasks.append(task)
        if task is tasks[0] and len(counts) < 12:
            return False, 0
        done, count = solve(point, task, most)
        counts.append(count)
        return done, count

    monkeypatch.setattr(continuation, "solve", reluctant)
    led = GibbsMinimiser(contents("methane").mechanism).solve(charge, **given)
    assert len(counts) > 12 and led.iterations == sum(counts)
    assert led.log_mole_fraction == pytest.approx(direct.log_mole_fraction, abs=1e-10)


def test_continuation_starts_at_a_solution():
    """The start solves its own problem, so Newton's first step from it is nil."""
    of, random = contents("methane"), np.random.default_rng(0)
    for swells in (True, False):
        charge = at.random_charge(random, of.mechanism)
        allowed, components = possible_species(conserved_by_elements(of.mechanism), charge)
        task = Task(of.molar(900.0)[0][allowed], charge[allowed] / np.sum(charge), swells)
        point, start = continuation.positive_start(task, components)
        first = continuation._between(start, task, 1.0)
        before = point.log_component.copy()
        assert solve(point, first, 1) == (True, 1)
        assert point.log_component == pytest.approx(before, abs=1e-9)


def test_start_near_by_is_only_a_start():
    """An equilibrium of another charge, temperature or other conserved rows leads to the same result."""
    mechanism, charge = contents("hydrogen-oxygen").mechanism, {"H2": 1.0, "O2": 2.0, "CO": 1.0, "CO2": 1.0}
    cold = equilibrium(mechanism, charge, temperature=1000.0, pressure=ATM)
    for near in (equilibrium(mechanism, charge, temperature=3500.0, volume=1e-3),
                 equilibrium(mechanism, {"AR": 1.0, "H2": 1.0}, temperature=1000.0, pressure=ATM),
                 equilibrium(mechanism, charge, temperature=900.0, pressure=ATM, conserved="reactions")):
        warm = equilibrium(mechanism, charge, temperature=1000.0, pressure=ATM, near=near)
        assert warm.log_mole_fraction == pytest.approx(cold.log_mole_fraction, abs=1e-11)


def test_energy_within_the_jump_of_a_join_as_published():
    """Where published fits leave a jump in h at their join, an energy within it is met as well as can be: at the join."""
    document = contents("hydrogen-oxygen").mechanism.to_dict()
    document["mechanism"]["joins"] = "as published"
    del document["reaction"]
    document["species"] = {"AR": document["species"]["AR"]}
    low, high = (list(row) for row in document["species"]["AR"]["potential"]["a"])
    high[5] += 5.0  # h of the upper range 5 K·R higher
    document["species"]["AR"]["potential"]["a"] = [low, high]
    mechanism = build_mechanism(document)
    below = Contents(mechanism).enthalpy(np.ones(1), np.nextafter(1000.0, 0.0))
    found = equilibrium(mechanism, {"AR": 1.0}, enthalpy=below + 2.0 * R, pressure=ATM)
    assert found.temperature == pytest.approx(1000.0, rel=1e-12)
    assert found.energy_residual == pytest.approx(2.0 / 2500.0, rel=0.6)


BAD = {
    "nothing given": ({}, r"given: nothing; expected temperature with volume"),
    "one given": ({"temperature": 300.0}, r"given: temperature; expected"),
    "three given": ({"temperature": 300.0, "pressure": 1.0, "volume": 1.0}, r"given: temperature, pressure, volume"),
    "an odd pair": ({"internal_energy": 0.0, "pressure": 1.0}, r"given: pressure, internal_energy"),
    "no pressure": ({"temperature": 300.0, "pressure": 0.0}, r"pressure 0; expected a positive number"),
    "temperature not a number": ({"temperature": np.nan, "pressure": 1.0}, r"temperature nan"),
    "a text": ({"temperature": "300 K", "pressure": 1.0}, r"temperature '300 K' is a text; expected a number"),
    "energy infinite": ({"enthalpy": np.inf, "pressure": 1.0}, r"enthalpy inf; expected a finite number"),
    "too much energy": ({"enthalpy": 1e9, "pressure": ATM}, r"enthalpy 1e\+09 J is out of reach at constant pressure; "
                                                            r"expected at most .* at 20000 K"),
    "too little energy": ({"internal_energy": -1e9, "volume": 1.0}, r"internal energy .* expected at least .* at 50 K"),
    "a vessel that cools": ({"enthalpy": 0.0, "pressure": 1.0, "own_heat_capacity": -1.0}, r"vessel -1 J/K"),
    "reference unknown": ({"enthalpy": 0.0, "pressure": 1.0, "reference_temperature": np.nan}, r"reference temperature nan"),
}


@pytest.mark.parametrize("fault", BAD)
def test_bad_states_are_refused(fault):
    given, message = BAD[fault]
    with pytest.raises(InputError, match=message):
        equilibrium(contents("hydrogen-oxygen").mechanism, {"H2": 1.0, "O2": 1.0}, **given)


BAD_CHARGES = {
    "empty": ({"H2": 0.0}, r"the charge is empty"),
    "negative": ({"H2": -1.0}, r"amount -1 mol of H2; expected a finite amount, not negative"),
    "not finite": ({"O2": np.inf}, r"amount inf mol of O2"),
    "unknown species": ({"H2o": 1.0}, r"no species 'H2o'.*nearest: .*H2O"),
    "too few": (np.ones(3), r"amounts of shape \(3,\); expected one for each of the 13 species"),
}


@pytest.mark.parametrize("fault", BAD_CHARGES)
def test_bad_charges_are_refused(fault):
    charge, message = BAD_CHARGES[fault]
    with pytest.raises(InputError, match=message):
        equilibrium(contents("hydrogen-oxygen").mechanism, charge, temperature=1000.0, pressure=ATM)


def test_lists_of_unlike_lengths_are_refused():
    with pytest.raises(InputError, match="lists of 2 and 3 values; expected lists of one length"):
        equilibria(contents("hydrogen-oxygen").mechanism, {"H2": 1.0}, temperature=[300.0, 400.0], pressure=[1.0, 2.0, 3.0])


def test_equilibrium_knows_nothing_of_rates():
    """No file of the package imports anything of rates, of the vessel or of the kernels."""
    files = list(Path(continuation.__file__).parent.glob("*.py"))
    allowed = {"components", "constants", "contents", "errors", "mechanism.model", "mechanism.phase", "numpy",
               "math", "fractions", "functools",
               "dataclasses", "collections.abc", "itertools", "scipy.linalg.lapack", *(path.stem for path in files)}
    assert len(files) > 8
    for path in files:
        for node in ast.walk(ast.parse(path.read_text())):
            names = [node.module] if isinstance(node, ast.ImportFrom) else \
                [alias.name for alias in node.names] if isinstance(node, ast.Import) else []
            assert set(names) <= allowed, (path, names)
    without = replace(contents("methane").mechanism, reactions=())
    charge = {"CH4": 1.0, "O2": 2.0}
    same = [equilibrium(m, charge, temperature=1500.0, pressure=ATM) for m in (contents("methane").mechanism, without)]
    assert np.array_equal(same[0].amount, same[1].amount)
