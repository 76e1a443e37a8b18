"""Random networks to their equilibria: they land, or say why not; nothing is wrong in silence. Failures name their seed.

Over 20 and 30 decades they land: by species while that goes, then by reactions (integrate/graded.py).
"""

import warnings
from typing import Any

import numpy as np
import pytest

import bothways.integrate.compiled_methods as driver
from bothways import Remark
from bothways.batch import run_and_judge
from bothways.case import FOREVER
from bothways.endpoint import Kind, Verdict
from bothways.integrate import Status
from networks import CLOSURES, network
from test_relaxation import chain, from_ratio

ISOTHERMAL = [closure for closure in CLOSURES if closure[1] == "isothermal"]
AT_REST = (Kind.LANDED, Kind.APART, Kind.CANNOT_START)


def ended(seed: int, *more: Any) -> tuple[str, Verdict]:
    """What is wrong with the run of a seed, if anything; and its verdict."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", Remark)
        result, last = run_and_judge(network(seed, *more))
    place = f"seed {seed} {more}: "
    if np.max(np.abs(result.element_residual)) > 1e-13:
        return f"{place}elements {np.max(np.abs(result.element_residual)):.1e}", last
    fall = result.potential[0] - np.min(result.potential)
    if np.max(np.diff(result.potential), initial=0.0) > 1e-6 * fall + 1e-13 * np.max(np.abs(result.potential)):
        return f"{place}the potential rose by {np.max(np.diff(result.potential)):.1e} of {fall:.1e}", last
    if last.kind in (Kind.LANDED, Kind.APART) and last.largest_deviation > 1e-6:
        return f"{place}{last.kind} at {last.largest_deviation:.1e}", last
    if last.kind not in AT_REST and not _told(result, last):
        return f"{place}{last.sentence} (silently: {result.statistics['status']})", last
    return "", last


def _told(result: Any, last: Verdict) -> bool:
    """Whether a run that did not land says so: not yet, and that steps or time ran out or round-off stopped it."""
    stopped = result.statistics["status"] == Status.STALLED.value or not result.complete or result.time[-1] == FOREVER
    return last.kind is Kind.NOT_YET and stopped and "instead of" in last.sentence


def test_gentle_networks_all_land() -> None:
    """Isothermal, rate constants over 6 decades, g/RT over ±2: every one, whatever its size."""
    faults = []
    for seed in range(120):
        fault, last = ended(seed, 6.0, 2.0, ISOTHERMAL[seed % 2])
        if fault or last.kind not in AT_REST:
            faults.append(fault or f"seed {seed}: {last.sentence}")
    assert not faults, "\n".join(faults)


def census(seeds: range, decades: float, spread: float) -> tuple[list[str], list[int]]:
    """Faults, and the seeds that ended elsewhere than at rest."""
    faults, short = [], []
    for seed in seeds:
        fault, last = ended(seed, decades, spread)
        faults += [fault] if fault else []
        short += [seed] if last.kind not in AT_REST else []
    return faults, short


def test_networks_over_20_decades_land(monkeypatch: pytest.MonkeyPatch) -> None:
    """All four closures, each within 2000 steps."""
    monkeypatch.setattr(driver, "MOST_STEPS_IF_ASKED", 2000)
    faults, short = census(range(80), 20.0, 4.0)
    assert not faults, "\n".join(faults)
    assert not short


@pytest.mark.slow
@pytest.mark.parametrize("decades", [20.0, 30.0])
def test_2000_networks_land_or_say_so(decades: float) -> None:
    """Every one lands, or over 30 decades one or two end by saying that round-off stopped them."""
    faults, short = census(range(2000), decades, 4.0)
    print(f"{decades:g} decades: {len(short)} of 2000 did not land: {short}")
    assert not faults, "\n".join(faults)
    assert len(short) <= (0 if decades <= 20.0 else 2)


@pytest.mark.parametrize("slow, told", [(1e-10, False), (1e-18, True)])
def test_a_slow_step_beyond_double_precision_is_called_that(slow: float, told: bool) -> None:
    """A ⇌ B ⇌ C, the second step 1e10 or 1e18 times slower than the first: not yet, and whether it can be resolved."""
    case = chain([("A", "B", 1.0), ("B", "C", slow)], from_ratio(1.0, 2.0, 3.0), {"A": 1})
    _, last = run_and_judge(case)
    assert last.kind is Kind.NOT_YET and ("more than double precision" in last.sentence) == told
