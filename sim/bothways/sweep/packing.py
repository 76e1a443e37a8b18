"""Rows as bytes: what workers send back and what the record keeps, every float to the bit."""

import json
import struct
from typing import Any

import numpy as np

from ..outcome import COURSE, SECONDS, VARIABLES, Row

TEXTS = [v.name for v in VARIABLES if v.text]
NUMBERS = [v.name for v in (*VARIABLES, SECONDS) if not v.text and len(v.dims) == 1]
ARRAYS = [v.name for v in VARIABLES if len(v.dims) == 2]
_HEAD = struct.Struct("<QIII")
_FLOAT = np.dtype("<f8")


def packed(k: int, row: Row) -> bytes:
    """Case k's row as bytes."""
    texts = json.dumps([row[name] for name in TEXTS]).encode()
    course = row.get("course")
    size, steps = len(row[ARRAYS[0]]), len(course["time"]) if course else 0
    parts = [_HEAD.pack(k, size, steps, len(texts)), texts, _bytes([row[name] for name in NUMBERS])]
    parts += [_bytes(row[name]) for name in ARRAYS]
    parts += [_bytes(course[v.name]) for v in COURSE] if course else []
    return b"".join(parts)


def _bytes(values: Any) -> bytes:
    return np.ascontiguousarray(values, dtype=_FLOAT).tobytes()


def unpacked(content: bytes) -> tuple[int, Row]:
    """The case's number and its row."""
    k, size, steps, length = _HEAD.unpack_from(content)
    start = _HEAD.size + length
    row: Row = dict(zip(TEXTS, json.loads(content[_HEAD.size : start]), strict=True))
    numbers = np.frombuffer(content, _FLOAT, offset=start)
    row |= dict(zip(NUMBERS, numbers[: len(NUMBERS)].tolist(), strict=True))
    rest = numbers[len(NUMBERS) :]
    row |= {name: rest[j * size : (j + 1) * size] for j, name in enumerate(ARRAYS)}
    return k, row | ({"course": _course(rest[len(ARRAYS) * size :], steps, size)} if steps else {})


def _course(values: np.ndarray, steps: int, size: int) -> dict[str, np.ndarray]:
    found, place = {}, 0
    for v in COURSE:
        wide = size if len(v.dims) == 2 else 1
        found[v.name] = values[place : place + steps * wide].reshape((steps, size) if wide > 1 else (steps,))
        place += steps * wide
    return found


def number_of(content: bytes) -> int:
    """The number of the case whose row these bytes are."""
    return int(_HEAD.unpack_from(content)[0])


def steps_of(head: bytes) -> int:
    """The number of steps in the course of a row, from its first bytes."""
    return int(_HEAD.unpack_from(head)[2])


HEAD_SIZE = _HEAD.size
