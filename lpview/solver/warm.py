"""A model kept open in HiGHS: presolve off, each run from the basis of the last."""

from __future__ import annotations

from typing import Any

import highspy
import numpy as np
from scipy.sparse import csr_array

from lpview.model import LinearProgram, Sense, Vector
from lpview.scaling import Scaling, scaling_for
from lpview.solver.highs import LIMITS, SMALL_COEFFICIENT, pass_model, quiet_highs
from lpview.warm import Box, Descent, Index, Lost, Vertex, WarmModel

_PRIMAL_SIMPLEX = 4
_DUAL_SIMPLEX = 1
_OTHER_STRATEGIES = (_PRIMAL_SIMPLEX, _DUAL_SIMPLEX)
_OPTIONS = {
    "presolve": "off",
    "solver": "simplex",
    # Other costs leave the last vertex feasible, which is where this method begins.
    "simplex_strategy": _PRIMAL_SIMPLEX,
    "primal_feasibility_tolerance": 1e-9,
    "dual_feasibility_tolerance": 1e-9,
    "small_matrix_value": SMALL_COEFFICIENT,
}


def warm_model(G: csr_array, box: Box) -> WarmModel:
    """Open a model with ``G``, shape ``(m, n)``, and limits; see `lpview.warm`."""
    return _WarmHighs(G, box)


class _WarmHighs:
    def __init__(self, G: csr_array, box: Box) -> None:
        lp = _program(G, box)
        self._scaling: Scaling = scaling_for(lp, LIMITS)
        self._highs: Any = quiet_highs()
        for name, value in _OPTIONS.items():
            self._highs.setOptionValue(name, value)
        pass_model(self._highs, self._scaling.apply(lp))
        self._asked: Index = np.zeros(0, np.int32)

    def set_columns(self, index: Index, low: Vector, high: Vector) -> None:
        shift = -self._scaling.column[index]
        low, high = _shifted(low, shift), _shifted(high, shift)
        _done(self._highs.changeColsBounds(len(index), index, low, high))

    def set_rows(self, index: Index, low: Vector, high: Vector) -> None:
        shift = self._scaling.row[index]
        low, high = _shifted(low, shift), _shifted(high, shift)
        _done(self._highs.changeRowsBounds(len(index), index, low, high))

    def least(self, index: Index, costs: Vector) -> Vertex | Descent | Lost:
        highs = self._highs
        highs.changeColsCost(len(self._asked), self._asked, np.zeros(len(self._asked)))
        costs = _shifted(costs, self._scaling.column[index])
        _done(highs.changeColsCost(len(index), index, costs))
        self._asked = index
        found = self._run()
        for strategy in _OTHER_STRATEGIES:
            if not isinstance(found, Lost):
                break
            # Now and then a run from another basis ends without a status: begin anew.
            highs.clearSolver()
            highs.setOptionValue("simplex_strategy", strategy)
            found = self._run()
        highs.setOptionValue("simplex_strategy", _PRIMAL_SIMPLEX)
        return found

    def _run(self) -> Vertex | Descent | Lost:
        highs = self._highs
        highs.run()
        status = highs.getModelStatus()
        if status == highspy.HighsModelStatus.kOptimal:
            return Vertex(self._point())
        if status == highspy.HighsModelStatus.kUnbounded:
            _, found, ray = highs.getPrimalRay()
            if found:
                return Descent(self._point(), self._scaling.plan(np.array(ray)))
        return Lost(str(highs.modelStatusToString(status)))

    def _point(self) -> Vector:
        return self._scaling.plan(np.array(self._highs.getSolution().col_value))


def _done(status: Any) -> None:
    """A refused change would leave the questions that follow about another model."""
    if status == highspy.HighsStatus.kError:
        raise ValueError("expected lines and limits of the open model")


def _program(G: csr_array, box: Box) -> LinearProgram:
    m, n = G.shape
    return LinearProgram(
        name="",
        sense=Sense.MINIMIZE,
        columns=tuple(map(str, range(n))),
        rows=tuple(map(str, range(m))),
        c=np.zeros(n),
        A=G,
        row_lower=np.array(box.row_low),
        row_upper=np.array(box.row_high),
        lower=np.array(box.low),
        upper=np.array(box.high),
    )


def _shifted(values: Vector, exponents: Any) -> Vector:
    return np.ldexp(values, exponents.astype(np.int32)) if exponents.any() else values
