"""What ``lpview prices`` and ``lpview plans`` can be told; imports nothing numeric."""

from __future__ import annotations

import argparse
import math
from functools import partial

ABOUT = {
    "interior": "say whether a plan is strictly feasible, which inequalities are equalities in "
    "truth, and which sets of optima are bounded",
    "redundant": "look for rows that no feasible plan reaches or that others imply (a solve each)",
    "digits": "estimate how many digits of the answer to believe",
}
"""Reports of ``lpview prices`` on something other than single prices."""


def add_line_options(parser: argparse.ArgumentParser, what: str) -> None:
    """``--row NAME`` and ``--column NAME``, each any number of times."""
    for kind in ("row", "column"):
        parser.add_argument(
            f"--{kind}", dest="lines", action="append", default=[], metavar="NAME",
            type=partial(_line, kind), help=what.format(kind),
        )  # fmt: skip


def _line(kind: str, name: str) -> tuple[str, str]:
    return kind, name


def add_prices_options(parser: argparse.ArgumentParser) -> None:
    """The options of ``lpview prices``, beside those of every solve."""
    add_line_options(parser, "say everything about the prices of this {}; may be repeated")
    parser.add_argument(
        "--move", dest="moves", action="append", default=[], metavar="ROW=AMOUNT", type=_move,
        help="move several right-hand sides together; once for each row",
    )  # fmt: skip
    about = parser.add_mutually_exclusive_group()
    for name, text in ABOUT.items():
        about.add_argument(
            f"--{name}", dest="about", action="store_const", const=name, default="", help=text
        )
    parser.add_argument(
        "--format", choices=("text", "markdown", "csv", "json"), default="text",
        help="how to write what was found (default text)",
    )  # fmt: skip
    parser.add_argument("--full", action="store_true", help="list every line, however many")
    parser.set_defaults(summary=False)


def add_plans_options(parser: argparse.ArgumentParser) -> None:
    """The options of ``lpview plans``, beside those of every solve."""
    parser.add_argument(
        "--column", metavar="NAME",
        help="write an optimal plan in which this variable is as small or large as in any",
    )  # fmt: skip
    end = parser.add_mutually_exclusive_group()
    end.add_argument(
        "--least", dest="end", action="store_const", const="least", help="as small as in any"
    )
    end.add_argument(
        "--greatest", dest="end", action="store_const", const="greatest", help="as large as in any"
    )
    parser.add_argument(
        "--ray", metavar="FILE",
        help="if there is no least or greatest value, write the ray along which it goes on",
    )  # fmt: skip
    parser.add_argument("--format", choices=("text", "markdown"), default="text")
    parser.add_argument("--full", action="store_true", help="list every variable, however many")


def _move(text: str) -> tuple[str, float]:
    """``ROW=AMOUNT``, split at the last equals sign, since a name may hold others."""
    name, _, amount = text.rpartition("=")
    try:
        value = float(amount)
    except ValueError:
        value = math.nan
    if not name or value == 0 or not math.isfinite(value):
        raise argparse.ArgumentTypeError(
            f"expected ROW=AMOUNT with an amount other than 0, got {text}"
        )
    return name, value


def wrong_use(options: argparse.Namespace) -> str:
    """What is wrong with options that are right one by one, or an empty string."""
    if options.command == "plans":
        if (options.column is None) != (options.end is None):
            return "expected --column NAME together with --least or --greatest"
        if options.ray is not None and options.column is None:
            return "expected --ray together with --column NAME"
        return ""
    if options.command != "prices":
        return ""
    if options.about and (options.lines or options.moves):
        return f"expected --{options.about}, or --row, --column and --move, got both"
    if options.format in ("csv", "json") and (options.lines or options.moves or options.about):
        return (
            "--row, --column, --move, --interior, --redundant and --digits are printed as text "
            f"or markdown; {options.format} has every line anyway"
        )
    if options.lines and options.moves:
        return "expected --row and --column, or --move, got both"
    if len({name for name, _ in options.moves}) < len(options.moves):
        return "expected each row once in --move"
    return ""
