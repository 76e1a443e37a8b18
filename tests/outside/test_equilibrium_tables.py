"""K(T) of seventeen gas reactions, 298.15 to 3000 K, against two published evaluations of their thermochemistry.

The species stand with the coefficients of B.J. McBride, M.J. Zehe, S. Gordon, NASA/TP-2002-211556 (2002), as a mechanism file
has them (form "NASA 9-coefficient"). Their K must be met to the last printed digit; they are [R], worked out from the
coefficients by an independent program. The NIST-JANAF Thermochemical Tables (M.W. Chase Jr., 4th ed., J. Phys. Chem. Ref.
Data Monograph 9, 1998) are another evaluation: it differs by enthalpies of formation, which are known and taken out, and by
partition functions, for which each reaction has its allowance.
"""

from collections.abc import Sequence
from functools import cache

import numpy as np
import pytest

from bothways import build_mechanism
from bothways.contents import Contents

from .small import R, pressure_constants
from .tp2002 import ROWS, potential

PRINTED = 6e-6
"""Half the last of five printed decimals of log10 K, and a little for the digits of the coefficients."""

# equation: (its multiple of the reaction of the printed K, JANAF's allowed departure in log10 K up to 1000 K and above,
#            {T [K]: log10 K at 1 bar by (TP-2002-211556 [R], JANAF from ΔfG°)}).
# The departures are those of the two evaluations once ΔfH° is made equal, rounded up. Larger ones: CH4 of JANAF is a rigid
# rotor and harmonic oscillator; H2O, NH3, C2H2 and I2 differ when hot, NO2 and N2O4 in cp°, SO3 and Br2 in S°.
REACTIONS = {
    "CO + H2O ⇌ CO2 + H2": (1, (0.001, 0.007), {
        298.15: (5.01405, 5.0182), 500: (2.13642, 2.1389), 1000: (0.15653, 0.1578), 1500: (-0.41298, -0.4119),
        2000: (-0.66094, -0.6589), 3000: (-0.86932, -0.8623)}),
    "N2 + 3 H2 ⇌ 2 NH3": (2, (0.002, 0.017), {
        298.15: (2.87427, 2.8674), 500: (-0.49771, -0.5014), 1000: (-3.23339, -3.2338), 1500: (-4.20575, -4.2029),
        2000: (-4.69361, -4.6866), 3000: (-5.16376, -5.1483)}),
    "N2O4 ⇌ 2 NO2": (1, (0.012, 0.094), {
        298.15: (-0.84672, -0.8285), 500: (3.15845, 3.1732), 1000: (5.92686, 5.9469), 1500: (6.73441, 6.7394),
        2000: (7.08775, 7.0660), 3000: (7.38346, 7.2930)}),
    "H2 + I2 ⇌ 2 HI": (1, (0.001, 0.022), {
        298.15: (2.83923, 2.8390), 500: (2.10765, 2.1077), 1000: (1.46324, 1.4632), 1500: (1.22358, 1.2231),
        2000: (1.10069, 1.0974), 3000: (0.96689, 0.9452)}),
    "N2 + O2 ⇌ 2 NO": (2, (0.001, 0.001), {
        298.15: (-15.34391, -15.1717), 500: (-8.88640, -8.7835), 1000: (-4.11413, -4.0625), 1500: (-2.52174, -2.4872),
        2000: (-1.72515, -1.6992), 3000: (-0.93043, -0.9130)}),
    "CH4 + H2O ⇌ CO + 3 H2": (1, (0.014, 0.144), {
        298.15: (-24.86612, -24.9101), 500: (-10.04478, -10.0683), 1000: (1.42054, 1.4196), 1500: (5.34949, 5.3725),
        2000: (7.29235, 7.3469), 3000: (9.14202, 9.2801)}),
    "2 SO2 + O2 ⇌ 2 SO3": (2, (0.013, 0.009), {
        298.15: (12.43674, 12.4196), 500: (5.41666, 5.4111), 1000: (0.25493, 0.2567), 1500: (-1.43000, -1.4274),
        2000: (-2.25210, -2.2503), 3000: (-3.04840, -3.0492)}),
    "2 CO2 ⇌ 2 CO + O2": (2, (0.0015, 0.001), {
        298.15: (-45.05934, -45.0640), 500: (-25.01949, -25.0225), 1000: (-10.21571, -10.2175), 1500: (-5.31076, -5.3121),
        2000: (-2.87947, -2.8807), 3000: (-0.47992, -0.4812)}),
    "2 H2O ⇌ 2 H2 + O2": (2, (0.001, 0.006), {
        298.15: (-40.04529, -40.0458), 500: (-22.88307, -22.8837), 1000: (-10.05918, -10.0597), 1500: (-5.72374, -5.7240),
        2000: (-3.54042, -3.5396), 3000: (-1.34924, -1.3435)}),
    "2 H2O ⇌ 2 OH + H2": (2, (0.0025, 0.0055), {
        298.15: (-45.74955, -46.0509), 500: (-25.94924, -26.1295), 1000: (-11.19133, -11.2815), 1500: (-6.22694, -6.2868),
        2000: (-3.73585, -3.7798), 3000: (-1.24491, -1.2697)}),
    "H2 ⇌ 2 H": (1, (0.001, 0.001), {
        298.15: (-71.22476, -71.2255), 500: (-40.31493, -40.3154), 1000: (-17.28755, -17.2878), 1500: (-9.50784, -9.5081),
        2000: (-5.57623, -5.5765), 3000: (-1.60185, -1.6021)}),
    "O2 ⇌ 2 O": (1, (0.001, 0.001), {
        298.15: (-81.19684, -81.1968), 500: (-45.87136, -45.8714), 1000: (-19.60661, -19.6065), 1500: (-10.78408, -10.7838),
        2000: (-6.34949, -6.3491), 3000: (-1.89266, -1.8918)}),
    "2 NO + O2 ⇌ 2 NO2": (2, (0.019, 0.061), {
        298.15: (6.17867, 6.1917), 500: (2.10849, 2.1115), 1000: (-0.92816, -0.9404), 1500: (-1.92978, -1.9542),
        2000: (-2.42062, -2.4562), 3000: (-2.89515, -2.9533)}),
    "I2 ⇌ 2 I": (1, (0.001, 0.022), {
        298.15: (-21.20160, -21.2023), 500: (-10.48872, -10.4891), 1000: (-2.51101, -2.5113), 1500: (0.18072, 0.1801),
        2000: (1.53962, 1.5362), 3000: (2.91181, 2.8901)}),
    "H2 + Cl2 ⇌ 2 HCl": (1, (0.001, 0.002), {
        298.15: (33.39080, 33.3917), 500: (20.30084, 20.3013), 1000: (10.53006, 10.5302), 1500: (7.23039, 7.2302),
        2000: (5.57035, 5.5697), 3000: (3.90086, 3.8990)}),
    "H2 + Br2 ⇌ 2 HBr": (1, (0.0045, 0.0045), {
        298.15: (19.24056, 19.2978), 500: (11.87880, 11.9147), 1000: (6.33126, 6.3512), 1500: (4.44638, 4.4610),
        2000: (3.49849, 3.5099), 3000: (2.54300, 2.5508)}),
    "C2H2 + H2 ⇌ C2H4": (1, (0.006, 0.024), {
        298.15: (24.91664, 24.6634), 500: (12.32465, 12.1724), 1000: (2.71766, 2.6370), 1500: (-0.54064, -0.6008),
        2000: (-2.16475, -2.2170), 3000: (-3.77008, -3.8187)}),
}

FORMATION = {"OH": -1.709, "NO": 0.980, "NO2": 1.098, "N2O4": 2.032, "NH3": -0.042, "CH4": 0.273, "CO": -0.008, "CO2": 0.012,
             "C2H2": 1.469, "C2H4": 0.033, "SO2": 0.032, "SO3": -0.135, "HBr": 0.153, "HCl": 0.002, "I2": -0.001, "I": -0.002,
             "O": 0.002}
"""ΔfH°(298.15 K) of TP-2002-211556 less that of JANAF [kJ/mol] where they differ; JANAF's OH, NO and NO2 are superseded."""

# log10 Kf as JANAF prints it; tables H-064, C-093, C-095, N-005, H-083, C-067, H-038. Elements in their reference states: 0.
LOG_KF = {
    "H2O": {298.15: 40.047, 500: 22.884, 1000: 10.060, 1500: 5.724, 2000: 3.540, 3000: 1.344},
    "CO": {298.15: 24.030, 500: 16.236, 1000: 10.461, 1500: 8.488, 2000: 7.470, 3000: 6.404},
    "CO2": {298.15: 69.095, 500: 41.259, 1000: 20.679, 1500: 13.800, 2000: 10.351, 3000: 6.886},
    "NO": {298.15: -15.172, 500: -8.784, 1000: -4.063, 1500: -2.487, 2000: -1.699, 3000: -0.913},
    "NH3": {298.15: 2.867, 500: -0.501, 1000: -3.234, 1500: -4.203, 2000: -4.687, 3000: -5.148},
    "CH4": {298.15: 8.894, 500: 3.420, 1000: -1.018, 1500: -2.609, 2000: -3.416, 3000: -4.219},
    "OH": {298.15: -6.005, 500: -3.246, 1000: -1.222, 1500: -0.563, 2000: -0.240, 3000: 0.074},
}

# Reactions of these species that leave no carbon over, and the reactions above (times) that they are the sum of: their
# allowances add up.
OF_FORMATION = {
    "H2 + O2 ⇌ 2 OH": {"2 H2O ⇌ 2 OH + H2": 1, "2 H2O ⇌ 2 H2 + O2": -1},
    "CO + 2 OH ⇌ CO2 + H2O": {"CO + H2O ⇌ CO2 + H2": 1, "2 H2O ⇌ 2 OH + H2": -1},
    "2 NO + 2 CO ⇌ N2 + 2 CO2": {"N2 + O2 ⇌ 2 NO": -1, "2 CO2 ⇌ 2 CO + O2": -1},
    "2 NO + 2 H2 ⇌ N2 + 2 H2O": {"N2 + O2 ⇌ 2 NO": -1, "2 H2O ⇌ 2 H2 + O2": -1},
    "4 NH3 + 5 O2 ⇌ 4 NO + 6 H2O": {"N2 + 3 H2 ⇌ 2 NH3": -2, "N2 + O2 ⇌ 2 NO": 2, "2 H2O ⇌ 2 H2 + O2": -3},
    "CH4 + CO2 ⇌ 2 CO + 2 H2": {"CH4 + H2O ⇌ CO + 3 H2": 1, "CO + H2O ⇌ CO2 + H2": -1},
    "CH4 + 2 O2 ⇌ CO2 + 2 H2O": {"CH4 + H2O ⇌ CO + 3 H2": 1, "CO + H2O ⇌ CO2 + H2": 1, "2 H2O ⇌ 2 H2 + O2": -2},
}


@cache
def _gas(equations: Sequence[str], joins: str = "closed") -> Contents:
    """All species of the reactions at 1 bar; the forward rates are of no account."""
    words = {word for equation in equations for word in equation.split()}
    return Contents(build_mechanism({
        "mechanism": {"name": "published", "phase": "ideal gas", "standard_pressure": "1 bar", "joins": joins,
                      "units": ["m", "mol", "s", "K"]},
        "species": {name: {"composition": atoms, "potential": potential(name)} for name, (atoms, *_) in ROWS.items()
                    if name in words},
        "reaction": [{"equation": equation, "forward": {"law": "Arrhenius", "A": 1.0}} for equation in equations]}))


def _log_constants(equations: Sequence[str], temperature: float, joins: str = "closed") -> dict[str, float]:
    """log10 K° of the reactions as written."""
    return dict(zip(equations, np.log10(_gas(equations, joins).equilibrium_constants(temperature)), strict=True))


def _sum(equations: Sequence[str], equation: str, values: dict[str, float]) -> float:
    """Σ ν_i × value_i over the species of one of the reactions, 0 where no value is given."""
    of = _gas(equations).mechanism
    return float(of.stoichiometry[:, equations.index(equation)] @ [values.get(name, 0.0) for name in of.names])


def _of_enthalpy(equations: Sequence[str], equation: str, temperature: float) -> float:
    """What the differing enthalpies of formation are worth in log10 K, TP-2002-211556 less JANAF."""
    return -1e3 * _sum(equations, equation, FORMATION) / (R * temperature * np.log(10.0))


EQUATIONS = tuple(REACTIONS)


@pytest.mark.parametrize("joins", ["closed", "as published"])
@pytest.mark.parametrize("equation", EQUATIONS)
def test_the_same_coefficients(equation, joins):
    """The ranges of these fits meet to their digits, so that closing the joins at 1000 K moves nothing printed."""
    multiple, _, published = REACTIONS[equation]
    for T, (expected, _) in published.items():
        assert _log_constants(EQUATIONS, T, joins)[equation] / multiple == pytest.approx(expected, abs=PRINTED), T


@pytest.mark.parametrize("equation", EQUATIONS)
def test_against_janaf(equation):
    multiple, (cool, hot), published = REACTIONS[equation]
    for T, (_, expected) in published.items():
        ours = _log_constants(EQUATIONS, T)[equation] - _of_enthalpy(EQUATIONS, equation, T)
        assert ours / multiple == pytest.approx(expected, abs=cool if T <= 1000.0 else hot), T


@pytest.mark.parametrize("T", [1000.0, 2000.0, 3000.0])
def test_the_rates_have_the_same_constants(T):
    """Forward over reverse rate constant, in bar, is the published K."""
    ours = np.log10(pressure_constants(_gas(EQUATIONS).mechanism, T))
    for log_K, (multiple, _, published) in zip(ours, REACTIONS.values(), strict=True):
        assert log_K / multiple == pytest.approx(published[T][0], abs=PRINTED)


def _allowed(equation: str, temperature: float) -> float:
    """The allowances of the summed reactions and half a unit of the third decimal for each Kf."""
    equations, hot = tuple(OF_FORMATION), temperature > 1000.0
    of = _gas(equations).mechanism
    formed = np.array([name in LOG_KF for name in of.names])
    rounding = 5e-4 * float(formed @ np.abs(of.stoichiometry[:, equations.index(equation)]))
    return rounding + sum(abs(times) * REACTIONS[name][0] * REACTIONS[name][1][hot]
                          for name, times in OF_FORMATION[equation].items())


@pytest.mark.parametrize("equation", OF_FORMATION)
def test_against_constants_of_formation(equation):
    """log10 K = Σ ν_i log10 Kf_i."""
    equations = tuple(OF_FORMATION)
    for T in LOG_KF["OH"]:
        ours = _log_constants(equations, T)[equation] - _of_enthalpy(equations, equation, T)
        expected = _sum(equations, equation, {name: values[T] for name, values in LOG_KF.items()})
        assert ours == pytest.approx(expected, abs=_allowed(equation, T)), T
