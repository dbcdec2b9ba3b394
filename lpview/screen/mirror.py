"""The mirror: one examined model at the keyboard, with its pages and what is taken away."""

from __future__ import annotations

from textual import work
from textual.message import Message
from textual.worker import get_current_worker

from lpview.screen import ticket
from lpview.screen.outcome import PageScreen, help_text
from lpview.screen.proved_screen import ProvedScreen

TURNING = "turning the mirror; Escape gives up"
"""Said while the dual is rebuilt and checked."""


class MirrorScreen(ProvedScreen):
    """Linked panes, finding in them, prices found meanwhile, pages over them, tickets from them."""

    _turning = False

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
        """The dual program as the model under review, and back.

        Seconds of work on a model of a million coefficients, so a thread does it.
        """
        if self._turning:
            self.say(TURNING)
            return
        self._turning = True
        self.rest_prices()
        self.say(TURNING)
        self._turn_aside(self.line)

    @work(thread=True, exclusive=True, group="turning")
    def _turn_aside(self, line: int) -> None:
        from lpview import turned
        from lpview.cli import told
        from lpview.screen.turning import TurnedScreen

        try:
            page = TurnedScreen(turned.turn(self.found), line, self.ascii_marks)
        except Exception as error:  # said in a line; the terminal sees no traceback
            self.post_message(self.Ready(None, told(error)[0]))
            return
        if not get_current_worker().is_cancelled:
            self.post_message(self.Ready(page, ""))

    class Ready(Message):
        """The dual is there to be looked at, or what went wrong instead."""

        def __init__(self, page: MirrorScreen | None, problem: str) -> None:
            super().__init__()
            self.page, self.problem = page, problem

    def on_mirror_screen_ready(self, message: Ready) -> None:
        """Show the dual, unless Escape was pressed meanwhile."""
        if self._turning:
            self._turning = False
            self.say(message.problem)
            if message.page:
                self.app.push_screen(message.page, self._go_to_result)
            else:
                self.examine_prices()

    def action_leave(self) -> None:
        """Give up turning; else what it does in the linked panes."""
        if self._turning and not self.is_asking:
            self._turning = False
            self.workers.cancel_group(self, "turning")
            self.examine_prices()
            self.say("the mirror was not turned")
            return
        super().action_leave()

    def action_ticket(self, form: str) -> None:
        """Save the check and send it to the terminal's clipboard."""
        self.say(ticket.take(self.app, self.found, form))

    def action_copy_ledger(self) -> None:
        """Save this line's ledger and send it to the terminal's clipboard."""
        if self.line < 0:
            self.say("there is no line to copy")
        else:
            prices = self.book.line(self.line)
            self.say(ticket.take_ledger(self.app, self.found, self.line, prices))

    async def action_quit(self) -> None:
        """Leave the program."""
        await self.app.action_quit()
