"""A linear program to canonical CSV blocks, from which it is read back exactly.

The text is the same for models that are `lpview.model.identical`: line feeds,
commas, costs one a line, triplets by row, numbers in their shortest exact form.
"""

from __future__ import annotations

import hashlib
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace
from fractions import Fraction

import numpy as np

from lpview.blocks.cells import MOST_DIGITS, significant_digits
from lpview.blocks.mistakes import InputError, Mistake, quoted
from lpview.blocks.names import name_problem
from lpview.decimals import number_text
from lpview.labels import NO_LABEL, Labels
from lpview.model import LinearProgram, Vector


def write_blocks(lp: LinearProgram) -> str:
    """The canonical text of a model.

    Raises `InputError` for a name that a file cannot hold; see `name_problem`.
    """
    _check_names(lp)
    columns, rows = _cells(lp.columns), _cells(lp.rows)
    # "[offset],5" is a block line, however it is spelled, so that such a column needs a
    # longer line.
    together = any(name[1:-1].strip().casefold() == "offset" for name in lp.columns if "[" in name)
    blocks = [_objective(lp, columns, together)]
    if lp.offset != 0:
        blocks.append(["[offset]," + _texts(np.array([lp.offset]), _odd(lp, "offset"))[0]])
    blocks += [_coefficients(lp, columns, rows), _rows(lp, rows)]
    bounds = [] if together else list(_bounds(lp, columns))
    if bounds:
        blocks.append(["[bounds]", "column,lower,upper", *bounds])
    return "\n".join("\n".join(block) + "\n" for block in blocks)


def write_labels(lp: LinearProgram, labels: Labels) -> str:
    """The canonical block ``[labels]``; empty for a model without any."""
    lines = []
    for kind, names, known in (
        ("row", lp.rows, labels.rows),
        ("column", lp.columns, labels.columns),
        ("objective", ("",), {0: labels.objective}),
    ):
        for place, label in sorted(known.items()):
            if label != NO_LABEL:
                cells = (names[place], label.label, label.unit, label.group)
                lines.append(",".join([kind, *_cells(cells)]))
    return "\n".join(["[labels]", "kind,name,label,unit,group", *lines, ""]) if lines else ""


def signed(lp: LinearProgram, labels: Labels) -> Labels:
    """The labels with the digest of their canonical block."""
    text = write_labels(lp, labels)
    return replace(labels, sha256=hashlib.sha256(text.encode()).hexdigest()) if text else labels


def write_values(
    block: str, columns: tuple[str, ...], values: Vector, *, sparse: bool = False
) -> str:
    """A plan as a block ``[x]``, or another value per column; zeros left out if ``sparse``."""
    cells = _cells(columns)
    places = np.flatnonzero(values) if sparse else np.arange(values.size)
    lines = [f"{cells[k]},{number_text(float(values[k]))}" for k in places.tolist()]
    return "\n".join([f"[{block}]", "column,value", *lines]) + "\n"


def _check_names(lp: LinearProgram) -> None:
    mistakes = [
        Mistake(lp.name, problem, quoted(name), block=block, field=field)
        for block, field, names in (("c", "column", lp.columns), ("b", "row", lp.rows))
        for name in names
        # Most names are plain words, which no file has trouble with.
        if not name.isidentifier() and (problem := name_problem(name))
    ]
    if mistakes:
        raise InputError(mistakes)


def _cells(names: Iterable[str]) -> list[str]:
    """Names as cells, in quotes where they hold a separator or a quote."""
    return [
        '"' + name.replace('"', '""') + '"' if "," in name or '"' in name else name
        for name in names
    ]


def _odd(lp: LinearProgram, field: str) -> Mapping[int, Fraction]:
    return lp.odd.get(field, {})


def _texts(values: Vector, odd: Mapping[int, Fraction]) -> list[str]:
    """Numbers as text, in the form that may be read back."""
    distinct, which = np.unique(values, return_inverse=True)
    known = [number_text(value) for value in distinct.tolist()]
    texts = [known[k] for k in which.tolist()]
    for place, exact in odd.items():
        text = number_text(float(values[place]), exact)
        if significant_digits(text) > MOST_DIGITS:
            text = f"{exact.numerator}/{exact.denominator}"
        texts[place] = text
    return texts


def _texts_of(lp: LinearProgram, field: str) -> list[str]:
    values = lp.A.data if field == "A" else getattr(lp, field)
    return _texts(values, _odd(lp, field))


def _objective(lp: LinearProgram, columns: list[str], together: bool) -> list[str]:
    parts = [columns, _texts_of(lp, "c")]
    header = "column,cost"
    if together:
        parts += [_texts_of(lp, "lower"), _texts_of(lp, "upper")]
        header = "column,cost,lower,upper"
    return [f"[c],{lp.sense.value}", header, *map(",".join, zip(*parts, strict=True))]


def _coefficients(lp: LinearProgram, columns: list[str], rows: list[str]) -> list[str]:
    row_of = np.repeat(np.arange(lp.m), np.diff(lp.A.indptr)).tolist()
    places = zip(row_of, lp.A.indices.tolist(), _texts_of(lp, "A"), strict=True)
    lines = [f"{rows[row]},{columns[column]},{text}" for row, column, text in places]
    return ["[A]", "row,column,coefficient", *lines]


def _rows(lp: LinearProgram, rows: list[str]) -> list[str]:
    lower, upper = _texts_of(lp, "row_lower"), _texts_of(lp, "row_upper")
    below, above = np.isinf(lp.row_lower), np.isinf(lp.row_upper)
    if (lp.is_equality | (below != above)).all():
        relations = np.where(below, "<=", np.where(above, ">=", "=")).tolist()
        ends = zip(below.tolist(), lower, upper, strict=True)
        sides = [high if no_lower else low for no_lower, low, high in ends]
        lines = map(",".join, zip(rows, relations, sides, strict=True))
        return ["[b]", "row,relation,rhs", *lines]
    # Missing sides are spelled, or a row called "[x]" might read as a block line.
    lines = map(",".join, zip(rows, lower, upper, strict=True))
    return ["[b]", "row,lower,upper", *lines]


def _bounds(lp: LinearProgram, columns: list[str]) -> Iterator[str]:
    unusual = np.flatnonzero((lp.lower != 0) | (lp.upper != np.inf)).tolist()
    lower, upper = _texts_of(lp, "lower"), _texts_of(lp, "upper")
    for place in unusual:
        yield f"{columns[place]},{lower[place]},{upper[place]}"
