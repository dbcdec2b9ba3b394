"""Residuals against the exact oracle, and what must not change them."""

from __future__ import annotations

import math
import tempfile
from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from lpview.decimals import exact_value
from lpview.kkt import Condition, measure
from lpview.marks import mark
from lpview.model import Sense, frozen_odd
from lpview.verdict import judge
from tests import oracle
from tests.check.helpers import verdicts, written
from tests.dual.models import feasible_pairs, model
from tests.strategies import linear_programs

VALUES = (0.0, 1.0, -1.0, 2.0, -3.0, 0.1, -0.7, 0.3, 12.5, 1e-7, -4.0000000001, 333.25)
values = st.sampled_from(VALUES)


def exact_row_value(lp, i, x):
    odd, total = lp.odd.get("A", {}), Fraction(0)
    for k in range(lp.A.indptr[i], lp.A.indptr[i + 1]):
        total += exact_value(lp.A.data[k], odd.get(k)) * Fraction(x[lp.A.indices[k]])
    return total


def with_sides_at(lp, rows, x):
    """The model with sides moved to the exact row values; ``rows`` gives the kinds."""
    ends = {"row_lower": lp.row_lower.copy(), "row_upper": lp.row_upper.copy()}
    odd = {part: dict(lp.odd.get(part, {})) for part in ends}
    for i, kind in rows.items():
        value = exact_row_value(lp, i, x)
        near = float(value)
        for part, infinite in (("row_lower", -math.inf), ("row_upper", math.inf)):
            here = kind in (part, "both")
            ends[part][i] = near if here else infinite
            odd[part].pop(i, None)
            if here and exact_value(near) != value:
                odd[part][i] = value
    return replace(lp, **ends, odd=frozen_odd({**lp.odd, **odd}))


@st.composite
def answers(draw):
    """A model and an answer with rows met, violated, and exactly at their sides."""
    lp = draw(linear_programs(nasty_names=False))
    x = np.zeros(lp.n)
    for j in range(lp.n):
        ends = [end for end in (lp.lower[j], lp.upper[j]) if math.isfinite(end)]
        x[j] = draw(st.sampled_from((*ends, *VALUES)))
    kinds = st.sampled_from(("row_lower", "row_upper", "both"))
    rows = draw(st.dictionaries(st.integers(0, lp.m - 1), kinds)) if lp.m else {}
    y = np.array([draw(values) for _ in range(lp.m)])
    z = None
    if draw(st.booleans()):
        z = measure(lp, x, y).columns.price.copy()
        if lp.n:
            z[draw(st.integers(0, lp.n - 1))] += draw(values)
    return with_sides_at(lp, rows, x), x, y, z


def agrees(found, exact, largest_term):
    """To 1% or 1e-15, and no closer than 27 digits of the largest term."""
    if math.isinf(found) or exact == math.inf:
        return found == exact
    allowed = max(Fraction(1, 10**15), Fraction(largest_term) / 2**90)
    return abs(Fraction(found) - exact) <= max(exact / 100, allowed)


@settings(max_examples=100, deadline=None)
@given(answers())
def test_every_residual_is_the_exact_one(case):
    lp, x, y, z = case
    with tempfile.TemporaryDirectory() as folder:
        exact = oracle.check(written(lp, Path(folder)), x.tolist(), y.tolist(), z)
    measured = measure(lp, x, y, z)
    for verdict in judge(measured, 1e-9):
        sizes = exact.pop(verdict.condition.value, (Fraction(0),) * 3)
        found = (verdict.absolute, verdict.scaled, verdict.relative)
        lines = measured.residuals.get(verdict.condition)
        terms = (float(np.max(lines.term, initial=0.0)) if lines else 0.0, 0.0, 0.0)
        assert all(map(agrees, found, sizes, terms)), (verdict, list(map(float, sizes)))
        assert verdict.passed is (None if verdict.passed is None else sizes[1] <= 1e-9)
    assert exact == {}


def test_a_price_that_is_exactly_zero_has_no_product():
    # 0.3 - 0.1 * 3 is 0 in the file's numbers, though not in their doubles; the
    # plan is far from both bounds, so that any price at all would have a product.
    lp = model("minimize", {"v": 0.3}, {"r": (3, {"v": 0.1}, 3)}, {"v": (0, 90)})
    found = verdicts(lp, [30], [3], [0])
    assert found[Condition.COMPLEMENTARITY].relative == 0
    assert found[Condition.DUAL].relative == 0


@pytest.mark.parametrize("sense", ["minimize", "maximize"])
def test_residuals_by_hand(sense):
    # Row 2v - w in 1..4 at v = 3, w = -1: 7, over by 3; its largest term is 6.
    # Price 2 names 1 when minimizing (2 * 6 = 12 of 14) and 4 when maximizing
    # (2 * 3 = 6 of 14). z(v) = 5 - 4 = 1, z(w) = 1 + 2 = 3.
    bounds = {"v": (0, 8), "w": (-5, np.inf)}
    lp = model(sense, {"v": 5, "w": 1}, {"r": (1, {"v": 2, "w": -1}, 4)}, bounds)
    found = verdicts(lp, [3, -1], [2], [1, 3.5])
    primal = found[Condition.PRIMAL]
    assert (primal.absolute, primal.scaled, primal.relative, primal.worst) == (3, 0.5, 0.5, 0)
    assert found[Condition.STATIONARITY].absolute == 0.5
    assert found[Condition.STATIONARITY].scaled == 0.25  # of the term -1 * 2
    product = found[Condition.COMPLEMENTARITY]
    if sense == "minimize":
        # v: 1 * (3 - 0) = 3 of 3; w: 3 * (-1 + 5) = 12 of 15; so v is worst.
        assert (product.absolute, product.scaled, product.worst) == (12, 1, 1)
        assert found[Condition.DUAL].scaled == 0
    else:
        # v: 1 * (8 - 3) = 5 of 8; w names the upper bound, and there is none: 3 of 2, 1.
        assert (product.absolute, product.scaled, product.worst) == (6, 0.625, 1)
        assert (found[Condition.DUAL].absolute, found[Condition.DUAL].worst) == (3, 2)


@settings(max_examples=50, deadline=None)
@given(feasible_pairs())
def test_weak_duality(pair):
    """Of a feasible pair the gap is the sum of all products, and so never negative."""
    lp, x, y, _ = pair
    found = measure(lp, x, y)
    assert not found.residuals[Condition.PRIMAL].absolute.any()
    assert not found.residuals[Condition.DUAL].absolute.any()
    products = found.residuals[Condition.COMPLEMENTARITY].absolute
    assert found.gap >= 0
    assert found.gap == products.sum()  # small integers: no rounding anywhere
    assert lp.sense.sign * (found.primal_objective - found.dual_objective) == found.gap


@st.composite
def integer_answers(draw):
    """An answer whose residuals are integers: none is near the tolerance."""
    lp, x, y, z = draw(feasible_pairs())
    step = st.integers(-1, 1)
    x = x + np.array([draw(step) for _ in x])
    y = y + np.array([draw(step) for _ in y])
    return lp, x, y, z


def with_rows(lp, order, scale):
    """Rows in another order, row ``order[k]`` times ``scale[k]``."""
    A = lp.A[order].multiply(scale[:, None]).tocsr() if lp.m else lp.A
    A.sort_indices()
    return replace(
        lp,
        rows=tuple(lp.rows[i] for i in order),
        A=A,
        row_lower=lp.row_lower[order] * scale,
        row_upper=lp.row_upper[order] * scale,
    )


@settings(max_examples=50, deadline=None)
@given(integer_answers(), st.randoms(use_true_random=False))
def test_order_and_scale_of_rows_leave_the_verdicts_alike(case, random):
    lp, x, y, z = case
    order = np.array(random.sample(range(lp.m), lp.m), dtype=int)
    scale = np.array([2.0 ** random.randint(-6, 6) for _ in order])
    other = with_rows(lp, order, scale)
    first, second = verdicts(lp, x, y, z), verdicts(other, x, y[order] / scale, z)
    for condition, verdict in first.items():
        assert second[condition].passed == verdict.passed
    same = with_rows(lp, order, np.ones(lp.m))
    assert measure(same, x, y[order]).gap == measure(lp, x, y).gap
    permuted = verdicts(same, x, y[order], z)
    sizes = ("absolute", "scaled", "relative")
    for condition, verdict in first.items():
        assert [getattr(permuted[condition], s) for s in sizes] == [
            getattr(verdict, s) for s in sizes
        ]


@settings(max_examples=40, deadline=None)
@given(answers())
def test_inputs_are_not_mutated(case):
    lp, x, y, z = case
    given_arrays = [x, y] if z is None else [x, y, z]
    own = [lp.c, lp.A.data, lp.row_lower, lp.row_upper, lp.lower, lp.upper]
    before = [array.copy() for array in (*given_arrays, *own)]
    found = measure(lp, x, y, z)
    judge(found, 1e-9)
    mark(lp, found, None, 1e-9, 1e-9)
    for array, copy in zip((*given_arrays, *own), before, strict=True):
        assert np.array_equal(array, copy)


def test_stationarity_holds_by_definition_without_reduced_costs():
    lp = model(Sense.MINIMIZE, {"v": 1}, {"r": (2, {"v": 1}, np.inf)}, {})
    assert verdicts(lp, [2], [1])[Condition.STATIONARITY].passed is None
    assert verdicts(lp, [2], [1], [0])[Condition.STATIONARITY].passed is True


@pytest.mark.parametrize("part", ["x", "y", "z"])
@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf, 1e308])
def test_no_number_passes_that_is_none(part, value):
    lp = model("minimize", {"v": 1, "w": 2}, {"r": (2, {"v": 1e3, "w": 1}, 3)}, {})
    answer = {"x": [0.002, 0], "y": [0.001], "z": [0, 1.999]}
    assert all(verdict.passed for verdict in verdicts(lp, **answer).values())
    answer[part][0] = value
    failed = {c for c, verdict in verdicts(lp, **answer).items() if not verdict.passed}
    expected = {"x": {Condition.PRIMAL}, "y": set(Condition), "z": {Condition.STATIONARITY}}
    assert failed & expected[part]
