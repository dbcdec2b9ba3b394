"""A whole review in a real pseudo-terminal, with keys alone."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

from tests.screen import models
from tests.screen.terminal import Terminal

LPVIEW = [sys.executable, "-m", "lpview"]


def check_output(*words: str) -> str:
    done = subprocess.run(
        [*LPVIEW, "check", *words], capture_output=True, check=False, encoding="utf-8"
    )
    return done.stdout


@pytest.fixture
def season(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> str:
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("PYTHONPATH", str(models.ROOT))
    (tmp_path / "season.csv").write_bytes(models.SEASON.read_bytes())
    return "season.csv"


def test_a_whole_review(season):
    with Terminal([*LPVIEW, season], columns=80, rows=24) as terminal:
        terminal.wait_for("CONSTRAINT  1 of 108")
        # One frame holds the row, its slack and dual value, and two linked reduced costs.
        report = json.loads(check_output(season, "--format", "json"))
        row = report["constraints"][0]
        picked = next(line for line in terminal.lines if row["row"] in line and "▸" in line)
        assert f"{row['slack']:g}" in picked.split() and f"{row['dual_value']:g}" in picked.split()
        linked = [
            line
            for line in report["variables"]
            if line["column"] in ("store[cucumber,week 1]", "ship[cucumber,Starrow,week 1]")
        ]
        for variable in linked:
            name = variable["column"]  # a long one is cut in its middle
            shown = next(
                line
                for line in terminal.lines
                if line[2:].startswith(name[:11]) and f"{name[-11:]} " in line
            )
            # A star may stand behind it.
            assert f"{variable['reduced_cost']:.6g}" in shown.replace("*", " ").split()

        terminal.press("/", *"bench")
        terminal.wait_for("name has bench")
        terminal.press("enter")
        terminal.wait_for("12 lines with bench in the name")
        terminal.press("escape")
        terminal.wait_for("of 108  all")
        terminal.press("1")
        terminal.wait_for("zero slack  ")
        terminal.wait_for("84 lines")
        terminal.press("enter")
        terminal.wait_for("▸ VARIABLE")
        terminal.press("enter")
        terminal.wait_for("▸ CONSTRAINT")
        terminal.press("[")
        terminal.wait_for("▸ VARIABLE")
        terminal.press("c")
        terminal.wait_for("every condition passed at 1e-9 scaled")
        terminal.press("escape")
        terminal.wait_for("▸ VARIABLE")
        terminal.press("t")
        terminal.wait_for("saved: season.ticket.txt; also sent to the terminal's clipboard")
        assert terminal.clipboard == Path("season.ticket.txt").read_text(encoding="utf-8")
        terminal.press("q")
        assert terminal.exit_status == 0
        assert terminal.left_clean()
    assert Path("season.ticket.txt").read_text(encoding="utf-8") == check_output(season)


def test_markdown_ticket_and_ledger_are_what_their_commands_print(season):
    with Terminal([*LPVIEW, season], columns=120, rows=40) as terminal:
        terminal.wait_for("CONSTRAINT  1 of 108")
        terminal.wait_for("not unique")
        terminal.press("m")
        terminal.wait_for("saved: season.ticket.md")
        terminal.press("w")
        terminal.wait_for("saved: season.ledger.txt")
        terminal.press("q")
    markdown = Path("season.ticket.md").read_text(encoding="utf-8")
    assert markdown == check_output(season, "--format", "markdown")
    ledger = Path("season.ledger.txt").read_text(encoding="utf-8")
    assert ledger == check_output(season, "--row", "stock[cucumber,week 1]", "--prices")


def test_from_a_price_that_is_not_unique_to_its_value_curve(season):
    with Terminal([*LPVIEW, season], columns=80, rows=24) as terminal:
        terminal.wait_for("not unique")
        terminal.press("8")
        terminal.wait_for("price not unique  ")
        terminal.press("v")
        terminal.wait_for("concave, as theory demands")
        terminal.wait_for("breakpoint")
        assert terminal.overflows == 0
        terminal.press("escape")
        terminal.wait_for("CONSTRAINT  1 of")
        terminal.press("+", "enter")
        terminal.wait_for("It is one row, so there is nothing to add up.")
        terminal.press("escape")
        terminal.wait_for("CONSTRAINT  1 of")
        terminal.press("q")
        assert terminal.exit_status == 0
        assert terminal.left_clean()


def test_two_keys_to_a_degenerate_row_and_two_more_to_the_ticket(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("PYTHONPATH", str(models.ROOT))
    spring = models.ROOT / "models" / "spring.csv"
    with Terminal([*LPVIEW, str(spring)], columns=80, rows=24) as terminal:
        terminal.wait_for("CONSTRAINT  1 of 3")
        terminal.press("2")
        terminal.wait_for("CONSTRAINT  1 of 1  degenerate")
        terminal.press("t")
        terminal.wait_for("saved: spring.ticket.txt")
        terminal.press("q")
        assert terminal.exit_status == 0


@pytest.mark.parametrize(
    ("name", "status", "text"),
    [
        ("winter-infeasible.csv", 3, "infeasible, certified"),
        ("winter-unbounded.csv", 3, "unbounded, certified"),
    ],
)
def test_other_outcomes_say_what_to_do_and_exit_as_check_does(name, status, text, monkeypatch):
    monkeypatch.setenv("PYTHONPATH", str(models.ROOT))
    with Terminal([*LPVIEW, str(models.ROOT / "models" / name)], columns=80, rows=24) as terminal:
        terminal.wait_for(text)
        terminal.press("end")
        terminal.wait_for("What to do:")
        terminal.press("q")
        assert terminal.exit_status == status
        assert terminal.left_clean()


def test_bad_input_is_the_message_of_the_command_line(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("PYTHONPATH", str(models.ROOT))
    with Terminal([*LPVIEW, "gone.csv"], columns=80, rows=24) as terminal:
        terminal.wait_for("gone.csv: expected a file or folder, got nothing of that name")
        terminal.press("q")
        assert terminal.exit_status == 2


def test_resizing_while_open(season):
    with Terminal([*LPVIEW, season], columns=80, rows=24) as terminal:
        terminal.wait_for("CONSTRAINT  1 of 108")
        terminal.resize(120, 40)
        terminal.wait_for("row value")
        terminal.resize(60, 20)
        terminal.wait_for("dual value")
        terminal.press("down")
        terminal.wait_for("CONSTRAINT  2 of 108")
        terminal.press("q")
        assert terminal.exit_status == 0


def test_a_hang_up_ends_in_order(season):
    with Terminal([*LPVIEW, season], columns=80, rows=24) as terminal:
        terminal.wait_for("CONSTRAINT  1 of 108")
        terminal.hang_up()
        terminal.wait_until_ended()
        assert terminal.left_clean()
        assert "Traceback" not in terminal.text


def test_a_closed_window_ends_the_program(season):
    with Terminal([*LPVIEW, season], columns=80, rows=24) as terminal:
        terminal.wait_for("CONSTRAINT  1 of 108")
        assert terminal.close_window() is not None


def test_control_c_leaves_a_clean_terminal(season):
    with Terminal([*LPVIEW, season], columns=80, rows=24) as terminal:
        terminal.wait_for("CONSTRAINT  1 of 108")
        terminal.press("ctrl+c")
        terminal.wait_until_ended()
        assert terminal.left_clean()
        assert "Traceback" not in terminal.text


def test_without_a_terminal_it_prints_the_check(season):
    done = subprocess.run([*LPVIEW, season], capture_output=True, check=True, encoding="utf-8")
    assert done.stdout == check_output(season)
