"""exp and log over arrays, written so that the compiler turns the loops into vector instructions."""

from ..compiled import bits_to_float, compiled, float_to_bits, span
from ..lanes import multiply_add

LN10 = 2.302585092994046
_LOG2E = 1.4426950408889634
_LN2_HIGH = 0.6931471803691238
_LN2_LOW = 1.9082149292705877e-10
_ROUND = 6755399441055744.0  # 1.5 · 2^52: adding it rounds to a whole number that stands in the low bits
_HALF_ROOT_BITS = 0x3FE6A09E667F3BCD  # of √½
SMALLEST, LARGEST = -690.0, 709.0  # 1e-300: what it is multiplied by next does not make it subnormal, which is slow


GROUP = 16
"""The compiler's vector loops do so many numbers at a time and what is left one by one, which is slow: arrays that are handed
to them have room behind them for a whole number of groups."""


@compiled
def in_groups(array, first, last):
    """array[first:last] with as much of the room behind it as makes the last group whole."""
    return span(array, first, first + (last - first + GROUP - 1) // GROUP * GROUP)


@compiled
def exp_array(x, out):
    """exp(x) element by element, arguments limited to -690…709, NaN stays NaN. x and out must not
    overlap: the compiler's vector loop stands back where they do.

    Reduction by ln 2 in two parts (W.J. Cody, W. Waite, Software Manual for the Elementary Functions, 1980,
    ch. 6) and the Taylor polynomial of degree 13 on |r| ≤ ln 2/2: truncation 4e-18, error below 1 ulp.
    """
    for i in range(x.size):
        v = min(max(x[i], SMALLEST), LARGEST)
        t = multiply_add(v, _LOG2E, _ROUND)
        k = t - _ROUND
        r = multiply_add(-k, _LN2_LOW, multiply_add(-k, _LN2_HIGH, v))
        p = 1.0 / 6227020800.0
        p = multiply_add(p, r, 1.0 / 479001600.0)
        p = multiply_add(p, r, 1.0 / 39916800.0)
        p = multiply_add(p, r, 1.0 / 3628800.0)
        p = multiply_add(p, r, 1.0 / 362880.0)
        p = multiply_add(p, r, 1.0 / 40320.0)
        p = multiply_add(p, r, 1.0 / 5040.0)
        p = multiply_add(p, r, 1.0 / 720.0)
        p = multiply_add(p, r, 1.0 / 120.0)
        p = multiply_add(p, r, 1.0 / 24.0)
        p = multiply_add(p, r, 1.0 / 6.0)
        p = multiply_add(p, r, 0.5)
        p = multiply_add(p, r, 1.0)
        p = multiply_add(p, r, 1.0)
        out[i] = p * bits_to_float((float_to_bits(t) + 1023) << 52)


@compiled
def log_array(x, out):
    """ln(x) element by element for normal x > 0; x and out must not overlap.

    x = 2^k m with m in √½…√2; ln m = 2 artanh s, s = (m - 1)/(m + 1), by the series to s^21, truncation 2e-18
    relative; the leading term is m - 1 less a correction, so that ln near 1 keeps its digits.
    """
    for i in range(x.size):
        bits = float_to_bits(x[i]) - _HALF_ROOT_BITS
        k = bits >> 52
        m = bits_to_float(float_to_bits(x[i]) - (k << 52))
        d = m - 1.0
        s = d / (2.0 + d)
        z = s * s
        p = 2.0 / 21.0
        p = multiply_add(p, z, 2.0 / 19.0)
        p = multiply_add(p, z, 2.0 / 17.0)
        p = multiply_add(p, z, 2.0 / 15.0)
        p = multiply_add(p, z, 2.0 / 13.0)
        p = multiply_add(p, z, 2.0 / 11.0)
        p = multiply_add(p, z, 2.0 / 9.0)
        p = multiply_add(p, z, 2.0 / 7.0)
        p = multiply_add(p, z, 2.0 / 5.0)
        p = multiply_add(p, z, 2.0 / 3.0)
        half = 0.5 * d * d
        out[i] = k * _LN2_HIGH + (d - (half - (s * (half + z * p) + k * _LN2_LOW)))
