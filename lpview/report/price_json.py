"""Prices as JSON and CSV; README.md documents every field."""

from __future__ import annotations

import csv
import io
from typing import Any

from lpview.decimals import number_text
from lpview.priced import Priced
from lpview.prices import LinePrices, Move, Moves, NoPrices, ZeroSlack
from lpview.report.json import plain
from lpview.report.prices import is_lower

Fields = dict[str, Any]

WITHOUT_ANSWER: Fields = {
    "prices": [],
    "plans": [],
    "price_dimension": None,
    "plan_dimension": None,
    "prices_examined": None,
}
"""The fields of an examination without an answer."""


def fields(priced: Priced | NoPrices | None) -> Fields:
    """What is added to the object of an examination; None for one without an answer."""
    if priced is None:
        return WITHOUT_ANSWER
    if isinstance(priced, NoPrices):
        return {**WITHOUT_ANSWER, "prices_examined": _examined(0, 0, priced.reason)}
    lp = priced.found.head.model
    reason = None if priced.stopped is None else priced.stopped.value
    return {
        "prices": [entry for row in range(lp.m) for entry in _row(priced, row)],
        "plans": [_column(priced, lp.m + column) for column in range(lp.n)],
        "price_dimension": priced.price_dimension,
        "plan_dimension": priced.plan_dimension,
        "prices_examined": _examined(len(priced.lines), priced.asked, reason),
    }


def _examined(lines: int, asked: int, reason: str | None) -> Fields:
    return {"lines": lines, "of": asked, "reason": reason}


def _row(priced: Priced, row: int) -> list[Fields]:
    """The active side, else the nearest; then the other one of a two-sided row."""
    found, known = priced.found, priced.lines.get(row)
    lp, dual_value = found.head.model, float(found.answer.y[row])
    first = is_lower(found, row)
    has_lower, has_upper = lp.row_lower[row] > -float("inf"), lp.row_upper[row] < float("inf")
    if not found.marks.paired[row]:
        return [_side(lp.rows[row], "both", dual_value, known, True)]
    if not (has_lower or has_upper):
        return [_side(lp.rows[row], None, dual_value, known, True)]
    entries = [_side(lp.rows[row], _word(first), dual_value, known, True)]
    if has_lower and has_upper:
        entries.append(_side(lp.rows[row], _word(not first), 0.0, known, False))
    return entries


def _word(lower: bool) -> str:
    return "lower" if lower else "upper"


def _side(
    name: str, side: str | None, dual_value: float, known: LinePrices | None, is_active: bool
) -> Fields:
    """One side of a row; a side that is not active has the only price 0."""
    moves = _moves(known, side)
    least, greatest = _interval(known) if is_active or known is None else (0.0, 0.0)
    return {
        "row": name,
        "side": side,
        "dual_value": plain(dual_value),
        "least_price": least,
        "greatest_price": greatest,
        "rate_up": None if moves is None else plain(moves.up.rate),
        "rate_down": None if moves is None else plain(moves.down.rate),
        "up": None if moves is None else _move(moves.up),
        "down": None if moves is None else _move(moves.down),
        "zero_slack": _zero(known, side),
    }


def _interval(known: LinePrices | None) -> tuple[float | str | None, float | str | None]:
    if known is None or not known.price_found:
        return None, None
    return plain(known.least), plain(known.greatest)


def _moves(known: LinePrices | None, side: str | None) -> Moves | None:
    if known is None or side is None:
        return None
    return known.upper if side == "upper" else known.lower


def _move(move: Move) -> Fields:
    return {
        "rate": plain(move.rate),
        "distance": plain(move.distance),
        "then": move.then.value,
    }


def _both(moves: Moves | None) -> Fields | None:
    return None if moves is None else {"up": _move(moves.up), "down": _move(moves.down)}


def _zero(known: LinePrices | None, side: str | None) -> str | None:
    if known is None:
        return None
    zero: ZeroSlack | None = known.upper_zero if side == "upper" else known.lower_zero
    return None if zero is None else zero.value


def _column(priced: Priced, line: int) -> Fields:
    found, known = priced.found, priced.lines.get(line)
    column = line - found.head.model.m
    least, greatest = _interval(known)
    return {
        "column": found.head.model.columns[column],
        "value": plain(float(found.answer.x[column])),
        "least": plain(known.least_value) if known and known.value_found else None,
        "greatest": plain(known.greatest_value) if known and known.value_found else None,
        "reduced_cost": plain(float(found.answer.z[column])),
        "least_reduced_cost": least,
        "greatest_reduced_cost": greatest,
        "cost": None if known is None else _both(known.cost),
        "lower_bound": None if known is None else _both(known.lower),
        "upper_bound": None if known is None else _both(known.upper),
        "zero_slack": _zero(known, _word(is_lower(found, line))),
    }


HEADER = (
    *("row", "side", "dual_value", "least_price", "greatest_price", "rate_up", "rate_down"),
    *("up_distance", "up_then", "down_distance", "down_then", "zero_slack"),
)
"""Names of the fields in CSV: those of JSON, without the rates a second time."""


def as_csv(priced: Priced) -> str:
    """One line per side of a row; empty where JSON has null."""
    text = io.StringIO()
    lines = csv.writer(text, lineterminator="\n")
    lines.writerow(HEADER)
    for row in range(priced.found.head.model.m):
        lines.writerows(_flat(entry) for entry in _row(priced, row))
    return text.getvalue()


def _flat(entry: Fields) -> list[str]:
    flat = {**entry}
    for way in ("up", "down"):
        move = entry[way] or {}
        flat |= {f"{way}_distance": move.get("distance"), f"{way}_then": move.get("then")}
    return [_cell(flat[name]) for name in HEADER]


def _cell(content: float | str | None) -> str:
    if content is None:
        return ""
    return content if isinstance(content, str) else number_text(content)
