"""The judge of the other tests: a proof checked again in fractions, and the judge itself.

It shares nothing with the package but the fields of models and proofs: a number of a model
is its odd value or the shortest decimal of its double. What a model comes to is found by
the exact simplex of `tests.prices`.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from math import inf

import numpy as np
import pytest

from lpview.answer import Basis
from lpview.model import LinearProgram, Sense
from lpview.proof.prove import StoppedError, prove
from lpview.proof.results import (
    ExactVector,
    NotProved,
    Proof,
    ProvedInfeasible,
    ProvedOptimal,
    ProvedUnbounded,
)
from lpview.run import Solved, SolveSettings, Unsolved, Watch
from lpview.solver import solve
from tests.dual.models import model
from tests.prices.exact import Program
from tests.prices.simplex import Ends, Number

PATIENCE = 200
"""Small steps of a proof after which these tests give it up."""


def ask(lp: LinearProgram, settings: SolveSettings) -> Solved | Unsolved:
    """The solver, as `prove` wants it."""
    return solve(lp, settings, Watch())


def proved(lp: LinearProgram, basis: Basis | None = None, asked=ask, patience=PATIENCE) -> Proof:
    """Prove a model, giving up after ``patience`` small steps."""
    return prove(lp, basis, asked, SolveSettings(), giving_up(patience))


def giving_up(patience: int):
    """A callback that ends the work when it is called once too often."""
    left = iter(range(patience))

    def between() -> None:
        if next(left, None) is None:
            raise StoppedError("given up by the test")

    return between


def solver_basis(lp: LinearProgram, **settings) -> Basis:
    """The basis that the solver ends with."""
    result = ask(lp, SolveSettings(**settings))
    assert isinstance(result, Solved)
    assert result.answer.basis is not None
    return result.answer.basis


@dataclass(frozen=True)
class Exact:
    """A model in fractions; lines are rows, then columns."""

    sign: int
    """1 when the model minimizes and -1 when it maximizes."""
    c: list[Fraction]
    offset: Fraction
    rows: list[dict[int, Fraction]]
    ends: list[Ends]
    """Sides, then bounds; an infinite one is a float."""

    def values(self, x: list[Fraction]) -> list[Fraction]:
        """Row values, then the plan."""
        sums = [sum((a * x[j] for j, a in row.items()), Fraction(0)) for row in self.rows]
        return [*sums, *x]

    def prices(self, y: list[Fraction], costs: list[Fraction]) -> list[Fraction]:
        """Dual values, then reduced costs, for these costs."""
        reduced = list(costs)
        for price, row in zip(y, self.rows, strict=True):
            for j, a in row.items():
                reduced[j] -= a * price
        return [*y, *reduced]

    def objective(self, x: list[Fraction]) -> Fraction:
        return sum((c * v for c, v in zip(self.c, x, strict=True)), self.offset)


def exactly(lp: LinearProgram) -> Exact:
    """A model's own numbers."""
    A, data = lp.A, numbers(lp, "A", lp.A.data)
    rows = [
        {int(A.indices[k]): data[k] for k in range(A.indptr[i], A.indptr[i + 1])}
        for i in range(lp.m)
    ]
    lows = [*numbers(lp, "row_lower"), *numbers(lp, "lower")]
    highs = [*numbers(lp, "row_upper"), *numbers(lp, "upper")]
    return Exact(
        1 if lp.sense is Sense.MINIMIZE else -1,
        numbers(lp, "c"),
        numbers(lp, "offset", np.array([lp.offset]))[0],
        rows,
        list(zip(lows, highs, strict=True)),
    )


def numbers(lp: LinearProgram, part: str, values=None) -> list[Number]:
    """One array of a model, exactly."""
    values = (getattr(lp, part) if values is None else values).tolist()
    odd = lp.odd.get(part, {})
    return [
        odd[k] if k in odd else v if abs(v) == inf else Fraction(repr(v))
        for k, v in enumerate(values)
    ]


def truth(lp: LinearProgram) -> Fraction | str:
    """The optimal objective, or "infeasible" or "unbounded", by the exact simplex."""
    exact = exactly(lp)
    dense = [[row.get(j, Fraction(0)) for j in range(lp.n)] for row in exact.rows]
    costs = [exact.sign * cost for cost in exact.c]
    return Program(exact.sign, costs, exact.offset, dense, exact.ends).value


def said(proof: Proof) -> Fraction | str:
    """What a proof says, in the same words."""
    if isinstance(proof, ProvedOptimal):
        return proof.objective
    words = {ProvedInfeasible: "infeasible", ProvedUnbounded: "unbounded"}
    return words.get(type(proof), f"not proved: {getattr(proof, 'reason', '')}")


def faults(lp: LinearProgram, proof: Proof) -> list[str]:
    """Everything that a proof states and that does not hold exactly."""
    exact = exactly(lp)
    if isinstance(proof, ProvedOptimal):
        return _faults_of_optimum(exact, proof)
    if isinstance(proof, ProvedInfeasible):
        return _faults_of_farkas(exact, proof)
    if isinstance(proof, ProvedUnbounded):
        return _faults_of_ray(exact, proof)
    return [said(proof)]


def _faults_of_optimum(exact: Exact, proof: ProvedOptimal) -> list[str]:
    x, y = fractions(proof.x), fractions(proof.y)
    values, prices = exact.values(x), exact.prices(y, exact.c)
    at_end = [value in ends for value, ends in zip(values, exact.ends, strict=True)]
    dual = dual_objective(exact, prices, exact.sign)
    basic = np.count_nonzero(proof.basis.row == 1) + np.count_nonzero(proof.basis.column == 1)
    found = {
        "plan": is_outside(values, exact.ends),
        "sign of a price": dual is None,
        "dual objective": dual is not None and dual + exact.offset != proof.objective,
        "objective": exact.objective(x) != proof.objective,
        "zero slack": proof.zero_slack.tolist() != at_end,
        "zero price": proof.zero_price.tolist() != [price == 0 for price in prices],
        "size of the basis": basic != len(exact.rows),
    }
    return [what for what, wrong in found.items() if wrong]


def _faults_of_farkas(exact: Exact, proof: ProvedInfeasible) -> list[str]:
    prices = exact.prices(fractions(proof.y), [Fraction(0)] * len(exact.c))
    total = dual_objective(exact, prices, 1)
    found = {
        "sign of a multiplier": total is None,
        "contradiction": total is not None and total != proof.contradiction,
        "no contradiction": proof.contradiction <= 0,
    }
    return [what for what, wrong in found.items() if wrong]


def _faults_of_ray(exact: Exact, proof: ProvedUnbounded) -> list[str]:
    ray = fractions(proof.ray)
    still = [(low if low == -inf else 0, high if high == inf else 0)
             for low, high in exact.ends]  # fmt: skip
    rate = exact.objective(ray) - exact.offset
    found = {
        "plan": is_outside(exact.values(fractions(proof.x)), exact.ends),
        "ray": is_outside(exact.values(ray), still),
        "rate": rate != proof.rate,
        "does not improve": exact.sign * proof.rate >= 0,
    }
    return [what for what, wrong in found.items() if wrong]


def fractions(vector: ExactVector) -> list[Fraction]:
    assert vector.denominator > 0
    return [Fraction(n, vector.denominator) for n in vector.numerators]


def is_outside(values: list[Fraction], ends: list[Ends]) -> bool:
    return any(not low <= v <= high for v, (low, high) in zip(values, ends, strict=True))


def dual_objective(exact: Exact, prices: list[Fraction], sign: int) -> Fraction | None:
    """What prices make of the ends that they name; None where such an end is absent."""
    total = Fraction(0)
    for price, (low, high) in zip(prices, exact.ends, strict=True):
        end = low if sign * price > 0 else high
        if price and abs(end) == inf:
            return None
        total += price * end if price else 0
    return total


def interval_faults(proof: NotProved, value: Fraction | str) -> list[str]:
    """What is wrong with the interval of a model that comes to ``value``."""
    found = {
        "a plan of an infeasible model": proof.has_plan and value == "infeasible",
        "lower end": None not in (proof.lower, _number(value)) and proof.lower > value,
        "upper end": None not in (proof.upper, _number(value)) and proof.upper < value,
        "a bound of an unbounded model": value == "unbounded"
        and None not in (proof.lower, proof.upper),
    }
    return [what for what, wrong in found.items() if wrong]


def _number(value: Fraction | str) -> Fraction | None:
    return None if isinstance(value, str) else value


DOORS = model(
    "maximize",
    {"door": 3, "window": 5},
    {
        "saw": (-inf, {"door": 1}, 4),
        "drill": (-inf, {"window": 2}, 12),
        "paint": (-inf, {"door": 3, "window": 2}, 18),
    },
    {},
)


def test_the_judge_accepts_a_proof():
    assert faults(DOORS, proved(DOORS)) == []
    assert said(proved(DOORS)) == truth(DOORS) == 36


@pytest.mark.parametrize(
    ("fault", "change"),
    [
        ("plan", {"x": ExactVector((2, 7), 1)}),
        ("sign of a price", {"y": ExactVector((0, -3, 2), 2)}),
        ("dual objective", {"y": ExactVector((1, 3, 2), 2)}),
        ("objective", {"objective": Fraction(36) + Fraction(1, 10**40)}),
        ("zero slack", {"zero_slack": np.zeros(5, bool)}),
        ("zero price", {"zero_price": np.zeros(5, bool)}),
        ("size of the basis", {"basis": Basis(np.ones(2, np.int8), np.ones(3, np.int8))}),
    ],
)
def test_the_judge_refuses_a_spoiled_optimum(fault, change):
    assert fault in faults(DOORS, replace(proved(DOORS), **change))


SHORT = model("minimize", {"a": 1}, {"r": (3, {"a": 1}, inf), "s": (-inf, {"a": 2}, 5)}, {})
ENDLESS = model("maximize", {"a": 2, "b": -1}, {"r": (0, {"a": 1, "b": -1}, 4)}, {})


@pytest.mark.parametrize(
    ("fault", "change"),
    [
        ("sign of a multiplier", {"y": ExactVector((-1, -1), 1)}),
        ("contradiction", {"contradiction": Fraction(1)}),
        ("contradiction", {"y": ExactVector((1, -1), 1)}),
    ],
)
def test_the_judge_refuses_spoiled_multipliers(fault, change):
    proof = proved(SHORT)
    assert faults(SHORT, proof) == []
    assert fault in faults(SHORT, replace(proof, **change))


@pytest.mark.parametrize(
    ("fault", "change"),
    [
        ("plan", {"x": ExactVector((5, 0), 1)}),
        ("ray", {"ray": ExactVector((2, 1), 1), "rate": Fraction(3)}),
        ("rate", {"rate": Fraction(3)}),
        ("does not improve", {"ray": ExactVector((0, 0), 1), "rate": Fraction(0)}),
    ],
)
def test_the_judge_refuses_a_spoiled_ray(fault, change):
    proof = proved(ENDLESS)
    assert faults(ENDLESS, proof) == []
    assert fault in faults(ENDLESS, replace(proof, **change))
