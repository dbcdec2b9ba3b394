"""Limits of rows of their own: which rows a pattern means, and what they allow."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from lpview.blocks import InputError
from lpview.kkt import Condition
from lpview.planned import limits_of, measured, violated, worst_limit
from tests.dual.models import INF, model
from tests.plan.helpers import given, primal, verdicts, wyndor

NAMES = (
    "heat[1]",
    "heat[2]",
    "heat[10]",
    "Heat[1]",
    "cold",
    "a*b",
    "a.b",
    "two\u00a0words",
    "h",
    "p\nq",
)


def amounts(*asked):
    """The limits by name, of those that have one."""
    rows = {name: (-INF, {"x": 1}, 1) for name in NAMES}
    lp = model("minimize", {"x": 1}, rows, {})
    found = limits_of(lp, "model.csv", asked)
    assert np.array_equal(found.given, ~np.isnan(found.amount)) and not found.given[-1]
    return {NAMES[k]: float(found.amount[k]) for k in np.flatnonzero(found.given).tolist()}


@pytest.mark.parametrize(
    ("pattern", "names"),
    [
        ("heat[1]", {"heat[1]"}),
        ("heat[?]", {"heat[1]", "heat[2]"}),
        ("heat*", {"heat[1]", "heat[2]", "heat[10]"}),
        ("?eat[1]", {"heat[1]", "Heat[1]"}),
        ("*", set(NAMES)),
        ("a.b", {"a.b"}),
        ("a*b", {"a*b", "a.b"}),
        ("a?b", {"a*b", "a.b"}),
        ("two*", {"two\u00a0words"}),
        ("p?q", {"p\nq"}),
        ("?", {"h"}),
        ("h*", {"heat[1]", "heat[2]", "heat[10]", "h"}),
    ],
)
def test_a_pattern_means_whole_names(pattern, names):
    assert amounts((pattern, 2.5)) == dict.fromkeys(names, 2.5)


def test_the_last_pattern_that_matches_counts():
    assert amounts(("heat*", 5.0), ("*[1]", 1.0), ("heat[10]", 0.0)) == {
        "heat[1]": 1.0, "heat[2]": 5.0, "heat[10]": 0.0, "Heat[1]": 1.0,
    }  # fmt: skip


@pytest.mark.parametrize("pattern", ["hea", "HEAT*", "heat[[]1]", "", "heat[1] "])
def test_a_pattern_that_matches_no_row_is_refused(pattern):
    with pytest.raises(InputError) as caught:
        amounts((pattern, 1.0))
    assert "--limit: expected a pattern that matches a row, got " in str(caught.value)


def test_a_pattern_of_many_stars_takes_no_time():
    lp = wyndor()
    lp = replace(lp, rows=("a" * 4000, *lp.rows[1:]))
    with pytest.raises(InputError):
        limits_of(lp, "m", [("*a" * 30 + "b", 1.0)])
    assert limits_of(lp, "m", [("*a" * 30 + "*", 1.0)]).given.tolist()[:2] == [True, False]


def test_the_messages():
    with pytest.raises(InputError) as error:
        limits_of(wyndor(), "wyndor.csv", [("plnat3*", 1.0), ("plant?", 1.0), ("x*", 2.0)])
    assert str(error.value) == (
        "wyndor.csv: --limit: expected a pattern that matches a row, got 'plnat3*'; "
        "did you mean 'plant3'?\n"
        "wyndor.csv: --limit: expected a pattern that matches a row, got 'x*'"
    )


@pytest.mark.parametrize(
    ("limit", "correct"),
    [(6, (True, True)), (5.999, (False, True)), (3.5, (False, True)), (3.4, (False, False))],
)
def test_a_limit_is_in_the_unit_of_its_row(limit, correct):
    """(4, 6) breaks the third row by 6, and by 6 - (3 + 2) / 2 = 3.5 within its rounding."""
    assert primal(wyndor(), ("4", "6"), limits=[("plant3", limit)]) == correct


def test_a_limit_may_be_stricter_than_the_tolerance():
    plan = ("2", "6.000000001")  # beyond 12 and 18 by 2e-9: at 2e-10 and 1.2e-10 scaled
    assert primal(wyndor(), plan) == (True, True)
    assert primal(wyndor(), plan, limits=[("plant2", 0.0)]) == (False, False)
    assert primal(wyndor(), plan, limits=[("plant2", 1e-9)]) == (False, True)
    assert primal(wyndor(), plan, limits=[("plant2", 2e-9)]) == (True, True)
    assert primal(wyndor(), plan, limits=[("plant1", 0.0)]) == (True, True)


def test_a_limit_of_nothing_holds_for_decimals_that_meet_their_side():
    lp = model("minimize", {"a": 1, "b": 1}, {"r": (0.3, {"a": 1, "b": 1}, 0.3)}, {})
    assert primal(lp, ("0.1", "0.2"), limits=[("r", 0.0)]) == (True, True)
    assert primal(lp, ("0.1", "0.20000000000000000000001"), limits=[("r", 0.0)])[0] is False


def test_a_limit_is_exceeded_by_the_next_double():
    lp = model("minimize", {"a": 1}, {"r": (-INF, {"a": 1}, 0)}, {})
    beyond = np.nextafter(1.9, 2)
    limit = [("r", 1.9)]
    assert primal(lp, ("1.9",), limits=limit)[0] and not violations(lp, "1.9", limit)
    assert primal(lp, (repr(float(beyond)),), limits=limit)[0] is False
    assert violations(lp, repr(float(beyond)), limit)


def violations(lp, value, limits):
    return violated(measured(lp, given((value,))), verdicts(lp, (value,), limits=limits))


def test_the_worst_line_is_the_worst_beside_what_is_allowed():
    """Rows broken by 1 of 4, 2 of 12 and 6 of 18; the first has no limit."""
    asked = [("plant2", 0.5), ("plant3", 3.0)]
    found = verdicts(wyndor(), ("5", "7"), limits=asked)
    worst = found.of(Condition.PRIMAL).worst
    assert (worst.line, worst.absolute, worst.limit) == (0, 1, None)
    asked = [("plant*", 1.0), ("plant2", 0.5), ("plant3", 30.0)]
    worst = verdicts(wyndor(), ("5", "7"), limits=asked).of(Condition.PRIMAL).worst
    assert (worst.line, worst.absolute, worst.limit) == (1, 2, 0.5)


def test_violated_lines_come_worst_first_and_the_worst_limit_is_told():
    lp, asked = wyndor(), [("plant1", 0.25), ("plant2", 2.0), ("plant3", 3.0)]
    found = measured(lp, given(("5", "7")))
    judgement = verdicts(lp, ("5", "7"), limits=asked)
    lines = violated(found, judgement)
    assert [(one.line, one.size, one.allowed) for one in lines] == [
        (0, 1, 0.25), (2, 11, 3),
    ]  # fmt: skip
    assert worst_limit(found, judgement.limits) == (0, 1, 0.25)
    assert worst_limit(found, limits_of(lp, "", ())) is None
    fine = measured(lp, given(("0", "0")))
    assert worst_limit(fine, judgement.limits) == (0, 0, 0.25)
