"""H°(298.15 K) - H°(0) of the elements in their reference states: from enthalpies of formation at 0 K to those at 298.15 K.

J.D. Cox, D.D. Wagman, V.A. Medvedev, CODATA Key Values for Thermodynamics, Hemisphere, New York, 1989 (from memory; held
against the Active Thermochemical Tables and NASA/TP-2002-211556 in the tests where these have the element).
"""

from collections.abc import Mapping

_KJ_PER_MOL_OF_ATOMS = {
    "H": 8.468 / 2, "N": 8.670 / 2, "O": 8.680 / 2, "F": 8.825 / 2, "Cl": 9.181 / 2, "Br": 24.52 / 2, "I": 13.196 / 2,
    "He": 6.197, "Ne": 6.197, "Ar": 6.197, "Kr": 6.197, "Xe": 6.197, "C": 1.050, "S": 4.412, "P": 5.360, "Si": 3.217,
    "B": 1.222, "Ge": 4.636, "Al": 4.540, "Be": 1.950, "Mg": 4.998, "Ca": 5.736, "Li": 4.632, "Na": 6.460, "K": 7.088,
    "Rb": 7.489, "Cs": 7.711, "Zn": 5.657, "Cd": 6.247, "Hg": 9.342, "Cu": 5.004, "Ag": 5.745, "Sn": 6.323, "Pb": 6.870,
    "Ti": 4.824}
KNOWN = tuple(_KJ_PER_MOL_OF_ATOMS)
"""Elements that are tabulated."""


def heat_of_elements(composition: Mapping[str, int]) -> float:
    """Σ n_e [H°(298.15 K) - H°(0)] [J/mol] of the elements that a species is made of; KeyError where one is not tabulated."""
    return 1e3 * sum(_KJ_PER_MOL_OF_ATOMS[symbol] * count for symbol, count in composition.items())
