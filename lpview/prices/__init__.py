"""Which prices can be trusted: what is true of the optimal value, not of one basis.

`work_out` takes a verified answer with its basis and finds, for every line, the interval
of its price over all optimal dual solutions and of its value over all optimal plans, how
far each one-sided rate holds, and whether zero slack is shared by all optimal plans.
"""

from lpview.prices.results import LinePrices, Move, Moves, NoPrices, Then, ZeroSlack
from lpview.prices.together import Alone, Together, move_together
from lpview.prices.work import PlanPoint, PricePoint, Prices, work_out

__all__ = [
    "Alone",
    "LinePrices",
    "Move",
    "Moves",
    "NoPrices",
    "PlanPoint",
    "PricePoint",
    "Prices",
    "Then",
    "Together",
    "ZeroSlack",
    "move_together",
    "work_out",
]
