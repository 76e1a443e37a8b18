"""Files that are no trajectory, or no longer a whole one: each is told in one line and what was expected."""

import h5py
import numpy as np
import pytest

from bothways.errors import InputError
from bothways.trajectory import LAYOUT, read_trajectory
from trajectories import made, written


@pytest.fixture
def path(tmp_path):
    return tmp_path / "run.h5"


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
