"""The errors a user may meet, each one line: where, what was found, what was expected, what to do."""

import difflib
from collections.abc import Iterable
from typing import Any

_SHOWN = 60


class BothwaysError(Exception):
    """Base of every expected failure; `exit_status` is what the command line returns.

    Parameters
    ----------
    problem : what was found.
    expected : what would have been right.
    remedy : what to do about it.
    file, entry : where: the file, and the entry within it.
    """

    exit_status = 2

    def __init__(
        self, problem: str, *, expected: str = "", remedy: str = "", file: object = None, entry: str = ""
    ) -> None:
        super().__init__(problem, expected, remedy, file, entry)
        self.problem, self.expected, self.remedy = problem, expected, remedy
        self.file, self.entry = file, entry

    def __reduce__(self) -> tuple[Any, ...]:
        """For other processes: keywords are restored as the attributes they became."""
        return type(self), (self.problem,), self.__dict__

    def __str__(self) -> str:
        where = ": ".join(str(part) for part in (self.file, self.entry) if part)
        parts = [self.problem]
        if self.expected:
            parts.append(f"expected {self.expected}")
        if self.remedy:
            parts.append(self.remedy)
        text = "; ".join(parts)
        line = " ".join(f"{where}: {text}".split() if where else text.split())
        return "".join(c if c.isprintable() else repr(c)[1:-1] for c in line)


class InputError(BothwaysError):
    """A file, an entry or an argument is not usable (exit status 2)."""


class SolverError(BothwaysError):
    """The integration gave up before the end (exit status 3)."""

    exit_status = 3


def nearest(word: object, known: Iterable[str], label: str = "nearest") -> str:
    """A hint naming the known words closest to `word`, or all of a short list, or nothing."""
    names = sorted(map(str, known))
    close = closest(str(word), names)
    if close:
        return f"{label}: " + ", ".join(close)
    return "known: " + ", ".join(names) if 0 < len(names) <= 24 else ""


def hint(word: object, known: Iterable[str]) -> str:
    """The hint of `nearest` in brackets, to stand behind an unknown word; empty if there is none."""
    text = nearest(word, known)
    return f" ({text})" if text else ""


def closest(word: str, names: Iterable[str]) -> list[str]:
    """At most three of the names, the closest first, letter case counting less than letters."""
    word, known = word[:_SHOWN], list(names)
    close = difflib.get_close_matches(word, known, n=3, cutoff=0.6)
    if close:
        return close
    lower = {name.lower(): name for name in known}
    return [lower[w] for w in difflib.get_close_matches(word.lower(), list(lower), n=3, cutoff=0.6)]


def shown(value: object) -> str:
    """A value found in a file as an error shows it: short, whatever it is."""
    try:
        text = repr(value)
    except ValueError:  # an integer of more digits than Python prints
        return "a number of too many digits"
    return text if len(text) <= _SHOWN else text[: _SHOWN - 1] + "…"
