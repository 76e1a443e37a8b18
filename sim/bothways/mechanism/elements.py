"""Standard atomic weights and the reading of formulas.

T. Prohaska et al., Standard atomic weights of the elements 2021 (IUPAC Technical Report), Pure Appl. Chem. 94
(2022) 573, doi:10.1515/pac-2019-0603: abridged to the conventional values of its Table 3 where an interval is
given. Elements without a standard atomic weight are left out; state them under [elements]. D: 2H of AME2020
(M. Wang et al., Chinese Phys. C 45 (2021) 030003).
"""

import re
from collections.abc import Mapping

from ..errors import InputError, hint, shown

_G_PER_MOL = """
H 1.008 D 2.014101778 He 4.002602 Li 6.94 Be 9.0121831 B 10.81 C 12.011 N 14.007 O 15.999 F 18.998403162
Ne 20.1797 Na 22.98976928 Mg 24.305 Al 26.9815384 Si 28.085 P 30.973761998 S 32.06 Cl 35.45 Ar 39.95 K 39.0983
Ca 40.078 Sc 44.955907 Ti 47.867 V 50.9415 Cr 51.9961 Mn 54.938043 Fe 55.845 Co 58.933194 Ni 58.6934 Cu 63.546
Zn 65.38 Ga 69.723 Ge 72.630 As 74.921595 Se 78.971 Br 79.904 Kr 83.798 Rb 85.4678 Sr 87.62 Y 88.905838
Zr 91.224 Nb 92.90637 Mo 95.95 Ru 101.07 Rh 102.90549 Pd 106.42 Ag 107.8682 Cd 112.414 In 114.818 Sn 118.710
Sb 121.760 Te 127.60 I 126.90447 Xe 131.293 Cs 132.90545196 Ba 137.327 La 138.90547 Ce 140.116 Pr 140.90766
Nd 144.242 Sm 150.36 Eu 151.964 Gd 157.25 Tb 158.925354 Dy 162.500 Ho 164.930329 Er 167.259 Tm 168.934219
Yb 173.045 Lu 174.9668 Hf 178.486 Ta 180.94788 W 183.84 Re 186.207 Os 190.23 Ir 192.217 Pt 195.084
Au 196.966570 Hg 200.592 Tl 204.38 Pb 207.2 Bi 208.98040 Th 232.0377 Pa 231.03588 U 238.02891
""".split()
ATOMIC_MASS = {symbol: float(value) * 1e-3 for symbol, value in zip(_G_PER_MOL[::2], _G_PER_MOL[1::2], strict=True)}
"""Molar masses of the elements [kg/mol]."""
_IN_ORDER = """
H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As Se Br Kr Rb Sr Y Zr Nb Mo Tc Ru Rh Pd
Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Pm Sm Eu Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Po At Rn Fr Ra Ac
Th Pa U
""".split()
ATOMIC_NUMBER = {symbol: number for number, symbol in enumerate(_IN_ORDER, 1)} | {"D": 1}
"""Atomic numbers of the elements."""

_TOKEN = re.compile(r"([A-Z][a-z]?|\(|\))([0-9]*)")
MOST_ATOMS = 1_000_000
"""More atoms of one element in one species are taken for a slip."""
_BLOCK = "state its molar mass under [elements] if it is a building block"


def parse_formula(formula: str, symbols: Mapping[str, float]) -> dict[str, int]:
    """Atoms of a formula such as "CH3OH" or "(CH3)2CO", over the known `symbols`.

    Raises InputError (without a place) where the formula cannot be read.
    """
    stack: list[dict[str, int]] = [{}]
    position = 0
    while position < len(formula):
        token = _TOKEN.match(formula, position)
        if token is None:
            raise _unreadable(formula, formula[position:])
        position = token.end()
        _apply(stack, token.group(1), _count(token.group(2), formula), formula, symbols)
    if len(stack) != 1 or not stack[0]:
        raise _unreadable(formula, formula)
    check_atoms(stack[0])
    return stack[0]


def check_atoms(counts: Mapping[str, float]) -> None:
    """InputError (without a place) unless every count is a whole number of at least one atom."""
    if not counts:
        raise InputError("no atoms", expected="at least one element", remedy="name the elements it is made of")
    for symbol, count in counts.items():
        if not (1 <= count <= MOST_ATOMS and count == int(count)):
            raise InputError(f"{count:g} atoms of {symbol}", expected=f"a whole number from 1 to {MOST_ATOMS}")


def unknown_element(symbol: str, symbols: Mapping[str, float]) -> InputError:
    """An InputError (without a place) for a symbol that is none of the known ones."""
    return InputError(f"unknown element '{symbol}'{hint(symbol, symbols)}", expected="an element symbol", remedy=_BLOCK)


def _count(digits: str, formula: str) -> int:
    if len(digits) > len(str(MOST_ATOMS)):
        raise _unreadable(formula, digits)
    return int(digits or 1)


def _apply(stack: list[dict[str, int]], name: str, count: int, formula: str, symbols: Mapping[str, float]) -> None:
    if name == "(":
        stack.append({})
    elif name == ")":
        if len(stack) == 1:
            raise _unreadable(formula, ")")
        for symbol, inner in stack.pop().items():
            stack[-1][symbol] = stack[-1].get(symbol, 0) + inner * count
    elif name in symbols:
        stack[-1][name] = stack[-1].get(name, 0) + count
    else:
        raise unknown_element(name, symbols)


def _unreadable(formula: str, rest: str) -> InputError:
    return InputError(f"formula {shown(formula)} cannot be read at {shown(rest)}",
                      expected="element symbols with counts, such as CH3OH or (CH3)2CO",
                      remedy="or use composition = { C = 1, H = 4 }; an ion's charge stands in the key 'charge'")
