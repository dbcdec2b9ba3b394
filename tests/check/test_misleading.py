"""Models about which a solver misleads: the report is true at its stated tolerance."""

from __future__ import annotations

import numpy as np
import pytest

from lpview import cli, exit_status
from lpview.answer import LineStatus
from lpview.blocks import read_model
from lpview.kkt import Condition
from lpview.outcomes import NoOptimum, NotEstablished, Optimal, SecondRoute
from lpview.repair.search import Infeasible, Unbounded
from lpview.scaling import NotRepresentableError
from tests import oracle
from tests.check.helpers import examined, failing, line_of, written
from tests.dual.models import INF, model

FREE = (-INF, INF)


def at_least(coefficient, side=1.0, **bounds):
    return model("minimize", {"v": 1}, {"r": (side, {"v": coefficient}, INF)}, bounds)


def optimum(lp, **changes):
    found = examined(lp, **changes)
    assert isinstance(found, Optimal)
    return found


def certificate(lp, kind):
    found = examined(lp)
    assert isinstance(found, NoOptimum)
    assert isinstance(found.certificate, kind)
    return found.certificate


@pytest.mark.parametrize("coefficient", [1e-8, 1e-9, 1e-10, 1e-12, 1e-14])
def test_a_tiny_coefficient_counts(coefficient):
    # Dropped, the row would read 0 >= 1: infeasible. In truth v = 1 / coefficient.
    found = optimum(at_least(coefficient))
    assert found.passed
    assert found.answer.x == pytest.approx([1 / coefficient], rel=1e-12)
    assert found.answer.y == pytest.approx([1 / coefficient], rel=1e-12)


def test_a_tiny_coefficient_with_a_bound_is_infeasible():
    farkas = certificate(at_least(1e-10, v=(0, 5)), Infeasible).farkas
    assert farkas.contradiction == pytest.approx(1 - 5e-10, rel=1e-15)
    assert (farkas.misplaced, farkas.reach) == (0, INF)


def test_a_tiny_coefficient_limits_an_objective():
    # Dropped, nothing would limit v.
    lp = model("maximize", {"v": 1}, {"r": (-INF, {"v": 1e-10}, 1)}, {})
    assert optimum(lp).answer.x == pytest.approx([1e10])


def test_a_large_bound_is_a_bound():
    # Read as infinite, the bound of v would leave the objective without limit.
    lp = model("maximize", {"v": 1}, {"r": (-INF, {"v": -1}, 0)}, {"v": (0, 1e20)})
    found = optimum(lp)
    assert found.passed
    assert (found.answer.x.tolist(), found.answer.z.tolist()) == ([1e20], [1])
    assert found.measurement.dual_objective == 1e20


@pytest.mark.parametrize("size", [1e20, 1e25, 1e30])
def test_a_large_side_is_a_side(size):
    lp = model("maximize", {"v": 1}, {"r": (-INF, {"v": 1}, size)}, {})
    found = optimum(lp)
    assert found.passed
    assert found.answer.x.tolist() == [size]
    assert found.answer.y.tolist() == [1]


def test_a_large_bound_does_not_disturb_a_small_plan():
    lp = model(
        "minimize",
        {"v": 1, "w": 2},
        {"r": (3, {"v": 1, "w": 1}, INF)},
        {"v": (0, 1e20), "w": (0, 1e21)},
    )
    assert optimum(lp).answer.x.tolist() == [3, 0]


def test_what_the_solver_gives_up_on_is_not_established():
    # One row at 1e20 and another at 7 cannot both be seen in 16 digits.
    lp = model(
        "maximize",
        {"v": 1, "w": -1},
        {"r": (-INF, {"v": 1}, 1e20), "s": (-INF, {"v": 1, "w": -1}, 7)},
        {},
    )
    found = examined(lp)
    assert isinstance(found, NotEstablished) or (found.passed and found.answer.x @ lp.c == 7)


@pytest.mark.parametrize("sense", ["minimize", "maximize"])
@pytest.mark.parametrize(("low", "high"), [(1, INF), (-INF, -1), (2, 3), (-4, -4)])
def test_no_columns_and_an_impossible_row(sense, low, high):
    lp = model(sense, {}, {"fine": (-1, {}, 1), "r": (low, {}, high)}, {})
    found = certificate(lp, Infeasible)
    side = low if low > 0 else high
    assert found.farkas.y.tolist() == [0, np.sign(side)]
    assert found.farkas.contradiction == abs(side)
    assert found.dual_infeasible is False


@pytest.mark.parametrize("rows", [{}, {"r": (-1, {}, 1)}, {"r": (0, {}, 0), "s": (-INF, {}, INF)}])
def test_no_columns_and_possible_rows(rows):
    found = optimum(model("maximize", {}, rows, {}, offset=2.5))
    assert found.passed
    assert (found.measurement.primal_objective, found.measurement.dual_objective) == (2.5, 2.5)
    assert found.answer.basis.row.tolist() == [LineStatus.BASIC] * len(rows)


def test_no_rows_and_a_variable_pushed_to_a_missing_bound():
    lp = model("maximize", {"v": 1}, {}, {})
    ray = certificate(lp, Unbounded).ray
    assert (ray.direction.tolist(), ray.rate) == ([1], 1)
    bounds = {"v": (-INF, 4), "w": (2, 3), "u": (-1, 1)}
    ray = certificate(model("minimize", {"v": 1, "w": 0, "u": -2}, {}, bounds), Unbounded).ray
    assert (ray.direction.tolist(), ray.rate) == ([-1, 0, 0], -1)
    assert 2 <= ray.x[1] <= 3


def test_no_rows_and_every_bound_there():
    # v at its lower bound, u at its upper one, w (no cost) between, f fixed.
    bounds = {"v": (-4, 4), "w": (2, 3), "u": (-1, 1), "f": (7, 7)}
    lp = model("minimize", {"v": 1, "w": 0, "u": -2, "f": -1}, {}, bounds)
    found = optimum(lp, second_route=SecondRoute.ALWAYS)
    assert found.passed
    assert found.answer.x.tolist() == [-4, 2, 1, 7]
    assert found.answer.z.tolist() == [1, 0, -2, -1]
    assert found.measurement.dual_objective == -13
    assert found.dual_route.agrees


def trap(high, bounds=None):
    rows = {"least": (1, {"v": 1}, INF), "most": (-INF, {"v": 1}, high)}
    return model("minimize", {"v": 1}, rows, bounds or {})


@pytest.mark.parametrize("bounds", [{}, {"v": FREE}])
def test_sides_that_cross_by_less_than_the_tolerance(bounds):
    """Infeasible exactly, by 1e-10; the report says how far it is off, and where."""
    lp = trap(0.9999999999, bounds)
    found = optimum(lp)
    assert found.passed
    primal = found.verdicts[0]
    assert primal.condition is Condition.PRIMAL
    assert primal.absolute == pytest.approx(1e-10, rel=1e-5)
    assert primal.worst == line_of(lp, "most")
    assert primal.tolerance == 1e-9
    # At stake: the violation times its price, which is 0 for this side; no more
    # than the distance of the sides could be hidden.
    assert found.measurement.primal_objective == 1


def test_sides_that_cross_by_more_than_a_stricter_tolerance():
    found = examined(trap(0.9999999999), tolerance=1e-12)
    assert not (isinstance(found, Optimal) and found.passed)


def test_sides_that_cross_by_more_than_the_tolerance():
    farkas = certificate(trap(0.99999999), Infeasible).farkas
    assert farkas.y.tolist() == [1, -1]
    assert farkas.contradiction == pytest.approx(1e-8, rel=1e-6)


def test_a_bound_that_crosses_a_side_by_less_than_the_tolerance():
    found = optimum(at_least(1, v=(0, 0.9999999999)))
    assert found.verdicts[0].absolute == pytest.approx(1e-10, rel=1e-5)


def test_the_trap_at_the_command(tmp_path, monkeypatch):
    path, report = written(trap(0.9999999999), tmp_path), tmp_path / "report.json"
    code = cli.main(["check", str(path), "--format", "json", "--output", str(report)])
    exact = oracle.check_report(path, report.read_text("utf-8"))
    assert code == exit_status.DONE
    assert float(exact["primal feasibility"][0]) == pytest.approx(1e-10, rel=1e-5)


def test_coefficients_too_far_apart_are_refused(tmp_path, capsys):
    lp = model("minimize", {"v": 1, "w": 1}, {"far": (1, {"v": 1e-14, "w": 1e12}, INF)}, {})
    message = (
        "row far: expected coefficients and right-hand side that fit together within the "
        "solver's range of numbers, got sizes too far apart; state the row or its variables "
        "in other units"
    )
    with pytest.raises(NotRepresentableError) as caught:
        examined(lp)
    assert str(caught.value) == message
    assert cli.main(["check", str(written(lp, tmp_path))]) == exit_status.USAGE
    shown = capsys.readouterr()
    assert shown.out == ""
    assert message in shown.err


def test_coefficients_far_apart_that_still_fit():
    lp = model("minimize", {"v": 1, "w": 1}, {"r": (1, {"v": 1e-10, "w": 1e3}, INF)}, {})
    found = optimum(lp)
    assert found.passed
    assert found.head.run.rescaled
    assert found.answer.x == pytest.approx([0, 1e-3])


def test_huge_costs():
    # Through w: 3e25 / 4 a unit; z(v) = 1e25 - 0.75e25.
    lp = model("minimize", {"v": 1e25, "w": 3e25}, {"r": (1, {"v": 1, "w": 4}, INF)}, {})
    found = optimum(lp)
    assert found.passed
    assert found.head.run.rescaled
    assert found.answer.x.tolist() == [0, 0.25]
    assert found.answer.y == pytest.approx([7.5e24], rel=1e-15)
    assert found.answer.z == pytest.approx([2.5e24, 0], rel=1e-15)


def test_huge_costs_beside_small_ones():
    # Filling up with w as far as it goes: z(w) = 1 - 1e25 / 2, of which no double
    # sees the 1; the check sees it and finds it small.
    rows = {"r": (1, {"v": 1, "w": 0.5}, 3)}
    found = optimum(model("minimize", {"v": 1e25, "w": 1}, rows, {"w": (0, 1)}))
    assert found.passed
    assert found.answer.x.tolist() == [0.5, 1]


def test_neither_primal_nor_dual_is_feasible():
    # Chvátal, Linear Programming (1983): the rows add up to 0 <= -1, and (1, 1) is a
    # ray that improves the objective; "unbounded" would be wrong.
    rows = {"a": (-INF, {"v": 1, "w": -1}, 1), "b": (-INF, {"v": -1, "w": 1}, -2)}
    found = certificate(model("maximize", {"v": 2, "w": -1}, rows, {}), Infeasible)
    assert found.dual_infeasible is True
    assert found.farkas.y.tolist() == [-1, -1]
    assert found.farkas.contradiction == 1


def test_an_unbounded_model_at_which_simplex_cycles(textbook):
    # Kuhn's: at most -2 v - ... ; the ray is (1, 0, 1, 0), at -1 a unit.
    lp = read_model(textbook / "b6-4.csv").model
    ray = certificate(lp, Unbounded).ray
    assert ray.rate < 0
    assert lp.c @ ray.direction == pytest.approx(ray.rate)
    assert (lp.A @ ray.direction <= 1e-12).all()
    assert (ray.direction >= 0).all()


@pytest.fixture
def textbook(request):
    return request.config.rootpath / "tests" / "data" / "textbook"


def test_rows_without_coefficients():
    rows = {"none": (-INF, {}, 0), "r": (-INF, {"v": 1, "w": 1}, 2), "even": (0, {}, 0)}
    found = optimum(model("maximize", {"v": 2, "w": -1}, rows, {}))
    assert found.passed
    assert found.answer.x.tolist() == [2, 0]
    assert found.answer.y.tolist() == [0, 2, 0]


def test_an_impossible_row_without_coefficients():
    rows = {"none": (1, {}, INF), "r": (-INF, {"v": 1}, 2)}
    farkas = certificate(model("maximize", {"v": 2}, rows, {}), Infeasible).farkas
    assert farkas.y.tolist() == [1, 0]


@pytest.mark.parametrize("sense", ["minimize", "maximize"])
def test_no_rows_and_no_columns(sense):
    found = optimum(model(sense, {}, {}, {}, offset=-7.0), second_route=SecondRoute.ALWAYS)
    assert found.passed
    assert failing(found) == set()
    assert found.measurement.primal_objective == -7
    assert all(verdict.absolute == 0 for verdict in found.verdicts)


def test_a_free_model_at_rest():
    lp = model("minimize", {"v": 0, "w": 0}, {"r": (*FREE[:1], {"v": 1, "w": 1}, INF)}, {"v": FREE})
    found = optimum(lp)
    assert found.passed
    assert found.answer.x.tolist() == [0, 0]


@pytest.mark.parametrize("lp", [trap(0.9999999999), at_least(1e-10), model("maximize", {}, {}, {})])
@pytest.mark.parametrize("form", ["text", "markdown", "json"])
def test_every_format_is_written(lp, form, tmp_path):
    report = tmp_path / "report"
    words = ["check", str(written(lp, tmp_path)), "--format", form, "--output", str(report)]
    assert cli.main(words) == exit_status.DONE
    assert report.read_text("utf-8").endswith("\n")
