"""The ledger: the terms of the selected line, what they leave, and what it means."""

from __future__ import annotations

from textwrap import wrap

import numpy as np

from lpview.ledger import Ledger, ledger
from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.proof.results import ProvedOptimal
from lpview.report.ledger import heading
from lpview.report.ledger_words import meaning
from lpview.report.names import fitted, width
from lpview.report.numbers import fitted_number
from lpview.report.proof import exact_sentences
from lpview.report.units import Units, in_units, label_of, units_of
from lpview.report.worth import step_sentence
from lpview.screen.columns import NUMBER, named
from lpview.screen.pane import CURSOR, HEADING, PLAIN, LinesPane, Runs
from lpview.screen.price_book import PriceBook
from lpview.screen.spine import Glyphs
from lpview.screen.view import Lines


class LedgerPane(LinesPane):
    """Terms first, the largest on top, then totals and sentences; terms are links."""

    def __init__(
        self, found: Optimal, glyphs: Glyphs, book: PriceBook, **options: str | None
    ) -> None:
        super().__init__(**options)
        self.found, self.glyphs, self.book = found, glyphs, book
        self.proof: ProvedOptimal | None = None
        self.entry: Ledger | None = None
        self._totals: list[str] = []

    def show(self, line: int) -> None:
        """Show the ledger of a line numbered as in `lpview.kkt`; -1 shows none."""
        self.entry = ledger(self.found, line) if line >= 0 else None
        self.cursor = self.top = 0
        self._wrap()
        self.refresh()

    def _wrap(self) -> None:
        """Break totals and sentences at the pane's width."""
        sentences = [] if self.entry is None else self._sentences(self.entry)
        cells = max(self.size.width - 4, 20)
        self._totals = [part for text in sentences for part in wrapped(text, cells)]

    def _wrap_anew(self) -> None:
        """Break them again; the cursor keeps its term, or stays among them."""
        before = len(self._totals)
        self._wrap()
        if self.cursor >= before:
            self.cursor += len(self._totals) - before
        else:
            self.cursor = min(self.cursor, max(len(self._totals) - 1, 0))

    def on_resize(self) -> None:
        """Sentences break anew."""
        self._wrap_anew()
        super().on_resize()

    def show_prices(self) -> None:
        """Show what has been found about the line meanwhile."""
        self._wrap_anew()
        self.show_cursor()

    @property
    def term_count(self) -> int:
        """Terms of the line."""
        return 0 if self.entry is None else int(self.entry.terms.partner.size)

    @property
    def line_count(self) -> int:
        """Totals and sentences, and terms."""
        return len(self._totals) + self.term_count

    def partners(self) -> tuple[Lines, Vector]:
        """Lines of the other table that share a coefficient, the largest term first."""
        if self.entry is None:
            return np.zeros(0, np.intp), np.zeros(0)
        terms = self.entry.terms
        return terms.partner.astype(np.intp), terms.coefficient

    def partner_line(self, index: int) -> int | None:
        """The line of a term, numbered as in `lpview.kkt`; None where there is no term."""
        at = index - len(self._totals)
        if self.entry is None or not self.term_count:
            return None
        local = int(self.entry.terms.partner[min(max(at, 0), self.term_count - 1)])
        return local + self.found.head.model.m if self.entry.is_row else local

    def heading(self, width_: int) -> list[Runs]:
        """The line as a comparison, and where the cursor is."""
        mark = self.glyphs.cursor if self.has_focus else " "
        title = "no line" if self.entry is None else heading(self.entry, self.found.head)
        place = f"{self.cursor + 1} of {self.line_count}" if self.line_count else ""
        text = fitted(f"{mark} LEDGER  {title}", width_ - len(place) - 2, self.glyphs.more)
        return [[(text + "  " + place, HEADING if self.has_focus else PLAIN)]]

    def content(self, index: int, width_: int) -> Runs:
        """A total or a sentence, or a term."""
        style = PLAIN + CURSOR if index == self.cursor and self.has_focus else PLAIN
        if index < len(self._totals):
            return [(fitted(f"  {self._totals[index]}", width_, self.glyphs.more), style)]
        return [(self._term(index - len(self._totals), width_), style)]

    def _term(self, at: int, width_: int) -> str:
        entry, lp = self.entry, self.found.head.model
        assert entry is not None
        terms = entry.terms
        partner = int(terms.partner[at])
        cells = max(width_ - 3 * (NUMBER + 3) - 4, 8)
        name = fitted((lp.columns if entry.is_row else lp.rows)[partner], cells, self.glyphs.more)
        label = label_of(self.found.head, partner + (lp.m if entry.is_row else 0)).label
        if label:
            name = named(name, label, cells, self.glyphs.more)
        both = (terms.coefficient, terms.factor)
        numbers = [fitted_number(float(part[at]), NUMBER) for part in both]
        product = float(terms.product[at])
        sign = "" if entry.is_row else "less "
        shown = sign + fitted_number(product, NUMBER)
        body = f"{numbers[0]:>{NUMBER}} x {numbers[1]:<{NUMBER}}{shown:>{NUMBER + 5}}"
        return "  " + name + " " * max(cells - width(name), 0) + body

    def _sentences(self, entry: Ledger) -> list[str]:
        """What the terms leave, in numbers and in words."""
        missing = self.book.missing(entry.line)
        prices = self.book.line(entry.line)
        sentences = meaning(self.found, entry, prices)
        worth = step_sentence(self.found, entry.line, prices) if prices else ""
        units = units_of(self.found.head, entry.line)
        exactly: tuple[str, ...] = ()
        if self.proof is not None:
            exactly = exact_sentences(self.found.head.model, self.proof, entry.line)
        last = [text for text in (missing, worth) if text]
        return [_numbers(entry, units), *exactly, *sentences, *last]


def wrapped(text: str, cells: int) -> list[str]:
    """A sentence in lines of at most so many cells, broken at blanks where that can be done."""
    if text.isascii():
        return wrap(text, cells)
    lines = [""]
    for word in text.split(" "):
        joined = f"{lines[-1]} {word}" if lines[-1] else word
        if width(joined) <= cells:
            lines[-1] = joined
            continue
        lines += [""] * bool(lines[-1])
        for character in word:
            if width(lines[-1] + character) > cells:
                lines.append("")
            lines[-1] += character
    return lines


def _numbers(entry: Ledger, units: Units) -> str:
    """What the terms leave, in a line."""

    def told(value: float, unit: str) -> str:
        return in_units(fitted_number(value, NUMBER), unit)

    value, price = told(entry.value, units.own), told(entry.price, units.price)
    if entry.is_row:
        return (
            f"row value {value}, slack {told(entry.slack, units.own)}, dual value {price}, "
            f"product {told(entry.complementarity, units.objective)}"
        )
    return (
        f"value {value}, cost {told(entry.cost, '')} less {told(entry.used, '')} = "
        f"reduced cost {price}"
    )
