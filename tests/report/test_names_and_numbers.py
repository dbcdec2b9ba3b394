"""The one number formatter, and names that cannot break a table or a terminal."""

from __future__ import annotations

import math

import pytest

from lpview.report import markdown, text
from lpview.report.document import Command, Facts, Sentence, Table
from lpview.report.names import fitted, safe, width
from lpview.report.numbers import count, in_full, number, residual


@pytest.mark.parametrize(
    ("value", "shown"),
    [
        (0.0, "0"),
        (-0.0, "0"),
        (1 / 3, "0.333333"),
        (2.0, "2"),
        (123456.0, "123456"),
        (1234567.0, "1.23457e6"),
        (-2.4, "-2.4"),
        (1e-9, "1e-9"),
        (1e300, "1e300"),
        (math.inf, "inf"),
        (-math.inf, "-inf"),
        (math.nan, "nan"),
    ],
)
def test_numbers_have_six_digits_and_plain_exponents(value, shown):
    assert number(value) == shown


@pytest.mark.parametrize("value", [0.1, 1 / 3, 1e22, 5e-324, -464.75314285714285, 180.0])
def test_a_number_in_full_reads_back_to_itself(value):
    assert float(in_full(value)) == value


def test_residuals_have_two_digits_and_counts_have_words():
    assert residual(1.2649e-13) == "1.3e-13"
    assert (count(1, "row"), count(2, "row"), count(0, "row")) == ("1 row", "2 rows", "0 rows")


@pytest.mark.parametrize(
    ("name", "shown"),
    [
        ("flow[a,b]", "flow[a,b]"),
        ("\x1b[31mred", "\\x1b[31mred"),
        ("a\u202eb", "a\\u202eb"),
        ("a\u200bb", "a\\u200bb"),
        ("温室", "温室"),
    ],
)
def test_names_are_literal_and_harmless(name, shown):
    assert safe(name) == shown


def test_width_counts_terminal_cells():
    assert (width("abc"), width("温室"), width("e\u0301")) == (3, 4, 1)


@pytest.mark.parametrize("name", ["a" * 300, "温" * 300, "a\u0301" * 300])
def test_a_long_name_is_cut_to_its_cells(name):
    assert width(fitted(name, 10)) <= 10
    assert fitted(name, 10).endswith("…")
    assert fitted("short", 10) == "short"


NASTY = Table("title", ("row", "value"), (("p|q*[/]`_`", "1"), ("温室", "22")), (False, True))


def test_columns_of_text_stay_aligned():
    lines = text.render((NASTY,)).splitlines()
    assert [width(line) for line in lines[1:]] == [17, 17, 17]
    assert lines[2] == "p|q*[/]`_`      1"


def test_markdown_escapes_every_active_character():
    rows = markdown.render((NASTY,)).splitlines()
    assert rows[4] == r"| p\|q\*\[/\]\`\_\` | 1 |"
    assert all(row.replace("\\|", "").count("|") == 3 for row in rows[2:])


def test_a_command_is_not_escaped_and_not_broken_by_backquotes():
    shown = markdown.render((Command("reproduce", "lpview check 'a``` b_c.csv'"),))
    assert shown == "reproduce:\n\n````\nlpview check 'a``` b_c.csv'\n````\n"


def test_facts_and_sentences():
    facts = Facts((("a", "1"), ("long", "2")))
    assert text.render((Sentence("Hello."), facts)) == "Hello.\n\na     1\nlong  2\n"
    assert markdown.render((Sentence("Hi", strong=True), facts)) == "**Hi**\n\n- a: 1\n- long: 2\n"
