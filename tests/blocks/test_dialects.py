"""The same model in every spelling of the format is the same model."""

from __future__ import annotations

import csv
from dataclasses import dataclass
from pathlib import Path
from tempfile import TemporaryDirectory

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from lpview.blocks import InputError, read_model, read_model_bytes, write_blocks
from lpview.model import LinearProgram, identical
from tests.strategies import linear_programs

Blocks = list[list[list[str]]]

COMMENTS = ("", " ", "# a note", "#", '"# quoted, with a comma; and more"', '# "open', ",;\t")


@dataclass(frozen=True)
class Dialect:
    separator: str
    line_end: str
    mark: bytes
    announced: bool
    quoted: bool
    padding: str
    extra_cells: int
    comment: str
    order: int

    def cell(self, text: str) -> str:
        if self.quoted or '"' in text or self.separator in text:
            blank = " " if self.padding else ""
            return blank + '"' + text.replace('"', '""') + '"' + blank
        return self.padding + text + self.padding

    def line(self, cells: list[str]) -> str:
        return self.separator.join(map(self.cell, cells + [""] * self.extra_cells))

    def comments(self) -> list[str]:
        blank = self.comment.strip(",;\t ") == ""
        return [self.separator * 3 if blank and self.comment else self.comment]

    def lines(self, blocks: Blocks) -> list[str]:
        lines = [f"sep={self.separator}"] if self.announced else []
        for block in blocks[self.order :] + blocks[: self.order]:
            for cells in block:
                lines += [*self.comments(), self.line(cells)]
        return lines + self.comments()

    def data(self, blocks: Blocks) -> bytes:
        text = self.line_end.join(self.lines(blocks)) + self.line_end
        return self.mark + text.encode()


DIALECTS = st.builds(
    Dialect,
    separator=st.sampled_from(",;\t"),
    line_end=st.sampled_from(["\n", "\r\n", "\r"]),
    mark=st.sampled_from([b"", b"\xef\xbb\xbf"]),
    announced=st.booleans(),
    quoted=st.booleans(),
    padding=st.sampled_from(["", " ", "\u00a0", "\u2003 "]),
    extra_cells=st.integers(0, 2),
    comment=st.sampled_from(COMMENTS),
    order=st.integers(0, 4),
)


def blocks_of(lp: LinearProgram) -> Blocks:
    """The lines of canonical text as cells, by block."""
    chunks: list[list[str]] = []
    for line in write_blocks(lp).split("\n"):
        # Canonical text has one blank line before every block and nowhere else.
        if not chunks or (line == "" and chunks[-1]):
            chunks.append([])
        chunks[-1] += [line] if line else []
    return [[next(csv.reader([line])) for line in chunk] for chunk in chunks if chunk]


def wide(lp: LinearProgram) -> Blocks:
    """The blocks with costs and coefficients in the wide form."""
    costs, *others = blocks_of(lp)
    given = {(row, col): x for block in others if block[0] == ["[A]"] for row, col, x in block[2:]}
    table = [[row, *(given.get((row, col), "") for col in lp.columns)] for row in lp.rows]
    return [
        [
            costs[0],
            ["column", *lp.columns],
            ["profit", *(x if x != "0" else "" for _, x in costs[2:])],
        ],
        *(block for block in others if block[0] != ["[A]"]),
        [["[A]"], ["row", *lp.columns], *table],
    ]


@settings(deadline=None)
@given(linear_programs(), DIALECTS)
def test_every_dialect_reads_the_same(lp: LinearProgram, dialect: Dialect) -> None:
    assert identical(read_model_bytes(dialect.data(blocks_of(lp)), "x").model, lp)


@settings(deadline=None)
@given(linear_programs(nasty_names=False), DIALECTS)
def test_wide_blocks_read_the_same(lp: LinearProgram, dialect: Dialect) -> None:
    reading = read_model_bytes(dialect.data(wide(lp)), "x")
    assert identical(reading.model, lp)
    assert reading.notes.empty_coefficients == lp.m * lp.n - lp.A.nnz
    assert reading.notes.empty_costs == int((lp.c == 0).sum())


@settings(deadline=None)
@given(linear_programs(), DIALECTS, st.data())
def test_a_mistake_is_found_on_its_line(
    lp: LinearProgram, dialect: Dialect, data: st.DataObject
) -> None:
    blocks = blocks_of(lp)
    places = [(b, k) for b, block in enumerate(blocks) for k in range(2, len(block))]
    if places:
        block, line = data.draw(st.sampled_from(places))
        blocks[block][line][-1] = "mistaken"
        with pytest.raises(InputError) as caught:
            read_model_bytes(dialect.data(blocks), "x")
        lines = dialect.lines(blocks)
        here = next(k for k, text in enumerate(lines, 1) if "mistaken" in text)
        assert [mistake.line for mistake in caught.value.mistakes] == [here]


@settings(deadline=None)
@given(linear_programs(max_rows=3, max_columns=3), st.lists(DIALECTS, min_size=3, max_size=3))
def test_a_folder_reads_the_same(lp: LinearProgram, dialects: list[Dialect]) -> None:
    blocks = blocks_of(lp)
    parts: dict[str, Blocks] = {"c": [], "A": [], "b": []}
    for block in blocks:
        parts[block[0][0][1:-1] if block[0][0][1:-1] in parts else "c"].append(block)
    with TemporaryDirectory() as folder:
        for (name, part), dialect in zip(parts.items(), dialects, strict=True):
            lines = Dialect(**{**vars(dialect), "order": 0}).data(part)
            (Path(folder) / f"{name}.csv").write_bytes(lines)
        assert identical(read_model(folder).model, lp)
