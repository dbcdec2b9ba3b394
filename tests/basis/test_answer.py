"""Answers and bases cannot be changed after they are made."""

from __future__ import annotations

import numpy as np
import pytest

from lpview.answer import Answer, Basis, LineStatus


def test_statuses_are_numbered_as_documented():
    assert [(status.name, status.value) for status in LineStatus] == [
        *(("LOWER", 0), ("BASIC", 1), ("UPPER", 2), ("FREE", 3))
    ]


def test_arrays_are_read_only():
    basis = Basis(np.zeros(2, np.int8), np.ones(1, np.int8))
    answer = Answer(np.zeros(2), np.zeros(1), np.zeros(2), basis)
    for array in (answer.x, answer.y, answer.z, basis.column, basis.row):
        with pytest.raises(ValueError, match="read-only"):
            array[0] = 1
