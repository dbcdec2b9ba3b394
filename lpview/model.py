"""The linear program, and every convention of this package, written once.

The model, for ``n`` variables (columns) and ``m`` constraints (rows)::

    minimize or maximize   c'x + offset
    subject to             row_lower <= A x <= row_upper        (m,)
                           lower <= x <= upper                  (n,)

The two ends of a row are its *sides*, those of a column its *bounds*.

Prices
    The *dual value* ``y_i`` and the *reduced cost* ``z_j = c_j - sum_i a_ij y_i``
    are rates of change of the optimal objective, as stated, per unit increase of
    the active side or bound (both together for an equality), where that rate
    exists; elsewhere they lie between the two one-sided rates.

Signs
    Minimizing: active at the lower side only, ``y_i, z_j >= 0``; at the upper
    only, ``<= 0``; strictly between, or free, ``= 0``; equality or fixed, any
    sign. Maximizing: the two inequalities turn round, so that a scarce ``<=`` row
    keeps its natural price ``y_i >= 0``. The nonnegative KKT multiplier of the
    form "minimize f subject to g(x) <= 0" is ``|y_i|`` on the side that its sign
    names. For a linear program the KKT conditions are necessary and sufficient
    without any further qualification.

Sides
    A dual value belongs to one side: minimizing, a positive one to the lower side
    and a negative one to the upper; maximizing, the reverse; columns likewise by
    the sign of ``z_j``. *Complementarity* of a line is ``|y_i|`` times the
    distance to that side, and 0 where ``y_i = 0``; never the distance to the
    nearest side. A multiplier whose side is infinite is a dual infeasibility of
    size ``|y_i|``.

Residuals
    The *scaled* residual is the absolute one over ``max(1, largest term)``, the
    *relative* one is over the largest term. Terms are ``a_ij x_j`` and the side
    for a row; ``x_j`` and the bound for a bound; ``c_j`` and ``a_ij y_i`` for a
    column; ``y_i`` times value and ``y_i`` times side for a product; both
    objectives for the gap.

Gap
    Signed so that a feasible pair has a gap >= 0 in both senses.

Flags
    *Zero slack* is slack within the stated tolerance. *Degenerate*: a basic line
    that sits at a side or bound. *Possible other plan*: a nonbasic line whose
    price is zero. *Both zero*: a complementary pair with slack and price both
    zero. Equality rows and fixed columns have no complementary pair.
"""

from __future__ import annotations

import enum
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from functools import cached_property
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csc_array, csr_array

Vector = NDArray[np.float64]
Odd = Mapping[str, Mapping[int, Fraction]]

ARRAYS = ("c", "row_lower", "row_upper", "lower", "upper")
"""Names of the dense numeric fields, which are also keys of ``odd``."""


class Sense(enum.Enum):
    """Direction of the optimization."""

    MINIMIZE = "minimize"
    """The objective is to be as small as possible."""
    MAXIMIZE = "maximize"
    """The objective is to be as large as possible."""

    @property
    def sign(self) -> float:
        """1.0 when minimizing and -1.0 when maximizing."""
        return 1.0 if self is Sense.MINIMIZE else -1.0

    @property
    def other(self) -> Sense:
        """The opposite sense, which is the sense of the dual."""
        return Sense.MAXIMIZE if self is Sense.MINIMIZE else Sense.MINIMIZE


class ModelError(ValueError):
    """The parts of a linear program do not fit together."""


@dataclass(frozen=True, eq=False)
class LinearProgram:
    """A linear program whose numbers are those of the file; see the module.

    Every array is read-only. Raises `ModelError` when shapes differ, a number is
    not finite where it must be, a name repeats, or a lower end exceeds its upper.
    """

    name: str
    """Name for people, such as the file's stem; nothing depends on it."""
    sense: Sense
    """Minimize or maximize."""
    columns: tuple[str, ...]
    """Names of the ``n`` variables, unique and not empty."""
    rows: tuple[str, ...]
    """Names of the ``m`` constraints, unique and not empty."""
    c: Vector
    """Costs, shape ``(n,)``, finite, objective unit per column unit."""
    A: csr_array
    """Coefficients, shape ``(m, n)``: sorted indices, no stored zero, finite."""
    row_lower: Vector
    """Lower sides, shape ``(m,)``; ``-inf`` where there is none."""
    row_upper: Vector
    """Upper sides, shape ``(m,)``; ``inf`` where there is none."""
    lower: Vector
    """Lower bounds, shape ``(n,)``; ``-inf`` where there is none."""
    upper: Vector
    """Upper bounds, shape ``(n,)``; ``inf`` where there is none."""
    offset: float = 0.0
    """Constant of the objective, objective unit."""
    odd: Odd = field(default_factory=lambda: MappingProxyType({}))
    """Exact values of *odd* numbers, by field name and index (``A``: position in
    ``A.data``; ``offset``: 0). A number is odd when it differs from the shortest
    decimal of its double, as 1/3 does; every other number *is* that decimal."""

    def __post_init__(self) -> None:
        for array in (self.c, self.row_lower, self.row_upper, self.lower, self.upper):
            array.flags.writeable = False
        for array in (self.A.data, self.A.indices, self.A.indptr):
            array.flags.writeable = False
        problem = _problem(self)
        if problem:
            raise ModelError(problem)

    @property
    def m(self) -> int:
        """Number of constraints."""
        return len(self.rows)

    @property
    def n(self) -> int:
        """Number of variables."""
        return len(self.columns)

    @cached_property
    def A_by_column(self) -> csc_array:
        """The same coefficients stored by column, shape ``(m, n)``."""
        return self.A.tocsc()

    @cached_property
    def by_column_order(self) -> NDArray[np.intp]:
        """Positions in ``A.data`` in the order in which ``A_by_column`` stores them."""
        return np.argsort(self.A.indices, kind="stable")

    @cached_property
    def is_equality(self) -> NDArray[np.bool_]:
        """Rows whose two sides are the same number, shape ``(m,)``."""
        return self._ends_meet("row_lower", "row_upper")

    @cached_property
    def is_fixed(self) -> NDArray[np.bool_]:
        """Columns whose two bounds are the same number, shape ``(n,)``."""
        return self._ends_meet("lower", "upper")

    def _ends_meet(self, low: str, high: str) -> NDArray[np.bool_]:
        meet: NDArray[np.bool_] = getattr(self, low) == getattr(self, high)
        below, above = self.odd.get(low, {}), self.odd.get(high, {})
        for index in {*below, *above}:
            # Two different numbers of the file may share one double.
            if meet[index] and below.get(index) != above.get(index):
                meet = meet.copy()
                meet[index] = False
        return meet


def identical(first: LinearProgram, second: LinearProgram) -> bool:
    """Whether two models agree in everything but ``name``, to the last digit."""
    same_names = first.columns == second.columns and first.rows == second.rows
    if not same_names or first.sense is not second.sense or first.offset != second.offset:
        return False
    dense = all(np.array_equal(getattr(first, a), getattr(second, a)) for a in ARRAYS)
    sparse = all(
        np.array_equal(getattr(first.A, part), getattr(second.A, part))
        for part in ("indptr", "indices", "data")
    )
    return dense and sparse and _plain(first.odd) == _plain(second.odd)


def frozen_odd(odd: Mapping[str, Mapping[int, Fraction]]) -> Odd:
    """A read-only copy of ``odd`` without empty entries."""
    return MappingProxyType(
        {name: MappingProxyType(dict(values)) for name, values in odd.items() if values}
    )


def _plain(odd: Odd) -> dict[str, dict[int, Fraction]]:
    return {name: dict(values) for name, values in odd.items() if values}


def _problem(lp: LinearProgram) -> str:
    """What is wrong with the parts, or an empty string."""
    for kind, names in (("column", lp.columns), ("row", lp.rows)):
        if not all(names) or len(set(names)) != len(names):
            return f"a {kind} name is empty or repeated"
    for part, size in zip(ARRAYS, (lp.n, lp.m, lp.m, lp.n, lp.n), strict=True):
        if getattr(lp, part).shape != (size,):
            return f"{part}: expected shape ({size},), got {getattr(lp, part).shape}"
    if lp.A.shape != (lp.m, lp.n) or not np.isfinite(lp.A.data).all():
        return f"A: expected shape ({lp.m}, {lp.n}) and finite numbers"
    if not lp.A.has_canonical_format or not lp.A.data.all():
        return "A: expected sorted indices and no stored zero"
    if not (np.isfinite(lp.c).all() and np.isfinite(lp.offset)):
        return "c and offset: expected finite numbers"
    return _ends_problem((("row", lp.row_lower, lp.row_upper), ("column", lp.lower, lp.upper)))


def _ends_problem(pairs: Sequence[tuple[str, Vector, Vector]]) -> str:
    for kind, low, high in pairs:
        if np.isnan(low).any() or np.isnan(high).any():
            return f"{kind} ends: expected numbers, got nan"
        if (low > high).any() or (low == np.inf).any() or (high == -np.inf).any():
            return f"{kind} ends: expected lower <= upper"
    return ""
