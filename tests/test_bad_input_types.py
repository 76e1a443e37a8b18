"""Wrong TOML types everywhere in a mechanism, and random damage to it: one clear line, never another exception."""

from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from bothways import BothwaysError, InputError
from bothways import build_mechanism as build
from bothways.mechanism.toml_reader import parse_toml
from invented import building_blocks
from invented_laws import every_law
from mutations import mutated
from refusals import ARRHENIUS_2, CONSTANT_Q, MECHANISM, R1, R2, R3, R4, Refusals, changed, row


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def check(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, *changes))
    refusals.refused("small.toml", entry, *texts)


# ---- wrong types

WRONG_TYPES = [
    row("mechanism as a value", MECHANISM[: MECHANISM.index("[elements]")], "mechanism = 3\n", "mechanism",
        "3 is not a table"),
    row("mechanism as a list", "[mechanism]", "[[mechanism]]", "mechanism", "is not a table; expected a table of keys"),
    row("elements as a list", '[elements]\nQ = "10 g/mol"', "[[elements]]\nQ = 1", "elements", "is not a table"),
    row("list for a species", "[species.O]", "[[species.O]]", "species.O", "is not a table; expected a table of keys"),
    row("text for a potential", CONSTANT_Q, 'potential = "NASA"', "species.Q.potential", "'NASA' is not a table"),
    row("list for a potential", "[species.Q2.potential]", "[[species.Q2.potential]]", "species.Q2.potential",
        "is not a table"),
    row("number for a name", 'name = "small"', "name = 3", "mechanism.name", "3 is not a text; expected a text in quotes"),
    row("blank name", 'name = "small"', 'name = " "', "mechanism.name", "' ' is not a text"),
    row("control character", 'name = "small"', 'name = "a\\u0007"', "mechanism.name", "holds '\\x07'",
        "without control characters"),
    row("text for sources", 'sources = ["invented"]', 'sources = "invented"', "mechanism.sources",
        "'invented' is not a list"),
    row("number among the sources", 'sources = ["invented"]', "sources = [3]", "mechanism.sources", "3 is not a text"),
    row("text for units", '["cm", "mol", "s", "kJ/mol"]', '"cm"', "mechanism.units", "'cm' is not a list",
        'expected a list such as ["cm", "mol", "s"]'),
    row("date for a source", "[reaction.forward]", "published_one_way = 2020-01-01\n[reaction.forward]",
        f"{R3}.published_one_way", "is neither true nor false"),
    row("number for truth", "published_one_way = true", "published_one_way = 1", f"{R4}.published_one_way",
        "1 is neither true nor false"),
    row("number for an equation", 'equation = "Q + O2 ⇌ QO + O"', "equation = 2", "reaction 2.equation",
        "2 is not a text"),
    row("list for a formula", 'formula = "O2"', 'formula = ["O", "O"]', "species.O2.formula", "['O', 'O'] is not a text"),
    row("text for a composition", "{ Q = 2 }", '"Q2"', "species.Q2.composition", "'Q2' is not a table"),
    row("number for a law", ARRHENIUS_2, "forward = 3", f"{R2}.forward", "3 is not a table; expected a table of keys"),
    row("numbers among the laws", ARRHENIUS_2, "forward = [3]", f"{R2}.forward[1]", "3 is not a table"),
    row("no laws", ARRHENIUS_2, "forward = []", f"{R2}.forward", "no forward term; expected at least one"),
    row("number for a limit", "k_inf = { A = 5e13, n = 0.3 }", "k_inf = 3", f"{R3}.forward.k_inf", "3 is not a table"),
    row("text for F_cent", 'F_cent = { a = 0.62, "T***" = 150.0, "T*" = 2100.0, "T**" = 5000.0 }', 'F_cent = "0.5"',
        f"{R3}.forward.F_cent", "'0.5' is not a finite number"),
    row("number for efficiencies", "{ O2 = 2.0, Q2 = 0.0 }", "2.0", f"{R1}.collision_efficiency", "2.0 is not a table"),
    row("list for a partner", "[reaction.forward]", 'collision_partner = ["Q"]\n[reaction.forward]',
        f"{R3}.collision_partner", "['Q'] is not a text"),
    row("number for a published reverse", "{ A = 3e13, Ea = 20.0 }", "3", f"{R2}.published_reverse", "3 is not a table"),
    row("number for the rows", "T = [300.0, 1000.0, 3000.0]\na = [", "T = [300.0, 1000.0, 3000.0]\na = 3\nb = [",
        "species.Q2.potential.a", "3 of coefficients"),
    row("number for a row", "[3.1, 6.5e-4, -5e-8, -9e-12, 1.6e-15, -901.203, 4.6883]", "3.1", "species.Q2.potential.a[2]",
        "3.1 is not a list"),
    row("number for the ranges", "T = [300.0, 1000.0, 3000.0]", "T = 300", "species.Q2.potential.T", "300 is not a list"),
]


@pytest.mark.parametrize("changes, entry, texts", WRONG_TYPES)
def test_wrong_type(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    check(refusals, changes, entry, texts)


def test_reaction_as_a_table_or_a_list_of_values(refusals: Refusals) -> None:
    head = MECHANISM[: MECHANISM.index("[[reaction]]")]
    for header in ("[reaction]", "[reaction.1]"):
        refusals.write(f"{head}{header}\nequation = 'Q ⇌ O'\n")
        refusals.refused("small.toml", "reaction", "'reaction' is not a list of tables; expected entries [[reaction]]")
    refusals.write("reaction = [3]\n" + head)
    refusals.refused("small.toml", "reaction 1", "3 is not a table; expected a table of keys")


def test_species_as_a_list_or_missing(refusals: Refusals) -> None:
    head = MECHANISM[: MECHANISM.index("[species.Q]")]
    refusals.write(head + "[[species]]\nname = 'Q'\n")
    refusals.refused("small.toml", "species", "is not a table; expected a table of keys")
    refusals.write(head + "[species]\n")
    refusals.refused("small.toml", "species", "no species; expected at least one table [species.NAME]")
    refusals.write(head)
    refusals.refused("small.toml", "", "the key 'species' is missing; expected a table; add it")


@pytest.mark.parametrize("document, text", [
    ([], r"\[\] is not a table"), (None, "None is not a table"), ({3: 4}, "the key 3 is not a text"),
    ({"mechanism": {"name": None}}, "mechanism.name: the value is None; .*leave the key out"),
    ({"mechanism": {None: 1}}, "mechanism: the key None is not a text")])
def test_documents_made_in_python(document: object, text: str) -> None:
    with pytest.raises(InputError, match=text):
        build(document)  # type: ignore[arg-type]


# ---- anything anywhere


DOCUMENTS = {"small": parse_toml(MECHANISM), "building blocks": building_blocks(), "every law": every_law()}


@pytest.mark.parametrize("name", DOCUMENTS)
@settings(max_examples=250, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(st.data())
def test_any_value_anywhere_is_accepted_or_refused_by_one_line(name: str, data: st.DataObject) -> None:
    document = mutated(DOCUMENTS[name], data)
    try:
        build(document, "m.toml")
    except BothwaysError as err:
        assert str(err).startswith("m.toml: ") and str(err).isprintable() and "; " in str(err)
