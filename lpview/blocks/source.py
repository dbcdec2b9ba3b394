"""A path or bytes to text: files of a folder, encoding, line ends, separator.

Lines keep their numbers: whatever is taken out of a text leaves its line behind.
"""

from __future__ import annotations

import csv
import os
import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path

from lpview.blocks.mistakes import InputError, Mistake, quoted

FOLDER_FILES = {"c.csv": "c", "A.csv": "A", "b.csv": "b", "bounds.csv": "bounds"}
"""Files of a model that is a folder, and the block with which each begins."""

OPTIONAL_FILES = frozenset({"bounds.csv"})
"""Files that a folder may lack."""

SEPARATORS = {",": "commas", ";": "semicolons", "\t": "tabs"}
"""What may stand between cells, and its name in messages."""

_SIGNATURES = {
    b"PK\x03\x04": "a zip archive or spreadsheet file",
    b"\x1f\x8b": "a gzip archive",
    b"\xff\xfe": "UTF-16",
    b"\xfe\xff": "UTF-16",
}
_SEP_LINE = re.compile(r'"?sep=(.)"?[^\S\n]*(?=\n|\Z)', re.IGNORECASE)
_BLANKS_AFTER_QUOTE = re.compile(r'("(?:[^"]|"")*")[^\S\n\t]+(?=[,;\t]|\Z)')
_FIRST_CELL = re.compile(
    r'^[^\S\n\t]*"?(?:\[[^\]\n]*\]|row|column)"?[^\S\n\t]*([,;\t])',
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

    def cells(self, line: str) -> list[str]:
        """The trimmed cells of one line. Raises `csv.Error` for broken quotes."""
        if '"' not in line:
            return list(map(str.strip, line.split(self.separator)))
        tidy = _BLANKS_AFTER_QUOTE.sub(r"\1", line)
        return list(map(str.strip, next(self.rows([tidy]))))

    def rows(self, lines: Sequence[str]) -> Iterator[list[str]]:
        """The cells of lines that may hold quotes, as the csv module reads them."""
        return csv.reader(lines, delimiter=self.separator, strict=True, skipinitialspace=True)


def read_path(path: str | Path) -> list[Source]:
    """The files of a model: one, or those of a folder. Raises `InputError`."""
    if not Path(path).is_dir():
        return [read_file(str(path))]
    sources: list[Source] = []
    mistakes: list[Mistake] = []
    for name, block in FOLDER_FILES.items():
        file = os.path.join(path, name)  # noqa: PTH118 - the path as the user gave it
        if name in OPTIONAL_FILES and not os.path.lexists(file):
            continue
        try:
            sources.append(read_file(file, block))
        except InputError as error:
            mistakes += error.mistakes
    mistakes += _misnamed(path)
    if mistakes:
        raise InputError(mistakes)
    return sources


def _misnamed(path: str | Path) -> list[Mistake]:
    """Files that would be read if their names had other capitals: never lost unsaid."""
    wanted = {name.casefold(): name for name in FOLDER_FILES}
    return [
        Mistake(os.path.join(path, name), f"the name {meant}", "other capitals", advice="rename it")  # noqa: PTH118
        for name in sorted(os.listdir(path))  # noqa: PTH208 - only the names matter
        if (meant := wanted.get(name.casefold(), name)) != name
    ]


def read_file(file: str, block: str = "") -> Source:
    """The text of one file. Raises `InputError`."""
    try:
        data = Path(file).read_bytes()
    except FileNotFoundError:
        what = f"a file with the block [{block}]" if block else "a file or folder"
        raise InputError([Mistake(file, what, "nothing of that name")]) from None
    except OSError as error:
        reason = error.strerror or type(error).__name__
        raise InputError([Mistake(file, "a readable file", f"'{reason}'")]) from None
    return from_bytes(data, file, block)


def from_bytes(data: bytes, file: str, block: str = "") -> Source:
    """The text in ``data``. Raises `InputError` unless it is UTF-8 text."""
    advice = "export it as CSV in UTF-8"
    for start, kind in _SIGNATURES.items():
        if data.startswith(start):
            raise InputError([Mistake(file, "UTF-8 text", kind, advice=advice)])
    if b"\0" in data:
        line = data.count(b"\n", 0, data.index(b"\0")) + 1
        raise InputError([Mistake(file, "UTF-8 text", "binary data", line, advice=advice)])
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        before = error.object[: error.start].decode().replace("\r\n", "\n")
        line = before.count("\n") + before.count("\r") + 1
        byte = f"the byte 0x{error.object[error.start]:02x}"
        wrong = Mistake(file, "UTF-8 text", byte, line, advice=advice)
        raise InputError([wrong]) from None
    if not text.strip():
        raise InputError([Mistake(file, "a linear program", "an empty file")])
    return _source(file, text, block)


def _source(file: str, text: str, block: str) -> Source:
    if "\r" in text:
        text = text.replace("\r\n", "\n").replace("\r", "\n")
    given = _SEP_LINE.match(text)
    if given:
        if given[1] not in SEPARATORS:
            names = "sep=, or sep=; or sep= and a tab"
            raise InputError([Mistake(file, names, quoted(given[0].strip('"')), 1)])
        return Source(file, text[given.end() :], given[1], block)
    found = _FIRST_CELL.search(text)
    return Source(file, text, found[1] if found else ",", block)
