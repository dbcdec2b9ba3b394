"""What each block means, in numbers."""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest

from lpview.blocks import InputError, read_model, read_model_bytes
from lpview.model import Sense
from lpview.reading import Reading

INF = np.inf

WIDE = """\
# Winter week in the glasshouse; crates, kWh and hours per week
[c],maximize
column,tomato,basil,lettuce
profit,12.5,,4.75

[A]
row,tomato,basil,lettuce
bench,1,0.5,0.25
heat,3,,1/3

[b]
row,relation,right-hand side
bench,≤,120
heat,<=,300

[b]
row,lower,upper
light,10,
water,,none
seed,-2,inf
soil,-inf,7

[bounds]
column,lower,upper
tomato,,40
basil,none,
"""


def read(text: str) -> Reading:
    return read_model_bytes(text.encode(), "text")


def test_wide_blocks_and_both_headers_of_b() -> None:
    lp = read(WIDE).model
    assert lp.sense is Sense.MAXIMIZE
    assert lp.columns == ("tomato", "basil", "lettuce")
    assert lp.rows == ("bench", "heat", "light", "water", "seed", "soil")
    assert lp.c.tolist() == [12.5, 0, 4.75]
    assert lp.A.toarray()[:2].tolist() == [[1, 0.5, 0.25], [3, 0, 1 / 3]]
    assert lp.A.nnz == 5
    assert lp.odd == {"A": {4: Fraction(1, 3)}}
    assert lp.row_lower.tolist() == [-INF, -INF, 10, -INF, -2, -INF]
    assert lp.row_upper.tolist() == [120, 300, INF, INF, INF, 7]
    assert lp.lower.tolist() == [0, -INF, 0]
    assert lp.upper.tolist() == [40, INF, INF]
    assert lp.offset == 0


def test_the_notes_count_what_was_filled_in() -> None:
    notes = read(WIDE).notes
    assert (notes.empty_costs, notes.empty_coefficients) == (1, 1)
    assert notes.rows_without_coefficients == ("light", "water", "seed", "soil")
    assert notes.names_alike == ()
    assert notes.most_decimals == {"c": 2, "A": 2, "b": 0, "bounds": 0}


def test_names_that_differ_in_case_or_inner_blanks() -> None:
    text = WIDE.replace("seed,", "b en ch,").replace("soil,", "Heat,").replace("heat,", "hEat,")
    assert read(text).notes.names_alike == (("bench", "b en ch"), ("hEat", "Heat"))


def test_two_wide_blocks_add_columns() -> None:
    lp = read(
        "[c],minimize\ncolumn,x\ncost,1\n[c],minimize\ncolumn,cost,lower,upper\ny,2,,9\n"
        "[A]\nrow,y\nr,4\n[A]\nrow,x\nr,3\n[b]\nrow,relation,rhs\nr,=,1/7\n[offset],-0.50\n"
    ).model
    assert lp.columns == ("x", "y")
    assert lp.A.toarray().tolist() == [[3, 4]]
    assert lp.upper.tolist() == [INF, 9]
    assert (lp.offset, lp.c.tolist()) == (-0.5, [1, 2])
    assert lp.odd == {"row_lower": {0: Fraction(1, 7)}, "row_upper": {0: Fraction(1, 7)}}


def test_bounds_beside_the_costs_and_elsewhere() -> None:
    text = "[c],minimize\ncolumn,cost,lower,upper\nx,1,,\ny,2,none,none\nz,3,4,4\n"
    rest = (
        "[A]\nrow,column,coefficient\n[b]\nrow,lower,upper\n[bounds]\ncolumn,lower,upper\nx,-1,5\n"
    )
    lp = read(text + rest).model
    assert lp.lower.tolist() == [-1, -INF, 4]
    assert lp.upper.tolist() == [5, INF, 4]
    assert lp.A.shape == (0, 3)


def test_names_may_look_like_block_lines() -> None:
    lp = read(
        "[c],minimize\ncolumn,cost,lower,upper\n[c],1,,\n[offset],2,0,\n"
        "[A]\nrow,column,coefficient\n[x],[c],3\n[b],[offset],4\n"
        "[b]\nrow,lower,upper\n[x],1,2\n[b],,7\n[bounds]\ncolumn,lower,upper\n[c],,5\n"
    ).model
    assert (lp.columns, lp.rows) == (("[c]", "[offset]"), ("[x]", "[b]"))
    assert lp.A.toarray().tolist() == [[3, 0], [0, 4]]
    assert lp.upper.tolist() == [5, INF]
    assert lp.row_upper.tolist() == [2, 7]


def test_a_column_called_offset_may_lack_its_lower_bound() -> None:
    costs = "[c],minimize\ncolumn,cost,lower,upper\n[offset],2,none,none\n"
    rows = "[A]\nrow,column,coefficient\n[b]\nrow,lower,upper\n[offset],,5\n"
    lp = read(costs + rows).model
    assert (lp.rows, lp.row_upper.tolist(), lp.offset) == (("[offset]",), [5], 0)


def test_explicit_zeros_are_dropped_and_odd_numbers_stay_in_place() -> None:
    lp = read(
        "[c],minimize\ncolumn,cost\nx,1\ny,1\n[b]\nrow,relation,rhs\nr,>=,0\ns,>=,0\n"
        "[A]\nrow,column,coefficient\ns,y,2/3\ns,x,-0\nr,y,0\nr,x,1/3\n"
    ).model
    assert lp.A.data.tolist() == [1 / 3, 2 / 3]
    assert lp.odd["A"] == {0: Fraction(1, 3), 1: Fraction(2, 3)}


def test_words_are_read_without_regard_to_case() -> None:
    shouted = WIDE.replace("none", "None").replace("inf", "INF").replace("maximize", "Maximize")
    shouted = shouted.replace("row,relation,right", "Row,Relation,Right")
    assert read(shouted).model.row_lower.tolist() == read(WIDE).model.row_lower.tolist()


def test_names_stand_beside_no_separator_of_theirs() -> None:
    text = '[c];minimize\ncolumn;cost\na,b;1\n[A]\nrow;column;coefficient\n"r;s";a,b;2\n'
    lp = read(text + "[b]\nrow;relation;rhs\nr;s;=;1\n".replace("r;s", '"r;s"')).model
    assert (lp.columns, lp.rows, lp.A.nnz) == (("a,b",), ("r;s",), 1)


def test_a_model_is_named_after_its_file_or_folder(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    folder = tmp_path / "week.52"
    folder.mkdir()
    c, rest = WIDE.split("\n[A]")
    a, *b, bounds = ("[A]" + rest).replace("\n[b", "\n§[b").split("§")
    parts = {"c": c, "A": a, "b": "".join(b), "bounds": bounds}
    for name, text in parts.items():
        (folder / f"{name}.csv").write_text(text, encoding="utf-8")
    (folder / "notes.txt").write_text("not ours", encoding="utf-8")
    (folder / "one.csv").write_text(WIDE, encoding="utf-8")
    monkeypatch.chdir(folder)
    assert read_model(".").model.name == "week.52"
    assert read_model("one.csv").model.name == "one"
    assert read_model(".").notes == read_model("one.csv").notes


@pytest.mark.parametrize("separator", ",;\t")
def test_trailing_cells_of_a_wide_sheet(separator: str) -> None:
    text = WIDE.replace(",", separator)
    padded = "\n".join(line + separator * 4 for line in text.split("\n"))
    assert read(padded).notes == read(text).notes == read(WIDE).notes


def test_a_carriage_return_alone_ends_a_line() -> None:
    mistaken = WIDE.replace("light,10", "light,ten").replace("\n", "\r")
    with pytest.raises(InputError) as caught:
        read(mistaken)
    assert str(caught.value) == "text:18: [b] lower: expected a number, none or -inf, got 'ten'"


def test_a_note_cannot_be_changed() -> None:
    with pytest.raises(TypeError):
        read(WIDE).notes.most_decimals["c"] = 1  # type: ignore[index]
