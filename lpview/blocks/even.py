"""Cells of a regular body, kept as places in its bytes.

Most of a large file is lines of equally many plain cells. Their numbers and names
are found here for all cells at once, without a Python object for each; every cell
can still be had as text. Anything irregular is left to `lpview.blocks.lines`.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import overload

import numpy as np
from numpy.typing import NDArray

from lpview.model import Vector

Places = NDArray[np.int64]
Bytes = NDArray[np.uint8]

LONGEST_DECIMAL = 17
"""Bytes of a sign, a decimal mark and the 15 digits that a double always holds."""

LONGEST_NAME = 8
"""Bytes of a name that fits one machine word."""

_BLANKS = " \t\v\f\x1c\x1d\x1e\x1f"
_WIDE_BLANK = re.compile("[\x85\xa0\u1680\u2000-\u200a\u2028\u2029\u202f\u205f\u3000]")
_POWERS = 10.0 ** np.arange(16)


@dataclass(frozen=True, eq=False)
class EvenCells(Sequence[str]):
    """Trimmed texts between places in bytes."""

    data: Bytes
    """The bytes, UTF-8, with at least `LONGEST_DECIMAL` more behind the last cell."""
    starts: Places
    """Where each text begins."""
    ends: Places
    """Where each text ends."""

    def __len__(self) -> int:
        return len(self.starts)

    @overload
    def __getitem__(self, place: int) -> str: ...
    @overload
    def __getitem__(self, place: slice) -> EvenCells: ...
    def __getitem__(self, place: int | slice) -> str | EvenCells:
        if isinstance(place, slice):
            return EvenCells(self.data, self.starts[place], self.ends[place])
        return self.data[self.starts[place] : self.ends[place]].tobytes().decode()

    def __iter__(self) -> Iterator[str]:
        data = self.data.tobytes()
        for start, end in zip(self.starts.tolist(), self.ends.tolist(), strict=True):
            yield data[start:end].decode()

    def take(self, places: Places) -> EvenCells:
        """The texts at some places."""
        return EvenCells(self.data, self.starts[places], self.ends[places])

    def decimals(self) -> tuple[Vector, Places, NDArray[np.bool_]]:
        """Numbers of those cells that are decimals of at most 15 digits.

        Returns
        -------
        the numbers, their digits after the decimal mark, and which cells are such;
        what stands at other cells has no meaning.
        """
        size = self.ends - self.starts
        first = self.data[self.starts]
        mantissa, digits, points, places = np.zeros((4, len(size)), dtype=np.int64)
        for k in range(min(int(size.max(initial=0)), LONGEST_DECIMAL)):
            byte = self.data[self.starts + k]
            inside = size > k
            is_digit = (byte - np.uint8(48) < 10) & inside
            mantissa = np.where(is_digit, mantissa * 10 + byte - 48, mantissa)
            digits += is_digit
            places += is_digit & (points > 0)
            points += (byte == 46) & inside
        signed = (first == 43) | (first == 45)
        plain = (size == digits + points + signed) & (points <= 1)
        plain &= (digits > 0) & (digits <= 15)
        # Both are exact, so that the quotient is the nearest double.
        size_of = mantissa / _POWERS[np.minimum(places, 15)]
        return np.where((first == 45) & (mantissa != 0), -size_of, size_of), places, plain

    def words(self) -> NDArray[np.uint64] | None:
        """Each text as one machine word; None when any is too long for that."""
        size = self.ends - self.starts
        if size.max(initial=0) > LONGEST_NAME:
            return None
        words = np.zeros(len(size), dtype=np.uint64)
        for k in range(LONGEST_NAME):
            byte = np.where(size > k, self.data[self.starts + k], 0).astype(np.uint64)
            words = (words << np.uint64(8)) | byte
        return words


def even_cells(body: str, width: int, separator: str) -> EvenCells | None:
    """The cells of lines that all have ``width`` cells and no peculiarity.

    None for a body with quotes, comments, lines of another length or lines whose
    first cell is empty, which may be blank ones.
    """
    if '"' in body or "#" in body or not (body.isascii() or not _WIDE_BLANK.search(body)):
        return None
    text = body.encode()
    data = np.frombuffer(text + bytes(LONGEST_DECIMAL), dtype=np.uint8)
    inner = data[: len(text)]
    stops = np.append(np.flatnonzero((inner == ord(separator)) | (inner == 10)), len(text))
    count = body.count("\n") + 1
    if len(stops) != count * width or (data[stops[width - 1 : -1 : width]] != 10).any():
        return None
    cells = EvenCells(data, np.append(0, stops[:-1] + 1), stops)
    if any(blank in body for blank in _BLANKS if blank != separator):
        cells = _trimmed(cells)
    empty_first = cells.starts[::width] == cells.ends[::width]
    return None if empty_first.any() else cells


def _trimmed(cells: EvenCells) -> EvenCells:
    is_blank = np.zeros(256, dtype=bool)
    is_blank[[ord(blank) for blank in _BLANKS]] = True
    starts, ends = cells.starts.copy(), cells.ends.copy()
    while (move := is_blank[cells.data[starts]] & (starts < ends)).any():
        starts += move
    while (move := is_blank[cells.data[ends - 1]] & (starts < ends)).any():
        ends -= move
    return EvenCells(cells.data, starts, ends)


def take(texts: Sequence[str], places: Places) -> Sequence[str]:
    """The texts at some places."""
    if isinstance(texts, EvenCells):
        return texts.take(places)
    return [texts[place] for place in places.tolist()]


def filled(texts: Sequence[str]) -> Places:
    """Places of the texts that are not empty."""
    if isinstance(texts, EvenCells):
        return np.flatnonzero(texts.starts < texts.ends)
    return np.flatnonzero(np.fromiter(map(bool, texts), dtype=bool, count=len(texts)))


def find(texts: Sequence[str], index: Mapping[str, int]) -> Places | None:
    """The value of ``index`` for every text; None when it lacks any of them."""
    words = texts.words() if isinstance(texts, EvenCells) else None
    if words is not None:
        return _find_words(words, index)
    try:
        return np.fromiter(map(index.__getitem__, texts), np.int64, len(texts))
    except KeyError:
        return None


def _find_words(words: NDArray[np.uint64], index: Mapping[str, int]) -> Places | None:
    known = {name.encode(): place for name, place in index.items()}
    short = [name for name in known if len(name) <= LONGEST_NAME]
    if not short or not len(words):
        return None if len(words) else np.zeros(0, dtype=np.int64)
    table = np.array(short, dtype=f"S{LONGEST_NAME}").view(">u8").astype(np.uint64)
    order = np.argsort(table)
    table = table[order]
    place = np.minimum(np.searchsorted(table, words), len(table) - 1)
    if (table[place] != words).any():
        return None
    return np.array([known[name] for name in short], dtype=np.int64)[order][place]
