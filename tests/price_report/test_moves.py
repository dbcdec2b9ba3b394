"""Several right-hand sides moved together; numbers worked out by hand."""

from __future__ import annotations

import pytest

from lpview.options.prices import _move
from tests.price_report.models import GLASSHOUSE, LOOSE, run, written


@pytest.fixture
def glass(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    return written(tmp_path, "glass.csv", GLASSHOUSE)


def sentences(out):
    return out.splitlines()[2:4]


def test_one_row_rates_do_not_add_up(glass, capfd):
    # tomato = 20 + t / 15 by heat and 20 + t / 4 by water: heat alone holds, and earns 2 of
    # each, until bench does at 120 / 5.2: t = 15 * 120 / 5.2 - 300 = 46.1538.
    status, out, _ = run("prices", glass, "--move", "heat=+1", "--move", "water=1", capfd=capfd)
    assert status == 0
    assert sentences(out) == [
        "Moved together by t times these amounts, each unit of t improves the objective by 2, "
        "for t up to 46.1538, then the rate changes.",
        "The one-row rates would have said that each unit of t improves the objective by 0.8: "
        "no single dual solution attains them all.",
    ]
    lines = out.splitlines()
    assert [line.split() for line in lines[7:9]] == [
        ["heat", "1", "upper", "side", "0.8"],
        ["water", "1", "upper", "side", "0"],
    ]
    assert lines[-2] == "reproduce  lpview prices glass.csv --move heat=1 --move water=1"
    assert run(*lines[-2].split()[2:], capfd=capfd)[1] == out


def test_one_row_alone_adds_up(glass, capfd):
    _, out, _ = run("prices", glass, "--move", "heat=-2", capfd=capfd)
    assert sentences(out) == [
        "Moved together by t times these amounts, each unit of t worsens the objective by 4, "
        "for t up to 150, then no plan is left.",
        "It is one row, so there is nothing to add up.",
    ]


def test_rows_that_cannot_move_alone_can_move_together(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    loose = written(tmp_path, "loose.csv", LOOSE)
    _, out, _ = run("prices", loose, "--move", "need=1", "--move", "again=2", capfd=capfd)
    assert sentences(out) == [
        "Moved together by t times these amounts, each unit of t worsens the objective by 1, "
        "however large t is.",
        "Moved alone, at least one of them leaves no plan, so prices cannot be added.",
    ]
    status, out, _ = run("prices", loose, "--move", "need=1", "--move", "again=1", capfd=capfd)
    assert status == 0
    assert sentences(out)[0] == ("Moved by any part of these amounts, together they leave no plan.")


def test_a_row_without_sides_cannot_move(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    loose = written(tmp_path, "loose.csv", LOOSE.replace("slack,,5", "slack,,"))
    assert run("prices", loose, "--move", "slack=1", capfd=capfd) == (
        2, "", "loose.csv: --move: expected a row with a side, got 'slack', which has none\n"
    )  # fmt: skip


def test_a_name_may_hold_equals_signs_and_begin_like_an_option(glass, tmp_path, capfd):
    assert _move("a=b=-1.5") == ("a=b", -1.5)
    written(tmp_path, "odd.csv", GLASSHOUSE.replace("heat", "-a=b"))
    status, out, _ = run("prices", "odd.csv", "--move=-a=b=1", capfd=capfd)
    assert status == 0
    assert out.splitlines()[-2] == "reproduce  lpview prices odd.csv --move=-a=b=1"
