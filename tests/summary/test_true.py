"""Every number on the page is true of the model solved again, by another way into a solver."""

from __future__ import annotations

from decimal import Decimal

import numpy as np
import pytest

from lpview.model import Sense
from lpview.priced import without_plan
from lpview.report.summary_limits import MOST_LIMITS, summary_lines
from lpview.report.summary_moves import without_plan_words
from tests.check.helpers import examined
from tests.dual.models import INF, model
from tests.labels.models import GLASSHOUSE, glasshouse, labelled, mixture
from tests.summary.pages import (
    MODELS,
    NETLIB,
    clauses,
    optimum,
    page,
    priced_for_page,
    read,
    sentences_of_limits,
)


def glass(sense, units):
    return (
        labelled(examined(glasshouse(sense)), GLASSHOUSE) if units else examined(glasshouse(sense))
    )


FOUND = {
    **{
        f"glasshouse, {sense}, {units}": lambda sense=sense, units=units: glass(sense, units)
        for sense in ("minimize", "maximize")
        for units in (True, False)
    },
    **{
        f"mixture, {sense}": lambda sense=sense: examined(mixture(sense))
        for sense in ("minimize", "maximize")
    },
    **{
        name: lambda name=name: read(NETLIB / f"{name}.csv")
        for name in ("sc50a", "sc50b", "afiro", "blend", "share2b", "sctap1", "israel", "recipe")
    },
    **{name: lambda name=name: read(MODELS / f"{name}.csv") for name in ("winter", "season")},
}


@pytest.mark.parametrize("name", FOUND)
def test_every_number_is_true_of_the_model_solved_again(name):
    found = FOUND[name]()
    lp, lines = found.head.model, summary_lines(priced_for_page(found).found)
    before, shown = optimum(lp, 0, "exactly", 0.0), sentences_of_limits(page(found))
    assert len(shown) == len(lines) >= 3
    for line, sentence in zip(lines, shown, strict=True):
        end, moves = clauses(sentence)
        for move in moves:
            _is_true(lp, line, end, move, before)


def _is_true(lp, line, end, move, before):
    def change(step):
        """By how much the objective gets worse; infinite without a plan."""
        after = optimum(lp, line, end, step if move.up else -step)
        return INF if after is None else lp.sense.sign * (after - before)

    if move.worse is None:
        assert change(1e-3) == INF
        return
    # The last of four digits may be off by half; what is printed as a distance is not.
    half = float(Decimal(1).scaleb(Decimal(move.rate).as_tuple().exponent)) / 2
    half = max(half, abs(move.worse) * 5e-4)
    far = 50.0 if move.far is None else move.far
    for step in (far / 3, far):
        noise = 1e-8 * max(1.0, abs(before))
        assert abs(change(step) - move.worse * step) <= half * step * 1.001 + noise
    if move.far is None:
        return
    just_beyond = far * (1 + 2e-3)
    assert (change(just_beyond) == INF) == move.no_plan
    if not move.no_plan:
        # Convex, and no longer on the line through where it was.
        assert change(2 * far) / 2 > change(far) + 1e-9 * max(1.0, abs(before))


def test_a_distance_is_never_printed_longer_than_it_is():
    # By hand: x at 2/3 may go to 4/3, and at six digits 0.666667 more would be too much.
    lp = model(
        "minimize", {"x": 1}, {"r": (-INF, {"x": 1}, 4 / 3), "s": (2 / 3, {"x": 1}, INF)}, {}
    )
    assert "more worsens it (for 0.6666 units, then no plan is left)" in page(examined(lp))
    assert optimum(lp, 1, "at least", 0.6666) is not None
    assert optimum(lp, 1, "at least", 0.666667) is None


# Ranking ---------------------------------------------------------------------


@pytest.mark.parametrize("name", ["afiro", "sc50b", "share2b", "blend"])
def test_the_first_seven_by_price_times_limit_then_by_price(name):
    found = read(NETLIB / f"{name}.csv")
    lp, rows, columns = found.head.model, found.measurement.rows, found.measurement.columns
    prices, ranked = priced_for_page(found), []
    for line in range(lp.m + lp.n):
        side, k = (rows, line) if line < lp.m else (columns, line - lp.m)
        price = abs(side.price[k]) if found.marks.priced[line] else 0.0
        at_zero = line >= lp.m and lp.lower[k] == 0 and side.below[k] <= side.above[k]
        several = prices.intervals.get(line, (0.0, 0.0))
        if (price or several[0] < several[1]) and not found.marks.room[line] and not at_zero:
            worth = float(f"{price * abs(side.end[k]):.9g}")
            ranked.append((-worth, -float(f"{price:.9g}"), line))
    assert len(ranked) > MOST_LIMITS
    expected = tuple(line for *_, line in sorted(ranked)[:MOST_LIMITS])
    assert summary_lines(prices.found) == expected
    assert tuple(prices.lines) == expected
    heading = f"{len(ranked)} limits hold it back; these 7 come first by price times limit:"
    assert heading in page(found).splitlines()


def test_limits_at_0_come_by_their_price():
    shown = sentences_of_limits(page(read(NETLIB / "sc50b.csv")))
    assert [line.split(",")[0].removeprefix("Limit ") for line in shown] == [
        *("u14", "u9", "u27", "u1", "u18"),
        *("e20", "e1"),  # 0.75 and 0.5625 a unit
    ]


def test_as_many_limits_as_there_are_with_a_price():
    # In the answer shown, seven of the limits at 0 have no price, and are told with none.
    shown = sentences_of_limits(page(read(NETLIB / "afiro.csv")))
    assert len(shown) == MOST_LIMITS
    assert all(any(move.worse != 0 for move in clauses(line)[1]) for line in shown)


# No plan at once -------------------------------------------------------------


def opposed(sense):
    """x + y <= 4 and x >= 3, y >= 1 meet; u = 2 and v = 5 are forced by two rows each."""
    sign = 1 if sense == "minimize" else -1
    return model(
        sense,
        {"x": sign, "y": 2 * sign, "u": -sign, "v": sign, "w": sign},
        {
            "both": (-INF, {"x": 1, "y": 1}, 4),
            "some": (3, {"x": 1}, INF),
            "span": (2, {"u": 1}, 9),
            "half": (-INF, {"u": 2}, 4),
            "same": (5, {"v": 1}, 5),
            "again": (10, {"v": 2}, 10),
            "none": (-INF, {"w": 1}, 0),
        },
        {"y": (1, 8)},
    )


@pytest.mark.parametrize("sense", ["minimize", "maximize"])
def test_moves_without_a_plan_in_both_senses_and_for_all_kinds_of_sides(sense):
    lp = opposed(sense)
    assert lp.sense is Sense(sense)
    priced = priced_for_page(examined(lp))
    # w may not fall below 0, which is nobody's limit; "none" is one.
    assert without_plan_words(priced, ()) == [
        "With even slightly less of both or half, or more required of some or span, or more or "
        "less required of same, no plan is left.",
        "The same holds for 3 further limits.",
    ]
    bare = [line for line, up in without_plan(priced) if up and line == lp.m + 4]
    assert bare == [lp.m + 4]
    _all_of_them(lp, without_plan(priced))


def _all_of_them(lp, moves):
    """Whether exactly these moves leave no plan at once."""
    found = set()
    low = np.concatenate([lp.row_lower, lp.lower])
    high = np.concatenate([lp.row_upper, lp.upper])
    for line in range(lp.m + lp.n):
        for up, side in ((True, low), (False, high)):
            end = "exactly" if low[line] == high[line] else "at least" if up else "at most"
            if np.isfinite(side[line]) and optimum(lp, line, end, 1e-3 if up else -1e-3) is None:
                found.add((line, up))
    assert found == set(moves)


@pytest.mark.parametrize("name", ["sc50b", "afiro", "recipe", "beaconfd"])
def test_exactly_the_moves_without_a_plan_of_published_models(name):
    found = read(NETLIB / f"{name}.csv")
    moves = without_plan(priced_for_page(found))
    assert bool(moves) == (name != "afiro")
    _all_of_them(found.head.model, moves)
    told = "With even slightly less of u10 or u11, no plan is left.\n"
    assert (told in page(found)) == (name == "sc50b")


def test_what_a_limit_has_told_is_not_told_again():
    lp = opposed("minimize")
    found = examined(lp)
    shown = page(found)
    told = {s.split(",")[0]: s for s in sentences_of_limits(shown) if "leaves no plan" in s}
    assert "Limit same" in told or "Limit again" in told
    sentence = next(line for line in shown.splitlines() if line.startswith("With even"))
    for name in told:
        assert f" {name.removeprefix('Limit ').removeprefix('on ')} " not in sentence
