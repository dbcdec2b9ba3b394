"""``lpview curve``: options, text, CSV, JSON, exit statuses."""

from __future__ import annotations

import argparse
import csv
import io
import json
import shlex
from pathlib import Path

import pytest

from lpview import cli, exit_status
from lpview.blocks import InputError, read_model
from lpview.commands import curve as curve_command
from lpview.options.curve import add_curve_options
from lpview.options.inputs import add_input_options
from tests.curve.helpers import DATA

GLASS = str(DATA / "textbook/a1.csv")
# Hillier and Lieberman, section 3.1 (from memory); the pieces are worked out by hand.

TWO_SIDED = """[c],maximize
column,x1,x2,r1
earnings,1,2,0
[A]
row,x1,x2,r1
r1,1,1,0
r2,1,0,1
free,1,1,1
[b]
row,lower,upper
r1,1,3
r2,0,5
free,none,none
[bounds]
column,lower,upper
x1,0,2
x2,0,2
r1,0,1
"""


def parser():
    made = argparse.ArgumentParser()
    made.add_argument("model")
    made.add_argument("--output")
    add_input_options(made)
    cli._add_solve_options(made)
    add_curve_options(made)
    made.set_defaults(command="curve")
    return made


def run(capfd, *words):
    status = curve_command.curve(parser().parse_args(list(words)))
    out, err = capfd.readouterr()
    return status, out, err


def wrong(*words):
    with pytest.raises(InputError) as caught:
        curve_command.curve(parser().parse_args(list(words)))
    return str(caught.value)


@pytest.fixture
def two_sided(tmp_path: Path) -> str:
    path = tmp_path / "two-sided.csv"
    path.write_text(TWO_SIDED)
    return str(path)


def test_the_report(capfd):
    status, out, err = run(capfd, GLASS, "--row", "r2", "--ascii")
    assert status == [exit_status.DONE] and err == "" and out.isascii()
    lines = out.splitlines()
    assert lines[0] == f"{GLASS}: value curve of the right-hand side of row r2"
    assert lines[1] == "most decimals c 0, A 0, b 0"
    assert lines[2] == "concave, as theory demands: 3 pieces, 2 breakpoints"
    del lines[1]
    assert lines[3:6] == [
        "as it stands  12, optimal objective 36",
        "below 0       no plan is left",
        "above 30      the same rate, however far",
    ]
    assert [line.split() for line in lines[9:13]] == [
        ["from", "to", "rate", "objective", "at", "from", "objective", "at", "to"],
        ["0", "6", "2.5", "12", "27"],
        ["6", "18", "1.5", "27", "45"],
        ["18", "30", "0", "45", "45"],
    ]
    assert lines[14] == "objective over the right-hand side; o breakpoint, @ as it stands"
    assert lines[-2] == f"reproduce  lpview curve {GLASS} --row=r2 --ascii"
    assert max(map(len, lines[14:-2])) <= 78


def test_steps_and_recorded_lines(capfd):
    _, out, _ = run(capfd, GLASS, "--row=r2", "--steps=5", "--record", "x1", "--record", "r3")
    table = out[out.index("along the curve") :].split("\n\n")[0].splitlines()[2:]
    assert [line.split()[0] for line in table] == ["0", "3", "6", "12", "18", "24", "30"]
    assert table[2].split() == [
        "6",
        "27",
        "2.5",
        "1.5",
        "breakpoint",
        "4",
        "0",
        "18",
        "not",
        "unique",
    ]
    assert table[3].split()[4:] == ["as", "it", "stands", "2", "0", "18", "1"]
    assert "dual value of row r3 over the right-hand side" in out
    assert "csv and json have the least and the greatest" in out


def rows_of(text):
    return list(csv.DictReader(io.StringIO(text)))


def test_csv_along_the_curve(capfd):
    words = ["--row=r2", "--steps=5", "--record=x1", "--record=r3", "--format=csv"]
    status, out, err = run(capfd, GLASS, *words)
    assert status == [exit_status.DONE] and err == ""
    rows = rows_of(out)
    assert [float(row["number"]) for row in rows] == [0, 3, 6, 12, 18, 24, 30]
    assert [float(row["objective"]) for row in rows] == [12, 19.5, 27, 36, 45, 45, 45]
    assert [row["rate below"] for row in rows] == ["", "2.5", "2.5", "1.5", "1.5", "0", "0"]
    assert [row["rate above"] for row in rows] == ["2.5", "2.5", "1.5", "1.5", "0", "0", "0"]
    assert [row["mark"] for row in rows] == [
        "", "", "breakpoint", "as it stands", "breakpoint", "", "",
    ]  # fmt: skip
    assert [float(row["column x1: least value"]) for row in rows] == [4, 4, 4, 2, 0, 0, 0]
    least, greatest = (
        [float(row[f"row r3: {end} dual value"]) for row in rows] for end in ("least", "greatest")
    )
    assert least == pytest.approx([0, 0, 0, 1, 1, 2.5, 2.5])
    assert greatest == pytest.approx([0, 0, 1, 1, 2.5, 2.5, 2.5])


def test_json(capfd):
    words = ["--row=r2", "--span=2:20", "--record=r3", "--steps=2", "--format=json"]
    status, out, _ = run(capfd, GLASS, *words)
    content = json.loads(out)
    made = content["curve"]
    assert status == [exit_status.DONE] and content["format"] == 1 and content["reason"] is None
    assert (made["row"], made["number"], made["sides"]) == ("r2", "right-hand side", ["upper"])
    assert (made["now"], made["objective"], made["shape"]) == (12, 36, "concave")
    assert made["breakpoints"] == pytest.approx([6, 18])
    assert [piece["rate"] for piece in made["pieces"]] == pytest.approx([2.5, 1.5, 0])
    assert (made["below"], made["above"], made["shape_holds"]) == ("goes on", "for ever", True)
    there = next(place for place in made["places"] if place["number"] == 18)
    assert there["lines"] == [{"row": "r3", "value": [18, 18], "dual_value": [1, 2.5]}]


def test_the_command_reproduces_itself(capfd):
    words = ["--bound", "x1:lower", "--span=-1:3", "--steps", "2", "--record", "row:r1"]
    _, first, _ = run(capfd, GLASS, *words)
    command = next(line for line in first.splitlines() if line.startswith("reproduce"))
    again = shlex.split(command.removeprefix("reproduce"))
    assert again[:2] == ["lpview", "curve"]
    assert run(capfd, *again[2:])[1] == first


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["--row=r22"], "--row: expected the name of a row, got 'r22'; did you mean 'r2'?"),
        (["--cost=x11"], "--cost: expected the name of a column, got 'x11'; did you mean 'x1'?"),
        (
            ["--bound=y:lower"],
            "--bound: expected the name of a column, got 'y'",
        ),
        (
            ["--bound=x1:upper"],
            "--bound: expected a column that has its upper bound, got 'x1', which has none "
            "(--span LOW:HIGH says where it might be)",
        ),
        (
            ["--row=r2", "--record=x22"],
            "--record: expected the name of a row or column, got 'x22'; did you mean 'x2'?",
        ),
    ],
)
def test_what_is_not_there(words, message):
    assert wrong(GLASS, *words) == f"{GLASS}: {message}"


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["--row=r2", "--span=5:5"], "--span: expected LOW:HIGH with LOW below HIGH, got 5:5"),
        (["--row=r2", "--span=7:5"], "--span: expected LOW:HIGH with LOW below HIGH, got 7:5"),
        (["--row=r2", "--span=7"], "--span: expected LOW:HIGH with LOW below HIGH, got 7"),
        (["--row=r2", "--span=0:inf"], "--span: expected LOW:HIGH with LOW below HIGH, got 0:inf"),
        (["--bound=x1"], "expected COLUMN:lower or COLUMN:upper, got x1"),
        (["--bound=x1:low"], "expected COLUMN:lower or COLUMN:upper, got x1:low"),
        (["--row=r2", "--steps=0"], "--steps: expected a whole number from 1 to 100000, got 0"),
        ([], "one of the arguments --row --cost --bound is required"),
        (["--row=r2", "--cost=x1"], "not allowed with argument"),
    ],
)
def test_wrong_use(words, message, capfd):
    with pytest.raises(SystemExit) as caught:
        parser().parse_args([GLASS, *words])
    assert caught.value.code == exit_status.USAGE
    assert message in capfd.readouterr().err


def test_a_two_sided_row_moves_its_active_side(two_sided, capfd):
    """x1 + x2 is held at 3, where it earns 5; x2 alone goes to 2, and x1 to 2."""
    _, out, _ = run(capfd, two_sided, "--row=r1", "--format=json")
    made = json.loads(out)["curve"]
    assert (made["number"], made["sides"], made["now"]) == ("upper side", ["upper"], 3)
    assert [(p["from"], p["to"], p["rate"]) for p in made["pieces"]][:2] == [(1, 2, 2), (2, 4, 1)]
    assert made["below"] == "infeasible"  # lower would exceed upper


def test_a_row_without_sides(two_sided):
    assert wrong(two_sided, "--row=free").endswith(
        "--row: expected a row with a side, got 'free', which has none"
    )


def test_a_name_that_is_both_is_the_row(two_sided):
    lp = read_model(two_sided).model
    names = ["r1", "row:r1", "column:r1", "x2", "r1"]
    assert curve_command.recorded_lines(lp, names, "") == [0, 5, 4]


@pytest.mark.parametrize(
    ("file", "words", "status", "says"),
    [
        ("a1", ["--row=r2", "--span=-5:-1"], exit_status.NO_OPTIMUM, "there is no plan anywhere"),
        ("a1", ["--row=r2", "--span=-5:0"], exit_status.DONE, "an optimum at 0 only; it is 12"),
        (
            "a1",
            ["--row=r2", "--time-limit=1e-9"],
            exit_status.NOT_ESTABLISHED,
            "stopped before there was",
        ),
        ("c1-infeasible", ["--row=r1"], exit_status.NO_OPTIMUM, "infeasible, certified"),
        ("c1-unbounded", ["--cost=x1"], exit_status.NO_OPTIMUM, "unbounded, certified"),
    ],
)
@pytest.mark.parametrize("form", ["text", "csv", "json"])
def test_where_there_is_no_curve(file, words, status, says, form, capfd):
    words = [str(DATA / f"textbook/{file}.csv"), *words, f"--format={form}"]
    found, out, err = run(capfd, *words)
    assert found == [status]
    assert says in (err if form == "csv" else out)
    assert (out == "") == (form == "csv")


def test_written_to_a_file(tmp_path, capfd):
    path = tmp_path / "curve.csv"
    status, out, _ = run(capfd, GLASS, "--cost=x1", "--format=csv", "--output", str(path))
    assert status == [exit_status.DONE] and out == ""
    assert [row["rate above"] for row in rows_of(path.read_text())] == ["0", "2", "2", "4", "4"]
