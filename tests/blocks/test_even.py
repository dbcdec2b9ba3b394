"""The fast ways give what the plain ways give."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from lpview.blocks.cells import parse_all
from lpview.blocks.decimal_mark import DecimalMark
from lpview.blocks.even import EvenCells, even_cells, filled, find, marked, take
from lpview.decimals import NumberError, exact_value, parse

BODIES = st.text(alphabet='ab1,;\t\n "#é\u00a0\u2003\x1c', max_size=24)

DIGITS = st.text(alphabet="0123456789", max_size=18)
DECIMALS = st.tuples(
    st.sampled_from(["", "-", "+"]),
    DIGITS,
    st.sampled_from(["", "."]),
    DIGITS,
    st.sampled_from(["", "", "e3", "E-5", "e+30", "e-310", "e320"]),
).map("".join)
ANYTHING = st.one_of(
    DECIMALS,
    st.text(alphabet="0123456789+-.eE_/ naif", max_size=6),
    st.sampled_from(["1/3", "-2/4", "nan", "inf", "1_0", "١", "1e5", "", "-0", "0x1"]),
)


def lines_of(body: str, separator: str) -> list[list[str]] | None:
    """The trimmed cells of all lines; None where quotes hold more than a plain cell."""
    lines = [[c.strip() for c in line.split(separator)] for line in body.split("\n")]
    for line in lines:
        for place, cell in enumerate(line):
            if len(cell) > 1 and cell[0] == cell[-1] == '"' and '"' not in cell[1:-1]:
                line[place] = cell[1:-1].strip()
            elif '"' in cell:
                return None
    return lines


def as_even(texts: list[str]) -> EvenCells:
    cells = even_cells("\n".join(f"x;{text}" for text in texts), 2, ";")
    assert cells is not None
    return cells[1::2]


@settings(deadline=None)
@given(BODIES, st.integers(1, 3), st.sampled_from(",;\t"))
@example("a, 1\nb ,2", 2, ",")
@example("é,1\na,2", 2, ",")
@example("\u00a0a,1", 2, ",")
@example(",1", 2, ",")
@example('"a", "1 "\n" b",2', 2, ",")
@example('"a,1"\nb,2', 2, ",")
@example('a""b,1', 2, ",")
@example("a,1,,\nb,2, ,", 2, ",")
@example("a,1,,\nb,2,,3", 2, ",")
@example("a,1,,\nb,2,", 2, ",")
@example("a,1" + 99 * " ", 2, ",")
def test_even_cells_are_the_split_lines(body: str, width: int, separator: str) -> None:
    cells = even_cells(body, width, separator)
    lines = lines_of(body, separator)
    if lines and len({len(line) for line in lines}) == 1:
        lines = [line[:width] if not any(line[width:]) else line for line in lines]
    regular = lines and all(len(line) == width and line[0] for line in lines)
    if cells is not None:
        assert regular
        assert list(cells) == [cell for line in lines or [] for cell in line]
        assert [cells[k] for k in range(len(cells))] == list(cells)
    elif body.isascii() and "   " not in body:
        assert not regular


def plainly(texts: list[str]) -> tuple[list[float], dict[int, Fraction], dict[int, str]]:
    values, odd, wrong = [], {}, {}
    for place, text in enumerate(texts):
        try:
            value, exact = parse(text)
        except NumberError as error:
            value, exact, wrong[place] = 0.0, None, str(error)
        values.append(value)
        if exact is not None:
            odd[place] = exact
    return values, odd, wrong


@settings(deadline=None)
@given(st.lists(ANYTHING, max_size=4))
@example(["9007199254740993", "0.1234567890123456", "90071992547409.93"])
@example(["1e300", "-1.5e300", "1e-300", "9e-301", "1e-400"])
@example(["1.2.3", "1..2", "+-1", "."])
def test_numbers_are_those_of_parse(texts: list[str]) -> None:
    texts = [text.strip() for text in texts]
    for numbers in (parse_all(texts), parse_all(as_even(texts)) if texts else None):
        if numbers is not None:
            found = numbers.values.tolist(), dict(numbers.odd), dict(numbers.wrong)
            assert found == plainly(texts)
            assert not np.signbit(numbers.values[numbers.values == 0]).any()


@settings(deadline=None)
@given(st.lists(ANYTHING, min_size=1, max_size=4))
@example(["1.5", "2"])
@example(["1,2.5", ",5", "5,"])
def test_decimal_commas_are_points_written_otherwise(texts: list[str]) -> None:
    """With commas a text is the number that it is with points; a point is then no mark."""
    texts = [text.strip() for text in texts]
    exchanged = [text.translate(str.maketrans(".,", ",.")) for text in texts]
    expected = plainly(texts)
    comma = DecimalMark(comma=True)
    for numbers in (parse_all(exchanged, mark=comma), parse_all(as_even(exchanged), mark=comma)):
        assert (numbers.values.tolist(), dict(numbers.odd), dict(numbers.wrong)) == expected
        if not numbers.wrong:
            assert numbers.decimals == parse_all(texts).decimals


@settings(deadline=None)
@given(st.lists(DECIMALS, min_size=1, max_size=4))
def test_no_digit_is_lost(texts: list[str]) -> None:
    numbers = parse_all(as_even(texts))
    for place, text in enumerate(texts):
        if place not in numbers.wrong:
            value = exact_value(numbers.values[place], numbers.odd.get(place))
            assert value == Fraction(text)


PLACES = {"1.5": 1, "-0.25": 2, "7": 0, ".125": 3, "3.": 0, "1/3": 0, "1.00": 2}
PLACES |= {"1e-5": 5, "1.25E-3": 5, "1.23456e2": 3, "1.5e+7": 0, "9e0": 0}


@settings(deadline=None)
@given(st.lists(st.sampled_from([*PLACES])))
def test_the_most_decimals(texts: list[str]) -> None:
    most = max(map(PLACES.__getitem__, texts), default=0)
    assert parse_all(texts).decimals == most
    if texts:
        assert parse_all(as_even(texts)).decimals == most


def test_words_stand_for_numbers_and_empty_ones_are_counted() -> None:
    texts = ["1", "", "None", "1/3", "x", ""]
    for cells in (texts, as_even(texts)):
        numbers = parse_all(cells, {"": 5.0, "none": -np.inf})
        assert numbers.values.tolist() == [1, 5, -np.inf, 1 / 3, 0, 5]
        assert numbers.odd == {3: Fraction(1, 3)}
        assert numbers.wrong == {4: "a number"}
        assert numbers.empty == 2


NAMES = st.text(alphabet="abé1", min_size=1, max_size=10)


@settings(deadline=None)
@given(st.lists(NAMES, max_size=5), st.lists(NAMES, unique=True, max_size=5))
@example(["ababababa"], ["abababab"])
@example(["abababab", "b"], ["b", "ababababa", "abababab"])
def test_find_is_a_dictionary(texts: list[str], names: list[str]) -> None:
    index = {name: 7 * place for place, name in enumerate(names)}
    expected = [index[t] for t in texts] if {*texts} <= {*names} else None
    for cells in (texts, as_even(texts)) if texts else (texts,):
        found = find(cells, index)
        assert (None if found is None else found.tolist()) == expected


@pytest.mark.parametrize("kind", [list, as_even])
def test_marked_texts(kind: type[list]) -> None:
    texts = kind(["1.5", "", "1", "a,b", "1.200,5", ""])
    assert marked(texts).tolist() == [0, 3, 4]
    assert marked(kind(["1", ""])).tolist() == []


def test_marks_between_texts_count_for_none() -> None:
    cells = even_cells('"1.5",2,,\n3,4,,', 2, ",")
    assert cells is not None
    assert marked(cells).tolist() == [0]
    assert marked(cells[1::2]).tolist() == []


@pytest.mark.parametrize("kind", [list, as_even])
def test_filled_and_taken_texts(kind: type[list]) -> None:
    texts = kind(["a", "", "b", "c", ""])
    assert filled(texts).tolist() == [0, 2, 3]
    assert list(take(texts, np.array([3, 0]))) == ["c", "a"]
