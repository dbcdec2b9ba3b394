"""Screens of text: every outcome other than an answer, bad input, and help."""

from __future__ import annotations

from typing import ClassVar

from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.containers import VerticalScroll
from textual.screen import Screen
from textual.widgets import Footer, Static

from lpview.outcomes import Examination, NoOptimum, NotEstablished, Optimal, Stopped
from lpview.repair.search import Infeasible
from lpview.screen.keys import groups


class TextScreen(Screen[None]):
    """Text that scrolls, and how to leave it."""

    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("q,ctrl+q", "app.quit", "Quit"),
    ]

    DEFAULT_CSS = "TextScreen VerticalScroll { padding: 0 1; }"

    def __init__(self, text: str) -> None:
        super().__init__()
        self.text = text

    def compose(self) -> ComposeResult:
        """The text, literally."""
        with VerticalScroll():
            yield Static(self.text, id="text", markup=False)
        yield Footer(show_command_palette=False)


class MessageScreen(TextScreen):
    """What the command line would have printed, and what to do."""

    def __init__(self, text: str) -> None:
        super().__init__(f"{text}\n\nNothing was solved. Mend the model and open it again.")


class OutcomeScreen(TextScreen):
    """The report of a model without an optimum, or without a result."""

    def __init__(self, found: Examination) -> None:
        from lpview.report import text
        from lpview.report.check import report

        self.found = found
        super().__init__(f"{text.render(report(found))}\n{what_to_do(found)}")


def what_to_do(found: Examination) -> str:
    """Advice for every outcome that is not an answer."""
    if isinstance(found, NoOptimum) and isinstance(found.certificate, Infeasible):
        return (
            "What to do: the lines above cannot all hold. Loosen one of them, or look for a "
            "typing error in one."
        )
    if isinstance(found, NoOptimum):
        return "What to do: a limit on the columns above is missing, or a cost has the wrong sign."
    if isinstance(found, Stopped):
        return (
            "What to do: open the model again, with more --time-limit SECONDS if that was the "
            "end of it."
        )
    if isinstance(found, NotEstablished):
        return (
            "What to do: try another --method, or look for numbers of very different size in "
            "the model."
        )
    return ""


class PageScreen(TextScreen):
    """A page that lies over another screen and is left with Escape."""

    BINDINGS: ClassVar[list[BindingType]] = [Binding("escape,question_mark,f1", "leave", "Close")]

    def action_leave(self) -> None:
        """Back to what lies below."""
        self.dismiss()


def help_text() -> str:
    """All keys on one page, from the one table of keys."""
    wide = max(len(key) for _, keys in groups() for key, _ in keys)
    lines = ["Arrows, page up and down, home and end move; the mouse works too.", ""]
    for heading, keys in groups():
        lines.append(heading)
        lines += [f"  {key:<{wide}}  {words}" for key, words in keys]
        lines.append("")
    return "\n".join([*lines, MARKS])


MARKS = """Marks of the spine
  left filled: slack beyond the zero tolerance; right filled: a price beyond it
  none filled: both zero; = an equality row or fixed column, which has no such pair
  ! left: a violated side; ! right: a price of the wrong sign; a cross: product not zero
Marks of prices
  * after a price: it is not unique; a dot: not examined yet
  up, down: change of the objective per unit more, if the side or bound moves that way;
  no plan: the smallest such move leaves none"""


def screen_for(found: Examination, ascii_marks: bool) -> Screen[None] | Screen[int | None]:
    """The screen that shows an outcome."""
    if isinstance(found, Optimal):
        from lpview.screen.mirror import MirrorScreen

        return MirrorScreen(found, ascii_marks)
    return OutcomeScreen(found)
