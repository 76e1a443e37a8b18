"""Faults of a mechanism's keys, names and equations: one line, exit status 2, nothing written (see refusals.py)."""

from pathlib import Path

import pytest

from bothways import build_mechanism as build
from bothways import bundled_mechanisms, read_mechanism
from bothways.mechanism.toml_reader import parse_toml
from refusals import ARRHENIUS_2, MECHANISM, R1, R2, R3, R4, Refusals, changed, row


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def check(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, *changes))
    refusals.refused("small.toml", entry, *texts)


def test_the_mechanism_itself_is_accepted() -> None:
    mechanism = build(parse_toml(MECHANISM))
    assert len(mechanism.species) == 6 and len(mechanism.reactions) == 4


def test_bundled_mechanisms_have_none_of_these_faults() -> None:
    assert len([read_mechanism(name) for name in bundled_mechanisms()]) >= 4


# ---- keys

UNKNOWN_KEYS = [
    row("top", "[elements]", "[element]", "", "unknown key 'element' (nearest: elements)",
        "correct the key or leave it out"),
    row("mechanism", "joins =", "join =", "mechanism", "unknown key 'join' (nearest: joins)"),
    row("species", "collision_diameter =", "collision_diametre =", "species.Q2", "unknown key 'collision_diametre'",
        "nearest: collision_diameter"),
    row("constant potential", "cp = 0.021 }\n\n[species.Q2]", "cp = 0.021, Cv = 1 }\n\n[species.Q2]",
        "species.Q.potential", "unknown key 'Cv'"),
    row("NASA potential", "T = [300.0", "b = 1\nT = [300.0", "species.Q2.potential",
        "unknown key 'b' (known: T, a, form)"),
    row("reaction", 'source = "invented"\n[reaction', 'sources = "invented"\n[reaction', R3,
        "unknown key 'sources' (nearest: source)"),
    row("Arrhenius", "n = -1.0 }", "n = -1.0, Tref = 1 }", f"{R1}.forward", "unknown key 'Tref' (nearest: T_ref)"),
    row("term of a list", "Ea = 94.0 }", "Ea = 94.0, E = 1 }", f"{R4}.forward[2]", "unknown key 'E' (nearest: Ea)"),
    row("fall-off", 'law = "Troe"', 'law = "Troe"\nk_infinity = 1', f"{R3}.forward", "unknown key 'k_infinity'"),
    row("limit", "k_0 = { A", "k_0 = { B = 1, A", f"{R3}.forward.k_0", "unknown key 'B' (known: A, Ea, T_ref, n)"),
    row("F_cent", "a = 0.62,", "a = 0.62, b = 1,", f"{R3}.forward.F_cent", "unknown key 'b'"),
    row("published reverse", "{ A = 3e13,", "{ A = 3e13, m = 2,", f"{R2}.published_reverse",
        "unknown key 'm' (known: A, Ea, T_ref, n)"),
]


@pytest.mark.parametrize("changes, entry, texts", UNKNOWN_KEYS)
def test_unknown_key(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


MISPLACED = [
    row("source after the law", 'source = "invented"\n[reaction.forward]\nlaw = "Troe"',
        '[reaction.forward]\nlaw = "Troe"\nsource = "invented"', f"{R3}.forward",
        f"unknown key 'source'; it belongs to {R3}: put it before this table's header, since what follows a [table] "
        "header belongs to that table"),
    row("efficiency within the efficiencies", "O2 = 2.0,", "source = 2.0,", f"{R1}.collision_efficiency",
        f"unknown species 'source'; it belongs to {R1}: put it before this table's header"),
    row("key of a species after its potential", "T = [300.0", "collision_diameter = 1\nT = [300.0", "species.Q2.potential",
        "unknown key 'collision_diameter'; it belongs to species.Q2: put it before this table's header"),
    row("published reverse among the forward keys", "k_0 =", "published_reverse = { A = 1 }\nk_0 =", f"{R3}.forward",
        f"unknown key 'published_reverse'; it belongs to {R3}"),
]


@pytest.mark.parametrize("changes, entry, texts", MISPLACED)
def test_key_that_landed_under_the_wrong_header(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


MISSING_KEYS = [
    row("mechanism", "[mechanism]", "[mechanisms]", "",
        "unknown key 'mechanisms' (nearest: mechanism)"),
    row("phase", 'phase = "ideal gas"', "", "mechanism",
        "the key 'phase' is missing; expected \"ideal gas\" or \"ideal solution\"; add it"),
    row("standard pressure", "standard_pressure =", "standard_presure =", "mechanism",
        "the key 'standard_pressure' is missing; expected a pressure; is 'standard_presure' meant to be it?"),
    row("potential", "[species.Q2.potential]", "[species.Q2.potentials]", "species.Q2", "the key 'potential' is missing",
        "is 'potentials' meant to be it?"),
    row("coefficients", "\na = [", "\nA = [", "species.Q2.potential", "the key 'a' is missing", "2 rows of 7",
        "is 'A' meant"),
    row("cp", ", cp = 0.021 }\n\n[species.Q2]", " }\n\n[species.Q2]", "species.Q.potential", "the key 'cp' is missing",
        "expected a molar heat capacity"),
    row("S and G", "S = 0.12, cp = 0.021 }\n\n[species.Q2]", "cp = 0.021 }\n\n[species.Q2]", "species.Q.potential",
        "S and G are both missing", "one of S (standard entropy) and G"),
    row("both S and G", "S = 0.12, cp = 0.021 }\n\n[species.Q2]", "S = 0.12, G = 1, cp = 0.021 }\n\n[species.Q2]",
        "species.Q.potential", "S and G are both stated"),
    row("equation", 'equation = "Q + O2', 'equations = "Q + O2', "reaction 2", "the key 'equation' is missing",
        "is 'equations' meant to be it?"),
    row("forward", ARRHENIUS_2, "", R2, "the key 'forward' is missing", "a table, or a list of tables"),
    row("law", 'law = "Troe"', "", f"{R3}.forward", "the key 'law' is missing", '"Arrhenius" or "Lindemann" or "Troe"'),
    row("A", "A = 8e13, ", "", f"{R2}.forward", "the key 'A' is missing; expected a number"),
    row("k_0", "k_0 =", "k0 =", f"{R3}.forward", "the key 'k_0' is missing; expected a table; is 'k0' meant to be it?"),
    row("T***", '"T***" = 150.0, ', "", f"{R3}.forward.F_cent", "the key 'T***' is missing; expected a number"),
]


@pytest.mark.parametrize("changes, entry, texts", MISSING_KEYS)
def test_missing_key(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


# ---- names of species and elements, equations

EQUATIONS = [
    row("unknown species", '"Q + O2 ⇌', '"Q + o2 ⇌', "reaction 2 'Q + o2 ⇌ QO + O'", "unknown species 'o2' (nearest: O2",
        "add [species.…]"),
    row("digit for a letter", '"Q + O2 ⇌', '"Q + 02 ⇌', "reaction 2 'Q + 02 ⇌ QO + O'", "cannot read '02'"),
    row("no space beside the plus", '"Q + O2 ⇌', '"Q +O2 ⇌', "reaction 2 'Q +O2 ⇌ QO + O'", "cannot read 'Q +O2'",
        "parted by spaces"),
    row("unknown species of efficiency", "{ O2 = 2.0,", "{ H2O = 2.0,", f"{R1}.collision_efficiency",
        "unknown species 'H2O' (known: O, O2, Q, Q+, Q2, QO)", "correct the species"),
    row("unknown partner", 'law = "Troe"', 'law = "Troe"\ncollision_partner = "Q3"', f"{R3}.forward.collision_partner",
        "unknown species 'Q3' (nearest: Q"),
    row("elements not balanced", "2 Q + M", "3 Q + M", "reaction 1 '3 Q + M ⇌ Q2 + M'",
        "not balanced: Q -1 on the right-hand side", "expected no difference; correct the equation or the formulas"),
    row("charge not balanced", '"Q + O ⇌ QO"', '"Q + O2 ⇌ Q+ + O2"', "reaction 3",
        "not balanced: charge +1 on the right-hand side"),
    row("both", '"Q + O ⇌ QO"', '"2 Q + O2 ⇌ Q+ + O"', "reaction 3",
        "not balanced: Q -1, charge +1, O -1 on the right-hand side"),
    row("the same equation twice", '"Q + O2 ⇌ QO + O"\np', '"M + Q + Q ⇄ Q2 + M"\np', "reaction 2 'M + Q + Q ⇄ Q2 + M'",
        f"the same equation stands in {R1}", "make one entry whose 'forward' is a list of both terms"),
    row("both sides the same", '"Q + O ⇌ QO"', '"Q + O ⇌ O + Q"', "reaction 3 'Q + O ⇌ O + Q'", "both sides are the same",
        "leave the entry out"),
    row("fraction", '"Q2 + O2 ⇌ 2 QO"', '"0.5 Q2 + 1/2 O2 ⇌ QO"', "reaction 4", "the coefficient 0.5",
        "a whole number above 0"),
    row("fraction of two", '"Q2 + O2 ⇌ 2 QO"', '"1/2 Q2 + 1/2 O2 ⇌ QO"', "reaction 4", "the coefficient 1/2",
        "state whole numbers"),
    row("zero", '"Q2 + O2 ⇌ 2 QO"', '"0 Q2 + O2 ⇌ 2 QO"', "reaction 4", "the coefficient 0;"),
    row("a huge coefficient", '"Q2 + O2 ⇌ 2 QO"', f'"{"9" * 4500} Q2 ⇌ 2 QO"', "reaction 4", "the coefficient 99999",
        "few molecules"),
    row("too many molecules", '"Q2 + O2 ⇌ 2 QO"', '"60 Q2 + 60 O2 ⇌ 120 QO"', "reaction 4", "120 molecules on a side",
        "100 at most"),
    row("M on one side", "⇌ Q2 + M", "⇌ Q2", "reaction 1", "M stands on one side only", "M on both sides or on neither"),
    row("M twice", "2 Q + M ⇌ Q2 + M", "2 Q + 2 M ⇌ Q2 + 2 M", "reaction 1", "M stands more than once",
        "one partner M at most"),
    row("nothing but M", "2 Q + M ⇌ Q2 + M", "M ⇌ Q2 + M", "reaction 1", "a side names no species"),
    row("an empty side", '"Q2 + O2 ⇌ 2 QO"', '"⇌ 2 QO"', "reaction 4", "a '+' without a species beside it"),
    row("a plus too many", '"Q2 + O2 ⇌ 2 QO"', '"Q2 + + O2 ⇌ 2 QO"', "reaction 4", "a '+' without a species beside it"),
    row("M in brackets", '"Q + O ⇌ QO"', '"Q + O (+M) ⇌ QO (+M)"', "reaction 3", "cannot read 'O (+M)'",
        "for fall-off leave M out"),
    row("M beside fall-off", '"Q + O ⇌ QO"', '"Q + O + M ⇌ QO + M"', "reaction 3",
        "M stands in the equation of a fall-off reaction",
        "leave M out of the equation: the law says that a partner takes part"),
    row("no sign", '"Q + O ⇌ QO"', '"Q + O QO"', "reaction 3", "no equilibrium sign by itself",
        "one of ⇌, ⇄ or =, with spaces"),
    row("no spaces", '"Q + O ⇌ QO"', '"Q+O=QO"', "reaction 3", "no equilibrium sign by itself", "with spaces around it"),
    row("two signs", '"Q + O ⇌ QO"', '"Q + O ⇌ QO ⇌ Q2"', "reaction 3", "2 equilibrium signs", "one of ⇌, ⇄ or ="),
    row("efficiency without partner", 'published_reverse =', "collision_efficiency = { Q = 2 }\npublished_reverse =", R2,
        "no partner takes part", "write + M on both sides, use a fall-off law, or leave the key out"),
    row("efficiency of a term without partner", "A = 8e13,", 'A = 8e13, collision_partner = "Q",', f"{R2}.forward",
        "no partner takes part"),
    row("efficiency and partner", "[reaction.forward]",
        'collision_partner = "Q"\ncollision_efficiency = { Q = 2 }\n[reaction.forward]', R3,
        "collision_efficiency and collision_partner are both stated; expected one of them"),
]


@pytest.mark.parametrize("changes, entry, texts", EQUATIONS)
def test_equation(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, *changes))
    line = refusals.line("run", "case.toml")
    assert line.startswith(f"small.toml: {entry}") and "; " in line
    for text in texts:
        assert text in line, line


@pytest.mark.parametrize("arrow", ["→", "->", "=>", "-->", "==>", "<-", "<--", "<=", "←", "⟶", "⇒", "⇀", "--->"])
@pytest.mark.parametrize("space", [" ", ""])
def test_one_way_arrow(refusals: Refusals, arrow: str, space: str) -> None:
    equation = f"Q + O{space}{arrow}{space}QO"
    refusals.write(changed(MECHANISM, ("Q + O ⇌ QO", equation)))
    refusals.refused("small.toml", f"reaction 3 '{equation}'", f"'{arrow}' is a one-way arrow", "expected ⇌, ⇄ or =",
                     "every step runs both ways; a step that is one-way in practice has a large K",
                     "published_one_way = true")


@pytest.mark.parametrize("arrow", ["<=>", "<->", "<==>", "↔", "⇔", "==", "⇋"])
def test_other_signs_of_equilibrium(refusals: Refusals, arrow: str) -> None:
    refusals.write(changed(MECHANISM, ("Q + O ⇌ QO", f"Q + O {arrow} QO")))
    refusals.refused("small.toml", f"reaction 3 'Q + O {arrow} QO'", f"'{arrow}' is not read", "expected one of ⇌, ⇄ or =")


def test_two_one_way_halves(refusals: Refusals) -> None:
    half = '\n[[reaction]]\nequation = "2 QO ⇌ Q2 + O2"\npublished_one_way = true\nforward = { law = "Arrhenius", A = 1 }\n'
    refusals.write(MECHANISM + half)
    refusals.refused("small.toml", "reaction 5 '2 QO ⇌ Q2 + O2'", f"this and {R4} are two halves of one reaction",
                     "expected one entry for one reaction", "with the other half as its published_reverse")
    assert len(build(parse_toml(MECHANISM + half.replace("published_one_way = true", ""))).reactions) == 5


REVERSE = [("reaction", 'source = "invented"\n[reaction', "reverse = { A = 1 }\n[reaction", "reverse"),
           ("reaction", 'source = "invented"\n[reaction', "k_rev = { A = 1 }\n[reaction", "k_rev"),
           ("forward", 'law = "Troe"', 'law = "Troe"\nA_reverse = 1', "A_reverse"),
           ("forward", 'law = "Troe"', 'law = "Troe"\nbackward = { A = 1 }', "backward"),
           ("forward", 'law = "Troe"', 'law = "Troe"\nkr = 1', "kr")]


@pytest.mark.parametrize("place, old, new, key", REVERSE)
def test_stated_reverse_rate(refusals: Refusals, place: str, old: str, new: str, key: str) -> None:
    refusals.write(changed(MECHANISM, (old, new)))
    entry = R3 if place == "reaction" else f"{R3}.forward"
    refusals.refused("small.toml", entry, f"'{key}': a reverse rate is stated", "expected forward rates only",
                     "it follows from the forward rate and K(T); published_reverse", "records one for comparison")


SPECIES = [
    row("space in a name", '[species."Q+"]', '[species."Q plus"]', "species.Q plus",
        "'Q plus' cannot be the name of a species", "no white space"),
    row("empty name", '[species."Q+"]', '[species.""]', "species.", "'' cannot be the name"),
    row("M as a name", '[species."Q+"]', "[species.M]", "species.M", "'M' cannot be the name of a species",
        "not M, + or ="),
    row("plus as a name", '[species."Q+"]', '[species."+"]', "species.+", "'+' cannot be the name of a species"),
    row("sign as a name", '[species."Q+"]', '[species."⇌"]', "species.⇌", "'⇌' cannot be the name of a species"),
    row("number as a name", '[species."Q+"]', "[species.2]", "species.2", "'2' cannot be the name of a species",
        "no number"),
    row("null in a name", '[species."Q+"]', '[species."Q\\u0000"]', "species.Q\\x00", "cannot be the name of a species"),
    row("formula and composition", "composition = { Q = 2 }", 'composition = { Q = 2 }\nformula = "Q2"', "species.Q2",
        "formula and composition are both stated; expected one of them"),
    row("neither", "composition = { Q = 2 }", "", "species.Q2",
        "formula and composition are both missing; expected one of them"),
    row("unknown element in a formula", 'formula = "O2"', 'formula = "Ox2"', "species.O2.formula",
        "unknown element 'Ox'", "nearest: O", "state its molar mass under [elements] if it is a building block"),
    row("unknown element in a composition", "{ Q = 2 }", "{ Qq = 2 }", "species.Q2.composition",
        "unknown element 'Qq' (nearest: Q", "state its molar mass under [elements]"),
    row("formula in lower case", 'formula = "O2"', 'formula = "o2"', "species.O2.formula",
        "formula 'o2' cannot be read at 'o2'", "element symbols with counts"),
    row("bracket not closed", 'formula = "O2"', 'formula = "(O"', "species.O2.formula", "formula '(O' cannot be read"),
    row("bracket not opened", 'formula = "O2"', 'formula = "O)2"', "species.O2.formula",
        "formula 'O)2' cannot be read at ')'"),
    row("charge in the formula", 'formula = "Q"\ncharge = 1', 'formula = "Q+"', "species.Q+.formula",
        "cannot be read at '+'", "an ion's charge stands in the key 'charge'"),
    row("no atoms of an element", 'formula = "O2"', 'formula = "O0"', "species.O2.formula", "0 atoms of O", "from 1 to"),
    row("very many atoms", 'formula = "O2"', f'formula = "O{"9" * 5000}"', "species.O2.formula", "cannot be read at '999"),
    row("negative number of atoms", "{ Q = 2 }", "{ Q = -2 }", "species.Q2.composition.Q", "-2 is negative",
        "a number above 0"),
    row("half an atom", "{ Q = 2 }", "{ Q = 1.5 }", "species.Q2.composition", "1.5 atoms of Q", "a whole number"),
    row("empty composition", "{ Q = 2 }", "{}", "species.Q2.composition", "no atoms; expected at least one element"),
    row("broken charge", "charge = 1", "charge = 0.5", "species.Q+.charge", "0.5 is not a whole number",
        "number of charges"),
    row("negative molar mass", 'Q = "10 g/mol"', 'Q = "-10 g/mol"', "elements.Q", "'-10 g/mol' is negative",
        "a number above 0"),
    row("an element restated", 'Q = "10 g/mol"', 'Q = "10 g/mol"\nH = "2 g/mol"', "elements", "'H' is a chemical element",
        "leave it out, or choose another symbol"),
    row("name of a building block", 'Q = "10 g/mol"', 'Q = "10 g/mol"\nq2 = "2 g/mol"', "elements",
        "'q2' cannot be a building block", "a capital letter"),
]


@pytest.mark.parametrize("changes, entry, texts", SPECIES)
def test_species(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, *changes))
    line = refusals.line("run", "case.toml")
    assert line.startswith(f"small.toml: {entry}"), line
    for text in (*texts, "; "):
        assert text in line, line


# ---- what is not known (yet)

NOT_KNOWN = [
    row("phase", '"ideal gas"', '"plasma"', "mechanism.phase", "'plasma' is not known",
        'expected "ideal gas" or "ideal solution"'),
    row("joins", 'joins = "closed"', 'joins = "open"', "mechanism.joins", "'open' is not known",
        '"closed" or "as published"'),
    row("form", '"NASA 7-coefficient"', '"NASA 8-coefficient"', "species.Q2.potential.form",
        "'NASA 8-coefficient' is not known", "nearest: NASA ", "NASA 7-coefficient", 'expected "NASA 7-coefficient" or '),
    row("law", 'law = "Troe"', 'law = "Tro"', f"{R3}.forward.law", "'Tro' is not known (nearest: Troe)",
        'expected "Arrhenius" or "Lindemann" or "Troe"'),
    row("unit", '"kJ/mol"]', '"kJ/mole"]', "mechanism.units", "unknown unit 'kJ/mole' (nearest: kJ/mol"),
    row("unit of no use there", '"kJ/mol"]', '"kJ/mol", "g"]', "mechanism.units", "unknown unit 'g'",
        "units of length, amount, time, molar energy and pressure"),
    row("two units of a kind", '"kJ/mol"]', '"kJ/mol", "eV"]', "mechanism.units",
        "two units of molar energy: kJ/mol and eV", "one of each kind"),
    row("unit that is no text", '"kJ/mol"]', '"kJ/mol", 3]', "mechanism.units", "unknown unit 3"),
]


@pytest.mark.parametrize("changes, entry, texts", NOT_KNOWN)
def test_what_is_not_known(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)
