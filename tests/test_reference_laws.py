"""The reference itself: rate constants and partners, held against hand sums and closed limits."""

from copy import deepcopy

import numpy as np
import pytest

import invented
from reference import Reference
from test_reference import GAS_CONSTANT, STEP, two_species

# ---- rate constants and units


@pytest.fixture(scope="module")
def model() -> Reference:
    return Reference(invented.building_blocks())


def number(model: Reference, equation: str) -> int:
    return [r.equation for r in model.reactions].index(equation)


def test_rate_constants_by_hand(model: Reference) -> None:
    """dm3/(mol s) to m3/(mol s): 1e-3; dm6 to m6: 1e-6; at T = T_ref the power is 1."""
    RT = GAS_CONSTANT * 300.0
    assert model.rate_constant(number(model, "Q + X2 ⇌ QX + X"), 300.0) == pytest.approx(
        3e6 * np.exp(-26e3 / RT), rel=1e-13)
    assert model.rate_constant(number(model, "2 X + Z ⇌ X2 + Z"), 2000.0) == pytest.approx(
        6e4 * 2000.0**-0.9, rel=1e-13)
    assert model.rate_constant(number(model, "2 X + M ⇌ X2 + M"), 2000.0) == pytest.approx(200.0, rel=1e-13)
    assert model.rate_constant(number(model, "2 QX ⇌ Q2 + X2"), 300.0) == pytest.approx(
        300.0**0.2 * (9e6 * np.exp(-90e3 / RT) - 2e6 * np.exp(-94e3 / RT)), rel=1e-13)


def test_molecules_by_hand() -> None:
    """1e-12 cm3/(molecule s) is 1e-18 x 6.02214076e23 m3/(mol s); 0.1 eV over k_B is 1160.4518 K."""
    document = {"mechanism": {"units": ["cm", "molecule", "s", "eV"]}, "species": two_species_document(),
                "reaction": [{"equation": "2 B ⇌ A", "forward": {"law": "Arrhenius", "A": 1e-12, "Ea": 0.1}}]}
    k = Reference(document).rate_constant(0, 1160.4518)
    assert k == pytest.approx(6.02214076e5 * np.exp(-1), rel=1e-7)


def test_calories_by_hand() -> None:
    """R is 1.98720425864083 cal/(mol K); like molecules may be written one by one."""
    entry = {"equation": "B + B ⇌ A", "forward": {"law": "Arrhenius", "A": 1.0, "Ea": 2000.0}}
    document = {"mechanism": {"units": ["cal/mol"]}, "species": two_species_document(), "reaction": [entry]}
    model = Reference(document)
    assert model.rate_constant(0, 500.0) == pytest.approx(np.exp(-4 / 1.98720425864083), rel=1e-13)
    assert model.net_rates(np.array([0.0, 3.0]), 500.0)[0] == 9 * model.rate_constant(0, 500.0)


def two_species_document() -> dict:
    data = {"form": "constant heat capacity", "at": 298.15, "H": "5 kJ/mol", "S": "130 J/(mol K)", "cp": 0.0}
    return {"A": {"potential": data}, "B": {"potential": data}}


def falloff(F_cent: object, M: float) -> float:
    """k of A ⇌ 2 B with k_inf = 10 /s and k_0 = 2 m3/(mol s) at 800 K."""
    shape = {"law": "Lindemann"} if F_cent is None else {"law": "Troe", "F_cent": F_cent}
    return two_species(**shape, k_inf={"A": 10.0}, k_0={"A": 2.0}).rate_constant(0, 800.0, M)


def test_lindemann_limits_and_middle() -> None:
    assert falloff(None, 5.0) == pytest.approx(5.0, rel=1e-14)  # P_r = 1: half of k_inf
    assert falloff(None, 1e-9) == pytest.approx(2e-9, rel=1e-9)
    assert falloff(None, 1e12) == pytest.approx(10.0, rel=1e-9)
    assert falloff(None, 5.0) == falloff(1.0, 5.0)


@pytest.mark.parametrize("x_over_N, power", [(0.0, 1.0), (1 / 1.14, 0.5), (-1 / 0.86, 0.5)])
def test_broadening_where_it_is_a_plain_power_of_its_centre(x_over_N: float, power: float) -> None:
    """log P_r + c = 0 gives F = F_cent; x/(N - 0.14 x) = +1 or -1 gives F = sqrt(F_cent)."""
    F_cent = 0.3
    N, c = 0.75 - 1.27 * np.log10(F_cent), -0.4 - 0.67 * np.log10(F_cent)
    P_r = 10 ** (x_over_N * N - c)
    assert falloff(F_cent, 5.0 * P_r) == pytest.approx(10 * P_r / (1 + P_r) * F_cent**power, rel=1e-13)


def test_centre_from_its_parameters() -> None:
    """At 800 K: T* = T*** = 800 K leave e^-1 alone; T** = 1600 K adds e^-2; a parts the two."""
    e = np.exp(-1.0)
    assert falloff({"a": 0.3, "T***": 800.0, "T*": 800.0}, 7.0) == pytest.approx(falloff(e, 7.0), rel=1e-13)
    assert falloff({"a": 0.3, "T***": 800.0, "T*": 800.0, "T**": 1600.0}, 7.0) == pytest.approx(
        falloff(e + e**2, 7.0), rel=1e-13)
    assert falloff({"a": 0.3, "T***": 1e-30, "T*": 1e30}, 7.0) == pytest.approx(falloff(0.3, 7.0), rel=1e-13)
    assert falloff({"a": 0.3, "T***": 1e30, "T*": 1e-30}, 7.0) == pytest.approx(falloff(0.7, 7.0), rel=1e-13)


def test_falloff_without_partners_is_zero_and_linear() -> None:
    assert falloff(0.5, 0.0) == 0.0
    slope = falloff(0.5, 1j * STEP).imag / STEP
    assert slope == pytest.approx(2.0 * 0.5 ** (1 / (1 + 1 / 0.14**2)), rel=1e-13)


# ---- partners


def forward_rate(model: Reference, equation: str, **c: float) -> float:
    """Forward rate at 1500 K and these concentrations [mol/m3], 0 for the rest."""
    full = np.array([c.get(name, 0.0) for name in model.names])
    return model.net_rates(full, 1500.0)[0][number(model, equation)]


def test_partners_count_with_their_efficiency(model: Reference) -> None:
    rate = forward_rate(model, "2 X + M ⇌ X2 + M", X=1.0, Z=50.0, QX2=2.0, X2=4.0, Q=3.0)
    assert rate == pytest.approx(4e5 / 1500.0 * (1.0 + 0.0 + 24.0 + 10.0 + 3.0), rel=1e-13)


def test_a_terms_own_efficiencies_replace_those_of_the_entry(model: Reference) -> None:
    RT = GAS_CONSTANT * 1500.0
    rate = forward_rate(model, "Q2 + M ⇌ 2 Q + M", Q2=1.0, Z=10.0, QX=2.0)
    first = 5e10 * 1500.0**-0.5 * np.exp(-455e3 / RT) * (3.0 + 4.0 + 2.0)
    second = 2e9 * np.exp(-440e3 / RT) * (1.0 + 0.0 + 13.0)
    assert rate == pytest.approx(first + second, rel=1e-13)


def test_one_partner_alone(model: Reference) -> None:
    equation = "Q + X2 ⇌ QX2"
    assert forward_rate(model, equation, Q=1.0, X2=1.0) == 0.0
    k = model.rate_constant(number(model, equation), 1500.0, 8.0)
    assert forward_rate(model, equation, Q=1.0, X2=2.0, Z=8.0, QX=30.0) == pytest.approx(2 * k, rel=1e-13)
    named = forward_rate(model, "2 X + Z ⇌ X2 + Z", X=3.0, Z=5.0, QX=30.0)
    assert named == pytest.approx(6e4 * 1500.0**-0.9 * 9.0 * 5.0, rel=1e-13)


# ---- what is read


@pytest.mark.parametrize("change", [{"orders": {"X": 1.5}}, {"equation": "0.5 X2 ⇌ X"},
                                    {"forward": {"law": "SRI", "k_inf": {}, "k_0": {}}}])
def test_what_is_not_covered_is_refused(change: dict) -> None:
    document = deepcopy(invented.building_blocks())
    document["reaction"][0] |= change
    with pytest.raises(NotImplementedError):
        Reference(document)
