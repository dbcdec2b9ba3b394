"""Residuals of a plan in fractions, as written and within its rounding.

Shares nothing with `lpview.planned` but the model, and goes about it in another way: by
intervals of the numbers instead of radii around residuals.
"""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction

import numpy as np

from lpview.decimals import exact_value

ZERO = Fraction(0)


@dataclass(frozen=True)
class Span:
    """A number and the interval that it stands for."""

    value: Fraction
    low: Fraction
    high: Fraction

    def __add__(self, other):
        return Span(self.value + other.value, self.low + other.low, self.high + other.high)

    def times(self, a):
        ends = sorted((self.low * a, self.high * a))
        return Span(self.value * a, *ends)

    @property
    def nearest_zero(self):
        return max(self.low, -self.high, ZERO)


NOTHING = Span(ZERO, ZERO, ZERO)


def span(text):
    """What a number of a plan's file stands for; fractions are exact."""
    value = Fraction(text)
    if "/" in text:
        return Span(value, value, value)
    half = Fraction(10) ** Decimal(text).as_tuple().exponent / 2
    return Span(value, value - half, value + half)


@dataclass(frozen=True)
class Exact:
    """A model's numbers; an end that is missing is None."""

    sign: int
    offset: Fraction
    c: list
    rows: list
    row_ends: list
    column_ends: list


def exact_model(lp):
    def numbers(field):
        odd = lp.odd.get(field, {})
        values = getattr(lp, field).tolist()
        return [
            exact_value(v, odd.get(k)) if np.isfinite(v) else None for k, v in enumerate(values)
        ]

    odd = lp.odd.get("A", {})
    start = lp.A.indptr.tolist()
    rows = [
        {
            int(lp.A.indices[k]): exact_value(float(lp.A.data[k]), odd.get(k))
            for k in range(start[i], start[i + 1])
        }
        for i in range(lp.m)
    ]
    return Exact(
        1 if lp.sense.value == "minimize" else -1,
        exact_value(lp.offset, lp.odd.get("offset", {}).get(0)),
        numbers("c"),
        rows,
        list(zip(numbers("row_lower"), numbers("row_upper"), strict=True)),
        list(zip(numbers("lower"), numbers("upper"), strict=True)),
    )


def residuals(lp, x, y=None, z=None):
    """``(as written, within, term)`` of every line, by condition, for texts by index."""
    model = exact_model(lp)
    plan = [span(text) for text in x]
    rows, largest = [], []
    for terms in model.rows:
        parts = [plan[j].times(a) for j, a in terms.items()]
        rows.append(sum(parts, NOTHING))
        largest.append(max((abs(part.value) for part in parts), default=ZERO))
    values = [*rows, *plan]
    largest += [abs(part.value) for part in plan]
    ends = [*model.row_ends, *model.column_ends]
    found = {"primal feasibility": list(map(_violation, values, largest, ends))}
    primal = Span(model.offset, model.offset, model.offset)
    for cost, part in zip(model.c, plan, strict=True):
        primal += part.times(cost)
    if y is None:
        return found, primal
    found |= _priced(model, y, z, values, ends, primal)
    return found, primal


def _violation(value, largest, ends):
    low, high = ends
    side = low if low is not None and value.value < low else high
    written = within = ZERO
    if low is not None and value.value < low:
        written, within = low - value.value, max(ZERO, low - value.high)
    elif high is not None and value.value > high:
        written, within = value.value - high, max(ZERO, value.low - high)
    term = largest if not written else max(largest, abs(side))
    return written, within, term


def _priced(model, y, z, values, ends, primal):
    m, found = len(model.rows), {}
    duals = [span(text) for text in y]
    columns = [[Span(cost, cost, cost)] for cost in model.c]
    for dual, terms in zip(duals, model.rows, strict=True):
        for j, a in terms.items():
            columns[j].append(dual.times(-a))
    prices = duals + [sum(parts, NOTHING) for parts in columns]
    largest = [abs(dual.value) for dual in duals]
    largest += [max(abs(part.value) for part in parts) for parts in columns]
    named = [
        _named(model.sign, price.value, pair) for price, pair in zip(prices, ends, strict=True)
    ]
    found["dual feasibility"] = [
        (abs(p.value), p.nearest_zero, t) if end is None and p.value else (ZERO, ZERO, t)
        for p, end, t in zip(prices, named, largest, strict=True)
    ]
    if z is not None:
        reported = [span(text).times(Fraction(-1)) for text in z]
        off = [a + b for a, b in zip(prices[m:], reported, strict=True)]
        found["stationarity"] = [
            (abs(o.value), o.nearest_zero, t) for o, t in zip(off, largest[m:], strict=True)
        ]
    found["complementary slackness"] = [
        _product(p, end, v) for p, end, v in zip(prices, named, values, strict=True)
    ]
    found["duality gap"] = [_gap(model, duals, prices, ends, primal)]
    return found


def _named(sign, price, ends):
    return ends[0] if sign * price > 0 else ends[1]


def _product(price, end, value):
    if not price.value or end is None:
        return ZERO, ZERO, ZERO
    distance = Span(value.value - end, value.low - end, value.high - end)
    term = abs(price.value) * max(abs(value.value), abs(end))
    least = price.nearest_zero * distance.nearest_zero
    return abs(price.value * distance.value), least, term


def _gap(model, duals, prices, ends, primal):
    """The gap, and the least over an interval that surely holds it."""
    sign, m = model.sign, len(duals)

    def end_at(price, pair):  # the end that counts, 0 where there is none
        return _named(sign, price, pair) or ZERO

    # Either end will do for a price of 0; take the one a positive price has, minimizing.
    own = [
        end_at(price.value or Fraction(sign), pair)
        for price, pair in zip(prices, ends, strict=True)
    ]
    value = model.offset + sum(p.value * e for p, e in zip(prices, own, strict=True))
    low = high = value
    for i, (dual, terms) in enumerate(zip(duals, model.rows, strict=True)):
        rate = own[i] - sum(a * own[m + j] for j, a in terms.items())
        move = abs(rate) * (dual.high - dual.value)
        low, high = low - move, high + move
    for price, pair, end in zip(prices, ends, own, strict=True):
        for p in (price.low, price.high):
            more = p * end_at(p, pair) - p * end if p else ZERO
            low, high = low + min(more, 0), high + max(more, 0)
    gap = Span(
        sign * (primal.value - value),
        min(sign * (primal.low - high), sign * (primal.high - low)),
        max(sign * (primal.low - high), sign * (primal.high - low)),
    )
    return abs(gap.value), gap.nearest_zero, max(abs(primal.value), abs(value))


def dual_objective(lp, y):
    """The dual objective of exact dual values."""
    model = exact_model(lp)
    prices = [*y, *model.c]
    m = len(y)
    for i, terms in enumerate(model.rows):
        for j, a in terms.items():
            prices[m + j] -= a * y[i]
    ends = [*model.row_ends, *model.column_ends]
    named = [
        (_named(model.sign, price, pair) or ZERO) for price, pair in zip(prices, ends, strict=True)
    ]
    return model.offset + sum(p * e for p, e in zip(prices, named, strict=True))
