"""Every form and every law passes through an audit by the common interfaces."""

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest

import audited
import solutions
from bothways import audit, build_mechanism
from bothways.audit.survey import Survey
from bothways.contents import Contents
from invented import building_blocks
from invented_laws import every_law
from invented_lumped import lumped_steps
from test_statistical import ETHANE

Document = dict[str, Any]


@pytest.mark.parametrize("make", [building_blocks, every_law, lumped_steps, solutions.document])
def test_constants_are_those_of_a_run(make: Callable[[], Document]) -> None:
    """Equilibrium constants against the compiled potentials, forward constants against the reactions' own."""
    m, T, p = build_mechanism(make()), 700.0, 2e5
    survey = Survey(m, np.array([T]), np.array([p]))
    assert survey.log_K[0] == pytest.approx(Contents(m).log_equilibrium_constants(T), rel=1e-11, abs=1e-11)
    for j, reaction in enumerate(m.reactions):
        expected = reaction.forward_constant(T, p / (8.31446261815324 * T), p)
        assert survey.forward[0, 0, j] == pytest.approx(expected, rel=1e-12), reaction.equation
    assert len(audit(m)) > 0


def ethane(H0: float) -> Callable[[Document], None]:
    def spoil(document: Document) -> None:
        document["species"]["C2H6"] = {"formula": "C2H6", "potential": ETHANE | {"H0": f"{H0} kJ/mol"}}
        document["species"]["C2H6"]["potential"]["rotors"] = [{"barrier": "12.25 kJ/mol", "fold": 3, "B": 10.7}]
    return spoil


def test_molecular_constants_are_looked_at_like_fits() -> None:
    """Ethane from its vibrations, H0 = -68.4 kJ/mol: -84 at 298 K, as the reference has it; 10 lower it has not."""
    names = {row.kind for row in audited.audited(ethane(-68.4)).findings if row.species == "C2H6"}
    assert names == {"takes no part"}
    [row] = audited.found("enthalpy of formation", ethane(-78.4))
    assert row.value == pytest.approx(-93.9e3, abs=500) and row.severity == "warning"


def test_lumped_steps_have_no_reverse_constant() -> None:
    """Mass action beside it is compared and held against the collision rate; the step of other orders is not."""
    def spoil(orders: Document) -> Callable[[Document], None]:
        law = {"law": "Arrhenius", "A": 1e20} | orders
        return lambda d: audited.entry(d, "HO2 + H ⇌ 2 OH").update(forward=law, published_reverse={"A": 1e13})
    kinds = {row.kind for row in audited.audited(spoil({})).findings}
    assert {"published reverse", "faster than collisions"} <= kinds
    lumped = {row.kind for row in audited.audited(spoil({"orders": {"H": 1.5}})).findings}
    assert not {"published reverse", "faster than collisions", "A-factor"} & lumped
