"""The rules behind the figures: which view of time, and where labels may stand."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from bothways import plots
from bothways.errors import InputError
from bothways.plots.parts import Curve, Panel
from bothways.plots.places import best_place, dense, spread
from bothways.plots.views import change_clock, room, settled, time_unit, time_view, time_views
from courses import along, decay, ignition


def axes_of(figure):
    """The time axes: scale, limits and label of the last row."""
    lowest = min(axes.get_position().y0 for axes in figure.axes)
    return [(axes.get_xscale(), axes.get_xlim(), axes.get_xlabel()) for axes in figure.axes
            if axes.get_position().y0 == lowest]


# Views


def test_gradual_course_has_one_linear_axis_over_the_run():
    assert axes_of(plots.course(decay(end=5.0))) == [("linear", (0.0, 5.0), "time / s")]


def test_long_flat_tail_is_left_out():
    (scale, (start, end), _), = axes_of(plots.course(decay(end=50.0)))
    assert scale == "linear" and start == 0 and 4.0 < end < 8.0  # 2 % of the height are left after 3.9 s


def test_sudden_event_has_a_second_view_that_counts_from_it():
    (scale, (start, end), label), (zoom_scale, (before, after), zoom_label) = axes_of(plots.course(ignition()))
    assert (scale, start, label) == ("linear", 0.0, "time / ms") and 1.2 <= end <= 1.5
    assert zoom_scale == "linear" and zoom_label.replace("\n", " ") == "time after the steepest temperature rise / µs"
    assert -10 < before < -2 and 2 < after < 10  # the event is 1 µs wide


def test_event_without_milestone_counts_from_half_of_the_change():
    (_, (_, end), _), (_, (before, after), label) = axes_of(plots.course(ignition(milestones={})))
    assert "half of the change" in label.replace("\n", " ") and before < 0 < after and end < 1.5


def test_change_over_decades_has_a_logarithmic_axis():
    time = np.concatenate([[0.0], np.geomspace(1e-9, 1e3, 400)])
    run = along(time, {"H2": 1.0 / (1.0 + (time / 1e-3) ** 0.3), "H2O": 1.0 - 1.0 / (1.0 + (time / 1e-3) ** 0.3)})
    (scale, (start, end), label), = axes_of(plots.course(run))
    assert scale == "log" and label == "time / s" and 10 < end <= 1e3 and 1e-13 < start < 1e-7


def test_two_changes_far_apart_have_a_logarithmic_axis():
    """Half of the change within a microsecond, half within ten seconds: neither a linear axis nor a zoom shows both."""
    time = np.concatenate([[0.0], np.geomspace(1e-9, 1e3, 400)])
    left = 0.5 / (1.0 + time / 1e-6) + 0.5 / (1.0 + time / 10.0)
    (scale, (start, end), _), = axes_of(plots.course(along(time, {"H2": left, "H2O": 1.0 - left})))
    assert scale == "log" and start < 1e-7 and end > 100


def test_first_view_never_ends_before_the_milestone():
    run = ignition(milestones={"steepest temperature rise": 4e-3})
    (_, (_, end), _), *_ = axes_of(plots.course(run))
    assert end == pytest.approx(5.0)


@pytest.mark.parametrize("axis", ["linear", "log"])
def test_axis_asked_for_is_one_over_the_whole_run(axis):
    (scale, (start, end), _), = axes_of(plots.course(ignition(), time_axis=axis))
    assert (scale, end) == (axis, 10.0) and (start == 0.0) == (axis == "linear")


def test_stretch_asked_for():
    assert axes_of(plots.course(ignition(), between=(0.5e-3, 2e-3))) == [("linear", (0.5, 2.0), "time / ms")]
    assert axes_of(plots.course(decay(), between=(1.0, 1e9))) == [("linear", (1.0, 5.0), "time / s")]


@pytest.mark.parametrize("between, axis, message", [
    ((2.0, 1.0), None, "nothing to draw between 2 s and 1 s"), ((6.0, 7.0), None, "nothing to draw"),
    ((float("nan"), 1.0), None, "nothing to draw"), ((0.0, 1.0), "log", "cannot start at zero"),
    (None, "logarithmic", "unknown time axis 'logarithmic'; expected linear or log")])
def test_impossible_views_are_refused(between, axis, message):
    with pytest.raises(InputError, match=message):
        plots.course(decay(), between=between, time_axis=axis)


@pytest.mark.parametrize("seconds, name", [(1e-12, "ns"), (5e-7, "ns"), (1e-6, "µs"), (0.01, "ms"), (1.0, "s"), (299.0, "s"),
                                           (300.0, "min"), (7200.0, "min"), (36000.0, "h"), (1e6, "d")])
def test_time_unit(seconds, name):
    assert time_unit(seconds)[0] == name


def panel(values, limits=(0.0, 1.0)):
    return Panel("x", (Curve("x", np.array(values)),), limits, 10.0)


def test_clock_weighs_panels_alike_and_ends_at_one():
    clock = change_clock([panel([0.0, 0.0, 1.0, 1.0]), panel([0.0, 100.0, 100.0, 100.0])])
    np.testing.assert_allclose(clock, [0.0, 0.5, 1.0, 1.0])
    np.testing.assert_array_equal(change_clock([panel([2.0, 2.0])]), [0.0, 0.0])


def test_room_is_the_share_of_the_axis_that_the_change_takes():
    time = np.array([0.0, 40.0, 60.0, 100.0])
    assert room(time_view(0.0, 100.0), time, np.array([0.0, 0.0, 1.0, 1.0])) == pytest.approx(0.2)
    assert room(time_view(0.0, 100.0), time, time / 100.0) == pytest.approx(1.0)
    assert room(time_view(1.0, 100.0, "log"), np.array([0.0, 10.0, 10.001, 100.0]), np.array([0.0, 0.0, 1.0, 1.0])) <= 0.02
    assert room(time_view(0.0, 30.0), time, np.array([0.0, 0.0, 1.0, 1.0])) == 0.0


def test_settled_when_within_the_visible():
    time = np.arange(5.0)
    assert settled(time, [panel([0.0, 0.5, 0.97, 0.985, 1.0])]) == 3.0
    assert settled(time, [panel([1.0] * 5)]) == 0.0


def test_flat_stretches_of_the_clock_do_not_mislead():
    """A step between two samples is found where it is, however long nothing happens before and after."""
    time = np.array([0.0, 1.0, 1.001, 50.0, 100.0])
    views = time_views(time, [panel([0.0, 0.0, 1.0, 1.0, 1.0])], {})
    assert len(views) == 2 and 0.99 < views[1].start < 1.0005 < views[1].end < 1.01


# Places


@given(st.lists(st.floats(-50, 150), max_size=9), st.floats(1, 11))
def test_spread_keeps_order_distance_and_limits(wanted, apart):
    places = spread(wanted, apart, 0.0, 100.0)
    order = np.argsort(wanted, kind="stable")
    assert np.all(np.diff(places[order]) >= apart - 1e-9)
    assert np.all(places >= -1e-9) and np.all(places <= 100.0 + 1e-9)


def test_spread_moves_nothing_without_need_and_shares_the_move():
    np.testing.assert_allclose(spread([10.0, 80.0, 30.0], 9.0, 0.0, 100.0), [10.0, 80.0, 30.0])
    np.testing.assert_allclose(spread([50.0, 50.0, 90.0], 10.0, 0.0, 100.0), [45.0, 55.0, 90.0])
    np.testing.assert_allclose(spread([-5.0, 2.0], 10.0, 0.0, 100.0), [0.0, 10.0])
    assert len(spread([], 10.0, 0.0, 100.0)) == 0


def hill(height=60.0):
    x = np.linspace(0.0, 100.0, 101)
    return dense(np.column_stack([x, height * np.exp(-(((x - 50) / 20) ** 2))]))


EXTENT, TEXT = np.array([100.0, 100.0]), np.array([20.0, 8.0])


def covers(box, points):
    return np.any((points[:, 0] > box[0]) & (points[:, 0] < box[2]) & (points[:, 1] > box[1]) & (points[:, 1] < box[3]))


def test_label_stands_at_the_top_of_a_lone_line():
    _, box = best_place(hill(), np.empty((0, 2)), EXTENT, TEXT, [])
    assert 30 < box[0] < box[2] < 70 and 60 < box[1] < 64


def test_label_avoids_lines_and_labels():
    roof = dense(np.array([[0.0, 66.0], [100.0, 66.0]]))
    _, box = best_place(hill(), roof, EXTENT, TEXT, [])
    assert not covers(box, roof) and not covers(box, hill()) and box[3] < 66
    _, other = best_place(hill(), roof, EXTENT, TEXT, [box])
    assert other[0] >= box[2] + 3 or other[2] <= box[0] - 3 or other[1] >= box[3] or other[3] <= box[1]


def test_labels_side_by_side_have_a_gap():
    own, below = (dense(np.array([[0.0, y], [100.0, y - 5.0]])) for y in (90.0, 84.0))
    _, first = best_place(own, below, EXTENT, TEXT, [])
    _, second = best_place(own, below, EXTENT, TEXT, [first])
    assert max(first[0], second[0]) - min(first[2], second[2]) >= 3.0


def test_label_keeps_away_from_lines_it_could_be_taken_for():
    """Two lines side by side on the left, alone on the right: the label goes right, though the top is left."""
    own = dense(np.array([[0.0, 50.0], [100.0, 40.0]]))
    other = dense(np.array([[0.0, 62.5], [40.0, 58.5], [45.0, 100.0]]))
    _, box = best_place(own, other, EXTENT, TEXT, [])
    assert box[0] > 40 or box[3] < 50


def test_no_place_is_no_label():
    hatching = np.concatenate([dense(np.array([[0.0, y], [100.0, y]])) for y in np.arange(0.0, 100.0, 4.0)])
    assert best_place(hill(), hatching, EXTENT, TEXT, []) is None
    assert best_place(hill() + np.array([0.0, 200.0]), np.empty((0, 2)), EXTENT, TEXT, []) is None


def test_dense_fills_gaps_and_drops_what_is_not_finite():
    points = dense(np.array([[0.0, 0.0], [np.nan, 1.0], [30.0, 40.0]]))
    assert np.max(np.hypot(*np.diff(points, axis=0).T)) <= 1.0 and len(points) >= 50
    np.testing.assert_allclose(points[[0, -1]], [[0.0, 0.0], [30.0, 40.0]])
