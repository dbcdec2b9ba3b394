"""Small models for these tests, and models with a known pair of feasible points."""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st
from scipy.sparse import csr_array

from lpview.model import LinearProgram, Sense

INF = np.inf


def model(sense, costs, rows, bounds, offset=0.0):
    """A model from ``{column: cost}``, ``{row: (lower, {column: a}, upper)}`` and
    ``{column: (lower, upper)}``, where a column not listed is nonnegative."""
    columns = list(costs)
    matrix = [[terms.get(j, 0) for j in columns] for _, terms, _ in rows.values()]
    ends = [bounds.get(j, (0, INF)) for j in columns]
    return LinearProgram(
        name="small",
        sense=Sense(sense),
        columns=tuple(columns),
        rows=tuple(rows),
        c=np.array(list(costs.values()), float),
        A=csr_array(np.array(matrix, float).reshape(len(rows), len(columns))),
        row_lower=np.array([low for low, _, _ in rows.values()], float),
        row_upper=np.array([high for _, _, high in rows.values()], float),
        lower=np.array([low for low, _ in ends], float),
        upper=np.array([high for _, high in ends], float),
        offset=offset,
    )


def _ends(kind, value, below, above):
    """Ends around ``value``: none, lower, upper, both, or both at ``value``."""
    low = value if kind == 4 else value - below if kind in (1, 3) else -INF
    high = value if kind == 4 else value + above if kind in (2, 3) else INF
    return low, high


def _price(sign, ends, size):
    """A price of ``size`` with a sign that names an end that exists; else 0."""
    for price in (size, -size):
        if np.isfinite(ends[0] if sign * price > 0 else ends[1]):
            return price
    return 0


@st.composite
def feasible_pairs(draw):
    """A model of small integers with a feasible ``x``, and ``y`` and ``z`` whose signs
    name ends that exist and which add up to the costs: it has an optimum."""
    small = st.integers(-3, 3)
    m, n = draw(st.integers(0, 4)), draw(st.integers(1, 4))

    def integers(strategy, size):
        return np.array(draw(st.lists(strategy, min_size=size, max_size=size)), float)

    sense = draw(st.sampled_from(Sense))
    A = integers(small, m * n).reshape(m, n)
    x, gap = integers(small, n), st.integers(0, 2)
    ends = []
    for value in (*(A @ x), *x):
        if draw(st.booleans()) and float(value) >= 0:
            below, above = float(value), draw(gap)  # an end at 0
        else:
            below, above = draw(gap), float(-value) if value < 0 else draw(gap)
        ends.append(_ends(draw(st.integers(0, 4)), float(value), below, above))
    prices = [_price(sense.sign, pair, draw(small)) for pair in ends]
    y, z = np.array(prices[:m], float), np.array(prices[m:], float)
    low, high = np.array(ends, float).T
    lp = LinearProgram(
        name="feasible",
        sense=sense,
        columns=tuple(f"x{j}" for j in range(n)),
        rows=tuple(f"r{i}" for i in range(m)),
        c=A.T @ y + z,
        A=csr_array(A),
        row_lower=low[:m].copy(),
        row_upper=high[:m].copy(),
        lower=low[m:].copy(),
        upper=high[m:].copy(),
        offset=float(draw(small)),
    )
    return lp, x, y, z
