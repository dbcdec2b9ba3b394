"""Reports on prices as text: whole, in both senses, short, and honest where stopped."""

from __future__ import annotations

import signal
import subprocess
import sys
import time
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from lpview.examination import check_answer
from lpview.marks import Flag
from lpview.priced import StoppedEarlyError, price_everything, price_lines, price_report
from lpview.prices import NoPrices, work_out
from lpview.report import text
from lpview.report.check import CAUTION, report
from lpview.report.prices import check_facts, lines_report, no_prices_report, prices_report
from lpview.run import Claim
from lpview.solver import warm_model
from tests.check.helpers import examined
from tests.dual.models import INF, model
from tests.price_report.models import (
    GLASSHOUSE,
    LOOSE,
    found_glasshouse,
    ready,
    run,
    written,
)


def nothing():
    """Between two steps: go on."""


class Stop:
    """Between two steps: go on so many times, then stop."""

    def __init__(self, steps):
        self.left = steps

    def __call__(self):
        self.left -= 1
        if self.left < 0:
            raise StoppedEarlyError(Claim.INTERRUPTED)


def printed(found, full=False):
    """The report without what depends on the versions of tools."""
    priced = price_report(found, ready(found), None if full else 8, nothing)
    lines = text.render(prices_report(priced, full)).splitlines()
    return [line for line in lines if not line.startswith(("model SHA", "made with", "solver"))]


def test_the_whole_report_maximizing():
    assert printed(found_glasshouse()) == [
        "model.csv: optimal, verified: every condition passed at 1e-9 scaled",
        "maximize, 3 constraints, 2 variables, 4 nonzero coefficients",
        "The optimal plan is the only one.",
        "The optimal dual solutions form a set of dimension 1: dual values of 2 of 3 rows and "
        "reduced costs of 1 of 2 columns are not unique.",
        "",
        "rows whose dual value is not unique, the widest first: 2 of 2",
        "row    dual value   up  how far  then   down  how far  then",
        "water           0    0      inf  never   4.5       80  infeasible",
        "heat            2  0.8      inf  never     2      300  infeasible",
        "",
        "infeasible at once  no move",
        "",
        "reproduce  lpview check model.csv",
        CAUTION,
    ]


def test_the_table_minimizing_has_the_opposite_signs():
    assert printed(found_glasshouse("minimize"))[6:9] == [
        "row    dual value    up  how far  then   down  how far  then",
        "water           0     0      inf  never  -4.5       80  infeasible",
        "heat           -2  -0.8      inf  never    -2      300  infeasible",
    ]


def test_unique_prices_stand_below_with_their_ranges():
    # Two crops share heat: a earns 3 of 1, b 5 of 2; land holds 8, heat 10. Worked by hand:
    # a 6, b 2; prices 1 and 2; land from 5 to 10, heat from 8 to 16.
    lp = model(
        "maximize",
        {"a": 3, "b": 5},
        {"land": (-INF, {"a": 1, "b": 1}, 8), "heat": (-INF, {"a": 1, "b": 2}, 10)},
        {},
    )
    assert printed(examined(lp))[2:10] == [
        "The optimal plan is the only one.",
        "The optimal dual solution is the only one, and so is every price.",
        "",
        "rows whose dual value is unique, by |dual value times right-hand side|: 2 of 2",
        "row   dual value  up  how far  then          down  how far  then",
        "heat           2   2        6  rate changes     2        2  rate changes",
        "land           1   1        2  rate changes     1        3  rate changes",
        "",
    ]


def test_moves_that_leave_no_plan_are_named(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    status, out, err = run("prices", written(tmp_path, "loose.csv", LOOSE), capfd=capfd)
    assert (status, err) == (0, "")
    lines = out.splitlines()
    assert (
        "infeasible at once  4 moves: row need up, row need down, row again up, row again down"
    ) in lines
    assert lines[2] == (
        "The optimal plans form a set of dimension 2: 3 of 3 variables are not the same in all "
        "of them."
    )
    assert ["need", "inf", "0", "infeasible", "-inf", "0", "infeasible"] in [
        [word for k, word in enumerate(line.split()) if k != 1] for line in lines
    ]


def repeated(rows):
    """One variable held by so many equal rows: every one of them may carry the price."""
    return model(
        "maximize",
        {"x": 1},
        {f"r{k}": (-INF, {"x": 1}, 5) for k in range(rows)},
        {},
    )


def test_a_report_keeps_to_forty_lines_and_full_lists_everything():
    found = examined(repeated(60))
    short, full = printed(found), printed(found, full=True)
    assert len(short) + 3 <= 40
    assert "rows whose dual value is not unique, the widest first: 8 of 60" in short
    assert sum(line.startswith("r") and "never" in line for line in full) == 60


def test_the_report_of_the_check_keeps_to_forty_lines_too():
    found = examined(repeated(60))
    priced = price_report(found, ready(found), 8, nothing)
    facts = check_facts(priced)
    lines = text.render(report(priced.found, prices=facts)).splitlines()
    assert len(lines) <= 40
    assert facts[0] == (
        "prices",
        "dual values of 60 of 60 rows and reduced costs of 0 of 1 column are not unique",
    )
    assert facts[1][1] == "; ".join(f"row r{k} up 0 and down 1" for k in range(3))
    assert facts[2] == ("infeasible at once", "no move")


def test_the_flag_is_there_only_once_prices_are_known():
    found = found_glasshouse()
    assert Flag.NOT_UNIQUE not in found.marks.flags
    priced = price_lines(found, ready(found), [0], nothing)
    assert priced.not_unique.tolist() == [True, False, True, False, True]
    assert list(priced.found.marks.flags) == list(Flag)
    assert "price not unique" not in text.render(report(found))
    assert "price not unique     2 rows, 1 column: row heat, row water, column basil" in (
        text.render(report(priced.found)).splitlines()
    )


def test_stopped_work_says_how_far_it_came_and_shows_what_is_known():
    found = examined(repeated(20))
    enough = Stop(10**6)
    price_report(found, ready(found), 8, enough)
    used = 10**6 - enough.left
    priced = price_report(found, ready(found), 8, Stop(used - 3))
    lines = text.render(prices_report(priced)).splitlines()
    assert lines[2] == "stopped: 5 of 8 lines examined (interrupted)"
    assert "rows whose dual value is not unique, the widest first: 5 of 20" in lines
    assert "infeasible at once  no move found" in lines
    at_once = price_report(found, ready(found), 8, Stop(0))
    lines = text.render(prices_report(at_once)).splitlines()
    assert lines[2] == "stopped: price intervals were not finished (interrupted)"
    # Which prices are unique is known before any of their ends is.
    assert "dual values of 20 of 20 rows and reduced costs of 0 of 1 column" in lines[4]
    assert check_facts(at_once)[0][1].startswith("stopped: price intervals were not finished")


def test_stopped_lines_are_said_not_to_be_examined():
    found = found_glasshouse()
    priced = price_lines(found, ready(found), [0, 1], Stop(1))
    lines = text.render(lines_report(priced, [0, 1])).splitlines()
    assert lines[2] == "stopped: 1 of 2 lines examined (interrupted)"
    assert lines[-4:-2] == ["row bench <= 120", "Not examined."]


def test_a_work_that_ends_is_not_stopped_and_knows_every_line():
    found = found_glasshouse()
    priced = price_everything(found, ready(found), nothing)
    assert priced.stopped is None
    assert sorted(priced.lines) == list(range(5)) and priced.asked == 5


def test_ledgers_of_prices(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glass.csv", GLASSHOUSE)
    status, out, _ = run("prices", "glass.csv", "--row", "bench", "--column=basil", capfd=capfd)
    lines = out.splitlines()
    assert status == 0
    assert lines[2:5] == [
        "row bench <= 120",
        "Its dual value 0 is the only one.",
        "Each unit more on its upper side changes nothing, however many; each unit less changes "
        "nothing, for 16 units, then the rate changes.",
    ]
    assert "column basil >= 0" in lines
    assert lines[-2] == "reproduce  lpview prices glass.csv --row bench --column basil"
    assert run(*lines[-2].split()[2:], capfd=capfd)[1] == out


def test_the_ledgers_of_the_check_say_it_too(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glass.csv", GLASSHOUSE)
    status, out, _ = run("check", "glass.csv", "--prices", "--row", "heat", capfd=capfd)
    assert status == 0
    assert "row value               300" in out and "flags                   zero slack, " in out
    assert "\nIts dual value is any number from 0.8 to 2; the answer shown has " in out
    assert "may not be" not in out
    assert "reproduce  lpview check glass.csv --prices --row heat\n" in out


def test_markdown_and_output(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glass.csv", GLASSHOUSE)
    words = ("prices", "glass.csv", "--format", "markdown", "--output", "prices.md")
    assert run(*words, capfd=capfd) == (0, "", "")
    content = Path("prices.md").read_text()
    assert "| row | dual value | up | how far | then | down | how far | then |" in content
    assert "lpview prices glass.csv --format markdown" in content


INFEASIBLE = GLASSHOUSE.replace("tomato,0,40", "tomato,30,40")


@pytest.mark.parametrize("command", ["prices", "plans"])
def test_without_an_optimum_the_checks_report_is_printed(command, tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "no.csv", INFEASIBLE)
    status, out, _ = run(command, "no.csv", capfd=capfd)
    assert status == 3
    assert out.startswith("no.csv: infeasible, certified: the lines contradict each other\n")
    assert f"reproduce  lpview {command} no.csv\n" in out


def test_without_a_basis_there_are_no_prices(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glass.csv", GLASSHOUSE)
    words = ("check", "glass.csv", "--prices", "--method", "interior-point", "--no-crossover")
    status, out, _ = run(*words, "--tolerance", "1e-5", capfd=capfd)
    assert status == 4
    assert "prices               not examined: the answer comes without a basis" in out
    found = found_glasshouse()
    bare = check_answer(found.head, replace(found.answer, basis=None))
    none = work_out(bare, warm_model)
    assert isinstance(none, NoPrices)
    lines = text.render(no_prices_report(bare, none, [0])).splitlines()
    assert lines[2].startswith("prices were not examined: the answer comes without a basis")
    assert lines[3] == "reproduce  lpview check model.csv --row heat"


def test_a_failed_check_has_no_prices_and_exits_with_one(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glass.csv", GLASSHOUSE)
    words = ("check", "glass.csv", "--prices", "--method", "interior-point", "--no-crossover")
    status, out, _ = run(*words, "--tolerance", "1e-15", capfd=capfd)
    assert status == 1
    assert "prices               not examined: the answer failed its check" in out


@pytest.mark.parametrize(
    ("words", "problem"),
    [
        (("prices", "glass.csv", "--row", "heat", "--format", "csv"),
         "--row, --column, --move, --interior, --redundant and --digits are printed as text or "
         "markdown; csv has every line anyway"),
        (("prices", "glass.csv", "--row", "heat", "--move", "heat=1"),
         "expected --row and --column, or --move, got both"),
        (("prices", "glass.csv", "--move", "heat=1", "--move", "heat=2"),
         "expected each row once in --move"),
        (("prices", "glass.csv", "--move", "heat"),
         "argument --move: expected ROW=AMOUNT with an amount other than 0, got heat"),
        (("prices", "glass.csv", "--move", "heat=inf"),
         "argument --move: expected ROW=AMOUNT with an amount other than 0, got heat=inf"),
        (("plans", "glass.csv", "--least"),
         "expected --column NAME together with --least or --greatest"),
        (("plans", "glass.csv", "--column", "basil"),
         "expected --column NAME together with --least or --greatest"),
        (("plans", "glass.csv", "--ray", "ray.csv"),
         "expected --ray together with --column NAME"),
        (("check", "glass.csv", "--prices", "--families"),
         "expected --prices or --families, got both"),
    ],
)  # fmt: skip
def test_combinations_that_mean_nothing_are_refused(words, problem, capfd):
    with pytest.raises(SystemExit) as stop:
        run(*words, capfd=capfd)
    assert stop.value.code == 2
    assert capfd.readouterr().err.endswith(f"error: {problem}\n")


def test_an_unknown_row_is_a_mistake_with_the_nearest_name(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glass.csv", GLASSHOUSE)
    assert run("prices", "glass.csv", "--row", "het", capfd=capfd) == (
        2, "", "glass.csv: --row: expected the name of a row, got 'het'; did you mean 'heat'?\n"
    )  # fmt: skip
    assert run("prices", "glass.csv", "--move", "het=1", capfd=capfd) == (
        2, "", "glass.csv: --move: expected the name of a row, got 'het'; did you mean 'heat'?\n"
    )  # fmt: skip


def test_a_time_limit_ends_the_work_with_four(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glass.csv", GLASSHOUSE)
    later = iter(np.arange(0.0, 1e6, 100.0))
    monkeypatch.setattr("lpview.commands.prices.time.monotonic", lambda: float(next(later)))
    status, out, _ = run("check", "glass.csv", "--prices", "--time-limit", "50", capfd=capfd)
    assert status == 4
    assert "stopped: price intervals were not finished (time limit reached); dual values" in out


SLOW = """
import signal, sys, threading, time
from lpview import cli
from lpview.commands import about
inner = about.steps
def slow(watch, limit, started):
    step = inner(watch, limit, started)
    def waiting():
        print("ready", flush=True)
        for _ in range(100):
            if watch.stop.is_set():
                break
            time.sleep(0.1)
        step()
    return waiting
about.steps = slow
sys.exit(cli.main(["prices", "glass.csv"]))
"""


def test_ctrl_c_prints_what_is_known(tmp_path):
    written(tmp_path, "glass.csv", GLASSHOUSE)
    command = [sys.executable, "-c", SLOW]
    with subprocess.Popen(
        command, cwd=tmp_path, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True
    ) as running:
        assert running.stdout.readline() == "ready\n"
        started = time.monotonic()
        running.send_signal(signal.SIGINT)
        out, err = running.communicate(timeout=30)
    assert time.monotonic() - started < 9
    assert (running.returncode, err) == (4, "")
    assert "(interrupted)\n" in out
    assert "dual values of 2 of 3 rows and reduced costs of 1 of 2 columns are not unique" in out


@pytest.mark.parametrize(
    ("option", "words"),
    [
        ("--interior", "one plan satisfies every inequality with a margin of"),
        ("--redundant", "sides of inequality rows examined"),
        ("--digits", "digits of the objective"),
    ],
)
def test_reports_about_the_whole_model(tmp_path, monkeypatch, capfd, option, words):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glass.csv", GLASSHOUSE)
    status, out, _ = run("prices", "glass.csv", option, capfd=capfd)
    assert status == 0
    assert words in out
    assert f"reproduce  lpview prices glass.csv {option}\n" in out
