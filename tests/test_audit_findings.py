"""Each kind of finding: one planted fault that must be found, and a neighbour just short of it that must not."""

from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from audited import Document, add, audited, entry, forward, found, rows, sound
from bothways import InputError, build_mechanism
from bothways.audit import CHECKS, ERROR, NOTICE, WARNING, audit
from reference import Reference

R = 8.31446261815324


def arrhenius(A: float, n: float = 0.0, Ea: float = 0.0) -> Document:
    return {"law": "Arrhenius", "A": A, "n": n, "Ea": Ea}


def test_nothing_is_found_in_a_sound_mechanism() -> None:
    assert audited().findings == ()


@pytest.mark.parametrize("check", CHECKS, ids=lambda check: check.NAME)
def test_each_kind_explains_itself(check: Any) -> None:
    assert check.NAME and check.SOURCE and check.EXPLANATION.endswith(".") and check.SEVERITY
    assert any(word in check.SEVERITY for word in (ERROR, WARNING, NOTICE))


# ---- rates against what molecules can do


def hard_limit(d: float, mass: tuple[float, float], depth: float, T: float, like: bool) -> float:
    """Collision rate constant [m3/(mol s)] from the formulas: d [m], masses [kg/mol], depth [K]."""
    mu, x = mass[0] * mass[1] / sum(mass), T / depth
    omega = 1.16145 / x**0.14874 + 0.52487 / np.exp(0.7732 * x) + 2.16178 / np.exp(2.43787 * x)
    return float(6.02214076e23 * np.pi * d**2 * np.sqrt(8 * R * T / (np.pi * mu)) * omega * (0.5 if like else 1.0))


def endothermic(Ea: float) -> Any:
    """The exothermic H + HO2 = 2 OH stated from its other end, with an activation energy [cal/mol]."""
    def spoil(document: Document) -> None:
        document["reaction"].remove(entry(document, "HO2 + H ⇌ 2 OH"))
        add(document, "2 OH ⇌ HO2 + H", arrhenius(1e13, Ea=Ea))
        document["species"]["HO2"] |= {"collision_diameter": "3.5 Å", "well_depth": 110.0}
    return spoil


def test_derived_reverse_above_the_collision_rate() -> None:
    document = sound()
    endothermic(20e3)(document)
    [row] = found("faster than collisions", endothermic(20e3))
    j = len(document["reaction"]) - 1
    K = Reference(document).K_c(300.0)[j]
    d, depth = 0.5 * (3.5 + 2.708) * 1e-10, float(np.sqrt(110.0 * 37.0))
    limit = hard_limit(d, (33.006e-3, 1.008e-3), depth, 300.0, False)
    k_r = 1e13 * 1e-6 * np.exp(-20e3 * 4.184 / (R * 300.0)) / K
    assert row.decades == pytest.approx(np.log10(k_r / limit), abs=1e-3) and row.decades > 8
    assert (row.severity, row.temperature, row.reaction) == (ERROR, 300.0, j + 1)
    assert "derived reverse" in row.text and row.likely.startswith("the energies")
    assert row.gibbs_change == pytest.approx(-R * 300.0 * row.decades * np.log(10.0))
    assert found("faster than collisions", endothermic(40e3)) == []


def test_forward_above_the_collision_rate() -> None:
    def spoil(A: float) -> Any:
        return lambda d: forward(d, "HO2 + H ⇌ 2 OH").update(A=A)
    [row] = found("faster than collisions", spoil(7e16))
    assert row.likely == "the forward rate" and "forward k" in row.text and np.isnan(row.gibbs_change)
    assert found("faster than collisions", spoil(7e13)) == []


def test_a_named_partner_counts_as_one() -> None:
    """2 O + O2 ⇌ 2 O2 as a recombination: k [O2] against the collision rate of two O, at the highest pressure."""
    [row] = found("faster than collisions", lambda d: add(d, "2 O + O2 ⇌ 2 O2", arrhenius(1e20)))
    limit = hard_limit(3.05e-10, (15.999e-3, 15.999e-3), 106.7, 300.0, True)
    assert row.decades == pytest.approx(np.log10(1e8 * 1e7 / (R * 300.0) / limit), abs=1e-3) and row.pressure == 1e7
    assert "low pressure" in row.likely
    assert found("faster than collisions", lambda d: add(d, "2 O + O2 ⇌ 2 O2", arrhenius(1e15))) == []


def test_like_molecules_meet_half_as_often() -> None:
    """Half the collision rate of different molecules: between a half and one of it, only the like pair is too fast."""
    Z = hard_limit(3.05e-10, (15.999e-3, 15.999e-3), 106.7, 1000.0, False)
    def spoil(share: float) -> Any:
        return lambda d: add(d, "2 O ⇌ O2", arrhenius(share * Z * 1e6))
    how = {"temperatures": (1000.0, 1000.0)}
    assert any(row.text.startswith("forward k of O + O") for row in found("faster than collisions", spoil(0.6), **how))
    assert not any(row.text.startswith("forward") for row in found("faster than collisions", spoil(0.4), **how))


def test_ions_are_left_out() -> None:
    def spoil(document: Document) -> None:
        for name, charge in (("H", 1), ("OH", -1)):
            document["species"][f"{name}±"] = document["species"][name] | {"charge": charge}
        add(document, "H± + OH± ⇌ H + OH", arrhenius(1e20))
    assert not any("±" in row.text for row in found("faster than collisions", spoil))


def test_recombination_limit() -> None:
    def stated(factor: float) -> Any:
        return lambda d: forward(d, "H + O2 ⇌ HO2")["k_inf"].update(A=4.65084e12 * factor)
    [row] = found("recombination faster than collisions", stated(1e3))
    assert row.text.startswith("forward k_inf of H + O2") and row.severity == ERROR
    assert row.text.endswith("k itself stays below it at the working pressures")
    assert found("recombination faster than collisions", stated(1.0)) == []

    def derived(Ea: float) -> Any:
        return lambda d: forward(d, "H2O2 ⇌ 2 OH")["k_inf"].update(A=2e14, n=0.0, Ea=Ea)
    [row] = found("recombination faster than collisions", derived(40e3))
    assert "derived reverse k_inf of OH + OH" in row.text
    assert found("recombination faster than collisions", derived(50e3)) == []


@pytest.mark.parametrize("A, severity", [(3e14, NOTICE), (1e16, WARNING), (1e18, ERROR)])
def test_unimolecular_limit(A: float, severity: str) -> None:
    def spoil(document: Document) -> None:
        forward(document, "H2O2 ⇌ 2 OH")["k_inf"].update(A=A, n=0.0, Ea=0.0)
    [row] = found("unimolecular above k_B T/h", spoil)
    assert row.severity == severity and row.temperature == 300.0
    assert row.decades == pytest.approx(np.log10(A / (1.380649e-23 * 300.0 / 6.62607015e-34)), abs=1e-6)
    assert not found("unimolecular above k_B T/h", lambda d: forward(d, "H2O2 ⇌ 2 OH")["k_inf"].update(A=6e12, n=0.0, Ea=0.0))


# ---- published reverse constants


@pytest.mark.parametrize("factor, severity", [(1.5, NOTICE), (3.0, WARNING), (30.0, ERROR), (1 / 30.0, ERROR)])
def test_published_reverse(factor: float, severity: str) -> None:
    """At one temperature the derived constant is k_f/K_c; the published one is so many times that."""
    T, equation = 1500.0, "H + O2 ⇌ O + OH"
    j = [r["equation"] for r in sound()["reaction"]].index(equation)
    derived = 1.04e14 * np.exp(-15286 * 4.184 / (R * T)) / Reference(sound()).K_c(T)[j]
    result = audited(lambda d: entry(d, equation).update(published_reverse={"A": factor * derived}), temperatures=(T, T))
    [row] = result.of("published reverse")
    assert (row.severity, row.reaction) == (severity, j + 1)
    assert row.value == pytest.approx(factor, rel=1e-9) and row.gibbs_change == pytest.approx(R * T * np.log(factor), rel=1e-9)
    within = {"published": 1.0, "within 2": float(factor == 1.5), "within 10": float(factor in (1.5, 3.0))}
    assert result.agreement == within


def test_published_reverse_of_fall_off_is_that_of_its_high_pressure_limit() -> None:
    T = 1000.0
    j = [r["equation"] for r in sound()["reaction"]].index("H + O2 ⇌ HO2")
    derived = 4.65084e12 * T**0.44 * 1e-6 / Reference(sound()).K_c(T)[j]
    [row] = found("published reverse", lambda d: d["reaction"][j].update(published_reverse={"A": derived}), temperatures=(T, T))
    assert row.value == pytest.approx(1.0, rel=1e-9)


def test_published_reverse_beside_a_partner() -> None:
    """H2 + M ⇌ 2 H + M: k_f/K_c of third order, whatever the concentration of M."""
    T, equation = 1500.0, "H2 + M ⇌ 2 H + M"
    j = [r["equation"] for r in sound()["reaction"]].index(equation)
    derived = 4.577e19 * 1e-6 * T**-1.4 * np.exp(-104380 * 4.184 / (R * T)) / Reference(sound()).K_c(T)[j]
    published = {"A": float(derived) * 1e12}  # cm6/(mol2 s)
    [row] = found("published reverse", lambda d: entry(d, equation).update(published_reverse=published), temperatures=(T, T))
    assert row.value == pytest.approx(1.0, rel=1e-9)


def test_published_one_way() -> None:
    def spoil(equation: str) -> Any:
        return lambda d: entry(d, equation).update(published_one_way=True)
    [row] = found("published one way", spoil("O + H2 ⇌ H + OH"))
    j = [r["equation"] for r in sound()["reaction"]].index("O + H2 ⇌ H + OH")
    assert row.severity == WARNING and row.value == pytest.approx(Reference(sound()).K_c(300.0)[j], rel=1e-9) and row.value < 1
    [row] = found("published one way", spoil("HO2 + H ⇌ 2 OH"))
    assert row.severity == NOTICE and row.value > 1


# ---- thermochemistry


def test_open_join() -> None:
    def spoil(size: float) -> Any:
        return lambda d: rows(d, "OH")[1].__setitem__(5, rows(d, "OH")[1][5] + size * 1000.0)
    [row] = found("open join", spoil(0.05))
    assert row.severity == NOTICE and row.decades == pytest.approx(0.05 / np.log(10.0), rel=1e-3) and row.species == "OH"
    assert row.temperature == 1000.0
    assert found("open join", spoil(2.5))[0].severity == ERROR
    assert found("open join", spoil(1e-3)) == []


def test_open_join_that_meets_elsewhere() -> None:
    def spoil(document: Document) -> None:
        document["species"]["H2O"]["potential"]["T"][1] = 1400.0
    [row] = found("open join", spoil)
    assert "the ranges meet at 1000 K instead" in row.text


def test_jump_of_K() -> None:
    def spoil(size: float) -> Any:
        return lambda d: rows(d, "O")[1].__setitem__(5, rows(d, "O")[1][5] + size * 1000.0)
    jumps = {row.reaction: row for row in found("jump of K", spoil(0.9))}
    equations = [r["equation"] for r in sound()["reaction"]]
    assert {equations[j - 1] for j in jumps} == {e for e in equations if "O" in e.split()}
    twice = jumps[equations.index("2 O + M ⇌ O2 + M") + 1]  # ν = -2: K of it jumps up by exp(1.8)
    assert twice.value == pytest.approx(1.8, abs=1e-3) and twice.severity == WARNING and "up" in twice.text
    assert found("jump of K", spoil(0.01)) == []


@pytest.mark.parametrize("species, shift, severity", [("H2O", 4.0, ERROR), ("H2O", 1.8, WARNING), ("H2O2", -2.3, WARNING)])
def test_heat_capacity(species: str, shift: float, severity: str) -> None:
    """H2O has at most 3·3 - 1.5 = 7.5; H2O2 (10.5 at most) less than 3.2 + 6 stiff modes."""
    def spoil(size: float) -> Any:
        return lambda d: [row.__setitem__(0, row[0] + size) for row in rows(d, species)]
    [row] = found("heat capacity", spoil(shift))
    assert (row.severity, row.species) == (severity, species)
    assert found("heat capacity", spoil(0.1 * shift)) == []


def test_heat_capacity_that_does_not_approach_the_limit() -> None:
    def spoil(cp: float) -> Any:
        potential = {"form": "constant heat capacity", "at": 298.15, "H": -32530.0, "S": 55.7, "cp": cp}
        return lambda d: d["species"]["H2O2"].update(potential=potential)
    [row] = found("heat capacity", spoil(5.0 * 1.987))
    assert row.to_temperature == 2500.0 and row.from_temperature > 1000.0 and "stiffest" in row.text
    assert found("heat capacity", spoil(8.0 * 1.987)) == []


def test_entropy_below_translation() -> None:
    """S°/R of H2O is 22.7 at 298 K, that of point masses of 18 g/mol 17.4 (Sackur-Tetrode)."""
    def spoil(shift: float) -> Any:
        return lambda d: [row.__setitem__(6, row[6] + shift) for row in rows(d, "H2O")]
    [row] = found("entropy", spoil(-6.0))
    assert row.severity == ERROR and row.species == "H2O" and row.temperature == 300.0
    assert "negative" in found("entropy", spoil(-30.0))[0].text
    assert found("entropy", spoil(-4.5)) == []


def test_entropies_of_formation_may_be_anything() -> None:
    """A Gibbs energy of formation holds the entropies of the elements: its S may be negative."""
    def spoil(document: Document) -> None:
        for species in document["species"].values():
            species["potential"] = {"form": "constant heat capacity", "at": 298.15, "H": -20e3, "G": -5e3, "cp": 9.0}
    assert found("entropy", spoil) == []


def test_enthalpy_of_formation() -> None:
    def spoil(kJ: float) -> Any:
        return lambda d: [row.__setitem__(5, row[5] + kJ * 1e3 / R) for row in rows(d, "OH")]
    [row] = found("enthalpy of formation", spoil(30.0))
    assert row.severity == ERROR and row.species == "OH" and row.value == pytest.approx(37.3e3 + 30e3, abs=500)
    assert found("enthalpy of formation", spoil(10.0))[0].severity == WARNING
    assert found("enthalpy of formation", spoil(0.5)) == []


def test_a_name_alone_does_not_make_a_reference() -> None:
    """A species called CO that is made of cobalt, and an isomer by another name, are not compared."""
    def spoil(document: Document) -> None:
        document["species"]["CO"] = document["species"]["O2"] | {"formula": "Co"}
        document["species"]["HOO*"] = document["species"]["HO2"]
    assert found("enthalpy of formation", spoil) == []


def test_outside_the_data() -> None:
    [*found_rows] = audited(temperatures=(300.0, 5300.0)).of("outside the data")
    assert {row.species for row in found_rows} and all(row.severity == NOTICE for row in found_rows if row.value <= 500)
    assert all(row.severity == WARNING for row in audited(temperatures=(300.0, 7000.0)).of("outside the data"))
    assert list(audited(temperatures=(295.0, 3500.0)).of("outside the data")) == []


def test_same_data() -> None:
    def copied(document: Document) -> None:
        document["species"]["HO2"]["potential"] = sound()["species"]["H2O"]["potential"]
    [row] = found("same data", copied)
    assert row.severity == ERROR and "HO2" in row.text and row.species == "H2O"

    def isomer(shift: float) -> Any:
        def spoil(document: Document) -> None:
            document["species"]["HOO*"] = sound()["species"]["HO2"]
            rows(document, "HOO*")[0][0] += shift
        return spoil
    assert [row.severity for row in found("same data", isomer(0.0))] == [NOTICE]
    assert found("same data", isomer(1e-6)) == []


# ---- stoichiometry


def test_not_balanced() -> None:
    """A file cannot state it; a mechanism whose species were changed in Python can."""
    mechanism = build_mechanism(sound())
    k = mechanism.index("OH")
    spoilt = replace(mechanism, species=tuple(replace(s, composition={"O": 1, "H": 2}) if i == k else s
                                              for i, s in enumerate(mechanism.species)))
    kept = [row for row in audit(spoilt) if row["kind"] == "not balanced"]
    assert len(kept) == sum("OH" in r.net for r in mechanism.reactions) and "H +1" in kept[0]["text"]
    assert not [row for row in audit(mechanism) if row["kind"] == "not balanced"]


def test_takes_no_part() -> None:
    def spoil(document: Document) -> None:
        document["species"]["AR"] = {"formula": "Ar", "potential": sound()["species"]["H"]["potential"]}
    assert [row.species for row in found("takes no part", spoil)] == ["AR"]


def test_conserved_besides_the_elements() -> None:
    """With H + O2 ⇌ O + OH alone of five species: H + OH and O2 + OH (or others of that span) never change."""
    def spoil(document: Document) -> None:
        document["reaction"] = [r for r in document["reaction"] if r["equation"] == "H + O2 ⇌ O + OH"]
        document["species"] = {name: document["species"][name] for name in ("H", "O2", "O", "OH")}
    texts = [row.text for row in found("conserved besides the elements", spoil)]
    assert len(texts) == 1 and texts[0].startswith("no reaction changes ")  # four species, one reaction, two elements
    assert found("conserved besides the elements", lambda d: None) == []


def test_stated_both_ways_round() -> None:
    """Beside H + O2 ⇌ O + OH the opposite, with its derived reverse at 1000 K, or far from it."""
    j = [r["equation"] for r in sound()["reaction"]].index("H + O2 ⇌ O + OH")
    derived = 1.04e14 * np.exp(-15286 * 4.184 / (R * 1000.0)) / Reference(sound()).K_c(1000.0)[j]
    [row] = found("stated both ways round", lambda d: add(d, "O + OH ⇌ H + O2", arrhenius(float(derived))))
    assert row.severity == WARNING and row.reaction == len(sound()["reaction"]) + 1
    assert found("stated both ways round", lambda d: add(d, "O + OH ⇌ H + O2", arrhenius(1e9)))[0].severity == NOTICE


# ---- shapes of the rate laws


@pytest.mark.parametrize("centre, severity", [(1.5, NOTICE), (3.0, WARNING), (15.0, ERROR)])
def test_broadening_above_one(centre: float, severity: str) -> None:
    def spoil(value: float) -> Any:
        return lambda d: forward(d, "H + O2 ⇌ HO2").update(F_cent=value)
    [row] = found("broadening above 1", spoil(centre))
    assert row.severity == severity and row.value == pytest.approx(centre, rel=1e-9)
    assert found("broadening above 1", spoil(1.0)) == []


def test_broadening_of_other_laws() -> None:
    def spoil(a: float, d_factor: float) -> Any:
        def change(document: Document) -> None:
            law = forward(document, "H + O2 ⇌ HO2")
            del law["F_cent"]
            law |= {"law": "SRI", "F": {"a": a, "b": 100.0, "c": 1000.0, "d": d_factor}}
        return change
    at_centre = 1.4 * (0.5 * np.exp(-100 / 300) + np.exp(-0.3))  # above 1.4 at 300 K: largest at the centre
    assert found("broadening above 1", spoil(0.5, 1.4))[0].value == pytest.approx(at_centre, rel=1e-9)
    assert found("broadening above 1", spoil(0.2, 1.4))[0].value == pytest.approx(1.4, rel=1e-9)  # in the limits of pressure
    assert found("broadening above 1", spoil(0.2, 0.9)) == []


def test_broadening_not_positive() -> None:
    """1.5 exp(-T/4733 K) - 0.5 is zero at 5200 K, beyond the fits (5000 K), where reading does not look."""
    def spoil(document: Document) -> None:
        forward(document, "H + O2 ⇌ HO2").update(F_cent={"a": 1.5, "T***": 1e30, "T*": 5200.0 / np.log(3.0)})
    [row] = found("broadening above 1", spoil, temperatures=(300.0, 6000.0))
    assert row.severity == ERROR and row.from_temperature > 5200.0 and "not positive" in row.text
    assert found("broadening above 1", spoil, temperatures=(300.0, 5000.0)) == []


def test_limits_cross_the_wrong_way() -> None:
    """k_0 times a power of T/1000 K: with T^3 more the pressure of the centre falls, with T^1 less it rises still."""
    def spoil(power: float) -> Any:
        low = {"A": 6.366e20 / 1000.0**power, "n": -1.72 + power, "Ea": 524.8}
        return lambda d: forward(d, "H + O2 ⇌ HO2").update(k_0=low)
    [row] = found("limits cross the wrong way", spoil(5.0))
    assert row.severity == WARNING and "it should rise" in row.text
    assert found("limits cross the wrong way", spoil(0.5)) == []
    [row] = found("limits cross the wrong way", lambda d: forward(d, "H + O2 ⇌ HO2").update(k_0={"A": 1e38, "n": -1.72}))
    assert "beyond all pressures" in row.text


def table(*nodes: tuple[float, float]) -> Document:
    return {"law": "pressure table", "rows": [{"p": p, "A": A} for p, A in nodes]}


def test_pressure_tables() -> None:
    kind, equation = "pressure table", "HO2 + H ⇌ 2 OH"
    def spoil(*nodes: tuple[float, float]) -> Any:
        return lambda d: entry(d, equation).update(forward=table(*nodes))
    smooth = [(0.01, 1e11), (0.3, 2e11), (10.0, 1e12), (300.0, 3e12)]  # atm
    assert found(kind, spoil(*smooth)) == []
    [row] = found(kind, spoil((0.01, 1e11), (0.3, 4e11), (10.0, 1e11), (300.0, 1.1e11)))
    assert row.severity == WARNING and row.decades == pytest.approx(np.log10(4.0)) and "turns" in row.text
    [row] = found(kind, spoil((0.01, 1e11), (300.0, 3e12)))
    assert row.severity == WARNING and "no row between" in row.text
    [row] = found(kind, spoil((1.0, 1e11), (90.0, 1e11), (300.0, 1e11)))
    assert row.severity == NOTICE and "the end row holds" in row.text


def test_series_outside_its_window() -> None:
    kind = "outside the Chebyshev window"
    def spoil(T: list[float], clamp: bool) -> Any:
        law = {"law": "Chebyshev", "T": T, "p": ["1e3 Pa", "1e8 Pa"], "c": [[10.0, 0.1], [0.5, 0.0]], "clamp": clamp}
        return lambda d: entry(d, "HO2 + H ⇌ 2 OH").update(forward=law)
    assert found(kind, spoil([290.0, 2600.0], False)) == []
    assert [row.severity for row in found(kind, spoil([500.0, 2000.0], False))] == [WARNING]
    assert [row.severity for row in found(kind, spoil([500.0, 2000.0], True))] == [NOTICE]


def test_a_sum_of_terms_that_turns_negative() -> None:
    """10¹³ - 10¹³ T/5500 K: positive over the fits (to 5000 K), negative above 5500 K."""
    def spoil(document: Document) -> None:
        entry(document, "HO2 + H ⇌ 2 OH").update(forward=[arrhenius(1e13), arrhenius(-1e13 / 5500.0, n=1.0)])
    [row] = found("rate not positive", spoil, temperatures=(300.0, 6000.0))
    assert row.severity == ERROR and 5500.0 <= row.from_temperature < 5800.0 and row.value < 0
    assert found("rate not positive", spoil, temperatures=(300.0, 5000.0)) == []


def test_a_rate_too_small_to_tell_is_not_negative() -> None:
    """exp(-750) is zero in floating point, not a fault."""
    spoil = lambda d: forward(d, "HO2 + H ⇌ 2 OH").update(A=1e-5, Ea=1.987 * 300.0 * 800)  # noqa: E731
    assert found("rate not positive", spoil) == []


@pytest.mark.parametrize("equation, large, fine", [("HO2 + H ⇌ 2 OH", 1e17, 1e15), ("H2O2 ⇌ 2 OH", 1e21, 1e17)])
def test_prefactor(equation: str, large: float, fine: float) -> None:
    """Two molecules: ten times the collision number of H and HO2 is some 1e16 cm3/(mol s); one: e k_BT/h exp(80/R)."""
    def spoil(A: float) -> Any:
        def change(document: Document) -> None:
            law = forward(document, equation)
            law.get("k_inf", law).update(A=A, n=0.0, Ea=60e3)
        return change
    def bent(document: Document) -> None:  # above the allowance at 300 K, below it at 2500 K
        law = forward(document, equation)
        law.get("k_inf", law).update(A=large * 300.0**8, n=-8.0, Ea=60e3)
    assert found("A-factor", bent) == []
    [row] = found("A-factor", spoil(large))
    assert row.severity in (WARNING, NOTICE) and row.reaction
    assert found("A-factor", spoil(fine)) == []


# ---- the whole


def test_faulty_thermochemistry_is_blamed_first() -> None:
    """H2O 120 kJ/mol too high (its fit moved): reverses of steps that make it are too fast, and its fit is named."""
    def spoil(document: Document) -> None:
        for row in rows(document, "H2O"):
            row[5] += 120e3 / R
    kinds = [row for row in audited(spoil).findings if row.kind == "faster than collisions"]
    assert kinds and all(row.likely == "the thermochemistry of H2O (enthalpy of formation)" for row in kinds)


def test_rows_are_plain_records_worst_first() -> None:
    import pandas

    result = audited(lambda d: rows(d, "OH")[1].__setitem__(5, rows(d, "OH")[1][5] + 2500.0))
    frame = pandas.DataFrame(result)
    assert len(frame) == len(result) > 3 and {"kind", "severity", "entry", "decades"} <= set(frame.columns)
    order = {ERROR: 0, WARNING: 1, NOTICE: 2}
    assert list(frame.severity.map(order)) == sorted(frame.severity.map(order))
    assert result[0]["decades"] >= result[1]["decades"] and result[:2] == [result[0], result[1]]
    assert all(not isinstance(v, float) or np.isfinite(v) for row in result for v in row.values())
    assert not result.passed and result.counts[ERROR] > 0


@pytest.mark.parametrize("how, text", [
    ({"temperatures": (2500.0, 300.0)}, "working range"), ({"temperatures": (0.0, 300.0)}, "working range"),
    ({"temperatures": (300.0, float("nan"))}, "working range"), ({"pressures": []}, "pressures"),
    ({"pressures": [1e5, -1.0]}, "pressures")])
def test_ranges_that_cannot_be_used(how: dict[str, Any], text: str) -> None:
    with pytest.raises(InputError, match=text):
        audited(**how)
