"""Statistical-mechanical thermochemistry: rigid rotor, harmonic oscillators, electronic levels, hindered rotors.

Ideal gas, translation and rotation classical: q_rot = T/(σ θ) of linear, (√π/σ)(T³/(θ_A θ_B θ_C))^(1/2) of nonlinear
molecules (D.A. McQuarrie, Statistical Mechanics, Harper & Row, New York, 1976, ch. 5, 6 and 8; IUPAC Green Book, 3rd ed.,
2.14). Limits: classical rotation is off by θ/3T in ln q (9 % for H2 at 298 K), anharmonicity and centrifugal stretching
are left out (of diatomics typically 0.1 J/(mol K) in cp at 1000 K, more for heavy or soft ones), and what is left out
grows with temperature. Translation and rotation are one row of the common coefficients, the rest are modes.
"""

import math
from dataclasses import dataclass

from .polynomial import Ranges
from .potential import Modes, Potential
from .rotor import KELVIN_PER_WAVENUMBER, Rotor
from .structureless import log_translation, one_row

SHAPES = ("atom", "linear", "nonlinear")
_ROTATION = {"atom": 0.0, "linear": 1.0, "nonlinear": 1.5}


@dataclass(frozen=True)
class StatisticalMechanics(Potential):
    """A molecule: B [cm⁻¹], wavenumbers (cm⁻¹, degeneracy), electronic (degeneracy, cm⁻¹), rotors.

    energy : enthalpy at 0 K on the scale of formation from the elements at 298.15 K [J/mol].
    molar_mass [kg/mol], standard_pressure [Pa].
    """

    shape: str
    energy: float
    molar_mass: float
    standard_pressure: float
    B: tuple[float, ...] = ()
    symmetry: int = 1
    optical_isomers: int = 1
    wavenumbers: tuple[tuple[float, int], ...] = ()
    electronic: tuple[tuple[int, float], ...] = ((1, 0.0),)
    rotors: tuple[Rotor, ...] = ()

    def ranges(self) -> Ranges:
        """Translation, rotation, optical isomers and a single electronic level: one row without ends."""
        entropy = log_translation(self.molar_mass, self.standard_pressure) + self._log_rotation()
        entropy += math.log(self.optical_isomers) + (math.log(self.electronic[0][0]) if len(self.electronic) == 1 else 0.0)
        cp = 2.5 + _ROTATION[self.shape]
        return one_row(cp, self.energy, entropy + cp)

    def modes(self) -> Modes:
        """Vibrations; electronic levels if there are several; rotors."""
        c = KELVIN_PER_WAVENUMBER
        electronic = tuple((c * nu, float(g)) for g, nu in self.electronic)
        ladders = (electronic,) * (len(electronic) > 1) + tuple(rotor.ladder() for rotor in self.rotors)
        return Modes(tuple((c * nu, float(g)) for nu, g in self.wavenumbers), ladders)

    def _log_rotation(self) -> float:
        """ln q_rot at 1 K."""
        if self.shape == "atom":
            return 0.0
        thetas = [KELVIN_PER_WAVENUMBER * B for B in self.three_constants()]
        root = math.log(thetas[0]) if self.shape == "linear" else 0.5 * (sum(map(math.log, thetas)) - math.log(math.pi))
        return -root - math.log(self.symmetry)

    def three_constants(self) -> tuple[float, ...]:
        """B of a linear molecule once, of a nonlinear one about each of its axes [cm⁻¹]."""
        if self.shape == "linear":
            return self.B
        return {1: self.B * 3, 2: (self.B[0], *self.B[1:] * 2), 3: self.B}[len(self.B)]
