"""Certificates written and read back: textbook proofs, their text, and the documented example.

`signed`, `certified` and `judge` serve the tests of the kernel too. The judge is the definition
in fractions: complementary slackness for an optimum, the greatest value within the bounds for a
contradiction, every line followed along a ray.
"""

from __future__ import annotations

import csv
import hashlib
import re
import tomllib
from dataclasses import fields, replace
from fractions import Fraction
from math import inf, isinf, lcm
from pathlib import Path

import pytest

from lpview.blocks import read_model
from lpview.blocks.writer import write_blocks
from lpview.model import LinearProgram, frozen_odd
from lpview.proof import certificate as certificate_module
from lpview.proof import kernel
from lpview.proof.certificate import write_certificate
from lpview.proof.results import ExactVector, ProvedInfeasible, ProvedOptimal, ProvedUnbounded
from tests.reading import Model, read

FOLDER = Path(__file__).parents[1] / "data" / "textbook"
CASES = tomllib.loads((FOLDER / "cases.toml").read_text("utf-8"))["case"]
LAST = "SHA-256 of the lines above,"


def exact_vector(table, names, factor=1):
    """A whole vector over its least common denominator."""
    values = [factor * Fraction(table.get(name, 0)) for name in names]
    common = lcm(*(value.denominator for value in values))
    return ExactVector(tuple(int(value * common) for value in values), common)


def proved(kind, **parts):
    """A result of which nothing matters but the parts that a certificate holds."""
    return kind(**{field.name: None for field in fields(kind)} | parts)


def proofs_of(case, lp):
    if case["status"] == "optimal":
        x, y = exact_vector(case["x"], lp.columns), exact_vector(case["y"], lp.rows)
        return [proved(ProvedOptimal, objective=Fraction(case["objective"]), x=x, y=y)]
    if case["status"] == "unbounded":
        x, ray = exact_vector(case["point"], lp.columns), exact_vector(case["ray"], lp.columns)
        return [proved(ProvedUnbounded, x=x, ray=ray, rate=Fraction(case["rate"]))]
    return [
        # The cases state positive multipliers for upper sides.
        proved(
            ProvedInfeasible,
            y=exact_vector(stated["rows"], lp.rows, -1),
            contradiction=-Fraction(stated["right_hand_side"]),
        )
        for stated in case["certificates"]
    ]


def certified(lp, proof):
    """The canonical blocks and the certificate, as bytes."""
    blocks = write_blocks(lp).encode()
    return blocks, write_certificate(lp, hashlib.sha256(blocks).hexdigest(), proof).encode()


def signed(text):
    """The text with its last line made anew."""
    body = text[: text.rfind("\n", 0, -1) + 1]
    return f"{body}{LAST}{hashlib.sha256(body.encode()).hexdigest()}\n"


def turned(lp, proof):
    """The same model optimized the other way, and its proof."""
    odd = {**lp.odd, "c": {k: -v for k, v in lp.odd.get("c", {}).items()}}
    odd["offset"] = {k: -v for k, v in lp.odd.get("offset", {}).items()}
    other = replace(lp, sense=lp.sense.other, c=-lp.c, offset=-lp.offset, odd=frozen_odd(odd))
    if isinstance(proof, ProvedOptimal):
        y = replace(proof.y, numerators=tuple(-v for v in proof.y.numerators))
        return other, replace(proof, objective=-proof.objective, y=y)
    return other, replace(proof, rate=-proof.rate) if hasattr(proof, "rate") else proof


def textbook():
    """Every proof of the cases, in both senses."""
    for case in CASES:
        lp = read_model(FOLDER / case["file"]).model
        for k, proof in enumerate(proofs_of(case, lp)):
            yield pytest.param(lp, proof, id=f"{case['id']} {k + 1}")
            yield pytest.param(*turned(lp, proof), id=f"{case['id']} {k + 1} turned")


TEXTBOOK = list(textbook())


def stated(text):
    """What a certificate states: the claim, its number, and whole numbers by vector and name."""
    facts, vectors, name = {}, {}, ""
    for cells in csv.reader(text.split("\n")[:-2], strict=True):
        if not cells:
            name = ""
        elif name:
            assert cells[0] not in vectors[name]
            vectors[name][cells[0]] = Fraction(cells[1]) / facts[f"denominator of {name}"]
        elif cells[0] in ("row", "column"):
            name = cells[1]
            vectors[name] = {}
        elif cells[0] == "model SHA-256":
            facts[cells[0]] = cells[1]
        else:
            facts[cells[0]] = Fraction(cells[1])
    (claim,) = facts.keys() & {"optimal objective", "contradiction", "unbounded at rate"}
    return claim, facts[claim], vectors


def judge(model: Model, text: str) -> bool:
    """Whether a certificate in its proper form is a proof, by definition."""
    claim, number, vectors = stated(text)
    if claim == "contradiction":
        return number > 0 and number == contradiction(model, vectors["y"])
    if not set(vectors["x"]) <= set(model.costs):
        return False
    values = line_values(model, vectors["x"])
    ends = {**_keyed("row", model.sides), **_keyed("column", model.bounds)}
    if not all(low <= values[key] <= high for key, (low, high) in ends.items()):
        return False
    if claim == "optimal objective":
        objective = cost_of(model, vectors["x"]) + model.offset
        return number == objective and complementary(model, values, vectors["y"])
    if not set(vectors["ray"]) <= set(model.costs):
        return False
    speeds = line_values(model, vectors["ray"])
    stays = all(
        (isinf(low) or speeds[key] >= 0) and (isinf(high) or speeds[key] <= 0)
        for key, (low, high) in ends.items()
    )
    rate = cost_of(model, vectors["ray"])
    return stays and number == rate and (rate < 0 if model.sense == "minimize" else rate > 0)


def _keyed(kind, table):
    return {(kind, name): value for name, value in table.items()}


def cost_of(model, x):
    return sum((cost * x.get(name, 0) for name, cost in model.costs.items()), Fraction(0))


def line_values(model, x):
    rows = {
        row: sum((a * x.get(column, 0) for column, a in terms.items()), Fraction(0))
        for row, terms in model.rows.items()
    }
    columns = {column: x.get(column, Fraction(0)) for column in model.costs}
    return {**_keyed("row", rows), **_keyed("column", columns)}


def column_sums(model, y):
    sums = dict.fromkeys(model.costs, Fraction(0))
    for row, terms in model.rows.items():
        for column, a in terms.items():
            sums[column] += a * y.get(row, 0)
    return sums


def complementary(model, values, y):
    """Whether every price stands at the end that its sign names."""
    sums = column_sums(model, y)
    z = {column: cost - sums[column] for column, cost in model.costs.items()}
    rows = {row: y.get(row, Fraction(0)) for row in model.sides}
    ends = {**_keyed("row", model.sides), **_keyed("column", model.bounds)}
    prices = {**_keyed("row", rows), **_keyed("column", z)}
    lower_sign = 1 if model.sense == "minimize" else -1
    return set(y) <= set(model.sides) and all(
        price == 0 or values[key] == ends[key][0 if price * lower_sign > 0 else 1]
        for key, price in prices.items()
    )


def contradiction(model, y):
    """What multipliers of the rows come to; minus infinity where an end is missing."""
    if not set(y) <= set(model.sides):
        return -inf
    sides = [(v, model.sides[row][0 if v > 0 else 1]) for row, v in y.items() if v]
    sums = column_sums(model, y)
    bounds = [(-v, model.bounds[column][1 if v > 0 else 0]) for column, v in sums.items() if v]
    if any(isinf(end) for _, end in [*sides, *bounds]):
        return -inf
    return sum((v * end for v, end in [*sides, *bounds]), Fraction(0))


def reading(blocks: bytes, folder: Path) -> Model:
    """The model as a reader sees it that shares nothing with the package."""
    path = folder / "model.csv"
    path.write_bytes(blocks)
    return read(path)


@pytest.mark.parametrize(("lp", "proof"), TEXTBOOK)
def test_textbook_proofs_are_accepted(lp: LinearProgram, proof, tmp_path) -> None:
    blocks, text = certified(lp, proof)
    claim, number, _ = stated(text.decode())
    assert kernel.verify(blocks, text) == f"{claim} {number}"
    assert judge(reading(blocks, tmp_path), text.decode())


@pytest.mark.parametrize(("lp", "proof"), TEXTBOOK[::2])
def test_a_certificate_holds_the_numbers_of_the_proof(lp: LinearProgram, proof) -> None:
    _, number, vectors = stated(certified(lp, proof)[1].decode())
    assert number in [getattr(proof, k, None) for k in ("objective", "contradiction", "rate")]
    for name, values in vectors.items():
        names, vector = lp.rows if name == "y" else lp.columns, getattr(proof, name)
        everywhere = {n: vector[k] for k, n in enumerate(names)}
        assert values == {n: value for n, value in everywhere.items() if value}
    assert set(vectors) == {"x", "y", "ray"} & {field.name for field in fields(proof)}


def test_numbers_are_written_in_lowest_terms_and_zeros_are_left_out() -> None:
    lp = read_model(FOLDER / "a1.csv").model
    x, y = ExactVector((6, 18), 3), ExactVector((0, -30, -20), 20)
    proof = proved(ProvedOptimal, objective=Fraction(36), x=x, y=y)
    text = write_certificate(lp, "0" * 64, proof)
    assert "denominator of x,1\ncolumn,x\nx1,2\nx2,6\n\n" in text
    assert "denominator of y,2\nrow,y\nr2,-3\nr3,-2\n\n" in text


def test_the_documented_example_is_a_certificate() -> None:
    """Of the radiation therapy model, case A2 of `cases.toml`."""
    (case,) = [case for case in CASES if case["id"] == "A2"]
    lp = read_model(FOLDER / case["file"]).model
    (proof,) = proofs_of(case, lp)
    _, text = certified(lp, proof)
    shown = certificate_module.__doc__.split("is::\n\n")[1].split("\n\nwithout these remarks")[0]
    lines = [re.split(" {2,}", line.strip())[0] for line in shown.split("\n")]
    digests = re.compile("([0-9a-f]{4})[0-9a-f]{60}")
    assert lines == digests.sub(r"\1...", text.decode()).rstrip("\n").split("\n")
