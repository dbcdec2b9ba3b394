"""An exact check of an answer, in fractions, that shares nothing with the package."""

import json
from collections import defaultdict
from fractions import Fraction
from pathlib import Path

from tests.reading import INF, read


def check_report(path, text):
    """Check the answer in a JSON report about the model in the file ``path``."""
    report = json.loads(text)
    passed = {line["condition"]: line["passed"] for line in report["residuals"]}
    x, z = ([line[k] for line in report["variables"]] for k in ("value", "reduced_cost"))
    y = [line["dual_value"] for line in report["constraints"]]
    return check(path, x, y, None if passed["stationarity"] is None else z)


def check(path, x, y, z=None):
    """Largest (absolute, scaled, relative) residual by condition, for lists of floats.

    Without stationarity where no reduced costs ``z`` are reported.
    """
    model, found = read(Path(path)), defaultdict(list)
    x = dict(zip(model.costs, map(Fraction, x), strict=True))
    y = dict(zip(model.sides, map(Fraction, y), strict=True))
    primal = model.offset + sum(cost * x[j] for j, cost in model.costs.items())
    dual, in_column = model.offset, {j: [cost] for j, cost in model.costs.items()}
    for i, row in model.rows.items():
        terms = [a * x[j] for j, a in row.items()]
        dual += _line(found, model.sense, terms, [y[i]], model.sides[i])
        for j, a in row.items():
            in_column[j].append(-a * y[i])
    for j, terms in in_column.items():
        dual += _line(found, model.sense, [x[j]], terms, model.bounds[j])
    found["duality gap"] = [(primal - dual, max(abs(primal), abs(dual)))]
    if z is not None:
        pairs = zip(in_column.values(), map(Fraction, z), strict=True)
        found["stationarity"] = [(sum(a) - b, max(map(abs, a))) for a, b in pairs]
    return {condition: _worst(pairs) for condition, pairs in found.items()}


def _line(found, sense, values, prices, ends):  # adds residuals, returns the dual's part
    value, price = sum(values), sum(prices)
    end = min(max(value, ends[0]), ends[1])
    found["primal feasibility"].append((value - end, max([abs(end), *map(abs, values)])))
    side = ends[0] if (price > 0) == (sense == "minimize") else ends[1]
    lost = abs(side) == INF
    found["dual feasibility"].append((price * lost, max(map(abs, prices))))
    side, value = (0, 0) if lost else (side, value)
    largest = abs(price) * max(abs(value), abs(side))
    found["complementary slackness"].append((price * (value - side), largest))
    return price * side


def _worst(pairs):
    sizes = [(abs(r), abs(r) / max(1, t), abs(r) / t if t else INF) for r, t in pairs if r]
    return tuple(map(max, zip((Fraction(0),) * 3, *sizes, strict=True)))
