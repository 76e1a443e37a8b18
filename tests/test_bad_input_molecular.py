"""Faults of the rate laws made from molecules: one line, exit status 2 (see refusals.py)."""

from pathlib import Path
from typing import Any

import pytest

from refusals import ARRHENIUS_2, MECHANISM, R1, R2, Refusals, changed

SPHERES, EYRING, THEORY = 'law = "hard-sphere collision"', 'law = "Eyring"', 'law = "transition state"'
SHAPE = 'shape = "nonlinear", B = [0.9, 0.3, 0.25], symmetry = 1'
COMPLEX = f"complex = {{ {SHAPE}, wavenumbers = [300, 500], imaginary = 900 }}"
ARRHENIUS_1 = 'collision_efficiency = { O2 = 2.0, Q2 = 0.0 }\nforward = { law = "Arrhenius", A = 1e16, n = -1.0 }'


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def law(name: str, keys: str, entry: str, *texts: str) -> Any:
    """The reaction Q + O2 ⇌ QO + O with another law: its keys, the entry an error names within it, texts in this order."""
    return pytest.param(keys, f"{R2}.forward{entry}", texts, id=name)


COLLISION = [
    law("no E0", f'{SPHERES}, diameter = "3 Å"', "", "the key 'E0' is missing"),
    law("E0 negative", f'{SPHERES}, diameter = "3 Å", E0 = -1', ".E0", "-1 is negative"),
    law("E0 not finite", f'{SPHERES}, diameter = "3 Å", E0 = inf', ".E0", "inf"),
    law("E0 below the products", f'{SPHERES}, diameter = "3 Å", E0 = 20', ".E0",
        "20 is below what the products have above the reactants at 0 K", "at least "),
    law("no diameter", f"{SPHERES}, E0 = 300", ".diameter", "the diameter is missing, and Q states no collision_diameter",
        "the diameter of the pair, or that of either species"),
    law("diameter in cm", f"{SPHERES}, E0 = 300, diameter = 3.4", ".diameter", "a diameter of 0.034 m", "1e-11 to 1e-7 m"),
    law("diameter zero", f"{SPHERES}, E0 = 300, diameter = 0", ".diameter", "0 is zero"),
    law("P zero", f'{SPHERES}, E0 = 300, diameter = "3 Å", P = 0', ".P", "0 is zero"),
    law("P negative", f'{SPHERES}, E0 = 300, diameter = "3 Å", P = -0.1', ".P", "-0.1 is negative"),
    law("k overflows", f'{SPHERES}, E0 = 300, diameter = "3 Å", P = 1e250', "", "overflows"),
    law("orders of its own", f'{SPHERES}, E0 = 300, diameter = "3 Å", orders = {{ Q = 1.5, O2 = 1 }}', ".orders",
        "orders of its own, 2.5 in all, beside this law", "mass action"),
    law("unknown key", f'{SPHERES}, E0 = 300, diameter = "3 Å", Ea = 3', "", "unknown key 'Ea'"),
]
EYRINGS = [
    law("no dH", f'{EYRING}, dS = 0, standard_state = "1 mol/L"', "", "the key 'dH' is missing"),
    law("no dS", f'{EYRING}, dH = 50, standard_state = "1 mol/L"', "", "the key 'dS' is missing"),
    law("dS not finite", f'{EYRING}, dH = 50, dS = nan, standard_state = "1 mol/L"', ".dS", "nan"),
    law("dS in J of kJ", f'{EYRING}, dH = 50, dS = -90, standard_state = "1 mol/L"', ".dS", "-90000 J/(mol K)", "mind"),
    law("no standard state", f"{EYRING}, dH = 50, dS = -0.09", ".standard_state",
        "the standard state of dS is missing; the order is 2", '"1 mol/L"'),
    law("standard state a number", f"{EYRING}, dH = 50, dS = -0.09, standard_state = 1", ".standard_state", "1 is not a text"),
    law("standard state of another kind", f'{EYRING}, dH = 50, dS = -0.09, standard_state = "1 s"', ".standard_state",
        "s is a unit of time, not of concentration"),
    law("standard state zero", f'{EYRING}, dH = 50, dS = -0.09, standard_state = "0 bar"', ".standard_state", "zero"),
    law("kappa zero", f'{EYRING}, dH = 50, dS = -0.09, standard_state = "1 bar", kappa = 0', ".kappa", "0 is zero"),
    law("an unknown key", f'{EYRING}, dH = 50, dS = -0.09, standard_state = "1 bar", Ea = 1', "", "unknown key 'Ea'"),
]
THEORIES = [
    law("no complex", f"{THEORY}, E0 = 300", "", "the key 'complex' is missing"),
    law("complex a number", f"{THEORY}, E0 = 300, complex = 3", ".complex", "3 is not a table"),
    law("no imaginary wavenumber", f"{THEORY}, E0 = 300, complex = {{ {SHAPE}, wavenumbers = [300, 500] }}", ".complex",
        "the key 'imaginary' is missing"),
    law("imaginary zero", f"{THEORY}, E0 = 300, {COMPLEX.replace('900', '0')}", ".complex.imaginary", "0 is not the one"),
    law("imaginary with its sign", f"{THEORY}, E0 = 300, {COMPLEX.replace('900', '-900')}", ".complex.imaginary",
        "-900 is not the one imaginary wavenumber of a transition state", "without sign"),
    law("imaginary a list", f"{THEORY}, E0 = 300, {COMPLEX.replace('900', '[900, 200]')}", ".complex.imaginary", "[900, 200]"),
    law("a second imaginary one", f"{THEORY}, E0 = 300, {COMPLEX.replace('300, 500', '-300, 500')}", ".complex.wavenumbers",
        "the wavenumber -300 is imaginary"),
    law("key of the molecule", f"{THEORY}, E0 = 300, {COMPLEX.replace('symmetry', 'sigma')}", ".complex", "'symmetry' is"),
    law("electronic levels", f"{THEORY}, E0 = 300, {COMPLEX.replace('imaginary', 'electronic = [[1, 30]], imaginary')}",
        ".complex.electronic", "the electronic ground level is missing"),
    law("no energy", f"{THEORY}, {COMPLEX}", ".E0", "E0 and the complex's own enthalpy are both missing"),
    law("two energies", f"{THEORY}, E0 = 300, {COMPLEX.replace('imaginary', 'H298 = 1, imaginary')}", ".E0", "are both stated"),
    law("E0 in the complex", f"{THEORY}, {COMPLEX.replace('imaginary', 'E0 = 1, imaginary')}", ".E0", "both missing"),
    law("unknown key of the complex", f"{THEORY}, E0 = 300, {COMPLEX.replace('imaginary', 'energy = 1, imaginary')}", ".complex",
        "unknown key 'energy'"),
    law("E0 not finite", f"{THEORY}, E0 = nan, {COMPLEX}", ".E0", "nan"),
    law("tunnelling unknown", f'{THEORY}, E0 = 300, tunnelling = "Bell", {COMPLEX}', ".tunnelling", "'Bell' is not known",
        '"none" or "Wigner" or "Eckart"'),
    law("no barrier to tunnel through", f'{THEORY}, E0 = 20, tunnelling = "Eckart", {COMPLEX}', ".tunnelling", "the top lies",
        "a barrier seen from either side"),
    law("orders of its own", f"{THEORY}, E0 = 300, {COMPLEX}, orders = {{ Q = 1.5, O2 = 1 }}", ".orders", "orders of its own"),
    law("k overflows", f"{THEORY}, E0 = -9000, {COMPLEX}", "", "k overflows"),
]


@pytest.mark.parametrize("keys, entry, texts", [*COLLISION, *EYRINGS, *THEORIES])
def test_law(refusals: Refusals, keys: str, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, (ARRHENIUS_2, f"forward = {{ {keys} }}")))
    refusals.refused("small.toml", entry, *texts)


def test_modes_of_a_complex(refusals: Refusals) -> None:
    """Counted where all elements are known: 3N - 7 beside the imaginary one."""
    species = ('[species.O3]\nformula = "O3"\npotential = { form = "constant heat capacity", at = 298.15, H = 142.0, S = 0.239, '
               'cp = 0.039 }\n\n[species."Q+"]')
    entry = f'[[reaction]]\nequation = "O2 + O ⇌ O3"\nforward = {{ {THEORY}, E0 = 3, {COMPLEX} }}\n\n[[reaction]]\n{ "equation" }'
    text = changed(MECHANISM, ('[species."Q+"]', species), ('[[reaction]]\nequation = "Q + O ⇌ QO"', entry + ' = "Q + O ⇌ QO"'))
    refusals.write(text.replace("wavenumbers = [300, 500]", "wavenumbers = [300, 500, 800]"))
    refusals.refused("small.toml", "reaction 3 'O2 + O ⇌ O3'.forward.complex.wavenumbers", "3 vibrations",
                     "2 (3N - 6 less the imaginary one for 3 atoms)")


def test_E0_above_reactants_whose_data_end_above_zero(refusals: Refusals) -> None:
    """The reaction of Q2, which is a fit from 300 K on."""
    start = MECHANISM.index("forward = [\n")
    refusals.write(MECHANISM[:start] + f"forward = {{ {THEORY}, E0 = 300, {COMPLEX} }}\n")
    refusals.refused("small.toml", "reaction 4 'Q2 + O2 ⇌ 2 QO'.forward.E0", "the data of Q2 begin at 300 K", "state H298 or H0")


@pytest.mark.parametrize("keys, entry, text", [(f'{SPHERES}, diameter = "3 Å", E0 = 1', ".law", "2 molecules and M as reactants"),
                                               (f"{THEORY}, E0 = 1, {COMPLEX}", ".law", "M takes part")])
def test_no_partner(refusals: Refusals, keys: str, entry: str, text: str) -> None:
    refusals.write(changed(MECHANISM, (ARRHENIUS_1, f"forward = {{ {keys} }}")))
    refusals.refused("small.toml", f"{R1}.forward{entry}", text)


@pytest.mark.parametrize("keys", [f'{SPHERES}, diameter = "3 Å", E0 = 300', f"{THEORY}, E0 = 1, {COMPLEX}"])
def test_no_gas_in_a_solution(refusals: Refusals, keys: str) -> None:
    head = ('phase = "ideal gas"\nstandard_pressure = "1 bar"', 'phase = "ideal solution"\nstandard_state = "1 mol/L"')
    refusals.write(changed(MECHANISM, head, (ARRHENIUS_2, f"forward = {{ {keys} }}")))
    refusals.refused("small.toml", f"{R2}.forward.law", "in a solution", "a law of dissolved species")
