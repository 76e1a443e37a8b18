"""The charge of a vessel by hand: ratios, masses, amounts, concentrations, equivalence ratio."""

from typing import Any

import numpy as np
import pytest

from bothways import Mechanism, build_case, read_mechanism
from bothways.case import Case
from bothways.charge import oxygen_atoms_needed

R = 8.31446261815324  # J/(mol K)


@pytest.fixture(scope="module")
def gas() -> Mechanism:
    return read_mechanism("methane")


def charged(mechanism: Mechanism, volume: str | None = "2 L", holds: str = "volume", **start: Any) -> Case:
    vessel = {"holds": holds} | ({"volume": volume} if volume else {})
    return build_case({"vessel": vessel, "start": {"temperature": "1000 K"} | start, "until": {"time": "1 s"}},
                      mechanism=mechanism)


def fractions(case: Case) -> dict[str, float]:
    n = case.charge.amount
    return {case.mechanism.names[k]: n[k] / n.sum() for k in np.flatnonzero(n)}


def normalised(parts: dict[str, float]) -> dict[str, float]:
    return {name: x / sum(parts.values()) for name, x in parts.items()}


# ---- equivalence ratio: fuel to oxygen as for complete combustion to CO2, H2O, N2, times the ratio

AIR = {"O2": 1, "N2": 3.76}
EQUIVALENCE = [
    # CH4 + 2 O2: at 0.8 for each CH4 2/0.8 = 2.5 O2 and 9.4 N2
    ({"CH4": 1}, AIR, 0.8, {"CH4": 1, "O2": 2.5, "N2": 9.4}),
    ({"H2": 3}, AIR, 1.0, {"H2": 2, "O2": 1, "N2": 3.76}),  # how much is stated of the fuel is no matter
    ({"CO": 1}, {"O2": 5}, 2.0, {"CO": 4, "O2": 1}),
    ({"C3H8": 1}, AIR, 1.25, {"C3H8": 1, "O2": 4, "N2": 15.04}),
    ({"CH3OH": 1}, {"O2": 1}, 0.5, {"CH3OH": 1, "O2": 3}),  # 1.5 O2
    ({"NH3": 1}, {"O2": 1}, 1.0, {"NH3": 4, "O2": 3}),  # to N2
    ({"CH4": 1, "H2": 1}, {"O2": 1}, 1.0, {"CH4": 1, "H2": 1, "O2": 2.5}),
    ({"CH4": 1, "N2": 2}, {"O2": 1}, 1.0, {"CH4": 1, "N2": 2, "O2": 2}),  # a diluted fuel
    ({"CH4": 1}, {"N2O": 1}, 1.0, {"CH4": 1, "N2O": 4}),
    ({"CH4": 1}, {"O2": 1, "H2O": 1, "AR": 4}, 2.0, {"CH4": 1, "O2": 1, "H2O": 1, "AR": 4}),
]


@pytest.mark.parametrize("fuel, oxidiser, ratio, expected", EQUIVALENCE)
def test_equivalence_ratio(gas: Mechanism, fuel: dict, oxidiser: dict, ratio: float, expected: dict) -> None:
    case = charged(gas, pressure="1 atm", fuel=fuel, oxidiser=oxidiser, equivalence_ratio=ratio)
    assert fractions(case) == pytest.approx(normalised(expected), rel=1e-14)
    assert case.charge.amount.sum() == pytest.approx(101325 * 2e-3 / (R * 1000), rel=1e-14)


def test_heptane() -> None:
    """C7H16 + 11 O2."""
    case = charged(read_mechanism("n-alkanes"), pressure="1 atm", fuel={"NC7H16": 1}, oxidiser=AIR, equivalence_ratio=1)
    assert fractions(case) == pytest.approx(normalised({"NC7H16": 1, "O2": 11, "N2": 41.36}), rel=1e-14)


@pytest.mark.parametrize("composition, atoms", [
    ({"C": 1, "H": 4}, 4), ({"H": 2}, 1), ({"D": 2}, 1), ({"O": 2}, -2), ({"H": 2, "S": 1}, 3), ({"C": 1, "O": 2}, 0),
    ({"N": 2}, 0), ({"N": 1, "H": 3}, 1.5)])
def test_oxygen_needed(composition: dict, atoms: float) -> None:
    """To CO2, H2O, N2 and SO2."""
    assert oxygen_atoms_needed(composition) == atoms


# ---- the other ways


def test_mole_ratio(gas: Mechanism) -> None:
    case = charged(gas, pressure="2 bar", mole_ratio={"H2": 2, "O2": 1, "N2": 3.76, "AR": 0})
    assert fractions(case) == pytest.approx(normalised({"H2": 2, "O2": 1, "N2": 3.76}), rel=1e-15)
    assert case.charge.amount.sum() == pytest.approx(2e5 * 2e-3 / (R * 1000), rel=1e-15)
    assert (case.charge.pressure, case.charge.temperature, case.charge.volume) == (2e5, 1000.0, 2e-3)


def test_mass_ratio(gas: Mechanism) -> None:
    """30 g to 70 g: moles as 30/34.014 to 70/18.015."""
    case = charged(gas, pressure="1 bar", mass_ratio={"H2O2": 30, "H2O": 70})
    assert fractions(case) == pytest.approx(normalised({"H2O2": 30 / 34.014, "H2O": 70 / 18.015}), rel=1e-14)
    mass = case.charge.amount * gas.molar_mass
    assert mass[gas.index("H2O2")] / mass.sum() == pytest.approx(0.3, rel=1e-14)


def test_amounts_in_a_volume_set_the_pressure(gas: Mechanism) -> None:
    case = charged(gas, amount={"H2": "2 mmol", "O2": 1e-3})
    assert case.charge.amount.sum() == pytest.approx(3e-3, rel=1e-15)
    assert case.charge.pressure == pytest.approx(3e-3 * R * 1000 / 2e-3, rel=1e-15)


@pytest.mark.parametrize("holds", ["volume", "pressure"])
def test_amounts_at_a_pressure_set_the_volume(gas: Mechanism, holds: str) -> None:
    case = charged(gas, volume=None, holds=holds, pressure="1 bar", amount={"H2": "2 mmol", "O2": "1 mmol"})
    assert case.charge.volume == pytest.approx(3e-3 * R * 1000 / 1e5, rel=1e-15) and case.charge.pressure == 1e5


@pytest.mark.parametrize("volume, litres", [("2 L", 2.0), (None, 1000.0)])
def test_concentrations(gas: Mechanism, volume: str | None, litres: float) -> None:
    """The volume is 1 m3 where none is stated."""
    case = charged(gas, volume=volume, concentration={"H2": "0.5 mol/L", "O2": 250.0})
    assert case.charge.concentration[[gas.index("H2"), gas.index("O2")]] == pytest.approx([500.0, 250.0], rel=1e-15)
    assert case.charge.amount.sum() == pytest.approx(0.75 * litres, rel=1e-15)
    assert case.charge.pressure == pytest.approx(750 * R * 1000, rel=1e-15)


def test_a_temperature_in_degrees_celsius(gas: Mechanism) -> None:
    case = charged(gas, temperature="726.85 °C", pressure="1 atm", mole_ratio={"AR": 1})
    assert case.charge.temperature == pytest.approx(1000.0, rel=1e-15)
    assert case.charge.amount.sum() == pytest.approx(101325 * 2e-3 / (R * 1000), rel=1e-14)
