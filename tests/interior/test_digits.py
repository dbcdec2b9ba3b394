"""Digits to believe, against the same basis solved in fractions.

A claim is honest if it is not above the truth by more than one digit, and useful if it is
not far below.
"""

from __future__ import annotations

import math
from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings

from lpview.basis import factor_basis
from lpview.blocks import read_model
from lpview.decimals import exact_value
from lpview.kkt import measure
from lpview.outcomes import Optimal
from lpview.prices import NoPrices
from lpview.prices.digits import Digits, digits
from tests.basis.exact import basis_matrix, exact_costs, exact_matrix, inverse, one_norm
from tests.check.helpers import examined
from tests.check.test_netlib import FOLDER as NETLIB
from tests.dual.models import model
from tests.prices.draws import models_with_optimum
from tests.textbook.test_textbook_data import CASES
from tests.textbook.test_textbook_data import FOLDER as TEXTBOOK

OPTIMAL = [
    pytest.param(case, id=case["id"])
    for case in CASES
    if case["status"] == "optimal" and case["x_unique"] and case["y_unique"]
]
SMALL = ["afiro", "sc50a", "sc50b", "adlittle", "blend", "share2b", "stocfor1"]


def solved(matrix, right):
    """The solution of a square system of fractions, by elimination."""
    size = len(matrix)
    work = [[*row, value] for row, value in zip(matrix, right, strict=True)]
    for k in range(size):
        pivot = next(i for i in range(k, size) if work[i][k])
        work[k], work[pivot] = work[pivot], work[k]
        head = [entry / work[k][k] if entry else entry for entry in work[k]]
        work[k] = head
        used = [j for j in range(k, size + 1) if head[j]]
        for i in range(size):
            factor = work[i][k]
            if i != k and factor:
                line = work[i]
                for j in used:
                    line[j] -= factor * head[j]
    return [row[size] for row in work]


def ends(lp, low, high, status):
    """Exact numbers at which nonbasic lines rest."""
    values = []
    for k, where in enumerate(status):
        name = high if where == 2 else low
        value = getattr(lp, name)[k]
        exact = lp.odd.get(name, {}).get(k)
        values.append(exact_value(value, exact) if np.isfinite(value) else Fraction(0))
    return values


def exact_answer(lp, basis):
    """Plan, prices and objective of a basis."""
    matrix, rows, columns = basis_matrix(lp, basis)
    dense, costs = exact_matrix(lp), exact_costs(lp)
    x = ends(lp, "lower", "upper", basis.column)
    for j in columns:
        x[j] = Fraction(0)
    sides = ends(lp, "row_lower", "row_upper", basis.row)
    right = [sides[i] - sum(a * v for a, v in zip(dense[i], x, strict=True) if a) for i in rows]
    for j, value in zip(columns, solved(matrix, right), strict=True):
        x[j] = value
    turned = [list(line) for line in zip(*matrix, strict=True)]
    y = [Fraction(0)] * lp.m
    for i, value in zip(rows, solved(turned, [costs[j] for j in columns]), strict=True):
        y[i] = value
    offset = exact_value(lp.offset, lp.odd.get("offset", {}).get(0))
    return x, y, offset + sum(c * v for c, v in zip(costs, x, strict=True))


def true_digits(reported, exact):
    """At most 16; 16 for a 0 that is one, 0 for one that is not."""
    error = abs(Fraction(float(reported)) - exact)
    if not error:
        return 16.0
    if not exact:
        return 0.0
    return min(16.0, max(0.0, -math.log10(error / abs(exact))))


def compare(found, x, y, objective, below=1.0):
    """Claims against the truth, line by line."""
    claim = digits(found)
    assert isinstance(claim, Digits), claim
    answer = found.answer
    pairs = [
        *zip(claim.x, (true_digits(*p) for p in zip(answer.x, x, strict=True)), strict=True),
        *zip(claim.y, (true_digits(*p) for p in zip(answer.y, y, strict=True)), strict=True),
        (claim.objective, true_digits(found.measurement.primal_objective, objective)),
    ]
    assert [p for p in pairs if p[0] > p[1] + 1] == []
    assert [p for p in pairs if p[0] < p[1] - below] == []
    return claim


@pytest.mark.parametrize("case", OPTIMAL)
def test_textbook_answers(case):
    """Against the published plans and prices, or those computed exactly (see the data)."""
    lp = read_model(TEXTBOOK / case["file"]).model
    x = [Fraction(case["x"].get(name, "0")) for name in lp.columns]
    y = [Fraction(case["y"].get(name, "0")) for name in lp.rows]
    compare(examined(lp), x, y, Fraction(case["objective"]))


@pytest.mark.parametrize("name", SMALL)
def test_real_answers(name):
    lp = read_model(NETLIB / f"{name}.csv").model
    found = examined(lp)
    exact = exact_answer(lp, found.answer.basis)
    claim = compare(found, *exact)
    shown = {
        "x": [true_digits(*p) for p in zip(found.answer.x, exact[0], strict=True)],
        "y": [true_digits(*p) for p in zip(found.answer.y, exact[1], strict=True)],
    }
    # What a report says first: fewest digits among the lines that are not zero.
    for worst, truth, of in (
        (claim.worst_column, shown["x"], np.abs(found.answer.x) > 1e-9),
        (claim.worst_row, shown["y"], found.marks.priced[: lp.m]),
    ):
        fewest = min(t for t, counts in zip(truth, of, strict=True) if counts)
        assert worst is not None
        assert of[worst]
        assert truth[worst] <= fewest + 1


@settings(max_examples=60)
@given(models_with_optimum())
def test_drawn_answers(lp):
    found = examined(lp)
    compare(found, *exact_answer(lp, found.answer.basis))


def spoiled(found, relative):
    """The answer with every number off by that much, measured again."""
    answer = found.answer
    x, y = answer.x * (1 + relative), answer.y * (1 - relative)
    changed = replace(answer, x=x, y=y)
    measurement = measure(found.head.model, x, y, answer.z)
    return replace(found, answer=changed, measurement=measurement)


@pytest.mark.parametrize("digit", [3, 7, 11])
@pytest.mark.parametrize("name", ["afiro", "blend"])
def test_wrong_digits_are_not_claimed(name, digit):
    lp = read_model(NETLIB / f"{name}.csv").model
    found = spoiled(examined(lp), 10.0**-digit)
    claim = compare(found, *exact_answer(lp, found.answer.basis))
    assert claim.objective == pytest.approx(digit, abs=0.1)
    assert claim.x[claim.worst_column] == pytest.approx(digit, abs=0.3)
    assert claim.y[claim.worst_row] == pytest.approx(digit, abs=0.3)


def hilbert(size):
    """Equations whose matrix has entries 1 / (i + j - 1), times the least common multiple."""
    scale = math.lcm(*range(1, 2 * size))
    columns = [f"x{j}" for j in range(size)]
    rows = {}
    for i in range(size):
        terms = {f"x{j}": scale // (i + j + 1) for j in range(size)}
        total = sum(terms.values()) / 3 + i
        rows[f"r{i}"] = (total, terms, total)
    costs = {name: 1 + k for k, name in enumerate(columns)}
    bounds = dict.fromkeys(columns, (-np.inf, np.inf))
    return model("minimize", costs, rows, bounds)


@pytest.mark.parametrize("size", [4, 6, 8, 10])
def test_ill_conditioned_answers(size):
    """Conditions from 1e4 to 1e13 (Hilbert matrices): few digits, and no more claimed."""
    lp = hilbert(size)
    found = examined(lp)
    assert isinstance(found, Optimal)
    # Solved in doubles, and not refined as a checked answer may be.
    matrix = factor_basis(lp, found.answer.basis)
    x = matrix.plan(lp.row_lower[matrix.rows])
    y = matrix.prices(lp.c[matrix.columns])
    answer = replace(found.answer, x=x, y=y)
    rough = replace(found, answer=answer, measurement=measure(lp, x, y))
    claim = compare(rough, *exact_answer(lp, found.answer.basis))
    assert claim.condition > 10.0 ** (1.2 * size - 2)
    assert claim.x[claim.worst_column] < 18 - math.log10(claim.condition)
    compare(found, *exact_answer(lp, found.answer.basis))


def test_the_condition_is_that_of_the_scaled_basis():
    """A well-scaled matrix needs no scaling but powers of two of whole lines."""
    lp = model(
        "minimize", {"x": 1, "y": 1},
        {"r": (3, {"x": 0.5, "y": 0.75}, 3), "s": (4, {"x": 0.75, "y": 0.5}, 4)},
        {"x": (-np.inf, np.inf), "y": (-np.inf, np.inf)},
    )  # fmt: skip
    found = examined(lp)
    matrix, _, _ = basis_matrix(lp, found.answer.basis)
    exact = one_norm(matrix) * one_norm(inverse(matrix))
    assert digits(found).condition == pytest.approx(float(exact))


def test_the_spread_of_coefficients():
    lp = model(
        "minimize", {"x": 1, "y": 1, "z": 0},
        {
            "r": (1, {"x": 2, "y": -50}, 200),
            "s": (1, {"x": 400, "z": 100}, 900),
            "empty": (0, {}, 9),
        },
        {},
    )  # fmt: skip
    found = digits(examined(lp))
    assert (found.smallest, found.largest) == (2, 400)
    assert (found.by_row.largest, found.by_row.line) == (25, 0)
    assert (found.by_column.largest, found.by_column.line) == (200, lp.m)


def test_numbers_of_the_file_are_exact_and_their_doubles_are_not():
    """0.1 and 1/3 as bounds and sides: what is right to the last digit counts as right."""
    folder = Path(TEXTBOOK)
    lp = read_model(folder / "a14.csv").model
    found = examined(lp)
    compare(found, *exact_answer(lp, found.answer.basis))


def test_a_plan_of_zeros_has_no_worst_line():
    lp = model("minimize", {"x": 1}, {"r": (-1, {"x": 1}, 5)}, {})
    found = digits(examined(lp))
    assert (found.worst_column, found.worst_row) == (None, None)
    assert found.x.tolist() == [16]


def test_without_a_basis_nothing_is_estimated():
    found = examined(model("minimize", {"x": 1}, {"r": (1, {"x": 1}, 5)}, {}))
    bare = replace(found, answer=replace(found.answer, basis=None))
    assert isinstance(digits(bare), NoPrices)
