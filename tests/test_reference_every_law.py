"""The reference itself on the other forms of species data, and on a mechanism of every law of ideal gases."""

import numpy as np
import pytest

import invented_laws
from reference import Reference
from reference_laws import PressureTable
from test_equations import CLOSURES, PRESSURE, states
from test_reference import GAS_CONSTANT, STEP, concentrations

DOCUMENT = invented_laws.every_law()
TEMPERATURES = [250.0, 298.15, 640.0, 1000.5, 1730.0, 2600.0, 3900.0]
INSIDE = [320.0, 710.0, 1450.0, 2880.0]  # where every Chebyshev series may be asked


@pytest.fixture(scope="module")
def model() -> Reference:
    return Reference(DOCUMENT)


# ---- species


def one(form: str, T: list[float], a: list[list[float]]) -> Reference:
    return Reference({"mechanism": {}, "species": {"A": {"potential": {"form": form, "T": T, "a": a}}}})


def values(model: Reference, T: float) -> list[float]:
    """cp, s [J/(mol K)] and h [kJ/mol] of the only species."""
    scales = GAS_CONSTANT, GAS_CONSTANT, GAS_CONSTANT * T / 1000
    return [float(f(T)[0] * x) for f, x in zip((model.cp_R, model.s_R, model.h_RT), scales, strict=True)]


NITROGEN = [[2.210371497e4, -3.818461820e2, 6.082738360, -8.530914410e-3, 1.384646189e-5, -9.625793620e-9,
             2.519705809e-12, 7.108460860e2, -1.076003744e1],
            [5.877124060e5, -2.239249073e3, 6.066949220, -6.139685500e-4, 1.491806679e-7, -1.923105485e-11,
             1.061954386e-15, 1.283210415e4, -1.586640027e1]]


@pytest.mark.parametrize("T, cp, s, h", [(298.15, 29.124, 191.609, 0.0), (500.0, 29.580, 206.739, 5.911),
                                         (1000.0, 32.697, 228.170, 21.463), (2000.0, 35.971, 252.074, 56.137),
                                         (3000.0, 37.030, 266.891, 92.715)])
def test_nine_coefficients_give_the_tabulated_nitrogen(T: float, cp: float, s: float, h: float) -> None:
    """Coefficients: NASA/TP-2002-211556 (2002). Table: M.W. Chase, NIST-JANAF, J. Phys. Chem. Ref. Data Monogr. 9 (1998)."""
    found = values(one("NASA 9-coefficient", [200.0, 1000.0, 6000.0], NITROGEN), T)
    assert found == pytest.approx([cp, s, h], rel=5e-4, abs=0.003)


WATER = [30.09200, 6.832514, 6.793435, -2.534480, 0.082139, -250.8810, 223.3967, -241.8264]


@pytest.mark.parametrize("T, cp, s, h", [(500.0, 35.226, 206.534, 6.925), (1000.0, 41.268, 232.738, 26.000),
                                         (1500.0, 47.090, 250.620, 48.151)])
def test_shomate_gives_the_tabulated_water(T: float, cp: float, s: float, h: float) -> None:
    """Coefficients: NIST Chemistry WebBook. Table: as above; h is counted from -241.826 kJ/mol at 298.15 K."""
    assert values(one("Shomate", [500.0, 1700.0], [WATER]), T) == pytest.approx([cp, s, h - 241.826], rel=1e-3)


@pytest.mark.parametrize("joins", ["closed", "as published"])
@pytest.mark.parametrize("T", TEMPERATURES)
def test_h_s_and_g_are_those_of_one_potential(joins: str, T: float) -> None:
    model, z = Reference(DOCUMENT | {"mechanism": DOCUMENT["mechanism"] | {"joins": joins}}), T + 1j * STEP
    cp = model.cp_R(T)
    assert (cp > 2).all()
    np.testing.assert_allclose((model.h_RT(z) * z).imag / STEP, cp, rtol=1e-12)
    np.testing.assert_allclose(model.s_R(z).imag / STEP, cp / T, rtol=1e-12)
    np.testing.assert_allclose(model.g_RT(z).imag / STEP, -model.h_RT(T) / T, rtol=1e-12, atol=1e-14)


def test_enthalpies_and_entropies_of_the_invented_species_at_298_K(model: Reference) -> None:
    """What their constants of integration were made for [kJ/mol, J/(mol K)], to the digits kept there."""
    made = {"X": (200, 115), "Q": (230, 145), "X2": (0, 131), "Q2": (0, 205), "QX2": (-242, 190), "Q2X2": (-136, 230)}
    for name, (h, s) in made.items():
        i = model.names.index(name)
        assert model.h_RT(298.15)[i] * GAS_CONSTANT * 0.29815 == pytest.approx(h, abs=0.06)
        assert model.s_R(298.15)[i] * GAS_CONSTANT == pytest.approx(s, abs=0.03)


@pytest.mark.parametrize("name, T", [("X", 1000.0), ("X2", 1000.0), ("Q2", 900.0), ("QX2", 800.0), ("QX2", 1600.0),
                                     ("Q2X2", 700.0), ("Q2X2", 1500.0), ("Q", 298.15), ("Q", 2500.0), ("X", 200.0)])
def test_joins_and_ends_are_closed(model: Reference, name: str, T: float) -> None:
    i, (low, high) = model.names.index(name), (T * (1 - 1e-13), T * (1 + 1e-13))
    assert abs(model.g_RT(high) - model.g_RT(low))[i] < 1e-10
    assert abs(model.s_R(high) - model.s_R(low))[i] < 1e-11


# ---- the whole


def test_reactions_balance_and_every_law_is_there(model: Reference) -> None:
    atoms = np.array([[DOCUMENT["species"][n]["composition"].get(e, 0) for n in model.names] for e in "QXZ"])
    for r in model.reactions:
        net = [r.products.get(n, 0) - r.reactants.get(n, 0) for n in model.names]
        assert not (atoms @ net).any()
    laws = {term["law"] for r in model.reactions for term in r.terms}
    assert laws == {"Arrhenius", "Lindemann", "Troe", "SRI", "activated", "pressure table", "Chebyshev"}


@pytest.mark.parametrize("T", INSIDE)
@pytest.mark.parametrize("p", [1e-3, 3e3, 1e5, 4e6])
def test_rate_constants_are_positive(model: Reference, T: float, p: float) -> None:
    assert all(model.rate_constant(j, T, p / (GAS_CONSTANT * T), p) > 0 for j in range(len(model.reactions)))


@pytest.mark.parametrize("T", INSIDE)
def test_no_net_rate_at_equilibrium(model: Reference, T: float) -> None:
    """μ_i = Σ a_ik λ_k makes every affinity zero: the λ of X2, QX2 and Z at a tenth of their p°."""
    g = model.g_RT(T)
    Z, X2, QX2 = (g[model.names.index(n)] - np.log(10) for n in ("Z", "X2", "QX2"))
    atoms = np.array([[DOCUMENT["species"][n]["composition"].get(e, 0) for e in "XQZ"] for n in model.names])
    p = np.where(np.isin(model.names, ["Q2", "QX"]), 101325.0, 1e5) * np.exp(atoms @ [X2 / 2, QX2 - X2, Z] - g)
    forward, reverse = model.net_rates(p / (GAS_CONSTANT * T), T)
    assert (forward > 0).all()
    np.testing.assert_allclose(reverse, forward, rtol=1e-11)


@pytest.mark.parametrize("holds, heat", CLOSURES)
def test_units_and_precision_do_not_matter(model: Reference, holds: str, heat: str) -> None:
    wide, other = Reference(DOCUMENT, np.longdouble), Reference(invented_laws.every_law_in_molecules())
    for y in states(model.n, holds, 10, seed=4):
        dy, scale = wide.derivative(y, holds, heat, PRESSURE, 7.0)
        for model_ in (model, other):
            assert (np.abs(model_.derivative(y, holds, heat, PRESSURE, 7.0)[0] - dy) <= 1e-12 * scale).all()


@pytest.mark.parametrize("holds, heat", CLOSURES)
@pytest.mark.parametrize("T", INSIDE)
def test_jacobian_against_differences(holds: str, heat: str, T: float) -> None:
    model = Reference(DOCUMENT, np.longdouble)
    y = np.append(concentrations(model.n, 9), T).astype(np.longdouble)
    J = model.jacobian(y, holds, heat, PRESSURE, 7.0)
    for k in range(model.n + 1):
        h = y[k] * np.longdouble(1e-5) * (np.arange(model.n + 1) == k)
        f = [model.derivative(y + m * h, holds, heat, PRESSURE, 7.0)[0] for m in (-2, -1, 1, 2)]
        difference = (f[0] - 8 * f[1] + 8 * f[2] - f[3]) / (12 * h[k])
        scale = model.derivative(y, holds, heat, PRESSURE, 7.0)[1] / y[k]
        assert (np.abs(difference - J[:, k]) <= 1e-9 * scale).all()


def test_the_random_states_meet_tables_inside_and_on_either_side(model: Reference) -> None:
    """Else the comparison of the compiled equations would leave branches out; the same seeds as there."""
    met = set()
    for holds in ("volume", "pressure"):
        for y in states(model.n, holds, 20, seed=11):
            p = PRESSURE if holds == "pressure" else y[:-1].sum() * GAS_CONSTANT * y[-1]
            for _, law in model._pressure_laws:
                met.add((holds, type(law), "p", np.sign((p > law.p).sum() - 0.5), p > law.p[-1]))
                if not isinstance(law, PressureTable):
                    met.add((holds, type(law), "T", np.sign((y[-1] > law.T).sum() - 0.5), y[-1] > law.T[-1]))
    for holds in ("volume", "pressure"):
        assert len([m for m in met if m[:3] == (holds, PressureTable, "p")]) == 3
        assert len([m for m in met if m[0] == holds and m[2] == "T"]) == 3
    assert len([m for m in met if m[0] == "volume" and m[1] is not PressureTable and m[2] == "p"]) == 3
