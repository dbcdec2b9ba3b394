"""Redundant sides by hand and against an exact oracle; stopping keeps what is known."""

from __future__ import annotations

import math
from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import assume, given, note, settings

from lpview.blocks import read_model, write_blocks
from lpview.priced import StoppedEarlyError
from lpview.prices import NoPrices
from lpview.prices.redundant import Need, Redundant, inequality_sides, redundant_sides
from lpview.run import Claim
from lpview.solver import warm_model
from lpview.warm import Lost
from tests.check.helpers import examined
from tests.check.test_netlib import FOLDER
from tests.dual.models import INF, model
from tests.interior import oracle
from tests.prices import exact
from tests.prices.draws import any_models, models_with_optimum

# x <= 3 is tight; x + y <= 4 touches (3, 1); y <= 1; 2x + y <= 9 is out of reach; x >= -2
# is, too; 2x + 2y <= 8 repeats x + y <= 4.
ROWS = {
    "x most": (-INF, {"x": 1}, 3),
    "y most": (-INF, {"y": 1}, 1),
    "touches": (-INF, {"x": 1, "y": 1}, 4),
    "beyond": (-2, {"x": 2, "y": 1}, 9),
    "again": (-INF, {"x": 2, "y": 2}, 8),
    "equal": (0, {"x": 1, "y": 0, "t": 1}, 0),
}
HAND = model("maximize", {"x": 1, "y": 1, "t": 0}, ROWS, {"t": (-INF, INF)})


def examined_sides(lp, **options):
    found = redundant_sides(examined(lp), warm_model, **options)
    assert isinstance(found, Redundant), found
    return found


def by_name(lp, found):
    return {(lp.rows[s.row], s.is_upper): s for s in found.sides}


def test_every_kind_by_hand():
    found = examined_sides(HAND)
    sides = by_name(HAND, found)
    assert {key: side.need for key, side in sides.items()} == {
        ("x most", True): Need.NEEDED,
        ("y most", True): Need.NEEDED,
        ("touches", True): Need.IMPLIED,
        ("beyond", False): Need.UNREACHED,
        ("beyond", True): Need.UNREACHED,
        ("again", True): Need.IMPLIED,
    }
    assert sides["beyond", True].reach == pytest.approx(7)
    assert sides["beyond", True].distance == pytest.approx(2)
    assert sides["beyond", False].reach == pytest.approx(0)
    assert sides["beyond", False].distance == pytest.approx(2)
    assert sides["touches", True].reach == 4
    assert sides["touches", True].distance == 0
    assert (found.asked, found.stopped) == (6, None)


def test_two_equal_rows_are_each_implied_by_the_other():
    rows = {"one": (-INF, {"x": 1}, 3), "two": (-INF, {"x": 2}, 6)}
    lp = model("maximize", {"x": 1}, rows, {})
    assert [s.need for s in examined_sides(lp).sides] == [Need.IMPLIED, Need.IMPLIED]
    alone = model("maximize", {"x": 1}, {"one": rows["one"]}, {})
    assert [s.need for s in examined_sides(alone).sides] == [Need.NEEDED]


def test_a_row_that_goes_on_for_ever_without_its_side_is_needed():
    lp = model("minimize", {"x": 1, "y": 1}, {"r": (-5, {"x": 1, "y": -1}, 5)}, {})
    assert {s.need for s in examined_sides(lp).sides} == {Need.NEEDED}


def test_a_row_without_coefficients_has_one_value():
    rows = {"r": (1, {"x": 1}, INF), "empty": (-4, {}, 0)}
    found = examined_sides(model("minimize", {"x": 1}, rows, {}))
    assert [(s.need, s.distance) for s in found.sides[1:]] == [
        (Need.UNREACHED, 4),
        (Need.IMPLIED, 0),
    ]


def test_only_the_rows_that_were_asked_for():
    found = examined_sides(HAND, rows=[2, 5])
    assert [(s.row, s.is_upper) for s in found.sides] == [(2, True)]


def test_stopping_keeps_what_is_known():
    calls = []

    def between():
        calls.append(1)
        if len(calls) == 3:
            raise StoppedEarlyError(Claim.TIME_LIMIT)

    found = examined_sides(HAND, between=between)
    assert found.stopped is Claim.TIME_LIMIT
    assert (len(found.sides), found.asked) == (3, 6)
    assert found.sides == examined_sides(HAND).sides[:3]


def test_a_solver_without_an_answer_leaves_the_side_open():
    def lost(G, box):
        model = warm_model(G, box)
        model.least = lambda _index, _costs: Lost("no idea")
        return model

    found = redundant_sides(examined(HAND), lost)
    assert {s.need for s in found.sides} == {Need.NOT_FOUND}
    assert all(math.isnan(s.reach) for s in found.sides)


def test_a_model_is_opened_again_when_it_ends_badly():
    opened = []

    def once_lost(G, box):
        model = warm_model(G, box)
        if not opened:
            model.least = lambda _index, _costs: Lost("too many changes")
        opened.append(1)
        return model

    assert redundant_sides(examined(HAND), once_lost) == examined_sides(HAND)
    assert len(opened) == 2


def test_without_a_basis_nothing_is_said():
    found = examined(HAND)
    bare = replace(found, answer=replace(found.answer, basis=None))
    assert isinstance(redundant_sides(bare, warm_model), NoPrices)


def check_against_oracle(lp):
    assume(isinstance(exact.value(lp), Fraction))
    note(write_blocks(lp))
    found = examined(lp)
    sides = redundant_sides(found, warm_model).sides
    assert [(s.row, s.is_upper) for s in sides] == inequality_sides(found)
    for side in sides:
        reach = oracle.reach(lp, side.row, side.is_upper)
        excess = (reach - side.side) * (1 if side.is_upper else -1)
        assert (side.need is Need.NEEDED) == (excess > 0)
        assert (side.need is Need.UNREACHED) == (excess < 0)
        assert (side.need is Need.IMPLIED) == (excess == 0)
        if excess <= 0:
            assert side.reach == pytest.approx(float(reach), abs=1e-9)


@settings(max_examples=60)
@given(models_with_optimum())
def test_degenerate_models(lp):
    check_against_oracle(lp)


@settings(max_examples=40)
@given(any_models(5, 6))
def test_models_with_any_costs(lp):
    check_against_oracle(lp)


@settings(max_examples=60)
@given(models_with_optimum())
def test_sides_without_reach_can_all_be_left_out_at_once(lp):
    """Without them, and with an implied side left out too, the plans are the same."""
    assume(isinstance(exact.value(lp), Fraction))
    sides = redundant_sides(examined(lp), warm_model).sides
    low, high = lp.row_lower.copy(), lp.row_upper.copy()
    for side in sides:
        if side.need is Need.UNREACHED:
            (high if side.is_upper else low)[side.row] = INF if side.is_upper else -INF
    left = replace(lp, row_lower=low, row_upper=high)
    for side in sides:
        if side.need is not Need.NEEDED:
            reach = oracle.reach(left, side.row, side.is_upper)
            assert reach == oracle.reach(lp, side.row, side.is_upper)
    for k in range(lp.m + lp.n):
        assert oracle.extremes(left, k) == oracle.extremes(lp, k)


@pytest.mark.parametrize("name", ["afiro", "sc50a", "adlittle", "blend", "stocfor1"])
def test_a_real_model_keeps_its_optimum_without_what_it_does_not_need(name):
    lp = read_model(FOLDER / f"{name}.csv").model
    found = examined(lp)
    sides = redundant_sides(found, warm_model).sides
    unreached = [s for s in sides if s.need is Need.UNREACHED]
    low, high = lp.row_lower.copy(), lp.row_upper.copy()
    for side in unreached:
        (high if side.is_upper else low)[side.row] = INF if side.is_upper else -INF
    without = examined(replace(lp, row_lower=low, row_upper=high, odd={}))
    assert without.measurement.primal_objective == pytest.approx(
        found.measurement.primal_objective, rel=1e-9
    )
    # A row with a price is needed or at least met by plans.
    priced = np.flatnonzero(found.marks.priced[: lp.m])
    assert not {s.row for s in unreached} & set(priced.tolist())
