"""Pages for whoever decides: made here, taken apart, and the model behind them solved again."""

from __future__ import annotations

import re
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from scipy.optimize import Bounds, LinearConstraint, milp

from lpview.blocks import read_model
from lpview.examination import examine
from lpview.model import LinearProgram
from lpview.outcomes import Examination, Optimal, Request
from lpview.priced import price_page
from lpview.proof.prove import prove
from lpview.report import text
from lpview.report.summary import summary_report
from lpview.report.summary_limits import summary_lines
from lpview.run import SolveSettings
from lpview.solver import solve
from tests.labels.models import nothing_between, prices_of

ROOT = Path(__file__).parents[2]
MODELS, NETLIB = ROOT / "models", ROOT / "tests" / "data" / "netlib"

VERIFIED = (
    "It is verified: every condition of a best plan was worked out anew from the numbers of the "
    "file, and each holds to nine digits (nine decimals where its numbers are below 1).\n"
)
END = """A verified optimum is only as good as the model; local rules and licensed practice decide.
reproduce  lpview check model.csv --summary
"""


def priced_for_page(found):
    """The prices that a page asks for."""
    return price_page(found, prices_of(found), summary_lines, nothing_between)


def page(found, proof=None):
    """The page with the prices that it asks for, its sentences not broken."""
    priced = priced_for_page(found) if isinstance(found, Optimal) else None
    return text.render(summary_report(found, priced, proof))


def read(path: Path) -> Examination:
    """A model of the repository, solved and checked."""
    name = path.name
    request = Request(source=name, command=f"lpview check {name}")
    return examine(read_model(str(path)), request, solve)


def shipped(name: str) -> Examination:
    """A model that comes with the program."""
    return read(MODELS / f"{name}.csv")


def ask(lp, settings=None):
    return solve(lp, settings or SolveSettings())


def proved(lp, found=None):
    basis = None if found is None else found.answer.basis
    return prove(lp, basis, ask, SolveSettings())


def sentences_of_limits(shown: str) -> list[str]:
    return [line for line in shown.splitlines() if line.startswith("Limit ")]


# Solved again ----------------------------------------------------------------


def optimum(lp: LinearProgram, line: int, end: str, step: float) -> float | None:
    """The optimal objective with a limit moved; None without a plan.

    ``end`` is what the page calls the limit: at most, at least or exactly.
    """
    low = np.concatenate([lp.row_lower, lp.lower])
    high = np.concatenate([lp.row_upper, lp.upper])
    low[line] += step * (end != "at most")
    high[line] += step * (end != "at least")
    m, sign = lp.m, lp.sense.sign
    if (low > high).any():
        return None
    found = milp(
        sign * lp.c,
        constraints=LinearConstraint(lp.A, low[:m], high[:m]),
        bounds=Bounds(low[m:], high[m:]),
    )
    assert found.status in (0, 2)
    return sign * found.fun + lp.offset if found.status == 0 else None


# Taken apart -----------------------------------------------------------------


@dataclass(frozen=True)
class Clause:
    """What a page says of a move."""

    up: bool
    """Whether it goes up."""
    worse: float | None
    """By how much a unit makes the objective worse, as printed; None where no plan is left."""
    rate: str
    """The same as text."""
    far: float | None
    """How far, as printed; None for ever."""
    no_plan: bool
    """Whether no plan is left then."""


END_OF = re.compile(r", (at most|at least|exactly) [^:]*: ")
FAR = r"\((?:however much|for (?P<far>[\d.]+) [^,)]+(?P<end>, then no plan is left)?)\)"
ONCE = re.compile(
    r"each \S+(?: required)? (?:is worth|moves the objective by) (?P<rate>[\d.]+)[^:]*: "
)
SHORT = re.compile(r"(?P<way>more|less) (?P<verb>\w+) it " + FAR)
LONG = re.compile(
    r"each \S+ (?P<way>more|less)(?: required)? (?P<verb>changes nothing|\w+)"
    r"(?: (?:the objective by|it by))?(?: (?P<rate>[\d.]+)[^(]*)? " + FAR
)
NO_PLAN = re.compile(r"any (?P<way>more or less|more|less)(?: required)? leaves no plan")
WORSE = {"costs": 1, "worsens": 1, "earns": -1, "saves": -1, "improves": -1, "changes nothing": 0}


def clauses(sentence: str) -> tuple[str, list[Clause]]:
    """What a limit is called (at most, at least, exactly), and its moves."""
    end = END_OF.search(sentence)
    assert end is not None
    words = sentence[end.end() :]
    once = ONCE.match(words)
    found = []
    for match in (SHORT if once else LONG).finditer(words):
        rate = (once or match)["rate"] or "0"
        worse = WORSE[match["verb"]] * float(rate)
        far = None if match["far"] is None else float(match["far"])
        found.append(Clause(match["way"] == "more", worse, rate, far, bool(match["end"])))
    for match in NO_PLAN.finditer(words):
        for way in match["way"].split(" or "):
            found.append(Clause(way == "more", None, "", None, True))
    assert len(found) == 2 and {clause.up for clause in found} == {True, False}, sentence
    return end[1], found
