"""A report as Markdown that no name can break."""

from __future__ import annotations

import re

from lpview.report.document import Block, Command, Document, Facts, Sentence

_SPECIAL = re.compile(r"([\\`*_{}\[\]<>#|~&!])")


def render(document: Document) -> str:
    """The document in Markdown; facts become a list, tables become pipe tables."""
    return "\n\n".join(_block(block) for block in document) + "\n"


def _block(block: Block) -> str:
    if isinstance(block, Sentence):
        text = escaped(block.text)
        return f"**{text}**" if block.strong else text
    if isinstance(block, Command):
        fence = "`" * (1 + max((len(run) for run in re.findall("`+", block.text)), default=2))
        return f"{escaped(block.label)}:\n\n{fence}\n{block.text}\n{fence}"
    if isinstance(block, Facts):
        return "\n".join(f"- {escaped(label)}: {escaped(text)}" for label, text in block.pairs)
    rule = ["---:" if numeric else "---" for numeric in block.numeric]
    grid = [block.header, *block.rows]
    lines = ["| " + " | ".join(escaped(cell) or " " for cell in row) + " |" for row in grid]
    lines.insert(1, "| " + " | ".join(rule) + " |")
    title = f"{escaped(block.title)}\n\n" if block.title else ""
    return title + "\n".join(lines)


def escaped(text: str) -> str:
    """Text with every character that Markdown could act on behind a backslash."""
    return _SPECIAL.sub(r"\\\1", text)
