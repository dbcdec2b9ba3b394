"""Small integer models that have an optimum, mostly a degenerate one."""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st
from scipy.sparse import csr_array

from lpview.model import LinearProgram, Sense

INF = np.inf

AT_LOWER, AT_UPPER, FIXED, INSIDE = 1, -1, 0, None
"""Signs that a price may have, minimizing; any where fixed, none but zero inside."""

KINDS = {
    "at lower": (0, INF, AT_LOWER),
    "at upper": (INF, 0, AT_UPPER),
    "at lower of two": (0, 2, AT_LOWER),
    "at upper of two": (1, 0, AT_UPPER),
    "fixed": (0, 0, FIXED),
    "above lower": (1, INF, INSIDE),
    "below upper": (INF, 2, INSIDE),
    "between": (2, 1, INSIDE),
    "free": (INF, INF, INSIDE),
}
"""Distance of the plan to the lower end and to the upper end, and the price's sign."""

ROW_KINDS = ("at lower", "at upper", *KINDS)
COLUMN_KINDS = ("at lower", "at lower", "above lower", *KINDS)


@st.composite
def models_with_optimum(draw, max_rows: int = 5, max_columns: int = 6) -> LinearProgram:
    """A plan that sits on many ends, and costs that prices of those ends add up to.

    Prices are often zero where the plan sits on an end, and rows often repeat, so that
    plans and prices are often not unique.
    """
    m, n = draw(st.integers(1, max_rows)), draw(st.integers(1, max_columns))
    small = st.integers(-3, 3)
    x = _integers(draw, st.sampled_from((0, 0, 1, -1, 2)), n)
    A = _matrix(draw, m, n)
    ends = [_ends(draw, v, ROW_KINDS) for v in A @ x]
    ends += [_ends(draw, v, COLUMN_KINDS) for v in x]
    sign = 1 if draw(st.booleans()) else -1
    sizes = _integers(draw, st.sampled_from((0, 0, 1, 1, 2)), m + n)
    loose = _integers(draw, st.sampled_from((1, -1)), m + n)
    signs = [(loose[k] if s == FIXED else s or 0) for k, (*_, s) in enumerate(ends)]
    prices = sign * sizes * np.array(signs)
    low, high = (np.array([e[k] for e in ends], float) for k in (0, 1))
    return LinearProgram(
        name="drawn",
        sense=Sense.MINIMIZE if sign > 0 else Sense.MAXIMIZE,
        columns=tuple(f"x{j + 1}" for j in range(n)),
        rows=tuple(f"r{i + 1}" for i in range(m)),
        c=(A.T @ prices[:m] + prices[m:]).astype(float),
        A=csr_array(A.astype(float)),
        row_lower=low[:m],
        row_upper=high[:m],
        lower=low[m:],
        upper=high[m:],
        offset=float(draw(small)),
    )


@st.composite
def any_models(draw, max_rows: int = 3, max_columns: int = 3) -> LinearProgram:
    """The same models with other costs and sides: with an optimum or without."""
    lp = draw(models_with_optimum(max_rows, max_columns))
    move = _integers(draw, st.integers(-1, 1), lp.m)
    return LinearProgram(
        name="drawn",
        sense=lp.sense,
        columns=lp.columns,
        rows=lp.rows,
        c=_integers(draw, st.integers(-3, 3), lp.n).astype(float),
        A=lp.A,
        row_lower=lp.row_lower + move,
        row_upper=lp.row_upper + move,
        lower=lp.lower,
        upper=lp.upper,
        offset=lp.offset,
    )


def _integers(draw, items, size: int):
    return np.array(draw(st.lists(items, min_size=size, max_size=size)), int)


def _matrix(draw, m: int, n: int):
    """Entries from -3 to 3; some rows repeat the one before, or turn it round."""
    entries = st.sampled_from((0, 0, 0, 1, 1, -1, 2, -2, 3, -3))
    A = _integers(draw, entries, m * n).reshape(m, n)
    for i, turn in enumerate(_integers(draw, st.sampled_from((0, 0, 0, 0, 1, -1)), m)):
        if i and turn:
            A[i] = turn * A[i - 1]
    return A


def _ends(draw, at, kinds):
    below, above, sign = KINDS[draw(st.sampled_from(kinds))]
    return at - below, at + above, sign
