"""No false alarm: two hundred random consistent mechanisms give no error; made inconsistent, they do."""

import numpy as np
import pytest

from bothways import audit, build_mechanism
from bothways.audit import ERROR, Finding
from consistent import random_mechanism


def errors(document: dict) -> list[Finding]:
    return [row for row in audit(build_mechanism(document)).findings if row.severity == ERROR]


@pytest.mark.parametrize("first", range(0, 200, 50))
def test_consistent_mechanisms_give_no_error(first: int) -> None:
    for seed in range(first, first + 50):
        assert errors(random_mechanism(seed)) == [], seed


@pytest.mark.parametrize("seed", range(20))
def test_they_do_once_spoilt(seed: int) -> None:
    """A species' enthalpy 150 kJ/mol off, as by a slip of sign: one way or the other some constant becomes impossible."""
    kinds = set()
    for shift in (150e3, -150e3):
        document = random_mechanism(seed)
        for row in document["species"]["R0"]["potential"]["a"]:
            row[5] += shift / 8.31446261815324
        kinds |= {row.kind for row in errors(document)}
    assert kinds and kinds <= {"faster than collisions", "recombination faster than collisions", "unimolecular above k_B T/h",
                               "published reverse"}


def test_random_mechanisms_differ() -> None:
    sizes = {len(random_mechanism(seed)["reaction"]) for seed in range(20)}
    assert len(sizes) > 3 and np.ptp(list(sizes)) > 2
