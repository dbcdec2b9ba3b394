"""The same model in every spelling of the format is the same model."""

from __future__ import annotations

import csv
import gzip
import re
from dataclasses import dataclass, replace
from pathlib import Path
from tempfile import TemporaryDirectory

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from lpview.blocks import InputError, read_model, read_model_bytes, write_blocks
from lpview.blocks.mistakes import ERROR_CELLS
from lpview.model import LinearProgram, identical
from tests.strategies import linear_programs

Blocks = list[list[list[str]]]

COMMENTS = ("", " ", "# a note", "#", '"# quoted, with a comma; and more"', '# "open', ",;\t")


NUMBER = re.compile(r"[+-]?\d*[.]\d*(e-?\d+)?")
"""Numbers with a decimal mark, as canonical text writes them."""

NUMBER_WORDS = {"cost", "coefficient", "rhs", "lower", "upper"}


@dataclass(frozen=True)
class Dialect:
    separator: str
    line_end: str
    encoding: str
    packed: bool
    announced: bool
    quoted: bool
    padding: str
    extra_cells: int | None
    comma: bool
    comment: str
    order: int

    @property
    def decimal(self) -> str:
        """What the reader is told, so that it never has to ask."""
        return "comma" if self.comma else "point"

    def cell(self, text: str) -> str:
        if self.quoted or '"' in text or self.separator in text:
            blank = " " if self.padding else ""
            return blank + '"' + text.replace('"', '""') + '"' + blank
        return self.padding + text + self.padding

    def line(self, cells: list[str], width: int) -> str:
        extra = max(width - len(cells), 0) if self.extra_cells is None else self.extra_cells
        return self.separator.join(map(self.cell, cells + [""] * extra))

    def comments(self) -> list[str]:
        blank = self.comment.strip(",;\t ") == ""
        return [self.separator * 3 if blank and self.comment else self.comment]

    def marked(self, block: list[list[str]]) -> list[list[str]]:
        """The block with this dialect's decimal marks."""
        return with_commas(block) if self.comma else block

    def lines(self, blocks: Blocks) -> list[str]:
        lines = [f"sep={self.separator}"] if self.announced else []
        width = max(len(cells) for block in blocks for cells in block)
        for block in blocks[self.order :] + blocks[: self.order]:
            for cells in self.marked(block):
                lines += [*self.comments(), self.line(cells, width)]
        return lines + self.comments()

    def data(self, blocks: Blocks) -> bytes:
        text = self.line_end.join(self.lines(blocks)) + self.line_end
        mark = "\ufeff" if self.encoding.startswith("utf-16") else ""
        data = (mark + text).encode(self.encoding)
        return gzip.compress(data, 1) if self.packed else data


DIALECTS = st.builds(
    Dialect,
    separator=st.sampled_from(",;\t"),
    line_end=st.sampled_from(["\n", "\r\n", "\r"]),
    encoding=st.sampled_from(["utf-8", "utf-8-sig", "utf-16-le", "utf-16-be"]),
    packed=st.booleans(),
    announced=st.booleans(),
    quoted=st.booleans(),
    padding=st.sampled_from(["", " ", "\u00a0", "\u2003 "]),
    extra_cells=st.sampled_from([0, 1, 2, None]),
    comma=st.booleans(),
    comment=st.sampled_from(COMMENTS),
    order=st.integers(0, 4),
)


def number_places(block: list[list[str]]) -> list[tuple[int, int]]:
    """Lines and cells of a block where numbers stand."""
    if len(block) == 1:
        return [(0, 1)]
    header = block[1]
    is_tall = header[-1] in NUMBER_WORDS and header[0] in ("row", "column")
    places = [k for k, word in enumerate(header) if (word in NUMBER_WORDS if is_tall else k)]
    return [(line, place) for line in range(2, len(block)) for place in places]


def with_commas(block: list[list[str]]) -> list[list[str]]:
    """The block with decimal commas in its numbers and nowhere else."""
    block = [list(cells) for cells in block]
    for line, place in number_places(block):
        text = block[line][place]
        block[line][place] = text.replace(".", ",") if NUMBER.fullmatch(text) else text
    return block


def has_no_second_objective(lp: LinearProgram) -> bool:
    """False where a mistaken cost would make a column's line a block line: ``[c],mistaken``."""
    return "[c]" not in lp.columns


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
    assert identical(read_model_bytes(dialect.data(blocks_of(lp)), "x", dialect.decimal).model, lp)


@settings(deadline=None)
@given(linear_programs(nasty_names=False), DIALECTS)
def test_wide_blocks_read_the_same(lp: LinearProgram, dialect: Dialect) -> None:
    reading = read_model_bytes(dialect.data(wide(lp)), "x", dialect.decimal)
    assert identical(reading.model, lp)
    assert reading.notes.empty_coefficients == lp.m * lp.n - lp.A.nnz
    assert reading.notes.empty_costs == int((lp.c == 0).sum())


@settings(deadline=None)
@given(linear_programs().filter(has_no_second_objective), DIALECTS, st.data())
def test_a_mistake_is_found_on_its_line(
    lp: LinearProgram, dialect: Dialect, data: st.DataObject
) -> None:
    blocks = blocks_of(lp)
    places = [(b, k) for b, block in enumerate(blocks) for k in range(2, len(block))]
    if places:
        block, line = data.draw(st.sampled_from(places))
        blocks[block][line][-1] = "mistaken"
        with pytest.raises(InputError) as caught:
            read_model_bytes(dialect.data(blocks), "x", dialect.decimal)
        lines = dialect.lines(blocks)
        here = next(k for k, text in enumerate(lines, 1) if "mistaken" in text)
        assert [mistake.line for mistake in caught.value.mistakes] == [here]


@settings(deadline=None)
@given(linear_programs(nasty_names=False), DIALECTS, st.booleans())
def test_a_mark_is_recognised_or_asked_for(
    lp: LinearProgram, dialect: Dialect, is_wide: bool
) -> None:
    blocks = wide(lp) if is_wide else blocks_of(lp)
    numbers = [block[line][k] for block in blocks for line, k in number_places(block)]
    places = {len(text.partition(".")[2].partition("e")[0]) for text in numbers if "." in text}
    if not (dialect.comma and places) if dialect.separator == "," else places != {3}:
        assert identical(read_model_bytes(dialect.data(blocks), "x").model, lp)
        return
    with pytest.raises(InputError, match="--decimal comma"):
        read_model_bytes(dialect.data(blocks), "x")


def changed(blocks: Blocks, place: tuple[int, int, int], text: str) -> Blocks:
    """The blocks with another text in one cell."""
    block, line, cell = place
    copy = [[list(cells) for cells in block] for block in blocks]
    copy[block][line][cell] = text
    return copy


def mistaken_lines(
    blocks: Blocks, place: tuple[int, int, int], text: str, dialect: Dialect
) -> tuple[int, list[int]]:
    """The line on which one cell is changed, and those of which the reader complains."""
    other = changed(blocks, place, text)
    pairs = zip(dialect.lines(blocks), dialect.lines(other), strict=True)
    here = next(number for number, (a, b) in enumerate(pairs, 1) if a != b)
    with pytest.raises(InputError) as caught:
        read_model_bytes(dialect.data(other), "x", dialect.decimal)
    return here, [mistake.line for mistake in caught.value.mistakes]


NO_NUMBERS = (
    *ERROR_CELLS,
    *("01.03.2026", "2026-03-01", "3/1/2026", "1-Mar", "Mar-01", "01. Mrz", "12:30"),
    *("1 200", "1'200", "1’200", "1\u00a0200", "1.200,5", "1,200.5", "1.200.000", "1,200,000"),
    *("12%", "$3", "3 €", "EUR 3", "(5)", "5-", "−5", "TRUE", "nan", "1 1/3"),
)


@settings(deadline=None)
@given(linear_programs(nasty_names=False), DIALECTS, st.booleans(), st.data())
def test_no_number_of_a_spreadsheet_passes_for_one(
    lp: LinearProgram, dialect: Dialect, is_wide: bool, data: st.DataObject
) -> None:
    blocks = wide(lp) if is_wide else blocks_of(lp)
    places = [(b, *place) for b, block in enumerate(blocks) for place in number_places(block)]
    assume(places)
    place, text = data.draw(st.sampled_from(places)), data.draw(st.sampled_from(NO_NUMBERS))
    here, found = mistaken_lines(blocks, place, text, dialect)
    assert found == [here]


@settings(deadline=None)
@given(linear_programs().filter(has_no_second_objective), DIALECTS, st.booleans(), st.data())
def test_an_error_cell_is_found_wherever_it_stands(
    lp: LinearProgram, dialect: Dialect, is_wide: bool, data: st.DataObject
) -> None:
    blocks = blocks_of(lp)
    if is_wide and lp.columns == tuple(f"x{k + 1}" for k in range(lp.n)):
        blocks = wide(lp)
    cells = [
        (b, line, k)
        for b, block in enumerate(blocks)
        for line in range(len(block))
        for k in range(len(block[line]))
    ]
    place, text = data.draw(st.sampled_from(cells)), data.draw(st.sampled_from(sorted(ERROR_CELLS)))
    here, found = mistaken_lines(blocks, place, text, dialect)
    assert here in found


@settings(deadline=None)
@given(linear_programs(max_rows=3, max_columns=3), st.lists(DIALECTS, min_size=3, max_size=3))
def test_a_folder_reads_the_same(lp: LinearProgram, dialects: list[Dialect]) -> None:
    blocks = blocks_of(lp)
    parts: dict[str, Blocks] = {"c": [], "A": [], "b": []}
    for block in blocks:
        parts[block[0][0][1:-1] if block[0][0][1:-1] in parts else "c"].append(block)
    comma = dialects[0].comma
    with TemporaryDirectory() as folder:
        for (name, part), dialect in zip(parts.items(), dialects, strict=True):
            alike = replace(dialect, order=0, comma=comma)
            file = f"{name}.csv.gz" if dialect.packed else f"{name}.csv"
            (Path(folder) / file).write_bytes(alike.data(part))
        assert identical(read_model(folder, dialects[0].decimal).model, lp)
