"""CSV blocks to a linear program."""

from __future__ import annotations

import os
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from types import MappingProxyType

import numpy as np

from lpview.blocks.cells import Numbers
from lpview.blocks.coefficients import Coefficients, read_coefficients
from lpview.blocks.ends import Piece, Rows, joined, read_bounds, read_rows
from lpview.blocks.labels import read_labels
from lpview.blocks.layout import LABELS
from lpview.blocks.mistakes import Mistakes, quoted
from lpview.blocks.names import Index, name_problem, names_alike
from lpview.blocks.objective import Objective, read_objective, read_offset
from lpview.blocks.source import PACKED, Source, from_bytes, read_file, read_path
from lpview.blocks.structure import Block, blocks_by_name
from lpview.blocks.writer import signed
from lpview.labels import Labels
from lpview.model import LinearProgram, frozen_odd
from lpview.reading import Notes, Reading


def read_model(source: str | Path, decimal: str | None = None) -> Reading:
    """Read a file or a folder of CSV blocks.

    Parameters
    ----------
    decimal
        The decimal mark, "point" or "comma"; None leaves it to the files.

    Raises `InputError` with all mistakes found, if there are any.
    """
    path = Path(os.path.abspath(source))  # noqa: PTH100 - "." and ".." get a name
    stem = Path(path.stem).stem if path.suffix.casefold() == PACKED else path.stem
    return _read(read_path(source, decimal), path.name if path.is_dir() else stem)


def read_model_bytes(data: bytes, name: str, decimal: str | None = None) -> Reading:
    """Read CSV blocks that are in memory, such as standard input.

    Parameters
    ----------
    data
        The bytes of one file.
    name
        Its name in messages, and the name of the model.
    decimal
        The decimal mark, "point" or "comma"; None leaves it to the file.

    Raises `InputError` with all mistakes found, if there are any.
    """
    return _read([from_bytes(data, name, decimal=decimal)], name)


def read_label_file(file: str, lp: LinearProgram) -> Labels:
    """Labels of a model in a file of their own, of which the block line may be left out.

    Raises `InputError` with all mistakes found, if there are any.
    """
    mistakes = Mistakes()
    source = replace(read_file(file), kinds=LABELS, implied="labels")
    blocks = blocks_by_name([source], mistakes)["labels"]
    rows, columns = ({name: k for k, name in enumerate(names)} for names in (lp.rows, lp.columns))
    labels = read_labels(blocks, rows, columns)
    mistakes.stop([file])
    return signed(lp, labels)


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
    blocks = blocks_by_name(sources, mistakes)
    broken = {mistake.block for mistake in mistakes.found}
    objective, rows = read_objective(blocks["c"]), read_rows(blocks["b"])
    columns = _index(objective.names, blocks["c"], broken)
    row_index = _index(rows.names, blocks["b"], broken)
    contents = _Contents(
        blocks=blocks,
        objective=objective,
        offset=read_offset(blocks["offset"]),
        matrix=read_coefficients(blocks["A"], row_index, columns),
        rows=rows,
        bounds=read_bounds(blocks["bounds"], columns, objective.bounds),
    )
    labels = read_labels(blocks["labels"], row_index, columns)
    mistakes.stop([source.file for source in sources])
    lp = _model(contents, name)
    return Reading(lp, _notes(contents), signed(lp, labels))


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
        remarks=_commented(contents),
    )


def _commented(contents: _Contents) -> tuple[str, ...]:
    """What is said of comments that may have been meant as data."""
    every = [each for blocks in contents.blocks.values() for b in blocks for each in b.commented]
    if not every:
        return ()
    line, text = every[0]
    lines = "1 comment that reads" if len(every) == 1 else f"{len(every)} comments that read"
    return (f"{lines} like data left out: first {quoted(text)} on line {line}",)
