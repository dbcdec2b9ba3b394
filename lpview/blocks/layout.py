"""Which blocks there are, and which headers each of them may have.

A further block is an entry of `BLOCKS` or `PLAN_BLOCKS` and a function that reads it.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from types import MappingProxyType

Header = tuple[str, ...]

HEADER_WORDS = {"right-hand side": "rhs"}
"""Other spellings of words in a header."""


@dataclass(frozen=True)
class Kind:
    """One kind of block."""

    name: str
    """Name without brackets."""
    headers: tuple[Header, ...]
    """Headers with fixed words, the tall form first; none for a single line."""
    wide: bool
    """Whether the header may be a first word and then the names of columns."""
    required: bool
    """Whether a model must have the block."""
    argument: str = ""
    """What stands on the block line after the name; empty for nothing."""

    @property
    def expected_header(self) -> str:
        """The headers in words."""
        fixed = [",".join(header) for header in self.headers]
        names = [f"{self.headers[0][0]} and the names of columns"] if self.wide else []
        return " or ".join(fixed + names)

    @property
    def line(self) -> str:
        """The block line as a message spells it."""
        return f"[{self.name}]" + (f",{self.argument}" if self.argument else "")


Kinds = Mapping[str, Kind]
"""Kinds of blocks by their name."""

_COST = ("column", "cost")
_ENDS = ("lower", "upper")
_VALUE = ("column", "value")


def _by_name(*kinds: Kind) -> Kinds:
    return MappingProxyType({kind.name: kind for kind in kinds})


LABELS = _by_name(Kind("labels", (("kind", "name", "label", "unit", "group"),), False, True))
"""The block of a file of labels alone."""

BLOCKS = _by_name(
    Kind("c", (_COST, (*_COST, *_ENDS)), True, True, "minimize or [c],maximize"),
    Kind("offset", (), False, False, "NUMBER"),
    Kind("A", (("row", "column", "coefficient"),), True, True),
    Kind("b", (("row", "relation", "rhs"), ("row", *_ENDS)), False, True),
    Kind("bounds", (("column", *_ENDS),), False, False),
    *(replace(kind, required=False) for kind in LABELS.values()),
)
"""Every kind of block of a model."""

PLAN_BLOCKS = _by_name(
    Kind("x", (_VALUE,), False, True),
    Kind("y", (("row", "value"),), False, False),
    Kind("z", (_VALUE,), False, False),
)
"""Every kind of block of a plan."""


def block_lines(kinds: Kinds) -> str:
    """The names of these blocks, for messages."""
    names = [f"[{name}]" for name in kinds]
    return f"{', '.join(names[:-1])} or {names[-1]}" if len(names) > 1 else names[0]


def fixed_header(kind: Kind, header: Header, kinds: Kinds) -> Header | None:
    """The header in fixed words; an empty one when wide; None when it is wrong.

    Words are read without regard to case. A header that begins as the tall form
    does is never wide, whatever the columns are called, and one that is the fixed
    header of another block is no list of names either.
    """
    words = tuple(HEADER_WORDS.get(word, word) for word in map(str.casefold, header))
    if words in kind.headers:
        return words
    tall = kind.headers[0]
    if not kind.wide or words[:1] != tall[:1] or words[: len(tall)] == tall:
        return None
    return None if owner(words, kinds) else ()


def owner(header: Header, kinds: Kinds) -> str:
    """Name of the block that has this fixed header; empty if none has."""
    words = tuple(HEADER_WORDS.get(word, word) for word in map(str.casefold, header))
    return next((name for name, kind in kinds.items() if words in kind.headers), "")
