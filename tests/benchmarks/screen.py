"""How quickly the screen opens and follows the keys, at any size of model.

    python -m tests.benchmarks.screen [--lines N ...] [--screens 120x40 80x24] [--quick]
    python -m tests.benchmarks.screen --start-up [--repeats N]

Runs the program in a real pseudo-terminal and presses keys; `tests.benchmarks.timed`
says when a frame counts as finished, `tests.benchmarks.models` what is shown: as many
rows as columns, ten coefficients in each row, and one row across all columns.

Beside it stands a bare program of the same widget library that shows one label, which
changes with every key: no program is quicker on this machine as busy as it is.

Memory is what the whole program holds beyond the examination: resident memory once
every key was pressed, and at most, less that of the process when the examination was
built and nothing of the screen was imported.

Start-up alternates the shipped example with the bare program, and compares neighbours;
the mirror itself comes a moment later.

Always ends with exit status 0: figures, not a test.
"""

from __future__ import annotations

import argparse
import statistics
import sys
import tempfile
import time
from collections.abc import Callable, Iterator, Sequence
from pathlib import Path

from tests.benchmarks.models import WIDE_ROW
from tests.benchmarks.screen_child import resident
from tests.benchmarks.session import Session, goal, goals, summary, table
from tests.benchmarks.timed import Shown, TimedTerminal

ROOT = Path(__file__).resolve().parents[2]
LINES = (1_000, 10_000, 100_000)
CHILD = [sys.executable, "-m", "tests.benchmarks.screen_child"]
LPVIEW = [sys.executable, "-m", "lpview", "models/winter.csv"]
BARE = """
from textual.app import App
from textual.widgets import Label

class Bare(App):
    keys = 0

    def compose(self):
        yield Label("one label")

    def on_key(self):
        self.keys += 1
        self.query_one(Label).update(f"key {self.keys}")

Bare().run()
"""

OPENED, PANE, WORKING = "CONSTRAINT", "CONSTRAINT ", "winter.csv"
"""Words that stand on the screen: of the mirror, before the place in its leading table, of
the first frame."""
FOLD, SORT, SEARCH, GO_TO, FOLLOW, BACK, LINKED = "f", "s", "/", "g", "enter", "[", "l"
"""Keys of the screen, in one place."""

LONG_QUIET = 0.3
"""Seconds of quiet after keys that may start long work in several frames."""


def place(terminal: TimedTerminal) -> str:
    """The leading table's line on what is shown: place, filters, sort."""
    return next((line for line in terminal.lines if PANE in line), "")


def moved_from(before: str) -> Shown:
    """Whether that line has changed."""
    return lambda terminal: place(terminal) not in ("", before)


def says(words: str) -> Shown:
    """Whether that line has some words."""
    return lambda terminal: words in place(terminal)


def moves(session: Session, name: str, terminal: TimedTerminal, keys: Sequence[str]) -> None:
    """Press keys each of which changes the leading table's line."""
    for key in keys:
        session.timed(name, terminal, key, moved_from(place(terminal)))


def run(lines: int, columns: int, rows: int, count: int) -> Session:
    """Open a model of so many lines and press every measured key."""
    session = Session(lines, columns, rows)
    with tempfile.TemporaryDirectory() as folder:
        log = Path(folder) / "log"
        words = [*CHILD, str(lines), str(log)]
        with TimedTerminal(words, columns, rows, cwd=ROOT) as terminal:
            _open(session, terminal, log)
            for part in (_move, _link, _sort, _search):
                part(session, terminal, count)
            before = int(log.read_text().split()[1])
            process = str(terminal.process.pid)
            session.memory = {
                "at rest": resident("VmRSS", process) - before,
                "at most": resident("VmHWM", process) - before,
            }
            terminal.press("q")
            terminal.wait_until_ended()
    return session


def _open(session: Session, terminal: TimedTerminal, log: Path) -> None:
    terminal.wait_for("synthetic.csv", timeout=120)
    shown = terminal.finished(lambda seen: OPENED in seen.text, 0.5)
    solved = float(log.read_text().split()[3])
    session.times["first full frame"] = [shown - solved]
    while "family" in place(terminal):
        session.timed("unfold", terminal, FOLD, moved_from(place(terminal)), LONG_QUIET)


def _move(session: Session, terminal: TimedTerminal, count: int) -> None:
    terminal.timed_press("pagedown", moved_from(place(terminal)))  # from here on it scrolls
    moves(session, "one line down", terminal, ["down"] * count)
    moves(session, "one page down", terminal, ["pagedown"] * (count // 2))
    moves(session, "last, first line", terminal, ["end", "home"] * (count // 10))


def _link(session: Session, terminal: TimedTerminal, count: int) -> None:
    """Over the row with all columns, and to a linked line and back."""
    line = session.lines // 2 + 1
    terminal.press(GO_TO)
    terminal.wait_for("go to")
    terminal.read_until_quiet(LONG_QUIET)
    terminal.press(*str(line - 1), "enter")
    terminal.finished(says(f" {line - 1} of "), LONG_QUIET)
    moves(session, f"onto row {WIDE_ROW}", terminal, ["down", "up"] * (count // 10))
    del session.times[f"onto row {WIDE_ROW}"][1::2]
    terminal.press("pageup")
    terminal.read_until_quiet(LONG_QUIET)
    for _ in range(count // 10):
        for name, key in (("follow a link", FOLLOW), ("back", BACK)):
            before = terminal.text
            session.timed(name, terminal, key, lambda seen, b=before: seen.text != b, LONG_QUIET)


def _sort(session: Session, terminal: TimedTerminal, count: int) -> None:
    """By every column in turn, until the lines stand in the order of the file again."""
    for _ in range(max(count // 20, 1)):
        while True:
            session.timed("sort", terminal, SORT, moved_from(place(terminal)), LONG_QUIET)
            if " by " not in place(terminal):
                break


def _search(session: Session, terminal: TimedTerminal, count: int) -> None:
    """Letter by letter, as it is typed."""
    for word in ("site 7", "heat", "week 5", "[s")[: max(count // 15, 1)]:
        terminal.press(SEARCH)
        terminal.wait_for("search")
        terminal.read_until_quiet(LONG_QUIET)
        for place_, letter in enumerate(word):
            typed = word[: place_ + 1].strip()
            shown = says(f"name has {typed}")
            name = "search, first letter" if not place_ else "search, next letter"
            session.timed(name, terminal, letter, shown, LONG_QUIET, styles=False)
        terminal.press("escape")
        terminal.finished(lambda seen: "name has" not in place(seen), LONG_QUIET)


def run_bare(columns: int, rows: int, count: int) -> Session:
    """The least that a key can take: one label changes."""
    session = Session(0, columns, rows)
    with TimedTerminal([sys.executable, "-c", BARE], columns, rows, cwd=ROOT) as terminal:
        terminal.wait_for("one label")
        terminal.read_until_quiet(LONG_QUIET)
        for number in range(1, count + 1):
            session.timed("one line down", terminal, "down", _has(f"key {number}"))
    return session


# Start-up --------------------------------------------------------------------


def start_up(columns: int, rows: int, repeats: int) -> Iterator[str]:
    """Process start to first frame of both programs, and to the mirror."""
    _started(LPVIEW, columns, rows, WORKING, OPENED)  # compiles, and warms the caches
    bare, first, full = [], [], []
    for _ in range(repeats):
        bare += _started([sys.executable, "-c", BARE], columns, rows, "one label")
        one, two = _started(LPVIEW, columns, rows, WORKING, OPENED)
        first.append(one)
        full.append(two)
    yield f"{columns}x{rows}, process start to frame, milliseconds: median / 95th percentile"
    for name, times in (("bare, first", bare), ("lpview, first", first), ("lpview, mirror", full)):
        yield f"  {name:24}{summary(times):>22}"
    ratios = [a / b for a, b in zip(first, bare, strict=True)]
    yield goal("first frame over bare, median of neighbours", statistics.median(ratios), 1.3)


def _started(words: Sequence[str], columns: int, rows: int, *texts: str) -> list[float]:
    started = time.monotonic()
    with TimedTerminal(words, columns, rows, cwd=ROOT) as terminal:
        return [terminal.first(_has(text)) - started for text in texts]


def _has(text: str) -> Callable[[TimedTerminal], bool]:
    return lambda terminal: text in terminal.text


def _options() -> argparse.Namespace:
    parser = argparse.ArgumentParser(description=(__doc__ or "").split("\n\n")[0])
    parser.add_argument("--lines", nargs="+", type=int, default=LINES)
    parser.add_argument("--screens", nargs="+", default=["120x40", "80x24"])
    parser.add_argument("--quick", action="store_true", help="a third of the key presses")
    parser.add_argument("--start-up", action="store_true", help="only start-up")
    parser.add_argument("--repeats", type=int, default=15, help="starts of each program")
    return parser.parse_args()


def main() -> None:
    """Measure and print."""
    options = _options()
    for size in options.screens:
        columns, rows = map(int, size.split("x"))
        if not options.start_up:
            count = 20 if options.quick else 60
            sessions = [run(lines, columns, rows, count) for lines in options.lines]
            bare = run_bare(columns, rows, count)
            lines = *table([bare, *sessions], columns, rows), *goals(sessions)
            print(*lines, sep="\n", flush=True)
        print(*start_up(columns, rows, options.repeats), "", sep="\n", flush=True)


if __name__ == "__main__":
    main()
