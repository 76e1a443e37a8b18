"""An INVENTED mechanism whose species and rate constants come from molecules; no number is measured."""

from typing import Any

FORM = {"form": "statistical mechanics"}
TOP = {"shape": "nonlinear", "B": [0.9, 0.31, 0.25], "symmetry": 1, "optical_isomers": 2, "imaginary": 1100.0,
       "wavenumbers": [220.0, [410.0, 2], 1700.0], "electronic": [[2, 0.0], [2, 300.0]],
       "rotors": [{"barrier": 4e3, "fold": 3, "B": 6.0}]}
LINEAR_TOP = {"shape": "linear", "B": 0.6, "symmetry": 1, "imaginary": 700.0, "wavenumbers": [[180.0, 2], 800.0]}


def _species() -> dict[str, Any]:
    return {
        "Q": {"composition": {"Q": 1}, "potential": {**FORM, "shape": "atom", "H298": 9e4,
                                                    "electronic": [[4, 0.0], [2, 404.0], [6, 9000.0]]}},
        "X": {"composition": {"X": 1}, "collision_diameter": "2.9 Å",
              "potential": {"form": "structureless particle", "energy": "70 kJ/mol"}},
        "Q2": {"composition": {"Q": 2}, "collision_diameter": "3.7 Å", "potential": {
            **FORM, "shape": "linear", "B": 0.8, "symmetry": 2, "wavenumbers": [1100.0], "H298": 0.0}},
        "QX": {"composition": {"Q": 1, "X": 1}, "standard_pressure": "1 atm", "potential": {
            **FORM, "shape": "linear", "B": [1.7], "symmetry": 1, "wavenumbers": [1800.0], "H298": 5e4,
            "electronic": [[2, 0.0], [2, 120.0]]}},
        "Q2X": {"composition": {"Q": 2, "X": 1}, "potential": {
            **FORM, "shape": "nonlinear", "B": [9.0, 0.5, 0.47], "symmetry": 2, "wavenumbers": [3100.0, 900.0, 1500.0],
            "H298": -3e4}},
        "Q2X2": {"composition": {"Q": 2, "X": 2}, "potential": {
            **FORM, "shape": "nonlinear", "B": [0.9, 0.4], "symmetry": 2, "optical_isomers": 2, "H298": -2e4,
            "wavenumbers": [[1100.0, 2], 700.0, 2500.0, 2600.0], "rotors": [{"barrier": 9e3, "fold": 2, "B": 8.0}]}},
        "fit": {"composition": {"Q": 2, "X": 2}, "potential": {
            "form": "NASA 7-coefficient", "T": [300.0, 1250.0, 4000.0], "a": [
                [4.2, 6.5e-3, -6.4e-6, 3.6e-9, -8.5e-13, -4707.6, 7.65], [5.6, 3.4e-3, -9e-7, 1.1e-10, -5e-15, -6627.1, -2.6]]}},
        "Z": {"composition": {"Z": 1}, "potential": {"form": "constant heat capacity", "at": 298.15, "H": 0.0, "S": 150.0,
                                                     "cp": 20.8}},
    }


def _reactions() -> list[tuple[str, Any]]:
    spheres, eyring, theory = "hard-sphere collision", "Eyring", "transition state"
    return [
        ("Q + QX ⇌ Q2 + X", {"law": spheres, "diameter": "3.1 Å", "E0": 2e4, "P": 0.1}),
        ("2 QX ⇌ Q2X2", {"law": spheres, "diameter": "4 Å", "E0": 0.0, "P": 1e-7}),
        ("X + Q2 ⇌ Q2X", [{"law": spheres, "E0": 1e4, "P": 1e-5}, {"law": eyring, "dH": 3e4, "dS": -180.0,
                                                                 "standard_state": "1 mol/L"}]),
        ("Q2X2 ⇌ fit", {"law": eyring, "dH": "150 kJ/mol", "dS": 12.0, "kappa": 0.07}),
        ("Q2X + X ⇌ fit", {"law": eyring, "dH": 2e4, "dS": -190.0, "standard_state": "1 atm"}),
        ("Q + X + Q2 ⇌ QX + Q2", {"law": eyring, "dH": 1e3, "dS": -150.0, "standard_state": "1 bar"}),
        ("Q2 + QX ⇌ Q2X + Q", {"law": theory, "E0": 1.1e5, "complex": TOP}),
        ("Q2X + X ⇌ Q2 + 2 X", {"law": theory, "E0": "2 eV", "tunnelling": "Wigner", "complex": TOP}),
        ("Q2X + X ⇌ 2 QX", {"law": theory, "E0": 2.6e5, "tunnelling": "Eckart", "complex": TOP}),
        ("Q2X2 ⇌ Q2X + X", [{"law": theory, "E0": 2.4e5, "complex": LINEAR_TOP, "tunnelling": "Wigner"},
                            {"law": "Arrhenius", "A": 1e9, "Ea": 2e5}]),
        ("fit + Q ⇌ Q2X + QX", {"law": theory, "tunnelling": "none", "complex": {**TOP, "H298": 3e5}}),
        ("2 Q + M ⇌ Q2 + M", {"law": "Arrhenius", "A": 1e4, "n": -1.0}),
    ]


def molecules() -> dict[str, Any]:
    """The mechanism as a plain document, SI throughout."""
    return {"mechanism": {"name": "invented molecules", "phase": "ideal gas", "standard_pressure": "1 bar"},
            "elements": {"Q": "14 g/mol", "X": "3.3 g/mol", "Z": "40 g/mol"}, "species": _species(),
            "reaction": [{"equation": equation, "forward": forward} for equation, forward in _reactions()]}
