"""What every form of thermochemistry offers, what reading one needs to know, and its plain functions."""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Protocol

import numpy as np

from .polynomial import Ranges, at

Ladder = tuple[tuple[float, float], ...]
"""Levels of one sum: (θ [K] above the lowest, weight [-])."""


@dataclass(frozen=True)
class Modes:
    """What a species has besides its polynomials: oscillators (θ [K], degeneracy), counted from v = 0, and ladders."""

    oscillators: tuple[tuple[float, float], ...] = ()
    ladders: tuple[Ladder, ...] = ()

    def cp_h_s(self, temperature: float) -> tuple[float, float, float]:
        """What the modes add to cp/R, h/RT and s/R [-] at T [K] (kernels/modes.py states the formulas)."""
        parts = [_oscillator(theta / temperature, count) for theta, count in self.oscillators]
        parts += [_ladder(np.array(ladder), temperature) for ladder in self.ladders]
        cp, h, s = np.sum(parts, axis=0) if parts else (0.0, 0.0, 0.0)
        return float(cp), float(h), float(s)


NO_MODES = Modes()


def _oscillator(x: float, count: float) -> tuple[float, float, float]:
    rest = -math.expm1(-x)
    n = math.exp(-x) / rest
    return count * x * x * n * (n + 1), count * x * n, count * (x * n - math.log(rest))


def _ladder(levels: np.ndarray, temperature: float) -> tuple[float, float, float]:
    x = levels[:, 0] / temperature
    weights = levels[:, 1] * np.exp(-x)
    q = np.sum(weights)
    mean = weights @ x / q
    return weights @ (x - mean) ** 2 / q, mean, mean + np.log(q)


class Potential(Protocol):
    """What the standard chemical potential of a species is made from."""

    def ranges(self) -> Ranges:
        """The common coefficients."""

    def modes(self) -> Modes:
        """What the kernels need besides the coefficients."""
        return NO_MODES


@dataclass(frozen=True)
class Functions:
    """The plain functions of one species: its ranges as a mechanism uses them, and its modes."""

    ranges: Ranges
    modes: Modes = NO_MODES

    def cp_h_s(self, temperature: float) -> tuple[float, float, float]:
        """cp/R, h/RT and s/R [-] at a temperature [K]; beyond the ends of the ranges as `extended` says."""
        own, added = at(self.ranges, temperature), self.modes.cp_h_s(temperature)
        return own[0] + added[0], own[1] + added[1], own[2] + added[2]


@dataclass(frozen=True)
class Substance:
    """What a species tells its form: composition, charge, molar mass [kg/mol], standard pressure [Pa].

    atomic_numbers : of its elements; building blocks that are no chemical elements have none.
    """

    composition: Mapping[str, int]
    charge: int
    molar_mass: float
    standard_pressure: float
    atomic_numbers: Mapping[str, int]

    @property
    def chemical(self) -> bool:
        """Whether it is made of chemical elements alone, so that atoms and electrons can be counted."""
        return all(symbol in self.atomic_numbers for symbol in self.composition)

    @property
    def atoms(self) -> int:
        """Number of atoms."""
        return sum(self.composition.values())

    @property
    def electrons(self) -> int:
        """Number of electrons."""
        return sum(self.atomic_numbers[symbol] * count for symbol, count in self.composition.items()) - self.charge
