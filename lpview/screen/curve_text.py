"""The page of a value curve as text: which numbers of a line have one, and its lines."""

from __future__ import annotations

import math
from collections.abc import Sequence

from lpview.model import LinearProgram
from lpview.outcomes import Optimal
from lpview.prices.curve import Curve
from lpview.prices.number import Number, Part, bound_of, side_of
from lpview.report.curve import BEYOND, curve_plot, described, marks_at, part_of, rate_text, shape
from lpview.report.names import line_name
from lpview.report.numbers import fitted_number, number
from lpview.report.plot import BRAILLE, PLAIN

LOWEST_PLOT, HIGHEST_PLOT = 7, 24
"""Lines of the plot at least and at most."""

WIDEST_PLOT = 120
"""Cells of the plot at most."""

CELLS = (len("right-hand side"), 11, 11, 11)
"""Cells of the columns of the list: place, objective, rate below, rate above."""


def numbers_of(found: Optimal, line: int) -> tuple[Number, ...]:
    """The numbers of a line that have a value curve, the one that is shown first in front.

    A row's active side, else its nearest, then the other one; a column's cost, then its
    bounds. A row without sides has none.
    """
    lp = found.head.model
    if line < lp.m:
        side = side_of(found, line)
        if side is None or side.part is Part.BOTH:
            return () if side is None else (side,)
        other = Number(line, Part.UPPER if side.part is Part.LOWER else Part.LOWER)
        return (side, other) if math.isfinite(other.of(lp)) else (side,)
    bounds = [bound_of(lp, line - lp.m, is_upper) for is_upper in (False, True)]
    there = [bound for bound in bounds if math.isfinite(bound.of(lp))]
    return tuple(dict.fromkeys([Number(line, Part.COST), *there]))


def named(lp: LinearProgram, moving: Number) -> str:
    """``row heat, upper side``: a number before its curve is known."""
    end = "side" if moving.line < lp.m else "bound"
    words = {
        Part.COST: "cost",
        Part.BOTH: "right-hand side" if moving.line < lp.m else "fixed value",
        Part.LOWER: f"lower {end}",
        Part.UPPER: f"upper {end}",
    }
    return f"{line_name(lp, moving.line)}, {words[moving.part]}"


def curve_lines(curve: Curve, size: tuple[int, int], plain: bool) -> list[str]:
    """The page in so many cells: what it is, the plot, and its breakpoints in a list."""
    marks = PLAIN if plain else BRAILLE
    heads = [
        f"value curve of {described(curve)}",
        shape(curve),
        f"objective over the {part_of(curve)}; {marks.point} breakpoint, {marks.now} as it "
        f"stands: {number(curve.now)}, {number(curve.objective)}",
        *_cautions(curve),
    ]
    listed = _listed(curve)
    if not curve.pieces:
        return [*heads, "", *listed]
    width, height = size
    high = min(max(height - len(heads) - len(listed), LOWEST_PLOT), HIGHEST_PLOT)
    return [*heads, *curve_plot(curve, (min(width - 2, WIDEST_PLOT), high), plain), *listed]


def _cautions(curve: Curve) -> list[str]:
    cautions = ["stopped before the curve was complete"] if curve.stopped else []
    if not curve.is_joined:
        cautions.append("pieces miss the answers solved for at their ends: do not rely on it")
    return cautions


def _listed(curve: Curve) -> list[str]:
    """Ends, breakpoints and the number as it stands, with the rates around each."""
    heads = (part_of(curve), "objective", "rate below", "rate above")
    lines = [_columns(heads)]
    for place in curve.places:
        below, above = curve.rates(place)
        objective = curve.at(place)
        cells = (
            fitted_number(place, CELLS[0]),
            "" if objective is None else fitted_number(objective, CELLS[1]),
            rate_text(None, curve.below) if below is None else fitted_number(below, CELLS[2]),
            rate_text(None, curve.above) if above is None else fitted_number(above, CELLS[3]),
        )
        lines.append(f"{_columns(cells)}  {marks_at(curve, place)}".rstrip())
    low, high = (number(end) for end in curve.ends)
    return [*lines, f"below {low}: {BEYOND[curve.below]}; above {high}: {BEYOND[curve.above]}"]


def _columns(texts: Sequence[str]) -> str:
    return "  ".join(f"{text:>{cells}}" for text, cells in zip(texts, CELLS, strict=True))
