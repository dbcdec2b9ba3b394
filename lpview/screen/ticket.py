"""Taking evidence away: to a file, always, and to the terminal's clipboard.

What is taken is byte for byte what the command printed in it prints.
"""

from __future__ import annotations

from pathlib import Path

from textual.app import App

from lpview.outcomes import Optimal
from lpview.report import asking, markdown, text
from lpview.report.check import report

ENDINGS = {"text": ".txt", "markdown": ".md"}


def take(app: App[int], found: Optimal, form: str) -> str:
    """Save and copy the check as ``text`` or ``markdown``; returns what to tell the person."""
    if form == "markdown":
        found = asking(found, "--format", "markdown")
    render = markdown.render if form == "markdown" else text.render
    name = f"{Path(found.head.request.source).stem}.ticket{ENDINGS[form]}"
    return _taken(app, render(report(found)), name)


def take_ledger(app: App[int], found: Optimal, line: int) -> str:
    """Save and copy the ledger of a line; returns what to tell the person."""
    from lpview.report.ledger import ledger_report

    name = f"{Path(found.head.request.source).stem}.ledger.txt"
    return _taken(app, text.render(ledger_report(found, [line])), name)


def _taken(app: App[int], content: str, name: str) -> str:
    app.copy_to_clipboard(content)
    try:
        path = _saved(content, name)
    except OSError as error:
        reason = error.strerror or str(error)
        return f"not saved ({name}: {reason}); sent to the terminal's clipboard"
    return f"saved: {path}; also sent to the terminal's clipboard"


def _saved(content: str, name: str) -> Path:
    """Write into the current folder, under a number of its own where the name is taken."""
    path, number = Path(name), 1
    while path.exists() and path.read_bytes() != content.encode():
        number += 1
        path = Path(name).with_stem(f"{Path(name).stem}-{number}")
    path.write_bytes(content.encode())
    return path
