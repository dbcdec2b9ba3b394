"""The textbook cases hold together: checked in fractions, without any solver.

What follows from the model's conventions (feasible, signs, products, objectives) is
worked out anew from each file and compared with what ``cases.toml`` states.
"""

from __future__ import annotations

import copy
import math
import tomllib
from collections.abc import Iterator
from fractions import Fraction
from pathlib import Path
from typing import Any

import pytest

from tests.reading import End, Model, read

FOLDER = Path(__file__).parents[1] / "data" / "textbook"
CASES = tomllib.loads((FOLDER / "cases.toml").read_text("utf-8"))["case"]
TAGS = {"computed here exactly", "attribution from memory", "published"}

Case = dict[str, Any]
Exact = dict[str, Fraction]


def having(status: str) -> list[Any]:
    return [pytest.param(case, id=case["id"]) for case in CASES if case["status"] == status]


def number(text: str) -> End:
    return float(text) if text in ("inf", "-inf") else Fraction(text)


def exact(table: dict[str, str], names: Any) -> Exact:
    """A whole vector from a table that leaves out its zeros."""
    assert set(table) <= set(names)
    return {name: Fraction(table.get(name, "0")) for name in names}


def row_values(model: Model, x: Exact) -> Exact:
    return {
        row: sum((a * x[column] for column, a in terms.items()), Fraction(0))
        for row, terms in model.rows.items()
    }


def reduced_costs(model: Model, y: Exact) -> Exact:
    z = dict(model.costs)
    for row, terms in model.rows.items():
        for column, a in terms.items():
            z[column] -= a * y[row]
    return z


def objective(model: Model, x: Exact) -> Fraction:
    return model.offset + sum(cost * x[name] for name, cost in model.costs.items())


def plan_faults(model: Model, case: Case, x: Exact) -> Iterator[str]:
    """What is wrong with a plan that is said to be optimal."""
    values = {**row_values(model, x), **x}
    for name, (low, high) in {**model.sides, **model.bounds}.items():
        if not low <= values[name] <= high:
            yield f"{name} outside its limits"
    if objective(model, x) != Fraction(case["objective"]):
        yield "primal objective"


def price_faults(model: Model, case: Case, y: Exact) -> Iterator[str]:
    """What is wrong with a dual vector that is said to be optimal."""
    dual = model.offset
    prices = {**y, **reduced_costs(model, y)}
    for name, ends in {**model.sides, **model.bounds}.items():
        side = ends[0] if (prices[name] > 0) == (model.sense == "minimize") else ends[1]
        if prices[name] and math.isinf(side):
            yield f"{name} has a price of the wrong sign"
        elif prices[name]:
            dual += prices[name] * Fraction(side)
    if dual != Fraction(case["objective"]):
        yield "dual objective"


def product_faults(model: Model, x: Exact, y: Exact) -> Iterator[str]:
    values = {**row_values(model, x), **x}
    prices = {**y, **reduced_costs(model, y)}
    for name, (low, high) in {**model.sides, **model.bounds}.items():
        side = low if (prices[name] > 0) == (model.sense == "minimize") else high
        if prices[name] and values[name] != side:
            yield f"{name} has slack and a price"


def stated_faults(model: Model, case: Case, x: Exact, y: Exact) -> Iterator[str]:
    """Slacks and reduced costs that differ from those stated."""
    values, z = row_values(model, x), reduced_costs(model, y)
    for row, stated in case["row_slacks"].items():
        low, high = model.sides[row]
        if min(values[row] - low, high - values[row]) != Fraction(stated):
            yield f"slack of {row}"
    for column, stated in case["reduced_costs"].items():
        if z[column] != Fraction(stated):
            yield f"reduced cost of {column}"


def faults(model: Model, case: Case) -> list[str]:
    x, y = exact(case["x"], model.costs), exact(case["y"], model.sides)
    return [
        *plan_faults(model, case, x),
        *price_faults(model, case, y),
        *product_faults(model, x, y),
        *stated_faults(model, case, x, y),
    ]


@pytest.mark.parametrize("case", having("optimal"))
def test_plan_and_prices_prove_each_other(case: Case) -> None:
    assert faults(read(FOLDER / case["file"]), case) == []


@pytest.mark.parametrize("case", having("optimal"))
@pytest.mark.parametrize("part", ["x", "y", "row_slacks", "reduced_costs", "objective"])
def test_one_wrong_number_is_a_fault(case: Case, part: str) -> None:
    wrong = copy.deepcopy(case)
    if part == "objective":
        wrong[part] = str(Fraction(case[part]) + 1)
    else:
        name = max(case[part])
        wrong[part][name] = str(Fraction(case[part][name]) + Fraction(1, 7))
    assert faults(read(FOLDER / case["file"]), wrong)


@pytest.mark.parametrize("case", having("optimal"))
def test_alternatives_are_optimal_too(case: Case) -> None:
    model = read(FOLDER / case["file"])
    plans = [exact(table, model.costs) for table in case.get("x_alternatives", ())]
    duals = [exact(table, model.sides) for table in case.get("y_alternatives", ())]
    assert [list(plan_faults(model, case, x)) for x in plans] == [[]] * len(plans)
    assert [list(price_faults(model, case, y)) for y in duals] == [[]] * len(duals)


@pytest.mark.parametrize("case", having("optimal"))
def test_intervals_are_spanned_by_the_alternatives(case: Case) -> None:
    model = read(FOLDER / case["file"])
    plans = case.get("x_alternatives") or [case["x"]]
    duals = case.get("y_alternatives") or [case["y"]]
    assert (case["x"], case["y"]) == (plans[0], duals[0])
    xs = [exact(table, model.costs) for table in plans]
    ys = [exact(table, model.sides) for table in duals]
    zs = [reduced_costs(model, y) for y in ys]
    assert case["x_unique"] == ("x_interval" not in case)
    assert case["y_unique"] == ("y_interval" not in case)
    parts = ("x_interval", xs), ("y_interval", ys), ("reduced_cost_interval", zs)
    for part, vectors in parts:
        for name in vectors[0]:
            seen = [vector[name] for vector in vectors]
            if name in case.get(part, {}):
                least, greatest = map(number, case[part][name])
                assert least in (min(seen), -math.inf)
                assert greatest in (max(seen), math.inf)
            else:
                assert min(seen) == max(seen), f"{part} of {name}"


def rank(vectors: list[list[Fraction]]) -> int:
    """Rank by exact elimination."""
    pivots: list[tuple[int, list[Fraction]]] = []
    for vector in vectors:
        for at, pivot in pivots:
            if factor := vector[at] / pivot[at]:
                vector = [v - factor * p for v, p in zip(vector, pivot, strict=True)]
        at = next((k for k, v in enumerate(vector) if v), -1)
        if at >= 0:
            pivots.append((at, vector))
    return len(pivots)


def average(tables: list[dict[str, str]], names: Any) -> Exact:
    vectors = [exact(table, names) for table in tables]
    return {name: sum(v[name] for v in vectors) / Fraction(len(vectors)) for name in names}


@pytest.mark.parametrize("case", having("optimal"))
def test_the_only_optimum_is_proved_by_rank(case: Case) -> None:
    """Every optimal x has no slack where one optimal y has a price, and conversely.

    Where these equations determine x, or y, there is no other one.
    """
    model = read(FOLDER / case["file"])
    x = average(case.get("x_alternatives") or [case["x"]], model.costs)
    y = average(case.get("y_alternatives") or [case["y"]], model.sides)
    rows = {i: [terms.get(j, Fraction(0)) for j in x] for i, terms in model.rows.items()}
    unit_x = {j: [Fraction(j == k) for k in x] for j in x}
    unit_y = {i: [Fraction(i == k) for k in y] for i in y}
    columns = {j: [model.rows[i].get(j, Fraction(0)) for i in y] for j in x}
    prices, values = {**y, **reduced_costs(model, y)}, {**row_values(model, x), **x}
    ends = {**model.sides, **model.bounds}
    held = [name for name in ends if prices[name] or ends[name][0] == ends[name][1]]
    loose = [name for name in ends if ends[name][0] < values[name] < ends[name][1]]
    if case["x_unique"]:
        assert rank([{**rows, **unit_x}[name] for name in held]) == len(x)
    if case["y_unique"]:
        assert rank([{**unit_y, **columns}[name] for name in loose]) == len(y)


@pytest.mark.parametrize("case", having("infeasible"))
def test_certificates_contradict_the_model(case: Case) -> None:
    model = read(FOLDER / case["file"])
    assert case["certificates"]
    for certificate in case["certificates"]:
        rows = exact(certificate["rows"], model.sides)
        columns = exact(certificate["columns"], model.costs)
        left, right = dict(columns), Fraction(0)
        for row, terms in model.rows.items():
            for column, a in terms.items():
                left[column] += rows[row] * a
        ends = {**model.sides, **model.bounds}
        for name, multiplier in {**rows, **columns}.items():
            if multiplier:
                right += multiplier * Fraction(ends[name][multiplier > 0])
        assert not any(left.values())
        assert right == Fraction(certificate["right_hand_side"]) < 0
    assert case["dual_infeasible"] == ("ray" in case)


@pytest.mark.parametrize("case", [case for case in CASES if "ray" in case])
def test_rays_may_be_followed_for_ever(case: Case) -> None:
    model = read(FOLDER / case["file"])
    ray = exact(case["ray"], model.costs)
    moves = {**row_values(model, ray), **ray}
    for name, (low, high) in {**model.sides, **model.bounds}.items():
        assert moves[name] >= 0 or low == -math.inf
        assert moves[name] <= 0 or high == math.inf
    rate = objective(model, ray) - model.offset
    assert rate == Fraction(case["rate"])
    assert (rate > 0) == (model.sense == "maximize")
    assert rate


@pytest.mark.parametrize("case", having("unbounded"))
def test_points_of_unbounded_models_are_feasible(case: Case) -> None:
    model = read(FOLDER / case["file"])
    point = exact(case["point"], model.costs)
    anywhere = {"objective": objective(model, point)}
    assert list(plan_faults(model, anywhere, point)) == []
    assert "ray" in case


def test_every_file_has_one_case_with_its_source() -> None:
    """Some models stand in ranges.toml alone, which has its own tests."""
    files = [case["file"] for case in CASES]
    ranges = tomllib.loads((FOLDER / "ranges.toml").read_text(encoding="utf-8"))["case"]
    only_there = {case["file"] for case in ranges if "/" not in case["file"]} - set(files)
    assert sorted([*files, *only_there]) == sorted(path.name for path in FOLDER.glob("*.csv"))
    assert len({case["id"] for case in CASES}) == len(CASES)
    for case in CASES:
        assert case["source"]
        assert case["tags"]
        assert set(case["tags"]) <= TAGS
