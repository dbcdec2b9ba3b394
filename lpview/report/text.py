"""A report as plain text."""

from __future__ import annotations

from lpview.report.document import Block, Command, Document, Facts, Sentence, Table
from lpview.report.names import width

GAP = "  "
PAGE = 100
"""Cells of a line on a page of sentences."""


def render(document: Document, wide: int | None = None) -> str:
    """The document as lines of text, a blank line before each table and group.

    ``wide`` is how many cells a sentence may take before it goes on in the next line, None
    for any number.
    """
    lines: list[str] = []
    for before, block in zip((None, *document), document, strict=False):
        if before is not None and not _close(before, block):
            lines.append("")
        lines += _lines(block, wide)
    return "\n".join(lines) + "\n"


def _close(before: Block, block: Block) -> bool:
    """Whether two blocks stand together without a blank line."""
    prose = (Sentence, Command)
    return isinstance(block, Command) or (isinstance(before, prose) and isinstance(block, prose))


def _lines(block: Block, wide: int | None) -> list[str]:
    if isinstance(block, Sentence):
        return [block.text] if wide is None else _wrapped(block.text, wide)
    if isinstance(block, Command):
        return [block.label + GAP + block.text]
    if isinstance(block, Facts):
        wide = max((width(label) for label, _ in block.pairs), default=0)
        return [_padded(label, wide) + GAP + text for label, text in block.pairs]
    return _table(block)


def _wrapped(text: str, wide: int) -> list[str]:
    """A text in lines, broken at blanks only; a word that is wider than a line stays whole."""
    first, *words = text.split(" ")
    lines = [first]
    for word in words:
        longer = f"{lines[-1]} {word}"
        if width(longer) <= wide:
            lines[-1] = longer
        else:
            lines.append(GAP + word)
    return lines


def _table(table: Table) -> list[str]:
    grid = [table.header, *table.rows]
    widths = [max(width(row[k]) for row in grid) for k in range(len(table.header))]
    lines = [
        GAP.join(
            _padded(cell, wide, numeric)
            for cell, wide, numeric in zip(row, widths, table.numeric, strict=True)
        ).rstrip()
        for row in grid
    ]
    return [table.title, *lines] if table.title else lines


def _padded(text: str, wide: int, right: bool = False) -> str:
    space = " " * (wide - width(text))
    return space + text if right else text + space
