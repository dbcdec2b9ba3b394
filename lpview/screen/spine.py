"""The spine: two marks per line that show complementary slackness at a glance.

Left filled: room on the primal side; right filled: a price on the dual side. An
exclamation mark is a violated side (left) or a price of the wrong sign (right), a
cross behind them a product that is not zero. Equality rows and fixed columns show
an equals sign, since they have no complementary pair.
"""

from __future__ import annotations

from dataclasses import dataclass

from lpview.marks import Flag, Marks

WIDTH = 3
"""Cells that the spine of one line takes."""


@dataclass(frozen=True)
class Glyphs:
    """The characters that marks are drawn with."""

    filled: str
    """Room, or a price."""
    empty: str
    """Neither."""
    cross: str
    """A product that is not zero."""
    up: str
    """Sorted upwards."""
    down: str
    """Sorted downwards."""
    bars: str
    """Heights of a gauge of one cell, from nothing to full."""
    filled_bar: str
    """Filled part of a longer gauge."""
    empty_bar: str
    """Empty part of a longer gauge."""
    cursor: str
    """The selected line."""
    more: str
    """A text that was cut."""


ROUND = Glyphs("●", "○", "×", "▲", "▼", "▁▂▃▄▅▆▇█", "━", "╌", "▸", "…")
"""For terminals that show them."""
ASCII = Glyphs("#", ".", "x", "^", "v", "12345678", "=", "-", ">", "~")
"""For all others, and by ``--ascii``."""


def spine(marks: Marks, line: int, glyphs: Glyphs) -> str:
    """The three cells of a line, numbered as in `lpview.kkt`."""
    flags = marks.flags
    if marks.paired[line]:
        left = glyphs.filled if marks.room[line] else glyphs.empty
        right = glyphs.filled if marks.priced[line] else glyphs.empty
    else:
        left, right = "=", " "
    left = "!" if flags[Flag.VIOLATED][line] else left
    right = "!" if flags[Flag.WRONG_SIGN][line] else right
    cross = glyphs.cross if flags[Flag.PRODUCT][line] else " "
    return left + right + cross
