"""Other optimal plans: which variables may differ, and plans as blocks."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from lpview.blocks import write_values
from lpview.prices import PlanPoint, Prices
from tests.price_report.models import GLASSHOUSE, LOOSE, run, written


@pytest.fixture
def loose(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    return written(tmp_path, "loose.csv", LOOSE)


def test_variables_that_may_differ_and_how_far(loose, capfd):
    status, out, err = run("plans", loose, capfd=capfd)
    assert (status, err) == (0, "")
    lines = out.splitlines()
    assert lines[4] == "variables that are not the same in all optimal plans: 3 of 3 shown"
    # The widest first, equal ones in model order; the value shown depends on the answer.
    cells = [line.split() for line in lines[6:9]]
    assert [(name, low, high) for name, _, low, high in cells] == [
        ("spare", "0", "inf"), ("near", "1", "4"), ("far", "0", "3")
    ]  # fmt: skip
    assert lines[-2] == "reproduce  lpview plans loose.csv"


def test_the_only_plan(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    _, out, _ = run("plans", written(tmp_path, "glass.csv", GLASSHOUSE), capfd=capfd)
    assert out.splitlines()[2:4] == ["The optimal plan is the only one.", ""]
    assert "variables that" not in out


@pytest.mark.parametrize(
    ("column", "end", "near", "far"),
    [("near", "least", "1", "3"), ("near", "greatest", "4", "0"), ("far", "greatest", "1", "3")],
)
def test_a_plan_that_attains_an_end_is_a_block(column, end, near, far, loose, capfd):
    status, out, err = run("plans", loose, "--column", column, f"--{end}", capfd=capfd)
    assert status == 0
    lines = out.splitlines()
    assert lines[:4] == ["[x]", "column,value", f"near,{near}", f"far,{far}"]
    value = near if column == "near" else far
    assert err == f"column {column} has its {end} value of all optimal plans here: {value}\n"


def test_an_endless_value_has_a_plan_and_a_ray(loose, capfd):
    words = ("plans", loose, "--column", "spare", "--greatest")
    status, out, err = run(*words, "--output", "x.csv", "--ray", "ray.csv", capfd=capfd)
    assert (status, out) == (0, "")
    assert err == (
        "column spare has no greatest value: the plan is optimal, and so is every plan along a "
        "ray from it, which is in the other file\n"
    )
    assert Path("x.csv").read_text().startswith("[x]\ncolumn,value\nnear,")
    assert Path("ray.csv").read_text() == "[ray]\ncolumn,value\nspare,1\n"
    _, _, without = run(*words, capfd=capfd)
    assert without.endswith("a ray from it, which --ray FILE writes\n")


def test_a_value_with_an_end_leaves_no_ray_file(loose, capfd):
    words = ("plans", loose, "--column", "near", "--least", "--ray", "ray.csv")
    _, _, err = run(*words, capfd=capfd)
    assert err == "column near has its least value of all optimal plans here: 1; there is no ray\n"
    assert not Path("ray.csv").exists()


@pytest.mark.parametrize(
    ("x", "ray"),
    [
        ([0, 3, 0], None),  # leaves 4 unmet
        ([1, 3, 0], [1, 0, 0]),  # leaves the equality
        ([1, 3, 0], [0, 0, -1]),  # leaves the bound
    ],
)
def test_a_plan_or_ray_that_fails_the_check_is_not_written(x, ray, loose, capfd, monkeypatch):
    wrong = PlanPoint(np.array(x, float), None if ray is None else np.array(ray, float))
    monkeypatch.setattr(Prices, "plan_at", lambda *_: wrong)
    words = ("plans", loose, "--column", "near", "--least", "--output", "x.csv")
    assert run(*words, capfd=capfd) == (
        4, "", "not established: the plan that was found fails the check\n"
    )  # fmt: skip
    assert not Path("x.csv").exists()


def test_an_unknown_column(loose, capfd):
    assert run("plans", loose, "--column", "nearr", "--least", capfd=capfd) == (
        2, "", "loose.csv: --column: expected the name of a column, got 'nearr'; did you mean "
        "'near'?\n",
    )  # fmt: skip


def test_names_and_numbers_of_a_block_are_canonical():
    names = ('a "b"', "c,d", "e", "f")
    block = write_values("x", names, np.array([1 / 3, -0.0, 1e-7, 120.0]))
    assert block == ('[x]\ncolumn,value\n"a ""b""",0.3333333333333333\n"c,d",0\ne,1e-7\nf,120\n')
    assert write_values("ray", names, np.array([0.0, 2, 0, 0]), sparse=True) == (
        '[ray]\ncolumn,value\n"c,d",2\n'
    )
