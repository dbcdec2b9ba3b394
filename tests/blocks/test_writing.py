"""Models to canonical text and back, to the last digit."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from scipy.sparse import csr_array

from lpview.blocks import InputError, name_problem, read_model_bytes, write_blocks
from lpview.model import LinearProgram, Sense, frozen_odd, identical
from tests.strategies import linear_programs

SMALL = LinearProgram(
    name="small",
    sense=Sense.MAXIMIZE,
    columns=("tomato", "basil, fresh", "lettuce"),
    rows=("bench", "heat"),
    c=np.array([12.5, 8.0, -1e-7]),
    A=csr_array(np.array([[1.0, 0.0, 0.25], [3.0, 1 / 3, 0.0]])),
    row_lower=np.array([-np.inf, 300.0]),
    row_upper=np.array([120.0, np.inf]),
    lower=np.array([0.0, 0.0, -np.inf]),
    upper=np.array([40.0, np.inf, np.inf]),
    offset=-20.0,
    odd=frozen_odd({"A": {3: Fraction(1, 3)}}),
)

SMALL_TEXT = """\
[c],maximize
column,cost
tomato,12.5
"basil, fresh",8
lettuce,-1e-7

[offset],-20

[A]
row,column,coefficient
bench,tomato,1
bench,lettuce,0.25
heat,tomato,3
heat,"basil, fresh",1/3

[b]
row,relation,rhs
bench,<=,120
heat,>=,300

[bounds]
column,lower,upper
tomato,0,40
lettuce,-inf,inf
"""


def again(lp: LinearProgram) -> LinearProgram:
    return read_model_bytes(write_blocks(lp).encode(), lp.name).model


@settings(deadline=None)
@given(linear_programs())
def test_write_then_read_is_identical_and_stable(lp: LinearProgram) -> None:
    text = write_blocks(lp)
    model = read_model_bytes(text.encode(), lp.name).model
    assert identical(model, lp)
    assert write_blocks(model) == text


def test_the_canonical_text() -> None:
    assert write_blocks(SMALL) == SMALL_TEXT


def test_one_row_with_two_sides_gives_sides_to_all() -> None:
    upper = np.array([120.0, 310.0])
    text = write_blocks(replace(SMALL, row_upper=upper))
    assert "[b]\nrow,lower,upper\nbench,-inf,120\nheat,300,310\n" in text


def test_sides_that_share_a_double_are_no_equality() -> None:
    third = frozen_odd({"row_upper": {1: Fraction(300) + Fraction(1, 10**20)}})
    lp = replace(SMALL, row_upper=np.array([120.0, 300.0]), odd=third)
    assert "heat,300,300.00000000000000000001\n" in write_blocks(lp)
    assert identical(again(lp), lp)


def test_a_column_that_looks_like_the_offset_survives() -> None:
    lp = replace(SMALL, columns=("[offset]", "[c]", "[bounds]"))
    assert "column,cost,lower,upper\n[offset],12.5,0,40\n" in write_blocks(lp)
    assert identical(again(lp), lp)


@pytest.mark.parametrize(
    "exact",
    [
        Fraction(1, 2**3000) + 1,
        Fraction(10**999 + 1, 10**1299),
        Fraction(1, 3 * 10**250),
        -Fraction(10**320 + 1, 10**100),
    ],
    ids=str,
)
def test_numbers_of_many_digits_survive(exact: Fraction) -> None:
    c = np.array([12.5, float(exact), 1.0])
    lp = replace(SMALL, c=c, odd=frozen_odd({"c": {1: exact}}), A=csr_array((2, 3)))
    assert identical(again(lp), lp)


@pytest.mark.parametrize(
    ("name", "expected"),
    [
        (" heat", "a name without blanks at its ends"),
        ("heat\u00a0", "a name without blanks at its ends"),
        ("he\nat", "a name on one line"),
        ("# heat", "a name that does not begin a comment"),
        ("#", "a name that does not begin a comment"),
        ("#N/A", "a name that is no spreadsheet error"),
        ("he\ud800at", "a name in Unicode"),
    ],
)
def test_a_name_that_no_cell_holds_is_refused(name: str, expected: str) -> None:
    assert name_problem(name) == expected
    with pytest.raises(InputError) as caught:
        write_blocks(replace(SMALL, rows=("bench", name)))
    assert str(caught.value).startswith(f"small: [b] row: expected {expected}, got ")


@pytest.mark.parametrize("name", ["#1", "#N/A?", "[x]", "a\tb", '"', "\ufeffx", "x\x1by"])
def test_any_other_name_is_fine(name: str) -> None:
    lp = replace(SMALL, rows=("bench", name), columns=(name, "y", "z"))
    assert name_problem(name) == ""
    assert identical(again(lp), lp)
