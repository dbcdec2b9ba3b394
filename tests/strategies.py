"""Hypothesis strategies that several test modules share.

`linear_programs` covers every kind of row (one-sided, two-sided, equality, free)
and of column (nonnegative, boxed, fixed, free, negative), both senses, and numbers
that no double holds.
"""

from __future__ import annotations

from fractions import Fraction
from functools import cache
from typing import Any

import numpy as np
from hypothesis import strategies as st
from scipy.sparse import csr_array

from lpview.decimals import exact_value, parse
from lpview.model import LinearProgram, Sense, frozen_odd

Number = tuple[float, Fraction | None]
Ends = tuple[Number, Number]

NO_LOWER: Number = (-np.inf, None)
NO_UPPER: Number = (np.inf, None)
ZERO: Number = (0.0, None)

ODD_TEXTS = (
    "1/3",
    "-2/7",
    "22/7",
    "0.33333333333333333333",
    "1.00000000000000000001",
    "0.99999999999999999999",
    "12345678901234567890.123",
    "-1.2345678901234567890123e-7",
)
NASTY_NAMES = (
    *("row", "column", "cost", "lower", "upper", "relation", "rhs", "coefficient"),
    *("[x]", "[c]", "[offset]", "[b", "#1", "#", "-1", "1/3", "none", "inf", "=x", "nan"),
    *("a,b", "a;b", 'say "hi"', '"', "it's", "a\tb", "flow[a,b]", "p[/]q", "Straße", "≤"),
    *("x  y", "x y", "X y", "\x1b[31m", "π\u00a0r", "right-hand side", "sep=;", "\\", "|"),
)


def exact(number: Number) -> Fraction:
    """The exact value of a finite number."""
    return exact_value(*number)


@cache
def numbers(odd: bool = True) -> st.SearchStrategy[Number]:
    """Small integers and decimals, and odd numbers now and then."""
    integers = [str(sign * k) for k in range(10) for sign in (1, -1)]
    decimals = [str(k / 100) for k in (50, 25, 150, -75, 10, -30, 333, -1234, 99999, 1)]
    texts = [*integers, *decimals, *(ODD_TEXTS if odd else ())]
    return st.sampled_from([parse(text) for text in texts])


@cache
def names(size: int, nasty: bool, letter: str) -> st.SearchStrategy[tuple[str, ...]]:
    """``size`` different names that a file can hold."""
    plain = tuple(f"{letter}{k + 1}" for k in range(size))
    if not nasty:
        return st.just(plain)
    nasty_name = st.sampled_from([name for name in NASTY_NAMES if _fits_a_cell(name)])
    name = st.one_of(nasty_name, st.text(min_size=1, max_size=3).filter(_fits_a_cell))
    mixed = st.lists(name, min_size=size, max_size=size, unique=True).map(tuple)
    return st.one_of(st.just(plain), mixed)


def _fits_a_cell(name: str) -> bool:
    """Whether CSV blocks can hold the name; written here again, as an oracle."""
    comment = name == "#" or name.startswith("# ")
    return name == name.strip() and not comment and not set(name) & set("\0\r\n")


def row_sides(ends: tuple[Number, Number], kind: int) -> Ends:
    """Sides of a row: one-sided, two-sided, equality or free."""
    first, second = sorted(ends, key=exact)
    return (
        (NO_LOWER, first),
        (first, NO_UPPER),
        (first, second),
        (first, first),
        (NO_LOWER, NO_UPPER),
    )[kind]


def column_bounds(ends: tuple[Number, Number], kind: int) -> Ends:
    """Bounds of a column: nonnegative, boxed, fixed, free, negative, one-sided."""
    first, second = sorted(ends, key=exact)
    return (
        (ZERO, NO_UPPER),
        (first, second),
        (NO_LOWER, NO_UPPER),
        (first, first),
        (NO_LOWER, ZERO),
        (first, NO_UPPER),
        (NO_LOWER, first),
    )[kind]


@st.composite
def linear_programs(
    draw: st.DrawFn,
    max_rows: int = 5,
    max_columns: int = 5,
    odd: bool = True,
    nasty_names: bool = True,
) -> LinearProgram:
    """Valid linear programs with 0 to ``max_rows`` rows and ``max_columns`` columns."""
    m, n = draw(st.integers(0, max_rows)), draw(st.integers(0, max_columns))
    number = numbers(odd)
    entry = st.one_of(st.just(ZERO), number)
    cells = draw(_lists(entry, m * n))
    nonzero = [(k, cell) for k, cell in enumerate(cells) if cell[0] != 0]
    pair = st.tuples(number, number)
    sides = draw(_lists(st.builds(row_sides, pair, st.integers(0, 4)), m))
    bounds = draw(_lists(st.builds(column_bounds, pair, st.integers(0, 6)), n))
    fields: dict[str, list[Number]] = {
        "c": draw(_lists(number, n)),
        "A": [cell for _, cell in nonzero],
        "row_lower": [low for low, _ in sides],
        "row_upper": [high for _, high in sides],
        "lower": [low for low, _ in bounds],
        "upper": [high for _, high in bounds],
        "offset": [draw(entry)],
    }
    return LinearProgram(
        name="random",
        sense=draw(st.sampled_from(Sense)),
        columns=draw(names(n, nasty_names, "x")),
        rows=draw(names(m, nasty_names, "r")),
        **_arrays(fields, [k for k, _ in nonzero], (m, n)),
    )


def _lists(items: st.SearchStrategy[Any], size: int) -> st.SearchStrategy[list[Any]]:
    return st.lists(items, min_size=size, max_size=size)


def _arrays(
    fields: dict[str, list[Number]], places: list[int], shape: tuple[int, int]
) -> dict[str, Any]:
    """Keyword arguments of `LinearProgram` from numbers in row-major order."""
    values = {part: np.array([v for v, _ in ns], float) for part, ns in fields.items()}
    odd = {
        part: {k: o for k, (_, o) in enumerate(ns) if o is not None} for part, ns in fields.items()
    }
    matrix = np.zeros(shape)
    matrix.flat[places] = values["A"]
    offset = float(values.pop("offset")[0])
    return {**values, "A": csr_array(matrix), "offset": offset, "odd": frozen_odd(odd)}
