"""Polyhedra and ratios that are worked out when first asked for, and remember answers."""

from __future__ import annotations

import math
from functools import cached_property

import numpy as np

from lpview.model import Vector
from lpview.prices.intervals import ZERO
from lpview.prices.lines import Index, Mask
from lpview.prices.polyhedron import End, Polyhedron, Shape
from lpview.prices.ratios import Mirror, Ratios, clean_helpers, ratios, unpushed
from lpview.warm import Lost, WarmMaker

SWEEPS = 8
"""At most so many solves look for points beyond many levels at once."""


FAR = 1e-2
"""Beyond a level means at most so far beyond it, scaled."""


class OneRatio:
    """What the basis says about one move."""

    def __init__(self, found: Ratios, way: int, k: int) -> None:
        self.distance = float(found.distance[way, k])
        self.is_end = bool(found.is_end[way, k])
        self.is_last = bool(found.is_last[way, k])
        self.goes_on = bool(found.goes_on[way, k])


class KnownRatios:
    """Ratios of all lines read so far."""

    def __init__(self, mirror: Mirror) -> None:
        self._mirror = mirror
        self._known: dict[int, tuple[Ratios, int]] = {}

    def read(self, lines: Index) -> None:
        """Work out those of these lines that are not known yet, all at once."""
        new = np.array([k for k in lines.tolist() if k not in self._known], dtype=np.intp)
        if new.size:
            found = ratios(self._mirror, new, self.clean)
            self._known.update({k: (found, at) for at, k in enumerate(new.tolist())})

    @cached_property
    def clean(self) -> tuple[Mask, Mask]:
        """Helpers that can rise, and fall, from where they are."""
        return clean_helpers(self._mirror)

    @cached_property
    def _beyond(self) -> tuple[Mask, Mask]:
        """Followers that surely cannot, and surely can, fall (0) and rise (1) from where
        they are; shapes ``(2, m + n)``."""
        mirror = self._mirror
        never = np.zeros((2, mirror.rise.size), bool)
        surely = never.copy()
        never[:, mirror.followers] = unpushed(mirror, mirror.followers, (mirror.rise, mirror.fall))
        surely[:, mirror.followers] = ~unpushed(mirror, mirror.followers, self.clean)
        return never, surely

    def beyond(self, follower: int, up: bool) -> bool | None:
        """Whether a follower can go beyond where it is; None where the basis does not say."""
        never, surely = self._beyond
        if surely[int(up), follower]:
            return True
        return False if never[int(up), follower] else None

    def of(self, line: int, up: bool) -> OneRatio:
        """One line moved one way."""
        self.read(np.array([line]))
        found, at = self._known[line]
        return OneRatio(found, int(up), at)


class Asked:
    """A polyhedron opened when first asked, with what its points have shown."""

    def __init__(
        self,
        shape: Shape,
        base: Vector,
        feasible: tuple[Vector, Vector],
        size: Vector,
        warm: WarmMaker,
    ) -> None:
        self._shape, self._base, self._size, self._warm = shape, base, size, warm
        self._polyhedron: Polyhedron | None = None
        self._low, self._high = self._feasible = feasible
        self._least, self._greatest = base.copy(), base.copy()

    def reach(
        self, line: int, up: bool, limits: tuple[Vector, Vector], released: tuple[float, float]
    ) -> float | None:
        """How far a line goes within ``limits``, its own ones released."""
        self._change(limits)
        found = self._ask(line, up, released)
        return None if found is None else self._reach(found, line, up)

    def _change(self, limits: tuple[Vector, Vector]) -> None:
        low, high = limits
        if self._polyhedron is not None:
            other = np.flatnonzero((low != self._low) | (high != self._high))
            if other.size:
                self._polyhedron.limit(other, low[other], high[other])
        self._low, self._high = low, high

    def is_beyond(self, line: int, up: bool, level: float, released: bool) -> bool | None:
        """Whether a line can go beyond a level within the feasible limits.

        ``released`` says whether its own limits are not to count. None where it was not
        found out. A little beyond is enough, and soon reached from where the last question
        ended.
        """
        size = max(1.0, abs(level), float(self._size[line]))
        near, far = ZERO * size, FAR * size
        if not released and self._seen_beyond(line, up, level, near):
            return True
        self._change(self._feasible)
        own = (-math.inf, math.inf) if released else self._feasible_of(line)
        base = float(self._base[line])
        span = (
            (min(base, level) if released else own[0], min(own[1], max(base, level + far)))
            if up
            else (max(own[0], min(base, level - far)), max(base, level) if released else own[1])
        )
        found = self._ask(line, up, span)
        if found is None:
            return None
        if not released:
            self._see(found)
        reach = self._reach(found, line, up)
        return reach > level + near if up else reach < level - near

    def _feasible_of(self, line: int) -> tuple[float, float]:
        return float(self._feasible[0][line]), float(self._feasible[1][line])

    def spread(self, lines: Index, ups: Mask, levels: Vector) -> None:
        """Look at points that lie beyond many of these levels at once.

        Only so that fewer of them have to be asked about one by one.
        """
        near = ZERO * np.maximum(np.maximum(1.0, np.abs(levels)), self._size[lines])
        left = np.arange(lines.size)
        draw = np.random.default_rng(0)
        for _ in range(SWEEPS):
            seen = np.where(
                ups[left],
                self._greatest[lines[left]] - levels[left],
                levels[left] - self._least[lines[left]],
            )
            before, left = left.size, left[seen <= near[left]]
            if left.size < 2 or ((before - left.size) * 20 < before and _ > 2):
                return
            self._change(self._feasible)
            polyhedron = self._open()
            weights = np.zeros(self._base.size)
            push = draw.uniform(0.5, 1.0, left.size) / self._size[lines[left]]
            np.add.at(weights, lines[left], np.where(ups[left], -push, push))
            found = polyhedron.least_sum(weights[polyhedron.lines])
            if isinstance(found, Lost):
                return
            self._see(found)

    def _see(self, found: End) -> None:
        lines = self._open().lines
        entries = self._base[lines] + found.step
        if found.ray is not None:
            ray = np.where(np.abs(found.ray) <= ZERO * np.abs(found.ray).max(), 0.0, found.ray)
            entries = np.where(ray == 0, entries, np.copysign(np.inf, ray))
        self._least[lines] = np.minimum(self._least[lines], entries)
        self._greatest[lines] = np.maximum(self._greatest[lines], entries)

    def _open(self) -> Polyhedron:
        if self._polyhedron is None:
            self._polyhedron = Polyhedron(
                self._shape, self._base, self._low, self._high, self._warm
            )
        return self._polyhedron

    def _seen_beyond(self, line: int, up: bool, level: float, size: float) -> bool:
        seen = self._greatest[line] - level if up else level - self._least[line]
        return bool(seen > size)

    def _ask(self, line: int, up: bool, released: tuple[float, float]) -> End | None:
        found = self._ask_once(line, up, released)
        if isinstance(found, Lost):
            # Thousands of changes to one factorization can end badly; begin anew.
            self._polyhedron = None
            found = self._ask_once(line, up, released)
        return None if isinstance(found, Lost) else found

    def _ask_once(self, line: int, up: bool, released: tuple[float, float]) -> End | Lost:
        polyhedron = self._open()
        one = np.array([line])
        polyhedron.limit(one, np.array([released[0]]), np.array([released[1]]))
        found = polyhedron.end(line, up)
        polyhedron.limit(one, self._low[one], self._high[one])
        return found

    def _reach(self, found: End, line: int, up: bool) -> float:
        if found.ray is not None:
            return math.inf if up else -math.inf
        return float(self._base[line]) + self._open().step_of(found, line)
