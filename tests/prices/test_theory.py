"""Models whose intervals theory knows: a transportation plan and an assignment.

Transportation, all rows equalities: supplies and demands add up to the same, so the rows have
rank one too little. Adding a number to all supply prices and subtracting it from all demand
prices changes nothing: no single price means anything, only their sums by pairs do.

Assignment: prices are potentials in a network, and a potential with one end held at 0 lies
between two shortest paths (Bellman 1958, "On a routing problem"; Ford 1956).
"""

from __future__ import annotations

import itertools

import numpy as np
import pytest

from lpview.prices import Prices, Then, work_out
from lpview.solver import warm_model
from tests.check.helpers import examined
from tests.dual.models import INF, model
from tests.prices.test_textbook_ranges import turned_round

BAKERIES = {"mill lane": 7, "old quay": 8, "station": 6}
MARKETS = {"north": 4, "east": 5, "south": 7, "west": 5}
SUPPLY_PRICE, DEMAND_PRICE = np.array([0.0, 3.0, -1.0]), np.array([5.0, 2.0, 4.0, 6.0])
# Flows of the tree that is used, and what every other road costs too much.
FLOW = {(0, 0): 4, (0, 1): 3, (1, 1): 2, (1, 2): 6, (2, 2): 1, (2, 3): 5}
EXCESS = {(0, 2): 2, (0, 3): 1, (1, 0): 3, (1, 3): 4, (2, 0): 2.5, (2, 1): 1.5}
ROADS = list(itertools.product(range(3), range(4)))
SENSES = [pytest.param(1, id="minimize"), pytest.param(-1, id="maximize")]


def near(value):
    return pytest.approx(float(value), rel=1e-9, abs=1e-9)


def transportation():
    """Costs are prices of both ends plus the excess, so that the tree is the only optimum."""
    names, towns = list(BAKERIES), list(MARKETS)
    ends = {road: f"ship[{names[road[0]]},{towns[road[1]]}]" for road in ROADS}
    costs = {
        ends[i, j]: SUPPLY_PRICE[i] + DEMAND_PRICE[j] + EXCESS.get((i, j), 0) for i, j in ROADS
    }
    rows = {
        f"bake[{name}]": (size, {ends[i, j]: 1 for j in range(4)}, size)
        for i, (name, size) in enumerate(BAKERIES.items())
    }
    rows |= {
        f"sell[{town}]": (size, {ends[i, j]: 1 for i in range(3)}, size)
        for j, (town, size) in enumerate(MARKETS.items())
    }
    return model("minimize", costs, rows, {})


def found_for(lp, sign=1):
    found = work_out(examined(lp if sign > 0 else turned_round(lp)), warm_model)
    assert isinstance(found, Prices)
    return found


def on_the_tree(costs):
    """Prices that make the costs of the roads in use come out, the first supply's 0."""
    system, right = [[1.0] + [0.0] * 6], [0.0]
    for i, j in FLOW:
        system.append([float(k in (i, 3 + j)) for k in range(7)])
        right.append(costs[i, j])
    prices = np.linalg.solve(np.array(system), np.array(right))
    return prices[:3], prices[3:]


def sent_back(i, j):
    """Change of each flow in use when one unit is sent on another road."""
    ends = np.array([[float(k in (a, 3 + b)) for a, b in FLOW] for k in range(7)])
    unit = np.array([float(k in (i, 3 + j)) for k in range(7)])
    return -np.linalg.lstsq(ends, unit, rcond=None)[0]


@pytest.mark.parametrize("sign", SENSES)
def test_no_single_price_of_a_balanced_transportation_is_known(sign):
    lp = transportation()
    found = found_for(lp, sign)
    assert (found.plan_dimension, found.price_dimension) == (0, 1)
    together = np.array([1.0] * 3 + [-1.0] * 4)
    for k in range(lp.m):
        line = found.line(k)
        assert (line.least, line.greatest) == (-INF, INF)
        assert line.lower == line.upper is not None
        for move, rate in ((line.upper.up, sign * INF), (line.upper.down, -sign * INF)):
            assert (move.rate, move.distance, move.then) == (rate, 0, Then.INFEASIBLE)
        for greatest in (False, True):
            ray = found.price_at(k, greatest=greatest).ray
            assert bool(ray.y[k] > 0) is greatest
            assert ray.y == pytest.approx(ray.y[k] * together[k] * together)
            assert ray.z == pytest.approx(0)


@pytest.mark.parametrize("sign", SENSES)
def test_sums_of_supply_and_demand_prices_are_known(sign):
    lp = transportation()
    found = found_for(lp, sign)
    points = [found.price_at(k, greatest=end) for k in range(lp.m) for end in (False, True)]
    for number, (i, j) in enumerate(ROADS):
        line = found.line(lp.m + number)
        assert (line.least, line.greatest) == (near(sign * EXCESS.get((i, j), 0)),) * 2
        assert (line.least_value, line.greatest_value) == (near(FLOW.get((i, j), 0)),) * 2
        for point in points:
            assert point.y[i] + point.y[3 + j] == near(lp.c[number] * sign - line.least)


def test_costs_of_roads_hold_until_another_road_is_as_good():
    lp = transportation()
    found = found_for(lp)
    for number, road in enumerate(ROADS):
        cost = found.line(lp.m + number).cost
        assert (cost.up.rate, cost.down.rate) == (near(FLOW.get(road, 0)),) * 2
        if road in EXCESS:
            assert (cost.up.then, cost.up.distance) == (Then.NEVER, INF)
            assert (cost.down.then, cost.down.distance) == (Then.RATE_CHANGES, near(EXCESS[road]))
            continue
        # A unit more on this road's cost changes the prices, and by them each excess.
        u, v = on_the_tree({other: float(other == road) for other in FLOW})
        falls = {other: u[other[0]] + v[other[1]] for other in EXCESS}
        for move, way in ((cost.up, 1), (cost.down, -1)):
            limits = [
                EXCESS[other] / (way * fall) for other, fall in falls.items() if way * fall > 0.5
            ]
            assert move.distance == near(min(limits, default=INF))
            assert (move.then is Then.NEVER) == (not limits)


def test_another_road_can_be_used_until_a_flow_is_used_up():
    lp = transportation()
    found = found_for(lp)
    flows = np.array(list(FLOW.values()), float)
    for number, road in enumerate(ROADS):
        if road in EXCESS:
            moves, change = found.line(lp.m + number).lower, sent_back(*road)
            assert (moves.up.rate, moves.down.rate) == (near(EXCESS[road]),) * 2
            assert moves.up.distance == near((flows / -change)[change < -0.5].min())
            assert moves.down.distance == near((flows / change)[change > 0.5].min())


# What each harvester's day on each field costs; several assignments are nearly as good.
DAYS = np.array(
    [
        [7, 4, 9, 6, 8],
        [5, 5, 6, 3, 7],
        [8, 4, 4, 6, 9],
        [6, 7, 5, 4, 5],
        [9, 6, 8, 5, 6],
    ],
    float,
)
HARVESTERS = ("red", "blue", "green", "white", "black")


def assignment(last=True):
    """Rows of all harvesters and fields; without ``last``, the last field's is left out."""
    names = [[f"send[{who},field {j}]" for j in range(5)] for who in HARVESTERS]
    costs = {names[i][j]: DAYS[i, j] for i in range(5) for j in range(5)}
    rows = {who: (1, dict.fromkeys(names[i], 1), 1) for i, who in enumerate(HARVESTERS)}
    for j in range(5 if last else 4):
        rows[f"field {j}"] = (1, {names[i][j]: 1 for i in range(5)}, 1)
    return model("minimize", costs, rows, {})


def best():
    """The field of each harvester in one best assignment of all 120."""
    return min(itertools.permutations(range(5)), key=lambda p: sum(DAYS[range(5), p]))


def lengths():
    """How much more the harvester of field k costs on field j; prices differ by no more."""
    length = np.full((5, 5), INF)
    for i, k in enumerate(best()):
        length[k] = DAYS[i] - DAYS[i, k]
    return length


def shortest(length, start):
    """Bellman and Ford's lengths of shortest paths from ``start`` to all fields."""
    reached = np.full(5, INF)
    reached[start] = 0
    for _ in range(5):
        reached = np.minimum(reached, (reached[:, None] + length).min(axis=0))
    assert (reached == np.minimum(reached, (reached[:, None] + length).min(axis=0))).all()
    return reached


@pytest.mark.parametrize("sign", SENSES)
def test_prices_of_an_assignment_lie_between_shortest_paths(sign):
    lp, length = assignment(last=False), lengths()
    found = found_for(lp, sign)
    to = shortest(length, 4)
    back = np.array([shortest(length, j)[4] for j in range(5)])
    prices = {5 + j: (-back[j], to[j]) for j in range(4)}
    prices |= {i: (DAYS[i, k] - to[k], DAYS[i, k] + back[k]) for i, k in enumerate(best())}
    assert sum(low < high for low, high in prices.values()) >= 4
    for k, ends in prices.items():
        line = found.line(k)
        low, high = sorted(sign * end for end in ends)
        assert (line.least, line.greatest) == (near(low), near(high))
        for greatest, end in ((False, low), (True, high)):
            point = found.price_at(k, greatest=greatest)
            assert point.ray is None
            assert point.y[k] == near(end)


@pytest.mark.parametrize("last", [True, False])
@pytest.mark.parametrize("sign", SENSES)
def test_reduced_costs_of_an_assignment_lie_between_shortest_paths(sign, last):
    lp, length = assignment(last), lengths()
    found = found_for(lp, sign)
    reached = np.array([shortest(length, j) for j in range(5)])
    for i, k in enumerate(best()):
        for j in range(5):
            line = found.line(lp.m + 5 * i + j)
            ends = length[k, j] - reached[k, j], length[k, j] + reached[j, k]
            low, high = sorted(sign * end for end in ends)
            assert (line.least, line.greatest) == (near(low), near(high))


def test_one_row_too_many_leaves_no_price_of_an_assignment_known():
    lp, fewer = assignment(), assignment(last=False)
    found = found_for(lp)
    assert found.price_dimension == found_for(fewer).price_dimension + 1
    for k in range(lp.m):
        line = found.line(k)
        assert (line.least, line.greatest) == (-INF, INF)
        assert (line.lower.up.then, line.lower.down.then) == (Then.INFEASIBLE,) * 2
