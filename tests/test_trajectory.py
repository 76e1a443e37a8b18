"""The trajectory and its file: what is written comes back, through any library."""

import dataclasses
import pickle

import h5py
import numpy as np
import pytest

from bothways.errors import InputError
from bothways.trajectory import LAYOUT, VARIABLES, Trajectory, read_trajectory
from trajectories import REACTIONS, SPECIES, assert_same, everything, made, written


@pytest.fixture
def path(tmp_path):
    return tmp_path / "run.h5"


# In memory


def test_derived_quantities():
    t = made(nt=2, species=("H2", "O2"), amount=[[1.0, 3.0], [2.0, 2.0]], molar_mass=[0.002, 0.032],
             volume=[2.0, 4.0])
    np.testing.assert_allclose(t.mole_fraction, [[0.25, 0.75], [0.5, 0.5]], rtol=1e-15)
    np.testing.assert_allclose(t.mass_fraction, [[2 / 98, 96 / 98], [4 / 68, 64 / 68]], rtol=1e-15)
    np.testing.assert_allclose(t.concentration, [[0.5, 1.5], [0.5, 0.5]], rtol=1e-15)
    np.testing.assert_allclose(t.density, [0.049, 0.017], rtol=1e-15)
    np.testing.assert_array_equal(t.of("O2"), [3.0, 2.0])
    assert len(t) == 2


def test_unknown_species_names_the_nearest():
    with pytest.raises(InputError, match="unknown species 'h2o'; nearest: H2O"):
        made().of("h2o")


def test_wrong_shape_is_refused():
    with pytest.raises(InputError, match=r"amount: the shape is \(4, 6\); expected \(6, 4\).*time, species"):
        made(amount=np.ones((4, 6)))


def test_unknown_extra_names_the_nearest():
    with pytest.raises(InputError, match="extra: unknown variable 'afinity'; nearest: affinity"):
        made(extra={"afinity": np.zeros((6, 3))})


@pytest.mark.parametrize("notes", [{"units": 1.0}, {"_x": 1}, {"": 1}, {"a\n": 1}, {"a ": 1}, {"a": None}])
def test_notes_that_a_file_cannot_keep_are_refused(notes):
    with pytest.raises(InputError, match=r"statistics: .* cannot be kept"):
        made(statistics=notes)


def test_arrays_are_read_only_and_the_callers_stay_writable():
    mine = np.ones(6)
    t = made(pressure=mine)
    with pytest.raises(ValueError, match="read-only"):
        t.pressure[0] = 2.0
    mine[0] = 3.0


def test_it_can_be_sent_to_another_process():
    assert_same(pickle.loads(pickle.dumps(everything())), everything())


# Round trip


def test_round_trip_is_exact(path):
    assert_same(read_trajectory(written(path, made())), made())


def test_round_trip_with_all_optional_variables(path):
    assert_same(read_trajectory(written(path, everything())), everything())


def test_table_covers_every_field():
    """A field with a default, forgotten in the table, would not be noticed by the round trips."""
    told = {v.field or v.name for v in VARIABLES if not v.optional}
    rest = {"potential_name", "potential_units", "mechanism_name", "sources", "statistics", "milestones",
            "program_version", "complete", "reason", "created", "extra"}
    assert told | rest == {field.name for field in dataclasses.fields(Trajectory)}


@pytest.mark.parametrize("changes", [
    {"reactions": ()}, {"sources": ()}, {"statistics": {}, "milestones": {}}, {"mechanism_text": ""},
    {"nt": 1}, {"mechanism_text": "# 0.7 MB\n" * 90000}, {"sources": ("long " * 3000 + "end",) * 9},
    {"statistics": {f"count {i}": i for i in range(1500)}}, {"species": ("A",)},
    {"milestones": {"peak of 1/2 A": 1.0, "peak of 50%2F": 2.0, "peak of %": 3.0, "peak of %252F/": 4.0}},
])
def test_round_trip_of_corner_cases(path, changes):
    assert_same(read_trajectory(written(path, made(**changes))), made(**changes))


def test_notes_of_numpy_and_truth_become_plain_numbers(path):
    t = read_trajectory(written(path, made(statistics={"a": np.float64(2.5), "b": np.int32(3), "c": True})))
    assert t.statistics == {"a": 2.5, "b": 3, "c": 1}
    assert [type(v) for v in t.statistics.values()] == [float, int, int]


def test_a_source_over_several_lines_becomes_one_line(path):
    assert read_trajectory(written(path, made(sources=["A,\n   J 1\n", " "]))).sources == ("A, J 1",)


def test_large_arrays_are_packed_and_exact(path):
    t = made(nt=5000)
    assert_same(read_trajectory(written(path, t)), t)
    with h5py.File(path) as file:
        assert file["amount"].compression == "gzip" and file["amount"].shuffle
        assert file["time"].compression is None


def test_incomplete_run_says_so(path):
    t = read_trajectory(written(path, made(complete=False, reason="interrupted at 0.3 s")))
    assert (t.complete, t.reason) == (False, "interrupted at 0.3 s")
    assert "incomplete: interrupted at 0.3 s" in repr(t)
    with h5py.File(path) as file:
        assert file.attrs["complete"] == 0


# Through other libraries


@pytest.mark.parametrize("nt", [6, len(SPECIES)])
def test_plain_h5py(path, nt):
    t = everything(nt)
    with h5py.File(written(path, t), "r") as file:
        np.testing.assert_array_equal(file["amount"][:], t.amount)
        assert list(file["species"].asstr()) == list(SPECIES)
        for variable in VARIABLES:
            dataset = file[variable.name]
            assert dataset.attrs["units"] and dataset.attrs["long_name"], variable.name
            if not dataset.is_scale:
                assert tuple(axis[0].name for axis in dataset.dims) == tuple(f"/{d}" for d in variable.dims)
        scales = {name: dataset.attrs["NAME"] for name, dataset in file.items() if dataset.is_scale}
        assert scales == {"time": b"time", "species": b"species", "reaction": b"reaction"}
        assert file.attrs["complete"] == 1 and file.attrs["Conventions"] == LAYOUT
        for name in ("title", "history", "source", "references", "mechanism_sha256", "case_sha256"):
            assert isinstance(file.attrs[name], str) and file.attrs[name], name


def opened_by_xarray(path, engine):
    xarray = pytest.importorskip("xarray")
    pytest.importorskip({"netcdf4": "netCDF4"}.get(engine, engine))
    with xarray.open_dataset(path, engine=engine, decode_timedelta=True) as dataset:
        return dataset.load()


ENGINES = pytest.mark.parametrize("engine", ["h5netcdf", "netcdf4"])


@ENGINES
@pytest.mark.parametrize("nt", [6, len(SPECIES), len(REACTIONS)])
def test_xarray_opens_it_as_it_is(path, engine, nt):
    """Axes of equal length (nt = ns, nt = nr) come back unswapped, a picosecond stays one, text is text."""
    t = everything(nt)
    ds = opened_by_xarray(written(path, t), engine)
    assert dict(ds.sizes) == {"time": nt, "species": 4, "reaction": 3}
    assert set(ds.coords) == {"time", "species", "reaction"}
    assert ds.time.dtype == np.float64 and ds.time.attrs["units"] == "s"
    np.testing.assert_array_equal(ds.time, t.time)
    assert ds.species.values.tolist() == list(SPECIES) and ds.reaction.values.tolist() == list(REACTIONS)
    np.testing.assert_array_equal(ds.amount.sel(species="H2O"), t.of("H2O"))
    for v in VARIABLES:
        assert ds[v.name].dims == v.dims
        assert ds[v.name].attrs["units"] == (v.units or "J K-1")
        values = t.extra[v.name] if v.optional else getattr(t, v.field or v.name)
        np.testing.assert_array_equal(ds[v.name].values, values)
    assert ds.potential.attrs["long_name"] == "negative entropy"


@ENGINES
def test_xarray_sees_the_attributes(path, engine):
    t = made(complete=False, reason="stopped")
    ds = opened_by_xarray(written(path, t), engine)
    assert (ds.attrs["complete"], ds.attrs["reason"], ds.attrs["program_version"]) == (0, "stopped", "0.1.0")
    assert ds.attrs["references"].split("\n") == list(t.sources)
    assert ds.statistics.attrs.items() >= t.statistics.items()
    assert ds.milestones.attrs.items() >= t.milestones.items()
    assert (ds.statistics.item(), ds.milestones.item()) == (5, 1)
    assert ds.mechanism_text.item() == t.mechanism_text


@ENGINES
def test_saved_again_by_xarray_it_is_still_a_trajectory(path, engine):
    t = dataclasses.replace(everything(), milestones={"peak of 1/2 A": 1.0})
    again = path.with_name("again.h5")
    opened_by_xarray(written(path, t), engine).to_netcdf(again, engine=engine)
    assert_same(read_trajectory(again), t)


def test_the_netcdf_library_can_append(path):
    netcdf = pytest.importorskip("netCDF4")
    with netcdf.Dataset(written(path, made()), "a") as file:
        file.createVariable("mine", "f8", ("time", "species"))[:] = 1.0
    assert_same(read_trajectory(path), made())
