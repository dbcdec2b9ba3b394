"""The picture over the whole screen: keys, mouse, sizes, and the line it leaves with."""

from __future__ import annotations

import asyncio

import numpy as np
import pytest
from rich.cells import cell_len
from textual.app import App
from textual.geometry import Offset

from lpview.outcomes import Optimal
from lpview.screen.picture import STYLES as CELL_STYLES
from lpview.screen.picture_screen import (
    FOOTER,
    KEYS,
    STYLES,
    Picture,
    PictureScreen,
    bindings,
    pattern_of,
)
from lpview.screen.picture_text import WORD_STYLES
from lpview.screen.picture_view import HEADER_LINES
from tests.check.helpers import examined
from tests.check.small_models import MODELS
from tests.dual.models import INF, model

SIZES = [(80, 24), (120, 40), (200, 60)]
LEFT = object()


class Host(App[None]):
    """Opens the picture at once and keeps what it left with."""

    def __init__(self, found, line, ascii=False):
        super().__init__()
        self.picture_screen = PictureScreen(found, line, ascii)
        self.result = LEFT
        self.left = asyncio.Event()
        self.moves = 0

    def on_mount(self):
        self.push_screen(self.picture_screen, self.keep)

    def keep(self, result):
        self.result = result
        self.left.set()

    @property
    def picture(self):
        return self.picture_screen.picture

    def on_picture_moved(self, message: Picture.Moved):
        assert message.picture is self.picture
        self.moves += 1


def drive(found, line, steps, size=(80, 24), ascii=False):
    """Run the steps on an open picture; returns the host after it."""

    async def run():
        app = Host(found, line, ascii)
        async with app.run_test(size=size) as pilot:
            await pilot.pause()
            await steps(app, pilot)
        return app

    return asyncio.run(run())


def staircase(m, n=None, names=None):
    """A model with its coefficients on a band; solved and examined."""
    n = n or m
    columns = list(names or (f"x{j}" for j in range(n)))[:n]
    rows = {f"r{i}": (-INF, {}, 10.0) for i in range(m)}
    for i in range(max(m, n)):
        for j in (i, i + 1):
            rows[f"r{i % m}"][1][columns[j % n]] = 1.0 + i % 3
    return examined(model("maximize", dict.fromkeys(columns, 1.0), rows, {}))


BAND = staircase(300)
BLEND = examined(MODELS["blend"].lp)


def check_frame(app):
    """Every line has the width of the screen, and the status is the last one."""
    width, height = app.picture.size
    assert len(app.picture.texts) == height
    for y in range(height):
        strip = app.picture.render_line(y)
        assert strip.cell_length == cell_len(strip.text) == width


@pytest.mark.parametrize("ascii", [True, False])
@pytest.mark.parametrize("size", SIZES)
def test_the_frame_fits_at_every_size(size, ascii):
    async def steps(app, pilot):
        for key in ("plus", "plus", "plus", "minus", "0", "end"):
            check_frame(app)
            await pilot.press(key)
        check_frame(app)
        text = "".join(app.picture.texts)
        assert text.isascii() == ascii

    drive(BAND, 5, steps, size, ascii)


def test_the_pattern_is_that_of_the_examination():
    pattern = pattern_of(BLEND)
    named = dict(zip(pattern.rows, pattern.zero_slack.tolist(), strict=True))
    assert named == {"low": True, "high": True, "even": True, "loose": False, "open": False}
    assert dict(zip(pattern.columns, pattern.nonzero.tolist(), strict=True)) == {
        "a": True, "b": True, "f": True, "g": True, "n": False,
    }  # fmt: skip


def test_arrows_move_the_cursor_and_the_status_tells_what_is_there():
    async def steps(app, pilot):
        assert app.picture.texts[-1] == "constraint low (zero slack), variable a (nonzero): 1"
        before = app.moves
        await pilot.press("right")
        assert app.picture.texts[-1] == "constraint low (zero slack), variable b (nonzero): 2"
        assert app.moves == before + 1
        await pilot.press("down", "left")
        told = "constraint high (zero slack), variable a (nonzero): no coefficient"
        assert app.picture.texts[-1] == told
        await pilot.press("s")
        assert app.picture.texts[-1] == "constraint low (zero slack), variable a (nonzero): 1"

    drive(BLEND, 0, steps)


def test_enter_leaves_with_the_constraint_under_the_cursor():
    async def steps(app, pilot):
        await pilot.press("down", "right", "enter")
        await app.left.wait()

    assert drive(BLEND, 0, steps).result == BLEND.head.model.rows.index("high")


def test_v_leaves_with_the_variable_under_the_cursor():
    async def steps(app, pilot):
        await pilot.press("right", "v")
        await app.left.wait()

    assert drive(BLEND, 0, steps).result == 5 + BLEND.head.model.columns.index("b")


def test_enter_on_an_empty_cell_stays():
    async def steps(app, pilot):
        await pilot.press("down", "enter", "v")
        assert app.screen is app.picture_screen and app.result is LEFT

    drive(BLEND, 0, steps)


@pytest.mark.parametrize("key", ["escape", "p"])
def test_leaving_without_a_line(key):
    async def steps(app, pilot):
        await pilot.press("right", key)
        await app.left.wait()
        assert app.screen is not app.picture_screen

    assert drive(BLEND, 3, steps).result is None


def test_narrowing_keeps_the_selected_line_and_widening_undoes_it():
    async def steps(app, pilot):
        start = app.picture.view
        assert start.rows.lines == 300
        await pilot.press("plus")
        rows = app.picture.view.rows
        assert rows.lines < 200 and rows.start <= 150 < rows.stop
        await pilot.press("equals_sign", "plus", "plus", "plus")
        layout = app.picture.layout_now
        assert layout.rows.is_one_each and layout.columns.is_one_each
        assert any(text.startswith("r150 ") for text in app.picture.texts)
        await pilot.press("0")
        assert app.picture.view == start
        await pilot.press("plus", *["minus"] * 3)
        assert app.picture.view == start

    drive(BAND, 150, steps)


def test_blocks_are_turned_both_ways():
    async def steps(app, pilot):
        await pilot.press(*["plus"] * 5, "home")
        first = app.picture.view
        assert (first.rows.start, first.columns.start) == (0, 0)
        await pilot.press("pagedown", "right_square_bracket")
        view = app.picture.view
        assert view.rows.start == first.rows.stop and view.columns.start == first.columns.stop
        await pilot.press("pageup", "left_square_bracket")
        assert app.picture.view == first
        await pilot.press("end")
        view = app.picture.view
        assert (view.rows.stop, view.columns.stop) == (300, 300)
        assert (view.rows.line, view.columns.line) == (299, 299)

    drive(BAND, 150, steps)


def test_a_click_moves_the_cursor():
    async def steps(app, pilot):
        left = app.picture.layout_now.left
        await pilot.click(Picture, offset=Offset(left + 4, HEADER_LINES + 1))
        view = app.picture.view
        assert (view.rows.line, view.columns.line) == (1, 4)
        await pilot.click(Picture, offset=Offset(left + 40, HEADER_LINES))
        assert app.picture.view == view

    drive(BLEND, 0, steps)


def test_the_cursor_is_reversed_in_the_frame():
    async def steps(app, pilot):
        left = app.picture.layout_now.left
        await pilot.press("down", "right")
        strip = app.picture.render_line(HEADER_LINES + 1).crop(left + 1, left + 2)
        assert all(segment.style.reverse for segment in strip)

    drive(BLEND, 0, steps)


def test_resizing_while_open_draws_anew():
    async def steps(app, pilot):
        await pilot.press("plus")
        for size in [(200, 60), (40, 12), (120, 40), (80, 24)]:
            await pilot.resize_terminal(*size)
            assert app.picture.size.width == size[0]
            check_frame(app)
            rows = app.picture.view.rows
            assert rows.start <= 150 < rows.stop

    drive(BAND, 150, steps)


@pytest.mark.parametrize("ascii", [True, False])
@pytest.mark.parametrize(
    ("m", "n", "names"),
    [
        (1, 40, None),
        (40, 1, None),
        (1, 1, None),
        (3, 4, ("[b]x[/b]", "p[/]q", "平衡の名前", "n" * 300)),
        (2, 2, ("a\x1b[31m", "[@click=app.bell]b")),
    ],
)
def test_odd_shapes_and_names(m, n, names, ascii):
    found = staircase(m, n, names)
    assert isinstance(found, Optimal)

    async def steps(app, pilot):
        for key in ("right", "down", "plus", "pagedown", "end", "minus"):
            await pilot.press(key)
            check_frame(app)
        if names:
            assert not any("\x1b" in text for text in app.picture.texts)

    drive(found, m, steps, ascii=ascii)


def test_a_name_with_markup_is_shown_literally():
    async def steps(app, pilot):
        assert "variable [b]x[/b]" in app.picture.texts[-1]
        assert app.picture.texts[1] == "variables 1-2 of 2: [b]x[/b] to p[/]q"

    drive(staircase(2, 2, ("[b]x[/b]", "p[/]q")), 2, steps)


@pytest.mark.parametrize("line", [0, None])
def test_a_model_without_rows_says_so_and_no_key_fails(line):
    found = examined(model("minimize", {"x": 1.0}, {}, {}))
    assert isinstance(found, Optimal)

    async def steps(app, pilot):
        keys = [key.split(",")[0] for key, action, _ in KEYS if "leave" not in action]
        await pilot.press(*(key for key in keys if key != "q"))
        assert app.picture.texts[0] == "The model has no constraints: no pattern to draw."
        check_frame(app)
        await pilot.press("escape")
        await app.left.wait()

    assert drive(found, line, steps).result is None


def test_every_style_has_a_look_and_kinds_differ():
    assert {*CELL_STYLES, *WORD_STYLES} <= set(STYLES)
    looks = {str(STYLES[f"{kind}-2"]) for kind in ("neither", "row", "column", "both")}
    assert len(looks) == 4


def test_keys_are_one_table_without_clash():
    keys = [key for keys, _, _ in KEYS for key in keys.split(",")]
    assert len(keys) == len(set(keys))
    assert all(words for _, _, words in KEYS)
    assert {action for _, action, _ in KEYS} >= set(FOOTER)
    assert [binding.key for binding in bindings()] == [key for key, _, _ in KEYS]
    names = {action.split("(")[0].removeprefix("app.") for _, action, _ in KEYS} - {"quit"}
    assert all(hasattr(PictureScreen, f"action_{name}") for name in names)


def test_without_colour_the_marks_are_still_there(monkeypatch):
    monkeypatch.setenv("NO_COLOR", "1")

    async def steps(app, pilot):
        assert app.no_color
        lines = app.picture.texts[HEADER_LINES : HEADER_LINES + 5]
        left = app.picture.layout_now.left
        slack = np.array([line[left - 1] == "█" for line in lines])
        assert slack.tolist() == [True, True, True, False, False]
        check_frame(app)

    drive(BLEND, 0, steps)
