"""A reader of block files that shares nothing with the package: exact, commas only.

It trusts its files: nothing is validated, and mistakes show as plain exceptions.
"""

from __future__ import annotations

import csv
from dataclasses import dataclass, field
from fractions import Fraction
from pathlib import Path

End = Fraction | float
INF = float("inf")
SIDES = {"<=": ("upper",), ">=": ("lower",), "=": ("lower", "upper")}


@dataclass
class Model:
    """The numbers of a file, exactly; an infinite end is a float."""

    sense: str = ""
    offset: Fraction = Fraction(0)
    costs: dict[str, Fraction] = field(default_factory=dict)
    bounds: dict[str, tuple[End, End]] = field(default_factory=dict)
    sides: dict[str, tuple[End, End]] = field(default_factory=dict)
    rows: dict[str, dict[str, Fraction]] = field(default_factory=dict)


def read(path: Path) -> Model:
    """The model of one file; every column has bounds and every row coefficients."""
    model, block = Model(), ""
    header: list[str] = []
    for line in csv.reader(path.read_text("utf-8-sig").split("\n")):
        name, *cells = [text.strip() for text in line] or [""]
        if name in ("", "#") or name.startswith("# "):
            continue
        if name.startswith("[") and name.endswith("]"):
            block, header = name, []
            _begin(model, block, cells)
        elif not header:
            header = cells
        else:
            _add(model, block, name, dict(zip(header, cells, strict=False)))
    for column in model.costs:
        model.bounds.setdefault(column, (Fraction(0), INF))
    model.rows = {row: model.rows.get(row, {}) for row in model.sides}
    return model


def _begin(model: Model, block: str, cells: list[str]) -> None:
    if block == "[c]":
        model.sense = cells[0]
    elif block == "[offset]":
        model.offset = Fraction(cells[0])


def _add(model: Model, block: str, name: str, at: dict[str, str]) -> None:
    """Add one data line, whose cells after the first are ``at`` their headers."""
    first = next(iter(at))
    if block == "[b]" and first == "relation":
        _, rhs = at.values()
        model.sides[name] = _ends(dict.fromkeys(SIDES[at["relation"]], rhs), "-inf")
    elif block == "[b]":
        model.sides[name] = _ends(at, "-inf")
    elif block == "[A]":
        texts = {at["column"]: at["coefficient"]} if first == "column" else at
        model.rows.setdefault(name, {}).update(_numbers(texts))
    elif block == "[c]":
        model.costs.update(_numbers({name: at["cost"]} if first == "cost" else at))
    if block == "[bounds]" or (block == "[c]" and {"lower", "upper"} & at.keys()):
        model.bounds[name] = _ends(at, "0")


def _numbers(texts: dict[str, str]) -> dict[str, Fraction]:
    return {name: Fraction(text or 0) for name, text in texts.items() if name}


def _ends(at: dict[str, str], low: str) -> tuple[End, End]:
    """Both ends; an empty lower end is ``low``, an empty upper one infinite."""
    texts = at.get("lower") or low, at.get("upper") or "inf"
    infinite = [text.strip("+-") in ("none", "inf") for text in texts]
    return (
        -INF if infinite[0] else Fraction(texts[0]),
        INF if infinite[1] else Fraction(texts[1]),
    )
