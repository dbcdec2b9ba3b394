"""Prices in the background: the order of questions, stopping, and what is known in words."""

from __future__ import annotations

import threading
from typing import Any

import numpy as np
import pytest

from lpview.outcomes import Optimal
from lpview.prices import LinePrices, Prices, work_out
from lpview.report.names import width
from lpview.screen import pricing as module
from lpview.screen.columns import squeezed
from lpview.screen.price_book import PriceBook, State
from lpview.screen.priced_screen import moves_in
from lpview.screen.pricing import (
    EVERY,
    MOST_FAILED,
    Answered,
    PricesBegun,
    PricesEnded,
    PricesFound,
    Pricing,
    Question,
)
from lpview.solver import warm_model
from tests.screen import models
from tests.screen.priced import (
    FAILED,
    GLASSHOUSE,
    SEASON,
    TIGHT,
    WITHOUT_BASIS,
    examined,
    lines_asked,
)


def whole(found: Optimal) -> dict[int, LinePrices]:
    prices = work_out(found, warm_model)
    assert isinstance(prices, Prices)
    return {line: prices.line(line) for line in range(found.marks.room.size)}


class Told(list[Any]):
    """Messages in the order in which they were posted."""

    def of(self, kind: type) -> list[Any]:
        return [message for message in self if isinstance(message, kind)]

    @property
    def order(self) -> list[int]:
        return [line for message in self.of(PricesFound) for line in message.lines]

    @property
    def lines(self) -> dict[int, Any]:
        return {k: v for message in self.of(PricesFound) for k, v in message.lines.items()}

    @property
    def state(self) -> State:
        return self.of(PricesEnded)[-1].state


def start(found: Optimal) -> tuple[Pricing, Told]:
    told = Told()
    return Pricing(found, told.append), told


def run(pricing: Pricing) -> None:
    """The thread's work in this one."""
    assert pricing.begin()
    pricing.run(warm_model)


# The queue -------------------------------------------------------------------


def test_rows_then_columns_and_everything_is_told():
    pricing, told = start(GLASSHOUSE)
    run(pricing)
    assert told.order == list(range(5))
    assert told.lines == whole(GLASSHOUSE)
    assert type(told[0]) is PricesBegun and type(told[-1]) is PricesEnded
    assert told.state is State.DONE
    assert not pricing.begin()


def test_the_selected_line_comes_first_whenever_the_selection_moves(monkeypatch):
    pricing, told = start(SEASON)
    pricing.select(200)
    moves = {200: 7, 7: 300}
    with lines_asked(monkeypatch, lambda k: pricing.select(moves.get(k, 300))):
        run(pricing)
    assert told.order[:5] == [200, 7, 300, 0, 1]
    rest = [k for k in range(SEASON.marks.room.size) if k not in (200, 7, 300)]
    assert told.order[3:] == rest


def test_the_selected_line_is_told_at_once_and_the_others_ten_times_a_second(monkeypatch):
    now = [0.0]

    def one_question(_: int) -> None:
        now[0] += 0.03

    monkeypatch.setattr(module.time, "monotonic", lambda: now[0])
    pricing, told = start(SEASON)
    pricing.select(5)
    with lines_asked(monkeypatch, one_question):
        run(pricing)
    messages = told.of(PricesFound)
    assert list(messages[0].lines) == [5]
    assert len(messages) <= 2 + now[0] / EVERY
    assert max(len(message.lines) for message in messages) <= 1 + EVERY / 0.03


def test_pausing_ends_between_two_lines_and_going_on_does_the_rest(monkeypatch):
    pricing, told = start(SEASON)

    def pause_at_four(k: int) -> None:
        if k == 4:
            pricing.pause()

    with lines_asked(monkeypatch, pause_at_four):
        run(pricing)
    assert told.order == [0, 1, 2, 3, 4] and told.state is State.STOPPED
    assert not pricing.begin()  # nothing to do while it is paused
    pricing.go_on()
    run(pricing)
    assert told.order == list(range(SEASON.marks.room.size)) and told.state is State.DONE
    assert len(told.of(PricesBegun)) == 1


def test_pausing_before_anything_is_known_ends_before_the_next_solve():
    pricing, told = start(SEASON)
    solves = []

    def counted(G: Any, box: Any) -> Any:
        pricing.pause()
        solves.append(1)
        return warm_model(G, box)

    assert pricing.begin()
    pricing.run(counted)
    assert len(solves) == 1 and [type(message) for message in told] == [PricesEnded]
    assert told.state is State.STOPPED
    pricing.go_on()
    run(pricing)
    assert told.state is State.DONE


def test_nobody_is_told_anything_after_leaving_and_no_question_is_asked(monkeypatch):
    pricing, told = start(SEASON)
    asked = []

    def leave_at_four(k: int) -> None:
        asked.append(k)
        if k == 4:
            pricing.leave()

    with lines_asked(monkeypatch, leave_at_four):
        run(pricing)
    assert asked[-1] == 4 and len(asked) == 5
    assert not told.of(PricesEnded) and not pricing.begin()


def test_a_cancelled_thread_ends_like_one_that_was_left():
    pricing, told = start(SEASON)
    assert pricing.begin()
    pricing.run(warm_model, lambda: True)
    assert told == []


def test_questions_come_before_lines_and_also_while_paused():
    pricing, told = start(GLASSHOUSE)
    pricing.pause()
    pricing.ask(Question("dimension", lambda prices: prices.price_dimension))
    run(pricing)
    (answer,) = told.of(Answered)
    assert (answer.about, answer.answer, answer.problem) == ("dimension", 1, "")
    assert told.order == [] and told.state is State.STOPPED
    pricing.go_on()
    pricing.ask(Question("late", lambda prices: told.order))
    run(pricing)
    assert told.of(Answered)[-1].answer == [] and told.state is State.DONE


def test_a_question_that_fails_says_why_and_lines_go_on():
    pricing, told = start(GLASSHOUSE)
    pricing.ask(Question("broken", lambda prices: 1 // 0))
    run(pricing)
    assert "ZeroDivisionError" in told.of(Answered)[0].problem
    assert told.lines == whole(GLASSHOUSE)


def test_a_line_that_fails_is_told_in_words_and_the_work_begins_anew(monkeypatch):
    pricing, told = start(GLASSHOUSE)
    prepared = []

    def counted(*args: Any) -> Any:
        prepared.append(1)
        return work_out(*args)

    def broken(k: int) -> None:
        if k == 1:
            raise ZeroDivisionError("by zero")

    monkeypatch.setattr(module, "work_out", counted)
    with lines_asked(monkeypatch, broken):
        run(pricing)
    assert "ZeroDivisionError: by zero" in told.lines[1]
    assert {k: v for k, v in told.lines.items() if k != 1} == {
        k: v for k, v in whole(GLASSHOUSE).items() if k != 1
    }
    assert len(prepared) == 2 and told.state is State.DONE


def test_lines_that_fail_one_after_the_other_stop_the_work(monkeypatch):
    def broken(_: int) -> None:
        raise ZeroDivisionError

    pricing, told = start(SEASON)
    with lines_asked(monkeypatch, broken):
        run(pricing)
    assert len(told.order) == MOST_FAILED and told.state is State.STOPPED


@pytest.mark.parametrize(
    ("found", "reason"), [(WITHOUT_BASIS, "without a basis"), (FAILED, "failed its check")]
)
def test_where_there_are_no_prices_the_reason_is_told(found, reason):
    pricing, told = start(found)
    pricing.ask(Question("anything", lambda prices: None))
    run(pricing)
    assert told.state is State.NONE and reason in told.of(PricesEnded)[0].reason
    assert reason in told.of(Answered)[0].problem
    assert told.order == [] and not pricing.begin()


def test_work_that_cannot_even_begin_is_told(monkeypatch):
    def broken(*_: Any) -> Any:
        raise ZeroDivisionError("by zero")

    monkeypatch.setattr(module, "work_out", broken)
    pricing, told = start(GLASSHOUSE)
    run(pricing)
    assert told.state is State.NONE and "by zero" in told[-1].reason


def test_only_one_thread_is_started():
    pricing, told = start(GLASSHOUSE)
    assert pricing.begin() and not pricing.begin()
    pricing.run(warm_model)
    assert told.state is State.DONE


def test_keys_are_answered_before_further_questions(monkeypatch):
    """Every key puts the next question off; none is lost for it."""
    pricing, told = start(GLASSHOUSE)
    now, waited = [100.0], []
    monkeypatch.setattr(module.time, "monotonic", lambda: now[0])

    class Clock(threading.Event):
        def wait(self, timeout: float | None = None) -> bool:
            waited.append(timeout)
            now[0] += timeout or 0.0
            return self.is_set()

    pricing._left = Clock()
    with lines_asked(monkeypatch, lambda _: pricing.give_way()):
        run(pricing)
    assert waited == pytest.approx([module.QUIET] * len(waited)) and len(waited) >= 4
    assert told.state is State.DONE


# The book --------------------------------------------------------------------


def book_of(found: Optimal) -> PriceBook:
    book = PriceBook(found)
    pricing, told = start(found)
    run(pricing)
    book.begin(told[0].not_unique)
    book.put(told.lines)
    book.end(told.state, "")
    return book


def test_the_glasshouse_has_the_rates_of_its_two_vertices():
    """Heat one unit up lets basil in at 0.8; one down costs 2 of tomato (by hand)."""
    book = book_of(GLASSHOUSE)
    assert [book.cell(what, 0, 9) for what in range(4)] == ["0.8", "2", "however far", "300"]
    assert book.mark(0) == "*" and book.mark(1) == ""
    assert book.progress() == "prices: 3 not unique"


def test_moves_that_leave_no_plan_are_words_and_a_row_without_sides_has_none():
    book = book_of(TIGHT)
    most, least, free = 0, 1, 3
    assert book.cell(0, most, 9) == "1" or book.cell(0, most, 9) == "0"
    assert book.cell(1, most, 9) == "no plan" and book.cell(0, least, 9) == "no plan"
    assert book.cell(3, most, 12) == ""
    assert [book.cell(what, free, 12) for what in range(4)] == [""] * 4
    assert not any("inf" in book.cell(what, k, 12) for what in range(4) for k in range(6))


def test_what_is_not_known_is_a_dot_and_words():
    book = PriceBook(GLASSHOUSE)
    assert book.progress() == "prices: beginning" and book.cell(0, 0, 9) == "."
    book.begin(np.zeros(5, dtype=bool))
    book.put({1: "broken"})
    assert book.progress() == "prices 1 of 5" and book.missing(1) == "prices: broken"
    assert book.missing(0) == "prices: being worked out"
    book.end(State.STOPPED, "")
    assert book.progress() == "prices 1 of 5, stopped"
    assert book.missing(0) == "prices: stopped before this line"
    book.end(State.NONE, "because")
    assert book.progress() == "prices: not examined" and book.cell(0, 0, 9) == ""
    assert book.missing(0) == "prices were not examined: because"


@pytest.mark.parametrize(
    ("text", "moves"),
    [
        ("heat=+1", [(0, 1.0)]),
        ("heat=+1 water=-2.5e1", [(0, 1.0), (2, -25.0)]),
        ("  bench=.5   heat=3. ", [(1, 0.5), (0, 3.0)]),
        ("", "expected ROW=+1 ROW=-2.5, got nothing"),
        ("heat", "expected ROW=+1 ROW=-2.5, got heat"),
        ("heat=+1 hat=2", "expected the name of a row, got hat"),
        ("heat=+1 heat=2", "expected each row once"),
        ("heat=0", "heat: expected an amount that is finite and not 0"),
        ("heat=1e999", "heat: expected an amount that is finite and not 0"),
    ],
)
def test_rows_and_amounts_are_read(text, moves):
    assert moves_in(text, GLASSHOUSE.head.model) == moves


def test_names_with_blanks_and_equals_signs_are_read():
    names = ["week 1=2 a", "week 1", "b=3"]
    lp = examined(models.chain(names, ["x", "y", "z"])).head.model
    assert moves_in("week 1=2 a=5 b=3=-1 week 1=7", lp) == [(0, 5.0), (2, -1.0), (1, 7.0)]
    assert "no side to move" in str(moves_in("free=1", TIGHT.head.model))


def test_a_name_is_cut_in_its_middle():
    assert squeezed("ship[chard,Lindford,week 12]", 21, "…") == "ship[chard…d,week 12]"
    assert squeezed("heat", 4, "…") == "heat"
    for cells in range(1, 30):
        for name in ("暖房" * 10, "e\u0301" * 40, "x" * 40):
            assert width(squeezed(name, cells, "~")) <= cells
