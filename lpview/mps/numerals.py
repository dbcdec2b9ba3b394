"""Numerals to numbers, and what is remarkable about them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

import numpy as np

from lpview.blocks.cells import Numbers, most_places, parse_all
from lpview.blocks.mistakes import Place, Problem, quoted
from lpview.decimals import exact_value

INFINITE = 1e20
"""Numbers of this size and above are taken for infinite, by the solver and by most readers."""

_WORDS = {
    sign + word: value
    for sign, value in (("", np.inf), ("+", np.inf), ("-", -np.inf))
    for word in ("inf", "infinity")
}


@dataclass(frozen=True, eq=False)
class Numerals:
    """Numbers of a section."""

    texts: Sequence[str]
    """As they are written."""
    lines: Sequence[int]
    """Where."""
    numbers: Numbers
    """The doubles, and the exact values where those are others; 0 for what is wrong."""


NO_NUMERALS = Numerals((), (), Numbers(np.zeros(0)))
"""Of a section that is not there."""


def read_numerals(texts: Sequence[str], lines: Sequence[int], place: Place) -> Numerals:
    """Finite numbers; tells of everything else."""
    numbers = _parsed(texts)
    values = numbers.values
    for k, expected in numbers.wrong.items():
        is_word = texts[k].casefold() in _WORDS
        expected = "a finite number" if is_word else expected
        place.wrong(lines[k], "number", Problem(expected, quoted(texts[k])))
    for k in np.flatnonzero(np.abs(values) >= INFINITE).tolist():
        expected = f"a number below {INFINITE:g}, which is taken for infinite"
        place.wrong(lines[k], "number", Problem(expected, quoted(texts[k])))
    return Numerals(texts, lines, numbers)


def read_ends(
    texts: Sequence[str], lines: Sequence[int], place: Place
) -> tuple[Numerals, list[int]]:
    """Numbers of bounds, where large ones and words stand for infinite ones.

    Returns
    -------
    the numbers, and the places of those that are numerals and were taken for infinite.
    """
    numbers = _parsed(texts)
    values, wrong, large = numbers.values.copy(), dict(numbers.wrong), []
    odd = dict(numbers.odd)
    for k, expected in numbers.wrong.items():
        word = texts[k].casefold()
        if word in _WORDS:
            values[k] = _WORDS[word]
            del wrong[k]
        elif expected.startswith("a number between") and abs(float(_decimal(texts[k]))) >= INFINITE:
            values[k] = float(_decimal(texts[k]))
            del wrong[k]
        else:
            got = quoted(texts[k]) if texts[k] else "none"
            place.wrong(lines[k], "number", Problem(expected, got))
    for k in np.flatnonzero(np.abs(values) >= INFINITE).tolist():
        if texts[k].casefold() not in _WORDS:
            large.append(k)
        values[k] = np.copysign(np.inf, values[k])
        odd.pop(k, None)
    return Numerals(texts, lines, replace(numbers, values=values, odd=odd, wrong=wrong)), large


def exact(numbers: Numbers, place: int) -> Fraction:
    """The number that is written."""
    return exact_value(float(numbers.values[place]), numbers.odd.get(place))


def most_decimals(texts: Sequence[str]) -> int:
    """The most digits that any of these numerals has after its decimal mark."""
    return most_places([_decimal(text) for text in texts])


def _parsed(texts: Sequence[str]) -> Numbers:
    """Decimals only: the format knows no fractions, but D for E."""
    joined = "".join(texts)
    if "/" in joined:
        texts = [text.replace("/", "|") for text in texts]
    if "D" in joined or "d" in joined:
        texts = [_decimal(text) for text in texts]
    return parse_all(texts)


def _decimal(text: str) -> str:
    return text.replace("D", "E").replace("d", "e")
