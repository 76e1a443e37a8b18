"""A species whose enthalpy and entropy are not stated: equilibrium constants of its reactions give what matters of them.

Only differences between species count in a closed vessel; mechanism/stated_equilibria.py puts potentials in the place of these.
"""

from dataclasses import dataclass

import numpy as np

from ..constants import GAS_CONSTANT
from .polynomial import Ranges, constant_row
from .potential import Potential


@dataclass(frozen=True)
class Unstated(Potential):
    """cp [J/(mol K)], constant, where that is known; else None."""

    cp: float | None = None

    def ranges(self) -> Ranges:
        """The heat capacity alone, over all temperatures."""
        return Ranges(np.array([0.0, np.inf]), constant_row(298.15, (self.cp or 0.0) / GAS_CONSTANT, 0.0, 0.0)[None, :])
