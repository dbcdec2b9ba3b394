"""The command line: arguments, streams, exit status."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence
from difflib import get_close_matches
from importlib import import_module

from lpview import __version__
from lpview.exit_status import DONE, NOT_ESTABLISHED, USAGE, worst
from lpview.options.check import (
    REPORT_OPTIONS,
    add_report_options,
    add_route_options,
    wrong_check_use,
)
from lpview.options.curve import add_curve_options
from lpview.options.inputs import add_input_options, add_plan_options
from lpview.options.prices import (
    add_plans_options,
    add_prices_options,
    wrong_use,
)


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns its exit status. No traceback reaches the person."""
    given = list(sys.argv[1:] if arguments is None else arguments)
    parser = _parser()
    options = parser.parse_args(_with_command(given))
    problem = _wrong_use(options)
    if problem:
        parser.error(problem)
    try:
        return _run(options)
    except KeyboardInterrupt:
        return _complain("stopped", NOT_ESTABLISHED)
    except BrokenPipeError:
        # Whoever read the output has left; keep the interpreter from complaining.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return DONE
    except Exception as error:
        if "LPVIEW_TRACEBACK" in os.environ:
            raise
        return _complain(*told(error))


def told(error: Exception) -> tuple[str, int]:
    """What to tell the person about an exception, and the exit status."""
    from lpview.blocks import InputError
    from lpview.scaling import NotRepresentableError

    if isinstance(error, (InputError, NotRepresentableError)):
        return str(error), USAGE
    if isinstance(error, OSError):
        where, problem = error.filename or "output", error.strerror or str(error)
        return f"{where}: expected a file that can be written, got: {problem}", USAGE
    # A defect of ours: say so in a line, not in a traceback.
    return (
        f"lpview failed by a mistake of its own ({type(error).__name__}: {error}); nothing was "
        "decided. Please report it with the model; LPVIEW_TRACEBACK=1 shows where.",
        NOT_ESTABLISHED,
    )


def _with_command(given: list[str]) -> list[str]:
    """``lpview MODEL`` opens the mirror in a terminal, and is the check elsewhere.

    So it is where an option asks for the check's report.
    """
    if not given or given[0] in _COMMANDS or (given[0].startswith("-") and given[0] != "-"):
        return given
    if not os.path.lexists(given[0]) and get_close_matches(given[0], _COMMANDS, 1, 0.75):
        return given  # a mistyped command, which the parser refuses with the list of them
    is_report = any(word.partition("=")[0] in REPORT_OPTIONS for word in given[1:])
    can_open = sys.stdin.isatty() and sys.stdout.isatty() and given[0] != "-" and not is_report
    return ["open" if can_open else "check", *given]


def _run(options: argparse.Namespace) -> int:
    if options.command == "open":
        from lpview.screen.launch import launch

        return launch(options)
    module = import_module(f"lpview.commands.{_WHERE[options.command]}")
    statuses: list[int] = getattr(module, options.command)(options)
    return worst(statuses)


def _complain(text: str, status: int) -> int:
    sys.stderr.write(text + "\n")
    return status


_COMMANDS = {
    "open": "review a model at the keyboard (the command that MODEL alone is short for)",
    "check": "solve a model and check every KKT condition of the answer",
    "prove": "prove the optimum in exact arithmetic (short for check --prove)",
    "verify": "check a certificate that prove has written",
    "prices": "find which prices can be trusted, both ways and how far",
    "plans": "find which other plans are just as good",
    "curve": "follow the optimal objective as one number of the model moves",
    "dual": "write the dual linear program as CSV blocks",
    "convert": "write a model as canonical CSV blocks",
}

_WHERE = {
    "check": "check",
    "prove": "check",
    "verify": "proof",
    "prices": "prices",
    "plans": "plans",
    "curve": "curve",
    "dual": "models",
    "convert": "models",
}
"""The module of `lpview.commands` that holds each command."""


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="lpview",
        allow_abbrev=False,
        description="Check, explain and sign off the answer of a linear program.",
        epilog="exit status: 0 done, nothing failed; 1 a check failed; 2 input or usage; "
        "3 no optimum, certified; 4 stopped or not established",
    )
    parser.add_argument("--version", action="version", version=f"lpview {__version__}")
    commands = parser.add_subparsers(dest="command", required=True, metavar="COMMAND")
    made = {
        name: commands.add_parser(name, help=text, allow_abbrev=False)
        for name, text in _COMMANDS.items()
    }
    for name, command in made.items():
        _add_model(command, name)
    for name in ("check", "open", "prove", "prices", "plans", "curve"):
        _add_solve_options(made[name])
    for name in ("check", "prove"):
        add_report_options(made[name])
    for name in ("check", "prove", "open"):
        add_route_options(made[name])
    add_plan_options(made["check"])
    add_prices_options(made["prices"])
    add_plans_options(made["plans"])
    add_curve_options(made["curve"])
    _add_what_differs(made)
    return parser


def _add_model(command: argparse.ArgumentParser, name: str) -> None:
    """What every command begins with."""
    several = name in ("check", "prove")
    command.add_argument(
        "models" if several else "model",
        nargs="+" if several else None,
        metavar="MODEL",
        help="a .csv file or a folder of CSV blocks, an .mps file, or - for standard input",
    )
    add_input_options(command)
    if name != "open":
        command.add_argument("--output", metavar="FILE", help="write to this file")


def _add_what_differs(made: dict[str, argparse.ArgumentParser]) -> None:
    """Options of one command alone, and what others take for granted."""
    made["check"].add_argument(
        "--prove", action="store_true", help="prove the optimum in exact rational arithmetic"
    )
    made["prove"].set_defaults(prove=True, plan=None)
    made["verify"].add_argument("certificate", metavar="CERTIFICATE", help="what prove has written")
    made["open"].add_argument(
        "--ascii", action="store_true", help="draw all marks with plain characters"
    )
    made["open"].set_defaults(
        format="text", full=False, prices=False, prove=False, plan=None, summary=False
    )


def _add_solve_options(parser: argparse.ArgumentParser) -> None:
    """What every command that solves can be told."""
    command = parser.add_argument_group("how it is solved and judged")
    command.add_argument(
        "--tolerance", type=_positive, default=1e-9, metavar="SIZE",
        help="largest scaled residual that passes (default 1e-9)",
    )  # fmt: skip
    command.add_argument(
        "--zero", type=_positive, default=1e-9, metavar="SIZE",
        help="scaled size up to which a slack or a price counts as zero (default 1e-9)",
    )  # fmt: skip
    command.add_argument(
        "--method", choices=("choose", "simplex", "interior-point"), default="choose",
        help="how to solve (default choose: the solver decides)",
    )  # fmt: skip
    command.add_argument(
        "--time-limit", type=_positive, metavar="SECONDS", help="for the whole command"
    )
    # Prices need a basis, and no second route to them.
    parser.set_defaults(no_crossover=False, second_route="never")


def _wrong_use(options: argparse.Namespace) -> str:
    """What is wrong with options that are right one by one, or an empty string."""
    if options.command in ("prices", "plans", "curve"):
        return wrong_use(options)
    return wrong_check_use(options) if options.command in ("check", "prove") else ""


def _positive(text: str) -> float:
    try:
        value = float(text)
    except ValueError:
        value = float("nan")
    if not 0 < value < float("inf"):
        raise argparse.ArgumentTypeError(f"expected a number above 0, got {text}")
    return value
