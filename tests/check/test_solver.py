"""The one module that talks to the solver: limits, stops, statuses, silence."""

from __future__ import annotations

import os
import subprocess
import sys
import threading

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from lpview.answer import LineStatus
from lpview.blocks import read_model
from lpview.kkt import Condition
from lpview.outcomes import Stopped
from lpview.run import Claim, Method, Solved, SolveSettings, Unsolved, Watch
from lpview.solver import solve
from tests.check.helpers import correct, examined, verdicts
from tests.check.small_models import MODELS
from tests.dual.models import INF, feasible_pairs, model


@pytest.fixture(scope="module")
def israel(request):
    path = request.config.rootpath / "tests" / "data" / "netlib" / "israel.csv"
    return read_model(path).model


def test_time_limit(israel):
    result = solve(israel, SolveSettings(time_limit=0.0))
    assert isinstance(result, Unsolved)
    assert result.run.claim is Claim.TIME_LIMIT
    assert float(result.run.options["time_limit"]) == 0


def test_iteration_limit(israel):
    result = solve(israel, SolveSettings(iteration_limit=3, method=Method.SIMPLEX))
    assert isinstance(result, Unsolved)
    assert result.run.claim is Claim.ITERATION_LIMIT
    assert result.run.iterations <= 3


def test_a_limit_is_a_stop_of_the_examination(israel):
    found = examined(israel, solve=SolveSettings(time_limit=0.0))
    assert isinstance(found, Stopped)
    assert found.head.run.claim is Claim.TIME_LIMIT


@pytest.mark.parametrize("method", [Method.SIMPLEX, Method.INTERIOR_POINT])
def test_a_stop_that_was_asked_for_before_the_run(israel, method):
    watch = Watch()
    watch.stop.set()
    result = solve(israel, SolveSettings(method=method), watch)
    assert isinstance(result, Unsolved)
    assert result.run.claim is Claim.INTERRUPTED


class Handed(threading.Event):
    """An event that, when first looked at, waits for the other thread to set it."""

    def __init__(self):
        super().__init__()
        self.looked_at = threading.Event()

    def is_set(self):
        self.looked_at.set()
        return self.wait(60)


def test_a_stop_from_another_thread(israel):
    stop = Handed()

    def person():
        assert stop.looked_at.wait(60)
        stop.set()

    thread = threading.Thread(target=person)
    thread.start()
    result = solve(israel, SolveSettings(method=Method.SIMPLEX), Watch(stop=stop))
    thread.join()
    assert result.run.claim is Claim.INTERRUPTED


def test_iterations_are_reported_while_solving(israel):
    watch = Watch()
    result = solve(israel, SolveSettings(method=Method.SIMPLEX), watch)
    assert isinstance(result, Solved)
    assert 0 < watch.iterations <= result.run.iterations


@pytest.mark.parametrize("method", Method)
@pytest.mark.parametrize("name", MODELS)
def test_every_method_finds_the_optimum(method, name):
    case = MODELS[name]
    result = solve(case.lp, SolveSettings(method=method))
    assert isinstance(result, Solved)
    assert result.answer.x == pytest.approx(case.x, abs=1e-9)
    assert result.answer.basis is not None
    wanted = {Method.CHOOSE: "choose", Method.SIMPLEX: "simplex", Method.INTERIOR_POINT: "ipm"}
    assert result.run.options["solver"] == wanted[method]
    assert result.run.solver.startswith("HiGHS 1.")


def test_interior_point_without_crossover_has_no_basis(israel):
    settings = SolveSettings(method=Method.INTERIOR_POINT, crossover=False)
    result = solve(israel, settings)
    assert isinstance(result, Solved)
    assert result.answer.basis is None
    assert result.run.options["run_crossover"] == "off"
    found = verdicts(israel, result.answer.x, result.answer.y, tolerance=1e-6)
    assert found[Condition.PRIMAL].passed
    assert israel.c @ result.answer.x == pytest.approx(-896644.8218630457, rel=1e-6)


def test_interior_point_with_crossover_has_a_basis(israel):
    result = solve(israel, SolveSettings(method=Method.INTERIOR_POINT))
    assert result.answer.basis is not None
    count = sum(int((part == LineStatus.BASIC).sum()) for part in basis_parts(result))
    assert count == israel.m


def basis_parts(result):
    return result.answer.basis.column, result.answer.basis.row


SILENT = """
import os, sys
from lpview.blocks import read_model
from lpview.run import Method, SolveSettings
from lpview.solver import solve
if sys.argv[2] == "closed":
    os.close(1)
lp = read_model(sys.argv[1]).model
for method in Method:
    for limit in (None, 0.0):
        result = solve(lp, SolveSettings(method=method, time_limit=limit))
sys.stderr.write(f"{type(result).__name__} {len(os.listdir('/proc/self/fd'))}")
"""


@pytest.mark.parametrize("output", ["open", "closed"])
def test_nothing_is_written_to_standard_output(output, request):
    path = request.config.rootpath / "tests" / "data" / "netlib" / "afiro.csv"
    words = [sys.executable, "-W", "error", "-c", SILENT, str(path), output]
    ended = subprocess.run(words, capture_output=True, text=True, check=False)
    assert (ended.returncode, ended.stdout) == (0, ""), ended.stderr
    assert ended.stderr.startswith("Unsolved ")


def test_standard_output_still_works_afterwards(capfd):
    correct(MODELS["doors"].lp)
    os.write(1, b"still here\n")
    assert capfd.readouterr().out == "still here\n"


@settings(max_examples=40, deadline=None)
@given(feasible_pairs(), st.sampled_from(Method))
def test_negative_zero_never_appears(pair, method):
    result = solve(pair[0], SolveSettings(method=method))
    assert isinstance(result, Solved)
    for part in (result.answer.x, result.answer.y, result.answer.z):
        assert not np.signbit(part[part == 0]).any()


@settings(max_examples=40, deadline=None)
@given(feasible_pairs())
def test_basis_statuses_say_where_a_line_rests(pair):
    lp = pair[0]
    answer = solve(lp).answer
    value = (answer.x, lp.A @ answer.x)
    low, high = (lp.lower, lp.row_lower), (lp.upper, lp.row_upper)
    price = (answer.z, answer.y)
    basis = (answer.basis.column, answer.basis.row)
    assert sum(int((part == LineStatus.BASIC).sum()) for part in basis) == lp.m
    for status, v, l_end, u_end, p in zip(basis, value, low, high, price, strict=True):
        at_low, at_up = status == LineStatus.LOWER, status == LineStatus.UPPER
        assert v[at_low] == pytest.approx(l_end[at_low], abs=1e-9)
        assert v[at_up] == pytest.approx(u_end[at_up], abs=1e-9)
        assert not v[status == LineStatus.FREE].any()  # at rest at 0
        assert p[status == LineStatus.BASIC] == pytest.approx(0, abs=1e-9)


def test_basis_statuses_by_hand():
    case = MODELS["doors"]
    basis = correct(case.lp).basis
    assert basis.column.tolist() == [LineStatus.BASIC] * 2
    assert basis.row.tolist() == [LineStatus.BASIC, LineStatus.UPPER, LineStatus.UPPER]
    basis = correct(MODELS["ranges"].lp).basis
    assert basis.column.tolist() == [LineStatus.BASIC, LineStatus.LOWER]
    assert basis.row.tolist() == [LineStatus.LOWER, LineStatus.BASIC]


def test_the_tolerances_asked_for_are_recorded():
    for asked in (1e-9, 1e-7):
        options = solve(MODELS["doors"].lp, SolveSettings(feasibility=asked)).run.options
        assert float(options["primal_feasibility_tolerance"]) == asked
        assert float(options["dual_feasibility_tolerance"]) == asked
    options = solve(MODELS["doors"].lp).run.options
    assert float(options["primal_feasibility_tolerance"]) == 1e-9


@pytest.mark.parametrize(
    ("lp", "claims"),
    [
        (
            model("minimize", {"v": 1}, {"r": (3, {"v": 1}, 3), "s": (4, {"v": 1}, 4)}, {}),
            {Claim.INFEASIBLE},
        ),
        (
            model("maximize", {"v": 1, "w": 1}, {"r": (-INF, {"v": 1, "w": -1}, 2)}, {}),
            {Claim.UNBOUNDED, Claim.INFEASIBLE_OR_UNBOUNDED},
        ),
    ],
)
def test_claims_without_an_optimum(lp, claims):
    result = solve(lp)
    assert isinstance(result, Unsolved)
    assert result.run.claim in claims


def test_the_model_is_not_touched():
    case = MODELS["crew"]
    before = [getattr(case.lp, part).copy() for part in ("c", "lower", "upper")]
    solve(case.lp)
    for part, copy in zip(("c", "lower", "upper"), before, strict=True):
        assert np.array_equal(getattr(case.lp, part), copy)
