"""What every command ends with: text that is written, and an exit status."""

from __future__ import annotations

import os
import sys
from pathlib import Path

from lpview import exit_status
from lpview.outcomes import Examination, NoOptimum, Optimal
from lpview.reading import Notes
from lpview.report.document import Document
from lpview.report.heads import noticed


def status(found: Examination) -> int:
    """The exit status of one examination."""
    if isinstance(found, Optimal):
        return exit_status.DONE if found.passed else exit_status.FAILED
    return exit_status.NO_OPTIMUM if isinstance(found, NoOptimum) else exit_status.NOT_ESTABLISHED


def tell_notes(source: str, notes: Notes) -> None:
    """What a report would say of the reading, on standard error, where data are written."""
    if notes.scope:
        sys.stderr.write(f"{source}: {notes.scope_words}\n")
    for text in noticed(notes):
        sys.stderr.write(f"{source}: {text}\n")


def rendered(document: Document, form: str, is_page: bool = False) -> str:
    """A document as text or Markdown; ``is_page`` breaks its sentences into lines of text."""
    from lpview.report import markdown, text

    if form == "markdown":
        return markdown.render(document)
    return text.render(document, text.PAGE if is_page else None)


def write(text: str, output: str | None) -> None:
    """Write to a file, whole or not at all, or to standard output."""
    if output is not None:
        replace_file(Path(output), text.encode())
        return
    sys.stdout.buffer.write(text.encode())
    sys.stdout.buffer.flush()


def replace_file(path: Path, data: bytes) -> None:
    """Write a file whole or not at all; a device or pipe is written as it is."""
    if path.exists() and not path.is_file():
        path.write_bytes(data)
        return
    part = path.with_name(f".{path.name}.{os.getpid()}.part")
    try:
        part.write_bytes(data)
        part.replace(path)
    except OSError as error:
        raise OSError(error.errno, error.strerror, str(path)) from error
    finally:
        part.unlink(missing_ok=True)
