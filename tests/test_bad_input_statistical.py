"""Faults of the statistical forms: one line, exit status 2 (see refusals.py)."""

from pathlib import Path
from typing import Any

import pytest

from refusals import CONSTANT_Q, MECHANISM, Refusals, changed

PLACE = "species.S.potential"
HEAD = 'form = "statistical mechanics", '


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def form(name: str, formula: str, keys: str, entry: str, *texts: str) -> Any:
    """A species S of this formula with the form's keys, the entry an error names within its potential, texts in order."""
    return pytest.param(formula, keys, entry, texts, id=name)


ATOM, H, WATER = 'shape = "atom"', "H0 = 1.0", 'shape = "nonlinear", B = [27.9, 14.5, 9.3], symmetry = 2, H0 = -238.9'
MODES = "wavenumbers = [3657, 1595, 3756]"
CO = 'shape = "linear", B = 1.92, symmetry = 1, H0 = -113.8'
ETHANE = 'shape = "nonlinear", B = [2.7, 0.66], symmetry = 6, H0 = -68'
ROTOR = "barrier = 12, fold = 3, B = 10.7"

SHAPES = [
    form("shape missing", "Ar", H, "", "the key 'shape' is missing", '"atom" or "linear" or "nonlinear"'),
    form("shape unknown", "Ar", f'shape = "bent", {H}', ".shape", "'bent' is not known"),
    form("atom of two atoms", "O2", f"{ATOM}, {H}", ".shape", "the shape 'atom' of 2 atoms", "'atom' for one atom"),
    form("molecule of one atom", "Ar", f'shape = "linear", symmetry = 1, B = 1, {H}', ".shape",
         "the shape 'linear' of 1 atom;"),
    form("atom with B", "Ar", f"{ATOM}, B = 1.0, {H}", ".B", "1 rotational constants of a species whose shape is 'atom'"),
    form("linear without B", "CO", f'shape = "linear", symmetry = 1, {H}', ".B", "0 rotational constants", "B = [one number]"),
    form("linear with two B", "CO", f'shape = "linear", symmetry = 1, B = [1, 1], {H}', ".B", "2 rotational constants"),
    form("nonlinear with four B", "H2O", f'shape = "nonlinear", symmetry = 2, B = [1, 1, 1, 1], {H}', ".B", "4 rotational"),
    form("B zero", "CO", f'shape = "linear", symmetry = 1, B = [0], {H}', ".B", "0 is not a rotational constant", "above 0"),
    form("B negative", "CO", f'shape = "linear", symmetry = 1, B = -1, {H}', ".B", "-1 is not a rotational constant"),
    form("B in MHz", "CO", f'shape = "linear", symmetry = 1, B = 57635.96, {H}', ".B", "57636 is not", "up to 200 cm⁻¹"),
    form("B infinite", "CO", f'shape = "linear", symmetry = 1, B = inf, {H}', ".B", "inf"),
    form("B a text", "CO", f'shape = "linear", symmetry = 1, B = "1.9 cm-1", {H}', ".B", "is not a list"),
    form("inertia", "H2O", f'shape = "nonlinear", symmetry = 2, B = [27.9, 14.5, 5.0], {H}', ".B",
         "one moment of inertia is larger than the other two together"),
    form("rotor of a linear molecule", "CO", f"{CO}, wavenumbers = [2143], rotors = [{{ {ROTOR} }}]", ".rotors",
         "rotors of a species whose shape is 'linear'"),
    form("unknown key", "Ar", f"{ATOM}, {H}, frequencies = [1]", "", "unknown key 'frequencies'"),
]
SYMMETRY = [
    form("symmetry missing", "CO", f'shape = "linear", B = 1.9, {H}', "", "the key 'symmetry' is missing"),
    form("symmetry zero", "H2O", WATER.replace("symmetry = 2", "symmetry = 0"), ".symmetry", "0 is not a whole number"),
    form("symmetry negative", "H2O", WATER.replace("symmetry = 2", "symmetry = -2"), ".symmetry", "-2 is not a whole number"),
    form("symmetry broken", "H2O", WATER.replace("symmetry = 2", "symmetry = 1.5"), ".symmetry", "1.5 is not a whole number",
         "1 to 60"),
    form("symmetry of all rotations", "C2H6", ETHANE.replace("symmetry = 6", "symmetry = 162"), ".symmetry", "162 is not",
         "rotors have their own"),
    form("symmetry of an atom", "Ar", f"{ATOM}, symmetry = 2, {H}", ".symmetry", "2 is not the symmetry number of an atom"),
    form("linear, 3", "CO", CO.replace("symmetry = 1", "symmetry = 3"), ".symmetry", "3 is not the symmetry number of"),
    form("carbon monoxide, 2", "CO", CO.replace("symmetry = 1", "symmetry = 2"), ".symmetry", "2 if its halves are alike"),
    form("asymmetric top, 3", "H2O", WATER.replace("symmetry = 2", "symmetry = 3"), ".symmetry", "of an asymmetric top"),
    form("optical isomers of a linear one", "CO", f"{CO}, optical_isomers = 2", ".optical_isomers", "equals its mirror image"),
    form("three optical isomers", "H2O", f"{WATER}, optical_isomers = 3", ".optical_isomers", "3 is not", "2 for a chiral"),
]
VIBRATIONS = [
    form("too few", "H2O", f"{WATER}, wavenumbers = [3657, 1595]", ".wavenumbers", "2 vibrations", "3 (3N - 6 for 3 atoms)"),
    form("none", "CO", CO, ".wavenumbers", "0 vibrations", "1 (3N - 5 for 2 atoms)"),
    form("degeneracy forgotten", "CO2", 'shape = "linear", B = 0.39, symmetry = 2, H0 = 1, wavenumbers = [1333, 667, 2349]',
         ".wavenumbers", "3 vibrations; expected 4 (3N - 5 for 3 atoms)"),
    form("rotor counted twice", "C2H6", f"{ETHANE}, rotors = [{{ {ROTOR} }}], wavenumbers = [[1000, 18]]", ".wavenumbers",
         "18 vibrations; expected 17 (3N - 6 less 1 of rotors for 8 atoms)"),
    form("zero", "H2O", f"{WATER}, wavenumbers = [3657, 0, 3756]", ".wavenumbers", "the wavenumber 0 is zero", "a rotor with"),
    form("imaginary", "H2O", f"{WATER}, wavenumbers = [3657, -1595, 3756]", ".wavenumbers",
         "the wavenumber -1595 is imaginary (negative)", "transition state"),
    form("imaginary as a text", "H2O", f'{WATER}, wavenumbers = [3657, "1595i", 3756]', ".wavenumbers",
         "'1595i' is neither a wavenumber nor"),
    form("in Hz", "H2O", f"{WATER}, wavenumbers = [1e14, 1595, 3756]", ".wavenumbers", "is above 10000 cm⁻¹"),
    form("not finite", "H2O", f"{WATER}, wavenumbers = [nan, 1595, 3756]", ".wavenumbers", "neither a wavenumber"),
    form("a number", "CO", f"{CO}, wavenumbers = 2143", ".wavenumbers", "2143 is not a list"),
    form("degeneracy zero", "CO", f"{CO}, wavenumbers = [[2143, 0]]", ".wavenumbers", "the degeneracy 0"),
    form("degeneracy broken", "CO", f"{CO}, wavenumbers = [[2143, 1.5]]", ".wavenumbers", "the degeneracy 1.5"),
    form("three numbers", "CO", f"{CO}, wavenumbers = [[2143, 1, 1]]", ".wavenumbers", "[2143, 1, 1] is neither"),
]
LEVELS = [
    form("ground level missing of a radical", "NO2", f'shape = "nonlinear", B = [8, 0.43, 0.41], symmetry = 2, {H}, '
         "wavenumbers = [1320, 750, 1616]", ".electronic", "the electronic ground level is missing: an odd number of electrons"),
    form("no levels", "Ar", f"{ATOM}, {H}, electronic = []", ".electronic", "the electronic ground level is missing"),
    form("not from zero", "O", f"{ATOM}, {H}, electronic = [[3, 158.3]]", ".electronic", "ground level is missing",
         "the first at 0"),
    form("bare degeneracy", "O", f"{ATOM}, {H}, electronic = [5]", ".electronic[1]", "5 is not a list"),
    form("no rise", "O", f"{ATOM}, {H}, electronic = [[5, 0], [3, 158], [1, 100]]", ".electronic[3]", "100 cm⁻¹ does not rise"),
    form("degeneracy zero", "O", f"{ATOM}, {H}, electronic = [[0, 0]]", ".electronic[1]", "0 is not the degeneracy"),
    form("odd degeneracy of odd electrons", "H", f"{ATOM}, {H}, electronic = [[1, 0]]", ".electronic[1]",
         "1 is not the degeneracy of an electronic level", "and even"),
    form("level infinite", "O", f"{ATOM}, {H}, electronic = [[5, 0], [3, inf]]", ".electronic[2]", "inf"),
]
ROTORS = [
    form("a table", "C2H6", f"{ETHANE}, rotors = {{ {ROTOR} }}", ".rotors", "is not a list"),
    form("no barrier", "C2H6", f"{ETHANE}, rotors = [{{ fold = 3, B = 5 }}]", ".rotors[1]", "the key 'barrier' is missing"),
    form("barrier negative", "C2H6", f"{ETHANE}, rotors = [{{ barrier = -1, fold = 3, B = 5 }}]", ".rotors[1].barrier",
         "-1 is negative"),
    form("barrier absurd", "C2H6", f"{ETHANE}, rotors = [{{ barrier = 12e3, fold = 3, B = 5 }}]", ".rotors[1].barrier",
         "1.2e+07 J/mol"),
    form("fold zero", "C2H6", f"{ETHANE}, rotors = [{{ barrier = 1, fold = 0, B = 5 }}]", ".rotors[1].fold", "0 is not a whole"),
    form("B of a rotor zero", "C2H6", f"{ETHANE}, rotors = [{{ barrier = 1, fold = 3, B = 0 }}]", ".rotors[1].B", "0 is zero"),
    form("B of a rotor tiny", "C2H6", f"{ETHANE}, rotors = [{{ barrier = 1, fold = 3, B = 1e-4 }}]", ".rotors[1].B", "0.01 to"),
    form("symmetry of a rotor", "C2H6", f"{ETHANE}, rotors = [{{ {ROTOR}, symmetry = 2 }}]", ".rotors[1].symmetry",
         "2 does not divide the 3 minima"),
    form("unknown key of a rotor", "C2H6", f"{ETHANE}, rotors = [{{ {ROTOR}, I = 2 }}]", ".rotors[1]", "unknown key 'I'"),
]
ENERGIES = [
    form("neither", "Ar", ATOM, "", "H0 and H298 are both missing", "one of H0 and H298"),
    form("both", "Ar", f"{ATOM}, H0 = 0, H298 = 0", "", "H0 and H298 are both stated"),
    form("not finite", "Ar", f"{ATOM}, H0 = nan", ".H0", "nan"),
    form("in another kind of unit", "Ar", f'{ATOM}, H298 = "1 bar"', ".H298", "bar is a unit of pressure"),
    form("H0 of a building block", "Q", f"{ATOM}, H0 = 1", ".H0", "H0 with Q, whose H(298.15 K) - H(0) is not tabulated here",
         "state H298 instead"),
    form("H0 of an element without data", "U", f"{ATOM}, H0 = 1", ".H0", "H0 with U"),
    form("absurd", "Ar", f"{ATOM}, H298 = 1e9", "", "h/RT is"),
]


@pytest.mark.parametrize("formula, keys, entry, texts", [*SHAPES, *SYMMETRY, *VIBRATIONS, *LEVELS, *ROTORS, *ENERGIES])
def test_statistical_mechanics(refusals: Refusals, formula: str, keys: str, entry: str, texts: tuple) -> None:
    species = f'[species.S]\nformula = "{formula}"\npotential = {{ {HEAD}{keys} }}\n\n[species.Q2]'
    refusals.write(changed(MECHANISM, ("[species.Q2]\n", species + "\n")))
    refusals.refused("small.toml", PLACE + entry, *texts)


def test_H0_of_an_ion(refusals: Refusals) -> None:
    species = (f'[species.S]\nformula = "N"\ncharge = 1\npotential = {{ {HEAD}{ATOM}, H0 = 1, electronic = [[9, 0]] }}\n\n'
               "[species.Q2]\n")
    refusals.write(changed(MECHANISM, ("[species.Q2]\n", species)))
    refusals.refused("small.toml", f"{PLACE}.H0", "H0 of an ion", "state H298 instead")


@pytest.mark.parametrize("keys, entry, text", [
    ("", "", "the key 'energy' is missing"), (", energy = nan", ".energy", "nan"),
    (', energy = "1 K/mol"', ".energy", "unknown unit 'K/mol'"), (", energy = 1, B = 1", "", "unknown key 'B'")])
def test_structureless_particle(refusals: Refusals, keys: str, entry: str, text: str) -> None:
    refusals.write(changed(MECHANISM, (CONSTANT_Q, f'potential = {{ form = "structureless particle"{keys} }}')))
    refusals.refused("small.toml", f"species.Q.potential{entry}", text)


@pytest.mark.parametrize("keys", ['form = "structureless particle", energy = 1.0', f"{HEAD}{ATOM}, {H}"])
def test_no_gas_in_a_solution(refusals: Refusals, keys: str) -> None:
    head = ('phase = "ideal gas"\nstandard_pressure = "1 bar"', 'phase = "ideal solution"\nstandard_state = "1 mol/L"')
    refusals.write(changed(MECHANISM, head, (CONSTANT_Q, f"potential = {{ {keys} }}")))
    refusals.refused("small.toml", "species.Q.potential.form", "in a solution", "a form of dissolved species")
