"""How long a proof takes beside the solver's own solve.

    python -m tests.benchmarks.proof FOLDER [--only WORD] [--repeats N]

Each file of the folder is solved, and what it comes to is proved from the solver's basis,
in this process; the least time of the repeats counts. The solver's time is that of its own
run, as it is recorded; a proof's is all of `prove`.

Three goals: the median ratio over files; the total of all files but the two that are long
to prove; those two by themselves. Always ends with exit status 0: figures, not a test.
"""

from __future__ import annotations

import argparse
import statistics
import sys
import time
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path

from lpview.blocks import read_model
from lpview.model import LinearProgram
from lpview.proof.prove import prove
from lpview.proof.results import Proof, ProvedOptimal
from lpview.run import Solved, SolveSettings, Unsolved, Watch
from lpview.solver import solve
from tests.benchmarks.session import goal

LONG = ("maros-r7", "pilot87")
"""Models whose plans and prices have tens of thousands of bits."""


@dataclass(frozen=True)
class Timed:
    """One model, in seconds."""

    name: str
    solver: float
    proof: float
    outcome: Proof

    @property
    def ratio(self) -> float:
        return self.proof / self.solver

    def __str__(self) -> str:
        found = self.outcome
        if not isinstance(found, ProvedOptimal):
            return f"{self.name:12} {type(found).__name__}"
        return (
            f"{self.name:12}{self.solver:9.3f}{self.proof:9.3f}{self.ratio:8.2f}"
            f"{found.effort.steps:7}{found.effort.bits:8}"
        )


def ask(lp: LinearProgram, settings: SolveSettings) -> Solved | Unsolved:
    """The solver, as a proof asks it."""
    return solve(lp, settings, Watch())


def measure(path: Path, repeats: int) -> Timed:
    """Solve and prove one file, some times."""
    solver, proofs = [], []
    for _ in range(repeats):
        # Read anew, because a model keeps what was worked out from it once.
        lp, settings = read_model(path).model, SolveSettings()
        result = ask(lp, settings)
        basis = result.answer.basis if isinstance(result, Solved) else None
        started = time.perf_counter()
        outcome = prove(lp, basis, ask, settings)
        proofs.append(time.perf_counter() - started)
        solver.append(result.run.seconds)
    return Timed(path.stem, min(solver), min(proofs), outcome)


def totals(timed: Sequence[Timed]) -> Iterator[str]:
    """Sums, and each goal with its figure."""
    short = [one for one in timed if one.name not in LONG]
    for what, some in (("all", timed), ("all but the long two", short)):
        sums = sum(one.solver for one in some), sum(one.proof for one in some)
        yield f"{what}: solver {sums[0]:.2f} s, proofs {sums[1]:.2f} s"
    proved = sum(isinstance(one.outcome, ProvedOptimal) for one in timed)
    yield f"proved optimal: {proved} of {len(timed)}"
    yield goal("median ratio", statistics.median(one.ratio for one in timed), 3)
    if short:
        ratio = sum(one.proof for one in short) / sum(one.solver for one in short)
        yield goal("total without the long two, over the solver's", ratio, 1)
    for one in timed:
        if one.name in LONG:
            yield goal(f"{one.name}, seconds", one.proof, 20)


def main(arguments: Sequence[str]) -> None:
    """Measure a folder and print what was found."""
    parser = argparse.ArgumentParser(description=__doc__, allow_abbrev=False)
    parser.add_argument("folder", type=Path)
    parser.add_argument("--only", default="", help="files whose name has this word")
    parser.add_argument("--repeats", type=int, default=1)
    options = parser.parse_args(arguments)
    paths = [p for p in sorted(options.folder.glob("*.csv")) if not p.stem.endswith("values")]
    print(f"{'model':12}{'solver':>9}{'proof':>9}{'ratio':>8}{'bases':>7}{'bits':>8}")
    timed = []
    for path in paths:
        if options.only in path.stem:
            timed.append(measure(path, options.repeats))
            print(timed[-1], flush=True)
    if timed:
        print(*totals(timed), sep="\n")


if __name__ == "__main__":
    main(sys.argv[1:])
