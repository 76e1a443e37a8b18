"""Small mechanisms and cases for the outside checks, and what they give in the units of tables."""

from collections.abc import Mapping, Sequence
from functools import cache
from typing import Any

import numpy as np
from scipy.constants import R, atm, bar

from bothways import Equations, Mechanism, Trajectory, build_case, build_mechanism, read_mechanism, run
from bothways.contents import Contents

CM3 = 1e6
"""A second-order rate constant in m3/(mol s) times this is in cm3/(mol s)."""


@cache
def bundled(name: str) -> Contents:
    """A bundled mechanism (`.mechanism`) with the functions of state of its species."""
    return Contents(read_mechanism(name))


def excerpt(name: str, reactions: Sequence[Mapping[str, Any]], formation: Mapping[str, float] | None = None) -> Mechanism:
    """Species of a bundled mechanism with reactions of our own; bare numbers in cm, mol, s and K.

    formation : other enthalpies of formation at 298.15 K [kJ/mol], by species.
    """
    document = bundled(name).mechanism.to_dict()
    words = {word for reaction in reactions for word in reaction["equation"].split()}
    document["species"] = {s: table for s, table in document["species"].items() if s in words}
    document["mechanism"]["units"] = ["cm", "mol", "s", "K"]
    document["reaction"] = [dict(reaction) for reaction in reactions]
    for species, enthalpy in (formation or {}).items():
        shift = (enthalpy - properties(bundled(name), species, 298.15)[1]) * 1e3 / R
        for row in document["species"][species]["potential"]["a"]:
            row[5] += shift  # a6 [K] of the 7-coefficient form
    return build_mechanism(document)


def properties(contents: Contents, species: str, temperature: float) -> tuple[float, float, float]:
    """cp [J/(mol K)], h [kJ/mol] and s [J/(mol K)] of a species as its own record has them.

    Own record: at the standard pressure stated for the species, whatever the mechanism's.
    """
    k = contents.mechanism.index(species)
    g, h, cp = (values[k] for values in contents.molar(temperature))
    own = np.log(contents.mechanism.standard_pressure / contents.mechanism.species[k].standard_pressure)
    return float(R * cp), float(R * temperature * h * 1e-3), float(R * (h - g + own))


def constants(mechanism: Mechanism, temperature: float) -> tuple[np.ndarray, np.ndarray]:
    """Forward and reverse rate constants of every reaction (without partners), m3, mol, s.

    Read from the rates at concentrations of 1 mol/m3, as the program's equations have them.
    """
    state = np.append(np.ones(len(mechanism.species)), temperature)
    return Equations(mechanism, "volume", "isothermal").reaction_rates(state)


def pressure_constants(mechanism: Mechanism, temperature: float) -> np.ndarray:
    """K_p of every reaction in bar to the power of its change of molecules, from the rates."""
    forward, reverse = constants(mechanism, temperature)
    return forward / reverse * (R * temperature / bar) ** mechanism.stoichiometry.sum(axis=0)


def building_blocks(compositions: Mapping[str, Mapping[str, int]], gibbs: Mapping[str, float], temperature: float,
                    reactions: Sequence[Mapping[str, Any]], cp: float = 50.0,
                    enthalpy: Mapping[str, float] | None = None) -> Mechanism:
    """An INVENTED mechanism of building blocks Q and X: standard Gibbs energies (and enthalpies) [J/mol] at the
    temperature [K] of the run, 1 bar; bare rate constants in L, mol, s and K."""
    def species(name: str, composition: Mapping[str, int]) -> dict[str, Any]:
        potential = {"form": "constant heat capacity", "at": f"{temperature} K", "cp": f"{cp} J/(mol K)",
                     "H": f"{float((enthalpy or {}).get(name, 0.0))!r} J/mol", "G": f"{float(gibbs[name])!r} J/mol"}
        return {"composition": dict(composition), "potential": potential}

    return build_mechanism({
        "mechanism": {"name": "building blocks", "phase": "ideal gas", "standard_pressure": "1 bar",
                      "units": ["dm", "mol", "s", "K"]},
        "elements": {"Q": "20 g/mol", "X": "30 g/mol"},
        "species": {name: species(name, composition) for name, composition in compositions.items()},
        "reaction": list(reactions)})


def course(mechanism: Mechanism, vessel: Mapping[str, Any], start: Mapping[str, Any], times: Sequence[float],
           method: str, rtol: float = 1e-10, atol: float = 1e-14) -> tuple[Trajectory, np.ndarray]:
    """The trajectory of a run to the last of the rising times [s], and the places of these times in it."""
    case = build_case({"vessel": dict(vessel), "start": dict(start), "until": {"time": times[-1]},
                       "solver": {"rtol": rtol, "atol": atol, "method": method},
                       "output": {"also_at": list(times)}}, mechanism=mechanism)
    trajectory = run(case)
    assert trajectory.complete, trajectory.reason
    places = np.searchsorted(trajectory.time, np.array(times) * (1 - 1e-15))
    assert np.allclose(trajectory.time[places], times, rtol=1e-14, atol=0.0)
    return trajectory, places


__all__ = ["CM3", "R", "atm", "bar", "building_blocks", "bundled", "constants", "course", "excerpt", "pressure_constants",
           "properties"]
