"""The keys that apply now, on the last line; a click on one presses it.

The library's own footer is made anew, with a layout, whenever the focus moves; this
line is only drawn.
"""

from __future__ import annotations

from rich.segment import Segment
from textual import events
from textual.strip import Strip
from textual.widget import Widget

from lpview.report.names import width
from lpview.screen.keys import Key, spelled
from lpview.screen.pane import HEADING, QUIET

GAP = "  "


class KeyLine(Widget):
    """As many keys with their words as fit, the first ones first, help always."""

    DEFAULT_CSS = "KeyLine { height: 1; }"

    def __init__(self, keys: tuple[Key, ...]) -> None:
        super().__init__(id="keys")
        self._keys = keys

    def show(self, keys: tuple[Key, ...]) -> None:
        """Show other keys."""
        if keys != self._keys:
            self._keys = keys
            self.refresh()

    def fitting(self) -> list[tuple[Key, str, str]]:
        """The keys that fit, each with its spelling and words; the last key always does."""
        texts = [(key, _first_spelling(key), key.footer) for key in self._keys]
        while len(texts) > 1 and sum(map(_cells, texts)) > self.size.width:
            del texts[-2]
        return texts

    def render_line(self, y: int) -> Strip:
        """Spellings stand out, words do not."""
        segments = []
        for _, spelling, words in self.fitting():
            segments += [Segment(spelling, HEADING), Segment(f" {words}{GAP}", QUIET)]
        return Strip(segments).adjust_cell_length(self.size.width, self.rich_style)

    async def on_click(self, event: events.Click) -> None:
        """Do what the key under the mouse does."""
        end = 0
        for text in self.fitting():
            end += _cells(text)
            if event.x < end:
                await self.screen.run_action(text[0].action)
                return


def _first_spelling(key: Key) -> str:
    return spelled(key.key.split(",")[0])


def _cells(text: tuple[Key, str, str]) -> int:
    return width(text[1]) + 1 + width(text[2]) + len(GAP)
