"""How long everything about prices takes, beside solving again and beside the solver.

    python -m tests.benchmarks.prices FOLDER [--only WORD] [--table]

Two questions, with a goal each; both are ratios of times taken inside one run, because
machines are noisy:

1. Solving again: the rates of every right-hand side both ways by ``2 m`` solves from nothing
   of a changed model, over `lpview.prices.work_out` and everything it can find (intervals of
   prices and values of all lines, ranges of all sides, bounds and costs). The solves are not
   all made: the median of about twenty, half of them before and half after, times ``2 m``.
   Asked of the twenty smallest files (rows + columns) and of five large ones; the median.
2. The solver: `work_out` and the price interval of every row, over the solver's own run,
   summed over the folder without the three files that take longest.

A file is given up after a minute; it then counts with the time it had, which is said. Answers
that fail their check at 1e-9 are asked to pass at 1e-7, which is said too.

Always ends with exit status 0: figures, not a test.
"""

from __future__ import annotations

import argparse
import statistics
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np

from lpview.blocks import read_model
from lpview.examination import examine
from lpview.model import LinearProgram
from lpview.outcomes import Optimal, Request, SecondRoute
from lpview.prices import NoPrices, Prices, work_out
from lpview.reading import Reading
from lpview.solver import solve, warm_model

SMALLEST = 20
"""Files of the first question, beside the large ones."""
LARGE = ("25fv47", "fit1p", "scfxm3", "ship08l", "pilot-we")
"""Large files of the first question, by stem."""
SOLVES = 10
"""Solves from nothing before, and as many after."""
REPEATS = 3
"""Runs of a quick file, of which the median counts."""
QUICK = 2.0
"""Seconds up to which a file is run again."""
PATIENCE = 60.0
"""Seconds after which a file is given up."""
LEFT_OUT = 3
"""Files that take longest, left out of the second question."""


class GivenUpError(Exception):
    """A file takes too long."""


@dataclass(frozen=True)
class Timed:
    """Seconds of one file's work."""

    seconds: float
    note: str = ""


@dataclass(frozen=True)
class Again:
    """The first question for one file."""

    name: str
    lp: LinearProgram
    prices: Timed
    """`work_out` and everything."""
    solve: float
    """One solve from nothing, median, in seconds."""
    note: str

    @property
    def ratio(self) -> float:
        """``2 m`` solves over everything about prices."""
        return 2 * self.lp.m * self.solve / self.prices.seconds


@dataclass(frozen=True)
class Intervals:
    """The second question for one file."""

    name: str
    lp: LinearProgram
    solver: float
    """The solver's own run, in seconds."""
    prepare: float
    """`work_out`, in seconds."""
    rows: Timed
    """Price intervals of the rows."""
    note: str

    @property
    def seconds(self) -> float:
        """Preparing and asking."""
        return self.prepare + self.rows.seconds


def verified(reading: Reading) -> tuple[Optimal | None, str]:
    """An answer that passed its check, with a note on how."""
    for tolerance in (1e-9, 1e-7):
        request = Request("", "", tolerance=tolerance, second_route=SecondRoute.NEVER)
        found = examine(reading, request, solve)
        if isinstance(found, Optimal) and found.passed:
            return found, "" if tolerance == 1e-9 else f"passed at {tolerance:g} only"
    return None, "no answer that passed its check"


def prepared(found: Optimal) -> Prices:
    """Prices that can be asked for."""
    prices = work_out(found, warm_model)
    if isinstance(prices, NoPrices):
        raise SystemExit(f"{found.head.model.name}: {prices.reason}")
    return prices


def timed(work: Callable[[Callable[[], None]], None]) -> Timed:
    """Time some work, which calls what it is given between its steps."""
    started = time.perf_counter()

    def between() -> None:
        if time.perf_counter() - started > PATIENCE:
            raise GivenUpError

    try:
        work(between)
    except GivenUpError:
        return Timed(time.perf_counter() - started, f"given up after {PATIENCE:.0f} s")
    return Timed(time.perf_counter() - started)


def solves(lp: LinearProgram, seed: int) -> list[float]:
    """Seconds of some solves from nothing, one side of each model changed a little."""
    draw, seconds = np.random.default_rng(seed), []
    for row in draw.choice(lp.m, SOLVES):
        step = np.zeros(lp.m)
        size = max(1.0, *(abs(e) for e in (lp.row_lower[row], lp.row_upper[row]) if np.isfinite(e)))
        step[row] = draw.choice((-1e-4, 1e-4)) * size
        model = replace(lp, row_lower=lp.row_lower + step, row_upper=lp.row_upper + step, odd={})
        started = time.perf_counter()
        solve(model)
        seconds.append(time.perf_counter() - started)
        if sum(seconds) > PATIENCE / 2:
            break
    return seconds


def again(path: Path, found: Optimal, note: str) -> Again:
    """Answer the first question for one file."""
    lp = found.head.model
    seconds = solves(lp, 0)
    runs = [timed(lambda between: prepared(found).everything(between))]
    while runs[0].seconds < QUICK and len(runs) < REPEATS:
        runs.append(timed(lambda between: prepared(found).everything(between)))
    seconds += solves(lp, 1)
    prices = Timed(statistics.median(run.seconds for run in runs), runs[0].note)
    return Again(path.stem, lp, prices, statistics.median(seconds), _joined(note, prices.note))


def intervals(path: Path, found: Optimal, note: str) -> Intervals:
    """Answer the second question for one file."""
    lp, started = found.head.model, time.perf_counter()
    prices = prepared(found)
    prepare = time.perf_counter() - started

    def ask(between: Callable[[], None]) -> None:
        for row in range(lp.m):
            prices.interval(row)
            between()

    rows = timed(ask)
    return Intervals(path.stem, lp, found.head.run.seconds, prepare, rows, _joined(note, rows.note))


def _joined(*notes: str) -> str:
    return "; ".join(note for note in notes if note)


AGAIN = f"{'file':<12}{'rows':>7}{'columns':>9}{'one solve':>11}{'everything':>12}{'ratio':>9}"
INTERVALS = (
    f"{'file':<12}{'rows':>7}{'columns':>9}{'solver':>9}{'prepare':>9}{'rows':>9}{'ratio':>9}"
)


def again_line(one: Again) -> str:
    """One file's line of the first table."""
    return (
        f"{one.name:<12}{one.lp.m:7}{one.lp.n:9}{one.solve:11.4f}{one.prices.seconds:12.3f}"
        f"{one.ratio:9.1f}" + (f"  {one.note}" if one.note else "")
    )


def intervals_line(one: Intervals) -> str:
    """One file's line of the second table."""
    return (
        f"{one.name:<12}{one.lp.m:7}{one.lp.n:9}{one.solver:9.3f}{one.prepare:9.3f}"
        f"{one.rows.seconds:9.3f}{one.seconds / one.solver:9.1f}"
        + (f"  {one.note}" if one.note else "")
    )


def again_summary(found: Sequence[Again]) -> str:
    """The answer to the first question."""
    ratios = sorted(one.ratio for one in found)
    return (
        f"everything about prices, {len(ratios)} files: 2m solves from nothing take "
        f"{statistics.median(ratios):.0f} times as long, median (goal 50); "
        f"least {ratios[0]:.0f}, most {ratios[-1]:.0f}"
    )


def intervals_summary(found: Sequence[Intervals]) -> str:
    """The answer to the second question."""
    by_time = sorted(found, key=lambda one: one.seconds + one.solver)
    kept, left = by_time[:-LEFT_OUT] or by_time, by_time[-LEFT_OUT:]
    ours, solver = sum(one.seconds for one in kept), sum(one.solver for one in kept)
    return (
        f"price intervals of all rows, {len(kept)} files: {ours:.2f} s, solver {solver:.2f} s, "
        f"ratio {ours / solver:.2f} (goal 10); left out: "
        + ", ".join(f"{one.name} {one.seconds:.1f} s over {one.solver:.1f} s" for one in left)
    )


def main() -> None:
    """Print the tables and the summary."""
    parser = argparse.ArgumentParser(prog="python -m tests.benchmarks.prices")
    parser.add_argument("folder", type=Path)
    parser.add_argument("--only", default="", metavar="WORD", help="files with WORD in their name")
    parser.add_argument("--table", action="store_true", help="also a line per file of question 2")
    options = parser.parse_args()
    paths = [path for path in options.folder.glob("*.csv") if options.only in path.name]
    readings = {path: read_model(path) for path in paths if not path.stem.endswith("values")}
    ordered = sorted(readings, key=lambda path: readings[path].model.m + readings[path].model.n)
    first: list[Again] = []
    second: list[Intervals] = []
    print(AGAIN, flush=True)
    for place, path in enumerate(ordered):
        found, note = verified(readings[path])
        if found is None:
            print(f"{path.stem:<12}  {note}", flush=True)
            continue
        second.append(intervals(path, found, note))
        if place < SMALLEST or path.stem in LARGE:
            first.append(again(path, found, note))
            print(again_line(first[-1]), flush=True)
    if options.table:
        print("", INTERVALS, *map(intervals_line, second), sep="\n", flush=True)
    if second:
        print("", again_summary(first), intervals_summary(second), sep="\n")


if __name__ == "__main__":
    main()
