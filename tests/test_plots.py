"""The course as a figure: what it shows, where its labels stand."""

import itertools

import numpy as np
import pytest

from bothways import plots
from bothways.errors import InputError
from bothways.plots import style
from bothways.plots.labels import formula
from courses import along, decay, ignition
from trajectories import made


def rows(figure):
    """The axes by row, from the top."""
    found = {}
    for axes in figure.axes:
        found.setdefault(round(axes.get_position().y0, 6), []).append(axes)
    return [found[y] for y in sorted(found, reverse=True)]


def labels(figure):
    return [row[0].get_ylabel() for row in rows(figure)]


def lines(axes):
    return {line.get_label(): line for line in axes.lines if not line.get_label().startswith("_")}


def names(figure):
    """The names written at the lines of the composition."""
    return [text.get_text() for row in rows(figure) for axes in row for text in axes.texts
            if axes.get_ylabel() == "mole fraction" or row[0].get_ylabel().startswith("mole fraction")]


def words(figure):
    return " ".join(text.get_text() for text in figure.texts)


# What is drawn


def test_course_draws_temperature_pressure_and_mole_fractions_in_their_units():
    run = ignition()
    figure = plots.course(run)
    assert labels(figure) == ["temperature / K", "pressure / bar", "mole fraction", "mole fraction"]
    t, p, major, trace = (row[0] for row in rows(figure))
    np.testing.assert_allclose(t.lines[0].get_ydata(), run.temperature)
    np.testing.assert_allclose(p.lines[0].get_ydata(), run.pressure / 1e5)
    assert list(lines(major)) == ["H₂O", "H₂", "O₂"] and list(lines(trace)) == ["OH"]
    np.testing.assert_allclose(lines(major)["O₂"].get_ydata(), run.mole_fraction[:, 1])
    np.testing.assert_allclose(lines(major)["O₂"].get_xdata(), run.time / 1e-3)
    assert (major.get_yscale(), trace.get_yscale(), trace.get_xlabel()) == ("linear", "log", "time / ms")


def test_state_that_does_not_change_is_told_and_not_drawn():
    figure = plots.course(decay())
    assert labels(figure) == ["mole fraction"] and "700 K and 2 bar at the start" in words(figure)


@pytest.mark.parametrize("level, unit, factor", [(3e6, "bar", 1e5), (5e3, "kPa", 1e3), (60.0, "Pa", 1.0)])
def test_pressure_unit_follows_the_size(level, unit, factor):
    run = decay(pressure=level * np.linspace(0.5, 1.0, 200))
    top = rows(plots.course(run))[0][0]
    assert top.get_ylabel() == f"pressure / {unit}"
    np.testing.assert_allclose(top.lines[0].get_ydata(), run.pressure / factor)


def test_words_name_case_mechanism_vessel_and_program():
    text = words(plots.course(ignition()))
    for part in ("Hydrogen in a test", "hydrogen–oxygen (5 species, 3 reactions)", "adiabatic, constant volume",
                 "1000 K and 1 bar at the start", "Not drawn: N₂", "The run goes on to 10 ms", "not a safety case",
                 "bothways 0.1.0"):
        assert part in text


def test_no_caution_without_a_rise_and_no_end_beyond_the_axis():
    text = words(plots.course(decay()))
    assert "safety" not in text and "goes on" not in text and "Not drawn" not in text


@pytest.mark.parametrize("title, shown", [("n-heptane", "n-heptane"), ("pH of", "pH of"), ("lean air", "Lean air")])
def test_title_begins_with_a_capital_unless_a_symbol_does(title, shown):
    assert plots.course(decay(case_text=f'[case]\ntitle = "{title}"')).texts[0].get_text() == shown


def test_incomplete_run_says_so():
    text = words(plots.course(decay(complete=False, reason="the step became too small")))
    assert "Incomplete run, ended at 5 s: the step became too small" in text
    assert "Incomplete" not in words(plots.course(decay()))


def test_milestone_is_marked_in_every_panel():
    figure = plots.course(ignition(at=2e-3))
    for left, right in rows(figure):
        marks = [[line.get_xdata()[0] for line in axes.lines if list(line.get_ydata()) == [0, 1]] for axes in (left, right)]
        np.testing.assert_allclose(marks, [[2.0], [0.0]], atol=1e-9)
    assert "steepest temperature rise, 2 ms" in [text.get_text() for text in rows(figure)[0][0].texts]


# Which species


def test_named_species_are_drawn_in_their_order_and_no_others():
    assert sorted(names(plots.course(ignition(), species=["N2", "H2", "OH"]))) == ["H₂", "N₂", "OH"]
    colours = [line.get_color() for line in lines(rows(plots.course(ignition(), species=["O2", "H2"]))[2][0]).values()]
    assert colours == list(style.PALETTE.values())[:2]


def test_unknown_species_names_the_nearest():
    with pytest.raises(InputError, match="unknown species 'H20'; nearest: H2, H2O"):
        plots.course(ignition(), species=["H20"])


def test_more_species_than_line_styles_are_refused():
    run = along(np.arange(3.0), {f"S{k}": np.ones(3) for k in range(30)})
    with pytest.raises(InputError, match="29 species are too many for one figure; expected at most 28"):
        plots.course(run, species=run.species[:29])
    assert len({(c, str(d)) for c, d in style.line_styles()}) == 28


def test_reactant_of_low_conversion_is_no_diluent():
    time = np.linspace(0.0, 1.0, 20)
    run = along(time, {"H2": 1.0 - 0.01 * time, "H2O": 0.01 * time, "N2": np.full(20, 3.0)})
    assert sorted(names(plots.course(run))) == ["H₂", "H₂O"]


def test_few_of_many_are_chosen_the_largest_first():
    time = np.linspace(0.0, 1.0, 50)
    peaks = {f"I{k}": 0.5**k * 0.04 * time * (1 - time) for k in range(20)}
    run = along(time, {"H2": 1.0 - time, "H2O": time} | peaks)
    assert sorted(names(plots.course(run))) == sorted(["H₂", "H₂O", *(f"I{k}" for k in range(7))])


def test_small_fractions_are_multiples_of_a_power_of_ten():
    run = along(np.linspace(0, 1, 20), {"N2": np.ones(20), "OH": np.linspace(0, 2e-5, 20)})
    axes = rows(plots.course(run, species=["OH"]))[0][0]
    assert axes.get_ylabel() == "mole fraction / 10⁻⁵"
    np.testing.assert_allclose(lines(axes)["OH"].get_ydata()[-1], 2.0, rtol=1e-4)


@pytest.mark.parametrize("name, mass, shown", [
    ("H2O", 18.015e-3, "H₂O"), ("C2H5OH", 46.069e-3, "C₂H₅OH"), ("NC7H16", 100.2e-3, "NC7H16"),
    ("C4H612", 54.09e-3, "C4H612"), ("AR", 39.948e-3, "AR"), ("CH2*", 14.027e-3, "CH2*"), ("CH2(S)", 14.027e-3, "CH2(S)")])
def test_only_plain_formulae_have_subscripts(name, mass, shown):
    assert formula(name, mass) == shown


# Too short, too flat


@pytest.mark.parametrize("axis", [None, "log"])
@pytest.mark.parametrize("run", [
    made(1, milestones={}), made(2, milestones={}), made(3, milestones={}),
    along(np.linspace(0.0, 5.0, 9), {"H2": np.ones(9), "O2": np.ones(9)}),
    along(np.array([0.0]), {"H2": np.array([1.0]), "O2": np.array([0.0])}),
    along(np.array([0.0, 1.0]), {"H2": np.array([1.0, 0.5]), "O2": np.array([0.0, 0.5])})],
    ids=["1", "2", "3", "constant", "one of two", "two of two"])
def test_any_trajectory_is_drawn(run, axis):
    figure = plots.course(run, width="column", time_axis=axis)
    figure.canvas.draw()
    assert len(names(figure)) == np.count_nonzero(run.amount.max(axis=0))


def test_a_single_point_is_a_dot():
    run = along(np.array([0.0]), {"H2": np.array([1.0])})
    assert lines(rows(plots.course(run))[0][0])["H₂"].get_marker() == "o"


# Labels on the sheet


def crowd(count=20):
    """Many species that end close together, half of them falling out of sight."""
    time = np.linspace(0.0, 1.0, 300)
    amounts = {f"S{k}": 1e-3 + (k + 1) * 1e-4 * time for k in range(count // 2)}
    for k in range(count // 2):
        amounts[f"T{k}"] = 1e-2 * np.exp(-60 * (k + 1) * (time - 0.04 * k) ** 2) * (1 - time) ** 4
    return along(time, {"N2": np.ones(300), **amounts})


def alike():
    """As many species as a figure may show, all of one line."""
    return along(np.linspace(0.0, 1.0, 5), {f"S{k}": np.linspace(1.0, 2.0 + 1e-3 * k, 5) for k in range(style.MOST_LINES)})


@pytest.mark.parametrize("width", ["page", "column"])
@pytest.mark.parametrize("run, species", [(ignition(), None), (decay(), None), (crowd(), crowd().species),
                                          (made(), None), (alike(), alike().species)],
                         ids=["ignition", "decay", "crowd", "random", "alike"])
def test_labels_overlap_neither_each_other_nor_the_sheets_edge(run, species, width):
    figure = plots.course(run, species=species, width=width)
    boxes = [text.get_window_extent() for axes in figure.axes for text in axes.texts]
    boxes += [text.get_window_extent() for text in figure.texts if text.get_text()]
    for a, b in itertools.combinations(boxes, 2):
        across = min(a.x1, b.x1) - max(a.x0, b.x0), min(a.y1, b.y1) - max(a.y0, b.y0)
        assert min(across) < 0.12 * figure.dpi * 8 / 72  # boxes reach beyond the ink
    edge = figure.bbox
    assert all(b.x0 >= 0 and b.y0 >= 0 and b.x1 <= edge.x1 and b.y1 <= edge.y1 for b in boxes)


@pytest.mark.parametrize("at", [1e-4, 9.9e-3])
def test_text_of_a_mark_stays_on_the_sheet(at):
    figure = plots.course(ignition(at=at), time_axis="linear", width="column", species=["OH"])
    text, = rows(figure)[0][0].texts
    box = text.get_window_extent()
    assert 0 < box.x0 < box.x1 < figure.bbox.x1


@pytest.mark.parametrize("width", ["page", "column"])
@pytest.mark.parametrize("run", [ignition(), decay(), decay(temperature=np.linspace(300.0, 300.5, 200))])
def test_ordinate_numbers_stand_clear_of_the_label(run, width):
    figure = plots.course(run, width=width)
    figure.canvas.draw()
    for first, *_ in rows(figure):
        label = first.yaxis.label.get_window_extent()
        low, high = first.get_ylim()
        numbers = [t.get_window_extent() for t in first.get_yticklabels() if low <= t.get_position()[1] <= high]
        assert label.x0 >= 0 and all(label.x1 < box.x0 for box in numbers)


def test_every_curve_is_labelled_once():
    run = crowd()
    assert sorted(names(plots.course(run, species=run.species))) == sorted("N₂" if s == "N2" else s for s in run.species)
