"""Files appear whole or not at all, and never over an existing one unasked."""

import os
import subprocess
import sys
import textwrap
from pathlib import Path

import pytest

from bothways import hdf5, outfile
from bothways.errors import InputError
from bothways.trajectory import check_writable, read_trajectory, write_trajectory
from trajectories import made, written


@pytest.fixture
def path(tmp_path):
    return tmp_path / "run.h5"


def test_existing_file_is_refused_and_replaced_on_demand(path):
    written(path, made())
    with pytest.raises(InputError, match=r"run.h5: the file exists already; .*--replace \(.* replace=True\)"):
        write_trajectory(path, made(nt=9))
    assert len(read_trajectory(path)) == 6
    write_trajectory(path, made(nt=9), replace=True)
    assert len(read_trajectory(path)) == 9
    assert os.listdir(path.parent) == ["run.h5"]


def test_file_that_appears_meanwhile_is_not_overwritten(path, monkeypatch):
    write = outfile._force

    def slow(*arguments):
        write(*arguments)
        path.write_text("of someone else")

    monkeypatch.setattr(outfile, "_force", slow)
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
    with pytest.raises(InputError, match=r"no folder|cannot be written"):
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
    """A real refusal by the system, early or late in the file: one line, and nothing left."""
    script = """
        import resource, sys
        from trajectories import made
        from bothways import InputError, write_trajectory
        for limit in 1, 3000, 60000, 150000:
            resource.setrlimit(resource.RLIMIT_FSIZE, (limit, -1))
            try:
                write_trajectory(sys.argv[1], made(nt=3000))
            except InputError as err:
                print(err)
    """
    environment = os.environ | {"PYTHONPATH": os.pathsep.join([*sys.path, str(Path(__file__).parent)])}
    command = [sys.executable, "-c", textwrap.dedent(script), str(path)]
    done = subprocess.run(command, capture_output=True, text=True, env=environment)
    assert (done.returncode, done.stderr) == (0, "")
    lines = done.stdout.splitlines()
    assert len(lines) == 4 and all(line.startswith(f"{path}: cannot be written (") for line in lines)
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
