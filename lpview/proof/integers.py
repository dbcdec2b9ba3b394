"""The exact numbers of a model, its rows scaled to integers.

Row ``i`` is multiplied by the least ``scale[i]`` that makes its coefficients integers, the
costs by one common ``cost_scale``.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from itertools import pairwise

import numpy as np
from scipy.sparse import csr_array

from lpview.decimals import exact_value
from lpview.model import LinearProgram, Vector

End = Fraction | None


@dataclass(frozen=True, eq=False)
class Integers:
    """Exact numbers of a model."""

    lp: LinearProgram
    """The model."""
    coefficients: list[int]
    """Coefficients in the order of ``lp.A.data``, each times the scale of its row."""
    scale: list[int]
    """Positive scales of the rows, shape ``(m,)``."""
    costs: list[int]
    """Costs times ``cost_scale``, shape ``(n,)``."""
    cost_scale: int
    """Positive."""

    @cached_property
    def row_ends(self) -> tuple[list[End], list[End]]:
        """Sides of the rows as written; None where there is none."""
        return _ends(self.lp, "row_lower"), _ends(self.lp, "row_upper")

    @cached_property
    def column_ends(self) -> tuple[list[End], list[End]]:
        """Bounds of the columns."""
        return _ends(self.lp, "lower"), _ends(self.lp, "upper")

    @cached_property
    def offset(self) -> Fraction:
        """Constant of the objective."""
        return exact_value(self.lp.offset, self.lp.odd.get("offset", {}).get(0))

    @cached_property
    def scale_sizes(self) -> Vector:
        """The scales as doubles; infinite where no double holds them."""
        return np.array([float(s) if s.bit_length() < 1000 else math.inf for s in self.scale])

    @cached_property
    def positions(self) -> csr_array:
        """Position in ``coefficients``, plus 1, of each coefficient."""
        A = self.lp.A
        return csr_array((np.arange(1, A.nnz + 1), A.indices, A.indptr), shape=A.shape)

    def objective(self, numerators: Iterable[int], denominator: int) -> Fraction:
        """``c'x + offset`` of a plan over one denominator."""
        total = sum(c * x for c, x in zip(self.costs, numerators, strict=True) if x)
        return Fraction(total, denominator * self.cost_scale) + self.offset


def integers_of(lp: LinearProgram) -> Integers:
    """Scale a model's exact numbers to integers."""
    exact = _exact(lp.A.data, lp.odd.get("A", {}))
    scale, coefficients = [], []
    for begin, end in pairwise(lp.A.indptr.tolist()):
        row = exact[begin:end]
        least = math.lcm(*(v.denominator for v in row))
        scale.append(least)
        coefficients += [v.numerator * (least // v.denominator) for v in row]
    costs = _exact(lp.c, lp.odd.get("c", {}))
    cost_scale = math.lcm(*(v.denominator for v in costs))
    scaled = [v.numerator * (cost_scale // v.denominator) for v in costs]
    return Integers(lp, coefficients, scale, scaled, cost_scale)


def _exact(values: Vector, odd: object) -> list[Fraction]:
    known: dict[float, Fraction] = {}
    exact = []
    for k, value in enumerate(values.tolist()):
        special = odd.get(k)  # type: ignore[attr-defined]
        if special is None and value not in known:
            known[value] = exact_value(value, None)
        exact.append(special if special is not None else known[value])
    return exact


def _ends(lp: LinearProgram, part: str) -> list[End]:
    odd = lp.odd.get(part, {})
    values = getattr(lp, part).tolist()
    return [
        None if math.isinf(value) else exact_value(value, odd.get(k))
        for k, value in enumerate(values)
    ]
