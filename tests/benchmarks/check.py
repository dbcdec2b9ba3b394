"""How long `lpview check` takes beside a bare script that only solves.

    python -m tests.benchmarks.check FOLDER [--repeats N] [--only WORD]

For each file of the folder the two programs run in turn as whole processes, so that
a busy machine is busy for both; a ratio compares neighbours, and the median counts.
Elapsed time is what the goals are about; the ratio of processor time beside it
("process") is what other work on the machine disturbs least.

Three questions, with a goal each:

1. Whole processes: lpview over the script, median and 90th percentile over files.
2. The ten largest files together: elapsed time of lpview less the solver's own run
   (JSON's ``solve_seconds``, of the same process), over the solver's own run.
3. Interpreter start and imports taken off: either program answers a two-line model
   first and is then timed on the file, inside one process; files above 50 ms.

Always ends with exit status 0: figures, not a test.
"""

from __future__ import annotations

import argparse
import json
import os
import re
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
BARE = [sys.executable, "tests/benchmarks/bare.py"]
LPVIEW = [sys.executable, "-m", "lpview", "check", "--no-second-route"]
INSIDE = [sys.executable, "-m", "tests.benchmarks.check", "--inside"]
WARM_UP = """[c],maximize
column,cost
x,1
[A]
row,column,coefficient
r,x,1
[b]
row,relation,rhs
r,<=,1
"""

ENVIRONMENT = {name: os.environ[name] for name in os.environ if name != "PYTHONDONTWRITEBYTECODE"}
"""An installed package is compiled once; so are these programs, by their first run."""

LARGEST = 10
"""Files of the second question."""
LONG_SOLVE = 0.05
"""Seconds of solving from which a file counts for the third question."""
PATIENCE = 20.0
"""Seconds after which a file is not run again, once it has run three times."""


@dataclass
class Runs:
    """Timings of one file, in seconds; ratios are lpview over the bare script."""

    path: Path
    lpview: list[float] = field(default_factory=list)
    bare: list[float] = field(default_factory=list)
    processor: list[float] = field(default_factory=list)
    """Ratios of processor time."""
    solver: list[float] = field(default_factory=list)
    """The solver's own run, in runs that print JSON."""
    rest: list[float] = field(default_factory=list)
    """Everything else in the same runs."""
    inside: list[float] = field(default_factory=list)
    """Ratios without interpreter start and imports."""
    inside_processor: list[float] = field(default_factory=list)
    """The same for processor time."""
    objectives: tuple[float, float] = (0.0, 0.0)

    @property
    def ratio(self) -> float:
        """Median of the ratios of neighbouring runs."""
        return statistics.median(a / b for a, b in zip(self.lpview, self.bare, strict=True))

    @property
    def agree(self) -> bool:
        """Whether both programs found the same optimum, to the solvers' tolerance."""
        ours, bare = self.objectives
        return abs(ours - bare) <= 1e-6 * max(1.0, abs(bare))


@dataclass(frozen=True)
class Process:
    """One process that has ended."""

    seconds: float
    processor: float
    output: bytes


def run(command: Sequence[str], *more: str) -> Process:
    """Run a process to its end; exit status 1 is an answer that failed its check."""
    before, started = os.times(), time.perf_counter()
    done = subprocess.run(
        [*command, *more], cwd=ROOT, env=ENVIRONMENT, stdout=subprocess.PIPE, check=False
    )
    seconds, after = time.perf_counter() - started, os.times()
    if done.returncode not in (0, 1):
        raise SystemExit(f"{' '.join(done.args)} ended with exit status {done.returncode}")
    used = after.children_user - before.children_user
    return Process(seconds, used + after.children_system - before.children_system, done.stdout)


def in_turn(repeat: int, *programs: Callable[[], Process]) -> list[Process]:
    """Run two programs, each of them first every other time."""
    step = -1 if repeat % 2 else 1
    return [program() for program in programs[::step]][::step]


def measure(path: Path, is_large: bool, repeats: int) -> Runs:
    """All timings of one file."""
    runs, started = Runs(path), time.perf_counter()
    run(BARE, str(path))  # brings file and libraries into the machine's memory
    for repeat in range(repeats):
        if repeat >= 3 and time.perf_counter() - started > PATIENCE:
            break
        ours, bare = in_turn(repeat, lambda: run(LPVIEW, str(path)), lambda: run(BARE, str(path)))
        runs.lpview.append(ours.seconds)
        runs.bare.append(bare.seconds)
        runs.processor.append(ours.processor / bare.processor)
        if repeat == 0 or is_large:
            as_json = run(LPVIEW, "--format", "json", str(path))
            report = json.loads(as_json.output)
            runs.solver.append(report["timing"]["solve_seconds"])
            runs.rest.append(as_json.seconds - runs.solver[-1])
            runs.objectives = report["objective"]["primal"], float(bare.output)
        if runs.solver[0] > LONG_SOLVE:
            programs = (
                lambda: run(INSIDE, "lpview", str(path)),
                lambda: run(INSIDE, "bare", str(path)),
            )
            times = [inside_times(one.output) for one in in_turn(repeat, *programs)]
            runs.inside.append(times[0][0] / times[1][0])
            runs.inside_processor.append(times[0][1] / times[1][1])
    return runs


def inside_times(output: bytes) -> tuple[float, float]:
    """What `inside` printed last: elapsed and processor time."""
    elapsed, processor = re.findall(rb"^inside (\S+) (\S+)$", output, re.MULTILINE)[-1]
    return float(elapsed), float(processor)


def inside(program: str, path: str) -> None:
    """Time one program on a file, in this process, after a model that loads everything."""
    if program == "lpview":
        from lpview.cli import main

        def answer(model: str) -> None:
            main(["check", "--no-second-route", model])
    else:
        from tests.benchmarks import bare

        def answer(model: str) -> None:
            print(bare.answer(model), flush=True)

    with tempfile.TemporaryDirectory() as folder:
        warm_up = Path(folder) / "model.csv"
        warm_up.write_text(WARM_UP)
        answer(str(warm_up))
    started, used = time.perf_counter(), time.process_time()
    answer(path)
    print(f"inside {time.perf_counter() - started} {time.process_time() - used}", flush=True)


def table_line(runs: Runs) -> str:
    """One file's line of the table."""
    both = (runs.inside, runs.inside_processor)
    inside_ratios = "".join(f"{statistics.median(r):8.2f}" for r in both if r)
    numbers = (statistics.median(runs.lpview), statistics.median(runs.bare), runs.ratio)
    solver, rest = statistics.median(runs.solver), statistics.median(runs.rest)
    return (
        f"{runs.path.stem:<12}{runs.path.stat().st_size / 1024:8.0f}"
        + "".join(f"{number:9.3f}" for number in numbers[:2])
        + f"{numbers[2]:7.2f}{statistics.median(runs.processor):8.2f}"
        + f"{solver:9.3f}{rest:9.3f}{inside_ratios}"
        + ("" if runs.agree else f"  objectives differ: {runs.objectives}")
    )


HEADER = (
    f"{'file':<12}{'kB':>8}{'lpview':>9}{'bare':>9}{'ratio':>7}{'process':>8}"
    f"{'solver':>9}{'rest':>9}{'inside':>8}{'process':>8}"
)


def summary(found: Sequence[Runs]) -> list[str]:
    """The answers to the three questions."""
    ratios = sorted(runs.ratio for runs in found)
    processor = sorted(statistics.median(runs.processor) for runs in found)
    large = largest(found)
    solver = sum(statistics.median(runs.solver) for runs in large)
    rest = sum(statistics.median(runs.rest) for runs in large)
    inside_ratios = [statistics.median(runs.inside) for runs in found if runs.inside]
    inside_processor = [
        statistics.median(runs.inside_processor) for runs in found if runs.inside_processor
    ]
    lines = [
        f"whole process, {len(ratios)} files: median ratio {statistics.median(ratios):.2f} "
        f"(goal 1.2), 90th percentile {percentile(ratios, 90):.2f} (goal 1.5)",
        f"processor time: median ratio {statistics.median(processor):.2f}, "
        f"90th percentile {percentile(processor, 90):.2f}",
        f"the {len(large)} largest together: everything else {rest:.2f} s, solver {solver:.2f} s, "
        f"ratio {rest / solver:.2f} (goal 0.5)",
    ]
    if inside_ratios:
        lines.append(
            f"without start and imports, {len(inside_ratios)} files that solve for more than "
            f"{1000 * LONG_SOLVE:.0f} ms: median ratio {statistics.median(inside_ratios):.2f} "
            f"(goal 1.5), processor time {statistics.median(inside_processor):.2f}"
        )
    return lines


def percentile(ordered: Sequence[float], percent: int) -> float:
    """The nearest-rank percentile of ascending numbers."""
    return ordered[max(0, -(-percent * len(ordered) // 100) - 1)]


def largest(found: Sequence[Runs]) -> list[Runs]:
    """The files of the second question."""
    return sorted(found, key=lambda runs: -runs.path.stat().st_size)[:LARGEST]


def main() -> None:
    """Print the table and the summary."""
    parser = argparse.ArgumentParser(prog="python -m tests.benchmarks.check")
    parser.add_argument("folder", nargs="?", type=Path)
    parser.add_argument("--repeats", type=int, default=5, help="runs of each file (default 5)")
    parser.add_argument("--only", default="", metavar="WORD", help="files with WORD in their name")
    parser.add_argument("--inside", nargs=2, metavar=("PROGRAM", "FILE"), help=argparse.SUPPRESS)
    options = parser.parse_args()
    if options.inside:
        inside(*options.inside)
        return
    if options.folder is None:
        parser.error("which folder?")
    paths = [path.resolve() for path in options.folder.glob("*.csv") if options.only in path.name]
    paths.sort(key=lambda path: path.stat().st_size)
    print(HEADER, flush=True)
    found = []
    for place, path in enumerate(paths):
        is_large = place >= len(paths) - LARGEST
        found.append(measure(path, is_large, max(options.repeats, 1)))
        print(table_line(found[-1]), flush=True)
    print("", *summary(found), sep="\n")


if __name__ == "__main__":
    main()
