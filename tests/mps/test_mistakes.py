"""Bad files: a small text, and the whole message."""

from __future__ import annotations

from pathlib import Path

import pytest

from lpview.blocks import InputError
from lpview.mps import read_mps, read_mps_bytes

HEAD = "ROWS\n N obj\n L r\n G q\nCOLUMNS\n"
X = " x obj 1 r 2\n"
BOTH = f"{HEAD}{X}"

CASES: dict[str, tuple[str, str]] = {
    "a fraction, a hexadecimal, a decimal comma": (
        f"{HEAD} x obj 1/3 r 0x10\n x q 1,5\nENDATA",
        """\
m.mps:6: [COLUMNS] number: expected a number, got '1/3'
m.mps:6: [COLUMNS] number: expected a number, got '0x10'
m.mps:7: [COLUMNS] number: expected a number, got '1,5'""",
    ),
    "numbers that are not finite": (
        f"{HEAD} x obj inf r -Infinity\n x q NaN\nRHS\n r inf\nENDATA",
        """\
m.mps:6: [COLUMNS] number: expected a finite number, got 'inf'
m.mps:6: [COLUMNS] number: expected a finite number, got '-Infinity'
m.mps:7: [COLUMNS] number: expected a number, got 'NaN'
m.mps:9: [RHS] number: expected a finite number, got 'inf'""",
    ),
    "numbers that are taken for infinite": (
        f"{HEAD} x obj 1e20 r -1e30\nRHS\n r 1e20\nRANGES\n r 1e30\nENDATA",
        """\
m.mps:6: [COLUMNS] number: expected a number below 1e+20, which is taken for infinite, got '1e20'
m.mps:6: [COLUMNS] number: expected a number below 1e+20, which is taken for infinite, got '-1e30'
m.mps:8: [RHS] number: expected a number below 1e+20, which is taken for infinite, got '1e20'
m.mps:10: [RANGES] number: expected a number below 1e+20, which is taken for infinite, \
got '1e30'""",
    ),
    "numbers that no double holds": (
        f"{HEAD} x obj 1e-400 r 1e400\nENDATA",
        """\
m.mps:6: [COLUMNS] number: expected a number between 1e-300 and 1e300 in size, got '1e-400'
m.mps:6: [COLUMNS] number: expected a number between 1e-300 and 1e300 in size, got '1e400'""",
    ),
    "a pair twice": (
        f"{HEAD} x r 1\n x r 2\n y r 3 r 4\nENDATA",
        """\
m.mps:7: [COLUMNS] expected every pair of a column and a row once, got 'x' in 'r' twice; \
line 6 has it too
m.mps:8: [COLUMNS] expected every pair of a column and a row once, got 'y' in 'r' twice""",
    ),
    "a column in two places": (
        f"{HEAD} x r 1\n y r 2\n x q 3\nENDATA",
        "m.mps:8: [COLUMNS] column: expected all lines of a column together, got 'x' again; "
        "it began on line 6",
    ),
    "unknown rows and columns": (
        f"{HEAD} x rr 1\n y rr 2\nRHS\n s p 2\nBOUNDS\n UP b xx 3\nENDATA",
        """\
m.mps:6: [COLUMNS] row: expected a row of ROWS, got 'rr' twice; did you mean 'r'?
m.mps:9: [RHS] row: expected a row of ROWS, got 'p'
m.mps:11: [BOUNDS] column: expected a column of COLUMNS, got 'xx'; did you mean 'x'?""",
    ),
    "rows that are wrong": (
        "ROWS\n N obj\n L a\n G a\n Q b\n L #N/A\n l c\nCOLUMNS\n x nobody 1\nENDATA",
        """\
m.mps:4: [ROWS] name: expected every row once, got 'a'; it is on line 3 too
m.mps:5: [ROWS] expected one of N, E, L, G, got 'Q'
m.mps:6: [ROWS] name: expected a name that is no spreadsheet error, got the spreadsheet error \
'#N/A'; mend it in the spreadsheet and export again
m.mps:7: [ROWS] expected one of N, E, L, G, got 'l'""",
    ),
    "a name that is no UTF-8": (
        f"{HEAD} \udcf6 r 1\nENDATA",
        "m.mps:6: [COLUMNS] name: expected a name in Unicode, got '\\udcf6'",
    ),
    "an indented comment": (
        f"{HEAD} *x r 1\nENDATA",
        "m.mps:6: [COLUMNS] name: expected a comment that begins in the first column, or a name "
        "that does not begin with *, got '*x'",
    ),
    "numbers of fields": (
        f"{HEAD} x obj\n x r 1 obj\n x obj 1 r 3 7\nRHS\n r\nBOUNDS\n UP\n UP b x 3 4\nENDATA",
        """\
m.mps:6: [COLUMNS] expected a column, and once or twice a row and a number, got 'x obj'
m.mps:7: [COLUMNS] expected a column, and once or twice a row and a number, got 'x r 1 obj'
m.mps:8: [COLUMNS] expected a column, and once or twice a row and a number, got 'x obj 1 r 3 7'
m.mps:10: [RHS] expected a set, and once or twice a row and a number, got 'r'
m.mps:12: [BOUNDS] expected a kind of bound, a set, a column and a number, got 'UP'
m.mps:13: [BOUNDS] expected a kind of bound, a set, a column and a number, got 'UP b x 3 4'""",
    ),
    "several sets": (
        f"{BOTH}RHS\n A r 1\n B q 5\n A r 3\nBOUNDS\n UP b x 2\n FR x\nENDATA",
        """\
m.mps:9: [RHS] set: expected one set of numbers, got 'B' after 'A'; keep the set that is meant
m.mps:10: [RHS] row: expected every row once, got 'r' twice; line 8 has it too
m.mps:13: [BOUNDS] set: expected one set of numbers, got no name after 'b'; keep the set that is \
meant
m.mps:13: [BOUNDS] column: expected one upper bound of a column, got 'x' twice; \
line 12 has it too""",
    ),
    "a range of the objective, and one twice": (
        f"{BOTH}RANGES\n r 1 r 2\n obj 3\nENDATA",
        """\
m.mps:8: [RANGES] row: expected every row once, got 'r' twice
m.mps:9: [RANGES] row: expected a row with sides, got the objective 'obj'""",
    ),
    "bounds": (
        f"{BOTH} y r 1\n z r 1\n w r 1\n v r 1\n u r 1\nBOUNDS\n UP b x\n XX b x 3\n LO b x Inf\n"
        " FX b y 1e30\n UP b z -Inf\n LO b w 5\n UP b w 3\n LI b v 2.5\n UP b u one\n up b u 1\n"
        "ENDATA",
        """\
m.mps:13: [BOUNDS] number: expected a number, got none
m.mps:14: [BOUNDS] kind: expected one of LO, UP, FX, FR, MI, PL, BV, LI, UI, got 'XX'
m.mps:15: [BOUNDS] number: expected a finite number with LO, got 'Inf'
m.mps:16: [BOUNDS] number: expected a finite number with FX, got '1e30'
m.mps:17: [BOUNDS] number: expected a finite number with UP, got '-Inf'
m.mps:19: [BOUNDS] expected at least the lower bound 5, got the upper bound 3 of 'w'
m.mps:20: [BOUNDS] number: expected a whole number with LI, got '2.5'
m.mps:21: [BOUNDS] number: expected a number, got 'one'
m.mps:22: [BOUNDS] kind: expected one of LO, UP, FX, FR, MI, PL, BV, LI, UI, got 'up'""",
    ),
    "bounds that cross beyond a double": (
        f"{BOTH}BOUNDS\n LO b x 1.00000000000000000001\n UP b x 1\nENDATA",
        "m.mps:9: [BOUNDS] expected at least the lower bound 1.00000000000000000001, got the "
        "upper bound 1 of 'x'",
    ),
    "a number that may be a name": (
        f"{HEAD} x r 1\n 7 r 1\nBOUNDS\n FR x 7\nENDATA",
        "m.mps:9: [BOUNDS] expected a kind of bound, a set, a column and a number, got 'FR x 7'",
    ),
    "semi-continuous and semi-integer columns": (
        f"{BOTH} y r 1\nBOUNDS\n SC b x 3\n SI b y 3\n SC b y 4\nENDATA",
        """\
m.mps:9: [BOUNDS] expected a linear program, got 2 semi-continuous columns, such as 'x'
m.mps:10: [BOUNDS] expected a linear program, got 1 semi-integer column, such as 'y'""",
    ),
    "markers": (
        f"{HEAD} m 'MARKER' 'INTEND'\n x r 1\n m 'MARKER' 'INTORG'\n y r 1\nENDATA",
        """\
m.mps:6: [COLUMNS] marker: expected the marker 'INTORG', got 'INTEND'
m.mps:8: [COLUMNS] marker: expected the marker 'INTEND', got 'INTORG'""",
    ),
    "a marker without an end": (
        f"{HEAD} m 'MARKER' 'INTORG'\n y r 1\nENDATA",
        "m.mps:6: [COLUMNS] marker: expected the marker 'INTEND' after it, got none",
    ),
    "a special ordered set among the columns": (
        f"{HEAD} m 'MARKER' 'SOSORG'\n y r 1\n m 'MARKER' 'SOSEND'\nENDATA",
        """\
m.mps:6: [COLUMNS] marker: expected a linear program, got special ordered sets ('SOSORG')
m.mps:8: [COLUMNS] marker: expected a linear program, got special ordered sets ('SOSEND')""",
    ),
    "a set that looks like a comment": (
        f"{BOTH}RHS\n *s r 5\nENDATA",
        "m.mps:8: [RHS] set: expected a comment that begins in the first column, or a name that "
        "does not begin with *, got '*s'",
    ),
    "sections of other models": (
        f"{BOTH}QUADOBJ\n x x 1\n x y 2\nSOS1\n s SOS1 1\nQSECTION obj\n x x 1\nINDICATORS\nENDATA",
        """\
m.mps:7: [QUADOBJ] expected a linear program, got a quadratic objective on 2 lines
m.mps:10: [SOS1] expected a linear program, got special ordered sets on 1 line
m.mps:12: [QSECTION] expected a linear program, got a quadratic objective on 1 line
m.mps:14: [INDICATORS] expected a linear program, got indicator constraints on 0 lines""",
    ),
    "unknown sections": (
        f"{BOTH}FOO\n x x 1\nRhs\n r 1\nENDATA",
        """\
m.mps:7: expected a section of a linear program, or a line of two words or more, got 'FOO'
m.mps:9: expected a section of a linear program, or a line of two words or more, got 'Rhs'; \
section names are in capitals""",
    ),
    "a section twice": (
        f"{BOTH}RHS\n r 1\nRHS\n q 1\nENDATA",
        "m.mps:9: [RHS] expected this section once, got it again after line 7",
    ),
    "a file that was cut off": (
        f"{BOTH}RHS\n r 1\n",
        "m.mps: expected the last line ENDATA, got none; a part of the file may be missing",
    ),
    "a file without columns": (
        "ROWS\n N obj\nENDATA",
        "m.mps: expected the section COLUMNS, got none",
    ),
    "text below NAME": (
        f"NAME\n week 7\n{BOTH}ENDATA",
        "m.mps:2: [NAME] expected a section such as ROWS, got 'week 7'",
    ),
    "a sense that is none": (
        f"OBJSENSE\n UP\n{BOTH}ENDATA",
        "m.mps:2: [OBJSENSE] expected MIN or MAX, once, got 'UP'",
    ),
    "two senses": (
        f"OBJSENSE\n MAX\n MIN\n{BOTH}ENDATA",
        "m.mps:3: [OBJSENSE] expected MIN or MAX, once, got 'MIN'",
    ),
    "no sense": (
        f"OBJSENSE\n{BOTH}ENDATA",
        "m.mps:1: [OBJSENSE] expected MIN or MAX, once, got nothing",
    ),
    "small letters": (
        "name x\nrows\n",
        "m.mps:1: expected a section such as NAME or ROWS, got 'name x'; section names are in "
        "capitals",
    ),
    "blocks": (
        "[c],maximize\ncolumn,cost\n",
        "m.mps:1: expected a section such as NAME or ROWS, got '[c],maximize'",
    ),
    "names with blanks beside fixed columns": (
        "ROWS\n N  THE COST\nCOLUMNS\n    MY COL  THE COST            1.\nENDATA",
        "m.mps:2: [ROWS] expected one of N, E, L, G, and a name, got 'N  THE COST'",
    ),
    "fields that can be read in two ways": (
        "ROWS\n N  obj\n L  B\n L  R1\nCOLUMNS\n    A B 3     R1                  1.\nENDATA",
        "m.mps:6: [COLUMNS] expected fields that can be told apart, got 'A | B | 3 | R1 | 1.' or, "
        "in fixed columns, 'A B 3 | R1 | 1.'; write names without blanks inside them",
    ),
    "a column without a name in fixed columns": (
        "ROWS\n N  obj\n L  A B\nCOLUMNS\n              A B                 1.\nENDATA",
        "m.mps:5: [COLUMNS] name: expected a name, got none",
    ),
    "a range without any rows": (
        "ROWS\nCOLUMNS\nRANGES\n s r 1\nENDATA",
        "m.mps:4: [RANGES] row: expected a row of ROWS, got 'r'",
    ),
    "binary data": ("ROWS\n\0", "m.mps:2: expected UTF-8 text, got binary data"),
    "nothing": (" \n\n", "m.mps: expected a linear program, got an empty file"),
}


@pytest.mark.parametrize("case", CASES)
def test_mistake(case: str) -> None:
    text, message = CASES[case]
    data = text.encode("utf-8", "surrogateescape")
    with pytest.raises(InputError) as caught:
        read_mps_bytes(data, "m.mps")
    assert str(caught.value) == message


def test_the_control_passes() -> None:
    lp = read_mps_bytes(f"{BOTH}RHS\n s r 1\nENDATA".encode(), "m.mps").model
    assert (lp.rows, lp.columns) == (("r", "q"), ("x",))


def test_archives_that_are_none() -> None:
    for data, message in (
        (
            b"\x1f\x8b\x08nonsense",
            "m.mps.gz: expected a whole gzip archive, got one that ends too early; "
            "pack it or copy it again",
        ),
        (b"PK\x03\x04", "m.mps.gz: expected UTF-8 text, got a zip archive"),
        (b"\xff\xfeR\0", "m.mps.gz: expected UTF-8 text, got UTF-16"),
    ):
        with pytest.raises(InputError) as caught:
            read_mps_bytes(data, "m.mps.gz")
        assert str(caught.value) == message


def test_files_that_are_not_there(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    with pytest.raises(InputError) as caught:
        read_mps("no.mps")
    assert str(caught.value) == "no.mps: expected a file, got nothing of that name"
    with pytest.raises(InputError) as caught:
        read_mps(".")
    assert str(caught.value) == ".: expected a readable file, got 'Is a directory'"
