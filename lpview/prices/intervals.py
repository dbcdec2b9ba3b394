"""Least and greatest entries of all lines over an optimal face.

Lines that do not move on the face have one entry. The others are asked for one after the
other, each question starting at the vertex of the last; whatever a vertex or a ray shows
about other lines is remembered, so that most ends are never asked for: an entry seen at
its limit is at its end, and a ray settles every line that moves along it.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np

from lpview.model import Vector
from lpview.prices.lines import Mask
from lpview.prices.polyhedron import End, Polyhedron, Shape
from lpview.warm import Lost, WarmMaker

ZERO = 1e-9
"""Entries this close to a limit, scaled, count as there; ray entries this small as none."""

LEAST, GREATEST = 0, 1
"""Indices of the two ends."""


@dataclass(frozen=True, eq=False)
class Witness:
    """A point of the face, or a ray of it, as a sparse step over all lines."""

    lines: np.ndarray
    """Lines whose entry differs from the known point (or moves along the ray)."""
    entries: Vector
    """By how much."""
    ray: Witness | None = None
    """For an infinite end: the ray that goes on from this point."""

    def whole(self, size: int) -> Vector:
        """The same over all ``size`` lines."""
        step = np.zeros(size)
        step[self.lines] = self.entries
        return step


@dataclass(eq=False)
class Ends:
    """What is known of the ends of all lines; fills up as questions are answered."""

    base: Vector
    """The known point, shape ``(m + n,)``."""
    end: Vector
    """Least and greatest entries seen, shape ``(2, m + n)``."""
    known: Mask
    """Where ``end`` is final, shape ``(2, m + n)``."""
    lost: Mask
    """Lines of which an end could not be found, shape ``(m + n,)``; theirs are the farthest
    entries seen."""
    witness: dict[tuple[int, int], Witness] = field(default_factory=dict)
    """Points that attain an end other than the known point, by end and line."""

    def at(self, which: int, line: int) -> Vector:
        """The whole point that attains one end of a line, shape ``(m + n,)``."""
        found = self.witness.get((which, line))
        return self.base if found is None else self.base + found.whole(self.base.size)

    def ray(self, which: int, line: int) -> Vector | None:
        """The ray of an infinite end, shape ``(m + n,)``."""
        found = self.witness.get((which, line))
        if found is None or found.ray is None:
            return None
        return found.ray.whole(self.base.size)


class Face:
    """An optimal face, and the ends of its lines as far as they have been asked for."""

    def __init__(
        self,
        shape: Shape,
        base: Vector,
        limits: tuple[Vector, Vector],
        moves: Mask,
        size: Vector,
        warm: WarmMaker,
    ) -> None:
        self.low, self.high = limits
        self._moves, self._size = moves, size
        self.ends = Ends(
            base,
            np.stack([base, base]),
            np.stack([~moves, ~moves]),
            np.zeros(base.size, bool),
        )
        pieces = shape.parts()
        for piece in pieces:
            if piece.free.size == 1:
                self._walk(piece)
        self.parts = [
            _Part(self, Polyhedron(piece, base, self.low, self.high, warm))
            for piece in pieces
            if piece.free.size > 1
        ]
        self._part_of = {int(k): part for part in self.parts for k in part.lines}

    def interval(self, line: int) -> tuple[float, float]:
        """Least and greatest entry of a line, asked for if need be."""
        if not self.ends.known[:, line].all():
            self._part_of[line].ask(line)
        return float(self.ends.end[0, line]), float(self.ends.end[1, line])

    def _walk(self, piece: Shape) -> None:
        """The ends of a piece with one degree of freedom, which need no solver."""
        lines, ends = piece.lines, self.ends
        along = np.concatenate([[1.0], piece.G.toarray()[:, 0]])
        with np.errstate(divide="ignore"):
            low = np.minimum(self.low[lines] - ends.base[lines], 0.0) / along
            high = np.maximum(self.high[lines] - ends.base[lines], 0.0) / along
        first, last = np.minimum(low, high).max(), np.maximum(low, high).min()
        for which in (LEAST, GREATEST):
            far = np.where((along > 0) == (which == GREATEST), last, first)
            ends.end[which, lines] = ends.base[lines] + along * far
            ends.known[which, lines] = True
            for line, step in zip(lines.tolist(), far.tolist(), strict=True):
                ends.witness[which, line] = _walked(lines, along, step)

    def ask_all(self, between: Callable[[], None]) -> None:
        """Ask for every line; ``between`` is called after each question."""
        for part in self.parts:
            part.sweep()
            for line in part.lines[self._moves[part.lines]].tolist():
                self.interval(line)
                between()


def _walked(lines: np.ndarray, along: Vector, step: float) -> Witness:
    if np.isfinite(step):
        return Witness(lines, along * step)
    return Witness(lines, along * 0.0, Witness(lines, along * np.sign(step)))


class _Part:
    """A piece of a face that has nothing to do with the others."""

    def __init__(self, face: Face, polyhedron: Polyhedron) -> None:
        self._face, self._polyhedron = face, polyhedron
        self.lines = polyhedron.lines
        self._size = face._size[self.lines]
        self._limit = np.stack([face.low[self.lines], face.high[self.lines]])
        self._swept = False

    def sweep(self) -> None:
        """Look for vertices where many lines are at their limits at once."""
        if self._swept:
            return
        self._swept = True
        ends, sign = self._face.ends, np.array([1.0, -1.0])
        for which in (LEAST, GREATEST):
            finite = np.isfinite(self._limit[which]) & ~ends.known[which, self.lines]
            for _ in range(3):
                wanted = finite & ~ends.known[which, self.lines]
                before = int(wanted.sum())
                if before < 2:
                    break
                self._learn(self._polyhedron.least_sum(np.where(wanted, sign[which], 0.0)))
                if int((finite & ~ends.known[which, self.lines]).sum()) > before // 2:
                    break

    def ask(self, line: int) -> None:
        """Find both ends of a line."""
        ends = self._face.ends
        for which in (LEAST, GREATEST):
            if ends.known[which, line]:
                continue
            found = self._polyhedron.end(line, which == GREATEST)
            self._learn(found)
            if ends.known[which, line]:
                continue
            if isinstance(found, Lost) or found.ray is not None:
                self._learn(self._polyhedron.ray(line, which == GREATEST))
                ends.lost[line] |= not ends.known[which, line]
            ends.known[which, line] = True

    def _learn(self, found: End | Lost | None) -> None:
        """Remember what a vertex or a ray shows about every line."""
        if found is None or isinstance(found, Lost):
            return
        ends, lines = self._face.ends, self.lines
        entry = ends.base[lines] + found.step
        point: Witness | None = None
        for which, better in ((LEAST, np.less), (GREATEST, np.greater)):
            open_ = ~ends.known[which, lines]
            ahead = open_ & better(entry, ends.end[which, lines])
            if ahead.any():
                point = point or self._witness(found.step)
                self._note(which, lines[ahead], entry[ahead], point)
            there = np.abs(entry - self._limit[which]) <= ZERO * self._size
            done = open_ & there
            # The limit itself, not the solver's rounding of it.
            ends.end[which, lines[done]] = self._limit[which][done]
            ends.known[which, lines[done]] = True
        if found.ray is not None:
            self._learn_ray(found.step, found.ray)

    def _learn_ray(self, step: Vector, ray: Vector) -> None:
        ray = np.where(np.abs(ray) <= ZERO * np.abs(ray).max(), 0.0, ray)
        limit = self._limit
        if (np.isfinite(limit[LEAST]) & (ray < 0)).any():
            return
        if (np.isfinite(limit[GREATEST]) & (ray > 0)).any():
            return
        ends, lines = self._face.ends, self.lines
        along = self._witness(step, self._witness(ray))
        for which, out in ((LEAST, ray < 0), (GREATEST, ray > 0)):
            new = lines[out & ~ends.known[which, lines]]
            self._note(which, new, np.full(new.size, np.inf if which else -np.inf), along)
            ends.known[which, new] = True

    def _note(self, which: int, lines: np.ndarray, entry: Vector, point: Witness) -> None:
        ends = self._face.ends
        ends.end[which, lines] = entry
        ends.witness.update(dict.fromkeys([(which, int(k)) for k in lines], point))

    def _witness(self, step: Vector, ray: Witness | None = None) -> Witness:
        nonzero = np.flatnonzero(step)
        return Witness(self.lines[nonzero], step[nonzero], ray)
