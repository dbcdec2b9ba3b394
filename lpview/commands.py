"""What each command does, from parsed options to written output.

Each function takes the parsed options and returns the exit status per model.
"""

from __future__ import annotations

import argparse
import os
import shlex
import sys
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from lpview import cli
from lpview.blocks import InputError, write_blocks, write_labels
from lpview.blocks.mistakes import Mistake, quoted
from lpview.decimals import number_text
from lpview.examination import examine
from lpview.input_options import input_words, plan_words
from lpview.inputs import ReadAs, ending, read_input, read_input_bytes
from lpview.model import LinearProgram
from lpview.outcomes import Examination, NoOptimum, Optimal, Request, SecondRoute
from lpview.reading import Reading
from lpview.report.document import Document, Pairs
from lpview.run import Method, SolveSettings, Watch
from lpview.scaling import NotRepresentableError

if TYPE_CHECKING:  # the check alone starts sooner without them
    from lpview.priced import Priced
    from lpview.prices import NoPrices
    from lpview.proof.results import Proof


Line = tuple[str, str]
"""``"row"`` or ``"column"``, and a name."""


def check(options: argparse.Namespace) -> list[int]:
    """``lpview check``: solve and check each model, write one report for all."""
    if options.plan is not None:
        from lpview.planned_command import check_plan

        return check_plan(options)
    found: list[Checked] = []
    statuses: list[int] = []
    for source in options.models:
        try:
            found.append(_checked(source, options))
            statuses.append(_status(found[-1], options))
        except (InputError, NotRepresentableError) as error:
            sys.stderr.write(f"{error}\n")
            statuses.append(cli.USAGE)
    if found:
        write(_rendered(found, options), options.output)
    return statuses


def dual(options: argparse.Namespace) -> list[int]:
    """``lpview dual``: the dual linear program, as blocks that lpview reads."""
    from lpview.dual import build_dual

    program = build_dual(read(options.model, options)[0].model).program
    write(write_blocks(program), options.output)
    return [cli.DONE]


def convert(options: argparse.Namespace) -> list[int]:
    """``lpview convert``: the same model as canonical blocks."""
    reading, _ = read(options.model, options)
    labels = write_labels(reading.model, reading.labels)
    blocks = write_blocks(reading.model)
    write(blocks + "\n" * bool(labels) + labels, options.output)
    return [cli.DONE]


@dataclass(frozen=True, eq=False)
class Checked:
    """One model's examination, and its prices where they were asked for and there are any."""

    found: Examination
    """What the check came to; its marks know of the prices."""
    priced: Priced | NoPrices | None = None
    """The prices; None where they were not asked for, or there is no answer."""
    proof: Proof | None = None
    """The proof; None where it was not asked for."""


def _checked(source: str, options: argparse.Namespace) -> Checked:
    watch, started = Watch(), time.monotonic()
    found = examined(source, options, watch, options.lines)
    priced = proof = None
    if (options.prices or options.summary) and isinstance(found, Optimal):
        from lpview.price_commands import worked_out

        found, priced = worked_out(found, options, watch, started)
    if options.prove:
        from lpview.proof_commands import proved

        proof = proved(found, options, watch, started)
    return Checked(found, priced, proof)


def _status(checked: Checked, options: argparse.Namespace) -> int:
    statuses = [status(checked.found)]
    if checked.proof is not None:
        from lpview.proof_commands import proof_status

        statuses = [proof_status(checked.found, checked.proof)]
    # A page tells what it lacks; only who asks for prices is owed them.
    if checked.priced is not None and options.prices:
        from lpview.price_commands import price_status

        statuses.append(price_status(checked.priced))
    return cli.worst(statuses)


def prove(options: argparse.Namespace) -> list[int]:
    """``lpview prove``: short for ``check --prove``."""
    return check(options)


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


def status(found: Examination) -> int:
    """The exit status of one examination."""
    if isinstance(found, Optimal):
        return cli.DONE if found.passed else cli.FAILED
    return cli.NO_OPTIMUM if isinstance(found, NoOptimum) else cli.NOT_ESTABLISHED


def _rendered(checked: list[Checked], options: argparse.Namespace) -> str:
    if options.format == "json":
        from lpview.report import json

        added = [_added(one, options) for one in checked]
        found = [_with_exact_zeros(one) for one in checked]
        return json.render(found if len(options.models) > 1 else found[0], added)
    return "\n".join(rendered(_document(one, options), options.format) for one in checked)


def _added(one: Checked, options: argparse.Namespace) -> dict[str, object]:
    """JSON fields of what was asked for beyond the check."""
    added: dict[str, object] = {}
    if options.prices:
        from lpview.report import price_json

        added.update(price_json.fields(one.priced))
    if options.prove:
        from lpview.proof.exact import contradicts
        from lpview.report.proof import proof_json

        added.update(proof_json(one.proof))
        if one.proof is not None and contradicts(one.found, one.proof):
            added["passed"] = None
    return added


def _with_exact_zeros(one: Checked) -> Examination:
    """The examination, its flags by exact zeros where there is a proof."""
    from lpview.proof.exact import with_exact_zeros
    from lpview.proof.results import ProvedOptimal

    if isinstance(one.proof, ProvedOptimal) and isinstance(one.found, Optimal):
        return with_exact_zeros(one.found, one.proof)
    return one.found


def rendered(document: Document, form: str) -> str:
    """A document as text or Markdown."""
    from lpview.report import markdown, text

    return (markdown.render if form == "markdown" else text.render)(document)


def _document(checked: Checked, options: argparse.Namespace) -> Document:
    """What was asked for: the report, its families, or the ledgers of some lines."""
    found, priced, proof = checked.found, checked.priced, checked.proof
    if options.summary:
        from lpview.report.summary import summary_report

        return summary_report(found, priced, proof)
    if options.families:
        from lpview.report.families import families_report

        return families_report(found, options.full)
    if options.lines:
        from lpview.report.ledger import ledger_report

        lines = lines_asked(found.head.model, "", options.lines)
        if priced is None:
            return ledger_report(found, lines, options.full, proof=proof)
        from lpview.report.prices import lines_of, problem

        known = lines_of(priced)
        return ledger_report(found, lines, options.full, known, problem(priced), proof)
    from lpview.report.check import report

    prices: Pairs = ()
    if priced is not None:
        from lpview.report.prices import check_facts

        prices = check_facts(priced, options.full)
    return report(found, options.full, prices=prices, proof=proof)


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


def write(text: str, output: str | None) -> None:
    """Write to a file, whole or not at all, or to standard output."""
    if output is not None:
        replace_file(Path(output), text.encode())
        return
    sys.stdout.buffer.write(text.encode())
    sys.stdout.buffer.flush()


def replace_file(path: Path, data: bytes) -> None:
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
