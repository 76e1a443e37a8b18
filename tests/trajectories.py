"""Trajectories for tests: random numbers under the names of a small mechanism."""

import dataclasses

import numpy as np

from bothways.trajectory import VARIABLES, Trajectory, write_trajectory

SPECIES = ("H2", "O2", "H2O", "μ-N₂O")
REACTIONS = ("2 H2 + O2 ⇌ 2 H2O", "H2 + M ⇌ 2 H + M", "O2 + M ⇌ 2 O + M")


def made(nt=6, species=SPECIES, reactions=REACTIONS, **changes):
    """A trajectory of random numbers: nothing in it may survive by being a default."""
    random = np.random.default_rng(1)
    along_time = ("temperature", "pressure", "volume", "potential", "entropy_produced", "element_residual",
                  "energy_residual")
    fields = {name: random.uniform(0.1, 1e3, nt) for name in along_time}
    fields |= {
        "time": np.geomspace(1e-12, 1e3, nt), "amount": random.uniform(0.0, 1.0, (nt, len(species))),
        "potential_name": "negative entropy", "potential_units": "J K-1", "species": species,
        "molar_mass": random.uniform(1e-3, 5e-2, len(species)), "reactions": reactions,
        "mechanism_name": "hydrogen–oxygen", "mechanism_text": '[mechanism]\r\nname = "é"\n',
        "case_text": "[case]\n\n", "sources": ("A. Author, J 1 (2001) 2", "B"),
        "statistics": {"method": "BDF", "rtol": 1e-8, "steps": 12, "note": "", "LU per step": 0.25},
        "milestones": {"steepest rise of temperature [s]": 1.25e-4}, "program_version": "0.1.0",
        "complete": True, "created": "2026-01-02T03:04:05+00:00",
    }
    return Trajectory(**fields | changes)


def everything(nt=6):
    """A trajectory with all optional variables."""
    random = np.random.default_rng(2)
    sizes = {"time": nt, "species": len(SPECIES), "reaction": len(REACTIONS)}
    extra = {v.name: "not yet" if v.text else random.normal(size=[sizes[dim] for dim in v.dims])
             for v in VARIABLES if v.optional}
    return made(nt, extra=extra)


def assert_same(found, expected):
    """Every field equal, to the bit and in type."""
    for field in dataclasses.fields(Trajectory):
        a, b = getattr(found, field.name), getattr(expected, field.name)
        if field.name == "extra":
            assert a.keys() == b.keys()
            for name in a:
                np.testing.assert_array_equal(a[name], b[name], err_msg=name, strict=True)
        elif isinstance(b, np.ndarray):
            np.testing.assert_array_equal(a, b, err_msg=field.name, strict=True)
        else:
            assert a == b and type(a) is type(b), field.name
    for notes in ("statistics", "milestones"):
        types = [{k: type(v) for k, v in getattr(t, notes).items()} for t in (found, expected)]
        assert types[0] == types[1]


def written(path, trajectory):
    write_trajectory(path, trajectory)
    return path
