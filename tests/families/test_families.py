"""Families of names, and what they add up to."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from lpview import cli
from lpview.blocks import read_model
from lpview.examination import check_answer
from lpview.families import Kind, families, summarize
from lpview.marks import Flag
from lpview.report import markdown, text
from lpview.report.families import families_report, families_table
from tests.check.helpers import examined
from tests.dual.models import INF, feasible_pairs, model

MODELS = Path(__file__).parents[2] / "models"
MARKS = "[(.0123456789"


def label(name):
    """The rule written again, letter by letter."""
    head = ""
    for letter in name:
        if letter in MARKS:
            break
        head += letter
    if not head:
        return name[0] if name[0] in "[(." else "0-9"
    stripped = head
    while stripped and stripped[-1] in " _-\t\u00a0":
        stripped = stripped[:-1]
    return stripped or head


@pytest.mark.parametrize(
    ("name", "expected"),
    [
        ("flow[a,b]", "flow"),
        ("flow(a)", "flow"),
        ("make_3", "make"),
        ("make - 3", "make"),
        ("v1.open", "v"),
        ("week.7", "week"),
        ("heat", "heat"),
        ("extra hours[1]", "extra hours"),
        ("Bö2", "Bö"),
        ("7th", "0-9"),
        ("12", "0-9"),
        ("[x]", "["),
        (".a", "."),
        ("-1", "-"),
        ("_", "_"),
        ("end_", "end"),
        ("a\nb1", "a\nb"),
    ],
)
def test_the_rule_by_example(name, expected):
    assert families([name]).labels == (expected,)
    assert families(["other", name]).labels == ("other", expected)


def test_order_is_that_of_first_appearance():
    found = families(["b2", "a[1]", "b[1]", "c", "a"])
    assert found.labels == ("b", "a", "c")
    assert found.of_line.tolist() == [0, 1, 0, 2, 1]
    assert [found.members(k).tolist() for k in range(3)] == [[0, 2], [1, 4], [3]]


def test_no_names_no_families():
    found = families([])
    assert found.labels == () and found.of_line.size == 0 and found.order.size == 0


names = st.lists(st.text(alphabet="ab_- [(.19\nß\u00a0", min_size=1, max_size=5), max_size=12)


@given(names)
def test_families_part_the_lines(drawn):
    found = families(drawn)
    labels = list(map(label, drawn))
    assert found.labels == tuple(dict.fromkeys(labels))
    assert [found.labels[k] for k in found.of_line] == labels
    for k, own in enumerate(found.labels):
        assert found.members(k).tolist() == [i for i, one in enumerate(labels) if one == own]


def small():
    """Three products in two families, three rows in two; one optimum, by hand."""
    return model(
        "maximize",
        {"make[a]": 3, "make[b]": 2, "buy[a]": -1},
        {
            "cap[1]": (-INF, {"make[a]": 1}, 4),
            "cap[2]": (-INF, {"make[b]": 1}, 5),
            "order": (1, {"buy[a]": 1}, INF),
        },
        {},
    )


# make[a] 4, make[b] 5, buy[a] 1; prices 3, 2 and -1; objective 12 + 10 - 1.


def test_a_summary_by_hand():
    found = examined(small())
    rows, columns = summarize(found, Kind.ROW), summarize(found, Kind.COLUMN)
    assert rows.families.labels == ("cap", "order")
    assert rows.count.tolist() == [2, 1]
    assert rows.zero_slack.tolist() == [2, 1]
    assert rows.degenerate.tolist() == [0, 0]
    assert rows.largest.tolist() == [3, 1]
    assert rows.worth.tolist() == [22, -1]
    assert columns.families.labels == ("make", "buy")
    assert columns.worth.tolist() == [22, -1]
    assert columns.zero_slack.tolist() == [0, 0]
    assert columns.largest.tolist() == [0, 0]


@given(feasible_pairs())
def test_a_summary_adds_up_line_by_line(drawn):
    lp = drawn[0]
    found = examined(lp)
    flags, measured = found.marks.flags, found.measurement
    for kind, lines, side in (
        (Kind.ROW, range(lp.m), measured.rows),
        (Kind.COLUMN, range(lp.m, lp.m + lp.n), measured.columns),
    ):
        summary = summarize(found, kind)
        assert summary.count.sum() == len(lines)
        assert summary.zero_slack.sum() == sum(flags[Flag.ZERO_SLACK][k] for k in lines)
        assert summary.degenerate.sum() == sum(flags[Flag.DEGENERATE][k] for k in lines)
        assert max(summary.largest, default=0) == max(map(abs, side.price), default=0)
    objective = measured.primal_objective - lp.offset
    assert summarize(found, Kind.COLUMN).worth.sum() == pytest.approx(objective, abs=1e-9)
    worth = 0.0
    for y, low, high in zip(found.answer.y, lp.row_lower, lp.row_upper, strict=True):
        worth += y * (low if lp.sense.sign * y > 0 else high) if y else 0.0
    assert summarize(found, Kind.ROW).worth.sum() == pytest.approx(worth, abs=1e-9)


def test_without_a_basis_degeneracy_is_not_known():
    found = examined(small())
    bare = check_answer(found.head, replace(found.answer, basis=None))
    assert summarize(bare, Kind.ROW).degenerate is None
    assert [row[3] for row in families_table(bare, Kind.ROW).rows] == ["not known"] * 2


def test_the_report_shows_families_in_place_of_rows():
    printed = text.render(families_report(examined(small())))
    lines = [line.split() for line in printed.splitlines()]
    assert "zero-slack rows" not in printed
    assert "families of rows: 2 of 3 rows" in printed
    assert "families of columns: 2 of 3 columns" in printed
    assert ["cap", "2", "2", "0", "3", "22"] in lines
    assert ["make", "2", "0", "0", "0", "22"] in lines
    assert "primal feasibility" in printed
    assert "reproduce  lpview check model.csv --families\n" in printed
    assert "| cap | 2 | 2 | 0 | 3 | 22 |" in markdown.render(families_report(examined(small())))


def alphabet(count):
    """A column of value ``k`` and cost ``k`` for each of ``count`` families."""
    columns = {f"{chr(97 + k)}[1]": k for k in range(count)}
    return model("minimize", columns, {}, {name: (k, k) for name, k in columns.items()})


def test_twenty_families_and_the_rest_in_a_line():
    found = examined(alphabet(25))
    rows = families_table(found, Kind.COLUMN).rows
    squares = sum(k * k for k in range(20, 25))
    assert len(rows) == 21
    assert rows[-1] == ("and 5 more", "5", "5", "0", "24", str(squares))
    assert len(families_table(found, Kind.COLUMN, full=True).rows) == 25


def test_the_season_has_the_families_of_its_names():
    found = examined(read_model(MODELS / "season.csv").model)
    summary = summarize(found, Kind.COLUMN)
    assert summary.families.labels == ("grow", "store", "ship", "extra hours")
    lp = found.head.model
    ship = [j for j, name in enumerate(lp.columns) if name.startswith("ship[")]
    assert summary.families.members(2).tolist() == ship
    assert summary.worth[2] == pytest.approx(np.dot(lp.c[ship], found.answer.x[ship]))


def test_the_command_prints_it_and_reproduces_itself(capfd, monkeypatch):
    monkeypatch.chdir(MODELS)
    assert cli.main(["check", "season.csv", "--families", "--full"]) == 0
    out, err = capfd.readouterr()
    assert err == "" and "families of columns: 4 of 252 columns" in out
    line = next(line for line in out.splitlines() if line.startswith("reproduce"))
    assert line == "reproduce  lpview check season.csv --full --families"
    cli.main(line.split()[2:])
    assert capfd.readouterr().out == out


def test_without_an_optimum_the_report_is_the_usual_one(capfd, monkeypatch):
    monkeypatch.chdir(MODELS)
    assert cli.main(["check", "winter-infeasible.csv", "--families"]) == 3
    out = capfd.readouterr().out
    assert "families of" not in out
    assert "reproduce  lpview check winter-infeasible.csv --families\n" in out
