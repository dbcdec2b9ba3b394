"""Everything that `lpview.prices` finds for one model against the exact oracle.

Each function yields what differs, as text, so that a failing test shows all of it.
"""

from __future__ import annotations

from collections.abc import Iterator
from math import inf, isclose

import numpy as np

from lpview.model import LinearProgram
from lpview.outcomes import Optimal
from lpview.prices import Prices, work_out
from lpview.solver import warm_model
from tests.check.helpers import examined, name_of
from tests.prices import exact
from tests.prices.exact import BOTH, LOWER, UPPER

TOLERANCE = 1e-8
"""Models are small integers: what is right is right to rounding."""


def differences(lp: LinearProgram, at_once: bool) -> list[str]:
    """All that differs; ``at_once`` works everything out before the first question."""
    optimal = examined(lp)
    if not isinstance(optimal, Optimal) or not optimal.passed:
        return [f"not an optimum that passed: {optimal}"]
    found = work_out(optimal, warm_model)
    if not isinstance(found, Prices):
        return [f"no prices: {found.reason}"]
    if at_once:
        found.everything()
    result = list(_dimensions(lp, found))
    for k in range(lp.m + lp.n):
        parts = [*_intervals(lp, found, k), *_moves(lp, found, k), *_zero_slacks(lp, found, k)]
        parts += [*_price_points(lp, found, k), *_plan_points(lp, found, k)]
        result += [f"{name_of(lp, k)}: {part}" for part in parts]
    return result


def _dimensions(lp: LinearProgram, found: Prices) -> Iterator[str]:
    pair, expected = (found.plan_dimension, found.price_dimension), exact.dimensions(lp)
    if pair != expected:
        yield f"dimensions {pair} are {expected}"


def _intervals(lp: LinearProgram, found: Prices, k: int) -> Iterator[str]:
    line = found.line(k)
    pairs = [("prices", (line.least, line.greatest), exact.price_interval(lp, k))]
    pairs += [("values", (line.least_value, line.greatest_value), exact.value_interval(lp, k))]
    for word, ends, expected in pairs:
        if not all(_same(a, b) for a, b in zip(ends, expected, strict=True)):
            yield f"{word} {ends} are {_shown(expected)}"


def _moves(lp: LinearProgram, found: Prices, k: int) -> Iterator[str]:
    line, (low, high) = found.line(k), exact.program(lp).ends[k]
    for which, end, moves in ((LOWER, low, line.lower), (UPPER, high, line.upper)):
        if abs(end) == inf:
            if moves is not None:
                yield f"{which} side is absent but moves {moves}"
            continue
        both = BOTH if low == high else which
        wanted = {d: exact.side_move(lp, k, both, d) for d in (1, -1)}
        yield from _compared(f"{which} side", moves, wanted)
    if k >= lp.m:
        yield from _compared(
            "cost", line.cost, {d: exact.cost_move(lp, k - lp.m, d) for d in (1, -1)}
        )
    elif line.cost is not None:
        yield f"a row has a cost that moves {line.cost}"


def _compared(word: str, moves, wanted) -> Iterator[str]:
    if moves is None:
        yield f"{word} has no moves"
        return
    for direction, move in ((1, moves.up), (-1, moves.down)):
        rate, distance, then = wanted[direction]
        numbers = _same(move.rate, rate) and _same(move.distance, distance)
        if not numbers or move.then.value != then:
            way = "up" if direction > 0 else "down"
            yield f"{word} {way} {move} is {_shown((rate, distance))}, {then}"


def _zero_slacks(lp: LinearProgram, found: Prices, k: int) -> Iterator[str]:
    line = found.line(k)
    for side, flag in ((LOWER, line.lower_zero), (UPPER, line.upper_zero)):
        word, expected = None if flag is None else flag.name.lower(), exact.zero_slack(lp, k, side)
        if word != expected:
            yield f"zero slack at the {side} side {word} is {expected}"


def _price_points(lp: LinearProgram, found: Prices, k: int) -> Iterator[str]:
    """Points that attain the ends of prices: optimal themselves, with rays of the face."""
    program = exact.program(lp)
    limits = np.array([program.price_ends(i) for i in range(lp.m + lp.n)], float)
    limits = limits if program.sign > 0 else -limits[:, ::-1]
    for greatest, end in enumerate(exact.price_interval(lp, k)):
        at = found.price_at(k, bool(greatest))
        prices = np.concatenate([at.y, at.z])
        yield from _inside(f"prices {prices}", prices, limits)
        if not np.allclose(at.z, lp.c - lp.A.T @ at.y, atol=TOLERANCE):
            yield f"z {at.z} does not belong to y {at.y}"
        ray = None if at.ray is None else np.concatenate([at.ray.y, at.ray.z])
        yield from _attained("price", prices[k], end, None if ray is None else ray[k])
        if at.ray is not None and ray is not None:
            yield from _inside(f"ray of prices {ray}", ray, _ray_limits(limits))
            if not np.allclose(at.ray.z, -lp.A.T @ at.ray.y, atol=TOLERANCE):
                yield f"ray z {at.ray.z} does not belong to y {at.ray.y}"


def _plan_points(lp: LinearProgram, found: Prices, k: int) -> Iterator[str]:
    """Plans that attain the ends of values: feasible, of optimal cost, with rays."""
    limits = np.array(exact.program(lp).ends, float)
    optimum = float(exact.value(lp))
    for greatest, end in enumerate(exact.value_interval(lp, k)):
        at = found.plan_at(k, bool(greatest))
        values = np.concatenate([lp.A @ at.x, at.x])
        yield from _inside(f"plan {at.x}", values, limits)
        if not _same(lp.c @ at.x + lp.offset, optimum):
            yield f"plan {at.x} is not optimal"
        ray = None if at.ray is None else np.concatenate([lp.A @ at.ray, at.ray])
        yield from _attained("value", values[k], end, None if ray is None else ray[k])
        if at.ray is not None and ray is not None:
            yield from _inside(f"ray of plans {at.ray}", ray, _ray_limits(limits))
            if not _same(lp.c @ at.ray, 0):
                yield f"ray of plans {at.ray} changes the objective"


def _inside(word: str, numbers, limits) -> Iterator[str]:
    beyond = np.maximum(limits[:, 0] - numbers, numbers - limits[:, 1])
    if not np.all(beyond <= TOLERANCE):
        yield f"{word} is outside {limits.tolist()}"


def _ray_limits(limits):
    """Directions in which one may go for ever: finite ends become 0."""
    return np.where(np.isfinite(limits), 0.0, limits)


def _attained(word: str, at, end, slope) -> Iterator[str]:
    if abs(end) < inf:
        if slope is not None or not _same(at, end):
            yield f"{word} {at} with a ray of slope {slope} does not attain {float(end)}"
    elif slope is None or not (slope > 0 if end > 0 else slope < 0):
        yield f"{word} with a ray of slope {slope} does not go to {end}"


def _same(found, expected) -> bool:
    return isclose(found, expected, rel_tol=TOLERANCE, abs_tol=TOLERANCE)


def _shown(numbers) -> str:
    return " and ".join(str(number) for number in numbers)
