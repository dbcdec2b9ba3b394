"""Inputs that could be read as something else than a person would say: said, or refused."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

from lpview import cli
from lpview.blocks import InputError, read_model_bytes
from lpview.inputs import ReadAs, read_input
from lpview.proof import kernel

MODEL = """\
[c],minimize
column,nurse,hour
cost,2,3

[A]
row,nurse,hour
# of nurses,1,1
hours,8,10

[b]
row,relation,rhs
# of nurses,>=,20
hours,>=,80
"""


@pytest.fixture(autouse=True)
def _in_an_empty_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    Path("x.csv").write_text(MODEL, encoding="utf-8")


def run(*arguments: str, capsys: pytest.CaptureFixture[str]) -> tuple[int, str, str]:
    status = cli.main(arguments)
    out, err = capsys.readouterr()
    return status, out, err


def test_comments_that_read_like_data_are_counted_on_every_report(
    capsys: pytest.CaptureFixture[str],
) -> None:
    said = "2 comments that read like data left out: first '# of nurses' on line 7"
    for options in ([], ["--summary"], ["--row", "hours"], ["--families"]):
        status, out, _ = run("check", "x.csv", *options, capsys=capsys)
        assert status == 0
        assert said in " ".join(out.split()), options
    assert said in run("convert", "x.csv", capsys=capsys)[2]


@pytest.mark.parametrize(
    ("line", "counted"),
    [
        ("# a note", False),
        ("# a note, with a comma", False),
        ("# a note, of 3, words", False),
        ("# bench,tomato,7", True),
        ('"# bench",tomato,1e5', True),
        ("#,,", False),
    ],
)
def test_which_comments_read_like_data(line: str, counted: bool) -> None:
    text = (
        "[c],minimize\ncolumn,cost\ntomato,1\n\n[A]\nrow,column,coefficient\nheat,tomato,1\n"
        f"{line}\n\n[b]\nrow,relation,rhs\nheat,>=,1\n"
    )
    assert bool(read_model_bytes(text.encode(), "x.csv").notes.remarks) is counted


@pytest.mark.parametrize("line", ["[Offset],5", "[OFFSET],5", "[ offset ],5"])
def test_a_constant_with_other_capitals_is_no_column(line: str) -> None:
    text = f"[c],minimize\ncolumn,cost\ntomato,1\n{line}\n\n[A]\nrow,column,coefficient\n\n"
    text += "[b]\nrow,relation,rhs\n"
    with pytest.raises(InputError) as caught:
        read_model_bytes(text.encode(), "x.csv")
    name = line.partition(",")[0]
    assert f"got '{name}'; did you mean '[offset]'?" in str(caught.value)


def test_names_that_look_the_same_are_told() -> None:
    text = "[c],minimize\ncolumn,cost\nCaf\u00e9,1\nCafe\u0301,1\n\n[A]\n"
    text += "row,column,coefficient\n\n[b]\nrow,relation,rhs\n"
    notes = read_model_bytes(text.encode(), "x.csv").notes
    assert notes.names_alike == (("Caf\u00e9", "Cafe\u0301"),)


@pytest.mark.parametrize("cell", ["01/03", "1/03", "007/2"])
def test_a_fraction_with_leading_zeros_is_taken_for_a_date(cell: str) -> None:
    with pytest.raises(InputError) as caught:
        read_model_bytes(MODEL.replace("cost,2", f"cost,{cell}").encode(), "x.csv")
    assert "a spreadsheet turned 1/3 into a date?" in str(caught.value)


def test_a_maximization_is_not_turned_back() -> None:
    Path("x.csv").write_text(MODEL.replace("minimize", "maximize"), encoding="utf-8")
    with pytest.raises(InputError) as caught:
        read_input("x.csv", ReadAs(negated=True))
    assert str(caught.value) == (
        "x.csv: expected minimize with --negated, got maximize; "
        "only a minimization of negated costs is turned back"
    )


def test_labels_prove_nothing(capsys: pytest.CaptureFixture[str]) -> None:
    labels = "\n[labels]\nkind,name,label,unit,group\nrow,hours,hours of work,h,\n"
    Path("x.csv").write_text(MODEL + labels, encoding="utf-8")
    assert run("prove", "x.csv", "--certificate", "c.txt", capsys=capsys)[0] == 0
    _, blocks, _ = run("convert", "x.csv", capsys=capsys)
    assert "[labels]" in blocks
    certificate = Path("c.txt").read_bytes()
    assert kernel.verify(blocks.encode(), certificate) == "optimal objective 20"
    Path("blocks.csv").write_text(blocks, encoding="utf-8")
    command = [sys.executable, kernel.__file__, "blocks.csv", "c.txt"]
    done = subprocess.run(command, capture_output=True, text=True, check=False)
    assert done.stdout == "Proved: optimal objective 20\n"


def test_a_model_of_nothing(capsys: pytest.CaptureFixture[str]) -> None:
    empty = "[c],minimize\ncolumn,cost\n\n[A]\nrow,column,coefficient\n\n[b]\nrow,relation,rhs\n"
    Path("x.csv").write_text(empty, encoding="utf-8")
    for words in (["check", "--summary"], ["check", "--prices"], ["prices"], ["plans"], ["prove"]):
        status, _, err = run(words[0], "x.csv", *words[1:], capsys=capsys)
        assert (status, "mistake" in err) == (0, False), words


def test_prove_and_check_print_the_same_page(capsys: pytest.CaptureFixture[str]) -> None:
    _, one, _ = run("prove", "x.csv", "--summary", capsys=capsys)
    _, other, _ = run("check", "x.csv", "--prove", "--summary", capsys=capsys)
    assert one == other


INTEGERS = """\
NAME x
ROWS
 N cost
 G need
COLUMNS
 M 'MARKER' 'INTORG'
 vans cost 5 need 3
 M 'MARKER' 'INTEND'
 litres cost 1 need 1
RHS
 r need 10
BOUNDS
 UP b vans 9
 LO b litres 2
ENDATA
"""


def test_values_are_needed_of_integer_columns_only(capsys: pytest.CaptureFixture[str]) -> None:
    Path("x.mps").write_text(INTEGERS, encoding="utf-8")
    Path("p.csv").write_text("column,value\nvans,2\n", encoding="utf-8")
    status, out, _ = run("check", "x.mps", "--fix-integers", "p.csv", capsys=capsys)
    assert status == 0
    assert "primal 14" in out
    Path("p.csv").write_text("column,value\nvan,2\n", encoding="utf-8")
    _, _, err = run("check", "x.mps", "--fix-integers", "p.csv", capsys=capsys)
    assert err == (
        "p.csv:2: [x] column: expected a column of the model's [c], got 'van'; "
        "did you mean 'vans'?\n"
    )


def test_what_is_written_without_a_report_says_the_scope_beside_it(
    capsys: pytest.CaptureFixture[str],
) -> None:
    Path("x.mps").write_text(INTEGERS, encoding="utf-8")
    said = "x.mps: linear relaxation: 1 integer column taken as continuous\n"
    for words in (
        ["dual"],
        ["convert"],
        ["plans", "--column", "vans", "--least"],
        ["prices", "--format", "csv"],
        ["curve", "--row", "need", "--format", "csv"],
    ):
        _, _, err = run(words[0], "x.mps", "--relax", *words[1:], capsys=capsys)
        assert said in err, words
    run("prove", "x.mps", "--relax", "--certificate", "c.txt", capsys=capsys)
    assert said in run("verify", "x.mps", "c.txt", "--relax", capsys=capsys)[2]


def test_a_plan_has_its_own_decimal_mark(capsys: pytest.CaptureFixture[str]) -> None:
    comma = MODEL.replace(",", ";").replace("cost;2", "cost;2,125").replace("# of", "of")
    Path("x.csv").write_text(comma, encoding="utf-8")
    for plan in ("column,value\nnurse,20.5\n", "column;value\nnurse;20,5\n"):
        Path("p.csv").write_text(plan, encoding="utf-8")
        words = ["x.csv", "--decimal", "comma", "--plan", "p.csv"]
        status, out, _ = run("check", *words, capsys=capsys)
        assert status == 0
        assert "43.5625" in out
    unclear = "column;value\nnurse;20,125\n"
    Path("p.csv").write_text(unclear, encoding="utf-8")
    assert run("check", *words, capsys=capsys)[0] == 0


def test_an_empty_name_is_told_as_one(capsys: pytest.CaptureFixture[str]) -> None:
    status, _, err = run("check", "", capsys=capsys)
    assert (status, err) == (2, "'': expected a file or folder, got nothing of that name\n")
