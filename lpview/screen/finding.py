"""Finding lines: search, go to, filters, sorting, folding; the prompt that asks for words."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from textual import events
from textual.widgets import Input, Static

from lpview.marks import NEED_PRICES, Flag
from lpview.report.numbers import count
from lpview.screen.key_line import KeyLine
from lpview.screen.keys import FOOTER, PROMPT
from lpview.screen.linked import LinkedScreen
from lpview.screen.price_book import State


class FindingScreen(LinkedScreen):
    """Linked panes whose lines can be searched, filtered, sorted and folded."""

    _typed_ahead = 0
    """Where in the prompt the letters end that were typed before it had the focus."""

    @property
    def is_asking(self) -> bool:
        """Whether the prompt is open."""
        return bool(self._prompt_for)

    def action_search(self) -> None:
        """Ask for words; the table follows while they are typed."""
        view = self.leading.view
        self.ask("search", f"words of a {view.searched}", view.search)

    def action_go_to(self) -> None:
        """Ask for a line number."""
        self.ask("go to", "number of a line", "")

    def ask(self, purpose: str, hint: str, value: str) -> None:
        """Open the prompt; `take_answer` gets what was typed."""
        self._prompt_for = purpose
        prompt = self.query_one("#prompt", Input)
        prompt.placeholder = f"{purpose}: {hint}; Enter keeps it, Escape leaves"
        prompt.value = value
        prompt.cursor_position = self._typed_ahead = len(value)
        prompt.display = True
        self.query_one("#message", Static).display = False
        self.query_one(KeyLine).show(PROMPT)
        self.set_focus(prompt)

    def takes_key(self, event: events.Key) -> bool:
        """Open a prompt at once, and give it what is typed before it has the focus.

        Keys wait in the queue of the pane that had the focus when they were pressed;
        a fast typist's first letters would be taken for commands there.
        """
        if self._prompt_for:
            prompt = self.query_one("#prompt", Input)
            if event.is_printable and event.character:
                # Before whatever the prompt has got by itself in the meantime.
                cursor = prompt.cursor_position + 1
                prompt.insert(event.character, self._typed_ahead)
                prompt.cursor_position = cursor
                self._typed_ahead += 1
            elif event.key == "enter":
                self.action_submit_prompt()
            elif event.key == "escape":
                self.action_leave()
            return True
        asks = self.prompts.get(event.key)
        if asks:
            asks()
        return asks is not None

    @property
    def prompts(self) -> dict[str, Callable[[], None]]:
        """Keys that open a prompt, with what opens it."""
        return {"slash": self.action_search, "g": self.action_go_to}

    def _close_prompt(self) -> None:
        self.query_one("#prompt", Input).display = False
        self.query_one("#message", Static).display = True
        self.query_one(KeyLine).show(FOOTER)
        self._prompt_for = ""
        self.set_focus(self.leading)

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
        """Take the answer for what was asked."""
        purpose, text = self._prompt_for, event.value
        self._close_prompt()
        self.take_answer(purpose, text)

    def take_answer(self, purpose: str, text: str) -> None:
        """Keep the search, or go to the line."""
        if purpose == "search":
            view = self.leading.view
            found = count(view.order.size, "line")
            self.say(f"{found} with {view.search} in the {view.searched}" if text.strip() else "")
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
        mask = self.marks.flags.get(Flag[name]) if name else None
        if name and mask is None:
            self.say(f"{Flag[name].value}: {self._why_unknown(Flag[name])}")
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

    def _why_unknown(self, flag: Flag) -> str:
        if flag in NEED_PRICES and self.book.state is not State.NONE:
            return "not known yet"
        return self.book.reason if flag in NEED_PRICES else "not known without a basis"

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
        self.clear_limits(table)
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
        self.clear_limits(self.leading)
        self.follow_selection(self.leading)
        self.say("")
