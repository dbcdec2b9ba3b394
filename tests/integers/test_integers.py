"""What stands in place of integer columns: a refusal, the relaxation, fixed values."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest

from lpview.blocks import InputError
from lpview.decimals import parse
from lpview.examination import examine
from lpview.given import GivenPlan, Written
from lpview.integers import fixed, linear, relaxed
from lpview.model import frozen_odd, identical
from lpview.mps import read_mps, read_mps_bytes
from lpview.outcomes import Optimal, Request
from lpview.reading import Reading
from lpview.solver import solve

FILES = Path(__file__).parents[1] / "data" / "mps"

TEXT = b"""\
ROWS
 N obj
 G need
COLUMNS
 m 'MARKER' 'INTORG'
 big obj 5 need 4
 small obj 2 need 1
 m 'MARKER' 'INTEND'
 rest obj 3 need 1
RHS
 s need 10.5
BOUNDS
 UP b big 3
 LO b small 1
 UP b small 3
ENDATA
"""


@pytest.fixture
def reading() -> Reading:
    return read_mps_bytes(TEXT, "m")


def plan(**values: str) -> GivenPlan:
    """A plan for the three columns above; those that are not named are not listed."""
    names = ("big", "small", "rest")
    numbers = [parse(values.get(name, "0")) for name in names]
    x = Written(
        values=np.array([value for value, _ in numbers]),
        half=np.zeros(3),
        listed=np.array([name in values for name in names]),
        odd={j: odd for j, (_, odd) in enumerate(numbers) if odd is not None},
    )
    return GivenPlan("plan.csv", "", x)


def objective(reading: Reading) -> float:
    found = examine(reading, Request("m", "lpview"), solve)
    assert isinstance(found, Optimal)
    assert found.passed
    return found.measurement.primal_objective


def test_integer_columns_are_refused() -> None:
    with pytest.raises(InputError) as caught:
        linear(read_mps(FILES / "flugpl.mps"), "flugpl.mps")
    assert str(caught.value) == (
        "flugpl.mps: expected a linear program, got 11 integer columns, such as 'ANM1'; "
        "--relax checks its linear relaxation, "
        "--fix-integers PLAN.csv checks the rest at a plan's integer values"
    )


def test_a_linear_program_is_what_it_is() -> None:
    reading = read_mps(FILES / "afiro.mps")
    assert linear(reading, "afiro.mps") is reading
    for found, verb in ((relaxed(reading), "relax"), (fixed(reading, plan(), "m"), "fix")):
        assert found.model is reading.model
        assert found.notes == replace(reading.notes, remarks=(f"no integer columns to {verb}",))


def test_the_relaxation_of_a_published_model() -> None:
    """LP SOLN 1167185.73 in the file's own head."""
    found = relaxed(read_mps(FILES / "flugpl.mps"))
    assert found.integers == ()
    assert found.notes.scope_words == "linear relaxation: 11 integer columns taken as continuous"
    assert objective(found) == pytest.approx(1167185.73, abs=0.005)


def test_one_integer_column(reading: Reading) -> None:
    scope = relaxed(replace(reading, integers=(1,))).notes.scope_words
    assert scope == "linear relaxation: 1 integer column taken as continuous"


def test_values_of_a_plan_are_both_bounds(reading: Reading) -> None:
    found = fixed(reading, plan(big="2", small="1", rest="1.5"), "m.mps")
    lp = found.model
    assert (lp.lower.tolist(), lp.upper.tolist()) == ([2, 1, 0], [2, 1, np.inf])
    assert found.integers == ()
    assert found.notes.scope_words == (
        "2 integer columns fixed at the values of plan.csv; prices hold only for these integer "
        "values"
    )
    assert found.notes.remarks == reading.notes.remarks
    # By hand: 8 + 1 are there, 1.5 are left for `rest` at 3 each.
    assert objective(found) == pytest.approx(10 + 2 + 4.5, rel=1e-12)
    assert reading.model.upper.tolist() == [3, 3, np.inf]


def test_columns_that_are_not_listed_are_0(reading: Reading) -> None:
    found = fixed(reading, plan(small="2"), "m.mps")
    assert found.model.upper.tolist() == [0, 2, np.inf]
    assert (
        found.notes.remarks[-1]
        == "1 of 2 integer columns is not in plan.csv and was fixed at 0, the first 'big'"
    )


def test_every_wrong_value_is_named(reading: Reading) -> None:
    with pytest.raises(InputError) as caught:
        fixed(reading, plan(big="2.5"), "m.mps")
    assert (
        str(caught.value)
        == """\
plan.csv: column 'big': expected a whole number, got 2.5
plan.csv: column 'small': expected a whole number within the bounds 1 to 3 of m.mps, got no value, \
which stands for 0"""
    )
    with pytest.raises(InputError) as caught:
        fixed(reading, plan(big="4", small="-7/2"), "m.mps")
    assert (
        str(caught.value)
        == """\
plan.csv: column 'big': expected a whole number within the bounds 0 to 3 of m.mps, got 4
plan.csv: column 'small': expected a whole number within the bounds 1 to 3 of m.mps, got -3.5"""
    )


@pytest.mark.parametrize("text", ["2.00000000000000000001", "1.99999999999999999999"])
def test_whole_is_meant_exactly(reading: Reading, text: str) -> None:
    with pytest.raises(InputError) as caught:
        fixed(reading, plan(big=text, small="1"), "m.mps")
    assert str(caught.value) == f"plan.csv: column 'big': expected a whole number, got {text}"


def test_odd_bounds_go_where_they_are_replaced(reading: Reading) -> None:
    third = Fraction(1, 3)
    odd = frozen_odd({"lower": {1: third, 2: third}, "c": {0: third}})
    lower = np.array([0.0, 1 / 3, 1 / 3])
    lp = replace(reading.model, lower=lower, odd=odd)
    found = fixed(replace(reading, model=lp), plan(big="1", small="1"), "m.mps").model
    assert {part: dict(numbers) for part, numbers in found.odd.items()} == {
        "lower": {2: third},
        "c": {0: third},
    }


def test_large_whole_numbers_stay_exact(reading: Reading) -> None:
    lp = replace(reading.model, upper=np.array([np.inf, 3, np.inf]))
    big = "12345678901234567890123"
    found = fixed(replace(reading, model=lp), plan(big=big, small="1"), "m.mps").model
    assert found.odd["lower"] == found.odd["upper"] == {0: Fraction(int(big))}
    assert found.is_fixed.tolist() == [True, True, False]


def test_nothing_else_changes(reading: Reading) -> None:
    found = fixed(reading, plan(big="2", small="1"), "m.mps").model
    lp = reading.model
    assert identical(replace(found, lower=lp.lower, upper=lp.upper), lp)
