"""Small models, with invented names, that are made to fool a tolerance.

Numbers are written as in a file, so that 1/3 is a third and 0.1 a tenth. What each model
comes to follows from the comment beside it and, in the tests, from the exact simplex.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction

import numpy as np
from scipy.sparse import csr_array

from lpview.answer import Basis, LineStatus
from lpview.decimals import parse
from lpview.model import LinearProgram, Sense, frozen_odd

Row = tuple[str, Mapping[str, str], str]
LOWER, BASIC, UPPER, FREE = LineStatus


def written(
    sense: str,
    costs: Mapping[str, str],
    rows: Mapping[str, Row],
    bounds: Mapping[str, tuple[str, str]] | None = None,
    offset: str = "0",
) -> LinearProgram:
    """A model from ``{column: cost}``, ``{row: (lower, {column: a}, upper)}`` and
    ``{column: (lower, upper)}``, where a column not listed is nonnegative."""
    columns = list(costs)
    ends = [(bounds or {}).get(column, ("0", "inf")) for column in columns]
    texts = {
        "c": list(costs.values()),
        "A": [terms[j] for _, terms, _ in rows.values() for j in columns if j in terms],
        "row_lower": [low for low, _, _ in rows.values()],
        "row_upper": [high for _, _, high in rows.values()],
        "lower": [low for low, _ in ends],
        "upper": [high for _, high in ends],
        "offset": [offset],
    }
    numbers = {part: [_number(text) for text in row] for part, row in texts.items()}
    arrays = {part: np.array([v for v, _ in row], float) for part, row in numbers.items()}
    odd = {
        part: {k: exact for k, (_, exact) in enumerate(row) if exact is not None}
        for part, row in numbers.items()
    }
    indices = [columns.index(j) for _, terms, _ in rows.values() for j in columns if j in terms]
    starts = np.cumsum([0, *(len(terms) for _, terms, _ in rows.values())])
    return LinearProgram(
        name="made to fool",
        sense=Sense(sense),
        columns=tuple(columns),
        rows=tuple(rows),
        c=arrays["c"],
        A=csr_array((arrays["A"], indices, starts), shape=(len(rows), len(columns))),
        **{part: arrays[part] for part in ("row_lower", "row_upper", "lower", "upper")},
        offset=float(arrays["offset"][0]),
        odd=frozen_odd(odd),
    )


def _number(text: str) -> tuple[float, Fraction | None]:
    return (float(text), None) if text in ("inf", "-inf") else parse(text)


def basis(columns: Sequence[LineStatus], rows: Sequence[LineStatus]) -> Basis:
    """A basis from statuses."""
    return Basis(np.array(columns, np.int8), np.array(rows, np.int8))


def overbooked() -> LinearProgram:
    """Infeasible by 1e-12: the limits add up to 0.999999999999, and 1 is called for."""
    return written(
        "minimize",
        {"fern": "2", "moss": "3"},
        {
            "shelf": ("1", {"fern": "1", "moss": "1"}, "inf"),
            "shade": ("-inf", {"fern": "1"}, "0.4"),
            "water": ("-inf", {"moss": "1"}, "0.599999999999"),
        },
    )


def nearly_as_cheap(gap: str = "0.9999999999") -> LinearProgram:
    """Two ways to fill one kiln; the second is cheaper by a little."""
    return written(
        "minimize",
        {"oak": "1", "elm": gap},
        {
            "kiln": ("10", {"oak": "1", "elm": "1"}, "inf"),
            "yard": ("-inf", {"oak": "1", "elm": "2"}, "40"),
        },
    )


OAK = basis([BASIC, LOWER], [LOWER, BASIC])
"""All of the first: optimal to any tolerance above the difference in cost."""


def a_little_too_full() -> LinearProgram:
    """The cheap silo holds 1 and must leave 0.0000000001 to the dear one."""
    return written(
        "minimize",
        {"near": "1", "far": "5"},
        {"harvest": ("1.0000000001", {"near": "1", "far": "1"}, "inf")},
        {"near": ("0", "1"), "far": ("0", "1")},
    )


NEAR = basis([BASIC, LOWER], [LOWER])
"""All of it in the near silo: beyond its bound by 1e-10."""


def told_twice(third: str) -> LinearProgram:
    """The last row is the sum of the others, if its side is 0.3 + 0.6 = 0.9."""
    return written(
        "maximize",
        {"tin": "1", "zinc": "2", "lead": "-1"},
        {
            "alloy": ("0.3", {"tin": "1", "zinc": "1"}, "0.3"),
            "scrap": ("0.6", {"zinc": "1", "lead": "1"}, "0.6"),
            "total": (third, {"tin": "1", "zinc": "2", "lead": "1"}, third),
        },
    )


def tenths() -> LinearProgram:
    """0.1 + 0.2 = 0.3, which doubles deny; the slack of the row is exactly 0."""
    return written(
        "minimize",
        {"salt": "1", "lime": "1", "clay": "1"},
        {"mix": ("-inf", {"salt": "0.1", "lime": "0.2", "clay": "1"}, "0.3")},
        {"salt": ("1", "5"), "lime": ("1", "5")},
    )


def thirds() -> LinearProgram:
    """A third three times is 1, and nothing is left for the waste."""
    return written(
        "maximize",
        {"ann": "1/3", "bob": "1/3", "cid": "1/3", "waste": "1"},
        {"cake": ("1", {"ann": "1/3", "bob": "1/3", "cid": "1/3", "waste": "1"}, "1")},
        {"ann": ("1", "1"), "bob": ("1", "1"), "cid": ("1", "1")},
    )


def many_digits(digits: int) -> LinearProgram:
    """Coefficients, a side and a cost with so many digits after the point."""
    ones = "1." + ("1234567891" * digits)[:digits]
    nines = "1." + ("9876543219" * digits)[:digits]
    return written(
        "minimize",
        {"ink": ones, "dye": "2", "wax": "1"},
        {
            "vat": (nines, {"ink": ones, "dye": "3", "wax": nines}, "inf"),
            "tub": ("0.1", {"ink": "1", "dye": "-" + nines}, "0.1"),
            "jar": ("-inf", {"ink": "7", "wax": ones}, "5"),
        },
    )


def crumbs(count: int = 100) -> LinearProgram:
    """Infeasible: 1 and ``count`` crumbs that a sum of doubles loses one by one."""
    names = [f"crumb{k}" for k in range(count)]
    return written(
        "minimize",
        {"loaf": "1", **dict.fromkeys(names, "1")},
        {"box": ("-inf", dict.fromkeys(["loaf", *names], "1"), "1.000000000000008")},
        {"loaf": ("1", "1"), **dict.fromkeys(names, ("1.1e-16", "1.1e-16"))},
    )


def cheap_crumbs(count: int = 100) -> LinearProgram:
    """Every row is worth a crumb, the first is worth 1, and the loaf fills them all.

    It costs 1.000000000000008, less than the 1 + 1.1e-14 that the rows are worth.
    """
    names = [f"crumb{k}" for k in range(count)]
    costs = dict.fromkeys(names, "1.1e-16")
    return written(
        "minimize",
        {"loaf": "1.000000000000008", "crust": "1", **costs},
        {f"plate {j}": ("1", {"loaf": "1", j: "1"}, "inf") for j in ["crust", *names]},
    )


def twins() -> LinearProgram:
    """Two columns that are the same but for their cost."""
    return written(
        "minimize",
        {"left": "1", "right": "2"},
        {
            "sole": ("2", {"left": "1", "right": "1"}, "inf"),
            "lace": ("3", {"left": "2", "right": "2"}, "inf"),
        },
    )


BOTH_TWINS = basis([BASIC, BASIC], [LOWER, LOWER])
"""Both columns of `twins`: its matrix is singular."""
