"""What the tests of value curves share."""

from __future__ import annotations

from functools import cache
from pathlib import Path

from lpview.blocks import read_model
from lpview.prices.curve import Curve
from lpview.prices.number import Number, Part, bound_of, side_of
from lpview.prices.value_curve import asking, value_curve
from lpview.run import Watch
from lpview.solver import solve, warm_model
from tests.check.helpers import examined

DATA = Path(__file__).parents[1] / "data"


@cache
def answer(file):
    return examined(read_model(DATA / file).model)


def number_of(found, row=None, cost=None, lower=None, upper=None):
    lp = found.head.model
    if row is not None:
        return side_of(found, lp.rows.index(row))
    if cost is not None:
        return Number(lp.m + lp.columns.index(cost), Part.COST)
    return bound_of(lp, lp.columns.index(lower or upper), upper is not None)


def curve_of(found, number, span=None, ask=None, **more):
    ask = ask or asking(found, solve, Watch())
    return value_curve(found, number, ask, warm_model, span, **more)


def curve(file, span=None, **names):
    found = answer(file)
    made = curve_of(found, number_of(found, **names), span)
    assert isinstance(made, Curve)
    return made
