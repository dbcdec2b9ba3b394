"""Text to blocks: block lines, headers, and the cells below them.

The body of most blocks is split in one go by `even_cells`; one with peculiar quotes
or with mistakes goes line by line, which also makes the messages.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from lpview.blocks.block_lines import ANY_SEPARATOR, bracket_lines, is_block_line
from lpview.blocks.decimal_mark import DecimalMark, MarkedCell, recognised
from lpview.blocks.even import even_cells, marked
from lpview.blocks.layout import Header, Kind, block_lines, fixed_header, owner
from lpview.blocks.lines import (
    commented_data,
    error_comments,
    filled_lines,
    quote_problem,
    separator_problem,
    width_problem,
    without_comments,
)
from lpview.blocks.mistakes import Mistake, Mistakes, Place, Problem, printable, quoted
from lpview.blocks.source import Source

_NUMBERS = frozenset(("cost", "lower", "upper", "coefficient", "rhs", "value"))


@dataclass(frozen=True)
class Block:
    """One block of one file."""

    source: Source
    """The file."""
    place: Place
    """Where to report what is wrong with the block; has its name."""
    line: int
    """Line of the block line."""
    argument: str
    """Second cell of the block line, such as the sense; empty if there is none."""
    header: Header = ()
    """Cells of the header line up to the last filled one, as written."""
    fixed: Header = ()
    """The same in fixed words; empty for a wide block or one without header."""
    header_line: int = 0
    """Line of the header."""
    flat: Sequence[str] = ()
    """Cells below the header, line by line, each as long as the header."""
    lines: Sequence[int] = ()
    """Lines of the file on which they stand."""
    commented: Sequence[tuple[int, str]] = ()
    """Comments that read like a line of the table: line and first cell of each."""
    mark: DecimalMark = field(default_factory=DecimalMark)
    """The decimal mark of the file."""

    @property
    def name(self) -> str:
        """Name without brackets."""
        return self.place.block


@dataclass(frozen=True)
class _Part:
    """A block line and the lines below it."""

    cells: list[str]
    """Cells of the block line."""
    line: int
    """Its number."""
    body: str
    """The lines below it, up to the next block line."""


def blocks_by_name(sources: Sequence[Source], mistakes: Mistakes) -> dict[str, list[Block]]:
    """All blocks of some files of one kind; tells of repeated and of missing ones."""
    kinds = sources[0].kinds
    blocks: dict[str, list[Block]] = {name: [] for name in kinds}
    first: dict[tuple[str, ...], Block] = {}
    for source in sources:
        for block in read_blocks(source, mistakes):
            key = (block.name, *map(str.casefold, block.header))
            if first.setdefault(key, block) is block:
                blocks[block.name].append(block)
                continue
            other = first[key]
            where = "" if other.source is source else f" of {printable(other.source.file)}"
            problem = Problem("this block once", f"it again after line {other.line}{where}")
            block.place.wrong(block.line, "block line", problem)
    broken = {mistake.block for mistake in mistakes.found}
    for name, kind in kinds.items():
        if kind.required and not blocks[name] and not broken & {name, ""}:
            mistakes.add(Mistake(sources[0].file, f"the block [{name}]", "none"))
    return blocks


def read_blocks(source: Source, mistakes: Mistakes) -> list[Block]:
    """The blocks of a file in order, without those that cannot be read."""
    place = Place(source.file, "", mistakes)
    if not source.text.strip():
        mistakes.add(Mistake(source.file, source.wanted, "an empty file"))
        return []
    for number, cell in error_comments(source):
        place.wrong(number, "comment", Problem("a comment in words", quoted(cell)))
    parts = (_block(source, part, mistakes) for part in _parts(source, place))
    blocks = [block for block in parts if block is not None]
    mark = recognised(source, (cell for block in blocks for cell in _marked_cells(block)))
    return [replace(block, mark=mark) for block in blocks]


def _marked_cells(block: Block) -> Iterator[MarkedCell]:
    """The cells for numbers that hold a point or a comma."""
    header = block.fixed or block.header
    if not header:
        yield MarkedCell(block.argument, block.line, "number", block.place)
        return
    numbers = [k for k, word in enumerate(header) if (word in _NUMBERS if block.fixed else k)]
    places = marked(block.flat)
    for place in places[np.isin(places % len(header), numbers)]:
        line, column = divmod(int(place), len(header))
        yield MarkedCell(block.flat[int(place)], block.lines[line], header[column], block.place)


def _parts(source: Source, place: Place) -> list[_Part]:
    text = source.text
    starts: list[tuple[int, int, list[str]]] = []
    for start, end in bracket_lines(text):
        line = text[start:end]
        if quote_problem(source, line):
            continue  # the block that holds the line will say so
        cells = source.cells(line)
        # Within a block of one line nothing else may stand, so nothing is data.
        table = bool(starts) and starts[-1][2][0] != "[offset]"
        if is_block_line(cells, table, source.kinds):
            starts.append((start, end + 1, cells))
    before = text[: starts[0][0]] if starts else text
    if _begins_with_header(source, before, place):
        starts.insert(0, (0, 0, [f"[{source.implied}]"]))
        before = ""
    _check_beginning(source, before, starts[0][2][0] if starts else "", place)
    number, parts = 1 + before.count("\n"), []
    ends = [start for start, _, _ in starts[1:]] + [len(text)]
    for (start, body, cells), end in zip(starts, ends, strict=False):
        # A block line that is left out stands, as it were, before the first line.
        parts.append(_Part(cells, number if body else 0, text[body:end]))
        number += text.count("\n", start, end)
    return parts


def _begins_with_header(source: Source, before: str, place: Place) -> bool:
    """Whether the header of the block that needs no block line stands first."""
    if not source.implied:
        return False
    quiet = Place(place.file, place.block, Mistakes())
    first = next(filled_lines(source, before, 1, quiet), (0, [""]))[1]
    words = tuple(word.casefold() for word in first if word)
    return words in source.kinds[source.implied].headers


def _first_line(source: Source) -> str:
    """What a file must begin with, in words."""
    if source.block:
        return source.kinds[source.block].line
    lines = block_lines(source.kinds)
    if not source.implied:
        return lines
    return f"the header {source.kinds[source.implied].expected_header} or a line {lines}"


def _check_beginning(source: Source, before: str, first: str, place: Place) -> None:
    """Only comments may stand before the first block line."""
    expected = _first_line(source)
    for number, cells in filled_lines(source, before, 1, place):
        problem = Problem(expected, quoted(cells[0]))
        place.wrong(number, "block line", separator_problem(source, cells) or problem)
        return
    if source.block and first and first.rstrip(ANY_SEPARATOR) != f"[{source.block}]":
        line = before.count("\n") + 1
        place.wrong(line, "block line", Problem(expected, quoted(first)))


def _block(source: Source, part: _Part, mistakes: Mistakes) -> Block | None:
    name = part.cells[0].rstrip(ANY_SEPARATOR)
    kind = source.kinds.get(name[1:-1])
    if kind is None:
        place = Place(source.file, "", mistakes)
        problem = Problem(block_lines(source.kinds), quoted(name))
        # One letter is like any other, so that only its capital may have been meant.
        near = (k for k in source.kinds if len(k) > 1 or k.casefold() == name[1:-1].casefold())
        known = [f"[{k}]" for k in near]
        place.unknown(part.line, "block line", problem, name, known)
        return None
    place = Place(source.file, kind.name, mistakes)
    extra = next(filter(None, part.cells[2 if kind.argument else 1 :]), "")
    if extra:
        expected = f"nothing after {kind.line if kind.argument else name}"
        advice = "the header is a line of its own" if kind.headers else ""
        place.wrong(part.line, "block line", Problem(expected, quoted(extra), advice))
        return None
    argument = part.cells[1] if kind.argument and len(part.cells) > 1 else ""
    block = Block(source, place, part.line, argument)
    if kind.headers:
        return _with_table(block, kind, part.body)
    for number, cells in filled_lines(source, part.body, part.line + 1, place):
        problem = Problem("the line of another block", quoted(cells[0]))
        place.wrong(number, "line", problem)
        break
    return block


def _with_table(block: Block, kind: Kind, text: str) -> Block | None:
    """The block with its header and cells; None when it has no right header."""
    source, number, start = block.source, block.line, 0
    while start < len(text):
        end = text.find("\n", start)
        line, start = (text[start:], len(text)) if end < 0 else (text[start:end], end + 1)
        number += 1
        found = list(filled_lines(source, line, number, block.place))
        if found or quote_problem(source, line):
            break
    else:
        problem = Problem(kind.expected_header, "no line")
        block.place.wrong(block.line, "header", problem)
        return None
    if not found:
        return None
    cells = found[0][1]
    while not cells[-1]:
        cells.pop()
    header = tuple(cells)
    fixed = fixed_header(kind, header, source.kinds)
    if fixed is None:
        _wrong_header(block, kind, header, number)
        return None
    block = replace(block, header=header, fixed=fixed, header_line=number)
    return _with_cells(block, text[start:])


def _wrong_header(block: Block, kind: Kind, header: Header, line: int) -> None:
    other = owner(header, block.source.kinds)
    advice = f"that is the header of [{other}]" if other else ""
    problem = Problem(kind.expected_header, quoted(",".join(header)), advice)
    mixed = separator_problem(block.source, list(header))
    block.place.wrong(line, "header", mixed or problem)


def _with_cells(block: Block, text: str) -> Block:
    source, width = block.source, len(block.header)
    first = block.header_line + 1 + len(text) - len(text.lstrip("\n"))
    body = text.strip("\n")
    lines: Sequence[int] = range(first, first + body.count("\n") + 1)
    even = None if "#" in body else even_cells(body, width, source.separator)
    if even is None:
        block = replace(block, commented=commented_data(source, body, first, width))
        kept, lines = without_comments(source, body, first)
        even = even_cells("\n".join(kept), width, source.separator) if kept else None
    if even is not None or not lines:
        return replace(block, flat=even or (), lines=lines)
    flat: list[str] = []
    numbers: list[int] = []
    for number, cells in filled_lines(source, body, first, block.place):
        problem = len(cells) != width and width_problem(source, cells, width)
        if problem:
            block.place.wrong(number, "line", problem)
        else:
            flat += cells[:width]
            numbers.append(number)
    return replace(block, flat=flat, lines=numbers)
