"""Real models: they pass, agree with published optima, and report their true residuals.

The slow test checks a whole collection: the folder that the environment variable
``LPVIEW_NETLIB`` names. ``values.csv`` in it, or a file beside it whose name ends in
``-values.csv``, gives the optimal values to compare with.
"""

from __future__ import annotations

import csv
import os
from json import loads as parse
from pathlib import Path

import pytest

from lpview.blocks import read_model
from lpview.outcomes import Optimal
from lpview.report import json
from tests.check.helpers import examined
from tests.oracle import check_report

FOLDER = Path(__file__).parents[1] / "data" / "netlib"
AT_MOST_FAILING = 2
"""Of the whole collection: models whose answers double precision does not settle."""


def model_files(folder):
    return sorted(path for path in Path(folder).glob("*.csv") if not path.stem.endswith("values"))


def published(folder):
    """Optimal values by file, from a table whose second column has them."""
    tables = [*Path(folder).glob("*values.csv"), *Path(folder).parent.glob("*-values.csv")]
    values = {}
    for table in tables:
        with table.open(encoding="utf-8", newline="") as lines:
            values |= {row[0]: float(row[1]) for row in list(csv.reader(lines))[1:]}
    return values


def agrees(found, exact):
    """To 1% or 1e-15; ``found`` is a number or the text of an infinity."""
    return found == exact or abs(float(found) - float(exact)) <= max(0.01 * float(exact), 1e-15)


def wrong_residuals(path, text):
    """Residuals that the report states and that are not the exact ones."""
    exact = check_report(path, text)
    stated = {r["condition"]: r for r in parse(text)["residuals"]}
    sizes = ("absolute", "scaled", "relative")
    return [
        (condition, size, stated[condition][size], float(value))
        for condition, values in exact.items()
        for size, value in zip(sizes, values, strict=True)
        if not agrees(stated[condition][size], value)
    ]


VALUES = published(FOLDER)


@pytest.mark.parametrize("path", model_files(FOLDER), ids=lambda path: path.stem)
def test_a_real_model(path):
    found = examined(read_model(path).model)
    assert isinstance(found, Optimal)
    assert found.passed
    assert found.measurement.primal_objective == pytest.approx(VALUES[path.stem], rel=1e-9)
    assert found.measurement.dual_objective == pytest.approx(VALUES[path.stem], rel=1e-9)
    assert wrong_residuals(path, json.render(found)) == []


def test_there_are_real_models():
    assert len(model_files(FOLDER)) >= 12
    assert {path.stem for path in model_files(FOLDER)} == set(VALUES)


COLLECTION = Path(os.environ.get("LPVIEW_NETLIB", FOLDER))
"""The folder that the slow test checks; the models of this repository by default."""


@pytest.mark.slow
def test_a_collection_of_real_models(capsys):
    values, failing, faults = published(COLLECTION), [], []
    for path in model_files(COLLECTION):
        found = examined(read_model(path).model)
        text = json.render(found)
        faults += [(path.stem, fault) for fault in wrong_residuals(path, text)]
        if not (isinstance(found, Optimal) and found.passed):
            failing.append((path.stem, parse(text)["status"], parse(text)["residuals"]))
        elif found.measurement.primal_objective != pytest.approx(values[path.stem], rel=1e-9):
            faults.append((path.stem, found.measurement.primal_objective, values[path.stem]))
    with capsys.disabled():
        print(*failing, sep="\n")
    assert faults == []
    assert len(failing) <= AT_MOST_FAILING
