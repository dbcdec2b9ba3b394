"""Stigler's diet with units: the published food plan, what its prices are in, and the page.

Source: G. Stigler, "The Cost of Subsistence", J. Farm Economics 27 (1945) 303-314; the exact
optimum of these data is that of tests/data/textbook/cases.toml (a14), computed in fractions.
The units of the nutrients are from memory.
"""

from __future__ import annotations

from decimal import ROUND_DOWN
from pathlib import Path

import pytest

from lpview import cli
from lpview.report.worth import written_out

DATA = Path(__file__).resolve().parents[1] / "data"
GIVEN = [str(DATA / "textbook" / "a14.csv"), "--labels", str(DATA / "labels" / "a14.csv")]

BASKET = {
    "Wheat Flour (Enriched)": 1929277590843 / 65357009378779,
    "Liver (Beef)": 247383769197 / 130714018757558,
    "Cabbage": 732941949560 / 65357009378779,
    "Spinach": 654571424179 / 130714018757558,
    "Navy Beans, Dried": 7977288797575 / 130714018757558,
}
"""Dollars a day of each food, exact."""

LIMITS = {  # price, right-hand side, and the ends between which the price holds
    "vitamin B2 (riboflavin)": ("0.016358", 2.7, 2.61158392, 3.97001507, "mg"),
    "calories (energy)": ("0.00876515", 3, 1.84748762, 3.12196078, "Mcal"),
    "calcium": ("0.0317377", 0.8, 0.17831018, 0.99768595, "g"),
    "vitamin C (ascorbic acid)": ("0.000144118", 75, 15.03494231, 727.88964662, "mg"),
    "vitamin A": ("0.000400233", 5, 0.63591361, 11.42951696, "kIU"),
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
        assert value.split() == ["value", f"{dollars:.6g}", "dollar"]


def test_prices_are_in_dollars_per_unit_of_the_nutrient(capsys: pytest.CaptureFixture[str]) -> None:
    out = run("--row", "calories", "--row", "vitamin C", capsys=capsys)
    assert "dual value              0.00876515 dollar per Mcal\n" in out
    assert "dual value              0.000144118 dollar per mg\n" in out


def test_the_page(capsys: pytest.CaptureFixture[str]) -> None:
    # A sentence goes on in the next line after two blanks.
    lines = run("--summary", capsys=capsys).replace("\n  ", " ").splitlines()
    assert lines[0].endswith("a14.csv: the best plan was found and verified")
    assert lines[1] == "The best plan found costs 0.108662 dollar (cost of a day's food)."
    shown = [line for line in lines if line.startswith("Limit ")]
    assert len(shown) == len(LIMITS)
    for line, (name, (price, side, low, high, unit)) in zip(shown, LIMITS.items(), strict=True):
        # The published ends have nine or ten digits, of which four are shown, cut.
        less, more = (written_out(far, 4, ROUND_DOWN) for far in (side - low, high - side))
        worth = f"each {unit} required is worth {float(price):.4g} dollar"
        assert line.startswith(f"Limit {name}, at least {side:g} {unit}: {worth}: ")
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
