"""Statistical-mechanical thermochemistry against published tables."""

import csv
from functools import cache
from pathlib import Path

import chemicals
import numpy as np
import pytest

from bothways import build_mechanism
from bothways.contents import Contents
from bothways.thermo.reference_elements import heat_of_elements

from . import janaf, tp2002
from .small import R, properties
from .spectroscopy import DEPARTURES, MOLECULES, TABLES

ROTATION_OF_METHANE = 0.1  # [J/(mol K)] in S, stated: constant in T, from JANAF's B of 1961 and from classical rotation


@cache
def plain_models() -> Contents:
    """All molecules with their spectroscopic constants; those of the elements' reference states have ΔfH° = 0."""
    species = {name: {"formula": name, "potential": {"form": "statistical mechanics", "H298": 0.0, **keys}}
               for name, keys in MOLECULES.items()}
    return Contents(build_mechanism({"mechanism": {"name": "molecules", "phase": "ideal gas", "standard_pressure": "1 bar"},
                                     "species": species}))


def table(species: str) -> dict[float, tuple[float, float, float]]:
    return TABLES[species][1] if species in TABLES else janaf.TABLES[species][2]


@pytest.mark.parametrize("species", ["N2O", "CH4"])
def test_janafs_own_plain_models(species: str) -> None:
    """Its tables of these are rigid rotors and harmonic oscillators: cp to 0.01 J/(mol K), S to a constant below 0.1."""
    offsets = []
    for T, (cp, s, h) in table(species).items():
        ours = properties(plain_models(), species, T)
        assert ours[0] == pytest.approx(cp, abs=0.01), T
        assert ours[1] == pytest.approx(h, abs=0.005), T
        offsets.append(ours[2] - s)
    assert max(np.abs(offsets)) < ROTATION_OF_METHANE and np.ptp(offsets) < 0.005


@pytest.mark.parametrize("species", DEPARTURES)
def test_diatomics_are_as_far_from_janaf_as_the_model_is(species: str) -> None:
    """Anharmonicity, stretching and quantum rotation are left out: worked out apart with the same constants."""
    for T, (less_cp, less_s) in DEPARTURES[species].items():
        cp, s, _ = table(species)[T]
        ours = properties(plain_models(), species, T)
        assert ours[0] - cp == pytest.approx(less_cp, abs=0.0015) and ours[2] - s == pytest.approx(less_s, abs=0.0015), T


@pytest.mark.parametrize("species", ["H", "O", "N"])
def test_atoms_against_janaf(species: str) -> None:
    """No model stands between: levels and mass alone; JANAF's gas constant and masses are older by 2e-5 of S."""
    for T, (cp, s, h) in janaf.TABLES[species][2].items():
        assert properties(plain_models(), species, T) == pytest.approx((cp, h, s), rel=2e-5, abs=1e-3), T


@pytest.mark.parametrize("species", ["N2", "O2", "CO", "CH4", "C2H4", "H", "O", "N"])
def test_on_one_scale_with_the_polynomials(species: str) -> None:
    """H°(298.15 K) - H°(0) from the model, so that H0 = ΔfH°(0 K) leads to the ΔfH°(298.15 K) of the same evaluation.

    ATcT 1.112 (B. Ruscic, D.H. Bross), as `chemicals` carries it; its own uncertainties cancel in the difference.
    """
    at_zero, at_298 = formation()[species] if species not in ("N2", "O2") else (0.0, 0.0)
    keys = {"form": "statistical mechanics", "H0": at_zero, **MOLECULES[species]}
    document = {"mechanism": {"name": "one", "phase": "ideal gas", "standard_pressure": "1 bar"},
                "species": {species: {"formula": species, "potential": keys}}}
    ours = properties(Contents(build_mechanism(document)), species, 298.15)[1]
    assert ours == pytest.approx(at_298 * 1e-3, abs=0.01)


@cache
def formation() -> dict[str, tuple[float, float]]:
    """ΔfH° at 0 K and at 298.15 K [J/mol] of gases."""
    path = Path(chemicals.__file__).parent / "Reactions" / "ATcT 1.112 (g).tsv"
    with path.open(encoding="utf-8") as file:
        rows = list(csv.DictReader(file, delimiter="\t"))
    return {row["Formula"].removesuffix(" (g)"): (float(row["Hfg_0K"]), float(row["Hfg"])) for row in rows}


LEVELS = {"F": [[4, 0], [2, 404.141]], "Cl": [[4, 0], [2, 882.351]], "Br": [[4, 0], [2, 3685.24]], "I": [[4, 0], [2, 7602.98]],
          "H": [[2, 0]], "N": [[4, 0]], "O": [[5, 0], [3, 158.265], [1, 226.977]], "C": [[1, 0], [3, 16.417], [5, 43.414]],
          "He": [[1, 0]], "Ne": [[1, 0]], "Ar": [[1, 0]], "Kr": [[1, 0]], "Xe": [[1, 0]]}
"""Lowest levels of atoms (degeneracy, cm⁻¹): NIST Atomic Spectra Database (those of F and C from memory)."""


def test_heats_of_the_elements_against_active_thermochemical_tables() -> None:
    """H°(298.15 K) - H°(0) of the element = that of its atom less the change of ΔfH°, to 0.02 kJ/mol."""
    for atom in LEVELS:
        g, theta = np.array(LEVELS[atom], dtype=float).T
        x = theta * 1.438776877 / 298.15
        heat = R * 298.15 * (2.5 + np.sum(g * x * np.exp(-x)) / np.sum(g * np.exp(-x)))
        at_zero, at_298 = formation()[atom]
        assert heat_of_elements({atom: 1}) == pytest.approx(heat - (at_298 - at_zero), abs=20.0), atom


REFERENCE = {"H2": 8468.102, "O2": 8680.104, "N2": 8670.104}
"""H°(298.15 K) - H°(0) [J/mol] on the records of NASA/TP-2002-211556."""


@pytest.mark.parametrize("molecule", REFERENCE)
def test_heats_of_the_elements_against_the_reports_records(molecule: str) -> None:
    assert heat_of_elements({molecule[0]: 2}) == pytest.approx(REFERENCE[molecule], abs=0.2)


def test_mixed_with_the_reports_polynomials() -> None:
    """N2 + O2 ⇌ 2 NO at 1000 K, each species by statistics (s) or by a fit (f): K is the same but for the models."""
    names = ("N2", "O2", "NO")
    statistical = {name: {"form": "statistical mechanics", "H298": 91271.31 if name == "NO" else 0.0, **MOLECULES[name]}
                   for name in names}
    log_K = {}
    for kinds in ("sss", "fff", "sff", "ffs"):
        species = {name: {"formula": name, "potential": statistical[name] if kind == "s" else tp2002.potential(name)}
                   for name, kind in zip(names, kinds, strict=True)}
        reaction = {"equation": "N2 + O2 ⇌ 2 NO", "forward": {"law": "Arrhenius", "A": 1.0}}
        mixed = build_mechanism({"mechanism": {"name": kinds, "phase": "ideal gas", "standard_pressure": "1 bar"},
                                 "species": species, "reaction": [reaction]})
        log_K[kinds] = Contents(mixed).log_equilibrium_constants(1000.0)[0]
    apart = np.array([log_K[kinds] - log_K["fff"] for kinds in ("sss", "sff", "ffs")])
    assert np.all(np.abs(apart) < 0.06)  # 0.1 J/(mol K) of a species is 0.012, that of NO counts twice
    assert apart[0] != 0 and abs(apart[1]) < 0.02
