"""The whole residual check on a page; the worst line of each condition is a link."""

from __future__ import annotations

from typing import ClassVar

from rich.style import Style
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.screen import Screen
from textual.widgets import Footer

from lpview.outcomes import Optimal
from lpview.report import text
from lpview.report.check import report
from lpview.screen.pane import CURSOR, HEADING, PLAIN, LinesPane, Runs


class CheckLines(LinesPane):
    """The report's lines; the cursor stands on conditions that have a worst line."""

    heading_lines = 0

    def __init__(self, found: Optimal) -> None:
        super().__init__(id="check")
        self.lines_of_text = text.render(report(found, full=False)).splitlines()
        self.links = {
            index: verdict.worst
            for verdict in found.verdicts
            if verdict.worst is not None
            for index, line in enumerate(self.lines_of_text)
            if line.startswith(f"{verdict.condition.value}  ")
        }

    @property
    def line_count(self) -> int:
        """Lines of the report."""
        return len(self.lines_of_text)

    def heading(self, width: int) -> list[Runs]:
        """None."""
        return []

    def content(self, index: int, width: int) -> Runs:
        """A line of the report; links are underlined."""
        style = PLAIN + Style(underline=True) if index in self.links else PLAIN
        style = HEADING if index == 0 else style
        return [(self.lines_of_text[index], style + CURSOR if index == self.cursor else style)]


class CheckPage(Screen[int | None]):
    """Shows the check; Enter on a condition goes to its worst line."""

    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("enter", "follow", "To the worst line"),
        Binding("escape,c", "leave", "Close"),
        Binding("q,ctrl+q", "app.quit", "Quit"),
    ]

    def __init__(self, found: Optimal) -> None:
        super().__init__()
        self.check = CheckLines(found)

    def compose(self) -> ComposeResult:
        """The report and the keys."""
        yield self.check
        yield Footer(show_command_palette=False, compact=True)

    def on_mount(self) -> None:
        """Start on the first condition that has a worst line."""
        self.check.move_to(min(self.check.links, default=0))
        self.check.focus()

    def action_follow(self) -> None:
        """Close, and go to the worst line of the condition under the cursor."""
        line = self.check.links.get(self.check.cursor)
        if line is not None:
            self.dismiss(line)

    def on_lines_pane_chosen(self) -> None:
        """A double click follows like Enter."""
        self.action_follow()

    def action_leave(self) -> None:
        """Close."""
        self.dismiss(None)
