"""Certificates that are found by auxiliary models, verified in fractions."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from lpview.model import Sense
from lpview.repair.certificate import check_farkas, check_ray
from lpview.repair.search import Infeasible, Nothing, Unbounded, find_certificate
from lpview.run import Claim, Solved, SolveSettings
from lpview.solver import solve
from tests.check.exact_certificates import ends, fault_along, is_farkas, plan_fault
from tests.dual.models import INF, model
from tests.strategies import linear_programs

TOLERANCE = 1e-9


def auxiliary(part):
    return solve(part, SolveSettings())


@settings(max_examples=70, deadline=None)
@given(linear_programs(max_rows=4, max_columns=4, odd=False, nasty_names=False))
def test_what_is_found_is_true(lp):
    """A certificate is exact to the tolerance, and a model has at most one kind."""
    found = find_certificate(lp, auxiliary, TOLERANCE)
    claim = solve(lp).run.claim
    if isinstance(found, Infeasible):
        assert is_farkas(lp, found.farkas.y.tolist(), Fraction(1, 10**9))
        assert claim in (Claim.INFEASIBLE, Claim.INFEASIBLE_OR_UNBOUNDED)
    elif isinstance(found, Unbounded):
        ray = found.ray
        assert plan_fault(lp, ray.x.tolist()) <= 1e-9
        assert fault_along(lp, ray.direction.tolist()) <= 1e-9
        costs = ends(lp, "c")
        rate = sum(c * Fraction(d) for c, d in zip(costs, ray.direction.tolist(), strict=True))
        assert lp.sense.sign * rate < -1e-9
        assert claim in (Claim.UNBOUNDED, Claim.INFEASIBLE_OR_UNBOUNDED)
    else:
        # Nothing to find: there is an optimum.
        assert isinstance(found, Nothing)
        assert claim is Claim.OPTIMAL


@st.composite
def infeasible_models(draw):
    """Rows whose combination by given multipliers reads 0 >= at least 1.

    The last row is chosen so that all columns cancel; sides are chosen so that the
    multipliers times them add up to ``gap``.
    """
    small = st.integers(-3, 3)
    m, n = draw(st.integers(2, 4)), draw(st.integers(1, 4))
    signs = [draw(st.sampled_from((1, -1))) for _ in range(m)]
    weights = [draw(st.integers(1, 4)) for _ in range(m - 1)] + [1]
    rows = [[draw(small) for _ in range(n)] for _ in range(m - 1)]
    y = [sign * weight for sign, weight in zip(signs, weights, strict=True)]
    cancel = [-sum(p * row[j] for p, row in zip(y, rows, strict=False)) for j in range(n)]
    rows.append([signs[-1] * value for value in cancel])
    sides = [draw(small) for _ in range(m - 1)]
    gap = draw(st.integers(1, 5))
    sides.append(signs[-1] * (gap - sum(p * b for p, b in zip(y, sides, strict=False))))
    named = {f"r{i}": i for i in range(m)}
    lines = {
        name: (
            sides[i] if signs[i] > 0 else -INF,
            {f"x{j}": a for j, a in enumerate(rows[i])},
            sides[i] if signs[i] < 0 else INF,
        )
        for name, i in named.items()
    }
    costs = {f"x{j}": draw(small) for j in range(n)}
    bounds = {f"x{j}": draw(st.sampled_from([(-INF, INF), (0, INF), (-2, 3)])) for j in range(n)}
    sense = draw(st.sampled_from(["minimize", "maximize"]))
    return model(sense, costs, lines, bounds), np.array(y, float), gap


@settings(max_examples=40, deadline=None)
@given(infeasible_models())
def test_infeasible_models_are_certified(case):
    lp, y, gap = case
    known = check_farkas(lp, y, TOLERANCE)
    assert known.accepted
    assert known.contradiction == pytest.approx(gap / abs(y).max())
    found = find_certificate(lp, auxiliary, TOLERANCE)
    assert isinstance(found, Infeasible)
    assert is_farkas(lp, found.farkas.y.tolist(), Fraction(1, 10**9))
    # Whether the dual is infeasible too, by solving for a ray where nothing is lost.
    assert found.dual_infeasible in (True, False)
    assert found.dual_infeasible is has_ray(lp)


def has_ray(lp):
    """Whether the objective improves along a ray of the model with all ends at 0."""
    level = {
        part: np.where(np.isfinite(getattr(lp, part)), 0.0, getattr(lp, part))
        for part in ("row_lower", "row_upper", "lower", "upper")
    }
    result = solve(replace(lp, **level, offset=0.0))
    return not isinstance(result, Solved)


@st.composite
def unbounded_models(draw):
    """Rows that a known plan meets and a known ray never leaves, which improves."""
    small = st.integers(-3, 3)
    m, n = draw(st.integers(0, 4)), draw(st.integers(1, 4))
    x, d = (np.array([draw(small) for _ in range(n)], float) for _ in range(2))
    d[0] = draw(st.sampled_from((1, -2)))
    A = np.array([[draw(small) for _ in range(n)] for _ in range(m)], float).reshape(m, n)
    room = st.integers(0, 2)

    def around(value, speed):
        low, high = value - draw(room), value + draw(room)
        return (
            low if speed >= 0 and draw(st.booleans()) else -INF,
            high if speed <= 0 and draw(st.booleans()) else INF,
        )

    rows = {}
    for i, (value, speed) in enumerate(zip(A @ x, A @ d, strict=True)):
        low, high = around(value, speed)
        rows[f"r{i}"] = (low, {f"x{j}": a for j, a in enumerate(A[i])}, high)
    bounds = {f"x{j}": around(x[j], d[j]) for j in range(n)}
    sense = draw(st.sampled_from(Sense))
    c = np.array([draw(small) for _ in range(n)], float)
    c[0] -= (c @ d + sense.sign * draw(st.integers(1, 3))) / d[0]  # now c @ d improves
    costs = {f"x{j}": value for j, value in enumerate(c)}
    return model(sense, costs, rows, bounds), x, d


@settings(max_examples=40, deadline=None)
@given(unbounded_models())
def test_unbounded_models_are_certified(case):
    lp, x, d = case
    assert check_ray(lp, x, d, TOLERANCE).accepted
    found = find_certificate(lp, auxiliary, TOLERANCE)
    assert isinstance(found, Unbounded)
    assert plan_fault(lp, found.ray.x.tolist()) <= 1e-9
    assert fault_along(lp, found.ray.direction.tolist()) <= 1e-9
    costs = ends(lp, "c")
    pairs = zip(costs, found.ray.direction.tolist(), strict=True)
    assert lp.sense.sign * sum(c * Fraction(step) for c, step in pairs) < 0
