"""What a grid is: cases numbered from 0, each made when it is asked for."""

import hashlib
import json
import math
import zlib
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any

import numpy as np

from ..case import Case, build_case
from ..errors import InputError
from ..mechanism import Mechanism, build
from ..mechanism.toml_writer import to_toml
from .keys import Value, with_setting


@dataclass(frozen=True)
class Factor:
    """Keys that vary together, and their settings: for each a value of every key."""

    keys: tuple[str, ...]
    settings: tuple[tuple[Value, ...], ...] = field(repr=False)


@dataclass(frozen=True)
class Grid:
    """Cases as the product of factors over a base case, the first factor varying slowest.

    base : the document of the base case. mechanisms : those it names, by the name stated.
    peaks : species whose peaks are asked for. trajectories : whether full courses are. output : the file it names for results.
    """

    base: dict[str, Any] = field(repr=False)
    factors: tuple[Factor, ...]
    mechanisms: Mapping[str, Mechanism] = field(repr=False)
    title: str = ""
    peaks: tuple[str, ...] = ()
    trajectories: bool = False
    output: str = ""
    file: object = field(default=None, repr=False, compare=False)

    def __len__(self) -> int:
        return math.prod(len(factor.settings) for factor in self.factors)

    @cached_property
    def keys(self) -> tuple[str, ...]:
        """The keys that vary, such as "start.temperature"."""
        return tuple(key for factor in self.factors for key in factor.keys)

    def setting(self, k: int) -> dict[str, Value]:
        """What case k sets: SI numbers, texts or tables by key."""
        if not 0 <= k < len(self):
            raise IndexError(f"case {k} of {len(self)}")
        places = np.unravel_index(k, [len(factor.settings) for factor in self.factors]) if self.factors else ()
        return {key: value for factor, j in zip(self.factors, places, strict=True)
                for key, value in zip(factor.keys, factor.settings[j], strict=True)}

    def document(self, k: int) -> dict[str, Any]:
        """The document of case k, with the keys of a case file."""
        return with_setting(self.base, self.setting(k))

    def mechanism_name(self, k: int) -> str:
        """The name by which case k states its mechanism."""
        return str(self.setting(k).get("case.mechanism", self.base.get("case", {}).get("mechanism", "")))

    def mechanism_of(self, k: int) -> Mechanism:
        """The mechanism of case k."""
        return self.mechanisms[self.mechanism_name(k)]

    def case(self, k: int, mechanism: Mechanism | None = None) -> Case:
        """Case k, of its own mechanism or another one; InputError naming it where it is not sound."""
        try:
            return build_case(self.document(k), self.file, mechanism or self.mechanism_of(k))
        except InputError as err:
            raise InputError(err.problem, expected=err.expected, remedy=err.remedy, file=err.file,
                             entry=": ".join(filter(None, [self.label(k), err.entry]))) from None

    def label(self, k: int) -> str:
        """Case k in words: its number, counted from 1, and what it sets."""
        values = (f"{key} = {value:.6g}" if isinstance(value, float) else f"{key} = {value}"
                  for key, value in self.setting(k).items())
        return f"case {k + 1} of {len(self)} ({', '.join(values)})"

    def cases(self, mechanism: Mechanism | None = None) -> Iterator[Case]:
        """All cases in order; the first unsound one is an InputError."""
        return (self.case(k, mechanism) for k in range(len(self)))

    @cached_property
    def content(self) -> dict[str, Any]:
        """All that the results depend on but the mechanisms, as plain values."""
        head = {key: value for key, value in self.base.get("case", {}).items() if key != "title"}
        return {"base": {**self.base, "case": head}, "factors": [[f.keys, f.settings] for f in self.factors],
                "peaks": self.peaks, "trajectories": self.trajectories}

    @cached_property
    def digest(self) -> str:
        """SHA-256 of all that the results depend on: base, factors and the mechanisms' whole documents."""
        whole = {**self.content, "mechanisms": self.mechanism_digests}
        return hashlib.sha256(json.dumps(whole, sort_keys=True).encode()).hexdigest()

    @cached_property
    def mechanism_texts(self) -> dict[str, str]:
        """The mechanism files (TOML), by the name stated."""
        return {name: to_toml(m.document) for name, m in self.mechanisms.items()}

    @cached_property
    def mechanism_digests(self) -> dict[str, str]:
        """SHA-256 of the text of each mechanism, by the name stated."""
        return {name: hashlib.sha256(text.encode()).hexdigest() for name, text in self.mechanism_texts.items()}

    @cached_property
    def packed(self) -> bytes:
        """The whole grid in few bytes, for another process; see `unpacked`."""
        documents = {name: m.document for name, m in self.mechanisms.items()}
        return zlib.compress(json.dumps([self.content, documents]).encode())


def unpacked(packed: bytes) -> Grid:
    """The grid that `Grid.packed` holds; its cases are the same to the bit."""
    content, documents = json.loads(zlib.decompress(packed))
    factors = tuple(Factor(tuple(keys), tuple(map(tuple, settings))) for keys, settings in content["factors"])
    mechanisms = {name: build(document) for name, document in documents.items()}
    return Grid(content["base"], factors, mechanisms, "", tuple(content["peaks"]), content["trajectories"])
