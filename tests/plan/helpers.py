"""What the tests of plans from elsewhere share."""

from __future__ import annotations

from decimal import Decimal
from types import MappingProxyType

import numpy as np

from lpview.decimals import parse
from lpview.given import GivenPlan, Written
from lpview.kkt import Condition
from lpview.planned import checked_plan, judged, limits_of, measured
from tests.check.helpers import examined
from tests.dual.models import INF, model

TOLERANCE = 1e-9


def wyndor():
    """Wyndor Glass: Hillier and Lieberman, Introduction to Operations Research, section 3.1
    (the attribution from memory): x = (2, 6), optimum 36, dual values (0, 3/2, 1)."""
    rows = {
        "plant1": (-INF, {"doors": 1}, 4),
        "plant2": (-INF, {"windows": 2}, 12),
        "plant3": (-INF, {"doors": 3, "windows": 2}, 18),
    }
    return model("maximize", {"doors": 3, "windows": 5}, rows, {})


def half_unit(text):
    """Half a unit of the last written digit."""
    return 0.0 if "/" in text else float(Decimal(1).scaleb(Decimal(text).as_tuple().exponent) / 2)


def written(texts):
    """Numbers as a file writes them; None for one that it does not list."""
    pairs = [parse(text or "0") for text in texts]
    return Written(
        np.array([value for value, _ in pairs], float),
        np.array([half_unit(text) if text else 0.0 for text in texts], float),
        np.array([text is not None for text in texts], bool),
        MappingProxyType({k: odd for k, (_, odd) in enumerate(pairs) if odd is not None}),
    )


def given(x, y=None, z=None, unknown=()):
    """A plan of texts in the order of the model's lines."""
    parts = (None if part is None else written(part) for part in (x, y, z))
    return GivenPlan("plan.csv", "0" * 64, *parts, unknown=unknown)


def verdicts(lp, x, y=None, z=None, limits=(), tolerance=TOLERANCE):
    """What a plan of texts comes to."""
    found = measured(lp, given(x, y, z))
    return judged(found, tolerance, limits_of(lp, "model.csv", limits))


def passed(lp, x, y=None, z=None, **more):
    """``(as written, within rounding)`` by condition; None where it is not judged."""
    found = verdicts(lp, x, y, z, **more)
    return {
        v.condition: None if v.written is None else (v.written.passed, v.within.passed)
        for v in found.verdicts
    }


def primal(lp, x, **more):
    return passed(lp, x, **more)[Condition.PRIMAL]


def checked(lp, x, y=None, z=None, limits=(), rounded=False, outcome=None, unknown=()):
    """A plan of texts beside the solved model."""
    found = measured(lp, given(x, y, z, unknown))
    outcome = outcome or examined(lp)
    return checked_plan(found, outcome, limits_of(lp, "model.csv", limits), rounded)
