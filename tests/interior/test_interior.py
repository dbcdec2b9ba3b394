"""Strictly feasible points against an exact oracle, by hand, and in real models."""

from __future__ import annotations

import math
import os
from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest
from hypothesis import assume, given, note, settings

from lpview.blocks import read_model, write_blocks
from lpview.kkt import Condition, measure
from lpview.prices import NoPrices, Prices, work_out
from lpview.prices.cone import cone, widest
from lpview.prices.interior import ImpliedEqualities, Interior, find_interior
from lpview.prices.margin import Margin, largest_margin
from lpview.run import Claim, Method
from lpview.solver import solve, warm_model
from tests.check.helpers import examined, line_of, unsolved
from tests.check.test_netlib import FOLDER, model_files
from tests.dual import models
from tests.dual.models import INF
from tests.interior import oracle
from tests.prices import exact
from tests.prices.draws import any_models, models_with_optimum

SHIPPED = [pytest.param(path, id=path.stem) for path in model_files(FOLDER)]
COLLECTION = Path(os.environ.get("LPVIEW_NETLIB", FOLDER))
"""The folder of the slow test; the models of this repository by default."""

# Always-tight inequalities and dependent equality rows of files of the Netlib LP test set.
# Computed for this project by another program: maximal-support linear programs, and ranks
# by elimination modulo a prime of 61 bits.
KNOWN = {
    "25fv47": (0, 1), "adlittle": (1, 0), "afiro": (0, 0), "agg": (70, 0), "agg2": (2, 0),
    "beaconfd": (78, 0), "blend": (0, 0), "bnl2": (111, 0), "brandy": (43, 27),
    "czprob": (347, 0), "d6cube": (0, 11), "degen2": (247, 2), "dfl001": (45, 13),
    "fffff800": (19, 0), "fit1d": (0, 0), "fit1p": (0, 0), "fit2d": (0, 0), "fit2p": (0, 0),
    "gfrd-pnc": (26, 0), "greenbea": (1182, 3), "grow22": (0, 0), "grow7": (0, 0),
    "israel": (0, 0), "maros": (463, 1), "maros-r7": (0, 0), "modszk1": (1, 1),
    "pilot": (78, 0), "pilot-we": (31, 0), "pilot87": (40, 0), "qap8": (0, 170),
    "recipe": (17, 5), "sc205": (2, 0), "sc50a": (1, 0), "sc50b": (2, 0), "scagr25": (0, 0),
    "scfxm1": (14, 0), "scfxm3": (42, 0), "scorpion": (67, 30), "scrs8": (41, 0),
    "scsd1": (0, 0), "scsd8": (0, 0), "sctap1": (0, 0), "sctap3": (0, 0), "share2b": (0, 0),
    "shell": (0, 1), "ship04l": (201, 42), "ship04s": (89, 42), "ship08l": (1126, 66),
    "ship12l": (1066, 109), "ship12s": (360, 109), "standmps": (56, 0), "stocfor1": (0, 0),
    "stocfor3": (0, 0), "truss": (0, 0), "wood1p": (792, 1),
}  # fmt: skip

# From the same computation: a strictly feasible plan, no dependent rows, and a strictly
# feasible dual solution.
WELL_POSED = {
    *("afiro", "blend", "fit1d", "fit1p", "fit2d", "fit2p", "grow7", "grow22", "israel"),
    *("maros-r7", "scagr25", "scsd1", "scsd8", "sctap1", "sctap3", "share2b", "stocfor1"),
    *("stocfor3", "truss"),
}


def model(sense, costs, rows, bounds=None):
    return models.model(sense, costs, rows, bounds or {})


def interior_of(lp, **changes):
    found = find_interior(examined(lp, **changes), solve)
    assert isinstance(found, Interior), found
    return found


def implied(found, size):
    strict = found.strict
    return strict.lines if isinstance(strict, ImpliedEqualities) else np.zeros(size, bool)


def check_against_oracle(lp):
    assume(isinstance(exact.value(lp), Fraction))
    note(write_blocks(lp))
    found = interior_of(lp)
    assert not found.open.any()
    np.testing.assert_array_equal(implied(found, lp.m + lp.n), oracle.always_tight(lp))
    assert found.dependent_rows == oracle.dependent_rows(lp)
    np.testing.assert_array_equal(found.price_unbounded, oracle.price_unbounded(lp))
    np.testing.assert_array_equal(found.value_unbounded, oracle.value_unbounded(lp))
    assert found.plans_bounded == (not oracle.value_unbounded(lp).any())
    assert found.prices_bounded == (found.is_strict and not found.dependent_rows)
    assert found.plans_bounded == (found.dual_is_strict and not found.dependent_columns)
    check_strict(lp, found.strict)
    check_ray(lp, found)


def check_strict(lp, strict):
    if isinstance(strict, Margin):
        slack = measure(lp, strict.x, np.zeros(lp.m))
        assert (slack.rows.slack[~lp.is_equality] > 0).all()
        assert (slack.columns.slack[~lp.is_fixed] > 0).all()
        assert strict.violation <= 1e-9
        assert 0 < strict.margin <= strict.at_most <= 1
        assert strict.at_most - strict.margin <= 1e-8
    else:
        assert strict.total <= 1e-9
        assert strict.misplaced <= 1e-9
        multipliers = np.abs(np.concatenate([strict.y, strict.z]))
        assert (multipliers[strict.lines] > 0.5).all()
        np.testing.assert_allclose(strict.z, -lp.A.T @ strict.y, atol=1e-9)


def check_ray(lp, found):
    """The ray keeps every line within its ends, and the objective."""
    if found.ray is None:
        return
    ray = found.ray / np.abs(found.ray).max()
    for move, low, high in (
        (lp.A @ ray, lp.row_lower, lp.row_upper),
        (ray, lp.lower, lp.upper),
    ):
        assert (move[np.isfinite(low)] >= -1e-9).all()
        assert (move[np.isfinite(high)] <= 1e-9).all()
    assert abs(lp.c @ ray) <= 1e-9


@settings(max_examples=70)
@given(models_with_optimum())
def test_degenerate_models(lp):
    check_against_oracle(lp)


@settings(max_examples=50)
@given(any_models(5, 6))
def test_models_with_any_costs(lp):
    check_against_oracle(lp)


# Margins by hand: distances to the sides of triangles and boxes.
TRIANGLE = model("maximize", {"x": 1, "y": 0}, {"r": (-INF, {"x": 3, "y": 4}, 12)})
BAND = model(
    "minimize", {"x": 1, "y": 0},
    {"r": (0, {"x": 3, "y": 4}, 5), "s": (2, {"x": 1}, 2)},
    {"x": (-INF, INF), "y": (-10, 10)},
)  # fmt: skip
WIDE = model("minimize", {"x": 1}, {"r": (1, {"x": 1}, INF)})


@pytest.mark.parametrize(
    ("lp", "margin", "x"),
    [
        # The inradius of the right triangle with legs 4 and 3 and hypotenuse 5.
        pytest.param(TRIANGLE, 1.0, [1, 1], id="triangle"),
        pytest.param(BAND, 0.5, [2, -0.875], id="band between two sides"),
        pytest.param(WIDE, 1.0, None, id="without end, so capped"),
    ],
)
def test_margins_by_hand(lp, margin, x):
    strict = interior_of(lp).strict
    assert isinstance(strict, Margin)
    assert strict.margin == pytest.approx(margin, abs=1e-9)
    assert strict.at_most == pytest.approx(margin, abs=1e-9)
    if x is not None:
        np.testing.assert_allclose(strict.x, x, atol=1e-9)


def test_a_small_triangle_has_its_inradius():
    """Legs 0.4 and 0.3: the cap plays no part."""
    lp = model("maximize", {"x": 1, "y": 0}, {"r": (-INF, {"x": 3, "y": 4}, 1.2)})
    strict = interior_of(lp).strict
    assert strict.margin == pytest.approx(0.1)
    np.testing.assert_allclose(strict.x, [0.1, 0.1])


def test_bounds_only_above_and_on_both_sides():
    lp = model(
        "maximize", {"x": 1, "y": 1}, {"r": (-8, {"y": 1}, INF)},
        {"x": (2, 2.5), "y": (-INF, -7)},
    )  # fmt: skip
    strict = interior_of(lp).strict
    assert strict.margin == pytest.approx(0.25)
    assert strict.x[0] == pytest.approx(2.25)
    assert -7.75 <= strict.x[1] <= -7.25


def test_two_rows_that_meet_are_implied_equalities():
    lp = model(
        "maximize", {"x": 1, "y": 1},
        {"low": (3, {"x": 1, "y": 1}, INF), "high": (-INF, {"x": 2, "y": 2}, 6)},
    )  # fmt: skip
    found = interior_of(lp)
    assert np.flatnonzero(found.strict.lines).tolist() == [0, 1]
    assert found.strict.y[0] == pytest.approx(-2 * found.strict.y[1])
    assert found.strict.y[0] >= 1 - 1e-9
    assert found.strict.total == 0
    assert np.flatnonzero(found.price_unbounded).tolist() == [0, 1]
    assert found.dependent_rows == 0


def test_a_repeated_equality_is_dependent_and_the_plans_may_still_be_strict():
    lp = model(
        "minimize", {"x": 1, "y": 2},
        {"one": (4, {"x": 1, "y": 1}, 4), "two": (8, {"x": 2, "y": 2}, 8)},
    )  # fmt: skip
    found = interior_of(lp)
    assert found.is_strict
    assert found.dependent_rows == 1
    assert np.flatnonzero(found.dependent).tolist() == [0, 1]
    assert np.flatnonzero(found.price_unbounded).tolist() == [0, 1]
    assert not found.prices_bounded


def test_rows_may_depend_only_where_columns_are_fixed():
    """With z fixed the two rows say the same of x and y; the fixed column takes part."""
    rows = {"one": (4, {"x": 1, "y": 1}, 4), "two": (5, {"x": 1, "y": 1, "z": 1}, 5)}
    found = interior_of(model("minimize", {"x": 1, "y": 2, "z": 0}, rows, {"z": (1, 1)}))
    assert found.dependent_rows == 1
    assert np.flatnonzero(found.dependent).tolist() == [0, 1, 4]
    loose = interior_of(model("minimize", {"x": 1, "y": 2, "z": 0}, rows, {"z": (0, 3)}))
    assert loose.dependent_rows == 0


def test_a_row_without_coefficients_can_be_an_implied_equality():
    lp = model("minimize", {"x": 1}, {"r": (1, {"x": 1}, INF), "empty": (0, {}, INF)})
    found = interior_of(lp)
    assert np.flatnonzero(found.strict.lines).tolist() == [1]
    lower = interior_of(replace(lp, row_lower=np.array([1.0, -3.0])))
    assert lower.is_strict


def test_plans_that_go_on_for_ever():
    lp = model("minimize", {"x": 1, "y": 0}, {"r": (2, {"x": 1}, INF)})
    found = interior_of(lp)
    assert not found.plans_bounded
    assert not found.dual_is_strict
    assert found.ray.tolist() == [0, 1]
    assert np.flatnonzero(found.value_unbounded).tolist() == [line_of(lp, "y")]


def test_dependent_free_columns_are_no_fault_of_the_inequalities():
    lp = model(
        "minimize", {"x": 1, "y": 1}, {"r": (2, {"x": 1, "y": 1}, INF)},
        {"x": (-INF, INF), "y": (-INF, INF)},
    )  # fmt: skip
    found = interior_of(lp)
    assert found.dual_is_strict
    assert found.dependent_columns == 1
    assert not found.plans_bounded


def test_what_a_missing_answer_says():
    lp = TRIANGLE
    found = examined(lp)

    def stopped(_lp, _settings):
        return unsolved(Claim.TIME_LIMIT)

    assert find_interior(found, stopped) == NoPrices(
        "the widest direction was not found: time limit reached"
    )
    bare = replace(found, answer=replace(found.answer, basis=None))
    assert isinstance(find_interior(bare, solve), NoPrices)


def test_another_method_is_tried_where_one_fails():
    asked = []

    def ask(lp, wanted):
        asked.append(wanted.method)
        return unsolved(Claim.UNKNOWN) if len(asked) == 1 else solve(lp, wanted)

    assert isinstance(find_interior(examined(TRIANGLE), ask), Interior)
    assert asked[:2] == [Method.CHOOSE, Method.SIMPLEX]


def test_a_wrong_direction_shows_nothing():
    """Answers are measured: a solver that lies about directions is not believed."""
    found = examined(model(
        "maximize", {"x": 1, "y": 1},
        {"low": (3, {"x": 1, "y": 1}, INF), "high": (-INF, {"x": 2, "y": 2}, 6)},
    ))  # fmt: skip

    def ask(lp, wanted):
        result = solve(lp, wanted)
        one = np.ones(lp.n)
        return replace(result, answer=replace(result.answer, x=one, y=0 * result.answer.y))

    answer = find_interior(found, ask)
    assert isinstance(answer, NoPrices)
    assert answer.reason.startswith("the widest direction was not found: scaled residual")


def test_the_widest_direction_moves_all_that_can_at_once():
    lp = model("minimize", {"x": 0, "y": 0, "z": 0}, {"r": (0, {"x": 1, "y": -1000}, INF)})
    low = np.zeros(4)
    found = widest(cone(lp, low, np.full(4, np.inf)), solve)
    assert found.moves.all()
    assert (
        measure(cone(lp, low, np.full(4, np.inf)), found.direction, np.zeros(1))
        .residuals[Condition.PRIMAL]
        .absolute.max()
        == 0
    )


@pytest.mark.parametrize(
    "lp",
    [
        pytest.param(TRIANGLE, id="triangle"),
        pytest.param(BAND, id="band between two sides"),
        pytest.param(
            model(
                "maximize", {"x": 1, "y": 1}, {"r": (-8, {"x": 100, "y": 1}, 5)},
                {"x": (0, 0.01), "y": (-1, 3)},
            ),
            id="both bounds near",
        ),
    ],
)  # fmt: skip
def test_without_the_largest_margin_there_is_still_a_point(lp):
    def ask(question, wanted):
        lost = question.name == "largest margin"
        return unsolved(Claim.UNKNOWN) if lost else solve(question, wanted)

    strict = find_interior(examined(lp), ask).strict
    assert isinstance(strict, Margin)
    assert 0 < strict.margin < strict.at_most == 1
    assert strict.violation <= 1e-9


def test_a_margin_that_was_not_found_is_said_to_be_lost():
    lost = largest_margin(TRIANGLE, lambda _lp, _settings: unsolved(Claim.UNKNOWN))
    assert lost.message == "no result"


@pytest.mark.parametrize("path", SHIPPED)
def test_a_real_model(path):
    check_known(path)


@pytest.mark.parametrize("path", SHIPPED)
def test_endless_intervals_are_those_of_the_prices(path):
    """The same lines, from one linear program for each interval."""
    lp = read_model(path).model
    found = examined(lp)
    prices = work_out(found, warm_model)
    assert isinstance(prices, Prices)
    interior = find_interior(found, solve)
    for mask, interval in (
        (interior.price_unbounded, prices.interval),
        (interior.value_unbounded, prices.value_interval),
    ):
        endless = [not all(map(math.isfinite, interval(k))) for k in range(lp.m + lp.n)]
        np.testing.assert_array_equal(mask, endless)


@pytest.mark.slow
def test_a_collection_of_real_models():
    paths = [path for path in model_files(COLLECTION) if path.stem in KNOWN]
    assert len(paths) >= 12
    for path in paths:
        check_known(path)


def check_known(path):
    lp = read_model(path).model
    # Two files miss the usual tolerance by rounding; that is not what is tested here.
    found = interior_of(lp, tolerance=1e-7)
    tight = int(implied(found, lp.m + lp.n).sum())
    assert (path.stem, tight, found.dependent_rows) == (path.stem, *KNOWN[path.stem])
    assert not found.open.any(), path.stem
    assert found.prices_bounded == (tight == 0 and found.dependent_rows == 0), path.stem
    if path.stem in WELL_POSED:
        assert found.plans_bounded, path.stem
    check_strict_of_real(found.strict)


def check_strict_of_real(strict):
    if isinstance(strict, Margin):
        assert strict.violation <= 1e-9
        assert 0 < strict.margin <= strict.at_most
        assert strict.at_most - strict.margin <= 1e-6 * strict.at_most
    else:
        assert strict.total <= 1e-6
        assert strict.misplaced <= 1e-9
