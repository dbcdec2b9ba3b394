"""Everything that `lpview.prices` finds against the exact oracle, on drawn models."""

from fractions import Fraction

import pytest
from hypothesis import assume, given, note, settings
from hypothesis import strategies as st

from lpview.blocks import write_blocks
from tests.prices import exact
from tests.prices.compare import differences
from tests.prices.draws import any_models, models_with_optimum

DEGENERATE = models_with_optimum()
WITH_ANY_COSTS = any_models(5, 6)


def check(lp, at_once):
    assume(isinstance(exact.value(lp), Fraction))
    note(write_blocks(lp))
    found = differences(lp, at_once)
    assert not found, "\n".join(found)


@settings(max_examples=220)
@given(DEGENERATE, st.booleans())
def test_degenerate_models(lp, at_once):
    check(lp, at_once)


@settings(max_examples=180)
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
