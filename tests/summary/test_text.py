"""What the page is printed with: lines, numbers and names."""

from __future__ import annotations

import re
from dataclasses import replace
from decimal import ROUND_CEILING, ROUND_DOWN, ROUND_FLOOR

import numpy as np
import pytest

from lpview.labels import Label
from lpview.model import Sense
from lpview.report import markdown, text
from lpview.report.names import width
from lpview.report.summary import summary_report
from lpview.report.worth import written_out
from tests.check.helpers import examined
from tests.dual.models import INF
from tests.labels.models import (
    glasshouse,
    labelled,
    labelled_glasshouse,
)
from tests.summary.pages import (
    VERIFIED,
    priced_for_page,
)


def test_sentences_are_broken_at_blanks_and_the_command_is_not():
    found = labelled_glasshouse(remarks=("x" * 130, "温室 " * 60))
    command = "lpview check " + "long " * 40 + "--summary"
    request = replace(found.head.request, command="lpview check " + "long " * 40)
    found = replace(found, head=replace(found.head, request=request))
    document = summary_report(found, priced_for_page(found))
    lines = text.render(document, text.PAGE).splitlines()
    assert lines[-1].startswith("reproduce  lpview check long long ") and len(lines[-1]) > 200
    assert command.split()[-1] in lines[-1]
    assert all(width(line) <= text.PAGE or "x" * 130 in line for line in lines[:-1])
    assert max(width(line) for line in lines if line.startswith("Limit")) > 80
    joined = re.sub(r"\n  (?=\S)", " ", "\n".join(lines) + "\n")
    assert joined == text.render(document)


def test_markdown_is_not_broken():
    found = labelled_glasshouse()
    assert VERIFIED.strip() in markdown.render(summary_report(found)).replace("\\", "")


# Names and numbers -----------------------------------------------------------


@pytest.mark.parametrize(
    ("value", "shown"),
    [
        (1234567.0, "1234567"),
        (0.00001234, "0.00001234"),
        (-0.1, "-0.1"),
        (2 / 3, "0.666667"),
        (123456.789, "123457"),
        (98765432.1, "98765432"),
        (1e15, "1e15"),
        (1e-12, "1e-12"),
        (INF, "inf"),
        (0.0, "0"),
    ],
)
def test_numbers_are_written_out(value, shown):
    assert written_out(value) == shown


@pytest.mark.parametrize(
    ("value", "rounding", "shown"),
    [
        (2 / 3, ROUND_DOWN, "0.6666"),
        (1 / 3, ROUND_CEILING, "0.3334"),
        (-2 / 3, ROUND_FLOOR, "-0.6667"),
        (0.1 + 0.2, ROUND_CEILING, "0.3"),  # 0.30000000000000004
        (0.7 + 0.1, ROUND_DOWN, "0.8"),  # 0.7999999999999999
        (0.49999999999, ROUND_DOWN, "0.5"),
        (12345.9, ROUND_DOWN, "12345"),
        (98765432.7, ROUND_DOWN, "98765432"),
        (1.99999e-12, ROUND_DOWN, "1.999e-12"),
        (np.float64(2 / 3), ROUND_DOWN, "0.6666"),
    ],
)
def test_numbers_are_cut(value, rounding, shown):
    assert written_out(value, 4, rounding) == shown


def test_names_labels_and_units_are_data():
    lp = replace(glasshouse(), rows=("be[nch", "*ho\x1burs*", "water"))
    known = {
        "be[nch": Label("[bold]\x1b[31m" + "x" * 300, "m\u202e2"),
        "*ho\x1burs*": Label("温室" * 40, "h`h"),
    }
    found = labelled(examined(lp), known, Label("", "€"))
    document = summary_report(found)
    shown = text.render(document)
    assert "\x1b" not in shown and "\u202e" not in shown
    assert "Limit be[nch ([bold]\\x1b[31mxxx" in shown and "one m\\u202e2 more" in shown
    assert "earns 480 €" in shown
    assert "\\*ho\\\\x1burs\\*" in markdown.render(document)
    assert Sense.MAXIMIZE.value not in shown
