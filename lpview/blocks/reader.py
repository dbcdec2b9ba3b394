"""CSV blocks to a linear program."""

from __future__ import annotations

import os
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from types import MappingProxyType

import numpy as np

from lpview.blocks.cells import Numbers
from lpview.blocks.coefficients import Coefficients, read_coefficients
from lpview.blocks.ends import Piece, Rows, joined, read_bounds, read_rows
from lpview.blocks.layout import BLOCKS
from lpview.blocks.mistakes import Mistake, Mistakes, Problem, printable
from lpview.blocks.names import Index, name_problem, names_alike
from lpview.blocks.objective import Objective, read_objective, read_offset
from lpview.blocks.source import Source, from_bytes, read_path
from lpview.blocks.structure import Block, read_blocks
from lpview.model import LinearProgram, frozen_odd
from lpview.reading import Notes, Reading


def read_model(source: str | Path) -> Reading:
    """Read a file or a folder of CSV blocks.

    Raises `InputError` with all mistakes found, if there are any.
    """
    path = Path(os.path.abspath(source))  # noqa: PTH100 - "." and ".." get a name
    return _read(read_path(source), path.name if path.is_dir() else path.stem)


def read_model_bytes(data: bytes, name: str) -> Reading:
    """Read CSV blocks that are in memory, such as standard input.

    Parameters
    ----------
    data
        The bytes of one file.
    name
        Its name in messages, and the name of the model.

    Raises `InputError` with all mistakes found, if there are any.
    """
    return _read([from_bytes(data, name)], name)


@dataclass(frozen=True)
class _Contents:
    """What all blocks of a model say."""

    blocks: Mapping[str, Sequence[Block]]
    """The blocks by name."""
    objective: Objective
    """``[c]``."""
    offset: Numbers
    """``[offset]``."""
    matrix: Coefficients
    """``[A]``."""
    rows: Rows
    """``[b]``."""
    bounds: Sequence[Piece]
    """``[bounds]``."""


def _read(sources: Sequence[Source], name: str) -> Reading:
    mistakes = Mistakes()
    blocks = _blocks_by_name(sources, mistakes)
    broken = {mistake.block for mistake in mistakes.found}
    objective, rows = read_objective(blocks["c"]), read_rows(blocks["b"])
    columns = _index(objective.names, blocks["c"], broken)
    contents = _Contents(
        blocks=blocks,
        objective=objective,
        offset=read_offset(blocks["offset"]),
        matrix=read_coefficients(blocks["A"], _index(rows.names, blocks["b"], broken), columns),
        rows=rows,
        bounds=read_bounds(blocks["bounds"], columns, objective.bounds),
    )
    mistakes.stop([source.file for source in sources])
    return Reading(_model(contents, name), _notes(contents))


def _blocks_by_name(sources: Sequence[Source], mistakes: Mistakes) -> dict[str, list[Block]]:
    """All blocks; tells of repeated and of missing ones."""
    blocks: dict[str, list[Block]] = {name: [] for name in BLOCKS}
    first: dict[tuple[str, ...], Block] = {}
    for source in sources:
        for block in read_blocks(source, mistakes):
            key = (block.name, *map(str.casefold, block.header))
            if first.setdefault(key, block) is block:
                blocks[block.name].append(block)
                continue
            other = first[key]
            where = "" if other.source is source else f" of {printable(other.source.file)}"
            problem = Problem("this block once", f"it again after line {other.line}{where}")
            block.place.wrong(block.line, "block line", problem)
    broken = {mistake.block for mistake in mistakes.found}
    for name, kind in BLOCKS.items():
        if kind.required and not blocks[name] and not broken & {name, ""}:
            mistakes.add(Mistake(sources[0].file, f"the block [{name}]", "none"))
    return blocks


def _index(names: Sequence[str], blocks: Sequence[Block], broken: Collection[str]) -> Index | None:
    """Place of every name; None when not all of them can be known."""
    index = {name: place for place, name in enumerate(names)}
    wrong = any(name_problem(name) for name in index if not name or name[0] == "#")
    complete = blocks and blocks[0].name not in broken and len(index) == len(names)
    return index if complete and not wrong else None


def _model(contents: _Contents, name: str) -> LinearProgram:
    objective, matrix = contents.objective, contents.matrix
    columns = joined([*objective.bounds, *contents.bounds], len(objective.names))
    rows = joined(contents.rows.pieces, len(contents.rows.names))
    odd = {
        "c": objective.odd,
        "offset": contents.offset.odd,
        "A": matrix.odd,
        "row_lower": rows.odd_lower,
        "row_upper": rows.odd_upper,
        "lower": columns.odd_lower,
        "upper": columns.odd_upper,
    }
    return LinearProgram(
        name=name,
        sense=objective.sense,
        columns=objective.names,
        rows=contents.rows.names,
        c=objective.c,
        A=matrix.A,
        row_lower=rows.lower,
        row_upper=rows.upper,
        lower=columns.lower,
        upper=columns.upper,
        offset=float(contents.offset.values[0]),
        odd=frozen_odd(odd),
    )


def _notes(contents: _Contents) -> Notes:
    objective, matrix, rows = contents.objective, contents.matrix, contents.rows
    empty_rows = np.flatnonzero(np.diff(matrix.A.indptr) == 0).tolist()
    decimals = {
        "c": objective.decimals,
        "offset": contents.offset.decimals,
        "A": matrix.decimals,
        "b": max((piece.decimals for piece in rows.pieces), default=0),
        "bounds": max((piece.decimals for piece in contents.bounds), default=0),
    }
    present = {name: most for name, most in decimals.items() if contents.blocks[name]}
    return Notes(
        empty_coefficients=matrix.empty,
        empty_costs=objective.empty_costs,
        rows_without_coefficients=tuple(rows.names[row] for row in empty_rows),
        names_alike=names_alike(objective.names) + names_alike(rows.names),
        most_decimals=MappingProxyType(present),
    )
