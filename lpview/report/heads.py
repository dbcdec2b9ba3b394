"""What stands on every report whatever it is about: the model it is of, and warnings."""

from __future__ import annotations

from lpview.outcomes import Head
from lpview.reading import Notes
from lpview.report.document import Sentence
from lpview.report.names import safe
from lpview.report.numbers import count


def title(head: Head, source: str = "") -> str:
    """The model as the person named it, and what stands in place of it, if anything does.

    ``source``, if any, stands in place of its name.
    """
    scope = head.notes.scope_words
    return safe(source or head.request.source) + (f" ({safe(scope)})" if scope else "")


def noticed(notes: Notes) -> list[str]:
    """One text on what reading noticed, where it noticed anything."""
    parts = []
    if notes.empty_coefficients:
        parts.append(f"{count(notes.empty_coefficients, 'empty coefficient')} read as 0")
    if notes.empty_costs:
        parts.append(f"{count(notes.empty_costs, 'empty cost')} read as 0")
    if notes.rows_without_coefficients:
        parts.append(f"{count(len(notes.rows_without_coefficients), 'row')} without coefficients")
    if notes.names_alike:
        one, other = notes.names_alike[0]
        pairs = count(len(notes.names_alike), "pair")
        parts.append(f"{pairs} of names alike, such as {safe(one)} and {safe(other)}")
    # A remark may have commas of its own.
    told = [", ".join(parts)] * bool(parts) + [safe(remark) for remark in notes.remarks]
    return ["noticed while reading: " + "; ".join(told)] if told else []


def about_reading(head: Head) -> list[str]:
    """The same, and the most decimals of each block: a spreadsheet exports what it displays."""
    found = head.notes.most_decimals.items()
    most = ", ".join(f"{block} {places}" for block, places in found)
    return [*noticed(head.notes), *([f"most decimals {most}"] if most else [])]


def reading_sentence(head: Head) -> tuple[Sentence, ...]:
    """The same as a sentence of its own, where there is anything to say."""
    text = "; ".join(about_reading(head))
    return (Sentence(text),) if text else ()
