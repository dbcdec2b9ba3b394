"""Small models whose prices are worked out by hand, and how these tests look at them."""

from __future__ import annotations

from pathlib import Path

import numpy as np

from lpview import cli
from lpview.answer import Answer, Basis, LineStatus
from lpview.examination import check_answer
from lpview.prices import Prices, work_out
from lpview.solver import warm_model
from tests.check.helpers import examined
from tests.dual.models import INF, model

GLASSHOUSE = """[c],maximize
column,tomato,basil
income,30,1.6

[A]
row,tomato,basil
heat,15,2
bench,5.2,0
water,4,0

[b]
row,relation,rhs
heat,<=,300
bench,<=,120
water,<=,80

[bounds]
column,lower,upper
tomato,0,40
"""
# Worked by hand: tomato 20, where heat and water meet. Optimal prices are 15 y1 + 4 y3 = 30
# with 2 y1 >= 1.6, so heat goes from 0.8 to 2, water from 0 to 4.5, basil's reduced cost
# 1.6 - 2 y1 from -2.4 to 0. More heat can only buy basil at 1.6 / 2 = 0.8 each.

LOOSE = """[c],minimize
column,near,far,spare
cost,1,1,0

[A]
row,near,far,spare
need,1,1,0
again,2,2,0
slack,1,0,-1
store,0,1,0

[b]
row,lower,upper
need,4,4
again,8,8
slack,,5
store,-1,3
"""
# Worked by hand: near + far = 4 costs 4 however it is split, far at most 3, and spare has no
# use and no limit. "again" repeats "need": moving one of them alone leaves no plan.


def found_glasshouse(sense="maximize"):
    """Its optimal plan with heat nonbasic: the answer's prices are 2 and 0."""
    sign = 1 if sense == "maximize" else -1
    lp = model(
        sense,
        {"tomato": 30 * sign, "basil": 1.6 * sign},
        {
            "heat": (-INF, {"tomato": 15, "basil": 2}, 300),
            "bench": (-INF, {"tomato": 5.2}, 120),
            "water": (-INF, {"tomato": 4}, 80),
        },
        {"tomato": (0, 40)},
    )
    y = np.array([2.0 * sign, 0, 0])
    columns = np.array([LineStatus.BASIC, LineStatus.LOWER], np.int8)
    rows = np.array([LineStatus.UPPER, LineStatus.BASIC, LineStatus.BASIC], np.int8)
    answer = Answer(np.array([20.0, 0.0]), y, lp.c - lp.A.T @ y, Basis(columns, rows))
    return check_answer(examined(lp).head, answer)


def ready(found) -> Prices:
    """Its prices, still to be asked for."""
    made = work_out(found, warm_model)
    assert isinstance(made, Prices)
    return made


def run(*words, capfd):
    """Exit status, standard output and standard error of a command."""
    status = cli.main([str(word) for word in words])
    out, err = capfd.readouterr()
    return status, out, err


def written(folder: Path, name: str, text: str) -> str:
    (folder / name).write_text(text, encoding="utf-8")
    return name
