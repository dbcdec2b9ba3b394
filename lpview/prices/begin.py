"""Where every examination of prices begins: a verified answer at a basis, or why there is none."""

from __future__ import annotations

from lpview.basis import BasisMatrix, SingularBasis, factor_basis
from lpview.outcomes import Optimal
from lpview.prices.lines import Lines, lines_of
from lpview.prices.results import NoPrices


def verified_lines(found: Optimal) -> Lines | NoPrices:
    """The lines of an answer that passed its check and has a basis."""
    if not found.passed:
        return NoPrices("the answer failed its check")
    if found.answer.basis is None:
        return NoPrices("the answer comes without a basis (leave --no-crossover out)")
    return lines_of(found.head.model, found.measurement, found.marks, found.answer.basis)


def at_basis(found: Optimal) -> tuple[Lines, BasisMatrix] | NoPrices:
    """The same with its basis factored."""
    lines, basis = verified_lines(found), found.answer.basis
    if isinstance(lines, NoPrices) or basis is None:
        return lines if isinstance(lines, NoPrices) else NoPrices("there is no basis")
    matrix = factor_basis(found.head.model, basis)
    if isinstance(matrix, SingularBasis):
        return NoPrices(f"the basis {matrix.reason}")
    return lines, matrix
