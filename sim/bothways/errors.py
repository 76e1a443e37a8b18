"""The errors a user may meet, each one line: where, what was found, what was expected, what to do."""

import difflib
from collections.abc import Iterable


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

    def __str__(self) -> str:
        where = ": ".join(str(part) for part in (self.file, self.entry) if part)
        parts = [self.problem]
        if self.expected:
            parts.append(f"expected {self.expected}")
        if self.remedy:
            parts.append(self.remedy)
        text = "; ".join(parts)
        return " ".join(f"{where}: {text}".split() if where else text.split())


class InputError(BothwaysError):
    """A file, an entry or an argument is not usable (exit status 2)."""


class SolverError(BothwaysError):
    """The integration gave up before the end (exit status 3)."""

    exit_status = 3


def nearest(word: str, known: Iterable[str], label: str = "nearest") -> str:
    """A hint naming the known words closest to `word`, or all of a short list, or nothing."""
    names = sorted(map(str, known))
    close = difflib.get_close_matches(word, names, n=3, cutoff=0.6)
    if not close:
        lower = {name.lower(): name for name in names}
        close = [lower[w] for w in difflib.get_close_matches(word.lower(), list(lower), n=3, cutoff=0.6)]
    if close:
        return f"{label}: " + ", ".join(close)
    return "known: " + ", ".join(names) if 0 < len(names) <= 12 else ""
