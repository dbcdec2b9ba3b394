"""How a model is asked to be read: costs negated back, labels of a file, the command again."""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path

import pytest
from hypothesis import given, settings

from lpview import cli
from lpview.blocks import read_model
from lpview.inputs import ReadAs, ending, negated, read_input, read_input_bytes
from lpview.model import LinearProgram, Sense, identical
from lpview.options.check import REPORT_OPTIONS
from lpview.solver import solve
from tests.strategies import linear_programs

MODEL = """\
[c],minimize
column,cost
tomato,-1/3
basil,0

[offset],-0.1

[A]
row,column,coefficient
bench,tomato,1
bench,basil,1

[b]
row,relation,rhs
bench,<=,6
"""


@pytest.fixture(autouse=True)
def _in_an_empty_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    Path("x.csv").write_text(MODEL, encoding="utf-8")


def test_costs_are_negated_back() -> None:
    lp = read_input("x.csv", ReadAs(negated=True)).model
    assert lp.sense is Sense.MAXIMIZE
    assert lp.odd["c"] == {0: Fraction(1, 3)}
    assert lp.c.tolist() == [1 / 3, 0.0]
    assert str(lp.c[1]) == "0.0"
    assert lp.offset == 0.1


def test_the_optimum_of_a_negated_model_is_the_opposite() -> None:
    plain = solve(read_model("x.csv").model).answer
    back = solve(read_input("x.csv", ReadAs(negated=True)).model).answer
    assert plain.x.tolist() == back.x.tolist()
    assert plain.y.tolist() == (-back.y).tolist()


@settings(deadline=None)
@given(linear_programs())
def test_negated_twice_is_the_same(lp: LinearProgram) -> None:
    assert identical(negated(negated(lp)), lp)
    assert negated(lp).sense is not lp.sense


def run(*arguments: str, capsys: pytest.CaptureFixture[str]) -> tuple[int, str, str]:
    status = cli.main(arguments)
    out, err = capsys.readouterr()
    return status, out, err


def test_every_report_says_that_costs_were_negated(capsys: pytest.CaptureFixture[str]) -> None:
    said = "costs negated back, as --negated asks: minimize became maximize"
    for command in ("check", "prove", "prices", "plans", "curve"):
        line = ["--row", "bench"] if command == "curve" else []
        status, out, _ = run(command, "x.csv", "--negated", *line, capsys=capsys)
        assert (status, said in out) == (0, True), command
        assert f"lpview {'check' if command == 'prove' else command} x.csv --negated" in out
    _, out, _ = run("check", "x.csv", "--negated", "--format", "json", capsys=capsys)
    assert said in out


def test_convert_keeps_labels(capsys: pytest.CaptureFixture[str]) -> None:
    text = MODEL + "\n[labels]\nkind,name,label,unit,group\nrow,bench,the bench,m2,\n"
    Path("y.csv").write_text(text, encoding="utf-8")
    status, out, _ = run("convert", "y.csv", capsys=capsys)
    assert status == 0
    assert out.endswith("\n\n[labels]\nkind,name,label,unit,group\nrow,bench,the bench,m2,\n")
    assert read_input_bytes(out.encode(), "y").labels == read_input("y.csv").labels


def test_labels_of_a_file_replace_those_of_the_model() -> None:
    text = MODEL + "\n[labels]\nkind,name,label,unit,group\nrow,bench,the bench,m2,\n"
    Path("y.csv").write_text(text, encoding="utf-8")
    Path("l.csv").write_text("kind,name,label,unit,group\nrow,bench,,shelf,\n", encoding="utf-8")
    reading = read_input("y.csv", ReadAs(labels="l.csv"))
    assert reading.labels.row(0).unit == "shelf"
    assert reading.labels.row(0).label == ""
    assert reading.notes.remarks == ("the model's own labels replaced by those of --labels",)
    assert read_input("x.csv", ReadAs(labels="l.csv")).notes.remarks == ()


def test_the_command_that_reproduces_a_report_names_how_it_was_read(
    capsys: pytest.CaptureFixture[str],
) -> None:
    Path("l.csv").write_text("kind,name,label,unit,group\nrow,bench,,m2,\n", encoding="utf-8")
    given = ["x.csv", "--decimal", "point", "--labels", "l.csv", "--negated"]
    _, out, _ = run("check", *given, capsys=capsys)
    assert f"lpview check {' '.join(given)}\n" in out


def test_what_standard_input_is_saved_as() -> None:
    assert ending(MODEL.encode()) == ".csv"
    assert ending(b"* a comment\nNAME  x\nROWS\n") == ".mps"


WRONG = {
    ("check", "x.csv", "--rounded"): "expected --rounded together with --plan",
    ("check", "x.csv", "--complete"): "expected --complete together with --plan",
    ("check", "x.csv", "--limit", "h*=1"): "expected --limit together with --plan",
    ("check", "x.csv", "y.csv", "--plan", "p"): "expected --plan together with one MODEL",
    ("check", "x.csv", "--plan", "p", "--prove"): "expected --plan without --prove",
    ("check", "x.csv", "--plan", "p", "--limit", "h=-1"): (
        "argument --limit: expected PATTERN=AMOUNT with an amount of 0 or more, got h=-1"
    ),
    ("check", "x.csv", "--summary", "--families"): "expected --summary or --families, got both",
    ("check", "x.csv", "--relax", "--fix-integers", "p"): (
        "argument --fix-integers: not allowed with argument --relax"
    ),
}


@pytest.mark.parametrize("arguments", WRONG)
def test_wrong_use_is_told(arguments: tuple[str, ...], capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit) as caught:
        cli.main(arguments)
    assert caught.value.code == 2
    assert capsys.readouterr().err.splitlines()[-1].endswith(f"error: {WRONG[arguments]}")


def test_options_of_the_report_open_no_screen(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("sys.stdin.isatty", lambda: True, raising=False)
    monkeypatch.setattr("sys.stdout.isatty", lambda: True, raising=False)
    for option in ("--summary", "--plan=p.csv", "--format=json"):
        assert cli._with_command(["x.csv", option])[0] == "check"
    assert cli._with_command(["x.csv", "--labels", "l.csv"])[0] == "open"


def test_options_of_the_report_are_those_that_the_screen_lacks() -> None:
    commands = next(a for a in cli._parser()._actions if a.dest == "command").choices
    assert isinstance(commands, dict)
    check, screen = (set(commands[name]._option_string_actions) for name in ("check", "open"))
    assert check - screen == REPORT_OPTIONS
