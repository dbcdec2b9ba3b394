"""What is true of strictly feasible points and redundant sides, in exact fractions.

Shares nothing with the package but the fields of a `LinearProgram` without odd numbers.
Every question is an extreme of one line over a polyhedron (`tests/prices/simplex.py`), or
a rank.
"""

from __future__ import annotations

from fractions import Fraction
from math import inf

import numpy as np

from tests.prices import exact
from tests.prices.simplex import Region, rank


def _parts(lp):
    program = exact.program(lp)
    m = len(program.rows)
    return program, m


def always_tight(lp):
    """Inequality lines that have slack at an end in no feasible plan."""
    program, m = _parts(lp)
    region = Region(program.rows, program.ends[:m], program.ends[m:])
    found = np.zeros(len(program.ends), bool)
    for k, (low, high) in enumerate(program.ends):
        if low == high or (low == -inf and high == inf):
            continue
        line = program.lines[k]
        found[k] = region.greatest(line) == low or region.least(line) == high
    return found


def dependent_rows(lp):
    """Equality rows less their rank over the columns that are not fixed."""
    program, m = _parts(lp)
    loose = [j for j, (low, high) in enumerate(program.ends[m:]) if low != high]
    rows = [program.rows[i] for i in range(m) if program.ends[i][0] == program.ends[i][1]]
    return len(rows) - rank([[row[j] for j in loose] for row in rows])


def price_unbounded(lp):
    """Lines whose price has no limit over the optimal dual solutions."""
    return _endless(lp, exact.price_interval)


def value_unbounded(lp):
    """Lines whose value has no limit over the optimal plans."""
    return _endless(lp, exact.value_interval)


def _endless(lp, interval):
    return np.array([not all(map(_finite, interval(lp, k))) for k in range(lp.m + lp.n)])


def _finite(number):
    return isinstance(number, Fraction)


def reach(lp, row, is_upper):
    """Greatest (least) value of a row without its upper (lower) side."""
    program, m = _parts(lp)
    low, high = program.ends[row]
    ends = list(program.ends[:m])
    ends[row] = (low, inf) if is_upper else (-inf, high)
    region = Region(program.rows, ends, program.ends[m:])
    line = program.rows[row]
    return region.greatest(line) if is_upper else region.least(line)


def extremes(lp, k):
    """Least and greatest value of a line over all feasible plans."""
    program, m = _parts(lp)
    region = Region(program.rows, program.ends[:m], program.ends[m:])
    return region.least(program.lines[k]), region.greatest(program.lines[k])
