"""The textbook ranges themselves, and what all tests of them share.

Nothing here asks the package for a range: the ranges are read, compared with the prices and
plans of the same collection, and solved again at and beyond their ends.
"""

from __future__ import annotations

import math
import tomllib
from dataclasses import dataclass, replace
from fractions import Fraction
from functools import cache
from pathlib import Path

import numpy as np
import pytest

from lpview.blocks import read_model
from lpview.decimals import exact_value
from lpview.model import LinearProgram, frozen_odd
from lpview.run import Claim, Solved
from lpview.solver import solve

FOLDER = Path(__file__).parents[1] / "data" / "textbook"
STATED = tomllib.loads((FOLDER / "cases.toml").read_text("utf-8"))["case"]
CASES = {case["id"]: case for case in STATED if case["status"] == "optimal"}
RANGES = tomllib.loads((FOLDER / "ranges.toml").read_text("utf-8"))["case"]
INF = math.inf

NONE_LEFT = {
    "lower": {Claim.INFEASIBLE, Claim.INFEASIBLE_OR_UNBOUNDED},
    "cost": {Claim.UNBOUNDED, Claim.INFEASIBLE_OR_UNBOUNDED},
}
"""How a solver may say that a moved side leaves no plan, a moved cost no optimum."""
NONE_LEFT["upper"] = NONE_LEFT["lower"]

Number = Fraction | float
"""A fraction, or an infinity."""


@dataclass(frozen=True)
class Piece:
    """One range of one number, or one of the two that meet at it."""

    line: int
    """The row, or ``m`` plus the column."""
    field: str
    """Which number of that line: "lower", "upper" or "cost"."""
    number: Fraction
    """The number as it stands."""
    direction: int
    """1 for the part of the range above the number, -1 for the part below."""
    end: Number | None
    """Where the range ends in that direction; None where it is not stated."""
    rate: float
    """Change of the optimal objective per unit increase of the number."""

    @property
    def distance(self) -> float:
        """From the number to the end."""
        return float(self.direction * (self.end - self.number))


def number(text: str) -> Number:
    """The number that a text of the two files stands for."""
    return float(text) if "inf" in text else Fraction(text)


@cache
def model_of(file: str) -> LinearProgram:
    return read_model(FOLDER / file).model


def facts_of(case):
    """Where objective, plan and prices of a case stand: here, or in the other file."""
    return CASES.get(case["id"], case)


def stated_interval(case, name, part):
    """Least and greatest "x" or "y" of a line over all optima, as stated."""
    interval = case.get(f"{part}_interval", {}).get(name)
    return [number(text) for text in interval or [case[part].get(name, "0")] * 2]


def field_of_side(lp, row):
    """The field that a right-hand side stands in; both of an equality are the same."""
    return "upper" if math.isfinite(lp.row_upper[row]) else "lower"


def stated_number(lp, line, field):
    if field == "cost":
        name, index = "c", line - lp.m
    else:
        name, index = ("row_" + field, line) if line < lp.m else (field, line - lp.m)
    value = float(getattr(lp, name)[index])
    return exact_value(value, lp.odd.get(name, {}).get(index))


def pieces_of(case):
    """Both directions of every number whose range a case states."""
    lp, facts, found = model_of(case["file"]), facts_of(case), []
    for kind, part, names in (("rhs", "y", lp.rows), ("cost", "x", lp.columns)):
        simple = case.get("rhs" if kind == "rhs" else "costs", {})
        for name, (low, high) in simple.items():
            rates = [facts[part].get(name, "0")] * 2
            found += _two(lp, names.index(name), kind, (low, high), rates)
        for name, both in case.get(f"{kind}_pieces", {}).items():
            ends = both.get("left", [None])[0], both.get("right", [None])[-1]
            rates = both["left_rate"], both["right_rate"]
            found += _two(lp, names.index(name), kind, ends, rates)
    return found


def _two(lp, index, kind, ends, rates):
    field = "cost" if kind == "cost" else field_of_side(lp, index)
    line = index if kind == "rhs" else lp.m + index
    at = stated_number(lp, line, field)
    return [
        Piece(line, field, at, way, None if end is None else number(end), float(number(rate)))
        for way, end, rate in zip((-1, 1), ends, rates, strict=True)
    ]


def moved(lp, line, field, change):
    """The model with one number moved; None where that puts a lower end above an upper.

    Both ends of an equality row or of a fixed column move together. Numbers are doubles here.
    """
    if field == "cost":
        fields, index, together = ["c"], line - lp.m, True
    elif line < lp.m:
        fields, index, together = ["row_lower", "row_upper"], line, lp.is_equality[line]
    else:
        index = line - lp.m
        fields, together = ["lower", "upper"], lp.is_fixed[index]
    if not together:
        fields = [name for name in fields if name.endswith(field)]
    arrays = {name: getattr(lp, name).copy() for name in fields}
    for array in arrays.values():
        array[index] += change
    low, high = ("row_lower", "row_upper") if line < lp.m else ("lower", "upper")
    if (arrays.get(low, getattr(lp, low)) > arrays.get(high, getattr(lp, high))).any():
        return None
    return replace(lp, **arrays, odd=frozen_odd({}))


def objective_of(lp, field):
    """The optimal objective, or None where the moved number leaves none."""
    if lp is None:
        return None
    result = solve(lp)
    if isinstance(result, Solved):
        return float(lp.c @ result.answer.x) + lp.offset
    assert result.run.claim in NONE_LEFT[field]
    return None


def assert_holds(lp, objective, piece):
    """Solve again: the objective is linear up to the end, and there is no more beyond it."""
    distance = piece.distance
    reach = distance if distance < INF else 100 * max(1, abs(float(piece.number)))
    # Rounding must not put the far end itself out of reach.
    for part in (0.5, 1 - 1e-9) if distance else ():
        step = piece.direction * reach * part
        again = objective_of(moved(lp, piece.line, piece.field, step), piece.field)
        assert again == pytest.approx(objective + piece.rate * step, rel=1e-8, abs=1e-8)
    if distance < INF:
        step = piece.direction * (distance + 0.1 * max(1, distance))
        beyond = objective_of(moved(lp, piece.line, piece.field, step), piece.field)
        if not math.isfinite(piece.rate):
            assert beyond is None
        elif beyond is not None:
            # Convex in a side when minimizing, concave in a cost.
            bend = lp.sense.sign * (beyond - objective - piece.rate * step)
            assert (-bend if piece.field == "cost" else bend) > 1e-6


def cases():
    return [pytest.param(case, id=case["id"]) for case in RANGES]


@pytest.mark.parametrize("case", cases())
def test_every_range_includes_its_number(case):
    for piece in pieces_of(case):
        if piece.end is not None:
            assert piece.direction * (piece.end - piece.number) >= 0
            assert math.isinf(piece.rate) == (piece.end == piece.number)
    for both in [*case.get("rhs_pieces", {}).values(), *case.get("cost_pieces", {}).values()]:
        if "left" in both and "right" in both:
            assert both["left"][1] == both["right"][0]


@pytest.mark.parametrize("case", cases())
def test_rates_of_pieces_are_the_ends_of_the_intervals(case):
    facts, sign = facts_of(case), model_of(case["file"]).sense.sign
    for kind, part in (("rhs", "y"), ("cost", "x")):
        interval = facts.get(f"{part}_interval", {})
        assert not set(interval) & set(case.get("rhs" if kind == "rhs" else "costs", {}))
        for name, both in case.get(f"{kind}_pieces", {}).items():
            if facts is case and part not in case:
                continue
            # The optimum is convex in a side when minimizing, and concave in a cost.
            rises = (sign > 0) == (kind == "rhs")
            ends = [number(both[rate]) for rate in ("left_rate", "right_rate")]
            assert stated_interval(facts, name, part) == (ends if rises else ends[::-1])


def pieces_with_bases():
    """The two pieces of a number, and the ranges of all optimal bases, as parameters."""
    for case in RANGES:
        lp, pieces = model_of(case["file"]), pieces_of(case)
        for kind, names, start in (("rhs", lp.rows, 0), ("costs", lp.columns, lp.m)):
            for name, listed in case.get(f"basis_{kind}", {}).items():
                both = [piece for piece in pieces if piece.line == start + names.index(name)]
                ends = [[number(text) for text in pair] for pair in listed]
                yield pytest.param(*both, ends, id=f"{case['id']} {name}")


@pytest.mark.parametrize(("left", "right", "bases"), [*pieces_with_bases()])
def test_ranges_of_bases_lie_within_the_ranges(left, right, bases):
    assert left.end <= min(low for low, _ in bases)
    assert right.end == max(high for _, high in bases)
    if left.rate != right.rate:
        assert all(high <= left.number or low >= left.number for low, high in bases)


@pytest.mark.parametrize("case", cases())
def test_ends_by_solving_again(case):
    lp, facts = model_of(case["file"]), facts_of(case)
    objective = float(number(facts["objective"]))
    assert objective_of(lp, "cost") == pytest.approx(objective, rel=1e-9)
    for piece in pieces_of(case):
        if piece.end is not None:
            assert_holds(lp, objective, piece)


def test_both_sides_of_afiro_add_up_to_its_optimum():
    """In fractions, so that the names of the collection are on the right rows and columns."""
    case = next(case for case in RANGES if case["id"] == "B11")
    lp = model_of(case["file"])
    primal = dual = Fraction(0)
    for j, name in enumerate(lp.columns):
        primal += stated_number(lp, lp.m + j, "cost") * Fraction(case["x"].get(name, "0"))
    for i, name in enumerate(lp.rows):
        side = stated_number(lp, i, field_of_side(lp, i))
        dual += side * Fraction(case["y"].get(name, "0"))
    assert primal == dual == Fraction(case["objective"]) == Fraction(-406659, 875)
    assert set(case["y"]) | set(case["y_interval"]) == set(lp.rows)
    assert set(case["x"]) | set(case["x_interval"]) == set(lp.columns)
    assert not np.any([lp.row_upper[lp.rows.index(name)] for name in case["y_interval"]])


def test_there_are_ranges_of_every_textbook_case():
    assert {f"A{k}" for k in range(1, 16)} <= {case["id"].rstrip("ab") for case in RANGES}
    assert sum(len(pieces_of(case)) for case in RANGES) == 422
