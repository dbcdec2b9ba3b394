"""Ledgers against sums of fractions, and their words against re-solved models."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings

from lpview.answer import Answer, Basis, LineStatus
from lpview.blocks import read_model
from lpview.examination import check_answer
from lpview.ledger import column_ledger, ledger, row_ledger
from lpview.outcomes import Optimal
from lpview.report import markdown, text
from lpview.report.ledger import ledger_blocks, ledger_report, line_options
from tests.check.helpers import examined, line_of
from tests.dual.models import INF, feasible_pairs, model

MODELS = Path(__file__).parents[2] / "models"


def glasshouse():
    """The picture of the mirror: tomato 20 and basil 0, held back by heat alone."""
    return model(
        "maximize",
        {"tomato": 30, "basil": 1.6},
        {
            "heat": (-INF, {"tomato": 15, "basil": 2}, 300),
            "bench": (-INF, {"tomato": 5.2}, 120),
            "water": (-INF, {"tomato": 4}, 80),
        },
        {"tomato": (0, 40)},
    )


def glasshouse_at(y, basis):
    """Its optimal plan, with dual values and a basis of our choice."""
    found = examined(glasshouse())
    lp, y = found.head.model, np.array(y, float)
    answer = Answer(np.array([20.0, 0.0]), y, lp.c - lp.A.T @ y, basis)
    return check_answer(found.head, answer)


def glasshouse_at_heat():
    """With heat nonbasic: its price is 2, and water is degenerate."""
    statuses = np.array([LineStatus.BASIC, LineStatus.LOWER], np.int8)
    rows = np.array([LineStatus.UPPER, LineStatus.BASIC, LineStatus.BASIC], np.int8)
    return glasshouse_at([2, 0, 0], Basis(statuses, rows))


def words(found, name):
    """The sentences of a ledger."""
    blocks = ledger_blocks(found, line_of(found.head.model, name))
    return " ".join(block.text for block in blocks[2:])


def test_a_rows_ledger_by_hand():
    entry = row_ledger(examined(glasshouse()), 1)
    assert (entry.line, entry.is_row, entry.name) == (1, True, "bench")
    assert entry.terms.partner.tolist() == [0]
    assert entry.terms.product.tolist() == [104]
    assert (entry.value, entry.lower, entry.upper, entry.slack) == (104, -INF, 120, 16)
    assert (entry.price, entry.complementarity, entry.cost) == (0, 0, 0)
    assert entry.flags == () and entry.room and not entry.priced
    assert entry.status is LineStatus.BASIC


def test_a_columns_ledger_by_hand():
    found = glasshouse_at_heat()
    entry = column_ledger(found, 1)
    assert (entry.line, entry.is_row, entry.name) == (4, False, "basil")
    assert entry.terms.partner.tolist() == [0]
    assert entry.terms.coefficient.tolist() == [2]
    assert (entry.terms.factor.tolist(), entry.terms.product.tolist()) == ([2], [4])
    assert (entry.cost, entry.price, entry.used) == (1.6, -2.4, 4)
    assert ledger(found, 4).name == "basil"


@given(feasible_pairs())
@settings(deadline=None)
def test_terms_add_up_to_the_line(drawn):
    found = examined(drawn[0])
    lp, x, y = drawn[0], found.answer.x.tolist(), found.answer.y.tolist()
    A = lp.A.toarray().tolist()
    for i in range(lp.m):
        entry = row_ledger(found, i)
        exact = sum(Fraction(a) * Fraction(v) for a, v in zip(A[i], x, strict=True))
        assert entry.value == pytest.approx(float(exact), abs=1e-12)
        assert sum(map(Fraction, entry.terms.product)) == pytest.approx(float(exact), abs=1e-9)
        assert sorted(entry.terms.partner) == [j for j in range(lp.n) if A[i][j]]
    for j in range(lp.n):
        entry = column_ledger(found, j)
        used = sum(Fraction(A[i][j]) * Fraction(y[i]) for i in range(lp.m))
        assert entry.price == pytest.approx(float(Fraction(lp.c[j]) - used), abs=1e-12)
        assert entry.cost == lp.c[j]
        assert sorted(entry.terms.partner) == [i for i in range(lp.m) if A[i][j]]


@given(feasible_pairs())
@settings(deadline=None)
def test_the_ledger_agrees_with_the_check(drawn):
    found = examined(drawn[0])
    lp, measured = drawn[0], found.measurement
    for line in range(lp.m + lp.n):
        entry = ledger(found, line)
        side, k = (measured.rows, line) if line < lp.m else (measured.columns, line - lp.m)
        assert (entry.value, entry.price) == (side.value[k], side.price[k])
        assert (entry.slack, entry.complementarity) == (side.slack[k], side.complementarity[k])
        assert entry.flags == found.marks.of(line)


def test_large_terms_come_first_and_equal_ones_in_model_order():
    lp = model(
        "minimize",
        dict.fromkeys("abcd", 1),
        {"r": (10, {"a": 1, "b": -2, "c": 1, "d": 4}, INF)},
        {"a": (2, 2), "b": (1, 1), "c": (2, 2), "d": (0, INF)},
    )
    entry = row_ledger(examined(lp), 0)
    assert entry.terms.partner.tolist() == [3, 0, 1, 2]
    assert entry.terms.product.tolist() == [8, 2, -2, 2]


def test_a_long_line_is_sorted_as_python_sorts_it():
    rng = np.random.default_rng(3)
    names = [f"x{k}" for k in range(3000)]
    values = rng.integers(-40, 41, 3000).tolist()
    lp = model(
        "minimize",
        dict.fromkeys(names, 0),
        {"r": (-INF, dict.fromkeys(names, 2), INF)},
        {name: (value, value) for name, value in zip(names, values, strict=True)},
    )
    expected = sorted(range(3000), key=lambda k: -abs(values[k]))
    assert row_ledger(examined(lp), 0).terms.partner.tolist() == expected


def test_an_empty_line_has_no_terms():
    lp = model("minimize", {"x": 1}, {"r": (-1, {}, INF)}, {})
    found = examined(lp)
    assert row_ledger(found, 0).terms.product.size == 0
    assert "row r >= -1: 0 terms" in text.render(ledger_report(found, [0]))


def test_the_sentences_of_the_glasshouse():
    found = glasshouse_at_heat()
    doubt = (
        "For small steps both are exact if this price is the only one; it may not be, for the "
        "plan is degenerate in 1 line."
    )
    assert words(found, "heat") == (
        "It holds the plan back. One unit more on its upper side improves the objective by at "
        f"most 2; one unit less worsens it by at least 2, or leaves no plan. {doubt}"
    )
    assert words(found, "bench") == "It does not hold the plan back: 16 to spare."
    assert words(found, "water") == (
        "It is used up to its upper side, without a price of its own. It is basic there, "
        "so the plan is degenerate: dual values may not be the only ones."
    )
    assert words(found, "basil") == (
        "It is out of the plan: its cost 1.6 less what it uses at the dual values, 4, is -2.4. "
        "Each unit of it that is forced in worsens the objective by at least 2.4, or leaves no "
        f"plan. {doubt}"
    )


def test_a_column_out_of_the_plan_without_a_price():
    # At the prices 0.8 and 4.5 basil costs what it uses, and the basis may hold it or not.
    statuses = np.array([LineStatus.BASIC, LineStatus.BASIC], np.int8)
    rows = np.array([LineStatus.UPPER, LineStatus.BASIC, LineStatus.UPPER], np.int8)
    found = glasshouse_at([0.8, 0, 4.5], Basis(statuses, rows))
    begin = (
        "It is out of the plan: its cost 1.6 and what it uses at the dual values, 1.6, are equal "
        "within the zero tolerance. "
    )
    assert words(found, "basil") == (
        f"{begin}It is basic there, so the plan is degenerate: dual values may not be the only "
        "ones."
    )
    statuses = np.array([LineStatus.BASIC, LineStatus.LOWER], np.int8)
    rows = np.array([LineStatus.UPPER, LineStatus.BASIC, LineStatus.BASIC], np.int8)
    other = glasshouse_at([0.8, 0, 4.5], Basis(statuses, rows))
    assert words(other, "basil") == (
        f"{begin}It is not basic there, so another plan may be just as good."
    )


def test_what_a_price_promises_is_what_solving_again_finds():
    """At most on the loose side, at least on the tight one, for every priced line."""
    found = glasshouse_at_heat()
    best = found.measurement.primal_objective
    for row in np.flatnonzero(found.answer.y).tolist():
        price = abs(found.answer.y[row])
        up, down = (moved(glasshouse(), row, step) for step in (1, -1))
        assert up - best <= price + 1e-9
        assert best - down >= price - 1e-9


def moved(lp, row, step):
    """The optimal objective with an upper side moved."""
    upper = lp.row_upper.copy()
    upper[row] += step
    return examined(replace(lp, row_upper=upper)).measurement.primal_objective


@given(feasible_pairs())
@settings(max_examples=60, deadline=None)
def test_one_unit_of_any_priced_line_keeps_to_its_sentence(drawn):
    found = examined(drawn[0])
    lp, sign = drawn[0], drawn[0].sense.sign
    for line in np.flatnonzero(found.marks.priced).tolist():
        entry = ledger(found, line)
        said, size = words(found, entry.name), abs(entry.price)
        forced = "less" if "forced in below 0" in said else "more"
        for direction, step in (("more", 1.0), ("less", -1.0)):
            improves = f"One unit {direction} " in said
            worsens = f"one unit {direction} " in said
            worsens |= "forced in" in said and direction == forced
            assert improves != worsens or "forced in" in said
            other = examined_with_end_moved(lp, entry, step)
            if isinstance(other, Optimal):
                best = found.measurement.primal_objective
                gain = sign * (best - other.measurement.primal_objective)
                assert gain <= (-size if worsens else size) + 1e-7


def examined_with_end_moved(lp, entry, step):
    """With the end that a price names moved, and both of an equality; None if they cross."""
    fields = ("row_lower", "row_upper") if entry.is_row else ("lower", "upper")
    moved = fields if not entry.paired else fields[:1] if entry.named_lower else fields[1:]
    k = entry.line if entry.is_row else entry.line - lp.m
    low, high = (getattr(lp, field).copy() for field in fields)
    low[k] += step * (fields[0] in moved)
    high[k] += step * (fields[1] in moved)
    if low[k] > high[k]:
        return None
    return examined(replace(lp, **dict(zip(fields, (low, high), strict=True))))


def test_a_plan_that_is_not_degenerate_has_the_only_prices():
    found = examined(read_model(MODELS / "winter.csv").model)
    assert words(found, "heat") == (
        "It holds the plan back. One unit more on its upper side improves the objective by at "
        "most 0.666667; one unit less worsens it by at least 0.666667, or leaves no plan. For "
        "small steps both are exact: no line is degenerate, so this price is the only one."
    )
    assert words(found, "chard").startswith("It is fixed at 12: its cost 6 less what it uses at ")
    assert words(found, "power").startswith("It is an equality. One unit more on its right-hand ")
    assert "at its upper bound, 40: its cost 4.8 less" in words(found, "mint")
    assert words(found, "cucumber") == (
        "It is in the plan at 50, where no bound holds it: its cost 9.2 and what it uses at the "
        "dual values, 9.2, are equal within the zero tolerance."
    )


def test_without_a_basis_nothing_is_said_about_the_only_price():
    found = examined(read_model(MODELS / "winter.csv").model)
    bare = check_answer(found.head, replace(found.answer, basis=None))
    assert words(bare, "heat").endswith("is the only one, which is not known without a basis.")
    assert "(degenerate is not known without a basis)" in text.render(ledger_report(bare, [0]))
    assert ledger(bare, 0).status is None


def test_a_faulty_line_gets_no_reassuring_sentence():
    found = examined(glasshouse())
    x = found.answer.x + np.array([1.0, 0.0])
    bad = check_answer(found.head, replace(found.answer, x=x))
    assert words(bad, "water").startswith("Not as it should be: the value lies outside its limits")
    assert words(bad, "bench") == (
        "The check failed elsewhere, so these numbers are the answer's claim only."
    )
    y = -np.ones(3)
    wrong = check_answer(found.head, replace(found.answer, y=y))
    assert "the sign of its price names a limit that does not exist" in words(wrong, "bench")


def many(count):
    """One row with terms 1, 2, ... ``count``, all variables fixed at 1."""
    columns = {f"x{k}": 0 for k in range(1, count + 1)}
    return model(
        "minimize",
        columns,
        {"sum": (0, {name: k for k, name in enumerate(columns, 1)}, INF)},
        dict.fromkeys(columns, (1, 1)),
    )


def test_twenty_terms_and_the_sum_of_the_rest():
    found = examined(many(30))
    short = text.render(ledger_report(found, [0]))
    lines = short.splitlines()
    rest = next(line for line in lines if line.startswith("and 10 more"))
    assert rest.split() == ["and", "10", "more", "55"]  # 1 + 2 + ... + 10
    shown = [float(line.split()[-1]) for line in lines if line.startswith("x")]
    assert shown == list(range(30, 10, -1))
    full = text.render(ledger_report(found, [0], full=True))
    assert "more " not in full and sum(line.startswith("x") for line in full.splitlines()) == 30


def test_twenty_terms_need_no_rest():
    assert "more" not in text.render(ledger_report(examined(many(20)), [0])).split("flags")[0]


def test_it_ends_with_the_command_that_prints_it():
    found = examined(glasshouse())
    printed = text.render(ledger_report(found, [0, 4]))
    assert printed.startswith("model.csv: optimal, verified: ")
    command = "reproduce  lpview check model.csv --row heat --column basil"
    assert printed.splitlines()[-2] == command
    marked = markdown.render(ledger_report(found, [0, 4]))
    assert "```\nlpview check model.csv --row heat --column basil\n```" in marked


def test_names_that_a_shell_or_an_option_parser_would_take_apart():
    lp = model("minimize", {"-1": 1, "[b]x": 1}, {"two words": (1, {"-1": 1}, INF)}, {})
    assert line_options(lp, [0, 1, 2]) == ["--row", "two words", "--column=-1", "--column", "[b]x"]
    printed = text.render(ledger_report(examined(lp), [0, 1]))
    assert "--row 'two words' --column=-1\n" in printed


def test_harmful_names_are_spelled_out():
    lp = model("minimize", {"\x1b[31m": 1}, {"r": (1, {"\x1b[31m": 1}, INF)}, {})
    assert "\x1b" not in text.render(ledger_report(examined(lp), [0]))
