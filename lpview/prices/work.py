"""Everything about prices for one verified answer, found when asked for."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np

from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.prices.begin import at_basis
from lpview.prices.intervals import GREATEST, LEAST, ZERO, Face
from lpview.prices.lines import Lines, Mask
from lpview.prices.partition import GivenUpError, Partition, partition
from lpview.prices.polyhedron import price_shape, value_shape
from lpview.prices.ranges import Ranges
from lpview.prices.results import LinePrices, Move, Moves, NoPrices, ZeroSlack
from lpview.prices.tableau import Tableau
from lpview.scaling import NotRepresentableError
from lpview.warm import WarmMaker


@dataclass(frozen=True, eq=False)
class PriceRay:
    """A direction in which optimal prices may be followed for ever."""

    y: Vector
    """Change of the dual values, shape ``(m,)``."""
    z: Vector
    """Change of the reduced costs, ``-A'y``, shape ``(n,)``."""


@dataclass(frozen=True, eq=False)
class PricePoint:
    """An optimal dual solution that attains one end of a price interval."""

    y: Vector
    """Dual values, shape ``(m,)``."""
    z: Vector
    """Reduced costs, shape ``(n,)``."""
    ray: PriceRay | None
    """For an infinite end: the direction in which the price goes on."""


@dataclass(frozen=True, eq=False)
class PlanPoint:
    """An optimal plan that attains one end of a value interval."""

    x: Vector
    """The plan, shape ``(n,)``."""
    ray: Vector | None
    """For an infinite end: the direction in which the plan goes on, shape ``(n,)``."""


class Prices:
    """What is true of the optimal value around one verified answer.

    Lines are numbered as in `lpview.kkt`; all numbers are in the model's own sense.
    Nothing here changes but what is already known.
    """

    def __init__(self, lines: Lines, tableau: Tableau, found: Partition, warm: WarmMaker) -> None:
        self.lines, self.partition, self.warm = lines, found, warm
        self._sign = lines.lp.sense.sign
        limits = lines.price_limits()
        self.price_limits = _only(found.has_price, limits, np.zeros_like(lines.price))
        self._prices = Face(
            price_shape(lines, found.price_moves),
            lines.price,
            self.price_limits,
            found.price_moves,
            lines.price_size,
            warm,
        )
        stays = found.has_slack | lines.equal
        self._plans = Face(
            value_shape(lines, found.value_moves),
            lines.value,
            _only(stays, lines.value_limits(lines.price), lines.value),
            found.value_moves,
            lines.value_size,
            warm,
        )
        self._ranges = Ranges(lines, tableau, self._prices, self._plans, warm)
        self._found: dict[int, LinePrices] = {}

    @property
    def plan_dimension(self) -> int:
        """Dimension of the set of optimal plans; 0 where there is only one."""
        return self.partition.plan_dimension

    @property
    def price_dimension(self) -> int:
        """Dimension of the set of optimal dual solutions; 0 where there is only one."""
        return self.partition.price_dimension

    @property
    def examined(self) -> Mapping[int, LinePrices]:
        """What is known so far, by line."""
        return MappingProxyType(self._found)

    def line(self, line: int) -> LinePrices:
        """Everything about one line; found now if it has not been yet."""
        if line not in self._found:
            self._found[line] = self._examine(line)
        return self._found[line]

    def interval(self, line: int) -> tuple[float, float]:
        """Least and greatest price of a line over all optimal dual solutions."""
        least, greatest = _joined(self._prices.interval(line), self.lines.price_size[line])
        return (least, greatest) if self._sign > 0 else (0.0 - greatest, 0.0 - least)

    def value_interval(self, line: int) -> tuple[float, float]:
        """Least and greatest value of a line over all optimal plans."""
        return _joined(self._plans.interval(line), self.lines.value_size[line])

    def intervals(self, between: Callable[[], None] = lambda: None) -> None:
        """Find the price intervals of all lines."""
        self._prices.ask_all(between)

    def everything(self, between: Callable[[], None] = lambda: None) -> None:
        """Find everything; ``between`` is called after each step and may raise."""
        self._prices.ask_all(between)
        self._plans.ask_all(between)
        self._ranges.prepare()
        for line in range(self.lines.value.size):
            self.line(line)
            between()

    def price_at(self, line: int, greatest: bool) -> PricePoint:
        """An optimal dual solution where a price is least or greatest (model's own sense)."""
        self._prices.interval(line)
        which = GREATEST if greatest == (self._sign > 0) else LEAST
        m, ends = self.lines.m, self._prices.ends
        point, ray = self._sign * ends.at(which, line), ends.ray(which, line)
        along = None if ray is None else PriceRay(self._sign * ray[:m], self._sign * ray[m:])
        return PricePoint(point[:m] + 0.0, point[m:] + 0.0, along)

    def plan_at(self, line: int, greatest: bool) -> PlanPoint:
        """An optimal plan where a value is least or greatest."""
        self._plans.interval(line)
        which = GREATEST if greatest else LEAST
        m, ends = self.lines.m, self._plans.ends
        ray = ends.ray(which, line)
        return PlanPoint(ends.at(which, line)[m:], None if ray is None else ray[m:])

    def _examine(self, line: int) -> LinePrices:
        least, greatest = self.interval(line)
        low, high = self.value_interval(line)
        zero = (None, None) if self.lines.equal[line] else self._zero_slack(line, low, high)
        return LinePrices(
            least=least,
            greatest=greatest,
            least_value=low,
            greatest_value=high,
            lower=self._side(line, False),
            upper=self._side(line, True),
            cost=self._cost(line) if line >= self.lines.m else None,
            lower_zero=zero[0],
            upper_zero=zero[1],
            price_found=not self._prices.ends.lost[line],
            value_found=not self._plans.ends.lost[line],
        )

    def _side(self, line: int, is_high: bool) -> Moves | None:
        if not np.isfinite((self.lines.high if is_high else self.lines.low)[line]):
            return None
        return Moves(*(self._stated(self._ranges.side(line, is_high, up)) for up in (True, False)))

    def _stated(self, move: Move) -> Move:
        return Move(self._sign * move.rate + 0.0, move.distance, move.then)

    def _cost(self, line: int) -> Moves:
        # Maximizing, a cost that rises is one that falls in the turned model.
        up, down = (self._ranges.cost(line, up) for up in (self._sign > 0, self._sign < 0))
        return Moves(up, down)

    def _zero_slack(
        self, line: int, least: float, greatest: float
    ) -> tuple[ZeroSlack | None, ZeroSlack | None]:
        lines, found = self.lines, self.partition
        near = ZERO * lines.value_size[line]
        answers: list[ZeroSlack | None] = []
        for end, at_end, nearest in (
            (lines.low[line], lines.at_low[line], least),
            (lines.high[line], lines.at_high[line], greatest),
        ):
            if not np.isfinite(end):
                answers.append(None)
            elif not found.settled[line] and at_end:
                answers.append(ZeroSlack.NOT_SETTLED)
            elif not found.has_slack[line]:
                answers.append(ZeroSlack.ALWAYS if at_end else ZeroSlack.NEVER)
            else:
                answers.append(
                    ZeroSlack.SOMETIMES if abs(nearest - end) <= near else ZeroSlack.NEVER
                )
        return answers[0], answers[1]


def work_out(found: Optimal, warm: WarmMaker) -> Prices | NoPrices:
    """Prepare the prices of a verified answer.

    Parameters
    ----------
    found
        An answer that passed its check, with a basis.
    warm
        Opens models that stay open; what it says of a vertex or a ray is used as such,
        and each can be checked (`Prices.price_at`, `Prices.plan_at`).
    """
    begun = at_basis(found)
    if isinstance(begun, NoPrices):
        return begun
    lines, matrix = begun
    tableau = Tableau(lines, matrix)
    try:
        return Prices(lines, tableau, partition(lines, tableau, warm), warm)
    except GivenUpError as error:
        return NoPrices(str(error))
    except NotRepresentableError as error:
        return NoPrices(f"its numbers do not fit the solver's: {error}")


def _joined(interval: tuple[float, float], size: float) -> tuple[float, float]:
    """An interval whose ends are equal where they differ by rounding only."""
    least, greatest = interval
    finite = np.isfinite(least) and np.isfinite(greatest)
    return (least, least) if finite and greatest - least <= ZERO * size else interval


def _only(where: Mask, limits: tuple[Vector, Vector], elsewhere: Vector) -> tuple[Vector, Vector]:
    """Limits on some lines, and a single number on the others."""
    low, high = limits
    return np.where(where, low, elsewhere), np.where(where, high, elsewhere)
