"""Models and bases that fool a tolerance do not fool a proof, and a stopped proof says
nothing that is not so."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from itertools import count

import pytest

from lpview.proof.prove import StoppedError, prove
from lpview.proof.results import NotProved, ProvedInfeasible
from lpview.run import Solved, SolveSettings
from tests.proof.fooling import (
    BASIC,
    BOTH_TWINS,
    FREE,
    LOWER,
    NEAR,
    OAK,
    UPPER,
    a_little_too_full,
    basis,
    cheap_crumbs,
    crumbs,
    many_digits,
    nearly_as_cheap,
    overbooked,
    tenths,
    thirds,
    told_twice,
    twins,
    written,
)
from tests.proof.test_prove_check import (
    DOORS,
    ENDLESS,
    SHORT,
    ask,
    exactly,
    faults,
    fractions,
    interval_faults,
    proved,
    said,
    solver_basis,
    truth,
)


def sound(lp, proof):
    """The proof, which is true and says what the model comes to."""
    assert said(proof) == truth(lp)
    assert faults(lp, proof) == []
    return proof


def test_infeasible_by_less_than_any_solver_sees():
    lp = overbooked()
    assert isinstance(ask(lp, SolveSettings()), Solved)
    proof = sound(lp, proved(lp, solver_basis(lp)))
    assert isinstance(proof, ProvedInfeasible)
    # 1 - 0.4 - 0.599999999999, each row taken once.
    assert proof.contradiction == Fraction(1, 10**12)
    assert [abs(price) for price in fractions(proof.y)] == [1, 1, 1]


@pytest.mark.parametrize("last", ["0.9000000000000001", "0.8999999999999999"])
def test_a_redundant_equality_with_an_error_in_the_last_digit(last):
    lp = told_twice(last)
    assert isinstance(ask(lp, SolveSettings()), Solved)
    assert sound(lp, proved(lp)).contradiction == Fraction(1, 10**16)


def test_a_redundant_equality_without_an_error():
    lp = told_twice("0.9")
    proof = sound(lp, proved(lp))
    assert proof.objective == Fraction("0.3")  # zinc 0.3, lead 0.3
    assert proof.zero_slack[: lp.m].all()
    assert (proof.basis.row == BASIC).any()


def test_a_bound_violated_within_the_solvers_tolerance():
    lp = a_little_too_full()
    found = solver_basis(lp, feasibility=1e-7)
    assert (found.column.tolist(), found.row.tolist()) == ([BASIC, LOWER], [LOWER])
    proof = sound(lp, proved(lp, found))
    assert proof.objective == 1 + 5 * Fraction(1, 10**10)
    effort = proof.effort
    assert (effort.steps, effort.primal_violation, effort.dual_violation) == (
        2,
        Fraction(1, 10**10),
        0,
    )


def test_a_reduced_cost_of_the_wrong_sign_within_the_solvers_tolerance():
    lp = nearly_as_cheap()
    result = ask(lp, SolveSettings(start=OAK))
    assert result.answer.basis.column.tolist() == [BASIC, LOWER]
    proof = sound(lp, proved(lp, OAK))
    assert proof.objective == Fraction("9.999999999")
    effort = proof.effort
    assert (effort.steps, effort.primal_violation, effort.dual_violation) == (
        2,
        0,
        Fraction(1, 10**10),
    )


@pytest.mark.parametrize(
    ("cost", "objective", "steps"),
    [("0.999999999999999", "9.99999999999999", 2), ("1.000000000000001", "10", 1)],
)
def test_vertices_whose_costs_differ_in_the_fifteenth_digit(cost, objective, steps):
    lp = nearly_as_cheap(cost)
    proof = sound(lp, proved(lp, OAK))
    assert proof.objective == Fraction(objective)
    assert proof.effort.steps == steps
    assert proof.effort.dual_violation == (Fraction(1, 10**15) if steps == 2 else 0)


def test_a_tenth_and_two_tenths_are_three_tenths():
    proof = sound(tenths(), proved(tenths()))
    assert fractions(proof.x) == [1, 1, 0]
    assert proof.zero_slack[0]


def test_three_thirds_are_one():
    proof = sound(thirds(), proved(thirds()))
    assert (proof.objective, fractions(proof.x)) == (1, [1, 1, 1, 0])


@pytest.mark.parametrize("digits", [10, 15, 18, 20, 30, 40])
def test_coefficients_of_many_digits(digits):
    sound(many_digits(digits), proved(many_digits(digits)))


def test_a_side_of_forty_digits():
    lp = written(
        "minimize",
        {"x": "1", "y": "1"},
        {
            "r": ("1.234567890123456789012345678901234567891", {"x": "1.25", "y": "3"}, "inf"),
            "s": ("0", {"x": "1", "y": "-1"}, "0"),
        },
    )
    sound(lp, proved(lp))


def test_fractions_whose_common_denominator_no_double_holds():
    primes = [p for p in range(2, 1000) if all(p % q for q in range(2, p))]
    names = [f"x{p}" for p in primes]
    thin = dict(zip(names, [f"1/{p}" for p in primes], strict=True))
    lp = written("minimize", dict.fromkeys(names, "1"), {"r": ("1", thin, "inf")})
    proof = proved(lp)
    assert said(proof) == 2
    assert faults(lp, proof) == []


def test_coefficients_of_very_different_sizes():
    # x = 1e16 y and y = 1e-10: doubles solve this to all their digits.
    lp = written(
        "minimize",
        {"x": "1", "y": "1"},
        {
            "s": ("0", {"x": "1", "y": "-1e16"}, "inf"),
            "t": ("0.0000000001", {"y": "1"}, "inf"),
        },
    )
    sound(lp, proved(lp))


def test_a_solver_that_gives_up_only_from_the_basis_it_is_given():
    # A coefficient of 1e19 beside 0.01: "Unknown" for the refined model from the first basis.
    lp = written(
        "minimize",
        {"x1": "0", "x2": "0", "x3": "0", "x4": "0.01"},
        {"r": ("0", {"x2": "1", "x3": "0.01", "x4": "12345678901234567890.123"}, "inf")},
        {"x3": ("-1", "-1"), "x4": ("0", "0")},
    )
    sound(lp, proved(lp))


def test_a_solver_that_finds_no_plan_of_a_model_that_always_has_one():
    # It calls the least violation itself infeasible: 1e19 x + below - above = -1.
    lp = written("minimize", {"x": "0"}, {"r": ("-1", {"x": "12345678901234567890.123"}, "-1")})
    assert sound(lp, proved(lp)).contradiction == 1


@pytest.mark.parametrize("start", [None, basis([LOWER] * 101, [BASIC])], ids=["solver's", "given"])
def test_a_row_whose_sum_of_doubles_loses_a_violation(start):
    lp = crumbs()
    proof = proved(lp, start)
    assert said(proof) == "infeasible"
    assert faults(lp, proof) == []
    assert proof.contradiction == Fraction("3e-15")


@pytest.mark.parametrize(
    "start",
    [None, basis([LOWER] + [BASIC] * 101, [LOWER] * 101)],
    ids=["solver's", "given"],
)
def test_a_column_whose_sum_of_doubles_loses_a_wrong_sign(start):
    lp = cheap_crumbs()
    proof = proved(lp, start)
    assert said(proof) == Fraction("1.000000000000008")
    assert faults(lp, proof) == []


@pytest.mark.parametrize("start", [BOTH_TWINS, None], ids=["singular", "none"])
def test_a_basis_that_is_no_help(start):
    proof = sound(twins(), proved(twins(), start))
    assert proof.effort.steps == 1


@pytest.mark.parametrize(
    ("sense", "cost", "bounds", "start"),
    [
        ("minimize", "1", ("-inf", "inf"), basis([LOWER], [BASIC])),
        ("maximize", "1", ("-inf", "inf"), basis([UPPER], [BASIC])),
        ("minimize", "1", ("-inf", "3"), basis([LOWER], [BASIC])),
        ("minimize", "0", ("1", "2"), basis([FREE], [BASIC])),
        ("maximize", "-1", ("-inf", "inf"), basis([BASIC], [LOWER])),
    ],
)
def test_a_basis_that_names_an_end_that_does_not_exist(sense, cost, bounds, start):
    lp = written(sense, {"x": cost}, {"r": ("-inf", {"x": "1"}, "5")}, {"x": bounds})
    sound(lp, proved(lp, start))


@pytest.mark.parametrize(
    ("sense", "sides"), [("minimize", ("0.3333333333333333", "1/3")), ("maximize", ("-1/3", "0"))]
)
def test_different_numbers_that_share_a_double(sense, sides):
    lp = written(sense, {"x": "1"}, {"r": (sides[0], {"x": "1"}, sides[1])}, {"x": ("-inf", "inf")})
    assert not lp.is_equality[0]
    sound(lp, proved(lp))
    sound(lp, proved(lp, basis([BASIC], [UPPER])))
    sound(lp, proved(lp, basis([BASIC], [LOWER])))


def test_bounds_that_cross_within_a_double():
    lp = written(
        "minimize",
        {"x": "1"},
        {"r": ("0", {"x": "1"}, "1")},
        {"x": ("1/3", "0.3333333333333333")},
    )
    proof = proved(lp)
    assert said(proof) in ("infeasible", truth(lp)) or isinstance(proof, NotProved)
    assert isinstance(proof, NotProved) or faults(lp, proof) == []


STOPPED = {
    "doors": (DOORS, None),
    "short": (SHORT, None),
    "endless": (ENDLESS, None),
    "overbooked": (overbooked(), None),
    "told twice": (told_twice("0.9000000000000001"), None),
    "nearly as cheap": (nearly_as_cheap(), OAK),
    "too full": (a_little_too_full(), NEAR),
    "twins": (twins(), BOTH_TWINS),
}


@pytest.mark.parametrize("which", STOPPED)
def test_a_proof_stopped_anywhere_says_only_what_holds(which):
    lp, start = STOPPED[which]
    value = truth(lp)
    for allowed in count():
        proof = prove(lp, start, ask, SolveSettings(), _stopping(allowed))
        if not isinstance(proof, NotProved):
            break
        assert proof.reason == "stopped by the test"
        assert interval_faults(proof, value) == []
        assert proof.has_plan == (
            (proof.upper if exactly(lp).sign > 0 else proof.lower) is not None
        )
    assert allowed > 1
    sound(lp, proof)


def test_a_proof_stopped_inside_an_auxiliary_model_says_only_what_holds():
    # The nearest plan is first sought at a basis whose elm has a price of -1e-10.
    lp = written(
        "minimize",
        {"oak": "1", "elm": "1"},
        {
            "need": ("2", {"oak": "1", "elm": "1.0000000001"}, "inf"),
            "room": ("-inf", {"oak": "1", "elm": "1"}, "1"),
        },
    )

    def helped(asked, wanted):
        if asked.name.endswith("least violation") and wanted.start is None:
            wanted = replace(wanted, start=basis([BASIC, LOWER, BASIC, LOWER], [LOWER, UPPER]))
        return ask(asked, wanted)

    for allowed in count():
        proof = prove(lp, None, helped, SolveSettings(), _stopping(allowed))
        if not isinstance(proof, NotProved):
            break
        assert interval_faults(proof, "infeasible") == []
    assert proof.effort.dual_violation == Fraction(1, 10**10)
    sound(lp, proof)


def test_a_stopped_proof_knows_an_interval():
    found = []
    for allowed in range(20):
        proof = prove(nearly_as_cheap(), OAK, ask, SolveSettings(), _stopping(allowed))
        found.append((proof.lower, proof.upper) if isinstance(proof, NotProved) else None)
    assert found[0] == (None, None)
    # The plan of `OAK` costs 10. Its price of 1 for the kiln leaves the elm -1e-10 too cheap,
    # at the upper bound that the elm does not have; a slightly smaller price gives a bound.
    (interval,) = {pair for pair in found if pair is not None and pair[1] is not None}
    optimum = truth(nearly_as_cheap())
    assert interval[1] == 10
    assert optimum - Fraction(1, 10**6) < interval[0] <= optimum
    assert found[-1] is None


def _stopping(allowed):
    left = iter(range(allowed))

    def between():
        if next(left, None) is None:
            raise StoppedError("stopped by the test")

    return between
