"""Labels, units and groups: in the model, in a file, written again, and mistaken."""

from __future__ import annotations

import hashlib
from pathlib import Path

import pytest

from lpview.blocks import (
    InputError,
    read_label_file,
    read_model,
    read_model_bytes,
    write_blocks,
    write_labels,
)
from lpview.labels import NO_LABEL, NO_LABELS, Label
from lpview.model import identical

MODEL = """\
[c],maximize
column,cost
tomato,3
basil,5

[A]
row,column,coefficient
bench,tomato,1
heat,basil,2

[b]
row,relation,rhs
bench,<=,4
heat,<=,12
"""

BLOCK = """\
[labels]
kind,name,label,unit,group
row,heat,"heating, all pipes",kWh,energy
column,tomato,Tomatoes,crate,
objective,,profit of the week,EUR,
"""


def read(text: str) -> object:
    return read_model_bytes(text.encode(), "x.csv")


def message(block: str) -> str:
    with pytest.raises(InputError) as caught:
        read(MODEL + "\n" + block)
    return str(caught.value)


def test_labels_of_a_model() -> None:
    reading = read_model_bytes((MODEL + "\n" + BLOCK).encode(), "x.csv")
    labels = reading.labels
    assert labels.row(1) == Label("heating, all pipes", "kWh", "energy")
    assert labels.row(0) == NO_LABEL
    assert labels.column(0) == Label("Tomatoes", "crate", "")
    assert labels.objective == Label("profit of the week", "EUR", "")
    assert labels.sha256 == hashlib.sha256(BLOCK.encode()).hexdigest()


def test_nothing_numerical_depends_on_them() -> None:
    plain = read_model_bytes(MODEL.encode(), "x.csv")
    labelled = read_model_bytes((MODEL + "\n" + BLOCK).encode(), "x.csv")
    assert identical(plain.model, labelled.model)
    assert plain.labels == NO_LABELS


def test_written_and_read_again() -> None:
    reading = read_model_bytes((MODEL + "\n" + BLOCK).encode(), "x.csv")
    text = write_blocks(reading.model) + "\n" + write_labels(reading.model, reading.labels)
    assert read_model_bytes(text.encode(), "x.csv").labels == reading.labels
    assert write_labels(reading.model, reading.labels) == BLOCK


def test_a_folder_may_have_them(tmp_path: Path) -> None:
    for block, text in zip("cAb", MODEL.split("\n\n"), strict=True):
        (tmp_path / f"{block}.csv").write_text(text + "\n", encoding="utf-8")
    (tmp_path / "labels.csv").write_text(BLOCK, encoding="utf-8")
    assert read_model(tmp_path).labels.row(1).unit == "kWh"


@pytest.mark.parametrize("text", [BLOCK, BLOCK.removeprefix("[labels]\n")])
def test_a_file_of_their_own(text: str, tmp_path: Path) -> None:
    lp = read_model_bytes(MODEL.encode(), "x.csv").model
    file = tmp_path / "names.csv"
    file.write_text(text, encoding="utf-8")
    labels = read_label_file(str(file), lp)
    assert labels.column(0).label == "Tomatoes"
    assert labels.sha256 == hashlib.sha256(BLOCK.encode()).hexdigest()


def test_a_file_of_their_own_with_mistakes(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    lp = read_model_bytes(MODEL.encode(), "x.csv").model
    Path("names.csv").write_text(MODEL, encoding="utf-8")
    with pytest.raises(InputError) as caught:
        read_label_file("names.csv", lp)
    assert str(caught.value).splitlines()[0] == (
        "names.csv:1: block line: expected [labels], got '[c]'"
    )
    Path("names.csv").write_text("kind,name,label,unit,group\nrow,heta,,,\n", encoding="utf-8")
    with pytest.raises(InputError) as caught:
        read_label_file("names.csv", lp)
    assert str(caught.value) == (
        "names.csv:2: [labels] name: expected a row of [b], got 'heta'; did you mean 'heat'?"
    )


HEADER = "[labels]\nkind,name,label,unit,group\n"
MISTAKES = {
    "row,light,,,": "x.csv:18: [labels] name: expected a row of [b], got 'light'",
    "row,tomato,,,": "x.csv:18: [labels] name: expected a row of [b], got 'tomato'",
    "unit,heat,,,": "x.csv:18: [labels] kind: expected row, column or objective, got 'unit'",
    "row,heat,a,,\nrow,heat,b,,": (
        "x.csv:19: [labels] name: expected one line of labels for each name, got 'heat'; "
        "line 18 has one"
    ),
    "row,heat,#N/A,,": (
        "x.csv:18: [labels] label: expected a text, got the spreadsheet error '#N/A'; "
        "mend it in the spreadsheet and export again"
    ),
    "row,heat,a,#REF!,": (
        "x.csv:18: [labels] unit: expected a text, got the spreadsheet error '#REF!'; "
        "mend it in the spreadsheet and export again"
    ),
    "row,heat,a": "x.csv:18: [labels] line: expected 5 cells as in the header, got 3",
}


@pytest.mark.parametrize("lines", MISTAKES)
def test_a_mistake_draws_the_whole_message(lines: str) -> None:
    assert message(HEADER + lines + "\n") == MISTAKES[lines]


def test_the_objective_has_one_line() -> None:
    text = HEADER + "objective,,a,,\nobjective,profit,b,,\n"
    assert message(text) == (
        "x.csv:19: [labels] name: expected one line of labels for each name, got 'profit'; "
        "line 18 has one"
    )
