"""What README.md shows of prices is what the commands print."""

from __future__ import annotations

import re
from pathlib import Path

from lpview.prices import Then, ZeroSlack
from lpview.report.price_json import HEADER
from tests.price_report.models import GLASSHOUSE, run, written

README = (Path(__file__).parents[2] / "README.md").read_text(encoding="utf-8")
SECTION = README.split("\n## Prices\n")[1].split("\n## ")[0]


def blocks():
    """The indented blocks of the section."""
    found = re.findall(r"(?:^    .*\n)+", SECTION, re.MULTILINE)
    return [[line.strip() for line in block.splitlines()] for block in found]


def test_the_example_is_what_is_printed(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glasshouse.csv", GLASSHOUSE)
    (command, *table), sentences = blocks()
    _, out, _ = run(*command.split()[2:], capfd=capfd)
    # The answer's own dual value is one of many, and depends on the solver.
    assert [line.split()[2:] for line in table[2:]] == [
        line.split()[2:] for line in out.splitlines()[7:9]
    ]
    assert table[:2] == out.splitlines()[5:7]
    _, out, _ = run("prices", "glasshouse.csv", "--row", "heat", capfd=capfd)
    shown = " ".join(sentences).split("; the answer shown has ")
    printed = " ".join(out.splitlines()[3:6]).split("; the answer shown has ")
    assert shown[0] == printed[0]
    assert shown[1].split(". ", 1)[1] == printed[1].split(". ", 1)[1]


def test_every_word_and_field_is_documented():
    for word in Then:
        assert f"\n| {word.value} | " in SECTION
    for zero in ZeroSlack:
        assert f'"{zero.value}"' in README
    assert all(f"`{name}`" in README for name in HEADER)
