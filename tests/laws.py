"""INVENTED forward laws of a small INVENTED reaction 2 B ⇌ A beside an inert Z; a helper of the tests of laws."""

from collections.abc import Mapping, Sequence
from typing import Any

from bothways import build_mechanism

LIMITS = {"k_inf": {"A": 2e5, "n": 0.3, "Ea": 9e3}, "k_0": {"A": 7e9, "n": -2.1, "Ea": 4e3}}
CENTRE = {"a": 0.6, "T***": 120.0, "T*": 1500.0, "T**": 4e3}
SRI = {"a": 0.45, "b": 800.0, "c": 950.0, "d": 1.1, "e": 0.06}
WITH_PARTNERS = {"collision_efficiency": {"A": 6.0, "B": 0.0}}
ALONE = {"collision_partner": "Z"}
ACTIVATED = {"k_inf": {"A": 3e7, "n": 0.1, "Ea": 2e4}, "k_0": {"A": 4e6, "n": -0.5, "Ea": 3e3}}
ROWS = [{"p": "10 bar", "A": 5e5, "n": 0.2, "Ea": 9e3}, {"p": 1e3, "A": 2e3, "n": 0.1, "Ea": 3e3},
        {"p": "0.3 bar", "A": 4e4, "n": 0.3, "Ea": 5e3}, {"p": "0.3 bar", "A": -3e2, "n": 0.5, "Ea": 5.5e3, "T_ref": 300.0},
        {"p": 1e5, "A": 9e4, "n": 0.3, "Ea": 5e3}, {"p": 1e5, "A": 2e5, "Ea": 4e4},
        {"p": 2e6, "A": 6e5, "n": 0.2, "Ea": 9e3}]
SERIES = {"T": [350.0, 2500.0], "p": [1e3, "20 bar"], "clamp": True,
          "c": [[4.1, 0.6, -0.06, 0.01], [1.9, 0.25, -0.02, 0.003], [-0.2, 0.07, 0.01, 0.0]]}


COMPLEX = {"shape": "nonlinear", "B": [0.7, 0.5, 0.4], "symmetry": 2, "wavenumbers": [150.0, [900.0, 2]], "imaginary": 800.0,
           "electronic": [[1, 0.0], [3, 700.0]], "rotors": [{"barrier": 6e3, "fold": 2, "B": 5.0}]}

LAWS: dict[str, list[dict[str, Any]]] = {
    "known at a temperature": [{"law": "known at a temperature", "k": 3.0, "at": "60 °C", "Ea": 2e4, "n": 0.4}],
    "Lindemann": [{"law": "Lindemann", **LIMITS, **WITH_PARTNERS}],
    "Troe": [{"law": "Troe", **LIMITS, "F_cent": CENTRE, **WITH_PARTNERS}],
    "Troe, width IUPAC": [{"law": "Troe", **LIMITS, "F_cent": CENTRE, "width": "IUPAC", **WITH_PARTNERS}],
    "Troe, width IUPAC, one partner": [{"law": "Troe", **LIMITS, "F_cent": 0.4, "width": "IUPAC", **ALONE}],
    "Troe, width JPL": [{"law": "Troe", **LIMITS, "width": "JPL"}],
    "Troe, width JPL, a centre": [{"law": "Troe", **LIMITS, "width": "JPL", "F_cent": CENTRE, **WITH_PARTNERS}],
    "SRI": [{"law": "SRI", **LIMITS, "F": SRI, **WITH_PARTNERS}],
    "SRI, three parameters, one partner": [{"law": "SRI", **LIMITS, "F": {k: SRI[k] for k in "abc"}, **ALONE}],
    "SRI, limits at T_ref": [{"law": "SRI", "k_inf": {"A": 2e6, "n": 0.3, "T_ref": "300 K"},
                              "k_0": {"A": 5e4, "n": -2.1, "T_ref": 298.0}, "F": SRI}],
    "activated": [{"law": "activated", **ACTIVATED, **WITH_PARTNERS}],
    "activated, Troe": [{"law": "activated", **ACTIVATED, "F_cent": CENTRE, **WITH_PARTNERS}],
    "activated, IUPAC": [{"law": "activated", **ACTIVATED, "F_cent": 0.55, "width": "IUPAC"}],
    "activated, JPL, one partner": [{"law": "activated", **ACTIVATED, "width": "JPL", **ALONE}],
    "activated, SRI": [{"law": "activated", **ACTIVATED, "F": SRI, **WITH_PARTNERS}],
    "pressure table": [{"law": "pressure table", "rows": ROWS}],
    "pressure table, one row": [{"law": "pressure table", "rows": ROWS[:1]}],
    "Chebyshev": [{"law": "Chebyshev", **SERIES}],
    "Chebyshev, by T alone": [{"law": "Chebyshev", **SERIES, "c": [[4.1], [0.3]]}],
    "Chebyshev, by p alone": [{"law": "Chebyshev", **SERIES, "c": [[4.1, 0.3, -0.1]]}],
    "hard-sphere collision": [{"law": "hard-sphere collision", "diameter": "3.4 Å", "E0": 3e4, "P": 0.2}],
    "Eyring": [{"law": "Eyring", "dH": "40 kJ/mol", "dS": "-90 J/(mol K)", "standard_state": "1 mol/L"}],
    "Eyring, at a pressure": [{"law": "Eyring", "dH": 3e4, "dS": -70.0, "kappa": 0.4, "standard_state": "1 atm"}],
    "transition state": [{"law": "transition state", "E0": 2e4, "complex": COMPLEX}],
    "transition state, Wigner": [{"law": "transition state", "E0": -3e3, "tunnelling": "Wigner", "complex": COMPLEX}],
    "transition state, Eckart": [{"law": "transition state", "E0": 3e4, "tunnelling": "Eckart", "complex": COMPLEX},
                                 {"law": "transition state", "E0": 5e4, "complex": COMPLEX},
                                 {"law": "Arrhenius", "A": 3e4}],
    "several terms": [{"law": "SRI", **LIMITS, "F": SRI, **ALONE}, {"law": "pressure table", "rows": ROWS},
                      {"law": "Arrhenius", "A": 3e4}, {"law": "Chebyshev", **SERIES},
                      {"law": "Troe", **LIMITS, "F_cent": 0.4}, {"law": "activated", **ACTIVATED, **WITH_PARTNERS}],
}
"""Each law, and what goes with it, as the forward terms of 2 B ⇌ A."""


def document(terms: Sequence[Mapping[str, Any]], units: Sequence[str] = ()) -> dict[str, Any]:
    """The mechanism as a plain document, bare numbers in these units (SI where left out)."""
    def species(composition: Mapping[str, int], H: str, S: str, cp: str) -> dict[str, Any]:
        potential = {"form": "constant heat capacity", "at": "300 K", "H": H, "S": S, "cp": cp}
        return {"composition": dict(composition), "potential": potential}

    return {"mechanism": {"name": "one reaction", "phase": "ideal gas", "standard_pressure": "1 bar", "units": list(units)},
            "elements": {"Q": "20 g/mol", "X": "30 g/mol"},
            "species": {"A": species({"Q": 2}, "-40 kJ/mol", "230 J/(mol K)", "70 J/(mol K)"),
                        "B": species({"Q": 1}, "20 kJ/mol", "180 J/(mol K)", "30 J/(mol K)"),
                        "Z": species({"X": 1}, "0 kJ/mol", "150 J/(mol K)", "21 J/(mol K)")},
            "reaction": [{"equation": "2 B ⇌ A", "forward": [dict(term) for term in terms]}]}


def law_of(term: Mapping[str, Any], units: Sequence[str] = ()) -> Any:
    """The law that one forward term of 2 B ⇌ A states."""
    return build_mechanism(document([term], units)).reactions[0].terms[0].law
