"""Digits that are claimed, against exact values (slow: a folder of block files)."""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
import pytest

from lpview.prices.digits import Digits, digits
from lpview.proof.prove import prove
from lpview.proof.results import ExactVector, ProvedOptimal
from lpview.run import SolveSettings, Watch
from lpview.solver import solve
from tests.check.helpers import examined
from tests.check.test_netlib import COLLECTION, FOLDER, model_files
from tests.prices.test_netlib_collection import LOOSER

LONG = {"maros-r7", "pilot87"}
"""Their proofs take some ten seconds each."""


def true_digits(values: np.ndarray, exact: ExactVector) -> np.ndarray:
    """Digits of doubles that are right, 0 to 16, where the exact value is not 0."""
    right = [
        _right(Fraction(value), exact[k]) if exact.numerators[k] else 16.0
        for k, value in enumerate(map(float, values))
    ]
    return np.clip(np.array(right), 0.0, 16.0)


def _right(value: Fraction, exact: Fraction) -> float:
    off = abs((value - exact) / exact)
    return 16.0 if off == 0 else -math.log10(float(off)) if off < 1 else 0.0


@pytest.mark.slow
def test_claims_exceed_the_truth_by_at_most_one_digit_in_99_percent_of_lines(capsys):
    lines, over = 0, 0
    for path in model_files(COLLECTION or FOLDER):
        if path.stem in LONG:
            continue
        found = examined_file(path)
        claim = digits(found)
        proof = prove(
            found.head.model, found.answer.basis,
            lambda lp, settings: solve(lp, settings, Watch()), SolveSettings(),
        )  # fmt: skip
        assert isinstance(claim, Digits)
        assert isinstance(proof, ProvedOptimal)
        for claimed, values, exact in (
            (claim.x, found.answer.x, proof.x),
            (claim.y, found.answer.y, proof.y),
        ):
            nonzero = np.array([n != 0 for n in exact.numerators], dtype=bool)
            beyond = (claimed - true_digits(values, exact))[nonzero] > 1
            lines, over = lines + int(nonzero.sum()), over + int(beyond.sum())
    with capsys.disabled():
        print(f"\nclaims beyond the truth by more than a digit: {over} of {lines} lines")
    assert over <= 0.01 * lines


def examined_file(path):
    from lpview.blocks import read_model

    return examined(read_model(str(path)).model, tolerance=LOOSER.get(path.stem, 1e-9))
