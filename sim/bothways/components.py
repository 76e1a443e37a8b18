"""Species as formed from components: exact integer elimination on the conserved rows.

Any r independent species (r the rank) can serve as components: every other species is formed from them, and the
conserved rows become r balances, one for each component. Numbers stay integers over one common divisor (J. Edmonds,
J. Res. Natl. Bur. Stand. 71B (1967) 241, doi:10.6028/jres.071B.033), so that ranks and zeros are exact.
"""

import math
from fractions import Fraction
from functools import cached_property

import numpy as np

_SPLIT = ~np.int64((1 << 27) - 1)  # keeps the upper 26 bits of a float64's mantissa
_EXACT_FACTOR = 2**26
_LARGEST_INT64 = 2**62


class Components:
    """A choice of components among the columns of an integer matrix.

    numbers : (r, n) ints; numbers[k, j] / divisor of component k forms species j.
    divisor : positive int.
    basis : (r) the column of each component.
    independent_rows : (r) rows of the matrix that carry its rank.
    """

    def __init__(self, rows: np.ndarray, order: np.ndarray) -> None:
        """Components of `rows` (m, n), integer: the first independent columns in `order`."""
        self.numbers, self.divisor = np.array(rows), 1
        free = np.ones(len(rows), dtype=bool)
        basis, pivots = [], []
        while True:
            left = np.flatnonzero(free)
            candidates = np.any(self.numbers[left][:, order] != 0, axis=0)
            if not np.any(candidates):
                break
            j = int(order[np.argmax(candidates)])
            k = int(left[np.argmax(self.numbers[left, j] != 0)])
            self._eliminate(k, j)
            free[k] = False
            basis.append(j)
            pivots.append(k)
        self.numbers = self.numbers[pivots]
        self.basis = np.array(basis, dtype=np.intp)
        self.independent_rows = np.array(pivots, dtype=np.intp)

    def copy(self) -> "Components":
        """An independent copy; arrays other than `basis` are shared, since none is ever written into."""
        twin = object.__new__(Components)
        twin.__dict__.update(self.__dict__, basis=self.basis.copy())
        return twin

    def without(self, excluded: np.ndarray) -> "Components":
        """The components of the columns that are left, (n) mask; a component that is excluded takes its row along."""
        rows, place = ~excluded[self.basis], np.cumsum(~excluded) - 1
        twin = object.__new__(Components)
        twin.numbers, twin.divisor = self.numbers[rows][:, ~excluded], self.divisor
        twin.basis, twin.independent_rows = place[self.basis[rows]], self.independent_rows[rows]
        return twin

    def exchange(self, k: int, j: int) -> None:
        """Makes species j the component k; numbers[k, j] must not be zero."""
        self._eliminate(k, j)
        self.basis[k] = j
        for name in ("formation", "expansion", "logarithms", "_totals"):
            self.__dict__.pop(name, None)

    def _eliminate(self, k: int, j: int) -> None:
        numbers = self.numbers
        if numbers.dtype != object and 2 * int(np.max(np.abs(numbers))) ** 2 >= _LARGEST_INT64:
            numbers = numbers.astype(object)
        pivot = int(numbers[k, j])
        result = (numbers * pivot - np.multiply.outer(numbers[:, j], numbers[k])) // self.divisor  # exact
        result[k] = numbers[k]
        sign = 1 if pivot > 0 else -1
        self.numbers, self.divisor = sign * result, abs(pivot)

    @cached_property
    def formation(self) -> np.ndarray:
        """a (r, n): how much of component k forms species j."""
        return np.asarray(self.numbers / self.divisor, dtype=float)

    @cached_property
    def expansion(self) -> np.ndarray:
        """1 - Σ_k a_kj, (n): molecules gained as one of species j forms."""
        return 1.0 - self.formation.sum(axis=0)

    @cached_property
    def logarithms(self) -> tuple[np.ndarray, np.ndarray]:
        """ln of the positive entries of a, then of the negative ones, (2 r, n); 0 where a is not zero, (r, n); else -inf."""
        sides = np.concatenate([self.formation, -self.formation])
        size = np.full(sides.shape, -np.inf)
        np.log(sides, out=size, where=sides > 0)
        return size, np.where(self.numbers != 0, 0.0, -np.inf)

    def totals(self, amount: np.ndarray) -> np.ndarray:
        """Amounts of the components that hold what `amount` (n) holds, (r), each correct to the last bit.

        Exactness matters: with hydrogen and oxygen at 2:1 the excess of either is a difference that is nil. Those of the
        same array are worked out once: they are asked for at every temperature.
        """
        known = self.__dict__.get("_totals")
        if known is None or known[0] is not amount:
            known = self.__dict__["_totals"] = amount, self._exact_totals(amount)
        return known[1]

    def _exact_totals(self, amount: np.ndarray) -> np.ndarray:
        there = np.flatnonzero(amount)
        numbers, values = self.numbers[:, there], np.ascontiguousarray(amount[there], dtype=float)
        if numbers.dtype == object or np.any(np.abs(numbers) >= _EXACT_FACTOR):
            return np.array([self._rational_total(row, values) for row in numbers])
        upper = (values.view(np.int64) & _SPLIT).view(float)
        terms = np.hstack([numbers * upper, numbers * (values - upper)])  # products without rounding
        return np.array([math.fsum(row) for row in terms.tolist()]) / self.divisor

    def _rational_total(self, row: np.ndarray, values: np.ndarray) -> float:
        exact = sum(int(a) * Fraction(v) for a, v in zip(row, values.tolist(), strict=True))
        return float(exact / self.divisor)
