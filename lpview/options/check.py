"""Options of ``check``, ``prove`` and the screen; imports nothing numeric."""

from __future__ import annotations

import argparse

from lpview.options.inputs import wrong_plan_use
from lpview.options.prices import add_line_options

REPORT_OPTIONS = frozenset(
    (
        *("--format", "--full", "--row", "--column", "--families", "--summary", "--certificate"),
        *("--prices", "--prove", "--plan", "--rounded", "--limit", "--complete"),
        *("--ignore-unknown", "--output"),
    )
)
"""What only a report can be asked for, so that ``lpview MODEL`` with it opens no screen."""


def add_route_options(check: argparse.ArgumentParser) -> None:
    """What else the check can be told of how to solve."""
    check.add_argument(
        "--no-crossover", action="store_true", help="end an interior-point run without a basis"
    )
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


def add_report_options(check: argparse.ArgumentParser) -> None:
    """What the check can be told of its report."""
    check.add_argument(
        "--format", choices=("text", "markdown", "json"), default="text",
        help="how to write the report (default text)",
    )  # fmt: skip
    check.add_argument("--full", action="store_true", help="list every line, however many")
    add_line_options(check, "print the ledger of this {} instead of the report; may be repeated")
    check.add_argument(
        "--families", action="store_true",
        help="print families of lines: by the group of their label, else by their names",
    )  # fmt: skip
    check.add_argument(
        "--summary", action="store_true",
        help="print one page of sentences for whoever decides, instead of the report",
    )  # fmt: skip
    check.add_argument(
        "--certificate", metavar="FILE", help="write what was proved, for lpview verify"
    )
    check.add_argument(
        "--prices", action="store_true",
        help="find out which prices are not unique, and how far their rates hold",
    )  # fmt: skip


def wrong_check_use(options: argparse.Namespace) -> str:
    """What is wrong with options that are right one by one, or an empty string."""
    if options.certificate and (not options.prove or len(options.models) > 1):
        return "expected --certificate together with --prove and one MODEL"
    if options.command == "check" and wrong_plan_use(options):
        return wrong_plan_use(options)
    lines = ("--row and --column,", options.lines)
    families = ("--families", options.families)
    summary = ("--summary", options.summary)
    # Ledgers, families, the page and JSON are different things to print.
    if options.format == "json" and (lines[1] or families[1] or summary[1]):
        return (
            "--row, --column, --families and --summary are printed as text or markdown; "
            "json has every line anyway"
        )
    pairs = (
        (lines, families),
        (lines, summary),
        (summary, families),
        (("--prices", options.prices), families),
        (("--prove", options.prove), families),
    )
    for (one, given), (other, too) in pairs:
        if given and too:
            return f"expected {one} or {other}, got both"
    return ""
