"""The mirror: verdict strip, constraints, variables and ledger, linked by one selection.

The table that was moved in last *leads*: its selected line lights up its partners in
the other table and fills the ledger, in the same frame (the panes call
`MirrorScreen.follow_selection` synchronously; the `Moved` message is for others).
"""

from __future__ import annotations

from typing import ClassVar

import numpy as np
from textual import events
from textual.app import ComposeResult
from textual.binding import BindingType
from textual.screen import Screen
from textual.widgets import Input, Static

from lpview.examination import Optimal
from lpview.families import Kind, summarize
from lpview.marks import Flag
from lpview.report.names import line_name, safe
from lpview.report.numbers import count
from lpview.screen import ticket
from lpview.screen.columns import constraint_columns, variable_columns
from lpview.screen.history import History
from lpview.screen.key_line import KeyLine
from lpview.screen.keys import FOOTER, PROMPT, bindings
from lpview.screen.ledger_pane import LedgerPane
from lpview.screen.outcome import PageScreen, help_text
from lpview.screen.pane import LinesPane
from lpview.screen.spine import ASCII, ROUND
from lpview.screen.strip import VerdictStrip
from lpview.screen.table import Link, MirrorTable

FOLD_ABOVE = 500
"""Models of more lines open folded into families."""


class MirrorScreen(Screen[int | None]):
    """One examined model at the keyboard."""

    BINDINGS: ClassVar[list[BindingType]] = bindings()

    DEFAULT_CSS = """
    MirrorScreen #message { height: 1; }
    MirrorScreen #prompt { height: 1; border: none; padding: 0; display: none; }
    """

    def __init__(self, found: Optimal, ascii_marks: bool = False) -> None:
        super().__init__()
        self.found = found
        self.ascii_marks = ascii_marks
        glyphs = ASCII if ascii_marks else ROUND
        lp = found.head.model
        rows, columns = summarize(found, Kind.ROW), summarize(found, Kind.COLUMN)
        self.strip = VerdictStrip(found, glyphs)
        self.constraints = MirrorTable(
            found, constraint_columns(found), 0, lp.rows, rows, glyphs, id="constraints"
        )
        self.variables = MirrorTable(
            found, variable_columns(found), lp.m, lp.columns, columns, glyphs, id="variables"
        )
        self.ledger = LedgerPane(found, glyphs, id="ledger")
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
        yield Input(id="prompt", compact=True)
        yield KeyLine(FOOTER)

    def on_mount(self) -> None:
        """Open folded where there are too many lines to read."""
        for table in (self.constraints, self.variables):
            table.share_layout_with(self.other(table))
            table.on_moved = self.follow_selection
        for pane in (self.constraints, self.variables, self.ledger):
            pane.takes_key = self._takes_key
        if self.found.head.model.m + self.found.head.model.n > FOLD_ABOVE:
            for table in (self.constraints, self.variables):
                table.fold(True)
        self.leading.focus()
        self.follow_selection(self.leading)

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
        pane.link = self._link(other)
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

    def _link(self, other: MirrorTable) -> Link:
        """The leading table shows no link column of its own."""
        return Link()

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
            self._clear(table)
            self.say("filters taken off to show the line")
        table.select_line(local)
        table.focus()
        self.follow_selection(table)

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
        panes[(at + step) % len(panes)].focus()

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
        flags = self.found.marks.flags
        any_flag = np.zeros(self.found.marks.room.size, dtype=bool)
        for flag, mask in flags.items():
            any_flag |= mask if flag is not Flag.ZERO_SLACK else False
        hits = np.flatnonzero(any_flag[table.first_line + table.view.order])
        here = table.view.position
        ahead = hits[hits > here] if step > 0 else hits[hits < here][::-1]
        if not ahead.size:
            self.say("no further flagged line in this table")
            return
        table.move_to(int(ahead[0]))
        words = self.found.marks.of(self.line)
        self.say(", ".join(flag.value for flag in words))

    # Finding -----------------------------------------------------------------

    def action_search(self) -> None:
        """Ask for words; the table follows while they are typed."""
        self._ask("search", "words of a name", self.leading.view.search)

    def action_go_to(self) -> None:
        """Ask for a line number."""
        self._ask("go to", "number of a line", "")

    def _ask(self, purpose: str, hint: str, value: str) -> None:
        self._prompt_for = purpose
        prompt = self.query_one("#prompt", Input)
        prompt.placeholder = f"{purpose}: {hint}; Enter keeps it, Escape leaves"
        prompt.value = value
        prompt.display = True
        self.query_one("#message", Static).display = False
        self.query_one(KeyLine).show(PROMPT)
        prompt.focus()

    def _takes_key(self, event: events.Key) -> bool:
        """Open a prompt at once, and give it what is typed before it has the focus.

        Keys wait in the queue of the pane that had the focus when they were pressed;
        a fast typist's first letters would be taken for commands there.
        """
        if self._prompt_for:
            prompt = self.query_one("#prompt", Input)
            if event.is_printable and event.character:
                prompt.insert_text_at_cursor(event.character)
            elif event.key == "enter":
                self.action_submit_prompt()
            elif event.key == "escape":
                self.action_leave()
            return True
        asks = {"slash": self.action_search, "g": self.action_go_to}
        if event.key in asks:
            asks[event.key]()
            return True
        return False

    def _close_prompt(self) -> None:
        self.query_one("#prompt", Input).display = False
        self.query_one("#message", Static).display = True
        self.query_one(KeyLine).show(FOOTER)
        self._prompt_for = ""
        self.leading.focus()

    def on_input_changed(self, event: Input.Changed) -> None:
        """Search as the words are typed."""
        if self._prompt_for == "search":
            table = self.leading
            if table.folded and event.value:
                table.fold(False)
            table.view.limit_to_words(event.value)
            table.to_selected()
            self.follow_selection(table)

    def on_input_submitted(self, event: Input.Submitted) -> None:
        """Keep the search, or go to the line."""
        purpose, text = self._prompt_for, event.value
        self._close_prompt()
        if purpose == "search":
            view = self.leading.view
            found = count(view.order.size, "line")
            self.say(f"{found} with {view.search} in the name" if text.strip() else "")
        elif text.strip().isdigit():
            self.leading.fold(False)
            self.leading.move_to(int(text) - 1)
        else:
            self.say(f"expected the number of a line, got {text or 'nothing'}")

    def action_submit_prompt(self) -> None:
        """What Enter does in the prompt, for a click on its key."""
        prompt = self.query_one("#prompt", Input)
        self.on_input_submitted(Input.Submitted(prompt, prompt.value))

    def action_filter(self, name: str) -> None:
        """Show only lines of the leading table that carry a flag; none shows all."""
        table = self.leading
        mask = self.found.marks.flags.get(Flag[name]) if name else None
        if name and mask is None:
            self.say(f"{Flag[name].value}: not known without a basis")
            return
        table.fold(False)
        if mask is None:
            table.view.limit_to_flag("", None)
        else:
            part = mask[table.first_line : table.first_line + len(table.view.names)]
            if not part.any():
                elsewhere = int(np.count_nonzero(mask))
                there = f"; {elsewhere} in the other table" if elsewhere else ""
                self.say(f"{Flag[name].value}: no line of this table{there}")
                return
            table.view.limit_to_flag(Flag[name].value, part)
        table.to_selected()
        self.follow_selection(table)
        self.say(count(table.view.order.size, "line") if name else "")

    def action_sort(self) -> None:
        """By the next column."""
        self.leading.sort_by_next()

    def action_reverse(self) -> None:
        """The other way round."""
        view = self.leading.view
        self.leading.sort_by(view.sort_word, not view.descending)

    def action_linked(self) -> None:
        """Only linked lines in the other table, or all of them."""
        self.only_linked = not self.only_linked
        other = self.other(self.leading)
        if not self.only_linked:
            other.limit_to_linked("", None)
        self.follow_selection(self.leading)
        self.say("other table: only linked lines" if self.only_linked else "other table: all lines")

    def action_fold(self) -> None:
        """Families, or lines."""
        table = self.leading
        self._clear(table)
        table.fold(not table.folded)
        self.follow_selection(table)

    def action_leave(self) -> None:
        """Close the prompt, or take off what limits the leading table."""
        if self._prompt_for:
            if self._prompt_for == "search":
                self.leading.view.limit_to_words("")
                self.leading.to_selected()
            self._close_prompt()
            return
        self._clear(self.leading)
        self.follow_selection(self.leading)
        self.say("")

    def _clear(self, table: MirrorTable) -> None:
        table.view.limit_to_words("")
        table.view.limit_to_flag("", None)
        table.view.limit_to_family("", None)
        table.view.limit_to_linked("", None)
        table.to_selected()

    # Showing and taking away -------------------------------------------------

    def action_help(self) -> None:
        """All keys on one page."""
        self.app.push_screen(PageScreen(help_text()))

    def action_check(self) -> None:
        """The whole residual check; its worst lines are links."""
        from lpview.screen.check_page import CheckPage

        self.app.push_screen(CheckPage(self.found), self._go_to_result)

    def action_picture(self) -> None:
        """The sparsity pattern."""
        from lpview.screen.picture_screen import PictureScreen

        page = PictureScreen(self.found, self.line, self.ascii_marks)
        self.app.push_screen(page, self._go_to_result)

    def _go_to_result(self, line: int | None) -> None:
        if line is not None and line >= 0:
            self.visit(line)

    def action_turn(self) -> None:
        """The dual program as the model under review, and back."""
        from lpview.screen.turning import turned_screen

        self.app.push_screen(turned_screen(self), self._go_to_result)

    def action_ticket(self, form: str) -> None:
        """Save the check and send it to the terminal's clipboard."""
        self.say(ticket.take(self.app, self.found, form))

    def action_copy_ledger(self) -> None:
        """Save this line's ledger and send it to the terminal's clipboard."""
        if self.line < 0:
            self.say("there is no line to copy")
        else:
            self.say(ticket.take_ledger(self.app, self.found, self.line))

    async def action_quit(self) -> None:
        """Leave the program."""
        await self.app.action_quit()

    def describe(self) -> str:
        """The selected line in words, for tests and messages."""
        return line_name(self.found.head.model, self.line) if self.line >= 0 else "no line"
