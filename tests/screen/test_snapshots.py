"""A few whole screens as text, on a model of small integers, exact on every machine.

After a change that is meant, `LPVIEW_SNAPSHOTS=write` rewrites them; look at the difference.
"""

from __future__ import annotations

import asyncio
import os
from pathlib import Path

import pytest

from lpview.blocks import read_model_bytes
from lpview.examination import examine
from lpview.outcomes import Request
from lpview.screen.app import LpviewApp, Work
from lpview.screen.key_line import KeyLine
from lpview.screen.mirror import MirrorScreen
from lpview.solver import solve
from tests.screen.models import blocks, chain
from tests.screen.waiting import until, until_priced

MODEL = chain(["heat", "bench", "water"], ["tomato", "basil", "chard"])
DEGENERATE = blocks(
    [("x", 2), ("y", 1)],
    [("most", "x", 1), ("both", "x", 1), ("both", "y", 1), ("rest", "y", 1)],
    [("most", "<=", 4), ("both", "<=", 4), ("rest", "<=", 8)],
)
"""x is 4; the dual value of "both" is any number from 1 to 2, of "most" what is left of 2."""
FOLDER = Path(__file__).parent / "snapshots"


def screen_text(model: str, size: tuple[int, int], ascii_marks: bool, keys: list[str]) -> str:
    request = Request("glasshouse.csv", "lpview check glasshouse.csv")
    found = examine(read_model_bytes(model.encode(), "glasshouse.csv"), request, solve)

    async def go() -> str:
        app = LpviewApp(Work("glasshouse.csv", lambda watch, say: found), ascii_marks)
        async with app.run_test(size=size) as pilot:
            await until(pilot, lambda: isinstance(app.screen, MirrorScreen))
            await until_priced(pilot)
            await pilot.press(*keys)
            await pilot.pause()
            screen = app.screen
            parts = [screen.strip, screen.constraints, screen.variables, screen.ledger]
            parts.append(screen.query_one(KeyLine))
            lines = [part.render_line(y).text for part in parts for y in range(part.size.height)]
            return "\n".join(line.rstrip() for line in lines) + "\n"

    return asyncio.run(go())


@pytest.mark.parametrize(
    ("name", "model", "size", "ascii_marks", "keys"),
    [
        ("opened", MODEL, (80, 24), False, []),
        ("plain", MODEL, (120, 40), True, ["down", "down"]),
        ("followed", MODEL, (80, 24), False, ["enter"]),
        ("filtered", MODEL, (80, 24), True, ["1"]),
        ("not-unique", DEGENERATE, (80, 24), True, ["8", "down"]),
        ("widest", DEGENERATE, (200, 30), False, []),
    ],
)
def test_screens_are_as_they_were(name, model, size, ascii_marks, keys):
    text = screen_text(model, size, ascii_marks, keys)
    path = FOLDER / f"{name}.txt"
    if os.environ.get("LPVIEW_SNAPSHOTS") == "write":
        path.parent.mkdir(exist_ok=True)
        path.write_text(text, encoding="utf-8")
    assert text == path.read_text(encoding="utf-8")
