"""Taking evidence away: to a file, always, and to the terminal's clipboard.

What is taken is byte for byte what the command printed in it prints.
"""

from __future__ import annotations

import shlex
from dataclasses import replace
from pathlib import Path

import numpy as np
from textual.app import App

from lpview.marks import with_prices
from lpview.outcomes import Optimal
from lpview.prices import LinePrices
from lpview.report import asking, markdown, text
from lpview.report.check import report

ENDINGS = {"text": ".txt", "markdown": ".md"}

CHECK_ONLY = ("--second-route", "--no-second-route", "--no-crossover")
"""Options of the check that ask for something else than prices."""


def take(app: App[int], found: Optimal, form: str) -> str:
    """Save and copy the check as ``text`` or ``markdown``; returns what to tell the person."""
    if form == "markdown":
        found = asking(found, "--format", "markdown")
    render = markdown.render if form == "markdown" else text.render
    name = f"{Path(found.head.request.source).stem}.ticket{ENDINGS[form]}"
    return _taken(app, render(report(found)), name)


def take_ledger(app: App[int], found: Optimal, line: int, prices: LinePrices | None) -> str:
    """Save and copy the ledger of a line; returns what to tell the person.

    With its prices where they are known, as the command with ``--prices`` prints it.
    """
    from lpview.report.ledger import ledger_report

    known: dict[int, LinePrices] = {}
    if prices is not None:
        known[line] = prices
        not_unique = np.zeros(found.marks.room.size, dtype=bool)
        not_unique[line] = not prices.is_unique  # nothing is said of other lines
        found = replace(asking(found, "--prices"), marks=with_prices(found.marks, not_unique))
    name = f"{Path(found.head.request.source).stem}.ledger.txt"
    return _taken(app, text.render(ledger_report(found, [line], prices=known)), name)


def for_prices(found: Optimal) -> Optimal:
    """The same answer, as asked for by the command that examines prices."""
    request = found.head.request
    before, pipe, command = request.command.rpartition(" | ")
    words = shlex.split(command)
    if words[:2] != ["lpview", "check"]:  # the file's own name has such a mark in it
        before, pipe, words = "", "", shlex.split(request.command)
    words = ["lpview", "prices", *(word for word in words[2:] if word not in CHECK_ONLY)]
    request = replace(request, command=before + pipe + shlex.join(words))
    return replace(found, head=replace(found.head, request=request))


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
