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
_MOST_BLANKS = 32
_QUOTE = ord('"')
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
        if not len(self):
            return iter(())
        data = self.data.tobytes()
        spans = zip(self.starts.tolist(), self.ends.tolist(), strict=True)
        # No cell holds a line feed, so that one decoding does for all.
        joined = b"\n".join([data[start:end] for start, end in spans])
        return iter(joined.decode().split("\n"))

    def take(self, places: Places) -> EvenCells:
        """The texts at some places."""
        return EvenCells(self.data, self.starts[places], self.ends[places])

    def decimals(self, mark: str = ".") -> tuple[Vector, Places, NDArray[np.bool_]]:
        """Numbers of those cells that are decimals of at most 15 digits.

        Parameters
        ----------
        mark
            What stands between whole and decimal digits.

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
            points += (byte == ord(mark)) & inside
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

    None for a body with separators or quotes inside quotes, with lines of another
    length, or with lines whose first cell is empty, which may be blank ones. Empty
    cells behind the others are left out where every line has as many. Comments must
    have been taken out.
    """
    if not body.isascii() and _WIDE_BLANK.search(body):
        return None
    padded = max(width, body.partition("\n")[0].count(separator) + 1)
    cells = _split(body, padded, separator)
    cells = cells and _trimmed(cells, body, separator)
    if cells and '"' in body:
        cells = _unquoted(cells, body.count('"'))
        cells = cells and _trimmed(cells, body, separator)
    if cells is None:
        return None
    is_filled = (cells.starts < cells.ends).reshape(-1, padded)
    if not is_filled[:, 0].all() or is_filled[:, width:].any():
        return None
    if padded > width:
        return cells.take(np.arange(len(cells)).reshape(-1, padded)[:, :width].ravel())
    return cells


def _split(body: str, width: int, separator: str) -> EvenCells | None:
    """What stands between separators and line ends; None for uneven lines."""
    text = body.encode()
    data = np.frombuffer(text + bytes(LONGEST_DECIMAL), dtype=np.uint8)
    inner = data[: len(text)]
    stops = np.append(np.flatnonzero((inner == ord(separator)) | (inner == 10)), len(text))
    lines = body.count("\n") + 1
    if len(stops) != lines * width or (data[stops[width - 1 : -1 : width]] != 10).any():
        return None
    return EvenCells(data, np.append(0, stops[:-1] + 1), stops)


def _trimmed(cells: EvenCells, body: str, separator: str) -> EvenCells | None:
    """The cells without blanks around them; None where there are very many."""
    blanks = [blank for blank in _BLANKS if blank != separator and blank in body]
    if not blanks:
        return cells
    is_blank = np.zeros(256, dtype=bool)
    is_blank[[ord(blank) for blank in blanks]] = True
    starts, ends = cells.starts.copy(), cells.ends.copy()
    for _ in range(_MOST_BLANKS):
        left = is_blank[cells.data[starts]] & (starts < ends)
        right = is_blank[cells.data[ends - 1]] & (starts < ends - left)
        starts += left
        ends -= right
        if not (left.any() or right.any()):
            return EvenCells(cells.data, starts, ends)
    return None


def _unquoted(cells: EvenCells, quotes: int) -> EvenCells | None:
    """The cells without the quotes around them; None if there are other quotes."""
    starts, ends = cells.starts, cells.ends
    quoted = (cells.data[starts] == _QUOTE) & (cells.data[ends - 1] == _QUOTE)
    quoted &= ends - starts > 1
    if 2 * np.count_nonzero(quoted) != quotes:
        return None
    return EvenCells(cells.data, starts + quoted, ends - quoted)


def take(texts: Sequence[str], places: Places) -> Sequence[str]:
    """The texts at some places."""
    if isinstance(texts, EvenCells):
        return texts.take(places)
    return [texts[place] for place in places.tolist()]


def marked(texts: Sequence[str]) -> Places:
    """Places of the texts that hold a point or a comma; they stand as in their bytes."""
    if isinstance(texts, EvenCells):
        marks = np.flatnonzero((texts.data == ord(".")) | (texts.data == ord(",")))
        places = np.searchsorted(texts.starts, marks, side="right") - 1
        is_inside = (places >= 0) & (marks < texts.ends[places])
        return np.unique(places[is_inside])
    held = (("." in text) or ("," in text) for text in texts)
    return np.flatnonzero(np.fromiter(held, dtype=bool, count=len(texts)))


def filled(texts: Sequence[str]) -> Places:
    """Places of the texts that are not empty."""
    if isinstance(texts, EvenCells):
        return np.flatnonzero(texts.starts < texts.ends)
    return np.flatnonzero(np.fromiter(map(bool, texts), dtype=bool, count=len(texts)))


def find(texts: Sequence[str], index: Mapping[str, int]) -> Places | None:
    """The value of ``index`` for every text; None when it lacks any of them."""
    if not len(texts):
        return np.zeros(0, dtype=np.int64)
    words = texts.words() if isinstance(texts, EvenCells) else None
    if words is not None and index:
        return _find_words(words, index)
    try:
        return np.fromiter(map(index.__getitem__, texts), np.int64, len(texts))
    except KeyError:
        return None


def _find_words(words: NDArray[np.uint64], index: Mapping[str, int]) -> Places | None:
    names = "\n".join(index).encode().split(b"\n")
    short = np.fromiter(map(len, names), np.int64, len(names)) <= LONGEST_NAME
    if not short.any():
        return None
    known = np.array(names, dtype=f"S{LONGEST_NAME}")[short].view(">u8").astype(np.uint64)
    places = np.fromiter(index.values(), np.int64, len(index))[short]
    order = np.argsort(known)
    known, places = known[order], places[order]
    found = np.minimum(np.searchsorted(known, words), len(known) - 1)
    return places[found] if np.array_equal(known[found], words) else None
