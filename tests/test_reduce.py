"""Reduction: relation graphs against their definitions, parts of mechanisms against the whole, the search, its provenance."""

import hashlib
import itertools

import numpy as np
import pytest

from bothways import InputError, build_case, build_mechanism, read_mechanism, reduce, write_mechanism
from bothways.compare import compare, read_limits
from bothways.compare.runs import run_once
from bothways.mechanism.toml_writer import to_toml
from bothways.reduce import part_of
from bothways.reduce.graph import Graph, best_paths
from bothways.reduce.part import survivors
from bothways.reduce.search import by_sensitivity, by_threshold
from bothways.reduce.states import LAST_CHANGE, sampled
from bothways.vessel import Equations


def hydrogen_case(temperature: float = 1100.0, ratio: float = 1.0, pressure: str = "2 atm"):
    start = {"temperature": temperature, "pressure": pressure, "fuel": {"H2": 1}, "oxidiser": {"O2": 1, "N2": 3.76}}
    return build_case({"start": {**start, "equivalence_ratio": ratio}, "until": {"time": "20 ms"}},
                      mechanism=read_mechanism("hydrogen-oxygen"))


# ---- graphs


def relation(mechanism, net, a: str, b: str, method: str) -> float:
    """r_AB typed anew from the papers' definitions."""
    top = size = made = taken = signed = 0.0
    for reaction, rate in zip(mechanism.reactions, net, strict=True):
        nu = reaction.net.get(a, 0)
        there = b in {name for name, _ in reaction.equation.reactants + reaction.equation.products}
        size += abs(nu * rate)
        made, taken = made + max(nu * rate, 0.0), taken + max(-nu * rate, 0.0)
        if there:
            top, signed = top + abs(nu * rate), signed + nu * rate
    whole = size if method == "DRG" else max(made, taken)
    return (top if method == "DRG" else abs(signed)) / whole if whole else 0.0


@pytest.mark.parametrize("method", ["DRG", "DRGEP"])
def test_coefficients_are_the_papers(method: str) -> None:
    mechanism = read_mechanism("hydrogen-oxygen")
    net = np.random.default_rng(3).normal(size=(2, len(mechanism.reactions)))
    found = Graph(mechanism, method).coefficients(net)
    for k, (i, a), (j, b) in itertools.product(range(2), enumerate(mechanism.names), enumerate(mechanism.names)):
        if i != j:
            assert found[k, i, j] == pytest.approx(relation(mechanism, net[k], a, b, method), abs=1e-14), (a, b)


@pytest.mark.parametrize("combine", [np.multiply, np.minimum])
def test_best_paths_are_the_best_of_all_paths(combine) -> None:
    random, size = np.random.default_rng(5), 6
    r = random.random((4, size, size)) * (random.random((4, size, size)) < 0.5)
    found = best_paths(r, [1, 4], combine)
    for k in range(4):
        best = np.zeros(size)
        best[[1, 4]] = 1.0
        for target, length in itertools.product((1, 4), range(1, size)):
            for path in itertools.permutations([n for n in range(size) if n != target], length):
                steps = [r[k, a, b] for a, b in itertools.pairwise((target, *path))]
                best[path[-1]] = max(best[path[-1]], combine.reduce(steps))
        assert found[k] == pytest.approx(best, abs=1e-15)


def test_an_inert_species_has_no_importance_and_an_unknown_method_is_refused() -> None:
    mechanism = read_mechanism("hydrogen-oxygen")
    net = np.ones((1, len(mechanism.reactions)))
    importance = Graph(mechanism, "DRGEP").importance(net, [mechanism.index("H2")])
    assert importance[mechanism.index("N2")] == 0.0 and importance[mechanism.index("H2")] == 1.0
    with pytest.raises(InputError, match="unknown method 'DGR'"):
        Graph(mechanism, "DGR")


def test_sampled_states_cover_induction_and_event_and_stop_before_equilibrium() -> None:
    run = run_once(hydrogen_case())
    places = sampled(run)
    x = run.columns["amount"] / run.columns["amount"].sum(axis=1, keepdims=True)
    change = np.concatenate([[0.0], np.cumsum(np.abs(np.diff(x, axis=0)).sum(axis=1))])
    T = run.columns["temperature"][places]
    assert 15 < len(places) <= 30 and T[0] < 1101.0 and change[places[-1]] <= 1.02 * LAST_CHANGE * change[-1]
    assert np.count_nonzero(run.time[places] < 0.9 * run.ignition) >= 5 and np.count_nonzero(T > 1500.0) >= 5


# ---- parts


def test_a_part_has_the_parents_rates_where_the_rest_is_absent() -> None:
    parent = read_mechanism("methane")
    kept = ["H2", "H", "O", "O2", "OH", "H2O", "HO2", "H2O2", "CH3", "CH4", "CO", "CO2", "HCO", "CH2O", "CH3O", "C2H6", "N2"]
    part = build_mechanism(part_of(parent, kept))
    concentration = dict(zip(kept, np.random.default_rng(1).random(len(kept)), strict=True))
    rates = []
    for mechanism in (parent, part):
        y = np.array([*(concentration.get(name, 0.0) for name in mechanism.names), 1600.0])
        rates.append(Equations(mechanism).reaction_rates(y))
    places = survivors(parent, kept)
    assert [str(parent.reactions[j].equation) for j in places] == [str(r.equation) for r in part.reactions] and len(places) > 60
    for whole, own in zip(*rates, strict=True):
        assert own == pytest.approx(whole[places], rel=1e-12)
    assert set(part.names) == set(kept) and not part.to_dict()["mechanism"]["name"] == "methane"


def partners() -> dict:
    """Invented: an equation whose terms have partners of their own, one of them with a single partner."""
    potential = {"form": "constant heat capacity", "at": 298.15, "H": 0.0, "S": 100.0, "cp": 30.0}
    law = {"law": "Arrhenius", "A": 1.0}
    return {"mechanism": {"name": "partners", "phase": "ideal gas", "standard_pressure": "1 bar"}, "elements": {"Q": "10 g/mol"},
            "species": {n: {"composition": {"Q": c}, "potential": potential} for n, c in
                        (("A", 2), ("B", 1), ("W", 1), ("V", 1), ("C", 2))},
            "reaction": [
                {"equation": "A + M = 2 B + M", "collision_efficiency": {"W": 5.0, "B": 2.0},
                 "forward": [law, {**law, "collision_partner": "V"}, {**law, "collision_efficiency": {"V": 3.0}}]},
                {"equation": "C + M = 2 B + M", "collision_partner": "V", "forward": law},
                {"equation": "C = A", "collision_partner": "W",
                 "forward": {"law": "Lindemann", "k_0": {"A": 1.0}, "k_inf": {"A": 1.0}}}]}


def test_partners_go_with_their_species() -> None:
    parent = build_mechanism(partners())
    part = part_of(parent, ["A", "B", "C", "W"])
    assert [entry["equation"] for entry in part["reaction"]] == ["A + M = 2 B + M", "C = A"]
    assert part["reaction"][0]["forward"] == [{"law": "Arrhenius", "A": 1.0},
                                              {"law": "Arrhenius", "A": 1.0, "collision_efficiency": {}}]
    assert part["reaction"][0]["collision_efficiency"] == {"W": 5.0, "B": 2.0}
    efficiency = [dict(term.partner.efficiency) for term in build_mechanism(part).reactions[0].terms]
    assert efficiency == [{"W": 5.0, "B": 2.0}, {}]  # the shared one must not take the place of the emptied own one
    without = part_of(parent, ["A", "B", "C", "V"])
    assert [entry["equation"] for entry in without["reaction"]] == ["A + M = 2 B + M", "C + M = 2 B + M"]
    assert build_mechanism(without).names == ("A", "B", "V", "C")
    with pytest.raises(InputError, match="no species 'X'"):
        part_of(parent, ["A", "X"])
    assert parent.document == partners()


def test_lumped_steps_go_with_what_they_have_an_order_in() -> None:
    whole = partners()
    group = {"law": "Hougen-Watson", "k": {"A": 2.0, "Ea": 1.0}, "orders": {"W": 0.0},
             "adsorption": [{"species": "W", "K": {"A": 1.0}}, {"species": "V", "K": {"A": 3.0}}]}
    whole["reaction"] = [{"equation": "A = 2 B", "forward": {"law": "Arrhenius", "A": 1.0, "orders": {"W": 1.0}}},
                         {"equation": "C = 2 B", "forward": group}]
    parent = build_mechanism(whole)
    one = part_of(parent, ["A", "B", "C", "V"])["reaction"]
    assert [entry["equation"] for entry in one] == ["C = 2 B"]
    assert one[0]["forward"] == {**group, "orders": {}, "adsorption": group["adsorption"][1:]}
    none = part_of(parent, ["A", "B", "C"])
    assert none["reaction"][0]["forward"] == {"law": "Arrhenius", "A": 2.0, "Ea": 1.0, "orders": {}}
    y = np.array([0.3, 0.5, 0.2, 400.0])
    own = Equations(build_mechanism(none)).reaction_rates(y)
    theirs = Equations(parent).reaction_rates(np.array([0.3, 0.5, 0.0, 0.0, 0.2, 400.0]))
    assert [pair[0] for pair in own] == pytest.approx([pair[1] for pair in theirs], rel=1e-13)


def test_a_stated_equilibrium_cannot_be_left_out() -> None:
    from dataclasses import replace

    parent = build_mechanism(partners())
    stated = replace(parent, reactions=(*parent.reactions[:2], replace(parent.reactions[2], equilibrium=object())))
    assert part_of(stated, ["A", "B", "C", "W"])["species"]
    with pytest.raises(InputError, match="'C ⇌ A' states an equilibrium"):
        part_of(stated, ["A", "B", "C", "V"])


def test_reactions_can_be_left_out_alone() -> None:
    parent = build_mechanism(partners())
    assert [entry["equation"] for entry in part_of(parent, parent.names, [2])["reaction"]] == ["C = A"]


# ---- the search, on a set whose errors are known


class Stub:
    """Trials in which each lacking species adds its own error."""

    def __init__(self, errors: dict[str, float]) -> None:
        self.errors, self.asked = errors, 0
        self.parent = type("Parent", (), {"names": tuple(errors), "index": lambda own, name: own.names.index(name)})()

    def excess(self, kept: frozenset[str], enough: float = np.inf) -> float:
        self.asked += 1
        return sum(error for name, error in self.errors.items() if name not in kept)


def test_the_threshold_is_the_highest_that_keeps_the_limit() -> None:
    trials = Stub({"a": 9.0, "b": 9.0, "c": 0.7, "d": 0.5, "e": 0.4, "f": 0.0})
    found = by_threshold(trials, np.array([1.0, 0.8, 0.6, 0.4, 0.2, 0.1]), frozenset("a"))
    assert found.kept == frozenset("abc") and found.threshold == 0.6  # without d, e, f: 0.9; without c too: 1.6
    assert trials.asked <= 4


def test_the_last_pass_takes_what_the_limit_allows_the_least_missed_first() -> None:
    trials = Stub({"a": 9.0, "b": 9.0, "c": 0.7, "d": 0.5, "e": 0.4, "f": 0.0})
    importance = np.array([1.0, 0.8, 0.6, 0.4, 0.2, 0.1])
    start = by_threshold(Stub({**trials.errors, "f": 9.0}), importance, frozenset("a"))
    assert start.kept == frozenset("abcdef")
    found = by_sensitivity(trials, start, importance, frozenset("a"), certain=1.0)
    assert found.removed == ("f", "e", "d") and found.kept == frozenset("abc")
    certain = by_sensitivity(trials, start, importance, frozenset("a"), certain=0.3)
    assert certain.removed == ("f", "e")


def test_a_limit_that_even_the_whole_cannot_keep() -> None:
    class Never(Stub):
        def excess(self, kept, enough=np.inf):
            return 2.0

    with pytest.raises(InputError, match="do not keep the limits"):
        by_threshold(Never({"a": 0.0}), np.array([0.5]), frozenset())


# ---- all of it


@pytest.fixture(scope="module")
def reduced():
    return reduce("hydrogen-oxygen", over=[hydrogen_case(), hydrogen_case(1400.0, 2.0)], limits={"ignition": 0.1})


def test_hydrogen_loses_what_it_does_not_need(reduced) -> None:
    names = set(reduced.mechanism.names)
    assert {"H2", "O2", "N2", "H", "O", "OH", "HO2"} <= names and not names & {"AR", "HE", "CO", "CO2"}
    own = reduced.comparison.judged[0].worst("ignition")[0]
    assert 0.0 < abs(own) <= 0.1
    unseen = compare("hydrogen-oxygen", reduced.mechanism, over=[hydrogen_case(1250.0, 0.7, "1.5 atm")], limits={"ignition": 0.1})
    assert not unseen.beyond
    run = run_once(unseen.cases[0]).ignition / run_once(hydrogen_case(1250.0, 0.7, "1.5 atm")).ignition
    assert run == 1.0


def test_the_file_says_how_it_came_about(reduced, tmp_path) -> None:
    file = tmp_path / "small.toml"
    write_mechanism(reduced.mechanism, file)
    notes = read_mechanism(file).document["reduction"]
    parent = read_mechanism("hydrogen-oxygen")
    assert notes["parent"] == "hydrogen-oxygen"
    assert notes["parent_sha256"] == hashlib.sha256(to_toml(parent.document).encode()).hexdigest()
    assert notes["method"] == "DRGEP" and notes["limits"] == ["ignition 10 %"] and notes["keep"] == ["H2", "O2"]
    assert notes["errors"]["ignition"] == pytest.approx(reduced.comparison.judged[0].worst("ignition")[0], rel=1e-3)
    assert notes["temperature"] == [1100.0, 1400.0] and notes["parent_species"] == len(parent.species)
    assert notes["threshold"] == reduced.found.threshold and any("Pepiot" in source for source in notes["sources"])


def test_what_cannot_be_searched_for() -> None:
    over = [hydrogen_case()]
    for how, problem in (({"limits": {}}, "no limit"), ({"limits": {"ignition": 0.1}, "over": []}, "no conditions"),
                         ({"limits": {"ignition": 0.1}, "keep": ["H3"]}, "no species 'H3'"),
                         ({"limits": {"ignition": 0.1}, "margin": 0.0}, "margin 0"),
                         ({"limits": {"ignition": 0.1}, "method": "guess"}, "unknown method 'guess'")):
        with pytest.raises(InputError, match=problem):
            reduce("hydrogen-oxygen", **{"over": over, **how})


def test_a_limit_on_what_never_happens() -> None:
    cold = build_case({**hydrogen_case().document, "start": {**hydrogen_case().document["start"], "temperature": 700.0},
                       "until": {"time": "1 ms"}}, mechanism=read_mechanism("hydrogen-oxygen"))
    with pytest.raises(InputError, match="ignition has no meaning in any condition"):
        reduce("hydrogen-oxygen", over=[cold], limits=["ignition=10%"])


def test_a_provenance_with_unknown_keys_is_refused() -> None:
    document = {**partners(), "reduction": {"parent": "x", "parent_sha256": "0", "methods": "guess"}}
    with pytest.raises(InputError, match=r"reduction: unknown key 'methods' \(nearest: method\)"):
        build_mechanism(document)
    with pytest.raises(InputError, match="'parent_sha256' is missing"):
        build_mechanism({**partners(), "reduction": {"parent": "x"}})


def test_the_bundled_skeleton_is_the_part_of_its_parent_that_it_says() -> None:
    parent, skeleton = read_mechanism("methane"), read_mechanism("methane-skeletal")
    notes = skeleton.document["reduction"]
    assert notes["parent_sha256"] == hashlib.sha256(to_toml(parent.document).encode()).hexdigest(), "make it anew: see its head"
    part = part_of(parent, skeleton.names, name="methane-skeletal")
    assert {**part, "reduction": notes} == skeleton.document and len(skeleton.names) == 24
    start = {"fuel": {"CH4": 1}, "oxidiser": {"O2": 1, "N2": 3.76}, "temperature": 1650.0, "pressure": "7 atm"}
    case = build_case({"start": {**start, "equivalence_ratio": 1.3}, "until": {"time": "20 ms"}}, mechanism=parent)
    assert not compare(parent, skeleton, over=[case], limits={"ignition": 0.1, "end-temperature": 20.0}).beyond


@pytest.mark.slow
@pytest.mark.parametrize("limit, most", [(0.1, 30), (0.3, 25)])
def test_methane_over_the_range_of_published_skeletal_mechanisms(limit: float, most: int) -> None:
    """Published skeletal sizes from the same parent are 25 to 30 species; measured where the search did not look."""
    parent = read_mechanism("methane")
    small = reduce(parent, over="methane-range", limits={"ignition": limit, "end-temperature": 20.0}, margin=0.9)
    assert len(small.mechanism.species) <= most
    start = {"fuel": {"CH4": 1}, "oxidiser": {"O2": 1, "N2": 3.76}}
    points = ((1060.0, "2.2 atm", 0.7), (1330.0, "10 atm", 1.4), (1800.0, "13 atm", 0.6), (1950.0, "1.3 atm", 1.8))
    unseen = [build_case({"start": {**start, "temperature": T, "pressure": p, "equivalence_ratio": ratio},
                          "until": {"time": 5.0}}, mechanism=parent) for T, p, ratio in points]
    assert read_limits({"ignition": limit})[0].keeps(compare(parent, small.mechanism, over=unseen).judged[0].worst("ignition")[0])
