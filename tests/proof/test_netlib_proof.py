"""Real models proved: every digit of the published optima, and the proofs checked again.

The slow test proves a whole collection: the folder that the environment variable
``LPVIEW_NETLIB`` names. ``LPVIEW_NETLIB_VALUES`` names the table of its optimal values to 32
digits; otherwise that is ``values.csv`` in the folder or a file beside it whose name ends in
``-values.csv``.
"""

from __future__ import annotations

import csv
import os
from decimal import Context, Decimal
from fractions import Fraction
from pathlib import Path

import pytest

from lpview.blocks import read_model
from lpview.proof.prove import prove
from lpview.proof.results import ProvedOptimal
from lpview.run import SolveSettings
from tests.check.test_netlib import COLLECTION, FOLDER, model_files
from tests.proof.test_prove_check import ask, faults, proved, said, solver_basis

with (FOLDER / "values.csv").open(encoding="utf-8", newline="") as table:
    SHIPPED = {row["file"]: row for row in csv.DictReader(table)}
"""Optimal values of the shipped models, as published and as fractions; the README beside the
file names their sources."""

MEASURED = {
    "fit1d": "-3067162892993/335341800",
    "fit1p": "3067162892993/335341800",
    "fit2d": "-408368603460193829/5964694643200",
    "fit2p": "408368603460193829/5964694643200",
    "d6cube": "37859/120",
    "degen2": "-717589/500",
    "qap8": "407/2",
    "scsd1": "73539105377361097/8485281382189270",
    "scsd8": "121418491485/134164079",
    "ship12l": "979880248232955004331/666500000000000",
    "truss": "30841542443761183218347/67219871835168000",
}
"""Optima of models that are not shipped, as fractions recognized from more than 70 decimals
that were computed apart from this package, with other solvers' bases; fit1d and fit1p are
duals, and so are fit2d and fit2p."""


def digits(value: Fraction) -> Decimal:
    """A fraction rounded to 32 digits, as in the published list."""
    return Context(prec=32).divide(Decimal(value.numerator), Decimal(value.denominator))


def agrees(value: Fraction, published: str) -> bool:
    return digits(value) == Context(prec=32).create_decimal(published)


def test_agreement_is_to_the_last_digit():
    value, published = (
        Fraction(SHIPPED["sc50a"]["exact_fraction"]),
        SHIPPED["sc50a"]["optimal_value"],
    )
    assert agrees(value, published)
    assert not agrees(value, published[:-1] + "4")
    assert not agrees(value, published[:-1])


def test_every_shipped_model_has_a_published_value():
    assert {path.stem for path in model_files(FOLDER)} == set(SHIPPED)


@pytest.mark.parametrize("name", SHIPPED)
def test_a_shipped_model(name):
    lp = read_model(FOLDER / f"{name}.csv").model
    proof = proved(lp, solver_basis(lp))
    assert isinstance(proof, ProvedOptimal)
    assert agrees(proof.objective, SHIPPED[name]["optimal_value"])
    assert proof.objective == Fraction(SHIPPED[name]["exact_fraction"])
    assert faults(lp, proof) == []
    assert proof.effort.steps == 1


def published(folder: Path) -> dict[str, str]:
    """Optimal values by file, as the second column of a table writes them.

    The table is in the folder, beside it, or named by ``LPVIEW_NETLIB_VALUES``.
    """
    named = os.environ.get("LPVIEW_NETLIB_VALUES")
    tables = [*folder.glob("*values.csv"), *folder.parent.glob("*-values.csv")]
    (first, *_) = [Path(named)] if named else tables
    with first.open(encoding="utf-8", newline="") as lines:
        return {row[0]: row[1] for row in list(csv.reader(lines))[1:]}


@pytest.mark.slow
@pytest.mark.parametrize("feasibility", [1e-9, 1e-7])
def test_a_collection_proved(feasibility, capsys):
    values, wrong, steps = published(COLLECTION), [], {}
    paths = model_files(COLLECTION)
    for path in paths:
        lp = read_model(path).model
        basis = solver_basis(lp, feasibility=feasibility)
        proof = prove(lp, basis, ask, SolveSettings())
        if not (isinstance(proof, ProvedOptimal) and agrees(proof.objective, values[path.stem])):
            wrong.append((path.stem, said(proof), values[path.stem]))
        elif path.stem in MEASURED and proof.objective != Fraction(MEASURED[path.stem]):
            wrong.append((path.stem, proof.objective, MEASURED[path.stem]))
        elif proof.effort.steps > 1:
            steps[path.stem] = proof.effort.steps
    with capsys.disabled():
        print(f"\n{len(paths)} models; more than one basis:", steps or "none")
    assert paths
    assert wrong == []
