"""K(T) as the rates have it, forward over reverse, against NIST-JANAF equilibrium constants."""

import numpy as np
import pytest

from bothways import Mechanism

from .janaf import CONSTANTS
from .small import atm, bar, excerpt, pressure_constants

ALLOWED = 0.01
"""Enthalpies of formation within 0.03 kJ/mol (see test_thermochemistry) are worth 0.4 % in K a molecule at 1000 K."""


def _label(mechanism: Mechanism) -> float:
    """What K_p of the one reaction is off by for records whose own standard pressure is not the one stated for them.

    Records of 1986/87 stand at 1 atm, all others at 1 bar; the methane and c1-c4 sets state 1 atm for both.
    """
    records = [atm if species.source.isdigit() else bar for species in mechanism.species]
    stated = [species.standard_pressure for species in mechanism.species]
    return float(np.prod((np.array(stated) / records) ** mechanism.stoichiometry[:, 0]))


@pytest.mark.parametrize("name", ["hydrogen-oxygen", "methane", "c1-c4"])
@pytest.mark.parametrize("equation", CONSTANTS)
def test_against_janaf(equation, name):
    mechanism = excerpt(name, [{"equation": equation, "forward": {"law": "Arrhenius", "A": 1.0}}])
    for T, log_K in CONSTANTS[equation].items():
        K = pressure_constants(mechanism, T)[0] / _label(mechanism)
        assert K / 10.0**log_K == pytest.approx(1.0, abs=ALLOWED), T


def test_the_water_gas_shift_turns_over():
    """K = 1 at 1096.5 K by JANAF 1998 and at 1095.7 K by NASA/TP-2002-211556: between 1090 and 1102 K with ALLOWED."""
    mechanism = excerpt("methane", [{"equation": "CO + H2O ⇌ CO2 + H2", "forward": {"law": "Arrhenius", "A": 1.0}}])
    assert pressure_constants(mechanism, 1090.0)[0] > 1.0 > pressure_constants(mechanism, 1102.0)[0]
