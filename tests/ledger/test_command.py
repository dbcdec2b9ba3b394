"""``lpview check MODEL --row NAME --column NAME``."""

from __future__ import annotations

from pathlib import Path

import pytest

from lpview import cli

BED = """[c],maximize
column,tall,short
income,3,2

[A]
row,tall,short
room,2,1
hours,1,1

[b]
row,relation,rhs
room,<=,100
hours,<=,80
"""
# Worked by hand: the rows cross at tall 20, short 60; income 180; prices 1 and 1.

INFEASIBLE = BED + "[bounds]\ncolumn,lower,upper\ntall,60,\n"


@pytest.fixture
def bed(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("bed.csv").write_text(BED)
    return Path("bed.csv")


def run(*words, capfd):
    status = cli.main(list(words))
    out, err = capfd.readouterr()
    return status, out, err


def test_ledgers_stand_in_place_of_the_report(bed, capfd):
    status, out, err = run("check", "bed.csv", "--column", "tall", "--row", "room", capfd=capfd)
    assert (status, err) == (0, "")
    first, second = (
        out.index("column tall >= 0, cost 3 less: 2 terms"),
        out.index("row room <= 100"),
    )
    assert first < second  # as asked for
    assert "primal feasibility" not in out
    assert out.splitlines()[-2] == "reproduce  lpview check bed.csv --column tall --row room"
    rows = [line.split() for line in out.splitlines()]
    assert ["tall", "2", "20", "40"] in rows and ["short", "1", "60", "60"] in rows
    assert ["room", "2", "1", "2"] in rows and ["hours", "1", "1", "1"] in rows


def test_the_reproducing_command_reproduces(bed, capfd):
    words = ("check", "bed.csv", "--row", "room", "--zero", "1e-7", "--full")
    _, out, _ = run(*words, capfd=capfd)
    assert run(*out.splitlines()[-2].split()[2:], capfd=capfd)[1] == out


def test_markdown(bed, capfd):
    words = ("check", "bed.csv", "--row", "room", "--format", "markdown")
    status, out, _ = run(*words, capfd=capfd)
    assert status == 0
    assert "| tall | 2 | 20 | 40 |" in out
    assert "lpview check bed.csv --format markdown --row room" in out


def test_an_unknown_name_is_a_mistake_with_the_nearest_name(bed, capfd):
    status, out, err = run(
        *("check", "bed.csv", "--row", "rooms", "--row", "room", "--column", "zebra"), capfd=capfd
    )
    assert (status, out) == (2, "")
    assert err == (
        "bed.csv: --row: expected the name of a row, got 'rooms'; did you mean 'room'?\n"
        "bed.csv: --column: expected the name of a column, got 'zebra'\n"
    )


def test_of_several_models_only_the_one_without_the_row_is_refused(bed, capfd):
    Path("other.csv").write_text(BED.replace("room", "space"))
    status, out, err = run("check", "bed.csv", "other.csv", "--row", "room", capfd=capfd)
    assert status == 2
    assert "bed.csv: optimal" in out and "other.csv: optimal" not in out
    assert err == "other.csv: --row: expected the name of a row, got 'room'\n"


@pytest.mark.parametrize(
    ("words", "problem"),
    [
        (
            ("--row", "room", "--format", "json"),
            "--row, --column, --families and --summary are printed as text or markdown; "
            "json has every line anyway",
        ),
        (
            ("--families", "--format", "json"),
            "--row, --column, --families and --summary are printed as text or markdown; "
            "json has every line anyway",
        ),
        (
            ("--families", "--column", "tall"),
            "expected --row and --column, or --families, got both",
        ),
    ],
)
def test_combinations_that_mean_nothing_are_refused(words, problem, bed, capfd):
    with pytest.raises(SystemExit) as stop:
        cli.main(["check", "bed.csv", *words])
    out, err = capfd.readouterr()
    assert stop.value.code == 2 and out == ""
    assert err.endswith(f"error: {problem}\n")


def test_without_an_optimum_the_report_says_why(bed, capfd):
    bed.write_text(INFEASIBLE)
    status, out, _ = run("check", "bed.csv", "--row", "room", capfd=capfd)
    assert status == 3
    assert out.startswith("bed.csv: infeasible, certified")
    assert "reproduce  lpview check bed.csv --row room\n" in out


def test_a_name_that_begins_like_an_option(bed, capfd):
    bed.write_text(BED.replace("room", "-1"))
    status, out, _ = run("check", "bed.csv", "--row=-1", capfd=capfd)
    assert status == 0 and "reproduce  lpview check bed.csv --row=-1\n" in out
