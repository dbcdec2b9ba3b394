"""``lpview prices``, and what ``check --prices`` adds to the check."""

from __future__ import annotations

import argparse
import sys
import time
from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from lpview import exit_status
from lpview.blocks import InputError, Mistake
from lpview.blocks.mistakes import quoted
from lpview.commands import about, arriving, leaving
from lpview.outcomes import Examination, Optimal
from lpview.priced import (
    Between,
    Priced,
    price_everything,
    price_lines,
    price_page,
    price_report,
)
from lpview.prices import NoPrices, Prices, Then, Together, move_together, work_out
from lpview.prices.interior import find_interior
from lpview.progress import watched
from lpview.report import json, price_json
from lpview.report import prices as reports
from lpview.report.check import report, verdict
from lpview.report.document import Document
from lpview.report.summary import summary_lines
from lpview.report.together import asking_moves, together_report
from lpview.run import Ask, Watch
from lpview.solver import warm_model


def prices(options: argparse.Namespace) -> list[int]:
    """``lpview prices``: which prices can be trusted, both ways and how far."""
    watch, started = Watch(), time.monotonic()
    found = _examined(options, watch)
    if not isinstance(found, Optimal) or not found.passed:
        return [without_prices(found, options)]
    if options.moves:
        return [_moved(found, options, watch)]
    if options.about:
        return [about.write(found, options, watch, started)]
    found, priced = worked_out(found, options, watch, started)
    text = _rendered(found, priced, options)
    if text:
        leaving.write(text, options.output)
    return [exit_status.worst([leaving.status(found), price_status(priced)])]


def _examined(options: argparse.Namespace, watch: Watch) -> Examination:
    """Solve and check the model; an unknown row is told under the option that named it."""
    if not options.moves:
        return arriving.examined(options.model, options, watch, options.lines)
    rows = [("row", name) for name, _ in options.moves]
    try:
        return arriving.examined(options.model, options, watch, rows)
    except InputError as error:
        told = [replace(m, field="--move") if m.field == "--row" else m for m in error.mistakes]
        raise InputError(told) from error


def price_status(priced: Priced | NoPrices) -> int:
    """The exit status as far as prices were asked for."""
    known = isinstance(priced, Priced) and priced.stopped is None
    return exit_status.DONE if known else exit_status.NOT_ESTABLISHED


def without_prices(found: Examination, options: argparse.Namespace) -> int:
    """Write the check's usual report, for an outcome that has no prices."""
    if options.format == "csv":
        sys.stderr.write(f"{found.head.request.source}: {verdict(found)}\n")
    elif options.format == "json":
        leaving.write(json.render(found, [price_json.fields(None)]), options.output)
    else:
        document = report(found, options.full)
        leaving.write(leaving.rendered(document, options.format), options.output)
    return leaving.status(found)


def worked_out(
    found: Optimal, options: argparse.Namespace, watch: Watch, started: float
) -> tuple[Optimal, Priced | NoPrices]:
    """The prices that the options ask for, with progress; and the answer with their marks.

    The command's time limit counts from ``started``, a reading of `time.monotonic`.
    """
    step = about.steps(watch, options.time_limit, started)
    ask = about.asking(watch, options.time_limit, started)

    def work() -> Priced | NoPrices:
        ready = work_out(found, warm_model)
        if isinstance(ready, NoPrices):
            return ready
        return _asked(found, ready, options, step, ask)

    result = watched(work, watch, found.head.model.name, about.WORKING)
    return (result.found if isinstance(result, Priced) else found), result


def _asked(
    found: Optimal, ready: Prices, options: argparse.Namespace, step: Between, ask: Ask
) -> Priced:
    if options.lines:
        lines = arriving.lines_asked(found.head.model, "", options.lines)
        return price_lines(found, ready, lines, step)
    if options.summary:
        return price_page(found, ready, summary_lines, step)
    if options.format in ("json", "csv"):
        return price_everything(found, ready, step)
    priced = price_report(found, ready, None if options.full else reports.MOST_ROWS, step)
    if priced.stopped is not None:
        return priced
    return replace(priced, interior=find_interior(found, ask))


def _rendered(found: Optimal, priced: Priced | NoPrices, options: argparse.Namespace) -> str:
    """The report; empty where there is nothing to write as CSV."""
    if options.format == "json":
        return json.render(found, [price_json.fields(priced)])
    if options.format == "csv":
        leaving.tell_notes(found.head.request.source, found.head.notes)
        problem = reports.problem(priced)
        sys.stderr.write(f"{found.head.request.source}: {problem}\n" if problem else "")
        return price_json.as_csv(priced) if isinstance(priced, Priced) else ""
    return leaving.rendered(_document(found, priced, options), options.format)


def _document(found: Optimal, priced: Priced | NoPrices, options: argparse.Namespace) -> Document:
    lines = arriving.lines_asked(found.head.model, "", options.lines)
    if isinstance(priced, NoPrices):
        return reports.no_prices_report(found, priced, lines)
    if lines:
        return reports.lines_report(priced, lines)
    return reports.prices_report(priced, options.full)


def _moved(found: Optimal, options: argparse.Namespace, watch: Watch) -> int:
    """``--move``: what several right-hand sides are worth, moved together."""
    lp = found.head.model
    moves = [(lp.rows.index(name), amount) for name, amount in options.moves]
    _require_sides(found, moves)
    found = asking_moves(found, moves)

    def work() -> Together | NoPrices:
        ready = work_out(found, warm_model)
        return ready if isinstance(ready, NoPrices) else move_together(ready, moves)

    made = watched(work, watch, lp.name, about.WORKING)
    known = isinstance(made, Together) and made.then is not Then.NOT_FOUND
    document = (
        reports.no_prices_report(found, made)
        if isinstance(made, NoPrices)
        else together_report(found, made)
    )
    leaving.write(leaving.rendered(document, options.format), options.output)
    return exit_status.DONE if known else exit_status.NOT_ESTABLISHED


def _require_sides(found: Optimal, moves: Sequence[tuple[int, float]]) -> None:
    """Raises `InputError` for rows that have no side to move."""
    lp = found.head.model
    mistakes = [
        Mistake(
            found.head.request.source,
            "a row with a side",
            f"{quoted(lp.rows[row])}, which has none",
            field="--move",
        )
        for row, _ in moves
        if np.isinf(lp.row_lower[row]) and np.isinf(lp.row_upper[row])
    ]
    if mistakes:
        raise InputError(mistakes)
