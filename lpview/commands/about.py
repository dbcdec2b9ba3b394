"""Reports of ``lpview prices`` on something other than single prices; steps and stopping."""

from __future__ import annotations

import argparse
import time

from lpview import exit_status
from lpview.commands import leaving
from lpview.outcomes import Optimal
from lpview.priced import Between, StoppedEarlyError
from lpview.prices import NoPrices
from lpview.prices.digits import digits
from lpview.prices.interior import find_interior
from lpview.prices.redundant import Redundant, redundant_sides
from lpview.progress import watched
from lpview.report import asking as asking_for
from lpview.report.digits import digits_blocks
from lpview.report.document import Block
from lpview.report.interior import interior_blocks
from lpview.report.prices import closing, opening
from lpview.report.redundant import redundant_blocks
from lpview.run import Ask, Claim, Watch, within
from lpview.solver import solve, warm_model

WORKING = ("examining prices", "step")
"""What the progress line says."""

Written = tuple[tuple[Block, ...], int]


def write(found: Optimal, options: argparse.Namespace, watch: Watch, started: float) -> int:
    """``--interior``, ``--redundant`` or ``--digits``: write that report."""
    make = {"interior": _interior, "redundant": _redundant, "digits": _digits}[options.about]
    ask = asking(watch, options.time_limit, started)
    step = steps(watch, options.time_limit, started)

    def work() -> Written:
        return make(found, ask, step, options.full)

    body, status = watched(work, watch, found.head.model.name, WORKING)
    asked = asking_for(found, f"--{options.about}")
    document = (*opening(asked), *body, *closing(asked))
    leaving.write(leaving.rendered(document, options.format), options.output)
    return status


def _interior(found: Optimal, ask: Ask, step: Between, full: bool) -> Written:
    result = find_interior(found, ask)
    return interior_blocks(found, result, full), _status(not isinstance(result, NoPrices))


def _redundant(found: Optimal, ask: Ask, step: Between, full: bool) -> Written:
    result = redundant_sides(found, warm_model, step)
    known = isinstance(result, Redundant) and result.stopped is None
    return redundant_blocks(found, result, full), _status(known)


def _digits(found: Optimal, ask: Ask, step: Between, full: bool) -> Written:
    result = digits(found)
    return digits_blocks(found, result, full), _status(not isinstance(result, NoPrices))


def _status(known: bool) -> int:
    return exit_status.DONE if known else exit_status.NOT_ESTABLISHED


def asking(watch: Watch, limit: float | None, started: float) -> Ask:
    """A solver for auxiliary models within what is left of the command's time limit."""
    return within(solve, watch, limit, started)


def steps(watch: Watch, limit: float | None, started: float) -> Between:
    """What is called between two steps: counts them, and raises when it is time to stop."""
    watch.iterations = 0

    def step() -> None:
        watch.iterations += 1
        if watch.stop.is_set():
            raise StoppedEarlyError(Claim.INTERRUPTED)
        if limit is not None and time.monotonic() - started > limit:
            raise StoppedEarlyError(Claim.TIME_LIMIT)

    return step
