"""Everything that `lpview.prices` finds against the exact oracle, on drawn models."""

from fractions import Fraction

import pytest
from hypothesis import assume, example, given, note, settings
from hypothesis import strategies as st

from lpview.blocks import write_blocks
from tests.dual.models import INF, model
from tests.prices import exact
from tests.prices.compare import differences
from tests.prices.draws import any_models, models_with_optimum

DEGENERATE = models_with_optimum()
WITH_ANY_COSTS = any_models(5, 6)

# Drawn once. The solver's primal simplex gives up ("Unknown") on a question of the
# partition, which is then left half done.
GIVEN_UP = model(
    "maximize",
    {"x1": 0, "x2": 0, "x3": 0, "x4": 0, "x5": 0},
    {"r1": (-INF, {"x2": -2, "x3": 1, "x4": -2, "x5": -2}, 0)},
    {"x2": (0, 2), "x4": (-1, INF), "x5": (-1, INF)},
)
# Drawn once. A bound reaches the other one where the basis gives way, but for rounding.
TIE = model(
    "maximize",
    {"x1": 3, "x2": 3, "x3": -3, "x4": 2},
    {
        "r1": (0, {"x1": 1, "x3": -3, "x4": 3}, INF),
        "r2": (-3, {"x1": -3, "x2": -3, "x3": -3, "x4": -1}, -2),
    },
    {"x1": (0, 0), "x2": (1, 3), "x3": (-2, 1), "x4": (0, 2)},
    offset=-2,
)

# Drawn once. A bounded plan, whose cost can rise for ever: the price of r2 changes its sign.
TURNS = model(
    "maximize",
    {"x1": -1, "x2": -1, "x3": 0},
    {"r1": (-INF, {"x1": -3, "x2": 3}, -3), "r2": (-2, {"x1": -1, "x2": -1}, -1)},
    {"x2": (-2, 1), "x3": (-2, 1)},
)


def check(lp, at_once):
    assume(isinstance(exact.value(lp), Fraction))
    note(write_blocks(lp))
    found = differences(lp, at_once)
    assert not found, "\n".join(found)


@settings(max_examples=90)
@example(lp=GIVEN_UP, at_once=False)
@example(lp=TIE, at_once=False)
@example(lp=TURNS, at_once=False)
@given(lp=DEGENERATE, at_once=st.booleans())
def test_degenerate_models(lp, at_once):
    check(lp, at_once)


@settings(max_examples=80)
@given(WITH_ANY_COSTS, st.booleans())
def test_models_with_any_costs(lp, at_once):
    check(lp, at_once)


@pytest.mark.slow
@settings(max_examples=5000)
@given(DEGENERATE, st.booleans())
def test_many_degenerate_models(lp, at_once):
    check(lp, at_once)


@pytest.mark.slow
@settings(max_examples=3000)
@given(WITH_ANY_COSTS, st.booleans())
def test_many_models_with_any_costs(lp, at_once):
    check(lp, at_once)
