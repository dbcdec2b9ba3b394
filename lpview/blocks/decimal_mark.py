"""The decimal mark of a file: point or comma, said by the user or recognised.

In a file whose cells stand between commas it is a point unless the user says otherwise.
In any other file (and in a plan whose model has decimal commas) the numbers of the whole file
decide: the first mark that is followed
by other than exactly three digits cannot be grouping. Nothing else is ever guessed.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass

from lpview.blocks.mistakes import Place, Problem, quoted
from lpview.blocks.source import Source

_ONE_MARK = re.compile(r"[+-]?(\d*)([.,])(\d*)(?:[eE][+-]?\d+)?", re.ASCII)
_EXCHANGED = str.maketrans(".,", ",.")


@dataclass(frozen=True)
class DecimalMark:
    """What stands between whole and decimal digits, and how that is known."""

    comma: bool = False
    """Whether it is a comma; a point otherwise."""
    known: str = ""
    """How it is known, as "as on line 5"; empty where nobody said anything."""

    @property
    def character(self) -> str:
        """The mark itself."""
        return "," if self.comma else "."

    def with_points(self, text: str) -> str:
        """The text with this mark as a point, and the other mark as a comma."""
        return text.translate(_EXCHANGED) if self.comma else text

    def advice(self, text: str) -> str:
        """What to do about a number with the other mark; empty for any other text."""
        whole, mark, places = _one_mark(text)
        if mark in ("", self.character):
            return ""
        word = "comma" if self.comma else "point"
        is_grouped = 0 < len(whole) <= 3 and whole[0] != "0" and len(places) == 3
        if not self.known:
            first = "take grouping out, or " if is_grouped else ""
            return f"{first}give --decimal comma if the comma is the decimal mark"
        first = "take grouping out and " if is_grouped else ""
        return f"the decimal mark is a {word}, {self.known}; {first}use one mark in the whole file"


@dataclass(frozen=True)
class MarkedCell:
    """A cell that should hold a number and holds a point or a comma."""

    text: str
    """Its trimmed text."""
    line: int
    """Line of the file on which it stands."""
    field: str
    """Header of the cell."""
    place: Place
    """Where to report what is wrong with it."""


def recognised(source: Source, cells: Iterable[MarkedCell]) -> DecimalMark:
    """The decimal mark of a file; tells of the first mark where none decides.

    Parameters
    ----------
    cells
        Those of the whole file, in its order.
    """
    if source.decimal is not None:
        said = source.decimal
        return DecimalMark(said == "comma", f"as --decimal {said} says")
    is_point_usual = source.separator == "," and source.usual != "comma"
    if is_point_usual:
        return DecimalMark()
    unclear: dict[str, MarkedCell] = {}
    for cell in cells:
        _, mark, places = _one_mark(cell.text)
        if mark and (len(places) != 3 or source.separator == ","):
            return DecimalMark(mark == ",", f"as on line {cell.line}")
        if mark:
            unclear.setdefault(mark, cell)
    if source.usual is not None and len(unclear) < 2:
        return DecimalMark(source.usual == "comma", f"as --decimal {source.usual} says")
    for mark, cell in unclear.items():
        if len(unclear) == 1:
            _tell_unclear(cell)
        # Where both marks stand before three digits, the second one is told of later.
        return DecimalMark(mark == ",", f"as on line {cell.line}")
    return DecimalMark()


def _tell_unclear(cell: MarkedCell) -> None:
    why = "every mark in the file stands before exactly three digits"
    advice = f"{why}; give --decimal point or --decimal comma"
    problem = Problem("a decimal mark that cannot be grouping", quoted(cell.text), advice)
    cell.place.wrong(cell.line, cell.field, problem)


def _one_mark(text: str) -> tuple[str, str, str]:
    """Digits, mark and digits of a number with one mark; empty ones for another text."""
    match = _ONE_MARK.fullmatch(text)
    return (match[1], match[2], match[3]) if match and match[1] + match[3] else ("", "", "")
