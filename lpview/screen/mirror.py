"""The mirror: one examined model at the keyboard, with its pages and what is taken away."""

from __future__ import annotations

from lpview.screen import ticket
from lpview.screen.finding import FindingScreen
from lpview.screen.outcome import PageScreen, help_text


class MirrorScreen(FindingScreen):
    """Linked panes, finding in them, pages over them, tickets from them."""

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
