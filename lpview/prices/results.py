"""What is known about prices: frozen results, in the model's own sense."""

from __future__ import annotations

import enum
from dataclasses import dataclass


class Then(enum.Enum):
    """What happens at the end of a valid range."""

    RATE_CHANGES = "rate changes"
    """The optimal objective goes on at another rate."""
    INFEASIBLE = "infeasible"
    """No plan is left."""
    UNBOUNDED = "unbounded"
    """The optimal objective has no limit."""
    NEVER = "never"
    """The rate holds however far the number moves."""
    NOT_FOUND = "not found"
    """It could not be found out; the distance is one that surely holds."""


class ZeroSlack(enum.Enum):
    """Whether a side or bound is reached by the optimal plans."""

    ALWAYS = "always"
    """By every optimal plan; some optimal dual has a price there."""
    SOMETIMES = "sometimes"
    """By some optimal plans and not by others."""
    NEVER = "never"
    """By no optimal plan."""
    NOT_SETTLED = "not settled"
    """Within rounding, neither a slack nor a price could be shown."""


@dataclass(frozen=True)
class Move:
    """What one number is worth in one direction, and how far."""

    rate: float
    """Change of the optimal objective per unit increase of the number; infinite where the
    smallest move leaves no plan, or no limit."""
    distance: float
    """How far it holds, at least 0; ``inf`` exactly where it does for ever."""
    then: Then
    """What happens there."""


@dataclass(frozen=True)
class Moves:
    """The valid range of one number."""

    up: Move
    """Increasing it."""
    down: Move
    """Decreasing it; the rate is still that of an increase."""


@dataclass(frozen=True)
class LinePrices:
    """Everything about one row or column."""

    least: float
    """Least dual value or reduced cost over all optimal dual solutions; may be ``-inf``."""
    greatest: float
    """Greatest one; may be ``inf``."""
    least_value: float
    """Least row value or variable over all optimal plans; may be ``-inf``."""
    greatest_value: float
    """Greatest one; may be ``inf``."""
    lower: Moves | None
    """Of the lower side or bound; None where there is none. The two ends of an equality
    or a fixed column move together."""
    upper: Moves | None
    """Of the upper side or bound."""
    cost: Moves | None
    """Of the cost; None for rows."""
    lower_zero: ZeroSlack | None
    """Zero slack to the lower side or bound; None where there is none or the ends meet."""
    upper_zero: ZeroSlack | None
    """Zero slack to the upper side or bound."""
    price_found: bool = True
    """Whether both ends of the price interval were found; else the solver gave no usable
    answer, and they are the farthest prices seen."""
    value_found: bool = True
    """The same for the values."""

    @property
    def is_unique(self) -> bool:
        """Whether there is only one price."""
        return self.least == self.greatest


@dataclass(frozen=True)
class NoPrices:
    """Nothing can be said about the prices."""

    reason: str
    """Why, as the end of a sentence that begins with "prices were not examined:"."""
