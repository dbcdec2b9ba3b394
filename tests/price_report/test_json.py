"""Prices as JSON and CSV: every documented field, null, infinity, second sides."""

from __future__ import annotations

import csv
import io
import json
from pathlib import Path

import pytest

from lpview.priced import StoppedEarlyError, price_everything
from lpview.report import price_json
from lpview.run import Claim
from tests.check.helpers import examined
from tests.dual.models import INF, model
from tests.price_report.models import (
    GLASSHOUSE,
    LOOSE,
    found_glasshouse,
    ready,
    run,
    written,
)

PRICE = (
    *("row", "side", "dual_value", "least_price", "greatest_price", "rate_up", "rate_down"),
    *("up", "down", "zero_slack"),
)
PLAN = (
    *("column", "value", "least", "greatest", "reduced_cost", "least_reduced_cost"),
    *("greatest_reduced_cost", "cost", "lower_bound", "upper_bound", "zero_slack"),
)


def fields(found):
    """What is added to the object, as it is after a round trip."""
    made = price_json.fields(price_everything(found, ready(found), lambda: None))
    return json.loads(json.dumps(made, allow_nan=False))


@pytest.mark.parametrize(("sense", "sign"), [("maximize", 1), ("minimize", -1)])
def test_a_degenerate_model_in_both_senses(sense, sign):
    found = fields(found_glasshouse(sense))
    assert (found["price_dimension"], found["plan_dimension"]) == (1, 0)
    assert found["prices_examined"] == {"lines": 5, "of": 5, "reason": None}
    heat, bench, water = found["prices"]
    assert tuple(heat) == PRICE
    ends = sorted((0.8 * sign, 2 * sign))
    assert heat == {
        "row": "heat",
        "side": "upper",
        "dual_value": 2 * sign,
        "least_price": pytest.approx(ends[0]),
        "greatest_price": pytest.approx(ends[1]),
        "rate_up": pytest.approx(0.8 * sign),
        "rate_down": pytest.approx(2 * sign),
        "up": {"rate": pytest.approx(0.8 * sign), "distance": "inf", "then": "never"},
        "down": {"rate": pytest.approx(2 * sign), "distance": 300, "then": "infeasible"},
        "zero_slack": "always",
    }
    assert (bench["least_price"], bench["greatest_price"], bench["zero_slack"]) == (0, 0, "never")
    assert bench["down"] == {"rate": 0, "distance": pytest.approx(16), "then": "rate changes"}
    assert (water["rate_up"], water["rate_down"]) == (0, pytest.approx(4.5 * sign))
    tomato, basil = found["plans"]
    assert tuple(tomato) == PLAN
    assert (tomato["least"], tomato["greatest"], tomato["zero_slack"]) == (20, 20, "never")
    assert basil["upper_bound"] is None
    assert basil["lower_bound"]["up"] == {
        "rate": pytest.approx(-2.4 * sign),
        "distance": pytest.approx(150),
        "then": "infeasible",
    }
    assert sorted((basil["least_reduced_cost"], basil["greatest_reduced_cost"])) == [
        pytest.approx(min(0, -2.4 * sign)),
        pytest.approx(max(0, -2.4 * sign)),
    ]
    # Its income has to rise by 2.4, or its cost to fall by as much, before it pays.
    towards, away = ("up", "down") if sense == "maximize" else ("down", "up")
    assert basil["cost"][towards]["distance"] == pytest.approx(2.4)
    assert basil["cost"][away] == {"rate": 0, "distance": "inf", "then": "never"}


def test_two_sides_equalities_and_infinities(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    status, out, err = run(
        "prices", written(tmp_path, "loose.csv", LOOSE), "--format", "json", capfd=capfd
    )
    found = json.loads(out)
    assert (status, err) == (0, "")
    sides = [(entry["row"], entry["side"]) for entry in found["prices"]]
    assert sides[:3] == [("need", "both"), ("again", "both"), ("slack", "upper")]
    assert sorted(sides[3:]) == [("store", "lower"), ("store", "upper")]
    need = found["prices"][0]
    assert (need["least_price"], need["greatest_price"]) == ("-inf", "inf")
    assert need["up"] == {"rate": "inf", "distance": 0, "then": "infeasible"}
    assert need["down"] == {"rate": "-inf", "distance": 0, "then": "infeasible"}
    assert need["zero_slack"] is None
    spare = found["plans"][2]
    assert (spare["least"], spare["greatest"]) == (0, "inf")
    assert spare["cost"]["down"] == {"rate": "inf", "distance": 0, "then": "unbounded"}
    flags = {line["row"]: line["flags"] for line in found["constraints"]}
    assert "price not unique" in flags["need"] and "price not unique" not in flags["store"]


def test_the_other_side_has_its_own_price_of_zero_and_its_own_moves():
    # Worked by hand: x rests on the upper side 4 at a price of 1; the lower side may rise by 3.
    lp = model("maximize", {"x": 1}, {"r": (1, {"x": 1}, 4), "free": (-INF, {"x": 1}, INF)}, {})
    upper, lower, free = fields(examined(lp))["prices"]
    assert (upper["side"], upper["dual_value"], upper["least_price"]) == ("upper", 1, 1)
    assert upper["down"] == {"rate": 1, "distance": 3, "then": "infeasible"}
    assert (lower["side"], lower["dual_value"]) == ("lower", 0)
    assert (lower["least_price"], lower["greatest_price"]) == (0, 0)
    assert lower["up"] == {"rate": 0, "distance": 3, "then": "infeasible"}
    assert (lower["zero_slack"], upper["zero_slack"]) == ("never", "always")
    assert free == {
        **dict.fromkeys(PRICE),
        "row": "free",
        "dual_value": 0,
        "least_price": 0,
        "greatest_price": 0,
    }


def test_the_check_with_prices_is_the_same_object(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glass.csv", GLASSHOUSE)
    outs = [
        json.loads(run(*words, "--format", "json", capfd=capfd)[1])
        for words in (
            ("check", "glass.csv", "--prices", "--no-second-route"),
            ("prices", "glass.csv"),
            ("check", "glass.csv", "--no-second-route"),
        )
    ]
    for out in outs:
        out["timing"] = out["settings"]["command"] = None
    assert outs[0] == outs[1]
    added = set(outs[0]) - set(outs[2])
    assert added == {"prices", "plans", "price_dimension", "plan_dimension", "prices_examined"}


def test_several_models_have_their_own_prices(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "glass.csv", GLASSHOUSE)
    written(tmp_path, "no.csv", GLASSHOUSE.replace("tomato,0,40", "tomato,30,40"))
    words = ("check", "no.csv", "glass.csv", "--prices", "--format", "json")
    status, out, _ = run(*words, capfd=capfd)
    no, glass = json.loads(out)
    assert status == 3
    assert (no["prices"], no["plans"], no["price_dimension"]) == ([], [], None)
    assert no["prices_examined"] is None
    assert len(glass["prices"]) == 3 and glass["price_dimension"] == 1


def test_stopped_work_has_null_where_nothing_was_found():
    found = found_glasshouse()

    def stop():
        raise StoppedEarlyError(Claim.TIME_LIMIT)

    made = price_json.fields(price_everything(found, ready(found), stop))
    assert made["prices_examined"] == {"lines": 0, "of": 5, "reason": "time limit reached"}
    heat = made["prices"][0]
    assert (heat["row"], heat["side"], heat["dual_value"]) == ("heat", "upper", 2)
    assert all(heat[name] is None for name in PRICE[3:])
    assert made["price_dimension"] == 1


def test_csv_has_the_fields_of_json(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "loose.csv", LOOSE.replace("need", '"need, both"'))
    status, out, err = run("prices", "loose.csv", "--format", "csv", capfd=capfd)
    assert (status, err) == (0, "")
    lines = list(csv.DictReader(io.StringIO(out)))
    _, plain, _ = run("prices", "loose.csv", "--format", "json", capfd=capfd)
    entries = json.loads(plain)["prices"]
    assert len(lines) == len(entries) == 5
    for line, entry in zip(lines, entries, strict=True):
        assert tuple(line) == price_json.HEADER
        for way in ("up", "down"):
            move = entry.pop(way)
            entry |= {f"{way}_distance": move["distance"], f"{way}_then": move["then"]}
        for name, cell in line.items():
            expected = entry[name]
            if isinstance(expected, (int, float)):
                assert float(cell) == expected
            else:
                assert cell == ("" if expected is None else expected)


def test_csv_of_a_model_without_an_optimum_is_a_message(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    written(tmp_path, "no.csv", GLASSHOUSE.replace("tomato,0,40", "tomato,30,40"))
    words = ("prices", "no.csv", "--format", "csv", "--output", "out.csv")
    assert run(*words, capfd=capfd) == (
        3, "", "no.csv: infeasible, certified: the lines contradict each other\n"
    )  # fmt: skip
    assert not Path("out.csv").exists()
