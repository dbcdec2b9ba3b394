"""Names in cells: which are allowed, where they repeat, which are unknown."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from lpview.blocks.cells import Cells
from lpview.blocks.even import find
from lpview.blocks.lines import is_comment
from lpview.blocks.mistakes import ERROR_CELLS, Problem, quoted

Index = Mapping[str, int]

_INNER_BLANKS = re.compile(r"[^\S\n]+")


def name_problem(name: str) -> str:
    """What is expected instead of this name of a row or column; empty if it is fine.

    A name is refused where no cell could hold it, so that every model that was
    read can be written again. Cells are trimmed and lines are split before names
    are looked at.
    """
    if not name:
        return "a name"
    if name in ERROR_CELLS:
        return "a name that is no spreadsheet error"
    if is_comment(name):
        return "a name that does not begin a comment"
    if name != name.strip():
        return "a name without blanks at its ends"
    if set(name) & {"\n", "\r", "\0"}:
        return "a name on one line"
    return "a name in Unicode" if re.search("[\ud800-\udfff]", name) else ""


def read_names(parts: Sequence[Cells]) -> tuple[str, ...]:
    """The names of all columns or rows; tells of wrong and of repeated ones."""
    names = tuple(text for cells in parts for text in cells.texts)
    distinct = set(names)
    fine = "" not in distinct and "#" not in "".join(names)
    if len(distinct) == len(names) and (fine or not any(map(name_problem, names))):
        return names
    for cells in parts:
        for place, name in enumerate(cells.texts):
            problem = name_problem(name)
            if problem:
                cells.wrong(place, problem)
    tell_repeated(parts)
    return names


def tell_repeated(parts: Sequence[Cells]) -> bool:
    """Tell of every name that stood in these cells before; whether there is any."""
    first: dict[str, int] = {}
    repeated = False
    for cells in parts:
        for place, name in enumerate(cells.texts):
            line = cells.line(place)
            if name in first:
                here = first[name] == line
                advice = "" if here else f"it is on line {first[name]} too"
                cells.wrong(place, "every name once", advice)
                repeated = True
            elif name:
                first[name] = line
    return repeated


def look_up(
    cells: Cells, index: Index | None, known: str, advice: str = ""
) -> NDArray[np.int64] | None:
    """Places of names; tells of unknown ones, once for each name.

    Parameters
    ----------
    index
        Place of every known name; None when they are not known, because their own
        block is wrong.
    known
        What a known name is, in words.
    advice
        What else to do about an unknown one, where the nearest name is not all.

    Returns
    -------
    places, shape ``(len(cells.texts),)``, or None when any name is unknown.
    """
    if index is None:
        return None
    places = find(cells.texts, index)
    if places is not None:
        return places
    unknown: dict[str, list[int]] = {}
    for place, name in enumerate(cells.texts):
        if name not in index:
            unknown.setdefault(name, []).append(cells.line(place))
    for name, lines in unknown.items():
        times = f" on {len(lines)} lines" if len(lines) > 1 else ""
        problem = Problem(known, quoted(name) + times, advice)
        choices = tuple(index) if name else ()
        cells.block.place.unknown(lines[0], cells.fields[0], problem, name, choices)
    return None


def names_alike(names: Sequence[str]) -> tuple[tuple[str, str], ...]:
    """Pairs of names that differ only in case, in inner blanks or in how a letter is coded."""
    joined = "\n".join(names)
    if not joined.isascii():
        joined = unicodedata.normalize("NFKC", joined)
    folded = _INNER_BLANKS.sub("", joined.casefold()).split("\n")
    if len(set(folded)) == len(names) or not names:
        return ()
    first: dict[str, str] = {}
    pairs = []
    for name, key in zip(names, folded, strict=True):
        if first.setdefault(key, name) != name:
            pairs.append((first[key], name))
    return tuple(pairs)
