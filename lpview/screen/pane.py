"""A pane of lines drawn straight from data: only what is visible is ever made.

The library's own table measures every cell; this one draws the lines it shows
through the Line API, so that a pane of a million lines opens as fast as one of ten.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import ClassVar

from rich.segment import Segment
from rich.style import Style
from textual import events
from textual.binding import BindingType
from textual.geometry import Size
from textual.message import Message
from textual.scroll_view import ScrollView
from textual.strip import Strip

Runs = list[tuple[str, Style]]

PLAIN = Style()
HEADING = Style(bold=True)
TITLE = Style(bold=True, underline=True)
CURSOR = Style(reverse=True)
CURSOR_AWAY = Style(bold=True, underline=True)
LIT = Style(bold=True, color="cyan")
QUIET = Style(dim=True)
FAULT = Style(bold=True, color="red")


class LinesPane(ScrollView, can_focus=True):
    """Lines with a cursor; subclasses say how many there are and what each shows.

    A pane has ``heading_lines`` fixed lines on top, then its content.
    """

    BINDINGS: ClassVar[list[BindingType]] = []

    DEFAULT_CSS = """
    LinesPane { height: 1fr; overflow-x: hidden; overflow-y: hidden; background: $background; }
    """

    heading_lines = 1
    """Fixed lines above the content."""

    class Moved(Message):
        """The cursor went to another line."""

        def __init__(self, pane: LinesPane) -> None:
            super().__init__()
            self.pane = pane

    class Chosen(Message):
        """A line was asked for, by Enter's twin: a second click on it."""

        def __init__(self, pane: LinesPane) -> None:
            super().__init__()
            self.pane = pane

    def __init__(self, **options: str | None) -> None:
        super().__init__(**options)  # type: ignore[arg-type]
        self.top = 0
        self.cursor = 0
        self.takes_key: Callable[[events.Key], bool] = lambda _: False
        """Asked first for every key; True where it was used up."""

    @property
    def line_count(self) -> int:
        """Content lines, visible or not."""
        raise NotImplementedError

    def heading(self, width: int) -> list[Runs]:
        """The fixed lines on top."""
        raise NotImplementedError

    def content(self, index: int, width: int) -> Runs:
        """One content line, ``index`` from 0."""
        raise NotImplementedError

    @property
    def visible_lines(self) -> int:
        """Content lines that fit."""
        return max(self.size.height - self.heading_lines, 0)

    def render_line(self, y: int) -> Strip:
        """Draw one line of the pane, for the library's compositor."""
        width = self.size.width
        if y < self.heading_lines:
            heading = self.heading(width)
            runs = heading[y] if y < len(heading) else []
        else:
            index = self.top + y - self.heading_lines
            runs = self.content(index, width) if index < self.line_count else []
        segments = [Segment(text, style) for text, style in runs]
        return Strip(segments).adjust_cell_length(width, self.rich_style)

    def on_resize(self) -> None:
        """Keep the cursor in sight at the new size."""
        self.virtual_size = Size(self.size.width, self.size.height)
        self.show_cursor()

    def show_cursor(self) -> None:
        """Scroll so that the cursor's line is visible, as little as possible."""
        if not self.visible_lines:  # not laid out yet
            return
        most = max(self.line_count - self.visible_lines, 0)
        low = self.cursor - max(self.visible_lines - 1, 0)
        self.top = min(max(min(self.top, self.cursor), low, 0), most)
        self.refresh()

    def move_to(self, index: int) -> None:
        """Put the cursor on a content line, held within them, and say so."""
        if not self.line_count:
            return
        self.cursor = min(max(index, 0), self.line_count - 1)
        self.show_cursor()
        self.moved()
        self.post_message(self.Moved(self))

    def moved(self) -> None:
        """What has to change in the same frame; the message is for everyone else."""

    def on_key(self, event: events.Key) -> None:
        """Arrows, pages, first and last."""
        if self.takes_key(event):
            event.stop()
            event.prevent_default()
            return
        page = max(self.visible_lines - 1, 1)
        steps = {"up": -1, "down": 1, "pageup": -page, "pagedown": page}
        places = {"home": 0, "end": self.line_count - 1}
        if event.key in steps:
            self.move_to(self.cursor + steps[event.key])
        elif event.key in places:
            self.move_to(places[event.key])
        else:
            return
        event.stop()
        event.prevent_default()

    def on_click(self, event: events.Click) -> None:
        """Select the line under the mouse; a second click follows it."""
        index = self.top + event.y - self.heading_lines
        if event.y < self.heading_lines or index >= self.line_count:
            return
        self.move_to(index)
        if event.chain > 1:
            self.post_message(self.Chosen(self))

    def on_mouse_scroll_down(self, event: events.MouseScrollDown) -> None:
        """Three lines down."""
        self.move_to(self.cursor + 3)
        event.stop()

    def on_mouse_scroll_up(self, event: events.MouseScrollUp) -> None:
        """Three lines up."""
        self.move_to(self.cursor - 3)
        event.stop()
