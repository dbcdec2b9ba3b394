"""Stigler's diet with units: the published food plan, what its prices are in, and the page.

Source: G. Stigler, "The Cost of Subsistence", J. Farm Economics 27 (1945) 303-314; the exact
optimum of these data is that of tests/data/textbook/cases.toml (a14), computed in fractions.
The units of the nutrients are from memory.
"""

from __future__ import annotations

import tomllib
from decimal import ROUND_DOWN
from fractions import Fraction
from pathlib import Path
from typing import Any

import pytest

from lpview import cli
from lpview.report.worth import written_out

DATA = Path(__file__).resolve().parents[1] / "data"
GIVEN = [str(DATA / "textbook" / "a14.csv"), "--labels", str(DATA / "labels" / "a14.csv")]

TEXTBOOK = DATA / "textbook"


def _case(file: str) -> dict[str, Any]:
    cases = tomllib.loads((TEXTBOOK / file).read_text(encoding="utf-8"))["case"]
    found: dict[str, Any] = next(case for case in cases if case["id"] == "A14")
    return found


BASKET = {name: Fraction(value) for name, value in _case("cases.toml")["x"].items()}
"""Dollars a day of each food of the published plan, exact."""
PRICES = {name: Fraction(value) for name, value in _case("cases.toml")["y"].items()}
"""Dollars per unit of each nutrient, exact."""
ENDS = _case("ranges.toml")["rhs"]
"""Ends between which each price holds, exact."""

LIMITS = {  # in the order of the page: name and label, right-hand side, unit
    "vitamin B2": ("vitamin B2 (riboflavin)", "2.7", "mg"),
    "calories": ("calories (energy)", "3", "Mcal"),
    "calcium": ("calcium", "0.8", "g"),
    "vitamin C": ("vitamin C (ascorbic acid)", "75", "mg"),
    "vitamin A": ("vitamin A", "5", "kIU"),
}


def run(*options: str, capsys: pytest.CaptureFixture[str]) -> str:
    assert cli.main(["check", *GIVEN, *options]) == 0
    return capsys.readouterr().out


def test_the_food_plan_in_dollars(capsys: pytest.CaptureFixture[str]) -> None:
    rows = [word for name in BASKET for word in ("--column", name)]
    out = run(*rows, capsys=capsys)
    for name, dollars in BASKET.items():
        part = out[out.index(f"column {name}") :]
        value = next(line for line in part.splitlines() if line.startswith("value"))
        assert value.split() == ["value", f"{float(dollars):.6g}", "dollar"]


def test_prices_are_in_dollars_per_unit_of_the_nutrient(capsys: pytest.CaptureFixture[str]) -> None:
    out = run("--row", "calories", "--row", "vitamin C", capsys=capsys)
    for name, unit in (("calories", "Mcal"), ("vitamin C", "mg")):
        assert f"dual value              {float(PRICES[name]):.6g} dollar per {unit}\n" in out


def test_the_page(capsys: pytest.CaptureFixture[str]) -> None:
    # A sentence goes on in the next line after two blanks.
    lines = run("--summary", capsys=capsys).replace("\n  ", " ").splitlines()
    assert lines[0].endswith("a14.csv: the best plan was found and verified")
    assert lines[1] == "The best plan found costs 0.108662 dollar (cost of a day's food)."
    shown = [line for line in lines if line.startswith("Limit ")]
    assert len(shown) == len(LIMITS)
    assert len(shown) == sum(price != 0 for price in PRICES.values())
    for line, (row, (name, side, unit)) in zip(shown, LIMITS.items(), strict=True):
        low, high = map(Fraction, ENDS[row])
        far = (Fraction(side) - low, high - Fraction(side))
        less, more = (written_out(float(one), 4, ROUND_DOWN) for one in far)
        worth = f"each {unit} required is worth {float(PRICES[row]):.4g} dollar"
        assert line.startswith(f"Limit {name}, at least {side} {unit}: {worth}: ")
        assert f": less saves it (for {less} {unit}), more costs it (for {more} {unit}" in line
    assert "No other plan is as good." in lines


def test_nutrients_are_found_in_groups(capsys: pytest.CaptureFixture[str]) -> None:
    out = run("--families", capsys=capsys)
    families = out[out.index("families of rows") :].split("\n\n")[0].splitlines()[2:]
    assert [line.split("  ")[0] for line in families] == [
        "energy and protein",
        "minerals",
        "vitamins",
    ]
