"""Plans from elsewhere as files: what is read, and the whole message where it cannot be."""

from __future__ import annotations

import hashlib
from fractions import Fraction
from pathlib import Path

import pytest

from lpview.blocks import InputError, read_model_bytes, read_plan
from lpview.blocks.plan import half_units
from lpview.model import LinearProgram

MODEL = b"""\
[c],maximize
column,tomato,basil,mint
profit,3,5,1

[A]
row,tomato,basil,mint
bench,1,0,1
heat,0,2,1

[b]
row,relation,rhs
bench,<=,4
heat,<=,12

[bounds]
column,lower,upper
mint,1,3
"""


@pytest.fixture
def lp() -> LinearProgram:
    return read_model_bytes(MODEL, "glasshouse.csv").model


@pytest.fixture(autouse=True)
def _in_an_empty_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)


def written(text: str) -> str:
    Path("plan.csv").write_bytes(text.encode())
    return "plan.csv"


def message(lp: LinearProgram, text: str, **how: bool) -> str:
    with pytest.raises(InputError) as caught:
        read_plan(written(text), lp, **how)
    return str(caught.value)


def test_values_with_the_digits_they_are_written_in(lp: LinearProgram) -> None:
    file = written("[x]\ncolumn,value\nbasil,2.50\nmint,1\n")
    plan = read_plan(file, lp)
    assert plan.x.values.tolist() == [0.0, 2.5, 1.0]
    assert plan.x.half.tolist() == [0.0, 0.005, 0.5]
    assert plan.x.listed.tolist() == [False, True, True]
    assert (plan.x.unlisted, plan.y, plan.z, plan.unknown) == (1, None, None, ())
    assert plan.sha256 == hashlib.sha256(Path(file).read_bytes()).hexdigest()


def test_prices_and_reduced_costs(lp: LinearProgram) -> None:
    text = "[x]\ncolumn,value\nmint,1\n[y]\nrow,value\nheat,1/3\n[z]\ncolumn,value\nmint,-2e-1\n"
    plan = read_plan(written(text), lp)
    assert plan.y is not None
    assert plan.z is not None
    assert plan.y.odd == {1: Fraction(1, 3)}
    assert plan.y.half.tolist() == [0.0, 0.0]
    assert plan.z.values.tolist() == [0.0, 0.0, -0.2]
    assert plan.z.half.tolist() == [0.0, 0.0, 0.05]


def test_no_block_line_is_needed_for_a_plan_alone(lp: LinearProgram) -> None:
    bare = read_plan(written("# last night's run\nColumn;Value\nmint;1,5\n"), lp, "comma")
    assert bare.x.values.tolist() == [0.0, 0.0, 1.5]
    both = read_plan(written("column,value\nmint,1\n\n[y]\nrow,value\nheat,2\n"), lp)
    assert both.y is not None
    assert both.y.values.tolist() == [0.0, 2.0]


def test_half_a_unit_of_the_last_written_digit() -> None:
    texts = ["1.50", "20", "1e3", "1.5e3", "-0.2E-1", "1/3", "0", ".5", "2.", "+7,25"]
    expected = [0.005, 0.5, 500.0, 50.0, 0.005, 0.0, 0.5, 0.05, 0.5, 0.005]
    assert half_units(texts).tolist() == expected


def test_names_that_the_model_lacks(lp: LinearProgram) -> None:
    text = "[x]\ncolumn,value\nmint,1\nbasill,2\n[y]\nrow,value\nlight,3\n"
    advice = "--ignore-unknown counts such names instead"
    assert message(lp, text) == (
        "plan.csv:4: [x] column: expected a column of the model's [c], got 'basill'; "
        f"did you mean 'basil'?; {advice}\n"
        f"plan.csv:7: [y] row: expected a row of the model's [b], got 'light'; {advice}"
    )
    plan = read_plan("plan.csv", lp, ignore_unknown=True)
    assert plan.unknown == ("basill", "light")
    assert plan.x.values.tolist() == [0.0, 0.0, 1.0]


def test_columns_left_out(lp: LinearProgram) -> None:
    text = "column,value\ntomato,1\n"
    assert message(lp, text) == (
        "plan.csv: [x] expected a value for column 'mint', got none, and its bounds do not allow 0"
    )
    assert message(lp, "column,value\nmint,1\n", complete=True) == (
        "plan.csv: [x] expected a value for column 'tomato', got none\n"
        "plan.csv: [x] expected a value for column 'basil', got none"
    )


MISTAKES = {
    "junk\n": (
        "plan.csv:1: block line: expected the header column,value or a line [x], [y] or [z], "
        "got 'junk'"
    ),
    "[x]\ncolumn,value\nmint,1\nmint,2\n": (
        "plan.csv:4: [x] column: expected every name once, got 'mint'; it is on line 3 too"
    ),
    "[y]\nrow,value\nheat,1\n": "plan.csv: expected the block [x], got none",
    "[x]\ncolumn,value\nmint,1\n[z]\ncolumn,value\nmint,1\n": (
        "plan.csv: expected the block [y] beside [z], got none"
    ),
    "[x]\ncolumn,value\nmint,\n": "plan.csv:3: [x] value: expected a number, got an empty cell",
    "[x]\ncolumn,value\nmint,#N/A\n": (
        "plan.csv:3: [x] value: expected a number, got the spreadsheet error '#N/A'; "
        "mend it in the spreadsheet and export again"
    ),
    "[x]\ncolumn,amount\nmint,1\n": (
        "plan.csv:2: [x] header: expected column,value, got 'column,amount'"
    ),
    "[c],minimize\ncolumn,cost\nmint,1\n": (
        "plan.csv:1: block line: expected [x], [y] or [z], got '[c]'"
    ),
    "[x]\ncolumn,value\nmint,inf\n": ("plan.csv:3: [x] value: expected a finite number, got 'inf'"),
    "": "plan.csv: expected a plan, got an empty file",
}


@pytest.mark.parametrize("text", MISTAKES)
def test_a_mistake_draws_the_whole_message(lp: LinearProgram, text: str) -> None:
    assert message(lp, text) == MISTAKES[text]


def test_a_plan_that_is_not_there(lp: LinearProgram) -> None:
    with pytest.raises(InputError) as caught:
        read_plan("nowhere.csv", lp)
    assert str(caught.value) == "nowhere.csv: expected a file, got nothing of that name"
