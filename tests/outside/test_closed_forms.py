"""Runs of the whole program against reaction kinetics that can be solved in closed form.

The species are INVENTED building blocks of constant heat capacity, their standard Gibbs energies chosen so that K is
what the closed form asks. A closed form that runs one way only gets K so large (ln K above 90) that the reverse rate
is below 1e-25 of the forward one wherever it is compared. Textbook integrations (e.g. K.J. Laidler, Chemical
Kinetics, 3rd ed., 1987, ch. 2), evaluated with 30 digits; where another source stands behind one it is named there.

Tolerances: the runs ask rtol = 1e-10. What is left, in units of the largest amount, was measured: about 1e-11 at most with
the one-step methods, below 5e-9 with BDF; allowed are 1e-10 and 1e-8.
"""

from dataclasses import dataclass

import numpy as np
import pytest

from bothways import Mechanism
from bothways.integrate import METHODS

from .small import R, bar, building_blocks, course

ALLOWED = {method: 1e-8 if method == "BDF" else 1e-10 for method in METHODS}
T = 500.0  # [K] of the isothermal runs: the closed forms do not know a temperature
FAR = -200e3  # [J/mol] a standard Gibbs energy that makes a step one-way: K = exp(48) for each product molecule


def _log(K: float) -> float:
    """The standard Gibbs energy [J/mol] of a species of equilibrium constant K against one of zero."""
    return -R * T * float(np.log(K))


def _mass_action(equation: str, k: float) -> dict:
    return {"equation": equation, "forward": {"law": "Arrhenius", "A": k}}


@dataclass(frozen=True)
class Form:
    """start and expected concentrations [mol/L] at times [s]; expected: by species, one value a time."""

    mechanism: Mechanism
    start: dict[str, float]
    times: list[float]
    expected: dict[str, list[float]]


def reversible_first_order() -> Form:
    """A ⇌ B: A = A_e + (A_0 - A_e) exp(-(kf + kr) t); kf = 2, kr = 0.5 1/s."""
    mechanism = building_blocks({"A": {"Q": 1}, "B": {"Q": 1}}, {"A": 0.0, "B": _log(4)}, T, [_mass_action("A ⇌ B", 2.0)])
    return Form(mechanism, {"A": 1.0}, [0.1, 0.5, 1.0, 2.0, 5.0],
                {"A": [0.823040626457, 0.429203837488, 0.265667998899, 0.205390357599, 0.200002981323]})


def reversible_second_order() -> Form:
    """A + B ⇌ C + D, kf = 0.08 L/(mol s), K = 4: x = x1 x2 (1 - E)/(x2 - x1 E), E = exp(-kf q t), x1 and x2 the roots of
    (1 - 1/K) x² - (A0 + B0 + (C0 + D0)/K) x + A0 B0 - C0 D0/K and q the root of its discriminant."""
    blocks = {"A": {"Q": 1}, "B": {"X": 1}, "C": {"Q": 1}, "D": {"X": 1}}
    mechanism = building_blocks(blocks, {"A": 3e3, "B": 0.0, "C": 0.0, "D": 3e3 + _log(4)}, T,
                                [_mass_action("A + B ⇌ C + D", 0.08)])
    x = [0.0710025747834, 0.270189968242, 0.409760000582, 0.535607004524, 0.608219724148, 0.613391191181]
    return Form(mechanism, {"A": 1.2, "B": 0.8, "C": 0.1}, [1.0, 5.0, 10.0, 20.0, 50.0, 100.0],
                {"A": [1.2 - v for v in x], "D": x})


def association() -> Form:
    """A + B → P, k = 0.1 L/(mol s): ln[B0 (A0 - x)/(A0 (B0 - x))] = (A0 - B0) k t. K = exp(96)."""
    blocks = {"A": {"Q": 1}, "B": {"X": 1}, "P": {"Q": 1, "X": 1}}
    mechanism = building_blocks(blocks, {"A": 0.0, "B": 0.0, "P": 2 * FAR}, T, [_mass_action("A + B ⇌ P", 0.1)])
    return Form(mechanism, {"A": 2.0, "B": 1.0}, [10.0], {"P": [0.774600326439], "A": [1.225399673561]})


def _chain(gibbs: dict[str, float], first: float, second: float) -> Mechanism:
    return building_blocks({s: {"Q": 1} for s in "ABC"}, gibbs, T,
                           [_mass_action("A ⇌ B", first), _mass_action("B ⇌ C", second)])


def reversible_chain() -> Form:
    """A ⇌ B ⇌ C, kf = 1 and 0.5, kr = 0.3 and 0.2 1/s: eigenvalues 0, -0.510102051443364, -1.48989794855664 1/s."""
    mechanism = _chain({"A": 0.0, "B": _log(1 / 0.3), "C": _log(0.5 / 0.06)}, 1.0, 0.5)
    return Form(mechanism, {"A": 1.0}, [0.5, 1.0, 2.0, 5.0, 10.0], {
        "A": [0.6302552542536, 0.4290449369527, 0.2434175095525, 0.1089142206736, 0.08126165368603],
        "B": [0.3244321374438, 0.4365387418433, 0.4419555404357, 0.3110654937269, 0.2669365086838],
        "C": [0.04531260830266, 0.1344163212041, 0.3146269500118, 0.5800202855995, 0.6518018376302]})


def one_way_chain() -> Form:
    """A → B → C, k = 1 and 0.4 1/s: B = k1/(k2 - k1) [exp(-k1 t) - exp(-k2 t)]. K = exp(96) each."""
    mechanism = _chain({"A": 0.0, "B": 2 * FAR, "C": 4 * FAR}, 1.0, 0.4)
    return Form(mechanism, {"A": 1.0}, [1.52715121979, 2.0], {
        "B": [0.542883523319, 0.523322801468], "C": [1 - 0.542883523319 - np.exp(-1.52715121979), 0.341341915296]})


def cycle() -> Form:
    """A ⇌ B ⇌ C ⇌ A in detailed balance: only k12 = 1, k23 = 0.8 and k31 = 0.15 1/s are stated; the potentials (1:2:4 at
    equilibrium) make k21 = 0.5, k32 = 0.4, k13 = 0.6. Eigenvalues 0, -1.26606100623285, -2.18393899376715 1/s."""
    mechanism = building_blocks({s: {"Q": 1} for s in "ABC"}, {"A": 0.0, "B": _log(2), "C": _log(4)}, T,
                                [_mass_action(*step) for step in (("A ⇌ B", 1.0), ("B ⇌ C", 0.8), ("C ⇌ A", 0.15))])
    return Form(mechanism, {"A": 1.0}, [0.2, 0.5, 1.0, 2.0, 5.0], {
        "A": [0.7352383388331, 0.4883760299519, 0.2895416590499, 0.1735190859903, 0.1433951111665],
        "B": [0.1544473086978, 0.2698992484731, 0.3229165856171, 0.3094621563132, 0.2864315050636],
        "C": [0.1103143524691, 0.2417247215750, 0.3875417553330, 0.5170187576965, 0.5701733837699]})


FORMS = [reversible_first_order, reversible_second_order, association, reversible_chain, one_way_chain, cycle]


@pytest.mark.parametrize("method", ALLOWED)
@pytest.mark.parametrize("form", FORMS, ids=lambda form: form.__name__)
def test_constant_volume_and_temperature(form, method):
    form = form()
    start = {"temperature": T, "concentration": {s: f"{c} mol/L" for s, c in form.start.items()}}
    run, at = course(form.mechanism, {"heat": "isothermal", "volume": "1 L"}, start, form.times, method)
    for species, expected in form.expected.items():
        found = run.amount[at, run.species.index(species)]  # [mol] in 1 L
        assert found == pytest.approx(expected, rel=0, abs=ALLOWED[method]), species


def test_the_milestone_at_the_intermediates_peak():
    """A → B → C: B is largest at ln(k1/k2)/(k1 - k2) = 1.52715121979 s."""
    form = one_way_chain()
    run, _ = course(form.mechanism, {"heat": "isothermal"}, {"temperature": T, "concentration": {"A": "1 mol/L"}}, [20.0],
                    "Radau")
    assert run.milestones["peak of B"] == pytest.approx(1.52715121979, rel=1e-10)
    assert run.milestones["peak mole fraction of B"] == pytest.approx(0.542883523319, rel=1e-10)
    assert run.milestones["half-conversion of A"] == pytest.approx(np.log(2), rel=1e-10)


TIME_OF = {  # conversion x: k C0 t at constant volume, x/(1 - x), and at constant pressure, 2x/(1 - x) + ln(1 - x)
    0.1: (1 / 9, 0.1168617065644), 0.3: (3 / 7, 0.50046791320412), 0.5: (1.0, 1.3068528194401),
    0.8: (4.0, 6.3905620875659), 0.9: (9.0, 15.697414907006), 0.99: (99.0, 193.39482981401)}


@pytest.mark.parametrize("method", ALLOWED)
@pytest.mark.parametrize("column, holds", [(0, "volume"), (1, "pressure")])
@pytest.mark.parametrize("equation, share", [("2 A ⇌ A + 2 B", 1.0), ("2 A ⇌ 4 B", 0.5)])
def test_second_order_with_expansion(equation, share, column, holds, method):
    """A → 2 B at a rate k[A]², pure A: the volume doubles where the pressure is held (e.g. O. Levenspiel, Chemical
    Reaction Engineering, 3rd ed., 1999, ch. 3). Written in two ways: `share` of k, as one act consumes one or two A."""
    C0 = 1 * bar / (R * T)  # [mol/m3]
    mechanism = building_blocks({"A": {"Q": 2}, "B": {"Q": 1}}, {"A": 0.0, "B": FAR}, T,
                                [_mass_action(equation, share / (C0 * 1e-3))])
    times = [values[column] for values in TIME_OF.values()]
    run, at = course(mechanism, {"heat": "isothermal", "holds": holds}, {"temperature": T, "pressure": "1 bar",
                     "mole_ratio": {"A": 1.0}}, times, method)
    conversion = 1 - run.amount[at, 0] / run.amount[0, 0]
    assert conversion == pytest.approx(list(TIME_OF), rel=0, abs=ALLOWED[method])
    if holds == "pressure":
        assert run.volume[at] / run.volume[0] == pytest.approx(1 + np.array(list(TIME_OF)), rel=2 * ALLOWED[method])


DISSOCIATION = {  # kf t: degree of dissociation from 1 atm of N2O4 at 298.15 K
    "pressure": {0.01005952234605: 0.01, 0.052528612648571: 0.05, 0.11733293975545: 0.10, 0.22337466228642: 0.15,
                 0.40429122806383: 0.18},
    "volume": {0.01: 0.0099411645076636, 0.05: 0.047716357319658, 0.1: 0.08770317583282, 0.2: 0.13860303400007,
               0.5: 0.1722708142061, 1.0: 0.17392252797965}}


@pytest.mark.parametrize("method", ALLOWED)
@pytest.mark.parametrize("holds", DISSOCIATION)
def test_reversible_dissociation(holds, method):
    """A ⇌ 2 B as N2O4 ⇌ 2 NO2: K = 0.148428 bar at 298.15 K (NIST-JANAF 1998, tables N-032 and N-007).

    Constant pressure: kf t = α_e artanh(α/α_e) - (α_e²/2) ln(1 - α²/α_e²), α_e = 1/sqrt(1 + 4p/K)."""
    room, expected = 298.15, DISSOCIATION[holds]
    mechanism = building_blocks({"A": {"Q": 2}, "B": {"Q": 1}}, {"A": R * room * np.log(0.148428), "B": 0.0}, room,
                                [_mass_action("A ⇌ 2 B", 1.0)])
    start = {"temperature": room, "pressure": "1 atm", "mole_ratio": {"A": 1.0}}
    run, at = course(mechanism, {"heat": "isothermal", "holds": holds}, start, list(expected), method)
    assert 1 - run.amount[at, 0] / run.amount[0, 0] == pytest.approx(list(expected.values()), rel=0, abs=ALLOWED[method])


A, THETA, T0, RISE = 1e10, 12000.0, 500.0, 300.0  # [1/s], [K]: k = A exp(-THETA/T), adiabatic from T0 to T0 + RISE
REACHED = {  # time [s]: temperature [K]
    0.039597461442977: 505.0, 0.071425335104101: 510.0, 0.11799770801652: 520.0, 0.18428709623491: 550.0,
    0.2132976060425: 600.0, 0.22003663474917: 650.0, 0.22224752315864: 700.0, 0.22331271589508: 750.0,
    0.2241899759042: 790.0, 0.22500126261292: 799.0}


@pytest.fixture(scope="module", params=[(holds, method) for holds in ("volume", "pressure") for method in METHODS],
                ids=lambda param: "-".join(param))
def explosion(request):
    """Adiabatic A → B, ln K above 90; the heat of reaction warms by RISE what the vessel holds, cv or cp.

    Gives trajectory, places of the times, and the relative error in time that is allowed: an explosion makes its
    first errors grow, here e^8-fold in temperature, so ten times what is allowed elsewhere."""
    cp, (holds, method) = 100.0, request.param
    heat = -RISE * (cp if holds == "pressure" else cp - R)
    mechanism = building_blocks(
        {"A": {"Q": 1}, "B": {"Q": 1}}, {"A": 0.0, "B": 2 * FAR}, T0, cp=cp, enthalpy={"B": heat},
        reactions=[{"equation": "A ⇌ B", "forward": {"law": "Arrhenius", "A": A, "Ea": THETA}}])
    run, at = course(mechanism, {"heat": "adiabatic", "holds": holds}, {"temperature": T0, "pressure": "1 bar",
                     "mole_ratio": {"A": 1.0}}, list(REACHED), method)
    return run, at, 10 * ALLOWED[method]


def test_adiabatic_first_order(explosion):
    """t(T) = (1/A) {exp(zf) [Ei(z0 - zf) - Ei(z - zf)] - [Ei(z0) - Ei(z)]}, z = THETA/T, zf = THETA/(T0 + RISE).

    Compared is the time at which each temperature is reached."""
    run, at, allowed = explosion
    expected = np.array(list(REACHED.values()))
    slope = A * np.exp(-THETA / expected) * (T0 + RISE - expected)  # [K/s]
    late = (expected - run.temperature[at]) / slope
    assert late == pytest.approx(0.0, abs=allowed * 0.22)


def test_steepest_rise_of_an_adiabatic_run(explosion):
    """The rate is largest at 752.777206454 K, where T² = THETA (T0 + RISE - T)."""
    run, _, allowed = explosion
    assert run.milestones["steepest temperature rise"] == pytest.approx(0.2233620113928, rel=allowed)
