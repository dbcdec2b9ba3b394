"""Labels, units and groups on the screen: beside names, searched with them, first to go."""

from __future__ import annotations

import asyncio
from collections.abc import Awaitable, Callable
from dataclasses import replace
from typing import Any

import pytest

from lpview.labels import Label, Labels
from lpview.reading import InPlace, Scope
from lpview.report.names import width
from lpview.screen.app import LpviewApp, Work
from lpview.screen.columns import Widths, layout, named, widths_of
from lpview.screen.ledger_pane import wrapped
from lpview.screen.mirror import MirrorScreen
from lpview.screen.turning import TurnedScreen
from lpview.screen.view import TableView
from tests.check.helpers import examined
from tests.labels.models import (
    glasshouse,
    labelled,
    labelled_glasshouse,
    labelled_mixture,
)
from tests.screen.waiting import until, until_priced

SIZES = [(80, 24), (120, 40), (200, 60)]


def drive(
    found: Any,
    script: Callable[..., Awaitable[Any]],
    size: tuple[int, int] = (80, 24),
    plain: bool = False,
) -> Any:
    """Open the app on a finished examination and run ``script(pilot, screen)``."""

    async def go() -> Any:
        app = LpviewApp(Work("model.csv", lambda watch, say: found), plain)
        async with app.run_test(size=size) as pilot:
            await until(pilot, lambda: isinstance(app.screen, MirrorScreen))
            await until_priced(pilot)
            return await script(pilot, app.screen)

    return asyncio.run(go())


def lines_of(pane: Any) -> list[str]:
    return [pane.render_line(y).text.rstrip() for y in range(pane.size.height)]


def shown(
    found: Any, size: tuple[int, int] = (80, 24), plain: bool = False
) -> dict[str, list[str]]:
    async def script(pilot: Any, screen: Any) -> dict[str, list[str]]:
        panes = (screen.strip, screen.constraints, screen.variables, screen.ledger)
        return {str(pane.id): lines_of(pane) for pane in panes}

    panes: dict[str, list[str]] = drive(found, script, size, plain)
    return panes


LONG = labelled(
    examined(glasshouse()),
    {
        "bench": Label("x" * 300, "square metres of bench"),
        "hours": Label("[bold red]packing[/] \x1b[31m", "[@click=app.quit]h[/]", "[b]work[/]"),
        "water": Label("水の使用量" * 9, "百リットル"),
        "chard": Label("e\u0301te\u0301", "\u200bc"),
    },
    Label("", "ユーロ"),
)


def test_at_80_columns_names_labels_slack_units_spine_and_price_stand_together():
    panes = shown(labelled_glasshouse())
    assert panes["strip"][0].startswith("model.csv  maximize  optimal 480 EUR verified  ")
    assert panes["constraints"][1:5] == [
        "  name                      slack unit          dual value         up       down",
        "▸ bench  bench spa…             0 m2     ○●        3.33333*         2    3.33333",
        "  hours  packing h…             0 h      ○●        1.33333*         0    1.33333",
        "  water                         0 hl     ○○              0*         0          4",
    ]
    assert panes["variables"][1].split()[:3] == ["name", "value", "unit"]
    assert panes["variables"][3].startswith("  chard  rainbow c…            40 crate  ●○")


def test_plain_marks_and_more_room():
    panes = shown(labelled_glasshouse(), (120, 40), plain=True)
    assert panes["constraints"][2].startswith("> bench  bench space ")
    assert "0 m2     .#" in panes["constraints"][2]
    assert all(line.isascii() for lines in panes.values() for line in lines)
    widest = shown(labelled_glasshouse(), (200, 60))
    assert widest["constraints"][2].startswith("▸ bench  bench space ")


@pytest.mark.parametrize("size", SIZES)
@pytest.mark.parametrize("plain", [False, True])
def test_nothing_overflows_and_no_label_is_an_order(size, plain):
    panes = shown(LONG, size, plain)
    lines = [line for part in panes.values() for line in part]
    assert max(map(width, lines)) <= size[0]
    said = "\n".join(lines)
    assert "\x1b" not in said and "\u200b" not in said
    assert "[bold" in said and "[@click" in said
    for pane in ("constraints", "variables"):
        for line in panes[pane][2:5]:
            marks = [mark for mark in ("●", "○", "#", ".", "=") if mark in line]
            assert marks, line
    assert "ユーロ" in panes["strip"][0]


def test_labels_take_the_room_of_sides_and_of_nothing_that_matters_more():
    gone = 0
    for cells in range(20, 260):
        bare = layout(cells, 2, 3, Widths(8, 8, 0))
        with_all = layout(cells, 2, 3, Widths(8, 40, 5))
        assert min(bare.primal, 2) == min(with_all.primal, 2) and with_all.primal <= bare.primal
        assert min(bare.prices, 3) == min(with_all.prices, 3)
        gone += with_all.primal < bare.primal
        if with_all.primal == 3:
            assert with_all.name >= 30
        assert bare.unit == 0 and with_all.unit in (0, 5)
        # Names that fit without units fit beside them.
        assert with_all.name >= min(bare.name, 8)
    assert 0 < gone < 20
    assert layout(80, 2, 3, Widths(8, 8, 5)).unit == 5
    assert layout(80, 2, 3, Widths(30, 30, 5)).unit == 0


def test_units_take_no_more_than_their_cells():
    names, known = ("a", "b" * 9), {0: Label("label", "m"), 1: Label("", "u" * 30)}
    assert widths_of(names, known) == Widths(9, 8, 8)
    assert widths_of(names, known).joined(Widths(3, 20, 4)) == Widths(9, 20, 8)
    assert widths_of((), {}) == Widths(1, 1, 0)


def test_a_label_stands_after_the_name_where_there_is_room():
    assert named("heat", "heating energy", 40, "…") == "heat  heating energy"
    assert named("heat", "heating energy", 15, "…") == "heat  heating …"
    assert named("heat", "heating energy", 9, "…") == "heat"
    assert named("heat", "kWh", 9, "…") == "heat  kWh"
    assert named("heat", "", 9, "…") == "heat"


def test_labels_are_searched_together_with_names():
    async def script(pilot: Any, screen: Any) -> None:
        await pilot.press("slash", *"HALL")
        await pilot.pause()
        assert screen.constraints.view.order.tolist() == [1]
        assert "name or label has HALL" in screen.constraints.status()
        await pilot.press("enter")
        await pilot.pause()
        said = str(screen.query_one("#message").render())
        assert said == "1 line with HALL in the name or label"

    drive(labelled_glasshouse(), script)
    view = TableView(("heat", "bench", "water"), {0: "Packing hall", 2: "of the hall"})
    for words, found in (("hall", [0, 2]), ("hall heat", [0]), ("wa of", [2]), ("tpa", [])):
        view.limit_to_words(words)
        assert view.order.tolist() == found
    bare = TableView(("heat",))
    assert bare.searched == "name"


def test_the_ledger_ends_in_what_one_unit_is_worth():
    async def script(pilot: Any, screen: Any) -> None:
        said = " ".join(line.strip() for line in screen.ledger._totals)
        assert said.startswith("row value 100 m2, slack 0 m2, dual value ")
        assert said.endswith("One m2 more earns 2 EUR; one m2 less costs 3.33333 EUR.")
        heads = screen.ledger.render_line(0).text
        assert "LEDGER  row bench (bench space) <= 100 m2  1 of " in heads
        terms = [screen.ledger.content(k, 80)[0][0] for k in range(screen.ledger.line_count)]
        assert any(term.startswith("  chard  rainbow chard ") for term in terms)

    drive(labelled_glasshouse(), script)


def test_sentences_with_wide_characters_lose_nothing():
    sentence = (
        "Each 百リットル more on its upper side worsens the objective by 2 ユーロ." + "水" * 30
    )
    for cells in (20, 21, 33, 76):
        lines = wrapped(sentence, cells)
        assert max(map(width, lines)) <= cells
        assert "".join(lines).replace(" ", "") == sentence.replace(" ", "")
    assert wrapped("a well-known sentence", 8) == ["a well-", "known", "sentence"]


def test_groups_are_families():
    async def script(pilot: Any, screen: Any) -> None:
        await pilot.press("f")
        await pilot.pause()
        assert screen.constraints.families.families.labels == ("place", "hours")
        await pilot.press("enter")
        await pilot.pause()
        assert screen.constraints.view.order.tolist() == [0, 2]
        assert "family place" in screen.constraints.status()

    drive(labelled_glasshouse(), script)


def test_scope_and_remarks_are_said_when_the_screen_opens():
    scope = "linear relaxation: 2 integer columns taken as continuous"
    found = labelled_mixture(scope=Scope(InPlace.RELAXED, 2), remarks=("costs negated",))

    async def script(pilot: Any, screen: Any) -> str:
        assert lines_of(screen.strip)[0].startswith(f"model.csv ({scope})  minimize  ")
        return str(screen.query_one("#message").render())

    said = drive(found, script, (200, 60))
    assert said == f"{scope}; noticed while reading: costs negated"
    bare = replace(found, head=replace(found.head, labels=Labels()))
    assert "EUR" not in "".join(shown(bare)["strip"])


def test_the_turned_mirror_has_the_labels_and_no_units():
    async def script(pilot: Any, screen: Any) -> list[str]:
        await pilot.press("d")
        await until(pilot, lambda: isinstance(pilot.app.screen, TurnedScreen))
        await until_priced(pilot)
        turned = pilot.app.screen
        return [*lines_of(turned.constraints), *lines_of(turned.variables)]

    lines = drive(labelled_mixture(), script, (120, 40))
    assert any(line.startswith("  oats  rolled oats") for line in lines)
    assert not any(" unit" in line or " kg" in line for line in lines)
