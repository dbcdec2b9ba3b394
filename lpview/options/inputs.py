"""Options of how a model is read, and of plans that are checked; imports nothing numeric."""

from __future__ import annotations

import argparse
import re

_AMOUNT = re.compile(r"\+?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?", re.ASCII)


def add_input_options(parser: argparse.ArgumentParser) -> None:
    """How a model is to be read, the same for every command."""
    command = parser.add_argument_group("how the model is read")
    command.add_argument(
        "--decimal", choices=("point", "comma"),
        help="the decimal mark of CSV files in which it does not show",
    )  # fmt: skip
    command.add_argument(
        "--negated", action="store_true",
        help="the costs were exported with their signs turned round; turn them back",
    )  # fmt: skip
    command.add_argument(
        "--labels", metavar="FILE", help="a file of labels, units and groups of the lines"
    )
    integers = command.add_mutually_exclusive_group()
    integers.add_argument("--relax", action="store_true", help="take integer columns as continuous")
    integers.add_argument(
        "--fix-integers", metavar="PLAN.csv",
        help="fix integer columns at the values of this plan",
    )  # fmt: skip


def add_plan_options(parser: argparse.ArgumentParser) -> None:
    """What the check can be told of a plan from elsewhere."""
    check = parser.add_argument_group("a plan from elsewhere")
    check.add_argument(
        "--plan", metavar="PLAN.csv",
        help="check this plan instead of the solver's; its block [x], and [y], [z] if known",
    )  # fmt: skip
    check.add_argument(
        "--rounded", action="store_true",
        help="exit 0 also where conditions hold only within the plan's rounding",
    )  # fmt: skip
    check.add_argument(
        "--limit", dest="limits", type=_limit, action="append", default=[],
        metavar="PATTERN=AMOUNT",
        help="largest violation allowed on the rows of these names (* and ? "
        "stand for any characters), in the row's own unit; may be repeated",
    )  # fmt: skip
    check.add_argument("--complete", action="store_true", help="refuse columns that it leaves out")
    check.add_argument(
        "--ignore-unknown", action="store_true",
        help="count names that the model lacks instead of refusing them",
    )  # fmt: skip


def plan_words(options: argparse.Namespace) -> list[str]:
    """The options of a plan as words of the command that reproduces a report."""
    if options.plan is None:
        return []
    words = [*_option("plan", options.plan), *["--rounded"] * options.rounded]
    for pattern, amount in options.limits:
        words += [f"--limit={pattern}={amount!r}"]
    words += ["--complete"] * options.complete
    return words + ["--ignore-unknown"] * options.ignore_unknown


def input_words(options: argparse.Namespace) -> list[str]:
    """How the model was read, as words of the command that reproduces a report."""
    words: list[str] = []
    for name in ("decimal", "labels", "fix_integers"):
        value = getattr(options, name)
        if value is not None:
            words += _option(name, value)
    return words + ["--negated"] * options.negated + ["--relax"] * options.relax


def wrong_plan_use(options: argparse.Namespace) -> str:
    """What is wrong with the options of a plan together, or an empty string."""
    if options.plan is None:
        needing = [
            ("--rounded", options.rounded),
            ("--limit", options.limits),
            ("--complete", options.complete),
            ("--ignore-unknown", options.ignore_unknown),
        ]
        alone = [name for name, given in needing if given]
        return f"expected {alone[0]} together with --plan" if alone else ""
    if len(options.models) > 1:
        return "expected --plan together with one MODEL"
    beside = [
        ("--prove", options.prove),
        ("--prices", options.prices),
        ("--families", options.families),
        ("--row or --column", options.lines),
        ("--summary", options.summary),
        ("--second-route", options.second_route == "always"),
    ]
    for name, given in beside:
        if given:
            return f"expected --plan without {name}"
    return ""


def _option(name: str, value: str) -> list[str]:
    option = f"--{name.replace('_', '-')}"
    # A value that begins like an option has to be tied to its own.
    return [f"{option}={value}"] if value.startswith("-") else [option, value]


def _limit(text: str) -> tuple[str, float]:
    pattern, mark, amount = text.rpartition("=")
    value = float(amount) if _AMOUNT.fullmatch(amount) else -1.0
    if not mark or not pattern or not 0 <= value < float("inf"):
        raise argparse.ArgumentTypeError(
            f"expected PATTERN=AMOUNT with an amount of 0 or more, got {text}"
        )
    return pattern, value
