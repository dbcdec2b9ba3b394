"""A path or bytes to text: files of a folder, encoding, line ends, separator.

Lines keep their numbers: whatever is taken out of a text leaves its line behind.
"""

from __future__ import annotations

import csv
import os
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from pathlib import Path

from lpview.blocks.encoding import text_of
from lpview.blocks.layout import BLOCKS, Kinds
from lpview.blocks.mistakes import InputError, Mistake, quoted

FOLDER_FILES = {f"{block}.csv": block for block in ("c", "A", "b", "bounds", "labels")}
"""Files of a model that is a folder, and the block with which each begins."""

PACKED = ".gz"
"""What follows the name of any of them that gzip has packed."""

OPTIONAL_FILES = frozenset({"bounds.csv", "labels.csv"})
"""Files that a folder may lack."""

SEPARATORS = {",": "commas", ";": "semicolons", "\t": "tabs"}
"""What may stand between cells, and its name in messages."""

_WHOLE = {"": "a linear program", "labels": "labels", "x": "a plan"}
_SEP_LINE = re.compile(r'"?sep=(.)"?[^\S\n]*(?=\n|\Z)', re.IGNORECASE)
_BLANKS_AFTER_QUOTE = re.compile(r'("(?:[^"]|"")*")[^\S\n\t]+(?=[,;\t]|\Z)')
_FIRST_CELL = re.compile(
    r'^[^\S\n\t]*"?(?:\[[^\]\n]*\]|row|column|kind)"?[^\S\n\t]*([,;\t])',
    re.IGNORECASE | re.MULTILINE,
)


@dataclass(frozen=True)
class Source:
    """The text of one file."""

    file: str
    """The file as the user named it, for messages."""
    text: str
    """All lines, each ended by a line feed alone, without byte-order mark."""
    separator: str
    """What stands between cells: comma, semicolon or tab."""
    block: str = ""
    """Name of the block with which the file must begin; empty for any."""
    kinds: Kinds = field(default_factory=lambda: BLOCKS)
    """The blocks that the file may have."""
    implied: str = ""
    """Name of the block that a file which begins with its header needs no line for."""
    decimal: str | None = None
    """The decimal mark as the user said it, "point" or "comma"; None if it was not said."""
    usual: str | None = None
    """The mark of another file that belongs to this one, for where this one shows none."""

    @property
    def wanted(self) -> str:
        """What the file should hold, for messages."""
        return f"the block [{self.block}]" if self.block else _WHOLE[self.implied]

    def cells(self, line: str) -> list[str]:
        """The trimmed cells of one line. Raises `csv.Error` for broken quotes."""
        if '"' not in line:
            return list(map(str.strip, line.split(self.separator)))
        tidy = _BLANKS_AFTER_QUOTE.sub(r"\1", line)
        return list(map(str.strip, next(self.rows([tidy]))))

    def rows(self, lines: Sequence[str]) -> Iterator[list[str]]:
        """The cells of lines that may hold quotes, as the csv module reads them."""
        return csv.reader(lines, delimiter=self.separator, strict=True, skipinitialspace=True)


def read_path(path: str | Path, decimal: str | None = None) -> list[Source]:
    """The files of a model: one, or those of a folder. Raises `InputError`."""
    if not str(path) or not Path(path).is_dir():
        return [read_file(str(path), decimal=decimal, what="a file or folder")]
    sources: list[Source] = []
    mistakes: list[Mistake] = []
    for name, block in FOLDER_FILES.items():
        plain = os.path.join(path, name)  # noqa: PTH118 - the path as the user gave it
        there = [file for file in (plain, f"{plain}{PACKED}") if os.path.lexists(file)]
        if len(there) > 1:
            got, advice = f"{name}{PACKED} beside it", "take one of them away"
            mistakes.append(Mistake(plain, f"one file with [{block}]", got, advice=advice))
            continue
        if not there and name in OPTIONAL_FILES:
            continue
        try:
            sources.append(read_file(there[0] if there else plain, block, decimal))
        except InputError as error:
            mistakes += error.mistakes
    try:
        mistakes += _misnamed(path)
    except OSError as error:
        mistakes.append(_unreadable(str(path), error))
    if mistakes:
        raise InputError(mistakes)
    return sources


def _misnamed(path: str | Path) -> list[Mistake]:
    """Files that would be read if their names had other capitals: never lost unsaid."""
    wanted = {
        name.casefold(): name for name in (*FOLDER_FILES, *(f"{n}{PACKED}" for n in FOLDER_FILES))
    }
    return [
        Mistake(os.path.join(path, name), f"the name {meant}", "other capitals", advice="rename it")  # noqa: PTH118
        for name in sorted(os.listdir(path))  # noqa: PTH208 - only the names matter
        if (meant := wanted.get(name.casefold(), name)) != name
    ]


def _unreadable(file: str, error: OSError) -> Mistake:
    return Mistake(file, "a readable file", f"'{error.strerror or type(error).__name__}'")


def read_file(
    file: str, block: str = "", decimal: str | None = None, what: str = "a file"
) -> Source:
    """The text of one file; ``what`` it may be, in words. Raises `InputError`."""
    wanted = f"a file with the block [{block}]" if block else what
    return from_bytes(read_bytes(file, wanted), file, block, decimal)


def read_bytes(file: str, what: str = "a file") -> bytes:
    """The bytes of one file; ``what`` it should be, in words. Raises `InputError`."""
    try:
        if file:
            return Path(file).read_bytes()
    except FileNotFoundError:
        pass
    except OSError as error:
        raise InputError([_unreadable(file, error)]) from None
    raise InputError([Mistake(file or "''", what, "nothing of that name")])


def from_bytes(data: bytes, file: str, block: str = "", decimal: str | None = None) -> Source:
    """The text in ``data``. Raises `InputError` unless it is text."""
    text = text_of(data, file)
    if "\r" in text:
        text = text.replace("\r\n", "\n").replace("\r", "\n")
    given = _SEP_LINE.match(text)
    if given:
        if given[1] not in SEPARATORS:
            names = "sep=, or sep=; or sep= and a tab"
            raise InputError([Mistake(file, names, quoted(given[0].strip('"')), 1)])
        return Source(file, text[given.end() :], given[1], block, decimal=decimal)
    found = _FIRST_CELL.search(text)
    return Source(file, text, found[1] if found else ",", block, decimal=decimal)
