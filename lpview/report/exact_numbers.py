"""Exact numbers in words: short fractions in full, long ones by digits and size."""

from __future__ import annotations

import sys
from decimal import ROUND_HALF_EVEN, Context, Decimal
from fractions import Fraction

DIGITS = 30
"""Digits of an exact number unless more are asked for."""

SHORT = 40
"""Characters up to which a fraction is written in full."""


def digits_of(value: Fraction, digits: int = DIGITS) -> str:
    """A number rounded to so many significant digits, without needless zeros."""
    context = Context(prec=digits, rounding=ROUND_HALF_EVEN, Emax=10**6, Emin=-(10**6))
    quotient = context.divide(Decimal(value.numerator), Decimal(value.denominator))
    if -7 < quotient.adjusted() < digits:
        text = f"{quotient:f}"
        return text.rstrip("0").rstrip(".") if "." in text else text
    return f"{quotient.normalize(context):e}"


def exact_text(value: Fraction, digits: int = DIGITS) -> str:
    """As ``67/15 = 4.46666666666666666666666666667``; the fraction only where it is short."""
    rounded = digits_of(value, digits)
    if Fraction(rounded) == value:
        return rounded
    bits = max(value.numerator.bit_length(), value.denominator.bit_length())
    # Long integers are not even turned into text, which takes a while.
    fraction = str(value) if bits < 4 * SHORT else ""
    if fraction and len(fraction) <= SHORT:
        return f"{fraction} = {rounded}"
    return f"{rounded} (a fraction of {bits} bits)"


def in_digits(number: int) -> str:
    """An integer in decimal, however long; Python refuses more than some thousand digits."""
    if number.bit_length() < 10_000:
        return str(number)
    limit = sys.get_int_max_str_digits()
    sys.set_int_max_str_digits(0)
    try:
        return str(number)
    finally:
        sys.set_int_max_str_digits(limit)
