"""The sparsity pattern over the whole screen: moved over, narrowed, and left with a line."""

from __future__ import annotations

from typing import ClassVar

import numpy as np
from rich.segment import Segment
from rich.style import Style
from textual import events
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.message import Message
from textual.screen import Screen
from textual.strip import Strip
from textual.widget import Widget
from textual.widgets import Footer

from lpview.marks import Flag
from lpview.outcomes import Optimal
from lpview.screen import picture_view
from lpview.screen.picture import draw
from lpview.screen.picture_grid import Axis, Grid, Pattern, count
from lpview.screen.picture_text import Line, cell_at, coefficient_under_cursor, describe
from lpview.screen.picture_view import Layout, View

KEYS: tuple[tuple[str, str, str], ...] = (
    ("up", "step(-1, 0)", "one cell up"),
    ("down", "step(1, 0)", "one cell down"),
    ("left", "step(0, -1)", "one cell left"),
    ("right", "step(0, 1)", "one cell right"),
    ("pageup", "turn(-1, 0)", "one block up"),
    ("pagedown", "turn(1, 0)", "one block down"),
    ("left_square_bracket", "turn(0, -1)", "one block left"),
    ("right_square_bracket", "turn(0, 1)", "one block right"),
    ("home", "corner(False)", "first constraint and variable"),
    ("end", "corner(True)", "last constraint and variable"),
    ("plus,equals_sign", "closer", "narrow to a block around the cursor"),
    ("minus", "wider", "widen the block"),
    ("0", "everything", "the whole pattern"),
    ("s", "selected", "back to the selected line"),
    ("enter", "pick_row", "leave with the constraint under the cursor"),
    ("v", "pick_column", "leave with the variable under the cursor"),
    ("escape,p", "leave", "leave the picture"),
    ("q,ctrl+q", "app.quit", "quit"),
)
"""Key, action and words of everything that can be done here."""

FOOTER = {
    "closer": ("+", "Closer"),
    "wider": ("-", "Wider"),
    "everything": ("0", "Whole"),
    "selected": ("s", "Selected"),
    "pick_row": ("enter", "Constraint"),
    "pick_column": ("v", "Variable"),
    "leave": ("esc", "Leave"),
}
"""Actions that the footer shows, with key and word, plain characters all."""

KIND_STYLES = {
    "neither": Style(),
    "column": Style(color="cyan"),
    "row": Style(color="yellow"),
    "both": Style(color="green"),
}
LEVEL_STYLES = (Style(dim=True), Style(), Style(bold=True))
STYLES = {
    "blank": Style(),
    "text": Style(),
    "margin": Style(bold=True),
    "pointer": Style(bold=True),
    "cross": Style(dim=True),
    "selected": Style(bold=True, color="magenta"),
    "cursor": Style(reverse=True),
    "status": Style(bold=True),
    **{
        f"{kind}-{level}": hue + strength
        for kind, hue in KIND_STYLES.items()
        for level, strength in enumerate(LEVEL_STYLES, start=1)
    },
}
"""What every style name of the drawing looks like; never the only carrier of a meaning."""


def bindings() -> list[BindingType]:
    """The keys as bindings of the widget library."""
    return [
        Binding(
            key,
            action,
            FOOTER.get(action, ("", words))[1],
            show=action in FOOTER,
            key_display=FOOTER[action][0] if action in FOOTER else None,
        )
        for key, action, words in KEYS
    ]


def pattern_of(found: Optimal) -> Pattern:
    """The pattern of an examined model, with the state of its lines."""
    lp = found.head.model
    return Pattern(
        A=lp.A,
        rows=lp.rows,
        columns=lp.columns,
        zero_slack=found.marks.flags[Flag.ZERO_SLACK][: lp.m],
        nonzero=np.abs(found.measurement.columns.value) > found.head.request.zero,
    )


class Picture(Widget, can_focus=True):
    """Draws the pattern and keeps what is shown of it."""

    DEFAULT_CSS = "Picture { height: 1fr; background: $background; }"

    class Moved(Message):
        """The cursor, the block or the size changed, and the picture with it."""

        def __init__(self, picture: Picture) -> None:
            super().__init__()
            self.picture = picture

    def __init__(self, pattern: Pattern, selected: int | None, is_ascii: bool) -> None:
        super().__init__(id="picture")
        self.pattern, self.selected, self.is_ascii = pattern, selected, is_ascii
        start = picture_view.whole(pattern)
        self.view: View = picture_view.at_selected(pattern, start, selected)
        """What is shown."""
        self.layout_now: Layout = self._laid_out()
        """Where it stands, at the present size."""
        self._counted: Grid | None = None
        self._lines: list[Line] = []

    def _laid_out(self) -> Layout:
        # The last line is the status.
        size = (self.size.width, max(self.size.height - 1, 1))
        self.view, layout = picture_view.lay_out(self.pattern, self.view, size, self.is_ascii)
        return layout

    def show(self, view: View) -> None:
        """Show another view."""
        self.view = view
        self.layout_now = self._laid_out()
        pattern, layout = self.pattern, self.layout_now
        grid = self._grid(layout.rows, layout.columns)
        self._lines = draw(pattern, self.view, layout, self.selected, grid)
        self._lines += [[] for _ in range(layout.height - len(self._lines))]
        self._lines.append([(describe(pattern, self.view, layout), "status")])
        self.refresh()
        self.post_message(self.Moved(self))

    def _grid(self, rows: Axis, columns: Axis) -> Grid | None:
        """The counts of a block, made again only where it changed."""
        if not rows.lines or not columns.lines:
            return None
        old = self._counted
        if old is None or (old.rows, old.columns) != (rows, columns):
            self._counted = count(self.pattern, rows, columns)
        return self._counted

    @property
    def texts(self) -> list[str]:
        """The lines as drawn, without styles; the last is the status."""
        return ["".join(text for text, _ in line) for line in self._lines]

    def render_line(self, y: int) -> Strip:
        """Draw one line, for the library's compositor."""
        runs = self._lines[y] if y < len(self._lines) else []
        segments = [Segment(text, STYLES[style]) for text, style in runs]
        return Strip(segments).adjust_cell_length(self.size.width, self.rich_style)

    def on_resize(self) -> None:
        """Draw for the new size."""
        self.show(self.view)

    def on_click(self, event: events.Click) -> None:
        """Put the cursor on the cell under the mouse."""
        layout = self.layout_now
        cell = cell_at(layout, event.x, event.y)
        if cell is not None:
            row = layout.rows.lines_of(cell[0]).start
            column = layout.columns.lines_of(cell[1]).start
            self.show(picture_view.at(self.pattern, self.view, row, column))


class PictureScreen(Screen[int | None]):
    """The picture and its keys; leaves with a line numbered as in `lpview.kkt`, or None."""

    BINDINGS: ClassVar[list[BindingType]] = bindings()

    def __init__(self, found: Optimal, line: int | None, ascii: bool = False) -> None:
        super().__init__()
        self.picture = Picture(pattern_of(found), line, ascii)

    def compose(self) -> ComposeResult:
        """The picture above the keys."""
        yield self.picture
        yield Footer(show_command_palette=False)

    def action_step(self, down: int, across: int) -> None:
        """Move the cursor by cells."""
        picture = self.picture
        layout = picture.layout_now
        picture.show(picture_view.moved(picture.pattern, picture.view, layout, down, across))

    def action_turn(self, down: int, across: int) -> None:
        """Move on by blocks."""
        picture = self.picture
        picture.show(picture_view.paged(picture.pattern, picture.view, down, across))

    def action_corner(self, last: bool) -> None:
        """Go to the first or the last constraint and variable."""
        picture = self.picture
        row, column = (picture.pattern.m - 1, picture.pattern.n - 1) if last else (0, 0)
        picture.show(picture_view.at(picture.pattern, picture.view, row, column))

    def action_closer(self) -> None:
        """Narrow the block."""
        picture = self.picture
        picture.show(picture_view.closer(picture.pattern, picture.view, picture.layout_now))

    def action_wider(self) -> None:
        """Widen the block."""
        picture = self.picture
        picture.show(picture_view.wider(picture.pattern, picture.view))

    def action_everything(self) -> None:
        """Show the whole pattern."""
        picture = self.picture
        picture.show(picture_view.everything(picture.pattern, picture.view))

    def action_selected(self) -> None:
        """Go back to the selected line."""
        picture = self.picture
        picture.show(picture_view.at_selected(picture.pattern, picture.view, picture.selected))

    def action_pick_row(self) -> None:
        """Leave with the constraint of the coefficient under the cursor, if any."""
        found = self._under_cursor()
        if found is not None:
            self.dismiss(found[0])

    def action_pick_column(self) -> None:
        """Leave with the variable of the coefficient under the cursor, if any."""
        found = self._under_cursor()
        if found is not None:
            self.dismiss(self.picture.pattern.m + found[1])

    def _under_cursor(self) -> tuple[int, int] | None:
        picture = self.picture
        return coefficient_under_cursor(picture.pattern, picture.view, picture.layout_now)

    def action_leave(self) -> None:
        """Leave without a line."""
        self.dismiss(None)
