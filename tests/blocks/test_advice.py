"""Each kind of cell that only looks like a number has its own advice; tests/bad has the rest."""

from __future__ import annotations

import pytest

from lpview.blocks.advice import advice_on

DATE = "a spreadsheet turned 1/3 into a date? write it as text or as a decimal"
GROUPED = "write the digits without grouping"
UNIT = "write the number alone; a currency or unit can stand in [labels]"
ERROR = "mend it in the spreadsheet and export again"


@pytest.mark.parametrize(
    ("advice", "texts"),
    [
        (DATE, "01.03.26|2026/03/01|1 Mar 2026|2026-03-01 12:30|01.03.|Jan-26|1. März 2026"),
        (DATE, "2026-03-01T12:30:00Z|Mar 1, 2026|1-janv|03-août|1-ene|2 mei|01/mag|3. 1. 2026"),
        (GROUPED, "-1 200|12,34,567|1 200 000,50|1'200.50|1_000_000|1200.000,5|1.2.3"),
        (UNIT, "-$3|US$ 3|3EUR|1.200,50 €|CHF 1'200.50|3 m²|3 kWh/Woche|5x"),
        ("write a minus in front, not brackets around it", "(1,200)|($5)|( 5 )"),
        ("write the minus in front", "1,200.50-|5 -"),
        ("write a time as a number of hours or minutes", "12:30:15|0:05"),
        (ERROR, "#SPILL!|#NV|#WERT!|####|Err:502"),
        ("write 12% as 12/100", "-5%|1,5 %|%12|5‰"),
        ("write digits as 0 to 9", "٢٥|５|-١.٥"),
        ("write a power of ten as 1e3", "1.5×10^3|1d5"),
        ("", "x|three|nan|inf|..|.||--5|+-1|1e5.5|v1|x-1|abc-1|may|1 2|heat|# 5 kWh" + "h" * 60),
    ],
)
def test_each_kind_has_its_advice(advice: str, texts: str) -> None:
    assert {text: advice_on(text) for text in texts.split("|")} == dict.fromkeys(
        texts.split("|"), advice
    )


@pytest.mark.parametrize("text", ["1 " * 200_000, "1" * 400_000 + "x", "(" + "1," * 200_000])
def test_a_very_long_text_takes_no_time(text: str) -> None:
    assert advice_on(text) == ""
