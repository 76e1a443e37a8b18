"""The kinds of findings, one file each: NAME, SOURCE, SEVERITY, EXPLANATION and find(survey)."""

from collections.abc import Sequence

from ..finding import Check
from . import (
    atoms_balance,
    both_ways_round,
    broadening,
    collision_limit,
    conserved,
    copied_data,
    cycles,
    entropy,
    fit_range,
    formation_enthalpy,
    heat_capacity,
    joins,
    jumps_of_K,
    limits_crossing,
    negative_sum,
    prefactor,
    pressure_table,
    published_one_way,
    published_reverse,
    recombination_limit,
    series_window,
    unimolecular_limit,
    untouched,
)

CHECKS: Sequence[Check] = (
    collision_limit, recombination_limit, unimolecular_limit, published_reverse, published_one_way,
    joins, jumps_of_K, heat_capacity, entropy, formation_enthalpy, fit_range, copied_data,
    atoms_balance, untouched, conserved, both_ways_round, cycles,
    broadening, limits_crossing, pressure_table, series_window, negative_sum, prefactor)
"""In the order in which the report explains them."""

__all__ = ["CHECKS"]
