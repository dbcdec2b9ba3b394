"""The one formatter of numbers, for reports and the screen alike."""

from __future__ import annotations

import math

from lpview.decimals import PRINTED_DIGITS, number_text

RESIDUAL_DIGITS = 2
"""Significant digits of residuals."""


def number(value: float, digits: int = PRINTED_DIGITS) -> str:
    """A number at so many significant digits, never cut: ``1.5``, ``-2e-9``, ``inf``."""
    if math.isinf(value) or math.isnan(value):
        return str(value)
    return _tidy(f"{value + 0.0:.{digits}g}")


def in_full(value: float) -> str:
    """The shortest text that reads back to the same double."""
    return str(value) if math.isnan(value) else number_text(value)


def residual(value: float) -> str:
    """The size of a residual or a tolerance: ``2.1e-9``, ``330``."""
    if math.isinf(value) or math.isnan(value):
        return str(value)
    return number(float(f"{value:.{RESIDUAL_DIGITS}g}"))


def count(amount: int, noun: str) -> str:
    """``1 row``, ``2 rows``."""
    return f"{amount} {noun}" if amount == 1 else f"{amount} {noun}s"


def _tidy(text: str) -> str:
    """Exponents without padding: ``1e-9`` for ``1e-09``, ``1e20`` for ``1e+20``."""
    mantissa, mark, exponent = text.partition("e")
    return f"{mantissa}e{int(exponent)}" if mark else text


def fitted_number(value: float, cells: int) -> str:
    """A number in at most so many cells: it loses digits before it is ever cut."""
    for digits in range(PRINTED_DIGITS, 0, -1):
        text = number(value, digits)
        if len(text) <= cells:
            return text
    return text
