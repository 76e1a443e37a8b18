"""Reading of the form `statistical mechanics`, every number held against what a molecule can have."""

from dataclasses import replace

from ..constants import GAS_CONSTANT
from ..entry import Entry
from ..errors import shown
from ..units import finite
from .potential import Functions, Substance
from .reference_elements import KNOWN, heat_of_elements
from .rotor import Rotor
from .statistical import SHAPES, StatisticalMechanics
from .structureless import check_gas

NAME = "statistical mechanics"
REFERENCE_TEMPERATURE = 298.15
LARGEST_SYMMETRY = 60
"""The order of the largest finite group of rotations that a molecule is known to have, the icosahedral one."""
_LARGEST_WAVENUMBER, _LARGEST_B = 1e4, 200.0
"""Above these [cm⁻¹] a vibration (H2: 4400) or a rotational constant (H2: 61) is taken for a slip."""
_LARGEST_LEVEL = 1e6
_INERTIA = 1.1
"""The largest moment of inertia is at most the sum of the others; averaged over vibrations it may be a little more (H2O:
3 %). The factor is ours, common practice, no source."""
_EQUAL = 0.01
"""B that differ by less than this part are those of a symmetric top (ours, no source)."""


def read(entry: Entry, substance: Substance) -> StatisticalMechanics:
    """The form from its table; errors: what no molecule of this formula can have, H0 and H298 both or neither stated."""
    check_gas(entry, substance.standard_pressure)
    molecule = read_molecule(entry, substance, imaginary=0)
    return replace(molecule, energy=read_energy(entry, substance, molecule))


def read_molecule(entry: Entry, substance: Substance, imaginary: int) -> StatisticalMechanics:
    """Everything but the energy, which is left zero; `imaginary` of the molecule's modes stand elsewhere."""
    shape = entry.text("shape", choices=SHAPES)
    molecule = StatisticalMechanics(
        shape, 0.0, substance.molar_mass, substance.standard_pressure, _rotational_constants(entry, shape),
        _whole(entry, "symmetry", 1 if shape == "atom" else None, LARGEST_SYMMETRY), _whole(entry, "optical_isomers", 1, 2),
        _wavenumbers(entry), _electronic(entry, substance), _rotors(entry))
    _check_symmetry(entry, molecule, substance)
    _check_inertia(entry, molecule)
    _check_modes(entry, molecule, substance, imaginary)
    return molecule


def read_energy(entry: Entry, substance: Substance, molecule: StatisticalMechanics) -> float:
    """The enthalpy at 0 K on the scale of the elements at 298.15 K [J/mol], from H0 or H298."""
    if ("H0" in entry.data) == ("H298" in entry.data):
        raise entry.error("H0 and H298 are " + ("both stated" if "H0" in entry.data else "both missing"),
                          expected="one of H0 and H298 (enthalpy of formation at 0 K or at 298.15 K)")
    if "H298" in entry.data:
        _, h, _ = Functions(molecule.ranges(), molecule.modes()).cp_h_s(REFERENCE_TEMPERATURE)
        return entry.quantity("H298", "molar energy") - h * GAS_CONSTANT * REFERENCE_TEMPERATURE
    H0 = entry.quantity("H0", "molar energy")
    missing = [symbol for symbol in substance.composition if symbol not in KNOWN]
    if missing or substance.charge:
        why = "of an ion: the electron's part is a matter of convention" if substance.charge else \
            f"with {missing[0]}, whose H(298.15 K) - H(0) is not tabulated here"
        raise entry.error(f"H0 {why}", key="H0", expected="H298, the enthalpy of formation at 298.15 K",
                          remedy="state H298 instead")
    return H0 - heat_of_elements(substance.composition)


def _whole(entry: Entry, key: str, default: int | None, largest: int) -> int:
    value = entry.number(key) if default is None else entry.number(key, default)
    if not (1 <= value <= largest and value == int(value)):
        raise entry.error(f"{shown(entry.data[key])} is not a whole number from 1 to {largest}", key=key,
                          expected=_EXPECTED.get(key, f"a whole number from 1 to {largest}"), remedy="correct the value")
    return int(value)


_EXPECTED = {"symmetry": "the symmetry number of overall rotation, 1 to 60 (12 of CH4); rotors have their own",
             "optical_isomers": "2 for a chiral species as the mixture of both forms, 1 otherwise"}


def _rotational_constants(entry: Entry, shape: str) -> tuple[float, ...]:
    counts, what = {"atom": ((0,), "no B"), "linear": ((1,), "B = [one number]"),
                    "nonlinear": ((1, 2, 3), "B = [one number] of a spherical, [figure axis, other] of a symmetric, "
                                  "[A, B, C] of an asymmetric top")}[shape]
    stated = entry.get("B", (), "rotational constants in cm⁻¹")
    B = entry.row([stated] if finite(stated) else stated, "B")
    if len(B) not in counts:
        raise entry.error(f"{len(B)} rotational constants of a species whose shape is '{shape}'", key="B", expected=what,
                          remedy="correct B or the shape")
    for value in B:
        if not 0 < value <= _LARGEST_B:
            raise entry.error(f"{value:g} is not a rotational constant", key="B",
                              expected=f"numbers above 0 and up to {_LARGEST_B:g} cm⁻¹", remedy="correct the value")
    return B


def _wavenumbers(entry: Entry) -> tuple[tuple[float, int], ...]:
    found = []
    for value in entry.items("wavenumbers", (), "[1595, [2349, 2]]"):
        pair = [value, 1] if finite(value) else value
        if not (isinstance(pair, (list, tuple)) and len(pair) == 2 and all(map(finite, pair))):
            raise entry.error(f"{shown(value)} is neither a wavenumber nor [wavenumber, degeneracy]", key="wavenumbers",
                              expected="numbers in cm⁻¹, such as [1595, [2349, 2]]", remedy="correct it")
        nu, count = pair
        if not 0 < nu <= _LARGEST_WAVENUMBER:
            kind = "zero" if nu == 0 else "imaginary (negative)" if nu < 0 else f"above {_LARGEST_WAVENUMBER:g} cm⁻¹"
            raise entry.error(f"the wavenumber {nu:g} is {kind}", key="wavenumbers", expected="positive numbers in cm⁻¹",
                              remedy="correct it; a free rotation is a rotor with barrier 0, the one imaginary wavenumber of a "
                                     "transition state stands in its key 'imaginary'")
        if not (1 <= count <= 100 and count == int(count)):
            raise entry.error(f"the degeneracy {count:g} of the wavenumber {nu:g}", key="wavenumbers",
                              expected="a whole number above 0", remedy="correct it")
        found.append((float(nu), int(count)))
    return tuple(found)


def _electronic(entry: Entry, substance: Substance) -> tuple[tuple[int, float], ...]:
    odd = substance.chemical and substance.electrons % 2 == 1
    example = "[[2, 0]] (degeneracy, cm⁻¹), the ground level first" if odd else "[[3, 0], [2, 7918]]"
    if "electronic" not in entry.data and odd:
        raise entry.error("the electronic ground level is missing: an odd number of electrons", key="electronic",
                          expected=f"electronic = {example}", remedy="add it")
    levels = tuple(entry.row(level, f"electronic[{k}]")
                   for k, level in enumerate(entry.items("electronic", ((1, 0.0),), example), 1))
    if not levels or any(len(level) != 2 for level in levels) or levels[0][1] != 0:
        raise entry.error("the electronic ground level is missing", key="electronic",
                          expected=f"pairs of degeneracy and cm⁻¹, the first at 0, such as {example}", remedy="add it")
    for k, (g, nu) in enumerate(levels):
        even = " and even, as the number of electrons is odd" if odd else ""
        if not 1 <= g <= 1000 or g != int(g) or (odd and g % 2):
            raise entry.error(f"{g:g} is not the degeneracy of an electronic level", key=f"electronic[{k + 1}]",
                              expected="a whole number above 0" + even, remedy="correct it")
        if k and not levels[k - 1][1] < nu <= _LARGEST_LEVEL:
            raise entry.error(f"{nu:g} cm⁻¹ does not rise", key=f"electronic[{k + 1}]",
                              expected=f"levels that rise, up to {_LARGEST_LEVEL:g} cm⁻¹", remedy="correct it")
    return tuple((int(g), nu) for g, nu in levels)


def _rotors(entry: Entry) -> tuple[Rotor, ...]:
    example = '[{ barrier = "12 kJ/mol", fold = 3, B = 5.3 }]'
    return tuple(_rotor(entry.sub(data, f"{entry.place}.rotors[{k}]"))
                 for k, data in enumerate(entry.items("rotors", (), example), 1))


def _rotor(entry: Entry) -> Rotor:
    barrier = entry.quantity("barrier", "molar energy", sign="not negative")
    fold, B = _whole(entry, "fold", None, 12), entry.number("B", sign="positive")
    symmetry = _whole(entry, "symmetry", fold, 12)
    if fold % symmetry:
        raise entry.error(f"{symmetry} does not divide the {fold} minima", key="symmetry",
                          expected="the number of indistinguishable orientations, a divisor of fold", remedy="correct either")
    if not 0.01 <= B <= _LARGEST_B or barrier > 1e6:
        key, found = ("barrier", f"{barrier:g} J/mol") if barrier > 1e6 else ("B", f"{B:g} cm⁻¹")
        raise entry.error(f"{found} of a rotor", key=key, remedy="correct it",
                          expected=f"B from 0.01 to {_LARGEST_B:g} cm⁻¹ and a barrier up to 1 MJ/mol")
    entry.done()
    return Rotor(barrier, fold, B, symmetry)


def _check_symmetry(entry: Entry, molecule: StatisticalMechanics, substance: Substance) -> None:
    problem = _symmetry_problem(molecule, substance)
    if problem:
        raise entry.error(f"{molecule.symmetry} {problem}", key="symmetry", expected=_EXPECTED["symmetry"],
                          remedy="correct the symmetry number, or what it is held against")
    if molecule.shape != "nonlinear" and molecule.optical_isomers > 1:
        raise entry.error(f"optical isomers of a species whose shape is '{molecule.shape}'", key="optical_isomers",
                          expected="1: it equals its mirror image", remedy="leave the key out")


def _symmetry_problem(molecule: StatisticalMechanics, substance: Substance) -> str:
    if molecule.shape == "atom" and molecule.symmetry > 1:
        return "is not the symmetry number of an atom, which is 1"
    if molecule.shape == "linear":
        odd = sum(count % 2 for count in substance.composition.values())
        if molecule.symmetry > 2 or (molecule.symmetry == 2 and odd > 1):
            return "is not the symmetry number of this linear molecule: 2 if its halves are alike, else 1"
    if molecule.shape == "nonlinear" and molecule.symmetry not in (1, 2, 4) and not _has_equal(molecule.B):
        return "is not the symmetry number of an asymmetric top (1, 2 or 4), which three different B make it"
    return ""


def _has_equal(B: tuple[float, ...]) -> bool:
    """Whether two of the three rotational constants are equal."""
    low, middle, high = sorted(B) if len(B) == 3 else (1.0, 1.0, 1.0)
    return middle - low <= _EQUAL * middle or high - middle <= _EQUAL * high


def _check_inertia(entry: Entry, molecule: StatisticalMechanics) -> None:
    if molecule.shape != "nonlinear":
        return
    first, second, largest = sorted(1 / B for B in molecule.three_constants())
    if largest > _INERTIA * (first + second):
        raise entry.error(f"{shown(list(molecule.B))}: one moment of inertia is larger than the other two together", key="B",
                          expected="1/C at most 1/A + 1/B, as in a planar molecule", remedy="correct the constants")


def _check_modes(entry: Entry, molecule: StatisticalMechanics, substance: Substance, imaginary: int) -> None:
    if (molecule.shape == "atom") != (substance.atoms == 1) and substance.chemical:
        raise entry.error(f"the shape '{molecule.shape}' of {substance.atoms} atom{'s' * (substance.atoms > 1)}", key="shape",
                          expected="'atom' for one atom, 'linear' or 'nonlinear' for more", remedy="correct shape or formula")
    if molecule.rotors and molecule.shape != "nonlinear":
        raise entry.error(f"rotors of a species whose shape is '{molecule.shape}'", key="rotors", expected="none",
                          remedy="leave them out")
    rest = {"atom": 3, "linear": 5, "nonlinear": 6}[molecule.shape]
    expected = 3 * substance.atoms - rest - len(molecule.rotors) - imaginary
    found = sum(count for _, count in molecule.wavenumbers)
    if substance.chemical and found != expected:
        less = f" less {len(molecule.rotors)} of rotors" * bool(molecule.rotors) + " less the imaginary one" * bool(imaginary)
        raise entry.error(f"{found} vibrations", key="wavenumbers", remedy="complete the list or correct the formula",
                          expected=f"{expected} (3N - {rest}{less} for {substance.atoms} atoms)")
