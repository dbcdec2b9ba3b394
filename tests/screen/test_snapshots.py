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
from lpview.solver import solve
from tests.screen.models import chain

MODEL = chain(["heat", "bench", "water"], ["tomato", "basil", "chard"])
FOLDER = Path(__file__).parent / "snapshots"


def screen_text(size: tuple[int, int], ascii_marks: bool, keys: list[str]) -> str:
    request = Request("glasshouse.csv", "lpview check glasshouse.csv")
    found = examine(read_model_bytes(MODEL.encode(), "glasshouse.csv"), request, solve)

    async def go() -> str:
        app = LpviewApp(Work("glasshouse.csv", lambda watch, say: found), ascii_marks)
        async with app.run_test(size=size) as pilot:
            await app.workers.wait_for_complete()
            await pilot.pause()
            await pilot.press(*keys)
            await pilot.pause()
            screen = app.screen
            parts = [screen.strip, screen.constraints, screen.variables, screen.ledger]
            parts.append(screen.query_one(KeyLine))
            lines = [part.render_line(y).text for part in parts for y in range(part.size.height)]
            return "\n".join(line.rstrip() for line in lines) + "\n"

    return asyncio.run(go())


@pytest.mark.parametrize(
    ("name", "size", "ascii_marks", "keys"),
    [
        ("opened", (80, 24), False, []),
        ("plain", (120, 40), True, ["down", "down"]),
        ("followed", (80, 24), False, ["enter"]),
        ("filtered", (80, 24), True, ["1"]),
    ],
)
def test_screens_are_as_they_were(name, size, ascii_marks, keys):
    text = screen_text(size, ascii_marks, keys)
    path = FOLDER / f"{name}.txt"
    if os.environ.get("LPVIEW_SNAPSHOTS") == "write":
        path.parent.mkdir(exist_ok=True)
        path.write_text(text, encoding="utf-8")
    assert text == path.read_text(encoding="utf-8")
