"""Exports of one sheet by several spreadsheets are one model, down to its notes."""

from __future__ import annotations

import csv
import gzip
import io
import re
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest

from lpview.blocks import InputError, encoding, read_model, read_model_bytes
from lpview.labels import Label
from lpview.model import Sense, identical
from lpview.reading import Notes

DATA = Path(__file__).parents[1] / "data"
SHEETS = DATA / "sheets"
EXPORTS = {
    "dairy.csv": "dairy",
    "dairy-semicolons.csv": "dairy-semicolons",
    "dairy-utf-16.csv": "dairy-utf-16",
    "dairy-packed.csv.gz": "dairy-packed",
    "dairy-folder": "dairy-folder",
}
INF = np.inf


def test_the_exports_differ_as_they_should() -> None:
    """The files are what the other tests take them for, whatever an editor does to them."""
    assert {path.name for path in SHEETS.iterdir()} == {*EXPORTS}
    plain = (SHEETS / "dairy.csv").read_bytes()
    assert {len(cells) for cells in csv.reader(plain.decode().splitlines())} == {6}
    assert b",,,,,\n[offset],-7.5,,,,\n" in plain
    semicolons = (SHEETS / "dairy-semicolons.csv").read_bytes()
    assert semicolons.startswith(b"\xef\xbb\xbfsep=;\r\n")
    assert b"\r\n[offset];-7,5;;;;\r\n" in semicolons
    wide = (SHEETS / "dairy-utf-16.csv").read_bytes()
    assert wide.startswith(b"\xff\xfe")
    assert "\r\n[offset]\t-7,5\t\t\t\t\r\n" in wide.decode("utf-16")
    assert b"\r[offset],-7.5\r" in gzip.decompress((SHEETS / "dairy-packed.csv.gz").read_bytes())
    files = {path.name for path in (SHEETS / "dairy-folder").iterdir()}
    assert files == {"A.csv.gz", "b.csv", "bounds.csv", "c.csv", "labels.csv"}


def test_the_padded_grid() -> None:
    lp = read_model(SHEETS / "dairy.csv").model
    assert lp.sense is Sense.MAXIMIZE
    assert lp.columns == ("Berg Käse", "Frischkäse", "Quark", "Butter, gesalzen", "Molke")
    assert lp.rows == (
        *("Milch je Tag", "Rahm", "Molke Bilanz", "Reserve", "Kühl raum", "kühlraum"),
    )
    assert lp.c.tolist() == [12.5, 4.75, 0, 9, -0.125]
    assert lp.offset == -7.5
    assert lp.A.toarray().tolist() == [
        [10, 4.5, 1 / 3, 0, 0],
        [0, 0.25, -0.05, 1, 0],
        [9, 2.5, 0, 0, -1],
        [0, 0, 0, 0, 0],
        [1.25, 1, 0, 0.5, 0],
        [2, 0, 0, 0, 0],
    ]
    assert lp.row_lower.tolist() == [-INF, 2 / 7, 0, -INF, 10, -INF]
    assert lp.row_upper.tolist() == [1200.5, 2 / 7, INF, 8, 120.75, 64]
    assert lp.lower.tolist() == [2.5, 0, -INF, 0, -0.0015]
    assert lp.upper.tolist() == [40, INF, INF, 100, INF]
    side = {1: Fraction(2, 7)}
    assert lp.odd == {"A": {2: Fraction(1, 3)}, "row_lower": side, "row_upper": side}


@pytest.mark.parametrize("name", EXPORTS)
def test_every_export_is_the_same_model_with_the_same_notes(name: str) -> None:
    reading = read_model(SHEETS / name)
    assert reading.model.name == EXPORTS[name]
    assert identical(reading.model, read_model(SHEETS / "dairy.csv").model)
    assert reading.notes == Notes(
        empty_coefficients=17,
        empty_costs=1,
        rows_without_coefficients=("Reserve",),
        names_alike=(("Kühl raum", "kühlraum"),),
        most_decimals={"c": 3, "offset": 1, "A": 2, "b": 2, "bounds": 4},
    )
    assert reading.labels.rows == {4: Label("großer Keller", "m³", "Kühlung")}
    assert reading.labels.columns == {0: Label(unit="Laib")}
    assert reading.labels.objective == Label("Deckungsbeitrag", "EUR")


@pytest.mark.parametrize("name", [name for name in EXPORTS if "." in name])
def test_bytes_from_standard_input_are_read_alike(name: str) -> None:
    reading = read_model_bytes((SHEETS / name).read_bytes(), "-")
    assert identical(reading.model, read_model(SHEETS / "dairy.csv").model)


def with_decimal_commas(path: Path) -> str:
    """A file with commas and points as one with semicolons and decimal commas."""
    out = io.StringIO()
    writer = csv.writer(out, delimiter=";", lineterminator="\n")
    with path.open(encoding="utf-8", newline="") as lines:
        for cells in csv.reader(lines):
            writer.writerow([re.sub(r"(?<=\d)[.](?=\d)", ",", cell) for cell in cells])
    return out.getvalue()


@pytest.mark.parametrize("name", ["afiro", "adlittle"])
def test_netlib_files_with_decimal_commas(name: str) -> None:
    path = DATA / "netlib" / f"{name}.csv"
    text = with_decimal_commas(path)
    assert text.count(",") == path.read_text(encoding="utf-8").count(".") > 30
    expected = read_model(path)
    for decimal in (None, "comma"):
        reading = read_model_bytes(text.encode(), "x", decimal)
        assert identical(reading.model, expected.model)
        assert reading.notes == expected.notes
    with pytest.raises(InputError, match="the decimal mark is a point, as --decimal point says"):
        read_model_bytes(text.encode(), "x", "point")


TEXT = "[c],minimize\ncolumn,cost\nä,1\n[A]\nrow,column,coefficient\n[b]\nrow,lower,upper\n"


@pytest.mark.parametrize(
    "data",
    [
        TEXT.encode(),
        TEXT.encode("utf-8-sig"),
        b"\xff\xfe" + TEXT.encode("utf-16-le"),
        b"\xfe\xff" + TEXT.encode("utf-16-be"),
    ],
    ids=["utf-8", "marked", "little", "big"],
)
def test_encodings_packed_or_not(data: bytes, tmp_path: Path) -> None:
    half = len(data) // 2
    in_two = gzip.compress(data[:half]) + gzip.compress(data[half:])
    for content in (data, gzip.compress(data), in_two):
        assert read_model_bytes(content, "x").model.columns == ("ä",)
    # The signature counts and not the name, so that a file may have lost its ".gz".
    (tmp_path / "week.1.csv").write_bytes(gzip.compress(data))
    (tmp_path / "week.2.csv.gz").write_bytes(gzip.compress(data))
    (tmp_path / "week.3.GZ").write_bytes(gzip.compress(data))
    names = [read_model(path).model.name for path in sorted(tmp_path.iterdir())]
    assert names == ["week.1", "week.2", "week"]


def test_a_small_archive_of_a_huge_file_is_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    data = gzip.compress(TEXT.encode() + b"\n" * 9_000_000)
    assert len(data) < 20_000
    assert read_model_bytes(data, "x").model.n == 1
    monkeypatch.setattr(encoding, "MOST_BYTES", 8_000_000)
    # What stands at its end is of no interest any more, and is not unpacked.
    data = data[:-8] + b"mistaken"
    with pytest.raises(InputError) as caught:
        read_model_bytes(data, "x.csv.gz")
    assert str(caught.value) == (
        "x.csv.gz: expected a gzip archive of at most 8,000,000 bytes once unpacked, "
        "got a larger one; unpack it first"
    )
