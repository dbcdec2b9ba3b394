"""The command line: arguments, streams, exit status."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence

from lpview import __version__

DONE, FAILED, USAGE, NO_OPTIMUM, NOT_ESTABLISHED = 0, 1, 2, 3, 4
"""Exit statuses of every command; README.md says what each means."""

_WORST_FIRST = (USAGE, FAILED, NOT_ESTABLISHED, NO_OPTIMUM, DONE)
"""Of several models, the first of these that occurred is the exit status."""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns its exit status. No traceback reaches the person."""
    given = list(sys.argv[1:] if arguments is None else arguments)
    options = _parser().parse_args(_with_command(given))
    try:
        return _run(options)
    except KeyboardInterrupt:
        return _complain("stopped", NOT_ESTABLISHED)
    except BrokenPipeError:
        # Whoever read the output has left; keep the interpreter from complaining.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return DONE
    except OSError as error:
        where = error.filename or "output"
        problem = error.strerror or str(error)
        return _complain(f"{where}: expected a file that can be written, got: {problem}", USAGE)
    except Exception as error:  # a defect of ours: say so in a line, not in a traceback
        if "LPVIEW_TRACEBACK" in os.environ:
            raise
        kind = type(error).__name__
        return _complain(
            f"lpview failed by a mistake of its own ({kind}: {error}); nothing was decided. "
            "Please report it with the model; LPVIEW_TRACEBACK=1 shows where.",
            NOT_ESTABLISHED,
        )


def _with_command(given: list[str]) -> list[str]:
    """``lpview MODEL`` is short for ``lpview check MODEL`` outside a terminal."""
    if given and not given[0].startswith("-") and given[0] not in _COMMANDS:
        return ["check", *given]
    if given and given[0] == "-":
        return ["check", *given]
    return given


def _run(options: argparse.Namespace) -> int:
    from lpview import commands
    from lpview.blocks import InputError
    from lpview.scaling import NotRepresentableError

    try:
        statuses: list[int] = getattr(commands, options.command)(options)
    except (InputError, NotRepresentableError) as error:
        return _complain(str(error), USAGE)
    return worst(statuses)


def worst(statuses: Sequence[int]) -> int:
    """The exit status for several models."""
    return next(status for status in _WORST_FIRST if status in statuses)


def _complain(text: str, status: int) -> int:
    sys.stderr.write(text + "\n")
    return status


_COMMANDS = {
    "check": "solve a model and check every KKT condition of the answer",
    "dual": "write the dual linear program as CSV blocks",
    "convert": "write a model as canonical CSV blocks",
}


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="lpview",
        description="Check, explain and sign off the answer of a linear program.",
        epilog="exit status: 0 done, nothing failed; 1 a check failed; 2 input or usage; "
        "3 no optimum, certified; 4 stopped or not established",
    )
    parser.add_argument("--version", action="version", version=f"lpview {__version__}")
    commands = parser.add_subparsers(dest="command", required=True, metavar="COMMAND")
    made = {name: commands.add_parser(name, help=text) for name, text in _COMMANDS.items()}
    for name, command in made.items():
        several = name == "check"
        command.add_argument(
            "models" if several else "model",
            nargs="+" if several else None,
            metavar="MODEL",
            help="a .csv file or a folder of CSV blocks, or - for standard input",
        )
        command.add_argument("--output", metavar="FILE", help="write here, not to the screen")
    _add_check_options(made["check"])
    return parser


def _add_check_options(check: argparse.ArgumentParser) -> None:
    check.add_argument("--format", choices=("text", "markdown", "json"), default="text")
    check.add_argument("--full", action="store_true", help="list every line, however many")
    check.add_argument(
        "--tolerance", type=_positive, default=1e-9, metavar="SIZE",
        help="largest scaled residual that passes (default 1e-9)",
    )  # fmt: skip
    check.add_argument(
        "--zero", type=_positive, default=1e-9, metavar="SIZE",
        help="scaled size up to which a slack or a price counts as zero (default 1e-9)",
    )  # fmt: skip
    check.add_argument(
        "--method", choices=("choose", "simplex", "interior-point"), default="choose"
    )
    check.add_argument(
        "--no-crossover", action="store_true", help="end an interior-point run without a basis"
    )
    check.add_argument("--time-limit", type=_positive, metavar="SECONDS")
    route = check.add_mutually_exclusive_group()
    route.add_argument(
        "--second-route", dest="second_route", action="store_const", const="always",
        help="solve the rebuilt dual too, however long it takes",
    )  # fmt: skip
    route.add_argument(
        "--no-second-route", dest="second_route", action="store_const", const="never",
        help="do not solve the rebuilt dual (default: where it is about as quick)",
    )  # fmt: skip
    check.set_defaults(second_route="if quick")


def _positive(text: str) -> float:
    try:
        value = float(text)
    except ValueError:
        value = float("nan")
    if not 0 < value < float("inf"):
        raise argparse.ArgumentTypeError(f"expected a number above 0, got {text}")
    return value
