"""Physical constants: one vintage, CODATA 2022 (the SI's defining constants are exact since 2019).

E. Tiesinga, P.J. Mohr, D.B. Newell, B.N. Taylor, CODATA recommended values of the fundamental physical
constants: 2022, https://physics.nist.gov/constants.
"""

AVOGADRO = 6.02214076e23
"""N_A [1/mol], exact."""
BOLTZMANN = 1.380649e-23
"""k_B [J/K], exact."""
PLANCK = 6.62607015e-34
"""h [J s], exact."""
SPEED_OF_LIGHT = 299792458.0
"""c [m/s], exact."""
ELEMENTARY_CHARGE = 1.602176634e-19
"""e [C], exact."""
GAS_CONSTANT = 8.31446261815324
"""R = N_A k_B [J/(mol K)], exact."""
ATMOSPHERE = 101325.0
"""Standard atmosphere [Pa], exact by definition."""
THERMOCHEMICAL_CALORIE = 4.184
"""Thermochemical calorie [J], exact by definition."""
