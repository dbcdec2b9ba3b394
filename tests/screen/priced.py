"""Answers whose prices tests of the screen examine, and a way to look on."""

from __future__ import annotations

import contextlib
from collections.abc import Callable, Iterator
from typing import Any

from lpview.blocks import read_model, read_model_bytes
from lpview.examination import examine
from lpview.outcomes import Optimal, Request
from lpview.prices import LinePrices, Prices
from lpview.run import Method, SolveSettings
from lpview.solver import solve
from tests.screen import models


def examined(content: str, **options: Any) -> Optimal:
    request = Request("model.csv", "lpview check model.csv", **options)
    found = examine(read_model_bytes(content.encode(), "model.csv"), request, solve)
    assert isinstance(found, Optimal)
    return found


SQUEEZED = models.blocks(
    [("x", 1), ("y", 1)],
    [("most", "x", 1), ("least", "x", 1), ("other", "y", 1), ("free", "y", 1)],
    [("most", "<=", 4), ("least", ">=", 4), ("other", "<=", 3)],
)
SQUEEZED += "[b]\nrow,lower,upper\nfree,none,none\n"
"""x is 4 because two rows leave nothing else; the smallest tightening leaves no plan."""

NO_BASIS = SolveSettings(method=Method.INTERIOR_POINT, crossover=False)

GLASSHOUSE, TIGHT = examined(models.GLASSHOUSE), examined(SQUEEZED)
WITHOUT_BASIS = examined(models.GLASSHOUSE, solve=NO_BASIS, tolerance=1e-3)
FAILED = examined(models.GLASSHOUSE, solve=NO_BASIS, tolerance=1e-300)
SEASON = examine(read_model(str(models.SEASON)), Request("season.csv", "lpview check s"), solve)
assert isinstance(SEASON, Optimal)
BIG = examined(models.chain([f"r{k}" for k in range(1500)], [f"x{k}" for k in range(1500)]))


@contextlib.contextmanager
def lines_asked(monkeypatch: Any, before: Callable[[int], None]) -> Iterator[None]:
    """Call ``before`` with every line that is about to be examined."""
    real = Prices.line

    def line(self: Prices, k: int) -> LinePrices:
        before(k)
        return real(self, k)

    monkeypatch.setattr(Prices, "line", line)
    yield
    monkeypatch.setattr(Prices, "line", real)
