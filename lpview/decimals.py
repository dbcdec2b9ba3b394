"""The exact numbers behind the doubles.

A file's number is kept as its nearest double, and also as a `Fraction` where it
is *odd*: where it is not the shortest decimal that reads back to that double
(`repr`), as 1/3 or a 40-digit decimal. Every other number is that decimal, so
that no digit of a file is ever lost and few fractions are stored.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from fractions import Fraction

import numpy as np

from lpview.accurate import two_product
from lpview.model import LinearProgram, Vector

LONGEST_EXPONENT = 400
"""Decimal exponents beyond this are refused before any big number is built."""

NO_NUMBER = "a number"
"""What is expected of a text that is written as no number is."""

_NUMBER = re.compile(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?", re.ASCII)
_FRACTION = re.compile(r"[+-]?(0|[1-9]\d*)/(0|[1-9]\d*)", re.ASCII)
"""Without zeros before its digits, as only a date has them: 01/03."""


class NumberError(ValueError):
    """A text is not a number that can be kept; the message says what was expected."""


def parse(text: str) -> tuple[float, Fraction | None]:
    """The double nearest to a decimal or fraction, and its exact value where odd.

    Raises `NumberError` for anything else, for a number too large for a double,
    and for a nonzero one so small that its double would be zero.
    """
    if _FRACTION.fullmatch(text):
        top, bottom = text.split("/")
        if int(bottom) == 0:
            raise NumberError("a fraction with a denominator other than 0")
        exact = Fraction(int(top), int(bottom))
    else:
        match = _NUMBER.fullmatch(text)
        if match is None:
            raise NumberError(NO_NUMBER)
        value = float(text) + 0.0
        if match[2] is None and len(text) <= 15:
            return value, None  # 15 digits always survive a double
        digits = match[1].strip("0.")
        if digits and abs(int(match[2][1:] if match[2] else 0)) > LONGEST_EXPONENT:
            raise NumberError("a number between 1e-300 and 1e300 in size")
        exact = Fraction(text) if digits else Fraction(0)
    value = _nearest(exact)
    return value, None if exact == exact_value(value) else exact


def _nearest(exact: Fraction) -> float:
    try:
        value = float(exact)
    except OverflowError:
        value = np.inf
    if abs(value) > 1e300 or (exact and abs(value) < 1e-300):
        raise NumberError("a number between 1e-300 and 1e300 in size")
    return value + 0.0


def exact_value(value: float, odd: Fraction | None = None) -> Fraction:
    """The number of the file: ``odd`` if given, else the shortest decimal of ``value``."""
    return Fraction(repr(float(value))) if odd is None else odd


def number_text(value: float, odd: Fraction | None = None) -> str:
    """The canonical text of a number of the file, which `parse` reads back exactly."""
    if odd is not None:
        return _odd_text(odd)
    if np.isinf(value):
        return "inf" if value > 0 else "-inf"
    if value == int(value) and abs(value) < 1e16:
        return str(int(value))
    mantissa, mark, exponent = repr(float(value)).partition("e")
    return f"{mantissa}e{int(exponent)}" if mark else mantissa


def _odd_text(odd: Fraction) -> str:
    """A terminating decimal in full, any other number as a fraction."""
    bottom, twos, fives = odd.denominator, 0, 0
    while bottom % 2 == 0:
        bottom, twos = bottom // 2, twos + 1
    while bottom % 5 == 0:
        bottom, fives = bottom // 5, fives + 1
    if bottom != 1:
        return f"{odd.numerator}/{odd.denominator}"
    places = max(twos, fives)
    digits = str(abs(odd.numerator) * 10**places // odd.denominator).rjust(places + 1, "0")
    sign = "-" if odd < 0 else ""
    return sign + (f"{digits[:-places]}.{digits[-places:]}" if places else digits)


def low_parts(lp: LinearProgram, field: str) -> Vector:
    """File's number minus its double, for a field that ``lp.odd`` may name.

    The shape is the field's: ``A`` stands for ``A.data``, ``offset`` for one number.

    Together with the double it carries every number to about 32 digits; 0 where
    the double is infinite or exact.
    """
    values = lp.A.data if field == "A" else np.atleast_1d(getattr(lp, field))
    return low_parts_of(values, lp.odd.get(field, {}))


def low_parts_of(values: Vector, odd: Mapping[int, Fraction]) -> Vector:
    """The low parts of an array of doubles whose odd entries are given by index."""
    low = np.zeros_like(values)
    places, mantissa = decimal_digits(values)
    power = 10.0 ** np.maximum(places, 0)
    with np.errstate(over="ignore", invalid="ignore"):
        high, error = two_product(values, power)
        low[:] = np.where(places >= 0, ((mantissa - high) - error) / power, 0.0)
    slow = np.flatnonzero((places < 0) & np.isfinite(values))
    for index in {*slow.tolist(), *odd}:
        value = float(values[index])
        low[index] = float(exact_value(value, odd.get(index)) - Fraction(value))
    return low


def decimal_digits(values: Vector) -> tuple[np.ndarray, Vector]:
    """Decimal places and integer digits: ``value = digits / 10**places``.

    Found for numbers of at most 15 digits and 22 places, where both are exact;
    elsewhere (infinities included) ``places`` is -1 and ``digits`` 0. Such a
    decimal is the shortest one of its double, since 15 digits identify a double.
    """
    places = np.full(values.shape, -1, dtype=np.int64)
    digits = np.zeros_like(values)
    left = np.flatnonzero(np.abs(values) < 1e15)
    for k in range(23):
        if not left.size:
            break
        part = values[left]
        rounded = np.rint(part * 10.0**k)
        hit = (np.abs(rounded) < 1e15) & (rounded / 10.0**k == part)
        places[left[hit]] = k
        digits[left[hit]] = rounded[hit]
        left = left[~hit]
    return places, digits


PRINTED_DIGITS = 6
"""Significant digits of numbers in tables."""


def printed(value: float) -> float:
    """The number that a table prints for ``value``, at `PRINTED_DIGITS` digits."""
    return float(f"{value:.{PRINTED_DIGITS}g}")
