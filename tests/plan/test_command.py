"""``lpview check MODEL --plan PLAN``: what is printed, and the exit status."""

from __future__ import annotations

import io
import json
import shlex
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
            "feasible as written and optimal: every row and bound holds at 1e-9 scaled",
        ),
        (
            plan(4, 3), (), 0,
            "feasible as written, 9 from the optimum: every row and bound holds at 1e-9 scaled",
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
            "NOT FEASIBLE as written: 1 line violated, which holds within its rounding; "
            "accepted, as --rounded asks",
        ),
        (
            plan("2", "6.1"), ("--rounded", "--tolerance", "0.001"), 1,
            "NOT FEASIBLE as written nor within its rounding: 2 lines violated, 1 beyond it",
        ),
        (
            plan(4, 6), ("--limit", "plant3=6"), 0,
            "feasible as written, 6 better than the optimum, which only the violations allowed "
            "make possible: every row and bound holds at 1e-9 scaled or within its own limit",
        ),
        (
            plan(2, 6, prices(0, "3/2", 1)), (), 0,
            "optimal as written, verified by its own prices: every condition holds at 1e-9 scaled",
        ),
        (
            plan(2, 6, prices(0, "1.6", 1)), (), 1,
            "NOT VERIFIED as written: the check fails complementary slackness and duality gap; "
            "within its rounding every condition holds, line by line",
        ),
        (
            plan("2/1", "6/1", prices("0/1", "5/3", "1/1")), ("--rounded",), 1,
            "NOT VERIFIED as written nor within its rounding: the check fails complementary "
            "slackness and duality gap",
        ),
        (
            plan("2/1", "6/1", prices("1/1", "1/2", "3/2")), ("--rounded",), 1,
            "NOT VERIFIED as written nor within its rounding: the check fails "
            "dual feasibility, complementary slackness and duality gap",
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
maximize, 3 constraints, 2 variables, 4 nonzero coefficients

condition                as written       within rounding  worst line        scaled      absolute  tolerance
primal feasibility       FAILED           FAILED           row plant2          0.45            10       1e-9
dual feasibility         no prices given  not judged       none        not computed  not computed       1e-9
stationarity             no prices given  not judged       none        not computed  not computed       1e-9
complementary slackness  no prices given  not judged       none        not computed  not computed       1e-9
duality gap              no prices given  not judged       none        not computed  not computed       1e-9

plan         1 column listed, 1 not (taken as 0); 1 name ignored that the model lacks: labour
rounding     at the coarsest values to within 0.05 (column windows); each line is judged by itself
objective    55; within the rounding from 54.75 to 55.25
optimum      36, solved and checked; the plan is 19 better (0.53 relative), which means nothing for \
a plan that is not feasible
dual values  none make a plan optimal that is not feasible; no plan within its rounding is optimal

violated lines, the worst first: 2 of 2
line        value   side  violation  allowed  within rounding
row plant2     22  <= 12         10   2.2e-8  no
row plant3     22  <= 18          4   2.2e-8  no

plan SHA-256    """  # noqa: E501
    )
    assert text.endswith(
        "reproduce  lpview check wyndor.csv --plan plan.csv --ignore-unknown\n"
        "A verified optimum is only as good as the model; local rules and licensed practice "
        "decide."
    )


def test_what_lines_leave_on_the_table(run):
    _, out, _ = run(plan(4, 3))
    assert (
        "what lines leave on the table by the prices of the optimum: 1 of 1, together 9\n"
        "line        price  distance to its side  price x distance\n"
        "row plant2    1.5                     6                 9\n"
    ) in out
    assert "optimum      36, solved and checked; the plan is 9 from it (0.25 relative)\n" in out
    assert (
        "dual values  none make this plan optimal (weak duality); "
        "no plan within its rounding is optimal\n"
    ) in out


def test_limits_are_reported_and_repeated(run):
    words = ("--limit", "plant?=7", "--limit", "plant3=6.5", "--rounded", "--complete", "--full")
    status, out, _ = run(plan(4, 6), *words)
    assert status == 0
    assert (
        "limits       3 rows with a limit of their own; the worst is row plant3, violated by 6 "
        "of 6.5 allowed\n"
    ) in out
    assert "primal feasibility       passed           passed           row plant3" in out
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
            "feasible as written; yet the model is infeasible: every row and bound holds at 1e-9 "
            "scaled or within its own limit",
            "none: the model is infeasible, certified; this plan contradicts that only within "
            "the violations that are allowed",
        ),
        (
            UNBOUNDED, (), 0,
            "feasible as written; but no plan is optimal: every row and bound holds at 1e-9 "
            "scaled",
            "none: the model is unbounded, certified; the objective improves without limit",
        ),
    ],
)  # fmt: skip
def test_models_without_an_optimum(run, model, words, status, verdict, optimum):
    found, out, _ = run(PLAN, *words, model=model)
    assert out.splitlines()[0] == f"wyndor.csv with plan.csv: {verdict}"
    assert found == status
    assert f"optimum    {optimum}\n" in out


def test_stopped_work_still_says_whether_the_plan_is_feasible(run):
    status, out, _ = run(PLAN, "--time-limit", "1e-9")
    assert out.splitlines()[0] == (
        "wyndor.csv with plan.csv: feasible as written; the optimum is not known: "
        "every row and bound holds at 1e-9 scaled"
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
    assert out.startswith("**wyndor.csv with plan.csv: feasible as written, 9 from the optimum")
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
    title = "violated lines, the worst first: 10 of 50" if value == "1" else "table by the prices "
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
        "columns_listed": 2, "columns_not_listed": 0, "unknown": [],
        "coarsest": {"column": "doors", "half_unit": 0.5},
        "objective_least": pytest.approx(25.25), "objective_greatest": pytest.approx(28.75),
        "violated": [],
        "limits": {"rows": 1, "worst": "plant3", "violation": 0, "limit": 1},
        "optimum": {
            "objective": 36, "distance": 9, "relative": 0.25,
            "dual_values": "no dual values make it optimal", "possible_within_rounding": False,
            "left_on_the_table": [{"row": "plant2", "price": 1.5, "distance": 6, "product": 9}],
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
    assert "violated by 6 hours of 2 hours allowed" in out
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
        "wyndor.csv with plan.csv: feasible as written; the optimum is not known: "
        "every row and bound holds at 1e-9 scaled"
    )
    assert "state the row or its variables in other units" in out
