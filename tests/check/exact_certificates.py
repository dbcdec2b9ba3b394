"""Certificates judged in fractions: numbers of the file, and doubles as they are."""

from __future__ import annotations

import math
from dataclasses import replace
from fractions import Fraction

import numpy as np

from lpview.decimals import exact_value


def exact_lines(lp):
    """Rows as ``(coefficients, lower, upper)``, exactly."""
    odd = lp.odd.get("A", {})
    rows = []
    for i in range(lp.m):
        places = range(lp.A.indptr[i], lp.A.indptr[i + 1])
        rows.append({lp.A.indices[k]: exact_value(lp.A.data[k], odd.get(k)) for k in places})
    return rows


def ends(lp, field):
    odd = lp.odd.get(field, {})
    values = getattr(lp, field).tolist()
    return [v if math.isinf(v) else exact_value(v, odd.get(k)) for k, v in enumerate(values)]


def is_farkas(lp, y, tolerance):
    """Whether ``y`` contradicts feasibility, in fractions.

    A multiplier of a column without the bound that it names must be within
    ``tolerance`` of the terms that it is the sum of; it is then taken for 0.
    """
    size = max(map(abs, y), default=0)
    if not size:
        return False
    y = [Fraction(value) / Fraction(size) for value in y]
    terms = [[] for _ in range(lp.n)]
    for price, row in zip(y, exact_lines(lp), strict=True):
        for j, a in row.items():
            terms[j].append(-a * price)
    prices = [(price, abs(price)) for price in y]
    prices += [(sum(part), max(map(abs, part), default=0)) for part in terms]
    lows = [*ends(lp, "row_lower"), *ends(lp, "lower")]
    highs = [*ends(lp, "row_upper"), *ends(lp, "upper")]
    total = Fraction(0)
    for (price, largest), low, high in zip(prices, lows, highs, strict=True):
        end = low if price > 0 else high
        if price and math.isinf(end):
            if abs(price) > tolerance * largest:
                return False
        elif price:
            total += price * end
    return total > tolerance


def plan_fault(lp, x):
    """Largest scaled violation of a plan, exactly."""
    x = [Fraction(value) for value in x]
    values = [[a * x[j] for j, a in row.items()] for row in exact_lines(lp)]
    values += [[value] for value in x]
    lows = [*ends(lp, "row_lower"), *ends(lp, "lower")]
    highs = [*ends(lp, "row_upper"), *ends(lp, "upper")]
    worst = Fraction(0)
    for parts, low, high in zip(values, lows, highs, strict=True):
        value = sum(parts)
        end = min(max(value, low), high)
        worst = max(worst, abs(value - end) / max(1, abs(end), *map(abs, parts)))
    return worst


def fault_along(lp, d):
    """Largest scaled speed at which a line leaves its ends, exactly."""
    level = {"row_lower": lp.row_lower, "row_upper": lp.row_upper}
    level |= {"lower": lp.lower, "upper": lp.upper}
    still = {part: np.where(np.isfinite(value), 0.0, value) for part, value in level.items()}
    keep = {part: odd for part, odd in lp.odd.items() if part in ("A", "c")}
    return plan_fault(replace(lp, **still, odd=keep), d)
