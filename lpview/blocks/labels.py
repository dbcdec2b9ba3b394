"""``[labels]``: what is shown beside names; nothing numerical depends on it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from types import MappingProxyType

from lpview.blocks.cells import Cells, column
from lpview.blocks.mistakes import ERROR_CELLS
from lpview.blocks.names import Index, look_up
from lpview.blocks.structure import Block
from lpview.labels import NO_LABEL, NO_LABELS, Label, Labels

OBJECTIVE = "objective"
"""The kind of the line about the objective, whose name does not matter."""


@dataclass
class _Found:
    """Labels by kind and index, and the lines on which they stand."""

    labels: dict[tuple[str, int], Label] = field(default_factory=dict)
    lines: dict[tuple[str, int], int] = field(default_factory=dict)


def read_labels(blocks: Sequence[Block], rows: Index | None, columns: Index | None) -> Labels:
    """The labels from all ``[labels]`` blocks.

    Parameters
    ----------
    rows, columns
        Place of every row and column; None when they are not known, for then other
        mistakes have been told.
    """
    if not blocks:
        return NO_LABELS
    found = _Found()
    for block in blocks:
        _tell_error_cells(block)
        kinds = [text.casefold() for text in column(block, 0).texts]
        for kind, index in (("row", rows), ("column", columns), (OBJECTIVE, {})):
            picked = [place for place, word in enumerate(kinds) if word == kind]
            _read_kind(block, kind, index, picked, found)
        for place, word in enumerate(kinds):
            if word not in ("row", "column", OBJECTIVE):
                column(block, 0).wrong(place, "row, column or objective")
    return _labels(found)


def _tell_error_cells(block: Block) -> None:
    for place in range(2, len(block.fixed)):
        cells = column(block, place)
        for k, text in enumerate(cells.texts):
            if text in ERROR_CELLS:
                cells.wrong(k, "a text")


def _read_kind(
    block: Block, kind: str, index: Index | None, picked: Sequence[int], found: _Found
) -> None:
    """The lines of one kind in a block."""
    whole = column(block, 1)
    names = Cells(
        block,
        ("name",),
        [block.lines[place] for place in picked],
        [whole.texts[place] for place in picked],
    )
    if kind == OBJECTIVE:
        places: Sequence[int] = [0] * len(picked)
    else:
        where = f"a {kind} of [{'b' if kind == 'row' else 'c'}]"
        known = look_up(names, index, where)
        if known is None:
            return
        places = known.tolist()
    texts = [column(block, place).texts for place in range(2, len(block.fixed))]
    for k, (line, place) in enumerate(zip(picked, places, strict=True)):
        key = (kind, place)
        if key in found.lines:
            advice = f"line {found.lines[key]} has one"
            names.wrong(k, "one line of labels for each name", advice)
            continue
        found.lines[key] = names.line(k)
        found.labels[key] = Label(*(text[line] for text in texts))


def _labels(found: _Found) -> Labels:
    kept = {key: label for key, label in found.labels.items() if label != NO_LABEL}
    rows = {place: label for (kind, place), label in sorted(kept.items()) if kind == "row"}
    columns = {place: label for (kind, place), label in sorted(kept.items()) if kind == "column"}
    objective = kept.get((OBJECTIVE, 0), NO_LABEL)
    return Labels(MappingProxyType(rows), MappingProxyType(columns), objective)
