"""A model in any of the formats, read as the person asked: one door for every command."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from fractions import Fraction
from pathlib import Path

from lpview.blocks import InputError, read_label_file, read_model, read_model_bytes, read_plan
from lpview.blocks.mistakes import Mistake
from lpview.model import LinearProgram, Sense, frozen_odd
from lpview.reading import Reading

MPS_ENDINGS = (".mps", ".mps.gz")
"""What the name of a file ends with, in any case, that is no CSV blocks."""


@dataclass(frozen=True)
class ReadAs:
    """How a model is to be read."""

    decimal: str | None = None
    """``"point"`` or ``"comma"``, the decimal mark; None where the file shows it."""
    negated: bool = False
    """Whether the costs were exported with their signs turned round."""
    labels: str | None = None
    """A file of labels; None for those of the model."""
    relax: bool = False
    """Whether integer columns are taken as continuous."""
    fix_integers: str | None = None
    """A plan at whose values the integer columns are fixed; None for none."""


def ending(data: bytes) -> str:
    """What the name of a file with these bytes should end with."""
    from lpview.mps import looks_like_mps

    packed = ".gz" if data.startswith(b"\x1f\x8b") else ""
    return (".mps" if looks_like_mps(data) else ".csv") + packed


AS_IT_IS = ReadAs()
"""Nothing is asked for."""


def read_input(source: str, how: ReadAs = AS_IT_IS) -> Reading:
    """A model from a file or a folder. Raises `InputError`."""
    if source.casefold().endswith(MPS_ENDINGS) and not Path(source).is_dir():
        from lpview.mps import read_mps  # which takes the solver along

        return _as_asked(read_mps(source), source, how)
    return _as_asked(read_model(source, how.decimal), source, how)


def read_input_bytes(data: bytes, name: str, how: ReadAs = AS_IT_IS) -> Reading:
    """A model that is in memory, such as standard input. Raises `InputError`."""
    from lpview.mps import looks_like_mps, read_mps_bytes

    if looks_like_mps(data):
        return _as_asked(read_mps_bytes(data, name), name, how)
    return _as_asked(read_model_bytes(data, name, how.decimal), name, how)


def _as_asked(reading: Reading, source: str, how: ReadAs) -> Reading:
    if reading.integers or how.relax or how.fix_integers is not None:
        reading = _with_integers(reading, source, how)
    if how.negated:
        reading = _turned_back(reading, source)
    if how.labels is not None:
        own = bool(reading.labels.sha256)
        labels = read_label_file(how.labels, reading.model)
        reading = replace(reading, labels=labels)
        if own:
            reading = reading.remarked("the model's own labels replaced by those of --labels")
    return reading


def _turned_back(reading: Reading, source: str) -> Reading:
    """A model that was exported as a minimization of negated costs, as it was meant."""
    if reading.model.sense is Sense.MAXIMIZE:
        advice = "only a minimization of negated costs is turned back"
        wrong = Mistake(source, "minimize with --negated", "maximize", advice=advice)
        raise InputError([wrong])
    said = "costs negated back, as --negated asks: minimize became maximize"
    return replace(reading, model=negated(reading.model)).remarked(said)


def _with_integers(reading: Reading, source: str, how: ReadAs) -> Reading:
    """A reading without integer columns, as it was asked for."""
    from lpview.integers import fixed, linear, relaxed

    if how.relax:
        return relaxed(reading)
    if how.fix_integers is None:
        return linear(reading, source)
    plan = read_plan(how.fix_integers, reading.model, how.decimal, needed=reading.integers)
    return fixed(reading, plan, source)


def negated(lp: LinearProgram) -> LinearProgram:
    """The model with the signs of its costs and of its constant, and its sense, turned round."""
    odd: Mapping[str, Mapping[int, Fraction]] = {
        name: {k: -exact for k, exact in values.items()} if name in ("c", "offset") else values
        for name, values in lp.odd.items()
    }
    return replace(
        lp,
        sense=lp.sense.other,
        # Adding 0.0 turns a negative zero into a plain one.
        c=-lp.c + 0.0,
        offset=-lp.offset + 0.0,
        odd=frozen_odd(odd),
    )
