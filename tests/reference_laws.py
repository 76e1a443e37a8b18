"""The forward laws of ``reference.py`` as plain NumPy formulas.

Written from the published formulas alone; nothing of the program is imported. Every branch looks at real parts
only, so that complex steps pass through.
"""

from dataclasses import dataclass
from typing import Any

import numpy as np

Array = np.ndarray

ARRHENIUS_WIDTH, CENTRE_WIDTH = 4, 7


def arrhenius(rows: Array, T: Any) -> Array:
    """A (T/T_ref)^n exp(-Ea/RT) of rows (m, 4)."""
    A, n, Ea_R, T_ref = rows.T
    return A * np.exp(n * np.log(T / T_ref) - Ea_R / T)


# ---- fall-off and chemical activation


def centre(rows: Array, T: Any) -> Array:
    """What the broadening is a power of [-], rows (m, 7): F_cent, or the bracket of SRI.

    R.G. Gilbert, K. Luther, J. Troe, Ber. Bunsenges. Phys. Chem. 87 (1983) 169, doi:10.1002/bbpc.19830870218;
    P.H. Stewart, C.W. Larson, D.M. Golden, Combust. Flame 75 (1989) 25, doi:10.1016/0010-2180(89)90084-9.
    """
    w0, w3, T3, w1, T1, w2, T2 = rows.T
    return w0 + w3 * np.exp(-T / T3) + w1 * np.exp(-T / T1) + w2 * np.exp(-T2 / T)


def front(rows: Array, T: Any) -> Array:
    """d T^e of SRI, rows (m, 2); 1 of the others."""
    return rows[:, 0] * np.exp(rows[:, 1] * np.log(T))


def powers(width: Array, log_F: Array, log_P: Array) -> Array:
    """The power of F_cent, or of the bracket of SRI (same sources), as ``width`` (m,) says.

    IUPAC: R. Atkinson et al., Atmos. Chem. Phys. 4 (2004) 1461, doi:10.5194/acp-4-1461-2004;
    JPL: the same with N = 1, J.B. Burkholder et al., JPL Publication 19-5 (2020); SRI has that power too.
    """
    N = (75 - 127 * log_F) / 100
    x = log_P - (40 + 67 * log_F) / 100
    d = N - 14 * x / 100
    return np.where(width == "Troe", d**2 / (d**2 + x**2),
                    np.where(width == "IUPAC", N**2 / (N**2 + log_P**2), 1 / (1 + log_P**2)))


def broadening(width: Array, base: Array, P_r: Array) -> Array:
    """F [-] without the front factor of SRI; where P_r is not above 0 its limit for P_r -> 0.

    A complex step from 0 leaves a real part of second order (of n/V, both varied), which is still 0.
    """
    present = P_r.real > abs(P_r.imag)
    log_F, one = np.log10(base), base.real.dtype.type(1)
    limit = np.where(width == "Troe", 196 / (10196 * one), 0 * one)  # x/d -> -1/0.14
    power = powers(width, log_F, np.log10(np.where(present, P_r, 1)))
    return np.exp(np.log(base) * np.where(present, power, limit))


def fall_off(k_inf: Array, k_0: Array, F: Array, M: Array) -> Array:
    """k_inf F P_r/(1 + P_r) = k_0 [M] F/(1 + P_r) with P_r = k_0 [M]/k_inf; linear in [M] below 0."""
    return M * activated(k_inf, k_0, F, M)


def activated(k_inf: Array, k_0: Array, F: Array, M: Array) -> Array:
    """k_0 F/(1 + P_r) (stabilisation takes away from a product channel); constant for [M] below 0.

    A.M. Dean, P.R. Westmoreland, Int. J. Chem. Kinet. 19 (1987) 207, doi:10.1002/kin.550190305.
    """
    P_r = k_0 * M / k_inf
    return k_0 * F / (1 + np.where(P_r.real >= 0, P_r, 0))


# ---- lumped steps


@dataclass(frozen=True)
class Lumped:
    """k X G [φ(M, N) - φ(N, M)], where M and N are the sides of Q/K = N/M.

    Without the smooth starts X φ(M, N) is Π c^α and X φ(N, M) is that times (Q/K)^(1/σ); with them c^p of X and G is
    c (c² + ε²)^((p - 1)/2) or, for p < 0, (c² + ε²)^(p/2), and φ = M (M² + δ² N² + τ²)^((s - 1)/2), s = 1/σ,
    with δ = 0 for s > 1 and φ = M for s = 1.
    """

    orders: Array
    nu: Array
    share: Any  # 1/σ
    adsorbed: Array  # places
    powers: Array
    K: Array
    power: Any

    EPSILON, DELTA, TAU = 1e-9, 1e-12, 1e-30  # mol/m3, 1, (mol/m3)^n

    def _power(self, c: Array, p: Array) -> Array:
        size = c * c + self.EPSILON**2
        return np.where(p > 0, c * size ** ((p - 1) / 2), np.where(p < 0, size ** (p / 2), 1))

    def _phi(self, here: Any, there: Any) -> Any:
        if self.share == 1:
            return here
        mixed = self.DELTA * there if self.share < 1 else 0
        return here * (here * here + mixed * mixed + self.TAU**2) ** ((self.share - 1) / 2)

    def rates(self, T: Any, c: Array, K_c: Any) -> tuple[Any, Any]:
        """Forward and reverse rate for k one."""
        taken, made = np.maximum(-self.nu, 0).astype(int), np.maximum(self.nu, 0).astype(int)
        left, right = np.prod(c**taken), np.prod(c**made) / K_c
        common = self.orders - taken * self.share
        common = np.where(abs(common) < 1e-9, 0, common)
        group = 1 + (arrhenius(self.K, T) * self._power(c[self.adsorbed], self.powers)).sum()
        front = np.prod(self._power(c, common)) / group**self.power
        return front * self._phi(left, right), front * self._phi(right, left)


# ---- laws of temperature and pressure


@dataclass(frozen=True)
class PressureTable:
    """ln k linear in ln p between the pressures; rows at one pressure add up; the end ones hold outside."""

    p: Array  # [Pa], rising
    rows: list[Array]  # at each pressure (m, 4)

    def at(self, i: int, T: Any) -> Any:
        """k at the i-th pressure."""
        return arrhenius(self.rows[i], T).sum()

    def k(self, T: Any, p: Any) -> Any:
        """k at T [K] and p [Pa]; at a tabulated pressure that pressure's own, with the slope of the side above."""
        i = int((self.p <= p.real).sum())
        if i in (0, len(self.p)):
            return self.at(min(i, len(self.p) - 1), T)
        part = np.log(p / self.p[i - 1]) / np.log(self.p[i] / self.p[i - 1])
        low, high = self.at(i - 1, T), self.at(i, T)
        return low * np.exp(part * np.log(high / low))


@dataclass(frozen=True)
class Chebyshev:
    """log10 k as a double Chebyshev series of 1/T and ln p.

    P.K. Venkatesh, A.Y. Chang, A.M. Dean, M.H. Cohen, R.W. Carr, AIChE J. 43 (1997) 1331,
    doi:10.1002/aic.690430522.
    """

    T: Array  # lowest and highest [K]
    p: Array  # lowest and highest [Pa]
    c: Array  # rows in T, columns in p
    unit: Any  # of 10^(series), in SI
    clamp: bool

    def k(self, T: Any, p: Any) -> Any:
        """k at T [K] and p [Pa]."""
        x = self._inside(reduced(1 / T, 1 / self.T[0], 1 / self.T[1]))
        log_p = np.log(p) if p.real > 0 else p.dtype.type(-np.inf)
        y = self._inside(reduced(log_p, *np.log(self.p)))
        rows, columns = self.c.shape
        exponent = polynomials(x, rows) @ self.c @ polynomials(y, columns)
        return self.unit * np.exp(np.log(self.c.dtype.type(10)) * exponent)

    def _inside(self, x: Any) -> Any:
        if -1 <= x.real <= 1:
            return x
        if not self.clamp:
            raise ValueError("outside the window of a Chebyshev series")
        return x.dtype.type(np.sign(x.real))


def reduced(value: Any, low: Any, high: Any) -> Any:
    """Maps low to -1 and high to 1."""
    return (2 * value - low - high) / (high - low)


def polynomials(x: Any, count: int) -> Array:
    """The first ``count`` Chebyshev polynomials of the first kind at x."""
    phi = [x * 0 + 1, x]
    while len(phi) < count:
        phi.append(2 * x * phi[-1] - phi[-2])
    return np.array(phi[:count])
