"""``lpview plans``: the other optimal plans."""

from __future__ import annotations

import argparse
import sys
import time

import numpy as np

from lpview import exit_status
from lpview.answer import Answer
from lpview.blocks import write_values
from lpview.commands import arriving, leaving
from lpview.commands.about import WORKING, steps
from lpview.commands.prices import without_prices
from lpview.examination import check_answer
from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.priced import Interval, StoppedEarlyError
from lpview.prices import NoPrices, Prices, work_out
from lpview.progress import watched
from lpview.repair.certificate import check_ray
from lpview.report import plans as reports
from lpview.report.prices import no_prices_report
from lpview.run import Watch
from lpview.solver import warm_model


def plans(options: argparse.Namespace) -> list[int]:
    """``lpview plans``: which variables may differ, or one of the other plans."""
    watch, started = Watch(), time.monotonic()
    lines = [] if options.column is None else [("column", options.column)]
    found = arriving.examined(options.model, options, watch, lines)
    if not isinstance(found, Optimal) or not found.passed:
        return [without_prices(found, options)]
    ready = watched(lambda: work_out(found, warm_model), watch, found.head.model.name, WORKING)
    if isinstance(ready, NoPrices):
        document = no_prices_report(found, ready)
        leaving.write(leaving.rendered(document, options.format), options.output)
        return [exit_status.NOT_ESTABLISHED]
    if options.column is not None:
        line = arriving.lines_asked(found.head.model, "", lines)[0]
        return [_one_plan(found, ready, line, options)]
    return [_all_plans(found, ready, options, (watch, started))]


def _all_plans(
    found: Optimal, ready: Prices, options: argparse.Namespace, work_of: tuple[Watch, float]
) -> int:
    """A table of the variables that are not the same in all optimal plans."""
    watch, started = work_of
    step = steps(watch, options.time_limit, started)
    intervals: dict[int, Interval] = {}

    def work() -> None:
        for line in reports.moving_columns(found.head.model.m, ready.partition.value_moves):
            step()
            intervals[line] = ready.value_interval(line)

    stopped = None
    try:
        watched(work, watch, found.head.model.name, WORKING)
    except StoppedEarlyError as error:
        stopped = error.claim
    document = reports.plans_report(found, ready.partition, intervals, stopped, options.full)
    leaving.write(leaving.rendered(document, options.format), options.output)
    return exit_status.DONE if stopped is None else exit_status.NOT_ESTABLISHED


def _one_plan(found: Optimal, ready: Prices, line: int, options: argparse.Namespace) -> int:
    """Write one optimal plan as a block, and its ray where it was asked for and there is one."""
    columns, greatest = found.head.model.columns, options.end == "greatest"
    point, end = ready.plan_at(line, greatest), ready.value_interval(line)[greatest]
    if not _is_optimal(found, point.x, point.ray):
        sys.stderr.write("not established: the plan that was found fails the check\n")
        return exit_status.NOT_ESTABLISHED
    leaving.tell_notes(found.head.request.source, found.head.notes)
    leaving.write(write_values("x", columns, point.x), options.output)
    if options.ray is not None and point.ray is not None:
        leaving.write(write_values("ray", columns, point.ray, sparse=True), options.ray)
    written = options.ray is not None
    sys.stderr.write(reports.end_sentence(found, line, greatest, end, written) + "\n")
    return exit_status.DONE


def _is_optimal(found: Optimal, x: Vector, ray: Vector | None) -> bool:
    """Whether a plan passes every condition beside the answer's prices, and a ray keeps to it."""
    answer, tolerance = found.answer, found.head.request.tolerance
    own = check_answer(found.head, Answer(x.copy(), answer.y, answer.z, None))
    if ray is None or not own.passed:
        return own.passed
    lp = found.head.model
    along = check_ray(lp, x, ray, tolerance)
    terms = max(1.0, float(np.max(np.abs(lp.c * along.direction), initial=0.0)))
    return along.drift <= tolerance and abs(along.rate) <= tolerance * terms
