"""The other figures: approach to equilibrium, equilibrium against temperature, rates of a species split by reaction."""

import dataclasses
import itertools

import numpy as np
import pytest

import bothways
from bothways import cli, plots
from bothways.along import Contributions
from bothways.constants import GAS_CONSTANT as R
from bothways.equilibrium import equilibrium
from bothways.errors import InputError
from bothways.plots import style
from bothways.plots.approach import distance
from bothways.plots.contributions import MOST, equation_text, important
from bothways.trajectory import write_trajectory
from test_plots import labels, lines, rows, words
from trajectories import made

WIDTHS = pytest.mark.parametrize("width", ["page", "column"])


@pytest.fixture(scope="module")
def flask():
    """Isothermal, constant pressure, one reaction, nitrogen beside it."""
    return bothways.run(bothways.read_case("brown-flask"))


@pytest.fixture(scope="module")
def kettle():
    """Adiabatic, constant volume, an ignition."""
    return bothways.run(bothways.read_case("hydrogen-kettle"))


@pytest.fixture(scope="module")
def heavy():
    """As the kettle, in a vessel that takes up as much heat as its contents."""
    document = {"case": {"mechanism": "hydrogen-oxygen"}, "until": {"time": "1 s"},
                "vessel": {"heat": "adiabatic", "holds": "volume", "volume": "1 L", "thermal_inertia": 2.0},
                "start": {"temperature": "1200 K", "pressure": "2 bar", "mole_ratio": {"H2": 2, "O2": 1}}}
    return bothways.run(bothways.build_case(document))


def without(run, *names):
    return dataclasses.replace(run, extra={k: v for k, v in run.extra.items() if k not in names})


def texts(figure):
    return [text.get_text() for axes in figure.axes for text in axes.texts]


def assert_apart(figure):
    """No label overlaps another or leaves the sheet."""
    with style.settings():
        figure.canvas.draw()
        boxes = [text.get_window_extent() for axes in figure.axes for text in axes.texts if text.get_text()]
        boxes += [text.get_window_extent() for text in figure.texts if text.get_text()]
        ordinates = [axes.yaxis.label.get_window_extent() for axes in figure.axes if axes.get_ylabel()]
    for a, b in itertools.combinations(boxes, 2):
        across = min(a.x1, b.x1) - max(a.x0, b.x0), min(a.y1, b.y1) - max(a.y0, b.y0)
        assert min(across) < 0.12 * figure.dpi * 8 / 72
    edge = figure.bbox
    assert all(b.x0 >= 0 and b.y0 >= 0 and b.x1 <= edge.x1 and b.y1 <= edge.y1 for b in boxes + ordinates)


# Approach to equilibrium


def test_approach_agrees_with_the_closed_form_of_one_reaction(flask):
    """G - G_eq = RT Σ n ln(x/x_eq) and A/RT = -Σ ν ln(x/x_eq), at constant T and p: the standard potentials cancel."""
    x, equal = flask.mole_fraction, flask.extra["equilibrium_amount"]
    ratio = x / (equal / equal.sum())
    with np.errstate(divide="ignore", invalid="ignore"):
        gibbs = R * 298.15 * np.sum(np.where(x > 0, flask.amount * np.log(ratio), 0.0), axis=1)
        places = [flask.species.index(name) for name in ("N2O4", "NO2")]
        affinity = np.abs(np.log(ratio[:, places]) @ [1.0, -2.0])
    figure = plots.approach(flask)
    assert labels(figure) == ["$(G - G_\\mathrm{eq})$ / J", "largest |affinity| / $RT$",
                              "furthest $|x/x_\\mathrm{eq} - 1|$"]
    for row, expected, floor in zip(rows(figure), (gibbs, affinity, np.abs(ratio - 1).max(axis=1)), (1e-6, 1e-5, 1e-12),
                                    strict=True):
        shown = row[0].lines[0].get_ydata()
        seen = np.isfinite(shown) & np.isfinite(expected) & (expected > floor)
        assert seen.sum() > 15 and row[0].get_yscale() == row[0].get_xscale() == "log"
        np.testing.assert_allclose(shown[seen], expected[seen], rtol=2e-6)


def test_curves_stop_at_round_off_and_the_figure_says_so(kettle, flask):
    for run in (kettle, flask):
        found = distance(run)
        assert np.isnan(found.potential[-1]) and found.potential[1] > 1.0
        hidden = np.isnan(found.potential)
        assert np.all(np.diff(hidden.astype(int)) >= 0)  # no noise comes back
    assert "Curves stop where round-off hides the distance" in words(plots.approach(kettle))


def test_the_vessels_own_entropy_counts(heavy):
    found = distance(heavy)
    assert heavy.potential_name == "negative entropy"
    assert found.potential[0] > 0.1 and np.isnan(found.potential[-1])


def test_helmholtz_energy_has_its_minimum_at_the_equilibrium():
    found = distance(bothways.run(bothways.read_case("hot-air")))
    assert 100.0 < found.potential[0] < 1e3 and np.isnan(found.potential[-1])


@pytest.mark.parametrize("name, label", [("Helmholtz energy", "$(A - A_\\mathrm{eq})$ / J"),
                                         ("negative entropy", "$(S_\\mathrm{eq} - S)$ / (J K$^{-1}$)")])
def test_potential_has_its_own_label(flask, kettle, name, label):
    run = kettle if name == "negative entropy" else dataclasses.replace(flask, potential_name=name)
    assert labels(plots.approach(run))[0] == label


def test_furthest_species_is_named_where_it_changes(kettle):
    figure = plots.approach(kettle)
    assert {"O₂", "H₂O₂"} <= set(texts(figure))
    drawn = [line for line in rows(figure)[2][0].lines if len(line.get_ydata()) == len(kettle.time)]
    found = distance(kettle)
    union = np.fmax.reduce([line.get_ydata() for line in drawn])
    seen = np.isfinite(found.deviation)
    np.testing.assert_array_equal(union[seen], found.deviation[seen])


def test_event_that_a_logarithmic_axis_squeezes_has_a_view_of_its_own(kettle, flask):
    right = rows(plots.approach(kettle))[2][1]
    assert right.get_xlabel().startswith("time after the steepest temperature rise / ") and right.get_xscale() == "log"
    assert [len(row) for row in rows(plots.approach(flask))] == [1, 1, 1]


def test_traces_do_not_make_an_affinity(kettle):
    """A species that is left over as noise far below all others changes nothing."""
    k, amount = kettle.species.index("H2O2"), kettle.amount.copy()
    amount[-1, k] = 1e-60
    spoilt = dataclasses.replace(kettle, amount=amount)
    assert not distance(spoilt).affinity[-1] > 1.0


@pytest.mark.parametrize("lost", ["equilibrium_amount", "equilibrium_temperature", "equilibrium_volume"])
def test_old_trajectory_without_equilibrium_is_refused(flask, lost):
    with pytest.raises(InputError, match=r"holds no equilibrium.*run the case again"):
        plots.approach(without(flask, lost))


def test_run_that_starts_at_equilibrium_is_drawn(flask):
    n = len(flask.time)
    extra = flask.extra
    at = {"amount": np.tile(extra["equilibrium_amount"], (n, 1)), "volume": np.full(n, extra["equilibrium_volume"]),
          "potential": np.full(n, flask.potential[-1])}
    figure = plots.approach(dataclasses.replace(flask, **at), width="column")
    figure.canvas.draw()
    assert "round-off" in words(figure)


@pytest.mark.parametrize("steps", [1, 2, 3])
def test_short_trajectory_is_drawn(flask, steps):
    cut = {name: getattr(flask, name)[:steps] for name in ("time", "temperature", "pressure", "volume", "amount", "potential",
                                                           "entropy_produced", "element_residual", "energy_residual")}
    plots.approach(dataclasses.replace(flask, **cut, complete=False, reason="cut")).canvas.draw()


@WIDTHS
def test_labels_of_the_approach_stand_apart(kettle, flask, width):
    for run in (kettle, flask):
        assert_apart(plots.approach(run, width=width))


# Equilibrium against temperature


def test_equilibrium_course_draws_the_equilibria():
    mechanism = bothways.read_mechanism("nitrogen-dioxide")
    charge = {"N2O4": 1.0, "N2": 4.0}
    figure = plots.equilibrium_course(mechanism, charge, (250.0, 450.0), pressure=1e5)
    axes, = rows(figure)[0]
    drawn = lines(axes)
    assert sorted(drawn) == ["NO₂", "N₂O₄"] and axes.get_xlabel() == "temperature / K"
    T = drawn["NO₂"].get_xdata()
    assert len(T) == 120 and (T[0], T[-1]) == (250.0, 450.0)
    for k in (0, 50, 119):
        at = equilibrium(mechanism, charge, temperature=float(T[k]), pressure=1e5)
        assert drawn["NO₂"].get_ydata()[k] == pytest.approx(at.fraction("NO2"), rel=1e-9)
    assert "constant pressure 1 bar" in words(figure) and "charge by amount N₂ 80 %, N₂O₄ 20 %" in words(figure)
    assert "Not drawn: N₂ (hardly reacts)" in words(figure)


def test_equilibrium_course_has_a_logarithmic_panel_of_traces_and_takes_a_volume():
    mechanism = bothways.read_mechanism("hydrogen-oxygen")
    figure = plots.equilibrium_course(mechanism, {"H2": 2.0, "O2": 1.0}, [2000.0, 1000.0, 3000.0], volume=0.3)
    major, trace = (row[0] for row in rows(figure))
    assert (major.get_yscale(), trace.get_yscale()) == ("linear", "log")
    assert "H₂O" in lines(major) and "HO₂" in lines(trace) and not set(lines(major)) & set(lines(trace))
    np.testing.assert_array_equal(lines(major)["H₂O"].get_xdata(), [1000.0, 2000.0, 3000.0])
    at = equilibrium(mechanism, {"H2": 2.0, "O2": 1.0}, temperature=2000.0, volume=0.3)
    assert lines(trace)["HO₂"].get_ydata()[1] == pytest.approx(at.fraction("HO2"), rel=1e-9)
    assert "constant volume 300 L" in words(figure) and "beyond" not in words(figure)


def test_equilibrium_course_says_where_data_end():
    mechanism = bothways.read_mechanism("hydrogen-oxygen")
    assert "beyond the thermochemical data of" in words(
        plots.equilibrium_course(mechanism, {"H2": 2.0, "O2": 1.0}, [1000.0, 9000.0], volume=0.3))


def test_equilibrium_course_draws_the_species_named():
    mechanism = bothways.read_mechanism("hydrogen-oxygen")
    figure = plots.equilibrium_course(mechanism, {"H2": 2.0, "O2": 1.0}, [1000.0, 3000.0], volume=0.3, species=["OH", "H2"])
    assert sorted(lines(rows(figure)[0][0])) == ["H₂", "OH"]


@pytest.mark.parametrize("change, message", [
    ({"species": ["H20"]}, "unknown species 'H20'; nearest: H2"), ({"temperatures": []}, "temperatures that cannot be drawn"),
    ({"temperatures": [300.0, np.nan]}, "temperatures that cannot be drawn"), ({"volume": None}, "given: temperature"),
    ({"temperatures": [0.0, 500.0]}, "temperatures that cannot be drawn"), ({"width": "wide"}, "unknown width 'wide'")])
def test_equilibrium_course_refuses(change, message):
    asked = {"temperatures": [500.0, 900.0], "volume": 1.0} | change
    with pytest.raises(InputError, match=message):
        plots.equilibrium_course(bothways.read_mechanism("hydrogen-oxygen"), {"H2": 2.0, "O2": 1.0}, **asked)


@WIDTHS
def test_labels_of_the_equilibrium_stand_apart(width):
    mechanism = bothways.read_mechanism("hydrogen-oxygen")
    for T in ([500.0, 3500.0], [1500.0]):
        assert_apart(plots.equilibrium_course(mechanism, {"H2": 2.0, "O2": 1.0, "N2": 4.0}, T, pressure=1e5, width=width))


# Rates split by reaction


def test_contributions_and_others_add_up_to_the_net_rate(kettle):
    axes = rows(plots.contributions(kettle, "OH"))[0][-1]
    drawn = {name: line.get_ydata() for name, line in lines(axes).items()}
    found = bothways.contributions(kettle, "OH")
    net = drawn.pop("net")
    assert len(drawn) == 7 and f"all {len(found.reactions) - 6} others" in drawn
    np.testing.assert_allclose(sum(drawn.values()), net, atol=1e-9 * np.max(np.abs(found.rate)))
    np.testing.assert_allclose(net * 1e6, found.rate.sum(axis=1), atol=1e-9 * np.max(np.abs(found.rate)))
    assert axes.get_yscale() == "linear" and "H + O₂ ⇌ O + OH" in drawn
    assert rows(plots.contributions(kettle, "OH"))[0][0].get_ylabel() == "rate of formation of OH / (10⁶ mol m⁻³ s⁻¹)"


def test_every_line_is_labelled_once_and_zero_is_marked(kettle):
    figure = plots.contributions(kettle, "OH")
    named = [text for text in texts(figure) if not text.startswith("steepest")]
    assert sorted(named) == sorted(lines(rows(figure)[0][0]))
    for axes in figure.axes:
        assert any(np.all(np.asarray(line.get_ydata()) == 0) and line.get_label().startswith("_") for line in axes.lines)


def test_equations_stand_beside_the_panel(kettle):
    beside = [text for axes in plots.contributions(kettle, "OH").axes for text in axes.texts if "⇌" in text.get_text()]
    assert len(beside) == 6 and all(text.xy[0] > 1.0 for text in beside)


def test_labels_of_rates_have_samples_of_their_lines_instead_of_leaders(kettle):
    axes = plots.contributions(kettle, "OH").axes[-1]
    samples = [line for line in axes.get_children() if getattr(line, "get_label", str)() == "_leader"]
    assert len(samples) == 8 and all(np.ptp(line.get_ydata()) == 0 for line in samples)


def test_the_important_are_large_at_an_instant_or_in_all():
    time = np.linspace(0.0, 100.0, 1001)
    slow, burst = np.full(1001, 1.0), np.where(time < 0.15, 50.0, 0.0)
    small = [np.full(1001, 1e-3 * (k + 1)) for k in range(10)]
    chosen = important(time, np.column_stack([*small, slow, -burst]))
    assert len(chosen) == MOST and set(chosen[:2]) == {10, 11} and chosen[2:] == [9, 8, 7, 6]


def test_rates_in_the_file_are_drawn(flask):
    shape = (len(flask.time), 1)
    stored = dataclasses.replace(flask, extra=flask.extra | {"rate_forward": np.full(shape, 7.0), "rate_reverse": np.ones(shape)})
    drawn = lines(rows(plots.contributions(stored, "NO2"))[0][0])
    np.testing.assert_allclose(drawn["net"].get_ydata(), 12.0)


def burst_and_creep(monkeypatch, creep):
    """Two reactions: a short burst, then a slow course that turns over `creep` times as much."""
    time = np.concatenate([np.linspace(0.0, 1e-6, 100), np.geomspace(1.1e-6, 1.0, 300)])
    burst = np.where(time < 1e-6, 1e6, 0.0)
    found = Contributions("H2", time, ("2 H2 + O2 ⇌ 2 H2O", "H2 + M ⇌ 2 H + M"),
                          np.column_stack([burst, np.where(time > 1e-6, -creep, 0.0)]))
    monkeypatch.setattr("bothways.along.contributions", lambda run, species: found)
    return made(len(time), time=time, milestones={}, molar_mass=[2.016e-3, 32e-3, 18e-3, 44e-3])


@pytest.mark.parametrize("creep, scale", [(100.0, "symlog"), (0.01, "linear")])
def test_axis_is_not_linear_if_most_is_turned_over_out_of_sight(monkeypatch, creep, scale):
    figure = plots.contributions(burst_and_creep(monkeypatch, creep), "H2")
    figure.canvas.draw()
    axes = rows(figure)[0][0]
    assert axes.get_yscale() == scale and axes.get_ylabel().startswith("rate of formation of H₂ / (")
    assert ("logarithmic beyond" in words(figure)) == (scale == "symlog")


def test_species_that_no_reaction_touches_is_drawn_with_a_word(flask):
    figure = plots.contributions(flask, "N2", width="column")
    figure.canvas.draw()
    assert "No reaction makes or takes N2" in words(figure)


def test_long_equation_is_wrapped_and_its_species_have_subscripts():
    run = made(molar_mass=[2.016e-3, 31.998e-3, 18.015e-3, 44e-3])
    size = style.size_named("column")
    text = equation_text(run, " + ".join(["2 H2", "O2"] * 4) + " ⇌ 8 H2O", size)
    assert text.count("\n") >= 1 and "₂" in text and "\u00a0" not in text
    assert not any(line.endswith("+") for line in text.split("\n"))
    assert all(style.text_width(line, size.text) <= 0.36 * size.width for line in text.split("\n"))


@WIDTHS
@pytest.mark.parametrize("species", ["OH", "H2O2"])
def test_labels_of_the_rates_stand_apart(kettle, species, width):
    assert_apart(plots.contributions(kettle, species, width=width))


def test_unknown_species_of_rates_names_the_nearest(kettle):
    with pytest.raises(InputError, match=r"no species 'HO3'.*nearest: HO2"):
        plots.contributions(kettle, "HO3")


def test_incomplete_run_is_drawn_and_marked(flask):
    cut = dataclasses.replace(flask, complete=False, reason="stopped")
    for figure in (plots.approach(cut), plots.contributions(cut, "NO2")):
        assert "Incomplete run, ended at 100 µs: stopped" in words(figure)


# Command line


@pytest.fixture
def file(tmp_path, flask):
    write_trajectory(tmp_path / "run.h5", flask)
    return tmp_path / "run.h5"


@pytest.mark.parametrize("options, name", [(["--approach"], "run-approach.png"),
                                           (["--contributions", "NO2"], "run-contributions.png")])
def test_command_draws_the_other_figures(file, capsys, options, name):
    assert cli.main(["plot", str(file), "--column", *options]) == 0
    assert capsys.readouterr().out == f"{file.with_name(name)}\n"
    assert file.with_name(name).read_bytes().startswith(b"\x89PNG")


@pytest.mark.parametrize("options, message", [
    (["--contributions", "NO3"], "no species 'NO3' in this run (nearest: NO2"),
    (["--approach", "--contributions", "NO2"], "not allowed with"),
    (["--approach", "--log"], "--log beside --approach"),
    (["--contributions", "NO2", "--species", "NO2"], "--species beside --contributions"),
    (["--approach", "--output", "x.eps"], "x.eps: the suffix is '.eps'; expected .png, .svg, .pdf")])
def test_command_refuses_in_one_line(file, capsys, monkeypatch, options, message):
    monkeypatch.chdir(file.parent)
    assert cli.main(["plot", str(file), *options]) == 2
    error = capsys.readouterr().err
    assert message in error and error.count("\n") == 1
    assert [path.name for path in file.parent.iterdir()] == ["run.h5"]


def test_command_refuses_the_approach_of_an_old_file(tmp_path, capsys, flask):
    write_trajectory(tmp_path / "old.h5", without(flask, "equilibrium_amount"))
    assert cli.main(["plot", str(tmp_path / "old.h5"), "--approach"]) == 2
    assert "run the case again" in capsys.readouterr().err and not (tmp_path / "old-approach.png").exists()


def test_equilibrium_command_draws(tmp_path, capsys):
    picture = tmp_path / "x.svg"
    arguments = ["equilibrium", "brown-flask", "--temperatures", "250", "450", "--plot", str(picture)]
    assert cli.main(arguments) == 0
    assert f"{'plot':<14}{picture}" in capsys.readouterr().out and b"<svg" in picture.read_bytes()
    assert cli.main(arguments) == 2 and "exists already" in capsys.readouterr().err


@pytest.mark.parametrize("options, message", [
    (["--plot", "x.png"], "--plot without --temperatures"),
    (["--temperatures", "300", "--plot", "x.gif"], "x.gif: the suffix is '.gif'"),
    (["--temperatures", "300", "400", "--csv", "x.png", "--plot", "x.png"], "needed for something else")])
def test_equilibrium_command_refuses(tmp_path, capsys, monkeypatch, options, message):
    monkeypatch.chdir(tmp_path)
    assert cli.main(["equilibrium", "brown-flask", *options]) == 2
    assert message in capsys.readouterr().err and not list(tmp_path.iterdir())
