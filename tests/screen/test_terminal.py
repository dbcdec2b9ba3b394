"""The pseudo-terminal and emulator themselves, which all tests of the screen rest on."""

from __future__ import annotations

import sys

import pytest
from wcwidth import wcswidth

from tests.screen.emulator import Emulator
from tests.screen.terminal import Terminal

APP = """
import sys
from textual.app import App
from textual.binding import Binding
from textual.widgets import Static

class Small(App):
    BINDINGS = [
        Binding("q", "quit_with(7)"), Binding("c", "copy"), Binding("down", "say('went down')"),
        Binding("escape", "say('left')"), Binding("ctrl+c", "say('control c')"),
        Binding("shift+tab", "say('back')", priority=True),
    ]

    def compose(self):
        yield Static("", id="size", markup=False)
        yield Static("日本 [bold]", id="name", markup=False)
        yield Static("nothing yet", id="said", markup=False)

    def on_resize(self, event):
        self.query_one("#size").update(f"{event.size.width} by {event.size.height}")

    def on_click(self, event):
        self.action_say(f"clicked {event.screen_x},{event.screen_y}")

    def action_say(self, text):
        self.query_one("#said").update(text)

    def action_copy(self):
        self.copy_to_clipboard("grüße\\nline 2\\n")
        self.action_say("copied")

    def action_quit_with(self, status):
        self.exit(status)

sys.exit(Small().run())
"""

UNCLEAN = r"""
print("\x1b[?1049h\x1b[?1003h\x1b[?2004h\x1b[?25l\x1b[31;1mred\x1b[0m plain", end="", flush=True)
import sys, termios
flags = termios.tcgetattr(0)
flags[3] &= ~termios.ECHO
termios.tcsetattr(0, termios.TCSANOW, flags)
input()
raise SystemExit(3)
"""


def python(text: str, **options) -> Terminal:
    return Terminal([sys.executable, "-c", text], **options)


def test_a_widget_program_is_driven_and_leaves_the_terminal_clean():
    with python(APP, columns=60, rows=10) as terminal:
        terminal.wait_for("60 by 10")
        terminal.press("down")
        terminal.wait_for("went down")
        terminal.press("shift+tab")
        terminal.wait_for("back")
        terminal.press("ctrl+c")
        terminal.wait_for("control c")
        terminal.click(3, 5)
        terminal.wait_for("clicked 3,5")
        terminal.press("escape")
        terminal.wait_for("left")
        # Only now: the program asks whether it may mark frames, and draws before the answer.
        assert terminal.emulator.frames > 0, "frames are not marked: waiting may see half of one"
        terminal.press("c")
        terminal.wait_for("copied")
        assert terminal.clipboard == "grüße\nline 2\n"
        assert terminal.overflows == 0
        terminal.resize(40, 8)
        terminal.wait_for(lambda shown: "40 by 8" in shown.text and "日本" in shown.lines[1])
        assert [wcswidth(line) for line in terminal.lines] == [40] * 8
        assert terminal.lines[1].rstrip() == "日本 [bold]"
        assert [terminal.cell(x, 1).char for x in range(5)] == ["日", "", "本", "", " "]
        assert terminal.places("[") == [(5, 1)]
        assert "alternate screen" in terminal.left_on and "mouse tracking" in terminal.left_on
        terminal.press("q")
        assert terminal.exit_status == 7
        assert terminal.left_clean()


def test_a_program_that_leaves_the_terminal_unclean_is_found_out():
    with python(UNCLEAN) as terminal:
        terminal.wait_for("plain")
        cell = terminal.cell(0, 0)
        assert (cell.char, cell.fg, cell.bold, cell.reverse) == ("r", "red", True, False)
        assert (terminal.cell(4, 0).fg, terminal.cell(4, 0).bold) == ("default", False)
        terminal.press("yes", "enter")
        assert terminal.exit_status == 3
        with pytest.raises(AssertionError) as failure:
            terminal.left_clean()
        assert str(failure.value) == (
            "left switched on: alternate screen, mouse tracking, bracketed paste, "
            "hidden cursor, line settings"
        )


def test_control_c_and_a_hang_up_reach_a_plain_program():
    waiting = "print('ready', flush=True); import time; time.sleep(60)"
    with python(waiting) as terminal:
        terminal.wait_for("ready")
        terminal.press("ctrl+c")
        terminal.wait_for("KeyboardInterrupt")
        assert terminal.exit_status != 0
    with python(waiting) as terminal:
        terminal.wait_for("ready")
        terminal.hang_up()
        assert terminal.exit_status == -1
        assert terminal.left_clean()
    with python(waiting) as terminal:
        terminal.wait_for("ready")
        assert terminal.close_window() == -1


def test_what_does_not_come_is_told_with_the_screen():
    with python("print('only this')") as terminal:
        with pytest.raises(AssertionError) as failure:
            terminal.wait_for("something else")
        assert str(failure.value) == (
            "'something else' did not come before the program ended; the screen:\nonly this"
            + "\n" * 23
        )
    with python("input()") as terminal, pytest.raises(AssertionError, match=r"within 0\.05 s"):
        terminal.wait_for("something else", timeout=0.05)


def test_the_last_words_of_a_program_are_read_and_its_environment_is_as_asked():
    text = (
        "import os; print(os.get_terminal_size(), os.environ.get('TERM'), os.environ.get('LANG'))"
    )
    with python(text, columns=100, rows=5, env={"TERM": "vt100", "LANG": None}) as terminal:
        assert terminal.exit_status == 0
        size = "os.terminal_size(columns=100, lines=5)"
        assert terminal.lines[0].rstrip() == f"{size} vt100 None"


def test_escape_before_another_key_is_refused():
    with python("input()") as terminal, pytest.raises(ValueError, match="escape"):
        terminal.press("escape", "q")


def test_bytes_may_be_cut_anywhere():
    data = (
        "\x1b[?1049h\x1b[>25u\x1b[?2026$p\x1b[2;3H\x1b[38;2;1;2;3mé日x\u200dy\x1b[m"
        "\x1b]52;c;aGk=\x07\x1b]0;title\x1b\\\x1b[<u\x1b[?25l"
    ).encode()
    whole, pieces = Emulator(20, 3), Emulator(20, 3)
    whole.feed(data)
    for number in data:
        pieces.feed(bytes([number]))
    for emulator in (whole, pieces):
        assert emulator.lines[1] == "  é日xy" + " " * 13
        assert emulator.cell(2, 1).fg == "010203"
        assert emulator.clipboard == "hi"
        assert emulator.answers == [b"\x1b[?2026;2$y"]
        assert emulator.left_on == ("alternate screen", "hidden cursor")
        assert emulator.lines[0] == emulator.lines[2] == " " * 20


def test_leaving_the_alternate_screen_shows_what_stood_there_before():
    emulator = Emulator(12, 2)
    emulator.feed(b"before\x1b[?1049hinside")
    assert emulator.lines[0] == "inside      "
    emulator.feed(b"\x1b[?1049l after")
    assert emulator.lines[0] == "before after"


def test_text_beyond_the_last_column_is_counted():
    emulator = Emulator(4, 2)
    emulator.feed(b"\x1b[?7labcd")
    assert emulator.overflows == 0
    emulator.feed(b"\x1b[1;4H\xe6\x97\xa5")
    assert emulator.overflows == 1
