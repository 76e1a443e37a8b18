"""An INVENTED mechanism for tests: no such elements, species or reactions exist and no number is measured.

It holds each building block of gas mechanisms once, with numbers of a sensible size: see ``building_blocks``.
"""

import json
from copy import deepcopy
from typing import Any

Document = dict[str, Any]

MOLECULE = 6.02214076e23  # per mol, exact
GAS_CONSTANT = 8.31446261815324  # J/(mol K), exact
MOLECULE_UNITS = ["cm", "molecule", "s", "K", "atm"]


def _fit(composition: dict[str, int], T: list[float], *rows: list[float], **more: Any) -> Document:
    potential = {"form": "NASA 7-coefficient", "T": T, "a": list(rows)}
    return {"composition": composition, "source": "invented", **more, "potential": potential}


def _constant(composition: dict[str, int], **values: Any) -> Document:
    potential = {"form": "constant heat capacity", "at": 298.15, **values}
    return {"composition": composition, "source": "invented", "potential": potential}


def species() -> Document:
    """Eight invented species. No fit meets at its joins; h/RT is up to 0.5, s/R up to 1.6 apart there."""
    return {
        "Z": _constant({"Z": 1}, H=0.0, S=0.15, cp=0.0208),
        "X": _constant({"X": 1}, H=200.0, S=0.115, cp=0.0209),
        "Q": _constant({"Q": 1}, H="230 kJ/mol", S=0.145, cp=0.0212),
        "X2": _fit({"X": 2}, [300.0, 1000.0, 3000.0],
                   [3.3, 9e-4, -1.2e-6, 8e-10, -1.5e-13, -1014.8, -3.388],
                   [3.1, 6.5e-4, -5e-8, -9e-12, 1.6e-15, -889.2, -2.12]),
        "Q2": _fit({"Q": 2}, [300.0, 1000.0, 3000.0],
                   [3.6, 1.1e-3, -1.5e-6, 1.6e-9, -6e-13, -1111.9, 4.472],
                   [3.9, 9e-4, -2.5e-7, 3.5e-11, -1.9e-15, -1656.9, 2.496], standard_pressure="1 atm"),
        "QX": _fit({"Q": 1, "X": 1}, [300.0, 1000.0, 3000.0],
                   [3.7, -5e-4, 1.4e-6, -3e-10, -1.2e-13, 4319.6, 0.056],
                   [3.2, 1.2e-3, -3.2e-7, 4.4e-11, -2.4e-15, 4783.4, 2.126], standard_pressure=1.01325),
        "QX2": _fit({"Q": 1, "X": 2}, [200.0, 800.0, 1600.0, 3500.0],
                    [4.1, -9e-4, 4.2e-6, -3.1e-9, 8e-13, -25869.6, -0.401],
                    [3.5, 2.6e-3, -6e-7, 3e-11, 2e-15, -26022.6, 1.953],
                    [4.4, 2e-3, -4.5e-7, 5.2e-11, -2.5e-15, -26286.0, -3.041]),
        "Q2X2": _fit({"Q": 2, "X": 2}, [300.0, 1250.0, 4000.0],
                     [4.2, 6.5e-3, -6.4e-6, 3.6e-9, -8.5e-13, -8707.6, 2.65],
                     [5.6, 3.4e-3, -9e-7, 1.1e-10, -5e-15, -10627.1, -7.598]),
    }


def _plain() -> list[tuple[int, Document]]:
    """Without a partner: order of the forward law, entry."""
    return [
        (2, {"equation": "X + Q2 ⇌ QX + Q",
             "forward": {"law": "Arrhenius", "A": 8e10, "n": 0.1, "Ea": 82.0}}),
        # a reference temperature
        (2, {"equation": "Q + X2 ⇌ QX + X",
             "forward": {"law": "Arrhenius", "A": 3e9, "n": 2.1, "Ea": 26.0, "T_ref": 300.0}}),
        # what a source claims of the reverse: compared, never used
        (2, {"equation": "QX2 + X ⇄ QX + X2", "published_one_way": True,
             "forward": {"law": "Arrhenius", "A": 5e12, "n": -0.7, "Ea": 61.0}}),
        (2, {"equation": "X + Q2X2 = QX2 + QX", "published_reverse": {"A": 1e9, "n": 0.5, "Ea": 300.0},
             "forward": {"law": "Arrhenius", "A": 6e9, "Ea": -3.0}}),
        # a list whose second term is negative; the sum stays positive
        (2, {"equation": "2 QX ⇌ Q2 + X2",
             "forward": [{"law": "Arrhenius", "A": 9e9, "n": 0.2, "Ea": 90.0},
                         {"law": "Arrhenius", "A": -2e9, "n": 0.2, "Ea": 94.0}]}),
        # a species on both sides whose number changes
        (2, {"equation": "QX2 + X ⇌ 2 X + QX", "forward": {"law": "Arrhenius", "A": 4e11, "Ea": 450.0}}),
        # three molecules, and three different ones
        (3, {"equation": "2 X + Q2 ⇌ 2 QX", "forward": {"law": "Arrhenius", "A": 7e9, "n": -0.3, "Ea": 5.0}}),
        (3, {"equation": "Q + X + QX ⇌ Q2X2", "forward": {"law": "Arrhenius", "A": 2e10, "n": -0.8}}),
        # four molecules among the products
        (2, {"equation": "Q2X2 + QX2 ⇌ Q2 + 2 X2 + Q",
             "forward": {"law": "Arrhenius", "A": 1e11, "Ea": 500.0}}),
    ]


def _with_partner() -> list[tuple[int, Document]]:
    """With any partner M or a single named one: order of the forward law, entry."""
    return [
        (3, {"equation": "2 X + M ⇌ X2 + M", "collision_efficiency": {"Z": 0.0, "QX2": 12.0, "X2": 2.5},
             "forward": {"law": "Arrhenius", "A": 4e11, "n": -1.0}}),
        (3, {"equation": "2 X + Z ⇌ X2 + Z", "forward": {"law": "Arrhenius", "A": 6e10, "n": -0.9}}),
        # the second term's own collision efficiencies win over those of the entry
        (2, {"equation": "Q2 + M ⇌ 2 Q + M", "collision_efficiency": {"Q2": 3.0, "Z": 0.4},
             "forward": [{"law": "Arrhenius", "A": 5e13, "n": -0.5, "Ea": 455.0},
                         {"law": "Arrhenius", "A": 2e12, "Ea": 440.0,
                          "collision_efficiency": {"Z": 0.0, "QX": 6.5}}]}),
    ]


def _fall_off() -> list[tuple[int, Document]]:
    """Fall-off: order of k_inf, entry."""
    return [
        (2, {"equation": "Q + X ⇌ QX", "collision_efficiency": {"Z": 0.7, "QX2": 0.0},
             "forward": {"law": "Lindemann", "k_inf": {"A": 3e10, "n": 0.2}, "k_0": {"A": 2e13, "n": -1.1}}}),
        (2, {"equation": "QX + X ⇌ QX2", "collision_efficiency": {"QX2": 9.0, "Z": 0.6},
             "forward": {"law": "Troe", "k_inf": {"A": 5e10, "n": 0.3, "Ea": -1.5},
                         "k_0": {"A": 6e15, "n": -1.8, "Ea": 2.0},
                         "F_cent": {"a": 0.62, "T***": 150.0, "T*": 2100.0}}}),
        (2, {"equation": "2 QX ⇌ Q2X2", "collision_efficiency": {"X2": 2.0},
             "forward": {"law": "Troe", "k_inf": {"A": 8e9}, "k_0": {"A": 3e14, "n": -1.4}, "F_cent": 0.45}}),
        # one partner alone; four parameters
        (2, {"equation": "Q + X2 ⇌ QX2", "collision_partner": "Z",
             "forward": {"law": "Troe", "k_inf": {"A": 2e10, "Ea": 12.0}, "k_0": {"A": 9e12, "n": -0.9},
                         "F_cent": {"a": 0.35, "T***": 210.0, "T*": 1500.0, "T**": 4200.0}}}),
        # a list of two laws; k_0 with a reference temperature; the first term's efficiencies are its own
        (1, {"equation": "Q2X2 ⇌ QX2 + Q", "collision_efficiency": {"X2": 3.0},
             "forward": [{"law": "Troe", "k_inf": {"A": 2e14, "Ea": 110.0}, "F_cent": 0.7,
                          "k_0": {"A": 4e12, "n": -2.0, "Ea": 95.0, "T_ref": 300.0},
                          "collision_efficiency": {"Z": 0.0, "QX2": 8.0}},
                         {"law": "Lindemann", "k_inf": {"A": 3e12, "Ea": 100.0},
                          "k_0": {"A": 5e9, "n": 0.4, "Ea": 90.0}}]}),
    ]


def _document(entries: list[tuple[int, Document]]) -> Document:
    head = {"name": "invented", "phase": "ideal gas", "standard_pressure": "1 bar", "joins": "closed",
            "units": ["dm", "mol", "s", "kJ/mol", "bar"],
            "sources": ["invented for tests; describes nothing real"]}
    reactions = [entry | {"source": "invented"} for _, entry in entries]
    return {"mechanism": head, "elements": {"Q": "10 g/mol", "X": "4 g/mol", "Z": "30 g/mol"},
            "species": species(), "reaction": reactions}


def building_blocks() -> Document:
    """The invented mechanism as a dict with the keys of a mechanism file; units mol/dm3, kJ/mol and bar."""
    return _document(_plain() + _with_partner() + _fall_off())


def building_blocks_as_published() -> Document:
    """The same, its joins left open."""
    document = building_blocks()
    document["mechanism"]["joins"] = "as published"
    return document


def _restate_law(law: Document, order: int) -> None:
    """From mol/dm3 and kJ/mol to molecule/cm3 and K."""
    law["A"] *= (1000 / MOLECULE) ** (order - 1)
    law["Ea"] = law.get("Ea", 0.0) * 1000 / GAS_CONSTANT


def _restate_term(term: Document, order: int) -> None:
    if term["law"] == "Arrhenius":
        _restate_law(term, order)
    else:
        _restate_law(term["k_inf"], order)
        _restate_law(term["k_0"], order + 1)


def building_blocks_in_molecules() -> Document:
    """The same mechanism, its bare numbers restated in cm, molecule, s, K and atm."""
    entries = deepcopy(_plain() + _with_partner() + _fall_off())
    for order, entry in entries:
        forward = entry["forward"]
        for term in forward if isinstance(forward, list) else [forward]:
            _restate_term(term, order)
    document = _document(entries)
    document["mechanism"]["units"] = MOLECULE_UNITS
    document["species"]["QX"]["standard_pressure"] = 1.0
    for one in document["species"].values():
        for key in one["potential"].keys() & {"H", "S", "G", "cp"}:
            if not isinstance(one["potential"][key], str):
                one["potential"][key] *= 1000 / GAS_CONSTANT
    return document


def _toml_value(value: Any) -> str:
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{json.dumps(k)} = {_toml_value(v)}" for k, v in value.items()) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(map(_toml_value, value)) + "]"
    return json.dumps(value, ensure_ascii=False)


def toml_text(document: Document) -> str:
    """The text of a mechanism file that reads back as ``document``."""
    lines = []
    for name, table in document.items():
        if isinstance(table, list):
            blocks = [(f"[[{name}]]", entry) for entry in table]
        elif name == "species":
            blocks = [(f"[species.{json.dumps(key)}]", one) for key, one in table.items()]
        else:
            blocks = [(f"[{name}]", table)]
        for header, block in blocks:
            lines += [header, *(f"{json.dumps(k)} = {_toml_value(v)}" for k, v in block.items()), ""]
    return "\n".join(lines)
