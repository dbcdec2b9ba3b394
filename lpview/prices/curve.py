"""The value curve: the optimal objective as a function of one number of the model.

Minimizing, it is convex and piecewise linear in a side or bound and concave in a cost;
maximizing, the reverse. `lpview.prices.walk` finds it.
"""

from __future__ import annotations

import bisect
import enum
import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from itertools import pairwise

import numpy as np

from lpview.model import LinearProgram, Sense
from lpview.prices.number import Number, Part

SAME = 1e-9
"""Rates, and places along the curve, that differ by no more than this, scaled, are one."""

JOINED = 1e-7
"""Largest scaled difference between a piece and the objective solved for at its end."""


class Beyond(enum.Enum):
    """What lies beyond an end of what was found."""

    GOES_ON = "goes on"
    """The curve goes on; nobody asked how."""
    FOR_EVER = "for ever"
    """The rate of the last piece holds however far the number moves."""
    INFEASIBLE = "infeasible"
    """No plan is left."""
    UNBOUNDED = "unbounded"
    """The objective has no limit."""
    STOPPED = "stopped"
    """The time limit, or a person, ended the work here."""
    NOT_FOUND = "not found"
    """It could not be found out."""

    @property
    def is_end(self) -> bool:
        """Whether there is no optimum beyond."""
        return self in (Beyond.INFEASIBLE, Beyond.UNBOUNDED)


@dataclass(frozen=True)
class Piece:
    """A part of the curve with one rate."""

    start: float
    """Where it begins; ``-inf`` before it is cut to a span."""
    end: float
    """Where it ends, ``>= start``; ``inf`` before it is cut to a span."""
    rate: float
    """Change of the optimal objective, as stated, per unit increase of the number."""
    anchor: float
    """A place on the piece whose objective was solved for, or follows from the last one."""
    objective: float
    """The optimal objective there."""

    def at(self, place: float) -> float:
        """The optimal objective at a place of this piece."""
        change = self.rate * (place - self.anchor)
        return without_noise(self.objective + change, change)


@dataclass(frozen=True)
class Breakpoint:
    """Where two pieces meet."""

    at: float
    """The number there."""
    objective: float
    """The optimal objective there."""
    below: float
    """Rate of the piece below."""
    above: float
    """Rate of the piece above."""


@dataclass(frozen=True)
class Recorded:
    """One line at one place of the curve, over all optimal answers there."""

    least_value: float
    """Least row value or variable; may be ``-inf``."""
    greatest_value: float
    """Greatest one; may be ``inf``."""
    least_price: float
    """Least dual value or reduced cost; may be ``-inf``."""
    greatest_price: float
    """Greatest one; may be ``inf``."""

    @property
    def value(self) -> tuple[float, float]:
        """Least and greatest value."""
        return self.least_value, self.greatest_value

    @property
    def price(self) -> tuple[float, float]:
        """Least and greatest price."""
        return self.least_price, self.greatest_price

    @property
    def is_unique(self) -> bool:
        """Whether there is only one value and only one price."""
        return self.least_value == self.greatest_value and self.least_price == self.greatest_price


@dataclass(frozen=True)
class Curve:
    """The value curve of one number over a span."""

    lp: LinearProgram
    """The model, with the number as it stands."""
    number: Number
    """What moves."""
    now: float
    """The number as it stands; infinite for a bound that is not there."""
    objective: float
    """The optimal objective there."""
    span: tuple[float, float]
    """Least and greatest number looked at."""
    pieces: tuple[Piece, ...]
    """From below to above, each from where the last one ended; empty where the number
    cannot move at all."""
    below: Beyond
    """What lies below the first piece."""
    above: Beyond
    """What lies above the last piece."""
    joints: tuple[float, ...]
    """For each end of a piece that was solved again and checked: the scaled difference
    between the objective there and that of the piece."""
    unsolved: int
    """Breakpoints without a checked answer of their own: two pieces meet there."""
    stopped: bool
    """Whether the time limit, or a person, ended the work before it was complete."""
    steps: int = 0
    """Equal steps of the span whose ends are looked at too (`places`); 0 for none."""
    recorded: Mapping[int, Mapping[float, Recorded | None]] = field(default_factory=dict)
    """By line and by place; None where no checked answer was found."""

    @property
    def ends(self) -> tuple[float, float]:
        """Where the curve begins and ends."""
        if not self.pieces:
            return self.now, self.now
        return self.pieces[0].start, self.pieces[-1].end

    @property
    def breakpoints(self) -> tuple[Breakpoint, ...]:
        """Where pieces meet, from below to above."""
        return tuple(
            Breakpoint(piece.end, _meeting(piece, after), piece.rate, after.rate)
            for piece, after in pairwise(self.pieces)
        )

    @property
    def should_be_convex(self) -> bool:
        """Whether theory demands a convex curve; a concave one otherwise."""
        return (self.lp.sense is Sense.MINIMIZE) == (self.number.part is not Part.COST)

    @property
    def bends_rightly(self) -> bool:
        """Whether the rates rise (convex) or fall (concave) throughout, up to rounding."""
        sign = 1.0 if self.should_be_convex else -1.0
        return all(
            sign * (point.above - point.below) >= -SAME * size(point.above, point.below)
            for point in self.breakpoints
        )

    @property
    def is_joined(self) -> bool:
        """Whether every piece ends where the next answer was found."""
        return all(gap <= JOINED for gap in self.joints)

    def at(self, place: float) -> float | None:
        """The optimal objective at a place; None outside of the curve."""
        found = self.piece_of(place)
        if found is not None:
            return found.at(place)
        return self.objective if place == self.now else None

    def piece_of(self, place: float) -> Piece | None:
        """The piece that a place lies on, the upper one at a breakpoint."""
        low, high = self.ends
        if not self.pieces or not low <= place <= high:
            return None
        ends = [piece.end for piece in self.pieces[:-1]]
        return self.pieces[bisect.bisect_right(ends, place)]

    def rates(self, place: float) -> tuple[float | None, float | None]:
        """Rates just below and just above a place; None where the curve does not go."""
        below = next((p.rate for p in self.pieces if p.start < place <= p.end), None)
        above = next((p.rate for p in self.pieces if p.start <= place < p.end), None)
        low, high = self.ends
        if place == low and self.below is Beyond.FOR_EVER:
            below = above
        if place == high and self.above is Beyond.FOR_EVER:
            above = below
        return below, above

    @cached_property
    def places(self) -> tuple[float, ...]:
        """Ends, breakpoints, the number as it stands, and equal steps over the span."""
        low, high = self.ends
        near = SAME * size(low, high)
        certain = list(_apart([low, *(point.at for point in self.breakpoints), high], near))
        wanted = np.linspace(*self.span, self.steps + 1).tolist() if self.steps else []
        for others in ([self.now], wanted):
            known = np.array(certain)
            certain += [
                place
                for place in others
                if low <= place <= high and np.abs(known - place).min() > near
            ]
        if self.steps:
            # Prices at a breakpoint are those of no piece: each piece has a place inside.
            within = [self.piece_of(place) for place in certain]
            inside = {
                piece
                for place, piece in zip(certain, within, strict=True)
                if piece is not None and piece.start < place < piece.end
            }
            left = [piece for piece in self.pieces if piece not in inside]
            certain += [piece.start / 2 + piece.end / 2 for piece in left]
        return tuple(sorted(certain))


class Why(enum.Enum):
    """Why there is no value curve."""

    NO_OPTIMUM = "no optimum"
    """There is no optimum in the whole span, with a certificate."""
    ONE_POINT = "one point"
    """The span has one number at most that has an optimum."""
    STOPPED = "stopped"
    """The time limit, or a person, ended the work."""
    NOT_FOUND = "not found"
    """No verified answer, or no prices, to begin with."""


@dataclass(frozen=True)
class NoCurve:
    """There is no value curve."""

    why: Why
    """Why, for a program."""
    reason: str
    """Why, in a sentence that begins with a small letter."""


def without_noise(total: float, part: float) -> float:
    """A sum, exactly 0 where it is what rounding leaves when two numbers cancel."""
    return 0.0 if abs(total) <= 1e-13 * abs(part) else total


def size(*numbers: float) -> float:
    """What differences of these numbers are judged against: the largest, at least 1."""
    return max(1.0, *map(abs, numbers))


def is_same(first: float, second: float) -> bool:
    """Whether two rates or places differ by rounding only."""
    if math.isinf(first) or math.isinf(second):
        return first == second
    return abs(first - second) <= SAME * size(first, second)


def _meeting(piece: Piece, after: Piece) -> float:
    """The objective where two pieces meet, the one solved for if there is one."""
    return after.objective if after.anchor == piece.end else piece.at(piece.end)


def _apart(places: list[float], near: float) -> Iterator[float]:
    last = -math.inf
    for place in places:
        if place - last > near:
            yield place
            last = place
