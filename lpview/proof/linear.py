"""Sparse integer systems solved exactly with the help of floating-point factors.

A floating solve gives about fifty bits of the solution; what it leaves of the right-hand
side is computed exactly, scaled up, and solved for again, until the digits suffice to
recognise the fractions (Wan 2006, "An algorithm to solve integer linear systems exactly
using numerical methods", Journal of Symbolic Computation 41; the p-adic method of Dixon
1982, "Exact solution of linear equations using p-adic expansions", lifts in the same way).
The residual stays within one machine word although its terms do not, so it is computed
modulo ``2**64``, whole vectors at a time. Nothing rests on that: the fractions that come
out are put into the equations, in integers, and anything else is refused.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from itertools import pairwise

import numpy as np
from scipy.sparse import csr_array

from lpview.model import Vector

DIGITS = 50
"""Bits of the largest entry that one step adds."""

LEAST_GAIN = 2
"""A step that gains fewer bits than this means that the factors are of no use."""

ROOM = 56
"""A residual stays below the sum of a row's entries, give or take some bits; rows of up to so
many bits keep it within a machine word."""

SMALL = 60
"""Systems of up to so many rows are eliminated in fractions where all else fails."""

GUARD = 10
"""Bits by which a fraction must be closer than any other one."""

Approximate = Callable[[Vector], Vector]
"""Solves the system approximately."""


class NotSolvedError(Exception):
    """The system could not be solved; the message says why."""


@dataclass(frozen=True, eq=False)
class System:
    """A square integer matrix, stored by row."""

    indptr: list[int]
    """Where each row begins, shape ``(k + 1,)``."""
    indices: list[int]
    """Column of each entry."""
    entries: list[int]
    """The entries."""
    words: csr_array | None
    """The same as machine words, shape ``(k, k)``; None where a row is too large for them."""

    def product(self, x: list[int]) -> list[int]:
        """The matrix times integers, exactly."""
        result = []
        for begin, end in pairwise(self.indptr):
            terms = zip(self.entries[begin:end], self.indices[begin:end], strict=True)
            result.append(sum(a * x[j] for a, j in terms if x[j]))
        return result


def system(positions: csr_array, coefficients: list[int]) -> System:
    """A part of a matrix of `Integers`, given by the positions of its entries plus 1."""
    positions.sort_indices()
    entries = [coefficients[k - 1] for k in positions.data.tolist()]
    indptr = positions.indptr.tolist()
    largest = max((sum(map(abs, entries[a:b])) for a, b in pairwise(indptr)), default=0)
    words = None
    if largest.bit_length() <= ROOM:
        values = np.array(entries, dtype=np.int64)
        words = csr_array((values, positions.indices, positions.indptr), positions.shape)
    return System(indptr, positions.indices.tolist(), entries, words)


def solve(
    matrix: System, right: list[int], approximate: Approximate, between: Callable[[], None]
) -> tuple[list[int], int]:
    """Numerators and the common denominator of the solution of ``matrix @ x = right``.

    ``between`` is called after each step and may raise.

    Raises
    ------
    NotSolvedError
        The factors behind ``approximate`` are not good enough.
    """
    if not any(right):
        return [0] * len(right), 1
    try:
        return _lifted(matrix, right, approximate, between)
    except NotSolvedError:
        if len(right) > SMALL:
            raise
        return _eliminated(matrix, right, between)


def _lifted(
    matrix: System, right: list[int], approximate: Approximate, between: Callable[[], None]
) -> tuple[list[int], int]:
    lifting = _Lifting(matrix, right, approximate)
    enough = _enough(matrix, right)
    attempt = 1
    while True:
        between()
        if lifting.step() or lifting.steps >= attempt:
            attempt = max(lifting.steps + 1, int(lifting.steps * 1.3))
            found = lifting.fractions()
            if found is not None and _solves(matrix, found, right):
                return found
            if lifting.is_exact or lifting.bits > enough:
                raise NotSolvedError("its floating factors are those of another matrix")


def _enough(matrix: System, right: list[int]) -> int:
    """Bits of digits after which every solution is recognised (Hadamard's bound, twice)."""
    rows = [sum(map(abs, matrix.entries[a:b])) for a, b in pairwise(matrix.indptr)]
    numbers = sum(size.bit_length() for size in rows) + max(map(abs, right)).bit_length()
    return 2 * numbers + 200


def _eliminated(
    matrix: System, right: list[int], between: Callable[[], None]
) -> tuple[list[int], int]:
    """The same by elimination in fractions, for small systems that defeat floating factors."""
    k = len(right)
    rows = [[Fraction(0)] * k + [Fraction(b)] for b in right]
    for i, (begin, end) in enumerate(pairwise(matrix.indptr)):
        for j, a in zip(matrix.indices[begin:end], matrix.entries[begin:end], strict=True):
            rows[i][j] = Fraction(a)
    for j in range(k):
        between()
        pivot = next((i for i in range(j, k) if rows[i][j]), None)
        if pivot is None:
            raise NotSolvedError("its matrix is singular")
        rows[j], rows[pivot] = rows[pivot], rows[j]
        top = rows[j][j]
        rows[j] = [v / top for v in rows[j]]
        for i in range(k):
            if i != j and rows[i][j]:
                factor = rows[i][j]
                rows[i] = [v - factor * w for v, w in zip(rows[i], rows[j], strict=True)]
    solution = [row[k] for row in rows]
    common = math.lcm(*(v.denominator for v in solution))
    return [v.numerator * (common // v.denominator) for v in solution], common


def _solves(matrix: System, found: tuple[list[int], int], right: list[int]) -> bool:
    numerators, denominator = found
    return matrix.product(numerators) == [denominator * b for b in right]


class _Lifting:
    """Digits of a solution, ``x = (sum of the pieces) / 2**bits``, more at every step."""

    def __init__(self, matrix: System, right: list[int], approximate: Approximate) -> None:
        self._matrix, self._approximate = matrix, approximate
        # Python's integers until it fits a machine word.
        self._residual: np.ndarray = np.array(right, dtype=object)
        self._size = _bits(self._residual)
        self._pieces: list[tuple[np.ndarray, int]] = []
        self.steps, self.bits = 0, 0
        self.is_exact = False

    def step(self) -> bool:
        """Add digits; true where nothing is left to be added."""
        shift = max(0, self._size - 900)
        guess = self._guess(shift)
        largest = float(np.abs(guess).max())
        if not 0 < largest < math.inf:
            raise NotSolvedError("its floating factors give no numbers")
        scale = DIGITS - math.frexp(largest)[1]
        digits = np.rint(np.ldexp(guess, scale)).astype(np.int64)
        gain = scale - shift
        if gain < 0:
            digits, gain = digits.astype(object) << -gain, 0
        self._residual = self._narrowed((self._residual << gain) - self._product(digits))
        size = _bits(self._residual)
        # At first the residual may be smaller than rounding leaves it from then on.
        if self._pieces and size - gain > self._size - LEAST_GAIN and size:
            raise NotSolvedError("its matrix is too ill-conditioned for floating factors")
        self._size = size
        self._pieces.append((digits.astype(object), gain))
        self.bits += gain
        self.steps += 1
        self.is_exact = size == 0
        return self.is_exact

    def _guess(self, shift: int) -> Vector:
        # What no double holds is seen to be of no use right after.
        with np.errstate(over="ignore", invalid="ignore"):
            return self._approximate((self._residual >> shift).astype(float))

    def _product(self, digits: np.ndarray) -> np.ndarray:
        wide = object in (self._residual.dtype, digits.dtype)
        if wide or self._matrix.words is None:
            return np.array(self._matrix.product(digits.tolist()), dtype=object)
        product: np.ndarray = self._matrix.words @ digits
        return product

    def _narrowed(self, residual: np.ndarray) -> np.ndarray:
        """As machine words, as soon as this and all later residuals fit."""
        if residual.dtype == object and self._matrix.words is not None and _bits(residual) <= ROOM:
            return residual.astype(np.int64)
        return residual

    def fractions(self) -> tuple[list[int], int] | None:
        """Fractions that the digits so far determine, over one denominator."""
        self._pieces = [_combined(self._pieces)]
        x = self._pieces[0][0].tolist()
        if self.is_exact:
            common = math.gcd(1 << self.bits, *x)
            return [v // common for v in x], (1 << self.bits) // common
        shift = max(0, self._size - 900)
        left = self._guess(shift)
        error = max(0, math.frexp(float(np.abs(left).max()))[1] + shift) + 2
        return _recognized(x, self.bits, error)


def _bits(values: np.ndarray) -> int:
    """Bits of the largest entry in size."""
    return int(np.abs(values).max()).bit_length()


def _combined(pieces: list[tuple[np.ndarray, int]]) -> tuple[np.ndarray, int]:
    """One integer for each entry; in pairs, so that long numbers are added rarely."""
    while len(pieces) > 1:
        pairs = zip(pieces[::2], pieces[1::2], strict=False)
        joined = [((high << more) + low, bits + more) for (high, bits), (low, more) in pairs]
        pieces = joined + pieces[2 * len(joined) :]
    return pieces[0]


def _recognized(x: list[int], bits: int, error: int) -> tuple[list[int], int] | None:
    """Fractions near ``x / 2**bits`` over a common denominator, or None.

    ``x`` is off by less than ``2**error``. A fraction is taken only if no other one of its
    size lies near. Most entries share a denominator that an earlier one has shown.
    """
    half = 1 << (bits - 1) if bits else 0
    numerators: list[int] = []
    denominator = 1
    for value in x:
        near = denominator.bit_length() + error + GUARD
        if near >= bits - 2:
            return None
        scaled = denominator * value
        whole = (scaled + half) >> bits
        rest = scaled - (whole << bits)
        if rest.bit_length() > near:
            more = _fraction(rest % (1 << bits), bits, near)
            if more is None:
                return None
            denominator *= more
            numerators = [n * more for n in numerators]
            whole = (denominator * value + half) >> bits
        numerators.append(whole)
    return numerators, denominator


def _fraction(value: int, bits: int, near: int) -> int | None:
    """Denominator of the only small fraction near ``value / 2**bits`` (continued fraction)."""
    most = (bits - near) // 2 - GUARD
    a, b = value, 1 << bits
    q, before = 1, 0
    while True:
        # What is left of the division is the distance itself: |value q - 2**bits p| = a.
        if a.bit_length() <= near + q.bit_length():
            return q
        if not a:
            return None
        times, rest = divmod(b, a)
        q, before = times * q + before, q
        if q.bit_length() > most:
            return None
        a, b = rest, a
