"""The oracle against itself: every basis of tiny models, and moved models solved anew."""

from dataclasses import replace
from fractions import Fraction
from math import inf

from hypothesis import assume, given, settings

from tests.prices import exact
from tests.prices.bases import basic_plans, basic_prices
from tests.prices.draws import any_models, models_with_optimum
from tests.prices.exact import BOTH, LOWER, UPPER
from tests.prices.simplex import rank


@settings(max_examples=60)
@given(any_models())
def test_every_basis(lp):
    # Whether there is an optimum, which, and every finite end, from all bases.
    program = exact.program(lp)
    plans, prices = basic_plans(program), basic_prices(program)
    if not plans:
        assert program.value == "infeasible"
        return
    if not prices:
        assert program.value == "unbounded"
        return
    costs = [sum(c * v for c, v in zip(program.c, x, strict=True)) for x in plans]
    assert min(costs) == max(objective for _, objective in prices) == program.optimum
    check_ends(
        program.values,
        [
            [sum(a * v for a, v in zip(line, x, strict=True)) for line in program.lines]
            for x, cost in zip(plans, costs, strict=True)
            if cost == program.optimum
        ],
        exact.dimensions(lp)[0],
    )
    found = [
        [program.sign * price for price in vector]
        for vector, objective in prices
        if objective == program.optimum
    ]
    check_ends(program.prices, found, exact.dimensions(lp)[1])


def check_ends(ends, points, dimension):
    """Points with every line's number against the ends of every line."""
    for (least, greatest), numbers in zip(ends, zip(*points, strict=True), strict=True):
        assert min(numbers) == least if least > -inf else True
        assert max(numbers) == greatest if greatest < inf else True
    spanned = rank([[a - b for a, b in zip(p, points[0], strict=True)] for p in points])
    bounded = all(-inf < least and greatest < inf for least, greatest in ends)
    assert spanned == dimension if bounded else spanned <= dimension


def moves(program):
    """Every move: what it is, and a function from its size to the moved program."""
    m = len(program.rows)
    for k, (low, high) in enumerate(program.ends):
        for which in (BOTH,) if low == high else (LOWER, UPPER):
            if (low if which == LOWER else high) not in (inf, -inf):
                for d in (1, -1):
                    yield program.side_move(k, which, d), d, side_moved(program, k, which, d)
        if k >= m:
            for d in (1, -1):
                yield program.cost_move(k - m, d), d, cost_moved(program, k - m, d)


def side_moved(program, line, which, direction):
    def moved(t):
        ends, (low, high) = list(program.ends), program.ends[line]
        low = low + direction * t if which in (LOWER, BOTH) else low
        high = high + direction * t if which in (UPPER, BOTH) else high
        ends[line] = (low, high)
        return replace(program, ends=ends).value

    return moved


def cost_moved(program, column, direction):
    def moved(t):
        c = list(program.c)
        c[column] += program.sign * direction * t
        return replace(program, c=c).value

    return moved


def check_moves(lp):
    """Linear up to the end and not beyond, by solving the moved models anew."""
    program = exact.program(lp)
    for (rate, distance, then), direction, moved in moves(program):
        far = Fraction(10**6) if distance == inf else distance
        for t in (far / 2, far) if abs(rate) < inf else ():
            assert moved(t) == program.value + direction * rate * t
        beyond = moved((far or 1) * Fraction(1001, 1000) if far else Fraction(1, 1000))
        if then in ("infeasible", "unbounded"):
            assert beyond == then
        elif then == "rate changes":
            assert distance > 0
            assert isinstance(beyond, Fraction)
            assert beyond != program.value + direction * rate * far * Fraction(1001, 1000)
        else:
            assert distance == inf


@settings(max_examples=40)
@given(models_with_optimum())
def test_moves_are_linear_up_to_their_end(lp):
    check_moves(lp)


@settings(max_examples=40)
@given(any_models(5, 6))
def test_moves_are_linear_up_to_their_end_with_any_costs(lp):
    assume(isinstance(exact.value(lp), Fraction))
    check_moves(lp)


@settings(max_examples=60)
@given(models_with_optimum())
def test_rates_of_sides_are_ends_of_prices(lp):
    # By duality, minimizing: the lower side is worth the positive part of the price and the
    # upper side its negative part, and moves take the extreme one. Infinite ends too.
    program = exact.program(lp)
    for k, (low, high) in enumerate(program.ends):
        least, greatest = sorted(program.sign * price for price in program.prices[k])
        for d, price in ((1, greatest), (-1, least)):
            expected = {BOTH: price, LOWER: max(price, 0), UPPER: min(price, 0)}
            for which in (BOTH,) if low == high else (LOWER, UPPER):
                if abs(low if which == LOWER else high) < inf:
                    rate = program.side_move(k, which, d)[0]
                    assert program.sign * rate == expected[which]
