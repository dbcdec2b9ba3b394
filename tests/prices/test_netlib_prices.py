"""Real models: every end of every interval is attained, and nothing goes further.

For each line of the files shipped here (all of them), and by numbers of this file alone:

- a finite end comes with a dual solution or plan that passes the check of `lpview.kkt` at
  1e-9, scaled, beside the other half of the verified answer;
- an infinite end comes with a ray: along it the conditions stay satisfied, the line moves and
  the objective does not;
- no optimal dual solution or plan goes further (the faces as models of their own, solved from
  nothing, `tests.prices.netlib_faces`);
- an infinite end of a row is a side that cannot move at all that way;
- dimensions and counts are those of a table computed with other software
  (`tests.prices.netlib_table`).

`tests.prices.test_netlib_collection` repeats what is quick of this over a whole collection.
"""

from __future__ import annotations

import functools
from dataclasses import replace

import numpy as np
import pytest

from lpview.blocks import read_model
from lpview.file_numbers import FileNumbers
from lpview.kkt import Condition, measure
from lpview.outcomes import Optimal
from lpview.prices import Prices, work_out
from lpview.run import Claim, Solved
from lpview.solver import solve, warm_model
from tests.check.helpers import examined
from tests.check.test_netlib import FOLDER, model_files
from tests.prices.netlib_faces import Measured
from tests.prices.netlib_table import ENDLESS, FACES, NOT_UNIQUE

TOLERANCE = 1e-9
"""Scaled; no shipped file needs a looser one."""
FACE = 1e-7
"""Scaled; how well two solvers' runs that each stop at 1e-9 agree on an end."""
EVERY = 8
"""Of columns that are not unique, one in so many is asked from nothing (rows: all)."""

SHIPPED = [path.stem for path in model_files(FOLDER)]
NUMBERS = (
    Condition.PRIMAL,
    Condition.DUAL,
    Condition.STATIONARITY,
    Condition.COMPLEMENTARITY,
    Condition.GAP,
)
each_file = pytest.mark.parametrize("name", SHIPPED)


class Case:
    """A file with its verified answer and its prices."""

    def __init__(self, path, **request):
        self.lp = read_model(path).model
        self.found = examined(self.lp, **request)
        assert isinstance(self.found, Optimal)
        assert self.found.passed
        self.prices = work_out(self.found, warm_model)
        assert isinstance(self.prices, Prices)
        self.at = Measured(self.found)
        self.numbers = FileNumbers(self.lp)
        self.size = self.lp.m + self.lp.n

    def worst(self, x, y, z=None):
        """Largest scaled residual of an answer, over all conditions."""
        found = measure(self.lp, x, y, z, self.numbers)
        assert set(found.residuals) >= set(NUMBERS) - {Condition.STATIONARITY}
        return max(float(part.scaled.max()) for part in found.residuals.values())

    def prices_of(self, y):
        """Prices of all lines."""
        return np.concatenate([y, self.lp.c - self.lp.A.T @ y])

    def values_of(self, x):
        """Values of all lines."""
        return np.concatenate([self.lp.A @ x, x])


@functools.cache
def case(name):
    return Case(FOLDER / f"{name}.csv")


def same(first, second, size):
    return first == second or abs(first - second) <= TOLERANCE * size


def ends(interval, size):
    """Line, whether its greatest end, and that end, for every line."""
    for k in range(size):
        least, greatest = interval(k)
        assert least <= greatest
        yield k, False, least
        yield k, True, greatest


def distinct(points):
    """Points that differ, each once."""
    return {point.tobytes(): point for point in points}.values()


@each_file
def test_every_interval_contains_what_the_solver_says(name):
    one, at = case(name), case(name).at
    for interval, entry, size in (
        (one.prices.interval, at.price, at.price_size),
        (one.prices.value_interval, at.value, at.value_size),
    ):
        for k, is_greatest, end in ends(interval, one.size):
            beyond = entry[k] - end if is_greatest else end - entry[k]
            assert beyond <= TOLERANCE * size[k]


@each_file
def test_every_finite_end_of_a_price_is_attained(name):
    one, points = case(name), []
    for k, is_greatest, end in ends(one.prices.interval, one.size):
        point = one.prices.price_at(k, greatest=is_greatest)
        points.append(np.concatenate([point.y, point.z]))
        if np.isfinite(end):
            assert point.ray is None
            assert same(points[-1][k], end, one.at.price_size[k])
    for point in distinct(points):
        y, z = point[: one.lp.m], point[one.lp.m :]
        assert one.worst(one.found.answer.x, y, z) <= TOLERANCE


@each_file
def test_every_finite_end_of_a_value_is_attained(name):
    one, points = case(name), []
    for k, is_greatest, end in ends(one.prices.value_interval, one.size):
        point = one.prices.plan_at(k, greatest=is_greatest)
        points.append(point.x)
        if np.isfinite(end):
            assert point.ray is None
            assert same(one.values_of(point.x)[k], end, one.at.value_size[k])
    for x in distinct(points):
        assert one.worst(x, one.found.answer.y) <= TOLERANCE


@each_file
def test_every_infinite_end_of_a_price_has_a_ray(name):
    one, at = case(name), case(name).at
    for k, is_greatest, end in ends(one.prices.interval, one.size):
        if np.isinf(end):
            assert (end > 0) is is_greatest
            ray = one.prices.price_at(k, greatest=is_greatest).ray
            check_price_ray(one, at, k, is_greatest, ray)


def check_price_ray(one, at, k, is_greatest, ray, tolerance=TOLERANCE):
    # Only from the dual values; the reduced costs that come with them must agree.
    z = -(one.lp.A.T @ ray.y)
    terms = np.abs(one.lp.A.T) @ np.abs(ray.y)
    assert np.abs(ray.z - z).max() <= tolerance * max(1.0, terms.max())
    moved = np.concatenate([ray.y, ray.z])
    small = tolerance * np.abs(moved).max()
    # Complementary to the plan, and of signs whose ends exist: only at an end that it reaches.
    assert (at.at_low | (moved <= small)).all()
    assert (at.at_high | (moved >= -small)).all()
    assert (moved[k] > 0) is np.bool_(is_greatest)
    assert abs(moved[k]) > small
    named = np.where(moved > 0, at.low, at.high)
    products = np.where(np.abs(moved) > small, moved, 0.0) * np.where(np.isfinite(named), named, 0)
    assert abs(products.sum()) <= tolerance * max(1.0, np.abs(products).sum())


@each_file
def test_every_infinite_end_of_a_value_has_a_ray(name):
    one, at = case(name), case(name).at
    for k, is_greatest, end in ends(one.prices.value_interval, one.size):
        if np.isinf(end):
            assert (end > 0) is is_greatest
            ray = one.prices.plan_at(k, greatest=is_greatest).ray
            check_plan_ray(one, at, k, is_greatest, ray)


def check_plan_ray(one, at, k, is_greatest, ray):
    moved = one.values_of(ray)
    small = TOLERANCE * np.abs(moved).max()
    assert (np.isinf(at.low) | (moved >= -small)).all()
    assert (np.isinf(at.high) | (moved <= small)).all()
    # Complementary to the prices: a line with a price stays where it is.
    assert (np.abs(moved[at.priced]) <= small).all()
    assert (moved[k] > 0) is np.bool_(is_greatest)
    assert abs(moved[k]) > small
    assert abs(one.lp.c @ ray) <= TOLERANCE * max(1.0, np.abs(one.lp.c * ray).max())


@each_file
def test_no_optimal_dual_solution_goes_further(name):
    one = case(name)
    check_nothing_further(one, one.prices.interval, one.at.least_dual, one.at.price_size)


@each_file
def test_no_optimal_plan_goes_further(name):
    one = case(name)
    check_nothing_further(one, one.prices.value_interval, one.at.least_plan, one.at.value_size)


def check_nothing_further(one, interval, least, size):
    found = np.array([interval(k) for k in range(one.size)])
    moves = found[:, 0] < found[:, 1]
    # A weighted sum, of weights drawn at random, is unique only if every part of it is.
    draw = np.random.default_rng(0)
    weights = np.where(moves, 0.0, draw.uniform(0.5, 1.0, one.size) / size)
    both = least(weights), -least(-weights)
    assert both == pytest.approx((weights @ np.where(moves, 0.0, found[:, 0]),) * 2, abs=FACE)
    moving = np.flatnonzero(moves)
    columns = moving[moving >= one.lp.m]
    for k in [*moving[moving < one.lp.m], *columns[::EVERY]]:
        unit = np.zeros(one.size)
        unit[k] = 1.0
        assert least(unit) == pytest.approx(found[k, 0], rel=FACE, abs=FACE * size[k])
        assert -least(-unit) == pytest.approx(found[k, 1], rel=FACE, abs=FACE * size[k])


@each_file
def test_a_side_moves_that_way_unless_its_price_has_no_end(name):
    one, lp = case(name), case(name).lp
    for k, is_greatest, end in ends(one.prices.interval, lp.m):
        least, greatest = one.prices.interval(k)
        if least < greatest and np.isinf(end):
            # A greatest price is the rate of a rising side, a least one of a falling.
            step = np.zeros(lp.m)
            step[k] = 1.0 if is_greatest else -1.0
            low = is_greatest or lp.is_equality[k]
            high = not is_greatest or lp.is_equality[k]
            moved = replace(
                lp,
                row_lower=lp.row_lower + step * low,
                row_upper=lp.row_upper + step * high,
                odd={},
            )
            result = solve(moved)
            assert not isinstance(result, Solved)
            assert result.run.claim in (Claim.INFEASIBLE, Claim.INFEASIBLE_OR_UNBOUNDED)


@each_file
def test_dimensions_are_those_of_the_table(name):
    prices, faces = case(name).prices, FACES[name]
    assert (prices.plan_dimension, prices.price_dimension) == (faces.plan, faces.price)


def counts(prices, rows):
    """Of these rows: how many have no unique price, and how many an infinite one."""
    found = np.array([prices.interval(k) for k in rows])
    return int((found[:, 0] < found[:, 1]).sum()), int(np.isinf(found).any(axis=1).sum())


@each_file
def test_counts_are_those_of_the_table(name):
    one = case(name)
    not_unique, endless = counts(one.prices, range(one.lp.m))
    assert not_unique == NOT_UNIQUE.get(name, not_unique)
    assert endless == ENDLESS.get(name, endless)
    assert (endless > 0) is FACES[name].is_endless


def test_the_table_covers_the_files():
    assert set(SHIPPED) <= set(FACES)
    assert len(set(SHIPPED) & set(NOT_UNIQUE)) >= 11
