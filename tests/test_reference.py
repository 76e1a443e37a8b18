"""The reference itself, held against definitions, limits, conservation, hand sums."""

import tomllib

import numpy as np
import pytest

import invented
from reference import R, Reference

DOCUMENTS = {"closed": invented.building_blocks(), "as published": invented.building_blocks_as_published(),
             "in molecules": invented.building_blocks_in_molecules()}
TEMPERATURES = [250.0, 640.0, 1000.5, 1730.0, 3900.0]  # also outside the fits' ranges
VESSELS = [("volume", None, 0.0), ("volume", None, 900.0), ("pressure", 2e5, 0.0), ("pressure", 2e5, 40.0)]
GAS_CONSTANT = 8.31446261815324
STEP = 1e-40


@pytest.fixture(scope="module")
def model() -> Reference:
    return Reference(DOCUMENTS["closed"])


def concentrations(n: int, seed: int) -> np.ndarray:
    """Random concentrations over eight decades [mol/m3]."""
    return 10 ** np.random.default_rng(seed).uniform(-6, 2, n)


def compositions() -> tuple[list[str], np.ndarray]:
    """Elements, and the atoms (elements, species)."""
    document = DOCUMENTS["closed"]
    elements = list(document["elements"])
    return elements, np.array([[one["composition"].get(e, 0) for one in document["species"].values()]
                               for e in elements], dtype=float)


def stoichiometry(model: Reference) -> np.ndarray:
    """Net numbers (reactions, species)."""
    return np.array([[r.products.get(name, 0) - r.reactants.get(name, 0) for name in model.names]
                     for r in model.reactions], dtype=float)


def two_species(precision: type = np.float64, **law: object) -> Reference:
    """A ⇌ 2 B of invented species with constant heat capacities; SI, p° of A 1 bar, of B 2 bar."""
    common = {"form": "constant heat capacity", "at": 500.0}
    species = {"A": {"potential": common | {"H": -1e4, "S": 200.0, "cp": 40.0}},
               "B": {"potential": common | {"H": 1e4, "S": 130.0, "cp": 30.0}, "standard_pressure": "2 bar"}}
    entry = {"equation": "A ⇌ 2 B", "forward": law or {"law": "Arrhenius", "A": 3.0}}
    return Reference({"mechanism": {}, "species": species, "reaction": [entry]}, precision)


# ---- species


@pytest.mark.parametrize("joins", ["closed", "as published"])
@pytest.mark.parametrize("T", TEMPERATURES)
def test_h_s_and_g_are_those_of_one_potential(joins: str, T: float) -> None:
    model, z = Reference(DOCUMENTS[joins]), T + 1j * STEP
    cp, h, s, g = model.cp_R(T), model.h_RT(T), model.s_R(T), model.g_RT(T)
    np.testing.assert_allclose((model.h_RT(z) * z).imag / STEP, cp, rtol=1e-13)
    np.testing.assert_allclose(model.s_R(z).imag / STEP, cp / T, rtol=1e-13)
    np.testing.assert_allclose(model.g_RT(z).imag / STEP, -h / T, rtol=1e-12)  # Gibbs and Helmholtz
    np.testing.assert_allclose(g, h - s, rtol=1e-13)


def joins_of(document: dict) -> list[tuple[int, float]]:
    """The inner boundaries: place of the species, temperature."""
    return [(i, T) for i, one in enumerate(document["species"].values())
            for T in one["potential"].get("T", [])[1:-1]]


def jump(model: Reference, i: int, T: float) -> tuple[float, float]:
    """h/RT and s/R of species i just above T less those just below."""
    below, above = T * (1 - 1e-12), T * (1 + 1e-12)
    h = model.h_RT(above) * above - model.h_RT(below) * below
    return h[i] / T, (model.s_R(above) - model.s_R(below))[i]


def test_closed_joins_leave_no_jump_and_move_the_lowest_range_not_at_all(model: Reference) -> None:
    open_model = Reference(DOCUMENTS["as published"])
    for i, T in joins_of(DOCUMENTS["closed"]):
        assert np.abs(jump(model, i, T)).max() < 1e-10
        assert np.abs(jump(open_model, i, T)).min() > 0.01
    np.testing.assert_array_equal(model.g_RT(700.0), open_model.g_RT(700.0))


def test_shifts_of_later_ranges_add_up(model: Reference) -> None:
    open_model, i = Reference(DOCUMENTS["as published"]), model.names.index("QX2")
    jumps = [jump(open_model, i, T) for T in (800.0, 1600.0)]
    moved = (open_model.h_RT(2500.0) - model.h_RT(2500.0))[i] * 2500.0
    assert moved == pytest.approx(jumps[0][0] * 800.0 + jumps[1][0] * 1600.0, rel=1e-8)
    moved = (open_model.s_R(2500.0) - model.s_R(2500.0))[i]
    assert moved == pytest.approx(jumps[0][1] + jumps[1][1], rel=1e-8)


def test_outside_its_range_a_fit_keeps_the_heat_capacity_of_its_end(model: Reference) -> None:
    i = model.names.index("QX")  # 300 to 3000 K
    assert model.cp_R(3400.0)[i] == pytest.approx(model.cp_R(3000.0)[i], rel=1e-14)
    assert model.cp_R(210.0)[i] == pytest.approx(model.cp_R(300.0)[i], rel=1e-14)
    rise = model.h_RT(3400.0)[i] * 3400.0 - model.h_RT(3000.0)[i] * 3000.0
    assert rise == pytest.approx(400.0 * model.cp_R(3000.0)[i], rel=1e-12)
    assert model.s_R(210.0)[i] - model.s_R(300.0)[i] == pytest.approx(
        model.cp_R(300.0)[i] * np.log(210.0 / 300.0), rel=1e-12)


def test_constant_heat_capacity_by_hand(model: Reference) -> None:
    """X: H = 200 kJ/mol, S = 115, cp = 20.9 J/(mol K) at 298.15 K; Q: 230 kJ/mol, S = 145."""
    X, Q = model.names.index("X"), model.names.index("Q")
    assert model.h_RT(298.15)[X] * GAS_CONSTANT * 298.15 == pytest.approx(200e3, rel=1e-14)
    assert model.h_RT(398.15)[X] * GAS_CONSTANT * 398.15 == pytest.approx(202090.0, rel=1e-14)
    assert model.s_R(298.15)[X] * GAS_CONSTANT == pytest.approx(115.0, rel=1e-14)
    assert model.g_RT(298.15)[Q] * GAS_CONSTANT * 298.15 == pytest.approx(230e3 - 298.15 * 145.0, rel=1e-13)


# ---- equilibrium


def test_equilibrium_constant_by_hand() -> None:
    """A ⇌ 2 B at 500 K: ΔH = 30 kJ/mol, ΔS = 60 J/(mol K), ΔG = 0: K = 1, K_c = (2 bar/RT)²/(1 bar/RT)."""
    assert two_species().K_c(500.0)[0] == pytest.approx(4e5 / (GAS_CONSTANT * 500.0), rel=1e-12)


@pytest.mark.parametrize("key", DOCUMENTS)
@pytest.mark.parametrize("T", TEMPERATURES)
def test_no_net_rate_at_equilibrium(key: str, T: float) -> None:
    """μ_i = Σ a_ik λ_k makes every affinity zero, whatever the λ."""
    model, (elements, atoms) = Reference(DOCUMENTS[key]), compositions()
    potentials = np.array([3.0 * model.g_RT(T)[model.names.index(e)] / 4 for e in elements])
    p = np.where(np.isin(model.names, ["Q2", "QX"]), 101325.0, 1e5)  # the standard pressures
    c = p / (GAS_CONSTANT * T) * np.exp(potentials @ atoms - model.g_RT(T))
    forward, reverse = model.net_rates(c, T)
    assert (forward > 0).all()
    np.testing.assert_allclose(reverse, forward, rtol=1e-11)


# ---- conservation


@pytest.mark.parametrize("holds, pressure, vessel", VESSELS)
@pytest.mark.parametrize("T", TEMPERATURES)
def test_elements_and_energy_are_conserved(model: Reference, holds: str, pressure: float, vessel: float,
                                           T: float) -> None:
    _, atoms = compositions()
    y = np.append(concentrations(model.n, 4), T)
    dy, scale = model.derivative(y, holds, "adiabatic", pressure, vessel)
    assert (np.abs(atoms @ dy[:-1]) <= 1e-13 * atoms @ scale[:-1]).all()
    minus = 1.0 if holds == "volume" else 0.0  # u = h - RT, cv = cp - R
    energy = GAS_CONSTANT * T * (model.h_RT(T) - minus)
    capacity = GAS_CONSTANT * (model.cp_R(T) - minus) @ y[:-1] + vessel
    assert abs(energy @ dy[:-1] + capacity * dy[-1]) <= 1e-13 * np.abs(energy) @ scale[:-1]
    assert abs(dy[-1]) > 0


def test_isothermal_vessels_keep_their_temperature(model: Reference) -> None:
    y = np.append(concentrations(model.n, 5), 1200.0)
    dy, scale = model.derivative(y, "volume", "isothermal")
    assert dy[-1] == scale[-1] == 0
    np.testing.assert_array_equal(dy[:-1], model.derivative(y, "volume", "adiabatic")[0][:-1])


def test_amounts_at_constant_pressure_change_as_concentrations_times_volume(model: Reference) -> None:
    n, T, p = concentrations(model.n, 6), 900.0, 3e5
    volume = n.sum() * GAS_CONSTANT * T / p
    there = model.derivative(np.append(n, T), "pressure", "isothermal", p)
    here = model.derivative(np.append(n / volume, T), "volume", "isothermal")
    np.testing.assert_allclose(there[0], here[0] * volume, rtol=1e-9)
    np.testing.assert_allclose(there[1], here[1] * volume, rtol=1e-13)


def test_scale_bounds_the_derivative_and_counts_every_contribution(model: Reference) -> None:
    c, T = concentrations(model.n, 7), 1300.0
    dy, scale = model.derivative(np.append(c, T), "volume", "adiabatic")
    assert (np.abs(dy) <= scale * (1 + 1e-14)).all()
    forward, reverse = model.net_rates(c, T)
    nu = stoichiometry(model)
    np.testing.assert_allclose(dy[:-1], nu.T @ (forward - reverse), atol=1e-14 * scale.max())
    j = [r.equation for r in model.reactions].index("2 QX ⇌ Q2 + X2")  # a term of A = 9e9, one of -2e9
    factor = (9 + 2 * np.exp(-4e3 / (GAS_CONSTANT * T))) / (9 - 2 * np.exp(-4e3 / (GAS_CONSTANT * T)))
    weights = np.where(np.arange(len(nu)) == j, factor, 1.0)
    np.testing.assert_allclose(scale[:-1], np.abs(nu).T @ (weights * (forward + reverse)), rtol=1e-12)
    u, capacity = GAS_CONSTANT * T * (model.h_RT(T) - 1), GAS_CONSTANT * (model.cp_R(T) - 1) @ c
    assert scale[-1] == pytest.approx(np.abs(u) @ scale[:-1] / capacity, rel=1e-13)


# ---- derivatives and precision


@pytest.mark.parametrize("heat", ["adiabatic", "isothermal"])
@pytest.mark.parametrize("holds, pressure, vessel", VESSELS)
def test_jacobian_against_differences(holds: str, pressure: float, vessel: float, heat: str) -> None:
    model = Reference(DOCUMENTS["closed"], np.longdouble)
    y = np.append(concentrations(model.n, 9), 1250.5).astype(np.longdouble)
    J = model.jacobian(y, holds, heat, pressure, vessel)
    for k in range(model.n + 1):
        h = y[k] * np.longdouble(1e-4) * (np.arange(model.n + 1) == k)
        f = [model.derivative(y + m * h, holds, heat, pressure, vessel)[0] for m in (-2, -1, 1, 2)]
        difference = (f[0] - 8 * f[1] + 8 * f[2] - f[3]) / (12 * h[k])
        scale = model.derivative(y, holds, heat, pressure, vessel)[1] / y[k]
        assert (np.abs(difference - J[:, k]) <= 1e-11 * scale).all()


@pytest.mark.parametrize("present", [["X", "Q2"], ["Z"], ["QX"]])
def test_jacobian_where_species_are_absent(present: list[str]) -> None:
    """Against one-sided differences of third order, which start at 0."""
    model = Reference(DOCUMENTS["closed"], np.longdouble)
    y = np.append(np.isin(model.names, present) * 3.0, 1100.0).astype(np.longdouble)
    J, h = model.jacobian(y, "volume", "isothermal"), np.longdouble(1e-7)
    for k in np.flatnonzero(y[:-1] == 0):
        step = h * (np.arange(model.n + 1) == k)
        f = [model.derivative(y + m * step, "volume", "isothermal")[0] for m in range(4)]
        difference = (18 * f[1] - 11 * f[0] - 9 * f[2] + 2 * f[3]) / (6 * h)
        np.testing.assert_allclose(difference, J[:, k], rtol=0, atol=1e-9 * np.abs(J[:, k]).max() + 1e-15)


def test_wide_and_double_precision_agree_to_double_round_off(model: Reference) -> None:
    wide = Reference(DOCUMENTS["closed"], np.longdouble)
    for T in TEMPERATURES:
        y = np.append(concentrations(model.n, 10), T)
        dy, scale = wide.derivative(y, "volume", "adiabatic")
        assert dy.dtype == scale.dtype == np.longdouble
        narrow = model.derivative(y, "volume", "adiabatic")[0]
        assert narrow.dtype == np.float64
        assert (np.abs(narrow - dy) <= 1e-12 * scale).all()


@pytest.mark.skipif(np.finfo(np.longdouble).eps == np.finfo(float).eps, reason="no wider real type here")
def test_wide_precision_is_kept() -> None:
    """Σ u dc + C dT closes far below double round-off, and K_c = 4 bar/RT (above) holds far below it."""
    model = Reference(DOCUMENTS["closed"], np.longdouble)
    T = np.longdouble("1250.1")
    y = np.append(concentrations(model.n, 11).astype(np.longdouble), T)
    dy, scale = model.derivative(y, "volume", "adiabatic")
    energy = R * T * (model.h_RT(T) - 1)
    residual = energy @ dy[:-1] + R * (model.cp_R(T) - 1) @ y[:-1] * dy[-1]
    assert abs(residual) <= 1e-17 * np.abs(energy) @ scale[:-1]
    assert abs(two_species(np.longdouble).K_c(500.0)[0] * R * 500 / 400000 - 1) < 1e-17


# ---- what is read


def test_units_do_not_matter() -> None:
    one, other = Reference(DOCUMENTS["closed"]), Reference(DOCUMENTS["in molecules"])
    for T in TEMPERATURES:
        y = np.append(concentrations(one.n, 8), T)
        dy, scale = one.derivative(y, "volume", "adiabatic")
        assert (np.abs(other.derivative(y, "volume", "adiabatic")[0] - dy) <= 1e-12 * scale).all()


def test_invented_reactions_balance_and_their_rate_constants_are_positive(model: Reference) -> None:
    _, atoms = compositions()
    np.testing.assert_array_equal(atoms @ stoichiometry(model).T, 0)
    for j in range(len(model.reactions)):
        assert all(model.rate_constant(j, T, 10.0) > 0 for T in np.linspace(200, 4000, 39))


def test_invented_text_reads_back() -> None:
    document = DOCUMENTS["closed"]
    assert tomllib.loads(invented.toml_text(document)) == document
