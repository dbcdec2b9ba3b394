"""How far one number can move before the basis gives way, and what stops it there.

A side moves a nonbasic value, and the basic values follow; a cost moves a basic price, and
the nonbasic prices follow. The two are mirror images, so `Mirror` says which is meant and
everything else is written once. A move stops at the first follower that meets a limit. It
cannot be continued at the same rate if in that follower's equation nothing that is free to
move without cost pushes it back (one line that proves the distance), and it cannot be
continued at all if nothing whatever does.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

import numpy as np

from lpview.model import Vector
from lpview.prices.lines import Index, Lines, Mask
from lpview.prices.tableau import Tableau

TIE = 1e-9
"""Followers that meet a limit within this fraction of the distance meet it together."""

Directions = Callable[[Index], Iterator[tuple[Index, Vector]]]


@dataclass(frozen=True, eq=False)
class Mirror:
    """One of the two spaces; all masks and vectors have shape ``(m + n,)``."""

    followers: Index
    """Lines that follow a move."""
    directions: Directions
    """How all lines follow one unit of a moved line."""
    sign: float
    """1, or -1 where the directions are to be turned round (a cost moves against its price)."""
    room_up: Vector
    """How far each follower can rise."""
    room_down: Vector
    """How far each follower can fall."""
    answers: Directions
    """How all lines enter the equation of a follower, times -1."""
    helpers: Index
    """Lines that can push a follower back."""
    rise_free: Mask
    """Which helpers can rise without leaving the optimal face."""
    fall_free: Mask
    """Which can fall so."""
    rise: Mask
    """Which helpers can rise at all."""
    fall: Mask
    """Which can fall at all."""
    passes_up: Mask
    """Which followers may rise past their limit, at another rate."""
    passes_down: Mask
    """Which may fall past it."""


def value_mirror(lines: Lines, tableau: Tableau) -> Mirror:
    """Sides and bounds: nonbasic values move, basic values follow."""
    rise = ~lines.at_high & ~lines.basic
    fall = ~lines.at_low & ~lines.basic
    free = lines.price == 0
    return Mirror(
        followers=np.flatnonzero(lines.basic),
        directions=tableau.value_directions,
        sign=1.0,
        room_up=np.maximum(lines.high - lines.value, 0.0),
        room_down=np.maximum(lines.value - lines.low, 0.0),
        answers=tableau.price_directions,
        helpers=np.flatnonzero(~lines.basic & ~lines.equal),
        rise_free=rise & free,
        fall_free=fall & free,
        rise=rise,
        fall=fall,
        passes_up=np.zeros_like(rise),
        passes_down=np.zeros_like(rise),
    )


def price_mirror(lines: Lines, tableau: Tableau) -> Mirror:
    """Costs: basic prices move, nonbasic prices follow."""
    low, high = lines.price_limits()
    return Mirror(
        followers=np.flatnonzero(~lines.basic),
        directions=tableau.price_directions,
        sign=-1.0,
        room_up=np.maximum(high - lines.price, 0.0),
        room_down=np.maximum(lines.price - low, 0.0),
        answers=tableau.value_directions,
        helpers=np.flatnonzero(lines.basic),
        rise_free=lines.at_low,
        fall_free=lines.at_high,
        rise=np.isfinite(lines.low),
        fall=np.isfinite(lines.high),
        # A price that changes its sign names the other end of its line.
        passes_up=np.isfinite(lines.low),
        passes_down=np.isfinite(lines.high),
    )


@dataclass(frozen=True, eq=False)
class Ratios:
    """For moves down and up (first axis 0 and 1) of each of ``k`` lines."""

    distance: Vector
    """To the first follower's limit, shape ``(2, k)``; ``inf`` without one."""
    is_end: Mask
    """Whether the rate is proved to change there, or the move to end."""
    is_last: Mask
    """Whether the move is proved to end there."""
    goes_on: Mask
    """Whether it is proved to go on there, at whatever rate."""


def ratios(mirror: Mirror, moved: Index, clean: tuple[Mask, Mask]) -> Ratios:
    """Move each line on its own, both ways.

    ``clean`` are the helpers that can rise and fall from where they are (`clean_helpers`).
    """
    k = moved.size
    distance, stopper = np.full((2, k), np.inf), np.full((2, k), -1)
    upward, alone = np.zeros((2, k), bool), np.zeros((2, k), bool)
    up, down = mirror.room_up[mirror.followers], mirror.room_down[mirror.followers]
    at = slice(0, 0)
    for block, directions in mirror.directions(moved):
        at = slice(at.stop, at.stop + block.size)
        E = mirror.sign * directions[mirror.followers]
        for way, turned in ((0, -E), (1, E)):
            steps = _steps(turned, up, down)
            if not steps.size:
                continue
            first = np.argmin(steps, axis=0)
            columns = np.arange(block.size)
            least = steps[first, columns]
            distance[way, at] = least
            stopped = np.isfinite(least)
            stopper[way, at] = np.where(stopped, mirror.followers[first], -1)
            upward[way, at] = turned[first, columns] > 0
            close = steps <= least * (1 + TIE) + 1e-12
            alone[way, at] = stopped & (np.count_nonzero(close, axis=0) == 1)
    is_free = mirror.rise_free, mirror.fall_free
    is_end = _unpushed(mirror, stopper, upward, is_free)
    is_last = _unpushed(mirror, stopper, upward, (mirror.rise, mirror.fall))
    passes = (upward & mirror.passes_up[stopper]) | (~upward & mirror.passes_down[stopper])
    pushed = (stopper >= 0) & ~_unpushed(mirror, stopper, upward, clean)
    return Ratios(distance, is_end, is_last & ~passes, alone & (passes | pushed))


def clean_helpers(mirror: Mirror) -> tuple[Mask, Mask]:
    """Helpers that can rise, and fall, by some amount: no follower at its limit objects."""
    rise, fall = mirror.rise.copy(), mirror.fall.copy()
    tight = (mirror.room_up == 0) | (mirror.room_down == 0)
    followers = mirror.followers[tight[mirror.followers]]
    helpers = mirror.helpers
    for block, directions in mirror.answers(followers):
        entries = -directions[helpers]
        no_up, no_down = mirror.room_up[block] == 0, mirror.room_down[block] == 0
        up, down = entries > 0, entries < 0
        rise[helpers] &= ~((up & no_up) | (down & no_down)).any(axis=1)
        fall[helpers] &= ~((down & no_up) | (up & no_down)).any(axis=1)
    return rise, fall


def _steps(E: Vector, up: Vector, down: Vector) -> Vector:
    with np.errstate(divide="ignore", invalid="ignore"):
        size = np.abs(E)
        steps: Vector = np.where(E > 0, up[:, None] / size, down[:, None] / size)
    # A follower at its limit that does not move has room enough: any move from it is 0 / 0.
    steps[E == 0] = np.inf
    return steps


def unpushed(mirror: Mirror, followers: Index, by: tuple[Mask, Mask]) -> Mask:
    """Whether none of these helpers (that rise, that fall) moves each follower on.

    The first axis says whether it would fall (0) or rise (1); shape ``(2, k)``.
    """
    every = np.stack([followers, followers])
    upward = np.stack([np.ones(followers.size, bool), np.zeros(followers.size, bool)])
    # A rising stopper that nothing pushes back cannot fall, and the reverse.
    return _unpushed(mirror, every, upward, by)


def _unpushed(mirror: Mirror, stopper: Index, upward: Mask, by: tuple[Mask, Mask]) -> Mask:
    """Whether none of these helpers (that rise, that fall) pushes a stopper back."""
    distinct = np.unique(stopper[stopper >= 0])
    rise, fall = by[0][mirror.helpers], by[1][mirror.helpers]
    unpushed = np.ones((2, distinct.size), bool)
    at = slice(0, 0)
    for block, directions in mirror.answers(distinct):
        at = slice(at.stop, at.stop + block.size)
        entries = -directions[mirror.helpers]
        makes_rise = (entries[rise] > 0).any(axis=0) | (entries[fall] < 0).any(axis=0)
        makes_fall = (entries[rise] < 0).any(axis=0) | (entries[fall] > 0).any(axis=0)
        unpushed[0, at], unpushed[1, at] = ~makes_rise, ~makes_fall
    result = np.zeros(stopper.shape, bool)
    stopped = stopper >= 0
    where: Index = np.searchsorted(distinct, stopper[stopped])
    result[stopped] = unpushed[upward[stopped].astype(int), where]
    return result
