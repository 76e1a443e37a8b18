"""The trajectory and its file: what is written comes back, through any library, whole or not at all."""

import dataclasses
import os
import subprocess
import sys
import textwrap
from pathlib import Path

import h5py
import numpy as np
import pytest

from bothways import hdf5, outfile
from bothways.errors import InputError
from bothways.trajectory import (
    LAYOUT,
    VARIABLES,
    Trajectory,
    check_writable,
    read_trajectory,
    write_trajectory,
)

SPECIES = ("H2", "O2", "H2O", "μ-N₂O")
REACTIONS = ("2 H2 + O2 ⇌ 2 H2O", "H2 + M ⇌ 2 H + M", "O2 + M ⇌ 2 O + M")


def made(nt=6, species=SPECIES, reactions=REACTIONS, **changes):
    """A trajectory of random numbers: nothing in it may survive by being a default."""
    random = np.random.default_rng(1)
    along_time = ("temperature", "pressure", "volume", "potential", "entropy_produced", "element_residual",
                  "energy_residual")
    fields = {name: random.uniform(0.1, 1e3, nt) for name in along_time}
    fields |= dict(
        time=np.geomspace(1e-12, 1e3, nt), amount=random.uniform(0.0, 1.0, (nt, len(species))),
        potential_name="negative entropy", potential_units="J K-1", species=species, reactions=reactions,
        molar_mass=random.uniform(1e-3, 5e-2, len(species)), mechanism_name="hydrogen–oxygen",
        mechanism_text='[mechanism]\r\nname = "é"\n', case_text="[case]\n\n", sources=("A, J 1 (2001)", "B"),
        statistics={"method": "BDF", "rtol": 1e-8, "steps": 12, "note": "", "LU per step": 0.25},
        milestones={"steepest rise of temperature [s]": 1.25e-4}, program_version="0.1.0", complete=True,
        created="2026-01-02T03:04:05+00:00",
    )
    return Trajectory(**fields | changes)


def everything(nt=6):
    """A trajectory with all optional variables."""
    random = np.random.default_rng(2)
    sizes = {"time": nt, "species": len(SPECIES), "reaction": len(REACTIONS)}
    extra = {v.name: "not yet" if v.text else random.normal(size=[sizes[dim] for dim in v.dims])
             for v in VARIABLES if v.optional}
    return made(nt, extra=extra)


def assert_same(found, expected):
    """Every field equal, to the bit and in type."""
    for field in dataclasses.fields(Trajectory):
        a, b = getattr(found, field.name), getattr(expected, field.name)
        if field.name == "extra":
            assert a.keys() == b.keys()
            for name in a:
                np.testing.assert_array_equal(a[name], b[name], err_msg=name, strict=True)
        elif isinstance(b, np.ndarray):
            np.testing.assert_array_equal(a, b, err_msg=field.name, strict=True)
        else:
            assert a == b and type(a) is type(b), field.name
    for notes in ("statistics", "milestones"):
        types = [{k: type(v) for k, v in getattr(t, notes).items()} for t in (found, expected)]
        assert types[0] == types[1]


@pytest.fixture
def path(tmp_path):
    return tmp_path / "run.h5"


def written(path, trajectory):
    write_trajectory(path, trajectory)
    return path


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


@pytest.mark.parametrize("notes", [{"units": 1.0}, {"_x": 1}, {"": 1}, {"a/b": 1}, {"a ": 1}, {"a": None}])
def test_notes_that_a_file_cannot_keep_are_refused(notes):
    with pytest.raises(InputError, match="statistics: .* cannot be kept"):
        made(statistics=notes)


def test_arrays_are_read_only_and_the_callers_stay_writable():
    mine = np.ones(6)
    t = made(pressure=mine)
    with pytest.raises(ValueError, match="read-only"):
        t.pressure[0] = 2.0
    mine[0] = 3.0


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
    dict(reactions=()), dict(sources=()), dict(statistics={}, milestones={}), dict(mechanism_text=""),
    dict(nt=1), dict(mechanism_text="# 0.7 MB\n" * 90000), dict(sources=("long " * 3000 + "end",) * 9),
    dict(statistics={f"count {i}": i for i in range(70)}), dict(species=("A",)),
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
        assert {d for d in file if file[d].is_scale} == {"time", "species", "reaction"}
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
    again = path.with_name("again.h5")
    opened_by_xarray(written(path, everything()), engine).to_netcdf(again, engine=engine)
    assert_same(read_trajectory(again), everything())


def test_the_netcdf_library_can_append(path):
    netcdf = pytest.importorskip("netCDF4")
    with netcdf.Dataset(written(path, made()), "a") as file:
        file.createVariable("mine", "f8", ("time", "species"))[:] = 1.0
    assert_same(read_trajectory(path), made())


# Whole or not at all


def test_existing_file_is_refused_and_replaced_on_demand(path):
    written(path, made())
    with pytest.raises(InputError, match=r"run.h5: the file exists already; .*--replace \(.* replace=True\)"):
        write_trajectory(path, made(nt=9))
    assert len(read_trajectory(path)) == 6
    write_trajectory(path, made(nt=9), replace=True)
    assert len(read_trajectory(path)) == 9
    assert os.listdir(path.parent) == ["run.h5"]


def test_file_that_appears_meanwhile_is_not_overwritten(path, monkeypatch):
    write = outfile._write_to_disk

    def slow(*arguments):
        write(*arguments)
        path.write_text("of someone else")

    monkeypatch.setattr(outfile, "_write_to_disk", slow)
    with pytest.raises(InputError, match="exists already"):
        write_trajectory(path, made())
    assert path.read_text() == "of someone else" and os.listdir(path.parent) == ["run.h5"]


def test_check_writable_leaves_nothing(path):
    assert check_writable(path) == Path(os.path.realpath(path))
    assert not os.listdir(path.parent)


def test_check_writable_refuses_what_writing_would(path):
    with pytest.raises(InputError, match="nowhere; create it"):
        check_writable(path.parent / "nowhere" / "run.h5")
    with pytest.raises(InputError, match="is no regular file"):
        check_writable(path.parent, replace=True)
    with pytest.raises(InputError, match="null character"):
        check_writable("a\0b")
    path.touch()
    with pytest.raises(InputError, match="exists already"):
        check_writable(path)
    with pytest.raises(InputError, match="no folder|cannot be written"):
        check_writable(path / "run.h5")


def test_unwritable_folder(path, monkeypatch):
    """The system's refusal, forbidden by permissions or, for those whom these do not bind, acted."""
    path.parent.chmod(0o555)
    if os.access(path.parent, os.W_OK):
        def refuse(*_, **__):
            raise PermissionError(13, "Permission denied")
        monkeypatch.setattr(Path, "touch", refuse)
    try:
        for call in (lambda: check_writable(path), lambda: write_trajectory(path, made())):
            with pytest.raises(InputError, match=r"run.h5: cannot be written \(Permission denied\)"):
                call()
    finally:
        path.parent.chmod(0o755)
    assert not os.listdir(path.parent)


def test_read_only_file_is_not_replaced(path):
    written(path, made())
    path.chmod(0o444)
    if os.access(path, os.W_OK):
        pytest.skip("permissions do not bind this user")
    with pytest.raises(InputError, match="is read-only"):
        write_trajectory(path, made(), replace=True)


@pytest.mark.parametrize(("where", "failure", "shown"), [
    ((hdf5, "_create_variable"), MemoryError(), MemoryError),
    ((os, "fsync"), OSError(28, "No space left on device"), InputError),
    ((os, "replace"), PermissionError(13, "Permission denied"), InputError),
    ((os, "replace"), KeyboardInterrupt(), KeyboardInterrupt),
])
@pytest.mark.parametrize("before", [False, True])
def test_failure_while_writing_leaves_nothing(path, monkeypatch, where, failure, shown, before):
    """Nothing new beside the old file, and the old one untouched."""
    if before:
        written(path, made(nt=3))

    def fail(*_):
        raise failure

    monkeypatch.setattr(*where, fail)
    with pytest.raises(shown):
        write_trajectory(path, made(), replace=before)
    assert os.listdir(path.parent) == ["run.h5"] * before
    assert not before or len(read_trajectory(path)) == 3


@pytest.mark.skipif(sys.platform == "win32", reason="limits of POSIX")
def test_disk_that_fills_up(path):
    """A real refusal by the system, at any point of the file: one line, and nothing left."""
    script = """
        import resource, sys
        from test_trajectory import made, write_trajectory, InputError
        resource.setrlimit(resource.RLIMIT_FSIZE, (int(sys.argv[2]), -1))
        try:
            write_trajectory(sys.argv[1], made(nt=3000))
        except InputError as err:
            print(err)
    """
    for limit in (1, 3000, 60000, 150000):
        command = [sys.executable, "-c", textwrap.dedent(script), str(path), str(limit)]
        environment = os.environ | {"PYTHONPATH": os.pathsep.join([*sys.path, str(Path(__file__).parent)])}
        done = subprocess.run(command, capture_output=True, text=True, env=environment)
        assert done.returncode == 0, done.stderr
        assert done.stdout.startswith(f"{path}: cannot be written") and done.stdout.count("\n") == 1
        assert not os.listdir(path.parent)


def test_permissions_are_the_usual_ones(path):
    """Not those of a private temporary file."""
    (path.parent / "plain").touch()
    assert written(path, made()).stat().st_mode == (path.parent / "plain").stat().st_mode


def test_link_is_followed(path, tmp_path):
    (tmp_path / "there").mkdir()
    try:
        path.symlink_to(tmp_path / "there" / "real.h5")
    except OSError:
        pytest.skip("no symbolic links here")
    write_trajectory(path, made())
    assert path.is_symlink() and len(read_trajectory(tmp_path / "there" / "real.h5")) == 6


# Files of others


def message(path):
    with pytest.raises(InputError) as caught:
        read_trajectory(path)
    assert str(path) in str(caught.value) and "\n" not in str(caught.value)
    return str(caught.value)


def test_missing_file_and_folder(path):
    assert "No such file" in message(path)
    assert "cannot be read" in message(path.parent)


def test_not_hdf5(path):
    path.write_text("[case]\n")
    assert "is not an HDF5 file; expected a trajectory written by bothways" in message(path)


def test_truncated_file(path):
    written(path, made())
    path.write_bytes(path.read_bytes()[:5000])
    assert "truncated" in message(path)


def test_damaged_file(path):
    """Wherever the damage is, it is one line about this file or, within an array, not seen."""
    whole = written(path, made()).read_bytes()
    seen = 0
    for start in range(0, len(whole), 500):
        path.write_bytes(whole[:start] + b"\xa5" * 8 + whole[start + 8:])
        try:
            read_trajectory(path)
        except InputError as err:
            seen += 1
            assert str(path) in str(err)
    assert seen > 10


def test_hdf5_of_another_kind(path):
    with h5py.File(path, "w") as file:
        file["time"] = [0.0, 1.0]
    assert f"the attribute Conventions is ''; expected '{LAYOUT}'" in message(path)


def edited(path, edit):
    with h5py.File(written(path, made()), "a") as file:
        edit(file)
    return message(path)


def test_later_layout(path):
    text = edited(path, lambda file: file.attrs.update(Conventions="bothways-trajectory-2"))
    assert "'bothways-trajectory-2'; expected 'bothways-trajectory-1'" in text


def test_missing_variables_are_all_named(path):
    def edit(file):
        del file["amount"], file["statistics"]
        file.create_group("amount")
    assert "lacks amount, statistics; expected a trajectory" in edited(path, edit)


def test_missing_attribute(path):
    assert "lacks the attribute 'program_version'" in edited(path, lambda f: f.attrs.pop("program_version"))
    path.unlink()
    text = edited(path, lambda f: f["potential"].attrs.pop("units"))
    assert "potential: lacks the attribute 'units'" in text


def test_altered_text(path):
    def edit(file):
        file["mechanism_text"][()] = "[mechanism]"
    assert "mechanism_sha256" in edited(path, edit)


def replaced(file, name, data, *scales):
    del file[name]
    file[name] = data
    for axis, scale in enumerate(scales):
        file[name].dims[axis].attach_scale(file[scale])


def test_swapped_or_unnamed_axes(path):
    text = edited(path, lambda f: replaced(f, "amount", np.ones((4, 6)), "species", "time"))
    assert "amount: has the axes (species, time); expected (time, species)" in text
    path.unlink()
    assert "(unnamed, unnamed)" in edited(path, lambda f: replaced(f, "amount", np.ones((6, 4))))


def test_wrong_length_or_kind(path):
    text = edited(path, lambda f: replaced(f, "pressure", np.ones(5), "time"))
    assert "pressure: the shape is (5,); expected (6,) for the axes (time)" in text
    path.unlink()
    text = edited(path, lambda f: replaced(f, "pressure", np.array([b"1"] * 6), "time"))
    assert "pressure: holds |S1; expected numbers" in text
    path.unlink()
    text = edited(path, lambda f: replaced(f, "case_text", 1.0))
    assert "case_text: holds float64; expected text" in text
