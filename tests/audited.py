"""A mechanism in which an audit finds nothing, and small ways to spoil it.

Hydrogen and oxygen as bundled (Burke et al. 2012, see mechanisms/hydrogen-oxygen.toml), without diluents and without the
dissociation of H2O by H2O, whose derived reverse exceeds the collision rate somewhat.
"""

from collections.abc import Callable
from typing import Any

from bothways import build_mechanism, read_mechanism
from bothways.audit import Audit, Finding, audit

Document = dict[str, Any]
_DILUENTS = {"N2", "AR", "HE", "CO", "CO2"}


def sound() -> Document:
    """The document of the sound mechanism, to be spoiled."""
    document = read_mechanism("hydrogen-oxygen").to_dict()
    document["species"] = {name: s for name, s in document["species"].items() if name not in _DILUENTS}
    document["reaction"] = [r for r in document["reaction"]
                            if not _DILUENTS & set(r["equation"].split()) and not r["equation"].startswith("2 H2O ")]
    for reaction in document["reaction"]:
        if "collision_efficiency" in reaction:
            named = reaction["collision_efficiency"]
            reaction["collision_efficiency"] = {name: e for name, e in named.items() if name not in _DILUENTS}
    return document


def entry(document: Document, equation: str) -> Document:
    """The reaction of that equation."""
    return next(r for r in document["reaction"] if r["equation"] == equation)


def forward(document: Document, equation: str) -> Document:
    """Its forward law."""
    return entry(document, equation)["forward"]


def rows(document: Document, species: str) -> list[list[float]]:
    """The coefficients of a species."""
    return document["species"][species]["potential"]["a"]


def add(document: Document, equation: str, law: Any, **more: Any) -> None:
    """One more reaction."""
    document["reaction"].append({"equation": equation, "forward": law, **more})


def audited(spoil: Callable[[Document], Any] | None = None, **how: Any) -> Audit:
    """The audit of the sound mechanism after `spoil` changed its document."""
    document = sound()
    if spoil is not None:
        spoil(document)
    return audit(build_mechanism(document), **how)


def found(kind: str, spoil: Callable[[Document], Any], **how: Any) -> list[Finding]:
    """What an audit of the spoiled mechanism finds of one kind."""
    return list(audited(spoil, **how).of(kind))
