"""``lpview check --plan``: check a plan that another system or a person produced."""

from __future__ import annotations

import argparse
from dataclasses import replace

from lpview import exit_status
from lpview.blocks import read_plan
from lpview.commands import arriving, leaving
from lpview.examination import examine
from lpview.file_numbers import FileNumbers
from lpview.given import GivenPlan
from lpview.model import LinearProgram
from lpview.outcomes import Request, SecondRoute
from lpview.planned import CheckedPlan, Limits, checked_plan, limits_of, measured
from lpview.progress import watched
from lpview.reading import Reading
from lpview.run import Claim, Solved, SolverRun, SolveSettings, Unsolved, Watch
from lpview.scaling import NotRepresentableError
from lpview.solver import solve


def check_plan(options: argparse.Namespace) -> list[int]:
    """Check one plan of one model; the exit status is that of the plan alone.

    Raises `lpview.blocks.InputError` for a model, a plan or a limit that cannot be used.
    """
    source = options.models[0]
    reading, data = arriving.read(source, options)
    plan = read_plan(
        options.plan,
        reading.model,
        options.decimal,
        complete=options.complete,
        ignore_unknown=options.ignore_unknown,
    )
    limits = limits_of(reading.model, source, options.limits)
    if data is not None:
        source = arriving.saved(data, options.output)
    # The second route is about the prices of a solver's answer, which is not the subject.
    request = replace(arriving.request(source, options), second_route=SecondRoute.NEVER)
    watch = Watch()

    def work() -> CheckedPlan:
        return _checked(reading, plan, limits, options.rounded, request, watch)

    checked = watched(work, watch, reading.model.name)
    leaving.write(_rendered(checked, options), options.output)
    return [exit_status.DONE if checked.accepted else exit_status.FAILED]


def _checked(
    reading: Reading,
    plan: GivenPlan,
    limits: Limits,
    rounded: bool,
    request: Request,
    watch: Watch,
) -> CheckedPlan:
    numbers = FileNumbers(reading.model)
    found = measured(reading.model, plan, numbers)
    outcome = examine(reading, request, _solve, watch)
    return checked_plan(found, outcome, limits, rounded, numbers)


def _solve(
    lp: LinearProgram, settings: SolveSettings | None = None, watch: Watch | None = None
) -> Solved | Unsolved:
    """The solver; a model whose numbers it cannot hold leaves the plan to be judged alone."""
    try:
        return solve(lp, settings, watch)
    except NotRepresentableError as error:
        return Unsolved(SolverRun(Claim.UNKNOWN, str(error), 0, 0.0, {}, False, "no solver"))


def _rendered(checked: CheckedPlan, options: argparse.Namespace) -> str:
    if options.format == "json":
        from lpview.report.plan_json import render

        return render(checked)
    from lpview.report.plan import report

    return leaving.rendered(report(checked, options.full), options.format)
