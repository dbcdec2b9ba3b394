"""One decimal mark per file: recognised from all its numbers, or said, never guessed."""

from __future__ import annotations

import re
from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import pytest

from lpview.blocks import InputError, read_model, read_model_bytes
from lpview.blocks.cells import column, read_numbers
from lpview.blocks.layout import PLAN_BLOCKS
from lpview.blocks.mistakes import Mistakes
from lpview.blocks.source import from_bytes
from lpview.blocks.structure import blocks_by_name
from lpview.reading import Reading

UNCLEAR = (
    "expected a decimal mark that cannot be grouping, got '{}'; every mark in the file stands "
    "before exactly three digits; give --decimal point or --decimal comma"
)


def sheet(*costs: str, offset: str = "0", rest: str = "") -> str:
    """A file with semicolons whose costs stand from line 4 on."""
    columns = "".join(f"x{k};{cost}\n" for k, cost in enumerate(costs))
    head = f"[offset];{offset}\n[c];minimize\ncolumn;cost\n{columns}"
    return head + (rest or "[A]\nrow;column;coefficient\n[b]\nrow;relation;rhs\n")


def read(text: str, decimal: str | None = None) -> Reading:
    return read_model_bytes(text.encode(), "f", decimal)


def mistakes(text: str, decimal: str | None = None) -> list[str]:
    with pytest.raises(InputError) as caught:
        read(text, decimal)
    return str(caught.value).splitlines()


@pytest.mark.parametrize("separator", ";\t")
@pytest.mark.parametrize(
    ("costs", "values"),
    [
        (["1,5", "-2"], [1.5, -2]),
        (["1.5", "-2"], [1.5, -2]),
        (["1,200", "1,5"], [1.2, 1.5]),
        (["1.200", "1.5"], [1.2, 1.5]),
        (["1,200", "3,"], [1.2, 3]),
        ([",5", "+,25", "-1,"], [0.5, 0.25, -1]),
        (["1,5e2", "1/3", "2E-1"], [150, 1 / 3, 0.2]),
        (["1234,5678"], [1234.5678]),
        (["1200", "-7"], [1200, -7]),
        (["", "1/3"], [0, 1 / 3]),
    ],
)
def test_numbers_decide(separator: str, costs: list[str], values: list[float]) -> None:
    assert read(sheet(*costs).replace(";", separator)).model.c.tolist() == values


@pytest.mark.parametrize("text", ["1.200", "1,200", "0,125", "1234,500", ",500", "-1.200e3"])
def test_three_digits_never_decide(text: str) -> None:
    assert mistakes(sheet("7", text, text)) == [f"f:5: [c] cost: {UNCLEAR.format(text)}"]
    said = "comma" if "," in text else "point"
    assert read(sheet("7", text), said).model.c[1] == float(text.replace(",", "."))
    other = "point" if "," in text else "comma"
    groups = re.match(r"-?[1-9]\d{0,2}[,.]", text)
    grouping = "take grouping out and " if groups else ""
    assert mistakes(sheet("7", text), other) == [
        f"f:5: [c] cost: expected a number, got '{text}'; the decimal mark is a {other}, as "
        f"--decimal {other} says; {grouping}use one mark in the whole file"
    ]


@pytest.mark.parametrize(
    "rest",
    [
        "[A]\nrow;column;coefficient\nr;x0;{}\n[b]\nrow;relation;rhs\nr;<=;1\n",
        "[A]\nrow;x0\nr;{}\n[b]\nrow;relation;rhs\nr;<=;1\n",
        "[A]\nrow;column;coefficient\n[b]\nrow;relation;rhs\nr;<=;{}\n",
        "[A]\nrow;column;coefficient\n[b]\nrow;lower;upper\nr;;{}\n",
        "[A]\nrow;column;coefficient\n[b]\nrow;lower;upper\n[bounds]\ncolumn;lower;upper\nx0;;{}\n",
        '[A]\nrow;x0\n"r;s";{}\n[b]\nrow;relation;rhs\n"r;s";<=;1\n',
    ],
)
def test_numbers_of_every_block_decide(rest: str) -> None:
    assert read(sheet("1.200", rest=rest.format("2.5"))).model.c.tolist() == [1.2]
    assert read(sheet("1,200", rest=rest.format("2,5"))).model.c.tolist() == [1.2]
    (message,) = mistakes(sheet("1,25", rest=rest.format("2.5")))
    advice = "the decimal mark is a comma, as on line 4; use one mark in the whole file"
    assert message.endswith(f", got '2.5'; {advice}")


def test_the_offset_decides_and_costs_with_bounds_do() -> None:
    assert read(sheet("1,200", offset="-7,5")).model.offset == -7.5
    text = sheet(rest="[c];minimize\ncolumn;cost;lower;upper\nx;1,200;;2,5\n")
    text = text.replace("[c];minimize\ncolumn;cost\n", "", 1)
    lp = read(text + "[A]\nrow;column;coefficient\n[b]\nrow;relation;rhs\n").model
    assert (lp.c.tolist(), lp.upper.tolist()) == ([1.2], [2.5])


def test_a_column_called_like_a_block_may_cost_a_comma_and_five() -> None:
    lp = read(sheet("2,5").replace("x0", "[c]")).model
    assert (lp.columns, lp.c.tolist()) == (("[c]",), [2.5])
    lp = read(sheet("2,5", ",25").replace("x1", "[c]")).model
    assert (lp.columns, lp.c.tolist()) == (("x0", "[c]"), [2.5, 0.25])


def test_names_comments_and_other_cells_do_not_decide() -> None:
    rest = (
        "[A]\nrow;1,5;1.25\n2,5;;\n[b]\nrow;relation;rhs\n2,5;<=;7\n# 1,5;1,5\n"
        "[labels]\nkind;name;label;unit;group\ncolumn;1,5;2,5;1,5;3,75\n"
    )
    text = "[c];minimize\ncolumn;1,5;1.25\n1,5;{};1\n" + rest
    assert read(text.format("2.5")).model.c.tolist() == [2.5, 1]
    assert read(text.format("2,5")).model.c.tolist() == [2.5, 1]
    assert mistakes(text.format("2.500")) == [f"f:3: [c] 1,5: {UNCLEAR.format('2.500')}"]


def test_two_marks_name_both_lines() -> None:
    assert mistakes(sheet("7", "1.5", "2,25", "3.5")) == [
        "f:6: [c] cost: expected a number, got '2,25'; the decimal mark is a point, as on line 5; "
        "use one mark in the whole file"
    ]


def test_a_grouped_number_decides_nothing() -> None:
    assert mistakes(sheet("1.200,5", "2,500")) == [
        "f:4: [c] cost: expected a number, got '1.200,5'; write the digits without grouping",
        f"f:5: [c] cost: {UNCLEAR.format('2,500')}",
    ]


def test_commas_between_cells_leave_points_unless_told() -> None:
    text = sheet("1.200", "2,5").replace(";", ",").replace("2,5", '"2,5"')
    assert mistakes(text) == [
        "f:5: [c] cost: expected a number, got '2,5'; give --decimal comma if the comma is the "
        "decimal mark"
    ]
    assert mistakes(text, "comma") == [
        "f:4: [c] cost: expected a number, got '1.200'; the decimal mark is a comma, as --decimal "
        "comma says; take grouping out and use one mark in the whole file"
    ]
    assert read(text.replace("1.200", '"1,200"'), "comma").model.c.tolist() == [1.2, 2.5]
    assert read(text.replace('"2,5"', "2.500"), None).model.c.tolist() == [1.2, 2.5]
    assert read(text.replace('"2,5"', "2.500"), "point").model.c.tolist() == [1.2, 2.5]
    assert mistakes(text.replace("1.200", "1,200"), "comma") == [
        "f:4: [c] line: expected 2 cells as in the header, got 3; put numbers with a decimal comma "
        "in quotes"
    ]


def test_odd_numbers_and_words_beside_commas() -> None:
    rest = "[A]\nrow;column;coefficient\n[b]\nrow;lower;upper\nr;None;2,5\ns;-INF;1/3\n"
    reading = read(sheet("0,10000000000000000000001", "1/3", "12345678901234567890,123", rest=rest))
    assert reading.model.odd["c"] == {
        0: Fraction("0.10000000000000000000001"),
        1: Fraction(1, 3),
        2: Fraction("12345678901234567890.123"),
    }
    assert reading.model.row_upper.tolist() == [2.5, 1 / 3]
    assert reading.notes.most_decimals == {"c": 23, "offset": 0, "A": 0, "b": 1}


@pytest.mark.parametrize(
    ("cost", "most"), [("1e-5", 5), ("1,5E-3", 4), ("1,23456e2", 3), ("12e3", 0), ("1,500", 3)]
)
def test_an_exponent_counts_as_decimals(cost: str, most: int) -> None:
    for separated in (sheet("2,5", cost), sheet("2,5", cost, '" 7"')):
        assert read(separated).notes.most_decimals["c"] == max(most, 1)


def test_each_file_of_a_folder_has_its_own_mark(tmp_path: Path) -> None:
    parts = {
        "c": "[c];minimize\ncolumn;cost\nx;1,25\n",
        "A": "[A]\nrow\tx\nr\t1.75\n",
        "b": "[b],\nrow,lower,upper\nr,,2.500\n",
    }
    for name, text in parts.items():
        (tmp_path / f"{name}.csv").write_text(text, encoding="utf-8")
    lp = read_model(tmp_path).model
    assert (lp.c.tolist(), lp.A.toarray().tolist(), lp.row_upper.tolist()) == (
        [1.25],
        [[1.75]],
        [2.5],
    )
    with pytest.raises(InputError) as caught:
        read_model(tmp_path, "comma")
    places = [f"{Path(m.file).name}:{m.line} {m.got}" for m in caught.value.mistakes]
    assert places == ["A.csv:3 '1.75'", "b.csv:3 '2.500'"]


def test_blocks_of_other_kinds_are_recognised_too() -> None:
    source = from_bytes(b"[x]\ncolumn;value\na,b;1,200\nb;0,5\n", "plan")
    found = Mistakes()
    (block,) = blocks_by_name([replace(source, kinds=PLAN_BLOCKS)], found)["x"]
    assert (block.mark.comma, block.mark.known) == (True, "as on line 4")
    assert read_numbers(column(block, 1)).values.tolist() == [1.2, 0.5]
    assert found.found == []


def test_a_broken_line_or_block_leaves_the_others_recognised() -> None:
    text = sheet("1,5;;9", "2,25")
    assert mistakes(text) == ["f:4: [c] line: expected 2 cells as in the header, got 4"]
