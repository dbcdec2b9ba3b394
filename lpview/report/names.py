"""Names are data: shown literally, harmlessly, and without breaking a column."""

from __future__ import annotations

import unicodedata

from lpview.model import LinearProgram

LONGEST = 40
"""Cells of a terminal that a name may take in a table."""

_HARMFUL = frozenset(("Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"))
_SELECTORS = frozenset((*range(0xFE00, 0xFE10), *range(0xE0100, 0xE01F0)))
"""Invisible marks that choose a picture of another width, in some terminals only."""
_NO_WIDTH = frozenset(("Mn", "Me"))


def safe(name: str) -> str:
    """A name with control, direction and other invisible characters spelled out."""
    if name.isascii() and name.isprintable():
        return name
    return "".join(_spelled(character) for character in name)


def _spelled(character: str) -> str:
    code = ord(character)
    if unicodedata.category(character) not in _HARMFUL and code not in _SELECTORS:
        return character
    return f"\\x{code:02x}" if code < 256 else f"\\u{code:04x}"


def width(text: str) -> int:
    """Cells that a text takes in a terminal."""
    if text.isascii():
        return len(text)
    return sum(_cells(character) for character in text)


def _cells(character: str) -> int:
    if unicodedata.category(character) in _NO_WIDTH or "\u1160" <= character <= "\u11ff":
        return 0  # combining marks, and the later parts of a composed Korean syllable
    return 2 if unicodedata.east_asian_width(character) in "WF" else 1


def fitted(name: str, cells: int = LONGEST, more: str = "…") -> str:
    """A safe name, cut and ended with ``more`` where it takes more than ``cells``."""
    name = safe(name)
    if width(name) <= cells:
        return name
    kept = ""
    used = 1
    for character in name:
        used += _cells(character)
        if used > cells:
            break
        kept += character
    return kept + more


def line_kind_and_name(lp: LinearProgram, line: int) -> tuple[str, str]:
    """``("row", name)`` or ``("column", name)`` of a line numbered as in `lpview.kkt`."""
    return ("row", lp.rows[line]) if line < lp.m else ("column", lp.columns[line - lp.m])


def line_name(lp: LinearProgram, line: int) -> str:
    """``row heat`` or ``column tomato``, safe and fitted."""
    kind, name = line_kind_and_name(lp, line)
    return f"{kind} {fitted(name)}"
