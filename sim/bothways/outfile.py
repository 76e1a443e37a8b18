"""Output files appear whole or not at all, and never over an existing one unasked."""

import contextlib
import os
import secrets
from collections.abc import Iterator
from pathlib import Path

from .errors import InputError

StrPath = str | os.PathLike[str]


def check_writable(path: StrPath, replace: bool = False) -> Path:
    """The real path (links followed) of `path`; an InputError unless a file could be written there now.

    Called before a long piece of work starts. It tries, since permissions alone do not tell: a file system
    may be mounted read-only, full, or over its quota.
    """
    if "\0" in os.fspath(path):
        raise InputError("the file name holds a null character", file=repr(os.fspath(path)))
    target = Path(os.path.realpath(path))
    with _reported(path):
        _refuse_existing(target, path, replace)
        if not target.parent.is_dir():
            raise InputError(f"there is no folder {target.parent}", remedy="create it", file=path)
        probe = _aside(target)
        probe.touch(exist_ok=False)
        probe.unlink()
    return target


def write_whole(path: StrPath, content: bytes, replace: bool = False) -> None:
    """Writes aside, then renames: a failure or interrupt leaves `path` as it was and nothing beside it."""
    with written_aside(path, replace) as aside:
        aside.write_bytes(content)


@contextlib.contextmanager
def written_aside(path: StrPath, replace: bool = False) -> Iterator[Path]:
    """The name of a new file for the caller to write, which becomes `path` when the caller is done, or is removed."""
    target = check_writable(path, replace)
    aside = _aside(target)
    try:
        with _reported(path):
            aside.touch(exist_ok=False)
            yield aside
            _force(aside)
            _refuse_existing(target, path, replace)
            os.replace(aside, target)
    finally:
        with contextlib.suppress(OSError):
            aside.unlink(missing_ok=True)


def _aside(target: Path) -> Path:
    """A new name in the folder of `target`, since a renaming is atomic only within one file system."""
    return target.with_name(f".bothways-{secrets.token_hex(6)}.part")


def _force(path: Path) -> None:
    """Waits until the file is on the disk: the renaming could outrun it in a power cut."""
    with path.open("rb") as file:
        os.fsync(file.fileno())


@contextlib.contextmanager
def _reported(path: StrPath) -> Iterator[None]:
    try:
        yield
    except OSError as err:
        problem = f"cannot be written ({err.strerror or err})"
        raise InputError(problem, remedy="name a file that can be", file=path) from err


def _refuse_existing(target: Path, path: StrPath, replace: bool) -> None:
    if not target.exists():
        return
    if not target.is_file():
        raise InputError("is no regular file", expected="the name of a file to write", file=path)
    if not replace:
        raise InputError("the file exists already", file=path,
                         remedy="name another one, or say --replace (in Python replace=True)")
    if not os.access(target, os.W_OK):
        raise InputError("the file to be replaced is read-only", remedy="name another one", file=path)
