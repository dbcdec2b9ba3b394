"""Long work in a real pseudo-terminal: the progress line, and Ctrl-C."""

from __future__ import annotations

import os
import pty
import sys
import threading

import pytest

from lpview.progress import watched
from lpview.run import Watch

WAITING = """
from lpview.progress import watched
from lpview.run import Watch
watch = Watch(iterations=7)
print("stopped:", watched(lambda: watch.stop.wait(60), watch, "winter"))
"""


def test_progress_shows_after_a_second_and_control_c_ends_cleanly():
    pid, terminal = pty.fork()
    if pid == 0:
        os.execv(sys.executable, [sys.executable, "-c", WAITING])
    seen = b""
    while b"winter: solving, 1 s, iteration 7" not in seen:
        seen += os.read(terminal, 1000)
    os.write(terminal, b"\x03")
    try:
        while chunk := os.read(terminal, 1000):
            seen += chunk
    except OSError:  # how a pseudo-terminal says that the program has left
        pass
    assert os.waitstatus_to_exitcode(os.waitpid(pid, 0)[1]) == 0
    assert seen.endswith(b"\r\x1b[Kstopped: True\r\n")
    assert b"Traceback" not in seen


def test_work_is_done_elsewhere_and_its_result_comes_back(capsys):
    assert watched(threading.current_thread, Watch(), "x") is not threading.current_thread()
    assert capsys.readouterr().err == ""


def test_an_exception_of_the_work_is_raised_here():
    def work() -> None:
        raise LookupError("inside")

    with pytest.raises(LookupError, match="inside"):
        watched(work, Watch(), "x")
