"""A value curve as a document with a plot."""

from __future__ import annotations

import math
from collections.abc import Mapping

from lpview.model import LinearProgram
from lpview.outcomes import Head, Optimal
from lpview.prices.curve import Beyond, Curve, NoCurve, is_same
from lpview.prices.number import Number, Part
from lpview.report.check import CAUTION
from lpview.report.document import Block, Command, Document, Facts, Sentence, Table
from lpview.report.heads import reading_sentence, title
from lpview.report.names import line_name
from lpview.report.numbers import count, number, residual
from lpview.report.plot import BRAILLE, PLAIN, Point, plot
from lpview.report.units import amount, units_of

PLOT = (78, 16)
"""Width and height of the plot of the curve, in cells."""

LINE_PLOT = (78, 10)
"""The same for a recorded line."""

NOT_UNIQUE, NOT_FOUND = "not unique", "not found"

BEYOND = {
    Beyond.GOES_ON: "the curve goes on",
    Beyond.FOR_EVER: "the same rate, however far",
    Beyond.INFEASIBLE: "no plan is left",
    Beyond.UNBOUNDED: "the objective has no limit",
    Beyond.STOPPED: "not looked at: stopped before",
    Beyond.NOT_FOUND: "it could not be found out how the curve goes on",
}
"""What lies beyond an end of the curve."""

RATE_BEYOND = {Beyond.INFEASIBLE: "no plan", Beyond.UNBOUNDED: "no limit"}
"""What stands for a rate where there is no optimum."""


Intervals = Mapping[float, tuple[float, float]]
"""Least and greatest of something, by place."""


def curve_report(found: Optimal, curve: Curve | NoCurve, table: bool, plain: bool) -> Document:
    """The curve in words, numbers and a picture.

    ``table`` asks for the places along the curve too (a recorded line does anyway);
    ``plain`` draws with ASCII characters.
    """
    source, command = title(found.head), found.head.request.command
    closing = Command("reproduce", command), Sentence(CAUTION)
    if isinstance(curve, NoCurve):
        return (
            Sentence(f"{source}: no value curve", True),
            *reading_sentence(found.head),
            Sentence(curve.reason),
            *closing,
        )
    tables = (_places(curve),) if table or curve.recorded else ()
    return (
        Sentence(f"{source}: value curve of {described(curve)}", strong=True),
        *reading_sentence(found.head),
        Sentence(shape(curve)),
        Facts(_facts(curve, found.head)),
        *((_pieces(curve),) if curve.pieces else ()),
        *_plots(curve, plain),
        *tables,
        *_cautions(curve),
        *closing,
    )


def described(curve: Curve) -> str:
    """What moves: ``the right-hand side of row heat``."""
    return f"the {part_of(curve)} of {line_name(curve.lp, curve.number.line)}"


def part_of(curve: Curve) -> str:
    """``right-hand side``, ``upper side``, ``lower bound``, ``fixed value`` or ``cost``."""
    lp, moving = curve.lp, curve.number
    if moving.part is Part.COST:
        return "cost"
    if moving.line >= lp.m:
        return "fixed value" if moving.part is Part.BOTH else f"{moving.part.value} bound"
    ends = [Number(moving.line, part).of(lp) for part in (Part.LOWER, Part.UPPER)]
    one_sided = moving.part is Part.BOTH or not all(map(math.isfinite, ends))
    return "right-hand side" if one_sided else f"{moving.part.value} side"


def shape(curve: Curve) -> str:
    """Convex or concave, whether that is what theory demands, and how many pieces."""
    word = "convex" if curve.should_be_convex else "concave"
    found, breaks = count(len(curve.pieces), "piece"), len(curve.breakpoints)
    if not curve.pieces and curve.below.is_end and curve.above.is_end:
        return "a single point: any move of the number leaves no optimum"
    if not curve.pieces:
        return "nothing of the curve was found beyond the number as it stands"
    if not curve.bends_rightly:
        return f"NOT {word}, as theory demands, beyond rounding: {found}; do not rely on it"
    if not breaks:
        return f"a straight line ({word} is what theory demands): {found}"
    return f"{word}, as theory demands: {found}, {count(breaks, 'breakpoint')}"


def _facts(curve: Curve, head: Head) -> tuple[tuple[str, str], ...]:
    low, high = map(number, curve.ends)
    units = units_of(head, curve.number.line)
    unit = units.price if curve.number.part is Part.COST else units.own
    stands = amount(curve.now, unit) if math.isfinite(curve.now) else "no limit"
    objective = amount(curve.objective, units.objective)
    return (
        ("as it stands", f"{stands}, optimal objective {objective}"),
        (f"below {low}", BEYOND[curve.below]),
        (f"above {high}", BEYOND[curve.above]),
        ("solved again", _solved_again(curve)),
    )


def _solved_again(curve: Curve) -> str:
    gaps, largest = len(curve.joints), max(curve.joints, default=0.0)
    text = (
        f"the model at {count(gaps, 'end')} of pieces, each answer checked; objective off by "
        f"{residual(largest)} scaled at most"
    )
    if not gaps:
        text = "no end of a piece, because none was reached"
    if not curve.is_joined:
        text += ": MORE THAN ROUNDING; do not rely on the curve"
    if curve.unsolved:
        text += f"; {count(curve.unsolved, 'breakpoint')} found as where two pieces meet"
    return text


def _pieces(curve: Curve) -> Table:
    rows = tuple(
        (number(p.start), number(p.end), number(p.rate), number(p.at(p.start)), number(p.at(p.end)))
        for p in curve.pieces
    )
    header = ("from", "to", "rate", "objective at from", "objective at to")
    return Table("pieces, from below to above", header, rows, (True,) * 5)


def marks_at(curve: Curve, place: float) -> str:
    """What a place is: ``breakpoint``, ``as it stands``, both, or nothing in particular."""
    words = ["breakpoint"] if any(is_same(place, p.at) for p in curve.breakpoints) else []
    return ", ".join([*words, *["as it stands"] * is_same(place, curve.now)])


def rate_text(rate: float | None, beyond: Beyond) -> str:
    """A rate, or why there is none."""
    return RATE_BEYOND.get(beyond, "") if rate is None else number(rate)


def _places(curve: Curve) -> Table:
    header = [part_of(curve), "objective", "rate below", "rate above", ""]
    for line in curve.recorded:
        header += [line_name(curve.lp, line), price_word(curve.lp, line)]
    rows = tuple((*_place(curve, place), *_recorded(curve, place)) for place in curve.places)
    numeric = (True, True, True, True, False) + (True, True) * len(curve.recorded)
    return Table("along the curve", tuple(header), rows, numeric)


def price_word(lp: LinearProgram, line: int) -> str:
    """``dual value`` or ``reduced cost``."""
    return "dual value" if line < lp.m else "reduced cost"


def _place(curve: Curve, place: float) -> tuple[str, ...]:
    below, above = curve.rates(place)
    objective = curve.at(place)
    return (
        number(place),
        "" if objective is None else number(objective),
        rate_text(below, curve.below),
        rate_text(above, curve.above),
        marks_at(curve, place),
    )


def _recorded(curve: Curve, place: float) -> list[str]:
    cells: list[str] = []
    for by_place in curve.recorded.values():
        seen = by_place.get(place)
        if seen is None:
            cells += [NOT_FOUND, NOT_FOUND]
            continue
        cells += [
            number(least) if least == greatest else NOT_UNIQUE
            for least, greatest in (seen.value, seen.price)
        ]
    return cells


def _plots(curve: Curve, plain: bool) -> list[Block]:
    """The curve, then the value and the price of each recorded line."""
    if not curve.pieces:
        return []
    marks = PLAIN if plain else BRAILLE
    title = (
        f"objective over the {part_of(curve)}; {marks.point} breakpoint, {marks.now} as it stands"
    )
    blocks: list[Block] = [Sentence(title), *map(Sentence, curve_plot(curve, PLOT, plain))]
    of_sides = curve.number.part is not Part.COST
    for line, by_place in curve.recorded.items():
        name = line_name(curve.lp, line)
        seen = {at: one for at, one in by_place.items() if one is not None}
        values = {at: one.value for at, one in seen.items()}
        prices = {at: one.price for at, one in seen.items()}
        blocks += _line_plot(curve, f"value of {name}", values, not of_sides, plain)
        word = price_word(curve.lp, line)
        blocks += _line_plot(curve, f"{word} of {name}", prices, of_sides, plain)
    return blocks


def _line_plot(
    curve: Curve, what: str, ends: Intervals, is_steady: bool, plain: bool
) -> list[Block]:
    """What was recorded of one line; ``is_steady`` where it is constant on each piece."""
    only = {end for pair in ends.values() for end in pair}
    if len(only) == 1:
        return [Sentence(""), Sentence(f"{what}: {number(only.pop())} at every place")]
    drawn = plot(_strokes(curve, ends, is_steady), [], None, LINE_PLOT, plain)
    title = f"{what} over the {part_of(curve)}"
    return [Sentence(""), Sentence(title), *map(Sentence, drawn)] if drawn else []


def curve_plot(curve: Curve, size: tuple[int, int], plain: bool = False) -> list[str]:
    """The curve drawn in ``size`` cells, with its breakpoints and the number as it stands."""
    corners = [(p.at, p.objective) for p in curve.breakpoints]
    first, last = curve.pieces[0], curve.pieces[-1]
    ends = [(first.start, first.at(first.start)), (last.end, last.at(last.end))]
    height = curve.at(curve.now)
    now = None if height is None else (curve.now, height)
    words = BEYOND[curve.below], BEYOND[curve.above]
    return plot([[ends[0], *corners, ends[1]]], corners, now, size, plain, words)


def _strokes(curve: Curve, ends: Intervals, is_steady: bool) -> list[list[Point]]:
    """Lines from place to place on each piece, and upright ones where there is a choice."""
    strokes: list[list[Point]] = []
    for at, pair in ends.items():
        strokes.append([(at, height) for height in pair if math.isfinite(height)])
    for piece in curve.pieces:
        known = [
            (at, least)
            for at, (least, greatest) in ends.items()
            if piece.start <= at <= piece.end and least == greatest and math.isfinite(least)
        ]
        inside = [height for at, height in known if piece.start < at < piece.end]
        if is_steady and inside:
            known = [(piece.start, inside[0]), (piece.end, inside[0])]
        strokes.append(known)
    return [stroke for stroke in strokes if stroke]


def _cautions(curve: Curve) -> list[Block]:
    cautions: list[Block] = []
    seen = [one for by_place in curve.recorded.values() for one in by_place.values()]
    if any(one is not None and not one.is_unique for one in seen):
        cautions.append(
            Sentence(
                f"{NOT_UNIQUE}: optimal answers differ there, as prices do at breakpoints; "
                "csv and json have the least and the greatest"
            )
        )
    if curve.recorded and None in seen:
        cautions.append(Sentence(f"{NOT_FOUND}: no answer there passed its check"))
    if curve.stopped:
        cautions.append(Sentence("stopped before the curve was complete"))
    return cautions
