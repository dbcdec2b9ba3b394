"""Half a unit of a zero, whose exponent says nothing unless it is negative."""

from __future__ import annotations

import pytest

from lpview.blocks.plan import half_units


@pytest.mark.parametrize(
    ("text", "half"),
    [
        ("0e500", 0.5),
        ("0.00E+07", 0.005),
        ("-0e5", 0.5),
        ("0e-3", 0.0005),
        ("0.0e-3", 0.00005),
        ("0e-999", 0.0),
        ("0e" + "9" * 5000, 0.5),
        ("0e-" + "9" * 5000, 0.0),
        ("10e2", 50.0),
        ("1e300", 5e299),
    ],
)
def test_the_exponent_of_a_zero(text, half):
    assert half_units([text]).tolist() == [half]
