"""What every command begins with: a model, read and examined as the options ask."""

from __future__ import annotations

import argparse
import shlex
import sys
from collections.abc import Callable, Sequence
from pathlib import Path

from lpview.blocks import InputError
from lpview.blocks.mistakes import Mistake, quoted
from lpview.commands.leaving import replace_file
from lpview.decimals import number_text
from lpview.examination import examine
from lpview.inputs import ReadAs, ending, read_input, read_input_bytes
from lpview.model import LinearProgram
from lpview.options.inputs import input_words, plan_words
from lpview.outcomes import Examination, Request, SecondRoute
from lpview.reading import Reading
from lpview.run import Method, SolveSettings, Watch

Line = tuple[str, str]
"""``"row"`` or ``"column"``, and a name."""


def read(source: str, options: argparse.Namespace) -> tuple[Reading, bytes | None]:
    """A model, and the bytes it came in where that was standard input."""
    how = ReadAs(
        options.decimal, options.negated, options.labels, options.relax, options.fix_integers
    )
    if source == "-":
        data = sys.stdin.buffer.read()
        return read_input_bytes(data, "-", how), data
    return read_input(source, how), None


def examined(
    source: str, options: argparse.Namespace, watch: Watch, lines: Sequence[Line] = ()
) -> Examination:
    """Read, solve and check a model, with progress on a terminal.

    ``lines`` are needed later; raises `InputError` at once where the model lacks one.
    """
    from lpview.progress import watched
    from lpview.solver import solve

    reading, data = read(source, options)
    lines_asked(reading.model, source, lines)
    if data is not None:
        source = saved(data, options.output)
    asked = request(source, options)
    label = reading.model.name
    return watched(lambda: examine(reading, asked, solve, watch), watch, label)


def examined_quietly(
    source: str, options: argparse.Namespace, watch: Watch, say: Callable[[str], None]
) -> Examination:
    """The same for the screen: no output; ``say`` hears which step has begun."""
    from lpview.solver import solve

    say("reading")
    reading, _ = read(source, options)
    say("solving")
    return examine(reading, request(source, options), solve, watch)


def saved(data: bytes, output: str | None) -> str:
    """Keep what came from standard input beside the report, under a name of its own."""
    import hashlib

    folder = Path(output).parent if output else Path()
    path = folder / f"model-{hashlib.sha256(data).hexdigest()[:12]}{ending(data)}"
    replace_file(path, data)
    sys.stderr.write(f"saved standard input: {path}\n")
    return str(path)


def request(source: str, options: argparse.Namespace) -> Request:
    """What the options ask for about one model."""
    return Request(
        source=source,
        command=_command(source, options),
        tolerance=options.tolerance,
        zero=options.zero,
        solve=SolveSettings(
            method=Method(options.method),
            crossover=not options.no_crossover,
            time_limit=options.time_limit,
        ),
        second_route=SecondRoute(options.second_route),
    )


def _command(source: str, options: argparse.Namespace) -> str:
    """The command that reproduces the report: every option that is not a default."""
    command = {"open": "check", "prove": "check"}.get(options.command, options.command)
    words = ["lpview", command, source, *input_words(options)]
    for name, default in (("tolerance", 1e-9), ("zero", 1e-9), ("time_limit", None)):
        if getattr(options, name) != default:
            words += [f"--{name.replace('_', '-')}", number_text(getattr(options, name))]
    if options.method != "choose":
        words += ["--method", options.method]
    words += ["--no-crossover"] * options.no_crossover + ["--full"] * options.full
    route = {"always": ["--second-route"], "never": ["--no-second-route"]}
    words += route.get(options.second_route, []) if command == "check" else []
    if command == "check":
        words += plan_words(options) + ["--prices"] * options.prices
        words += ["--prove"] * options.prove
    if options.format != "text":
        words += ["--format", options.format]
    return shlex.join(words)


def lines_asked(lp: LinearProgram, source: str, asked: Sequence[Line]) -> list[int]:
    """Numbers of the lines asked for, as in `lpview.kkt`; raises `InputError`."""
    index = {"row": (lp.rows, 0), "column": (lp.columns, lp.m)}
    lines, mistakes = [], []
    for kind, name in asked:
        names, first = index[kind]
        if name in names:
            lines.append(first + names.index(name))
            continue
        expected = f"the name of a {kind}"
        wrong = Mistake(source, expected, quoted(name), field=f"--{kind}", name=name, choices=names)
        mistakes.append(wrong)
    if mistakes:
        raise InputError(mistakes)
    return lines
