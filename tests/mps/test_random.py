"""Random models, written in this format and read again, agree to the last digit."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from lpview.decimals import exact_value, number_text
from lpview.model import LinearProgram, Sense, identical
from lpview.mps import read_mps_bytes
from tests.strategies import linear_programs

BLANKS = frozenset(" \t\f\v")


def decimal(value: float, odd: Fraction | None) -> str:
    text = number_text(value, odd)
    assume("/" not in text)  # this format has no fractions
    return text


def number(lp: LinearProgram, part: str, index: int) -> str:
    values = lp.A.data if part == "A" else np.atleast_1d(getattr(lp, part))
    return decimal(float(values[index]), lp.odd.get(part, {}).get(index))


def exact(lp: LinearProgram, part: str, index: int) -> Fraction:
    return exact_value(float(getattr(lp, part)[index]), lp.odd.get(part, {}).get(index))


def written(lp: LinearProgram) -> str:
    """The model as text in free format, with one number on each line."""
    lines = ["NAME", *(["OBJSENSE", " MAX"] if lp.sense is Sense.MAXIMIZE else []), "ROWS"]
    free = [
        not np.isfinite(lp.row_lower[i]) and not np.isfinite(lp.row_upper[i]) for i in range(lp.m)
    ]
    assume(not any(free))  # rows without sides are other objectives in this format
    rhs, ranges = [f" s OBJ {decimal(-lp.offset + 0.0, _minus(lp))}"], []
    lines.append(" N OBJ")
    for i, name in enumerate(lp.rows):
        low, high = np.isfinite(lp.row_lower[i]), np.isfinite(lp.row_upper[i])
        equal = bool(lp.is_equality[i])
        lines.append(f" {'E' if equal else 'L' if high else 'G'} {name}")
        rhs.append(f" s {name} {number(lp, 'row_upper' if high else 'row_lower', i)}")
        if low and high and not equal:
            width = exact(lp, "row_upper", i) - exact(lp, "row_lower", i)
            ranges.append(f" s {name} {decimal(float(width), width)}")
    lines.append("COLUMNS")
    columns = lp.A_by_column
    for j, name in enumerate(lp.columns):
        lines.append(f" {name} OBJ {number(lp, 'c', j)}")
        for k in range(columns.indptr[j], columns.indptr[j + 1]):
            at = int(lp.by_column_order[k])
            lines.append(f" {name} {lp.rows[columns.indices[k]]} {number(lp, 'A', at)}")
    lines += ["RHS", *rhs, "RANGES", *ranges, "BOUNDS"]
    for j, name in enumerate(lp.columns):
        low, high = np.isfinite(lp.lower[j]), np.isfinite(lp.upper[j])
        lines.append(f" LO b {name} {number(lp, 'lower', j)}" if low else f" MI b {name}")
        lines.append(f" UP b {name} {number(lp, 'upper', j)}" if high else f" PL b {name}")
    return "\n".join([*lines, "ENDATA", ""])


def _minus(lp: LinearProgram) -> Fraction | None:
    odd = lp.odd.get("offset", {}).get(0)
    return None if odd is None else -odd


def holds(name: str) -> bool:
    """Whether free format can hold a name."""
    return not set(name) & BLANKS and name[0] not in "*$" and name != "OBJ"


@pytest.mark.parametrize("odd", [False, True])
def test_what_was_written_is_read_again(odd: bool) -> None:
    @settings(max_examples=60, deadline=None)
    @given(lp=linear_programs(odd=odd, nasty_names=False))
    def check(lp: LinearProgram) -> None:
        assert identical(read_mps_bytes(written(lp).encode(), "m").model, lp)

    check()


@settings(max_examples=60, deadline=None)
@given(lp=linear_programs(odd=False, nasty_names=True))
def test_nasty_names_survive(lp: LinearProgram) -> None:
    assume(all(map(holds, (*lp.rows, *lp.columns))))
    assert identical(read_mps_bytes(written(lp).encode(), "m").model, lp)


@settings(max_examples=60, deadline=None)
@given(text=st.text(), data=st.data())
def test_any_text_is_read_or_refused_in_words(text: str, data: st.DataObject) -> None:
    """No other exception leaves the reader, whatever line is put where."""
    from lpview.blocks import InputError

    lines = written(SMALL).split("\n")
    place = data.draw(st.integers(0, len(lines)))
    words = data.draw(st.lists(st.sampled_from(WORDS), max_size=5))
    lines.insert(place, text if data.draw(st.booleans()) else " " + " ".join(words))
    try:
        read_mps_bytes("\n".join(lines).encode("utf-8", "surrogatepass"), "m")
    except InputError as error:
        assert str(error).startswith("m:")


WORDS = (
    "x",
    "r",
    "OBJ",
    "1",
    "-2.5",
    "RHS",
    "UP",
    "FR",
    "*",
    "$",
    "'MARKER'",
    "'INTORG'",
    "b",
    "N",
)
SMALL = read_mps_bytes(
    b"ROWS\n N OBJ\n L r\n E q\nCOLUMNS\n x OBJ 1\n x r 2 q 3\n y q 1\nRHS\n r 5\nENDATA\n", "small"
).model
