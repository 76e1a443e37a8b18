"""The record of an unfinished sweep: a file that only grows, a frame a finished case, each with its checksum.

A frame is handed to the system as soon as its case is finished, so it survives the death of this process at once; it is
forced to the disk (fsync) within `FORCED_EVERY` seconds and at the end, so a power cut costs at most the last second. A
frame torn by either is noticed by length and checksum, and cut off.
"""

import contextlib
import json
import os
import struct
import time
import zlib
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Any

import numpy as np

from ..errors import InputError
from .packing import HEAD_SIZE, number_of, steps_of

try:
    import fcntl
except ImportError:  # where the system has no such locks, two sweeps into one file are the user's to avoid
    fcntl = None  # type: ignore[assignment]

FORCED_EVERY = 1.0
"""Seconds between fsyncs while cases come in."""
_MAGIC = b"bothways sweep record 1\n"
_FRAME = struct.Struct("<II")
_NOWHERE = -1
_LARGEST_HEAD = 65536


class Record:
    """The record at a path, open and locked.

    places : (cases) where each finished case stands in it. count, steps : of the finished cases, and of their courses.
    cut_off : bytes of a torn frame that were cut off when it was opened.

    Raises InputError: the file is no record, is of another sweep, is in use, or cannot be written.
    """

    def __init__(self, path: Path, identity: Mapping[str, Any], cases: int) -> None:
        self.path, self.identity = path, json.loads(json.dumps(identity))
        self.places = np.full(cases, _NOWHERE, dtype=np.int64)
        self.count = self.steps = 0
        self.cut_off = 0
        with self._told():
            self._file = os.open(path, os.O_RDWR | os.O_CREAT, 0o666)
        try:
            self._lock()
            with self._told():
                self._end = self._read()
                self._cut(self._end)
                self._forced = time.monotonic()
        except BaseException:
            os.close(self._file)
            raise

    def _lock(self) -> None:
        if fcntl is None:
            return
        try:
            fcntl.flock(self._file, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except OSError:
            raise InputError("another sweep is writing it", expected="one sweep at a time into one file",
                             remedy="wait for it, or name another --output", file=self.path) from None

    @property
    def finished(self) -> np.ndarray:
        """(cases) mask of those recorded."""
        return self.places != _NOWHERE

    def _read(self) -> int:
        """Takes up the whole frames; where the first one that is not whole starts."""
        with open(self._file, "rb", closefd=False) as file:
            if os.fstat(self._file).st_size == 0:
                return self._begin()
            found = file.read(len(_MAGIC))
            if found != _MAGIC:
                if _MAGIC.startswith(found):  # torn while it was begun
                    return self._begin()
                raise InputError("is no record of a sweep", expected="the unfinished results of this sweep, or nothing",
                                 remedy="move it out of the way, or name another --output", file=self.path)
            head = _frame(file)
            if head is None and os.fstat(self._file).st_size < _LARGEST_HEAD:
                return self._begin()
            if head is None:
                raise InputError("is damaged at its start", expected="the record of a sweep", file=self.path,
                                 remedy="move it out of the way: its cases cannot be told apart")
            self._check(json.loads(head))
            end = file.tell()
            while (content := _frame(file)) is not None:
                self._take(content, end)
                end = file.tell()
            return end

    def _begin(self) -> int:
        content = _MAGIC + _framed(json.dumps(self.identity).encode())
        self._cut(0)
        self._write(content, 0)
        os.fsync(self._file)
        _force_name(self.path)
        return len(content)

    def _check(self, found: Mapping[str, Any]) -> None:
        """An InputError that says in what the sweep of the record is another."""
        if found == self.identity:
            return
        names = [name for name, digest in self.identity["mechanisms"].items() if found["mechanisms"].get(name) != digest]
        what = f"mechanism {' and '.join(names)}" if names else "grid"
        if found["program"] != self.identity["program"]:
            what = f"version of the program ({found['program']})"
        raise InputError(f"holds finished cases of another {what}", expected="those of this sweep alone: they are not mixed",
                         remedy="move it out of the way, or name another --output", file=self.path)

    def _take(self, content: bytes, place: int) -> None:
        k = number_of(content)
        if 0 <= k < self.places.size and self.places[k] == _NOWHERE:
            self.places[k] = place
            self.count += 1
            self.steps += steps_of(content)

    def append(self, content: bytes) -> None:
        """Records a finished case's packed row."""
        frame = _framed(content)
        with self._told():
            try:
                self._write(frame, self._end)
            except BaseException:
                with contextlib.suppress(OSError):
                    self._cut(self._end)
                raise
            self._take(content, self._end)
            self._end += len(frame)
            if time.monotonic() - self._forced > FORCED_EVERY:
                self.force()

    def _write(self, content: bytes, place: int) -> None:
        view = memoryview(content)
        while view:
            written = os.pwrite(self._file, view, place)
            view, place = view[written:], place + written

    def _cut(self, length: int) -> None:
        self.cut_off = max(0, os.fstat(self._file).st_size - length)
        if self.cut_off:
            os.ftruncate(self._file, length)

    def force(self) -> None:
        """Waits until all that is recorded is on the disk."""
        os.fsync(self._file)
        self._forced = time.monotonic()

    def contents(self) -> Iterator[bytes]:
        """The packed rows of all cases, in the order of the cases."""
        with open(self._file, "rb", closefd=False) as file:
            for place in self.places.tolist():
                file.seek(place)
                content = _frame(file)
                if content is None:
                    raise InputError("changed while it was read", file=self.path, remedy="give the same command again")
                yield content

    def steps_of(self, k: int) -> int:
        """The number of steps in the course of case k."""
        return steps_of(os.pread(self._file, HEAD_SIZE, int(self.places[k]) + _FRAME.size))

    def close(self) -> None:
        """Forces and closes the file."""
        with contextlib.suppress(OSError):
            self.force()
        os.close(self._file)

    def discard(self) -> None:
        """Removes the file: the results stand elsewhere."""
        with contextlib.suppress(OSError):
            self.path.unlink()

    @contextlib.contextmanager
    def _told(self) -> Iterator[None]:
        try:
            yield
        except OSError as err:
            raise InputError(f"cannot be written ({err.strerror or err})", file=self.path, expected="room on the disk",
                             remedy="what is finished is kept: make room, then give the same command again") from err


def _framed(content: bytes) -> bytes:
    return _FRAME.pack(len(content), zlib.crc32(content)) + content


def _frame(file: Any) -> bytes | None:
    """The content of the frame that starts here; None if it is torn or there is none."""
    head = file.read(_FRAME.size)
    if len(head) < _FRAME.size:
        return None
    length, checksum = _FRAME.unpack(head)
    content = file.read(length)
    return content if 0 < len(content) == length and zlib.crc32(content) == checksum else None


def _force_name(path: Path) -> None:
    """Waits until the new file's name is on the disk too."""
    if hasattr(os, "O_DIRECTORY"):
        folder = os.open(path.parent, os.O_RDONLY | os.O_DIRECTORY)
        try:
            os.fsync(folder)
        finally:
            os.close(folder)
