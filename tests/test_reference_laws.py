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


def fall_off(F_cent: object, M: float) -> float:
    """k of A ⇌ 2 B with k_inf = 10 /s and k_0 = 2 m3/(mol s) at 800 K."""
    shape = {"law": "Lindemann"} if F_cent is None else {"law": "Troe", "F_cent": F_cent}
    return two_species(**shape, k_inf={"A": 10.0}, k_0={"A": 2.0}).rate_constant(0, 800.0, M)


def test_lindemann_limits_and_middle() -> None:
    assert fall_off(None, 5.0) == pytest.approx(5.0, rel=1e-14)  # P_r = 1: half of k_inf
    assert fall_off(None, 1e-9) == pytest.approx(2e-9, rel=1e-9)
    assert fall_off(None, 1e12) == pytest.approx(10.0, rel=1e-9)
    assert fall_off(None, 5.0) == fall_off(1.0, 5.0)


@pytest.mark.parametrize("x_over_N, power", [(0.0, 1.0), (1 / 1.14, 0.5), (-1 / 0.86, 0.5)])
def test_broadening_where_it_is_a_plain_power_of_its_centre(x_over_N: float, power: float) -> None:
    """log P_r + c = 0 gives F = F_cent; x/(N - 0.14 x) = +1 or -1 gives F = sqrt(F_cent)."""
    F_cent = 0.3
    N, c = 0.75 - 1.27 * np.log10(F_cent), -0.4 - 0.67 * np.log10(F_cent)
    P_r = 10 ** (x_over_N * N - c)
    assert fall_off(F_cent, 5.0 * P_r) == pytest.approx(10 * P_r / (1 + P_r) * F_cent**power, rel=1e-13)


def test_centre_from_its_parameters() -> None:
    """At 800 K: T* = T*** = 800 K leave e^-1 alone; T** = 1600 K adds e^-2; a parts the two."""
    e = np.exp(-1.0)
    assert fall_off({"a": 0.3, "T***": 800.0, "T*": 800.0}, 7.0) == pytest.approx(fall_off(e, 7.0), rel=1e-13)
    assert fall_off({"a": 0.3, "T***": 800.0, "T*": 800.0, "T**": 1600.0}, 7.0) == pytest.approx(
        fall_off(e + e**2, 7.0), rel=1e-13)
    assert fall_off({"a": 0.3, "T***": 1e-30, "T*": 1e30}, 7.0) == pytest.approx(fall_off(0.3, 7.0), rel=1e-13)
    assert fall_off({"a": 0.3, "T***": 1e30, "T*": 1e-30}, 7.0) == pytest.approx(fall_off(0.7, 7.0), rel=1e-13)


def test_fall_off_without_partners_is_zero_and_linear() -> None:
    assert fall_off(0.5, 0.0) == 0.0
    slope = fall_off(0.5, 1j * STEP).imag / STEP
    assert slope == pytest.approx(2.0 * 0.5 ** (1 / (1 + 1 / 0.14**2)), rel=1e-13)


def broadened(M: float, **law: object) -> float:
    """F of A ⇌ 2 B with k_inf = 10 /s and k_0 = 2 m3/(mol s) at 800 K; P_r = [M]/5."""
    k = two_species(**law, k_inf={"A": 10.0}, k_0={"A": 2.0}).rate_constant(0, 800.0, M)
    return k * (5.0 + M) / (10.0 * M)


SRI = {"a": 0.45, "b": 1600.0, "c": 400.0}  # at 800 K: 0.45 e^-2 + e^-2


@pytest.mark.parametrize("log_P, X", [(0.0, 1.0), (1.0, 0.5), (-1.0, 0.5), (2.0, 0.2), (-3.0, 0.1)])
def test_sri_by_hand(log_P: float, X: float) -> None:
    F = (1.45 * np.exp(-2.0)) ** X
    assert broadened(5.0 * 10**log_P, law="SRI", F=SRI) == pytest.approx(F, rel=1e-13)
    more = SRI | {"d": 3.0, "e": -0.5}
    assert broadened(5.0 * 10**log_P, law="SRI", F=more) == pytest.approx(3 * F / np.sqrt(800.0), rel=1e-13)


@pytest.mark.parametrize("width, one", [("JPL", 1.0), ("IUPAC", 0.75 - 1.27 * np.log10(0.3))])
@pytest.mark.parametrize("steps, power", [(0, 1.0), (1, 0.5), (-1, 0.5), (3, 0.1)])
def test_the_evaluations_widths(width: str, one: float, steps: int, power: float) -> None:
    """F_cent at P_r = 1, its root one width to either side, its tenth power at three."""
    F = broadened(5.0 * 10 ** (steps * one), law="Troe", width=width, F_cent=0.3)
    assert F == pytest.approx(0.3**power, rel=1e-12)


def test_a_published_rate_constant_with_the_width_of_its_evaluation() -> None:
    """OH + NO2 + N2 at 298 K and 1 bar: 9.8e-12 cm3/(molecule s) from k_0 = 3.2e-30 (T/300)^-4.5 [N2],
    k_inf = 3.0e-11, F_cent = 0.41 (IUPAC Task Group on Atmospheric Chemical Kinetic Data Evaluation, HOx_VOC/NOx
    sheet NOx13, 2017; doi:10.5194/acp-4-1461-2004)."""
    law = {"law": "Troe", "width": "IUPAC", "F_cent": 0.41, "k_inf": {"A": 3.0e-11},
           "k_0": {"A": 3.2e-30, "n": -4.5, "T_ref": 300.0}}
    document = {"mechanism": {"units": ["cm", "molecule"]}, "species": two_species_document(),
                "reaction": [{"equation": "2 A ⇌ B", "forward": law}]}
    k = Reference(document).rate_constant(0, 298.0, 1e5 / (GAS_CONSTANT * 298.0))
    assert k / 6.02214076e17 == pytest.approx(9.8e-12, abs=0.05e-12)


BROADENINGS = [{}, {"F_cent": 0.4}, {"F": SRI}, {"F_cent": 0.4, "width": "IUPAC"}, {"F_cent": 0.4, "width": "JPL"}]
LAW_OF = {"F_cent": "Troe", "F": "SRI"}


@pytest.mark.parametrize("broadening", BROADENINGS)
def test_limits_of_fall_off(broadening: dict) -> None:
    law = next((LAW_OF[key] for key in broadening if key in LAW_OF), "Lindemann")
    low, high = (broadened(M, law=law, **broadening) for M in (1e-300, 1e300))
    assert low == pytest.approx(1, abs=0.02) and high == pytest.approx(1, abs=0.03)


# ---- chemical activation


def channel(M: float, **broadening: object) -> float:
    """k of 2 B ⇌ A, activated, with k_0 = 6 m3/(mol s) and k_inf = 2 /s at 800 K; P_r = 3 [M]."""
    law = {"law": "activated", "k_inf": {"A": 2.0}, "k_0": {"A": 6.0}, **broadening}
    entry = {"equation": "2 B ⇌ A", "forward": law}
    return Reference({"mechanism": {}, "species": two_species_document(), "reaction": [entry]}).rate_constant(0, 800.0, M)


@pytest.mark.parametrize("broadening, F", [({}, 1.0), ({"F_cent": 0.4}, None), ({"F": SRI}, 1.45 * np.exp(-2.0)),
                                           ({"F_cent": 0.4, "width": "IUPAC"}, 0.4), ({"F_cent": 0.4, "width": "JPL"}, 0.4)])
def test_activated_channels_by_hand(broadening: dict, F: float | None) -> None:
    if F is None:  # the wide form at log P_r = 0: x = c
        c, N = -0.4 - 0.67 * np.log10(0.4), 0.75 - 1.27 * np.log10(0.4)
        F = 0.4 ** (1 / (1 + (c / (N - 0.14 * c)) ** 2))
    assert channel(1 / 3, **broadening) == pytest.approx(3.0 * F, rel=1e-13)


def test_activated_channels_at_either_end() -> None:
    """Nothing is stabilised at [M] = 0: k_0; at high [M] the channel dies as k_inf/[M]."""
    assert channel(0.0) == 6.0
    assert channel(1e12) * 1e12 == pytest.approx(2.0, rel=1e-11)
    assert channel(1j * STEP).imag / STEP == pytest.approx(-18.0, rel=1e-14)
    assert channel(0.0, F=SRI | {"d": 0.5}) == 3.0
    assert channel(0.0, F_cent=0.4) == pytest.approx(6 * 0.4 ** (1 / (1 + 1 / 0.14**2)), rel=1e-14)


# ---- laws of pressure


ROWS = [{"p": "1 bar", "A": 3.0}, {"p": 100.0, "A": 2.0}, {"p": 1e5, "A": 5.0, "n": 1.0, "T_ref": 800.0},
        {"p": "10 MPa", "A": 5.0, "Ea": 800.0 * GAS_CONSTANT}]


@pytest.mark.parametrize("p, k", [(60.0, 2.0), (100.0, 2.0), (np.sqrt(1e7), 4.0), (1e5, 8.0), (1e6, np.sqrt(40 / np.e)),
                                  (1e7, 5 / np.e), (1e9, 5 / np.e)])
def test_pressure_table_by_hand(p: float, k: float) -> None:
    """Geometric means halfway between; 3 and 5 add up at 1 bar; the ends hold."""
    assert two_species(law="pressure table", rows=ROWS).rate_constant(0, 800.0, p=p) == pytest.approx(k, rel=1e-13)


def test_one_pressure_holds_everywhere() -> None:
    model = two_species(law="pressure table", rows=ROWS[:1])
    assert {model.rate_constant(0, 500.0, p=p) for p in (1.0, 1e5, 1e9)} == {3.0}


C = [[2.0, 0.3, -0.1], [0.5, 0.04, 0.02]]


def chebyshev(T: float, p: float, **more: object) -> float:
    law = {"law": "Chebyshev", "T": [400.0, 1600.0], "p": ["0.01 bar", "100 bar"], "c": C, **more}
    return float(np.log10(two_species(**law).rate_constant(0, T, p=p)))


@pytest.mark.parametrize("T, p, log_k", [
    (1600.0, 1e7, 2.76), (400.0, 1e7, 1.64), (1600.0, 1e3, 2.08), (400.0, 1e3, 1.12),  # corners: every polynomial is ±1
    (640.0, 1e5, 2.1), (1600.0, 1e5, 2.58), (640.0, 1e7, 2.2)])  # the middle: 1, 0, -1; 1/640 = (1/400 + 1/1600)/2
def test_chebyshev_by_hand(T: float, p: float, log_k: float) -> None:
    assert chebyshev(T, p) == pytest.approx(log_k, rel=1e-13)


def test_chebyshev_polynomials_are_cosines() -> None:
    T, p = 900.0, 3e4
    x = (2 / T - 1 / 400 - 1 / 1600) / (1 / 1600 - 1 / 400)
    y = (2 * np.log(p) - np.log(1e3) - np.log(1e7)) / (np.log(1e7) - np.log(1e3))
    log_k = sum(C[i][j] * np.cos(i * np.arccos(x)) * np.cos(j * np.arccos(y)) for i in range(2) for j in range(3))
    assert chebyshev(T, p) == pytest.approx(log_k, rel=1e-13)


def test_chebyshev_outside_its_window() -> None:
    assert chebyshev(3000.0, 1e9, clamp=True) == chebyshev(1600.0, 1e7)
    assert chebyshev(300.0, 1e5, clamp=True) == pytest.approx(1.62, rel=1e-13)
    assert chebyshev(640.0, 0.0, clamp=True) == pytest.approx(1.6, rel=1e-13)
    for T, p in [(399.9, 1e5), (1601.0, 1e5), (800.0, 999.0), (800.0, 1.1e7)]:
        with pytest.raises(ValueError):
            chebyshev(T, p)


def test_chebyshev_is_the_logarithm_of_k_in_the_units_of_the_file() -> None:
    """10^2 cm3/(mol s) is 10^-4 m3/(mol s)."""
    law = {"law": "Chebyshev", "T": [400.0, 1600.0], "p": [0.1, 10.0], "c": [[2.0]]}
    document = {"mechanism": {"units": ["cm", "atm"]}, "species": two_species_document(),
                "reaction": [{"equation": "2 B ⇌ A", "forward": law}]}
    assert Reference(document).rate_constant(0, 500.0, p=101325.0) == pytest.approx(1e-4, rel=1e-13)


@pytest.mark.parametrize("T", [300.0, 1200.0])
def test_the_pressure_is_that_of_the_gas_or_the_held_one(T: float) -> None:
    """k goes as p^(1/2) between 1e2 and 1e6 Pa."""
    model = two_species(law="pressure table", rows=[{"p": 1e2, "A": 1.0}, {"p": 1e6, "A": 100.0}])
    c = np.array([2.0, 6.0])
    k = np.sqrt(8.0 * GAS_CONSTANT * T / 1e2)
    assert model.net_rates(c, T)[0] == pytest.approx(2.0 * k, rel=1e-13)
    both = [model.derivative(np.append(c, T), holds, "isothermal", 4e4) for holds in ("volume", "pressure")]
    gross = [scale[0] / (2 * (at + c[1] ** 2 / model.K_c(T)[0] * by))
             for scale, at, by in [(both[0][1], 1.0, 0.5), (both[1][1], 1.0, 0.5 * 4e4 / (8.0 * GAS_CONSTANT * T))]]
    assert gross == pytest.approx([k, 20.0], rel=1e-12)
    J = model.jacobian(np.append(c, T), "pressure", "isothermal", 4e4)
    forward = 20.0 * np.array([1.0, 0.0])
    volume = 8.0 * GAS_CONSTANT * T / 4e4
    reverse = 20.0 / model.K_c(T)[0] * np.array([-36.0 / 8.0, 12.0 - 36.0 / 8.0]) / volume  # of n_B^2/V, V as the total
    assert J[0, :2] == pytest.approx(reverse - forward, rel=1e-12)


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
                                    {"forward": {"law": "Eyring", "dH": 50.0, "dS": 0.0}},
                                    {"forward": {"law": "SRI", "k_inf": {}, "k_0": {}, "F_cent": 0.5}}])
def test_what_is_not_covered_is_refused(change: dict) -> None:
    document = deepcopy(invented.building_blocks())
    document["reaction"][0] |= change
    with pytest.raises(NotImplementedError):
        Reference(document)
