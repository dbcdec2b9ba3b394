"""The one table of keys: no clash, every action exists, README shows it."""

from __future__ import annotations

from collections import Counter
from pathlib import Path

from lpview.screen.app import LpviewApp
from lpview.screen.keys import KEYS, table
from lpview.screen.mirror import MirrorScreen

README = Path(__file__).parents[2] / "README.md"


def test_no_key_does_two_things():
    keys = [part for key in KEYS for part in key.key.split(",")]
    assert [key for key, times in Counter(keys).items() if times > 1] == []


def test_every_key_has_an_action_and_words_of_its_own():
    for key in KEYS:
        name = f"action_{key.action.partition('(')[0]}"
        assert hasattr(MirrorScreen, name) or hasattr(LpviewApp, name), key
    assert len({key.words for key in KEYS}) == len(KEYS)


def test_the_readme_shows_the_table_as_it_is():
    text = README.read_text(encoding="utf-8")
    shown = text.partition("<!-- keys -->")[2].partition("<!-- end of keys -->")[0]
    assert shown.strip() == table().strip()
