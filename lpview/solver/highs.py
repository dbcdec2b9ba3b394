"""What every use of HiGHS shares: its limits, a silent object, handing over a model."""

from __future__ import annotations

import os
import sys
from typing import Any

import highspy
import numpy as np

from lpview.model import LinearProgram, Sense
from lpview.scaling import Limits, NotRepresentableError

SMALL_COEFFICIENT = 1e-12
"""The smallest threshold that HiGHS accepts for dropping coefficients."""

LIMITS = Limits(smallest=SMALL_COEFFICIENT, wary=1e-9, ample=1e10, largest=1e15, infinite=1e20)
"""What HiGHS keeps as it is (its documented defaults, and the threshold above).

Rows beyond 1e10 are rescaled too: with coefficients near 1e13 it was seen to call a bounded
model unbounded."""

_ROW_WISE = 2
_SENSE = {Sense.MINIMIZE: 1, Sense.MAXIMIZE: -1}


_said: list[bool] = []
"""Not empty once a solver object has been made in this process."""


def quiet_highs() -> Any:
    """A solver object; the first one of a process prints to C's standard output, so hide that.

    Only the first: redirecting a stream for longer would swallow what a screen, which
    runs in another thread, writes meanwhile.
    """
    if _said:
        return _silent(highspy.Highs())  # type: ignore[no-untyped-call]
    sys.stdout.flush()
    try:
        saved = os.dup(1)
    except OSError:  # standard output is closed: nothing to protect
        return _silent(highspy.Highs())  # type: ignore[no-untyped-call]
    null = os.open(os.devnull, os.O_WRONLY)
    os.dup2(null, 1)
    try:
        return _silent(highspy.Highs())  # type: ignore[no-untyped-call]
    finally:
        _said.append(True)
        os.dup2(saved, 1)
        os.close(saved)
        os.close(null)


def _silent(highs: Any) -> Any:
    highs.setOptionValue("output_flag", False)
    return highs


def pass_model(highs: Any, lp: LinearProgram) -> None:
    """Hand a model over; raises `NotRepresentableError` where its numbers do not survive."""
    A = lp.A
    status = highs.passModel(
        lp.n, lp.m, A.nnz, _ROW_WISE, _SENSE[lp.sense], lp.offset, lp.c, lp.lower, lp.upper,
        lp.row_lower, lp.row_upper, A.indptr, A.indices, A.data, np.zeros(lp.n, np.int32),
    )  # fmt: skip
    if status == highspy.HighsStatus.kError or highs.getNumNz() != A.nnz:
        raise NotRepresentableError(
            "the solver does not take this model's numbers as they are; state it in other units"
        )
