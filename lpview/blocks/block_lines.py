"""Which lines begin a block: those whose first cell is a name in brackets, mostly."""

from __future__ import annotations

from collections.abc import Iterator

from lpview.blocks.layout import Kinds, owner

ANY_SEPARATOR = ",;\t "
"""What may stand behind the name of a block in a file of any separator."""


def bracket_lines(text: str) -> Iterator[tuple[int, int]]:
    """Where lines begin and end whose first cell may begin with a bracket."""
    bracket = text.find("[")
    while bracket >= 0:
        start = text.rfind("\n", 0, bracket) + 1
        end = text.find("\n", bracket)
        end = len(text) if end < 0 else end
        if not text[start:bracket].replace('"', "").strip():
            yield start, end
        bracket = text.find("[", end)


def is_block_line(cells: list[str], in_table: bool, kinds: Kinds) -> bool:
    """Whether a line whose first cell may be in brackets begins a block.

    Names in brackets are allowed in a table, so that a line with further cells is a
    block line there only where its block takes an argument, and then not where it
    reads as a cost; or where it goes on with the header, by mistake.
    """
    rest = [cell for cell in cells[1:] if cell]
    name = cells[0] if rest else cells[0].rstrip(ANY_SEPARATOR)
    if not (name.startswith("[") and name.endswith("]")):
        return False
    if not rest or not in_table:
        return True
    if len(rest) == 1 and cells[1] and name[1:-1].strip().casefold() == "offset":
        return True  # written otherwise than it should be, but no column with a cost
    kind = kinds.get(name[1:-1])
    if kind is not None and owner(tuple(rest), kinds) == kind.name:
        return True
    if kind is None or not kind.argument or len(rest) > 1 or not cells[1]:
        return False
    return kind.name != "c" or rest[0][0] not in "0123456789+-.,"
