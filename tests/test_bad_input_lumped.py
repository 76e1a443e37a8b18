"""Faults of orders, stoichiometric_number and Hougen-Watson: one line, exit status 2 (see refusals.py)."""

from pathlib import Path
from typing import Any

import pytest

from refusals import ARRHENIUS_2, MECHANISM, R2, Refusals, changed

ARRHENIUS = 'law = "Arrhenius", A = 1e13'
K = "k = { A = 1e13 }"
GROUP = 'adsorption = [{ species = "O", K = { A = 2.0, Ea = -20.0 } }]'
HW = 'law = "Hougen-Watson"'


@pytest.fixture
def refusals(tmp_path: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Refusals:
    return Refusals(tmp_path, capsys, monkeypatch)


def law(name: str, keys: str, entry: str, *texts: str) -> Any:
    """Q + O2 ⇌ QO + O with another law: its keys, the entry an error names within it, texts in this order."""
    return pytest.param(keys, f"{R2}.forward{entry}", texts, id=name)


ORDERS = [
    law("orders a number", f"{ARRHENIUS}, orders = 1.5", ".orders", "1.5 is not a table"),
    law("order a text", f'{ARRHENIUS}, orders = {{ Q = "1" }}', ".orders.Q", "'1' is not a finite number", "leave out"),
    law("order not finite", f"{ARRHENIUS}, orders = {{ Q = inf }}", ".orders.Q", "inf is not a finite number"),
    law("order NaN", f"{ARRHENIUS}, orders = {{ Q = nan }}", ".orders.Q", "nan is not a finite number"),
    law("order of an unknown species", f"{ARRHENIUS}, orders = {{ QO2 = 1 }}", ".orders", "unknown species 'QO2'", "nearest"),
    law("order beyond reason", f"{ARRHENIUS}, orders = {{ Q = 30 }}", ".orders", "the order 30 of Q", "from -20 to 20"),
    law("reverse order negative", f"{ARRHENIUS}, orders = {{ Q = 0.5 }}", ".orders", "negative: Q -0.5",
        "α + ν/σ of at least 0", "an order of Q of at least 1"),
    law("reverse orders negative", f"{ARRHENIUS}, orders = {{ Q = 0, O = -2 }}", ".orders", "negative: Q -1, O -1"),
    law("negative order of a bystander", f"{ARRHENIUS}, orders = {{ Q2 = -1 }}", ".orders", "negative: Q2 -1",
        "an order of Q2 of at least 0"),
    law("reverse order by σ", f"{ARRHENIUS}, stoichiometric_number = 0.5", "", "negative: Q -1, O2 -1",
        "at least 2, or correct stoichiometric_number"),
    law("σ zero", f"{ARRHENIUS}, stoichiometric_number = 0", ".stoichiometric_number", "0 is zero", "a number above 0"),
    law("σ negative", f"{ARRHENIUS}, stoichiometric_number = -1", ".stoichiometric_number", "-1 is negative"),
    law("σ infinite", f"{ARRHENIUS}, stoichiometric_number = inf", ".stoichiometric_number", "inf is not a finite number"),
    law("σ a text", f'{ARRHENIUS}, stoichiometric_number = "2"', ".stoichiometric_number", "'2' is not a finite number"),
    law("σ beyond reason", f"{ARRHENIUS}, stoichiometric_number = 11", ".stoichiometric_number", "11 is beyond reason",
        "from 0.1 to 10"),
    law("order misspelt", f"{ARRHENIUS}, order = {{ Q = 1.5 }}", "", "unknown key 'order' (nearest: orders)"),
    law("A negative beside orders", 'law = "Arrhenius", A = -1e13, orders = { Q = 1.5 }', ".A", "-10000000000000.0 is negative"),
]

SURFACE = [
    law("no k", f"{HW}, {GROUP}", "", "the key 'k' is missing"),
    law("k a number", f"{HW}, k = 1e13, {GROUP}", ".k", "10000000000000.0 is not a table"),
    law("k negative", f"{HW}, k = {{ A = -1 }}, {GROUP}", ".k.A", "-1 is negative"),
    law("unknown key of k", f"{HW}, k = {{ A = 1, E = 3 }}, {GROUP}", ".k", "unknown key 'E'"),
    law("no adsorption", f"{HW}, {K}", "", "the key 'adsorption' is missing"),
    law("adsorption a table", f'{HW}, {K}, adsorption = {{ species = "O" }}', ".adsorption", "is not a list", "such as"),
    law("adsorption empty", f"{HW}, {K}, adsorption = []", ".adsorption", "no adsorbed species", "without adsorption"),
    law("adsorbed a text", f'{HW}, {K}, adsorption = ["O"]', ".adsorption[1]", "'O' is not a table"),
    law("adsorbed without species", f"{HW}, {K}, adsorption = [{{ K = {{ A = 2.0 }} }}]", ".adsorption[1]",
        "the key 'species' is missing"),
    law("adsorbed unknown", f'{HW}, {K}, adsorption = [{{ species = "QO3", K = {{ A = 2.0 }} }}]', ".adsorption[1].species",
        "unknown species 'QO3'", "nearest"),
    law("adsorbed without K", f'{HW}, {K}, adsorption = [{{ species = "O" }}]', ".adsorption[1]", "the key 'K' is missing"),
    law("K a number", f'{HW}, {K}, adsorption = [{{ species = "O", K = 2.0 }}]', ".adsorption[1].K", "2.0 is not a table"),
    law("K negative", f'{HW}, {K}, adsorption = [{{ species = "O", K = {{ A = -2.0 }} }}]', ".adsorption[1].K.A",
        "-2.0 is negative", "a number above 0"),
    law("K beyond reason", f'{HW}, {K}, adsorption = [{{ species = "O", K = {{ A = 2.0, Ea = -5e4 }} }}]', "",
        "overflows", "below 1e+200"),
    law("unknown key of K", f'{HW}, {K}, adsorption = [{{ species = "O", K = {{ A = 2.0, dH = -20.0 }} }}]',
        ".adsorption[1].K", "unknown key 'dH'"),
    law("power of one zero", f'{HW}, {K}, adsorption = [{{ species = "O", K = {{ A = 2.0 }}, power = 0 }}]',
        ".adsorption[1].power", "0 is zero"),
    law("unknown key of one", f'{HW}, {K}, adsorption = [{{ species = "O", K = {{ A = 2.0 }}, order = 1 }}]',
        ".adsorption[1]", "unknown key 'order'"),
    law("power negative", f"{HW}, {K}, {GROUP}, power = -1", ".power", "-1 is negative"),
    law("power beyond reason", f"{HW}, {K}, {GROUP}, power = 40", ".power", "40 is a power beyond reason", "up to 10"),
    law("adsorption of another law", f"{ARRHENIUS}, {GROUP}", "", "unknown key 'adsorption'"),
    law("reverse order of the surface", f"{HW}, {K}, {GROUP}, orders = {{ O2 = 0.5 }}", ".orders", "negative: O2 -0.5"),
]


@pytest.mark.parametrize("keys, entry, texts", [*ORDERS, *SURFACE])
def test_lumped_step(refusals: Refusals, keys: str, entry: str, texts: tuple) -> None:
    refusals.write(changed(MECHANISM, (ARRHENIUS_2, f"forward = {{ {keys} }}")))
    refusals.refused("small.toml", entry, *texts)


def test_orders_belong_to_the_law(refusals: Refusals) -> None:
    refusals.write(changed(MECHANISM, (ARRHENIUS_2, f"orders = {{ Q = 1.5 }}\n{ARRHENIUS_2}")))
    refusals.refused("small.toml", R2, "'orders' stands beside the equation", "in the forward law")


def test_a_sum_of_mass_action_terms_must_be_positive_beside_a_lumped_one(refusals: Refusals) -> None:
    terms = f"forward = [{{ {ARRHENIUS}, orders = {{ Q = 1.5 }} }}, {{ law = \"Arrhenius\", A = -1e10 }}]"
    refusals.write(changed(MECHANISM, (ARRHENIUS_2, terms)))
    refusals.refused("small.toml", f"{R2}.forward", "the sum of the forward terms is not positive")
