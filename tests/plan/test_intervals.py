"""Every residual, as written and within the rounding, against fractions and brute force."""

from __future__ import annotations

import itertools
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given as drawn
from hypothesis import settings
from hypothesis import strategies as st

from lpview.decimals import number_text
from lpview.kkt import Condition
from lpview.planned import judged, limits_of, measured
from tests.dual.models import INF, model
from tests.plan import exact
from tests.plan.helpers import given, passed, primal
from tests.strategies import linear_programs

TEXTS = (
    *("0", "1", "-1", "2", "0.0", "1.0", "-1.0", "2.50", "0.1", "0.10", "-0.7", "3e1", "-0e0"),
    *("1/3", "-22/7", "12.5", "1e-3", "0.33333333333333333333", "-4.0000000001", "333.25"),
    *("12345678901234567890.123", "-1.50", "99", "0.001"),
)


@st.composite
def plans(draw, **more):
    """A model, and texts for all columns, all rows and all columns again."""
    lp = draw(linear_programs(nasty_names=False, **more))
    texts = st.sampled_from(TEXTS)
    x = []
    for j in range(lp.n):
        ends = [number_text(end) for end in (lp.lower[j], lp.upper[j]) if np.isfinite(end)]
        x.append(draw(st.sampled_from((*ends, *TEXTS))))
    y = [draw(texts) for _ in range(lp.m)]
    z = [draw(texts) for _ in range(lp.n)] if draw(st.booleans()) else None
    return lp, x, y, z


def close(found, correct, size, term):
    """To some 15 digits of ``size``, and no closer than 26 digits of the largest term."""
    room = max(size / 10**14, term / Fraction(10) ** 25)
    return abs(Fraction(float(found)) - correct) <= room


@settings(max_examples=150)
@drawn(plans())
def test_residuals_are_those_of_fractions(plan):
    lp, x, y, z = plan
    found = measured(lp, given(x, y, z))
    correct, primal_span = exact.residuals(lp, x, y, z)
    assert {c.value for c in found.within} == set(correct)
    for condition in found.within:
        written, within = found.written.residuals[condition], found.within[condition]
        lines = correct[condition.value]
        # Rows have no stationarity, but are counted.
        lines = [(Fraction(0),) * 3] * (written.absolute.size - len(lines)) + lines
        for k, (as_written, least, term) in enumerate(lines):
            scale = max(term, abs(primal_span.value)) if condition is Condition.GAP else term
            scale = max(scale, *(abs(t) for _, _, t in lines)) if scale else Fraction(1)
            assert close(written.absolute[k], as_written, as_written, scale), (condition, k)
            assert close(within.absolute[k], least, as_written, scale), (condition, k)
    for got, want in zip(
        (found.objective.value, found.objective.least, found.objective.greatest),
        (primal_span.value, primal_span.low, primal_span.high),
        strict=True,
    ):
        assert float(want) == pytest.approx(got, rel=1e-12, abs=1e-12)


@settings(max_examples=50)
@drawn(plans(max_rows=2, max_columns=2, odd=False), st.randoms(use_true_random=False))
def test_no_plan_within_the_rounding_has_a_smaller_residual(plan, random):
    """Corners of the box, and points inside it, measured as plans of exact numbers."""
    lp, x, y, _ = plan
    found = measured(lp, given(x, y))
    for point in points(x, y, random):
        other_x, other_y = point[: lp.n], point[lp.n :]
        there, _ = exact.residuals(lp, fractions(other_x), fractions(other_y))
        for condition in found.within:
            least = found.within[condition].absolute.tolist()
            for (size, _, _), bound in zip(there[condition.value], least, strict=True):
                assert Fraction(bound) <= size * (1 + Fraction(1, 10**12))


def points(x, y, random):
    spans = [exact.span(text) for text in (*x, *y)]
    yield from itertools.product(*((one.low, one.high) for one in spans))
    for _ in range(20):
        share = [Fraction(random.randrange(65), 64) for _ in spans]
        yield tuple(one.low + (one.high - one.low) * s for one, s in zip(spans, share, strict=True))


def fractions(numbers):
    """Texts of exact numbers, which have no rounding."""
    return [f"{number.numerator}/{number.denominator}" for number in numbers]


@settings(max_examples=100)
@drawn(plans(max_rows=2, max_columns=2, odd=False))
def test_the_gap_is_attained_where_no_price_changes_its_sign(plan):
    lp, x, y, _ = plan
    found = measured(lp, given(x, y))
    price = np.abs(np.concatenate([found.written.rows.price, found.written.columns.price]))
    if (price <= found.radii.price).any():
        return
    gaps = []
    for corner in itertools.product(*((exact.span(t).low, exact.span(t).high) for t in (*x, *y))):
        parts = fractions(corner[: lp.n]), fractions(corner[lp.n :])
        primal_value = exact.residuals(lp, parts[0])[1].value
        gaps.append(primal_value - exact.dual_objective(lp, corner[lp.n :]))
    least = Fraction(0) if min(gaps) <= 0 <= max(gaps) else min(map(abs, gaps))
    [bound] = found.within[Condition.GAP].absolute.tolist()
    assert float(least) == pytest.approx(bound, rel=1e-9, abs=1e-9)


@settings(max_examples=60)
@drawn(plans())
def test_radii_are_upper_bounds_and_hardly_more(plan):
    lp, x, y, _ = plan
    radii = measured(lp, given(x, y)).radii
    parts = exact.exact_model(lp)
    h_x, h_y = ([exact.span(t).high - exact.span(t).value for t in texts] for texts in (x, y))
    rows = [sum((abs(a) * h_x[j] for j, a in row.items()), Fraction(0)) for row in parts.rows]
    columns = [
        sum((abs(row.get(j, 0)) * h for row, h in zip(parts.rows, h_y, strict=True)), Fraction(0))
        for j in range(lp.n)
    ]
    for found, correct in ((radii.value, [*rows, *h_x]), (radii.price, [*h_y, *columns])):
        for radius, least in zip(found.tolist(), correct, strict=True):
            assert least <= Fraction(radius) <= least * (1 + Fraction(2, 10**15))


@settings(max_examples=100)
@drawn(plans())
def test_what_holds_as_written_holds_within_the_rounding(plan):
    lp, x, y, z = plan
    for verdict in judged(measured(lp, given(x, y, z)), 1e-9, limits_of(lp, "", ())).verdicts:
        if verdict.written is not None:
            assert verdict.within.passed >= verdict.written.passed
            assert verdict.within.absolute <= verdict.written.absolute


def small(low=-INF, high=INF, bounds=(0, INF), sense="minimize"):
    return model(sense, {"a": 1, "b": 2}, {"r": (low, {"a": 1, "b": -3}, high)}, {"a": bounds})


@pytest.mark.parametrize(
    ("sides", "plan", "correct"),
    [
        # a - 3 b by hand, radius 0.05 + 3 * 0.005 = 0.065 where both are rounded.
        ((-INF, 1.0), ("4.0", "1.00"), (True, True)),
        ((-INF, 0.94), ("4.0", "1.00"), (False, True)),
        ((-INF, 0.93), ("4.0", "1.00"), (False, False)),
        ((1.06, INF), ("4.0", "1.00"), (False, True)),
        ((1.07, INF), ("4.0", "1.00"), (False, False)),
        ((1.05, 1.05), ("4.0", "1.00"), (False, True)),
        ((1.065, 1.065), ("4.0", "1.00"), (False, True)),
        ((1.066, 1.066), ("4.0", "1.00"), (False, False)),
        ((0.5, 1.5), ("4.0", "1.00"), (True, True)),
        ((-INF, INF), ("4.0", "1.00"), (True, True)),
        ((-INF, 0.94), ("4/1", "1/1"), (False, False)),
    ],
)
def test_rows_of_every_kind_by_hand(sides, plan, correct):
    assert primal(small(*sides), plan) == correct


@pytest.mark.parametrize(
    ("bounds", "value", "correct"),
    [
        ((0, INF), "-0.04", (False, False)),
        ((0, INF), "-0.0", (True, True)),
        ((0, INF), "-1e-2", (False, False)),
        ((2.4, 2.4), "2", (False, True)),
        ((2.5, 2.5), "2", (False, True)),
        ((2.51, 2.51), "2", (False, False)),
        ((-INF, 1.95), "2.0", (False, True)),
        ((-INF, 1.94), "2.0", (False, False)),
        ((-INF, INF), "-1e6", (True, True)),
        ((500, 1600), "2e3", (False, True)),
        ((500, 1400), "2e3", (False, False)),
    ],
)
def test_columns_of_every_kind_by_hand(bounds, value, correct):
    assert primal(small(bounds=bounds), (value, "0")) == correct


def test_decimals_of_a_plan_are_meant_to_the_letter():
    """0.1 + 0.2 is 0.3 exactly, though the doubles disagree; and thirds add up to 1."""
    rows = {"r": (-INF, {"a": 1, "b": 1}, 0.3), "s": (0.3, {"a": 1, "b": 1}, INF)}
    lp = model("minimize", {"a": 1, "b": 1}, rows, {})
    found = measured(lp, given(("0.1", "0.2")))
    assert not found.written.residuals[Condition.PRIMAL].absolute.any()
    assert not found.written.rows.below[1] and not found.written.rows.above[0]
    thirds = model("minimize", {"a": 1, "b": 1}, {"r": (1, {"a": 1, "b": 2}, 1)}, {})
    found = measured(thirds, given(("1/3", "1/3")))
    assert not found.written.residuals[Condition.PRIMAL].absolute.any()


@pytest.mark.parametrize("sense", ["minimize", "maximize"])
def test_dual_feasibility_within_the_rounding_by_hand(sense):
    """Row r has an upper side only: a price of 0.3 minimizing names the lower side, which is
    missing; written to whole numbers it may be 0, to one digit after the mark it may not."""
    lp = model(sense, {"a": 0}, {"r": (-INF, {"a": 1}, 5)}, {"a": (-INF, INF)})
    sign = "" if sense == "minimize" else "-"
    dual = [passed(lp, ("0",), (f"{sign}{y}",))[Condition.DUAL] for y in ("0.3", "4e-1", "0")]
    assert dual == [(False, False), (False, False), (True, True)]
    coarse = small(high=5.0, sense=sense)
    found = measured(coarse, given(("0", "0"), (f"{sign}1",)))
    assert found.within[Condition.DUAL].absolute[0] == pytest.approx(0.5)


def test_a_price_that_may_be_zero_has_no_product():
    """Row r <= 10 has slack 10; its price -1 is at least 0.5 in size, and 1e0 too; -0e0 may
    change its sign and name the missing lower side."""
    lp = model("minimize", {"a": 0}, {"r": (-INF, {"a": 1}, 10)}, {"a": (0, INF)})
    for y, least in (("-1", 0.5 * 9.5), ("-1.0", 0.95 * 9.5), ("-1/1", 9.5), ("-5e0", 4.5 * 9.5)):
        found = measured(lp, given(("0",), (y,)))
        assert found.within[Condition.COMPLEMENTARITY].absolute[0] == pytest.approx(least)
    found = measured(lp, given(("0.0",), ("-3e1",)))
    assert found.within[Condition.COMPLEMENTARITY].absolute[0] == pytest.approx(25 * 9.95)


def test_numbers_out_of_all_proportion_fail():
    lp = model("minimize", {"a": 1}, {"r": (1, {"a": 1e300}, 1)}, {})
    assert primal(lp, ("1e300",)) == (False, False)


def test_a_model_without_rows_or_columns():
    empty = model("minimize", {}, {}, {})
    assert primal(empty, ()) == (True, True)
    assert passed(empty, (), ())[Condition.GAP] == (True, True)
    assert primal(model("minimize", {"a": 1}, {}, {}), ("-1",)) == (False, False)
