"""Optimal faces written down once more, as models of their own, and asked from nothing.

Shares nothing with `lpview.prices`: an optimal dual solution is one whose prices are zero
wherever one optimal plan has slack, an optimal plan one that stays at every end that one
optimal dual solution prices. Only for models that minimize.
"""

from __future__ import annotations

import math

import numpy as np
from scipy.sparse import csr_array

from lpview.model import LinearProgram, Sense
from lpview.run import Claim, Solved
from lpview.solver import solve

NEAR = 1e-9
"""Scaled distances and prices up to this count as zero, as in the request."""


class Measured:
    """Values, prices and ends of all lines, rows first."""

    def __init__(self, found):
        assert found.head.model.sense is Sense.MINIMIZE
        self.lp = found.head.model
        rows, columns = found.measurement.rows, found.measurement.columns
        self.value = np.concatenate([rows.value, columns.value])
        self.price = np.concatenate([rows.price, columns.price])
        self.low = np.concatenate([self.lp.row_lower, self.lp.lower])
        self.high = np.concatenate([self.lp.row_upper, self.lp.upper])
        terms = np.concatenate([rows.value_term, columns.value_term])
        self.value_size = np.maximum(1.0, np.maximum(terms, np.abs(self.value)))
        terms = np.concatenate([rows.price_term, columns.price_term])
        self.price_size = np.maximum(1.0, np.maximum(terms, np.abs(self.price)))
        self.at_low = self.value - self.low <= NEAR * self.value_size
        self.at_high = self.high - self.value <= NEAR * self.value_size
        self.priced = np.abs(self.price) > NEAR * self.price_size

    def least_dual(self, weights):
        """Least ``weights @ (y, z)`` over the optimal dual solutions; may be ``-inf``."""
        lp, m = self.lp, self.lp.m
        low = np.where(self.at_high, -np.inf, 0.0)
        high = np.where(self.at_low, np.inf, 0.0)
        held = np.isfinite(low[m:]) | np.isfinite(high[m:])
        by_column = lp.A.T.tocsr()
        y = _face(
            by_column[np.flatnonzero(held)],
            weights[:m] - lp.A @ weights[m:],
            (lp.c - high[m:])[held],
            (lp.c - low[m:])[held],
            (low[:m], high[:m]),
        )
        return -math.inf if y is None else weights[:m] @ y + weights[m:] @ (lp.c - by_column @ y)

    def least_plan(self, weights):
        """Least ``weights @ (A x, x)`` over the optimal plans; may be ``-inf``."""
        lp, m = self.lp, self.lp.m
        low = np.where(self.priced & (self.price < 0), self.high, self.low)
        high = np.where(self.priced & (self.price > 0), self.low, self.high)
        costs = weights[m:] + lp.A.T @ weights[:m]
        x = _face(lp.A, costs, low[:m], high[:m], (low[m:], high[m:]))
        return -math.inf if x is None else weights[:m] @ (lp.A @ x) + weights[m:] @ x


def _face(A, costs, row_lower, row_upper, bounds):
    """A point with least costs, or None where there is no least."""
    m, n = A.shape
    result = solve(
        LinearProgram(
            name="face",
            sense=Sense.MINIMIZE,
            columns=tuple(f"x{j}" for j in range(n)),
            rows=tuple(f"r{i}" for i in range(m)),
            c=costs,
            A=csr_array(A),
            row_lower=row_lower,
            row_upper=row_upper,
            lower=np.array(bounds[0]),
            upper=np.array(bounds[1]),
        )
    )
    if isinstance(result, Solved):
        return result.answer.x
    # The face has a point, the answer at hand.
    assert result.run.claim in (Claim.UNBOUNDED, Claim.INFEASIBLE_OR_UNBOUNDED)
    return None
