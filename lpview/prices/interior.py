"""Strictly feasible points (the Slater condition), of the model and of its dual.

A point is *strictly feasible* if every inequality has slack there; equality rows and fixed
columns are no inequalities. Where none exists, some inequalities are *implied equalities*:
no feasible plan has slack there. Whether a line that is tight at a known plan can have
slack is a question about directions from that plan alone (`lpview.prices.cone`).

Where an optimum exists, the optimal dual solutions are a bounded set exactly when the
equality rows are independent over the columns that are not fixed and some plan is strictly
feasible (Gauvin 1977, "A necessary and sufficient regularity condition to have bounded
multipliers in nonconvex programming", Mathematical Programming 12). The multipliers of the
implied equalities and of dependent rows are the directions in which dual solutions go on
for ever, and those are the lines whose price has no limit. A price without a limit and a
move that leaves no plan are the same thing seen from its two sides, by duality. Turned
round, the optimal plans are a bounded set exactly when nothing can move for ever without a
change of the objective, which is so when the dual has a strictly feasible solution and the
columns without bounds are independent.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from lpview.kkt import measure
from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.prices.begin import at_basis
from lpview.prices.cone import Ask, Widest, cone, widest
from lpview.prices.lines import Lines, Mask
from lpview.prices.margin import Margin, largest_margin, margin_at
from lpview.prices.results import NoPrices
from lpview.prices.tableau import Tableau
from lpview.prices.within import prices_within, values_within
from lpview.repair.certificate import without_costs
from lpview.scaling import NotRepresentableError
from lpview.warm import Lost

ROUNDING = 1e-7
"""Directions and multipliers that are off by more, scaled, show nothing."""


@dataclass(frozen=True, eq=False)
class ImpliedEqualities:
    """No plan is strictly feasible."""

    lines: Mask
    """Inequalities that no feasible plan has slack in, shape ``(m + n,)``."""
    y: Vector
    """Multipliers of the rows that prove it, shape ``(m,)``: positive for a lower side,
    negative for an upper one, any sign for an equality; at least 1 in size on ``lines``."""
    z: Vector
    """The multipliers of the columns, ``-A'y``, shape ``(n,)``."""
    total: float
    """At every feasible plan the slacks of ``lines`` times their multipliers add up to at
    most this; 0 but for rounding."""
    misplaced: float
    """Largest multiplier, scaled, on a side or bound that does not exist."""


@dataclass(frozen=True, eq=False)
class Interior:
    """What strictly feasible points there are; lines are numbered as in `lpview.kkt`."""

    strict: Margin | ImpliedEqualities
    """The strictly feasible plan with the largest margin, or what there is instead."""
    open: Mask
    """Inequalities of which neither slack nor the lack of it could be shown."""
    dependent_rows: int
    """Equality rows less their rank over the columns that are not fixed."""
    dependent: Mask
    """Equality rows and fixed columns that take part in such a dependence."""
    price_unbounded: Mask
    """Lines whose price has no limit in the set of optimal dual solutions."""
    dual_is_strict: bool
    """Whether some dual solution is strict in all its inequalities."""
    dependent_columns: int
    """Dimension of the directions in which nothing with a side or bound moves."""
    value_unbounded: Mask
    """Lines whose value has no limit in the set of optimal plans."""
    ray: Vector | None
    """A direction in which the optimal plans go on for ever, shape ``(n,)``; None if they
    are a bounded set."""

    @property
    def is_strict(self) -> bool:
        """Whether some plan is strict in all inequalities."""
        return isinstance(self.strict, Margin)

    @property
    def prices_bounded(self) -> bool:
        """Whether the optimal dual solutions are a bounded set."""
        return not self.price_unbounded.any()

    @property
    def plans_bounded(self) -> bool:
        """Whether the optimal plans are a bounded set."""
        return self.ray is None


def find_interior(found: Optimal, ask: Ask) -> Interior | NoPrices:
    """Find out what strictly feasible points a model with a checked optimum has.

    Parameters
    ----------
    found
        An answer that passed its check, with a basis.
    ask
        Solves up to three auxiliary models; what it returns is measured.
    """
    begun = at_basis(found)
    if isinstance(begun, NoPrices):
        return begun
    lines, matrix = begun
    try:
        return _interior(lines, Tableau(lines, matrix), ask)
    except NotRepresentableError as error:
        return NoPrices(f"its numbers do not fit the solver's: {error}")


def _interior(lines: Lines, tableau: Tableau, ask: Ask) -> Interior | NoPrices:
    inside = _reliable(widest(cone(lines.lp, *_tight(lines)), ask))
    if isinstance(inside, Lost):
        return NoPrices(f"the widest direction was not found: {inside.message}")
    away = _reliable(widest(cone(lines.lp, *_recession(lines)), ask))
    if isinstance(away, Lost):
        return NoPrices(f"the widest ray was not found: {away.message}")
    if away.open.any() and not away.moves.any():
        return NoPrices("within rounding it could not be settled whether optimal plans go on")
    strict = _strict(lines, inside, ask)
    if isinstance(strict, Lost):
        return NoPrices(f"within rounding it could not be settled: {strict.message}")
    dependent = prices_within(lines, tableau, lines.equal)
    free = np.isinf(lines.low) & np.isinf(lines.high)
    unheld = values_within(lines, tableau, free)
    ray = away.direction if away.moves.any() else unheld.along[lines.m :]
    # Lines that were shown to be there are counted even where a generic movement of all
    # of them together has them too small beside the largest.
    prices = inside.held | prices_within(lines, tableau, lines.equal | inside.held).lines
    values = away.moves | values_within(lines, tableau, free | away.moves).lines
    return Interior(
        strict=strict,
        open=inside.open,
        dependent_rows=dependent.dimension,
        dependent=dependent.lines,
        price_unbounded=prices,
        dual_is_strict=not away.moves.any(),
        dependent_columns=unheld.dimension,
        value_unbounded=values,
        ray=ray if ray.any() else None,
    )


def _reliable(found: Widest | Lost) -> Widest | Lost:
    if isinstance(found, Lost):
        return found
    worst = max(found.drift, found.misplaced)
    return found if worst <= ROUNDING else Lost(f"scaled residual {worst:.2g}")


def _tight(lines: Lines) -> tuple[Vector, Vector]:
    """Limits of directions from the known plan: a line at an end may only leave it."""
    return np.where(lines.at_low, 0.0, -np.inf), np.where(lines.at_high, 0.0, np.inf)


def _recession(lines: Lines) -> tuple[Vector, Vector]:
    """Limits of directions in which optimal plans go on for ever.

    A line with a price keeps its value in all optimal plans, whichever optimal dual
    solution the price is from.
    """
    stays = lines.equal | (lines.price != 0)
    low = np.where(stays | np.isfinite(lines.low), 0.0, -np.inf)
    high = np.where(stays | np.isfinite(lines.high), 0.0, np.inf)
    return low, high


def _strict(lines: Lines, inside: Widest, ask: Ask) -> Margin | ImpliedEqualities | Lost:
    lp = lines.lp
    if inside.held.any():
        proof = measure(without_costs(lp), np.zeros(lp.n), inside.y)
        # Every plan's slacks times the multipliers add up to the dual objective, negated.
        total = max(0.0, 0.0 - proof.dual_objective)
        return ImpliedEqualities(inside.held, inside.y, inside.z, total, inside.misplaced)
    if inside.open.any():
        return Lost("some inequalities have neither slack nor multipliers")
    best = largest_margin(lp, ask)
    if isinstance(best, Lost) or best.margin <= 0:
        best = _inwards(lines, inside)
    return best if best.margin > 0 else Lost("a strictly feasible plan exists but is too near")


def _inwards(lines: Lines, inside: Widest) -> Margin:
    """The known plan moved half of what the widest direction allows."""
    lp = lines.lp
    x, d = lines.value[lines.m :], inside.direction
    along = np.concatenate([lp.A @ d, d])
    room = np.where(along > 0, lines.high - lines.value, lines.value - lines.low)
    # No room is rounding: the direction leaves no end that it should keep to.
    moved = (along != 0) & (room > 0)
    far = float(np.min(room[moved] / np.abs(along[moved]), initial=1.0))
    return margin_at(lp, x + 0.5 * far * d)
