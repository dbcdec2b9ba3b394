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
from tests.proof.test_prove_check import ask, faults, proved, said, solver_basis

FOLDER = Path(__file__).parents[1] / "data" / "netlib"

VALUES = {
    "adlittle": "225494.96316238038228101176621492",
    "afiro": "-464.75314285714285714285714285714",
    "beaconfd": "33592.4858072",
    "blend": "-30.812149845828220173774356124984",
    "brandy": "1518.5098964881283835426751550618",
    "israel": "-896644.82186304572966200464196045",
    "recipe": "-266.616",
    "sc205": "-52.202061211707248062628010857689",
    "sc50a": "-64.575077058564509026860413914575",
    "sc50b": "-70",
    "scagr25": "-14753433.060768523167790925075974",
    "sctap1": "1412.25",
    "share2b": "-415.73224074141948654519910873841",
    "stocfor1": "-41131.976219436406065682760731514",
}
"""Exact optimal values of the Netlib problems, published as a list of 32 digits:
``check/testset/irpaper-opt.solu`` of the repository scipopt/soplex, the reference values of
Gleixner, Steffy and Wolter 2016, "Iterative refinement for linear programming", INFORMS
Journal on Computing 28: 449-464."""

FRACTIONS = {
    "afiro": "-406659/875",
    "beaconfd": "41990607259/1250000",
    "recipe": "-33327/125",
    "sc205": "-5064062500/97008861",
    "sc50a": "-146650/2271",
    "sc50b": "-70",
    "sctap1": "5649/4",
}
"""The same optima as fractions, recognized from more than 70 decimals that were computed
apart from this package, with other solvers' bases."""

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
"""Likewise, of models that are not shipped; fit1d and fit1p are duals, and so are fit2d and
fit2p."""


def digits(value: Fraction) -> Decimal:
    """A fraction rounded to 32 digits, as in the published list."""
    return Context(prec=32).divide(Decimal(value.numerator), Decimal(value.denominator))


def agrees(value: Fraction, published: str) -> bool:
    return digits(value) == Context(prec=32).create_decimal(published)


def test_agreement_is_to_the_last_digit():
    value = Fraction(FRACTIONS["sc50a"])
    assert agrees(value, VALUES["sc50a"])
    assert not agrees(value, VALUES["sc50a"][:-1] + "4")
    assert not agrees(value, VALUES["sc50a"][:-1])


def test_every_shipped_model_has_a_published_value():
    assert {path.stem for path in FOLDER.glob("*.csv")} - {"values"} == set(VALUES)


@pytest.mark.parametrize("name", VALUES)
def test_a_shipped_model(name):
    lp = read_model(FOLDER / f"{name}.csv").model
    proof = proved(lp, solver_basis(lp))
    assert isinstance(proof, ProvedOptimal)
    assert agrees(proof.objective, VALUES[name])
    if name in FRACTIONS:
        assert proof.objective == Fraction(FRACTIONS[name])
    assert faults(lp, proof) == []
    assert proof.effort.steps == 1


def collection() -> Path:
    """The folder of the slow test, which is skipped without one."""
    if "LPVIEW_NETLIB" not in os.environ:
        pytest.skip("LPVIEW_NETLIB names no folder of models")
    return Path(os.environ["LPVIEW_NETLIB"])


def published(folder: Path) -> dict[str, str]:
    """Optimal values by file, as the second column of a table writes them."""
    named = os.environ.get("LPVIEW_NETLIB_VALUES")
    tables = [*folder.glob("*values.csv"), *folder.parent.glob("*-values.csv")]
    tables = [Path(named)] if named else tables
    if not tables:
        pytest.skip(f"no values beside {folder}, and LPVIEW_NETLIB_VALUES names none")
    with tables[0].open(encoding="utf-8", newline="") as lines:
        return {row[0]: row[1] for row in list(csv.reader(lines))[1:]}


@pytest.mark.slow
@pytest.mark.parametrize("feasibility", [1e-9, 1e-7])
def test_a_collection_proved(feasibility, capsys):
    folder = collection()
    values, wrong, steps = published(folder), [], {}
    paths = [path for path in sorted(folder.glob("*.csv")) if not path.stem.endswith("values")]
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
