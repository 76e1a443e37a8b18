"""Rates, affinities and contributions along a run."""

import numpy as np
import pytest

from bothways import InputError, build_case, read_mechanism, read_trajectory, run, write_trajectory
from bothways.along import contributions, rates_along


def course(rates=True):
    return run(build_case({
        "case": {"mechanism": "hydrogen-oxygen"}, "vessel": {"heat": "adiabatic"},
        "start": {"temperature": "1100 K", "pressure": "1 atm", "mole_ratio": {"H2": 2, "O2": 1, "AR": 5}},
        "until": {"time": "1 ms"}, "output": {"rates": rates}}))


def test_rates_balance_the_species(tmp_path):
    """Σ ν (forward - reverse) is the slope of the concentration, and A = RT ln(forward/reverse)."""
    result = course()
    write_trajectory(tmp_path / "run.h5", result)
    stored = read_trajectory(tmp_path / "run.h5").extra
    forward, reverse, affinity = (stored[k] for k in ("rate_forward", "rate_reverse", "affinity"))
    k = len(result) // 2
    both = (forward[k] > 0) & (reverse[k] > 0)
    expected = 8.31446261815324 * result.temperature[k] * np.log(forward[k][both] / reverse[k][both])
    assert np.allclose(affinity[k][both], expected, rtol=1e-9, atol=1e-7)
    water = contributions(result, "H2O")
    slope = np.gradient(result.concentration[:, result.species.index("H2O")], result.time)
    assert np.allclose(water.rate.sum(axis=1)[k], slope[k], rtol=0.02)


def test_contributions_come_sorted_and_need_no_stored_rates():
    with_rates, without = course(), course(rates=False)
    assert "rate_forward" not in without.extra
    a, b = contributions(with_rates, "OH"), contributions(without, "OH")
    assert a.reactions == b.reactions and np.allclose(a.rate, b.rate)
    peaks = np.max(np.abs(a.rate), axis=0)
    assert np.all(np.diff(peaks) <= 0) and a.records()[0]["reaction"] == a.reactions[0]
    assert "H + O2 ⇌ O + OH" in a.reactions[:6]
    with pytest.raises(InputError, match="nearest: OH"):
        contributions(with_rates, "OHx")


def test_affinities_of_absent_species_are_infinite():
    result = course()
    first = result.extra["affinity"][0]
    j = result.reactions.index("H + O2 ⇌ O + OH")
    assert np.isnan(first[j])
    assert first[result.reactions.index("H2 + M ⇌ 2 H + M")] == np.inf
    assert result.extra["rate_reverse"][0][result.reactions.index("H2 + M ⇌ 2 H + M")] == 0
    again = rates_along(read_mechanism("hydrogen-oxygen"), result.amount[:1], result.temperature[:1], result.volume[:1])
    assert np.array_equal(again["rate_forward"][0], result.extra["rate_forward"][0])
