"""Reading of reaction equations: "H2 + M ⇌ 2 H + M"."""

import re
from dataclasses import dataclass

from ..errors import InputError

ARROWS = ("⇌", "⇄", "=")
_ONE_WAY = ("→", "⟶", "←", "⟵", "->", "=>", "-->", "==>", "<-", "<--", "⇒", "⇐")
_TWO_WAY_UNKNOWN = ("<=>", "<->", "↔", "⇔", "==", "<==>")
_PLACE = "species and coefficients parted by spaces, such as \"H + O2 ⇌ O + OH\" or \"H2 + M ⇌ 2 H + M\""
_COEFFICIENT = re.compile(r"\d+(\.\d*)?([eE][+-]?\d+)?$|\d+/\d+$")


@dataclass(frozen=True)
class Equation:
    """Both sides as ordered (species, coefficient), and whether an unnamed partner M stands on both."""

    reactants: tuple[tuple[str, int], ...]
    products: tuple[tuple[str, int], ...]
    partner: bool = False

    def __str__(self) -> str:
        return f"{self._side(self.reactants)} ⇌ {self._side(self.products)}"

    def _side(self, side: tuple[tuple[str, int], ...]) -> str:
        terms = [name if count == 1 else f"{count} {name}" for name, count in side]
        return " + ".join(terms + ["M"] * self.partner)

    @property
    def key(self) -> tuple:
        """What makes two equations the same: both sides whatever their order, and M."""
        return frozenset(self.reactants), frozenset(self.products), self.partner


def parse_equation(text: str) -> Equation:
    """The equation that `text` states (IUPAC Green Book, 3rd ed., section 2.10.1, for the arrows).

    Raises InputError (without a place): one-way or unknown arrows, missing spaces, fractional coefficients,
    a partner M on one side only.
    """
    words = text.split()
    arrows = [k for k, word in enumerate(words) if word in ARROWS]
    if len(arrows) != 1:
        raise _arrow_problem(text, words, len(arrows))
    left, right = _parse_side(words[: arrows[0]], text), _parse_side(words[arrows[0] + 1 :], text)
    if left[1] != right[1]:
        raise InputError(f"'{text}': M stands on one side only", remedy="write M on both sides or on neither")
    return Equation(left[0], right[0], left[1])


def _arrow_problem(text: str, words: list[str], count: int) -> InputError:
    one_way = [w for w in words if w in _ONE_WAY] or [a for a in _ONE_WAY if a in text and "<" + a not in text]
    if one_way and not any(a in text for a in _TWO_WAY_UNKNOWN):
        return InputError(f"'{text}': '{one_way[0]}' is a one-way arrow", expected="⇌, ⇄ or =",
                          remedy="every step runs both ways; a step that is one-way in practice has a large K "
                                 "(published_one_way = true records such a claim for comparison)")
    found = f"{count} equilibrium signs" if count else "no equilibrium sign"
    return InputError(f"'{text}': {found} standing by itself", expected="one of ⇌, ⇄ or =, with spaces around it")


def _parse_side(words: list[str], text: str) -> tuple[tuple[tuple[str, int], ...], bool]:
    counts: dict[str, int] = {}
    partner = 0
    for term in _terms(words, text):
        count, name = _term(term, text)
        if name == "M":
            partner += count
        else:
            counts[name] = counts.get(name, 0) + count
    if partner > 1:
        raise InputError(f"'{text}': M stands more than once on a side", expected="one partner M at most")
    if not counts:
        raise InputError(f"'{text}': a side names no species", expected=_PLACE)
    return tuple(counts.items()), bool(partner)


def _terms(words: list[str], text: str) -> list[list[str]]:
    terms: list[list[str]] = [[]]
    for word in words:
        if word == "+":
            terms.append([])
        else:
            terms[-1].append(word)
    if not all(terms):
        raise InputError(f"'{text}': a '+' without a species beside it", expected=_PLACE)
    return terms


def _term(words: list[str], text: str) -> tuple[int, str]:
    if len(words) == 1 and not _COEFFICIENT.match(words[0]):
        return 1, words[0]
    if len(words) != 2 or not _COEFFICIENT.match(words[0]):
        raise InputError(f"'{text}': cannot read '{' '.join(words)}'", expected=_PLACE)
    if not words[0].isdigit() or int(words[0]) == 0:
        raise InputError(f"'{text}': the coefficient {words[0]} is not a whole number above 0",
                         remedy="the law of mass action takes its orders from the coefficients: state whole numbers")
    return int(words[0]), words[1]
