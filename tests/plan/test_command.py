"""``lpview check MODEL --plan PLAN``: what is printed, and the exit status."""

from __future__ import annotations

import hashlib
import io
import json
import os
import shlex
import threading
from pathlib import Path

import pytest

from lpview import cli

WYNDOR = """[c],maximize
column,cost
doors,3
windows,5

[A]
row,column,coefficient
plant1,doors,1
plant2,windows,2
plant3,doors,3
plant3,windows,2

[b]
row,relation,rhs
plant1,<=,4
plant2,<=,12
plant3,<=,18
"""
# Wyndor Glass, as in tests/plan/helpers.py.

INFEASIBLE = WYNDOR.replace("plant1,<=,4", "plant1,>=,7")
UNBOUNDED = WYNDOR.replace("plant2,windows,2", "plant2,windows,-2").replace(
    "plant3,windows,2", "plant3,windows,-2"
)

PLAN = "column,value\ndoors,2\nwindows,6\n"


@pytest.fixture
def run(tmp_path: Path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)

    def ask(plan, *words, model=WYNDOR):
        Path("wyndor.csv").write_text(model)
        Path("plan.csv").write_text(plan)
        status = cli.main(["check", "wyndor.csv", "--plan", "plan.csv", *words])
        out, err = capfd.readouterr()
        return status, out, err

    return ask


def plan(doors, windows, more=""):
    return f"[x]\ncolumn,value\ndoors,{doors}\nwindows,{windows}\n{more}"


def prices(*values):
    names = ("plant1", "plant2", "plant3")
    lines = [f"{name},{value}" for name, value in zip(names, values, strict=True)]
    return "\n".join(("[y]", "row,value", *lines)) + "\n"


@pytest.mark.parametrize(
    ("given", "words", "status", "verdict"),
    [
        (
            PLAN, (), 0,
            "feasible as written and optimal (1e-9 scaled)",
        ),
        (
            plan(4, 3), (), 0,
            "feasible as written (1e-9 scaled), 9 worse than the optimum (25 %)",
        ),
        (
            plan(4, 6), (), 1,
            "NOT FEASIBLE as written nor within its rounding: 1 line violated, 1 beyond it",
        ),
        (
            plan("2.03", "6.0"), (), 1,
            "NOT FEASIBLE as written: 1 line violated, which holds within its rounding",
        ),
        (
            plan("2.03", "6.0"), ("--rounded",), 0,
            "NOT FEASIBLE as written, accepted within its rounding: 1 line violated",
        ),
        (
            plan("2", "6.1"), ("--rounded", "--tolerance", "0.001"), 1,
            "NOT FEASIBLE as written nor within its rounding: 2 lines violated, 1 beyond it",
        ),
        (
            plan(4, 6), ("--limit", "plant3=6"), 0,
            "feasible as written (1e-9 scaled, or own limit), 6 better only because it breaks "
            "limits",
        ),
        (
            plan(2, 6, prices(0, "3/2", 1)), (), 0,
            "optimal as written (1e-9 scaled), verified by its own prices",
        ),
        (
            plan(2, 6, prices(0, "1.6", 1)), (), 1,
            "NOT VERIFIED except within its rounding: fails complementary slackness and duality "
            "gap",
        ),
        (
            plan(2, 6, prices(0, "1.6", 1)), ("--rounded",), 0,
            "NOT VERIFIED as written, accepted within its rounding: 2 conditions fail",
        ),
        (
            plan("2.03", "6.0", prices("0/1", "5/3", "1/1")), ("--rounded",), 1,
            "NOT VERIFIED: 3 conditions fail, within its rounding still complementary "
            "slackness and duality gap",
        ),
        (
            plan("2/1", "6/1", prices("0/1", "5/3", "1/1")), ("--rounded",), 1,
            "NOT VERIFIED, even within its rounding: fails complementary slackness and duality "
            "gap",
        ),
        (
            plan("2/1", "6/1", prices("1/1", "1/2", "3/2")), ("--rounded",), 1,
            "NOT VERIFIED, even within its rounding: fails dual feasibility and 2 more conditions",
        ),
    ],
)  # fmt: skip
def test_the_first_line_and_the_exit_status(run, given, words, status, verdict):
    found, out, err = run(given, *words)
    assert out.splitlines()[0] == f"wyndor.csv with plan.csv: {verdict}"
    assert (found, err) == (status, "")


def test_the_report_of_a_plan_that_breaks_a_row(run):
    status, out, _ = run("column,value\nwindows,11.0\nlabour,3\n", "--ignore-unknown")
    text = "\n".join(line.rstrip() for line in out.splitlines())
    assert status == 1
    assert text.startswith(
        """\
wyndor.csv with plan.csv: NOT FEASIBLE as written nor within its rounding: 2 lines violated, 2 \
beyond it
maximize, 3 constraints, 2 variables, 4 nonzero coefficients; most decimals c 0, A 0, b 0

condition           as written  within rounding  worst line  scaled  absolute  tolerance
primal feasibility  FAILED      FAILED           row plant2    0.45        10       1e-9

plan         1 column listed, 1 not (taken as 0); 1 name ignored that the model lacks: labour
rounding     values are known to half their last digit, at worst 0.05 (column windows); each line \
is judged alone, so that no one plan need satisfy all
dual values  the plan file has none, so only primal feasibility is judged
objective    55; within the rounding from 54.75 to 55.25
optimum      36, solved and checked; the plan is 19 better (53 %), which means nothing for \
a plan that is not feasible
multipliers  not judged, for the plan is not feasible; no plan within its rounding is optimal

violated lines, worst first, by violation over what is allowed: 2 of 2
line        value   side  violation  allowed  within rounding
row plant2     22  <= 12         10   2.2e-8  no
row plant3     22  <= 18          4   2.2e-8  no

plan SHA-256    """
    )
    assert text.endswith(
        "reproduce  lpview check wyndor.csv --plan plan.csv --ignore-unknown\n"
        "A verified optimum is only as good as the model; local rules and licensed practice "
        "decide."
    )


def test_what_lines_cost(run):
    _, out, _ = run(plan(4, 3))
    assert (
        "what each line costs against the optimum: 1 of 1 line, together 9 by the prices of the "
        "optimum\n"
        "line        price  distance to its side  |price| x distance\n"
        "row plant2    1.5                     6                   9\n"
    ) in out
    assert "optimum      36, solved and checked; the plan is 9 worse (25 %)\n" in out
    assert (
        "multipliers  no dual values make this plan optimal; no plan within its rounding is "
        "optimal\n"
    ) in out


def test_what_violations_gain_stands_beside_what_lines_cost(run):
    """Prices (0, 3/2, 1): (6, 3) has 6 left of plant 2 and takes 6 more of plant 3 than is
    there; plant 1 is broken too and has no price. (4, 6) only takes."""
    both = run(plan(6, 3), "--limit", "plant*=9")[1]
    assert "what each line costs against the optimum: 1 of 1 line, together 9 by" in both
    gain = (
        "what the allowed violations gain: 1 of 1 line, together 6 by the prices of the optimum\n"
        "line        price  violation  |price| x violation\n"
        "row plant3      1          6                    6\n"
    )
    assert gain in both
    assert "the plan is 3 worse (8.3 %)\n" in both
    alone = run(plan(4, 6), "--limit", "plant*=9")[1]
    assert gain in alone and "what each line costs" not in alone
    assert "the plan is 6 better (17 %)\n" in alone


def test_a_plan_that_attains_the_optimum_costs_nothing(run):
    """The solver's own price of doors may be a residue such as 1e-16."""
    out = run("column,value\ndoors,2\nwindows,5.99999999999\n")[1]
    assert "the plan attains it to within 5e-11\n" in out
    assert "what each line costs" not in out and "optimal (1e-9 scaled)" in out


def test_lines_that_cost_nothing_to_the_zero_asked_for_are_left_out(run):
    """Plant 2 has 2e-4 left at 3/2, which is 1.7e-5 of 18; plant 3 has 3.0002 left at 1."""
    given = plan("1", "5.9999")
    assert "2 of 2 lines, together 3.0005 by" in run(given)[1]
    assert "1 of 1 line, together 3.0002 by" in run(given, "--zero", "1e-4")[1]


WRONG = prices(0, "3/2", "-1")


def test_every_line_that_fails_a_condition_on_prices_is_named(run):
    """With y = (0, 3/2, -1) plant 3 has the wrong sign, and so have the reduced costs
    3 - 3 y3 = 6 and 5 - 2 y2 - 2 y3 = 4 of variables that have no upper bound."""
    out = run(plan(2, 6, WRONG))[1]
    assert (
        "wrong sign  3 lines, 3 beyond the rounding, worst first: column doors (reduced cost 6), "
        "row plant3 (dual value -1), column windows (reduced cost 4)\n"
    ) in out
    assert out.splitlines()[2] == (
        "The plan is optimal, but the dual values in the file do not show it; those of the "
        "optimum do."
    )
    assert "multipliers" not in out
    full = run(plan(2, 6, WRONG), "--full")[1]
    assert (
        "lines that fail dual feasibility, worst first, by residual over what is allowed: 3 of 3\n"
        "line            wrong sign      residual  allowed  within rounding\n"
        "column doors    reduced cost 6         6     3e-9  no\n"
        "row plant3      dual value -1          1     1e-9  no\n"
        "column windows  reduced cost 4         4     5e-9  no\n"
    ) in full


def test_products_and_reduced_costs_that_fail_are_named(run):
    """At (2, 6) with y1 = 1 plant 1 has 2 of slack; its reduced cost is 3 - 1 - 3 = -1 at
    doors = 2."""
    out = run(plan(2, 6, prices("1/1", "3/2", "1/1") + "[z]\ncolumn,value\ndoors,-1.50\n"))[1]
    assert (
        "stationarity      1 line, 1 beyond the rounding: column doors (-1.5 in the file, -1 by "
        "its dual values)\n"
    ) in out
    assert (
        "product not zero  2 lines, 2 beyond the rounding, worst first: column doors (reduced "
        "cost -1, 2 from its side), row plant1 (dual value 1, 2 from its side)\n"
    ) in out


@pytest.mark.parametrize(
    ("more", "told"),
    [
        (
            prices("0", "1.6", "1"),
            "The plan is optimal, but the dual values in the file do not show it as written; "
            "those of the optimum do.",
        ),
        (
            prices("0", "1.5", "1.0") + "[z]\ncolumn,value\ndoors,1/1\n",
            "The plan is optimal, and the dual values in the file show it, but the reduced costs "
            "in the file are not theirs.",
        ),
    ],
)
def test_an_optimal_plan_is_told_apart_from_its_prices(run, more, told):
    status, out, _ = run(plan(2, 6, more))
    assert (status, out.splitlines()[2]) == (1, told)
    assert "The plan is optimal, " not in run(plan(4, 3, more))[1]


def test_a_violation_shows_in_the_value(run):
    model = WYNDOR.replace("plant3,<=,18", "plant3,<=,18000").replace(
        "plant1,<=,4", "plant1,>=,1900"
    )
    out = run(plan("1899.9997", "0"), model=model)[1]
    assert "row plant1  1899.9997  >= 1900     0.0003" in out
    out = run(plan("1900.00000000000002", "0"), "--limit", "plant1=0", model=model)[1]
    assert "violated lines" not in out
    out = run(plan("1899.9999999999998", "0"), "--limit", "plant1=0", model=model)[1]
    assert "row plant1  1899.9999999999998  >= 1900" in out


def test_limits_are_reported_and_repeated(run):
    words = ("--limit", "plant?=7", "--limit", "plant3=6.5", "--rounded", "--complete", "--full")
    status, out, _ = run(plan(4, 6), *words)
    assert status == 0
    assert (
        "limits       3 rows with a limit of their own, worst row plant3, violated by 6; "
        "6.5 is allowed\n"
    ) in out
    assert "primal feasibility  passed      passed           row plant3" in out
    assert "6.5 absolute" in out
    command = next(line for line in out.splitlines() if line.startswith("reproduce"))
    asked = shlex.split(command)[2:]
    assert cli.main(asked) == 0
    assert asked[-6:] == [
        "--plan", "plan.csv", "--rounded", "--limit=plant?=7.0", "--limit=plant3=6.5",
        "--complete",
    ]  # fmt: skip


def test_a_limit_that_is_not_reached(run):
    assert "limits       1 row with a limit of its own; none is violated\n" in run(
        PLAN, "--limit", "plant3=1"
    )[1]  # fmt: skip


@pytest.mark.parametrize(
    ("model", "words", "status", "verdict", "optimum"),
    [
        (
            INFEASIBLE, (), 1,
            "NOT FEASIBLE as written nor within its rounding: 1 line violated, 1 beyond it",
            "none: the model is infeasible, certified",
        ),
        (
            INFEASIBLE, ("--limit", "plant1=5"), 0,
            "feasible as written (1e-9 scaled, or own limit), yet the model is infeasible",
            "none: the model is infeasible, certified; this plan contradicts that only within "
            "the violations that are allowed",
        ),
        (
            UNBOUNDED, (), 0,
            "feasible as written (1e-9 scaled), but no plan is optimal",
            "none: the model is unbounded, certified; the objective improves without limit",
        ),
    ],
)  # fmt: skip
def test_models_without_an_optimum(run, model, words, status, verdict, optimum):
    found, out, _ = run(PLAN, *words, model=model)
    assert out.splitlines()[0] == f"wyndor.csv with plan.csv: {verdict}"
    assert found == status
    assert f"optimum      {optimum}\n" in out


def test_stopped_work_still_says_whether_the_plan_is_feasible(run):
    status, out, _ = run(PLAN, "--time-limit", "1e-9")
    assert out.splitlines()[0] == (
        "wyndor.csv with plan.csv: feasible as written (1e-9 scaled), the optimum is not known"
    )
    assert status == 0
    assert "not known: stopped before there was a result (time limit reached)" in out
    assert run(plan(4, 6), "--time-limit", "1e-9")[0] == 1


def test_a_limit_of_no_row_ends_in_a_message_and_status_2(run):
    assert run(PLAN, "--limit", "plnat3*=1") == (
        2,
        "",
        "wyndor.csv: --limit: expected a pattern that matches a row, got 'plnat3*'; "
        "did you mean 'plant3'?\n",
    )


def test_a_plan_that_names_another_model_is_refused(run):
    status, out, err = run("column,value\ndors,2\n")
    assert (status, out) == (2, "")
    assert err.startswith("plan.csv:2:") and "did you mean 'doors'?" in err


def test_markdown_has_the_same_facts(run):
    status, out, _ = run(plan(4, 3), "--format", "markdown")
    assert status == 0
    assert out.startswith("**wyndor.csv with plan.csv: feasible as written (1e-9 scaled), 9 worse")
    assert "| row plant2 | 1.5 | 6 | 9 |" in out


def big(rows, plan_of, cost):
    names = [f"c{k}" for k in range(rows)]
    model = ["[c],minimize", "column,cost", *(f"{n},{cost}" for n in names)]
    model += ["[A]", "row,column,coefficient", *(f"r{n},{n},1" for n in names)]
    model += ["[b]", "row,relation,rhs", *(f"r{n},>=,2" for n in names)]
    return "\n".join(model) + "\n", "\n".join(("column,value", *map(plan_of, names))) + "\n"


@pytest.mark.parametrize("value", ["1", "3"])
def test_a_text_report_has_at_most_40_lines_unless_full(run, value):
    model, given = big(50, lambda name: f"{name},{value}", 1)
    words = ("--limit", "rc1?=0.5")
    status, out, _ = run(given, *words, model=model)
    assert (status, len(out.splitlines()) <= 40) == (int(value == "1"), True)
    title = "allowed: 10 of 50" if value == "1" else "optimum: 7 of 50 lines, together 50 "
    assert title in out
    full = run(given, *words, "--full", model=model)[1]
    assert sum(line.startswith(("row rc", "column c")) for line in full.splitlines()) == 50


def test_json_about_a_plan_without_prices(run):
    status, out, _ = run(plan(4, "3.0"), "--format", "json", "--limit", "plant3=1")
    found = json.loads(out)
    assert (status, found["format"], found["status"], found["passed"]) == (0, 1, "optimal", True)
    assert found["objective"] == {"primal": 27, "dual": None, "gap": None, "at_stake": None}
    assert [line["passed"] for line in found["residuals"]] == [True, None, None, None, None]
    assert found["residuals"][1]["standing"] == "no prices given"
    assert found["constraints"][1] == {
        "row": "plant2", "value": 6, "lower": "-inf", "upper": 12, "slack": 6,
        "slack_lower": "inf", "slack_upper": 6, "dual_value": None, "complementarity": None,
        "flags": [], "limit": None,
    }  # fmt: skip
    assert [line["limit"] for line in found["constraints"]] == [None, None, 1]
    assert found["variables"][1] == {
        "column": "windows", "value": 3, "lower": 0, "upper": "inf", "cost": 5,
        "reduced_cost": None, "complementarity": None, "flags": [], "listed": True,
        "half_unit": 0.05,
    }  # fmt: skip
    about = found["plan"]
    assert len(about.pop("sha256")) == 64
    assert about == {
        "file": "plan.csv", "rounded": False, "feasible": True, "feasible_within_rounding": True,
        "optimal": False,
        "columns_listed": 2, "columns_not_listed": 0, "unknown": [],
        "coarsest": {"column": "doors", "half_unit": 0.5},
        "objective_least": pytest.approx(25.25), "objective_greatest": pytest.approx(28.75),
        "violated": [],
        "limits": {"rows": 1, "worst": "plant3", "violation": 0, "limit": 1},
        "optimum": {
            "objective": 36, "distance": 9, "relative": 0.25,
            "dual_values": "no dual values make it optimal", "possible_within_rounding": False,
            "lines": [{"row": "plant2", "price": 1.5, "distance": 6, "product": 9}],
            "lines_together": 9,
        },
    }  # fmt: skip
    assert "solve_seconds" in found["timing"]


def test_json_about_a_plan_with_prices_that_fails(run):
    status, out, _ = run(plan(4, "6.0", prices(0, "3/2", "1")), "--format", "json")
    found = json.loads(out)
    assert (status, found["status"], found["passed"]) == (1, "optimal", False)
    assert found["objective"]["dual"] == 36 and found["objective"]["gap"] == -6
    first = found["residuals"][0]
    assert first["worst"] == {"row": "plant3"}
    assert (first["absolute"], first["scaled"], first["passed"]) == (6, 6 / 18, False)
    assert first["within_rounding"]["absolute"] == pytest.approx(6 - 1.5 - 0.1)
    assert found["residuals"][2]["standing"] == "holds by definition"
    assert found["constraints"][2]["flags"] == ["violated", "product not zero"]
    assert found["constraints"][2]["dual_value"] == 1
    assert found["variables"][0]["reduced_cost"] == 0
    assert found["plan"]["violated"] == [
        {
            "row": "plant3",
            "violation": 6,
            "allowed": pytest.approx(1.8e-8),
            "within_rounding": False,
        }
    ]


def test_json_tells_passed_as_written_from_accepted(run):
    given = plan("2.03", "6.0")
    for words, status in ((), 1), (("--rounded",), 0):
        found, out, _ = run(given, "--format", "json", *words)
        about = json.loads(out)
        assert (found, about["passed"], about["accepted"]) == (status, False, status == 0)
        assert about["plan"]["optimal"] is False


@pytest.mark.parametrize(
    ("given", "words", "model", "optimal"),
    [
        (PLAN, (), WYNDOR, True),
        (plan(4, 3), (), WYNDOR, False),
        (plan(2, 6, WRONG), (), WYNDOR, True),
        (PLAN, ("--time-limit", "1e-9"), WYNDOR, None),
        (plan(2, 6, prices(0, "3/2", 1)), ("--time-limit", "1e-9"), WYNDOR, True),
        (plan(4, 6), ("--time-limit", "1e-9"), WYNDOR, False),
        (PLAN, (), UNBOUNDED, False),
        (PLAN, ("--limit", "plant1=5"), INFEASIBLE, False),
    ],
)
def test_json_says_whether_multipliers_make_the_plan_optimal(run, given, words, model, optimal):
    out = run(given, "--format", "json", *words, model=model)[1]
    assert json.loads(out)["plan"]["optimal"] is optimal


def test_json_has_every_line_that_fails(run):
    found = json.loads(run(plan(2, 6, WRONG), "--format", "json")[1])
    assert [len(one["failing"]) for one in found["residuals"]] == [0, 3, 0, 0, 0]
    assert found["residuals"][1]["failing"][1] == {
        "row": "plant3", "residual": 1, "allowed": 1e-9, "within_rounding": False,
    }  # fmt: skip


def test_json_about_a_model_without_an_optimum(run):
    found = json.loads(run(PLAN, "--format", "json", model=INFEASIBLE)[1])
    assert (found["status"], found["passed"], found["plan"]["optimum"]) == (
        "infeasible", False, None,
    )  # fmt: skip
    assert found["certificate"]["kind"] == "Farkas multipliers"


def test_output_goes_whole_to_a_file(run):
    status, out, _ = run(PLAN, "--output", "report.txt")
    assert (status, out) == (0, "")
    assert Path("report.txt").read_text().startswith("wyndor.csv with plan.csv: feasible")


def test_labels_and_units_stand_beside_the_numbers(run):
    labels = (
        "\n[labels]\nkind,name,label,unit,group\nrow,plant3,Glass works,hours,\nobjective,,,EUR,\n"
    )
    status, out, _ = run(plan(4, 6), "--limit", "plant3=2", model=WYNDOR + labels)
    assert status == 1
    assert "violated by 6 hours; 2 hours is allowed" in out
    assert "objective    42 EUR; within the rounding from 38 to 46 EUR" in out
    assert "Glass works" in out


def test_a_model_from_standard_input_is_saved_and_named(run, monkeypatch, capfd):
    run(PLAN)
    monkeypatch.setattr("sys.stdin", io.TextIOWrapper(io.BytesIO(WYNDOR.encode())))
    assert cli.main(["check", "-", "--plan", "plan.csv"]) == 0
    out, err = capfd.readouterr()
    [saved] = Path().glob("model-*.csv")
    assert err == f"saved standard input: {saved}\n"
    assert f"reproduce  lpview check {saved} --plan plan.csv\n" in out


def test_a_model_that_the_solver_cannot_hold_leaves_the_plan_to_be_judged(run) -> None:
    model = (
        "[c],minimize\ncolumn,cost\nx,1e-250\ny,1e250\n\n[A]\nrow,column,coefficient\n"
        "r,x,1e200\nr,y,1e-200\ns,x,1\ns,y,1\n\n[b]\nrow,relation,rhs\nr,>=,1\ns,>=,1\n"
    )
    status, out, err = run("column,value\nx,1\ny,0\n", model=model)
    assert (status, err) == (0, "")
    assert out.splitlines()[0] == (
        "wyndor.csv with plan.csv: feasible as written (1e-9 scaled), the optimum is not known"
    )
    assert "state the row or its variables in other units" in out


def test_the_longest_report_has_at_most_40_lines(run):
    """Rows that fail every condition, limits, labels, costs and gains all at once."""
    model, _ = big(20, str, 1)
    model += "[labels]\nkind,name,label,unit,group\nrow,rc1,one,kg,\nobjective,,,EUR,\n"
    names = [f"c{k}" for k in range(20)]
    values = "".join(f"{n},{1 + 2 * (k % 2)}\n" for k, n in enumerate(names))
    wrong = "".join(f"r{n},{-2 + 3 * (k % 3)}\n" for k, n in enumerate(names))
    off = "".join(f"{n},7.5\n" for n in names)
    given = f"[x]\ncolumn,value\n{values}[y]\nrow,value\n{wrong}[z]\ncolumn,value\n{off}"
    for words in (("--limit", "r*=1"), ("--limit", "r*=1", "--limit", "rc2=0.5")):
        out = run(given, *words, model=model)[1]
        assert 30 < len(out.splitlines()) <= 40
        [named] = [line for line in out.splitlines() if line.startswith("wrong sign")]
        assert named.startswith("wrong sign        13 lines, ")
        assert named.count("row rc") == 5 and named.endswith(", and 8 more")
        assert ("what the allowed violations gain: 3 of 10 lines" in out) == (len(words) == 2)
        assert ("violated lines, worst first" in out) == (len(words) == 4)
    assert "worst first, by residual over what is allowed: 20 of 20" in run(
        given, "--limit", "r*=1", "--full", model=model
    )[1]  # fmt: skip


def test_the_digest_is_that_of_what_was_read(run, tmp_path) -> None:
    pipe = tmp_path / "pipe"
    os.mkfifo(pipe)
    writer = threading.Thread(target=pipe.write_text, args=(PLAN,))
    writer.start()
    _, out, _ = run(PLAN, "--plan", "pipe")
    writer.join()
    assert hashlib.sha256(PLAN.encode()).hexdigest() in out


def test_labels_stand_in_json(run) -> None:
    labels = "\n[labels]\nkind,name,label,unit,group\nrow,plant1,first plant,hours,\n"
    labels += "column,doors,glass doors,batch,\nobjective,,profit,EUR,\n"
    _, out, _ = run(PLAN, "--format", "json", model=WYNDOR + labels)
    found = json.loads(out)
    assert found["constraints"][0]["unit"] == "hours"
    assert "unit" not in found["constraints"][1]
    assert found["variables"][0]["label"] == "glass doors"
    assert found["objective"]["unit"] == "EUR"


@pytest.mark.parametrize("form", ["text", "json"])
def test_numbers_beyond_all_measure_draw_no_warning(run, form) -> None:
    far = "[x]\ncolumn,value\ndoors,1e299\nwindows,-1e299\n[y]\nrow,value\nplant1,1e299\n"
    status, out, err = run(far, "--format", form)
    assert (status, err) == (1, "")
    assert out


def test_the_second_route_is_about_a_solver_and_not_about_a_plan(run) -> None:
    with pytest.raises(SystemExit) as caught:
        run(PLAN, "--second-route")
    assert caught.value.code == 2
