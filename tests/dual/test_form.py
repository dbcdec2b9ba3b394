"""The one-sided form, and the way back."""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given

from lpview.decimals import parse
from lpview.dual import build_dual, dual, fold, one_sided
from lpview.model import ModelError, frozen_odd, identical
from tests.dual.models import INF, model
from tests.dual.textbook import textbook_form, written
from tests.strategies import linear_programs


def every_kind():
    """Each kind of row and of bound once."""
    return model(
        "minimize",
        dict.fromkeys("abcdefghi", 1),
        {
            "floor": (1, {"a": 1, "b": 2}, INF),
            "idle": (-INF, {"c": 7}, INF),
            "heat": (2, {"a": 3, "c": 4}, 5),
            "even": (6, {"d": 1}, 6),
            "cap": (-INF, {}, 8),
        },
        {
            "b": (0, 9),
            "c": (-INF, INF),
            "d": (4, 4),
            "e": (-3, 0),
            "f": (-INF, 0),
            "g": (2, 5),
            "h": (-INF, -1),
            "i": (0, 0),
        },
    )


def test_every_kind_of_row_and_bound_by_hand():
    form = one_sided(every_kind()).program
    assert form.rows == (
        *("floor", "heat lower side", "heat upper side", "even", "cap"),
        *("b upper bound", "d fixed", "e lower bound", "g lower bound"),
        *("g upper bound", "h upper bound", "i fixed"),
    )
    assert form.row_lower.tolist() == [1, 2, -INF, 6, -INF, -INF, 4, -3, 2, -INF, -INF, 0]
    assert form.row_upper.tolist() == [INF, INF, 5, 6, 8, 9, 4, INF, INF, 5, -1, 0]
    # a, b stay >= 0; e, f stay <= 0; c, d, g, h, i are free.
    assert form.lower.tolist() == [0, 0, -INF, -INF, -INF, -INF, -INF, -INF, -INF]
    assert form.upper.tolist() == [INF, INF, INF, INF, 0, 0, INF, INF, INF]
    dense = form.A.toarray()
    assert dense[1].tolist() == dense[2].tolist() == [3, 0, 4, 0, 0, 0, 0, 0, 0]
    assert dense[5:].tolist() == np.eye(9)[[1, 3, 4, 6, 6, 7, 8]].tolist()


def test_a_row_without_sides_comes_back_whole():
    lp = every_kind()
    back = fold(one_sided(lp).program, one_sided(lp).places)
    assert back.rows == lp.rows and back.name == lp.name
    assert back.A.toarray()[1].tolist() == [0, 0, 7, 0, 0, 0, 0, 0, 0]
    assert identical(back, lp)


def test_new_names_avoid_names_in_use():
    lp = model(
        "maximize",
        {"heat": 1, "heat upper side": 1},
        {
            "heat": (0, {"heat": 1}, 9),
            "heat upper side": (0, {"heat": 2}, INF),
            "heat upper side 2": (0, {"heat": 3}, INF),
            "heat fixed": (-INF, {"heat": 4}, INF),
        },
        {"heat": (5, 5), "heat upper side": (0, 3)},
    )
    form = one_sided(lp)
    assert form.program.rows == (
        *("heat lower side", "heat upper side 3", "heat upper side", "heat upper side 2"),
        *("heat fixed 2", "heat upper side upper bound"),
    )
    assert identical(fold(form.program, form.places), lp)


def test_two_numbers_that_share_a_double_are_not_one_number():
    # 1/3 and its own double's decimal differ, so the row is two-sided, the column boxed.
    third, exact = parse("1/3")
    lp = replace(
        model("minimize", {"x": 1}, {"r": (third, {"x": 1}, third)}, {"x": (third, third)}),
        odd=frozen_odd({"row_lower": {0: exact}, "upper": {0: exact}}),
    )
    form = one_sided(lp).program
    assert form.rows == ("r lower side", "r upper side", "x lower bound", "x upper bound")
    assert dict(form.odd["row_lower"]) == {0: exact}
    assert dict(form.odd["row_upper"]) == {3: exact}


@given(linear_programs())
def test_form_is_the_textbooks(lp):
    assert written(one_sided(lp).program) == textbook_form(lp)


@given(linear_programs())
def test_fold_gives_back_the_model(lp):
    form = one_sided(lp)
    assert identical(fold(form.program, form.places), lp)


@given(linear_programs())
def test_dual_of_dual_folds_to_the_model(lp):
    pair = build_dual(lp)
    assert identical(fold(dual(pair.program), pair.form.places), lp)


@given(linear_programs())
def test_the_form_of_a_form_is_itself(lp):
    form = one_sided(lp).program
    assert identical(one_sided(form).program, form)


def test_fold_refuses_another_program():
    form = one_sided(every_kind())
    message = "small: expected the 12 rows and 9 columns of the one-sided form of small"
    with pytest.raises(ModelError, match=re.escape(f"{message}, got 5 and 9")):
        fold(every_kind(), form.places)
