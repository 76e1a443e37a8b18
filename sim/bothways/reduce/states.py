"""States along runs, at which relations between species are looked at."""

import numpy as np

from ..along import rates_along
from ..compare.runs import Run

STATES_PER_RUN = 30
"""So many states of each run (our own choice; more change little)."""
LAST_CHANGE = 0.95
"""States after this share of all change of composition are left out [-]: near equilibrium net rates are differences of
nearly equal ones, and any slow side reaction seems to matter (our own choice)."""


def sampled(run: Run, count: int = STATES_PER_RUN) -> np.ndarray:
    """Places of about `count` accepted steps (k), spread evenly on a clock that counts half by time up to the event and
    half by change of composition, so that the induction as well as the event are there."""
    x = run.columns["amount"] / run.columns["amount"].sum(axis=1, keepdims=True)
    change = np.concatenate([[0.0], np.cumsum(0.5 * np.abs(np.diff(x, axis=0)).sum(axis=1))])
    if change[-1] == 0:
        return np.array([0])
    change /= change[-1]
    event = max(float(np.interp(0.5, change, run.time)), run.time[1])
    clock = 0.5 * (np.minimum(run.time / event, 1.0) + change)
    last = float(np.interp(LAST_CHANGE, change, clock))
    levels = (np.arange(count) + 0.5) / count * last
    return np.unique(np.searchsorted(clock, levels).clip(1, len(clock) - 1))


def net_rates(run: Run) -> np.ndarray:
    """Net rates of all reactions at the sampled states, (states, reactions) [mol/(m3 s)]."""
    places = sampled(run)
    rates = rates_along(run.case.mechanism, *(run.columns[name][places] for name in ("amount", "temperature", "volume")))
    return rates["rate_forward"] - rates["rate_reverse"]
