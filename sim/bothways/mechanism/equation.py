"""Reading of reaction equations: "H2 + M ⇌ 2 H + M"."""

import re
from dataclasses import dataclass

from ..errors import InputError, shown

ARROWS = ("⇌", "⇄", "=")
_TWO_WAY = re.compile(r"<[-=]+>|[↔⇔⟷⟺⇋⇌⇄⥂⥄]|==+(?![>=])")
_ONE_WAY = re.compile(r"[-=]+>|<[-=]+|[→⟶⟹⇒⇀⇁⇾➝➔←⟵⟸⇐↼↽⇽]|>>|<<")
MOST_MOLECULES = 100
"""More molecules on one side are taken for a slip."""
_PLACE = "species and coefficients parted by spaces, such as \"H + O2 ⇌ O + OH\" or \"H2 + M ⇌ 2 H + M\""
_COEFFICIENT = re.compile(r"[0-9]*\.?[0-9]+\.?([eE][+-]?[0-9]+)?|[0-9]+/[0-9]+")


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
        raise _arrow_problem(text, len(arrows))
    left, right = _parse_side(words[: arrows[0]], text), _parse_side(words[arrows[0] + 1 :], text)
    if left[1] != right[1]:
        raise _unreadable(text, "M stands on one side only", "M on both sides or on neither")
    return Equation(left[0], right[0], left[1])


def _arrow_problem(text: str, count: int) -> InputError:
    if count > 1:
        return _unreadable(text, f"{count} equilibrium signs", "one of ⇌, ⇄ or =")
    two_way, one_way = _TWO_WAY.search(text), _ONE_WAY.search(_TWO_WAY.sub(" ", text))
    if one_way:
        return _unreadable(text, f"'{one_way.group()}' is a one-way arrow", "⇌, ⇄ or =",
                           "every step runs both ways; a step that is one-way in practice has a large K "
                           "(published_one_way = true records such a claim for comparison)")
    unread = two_way is not None and two_way.group() not in ARROWS
    found = f"'{two_way.group()}' is not read" if unread else "no equilibrium sign by itself"  # type: ignore[union-attr]
    return _unreadable(text, found, "one of ⇌, ⇄ or =, with spaces around it")


def _unreadable(text: str, found: str, expected: str, remedy: str = "correct the equation") -> InputError:
    return InputError(f"{shown(text)}: {found}", expected=expected, remedy=remedy)


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
        raise _unreadable(text, "M stands more than once on a side", "one partner M at most")
    if not counts:
        raise _unreadable(text, "a side names no species", _PLACE)
    if sum(counts.values()) > MOST_MOLECULES:
        raise _unreadable(text, f"{sum(counts.values())} molecules on a side", f"{MOST_MOLECULES} at most")
    return tuple(counts.items()), bool(partner)


def _terms(words: list[str], text: str) -> list[list[str]]:
    terms: list[list[str]] = [[]]
    for word in words:
        if word == "+":
            terms.append([])
        else:
            terms[-1].append(word)
    if not all(terms):
        raise _unreadable(text, "a '+' without a species beside it", _PLACE)
    return terms


def is_coefficient(word: str) -> bool:
    """Whether a word of an equation reads as a number, so that no species can have this name."""
    return _COEFFICIENT.fullmatch(word) is not None


def _term(words: list[str], text: str) -> tuple[int, str]:
    if len(words) == 1 and not is_coefficient(words[0]):
        return 1, words[0]
    if len(words) != 2 or not is_coefficient(words[0]):
        remedy = "for fall-off leave M out: the law says that a partner takes part"
        raise _unreadable(text, f"cannot read {shown(' '.join(words))}", _PLACE,
                          remedy if "(+" in text else "correct the equation")
    if not words[0].isdigit() or len(words[0]) > 4 or int(words[0]) == 0:
        raise _unreadable(text, f"the coefficient {words[0][:20]}", "a whole number above 0, of few molecules",
                          "the law of mass action takes its orders from the coefficients: state whole numbers")
    return int(words[0]), words[1]
