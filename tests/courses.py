"""Trajectories of known shape for tests of figures."""

import numpy as np

from trajectories import made

MASS = {"H2": 2.016e-3, "O2": 31.998e-3, "H2O": 18.015e-3, "OH": 17.007e-3, "N2": 28.014e-3}
CASE = '[case]\ntitle = "hydrogen in a test"\nmechanism = "m"\n[vessel]\nheat = "adiabatic"\nholds = "volume"\n'


def along(time, amounts, **changes):
    """A trajectory through the amounts by species (nt) [mol]; isothermal at constant pressure unless changed."""
    n = len(time)
    fields = {"temperature": np.full(n, 700.0), "pressure": np.full(n, 2e5), "milestones": {}}
    amount = np.column_stack(list(amounts.values()))
    return made(n, species=tuple(amounts), amount=amount, time=time, molar_mass=[MASS.get(s, 0.03) for s in amounts],
                **fields | changes)


def ignition(at=1e-3, width=1e-6, end=1e-2, **changes):
    """Hydrogen and oxygen in nitrogen: a step of that width at an instant, OH passing there; T and p rise with it."""
    time = np.unique(np.concatenate([[0.0], np.linspace(1e-6, end, 300), at + width * np.linspace(-30, 30, 601)]))
    done = 0.5 * (1.0 + np.tanh((time - at) / width))
    amounts = {"H2": 2.0 * (1 - done), "O2": 1.0 - done, "H2O": 2.0 * done, "OH": 0.2 * done * (1 - done) + 1e-6 * done,
               "N2": np.full(len(time), 4.0)}
    state = {"temperature": 1000.0 + 1500.0 * done, "pressure": 1e5 * (1.0 + 2.0 * done),
             "milestones": {"steepest temperature rise": at}, "case_text": CASE}
    return along(time, amounts, **state | changes)


def decay(end=5.0, **changes):
    """A first-order decay with a time constant of 1 s, isothermal at constant pressure."""
    time = np.linspace(0.0, end, 200)
    return along(time, {"H2": np.exp(-time), "H2O": 1.0 - np.exp(-time)}, **changes)
