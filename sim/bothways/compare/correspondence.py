"""Which species of a reduced mechanism stand for which of its parent, and what both must have in common."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from ..entry import Entry
from ..errors import InputError, hint
from ..mechanism import Mechanism
from ..mechanism.files import read_toml

Names = Mapping[str, Sequence[str]]


@dataclass(frozen=True, eq=False)
class Correspondence:
    """group : (N of the parent) the place of the reduced mechanism's species that stands for each; -1 where none does.

    size : (N of the reduced) how many species of the parent each stands for: 1, or more where it lumps some.
    """

    group: np.ndarray
    size: np.ndarray

    def lumped(self, fractions: np.ndarray) -> np.ndarray:
        """Values of the parent's species (…, N) summed by the reduced mechanism's species, (…, N reduced)."""
        total = np.zeros((*fractions.shape[:-1], len(self.size)))
        for k in np.flatnonzero(self.group >= 0):
            total[..., self.group[k]] += fractions[..., k]
        return total

    def missing(self) -> np.ndarray:
        """Places of the parent's species that nothing stands for."""
        return np.flatnonzero(self.group < 0)


def read_mapping(path: str | Path) -> dict[str, tuple[str, ...]]:
    """A mapping file: under [species], the reduced mechanism's name = the parent's, or a list of those it lumps.

    Raises InputError naming file and entry.
    """
    top = Entry(read_toml(Path(path)), "", path)
    top.expect("species")
    table = top.table("species")
    if not table.data:
        raise table.error("no names", expected='lines such as METHANE = "CH4" or C4H8 = ["C4H81", "C4H82"]')
    return {name: _parents(table, name) for name in table.data}


def _parents(table: Entry, name: str) -> tuple[str, ...]:
    if isinstance(table.data[name], str):
        return (table.text(name),)
    names = table.texts(name)
    if not names:
        raise table.error("an empty list", expected="the parent's name of the species, or a list of names", key=name)
    return names


def correspondence(parent: Mechanism, reduced: Mechanism, mapping: Names | None = None, file: object = None) -> Correspondence:
    """How the species of two mechanisms belong together: by name, unless the mapping says otherwise.

    Raises InputError: other phase, a species without counterpart, of another composition, or claimed twice.
    """
    mapping = mapping or {}
    if parent.phase != reduced.phase:
        raise InputError(f"the phase is '{reduced.phase}'", file=reduced.file, entry="mechanism.phase",
                         expected=f"'{parent.phase}', as in '{parent.name}'", remedy="compare mechanisms of one phase")
    group, size = np.full(len(parent.species), -1), np.zeros(len(reduced.species), dtype=int)
    for place, species in enumerate(reduced.species):
        for name in mapping.get(species.name, (species.name,)):
            k = _in_parent(parent, reduced, species.name, name, mapping, file)
            _check_same(parent, reduced, k, place)
            if group[k] >= 0:
                raise InputError(f"{name} of '{parent.name}' is claimed by both {reduced.names[group[k]]} and {species.name}",
                                 file=file or reduced.file, expected="one species for each",
                                 remedy="correct the mapping, or lump both in one mechanism")
            group[k] = place
            size[place] += 1
    return Correspondence(group, size)


def check_mapping_used(mapping: Names, mechanisms: Sequence[Mechanism], file: object) -> None:
    """Refuses a name of the mapping that no reduced mechanism has."""
    known = {name for m in mechanisms for name in m.names}
    for name in mapping:
        if name not in known:
            raise InputError(f"unknown species '{name}'{hint(name, known)}", file=file, entry="species", remedy="correct it",
                             expected="a species of a reduced mechanism, with its name in the parent")


def _in_parent(parent: Mechanism, reduced: Mechanism, own: str, name: str, mapping: Names, file: object) -> int:
    if name in parent.names:
        return parent.index(name)
    if own in mapping:
        raise InputError(f"'{parent.name}' has no species '{name}'{hint(name, parent.names)}", file=file, entry=f"species.{own}",
                         expected="a species of the parent", remedy="correct the name")
    raise InputError(f"'{parent.name}' has no species '{own}'{hint(own, parent.names)}", file=reduced.file,
                     entry=f"species.{own}", expected="a species of the parent",
                     remedy="say in a mapping file (--mapping) which species of the parent it stands for")


def _check_same(parent: Mechanism, reduced: Mechanism, k: int, place: int) -> None:
    """The same atoms and charge; building blocks of the same mass."""
    theirs, own = parent.species[k], reduced.species[place]
    if dict(theirs.composition) != dict(own.composition) or theirs.charge != own.charge:
        raise InputError(f"{own.name} is {_formula(own.composition, own.charge)}", file=reduced.file,
                         expected=f"{_formula(theirs.composition, theirs.charge)}, as {theirs.name} in '{parent.name}'",
                         entry=f"species.{own.name}", remedy="compare mechanisms of the same elements, or map to another species")
    if abs(theirs.molar_mass - own.molar_mass) > 1e-3 * theirs.molar_mass:
        raise InputError(f"{own.name} weighs {1e3 * own.molar_mass:g} g/mol", file=reduced.file, entry="elements",
                         expected=f"{1e3 * theirs.molar_mass:g} g/mol, as in '{parent.name}'",
                         remedy="state the building blocks' masses alike")


def _formula(composition: Mapping[str, int], charge: int) -> str:
    atoms = " ".join(f"{symbol}{count if count != 1 else ''}" for symbol, count in composition.items())
    return atoms + (f", charge {charge:+d}" if charge else "")
