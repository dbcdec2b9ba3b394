"""What to do about a cell that shows a number and is none.

Spreadsheets export what they display: grouped, with a currency or as a date. Nothing of
that is ever guessed, but each kind is told from the others.
"""

from __future__ import annotations

import re
import unicodedata

from lpview.blocks.mistakes import ERROR_ADVICE, LONGEST

_MONTHS = (
    "jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec|mär|mrz|mai|okt|dez|fév|avr|aoû|déc|jui|"
    "ene|abr|ago|dic|gen|mag|giu|lug|set|ott|maa|mei|mrt|out"
)
"""First letters of the months in some languages in which spreadsheets are used."""

_MONTH = rf"(?:{_MONTHS})[^\W\d_]*\.?"
_DAY = r"\d{1,2}(?:st|nd|rd|th)?\.?"
_YEAR = r"(?:\d{4}|\d{2}|'\d{2})"
_JOIN = r"[-/.,\s]*"
_CLOCK = r"\d{1,3}:\d{2}(?::\d{2}(?:[.,]\d+)?)?(?:\s*[ap]\.?m\.?)?"
_DATE = "|".join(
    (
        rf"\d{{1,2}}([-/.])\s?\d{{1,2}}\1\s?(?:{_YEAR})?",
        r"\d{4}([-/.])\d{1,2}\2\d{1,2}",
        rf"{_DAY}{_JOIN}{_MONTH}(?:{_JOIN}{_YEAR})?",
        rf"{_MONTH}{_JOIN}{_DAY}(?:{_JOIN}{_YEAR})?",
        rf"{_MONTH}{_JOIN}{_YEAR}",
    )
)
_DIGITS = r"[+-]?[\d.,'’\s]*\d[\d.,'’\s]*"
_WORD = r"[^\W\d_]+[²³./]*[^\W\d_]*"
_GROUPS = r"\d{1,3}(?P<group>[^\S\n]|['’`´_.,·٬])(?:\d{2,3}(?P=group))*\d{3}"

_DATE_ADVICE = "a spreadsheet turned 1/3 into a date? write it as text or as a decimal"
_GROUPED_ADVICE = "write the digits without grouping"
_UNIT_ADVICE = "write the number alone; a currency or unit can stand in [labels]"

_ADVICE = [
    (re.compile(pattern, re.IGNORECASE), advice)
    for pattern, advice in (
        (r"=.+", "export values, not formulas"),
        (r"#.*|(?:err|fehler):\d+", ERROR_ADVICE),
        ("true|false|wahr|falsch|vrai|faux|verdadero|falso|vero", "write 1 or 0"),
        (r"[-\u2010-\u2015\u2212]+", "write 0 if the dash stands for zero"),
        (r".*\d.*[%‰]|[%‰].*\d.*", "write 12% as 12/100"),
        (r"\(.*\d.*\)", "write a minus in front, not brackets around it"),
        (r"\d[^-]*-", "write the minus in front"),
        (r"[\u2010-\u2015\u2212\ufe63\uff0d]\s*[\d.,].*", "write the minus as -, on the keyboard"),
        (r"[+-]\s+[\d.,].*", "take the blank after the sign out"),
        (rf"(?:{_DATE})(?:[\sT,]+{_CLOCK}Z?)?", _DATE_ADVICE),
        (r"0\d*/\d+|\d+/0\d+", _DATE_ADVICE),
        (_CLOCK, "write a time as a number of hours or minutes"),
        (rf"[+-]?{_GROUPS}(?:[.,]\d*)?", _GROUPED_ADVICE),
        (r"[+-]?\d[\d.,]*[.,]\d*[.,]\d+", _GROUPED_ADVICE),
        (r"[+-]?\d+\s+\d+\s*/\s*\d+", "write 1 1/3 as 4/3"),
        (r"[+-]?\d+\s*/\s*[+-]?\d+", "write a fraction without blanks, as -1/3"),
        (r"[+-]?[\d.,]+\s*/\s*[+-]?[\d.,]+", "write a fraction of two whole numbers"),
        (r"[+-]?\d*[¼-¾⅐-⅞]", "write a fraction as 1/3"),
        (r"[+-]?[\d.,]+\s*[×x*·]\s*10\s*\^?.*", "write a power of ten as 1e3"),
        (r"[+-]?[\d.,]+d[+-]?\d+", "write a power of ten as 1e3"),
        (rf"{_DIGITS}\s*{_WORD}|{_WORD}\s+{_DIGITS}", _UNIT_ADVICE),
    )
]


def advice_on(text: str) -> str:
    """What to do about a text that is no number; empty where nothing is recognised."""
    if len(text) > LONGEST:
        return ""
    for pattern, advice in _ADVICE:
        if pattern.fullmatch(text):
            return advice
    if any(map(str.isdigit, text)):
        if any(unicodedata.category(character) == "Sc" for character in text):
            return _UNIT_ADVICE
        if text.translate({ord(mark): None for mark in "+-.,"}).isdigit() and not text.isascii():
            return "write digits as 0 to 9"
    return ""
