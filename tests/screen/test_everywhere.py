"""Every size, both kinds of marks, odd names and empty models: nothing overflows or breaks."""

from __future__ import annotations

import asyncio
import re
import sys
from pathlib import Path
from typing import Any

import pytest

from lpview.blocks import read_model_bytes
from lpview.examination import examine
from lpview.outcomes import Request
from lpview.report.names import width
from lpview.screen.app import LpviewApp, Work
from lpview.screen.columns import NUMBER
from lpview.screen.mirror import MirrorScreen
from lpview.screen.spine import ASCII, ROUND
from lpview.solver import solve
from tests.screen import models
from tests.screen.terminal import Terminal

SIZES = [(80, 24), (120, 40), (200, 60)]
NAMES = ["one row", "one column", "no rows", "no columns", "cjk", "long", "markup", "control"]
NAMES += ["mixed", "alike", "wide numbers", "no coefficients", "nothing"]


def examined(name: str) -> Any:
    content = models.OPTIMAL[name].content
    data = content.encode() if isinstance(content, str) else content
    return examine(read_model_bytes(data, "m.csv"), Request("m.csv", "lpview check m.csv"), solve)


FOUND = {name: examined(name) for name in NAMES}


Panes = dict[str, list[str]]


def shown(name: str, ascii_marks: bool) -> dict[tuple[int, int], Panes]:
    """The lines of every pane at each size, in one session that is resized."""

    async def go() -> dict[tuple[int, int], Panes]:
        app = LpviewApp(Work("m.csv", lambda watch, say: FOUND[name]), ascii_marks)
        found = {}
        async with app.run_test(size=SIZES[0]) as pilot:
            await app.workers.wait_for_complete()
            await pilot.pause()
            screen = app.screen
            assert isinstance(screen, MirrorScreen)
            for size in SIZES:
                await pilot.resize_terminal(*size)
                await pilot.pause()
                found[size] = {
                    str(pane.id): [pane.render_line(y).text for y in range(pane.size.height)]
                    for pane in (screen.strip, screen.constraints, screen.variables, screen.ledger)
                }
        return found

    return asyncio.run(go())


@pytest.mark.parametrize("ascii_marks", [False, True], ids=["round", "ascii"])
@pytest.mark.parametrize("name", NAMES)
def test_lines_fit_and_spines_align(name, ascii_marks):
    glyphs = ASCII if ascii_marks else ROUND
    marks = {glyphs.filled + glyphs.empty, glyphs.empty + glyphs.filled, glyphs.empty * 2, "= "}
    for size, panes in shown(name, ascii_marks).items():
        assert all(width(line) == size[0] for lines in panes.values() for line in lines)
        places = set()
        for pane, count in (("constraints", "m"), ("variables", "n")):
            lines = panes[pane][2:][: getattr(FOUND[name].head.model, count)]
            for line in filter(str.strip, lines):
                places.add(_spine_place(line, marks, panes[pane][1]))
        assert len(places) <= 1
        if ascii_marks and name not in ("cjk", "mixed", "long", "control"):
            assert all(line.isascii() for lines in panes.values() for line in lines)


def _spine_place(line: str, marks: set[str], heads: str) -> int:
    """Cells before the spine, which stands between the two heads next to it."""
    start = heads.index("dual value" if "dual value" in heads else "reduced cost")
    cut, cells = 0, 0
    before = start - (NUMBER - len("dual value")) * ("dual value" in heads) - 5
    while cells < before:
        cells += width(line[cut])
        cut += 1
    assert line[cut : cut + 2] in marks, (line, line[cut : cut + 2])
    return cells


def test_no_number_is_cut():
    found = FOUND["wide numbers"]
    value = dict(zip(found.head.model.columns, found.answer.x, strict=True))
    number = re.compile(r"-?\d+(\.\d+)?(e-?\d+)?$")
    for panes in shown("wide numbers", False).values():
        named = [line.split() for line in panes["variables"][2:] if line.strip()]
        assert named
        for cells in named:
            name = next(cell for cell in cells if cell in value)
            numbers = [float(cell) for cell in cells if number.match(cell)]
            # Losing digits is allowed, losing the exponent or the end is not.
            assert any(abs(shown - value[name]) <= 0.1 * abs(value[name]) for shown in numbers)


@pytest.mark.parametrize("env", [{"TERM": "xterm-16color", "COLORTERM": None}, {"NO_COLOR": "1"}])
@pytest.mark.parametrize("name", ["markup", "cjk", "long"])
def test_sixteen_colours_and_none(env, name, tmp_path: Path):
    models.OPTIMAL[name].write(tmp_path)
    env = {**env, "PYTHONPATH": str(models.ROOT)}
    words = [sys.executable, "-m", "lpview", "model.csv"]
    with Terminal(words, columns=80, rows=24, env=env, cwd=tmp_path) as terminal:
        terminal.wait_for("CONSTRAINT  1 of")
        terminal.press("down", "enter")
        terminal.wait_for("▸ VARIABLE")
        assert terminal.overflows == 0
        assert "Traceback" not in terminal.text
        if "NO_COLOR" in env:
            colours = {terminal.cell(x, y).fg for x in range(80) for y in range(24)}
            assert len(colours - {"default"}) <= 3  # greys only
        terminal.press("q")
        assert terminal.exit_status == 0
