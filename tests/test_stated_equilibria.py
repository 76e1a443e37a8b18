"""Equilibrium constants stated by reactions: resolved exactly, adjusted within uncertainties, refused beyond them."""

import numpy as np
import pytest

from bothways import InputError, Remark, build_case, build_mechanism, read_mechanism, run
from bothways.batch import run_and_judge
from bothways.contents import Contents
from bothways.endpoint import Kind
from solutions import SPECIES, STATES, document

R = 8.31446261815324


def restated(document, equilibria, keep=()):
    """The document without the data of species other than `keep`, and equilibria by equation."""
    species = {name: {k: v for k, v in data.items() if k != "potential" or name in keep}
               for name, data in document["species"].items()}
    reactions = [{**r, **({"equilibrium": equilibria[r["equation"]]} if r["equation"] in equilibria else {})}
                 for r in document["reaction"]]
    return {**document, "species": species, "reaction": reactions}


def values_of(mechanism, temperatures):
    """K, ΔH and ΔCp of every reaction at a temperature of its own, as a file states them."""
    contents, nu, stated = Contents(mechanism), mechanism.stoichiometry, {}
    for j, (reaction, T) in enumerate(zip(mechanism.reactions, temperatures, strict=True)):
        g, h, cp = contents.molar(T)
        stated[str(reaction.equation)] = {"K": float(np.exp(-(nu[:, j] @ g))), "at": T, "dH": float(R * T * (nu[:, j] @ h)),
                                          "dCp": float(R * (nu[:, j] @ cp))}
    return stated


@pytest.mark.parametrize("state", STATES)
@pytest.mark.parametrize("keep", [(), ("A", "B", "W")])
def test_what_was_stated_is_what_holds(state, keep):
    """All K(T) of a mechanism come back from K, ΔH and ΔCp of its reactions, each at another temperature; cycles close."""
    whole = build_mechanism(document(state))
    equilibria = values_of(whole, [290.0, 300.0, 310.0, 298.15, 330.0, 345.0])
    again = build_mechanism(restated(document(state), equilibria, keep))
    for T in (280.0, 320.0, 400.0):
        ours, theirs = (Contents(m).log_equilibrium_constants(T) for m in (again, whole))
        assert np.max(np.abs(ours - theirs)) < 1e-11
        nu = whole.stoichiometry
        assert np.max(np.abs(nu.T @ (Contents(again).molar(T)[1] - Contents(whole).molar(T)[1]))) < 1e-10
    assert again.notes == () and again.to_dict() == restated(document(state), equilibria, keep)


def test_gas_species_with_cp_alone():
    """N2O4 = 2 NO2 of a gas from K(298.15 K) and ΔH, the heat capacities known; NO2's potential left to nothing else."""
    head = {"name": "dissociation", "phase": "ideal gas", "standard_pressure": "1 bar"}
    cp = {"form": "constant heat capacity"}
    m = build_mechanism({"mechanism": head, "species": {
        "N2O4": {"formula": "N2O4", "potential": cp | {"cp": 77.0}}, "NO2": {"formula": "NO2", "potential": cp | {"cp": 37.0},
                                                                            "standard_pressure": "1 atm"}},
        "reaction": [{"equation": "N2O4 = 2 NO2", "forward": {"law": "Arrhenius", "A": 1.0},
                      "equilibrium": {"K": 0.148, "at": 298.15, "dH": "57.1 kJ/mol"}}]})
    contents = Contents(m)
    assert contents.log_equilibrium_constants(298.15)[0] == pytest.approx(np.log(0.148), abs=1e-12)
    dH = 57.1e3 + (2 * 37.0 - 77.0) * (340.0 - 298.15)
    assert R * 340.0 * (m.stoichiometry.T @ contents.molar(340.0)[1])[0] == pytest.approx(dH, rel=1e-12)


RING = {"A ⇌ B": 2.0, "B ⇌ C": 3.0, "C ⇌ A": 1 / 6.0}


def ring(change=(), **more):
    """A ⇌ B ⇌ C ⇌ A and C ⇌ D; change: keys of the equilibria by equation."""
    rows = {equation: {"K": K, "at": 298.15, "dH": 0.0} for equation, K in {**RING, "2 C ⇌ D": 5.0}.items()}
    for equation, keys in dict(change).items():
        rows[equation].update(keys)
    return {"mechanism": {"name": "ring", "phase": "ideal solution", "standard_state": "1 mol/L"}, "elements": {"Q": 0.01},
            "species": {"A": {"formula": "Q"}, "B": {"formula": "Q"}, "C": {"formula": "Q"}, "D": {"formula": "Q2"}} | more,
            "reaction": [{"equation": e, "forward": {"law": "Arrhenius", "A": 1.0}, "equilibrium": row}
                         for e, row in rows.items()]}


def test_within_their_uncertainties_values_are_adjusted_by_weighted_least_squares():
    """ln K off by m round three steps of spreads s: each gives m s²/Σ s²; K of the fourth, in no cycle, stays."""
    s = np.log1p(np.array([0.01, 0.02, 0.05]))
    m = build_mechanism(ring({"A ⇌ B": {"K": 2.06}, "B ⇌ C": {"uncertainty": 0.02}, "C ⇌ A": {"uncertainty": {"K": 0.05}}}))
    expected = np.log([2.06, 3.0, 1 / 6.0]) - np.log(1.03) * s**2 / np.sum(s**2)
    found = Contents(m).log_equilibrium_constants(298.15)
    assert found[:3] == pytest.approx(expected, abs=1e-12) and found[3] == pytest.approx(np.log(5.0), abs=1e-12)
    assert len(m.notes) == 3 and m.notes[0] == f"K of 'A ⇌ B' at 298.15 K: 2.06 to {np.exp(expected[0]):.6g}"
    case = build_case({"vessel": {"heat": "isothermal"}, "start": {"temperature": 298.15, "concentration": {"A": 1.0}},
                       "until": {"time": 1e-3}}, mechanism=m)
    with pytest.warns(Remark, match=r"stated equilibria were changed within their uncertainties .*K of 'A ⇌ B'"):
        run(case)


@pytest.mark.parametrize("change, texts", [
    ({"A ⇌ B": {"K": 3.0}}, ["reactions 1, 2, 3: round the cycle back through 'A ⇌ B', back through 'B ⇌ C', back through 'C ⇌",
                             "ln K is off by -0.4055 (ΔG by 1.005 kJ/mol) at 298.15 K, ΔH by 0 kJ/mol",
                             "at most 0.0299 ln K by the stated uncertainties", "K of 'A ⇌ B' × 0.8736"]),
    ({"B ⇌ C": {"dH": 2000.0}}, ["ln K is off by 0 (ΔG by 0 kJ/mol) at 298.15 K, ΔH by 2 kJ/mol", "0.3 kJ/mol of ΔH",
                                 "ΔH of 'B ⇌ C' -0.6667 kJ/mol"]),
    ({"C ⇌ A": {"dCp": -12.0}}, ["ΔCp by 12 J/(mol K)", "ΔCp of 'C ⇌ A' +4 J/(mol K)"]),
    ({"C ⇌ A": {"K": 1 / 6 * 1.2, "uncertainty": 1.0}}, []),
    ({"2 C ⇌ D": {"K": 1e5}}, [])])
def test_beyond_them_the_cycle_is_named(change, texts):
    if not texts:
        build_mechanism(ring(change))
        return
    with pytest.raises(InputError) as caught:
        build_mechanism(ring(change))
    for text in texts:
        assert text in str(caught.value)


def test_one_wrong_reaction_of_two_rings_is_told():
    """A ⇌ B stands in both rings: either can be closed by others, both together only by it."""
    wrong = ring({"A ⇌ B": {"K": 4.0}}, E={"formula": "Q"})
    wrong["reaction"] += [{"equation": e, "forward": {"law": "Arrhenius", "A": 1.0}, "equilibrium":
                           {"K": K, "at": 298.15, "dH": 0.0}} for e, K in (("B ⇌ E", 0.5), ("E ⇌ A", 1.0))]
    with pytest.raises(InputError, match="left to the others, 'A ⇌ B' alone would close all cycles"):
        build_mechanism(wrong)


def test_data_of_species_and_a_stated_equilibrium_must_agree():
    """Where all species have data a stated K is held against them; within its uncertainty the data stand."""
    m = build_mechanism(document())
    right = values_of(m, [298.15] * 6)["A ⇌ B + C"]
    contradicted = restated(document(), {"A ⇌ B + C": right | {"K": right["K"] * 1.1}}, SPECIES)
    with pytest.raises(InputError, match=r"reaction 1: round the cycle .*through 'A ⇌ B \+ C' and the species' own data"):
        build_mechanism(contradicted)
    close = restated(document(), {"A ⇌ B + C": right | {"K": right["K"] * 1.005}}, SPECIES)
    again = build_mechanism(close)
    assert Contents(again).log_equilibrium_constants(298.15)[0] == Contents(m).log_equilibrium_constants(298.15)[0]
    assert "K of 'A ⇌ B + C'" in again.notes[0]


def test_a_reaction_whose_K_follows_from_nothing_is_refused():
    document = ring()
    del document["reaction"][3]["equilibrium"]
    with pytest.raises(InputError, match=r"reaction 4 '2 C ⇌ D': K follows neither from data of C and D nor"):
        build_mechanism(document)
    del document["reaction"][2]["equilibrium"], document["reaction"][3]
    found = np.exp(Contents(build_mechanism(document)).log_equilibrium_constants(298.15))
    assert found == pytest.approx([2.0, 3.0, 1 / 6.0], rel=1e-13)  # the third follows from the first two


def test_what_nothing_fixes_keeps_no_equilibrium_apart():
    """A ⇌ B and, unlinked, E ⇌ F: between the pairs no potential is known, and none is made up."""
    document = ring(E={"formula": "Q"}, F={"formula": "Q"})
    document["reaction"] = [document["reaction"][0], {**document["reaction"][1], "equation": "E ⇌ F"}]
    m = build_mechanism(document)
    case = build_case({"vessel": {"heat": "isothermal"}, "start": {"temperature": 298.15, "concentration": {"A": 1.0, "E": 2.0}},
                       "until": {"equilibrium": True}}, mechanism=m)
    trajectory, verdict = run_and_judge(case)
    assert verdict.kind is Kind.LANDED and verdict.apart == ()
    assert trajectory.amount[-1] == pytest.approx([1 / 3, 2 / 3, 0.0, 0.0, 0.5, 1.5], rel=1e-6)


def test_mixed_with_polynomials():
    """A gas whose potentials are NASA polynomials, but for one that comes from the K of a reaction."""
    whole = read_mechanism("hydrogen-oxygen").to_dict()
    own = read_mechanism("hydrogen-oxygen")
    j = next(k for k, r in enumerate(own.reactions) if "HO2" in r.net and len(r.net) == 3)
    contents, T = Contents(own), 1000.0
    g, h, cp = contents.molar(T)
    nu = own.stoichiometry[:, j]
    whole["species"]["HO2"]["potential"] = {"form": "constant heat capacity",
                                            "cp": float(cp[own.index("HO2")] / 4.184 * R)}  # the file's unit is cal/(mol K)
    whole["reaction"][j]["equilibrium"] = {"K": float(np.exp(-(nu @ g))), "at": T, "dH": f"{R * T * (nu @ h)} J/mol"}
    again = Contents(build_mechanism(whole))
    assert again.molar(T)[0] == pytest.approx(g, abs=1e-9) and again.molar(T)[1] == pytest.approx(h, abs=1e-9)
