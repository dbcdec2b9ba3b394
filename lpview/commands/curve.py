"""``lpview curve``: the optimal objective as a function of one number of the model."""

from __future__ import annotations

import argparse
import sys
import time
from collections.abc import Sequence
from dataclasses import replace

from lpview import exit_status
from lpview.blocks import InputError
from lpview.blocks.mistakes import Mistake, quoted
from lpview.commands import arriving, leaving
from lpview.decimals import number_text
from lpview.model import LinearProgram
from lpview.outcomes import Examination, Optimal
from lpview.prices.curve import Beyond, Curve, NoCurve, Why
from lpview.prices.number import Number, Part, bound_of, side_of
from lpview.prices.value_curve import asking, value_curve
from lpview.progress import watched
from lpview.report import asking as asking_with
from lpview.report import curve_data
from lpview.report.check import report, verdict
from lpview.report.curve import curve_report
from lpview.run import Watch
from lpview.solver import solve, warm_model

WALKING = ("following the curve", "iteration")
"""What the progress line says."""

STEPS = 10
"""Steps of the table where lines are recorded and nothing else is asked for."""


def curve(options: argparse.Namespace) -> list[int]:
    """``lpview curve``: breakpoints and rates of the value curve, and lines along it."""
    watch, started = Watch(), time.monotonic()
    found = asking_with(_examined(options, watch), *_words(options))
    if not isinstance(found, Optimal) or not found.passed:
        return [_without_curve(found, options)]
    lp = found.head.model
    record = recorded_lines(lp, options.record, options.model)
    number = _number(found, options)
    deadline = None if options.time_limit is None else started + options.time_limit
    steps = options.steps or (STEPS if record else 0)

    def work() -> Curve | NoCurve:
        ask = asking(found, solve, watch, deadline)
        return value_curve(found, number, ask, warm_model, options.span, record, steps)

    made = watched(work, watch, lp.name, WALKING)
    _write(found, made, options)
    return [_status(made)]


def _examined(options: argparse.Namespace, watch: Watch) -> Examination:
    """Solve and check the model; an unknown column is told under the option that named it."""
    try:
        return arriving.examined(options.model, options, watch, [_line(options)])
    except InputError as error:
        own = "--bound" if options.bound is not None else "--cost"
        told = [replace(m, field=own) if m.field == "--column" else m for m in error.mistakes]
        raise InputError(told) from error


def _line(options: argparse.Namespace) -> tuple[str, str]:
    """The line whose number moves, as kind and name."""
    if options.row is not None:
        return "row", options.row
    return "column", options.cost if options.cost is not None else options.bound[0]


def _number(found: Optimal, options: argparse.Namespace) -> Number:
    """The number that moves; raises `InputError` for a row without sides."""
    lp = found.head.model
    line = arriving.lines_asked(lp, "", [_line(options)])[0]
    if options.cost is not None:
        return Number(line, Part.COST)
    if options.bound is not None:
        return _bound(found, line, options)
    side = side_of(found, line)
    if side is None:
        raise _wrong(found, "--row", "a row with a side", f"{quoted(options.row)}, which has none")
    return side


def _bound(found: Optimal, line: int, options: argparse.Namespace) -> Number:
    lp, (name, end) = found.head.model, options.bound
    number = bound_of(lp, line - lp.m, end == "upper")
    if options.span is None and abs(number.of(lp)) == float("inf"):
        got = f"{quoted(name)}, which has none (--span LOW:HIGH says where it might be)"
        raise _wrong(found, "--bound", f"a column that has its {end} bound", got)
    return number


def _wrong(found: Optimal, option: str, expected: str, got: str) -> InputError:
    return InputError([Mistake(found.head.request.source, expected, got, field=option)])


def recorded_lines(lp: LinearProgram, names: Sequence[str], source: str) -> list[int]:
    """Numbers of the lines to record, each once.

    A name is first looked for among rows, then among columns, then as ``row:NAME`` or
    ``column:NAME``. Raises `InputError`.
    """
    rows = {name: k for k, name in enumerate(lp.rows)}
    columns = {name: lp.m + k for k, name in enumerate(lp.columns)}
    prefixed = {
        **{f"row:{name}": k for name, k in rows.items()},
        **{f"column:{name}": k for name, k in columns.items()},
    }
    every = {**prefixed, **columns, **rows}
    expected = "the name of a row or column"
    mistakes = [
        Mistake(source, expected, quoted(name), field="--record", name=name, choices=tuple(every))
        for name in names
        if name not in every
    ]
    if mistakes:
        raise InputError(mistakes)
    return list(dict.fromkeys(every[name] for name in names))


def _words(options: argparse.Namespace) -> list[str]:
    """The options of this command, as words of a command."""
    words = [f"--row={options.row}"] if options.row is not None else []
    words += [f"--cost={options.cost}"] if options.cost is not None else []
    words += [f"--bound={':'.join(options.bound)}"] if options.bound is not None else []
    if options.span is not None:
        words.append(f"--span={':'.join(map(number_text, options.span))}")
    words += [f"--steps={options.steps}"] if options.steps else []
    words += [f"--record={name}" for name in options.record]
    return words + ["--ascii"] * options.ascii


def _without_curve(found: Examination, options: argparse.Namespace) -> int:
    """What the check says, for an outcome that has no value curve."""
    if options.format == "text":
        leaving.write(leaving.rendered(report(found), "text"), options.output)
    elif options.format == "json":
        leaving.write(curve_data.as_json(found, None), options.output)
    else:
        source = found.head.request.source
        sys.stderr.write(f"{source}: no value curve: {verdict(found)}\n")
    return leaving.status(found)


def _write(found: Optimal, made: Curve | NoCurve, options: argparse.Namespace) -> None:
    if options.format == "json":
        leaving.write(curve_data.as_json(found, made), options.output)
    elif options.format == "text":
        document = curve_report(found, made, options.steps > 0, options.ascii)
        leaving.write(leaving.rendered(document, "text"), options.output)
    elif isinstance(made, Curve):
        leaving.tell_notes(found.head.request.source, found.head.notes)
        leaving.write(curve_data.as_csv(made), options.output)
    else:
        sys.stderr.write(f"{found.head.request.source}: no value curve: {made.reason}\n")


_NO_CURVE = {
    Why.NO_OPTIMUM: exit_status.NO_OPTIMUM,
    Why.ONE_POINT: exit_status.DONE,
    Why.STOPPED: exit_status.NOT_ESTABLISHED,
    Why.NOT_FOUND: exit_status.NOT_ESTABLISHED,
}
"""Exit statuses where there is no curve."""


def _status(made: Curve | NoCurve) -> int:
    if isinstance(made, NoCurve):
        return _NO_CURVE[made.why]
    if not (made.bends_rightly and made.is_joined):
        return exit_status.FAILED
    open_ends = {made.below, made.above} & {Beyond.STOPPED, Beyond.NOT_FOUND}
    return exit_status.NOT_ESTABLISHED if open_ends or made.stopped else exit_status.DONE
