"""Negative controls: a reverse rate off by 1e-6, a pruned Jacobian. What the tests and the judge look at must notice."""

from dataclasses import replace

import numpy as np
import pytest

from bothways import build_case, read_case, read_mechanism
from bothways.batch import run_and_judge
from bothways.endpoint import Kind, target_of
from bothways.kernels import layout
from bothways.mechanism import build, build_tables, table_view


def kettle(**more):
    """The hydrogen case with a mechanism of its own, whose tables may be damaged."""
    case = read_case("hydrogen-kettle")
    return build_case({**case.document, **more}, mechanism=build(read_mechanism("hydrogen-oxygen").to_dict()))


def damage(case, name, change):
    """Replaces an array of the case's tables by what `change` makes of a copy."""
    tables = build_tables(case.mechanism)
    kind, names = ("ints", layout.INTS) if name in layout.INTS else ("floats", layout.FLOATS)
    packed = getattr(tables, kind).copy()
    slot = layout.offset_slot(names, name)
    part = slice(tables.ints[slot], tables.ints[slot + 1])
    packed[part] = change(packed[part].copy())
    case.mechanism.__dict__["_tables"] = replace(tables, **{kind: packed})
    return case


def shift_water(off):
    """g/RT of water off by so much, in the scales of the balanced rates alone."""
    def change(reduction):
        place = read_mechanism("hydrogen-oxygen").index("H2O")
        reduction[2 * place + 1] += off
        return reduction
    return change


def imbalance(case):
    """Largest relative difference of forward and reverse rates at the independent equilibrium."""
    own = target_of(case).own
    forward, reverse = case.equations().reaction_rates(np.append(own.amount / own.volume, own.temperature))
    running = forward > 0.0  # species that the charge does not allow have none
    return np.max(np.abs(forward[running] / reverse[running] - 1.0))


def test_a_reverse_rate_off_by_1e_6_is_seen_at_equilibrium():
    """The rates at the independent equilibrium balance to 1e-10, and fail to by just what was planted."""
    assert imbalance(kettle()) < 1e-10
    assert imbalance(damage(kettle(), "reduction", shift_water(1e-6))) == pytest.approx(1e-6, rel=0.1)


def test_reverse_rates_off_by_1e_6_end_off_by_as_much():
    """The run is judged by the equilibrium that shares no kinetics: 4e-16 off without the fault, above 1e-6 with it."""
    ends = []
    for off in (0.0, 5e-6):
        case = damage(kettle(until={"time": "10 s"}, solver={"rtol": 1e-9}), "reduction", shift_water(off))
        ends.append(run_and_judge(case)[1])
    assert ends[0].kind is Kind.LANDED and ends[0].largest_deviation < 1e-8
    assert ends[1].kind is not Kind.LANDED and ends[1].largest_deviation > 1e-6


def without_one(target):
    """One of the places where partials go, turned to where nobody looks."""
    target[np.argmin(target)] = np.max(target)
    return target


def test_a_pruned_jacobian_lets_elements_drift():
    """What the judge has to mend grows from round-off to far above; the exact J's test sees the entry as well."""
    drift = [run_and_judge(case)[0].statistics["largest_drift_of_totals"]
             for case in (kettle(), damage(kettle(), "target", without_one))]
    assert drift[0] < 1e-14 and drift[1] > 1e5 * drift[0]
    y = np.append(np.linspace(1.0, 2.0, 13), 1500.0)
    exact, pruned = (case.equations().J(0.0, y) for case in (kettle(), damage(kettle(), "target", without_one)))
    assert np.max(np.abs(exact - pruned) / np.max(np.abs(exact), axis=0)) > 1e-8


def test_the_damage_is_done_to_a_copy():
    mechanism = read_mechanism("hydrogen-oxygen")
    before = table_view(build_tables(mechanism), "reduction").copy()
    damage(kettle(), "reduction", shift_water(1.0))
    assert np.array_equal(table_view(build_tables(mechanism), "reduction"), before)


def test_conservation_over_100_000_steps():
    """Elements to 1e-13 and energy to 1e-12 over the ignition and all that follows, a step at each of 1e5 times."""
    times = np.linspace(0.0, 2e-3, 100_002)[1:-1]
    result, _ = run_and_judge(kettle(until={"time": "2 ms"}, output={"also_at": times.tolist()}))
    assert result.statistics["steps"] >= 100_000 and np.max(result.temperature) > 2500
    assert np.max(np.abs(result.element_residual)) < 1e-13 and np.max(np.abs(result.energy_residual)) < 1e-12
