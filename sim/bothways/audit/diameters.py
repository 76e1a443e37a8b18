"""Lennard-Jones diameters and well depths: stated in the file, tabulated, or estimated by a rule.

Tables: B.E. Poling, J.M. Prausnitz, J.P. O'Connell, The Properties of Gases and Liquids, 5th ed., McGraw-Hill 2001,
appendix B; for atoms and OH, which it lacks, R.A. Svehla, NASA TR R-132, 1962 (values from memory). They are looked up
by composition, so isomers share one value.

Rule for all others: diameter 1.166 V_b^(1/3) Å with V_b the molar volume at the boiling point in cm3/mol (R.B. Bird,
W.E. Stewart, E.N. Lightfoot, Transport Phenomena, 2nd ed., Wiley 2002, eq. 1.4-12; from memory), V_b from the atomic
increments of G. Le Bas, The Molecular Volumes of Liquid Chemical Compounds, Longmans 1915 (as printed by Poling et al.,
table 4-5; from memory; the corrections for rings are left out, which makes the limit larger by up to a tenth). No less
than 3.4 Å. The well depth is 148.6 n^0.55 K with n the atoms other than hydrogen: our own power law through methane,
ethane and n-hexane of the table above; only Ω* answers to it, and weakly. On ten hydrocarbons of that table the rule is
within 15 % in diameter (tests/test_audit_collisions.py).
"""

from collections.abc import Mapping
from functools import cache

from ..mechanism.elements import ATOMIC_MASS, parse_formula
from ..mechanism.model import Species

ANGSTROM = 1e-10
_POLING = """
H2 2.827 59.7, He 2.551 10.22, Ne 2.820 32.8, Ar 3.542 93.3, Kr 3.655 178.9, Xe 4.047 231, N2 3.798 71.4, O2 3.467 106.7,
F2 3.357 112.6, Cl2 4.217 316, Br2 4.296 507.9, I2 5.160 474.2, CO 3.690 91.7, NO 3.492 116.7, HF 3.148 330,
HCl 3.339 344.7, HBr 3.353 449, HI 4.211 288.7, CO2 3.941 195.2, H2O 2.641 809.1, H2O2 4.196 289.3, N2O 3.828 232.4,
NH3 2.900 558.3, SO2 4.112 335.4, H2S 3.623 301.1, HCN 3.630 569.1, CH4 3.758 148.6, C2H2 4.033 231.8, C2H4 4.163 224.7,
C2H6 4.443 215.7, C3H4 4.761 251.8, C3H6 4.678 298.9, C3H8 5.118 237.1, C5H12 5.784 341.1, C6H6 5.349 412.3,
C6H12 6.182 297.1, C6H14 5.949 399.3, CH3OH 3.626 481.8, C2H5OH 4.530 362.6, SiH4 4.084 207.6, CH3Cl 4.182 350
"""
_SVEHLA = "H 2.708 37.0, N 3.298 71.4, O 3.050 106.7, OH 3.147 79.8, CH 3.370 68.6, CN 3.856 75.0"
_LE_BAS = {"C": 14.8, "H": 3.7, "O": 7.4, "N": 12.0, "F": 8.7, "Cl": 24.6, "Br": 27.0, "I": 37.0, "S": 25.6}
_OTHER_ATOM = 27.0
"""cm3/mol of an element without an increment: that of the larger halogens and sulfur, so that the limit is not too low."""
_FLOOR = 3.4
STATED, TABLE, RULE = "stated in the file", "table", "rule"

Key = frozenset[tuple[str, int]]


@cache
def _table() -> Mapping[Key, tuple[float, float]]:
    rows = (row.split() for text in (_SVEHLA, _POLING) for row in text.split(","))
    return {frozenset(parse_formula(name, ATOMIC_MASS).items()): (float(d), float(e)) for name, d, e in rows}


def size(species: Species) -> tuple[float, float, str]:
    """Collision diameter [m], well depth [K] (0: taken as a hard sphere), and where they come from."""
    if species.collision_diameter is not None:
        return species.collision_diameter, species.well_depth or 0.0, STATED
    known = _table().get(frozenset(species.composition.items()))
    if known:
        return known[0] * ANGSTROM, known[1], TABLE
    return (*estimate(species.composition), RULE)


def estimate(composition: Mapping[str, int]) -> tuple[float, float]:
    """Diameter [m] and well depth [K] by the rule."""
    volume = sum(count * _LE_BAS.get(element, _OTHER_ATOM) for element, count in composition.items())
    heavy = sum(count for element, count in composition.items() if element != "H")
    return max(_FLOOR, 1.166 * volume ** (1 / 3)) * ANGSTROM, 148.6 * max(heavy, 1) ** 0.55
