"""The proof on the screen: asked for, stopped, failed, shown in strip, marks and ledger."""

from __future__ import annotations

import asyncio
import threading
from collections.abc import Awaitable, Callable
from fractions import Fraction
from typing import Any

import pytest

from lpview.marks import Flag
from lpview.proof import prove as proving
from lpview.proof.results import NotProved, ProvedInfeasible, ProvedOptimal
from lpview.screen.app import LpviewApp, Work
from tests.screen import models
from tests.screen.priced import GLASSHOUSE, examined
from tests.screen.waiting import until

Script = Callable[..., Awaitable[None]]

LOOKS = examined(
    models.blocks(
        [("x", 1), ("y", -1)],
        [("limit", "x", 3), ("tight", "x", 1), ("tight", "y", 1)],
        [("limit", "<=", 1), ("tight", "<=", 0.333333333334)],
    )
)
"""The slack of "tight" is 1e-12 and only looks like zero."""

NEARLY = examined(
    models.blocks(
        [("x", 1)], [("least", "x", 1), ("most", "x", 1)],
        [("least", ">=", 1), ("most", "<=", 0.9999999999)],
    )
)  # fmt: skip
"""Feasible within the tolerance, and not in truth."""


def drive(found: Any, script: Script) -> None:
    async def go() -> None:
        app = LpviewApp(Work("model.csv", lambda watch, say: found), False)
        async with app.run_test(size=(120, 40)) as pilot:
            await until(pilot, lambda: hasattr(app.screen, "proof"))
            await script(pilot, app.screen)

    asyncio.run(go())


async def proved(pilot: Any, screen: Any) -> None:
    await pilot.press("e")
    await until(pilot, lambda: screen.proof is not None)
    await pilot.pause()


def first_line(screen: Any) -> str:
    return str(screen.strip.render_line(0).text)


def ledger(screen: Any) -> str:
    return " ".join(" ".join(screen.ledger._totals).split())


def message(screen: Any) -> str:
    return str(screen.query_one("#message").render())


def test_a_proof_stands_in_the_strip_and_in_the_ledger() -> None:
    async def script(pilot: Any, screen: Any) -> None:
        assert " verified " in first_line(screen)
        await proved(pilot, screen)
        assert isinstance(screen.proof, ProvedOptimal)
        assert " proved " in first_line(screen)
        assert ledger(screen).count("Exactly: ") == 1
        assert "proof: exact objective" in message(screen)
        await pilot.press("down")
        assert "Exactly: " in ledger(screen)

    drive(GLASSHOUSE, script)


def test_marks_and_flags_follow_exact_zeros() -> None:
    async def script(pilot: Any, screen: Any) -> None:
        tight = LOOKS.head.model.rows.index("tight")
        assert screen.marks.flags[Flag.ZERO_SLACK][tight]
        await proved(pilot, screen)
        assert not screen.marks.flags[Flag.ZERO_SLACK][tight]
        assert not screen.constraints.found.marks.flags[Flag.ZERO_SLACK][tight]
        assert screen.found is LOOKS  # tickets are still those of the check

    drive(LOOKS, script)


def test_a_proof_of_something_else_is_said_loudly() -> None:
    async def script(pilot: Any, screen: Any) -> None:
        await proved(pilot, screen)
        assert isinstance(screen.proof, ProvedInfeasible)
        assert "BUT PROVED OTHERWISE" in first_line(screen)
        assert "lines contradict each other by 1e-10" in message(screen)

    drive(NEARLY, script)


def test_the_same_key_stops_and_keys_work_meanwhile(monkeypatch: pytest.MonkeyPatch) -> None:
    reached = threading.Event()
    stopped = NotProved("interrupted", Fraction(1), None, False, None)

    def slow(lp: Any, basis: Any, ask: Any, settings: Any, between: Any, guess: Any) -> Any:
        reached.set()
        try:
            for _ in range(10_000):
                between()
                threading.Event().wait(0.01)
        except proving.StoppedError:
            return stopped
        raise AssertionError("nobody stopped it")

    monkeypatch.setattr(proving, "prove", slow)

    async def script(pilot: Any, screen: Any) -> None:
        await pilot.press("e")
        await until(pilot, reached.is_set)
        assert "verified, proving" in first_line(screen)
        await pilot.press("down")
        assert screen.line == 1
        await proved(pilot, screen)
        assert screen.proof is stopped
        assert "verified, not proved" in first_line(screen)
        assert "not reached: interrupted" in message(screen)

    drive(GLASSHOUSE, script)


def test_a_defect_is_said_in_a_line(monkeypatch: pytest.MonkeyPatch) -> None:
    def broken(*_: Any) -> Any:
        raise RuntimeError("out of ink")

    monkeypatch.setattr(proving, "prove", broken)

    async def script(pilot: Any, screen: Any) -> None:
        await pilot.press("e")
        await until(pilot, lambda: "out of ink" in message(screen))
        assert " verified " in first_line(screen)

    drive(GLASSHOUSE, script)
