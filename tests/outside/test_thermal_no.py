"""Reverse rate constants made from K(T) against published ones: thermal NO, and pairs of the H2/CO system."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import pytest

from .small import CM3, R, bundled, constants, excerpt, properties

# Thermal NO: R.K. Hanson, S. Salimian, in Combustion Chemistry, ed. W.C. Gardiner, Springer 1984, ch. 6.
# Equation: forward and reverse A, n, Ea/R (cm3, mol, s, K); the last reverse is [M].
ZELDOVICH = {"O + N2 ⇌ NO + N": ((1.8e14, 0.0, 38370.0), (3.8e13, 0.0, 425.0)),
             "N + O2 ⇌ NO + O": ((1.8e10, 1.0, 4680.0), (3.81e9, 1.0, 20820.0)),
             "N + OH ⇌ NO + H": ((7.1e13, 0.0, 450.0), (1.7e14, 0.0, 24560.0))}
JANAF_1998 = {"NO": 90.291, "OH": 38.987}  # ΔfH°(298.15 K) [kJ/mol], tables N-005 and H-038
IMPLIED = np.array([(1.00, 1.02), (1.02, 1.03), (1.10, 1.16)])
"""k_f/k_r of these pairs over JANAF's K, 1500 to 3000 K, smallest and largest: what the pairs themselves imply."""
FIT = 0.01
"""The set's fits of NO and OH are those of another edition: G within 0.1 kJ/mol of JANAF's, so K within 0.8 % at 1500 K."""
TEMPERATURES = (1500.0, 2000.0, 2500.0, 3000.0)


def _k(expression: tuple[float, float, float], temperature: float) -> float:
    A, n, theta = expression
    return A * temperature**n * float(np.exp(-theta / temperature))


def _reverse(formation: dict[str, float] | None, temperature: float) -> np.ndarray:
    """Reverse constants of the three steps [cm3/(mol s)], from the published forward ones and the set's species."""
    steps = [{"equation": equation, "forward": {"law": "Arrhenius", "A": A, "n": n, "Ea": theta}}
             for equation, ((A, n, theta), _) in ZELDOVICH.items()]
    return constants(excerpt("methane", steps, formation), temperature)[1] * CM3


@pytest.mark.parametrize("T", TEMPERATURES)
def test_thermal_no_like_with_like(T):
    """With JANAF's enthalpies of formation the published reverse constants come out, as near as they meet JANAF's K."""
    published = np.array([_k(reverse, T) for _, reverse in ZELDOVICH.values()])
    ratio = _reverse(JANAF_1998, T) / published
    assert np.all(ratio > IMPLIED[:, 0] - FIT) and np.all(ratio < IMPLIED[:, 1] + FIT), ratio


@pytest.mark.parametrize("T", TEMPERATURES)
def test_thermal_no_with_the_sets_own_no(T):
    """The set's NO lies 0.97 kJ/mol higher, its OH 0.36: all three reverse constants rise by exp(ΔΔH/RT), 5 to 8 %."""
    NO, OH = (properties(bundled("methane"), species, 298.15)[1] - value for species, value in JANAF_1998.items())
    assert (NO, OH) == pytest.approx((0.973, 0.360), abs=0.01)
    rise = np.exp(np.array([NO, NO, NO - OH]) * 1e3 / (R * T))
    assert _reverse(None, T) / _reverse(JANAF_1998, T) == pytest.approx(rise, rel=1e-9)


@dataclass(frozen=True)
class Pair:
    """Forward and reverse constants of different evaluations, cm3, mol, s, cal/mol.

    forward : terms (A, n, Ea) that add up. reverse : k(T), k published. factor : within which the sources say K may be
    met, their uncertainties combined as independent. temperatures : where both were evaluated [K].
    """

    equation: str
    forward: tuple[tuple[float, float, float], ...]
    reverse: Callable[[float], float]
    factor: float
    temperatures: tuple[float, ...]


def _both(forward_factor: float, reverse_log: float) -> float:
    """The factor of two independent uncertainties: f of the one, Δlog10 k of the other."""
    return float(10.0 ** np.hypot(np.log10(forward_factor), reverse_log))


MOLECULE = 6.02214076e23
# Forward: trial set FFCM-2 (Y. Zhang, W. Dong, L.A. Vandewalle, R. Xu, G.P. Smith, H. Wang, Foundational Fuel Chemistry
# Model 2.0, Stanford 2023) with its uncertainty factors and the sources it names.
PAIRS = {
    # S.H. Lam, D.F. Davidson, R.K. Hanson 2013 | D.L. Baulch et al., J. Phys. Chem. Ref. Data 21 (1992) 411 [M]
    "hydrogen and hydroxyl": Pair("H2 + OH ⇌ H + H2O", ((2.16e8, 1.51, 3437.0),),
                                  lambda T: MOLECULE * 7.5e-16 * T**1.6 * np.exp(-9270 / T), _both(1.2, 0.2),
                                  (500.0, 1000.0, 1500.0, 2000.0, 2500.0)),
    # A.V. Joshi, H. Wang 2006 | Baulch et al. 1992 [M]; held to the forward factor of the larger term alone
    "carbon monoxide and hydroxyl": Pair("CO + OH ⇌ CO2 + H", ((7.05e4, 2.05, -356.0), (5.76e12, -0.66, 332.0)),
                                         lambda T: MOLECULE * 2.5e-10 * np.exp(-13300 / T), 1.5,
                                         (1000.0, 1500.0, 2000.0, 2500.0)),
    # Z. Hong, D.F. Davidson, E.A. Barbour, R.K. Hanson 2011 | R. Atkinson et al., IUPAC evaluation, 150-500 K [M]
    "chain branching": Pair("H + O2 ⇌ O + OH", ((1.04e14, 0.0, 15310.0),),
                            lambda T: MOLECULE * 2.4e-11 * np.exp(110 / T), _both(1.15, 0.1), (500.0,)),
    # J. Troe 2011 | GRI-Mech 3.0 (G.P. Smith et al. 1999); limit of high pressure
    "hydrogen peroxide, k_inf": Pair("H2O2 ⇌ 2 OH", ((2.0e12, 0.9, 48750.0),), lambda T: 7.4e13 * T**-0.37, 2.5,
                                     (500.0, 1000.0)),
    # the same; limit of low pressure in N2, whose collision efficiency is 1.5 in the one and 1 in the other
    "hydrogen peroxide, k_0": Pair("H2O2 ⇌ 2 OH", ((1.5 * 2.49e24, -2.3, 48750.0),),
                                   lambda T: 2.3e18 * T**-0.9 * np.exp(1700 * 4.184 / (R * T)), 2.5, (500.0, 1000.0))}


@pytest.mark.parametrize("pair", PAIRS.values(), ids=PAIRS)
def test_pairs_of_the_hydrogen_system(pair):
    """The species of the c1-c4 set, whose OH (37.5 kJ/mol) is the present one."""
    forward = [{"law": "Arrhenius", "A": A, "n": n, "Ea": f"{Ea} cal/mol"} for A, n, Ea in pair.forward]
    mechanism = excerpt("c1-c4", [{"equation": pair.equation, "forward": forward}])
    for T in pair.temperatures:
        ratio = constants(mechanism, T)[1][0] * CM3 / pair.reverse(T)
        assert 1 / pair.factor < ratio < pair.factor, T
