"""The solver's own reader of MPS files."""

from __future__ import annotations

import tempfile
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import highspy
import numpy as np
from scipy.sparse import csc_array

from lpview.model import Sense, Vector
from lpview.solver.highs import SMALL_COEFFICIENT, quiet_highs

DROPPED = SMALL_COEFFICIENT
"""The reader drops coefficients of this size and below."""

INTEGER = int(highspy.HighsVarType.kInteger)


@dataclass(frozen=True, eq=False)
class FileModel:
    """What the solver's reader made of a file."""

    sense: Sense
    """Minimize or maximize."""
    offset: float
    """Constant of the objective."""
    columns: Sequence[str]
    """Names of the ``n`` columns."""
    rows: Sequence[str]
    """Names of the ``m`` rows."""
    c: Vector
    """Costs, shape ``(n,)``."""
    lower: Vector
    """Lower bounds, shape ``(n,)``."""
    upper: Vector
    """Upper bounds, shape ``(n,)``."""
    row_lower: Vector
    """Lower sides, shape ``(m,)``."""
    row_upper: Vector
    """Upper sides, shape ``(m,)``."""
    A: csc_array
    """Coefficients, shape ``(m, n)``, indices sorted."""
    integers: frozenset[int]
    """Integer columns."""


def read_mps_text(text: str) -> FileModel | None:
    """The model in a text in MPS format; None where the reader refuses it."""
    highs = quiet_highs()
    highs.setOptionValue("small_matrix_value", SMALL_COEFFICIENT)
    highs.setOptionValue("large_matrix_value", np.inf)
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "model.mps"
        path.write_text(text, encoding="ascii")
        if highs.readModel(str(path)) == highspy.HighsStatus.kError:
            return None
    return _taken(highs.getLp())


def _taken(lp: highspy.HighsLp) -> FileModel:
    matrix = lp.a_matrix_
    parts = np.array(matrix.value_, float), np.array(matrix.index_), np.array(matrix.start_)
    A = csc_array(parts, shape=(lp.num_row_, lp.num_col_))
    A.sort_indices()
    kinds = enumerate(lp.integrality_)
    return FileModel(
        sense=Sense.MAXIMIZE if lp.sense_ == highspy.ObjSense.kMaximize else Sense.MINIMIZE,
        offset=float(lp.offset_),
        columns=list(lp.col_names_),
        rows=list(lp.row_names_),
        c=np.array(lp.col_cost_, float),
        lower=np.array(lp.col_lower_, float),
        upper=np.array(lp.col_upper_, float),
        row_lower=np.array(lp.row_lower_, float),
        row_upper=np.array(lp.row_upper_, float),
        A=A,
        integers=frozenset(k for k, kind in kinds if int(kind) == INTEGER),
    )
