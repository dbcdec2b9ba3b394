"""What an examination comes to: one frozen type per outcome, and what was asked.

`Optimal` (the solver's claim with its check, which may have failed), `NoOptimum`
(infeasible or unbounded, with an accepted certificate), `NotEstablished`, `Stopped`.
"""

from __future__ import annotations

import enum
from dataclasses import dataclass, field

from lpview.answer import Answer
from lpview.basis import BasisPrices, PriceDifference
from lpview.kkt import Measurement
from lpview.labels import NO_LABELS, Labels
from lpview.marks import Marks
from lpview.model import LinearProgram
from lpview.polish import Origin
from lpview.reading import Notes
from lpview.repair.search import Infeasible, Unbounded
from lpview.run import SolverRun, SolveSettings
from lpview.verdict import Verdict


class SecondRoute(enum.Enum):
    """Whether the rebuilt dual is solved as a model of its own."""

    IF_QUICK = "if quick"
    """At most as many iterations as the primal took: the same on every machine."""
    ALWAYS = "always"
    """Without a limit of its own."""
    NEVER = "never"
    """Not at all."""


@dataclass(frozen=True)
class Request:
    """What was asked for, and how to ask again."""

    source: str
    """The model as the person named it."""
    command: str
    """A command that reproduces the report."""
    tolerance: float = 1e-9
    """Largest scaled residual that passes."""
    zero: float = 1e-9
    """Scaled size up to which a slack or a price counts as zero."""
    solve: SolveSettings = field(default_factory=SolveSettings)
    """What is asked of the solver; its time limit is that of the whole command."""
    second_route: SecondRoute = SecondRoute.IF_QUICK
    """Whether the rebuilt dual is solved too."""


@dataclass(frozen=True)
class Head:
    """What every outcome has."""

    model: LinearProgram
    """The model as read."""
    notes: Notes
    """What reading it noticed."""
    sha256: str
    """SHA-256 of the model's canonical blocks, in hexadecimal."""
    request: Request
    """What was asked for."""
    run: SolverRun
    """The solver's run and claim."""
    labels: Labels = NO_LABELS
    """Labels, units and groups of the lines."""


@dataclass(frozen=True)
class DualSolved:
    """The rebuilt dual was solved as its own model."""

    objective: float
    """Its optimal objective, by its own primal objective."""
    agrees: bool
    """Whether that is the primal objective within the tolerance, scaled."""
    difference: PriceDifference
    """Its dual values against those of the answer."""
    seconds: float
    """Elapsed time of its run."""


@dataclass(frozen=True)
class DualNotSolved:
    """The rebuilt dual was not solved."""

    reason: str
    """Why, as the end of a sentence that begins with "not done:"."""


@dataclass(frozen=True)
class BasisRoute:
    """Prices recomputed from the basis, against the solver's own."""

    prices: BasisPrices
    """What the basis fixes."""
    difference: PriceDifference
    """Against the solver's own dual values."""


@dataclass(frozen=True)
class NoBasisRoute:
    """There was no basis to recompute prices from."""

    reason: str
    """Why, as the end of a sentence that begins with "not done:"."""


@dataclass(frozen=True)
class Rounded:
    """The plan checked again at the digits that a report prints."""

    digits: int
    """Significant digits kept."""
    absolute: float
    """Size of the violation on its worst line, in that line's unit."""
    scaled: float
    """The same, scaled; the largest of all lines."""
    line: int | None
    """That line, numbered as in `lpview.kkt`; None where nothing is violated."""


@dataclass(frozen=True)
class Optimal:
    """The solver claims an optimum; here is the check of its answer."""

    head: Head
    """What was asked and run."""
    answer: Answer
    """The answer that was checked."""
    origin: Origin
    """Whether the answer is the solver's own or had its rounding taken out."""
    measurement: Measurement
    """Residuals, slacks, prices, objectives."""
    verdicts: tuple[Verdict, ...]
    """One per condition."""
    marks: Marks
    """Flags and spine marks of every line."""
    basis_route: BasisRoute | NoBasisRoute
    """First independent route to the prices."""
    dual_route: DualSolved | DualNotSolved
    """Second independent route to the prices."""
    rounded: Rounded
    """The plan at the printed digits."""

    @property
    def passed(self) -> bool:
        """Whether every condition passed; one that holds by definition is left out."""
        return all(verdict.passed is not False for verdict in self.verdicts)


@dataclass(frozen=True)
class NoOptimum:
    """Infeasible or unbounded, with a certificate that the check accepted."""

    head: Head
    """What was asked and run."""
    certificate: Infeasible | Unbounded
    """The accepted certificate."""


@dataclass(frozen=True)
class NotEstablished:
    """The solver's claim could not be confirmed."""

    head: Head
    """What was asked and run."""
    reason: str
    """Why not, in a sentence."""


@dataclass(frozen=True)
class Stopped:
    """A limit or a person ended the work before there was a result."""

    head: Head
    """What was asked and run."""


Examination = Optimal | NoOptimum | NotEstablished | Stopped
