"""A second INVENTED mechanism for tests: no such elements, species or reactions exist and no number is measured.

It holds the forms and laws of ideal gases that ``invented.py`` leaves out: see ``every_law``.
"""

from copy import deepcopy
from typing import Any

import numpy as np

from invented import MOLECULE, Document, _constant, _fit

UNITS = ["cm", "mol", "s", "kcal/mol", "atm"]
MOLECULE_UNITS = ["m", "molecule", "s", "eV", "kPa"]
MOLECULES_PER_M3 = 1e6 * MOLECULE  # in a mol/cm3
EV_PER_KCAL = 4184.0 / (1.602176634e-19 * MOLECULE)
KPA_PER_ATM = 101.325


def _form(form: str, composition: dict[str, int], T: list[float], *rows: list[float], **more: Any) -> Document:
    return _fit(composition, T, *rows, **more) | {"potential": {"form": form, "T": T, "a": list(rows)}}


def _nine(*data: Any, **more: Any) -> Document:
    return _form("NASA 9-coefficient", *data, **more)


def _shomate(*data: Any, **more: Any) -> Document:
    return _form("Shomate", *data, **more)


def species() -> Document:
    """Those of ``invented.py`` on other forms. No fit meets at its joins; ranges are one, two and three."""
    return {
        "Z": _constant({"Z": 1}, H="0 kJ/mol", S="150 J/(mol K)", cp="20.8 J/(mol K)"),
        "X": _nine({"X": 1}, [200.0, 1000.0, 6000.0],
                    [-120.0, 1.8, 2.51, -3e-5, 4e-8, -2e-11, 3e-15, 23296.5, -0.457],
                    [9000.0, -60.0, 2.6, -4e-5, 9e-9, -1e-12, 5e-17, 23803.7, -1.316]),
        "Q": _shomate({"Q": 1}, [298.15, 2500.0], [21.6, -1.4, 0.9, -0.15, -0.03, 223.514, 171.349, 230.0]),
        "X2": _nine({"X": 2}, [200.0, 1000.0, 6000.0],
                     [2.1e4, -370.0, 5.9, -7e-3, 1.2e-5, -9e-9, 2.4e-12, 641.2, -17.355],
                     [5.4e5, -1900.0, 5.8, -5e-4, 1.1e-7, -1.2e-11, 6e-16, 10925.3, -21.086]),
        "Q2": _shomate({"Q": 2}, [300.0, 900.0, 3000.0],
                       [26.2, 9.8, -4.5, 0.9, 0.12, -7.807, 234.651, 0.0],
                       [31.1, 4.1, -1.1, 0.11, -0.4, -10.06, 237.128, 0.0], standard_pressure="1 atm"),
        "QX": _fit({"Q": 1, "X": 1}, [300.0, 1000.0, 3000.0],
                   [3.7, -5e-4, 1.4e-6, -3e-10, -1.2e-13, 4319.6, 0.056],
                   [3.2, 1.2e-3, -3.2e-7, 4.4e-11, -2.4e-15, 4783.4, 2.126], standard_pressure="101.325 kPa"),
        "QX2": _nine({"Q": 1, "X": 2}, [200.0, 800.0, 1600.0, 4000.0],
                      [-3.9e4, 570.0, 1.1, 7e-3, -5e-6, 1.7e-9, -1e-13, -33082.6, 16.397],
                      [8e5, -1900.0, 5.2, 1.1e-3, -2e-7, 2e-11, -8e-16, -17448.5, -10.181],
                      [1e6, -2400.0, 4.6, 2.2e-3, -6e-7, 8e-11, -4.8e-15, -13786.4, -7.551]),
        "Q2X2": _shomate({"Q": 2, "X": 2}, [300.0, 700.0, 1500.0, 4000.0],
                         [28.4, 55.0, -35.0, 9.5, -0.2, -147.292, 248.317, -136.0],
                         [38.0, 34.0, -12.5, 1.7, -0.5, -150.527, 259.851, -136.0],
                         [62.0, 7.0, -1.4, 0.11, -5.5, -171.208, 277.147, -136.0]),
    }


def _fall_off() -> list[tuple[int, Document]]:
    """SRI and the narrower widths: order of the forward law (of k_inf), entry."""
    return [
        (2, {"equation": "Q + X ⇌ QX", "collision_efficiency": {"Z": 0.7, "QX2": 0.0},
             "forward": {"law": "SRI", "k_inf": {"A": 3e13, "n": 0.2}, "k_0": {"A": 2e19, "n": -1.1},
                         "F": {"a": 0.45, "b": 797.0, "c": 979.0}}}),
        # five parameters, a reference temperature
        (2, {"equation": "QX + X ⇌ QX2", "collision_efficiency": {"QX2": 9.0, "Z": 0.6},
             "forward": {"law": "SRI", "k_inf": {"A": 5e13, "n": 0.3, "Ea": -0.4},
                         "k_0": {"A": 6e16, "n": -1.8, "Ea": 0.5, "T_ref": 300.0},
                         "F": {"a": 1.1, "b": 540.0, "c": 1310.0, "d": 3.4, "e": -0.19}}}),
        (2, {"equation": "2 QX ⇌ Q2X2", "collision_efficiency": {"X2": 2.0},
             "forward": {"law": "Troe", "width": "IUPAC", "F_cent": 0.37,
                         "k_inf": {"A": 8e12, "n": -0.4, "T_ref": 300.0},
                         "k_0": {"A": 3e17, "n": -3.1, "T_ref": "300 K"}}}),
        # one partner alone
        (2, {"equation": "Q + X2 ⇌ QX2", "collision_partner": "Z",
             "forward": {"law": "Troe", "width": "JPL", "F_cent": 0.6, "k_inf": {"A": 2e13, "Ea": 3.0},
                         "k_0": {"A": 9e18, "n": -0.9}}}),
        # a list: IUPAC with a centre of four parameters, SRI with its own partners
        (1, {"equation": "Q2X2 ⇌ QX2 + Q", "collision_efficiency": {"X2": 3.0, "Q2": 0.0},
             "forward": [{"law": "Troe", "width": "IUPAC", "k_inf": {"A": 2e14, "Ea": 26.0},
                          "k_0": {"A": 4e16, "n": -2.0, "Ea": 23.0, "T_ref": 300.0},
                          "F_cent": {"a": 0.35, "T***": 210.0, "T*": 1500.0, "T**": 4200.0}},
                         {"law": "SRI", "k_inf": {"A": 3e12, "Ea": "100 kJ/mol"},
                          "k_0": {"A": 5e12, "n": 0.4, "Ea": 21.5}, "F": {"a": 0.2, "b": 90.0, "c": 3100.0},
                          "collision_efficiency": {"Z": 0.0, "QX2": 8.0}}]}),
    ]


def _activated() -> list[tuple[int, Document]]:
    """Chemical activation with each broadening: order of k_inf, which is one below that of the reaction, entry."""
    return [
        (1, {"equation": "X + Q2 ⇌ QX + Q", "collision_efficiency": {"QX": 5.0, "Z": 0.0},
             "forward": {"law": "activated", "k_inf": {"A": 4e7, "n": 0.5, "Ea": 9.0},
                         "k_0": {"A": 8e13, "n": 0.1, "Ea": 19.0}}}),
        (1, {"equation": "QX2 + X ⇌ QX + X2", "collision_efficiency": {"X2": 2.5},
             "forward": {"law": "activated", "k_inf": {"A": 2e6, "Ea": 4.0},
                         "k_0": {"A": 5e12, "n": -0.7, "Ea": 14.0, "T_ref": 1000.0},
                         "F_cent": {"a": 0.62, "T***": 150.0, "T*": 2100.0}}}),
        (1, {"equation": "Q + X2 ⇌ QX + X", "collision_efficiency": {"QX2": 0.2},
             "forward": {"law": "activated", "k_inf": {"A": 9e8, "n": -0.2}, "k_0": {"A": 3e12, "Ea": 6.2},
                         "F": {"a": 0.8, "b": 210.0, "c": 900.0, "d": 0.7, "e": 0.05}}}),
        # a list: two activated channels, one of them with one partner alone, and a direct one
        (1, {"equation": "X + Q2X2 ⇌ QX2 + QX",
             "forward": [{"law": "activated", "k_inf": {"A": 5e8}, "k_0": {"A": 6e12, "n": 0.1}, "F_cent": 0.52,
                          "width": "IUPAC", "collision_efficiency": {"Q2": 4.0}},
                         {"law": "activated", "k_inf": {"A": 3e7}, "k_0": {"A": 2e12}, "collision_partner": "Z"},
                         {"law": "Arrhenius", "A": 7e11, "Ea": 2.0}]}),
        (1, {"equation": "X + QX ⇌ Q + X2",
             "forward": {"law": "activated", "k_inf": {"A": 2e8, "Ea": 1.0}, "k_0": {"A": 9e12, "Ea": 3.0},
                         "F": {"a": 0.5, "b": 300.0, "c": 2000.0}}}),
    ]


def _tables() -> list[tuple[int, Document]]:
    """Rows by pressure: order, entry."""
    return [
        # not in order, two rows at one pressure (one of them written in another unit), one negative
        (2, {"equation": "2 QX ⇌ Q2 + X2", "forward": {"law": "pressure table", "rows": [
            {"p": 1.0, "A": 3e12, "n": 0.2, "Ea": 21.0}, {"p": "0.01 atm", "A": 4e11, "Ea": 17.0},
            {"p": "101325 Pa", "A": 2e10, "n": 0.6, "Ea": 15.0}, {"p": 20.0, "A": 9e12, "n": 0.2, "Ea": 21.5},
            {"p": 20.0, "A": -2e12, "n": 0.2, "Ea": 22.5}]}}),
        # a row at just 3 bar; a reference temperature
        (1, {"equation": "Q2 ⇌ 2 Q", "forward": {"law": "pressure table", "rows": [
            {"p": "0.2 bar", "A": 5e12, "n": -0.5, "Ea": 108.0}, {"p": "3 bar", "A": 9e12, "n": -0.4, "Ea": 108.5},
            {"p": "9 bar", "A": 2e13, "n": -1.3, "Ea": 109.0, "T_ref": 1200.0}]}}),
        # rows at high pressures, mostly met below, and an Arrhenius term beside; three molecules
        (3, {"equation": "2 X + Q2 ⇌ 2 QX", "forward": [
            {"law": "pressure table", "rows": [{"p": 60.0, "A": 7e15, "n": -0.3, "Ea": 1.2},
                                               {"p": 400.0, "A": 1e16, "n": -0.3, "Ea": 1.1}]},
            {"law": "Arrhenius", "A": 2e14, "Ea": 0.5}]}),
        # one pressure alone
        (1, {"equation": "X2 ⇌ 2 X", "forward": {"law": "pressure table", "rows": [
            {"p": 1.0, "A": 3e14, "Ea": 103.0}, {"p": 1.0, "A": 5e9, "n": 1.0, "Ea": 99.0}]}}),
    ]


def _chebyshev() -> list[tuple[int, Document]]:
    """Chebyshev series with and without clamp: order, entry."""
    return [
        # met inside its window and beyond each of its edges
        (2, {"equation": "QX2 + Q ⇌ 2 QX", "forward": {
            "law": "Chebyshev", "T": [500.0, 2000.0], "p": [0.02, 0.9], "clamp": True,
            "c": [[11.2, -0.35, -0.08], [1.9, 0.31, 0.02], [-0.22, 0.09, -0.03], [0.05, -0.02, 0.01]]}}),
        # a window that holds all that tests meet
        (2, {"equation": "2 QX2 ⇌ Q2X2 + X2", "forward": {
            "law": "Chebyshev", "T": ["290 K", "3000 K"], "p": ["1e-9 bar", "1e4 bar"],
            "c": [[9.8, 0.6, -0.21, 0.04], [3.1, -0.4, 0.07, 0.013], [-0.3, 0.12, 0.05, -0.02]]}}),
        # the smallest ones; three molecules
        (3, {"equation": "Q + X + QX ⇌ Q2X2", "forward": [
            {"law": "Chebyshev", "T": [400.0, 2600.0], "p": ["1 kPa", "1 MPa"], "c": [[15.1, -0.3]], "clamp": True},
            {"law": "Chebyshev", "T": [400.0, 2600.0], "p": [0.5, 3.5], "c": [[14.6], [-0.4]], "clamp": True}]}),
        # a list of three laws
        (1, {"equation": "Q2X2 ⇌ Q2 + X2", "collision_efficiency": {"Z": 0.4, "Q2X2": 6.0}, "forward": [
            {"law": "Chebyshev", "T": [600.0, 2500.0], "p": [1e-3, 2.0], "clamp": True,
             "c": [[4.1, 0.7], [3.9, 0.1], [-0.4, -0.06]]},
            {"law": "pressure table", "rows": [{"p": 0.01, "A": 1e11, "Ea": 48.0}, {"p": 0.4, "A": 8e11, "Ea": 49.0}]},
            {"law": "Lindemann", "k_inf": {"A": 4e12, "Ea": 50.0}, "k_0": {"A": 2e15, "Ea": 45.0}}]}),
    ]


def _document(entries: list[tuple[int, Document]], units: list[str]) -> Document:
    head = {"name": "every law", "phase": "ideal gas", "standard_pressure": "1 bar", "joins": "closed", "units": units,
            "sources": ["invented for tests; describes nothing real"]}
    reactions = [entry | {"source": "invented"} for _, entry in entries]
    return {"mechanism": head, "elements": {"Q": "10 g/mol", "X": "4 g/mol", "Z": "30 g/mol"},
            "species": species(), "reaction": reactions}


def _entries() -> list[tuple[int, Document]]:
    return deepcopy(_fall_off() + _activated() + _tables() + _chebyshev())


def every_law() -> Document:
    """The second invented mechanism as a dict with the keys of a mechanism file; units mol/cm3, kcal/mol and atm."""
    return _document(_entries(), UNITS)


def every_law_as_published() -> Document:
    """The same, its joins left open."""
    document = every_law()
    document["mechanism"]["joins"] = "as published"
    return document


# ---- the same in other units


def _restate_law(law: Document, order: int) -> None:
    """From mol/cm3, kcal/mol and atm to molecule/m3, eV and kPa."""
    law["A"] /= MOLECULES_PER_M3 ** (order - 1)
    if not isinstance(law.get("Ea", ""), str):
        law["Ea"] *= EV_PER_KCAL
    if not isinstance(law.get("p", ""), str):
        law["p"] *= KPA_PER_ATM


def _restate_term(term: Document, order: int) -> None:
    """``order`` is that of k_inf, or of the law itself."""
    if term["law"] == "Chebyshev":
        term["c"][0][0] -= float(np.log10(MOLECULES_PER_M3)) * (order - 1)
        term["p"] = [p if isinstance(p, str) else p * KPA_PER_ATM for p in term["p"]]
    elif "k_inf" in term:
        _restate_law(term["k_inf"], order)
        _restate_law(term["k_0"], order + 1)
    else:
        for law in term.get("rows", [term]):
            _restate_law(law, order)


def every_law_in_molecules() -> Document:
    """The same mechanism, its bare numbers restated in m, molecule, s, eV and kPa."""
    entries = _entries()
    for order, entry in entries:
        forward = entry["forward"]
        terms = forward if isinstance(forward, list) else [forward]
        activated = any(term["law"] == "activated" for term in terms)
        for term in terms:
            _restate_term(term, order + (activated and term["law"] != "activated"))
    return _document(entries, MOLECULE_UNITS)
