"""Faults of solutions and of stated equilibria: one line each, exit status 2, nothing written."""

from pathlib import Path

import pytest

from refusals import Refusals, changed, row

MECHANISM = """\
[mechanism]
name = "small"
phase = "ideal solution"
standard_state = "1 mol/L"
units = ["dm", "mol", "s", "kJ/mol"]

[elements]
Q = "10 g/mol"

[species.AB]
formula = "Q2"
potential = { form = "constant heat capacity", cp = 0.1 }

[species."A+"]
formula = "Q"
charge = 1

[species."B-"]
formula = "Q"
charge = -1

[species.C]
formula = "Q2"

[species.W]
formula = "H2O"
potential = { form = "constant heat capacity", at = 298.15, H = -285.8, S = 0.07, cp = 0.075 }

[[reaction]]
equation = "AB ⇌ A+ + B-"
forward = { law = "Arrhenius", A = 2.0 }
equilibrium = { K = 1e-3, at = 298.15, dH = 1.0 }

[[reaction]]
equation = "AB ⇌ C"
forward = { law = "Arrhenius", A = 5.0 }
equilibrium = { K = 4, at = 310, dH = "-1 kcal/mol", dCp = 0.01, uncertainty = { K = 0.1, dH = 2.0 } }
"""
CASE = """\
[case]
mechanism = "small.toml"

[vessel]
heat = "adiabatic"
volume = "2 L"
inert_heat_capacity = "4 kJ/K"

[start]
temperature = "25 °C"
concentration = { AB = "1 mol/L", "A+" = "0.1 mol/L", "B-" = "0.1 mol/L" }

[until]
time = "1 s"

[output]
file = "run.h5"
"""
R1, R2 = "reaction 1 'AB ⇌ A+ + B-'", "reaction 2 'AB ⇌ C'"


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def test_the_files_themselves_are_accepted(refusals: Refusals) -> None:
    from bothways.cli import main

    refusals.write(MECHANISM, CASE)
    assert main(["run", "case.toml"]) == 0 and main(["equilibrium", "case.toml"]) == 0
    out = refusals.capsys.readouterr().out
    assert " bar" not in out and "Pa" not in out and "inert heat capacity 4 kJ/K" in out


WRONG_MECHANISM = [
    row("no standard state", 'standard_state = "1 mol/L"\n', "", "mechanism", "the key 'standard_state' is missing",
        '"1 mol/L" or "mole fraction"'),
    row("unknown standard state", '"1 mol/L"', '"1 mol/kg"', "mechanism.standard_state", "'1 mol/kg' is not known"),
    row("standard pressure", 'standard_state = "1 mol/L"', 'standard_pressure = "1 bar"', "mechanism.standard_pressure",
        "'standard_pressure' is stated for an ideal solution", "pressure plays no part in a solution"),
    row("standard state of a gas", '"ideal solution"', '"ideal gas"', "mechanism.standard_state",
        "'standard_state' is stated for an ideal gas", "a gas has a standard_pressure"),
    row("partner", '"AB ⇌ C"', '"AB + M ⇌ C + M"', "reaction 2 'AB + M ⇌ C + M'", "a collision partner", "in a solution"),
    row("law of pressure", 'A = 5.0 }', 'A = 5.0 }\n[[reaction]]\nequation = "AB + C ⇌ 2 C"\nforward = { law = "pressure table", '
        'rows = [{ p = 1e5, A = 1 }, { p = 1e6, A = 2 }] }\n[[reaction]]\nequation = "2 AB ⇌ C + AB"\nforward = { law = '
        '"Arrhenius", A = 1 }', "reaction 3 'AB + C ⇌ 2 C'", "a law of pressure in a solution"),
    row("charge not balanced", '"AB ⇌ A+ + B-"', '"AB ⇌ 2 A+"', "reaction 1 'AB ⇌ 2 A+'", "not balanced: charge +2"),
    row("K negative", "K = 1e-3", "K = -1e-3", f"{R1}.equilibrium.K", "-0.001 is negative", "a number above 0"),
    row("K zero", "K = 1e-3", "K = 0", f"{R1}.equilibrium.K", "0 is zero", "a number above 0"),
    row("K not finite", "K = 1e-3", "K = inf", f"{R1}.equilibrium.K", "inf is not a finite number"),
    row("K with a unit", "K = 1e-3", 'K = "1e-3 mol/L"', f"{R1}.equilibrium.K", "is not a finite number",
        "leave out the quotes: it has no unit"),
    row("no K", "K = 1e-3, ", "", f"{R1}.equilibrium", "the key 'K' is missing"),
    row("no temperature", "at = 310, ", "", f"{R2}.equilibrium", "the key 'at' is missing"),
    row("temperature below zero", "at = 310", 'at = "-300 °C"', f"{R2}.equilibrium.at", "is negative"),
    row("no enthalpy", ", dH = 1.0 }", " }", f"{R1}.equilibrium", "the key 'dH' is missing"),
    row("enthalpy not finite", "dH = 1.0", "dH = nan", f"{R1}.equilibrium.dH", "nan is not a finite number"),
    row("misspelt", "dCp = 0.01", "dcp = 0.01", f"{R2}.equilibrium", "unknown key 'dcp' (nearest: dCp)"),
    row("uncertainty zero", "K = 0.1", "K = 0", f"{R2}.equilibrium.uncertainty.K", "0 is zero"),
    row("uncertainty of what is not", "dH = 2.0", "dS = 2.0", f"{R2}.equilibrium.uncertainty", "unknown key 'dS'"),
    row("uncertainty a text", "{ K = 0.1, dH = 2.0 }", '"1 %"', f"{R2}.equilibrium.uncertainty.K", "is not a finite number"),
    row("equilibrium not a table", "{ K = 1e-3, at = 298.15, dH = 1.0 }", "1e-3", f"{R1}.equilibrium", "0.001 is not a table"),
    row("K from nothing", "equilibrium = { K = 1e-3, at = 298.15, dH = 1.0 }\n", "", R1,
        "K follows neither from data of AB and A+ and B- nor from the equilibria stated"),
    row("enthalpy without its temperature", "cp = 0.1 }", "H = 1.0, cp = 0.1 }", "species.AB.potential",
        "the key 'at' is missing"),
]


@pytest.mark.parametrize("changes, entry, texts", WRONG_MECHANISM)
def test_mechanism(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, *changes), CASE)
    refusals.refused("small.toml", entry, *texts)


CONCENTRATION = 'concentration = { AB = "1 mol/L", "A+" = "0.1 mol/L", "B-" = "0.1 mol/L" }'
WRONG_CASE = [
    row("pressure", CONCENTRATION, f'{CONCENTRATION}\npressure = "1 bar"', "start.pressure",
        "a pressure is stated for a solution", "leave it out"),
    row("mole ratio", CONCENTRATION, "mole_ratio = { AB = 1 }", "start.mole_ratio", "mole_ratio states no concentrations"),
    row("not neutral", '"B-" = "0.1 mol/L"', '"B-" = "0.05 mol/L"', "start.concentration",
        "the solution is not neutral: +0.05 mol/L of charge is in excess", "add the anion that is missing"),
    row("not neutral the other way", '"A+" = "0.1 mol/L"', '"A+" = 0', "start.concentration", "-0.1 mol/L of charge",
        "add the cation"),
    row("held pressure", 'volume = "2 L"', 'volume = "2 L"\nholds = "pressure"', "vessel.holds", "a solution at held pressure"),
    row("heat capacity below zero", '"4 kJ/K"', '"-4 kJ/K"', "vessel.inert_heat_capacity", "'-4 kJ/K' is negative"),
    row("heat capacity per mass", '"4 kJ/K"', '"4 kJ"', "vessel.inert_heat_capacity", "unknown unit 'kJ'"),
    row("empty", CONCENTRATION, "concentration = { AB = 0 }", "start.concentration", "the charge is empty"),
    row("unknown species", "{ AB =", "{ BA =", "start.concentration", "unknown species 'BA'"),
]


@pytest.mark.parametrize("changes, entry, texts", WRONG_CASE)
def test_case(refusals: Refusals, changes: tuple, entry: str, texts: tuple) -> None:
    refusals.write(MECHANISM, changed(CASE, *changes))
    refusals.refused("case.toml", entry, *texts)


def test_amounts_need_a_volume(refusals: Refusals) -> None:
    refusals.write(MECHANISM, changed(CASE, ('volume = "2 L"\n', ""), (CONCENTRATION, "amount = { AB = 1 }")))
    refusals.refused("case.toml", "start.amount", "amounts are stated, but no volume")


def test_a_heat_capacity_is_needed_where_the_temperature_is_free(refusals: Refusals) -> None:
    refusals.write(changed(MECHANISM, ("cp = 0.1 }", "cp = -0.1 }")), changed(CASE, ('inert_heat_capacity = "4 kJ/K"\n', "")))
    refusals.refused("case.toml", "vessel", "the heat capacity of the charge is ", "inert_heat_capacity")


def test_pressures_of_a_solution(refusals: Refusals) -> None:
    refusals.write(MECHANISM, CASE)
    assert "pressure plays no part in a solution" in refusals.line("equilibrium", "case.toml", "--pressures", "1e5")


def test_gases_have_no_inert_heat_capacity(refusals: Refusals) -> None:
    from refusals import CASE as GAS_CASE

    refusals.write(case=changed(GAS_CASE, ("thermal_inertia = 1.2", "inert_heat_capacity = 10.0")))
    refusals.refused("case.toml", "vessel", "unknown key 'inert_heat_capacity'")
