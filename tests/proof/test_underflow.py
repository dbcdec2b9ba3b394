"""Numbers so small or large that doubles lose them: no false proof, and no exception."""

from __future__ import annotations

import pytest

from lpview.blocks import read_model_bytes
from lpview.model import LinearProgram
from lpview.proof.results import NotProved, Proof, ProvedOptimal
from tests.proof.fooling import BASIC, FREE, LOWER, basis
from tests.proof.test_prove_check import faults, proved, said, truth

# The row value is -1e-324, which no double holds: the model is infeasible.
VALUE = b"""[c],minimize
column,cost,lower,upper
x,0,2.96e-24,2.96e-24
y,0,2.96e-24,2.96e-24
z,0,6.92e-24,6.92e-24
[A]
row,column,coefficient
r,x,1e-300
r,y,1e-300
r,z,-1e-300
[b]
row,relation,rhs
r,>=,0
"""

# The reduced cost of x3 is a sum of products of 3e-324 each.
PRICE = b"""[c],minimize
column,cost,lower,upper
x0,2.96e-24,none,none
x1,2.96e-24,none,none
x2,6.92e-24,none,none
x3,0,0,inf
[A]
row,column,coefficient
a,x0,1
a,x3,-1e-300
b,x1,1
b,x3,-1e-300
c,x2,1
c,x3,1e-300
[b]
row,relation,rhs
a,=,1
b,=,1
c,=,1
"""

LARGE = b"""[c],minimize
column,cost
x,1e10
[A]
row,column,coefficient
r,x,1e-300
[b]
row,relation,rhs
r,>=,1e-300
"""


def true(lp: LinearProgram, proof: Proof) -> bool:
    """Whether nothing false is stated; the solver's range is too narrow for some of these."""
    return isinstance(proof, NotProved) or faults(lp, proof) == []


def test_a_row_value_that_underflows() -> None:
    lp = read_model_bytes(VALUE, "value.csv").model
    proof = proved(lp)
    assert true(lp, proof)
    assert not isinstance(proof, ProvedOptimal)
    assert truth(lp) == "infeasible"


def test_a_reduced_cost_that_underflows() -> None:
    lp = read_model_bytes(PRICE, "price.csv").model
    start = basis([BASIC, BASIC, BASIC, LOWER], [LOWER, LOWER, LOWER])
    proof = proved(lp, start)
    assert true(lp, proof)
    assert said(proof) == truth(lp) or not isinstance(proof, ProvedOptimal)


@pytest.mark.parametrize("status", [LOWER, FREE])
def test_a_dual_value_that_no_double_holds(status: int) -> None:
    lp = read_model_bytes(LARGE, "large.csv").model
    for start in (None, basis([BASIC], [LOWER]), basis([status], [BASIC])):
        proof = proved(lp, start)
        assert true(lp, proof)
