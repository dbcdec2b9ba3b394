"""The proof on the screen: asked for with a key, worked out in a thread, shown as marks.

Once the optimum is proved, spine and flags follow exact zeros, and the ledger gives the
exact numbers of its line.
"""

from __future__ import annotations

import threading
import time
from functools import partial

from textual.message import Message

from lpview.cli import told
from lpview.marks import with_prices
from lpview.outcomes import Optimal
from lpview.proof.exact import with_exact_zeros
from lpview.proof.results import NotProved, Proof, ProvedOptimal
from lpview.screen.price_book import State
from lpview.screen.priced_screen import PricedScreen

PROVING = "proving; the same key stops it"
"""Said while the proof is worked out."""


EVERY = 0.5
"""Seconds between two messages on how far the proof is."""


class ProofStep(Message):
    """So many steps of the proof are done."""

    def __init__(self, steps: int) -> None:
        super().__init__()
        self.steps = steps


class ProofEnded(Message):
    """The proof, or what went wrong instead."""

    def __init__(self, proof: Proof | None, problem: str = "") -> None:
        super().__init__()
        self.proof, self.problem = proof, problem


class ProvedScreen(PricedScreen):
    """Linked panes with prices, and a proof on request."""

    def __init__(self, found: Optimal, ascii_marks: bool = False) -> None:
        super().__init__(found, ascii_marks)
        self.proof: Proof | None = None
        self._stop_proving: threading.Event | None = None

    def on_unmount(self) -> None:
        """Nobody waits for a proof any more."""
        if self._stop_proving is not None:
            self._stop_proving.set()

    def action_prove(self) -> None:
        """Prove the optimum; while that goes on, stop it; afterwards say what was proved."""
        if self._stop_proving is not None:
            self._stop_proving.set()
            self.say("proof: stopping")
        elif self.proof is not None and not isinstance(self.proof, NotProved):
            self.say(self._words(self.proof))
        else:
            self._stop_proving = threading.Event()
            self._show_proof_state(self._proving)
            self.say(PROVING)
            self.run_worker(partial(self._prove, self._stop_proving), group="proof", thread=True)

    def _prove(self, stop: threading.Event) -> None:
        from lpview.proof.prove import StoppedError, prove
        from lpview.run import Claim, Watch, within
        from lpview.solver import solve

        steps, posted = 0, time.monotonic()

        def between() -> None:
            nonlocal steps, posted
            steps += 1
            if stop.is_set():
                raise StoppedError(Claim.INTERRUPTED.value)
            if time.monotonic() - posted > EVERY:
                posted = time.monotonic()
                self.post_message(ProofStep(steps))

        head = self.found.head
        ask = within(solve, Watch(stop=stop), None, 0.0)
        try:
            answer = self.found.answer
            proof = prove(head.model, answer.basis, ask, head.request.solve, between, answer.y)
        except Exception as error:  # said in a line; the terminal sees no traceback
            self.post_message(ProofEnded(None, told(error)[0]))
            return
        self.post_message(ProofEnded(proof))

    def on_proof_step(self, message: ProofStep) -> None:
        """Show how far the proof is."""
        if self._stop_proving is not None:
            self._show_proof_state(f"{self._proving}, step {message.steps}")

    @property
    def _proving(self) -> str:
        return "verified, proving" if self.found.passed else "proving"

    def on_proof_ended(self, message: ProofEnded) -> None:
        """Show what was proved."""
        self._stop_proving, self.proof = None, message.proof
        if message.proof is None:
            self._show_proof_state("")
            self.say(message.problem)
            return
        self._show_proof_state(_state(message.proof, self.found.passed))
        self.say(self._words(message.proof))
        if isinstance(message.proof, ProvedOptimal):
            self._show_exact_zeros(message.proof)

    def _words(self, proof: Proof) -> str:
        from lpview.report.proof import proof_facts

        return "; ".join(f"{name}: {text}" for name, text in proof_facts(self.found, proof)[:1])

    def _show_proof_state(self, state: str) -> None:
        self.strip.proof = state
        self.strip.refresh()

    def _show_exact_zeros(self, proof: ProvedOptimal) -> None:
        shown = with_exact_zeros(self.found, proof)
        self.marks = self.marks_without_prices = shown.marks
        if self.book.state is not State.BEGINNING and self.book.state is not State.NONE:
            self.marks = with_prices(shown.marks, self.book.not_unique)
        for pane in (self.constraints, self.variables, self.ledger, self.strip):
            pane.found = shown
        self.ledger.proof = proof
        self.ledger.show(self.line)
        self.constraints.refresh()
        self.variables.refresh()
        self.strip.refresh()


def _state(proof: Proof, passed: bool) -> str:
    if isinstance(proof, ProvedOptimal):
        return "proved"
    if isinstance(proof, NotProved):
        return "verified, not proved" if passed else "not proved"
    return "BUT PROVED OTHERWISE"
