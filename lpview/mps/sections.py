"""Lines to sections.

A header stands in the first column; a data line of any section has at least two
words. Names may therefore be those of sections.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import NoReturn

from lpview.blocks.mistakes import InputError, Mistake, Mistakes, Place, Problem, quoted
from lpview.model import Sense

SECTIONS = ("NAME", "OBJSENSE", "ROWS", "COLUMNS", "RHS", "RANGES", "BOUNDS", "ENDATA")
"""Sections of a linear program."""

UNSUPPORTED: Mapping[str, str] = {
    **dict.fromkeys(("QUADOBJ", "QMATRIX", "QSECTION"), "a quadratic objective"),
    "QCMATRIX": "quadratic constraints",
    "CSECTION": "cones",
    **dict.fromkeys(("SOS", "SOS1", "SOS2", "SETS"), "special ordered sets"),
    "INDICATORS": "indicator constraints",
    "GENCONS": "general constraints",
    **dict.fromkeys(("PWLOBJ", "PWLNAM", "PWLCON"), "piecewise linear terms"),
    **dict.fromkeys(("DELAYEDROWS", "LAZYCONS"), "delayed rows"),
    **dict.fromkeys(("USERCUTS", "MODELCUTS"), "cuts"),
}
"""Sections of other models, and what they hold."""

SENSES: Mapping[str, Sense] = {
    "MIN": Sense.MINIMIZE,
    "MINIMIZE": Sense.MINIMIZE,
    "MAX": Sense.MAXIMIZE,
    "MAXIMIZE": Sense.MAXIMIZE,
}
"""Words for the direction of the optimization."""

_WORDS = frozenset((*SECTIONS, *UNSUPPORTED))

RawLine = tuple[int, str]
"""Number and text of a line."""


@dataclass
class Section:
    """One section."""

    name: str
    """Its header's word."""
    line: int
    """Line of the header."""
    lines: list[RawLine] = field(default_factory=list)
    """Its data lines, without comments and blank lines."""


@dataclass(frozen=True)
class Sections:
    """All sections of a file."""

    by_name: Mapping[str, Section]
    """The sections of a linear program that the file has."""
    sense: Sense
    """What OBJSENSE says; minimize without it."""
    after: int
    """Lines after ENDATA that are neither blank nor comments."""

    def lines(self, name: str) -> Sequence[RawLine]:
        """The data lines of a section; none where it is missing."""
        return self.by_name[name].lines if name in self.by_name else ()


def read_sections(text: str, file: str, mistakes: Mistakes) -> Sections:
    """The sections of a text.

    Raises `InputError` at once where the text begins with something else; tells of
    unknown, repeated, missing and unsupported sections otherwise.
    """
    found: list[Section] = []
    for number, line in enumerate(text.split("\n"), start=1):
        if line.startswith("*") or not (word := line.strip()):
            continue
        if not word.isalnum() and line[0] in " \t":
            pass  # nearly every line: data
        elif _is_header(line, found):
            name, *rest = word.split()
            if not found and name not in _WORDS:
                _refuse_beginning(word, number, file)
            found.append(Section(name, number))
            if name == "OBJSENSE" and rest and rest[0][0] not in "$*":
                found[-1].lines.append((number, rest[0]))
            continue
        if not found:
            _refuse_beginning(word, number, file)
        found[-1].lines.append((number, line))
    return _sorted_out(found, file, mistakes)


def _refuse_beginning(text: str, line: int, file: str) -> NoReturn:
    advice = "section names are in capitals" if text.split()[0].upper() in _WORDS else ""
    expected = "a section such as NAME or ROWS"
    raise InputError([Mistake(file, expected, quoted(text), line, advice=advice)])


def _is_header(line: str, before: Sequence[Section]) -> bool:
    words = line.split()
    alone = len(words) == 1 or words[1][0] in "$*"
    if line[0] in " \t":
        return alone and words[0] in _WORDS
    if words[0] == "NAME":
        return all(section.name == "OBJSENSE" for section in before)
    if words[0] == "OBJSENSE":
        return alone or (len(words) == 2 and words[1].upper() in SENSES)
    if alone and len(words) == 1:
        # A line of one word is no data, but for the word after OBJSENSE.
        return not before or before[-1].name != "OBJSENSE" or words[0].upper() not in SENSES
    return (alone and words[0] in SECTIONS) or words[0] in UNSUPPORTED


def _sorted_out(found: Sequence[Section], file: str, mistakes: Mistakes) -> Sections:
    by_name: dict[str, Section] = {}
    after = 0
    for section in found:
        place = Place(file, section.name, mistakes)
        if "ENDATA" in by_name:
            after += 1 + len(section.lines)
        elif section.name in UNSUPPORTED:
            lines = f"{len(section.lines)} line" + ("" if len(section.lines) == 1 else "s")
            got = f"{UNSUPPORTED[section.name]} on {lines}"
            place.wrong(section.line, "", Problem("a linear program", got))
        elif section.name not in SECTIONS:
            _tell_unknown(section, Place(file, "", mistakes))
        elif by_name.setdefault(section.name, section) is not section:
            got = f"it again after line {by_name[section.name].line}"
            place.wrong(section.line, "", Problem("this section once", got))
        elif section.name == "ENDATA":
            after += len(section.lines)
    _tell_missing(by_name, file, mistakes)
    return Sections(by_name, _sense(by_name, file, mistakes), after)


def _tell_unknown(section: Section, place: Place) -> None:
    advice = "section names are in capitals" if section.name.upper() in _WORDS else ""
    problem = Problem(
        "a section of a linear program, or a line of two words or more",
        quoted(section.name),
        advice,
    )
    place.wrong(section.line, "", problem)


def _tell_missing(by_name: Mapping[str, Section], file: str, mistakes: Mistakes) -> None:
    name = by_name.get("NAME")
    if name is not None and name.lines:
        number, line = name.lines[0]
        problem = Problem("a section such as ROWS", quoted(line.strip()))
        Place(file, "NAME", mistakes).wrong(number, "", problem)
    if mistakes.found:
        return
    for wanted in ("ROWS", "COLUMNS"):
        if wanted not in by_name:
            mistakes.add(Mistake(file, f"the section {wanted}", "none"))
    if "ENDATA" not in by_name:
        advice = "a part of the file may be missing"
        mistakes.add(Mistake(file, "the last line ENDATA", "none", advice=advice))


def _sense(by_name: Mapping[str, Section], file: str, mistakes: Mistakes) -> Sense:
    section = by_name.get("OBJSENSE")
    if section is None:
        return Sense.MINIMIZE
    texts = [(number, line.split()[0]) for number, line in section.lines]
    if len(texts) == 1 and texts[0][1].upper() in SENSES:
        return SENSES[texts[0][1].upper()]
    number, got = texts[0] if texts else (section.line, "")
    if len(texts) > 1 and got.upper() in SENSES:
        number, got = texts[1]
    problem = Problem("MIN or MAX, once", quoted(got) if got else "nothing")
    Place(file, "OBJSENSE", mistakes).wrong(number, "", problem)
    return Sense.MINIMIZE
