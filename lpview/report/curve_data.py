"""A value curve as CSV and as JSON."""

from __future__ import annotations

import csv
import io
import json
from typing import Any

from lpview import __version__
from lpview.outcomes import Examination
from lpview.prices.curve import Curve, NoCurve, Recorded
from lpview.prices.number import Part
from lpview.report.check import verdict
from lpview.report.curve import marks_at, part_of, price_word
from lpview.report.heads import noticed as noticed_anything
from lpview.report.json import FORMAT, noticed, plain, scope_and_labels
from lpview.report.names import line_kind_and_name
from lpview.report.numbers import in_full


def as_csv(curve: Curve) -> str:
    """A line for each place of the curve; rates and recorded lines are empty where unknown."""
    header = ["number", "objective", "rate below", "rate above", "mark"]
    for line in curve.recorded:
        name, price = " ".join(line_kind_and_name(curve.lp, line)), price_word(curve.lp, line)
        header += [f"{name}: {end} value" for end in ("least", "greatest")]
        header += [f"{name}: {end} {price}" for end in ("least", "greatest")]
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(header)
    for place in curve.places:
        numbers = [place, curve.at(place), *curve.rates(place)]
        recorded = [_ends(by_place.get(place)) for by_place in curve.recorded.values()]
        writer.writerow(
            [
                *map(_cell, numbers),
                marks_at(curve, place),
                *(_cell(end) for ends in recorded for end in ends),
            ]
        )
    return text.getvalue()


def _ends(seen: Recorded | None) -> tuple[float | None, ...]:
    return (None,) * 4 if seen is None else (*seen.value, *seen.price)


def _cell(value: float | None) -> str:
    return "" if value is None else in_full(value)


def as_json(found: Examination, curve: Curve | NoCurve | None) -> str:
    """One object; null means not known, infinities are the strings "inf" and "-inf".

    ``curve`` is None where there is no verified optimum to begin with.
    """
    request, head = found.head.request, found.head
    content = {
        "format": FORMAT,
        "model": {
            "name": head.model.name,
            "sha256": head.sha256,
            "sense": head.model.sense.value,
            **scope_and_labels(head),
        },
        "curve": _curve(curve) if isinstance(curve, Curve) else None,
        "reason": verdict(found) if curve is None else getattr(curve, "reason", None),
        **({"noticed": noticed(head)} if noticed_anything(head.notes) else {}),
        "settings": {"source": request.source, "command": request.command},
        "tool": {"lpview": __version__},
    }
    return json.dumps(content, ensure_ascii=False, indent=1, allow_nan=False) + "\n"


def _curve(curve: Curve) -> dict[str, Any]:
    kind, name = line_kind_and_name(curve.lp, curve.number.line)
    both = curve.number.part is Part.BOTH
    return {
        kind: name,
        "number": part_of(curve),
        "sides": ["lower", "upper"] if both else [curve.number.part.value],
        "now": plain(curve.now),
        "objective": plain(curve.objective),
        "shape": "convex" if curve.should_be_convex else "concave",
        "shape_holds": curve.bends_rightly,
        "span": [plain(end) for end in curve.span],
        "below": curve.below.value,
        "above": curve.above.value,
        "pieces": [
            {
                "from": plain(piece.start),
                "to": plain(piece.end),
                "rate": plain(piece.rate),
                "objective_from": plain(piece.at(piece.start)),
                "objective_to": plain(piece.at(piece.end)),
            }
            for piece in curve.pieces
        ],
        "breakpoints": [plain(point.at) for point in curve.breakpoints],
        "solved_again": len(curve.joints),
        "largest_difference": plain(max(curve.joints)) if curve.joints else None,
        "stopped": curve.stopped,
        "places": [_place(curve, place) for place in curve.places],
    }


def _place(curve: Curve, place: float) -> dict[str, Any]:
    below, above = curve.rates(place)
    return {
        "number": plain(place),
        "objective": _known(curve.at(place)),
        "rate_below": _known(below),
        "rate_above": _known(above),
        "mark": marks_at(curve, place),
        "lines": [_line(curve, line, place) for line in curve.recorded],
    }


def _line(curve: Curve, line: int, place: float) -> dict[str, Any]:
    kind, name = line_kind_and_name(curve.lp, line)
    seen = curve.recorded[line].get(place)
    return {
        kind: name,
        "value": [plain(end) for end in seen.value] if seen else None,
        price_word(curve.lp, line).replace(" ", "_"): (
            [plain(end) for end in seen.price] if seen else None
        ),
    }


def _known(value: float | None) -> float | str | None:
    return None if value is None else plain(value)
