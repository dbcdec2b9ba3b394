"""What a page for whoever decides says of whole numbers that its plan ignores or keeps."""

from __future__ import annotations

from decimal import ROUND_CEILING, ROUND_FLOOR

from lpview.model import Sense
from lpview.outcomes import Head
from lpview.reading import InPlace
from lpview.report.names import safe
from lpview.report.units import in_units, objective_unit
from lpview.report.worth import written_out


def of_a_plan(head: Head, headline: str) -> str:
    """A headline about a best plan, and what stands in place of whole numbers."""
    scope = head.notes.scope
    if scope is None:
        return headline
    aside = "whole numbers aside" if scope.kind is InPlace.RELAXED else "with these whole numbers"
    return f"{aside}, {headline}"


def of_no_plan(head: Head, headline: str) -> str:
    """The same about a model without a plan; the relaxation has none either way."""
    scope = head.notes.scope
    held = scope is not None and scope.kind is InPlace.FIXED
    return f"{headline} with these whole numbers" if held else headline


def scope_sentences(head: Head, bound: float | None = None, has_plan: bool = True) -> list[str]:
    """What the page ignores or keeps; nothing for a linear program as it is.

    Parameters
    ----------
    bound
        A best objective of the linear program, where that is certain.
    has_plan
        False where the linear program surely has none.
    """
    scope = head.notes.scope
    if scope is None:
        return []
    columns = "1 column" if scope.columns == 1 else f"{scope.columns} columns"
    if scope.kind is InPlace.FIXED:
        were, other = "was" if scope.columns == 1 else "were", ""
        if bound is not None:
            other = "; another choice may be better"
        elif not has_plan:
            other = "; another choice may have a plan"
        return [f"{columns} {were} held at the whole numbers of {safe(scope.file)}{other}."]
    asks = f"The model asks for whole numbers in {columns}; this page ignores that"
    if not has_plan:
        return [f"{asks}, and still there is no plan."]
    return [f"{asks}." + ("" if bound is None else f" {_at_best(head, bound)}")]


def _at_best(head: Head, bound: float) -> str:
    """What a plan in whole numbers comes to at best, rounded so that it stays true."""
    minimizing, unit = head.model.sense is Sense.MINIMIZE, objective_unit(head)
    if not unit:
        text = _rounded(bound, minimizing)
        end = "least" if minimizing else "most"
        return f"A plan in whole numbers has an objective of at {end} {text}."
    loss = minimizing == (bound >= 0)
    verbs = ("costs", "brings in") if minimizing else ("loses", "earns")
    text = in_units(_rounded(abs(bound), loss), unit)
    verb, end = (verbs[0], "least") if loss else (verbs[1], "most")
    return f"A plan in whole numbers {verb} at {end} {text}."


def _rounded(value: float, down: bool) -> str:
    return written_out(value, rounding=ROUND_FLOOR if down else ROUND_CEILING)
