"""What each section means, in numbers; and whatever a reader may differ in, as a remark."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from lpview.blocks import InputError
from lpview.model import Sense
from lpview.mps import looks_like_mps, read_mps_bytes
from lpview.reading import Reading

INF = np.inf

MODEL = """\
NAME
ROWS
 N obj
 L l
 G g
 E e
COLUMNS
{columns}RHS
 s l 10 g 20
 s e 30
RANGES
{ranges}BOUNDS
{bounds}ENDATA
"""
COLUMNS = " x obj 1 l 2\n x g 3 e 4\n"
INTEGER = " m 'MARKER' 'INTORG'\n x obj 1 l 2\n m 'MARKER' 'INTEND'\n y l 1\n"


def read(text: str) -> Reading:
    return read_mps_bytes(text.encode(), "m.mps")


def model(columns: str = COLUMNS, ranges: str = "", bounds: str = "") -> Reading:
    return read(MODEL.format(columns=columns, ranges=ranges, bounds=bounds))


def test_rows_have_the_sides_that_their_letters_name() -> None:
    lp = model().model
    assert lp.rows == ("l", "g", "e")
    assert lp.row_lower.tolist() == [-INF, 20, 30]
    assert lp.row_upper.tolist() == [10, INF, 30]
    assert lp.c.tolist() == [1]
    assert lp.A.toarray().tolist() == [[2], [3], [4]]
    assert (lp.lower.tolist(), lp.upper.tolist()) == ([0], [INF])
    assert (lp.sense, lp.offset) == (Sense.MINIMIZE, 0)
    assert model().notes.remarks == ()


@pytest.mark.parametrize(
    ("size", "lower", "upper"),
    [
        ("4", [6, 20, 30], [10, 24, 34]),
        ("-4", [6, 20, 26], [10, 24, 30]),
        ("0", [10, 20, 30], [10, 20, 30]),
    ],
)
def test_a_range_widens_a_row(size: str, lower: list[float], upper: list[float]) -> None:
    """Only for an equality does the sign of a range matter."""
    lp = model(ranges=f" r l {size} g {size}\n r e {size}\n").model
    assert (lp.row_lower.tolist(), lp.row_upper.tolist()) == (lower, upper)


def test_a_range_is_taken_exactly() -> None:
    """0.3 - 0.1 in doubles is 0.19999999999999998."""
    text = "ROWS\n N o\n L r\n L q\nCOLUMNS\n x r 1 q 1\nRHS\n r .3 q 1\nRANGES\n r .1 q {}\nENDATA"
    lp = read(text.format(".2")).model
    assert lp.row_lower.tolist() == [0.2, 0.8]
    assert not lp.odd
    lp = read(text.format(".33333333333333333333")).model
    assert dict(lp.odd["row_lower"]) == {1: 1 - Fraction(33333333333333333333, 10**20)}


@pytest.mark.parametrize(
    ("bounds", "lower", "upper", "integer"),
    [
        (" LO b x -3", -3, INF, False),
        (" UP b x 3", 0, 3, False),
        (" FX b x 3", 3, 3, False),
        (" FR b x", -INF, INF, False),
        (" MI b x\n UP b x 4", -INF, 4, False),
        (" PL b x", 0, INF, False),
        (" PL b x\n LO b x 2", 2, INF, False),
        (" BV b x", 0, 1, True),
        (" LI b x 2", 2, INF, True),
        (" UI b x 7", 0, 7, True),
        (" LI b x -2\n UI b x 7", -2, 7, True),
        (" LO b x -7\n UP b x -5", -7, -5, False),
        (" UP b x -5\n LO b x -7", -7, -5, False),
        (" UP b x 0", 0, 0, False),
        (" FR x", -INF, INF, False),
        (" UP x 3", 0, 3, False),
        (" UP b x Inf\n LO b x -Infinity", -INF, INF, False),
    ],
)
def test_kinds_of_bounds(bounds: str, lower: float, upper: float, integer: bool) -> None:
    reading = model(bounds=bounds + "\n")
    lp = reading.model
    assert (lp.lower.tolist(), lp.upper.tolist()) == ([lower], [upper])
    assert reading.integers == ((0,) if integer else ())
    assert reading.notes.remarks == ()


@pytest.mark.parametrize(
    ("bounds", "lower", "upper"),
    [
        ("", 0, 1),
        (" PL b x\n", 0, INF),
        (" LO b x 2\n", 2, INF),
        (" UP b x 8\n", 0, 8),
        (" MI b x\n", -INF, INF),
        (" FR b x\n", -INF, INF),
    ],
)
def test_bounds_of_a_marked_column(bounds: str, lower: float, upper: float) -> None:
    reading = model(columns=INTEGER, bounds=bounds)
    assert reading.integers == (0,)
    assert (reading.model.lower[0], reading.model.upper[0]) == (lower, upper)
    assert (reading.model.lower[1], reading.model.upper[1]) == (0, INF)


@pytest.mark.parametrize(
    ("reading", "remark"),
    [
        (
            lambda: model(bounds=" MI b x\n"),
            "1 column with MI alone, taken as having no upper bound (readers differ here): "
            "first 'x' on line 15",
        ),
        (
            lambda: read("ROWS\n N o\n L r\nCOLUMNS\n x o 1 r 1\nRHS\n o -7.50 r 1\nENDATA\n"),
            "right-hand side -7.50 of the objective on line 7 taken as the constant 7.5 "
            "(readers differ here)",
        ),
        (
            lambda: model(bounds=" UP b x -5\n"),
            "1 column with a negative upper bound and no lower bound, taken as having none "
            "(readers differ here): first 'x' on line 15",
        ),
        (
            lambda: model(columns=INTEGER),
            "1 integer column without bounds, taken as 0 to 1 (readers differ here): first 'x' "
            "on line 9",
        ),
        (
            lambda: model(bounds=" UP b x 1e30\n LO b x -1D30\n"),
            "2 bounds of at least 1e20 in size, taken for none: first 1e30 on line 15",
        ),
        (
            lambda: model(bounds=" UP b x 1.7976931348623157e308\n"),
            "1 bound of at least 1e20 in size, taken for none: first 1.7976931348623157e308 on "
            "line 15",
        ),
        (
            lambda: model(bounds=" FR b x 7\n"),
            "1 number beside FR, MI, PL or BV left out: first on line 15",
        ),
        (lambda: model(columns=" x obj 0 l 0\n"), "2 numbers of COLUMNS written as 0"),
        (
            lambda: model(columns=" x obj 1 l 1e-13\n"),
            "1 coefficient of at most 1e-12 in size, kept here, though solvers drop them: first "
            "1e-13 of 'x' in 'l' on line 8",
        ),
        (
            lambda: model(columns=" x obj 1 l 0.33333333333333333333\n"),
            "1 numeral with more digits than a double holds: first '0.33333333333333333333' on "
            "line 8; solvers take the nearest double, check and proof the numeral as written",
        ),
        (
            lambda: read("ROWS\n L r\nCOLUMNS\n x r 1\nENDATA\n"),
            "no N row, so that every cost is 0",
        ),
        (
            lambda: read(
                "ROWS\n N o\n N p\n L r\nCOLUMNS\n x r 1 o 2\n x p 3\nRHS\n p 7 r 9\nRANGES\n p 1\n"
                "ENDATA\n"
            ),
            "the first N row 'o' is the objective; left out, with 3 numbers: 'p'",
        ),
        (
            lambda: read("ROWS\n N o\nCOLUMNS\n x o 1\nENDATA\n* not this\nROWS\n N p\n"),
            "2 lines after ENDATA left out",
        ),
    ],
)
def test_what_is_noticed(reading: object, remark: str) -> None:
    assert callable(reading)
    assert reading().notes.remarks == (remark,)


def test_a_column_below_a_negative_bound_has_no_lower_one() -> None:
    lp = model(bounds=" UP b x -5\n").model
    assert (lp.lower.tolist(), lp.upper.tolist()) == ([-INF], [-5])


def test_other_objectives_never_touch_the_first() -> None:
    """The solver's own reader takes any N row's right-hand side for the objective's."""
    lp = read("ROWS\n N o\n N p\nCOLUMNS\n x o 2\n x p 3\nRHS\n p 7\nENDATA\n").model
    assert (lp.c.tolist(), lp.offset, lp.m) == ([2], 0, 0)


def test_small_coefficients_are_kept() -> None:
    assert model(columns=" x obj 1 l 1e-13\n").model.A.toarray().tolist() == [[1e-13], [0], [0]]


def test_long_numerals_are_kept_exactly() -> None:
    long, third = "1.00000000000000000001", "0.33333333333333333333"
    one, three = Fraction(10**20 + 1, 10**20), Fraction(33333333333333333333, 10**20)
    text = f"ROWS\n N o\n E r\nCOLUMNS\n y o 1\n x o {long} r {third}\nRHS\n s r {long} o {third}\n"
    lp = read(f"{text}BOUNDS\n LO b x -{third}\n UP b x {long}\nENDATA\n").model
    assert {part: dict(numbers) for part, numbers in lp.odd.items()} == {
        "c": {1: one},
        "A": {0: three},
        "row_lower": {0: one},
        "row_upper": {0: one},
        "lower": {1: -three},
        "upper": {1: one},
        "offset": {0: -three},
    }
    assert lp.c.tolist() == [1, 1]
    assert lp.A.data.tolist() == [float(three)]


@pytest.mark.parametrize("numeral", ["1.5e3", "1.5E+3", "1.5D3", "1.5d+03", "+1500.", "1500"])
def test_spellings_of_a_number(numeral: str) -> None:
    assert model(columns=f" x obj {numeral} l 1\n").model.c.tolist() == [1500]


@pytest.mark.parametrize(
    "section",
    [
        "OBJSENSE\n    MAX",
        "OBJSENSE\nMAXIMIZE",
        "OBJSENSE MAX",
        "OBJSENSE  MAXIMIZE",
        "OBJSENSE\n max",
    ],
)
def test_the_sense(section: str) -> None:
    text = f"{section}\nROWS\n N o\nCOLUMNS\n x o 1\nENDATA\n"
    assert read(text).model.sense is Sense.MAXIMIZE
    assert read("NAME\n" + text.replace("ROWS", "ROWS ")).model.sense is Sense.MAXIMIZE
    assert read(text.replace("MAX", "MIN").replace("max", "min")).model.sense is Sense.MINIMIZE


def test_lines_that_are_not_indented() -> None:
    text = """\
NAME
ROWS
N obj
L RHS
COLUMNS
RHS RHS 1
RHS obj 2
ROWS RHS 3
RHS
RHS RHS 4
RHS obj 5
BOUNDS
UP RHS RHS 6
UP RHS ROWS 7
ENDATA
"""
    lp = read(text).model
    assert (lp.columns, lp.rows) == (("RHS", "ROWS"), ("RHS",))
    assert (lp.c.tolist(), lp.A.toarray().tolist()) == ([2, 0], [[1, 3]])
    assert (lp.row_upper.tolist(), lp.upper.tolist(), lp.offset) == ([4], [6, 7], -5)


FIXED = """\
NAME          GLASS HOUSE
ROWS
 N  THE COST
 L  A B
COLUMNS
    MY COL    THE COST            1.   A B                 2.
    Y         A B                 3.   $ a comment
    Z         A B                 4.                            00000120
    M         'MARKER'                 'INTORG'
    W         A B                -5.
    M         'MARKER'                 'INTEND'
RHS
              A B                 7.   THE COST           -1.
RANGES
    MY RNG    A B                 2.
BOUNDS
 UP MY BND    MY COL             40.
 FR MY BND    Y
ENDATA
"""


def test_names_with_blanks_in_fixed_columns() -> None:
    reading = read(FIXED)
    lp = reading.model
    assert (lp.columns, lp.rows) == (("MY COL", "Y", "Z", "W"), ("A B",))
    assert (lp.c.tolist(), lp.A.toarray().tolist()) == ([1, 0, 0, 0], [[2, 3, 4, -5]])
    assert (lp.row_lower.tolist(), lp.row_upper.tolist(), lp.offset) == ([5], [7], 1)
    assert (lp.lower.tolist(), lp.upper.tolist()) == ([0, -INF, 0, 0], [40, INF, INF, 1])
    assert reading.integers == (3,)
    assert "2 comments at the ends of lines left out: first on line 7" in reading.notes.remarks


@pytest.mark.parametrize("ending", ["\r\n", "\r", "  \n", "\n\n"])
@pytest.mark.parametrize("blank", ["  ", "\t", " \t "])
def test_line_ends_and_blanks(ending: str, blank: str) -> None:
    text = MODEL.format(columns=COLUMNS, ranges="", bounds=" UP b x 3\n")
    other = text.replace(" ", blank).replace("\n", ending)
    assert read(other).model.A.toarray().tolist() == [[2], [3], [4]]
    assert read(other).model.upper.tolist() == [3]


def test_names_in_other_scripts() -> None:
    text = "\ufeffNAME Größe\nROWS\n N o\n L Straße\u00a0x\nCOLUMNS\n π Straße\u00a0x 1\nENDATA"
    lp = read(text).model
    assert (lp.rows, lp.columns) == (("Straße\u00a0x",), ("π",))


def test_comments_in_another_encoding() -> None:
    text = "NAME Größe\n* Größe\nROWS\n N o $ Größe\nCOLUMNS\n x o 1\nENDATA\n".encode("latin-1")
    assert read_mps_bytes(text, "m").model.columns == ("x",)


def test_names_that_begin_like_comments() -> None:
    text = "ROWS\n N o\n L *r\n L $q\nCOLUMNS\n x o 1 *r 2\n x $q 3 $s 4\nRHS\n *r 5 $q 6\nENDATA\n"
    reading = read(text)
    assert reading.model.A.toarray().tolist() == [[2], [3]]
    assert reading.model.row_upper.tolist() == [5, 6]
    assert reading.notes.remarks == ("1 comment at the ends of lines left out: first on line 7",)


def test_notes_are_those_of_any_format() -> None:
    text = "ROWS\n N o\n L r\n L R\n G q\nCOLUMNS\n x o 1.25 r 2.5\n x R 1\nRHS\n r .125\n"
    notes = read(f"{text}BOUNDS\n UP b x 1.0000\nENDATA\n").notes
    assert notes.rows_without_coefficients == ("q",)
    assert notes.names_alike == (("r", "R"),)
    assert dict(notes.most_decimals) == {"c": 2, "A": 1, "b": 3, "bounds": 4}
    assert (notes.empty_coefficients, notes.empty_costs, notes.scope) == (0, 0, None)


@pytest.mark.parametrize(
    ("data", "like"),
    [
        (b"NAME x", True),
        (b"* c\n\n*\r\nROWS\n", True),
        (b"\xef\xbb\xbf*\r\nNAME", True),
        (b"OBJSENSE\n", True),
        (b"QUADOBJ\n", True),
        (b"[c],minimize\n", False),
        (b"# NAME\n", False),
        (b"NAMES x", False),
        (b"name x", False),
        (b"ROWS,x", False),
        (b"", False),
        (b"\x1f\x8b\x08nonsense", False),
    ],
)
def test_what_looks_like_this_format(data: bytes, like: bool) -> None:
    assert looks_like_mps(data) is like


def test_a_difference_between_the_readers_is_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    """Whatever the copy says otherwise is told with the line of the file that is meant."""
    from lpview.mps import reader

    true = reader.plain_copy

    def lying(parts: object) -> str:
        text = true(parts)  # type: ignore[arg-type]
        for old, new in LIES:
            assert old in text
            text = text.replace(old, new)
        return text

    monkeypatch.setattr(reader, "plain_copy", lying)
    with pytest.raises(InputError) as caught:
        model(bounds=" UP b x 3\n")
    assert str(caught.value) == "\n".join(TOLD)


LIES = (
    ("c0 r0 1", "c0 r0 5"),
    ("c0 r1 2", "c0 r1 2.5"),
    ("s r2 20", "s r2 21"),
    ("UP s c0 3", "UP s c0 4"),
    ("ENDATA", " LI s c0 0\nENDATA"),
    ("RHS", "RHS\n s r0 -1"),
)
SINCE = "by the solver's own reader; the file is not used, since its two readings differ"
TOLD = (
    f"m.mps:5: [ROWS] lower side of 'g': expected 20, got 21 {SINCE}",
    f"m.mps:8: [COLUMNS] cost of 'x': expected 1, got 5 {SINCE}",
    f"m.mps:8: [COLUMNS] coefficient of 'x' in 'l': expected 2, got 2.5 {SINCE}",
    f"m.mps:8: [COLUMNS] 'x': expected a continuous column, got an integer one {SINCE}",
    f"m.mps:10: [RHS] constant of the objective: expected 0, got 1 {SINCE}",
    f"m.mps:15: [BOUNDS] upper bound of 'x': expected 3, got 4 {SINCE}",
)


def test_decimals_are_counted_as_in_blocks() -> None:
    text = "ROWS\n N o\n L r\nCOLUMNS\n x o -1.25E-03 r 1.5e3\nRHS\n r 2.50D1\nENDATA\n"
    assert dict(read(text).notes.most_decimals) == {"c": 5, "A": 0, "b": 1}


def test_what_is_called_small_is_what_the_reader_drops() -> None:
    from lpview.mps.remarks import SMALL
    from lpview.solver.mps_file import DROPPED

    assert SMALL == DROPPED
