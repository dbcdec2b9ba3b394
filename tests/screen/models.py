"""Models for tests of the screen, as files of CSV blocks; answers worked out by hand."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np

ROOT = Path(__file__).resolve().parents[2]
SEASON = ROOT / "models" / "season.csv"
"""A few hundred lines, with degenerate ones and families."""
WINTER = ROOT / "models" / "winter.csv"
"""The shipped example: a handful of lines of every kind."""

Lines = Iterable[Sequence[object]]


def blocks(costs: Lines, terms: Lines, sides: Lines, bounds: Lines = ()) -> str:
    """A model to be maximized, as tall blocks: ``(column, cost)``, ``(row, column,
    coefficient)``, ``(row, relation, right-hand side)``, ``(column, lower, upper)``."""
    stream = io.StringIO()
    write = csv.writer(stream, lineterminator="\n").writerows
    write([("[c]", "maximize"), ("column", "cost"), *costs])
    write([("[A]",), ("row", "column", "coefficient"), *terms])
    write([("[b]",), ("row", "relation", "rhs"), *sides])
    bounds = [*bounds]
    if bounds:
        write([("[bounds]",), ("column", "lower", "upper"), *bounds])
    return stream.getvalue()


def chain(rows: Sequence[str], columns: Sequence[str]) -> str:
    """A model with these names, as many rows as columns, and a plain answer.

    Line ``i`` (from 0) has value and price ``i + 1``: ``x_i = i + 1`` and ``y_i = i + 1``.
    Row ``i`` is ``2 x_(i-1) + x_i <= 3 i + 1``, and column ``j`` costs
    ``y_j + 2 y_(j+1)``, so that all slacks and all reduced costs are 0. Both follow
    from a triangle, so the answer is the only one, and nothing is degenerate.
    """
    size = len(rows)
    assert len(columns) == size
    costs = [(columns[j], j + 1 + (2 * (j + 2) if j + 1 < size else 0)) for j in range(size)]
    terms = [(rows[i], columns[i], 1) for i in range(size)]
    terms += [(rows[i], columns[i - 1], 2) for i in range(1, size)]
    return blocks(costs, terms, [(rows[i], "<=", 3 * i + 1) for i in range(size)])


GLASSHOUSE = blocks(
    [("tomato", 30), ("basil", 1.6)],
    [
        ("heat", "tomato", 15),
        ("heat", "basil", 2),
        ("bench", "tomato", 5.2),
        ("water", "tomato", 4),
    ],
    [("heat", "<=", 300), ("bench", "<=", 120), ("water", "<=", 80)],
    [("tomato", 0, 40)],
)
"""Tomato 20 and basil 0 earn 600; bench has the slack 120 - 104 = 16, the other rows
have none, and no other plan is as good. Two columns fix a vertex, and three lines with a
pair stand at an end, so one of them is degenerate. Prices are not unique: heat has one
from 0.8 to 2, water (30 - 15 heat) / 4, and basil the reduced cost 1.6 - 2 heat."""

MARKUP = ("flow[a,b]", "p[/]q", "[bold red]x[/]", "[@click=app.quit]q[/]", "a\\[b", "$primary")
"""Names that a library of widgets could take for orders."""

CONTROL = (
    "a\x1b[31mred", "b\x1b]52;c;aGFjaw==\x07", "c\x1b[2J\x1b[H", "d\x9b31m", "e\tf\x08g",
    "h\u202egnp.exe", "i\u200bj", "k\x7fl\x01", "m\u2028n", "o\x1b[?1049l",
)  # fmt: skip
"""Names with sequences that could colour, clear, leave or write to a terminal."""

CJK = ("暖房", "水の使用量", "温室栽培面積合計", "労働時間", "ﾄﾏﾄ", "토마토")
"""Names of wide characters, some of odd width, and of narrow ones."""

MIXED = (
    "e\u0301te\u0301", "🍅 tomato", "👩\u200d🌾 grower", "☂\ufe0f umbrella",
    "\u1112\u1161\u11ab", "नमस्ते", "שלום", "x\u00a0x\u00a0x",
)  # fmt: skip
"""Names whose width in cells is not the number of their characters."""

LONG = (*(letter * 300 for letter in "abc"), "温" * 150, "x" * 300, "x" * 299 + "y")
"""Names of 300 cells and more, two of which differ at the end only."""

ALIKE = ("stock week 1", "stock  week 1", "Stock week 1", "stock week  1", "stockweek 1")
"""Names that differ by blanks or by case only."""

NUMBERS = ("1/3", "123456789.123456", "0.000000012345678", "-98765432109876", "1e15", "-2/7")
"""Numbers that need more digits than a narrow column has."""


def wide_numbers() -> str:
    """Columns fixed at `NUMBERS`, each in a free row of its own."""
    columns = [f"x{place}" for place in range(len(NUMBERS))]
    return blocks(
        [(column, 1) for column in columns],
        [(f"r{column}", column, "1/3") for column in columns],
        [(f"r{column}", "<=", "2e15") for column in columns],
        [(column, value, value) for column, value in zip(columns, NUMBERS, strict=True)],
    )


@dataclass(frozen=True)
class Case:
    """A model file and how the program ends on it."""

    content: str | bytes
    """What the file holds."""
    status: int = 0
    """Exit status of ``lpview check``, and of the screen when it is left."""
    says: str = "optimal"
    """Words that the report or message has."""

    def write(self, folder: Path, name: str = "model.csv") -> Path:
        """The file, written into a folder."""
        data = self.content if isinstance(self.content, bytes) else self.content.encode()
        path = folder / name
        path.write_bytes(data)
        return path


def _chain(names: Sequence[str]) -> Case:
    return Case(chain(names, names[::-1]))


ONE = Case(blocks([("x", 3)], [("r", "x", 1)], [("r", "<=", 4)]))
"""One row and one column: x is 4, r has the price 3, the objective is 12."""

OPTIMAL: dict[str, Case] = {
    "one": ONE,
    "one row": Case(
        blocks(
            [(f"x{j}", 1) for j in range(9)],
            [("r", f"x{j}", 1) for j in range(9)],
            [("r", "<=", 4)],
        )
    ),
    "one column": Case(
        blocks(
            [("x", 1)],
            [(f"r{i}", "x", 1) for i in range(9)],
            [(f"r{i}", "<=", 4 + i) for i in range(9)],
        )
    ),
    "no rows": Case(blocks([("x", 2), ("y", -1)], [], [], [("x", 0, 5)])),
    "no columns": Case(blocks([], [], [("r", "<=", 4), ("s", ">=", -1)])),
    "nothing": Case(blocks([], [], [])),
    "no coefficients": Case(blocks([("x", -1)], [], [("r", "<=", 4)])),
    "glasshouse": Case(GLASSHOUSE),
    "markup": _chain(MARKUP),
    "control": _chain(CONTROL),
    "cjk": _chain(CJK),
    "mixed": _chain(MIXED),
    "long": _chain(LONG),
    "alike": _chain(ALIKE),
    "wide numbers": Case(wide_numbers()),
}
"""Models with an optimum, by what is odd about them."""

INFEASIBLE = Case(GLASSHOUSE.replace("tomato,0,40", "tomato,21,40"), 3, "infeasible")
"""Heat allows 20 tomatoes, and the bound asks for 21."""
UNBOUNDED = Case(
    blocks([("x", 1), ("y", 0)], [("r", "x", -1), ("r", "y", 1)], [("r", "<=", 4)]), 3, "unbounded"
)
"""Nothing limits x."""
BAD = Case(
    GLASSHOUSE.replace("bench,<=,120", "bench,<=,1 20"),
    2,
    "model.csv:14: [b] rhs: expected a number, got '1 20'",
)
"""A right-hand side that is no number."""
SEVERAL = Case(
    GLASSHOUSE.replace("bench,<=,120", "bench,<=,1 20").replace("heat,<=,300", "h[/]eat,<=,many"),
    2,
    "did you mean 'h[/]eat'?",
)
"""Several mistakes, one of which has a name like markup."""
BINARY = Case(b"\x00\x01\x02\xff", 2, "model.csv:1: expected UTF-8 text, got binary data")
"""No text at all."""
EMPTY = Case("", 2, "model.csv: expected a linear program, got an empty file")
"""Nothing at all."""
UNREPRESENTABLE = Case(GLASSHOUSE.replace("heat,tomato,15", "heat,tomato,1e300"), 2, "")
"""A number that no solver takes."""

OTHER: dict[str, Case] = {
    "infeasible": INFEASIBLE,
    "unbounded": UNBOUNDED,
    "bad": BAD,
    "several": SEVERAL,
    "binary": BINARY,
    "empty": EMPTY,
    "unrepresentable": UNREPRESENTABLE,
}
"""Models that end otherwise."""


def slow(folder: Path, size: int = 4000, each: int = 25) -> Path:
    """A sparse covering model that takes the simplex method most of a minute: to be stopped.

    Its sides are the row values of a plan inside the bounds, so it is feasible.
    """
    rng = np.random.default_rng(0)
    where = np.stack([rng.choice(size, each, replace=False) for _ in range(size)])
    a = rng.integers(1, 100, (size, each))
    sides = np.round((a * rng.random(size)[where]).sum(axis=1)).astype(int)
    price = rng.random(size)
    costs = np.zeros(size)
    np.add.at(costs, where, a * price[:, None])
    terms = zip(np.repeat(np.arange(size), each), where.ravel(), a.ravel(), strict=True)
    path = folder / "slow.csv"
    text = blocks(
        [(f"x{j}", round(cost)) for j, cost in enumerate(costs)],
        [(f"r{i}", f"x{j}", value) for i, j, value in terms],
        [(f"r{i}", ">=", side) for i, side in enumerate(sides)],
        [(f"x{j}", 0, 2) for j in range(size)],
    )
    path.write_text(text.replace("maximize", "minimize", 1))
    return path
