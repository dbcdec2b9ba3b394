"""The models that other tests of the screen use are what they say."""

from __future__ import annotations

import json

import pytest

from lpview import cli
from lpview.blocks import read_model
from lpview.examination import examine
from lpview.marks import Flag
from lpview.outcomes import Optimal, Request
from lpview.solver import solve
from tests.screen.models import (
    ALIKE,
    CJK,
    CONTROL,
    GLASSHOUSE,
    LONG,
    MARKUP,
    MIXED,
    OPTIMAL,
    OTHER,
    Case,
    chain,
)

ALL = {**OPTIMAL, **OTHER}


@pytest.mark.parametrize("name", ALL)
def test_every_model_ends_as_it_says(name, tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    ALL[name].write(tmp_path)
    assert cli.main(["check", "model.csv"]) == ALL[name].status
    out, err = capfd.readouterr()
    assert ALL[name].says in (err if ALL[name].status == 2 else out.splitlines()[0])


@pytest.mark.parametrize("names", [MARKUP, CONTROL, CJK, MIXED, LONG, ALIKE])
def test_the_chain_has_the_names_and_the_answer_it_says(names, tmp_path, monkeypatch, capfd):
    path = Case(chain(names, names[::-1])).write(tmp_path)
    assert cli.main(["check", str(path), "--format", "json", "--full"]) == 0
    found = json.loads(capfd.readouterr().out)
    wanted = list(range(1, len(names) + 1))
    assert [line["row"] for line in found["constraints"]] == list(names)
    assert [line["column"] for line in found["variables"]] == list(names[::-1])
    assert [line["dual_value"] for line in found["constraints"]] == wanted
    assert [line["value"] for line in found["variables"]] == wanted
    assert {line["slack"] for line in found["constraints"]} == {0}
    assert {line["reduced_cost"] for line in found["variables"]} == {0}


def test_the_glasshouse_is_a_degenerate_vertex(tmp_path):
    reading = read_model(str(Case(GLASSHOUSE).write(tmp_path)))
    found = examine(reading, Request("model.csv", "lpview check model.csv"), solve)
    assert isinstance(found, Optimal)
    assert found.answer.x.tolist() == [20, 0]
    assert found.measurement.rows.slack.tolist() == [0, 16, 0]
    heat, bench, water = found.answer.y.tolist()
    assert 0.8 - 1e-12 <= heat <= 2 + 1e-12
    assert (bench, water) == pytest.approx((0, (30 - 15 * heat) / 4), abs=1e-12)
    assert found.measurement.columns.price.tolist() == pytest.approx([0, 1.6 - 2 * heat], abs=1e-12)
    assert int(found.marks.flags[Flag.DEGENERATE].sum()) == 1
