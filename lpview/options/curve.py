"""What ``lpview curve`` can be told; imports nothing numeric."""

from __future__ import annotations

import argparse
import math


def add_curve_options(parser: argparse.ArgumentParser) -> None:
    """The options of ``lpview curve``, beside those of every solve."""
    what = parser.add_mutually_exclusive_group(required=True)
    what.add_argument(
        "--row", metavar="NAME", help="move the right-hand side of this row (its active side)"
    )
    what.add_argument("--cost", metavar="COLUMN", help="move the cost of this column")
    what.add_argument(
        "--bound", metavar="COLUMN:lower|upper", type=_bound, help="move a bound of this column"
    )
    parser.add_argument(
        "--span", metavar="LOW:HIGH", type=_span,
        help="numbers to look at, as --span=-5:20 (default: three breakpoints each way)",
    )  # fmt: skip
    parser.add_argument(
        "--steps", metavar="N", type=_steps, default=0,
        help="list the curve at so many equal steps too (default with --record: 10)",
    )  # fmt: skip
    parser.add_argument(
        "--record", metavar="LINE", action="append", default=[],
        help="find value and price of this row or column along the curve; may be repeated; "
        "row:NAME and column:NAME where a name is both",
    )  # fmt: skip
    parser.add_argument("--format", choices=("text", "csv", "json"), default="text")
    parser.add_argument("--ascii", action="store_true", help="draw with plain characters")
    parser.set_defaults(full=False)


def _bound(text: str) -> tuple[str, str]:
    """``COLUMN:lower|upper``, split at the last colon, since a name may hold others."""
    name, _, end = text.rpartition(":")
    if not name or end not in ("lower", "upper"):
        raise argparse.ArgumentTypeError(f"expected COLUMN:lower or COLUMN:upper, got {text}")
    return name, end


def _span(text: str) -> tuple[float, float]:
    low, _, high = text.partition(":")
    try:
        ends = float(low), float(high)
    except ValueError:
        ends = math.nan, math.nan
    if not (math.isfinite(ends[0]) and math.isfinite(ends[1]) and ends[0] < ends[1]):
        raise argparse.ArgumentTypeError(f"expected LOW:HIGH with LOW below HIGH, got {text}")
    return ends[0] + 0.0, ends[1] + 0.0


def _steps(text: str) -> int:
    count = int(text) if text.isascii() and text.isdigit() else 0
    if not 1 <= count <= 100_000:
        raise argparse.ArgumentTypeError(f"expected a whole number from 1 to 100000, got {text}")
    return count
