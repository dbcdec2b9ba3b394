"""The mirror turned round: a screen on the dual, and the line to come back to."""

from __future__ import annotations

from typing import ClassVar

from textual.binding import Binding, BindingType

from lpview.screen.mirror import MirrorScreen
from lpview.turned import Turned


class TurnedScreen(MirrorScreen):
    """The rebuilt dual program as the model under review, on top of its original."""

    BINDINGS: ClassVar[list[BindingType]] = [Binding("d", "turn", "Turn back")]

    def __init__(self, turned: Turned, line: int, ascii_marks: bool) -> None:
        super().__init__(turned.found, ascii_marks)
        self._turned = turned
        self._first = int(turned.to_dual[line]) if line >= 0 else -1

    def on_mount(self) -> None:
        """Open on the partner of the line that was selected."""
        super().on_mount()
        if self._first >= 0:
            self.show_line(self._first)
        else:
            self.say("the line selected before has no partner in the dual")

    def action_turn(self) -> None:
        """Back to the model, on the partner of the line selected here."""
        self.dismiss(int(self._turned.to_primal[self.line]) if self.line >= 0 else None)
