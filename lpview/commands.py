"""What each command does, from parsed options to written output.

Each function takes the parsed options and returns the exit status per model.
"""

from __future__ import annotations

import argparse
import os
import shlex
import sys
from collections.abc import Callable
from pathlib import Path

from lpview import cli
from lpview.blocks import InputError, Reading, read_model, read_model_bytes, write_blocks
from lpview.blocks.mistakes import Mistake, quoted
from lpview.decimals import number_text
from lpview.examination import examine
from lpview.model import LinearProgram
from lpview.outcomes import Examination, NoOptimum, Optimal, Request, SecondRoute
from lpview.report.document import Document
from lpview.run import Method, SolveSettings, Watch
from lpview.scaling import NotRepresentableError


def check(options: argparse.Namespace) -> list[int]:
    """``lpview check``: solve and check each model, write one report for all."""
    found: list[Examination] = []
    statuses: list[int] = []
    for source in options.models:
        try:
            found.append(_examined(source, options))
            statuses.append(status(found[-1]))
        except (InputError, NotRepresentableError) as error:
            sys.stderr.write(f"{error}\n")
            statuses.append(cli.USAGE)
    if found:
        _write(_rendered(found, options), options.output)
    return statuses


def dual(options: argparse.Namespace) -> list[int]:
    """``lpview dual``: the dual linear program, as blocks that lpview reads."""
    from lpview.dual import build_dual

    program = build_dual(_read(options.model)[0].model).program
    _write(write_blocks(program), options.output)
    return [cli.DONE]


def convert(options: argparse.Namespace) -> list[int]:
    """``lpview convert``: the same model as canonical blocks."""
    _write(write_blocks(_read(options.model)[0].model), options.output)
    return [cli.DONE]


def _read(source: str) -> tuple[Reading, bytes | None]:
    """A model, and the bytes it came in where that was standard input."""
    if source == "-":
        data = sys.stdin.buffer.read()
        return read_model_bytes(data, "-"), data
    return read_model(source), None


def _examined(source: str, options: argparse.Namespace) -> Examination:
    from lpview.progress import watched
    from lpview.solver import solve

    reading, data = _read(source)
    _lines(reading.model, source, options)
    if data is not None:
        source = _saved(data, options.output)
    request = _request(source, options)
    watch = Watch()
    label = reading.model.name
    return watched(lambda: examine(reading, request, solve, watch), watch, label)


def examined_quietly(
    source: str, options: argparse.Namespace, watch: Watch, say: Callable[[str], None]
) -> Examination:
    """The same for the screen: no output; ``say`` hears which step has begun."""
    from lpview.solver import solve

    say("reading")
    reading = read_model(source)
    say("solving")
    return examine(reading, _request(source, options), solve, watch)


def _saved(data: bytes, output: str | None) -> str:
    """Keep what came from standard input beside the report, under a name of its own."""
    import hashlib

    folder = Path(output).parent if output else Path()
    path = folder / f"model-{hashlib.sha256(data).hexdigest()[:12]}.csv"
    _replace(path, data)
    sys.stderr.write(f"saved standard input: {path}\n")
    return str(path)


def _request(source: str, options: argparse.Namespace) -> Request:
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
    words = ["lpview", "check", source]
    for name, default in (("tolerance", 1e-9), ("zero", 1e-9), ("time_limit", None)):
        if getattr(options, name) != default:
            words += [f"--{name.replace('_', '-')}", number_text(getattr(options, name))]
    if options.method != "choose":
        words += ["--method", options.method]
    words += ["--no-crossover"] * options.no_crossover + ["--full"] * options.full
    route = {"always": ["--second-route"], "never": ["--no-second-route"]}
    words += route.get(options.second_route, [])
    if options.format != "text":
        words += ["--format", options.format]
    return shlex.join(words)


def status(found: Examination) -> int:
    """The exit status of one examination."""
    if isinstance(found, Optimal):
        return cli.DONE if found.passed else cli.FAILED
    return cli.NO_OPTIMUM if isinstance(found, NoOptimum) else cli.NOT_ESTABLISHED


def _rendered(found: list[Examination], options: argparse.Namespace) -> str:
    if options.format == "json":
        from lpview.report import json

        return json.render(found if len(options.models) > 1 else found[0])
    from lpview.report import markdown, text

    render = markdown.render if options.format == "markdown" else text.render
    return "\n".join(render(_document(one, options)) for one in found)


def _document(found: Examination, options: argparse.Namespace) -> Document:
    """What was asked for: the report, its families, or the ledgers of some lines."""
    if options.families:
        from lpview.report.families import families_report

        return families_report(found, options.full)
    if options.lines:
        from lpview.report.ledger import ledger_report

        return ledger_report(found, _lines(found.head.model, "", options), options.full)
    from lpview.report.check import report

    return report(found, options.full)


def _lines(lp: LinearProgram, source: str, options: argparse.Namespace) -> list[int]:
    """Numbers of the lines asked for, as in `lpview.kkt`; raises `InputError`."""
    index = {"row": (lp.rows, 0), "column": (lp.columns, lp.m)}
    lines, mistakes = [], []
    for kind, name in options.lines:
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


def _write(text: str, output: str | None) -> None:
    if output is not None:
        _replace(Path(output), text.encode())
        return
    sys.stdout.buffer.write(text.encode())
    sys.stdout.buffer.flush()


def _replace(path: Path, data: bytes) -> None:
    """Write a file whole or not at all; a device or pipe is written as it is."""
    if path.exists() and not path.is_file():
        path.write_bytes(data)
        return
    part = path.with_name(f".{path.name}.{os.getpid()}.part")
    try:
        part.write_bytes(data)
        part.replace(path)
    except OSError as error:
        raise OSError(error.errno, error.strerror, str(path)) from error
    finally:
        part.unlink(missing_ok=True)
