"""Models whose optimal answers are worked out by hand, in numbers that doubles hold.

Between them they have two-sided rows at either end and inside, equality and free
rows, columns that are nonnegative, boxed, fixed, free and negative, and both senses.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from lpview.model import LinearProgram
from tests.dual.models import INF, model


@dataclass(frozen=True)
class Answered:
    """A model with its optimal plan, dual values and reduced costs."""

    lp: LinearProgram
    x: tuple[float, ...]
    y: tuple[float, ...]
    z: tuple[float, ...]

    def with_one(self, part, name, value):
        """The vectors with one number changed, as arrays."""
        names = self.lp.rows if part == "y" else self.lp.columns
        vectors = {p: np.array(getattr(self, p), float) for p in ("x", "y", "z")}
        vectors[part][names.index(name)] = value
        return vectors


def _blend() -> Answered:
    # Minimize. low = 4 + 2 + 4 = 10 at its lower side, high = 1 + 3 + 4 = 8 at its
    # upper, even = 4 + 3 - 2 = 5, loose = 4 + 1 = 5 inside, open without sides.
    # z: a 3 - (2 + 1) = 0, b 6 - (4 - 3) = 5, f -9 - (-3 + 1) = -7,
    # g -1.5 - (2 - 3 - 0.5) = 0, n -5 - (-3) = -2. Objective -15 + 2 = -13,
    # dual 2 + 20 - 24 + 5 + 5 - 21 = -13.
    lp = model(
        "minimize",
        {"a": 3, "b": 6, "f": -9, "g": -1.5, "n": -5},
        {
            "low": (10, {"a": 1, "b": 2, "g": 1}, 20),
            "high": (0, {"b": 1, "f": 1, "g": 1, "n": 1}, 8),
            "even": (5, {"a": 1, "f": 1, "g": -0.5}, 5),
            "loose": (-100, {"a": 1, "b": 1, "n": 1}, 100),
            "open": (-INF, {"b": 1}, INF),
        },
        {"b": (1, 6), "f": (3, 3), "g": (-INF, INF), "n": (-INF, 0)},
        offset=2.0,
    )
    return Answered(lp, (4, 1, 3, 4, 0), (2, -3, 1, 0, 0), (0, 5, -7, 0, -2))


def _crew() -> Answered:
    # Maximize. top = 4 + 2 + 6 = 12 at its upper side, bottom = 2 - 5 = -3 at its
    # lower, tie = 5 + 2 = 7, spare = 4 + 2 + 5 + 6 = 17. z: p 5 - 2 = 3,
    # q 0 - (2 - 1) = -1, h 8 - 4 = 4, r -1 - (1 - 2) = 0, s 2 - 2 = 0, w 8 - 6 = 2.
    # Objective 20 - 8 - 5 + 12 = 19, dual 24 + 3 - 14 + 12 - 2 - 4 = 19.
    lp = model(
        "maximize",
        {"p": 5, "q": 0, "h": 8, "r": -1, "s": 2, "w": 8},
        {
            "top": (0, {"p": 1, "q": 1, "s": 1, "w": 3}, 12),
            "bottom": (-3, {"q": 1, "r": -1}, 30),
            "tie": (7, {"h": -2, "r": 1}, 7),
            "spare": (-INF, {"p": 1, "q": 1, "r": 1, "s": 1}, 50),
        },
        {"p": (0, 4), "q": (2, 9), "h": (-1, -1), "r": (-INF, INF), "w": (-INF, 0)},
    )
    return Answered(lp, (4, 2, -1, 5, 6, 0), (2, -1, -2, 0), (3, -1, 4, 0, 0, 2))


def _doors() -> Answered:
    # Hillier and Lieberman, Introduction to Operations Research, section 3.1.
    lp = model(
        "maximize",
        {"x1": 3, "x2": 5},
        {
            "r1": (-INF, {"x1": 1}, 4),
            "r2": (-INF, {"x2": 2}, 12),
            "r3": (-INF, {"x1": 3, "x2": 2}, 18),
        },
        {},
    )
    return Answered(lp, (2, 6), (0, 1.5, 1), (0, 0))


def _ranges() -> Answered:
    # Minimize, every end finite. sum = 4 at its lower side, apart = 2 inside.
    # z: u 2 - 2 = 0, v 3 - 2 = 1. Objective 9, dual 8 + 1 = 9.
    lp = model(
        "minimize",
        {"u": 2, "v": 3},
        {"sum": (4, {"u": 1, "v": 1}, 9), "apart": (1, {"u": 1, "v": -1}, 3)},
        {"u": (0, 5), "v": (1, 5)},
    )
    return Answered(lp, (3, 1), (2, 0), (0, 1))


def _debts() -> Answered:
    # Maximize, no column can be positive but t. tie = -2 + 2 = 0, limit = 1 - 5 = -4.
    # z: e 2 - 1 = 1, d -3 + 2 = -1, t 0 - (1 - 1) = 0. Objective -4 + 15 = 11,
    # dual 8 - 2 + 5 = 11.
    lp = model(
        "maximize",
        {"e": 2, "d": -3, "t": 0},
        {"tie": (0, {"e": 1, "t": 1}, 0), "limit": (-4, {"d": 1, "t": 0.5}, INF)},
        {"e": (-INF, -2), "d": (-5, -1), "t": (-INF, INF)},
    )
    return Answered(lp, (-2, -5, 2), (1, -2), (1, -1, 0))


def _mixing() -> Answered:
    # Minimize. both = 6 at its lower side, part = 6.5 inside 6 .. 7.
    # z: m 4 - 3 = 1 (at 1.5), k 3 - 3 = 0. Objective 6 + 13.5 = 19.5, dual 18 + 1.5.
    lp = model(
        "minimize",
        {"m": 4, "k": 3},
        {"both": (6, {"m": 1, "k": 1}, INF), "part": (6, {"m": -1.0, "k": 2 - 0.25}, 7)},
        {"m": (1.5, INF), "k": (-INF, INF)},
    )
    return Answered(lp, (1.5, 4.5), (3, 0), (1, 0))


MODELS = {
    "blend": _blend(),
    "crew": _crew(),
    "doors": _doors(),
    "ranges": _ranges(),
    "debts": _debts(),
    "mixing": _mixing(),
}
