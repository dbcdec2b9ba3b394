"""HiGHS; the only package that imports it.

`solve` answers a model once; `warm_model` keeps one open, to be asked many times with
other costs and limits. What either says is a claim, never believed here.
"""

from lpview.solver.highs import LIMITS
from lpview.solver.once import solve
from lpview.solver.warm import warm_model

__all__ = ["LIMITS", "solve", "warm_model"]
