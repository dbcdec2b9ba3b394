"""Small models with labels, units and groups; their answers are worked out by hand.

The glasshouse is that of `models/spring.csv`, whose head tells its prices: bench anywhere from
2 to 10/3, hours from 0 to 4/3, water from 0 to 4. The mixture is a day's feed of a small herd.
"""

from __future__ import annotations

from dataclasses import replace

from lpview.labels import Label, Labels
from lpview.model import LinearProgram
from lpview.prices import Prices, work_out
from lpview.solver import warm_model
from tests.check.helpers import examined, line_of
from tests.dual.models import INF, model

GLASSHOUSE = {
    "bench": Label("bench space", "m2", "place"),
    "hours": Label("packing hall", "h"),
    "water": Label("", "hl", "place"),
    "chard": Label("rainbow chard", "crate"),
    "cucumber": Label("", "crate"),
}
EARNINGS = Label("", "EUR")


def glasshouse(sense: str = "maximize") -> LinearProgram:
    """30 cucumber and 40 chard earn 480, where all three rows meet; minimized, it costs -480."""
    sign = 1 if sense == "maximize" else -1
    return model(
        sense,
        {"cucumber": 8 * sign, "chard": 6 * sign, "mint": 2 * sign},
        {
            "bench": (-INF, {"cucumber": 2, "chard": 1, "mint": 1}, 100),
            "hours": (-INF, {"cucumber": 1, "chard": 2, "mint": 1}, 110),
            "water": (-INF, {"cucumber": 1, "chard": 1, "mint": 1}, 70),
        },
        {},
    )


MIXTURE = {
    "energy": Label("metabolizable energy", "MJ"),
    "weight": Label("", "kg"),
    "hay": Label("", "kg"),
    "oats": Label("rolled oats", "kg"),
    "salt": Label("", "g"),
}


def mixture(sense: str = "minimize") -> LinearProgram:
    """One model with each kind of limit that can hold a plan back.

    hay + oats + beans = 100 kg with at least 850 MJ, 8 of them a kg of hay, 11 of oats and 10
    of beans; oats at most 10 kg and beans at least 4; 50 g of salt are fixed at 0.01 a g.
    With oats at 10, energy asks for 8 hay + 10 beans >= 740 where hay + beans = 90: beans 10
    and hay 80, at 0.2, 0.35 for oats and 0.5: 16 + 3.5 + 5 + 0.5 = 25.

    One MJ more turns half a kg of hay into beans, for 0.15. One kg of weight more saves 4 kg
    of beans for 5 of hay: 1 - 2 = -1 each. One kg of oats more saves 1.5 of beans and adds
    0.5 of hay: 0.35 - 0.75 + 0.1 = -0.3.
    """
    sign = 1 if sense == "minimize" else -1
    return model(
        sense,
        {"hay": 0.2 * sign, "oats": 0.35 * sign, "beans": 0.5 * sign, "salt": 0.01 * sign},
        {
            "energy": (850, {"hay": 8, "oats": 11, "beans": 10}, INF),
            "weight": (100, {"hay": 1, "oats": 1, "beans": 1}, 100),
        },
        {"oats": (0, 10), "beans": (4, INF), "salt": (50, 50)},
    )


def labels_of(lp: LinearProgram, known: dict[str, Label], objective: Label) -> Labels:
    """Labels by name."""
    lines = {line_of(lp, name): label for name, label in known.items()}
    return Labels(
        {k: label for k, label in lines.items() if k < lp.m},
        {k - lp.m: label for k, label in lines.items() if k >= lp.m},
        objective,
        "0a" * 32,
    )


def labelled(found, known: dict[str, Label], objective: Label = EARNINGS, **notes):
    """The same examination with labels, and with notes of its reading."""
    labels = labels_of(found.head.model, known, objective)
    noted = replace(found.head.notes, **notes)
    return replace(found, head=replace(found.head, labels=labels, notes=noted))


def labelled_glasshouse(sense: str = "maximize", **notes):
    return labelled(examined(glasshouse(sense)), GLASSHOUSE, **notes)


def labelled_mixture(sense: str = "minimize", **notes):
    return labelled(examined(mixture(sense)), MIXTURE, **notes)


def prices_of(found) -> Prices:
    made = work_out(found, warm_model)
    assert isinstance(made, Prices)
    return made


def nothing_between() -> None:
    """What is called between two steps of the prices."""
