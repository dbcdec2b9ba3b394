"""Cells to numbers.

Numbers are converted all at once, in `EvenCells` or behind a check of their
characters, since `float` alone would take ``nan``, ``inf``, ``1_000`` and digits of
other scripts; only those that fail, or that may be odd, are looked at one by one.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from functools import lru_cache
from types import MappingProxyType

import numpy as np

from lpview.blocks.advice import advice_on
from lpview.blocks.decimal_mark import DecimalMark
from lpview.blocks.even import EvenCells
from lpview.blocks.mistakes import Problem, quoted
from lpview.blocks.structure import Block
from lpview.decimals import NO_NUMBER, NumberError, parse
from lpview.model import Vector

MOST_DIGITS = 1000
"""Significant digits that a number may have."""

NO_WORDS: Mapping[str, float] = MappingProxyType({})
"""For numbers that no word can stand for."""

_INFINITE = ("inf", "infinity", "∞")
_PLAIN = b"0123456789.-+eE,"
_ZEROS = bytes.maketrans(b"123456789", b"0" * 9)


@dataclass(frozen=True)
class Cells:
    """Cells of a block, and where they stand."""

    block: Block
    """The block."""
    fields: Sequence[str]
    """What a row of cells is, cell by cell, for messages."""
    lines: Sequence[int]
    """Lines of the file, row by row."""
    texts: Sequence[str]
    """Trimmed texts, row by row."""
    picked: Sequence[int] | None = None
    """Places of the texts among all cells of the rows; None when all are there."""

    def line(self, place: int) -> int:
        """Line of the file on which a text stands."""
        return self.lines[self._cell(place) // len(self.fields)]

    def wrong(self, place: int, expected: str, advice: str = "", got: str = "") -> None:
        """Remember that a text is not what was expected."""
        problem = Problem(expected, got or quoted(self.texts[place]), advice)
        field_name = self.fields[self._cell(place) % len(self.fields)]
        self.block.place.wrong(self.line(place), field_name, problem)

    def _cell(self, place: int) -> int:
        return place if self.picked is None else self.picked[place]


@dataclass(frozen=True)
class Numbers:
    """Numbers read from cells."""

    values: Vector
    """The nearest doubles; 0 where the cell is wrong."""
    odd: Mapping[int, Fraction] = field(default_factory=dict)
    """Exact values of odd numbers, by index."""
    wrong: Mapping[int, str] = field(default_factory=dict)
    """What was expected of the cells that are no such number, by index."""
    decimals: int = 0
    """The most digits that any cell has after its decimal mark."""
    empty: int = 0
    """Empty cells that were given a value."""


def column(block: Block, place: int) -> Cells:
    """The cells below one cell of the header of a block."""
    header = block.fixed or block.header
    texts = block.flat[place :: len(header)]
    return Cells(block, (header[place],), block.lines, texts)


def read_numbers(cells: Cells, words: Mapping[str, float] = NO_WORDS) -> Numbers:
    """The numbers in cells; tells the block of those that are none.

    Parameters
    ----------
    words
        Texts in lower case that stand for a number, such as an empty one.
    """
    mark = cells.block.mark
    numbers = parse_all(cells.texts, words, mark)
    for place, expected in numbers.wrong.items():
        text, advice = cells.texts[place], ""
        if expected == NO_NUMBER:
            advice = mark.advice(text) or advice_on(text)
            if text.lstrip("+-").casefold() in _INFINITE and not any(words):
                expected = "a finite number"
        *options, last = expected, *filter(None, words)
        cells.wrong(place, f"{', '.join(options)} or {last}" if options else last, advice)
    return numbers


def parse_all(
    texts: Sequence[str],
    words: Mapping[str, float] = NO_WORDS,
    mark: DecimalMark = DecimalMark(),  # noqa: B008 - frozen
) -> Numbers:
    """The numbers in texts or behind words, and what is wrong with the others."""
    if not isinstance(texts, EvenCells):
        return _parse_texts(texts, words, mark)
    values, places, plain = texts.decimals(mark.character)
    most = int(places.max(initial=0, where=plain))
    other = np.flatnonzero(~plain)
    if not other.size:
        return Numbers(values, decimals=most)
    rest = _parse_texts(list(texts.take(other)), words, mark)
    values[other] = rest.values
    return Numbers(
        values,
        {int(other[place]): exact for place, exact in rest.odd.items()},
        {int(other[place]): expected for place, expected in rest.wrong.items()},
        max(most, rest.decimals),
        rest.empty,
    )


def _parse_texts(texts: Sequence[str], words: Mapping[str, float], mark: DecimalMark) -> Numbers:
    values = np.zeros(len(texts))
    where: Sequence[int] = range(len(texts))
    if words:
        folded = [text.casefold() for text in texts]
        known = [place for place, text in enumerate(folded) if text in words]
        values[known] = [words[folded[place]] for place in known]
        where = [place for place, text in enumerate(folded) if text not in words]
    empty = texts.count("") if "" in words else 0
    rest = [texts[place] for place in where]
    if mark.comma and rest:
        # No cell holds a line feed, so that one exchange of marks does for all.
        rest = mark.with_points("\n".join(rest)).split("\n")
    quick = _floats(rest)
    suspects = range(len(rest)) if quick is None else _suspects(rest, quick)
    values[where] = 0.0 if quick is None else quick
    odd: dict[int, Fraction] = {}
    wrong: dict[int, str] = {}
    for k in suspects:
        place = where[k]
        try:
            values[place], exact = _parse(rest[k])
        except NumberError as error:
            values[place], exact = 0.0, None
            wrong[place] = str(error)
        if exact is not None:
            odd[place] = exact
    return Numbers(values, odd, wrong, 0 if wrong else most_places(rest), empty)


def _floats(texts: Sequence[str]) -> Vector | None:
    """All numbers at once; None when a text is none, or is not a plain one."""
    joined = ",".join(texts)
    if not joined.isascii() or joined.encode().translate(None, _PLAIN):
        return None
    try:
        return np.fromiter(map(float, texts), np.float64, len(texts)) + 0.0
    except ValueError:
        return None


def _suspects(texts: Sequence[str], values: Vector) -> list[int]:
    """Places of numbers that may be odd, or too large or small to be kept.

    A number of at most 15 digits in the range of the doubles is never odd.
    """
    size = np.abs(values)
    safe = ((size < 1e299) & (size > 1e-299)).tolist()
    return [
        place
        for place, text in enumerate(texts)
        if not safe[place] or (len(text) > 15 and text != repr(float(values[place])))
    ]


def most_places(texts: Sequence[str]) -> int:
    """The most digits after a decimal point; an exponent moves it."""
    joined = ",".join(texts)
    scaled: list[str] = []
    if "e" in joined or "E" in joined:
        scaled = [text.casefold() for text in texts if "e" in text or "E" in text]
        joined = ",".join(text for text in texts if not ("e" in text or "E" in text))
    most = 0
    for text in scaled:
        mantissa, _, exponent = text.partition("e")
        most = max(most, len(mantissa.partition(".")[2]) - int(exponent))
    zeros = joined.encode().translate(_ZEROS)
    while b"." + b"0" * (most + 1) in zeros:
        most += 1
    return most


@lru_cache(maxsize=1024)  # fractions such as 1/3 come often and cost much
def _parse(text: str) -> tuple[float, Fraction | None]:
    if len(text) > MOST_DIGITS and (
        len(text) > 4 * MOST_DIGITS or significant_digits(text) > MOST_DIGITS
    ):
        raise NumberError(f"a number of at most {MOST_DIGITS} digits")
    return parse(text)


def significant_digits(text: str) -> int:
    """Digits of a decimal without zeros at its ends, or of the longer part of a fraction."""
    if "/" in text:
        return max(len(part.lstrip("+-")) for part in text.split("/"))
    mantissa = text.casefold().partition("e")[0]
    return len(mantissa.lstrip("+-0.").rstrip("0.").replace(".", ""))
