"""Species with the very same thermochemistry."""

from collections import defaultdict
from collections.abc import Iterator, Sequence

from ...mechanism.model import Species
from ..finding import ERROR, NONE, NOTICE, Finding
from ..survey import Survey

NAME = "same data"
SOURCE = "no two species have the same potential at every temperature; our own rule"
SEVERITY = "error where they are made of different atoms, notice for isomers"
EXPLANATION = ("Identical coefficients were copied, as a stand-in or by mistake. Between isomers K is then exactly 1 at all "
               "temperatures but for symmetry; between different formulas the enthalpies of formation are wrong.")


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each group of species that share their coefficients."""
    groups: dict[tuple, list[Species]] = defaultdict(list)
    for species in filter(survey.has_own_data, survey.mechanism.species):
        ranges = species.potential.ranges()
        groups[ranges.boundaries.tobytes(), ranges.rows.tobytes(), species.potential.modes()].append(species)
    for same in groups.values():
        if len(same) > 1:
            yield _row(same)


def _row(same: Sequence[Species]) -> Finding:
    kinds = {frozenset(s.composition.items()) | {("charge", s.charge)} for s in same}
    names = ", ".join(s.name for s in same[1:])
    what = "made of the same atoms" if len(kinds) == 1 else "though made of different atoms"
    text = f"the same coefficients as {names}, {what}"
    return Finding(NAME, NOTICE if len(kinds) == 1 else ERROR, f"species.{same[0].name}.potential", text, NONE,
                   value=float(len(same)), unit="species", species=same[0].name)
