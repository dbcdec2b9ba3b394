"""What a proof comes to: frozen results whose numbers are exact."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from lpview.answer import Basis


@dataclass(frozen=True)
class ExactVector:
    """Rational numbers over one denominator: entry ``k`` is ``numerators[k] / denominator``."""

    numerators: tuple[int, ...]
    """One integer for each entry."""
    denominator: int
    """Positive; shared by all entries."""

    def __getitem__(self, k: int) -> Fraction:
        """Entry ``k`` in lowest terms."""
        return Fraction(self.numerators[k], self.denominator)

    def __len__(self) -> int:
        return len(self.numerators)


@dataclass(frozen=True)
class Effort:
    """What a proof took."""

    seconds: float
    """Elapsed time; differs from run to run."""
    steps: int
    """Bases that were solved exactly before one was optimal; 1 where the first was."""
    bits: int
    """Bits of the largest numerator or denominator of the plan and the dual values."""
    primal_violation: Fraction
    """Largest violation of a side or bound at the first basis, exactly; 0 if none."""
    dual_violation: Fraction
    """Largest price of the wrong sign at the first basis, exactly; 0 if none."""


@dataclass(frozen=True, eq=False)
class ProvedOptimal:
    """A plan and dual values that satisfy every condition exactly."""

    objective: Fraction
    """Optimal objective, offset included."""
    x: ExactVector
    """The plan, ``n`` entries."""
    y: ExactVector
    """Dual values, ``m`` entries, signs as in `lpview.model`."""
    zero_slack: NDArray[np.bool_]
    """Lines (rows, then columns) exactly at a side or bound, shape ``(m + n,)``."""
    zero_price: NDArray[np.bool_]
    """Lines whose dual value or reduced cost is exactly 0, shape ``(m + n,)``."""
    basis: Basis
    """The basis that was proved optimal."""
    effort: Effort
    """What it took."""


@dataclass(frozen=True)
class ProvedInfeasible:
    """Multipliers that no plan can satisfy."""

    y: ExactVector
    """Farkas multipliers, ``m`` entries: positive ones multiply lower sides, negative ones
    upper sides, and the sum of the rows cannot be reached within the bounds."""
    contradiction: Fraction
    """By how much not; positive."""
    effort: Effort
    """What it took."""


@dataclass(frozen=True)
class ProvedUnbounded:
    """A plan and a direction in which the objective improves for ever."""

    x: ExactVector
    """A feasible plan, ``n`` entries."""
    ray: ExactVector
    """The direction, ``n`` entries."""
    rate: Fraction
    """Change of the objective per unit of the direction."""
    effort: Effort
    """What it took."""


@dataclass(frozen=True)
class NotProved:
    """No proof was reached; what is rigorous anyway."""

    reason: str
    """Why not, in a sentence without its full stop."""
    lower: Fraction | None
    """No optimal objective is less, if there is an optimum; None for no bound."""
    upper: Fraction | None
    """No optimal objective is greater, if there is an optimum; None for no bound."""
    has_plan: bool
    """Whether an exactly feasible plan is known; otherwise the interval is conditional."""
    effort: Effort | None
    """What it took; None where nothing was solved exactly."""


Proof = ProvedOptimal | ProvedInfeasible | ProvedUnbounded | NotProved
