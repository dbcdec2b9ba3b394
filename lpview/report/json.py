"""A report as JSON, format 1; README.md documents every field."""

from __future__ import annotations

import json
import math
import platform
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from lpview import __version__
from lpview.labels import Label
from lpview.model import LinearProgram, Vector
from lpview.outcomes import (
    BasisRoute,
    DualSolved,
    Examination,
    Head,
    NoOptimum,
    NotEstablished,
    Optimal,
)
from lpview.polish import Polished
from lpview.repair.search import Infeasible, Unbounded
from lpview.report.names import line_kind_and_name
from lpview.verdict import Verdict

FORMAT = 1
"""Raised only when a documented field changes its meaning."""


def render(found: Examination | list[Examination], added: Sequence[Mapping[str, Any]] = ()) -> str:
    """One object, or an array of them where several models were asked for.

    ``added``, if any, has further fields for each examination.
    """
    several = found if isinstance(found, list) else [found]
    objects = [_object(one) for one in several]
    for one, more in zip(objects, added, strict=bool(added)):
        one.update(more)
    content = objects if isinstance(found, list) else objects[0]
    return json.dumps(content, ensure_ascii=False, indent=1, allow_nan=False) + "\n"


def _object(found: Examination) -> dict[str, Any]:
    answer = found if isinstance(found, Optimal) else None
    return {
        "format": FORMAT,
        "status": status(found),
        "dual_infeasible": _dual_infeasible(found),
        "passed": answer.passed if answer else None,
        "model": _model(found.head),
        "objective": _objective(answer) if answer else None,
        "residuals": _residuals(answer) if answer else [],
        "constraints": _constraints(answer) if answer else [],
        "variables": _variables(answer) if answer else [],
        "certificate": _certificate(found) if isinstance(found, NoOptimum) else None,
        "answer": _answer(answer) if answer else None,
        "reason": found.reason if isinstance(found, NotEstablished) else None,
        "noticed": noticed(found.head),
        "settings": _settings(found.head),
        "tool": {
            "lpview": __version__,
            "highs": found.head.run.solver.removeprefix("HiGHS "),
            "python": platform.python_version(),
        },
        "timing": {"solve_seconds": found.head.run.seconds},
    }


def status(found: Examination) -> str:
    """One of the five documented words."""
    if isinstance(found, Optimal):
        return "optimal"
    if isinstance(found, NoOptimum):
        infeasible = isinstance(found.certificate, Infeasible)
        return "infeasible" if infeasible else "unbounded"
    return "not established" if isinstance(found, NotEstablished) else "stopped"


def _dual_infeasible(found: Examination) -> bool | None:
    if isinstance(found, NoOptimum) and isinstance(found.certificate, Infeasible):
        return found.certificate.dual_infeasible
    return None


def _model(head: Head) -> dict[str, Any]:
    lp = head.model
    return {
        "name": lp.name,
        "sha256": head.sha256,
        "rows": lp.m,
        "columns": lp.n,
        "nonzeros": int(lp.A.nnz),
        "sense": lp.sense.value,
        **scope_and_labels(head),
    }


def scope_and_labels(head: Head) -> dict[str, str]:
    """What stands in place of the model, and the labels that came with it, if any."""
    fields = {"scope": head.notes.scope_words, "labels_sha256": head.labels.sha256}
    return {name: text for name, text in fields.items() if text}


def _objective(found: Optimal) -> dict[str, Any]:
    measured = found.measurement
    return {
        "primal": plain(measured.primal_objective),
        "dual": plain(measured.dual_objective),
        "gap": plain(measured.gap),
        "at_stake": plain(measured.at_stake),
        **label(found.head.labels.objective),
    }


def label(known: Label) -> dict[str, str]:
    """Label, unit and group, as far as there are any."""
    fields = {"label": known.label, "unit": known.unit, "group": known.group}
    return {name: text for name, text in fields.items() if text}


def _residuals(found: Optimal) -> list[dict[str, Any]]:
    return [_residual(found.head.model, verdict) for verdict in found.verdicts]


def _residual(lp: LinearProgram, verdict: Verdict) -> dict[str, Any]:
    known = verdict.passed is not None
    return {
        "condition": verdict.condition.value,
        "absolute": plain(verdict.absolute) if known else None,
        "scaled": plain(verdict.scaled) if known else None,
        "relative": plain(verdict.relative) if known else None,
        "tolerance": verdict.tolerance,
        "passed": verdict.passed,
        "worst": _line(lp, verdict.worst),
    }


def _line(lp: LinearProgram, line: int | None) -> dict[str, str] | None:
    if line is None:
        return None
    kind, name = line_kind_and_name(lp, line)
    return {kind: name}


def _constraints(found: Optimal) -> list[dict[str, Any]]:
    lp, side = found.head.model, found.measurement.rows
    fields = {
        "row": lp.rows,
        "value": numbers(side.value),
        "lower": numbers(lp.row_lower),
        "upper": numbers(lp.row_upper),
        "slack": numbers(side.slack),
        "slack_lower": numbers(side.below),
        "slack_upper": numbers(side.above),
        "dual_value": numbers(found.answer.y),
        "complementarity": numbers(side.complementarity),
        "flags": _flags(found, 0, lp.m),
    }
    return records(fields, found.head.labels.rows)


def _variables(found: Optimal) -> list[dict[str, Any]]:
    lp, side = found.head.model, found.measurement.columns
    fields = {
        "column": lp.columns,
        "value": numbers(found.answer.x),
        "lower": numbers(lp.lower),
        "upper": numbers(lp.upper),
        "cost": numbers(lp.c),
        "reduced_cost": numbers(found.answer.z),
        "complementarity": numbers(side.complementarity),
        "flags": _flags(found, lp.m, lp.m + lp.n),
    }
    return records(fields, found.head.labels.columns)


def records(fields: dict[str, Any], labels: Mapping[int, Label]) -> list[dict[str, Any]]:
    """Columns of fields to an object a line, with its label where it has one."""
    names = tuple(fields)
    lines = [dict(zip(names, line, strict=True)) for line in zip(*fields.values(), strict=True)]
    for k, known in labels.items():
        lines[k].update(label(known))
    return lines


def _flags(found: Optimal, start: int, stop: int) -> list[list[str]]:
    words: list[list[str]] = [[] for _ in range(stop - start)]
    for flag, mask in found.marks.flags.items():
        for line in np.flatnonzero(mask[start:stop]).tolist():
            words[line].append(flag.value)
    return words


def _answer(found: Optimal) -> dict[str, Any]:
    """Where the checked numbers come from, and what else speaks for them."""
    lp, rounded, basis, dual = (
        found.head.model,
        found.rounded,
        found.basis_route,
        found.dual_route,
    )
    return {
        "basis": found.answer.basis is not None,
        "polished": isinstance(found.origin, Polished),
        "rounded": {
            "digits": rounded.digits,
            "absolute": plain(rounded.absolute),
            "scaled": plain(rounded.scaled),
            "worst": _line(lp, rounded.line),
        },
        "prices_from_basis": {
            "done": isinstance(basis, BasisRoute),
            "reason": None if isinstance(basis, BasisRoute) else basis.reason,
            "condition": plain(basis.prices.condition) if isinstance(basis, BasisRoute) else None,
            **_difference(lp, basis if isinstance(basis, BasisRoute) else None),
        },
        "prices_from_dual": {
            "done": isinstance(dual, DualSolved),
            "reason": None if isinstance(dual, DualSolved) else dual.reason,
            "objective": plain(dual.objective) if isinstance(dual, DualSolved) else None,
            "objective_agrees": dual.agrees if isinstance(dual, DualSolved) else None,
            **_difference(lp, dual if isinstance(dual, DualSolved) else None),
        },
    }


def _difference(lp: LinearProgram, route: BasisRoute | DualSolved | None) -> dict[str, Any]:
    if route is None:
        return {"largest_difference": None, "row": None, "rows_beyond_rounding": None}
    found = route.difference
    return {
        "largest_difference": plain(found.largest),
        "row": None if found.row is None else lp.rows[found.row],
        "rows_beyond_rounding": found.beyond,
    }


def _certificate(found: NoOptimum) -> dict[str, Any]:
    lp, certificate = found.head.model, found.certificate
    if isinstance(certificate, Unbounded):
        ray = certificate.ray
        return {
            "kind": "plan and ray",
            "rate": plain(ray.rate),
            "violation": plain(ray.violation),
            "drift": plain(ray.drift),
            "plan": _sparse("column", lp.columns, ray.x),
            "ray": _sparse("column", lp.columns, ray.direction),
        }
    farkas = certificate.farkas
    return {
        "kind": "Farkas multipliers",
        "contradiction": plain(farkas.contradiction),
        "misplaced": plain(farkas.misplaced),
        "reach": plain(farkas.reach),
        "constraints": _sparse("row", lp.rows, farkas.y),
        "variables": _sparse("column", lp.columns, farkas.z),
    }


def _sparse(kind: str, names: tuple[str, ...], values: Vector) -> list[dict[str, Any]]:
    return [
        {kind: names[k], "value": plain(float(values[k]))} for k in np.flatnonzero(values).tolist()
    ]


def noticed(head: Head) -> dict[str, Any]:
    """Everything that reading noticed; remarks only where there are any."""
    notes = head.notes
    return {
        "empty_coefficients": notes.empty_coefficients,
        "empty_costs": notes.empty_costs,
        "rows_without_coefficients": list(notes.rows_without_coefficients),
        "names_alike": [list(pair) for pair in notes.names_alike],
        "most_decimals": dict(notes.most_decimals),
        **({"remarks": list(notes.remarks)} if notes.remarks else {}),
    }


def _settings(head: Head) -> dict[str, Any]:
    request, run = head.request, head.run
    return {
        "source": request.source,
        "command": request.command,
        "tolerance": request.tolerance,
        "zero": request.zero,
        "claim": run.claim.value,
        "solver_message": run.message,
        "solver_options": dict(run.options),
        "rescaled": run.rescaled,
        "iterations": run.iterations,
    }


def numbers(values: Vector) -> list[float | str]:
    """Numbers, with strings for those that JSON lacks."""
    found: list[float | str] = values.tolist()
    return found if np.isfinite(values).all() else [plain(value) for value in values.tolist()]


def plain(value: float) -> float | str:
    """A number, or one of the strings "inf", "-inf" and "nan"."""
    return value if math.isfinite(value) else str(value)
