"""The one-sided form and its dual, written again: dense, in fractions, line by line.

Nothing here looks at the modules under test. A maximization is dualized by way of
the minimization of the negated costs, not by a second table.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction

import numpy as np

from lpview.decimals import exact_value
from lpview.model import LinearProgram

Terms = dict[str, Fraction]


@dataclass(frozen=True)
class Program:
    """A one-sided program: rows ``(name, relation, side, terms)``; columns
    ``(name, sign, cost)`` with sign ``>=``, ``<=`` or ``free``."""

    sense: str
    columns: list[tuple[str, str, Fraction]]
    rows: list[tuple[str, str, Fraction, Terms]]
    offset: Fraction


def exact_vector(lp: LinearProgram, field: str) -> list[Fraction | None]:
    """A field's exact numbers; None for an infinite one."""
    values = lp.A.data if field == "A" else np.atleast_1d(getattr(lp, field))
    odd = lp.odd.get(field, {})
    return [
        None if np.isinf(value) else exact_value(float(value), odd.get(k))
        for k, value in enumerate(values)
    ]


def exact_terms(lp: LinearProgram) -> list[Terms]:
    """Each row's coefficients by column name."""
    numbers = exact_vector(lp, "A")
    return [
        {lp.columns[lp.A.indices[k]]: numbers[k] for k in range(lp.A.indptr[i], lp.A.indptr[i + 1])}
        for i in range(lp.m)
    ]


def textbook_form(lp: LinearProgram) -> Program:
    """The one-sided form of ``lp``, line by line."""
    columns, bound_rows = [], []
    taken = set(lp.rows)
    rows = _form_rows(lp, taken)
    ends = zip(*(exact_vector(lp, f) for f in ("c", "lower", "upper")), strict=True)
    for name, (cost, low, high) in zip(lp.columns, ends, strict=True):
        unit = {name: Fraction(1)}
        if low is not None and low == high:
            columns.append((name, "free", cost))
            bound_rows.append((_new(f"{name} fixed", taken), "=", low, unit))
            continue
        sign = ">=" if low == 0 else "<=" if high == 0 else "free"
        columns.append((name, sign, cost))
        if low:
            bound_rows.append((_new(f"{name} lower bound", taken), ">=", low, unit))
        if high:
            bound_rows.append((_new(f"{name} upper bound", taken), "<=", high, unit))
    offset = exact_value(lp.offset, lp.odd.get("offset", {}).get(0))
    return Program(lp.sense.value, columns, rows + bound_rows, offset)


def _form_rows(lp, taken):
    rows = []
    sides = zip(exact_vector(lp, "row_lower"), exact_vector(lp, "row_upper"), strict=True)
    for name, (low, high), terms in zip(lp.rows, sides, exact_terms(lp), strict=True):
        if low is None and high is None:
            continue
        if low == high:
            rows.append((name, "=", low, terms))
        elif low is None:
            rows.append((name, "<=", high, terms))
        elif high is None:
            rows.append((name, ">=", low, terms))
        else:
            rows.append((_new(f"{name} lower side", taken), ">=", low, terms))
            rows.append((_new(f"{name} upper side", taken), "<=", high, terms))
    return rows


def _new(name, taken):
    options = [name, *(f"{name} {k}" for k in range(2, 99))]
    found = next(option for option in options if option not in taken)
    taken.add(found)
    return found


def textbook_dual(program: Program) -> Program:
    """The dual; a maximization by way of minimizing the negated costs."""
    if program.sense == "maximize":
        negated = [(name, sign, -cost) for name, sign, cost in program.columns]
        twin = textbook_dual(
            replace(program, sense="minimize", columns=negated, offset=-program.offset)
        )
        # max b'u - offset over A'u <= -c: put u = -y and negate the objective.
        turned = {">=": "<=", "<=": ">=", "free": "free", "=": "="}
        return Program(
            sense="minimize",
            columns=[(name, turned[sign], cost) for name, sign, cost in twin.columns],
            rows=[(n, turned[rel], -side, terms) for n, rel, side, terms in twin.rows],
            offset=-twin.offset,
        )
    columns = [
        (name, {"=": "free"}.get(relation, relation), side)
        for name, relation, side, _ in program.rows
    ]
    rows = []
    for name, sign, cost in program.columns:
        relation = {">=": "<=", "<=": ">=", "free": "="}[sign]
        terms = {row: t[name] for row, _, _, t in program.rows if name in t}
        rows.append((name, relation, cost, terms))
    return Program("maximize", columns, rows, program.offset)


def written(lp: LinearProgram) -> Program:
    """A `LinearProgram` that should be in one-sided form, as a `Program`."""
    columns, rows = [], []
    bounds = zip(lp.lower.tolist(), lp.upper.tolist(), strict=True)
    for name, cost, pair in zip(lp.columns, exact_vector(lp, "c"), bounds, strict=True):
        sign = {(0, np.inf): ">=", (-np.inf, 0): "<=", (-np.inf, np.inf): "free"}[pair]
        columns.append((name, sign, cost))
    sides = zip(exact_vector(lp, "row_lower"), exact_vector(lp, "row_upper"), strict=True)
    for name, (low, high), terms in zip(lp.rows, sides, exact_terms(lp), strict=True):
        assert low is None or high is None or low == high
        relation = "<=" if low is None else ">=" if high is None else "="
        rows.append((name, relation, high if low is None else low, terms))
    offset = exact_value(lp.offset, lp.odd.get("offset", {}).get(0))
    return Program(lp.sense.value, columns, rows, offset)
