"""Certificates: true ones are accepted, mutated ones are not."""

from __future__ import annotations

import math
import tomllib
from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest

from lpview.blocks import read_model
from lpview.model import Sense
from lpview.repair.certificate import check_farkas, check_ray
from tests.check.exact_certificates import is_farkas
from tests.dual.models import INF, model

FOLDER = Path(__file__).parents[1] / "data" / "textbook"
CASES = tomllib.loads((FOLDER / "cases.toml").read_text("utf-8"))["case"]
TOLERANCE = 1e-9
BY_ID = {case["id"]: case for case in CASES}


def certificates():
    return [
        pytest.param(case, k, id=f"{case['id']} {k + 1}")
        for case in CASES
        for k in range(len(case.get("certificates", ())))
    ]


def vector(table, names):
    return np.array([float(Fraction(table.get(name, "0"))) for name in names])


def multipliers(case, k, lp):
    """The case's certificate with our signs: positive on the lower side."""
    return -vector(case["certificates"][k]["rows"], lp.rows)


def turned(lp):
    """The same feasible set, optimized the other way."""
    return replace(lp, sense=lp.sense.other, c=-lp.c)


@pytest.mark.parametrize(("case", "k"), certificates())
@pytest.mark.parametrize("turn", [False, True])
def test_published_multipliers_are_accepted(case, k, turn):
    lp = read_model(FOLDER / case["file"]).model
    y = multipliers(case, k, lp)
    right = -float(Fraction(case["certificates"][k]["right_hand_side"]))
    found = check_farkas(turned(lp) if turn else lp, y, TOLERANCE)
    # Between sides 1e-10 apart the multipliers prove nothing at 1e-9.
    assert found.accepted is (right > 1e-9)
    assert found.contradiction == pytest.approx(right / abs(y).max(), rel=1e-6)
    assert found.misplaced < 1e-15
    columns = -vector(case["certificates"][k]["columns"], lp.columns)
    assert found.z == pytest.approx(columns / abs(y).max(), abs=1e-15)


@pytest.mark.parametrize(("case", "k"), certificates())
def test_every_single_mutation_is_judged_exactly(case, k):
    """With a row of the wrong sign it proves nothing; else as fractions say."""
    lp = read_model(FOLDER / case["file"]).model
    y = multipliers(case, k, lp)
    for row in np.flatnonzero(y):
        for factor in (0, -1, 3):
            wrong = y.copy()
            wrong[row] *= factor
            found = check_farkas(lp, wrong, TOLERANCE)
            assert found.accepted is is_farkas(lp, wrong.tolist(), Fraction(1, 10**9))
            assert factor != -1 or not found.accepted


def test_two_rows_against_each_other_in_every_wrong_way():
    # v + w >= 4, v + w <= 1.
    terms = {"v": 1, "w": 1}
    lp = model("minimize", {"v": 1, "w": 1}, {"a": (4, terms, INF), "b": (-INF, terms, 1)}, {})
    assert check_farkas(lp, np.array([1.0, -1]), TOLERANCE).contradiction == 3
    assert check_farkas(lp, np.array([5.0, -5]), TOLERANCE).accepted  # of any size
    wrong = {
        "wrong sign on an infinite side": [-1, 1],
        "only the lower side": [1, 0],
        "only the upper side": [0, -1],
        "nothing": [0, 0],
        "contradiction below 0": [1, -5],
        "not a number": [math.nan, 1],
        "both lower": [1, 1],
    }
    for name, y in wrong.items():
        assert not check_farkas(lp, np.array(y, float), TOLERANCE).accepted, name


def test_a_contradiction_of_exactly_nothing_is_refused():
    terms = {"v": 1}
    lp = model("minimize", {"v": 1}, {"a": (2, terms, INF), "b": (-INF, terms, 2)}, {})
    found = check_farkas(lp, np.array([1.0, -1]), TOLERANCE)
    assert (found.contradiction, found.accepted) == (0, False)


def test_columns_take_part_by_their_bounds():
    # v + w >= 4 with v <= 1, w <= 2: 4 - 1 - 2 = 1; with w <= 3 it is 0.
    rows = {"a": (4, {"v": 1, "w": 1}, INF)}
    lp = model("maximize", {"v": 1, "w": 1}, rows, {"v": (0, 1), "w": (0, 2)})
    found = check_farkas(lp, np.array([1.0]), TOLERANCE)
    assert (found.accepted, found.contradiction, found.z.tolist()) == (True, 1, [-1, -1])
    loose = replace(lp, upper=np.array([1.0, 3]))
    assert not check_farkas(loose, np.array([1.0]), TOLERANCE).accepted
    open_end = replace(lp, upper=np.array([1.0, INF]))
    assert not check_farkas(open_end, np.array([1.0]), TOLERANCE).accepted
    free = replace(lp, lower=np.array([-INF, 0]), upper=np.array([INF, 2.0]))
    assert not check_farkas(free, np.array([1.0]), TOLERANCE).accepted


def test_a_side_reached_by_far_values_is_no_contradiction():
    """`1e-10 v >= 1` holds at v = 1e10: its coefficient is small, but it is no rounding."""
    lp = model("minimize", {"v": 1}, {"a": (1, {"v": 1e-10}, INF)}, {})
    assert not check_farkas(lp, np.array([1.0]), TOLERANCE).accepted


def rays():
    return [pytest.param(case, id=case["id"]) for case in CASES if case["status"] == "unbounded"]


@pytest.mark.parametrize("case", rays())
@pytest.mark.parametrize("turn", [False, True])
def test_published_rays_are_accepted(case, turn):
    lp = read_model(FOLDER / case["file"]).model
    point, ray = vector(case["point"], lp.columns), vector(case["ray"], lp.columns)
    found = check_ray(turned(lp) if turn else lp, point, 7 * ray, TOLERANCE)
    assert found.accepted
    assert found.direction.tolist() == (ray / abs(ray).max()).tolist()
    rate = float(Fraction(case["rate"])) / abs(ray).max()
    assert found.rate == (-rate if turn else rate)
    assert (found.violation, found.drift) == (0, 0)


def test_a_ray_of_a_model_without_plans_is_refused():
    case = BY_ID["C3"]
    lp = read_model(FOLDER / case["file"]).model
    ray = vector(case["ray"], lp.columns)
    for point in ([0, 0], [1, 0], [2, 1], [100, 98.5]):
        assert not check_ray(lp, np.array(point, float), ray, TOLERANCE).accepted


# Maximize v + w with v - w in -1 .. 2, w >= 0, v in any sign, u within 0 .. 9.
RAY_MODEL = model(
    "maximize",
    {"v": 1, "w": 1, "u": 0},
    {"r": (-1, {"v": 1, "w": -1}, 2), "s": (-INF, {"v": -1, "u": 1}, 5)},
    {"v": (-INF, INF), "u": (0, 9)},
)


def test_a_true_ray_by_hand():
    found = check_ray(RAY_MODEL, np.array([0.0, 0, 0]), np.array([2.0, 2, 0]), TOLERANCE)
    assert (found.accepted, found.rate, found.drift, found.violation) == (True, 2, 0, 0)
    other = replace(RAY_MODEL, sense=Sense.MINIMIZE, c=-RAY_MODEL.c)
    found = check_ray(other, np.array([0.0, 0, 0]), np.array([2.0, 2, 0]), TOLERANCE)
    assert (found.accepted, found.rate) == (True, -2)


@pytest.mark.parametrize(
    ("why", "point", "ray"),
    [
        ("leaves the upper side of r", [0, 0, 0], [1, 0, 0]),
        ("leaves the lower side of r", [0, 0, 0], [0, 1, 0]),
        ("leaves r slowly", [0, 0, 0], [1, 1 - 1e-8, 0]),
        ("leaves the bound of w", [0, 0, 0], [-1, -1, 0]),
        ("leaves the upper bound of u", [0, 0, 0], [1, 1, 1]),
        ("leaves the lower bound of u", [0, 0, 5], [1, 1, -1]),
        ("does not improve", [0, 0, 0], [0, 0, 0]),
        ("starts beyond r", [3, 0, 0], [1, 1, 0]),
        ("starts beyond r, slightly", [2 + 1e-8, 0, 0], [1, 1, 0]),
        ("starts below w", [0, -1, 0], [1, 1, 0]),
        ("starts above u", [0, 0, 10], [1, 1, 0]),
        ("starts nowhere", [math.nan, 0, 0], [1, 1, 0]),
        ("goes nowhere", [0, 0, 0], [math.nan, 1, 0]),
    ],
)
def test_a_ray_with_one_fault_is_refused(why, point, ray):
    found = check_ray(RAY_MODEL, np.array(point, float), np.array(ray, float), TOLERANCE)
    assert not found.accepted, why


@pytest.mark.parametrize("sense", ["minimize", "maximize"])
def test_a_ray_has_to_improve_in_the_right_direction(sense):
    lp = model(sense, {"v": 1, "w": -1}, {"r": (0, {"v": 1, "w": 1}, INF)}, {})
    along_v, along_w = (check_ray(lp, np.zeros(2), d, TOLERANCE) for d in np.eye(2))
    assert (along_v.accepted, along_w.accepted) == (sense == "maximize", sense == "minimize")
    level = check_ray(lp, np.zeros(2), np.ones(2), TOLERANCE)
    assert (level.rate, level.accepted) == (0, False)


def test_a_line_left_slowly_by_its_nature_is_left():
    """`1e-10 v <= 1` ends at v = 1e10: its coefficient is small, but it is no rounding."""
    lp = model("maximize", {"v": 1}, {"a": (-INF, {"v": 1e-10}, 1)}, {})
    assert not check_ray(lp, np.array([0.0]), np.array([1.0]), TOLERANCE).accepted
