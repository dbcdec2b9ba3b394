"""Examinations as text, Markdown and JSON; one number formatter for all of them."""

from __future__ import annotations

import shlex
from dataclasses import replace
from typing import TypeVar

from lpview.outcomes import Examination

Found = TypeVar("Found", bound=Examination)


def asking(found: Found, *words: str) -> Found:
    """The same examination, as asked for by its command with ``words`` added."""
    request = found.head.request
    command = f"{request.command} {shlex.join(words)}"
    return replace(found, head=replace(found.head, request=replace(request, command=command)))
