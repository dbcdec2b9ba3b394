"""The commands that write a model: ``lpview dual`` and ``convert``."""

from __future__ import annotations

import argparse

from lpview import exit_status
from lpview.blocks import write_blocks, write_labels
from lpview.commands.arriving import read
from lpview.commands.leaving import tell_notes, write


def dual(options: argparse.Namespace) -> list[int]:
    """``lpview dual``: the dual linear program, as blocks that lpview reads."""
    from lpview.dual import build_dual

    reading, _ = read(options.model, options)
    tell_notes(options.model, reading.notes)
    write(write_blocks(build_dual(reading.model).program), options.output)
    return [exit_status.DONE]


def convert(options: argparse.Namespace) -> list[int]:
    """``lpview convert``: the same model as canonical blocks."""
    reading, _ = read(options.model, options)
    tell_notes(options.model, reading.notes)
    labels = write_labels(reading.model, reading.labels)
    blocks = write_blocks(reading.model)
    write(blocks + "\n" * bool(labels) + labels, options.output)
    return [exit_status.DONE]
