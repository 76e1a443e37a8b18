"""Stated equilibria round cycles: found beyond their uncertainties, noticed within, closed by the repair."""

from typing import Any

import numpy as np
import pytest

from bothways import InputError, audit, build_mechanism
from bothways.audit import Finding, repaired, repaired_text
from bothways.cli import main
from bothways.contents import Contents
from bothways.mechanism.toml_writer import to_toml

R = 8.31446261815324


def triangle(last: float, heat: float = 0.0) -> dict[str, Any]:
    """A ⇌ B ⇌ C ⇌ A of an invented solution: K 2, 5 and `last` (0.1 closes), ΔH 10, -4 and -6 kJ/mol + heat; 1 % and 0.1 kJ."""
    species = {name: {"formula": "Q2"} for name in "ABC"}
    steps = [("A ⇌ B", 2.0, 10.0), ("B ⇌ C", 5.0, -4.0), ("C ⇌ A", last, -6.0 + heat)]
    reactions = [{"equation": equation, "forward": {"law": "Arrhenius", "A": 1.0},
                  "equilibrium": {"K": K, "at": 300.0, "dH": f"{dH} kJ/mol"}} for equation, K, dH in steps]
    head = {"name": "triangle", "phase": "ideal solution", "standard_state": "1 mol/L"}
    return {"mechanism": head, "elements": {"Q": 0.01}, "species": species, "reaction": reactions}


def cycles(document: dict[str, Any]) -> list[Finding]:
    return list(audit(build_mechanism(document, lenient=True)).of("cycle of equilibria"))


def test_a_cycle_that_does_not_close_is_an_error() -> None:
    """2·5·0.2 = 2: ln K is off by ln 2, ΔG by RT ln 2 at 300 K; the uncertainties allow three times 1 %."""
    [row] = cycles(triangle(0.2))
    assert row.severity == "error" and row.decades == pytest.approx(np.log10(2.0)) and row.reaction == 1
    assert abs(row.gibbs_change) == pytest.approx(R * 300.0 * np.log(2.0))
    assert "A ⇌ B" in row.text and "smallest repair" in row.text
    with pytest.raises(InputError, match="round the cycle"):
        build_mechanism(triangle(0.2))


def test_heats_must_close_too() -> None:
    [row] = cycles(triangle(0.1, heat=5.0))
    assert row.severity == "error" and "ΔH by" in row.text and np.isnan(row.decades)


def test_a_cycle_within_its_uncertainties_is_a_notice() -> None:
    rows = cycles(triangle(0.101))
    assert rows and all(row.severity == "notice" and "adjusted" in row.text for row in rows)
    assert cycles(triangle(0.1)) == []


def test_what_equilibria_fix_is_no_data_of_the_species() -> None:
    """Their entropies and enthalpies count from anywhere, and two may be alike: none of that is a finding."""
    assert audit(build_mechanism(triangle(0.1))).findings == ()
    alike = triangle(0.1)
    for reaction in alike["reaction"]:
        reaction["equilibrium"] |= {"K": 1.0, "dH": 0.0}
    assert audit(build_mechanism(alike)).findings == ()
    species = {name: {"formula": name, "potential": {"form": "constant heat capacity", "cp": cp}}
               for name, cp in (("N2O4", 77.0), ("NO2", 37.0))}
    equilibrium = {"K": 0.148, "at": 298.15, "dH": "57.1 kJ/mol"}
    gas = {"mechanism": {"name": "dissociation", "phase": "ideal gas", "standard_pressure": "1 bar"}, "species": species,
           "reaction": [{"equation": "N2O4 ⇌ 2 NO2", "forward": {"law": "Arrhenius", "A": 1.0}, "equilibrium": equilibrium}]}
    assert audit(build_mechanism(gas)).findings == ()


def test_the_repair_is_the_least_weighted_one() -> None:
    """All three with the same relative uncertainty: each takes a third of ln 2, so K 2/2^(1/3), 5/2^(1/3), 0.2/2^(1/3)."""
    document, changes = repaired(build_mechanism(triangle(0.2), lenient=True))
    K = [r["equilibrium"]["K"] for r in document["reaction"]]
    assert pytest.approx(np.array([2.0, 5.0, 0.2]) / 2 ** (1 / 3), rel=1e-9) == K and len(changes) == 3
    assert [r["equilibrium"]["dH"] for r in document["reaction"]] == ["10.0 kJ/mol", "-4.0 kJ/mol", "-6.0 kJ/mol"]
    mended = build_mechanism(document)
    assert np.exp(Contents(mended).log_equilibrium_constants(300.0)) == pytest.approx(K, rel=1e-9)
    assert repaired(mended)[1] == () and cycles(document) == []


def test_the_repair_of_heats() -> None:
    document, changes = repaired(build_mechanism(triangle(0.1, heat=6.0), lenient=True))
    heats = [float(str(r["equilibrium"]["dH"]).split()[0]) for r in document["reaction"]]
    assert heats == pytest.approx([8000.0, -6000.0, -2000.0], rel=1e-6) and {c.text for c in changes} == {"dH [J/mol]"}
    assert build_mechanism(document)


def test_command(tmp_path: Any, capsys: pytest.CaptureFixture[str]) -> None:
    path, out = tmp_path / "triangle.toml", tmp_path / "closed.toml"
    path.write_text(to_toml(triangle(0.2)))
    assert main(["audit", str(path), "--repair", str(out)]) == 1
    text = capsys.readouterr().out
    assert "1 error" in text and "reaction 1 'A ⇌ B'.equilibrium: K from 2.0 to 1.58740" in text
    assert main(["audit", str(out)]) == 0


def test_the_document_of_a_mechanism_without_stated_equilibria_is_untouched() -> None:
    document = triangle(0.1)
    text, changes = repaired_text(build_mechanism(document), to_toml(document))
    assert changes == () and text == to_toml(document)
