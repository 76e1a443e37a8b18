"""The instant of an ignition is right to the tolerance: a step's error along the course counts by the time it shifts."""

import numpy as np
import pytest

from bothways import build_case
from bothways.batch import run_and_judge

CASES = {"hydrogen-oxygen": ("H2", 1000.0, 4e-4), "methane": ("CH4", 1400.0, 5e-3)}


def ignition(name, rtol):
    """Time of the steepest rise of T, from the run's own search."""
    fuel, temperature, end = CASES[name]
    case = build_case({
        "case": {"mechanism": name}, "vessel": {"heat": "adiabatic"}, "until": {"time": end},
        "start": {"temperature": temperature, "pressure": "1 atm", "fuel": {fuel: 1}, "oxidiser": {"O2": 1, "N2": 3.76},
                  "equivalence_ratio": 1.0}, "solver": {"rtol": rtol}})
    result, _ = run_and_judge(case)
    return halfway(result)


def halfway(result):
    """When T passes halfway between its ends, by the chord of the two states around."""
    T = result.temperature
    k = int(np.argmax(T > 0.5 * (T[0] + T[-1])))
    share = (0.5 * (T[0] + T[-1]) - T[k - 1]) / (T[k] - T[k - 1])
    return result.time[k - 1] + share * (result.time[k] - result.time[k - 1])


@pytest.mark.parametrize("name", CASES)
@pytest.mark.parametrize("rtol", [1e-3, 1e-4, 1e-5])
def test_ignition_comes_in_time(name, rtol):
    """Within rtol of the time found at rtol 1e-9; the chord between two steps adds less than that."""
    assert ignition(name, rtol) == pytest.approx(ignition(name, 1e-9), rel=rtol)
