"""The command line as a person or a pipeline uses it: streams, files, exit status."""

from __future__ import annotations

import io
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from lpview import cli, exit_status
from lpview.blocks import read_model
from lpview.model import identical

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
UNBOUNDED = BED.replace("room,2,1", "room,0,1").replace("hours,1,1", "hours,-1,1")


@pytest.fixture
def bed(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(tmp_path)
    path = Path("bed.csv")
    path.write_text(BED)
    return path


def run(*words: str, capfd: pytest.CaptureFixture[str]) -> tuple[int, str, str]:
    status = cli.main(list(words))
    out, err = capfd.readouterr()
    return status, out, err


def test_check_prints_the_verdict_first(bed, capfd):
    status, out, err = run("check", "bed.csv", capfd=capfd)
    assert status == 0 and err == ""
    first = out.splitlines()[0]
    assert first == "bed.csv: optimal, verified: every condition passed at 1e-9 scaled"
    assert "objective              primal 180, dual 180, gap 0" in out
    assert "reproduce  lpview check bed.csv" in out


def test_a_model_alone_is_checked_where_there_is_no_terminal(bed, capfd):
    assert run("bed.csv", capfd=capfd) == run("check", "bed.csv", capfd=capfd)


def test_json_has_the_documented_fields(bed, capfd):
    status, out, _ = run("check", "bed.csv", "--format", "json", capfd=capfd)
    found = json.loads(out)
    assert (status, found["format"], found["status"], found["passed"]) == (0, 1, "optimal", True)
    assert found["objective"]["primal"] == 180
    room, hours = found["constraints"]
    assert (room["row"], room["value"], room["lower"], room["upper"]) == ("room", 100, "-inf", 100)
    assert (room["slack"], room["slack_lower"], room["slack_upper"]) == (0, "inf", 0)
    assert (room["dual_value"], hours["dual_value"]) == (1, 1)
    assert room["flags"] == ["zero slack"]
    assert [line["value"] for line in found["variables"]] == [20, 60]
    assert [line["condition"] for line in found["residuals"]] == [
        *("primal feasibility", "dual feasibility", "stationarity"),
        *("complementary slackness", "duality gap"),
    ]
    assert set(found["tool"]) == {"lpview", "highs", "python"}


@pytest.mark.parametrize(
    ("text", "status", "word"),
    [(BED, 0, "optimal"), (INFEASIBLE, 3, "infeasible"), (UNBOUNDED, 3, "unbounded")],
)
def test_exit_status_and_json_status_agree(text, status, word, bed, capfd):
    bed.write_text(text)
    found, out, _ = run("check", "bed.csv", "--format", "json", capfd=capfd)
    assert found == status
    assert json.loads(out)["status"] == word


def test_a_failed_condition_exits_with_one(bed, capfd):
    # Interior point without crossover leaves more than 1e-15 on some line.
    words = ("check", "bed.csv", "--method", "interior-point", "--no-crossover")
    status, out, _ = run(*words, "--tolerance", "1e-15", capfd=capfd)
    assert status == 1
    assert out.startswith("bed.csv: NOT VERIFIED: the solver says optimal, but the check fails ")
    assert "prices from the basis  not done: the basis is missing" in out
    assert "degenerate           not known without a basis" in out


def test_bad_input_goes_to_standard_error_and_nothing_is_written(bed, capfd):
    bed.write_text(BED.replace("room,<=,100", "room,<=,many"))
    status, out, err = run("check", "bed.csv", "--output", "ticket.txt", capfd=capfd)
    assert (status, out) == (2, "")
    assert err.startswith("bed.csv:12: [b] rhs: expected a number, got ")
    assert not Path("ticket.txt").exists()


def test_several_models_keep_the_good_reports_and_the_worst_status(bed, capfd):
    Path("no.csv").write_text(INFEASIBLE)
    status, out, err = run("check", "bed.csv", "gone.csv", "no.csv", capfd=capfd)
    assert status == 2
    assert "bed.csv: optimal" in out and "no.csv: infeasible" in out
    assert err == "gone.csv: expected a file or folder, got nothing of that name\n"
    assert run("check", "bed.csv", "no.csv", capfd=capfd)[0] == 3


def test_the_order_of_exit_statuses_is_documented(capfd):
    assert [exit_status.worst(pair) for pair in ([0, 3], [3, 4], [4, 1], [1, 2], [0, 0])] == [
        *(3, 4, 1, 2, 0),
    ]


def test_output_goes_to_a_file_and_is_the_same_text(bed, capfd):
    _, printed, _ = run("check", "bed.csv", capfd=capfd)
    status, out, _ = run("check", "bed.csv", "--output", "ticket.txt", capfd=capfd)
    assert (status, out) == (0, "")
    assert Path("ticket.txt").read_text() == printed
    assert [path.name for path in Path().iterdir() if path.name.startswith(".")] == []


def test_an_output_that_cannot_be_written_is_named(bed, capfd):
    status, out, err = run("check", "bed.csv", "--output", "no/such/ticket.txt", capfd=capfd)
    assert (status, out) == (2, "")
    assert err == (
        "no/such/ticket.txt: expected a file that can be written, got: No such file or directory\n"
    )


def test_standard_input_is_saved_beside_the_report(bed, capfd, monkeypatch):
    Path("out").mkdir()
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(BED.encode())))
    status, _, err = run("check", "-", "--output", "out/ticket.txt", capfd=capfd)
    saved = next(path for path in Path("out").iterdir() if path.suffix == ".csv")
    assert status == 0
    assert err == f"saved standard input: {saved}\n"
    assert saved.read_text() == BED
    assert f"reproduce  lpview check {saved}\n" in Path("out/ticket.txt").read_text()


def test_the_reproducing_command_reproduces(bed, capfd):
    words = ("check", "bed.csv", "--zero", "1e-7", "--method", "simplex", "--no-second-route")
    _, first, _ = run(*words, "--tolerance", "2e-8", "--time-limit", "60", capfd=capfd)
    line = next(line for line in first.splitlines() if line.startswith("reproduce"))
    assert run(*line.split()[2:], capfd=capfd)[1] == first


def test_the_dual_is_a_model_that_checks_to_the_same_objective(bed, capfd):
    assert run("dual", "bed.csv", "--output", "dual.csv", capfd=capfd) == (0, "", "")
    _, out, _ = run("check", "dual.csv", "--format", "json", capfd=capfd)
    found = json.loads(out)
    assert found["model"]["sense"] == "minimize"
    assert found["objective"]["primal"] == 180
    assert [line["value"] for line in found["variables"]] == [1, 1]
    assert [line["dual_value"] for line in found["constraints"]] == [20, 60]


def test_convert_writes_the_identical_model(bed, capfd):
    assert run("convert", "bed.csv", "--output", "again.csv", capfd=capfd) == (0, "", "")
    assert identical(read_model("bed.csv").model, read_model("again.csv").model)


@pytest.mark.parametrize("words", [[], ["check"], ["check", "m.csv", "--tolerance", "-1"]])
def test_wrong_usage_exits_with_two(words, capfd):
    with pytest.raises(SystemExit) as stop:
        cli.main(words)
    assert stop.value.code == 2
    assert "error:" in capfd.readouterr().err


def test_a_reader_that_leaves_early_causes_no_complaint(bed):
    command = f"{sys.executable} -m lpview check bed.csv --full | head -1"
    done = subprocess.run(command, shell=True, capture_output=True, text=True, check=False)
    assert done.stdout.startswith("bed.csv: optimal")
    assert done.stderr == ""


def test_two_runs_print_the_same_bytes(bed):
    command = [sys.executable, "-m", "lpview", "check", "bed.csv", "--format", "markdown"]
    runs = [
        subprocess.run(
            command, capture_output=True, check=True, env={**os.environ, "PYTHONHASHSEED": seed}
        ).stdout
        for seed in ("1", "2")
    ]
    assert runs[0] == runs[1]


def test_a_defect_of_ours_is_one_line_and_no_traceback(bed, capfd, monkeypatch):
    def broken(*_: object) -> None:
        raise ZeroDivisionError("by zero")

    monkeypatch.setattr("lpview.commands.arriving.examine", broken)
    monkeypatch.delenv("LPVIEW_TRACEBACK", raising=False)
    status, out, err = run("check", "bed.csv", capfd=capfd)
    assert (status, out) == (4, "")
    assert err.count("\n") == 1 and "ZeroDivisionError: by zero" in err
