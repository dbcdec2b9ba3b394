"""The linked panes: one selection, its partners, its ledger, and moving through them.

The table that was moved in last *leads*: its selected line lights up its partners in
the other table and fills the ledger, in the same frame (the panes call
`LinkedScreen.follow_selection` synchronously; the `Moved` message is for others).
"""

from __future__ import annotations

from typing import ClassVar

import numpy as np
from textual import events
from textual.app import ComposeResult
from textual.binding import BindingType
from textual.screen import Screen
from textual.widgets import Input, Static

from lpview.families import Kind, summarize
from lpview.marks import Flag
from lpview.outcomes import Optimal
from lpview.report.heads import noticed
from lpview.report.names import safe
from lpview.screen.columns import constraint_columns, variable_columns
from lpview.screen.history import History
from lpview.screen.key_line import KeyLine
from lpview.screen.keys import FOOTER, bindings
from lpview.screen.ledger_pane import LedgerPane
from lpview.screen.pane import LinesPane
from lpview.screen.price_book import PriceBook
from lpview.screen.spine import ASCII, ROUND
from lpview.screen.strip import VerdictStrip
from lpview.screen.table import Link, MirrorTable

FOLD_ABOVE = 500
"""Models of more lines open folded into families."""


class LinkedScreen(Screen[int | None]):
    """Strip, two tables, ledger and message line, linked by one selection."""

    BINDINGS: ClassVar[list[BindingType]] = bindings()

    DEFAULT_CSS = """
    LinkedScreen #message { height: 1; }
    LinkedScreen #prompt { height: 1; border: none; padding: 0; display: none; }
    """

    def __init__(self, found: Optimal, ascii_marks: bool = False) -> None:
        super().__init__()
        self.found = found
        self.ascii_marks = ascii_marks
        glyphs = ASCII if ascii_marks else ROUND
        lp = found.head.model
        rows, columns = summarize(found, Kind.ROW), summarize(found, Kind.COLUMN)
        self.book = PriceBook(found)
        self.marks = found.marks
        """The flags of all lines, with those of the prices once they are known."""
        self.strip = VerdictStrip(found, glyphs, self.book)
        left, right = constraint_columns(found, self.book), variable_columns(found, self.book)
        self.constraints = MirrorTable(found, left, 0, lp.rows, rows, glyphs, id="constraints")
        self.variables = MirrorTable(
            found, right, lp.m, lp.columns, columns, glyphs, id="variables"
        )
        self.ledger = LedgerPane(found, glyphs, self.book, id="ledger")
        self.leading = self.constraints if lp.m else self.variables
        self.only_linked = True
        self.history = History()
        self._prompt_for = ""

    def compose(self) -> ComposeResult:
        """Strip, two tables, ledger, message or prompt, keys."""
        yield self.strip
        yield self.constraints
        yield self.variables
        yield self.ledger
        yield Static("", id="message", markup=False)
        # Selecting on focus would have the next letter replace those typed ahead.
        yield Input(id="prompt", compact=True, select_on_focus=False)
        yield KeyLine(FOOTER)

    def on_mount(self) -> None:
        """Open folded where there are too many lines to read."""
        for table in (self.constraints, self.variables):
            table.share_layout_with(self.other(table))
            table.on_moved = self.follow_selection
        for pane in (self.constraints, self.variables, self.ledger):
            pane.takes_key = self.takes_key
        if self.found.head.model.m + self.found.head.model.n > FOLD_ABOVE:
            for table in (self.constraints, self.variables):
                table.fold(True)
        self.set_focus(self.leading)
        self.follow_selection(self.leading)
        self._warn()

    def _warn(self) -> None:
        """What stands in place of the model, and what reading it did; the check has it all."""
        head = self.found.head
        if head.notes.scope or head.notes.remarks:
            self.say("; ".join([*filter(None, [head.notes.scope_words]), *noticed(head.notes)]))

    # Linking -----------------------------------------------------------------

    def other(self, table: MirrorTable) -> MirrorTable:
        """The table on the other side."""
        return self.variables if table is self.constraints else self.constraints

    @property
    def line(self) -> int:
        """The selected line of the leading table, numbered as in `lpview.kkt`."""
        return self.leading.global_line

    def follow_selection(self, pane: LinesPane) -> None:
        """Light up the partners of the leading line and fill the ledger."""
        if not isinstance(pane, MirrorTable) or pane is not self.leading:
            return
        other = self.other(pane)
        pane.link = Link()  # the leading table shows no link column of its own
        self.ledger.show(self.line)
        if self.line < 0:
            return
        lines, coefficients = self.ledger.partners()
        name = pane.view.names[pane.view.line]
        order = np.argsort(lines)
        other.link = Link(f"in {name}", lines[order], coefficients[order])
        if lines.size:
            other.view.line = int(lines[0])
        limited = self.only_linked and not other.folded
        other.limit_to_linked(name, other.link.lines) if limited else other.to_selected()
        pane.refresh()

    def lead(self, table: MirrorTable) -> None:
        """Make a table the leading one and show all of its own lines."""
        if table is not self.leading:
            self.leading = table
            table.limit_to_linked("", None)
        self.follow_selection(table)

    def on_descendant_focus(self) -> None:
        """The table that gets the focus leads."""
        if isinstance(self.focused, MirrorTable):
            self.lead(self.focused)
        self._refresh_panes()

    def on_descendant_blur(self) -> None:
        """Headings show which pane has the focus."""
        self._refresh_panes()

    def _refresh_panes(self) -> None:
        for pane in (self.constraints, self.variables, self.ledger):
            pane.refresh()

    def visit(self, line: int) -> None:
        """Go to a line of either table, numbered as in `lpview.kkt`, and remember it."""
        self.history.visit(self.line, line)
        self.show_line(line)

    def show_line(self, line: int) -> None:
        """Go to a line; filters that hide it are taken off, and that is said."""
        m = self.found.head.model.m
        table = self.constraints if line < m else self.variables
        local = line if line < m else line - m
        self.lead(table)
        table.fold(False)
        if not np.any(table.view.order == local):
            self.clear_limits(table)
            self.say("filters taken off to show the line")
        table.select_line(local)
        self.set_focus(table)
        self.follow_selection(table)

    def takes_key(self, event: events.Key) -> bool:
        """Whether a key was used up before its pane sees it; here none is."""
        return False

    def say(self, text: str) -> None:
        """Put a text on the message line."""
        self.query_one("#message", Static).update(safe(text), layout=False)

    # Moving ------------------------------------------------------------------

    def action_next_pane(self) -> None:
        """Constraints, variables, ledger, and round again."""
        self._step_pane(1)

    def action_previous_pane(self) -> None:
        """The same, backwards."""
        self._step_pane(-1)

    def _step_pane(self, step: int) -> None:
        panes: list[LinesPane] = [self.constraints, self.variables, self.ledger]
        at = panes.index(self.focused) if isinstance(self.focused, LinesPane) else 0
        self.set_focus(panes[(at + step) % len(panes)])

    def action_follow(self) -> None:
        """From a family to its lines, from a line to its partner, from a term to its line."""
        if isinstance(self.focused, MirrorTable) and self.focused.folded:
            self.focused.open_family()
            self.follow_selection(self.focused)
            return
        if isinstance(self.focused, MirrorTable) and not self.focused.line_count:
            self.say("no line is shown; Escape takes the filters off")
            return
        if isinstance(self.focused, LedgerPane):
            target = self.ledger.partner_line(self.ledger.cursor)
        else:
            target = self.ledger.partner_line(0)
        if target is None:
            self.say("this line shares no coefficient with any other")
        else:
            self.visit(target)

    def on_lines_pane_chosen(self) -> None:
        """A double click follows like Enter."""
        self.action_follow()

    def action_back(self) -> None:
        """The line visited before."""
        self._travel(self.history.back(self.line), "no line was visited before this one")

    def action_forward(self) -> None:
        """The line visited after."""
        self._travel(self.history.forward(self.line), "no line was visited after this one")

    def _travel(self, line: int | None, otherwise: str) -> None:
        if line is None:
            self.say(otherwise)
        else:
            self.show_line(line)

    def action_next_flagged(self) -> None:
        """The next line with any flag but zero slack."""
        self._to_flagged(1)

    def action_previous_flagged(self) -> None:
        """The one before."""
        self._to_flagged(-1)

    def _to_flagged(self, step: int) -> None:
        table = self.leading
        table.fold(False)
        flags = self.marks.flags
        any_flag = np.zeros(self.marks.room.size, dtype=bool)
        for flag, mask in flags.items():
            any_flag |= mask if flag is not Flag.ZERO_SLACK else False
        hits = np.flatnonzero(any_flag[table.first_line + table.view.order])
        here = table.view.position
        ahead = hits[hits > here] if step > 0 else hits[hits < here][::-1]
        if not ahead.size:
            self.say("no further flagged line in this table")
            return
        table.move_to(int(ahead[0]))
        words = self.marks.of(self.line)
        self.say(", ".join(flag.value for flag in words))

    def clear_limits(self, table: MirrorTable) -> None:
        """Take off search, filters, the open family and the link."""
        table.view.limit_to_words("")
        table.view.limit_to_flag("", None)
        table.view.limit_to_family("", None)
        table.view.limit_to_linked("", None)
        table.to_selected()
