"""Every key of the screen, chosen once: bindings, footer, help page, palette and README."""

from __future__ import annotations

from dataclasses import dataclass

from textual.binding import Binding, BindingType

from lpview.marks import NEED_PRICES, Flag


@dataclass(frozen=True)
class Key:
    """One key and what it does."""

    key: str
    """As the widget library spells it; several are separated by commas."""
    action: str
    """Name of the action, with arguments where it takes any."""
    words: str
    """What it does, in the words of help page, palette and README."""
    group: str
    """Heading under which the help page lists it."""
    footer: str = ""
    """Short words for the footer; empty where it is not shown there."""


FILTER_FLAGS = (*(flag for flag in Flag if flag not in NEED_PRICES), *NEED_PRICES)
"""Flags in the order of their number keys, from 1 on; those known last come last."""

MOVE, FIND, SHOW, PRICES, TAKE = "Moving", "Finding", "Showing", "Prices", "Taking away"

KEYS = (
    Key("tab", "next_pane", "next pane: constraints, variables, ledger", MOVE, "Pane"),
    Key("shift+tab", "previous_pane", "previous pane", MOVE),
    Key("enter", "follow", "follow the link to the other table, or open a family", MOVE, "Follow"),
    Key("left_square_bracket", "back", "back through the lines visited", MOVE, "Back"),
    Key("right_square_bracket", "forward", "forward through the lines visited", MOVE),
    Key("full_stop", "next_flagged", "next flagged line", MOVE),
    Key("comma", "previous_flagged", "previous flagged line", MOVE),
    Key("g", "go_to", "go to a line by its number", MOVE),
    Key(
        "slash",
        "search",
        "search names and labels in this table: several words, any case",
        FIND,
        "Search",
    ),
    *(
        Key(str(number), f"filter('{flag.name}')", f"only lines with: {flag.value}", FIND)
        for number, flag in enumerate(FILTER_FLAGS, start=1)
    ),
    Key("0", "filter('')", "lines with any flag or none", FIND, "All"),
    Key("s", "sort", "sort by the next column", FIND, "Sort"),
    Key("r", "reverse", "reverse the order", FIND),
    Key("l", "linked", "other table: only linked lines, or all with those lit up", FIND, "Linked"),
    Key("f", "fold", "fold this table into families, or unfold it", SHOW, "Families"),
    Key("c", "check", "the whole residual check, its worst lines as links", SHOW, "Check"),
    Key("p", "picture", "picture of the sparsity pattern", SHOW, "Picture"),
    Key("d", "turn", "turn the mirror: the dual program as the model, and back", SHOW, "Dual"),
    Key("v", "curve", "value curve of this line's side, bound or cost", PRICES, "Curve"),
    Key("plus", "together", "what several rows are worth, moved together", PRICES),
    Key("x", "pause_prices", "stop examining prices, or go on", PRICES),
    Key("e", "prove", "prove the optimum exactly, or stop proving it", SHOW),
    Key("question_mark,f1", "help", "all keys on one page", SHOW, "Keys"),
    Key("t", "ticket('text')", "save the check as text, and copy it", TAKE, "Ticket"),
    Key("m", "ticket('markdown')", "save the check as Markdown, and copy it", TAKE),
    Key("w", "copy_ledger", "save this line's ledger, and copy it", TAKE),
    Key("escape", "leave", "stop the work, close, or clear search and filter", MOVE),
    Key("q,ctrl+q,ctrl+c", "quit", "quit", MOVE, "Quit"),
)


FOOTER = tuple(sorted((k for k in KEYS if k.footer), key=lambda k: k.action == "help"))
"""Keys of the last line; help stands last, where it is never left out."""

PROMPT = (
    Key("enter", "submit_prompt", "keep what was typed", FIND, "keep it"),
    Key("escape", "leave", "leave the prompt", FIND, "leave"),
)
"""Keys of the last line while something is typed."""


def bindings() -> list[BindingType]:
    """The table as bindings of the widget library."""
    return [Binding(key.key, key.action, key.words, show=False) for key in KEYS]


_SPELLED = {
    "left_square_bracket": "[",
    "right_square_bracket": "]",
    "full_stop": ".",
    "comma": ",",
    "slash": "/",
    "question_mark": "?",
    "plus": "+",
    "minus": "-",
    "equals_sign": "=",
}


def spelled(key: str) -> str:
    """A key as a person reads it: ``[`` for ``left_square_bracket``."""
    return " or ".join(_SPELLED.get(part, part) for part in key.split(","))


def groups() -> list[tuple[str, list[tuple[str, str]]]]:
    """Every key and its words by heading, those of the picture and the value curve last."""
    from lpview.screen.curve_screen import KEYS as CURVE_KEYS
    from lpview.screen.picture_screen import KEYS as PICTURE_KEYS

    headings = dict.fromkeys(key.group for key in KEYS)
    found = [
        (heading, [(spelled(key.key), key.words) for key in KEYS if key.group == heading])
        for heading in headings
    ]
    pages = (("In the picture", PICTURE_KEYS), ("On a value curve", CURVE_KEYS))
    return found + [
        (heading, [(spelled(key), words) for key, _, words in keys]) for heading, keys in pages
    ]


def table() -> str:
    """The table of keys in Markdown, as README.md shows it."""
    lines = ["| key | what it does |", "| --- | --- |"]
    for heading, keys in groups():
        lines.append(f"| **{heading}** | |")
        lines += [f"| `{key}` | {words} |" for key, words in keys]
    return "\n".join(lines) + "\n"
