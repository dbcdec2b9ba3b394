"""Labels and units on reports: beside names and numbers, and warnings on every one of them."""

from __future__ import annotations

import json as reader
import re
from dataclasses import replace

import numpy as np
import pytest

from lpview.answer import Answer
from lpview.examination import check_answer
from lpview.families import Kind, families, summarize
from lpview.labels import NO_LABELS, Label
from lpview.ledger import ledger
from lpview.outcomes import NotEstablished, Stopped
from lpview.priced import price_everything
from lpview.prices import Move, NoPrices, Then, move_together
from lpview.prices.digits import digits
from lpview.prices.interior import find_interior
from lpview.prices.redundant import redundant_sides
from lpview.reading import InPlace, Scope
from lpview.report import json, markdown, text
from lpview.report.check import report
from lpview.report.curve import curve_report
from lpview.report.curve_data import as_json
from lpview.report.digits import digits_blocks
from lpview.report.families import families_report
from lpview.report.interior import interior_blocks
from lpview.report.ledger import heading, ledger_report
from lpview.report.ledger_words import meaning
from lpview.report.plans import end_sentence, plans_report
from lpview.report.price_words import price_sentences
from lpview.report.prices import check_facts, lines_report, no_prices_report, prices_report
from lpview.report.redundant import redundant_blocks
from lpview.report.summary import summary_report
from lpview.report.together import together_report
from lpview.report.units import Units, amount
from lpview.report.worth import step_sentence
from lpview.solver import solve, warm_model
from lpview.turned import turn
from tests.check.helpers import examined, line_of
from tests.curve.helpers import curve_of, number_of
from tests.dual.models import INF, model
from tests.labels.models import (
    MIXTURE,
    glasshouse,
    labelled,
    labelled_glasshouse,
    labelled_mixture,
    mixture,
    nothing_between,
    prices_of,
)


def shown(*blocks):
    return text.render(blocks)


def narrow(said):
    """A text with single blanks: which cells there are, whatever their widths."""
    return re.sub(" +", " ", said)


def everything(found):
    return price_everything(found, prices_of(found), nothing_between)


def ask(lp, settings):
    return solve(lp, settings)


# The check -------------------------------------------------------------------


def test_the_check_has_labels_and_units_beside_names():
    lines = text.render(report(labelled_glasshouse())).splitlines()
    at = next(k for k, line in enumerate(lines) if line.startswith("zero-slack rows"))
    assert lines[at : at + 5] == [
        "zero-slack rows by |dual value times right-hand side|: 3 of 3; prices in EUR per unit of "
        "the line",
        "row    label         unit  row value  slack  dual value  |price x side|",
        "bench  bench space   m2          100      0     3.33333         333.333",
        "hours  packing hall  h           110      0     1.33333         146.667",
        "water                hl           70      0           0               0",
    ]
    said = "\n".join(lines)
    assert "objective              primal 480 EUR, dual 480 EUR, gap " in said
    assert f"labels SHA-256  {'0a' * 32}\n" in said
    assert "\n".join(line for line in lines if "  label" in line).count("label") == 1


def test_the_table_of_conditions_keeps_to_names():
    found = labelled_glasshouse()
    wrong = check_answer(found.head, replace(found.answer, x=np.array([31.0, 40.0, 0.0])))
    lines = text.render(report(wrong)).splitlines()
    heads = next(line for line in lines if line.startswith("condition"))
    worst = next(line for line in lines if line.startswith("primal feasibility"))
    assert heads.split()[:6] == ["condition", "verdict", "worst", "line", "scaled", "absolute"]
    assert narrow(worst) == "primal feasibility FAILED row bench 0.02 2 0.02 1e-9"


def test_the_plan_at_the_printed_digits_is_violated_in_its_own_unit():
    # 1/3 of a crate rounds to 0.333333, which takes 1e-6 off a row of 3 crates that needs 1.
    lp = model("minimize", {"x": 1}, {"r": (1, {"x": 3}, INF)}, {})
    found = labelled(examined(lp), {"r": Label("", "kg")})
    assert "row r is violated by 1e-6 kg (scaled 1e-6)" in text.render(report(found))


def test_without_labels_nothing_is_added():
    found = labelled_glasshouse()
    bare = replace(found, head=replace(found.head, labels=NO_LABELS))
    said = text.render(report(bare))
    assert "label" not in said and "unit" not in said and "EUR" not in said
    assert said == text.render(report(examined(glasshouse())))


@pytest.mark.parametrize(
    ("known", "objective", "price"),
    [("kWh", "EUR", "EUR per kWh"), ("", "EUR", "EUR per unit"), ("kWh", "", ""), ("", "", "")],
)
def test_a_price_has_a_unit_where_that_of_the_objective_is_known(known, objective, price):
    units = Units(known, objective)
    assert units.price == price
    assert amount(2, units.price) == f"2 {price}".strip()
    assert amount(INF, "kWh") == "inf"
    assert units.many("1") == f"1 {known or 'unit'}" and units.many("3") == f"3 {known or 'units'}"


# Ledgers and sentences -------------------------------------------------------


def test_a_rows_ledger():
    # Whole numbers in the plan, so that no rounding is left in the slack.
    found = labelled_mixture()
    x = found.answer.x.round()
    found = check_answer(found.head, replace(found.answer, x=x))
    said = text.render(ledger_report(found, [0]))
    assert said.split("\n\n")[1:] == [
        "row energy (metabolizable energy) >= 850 MJ: 3 terms\n"
        "column  label        coefficient  value  coefficient x value\n"
        "hay                            8     80                  640\n"
        "oats    rolled oats           11     10                  110\n"
        "beans                         10     10                  100",
        "row value               850 MJ\n"
        "slack                   0 MJ\n"
        "dual value              0.15 EUR per MJ\n"
        "slack times dual value  0 EUR\n"
        "flags                   zero slack",
        "It holds the plan back. One MJ less on its lower side improves the objective by at most "
        "0.15 EUR; one MJ more worsens it by at least 0.15 EUR, or leaves no plan.\n"
        "For small steps both are exact: no line is degenerate, so this price is the only one.\n"
        "reproduce  lpview check model.csv --row energy\n"
        "A verified optimum is only as good as the model; local rules and licensed practice "
        "decide.\n",
    ]


def test_a_columns_ledger():
    said = text.render(ledger_report(labelled_mixture(), [3])).split("\n\n")
    assert said[1] == (
        "column oats (rolled oats) 0 to 10 kg, cost 0.35 EUR per kg less: 2 terms\n"
        "row     label                 coefficient  dual value  coefficient x dual value\n"
        "energy  metabolizable energy           11        0.15                      1.65\n"
        "weight                                  1          -1                        -1"
    )
    assert said[2].splitlines()[:3] == [
        "reduced cost                   -0.3 EUR per kg",
        "value                          10 kg",
        "distance to its nearest bound  0 kg",
    ]
    assert said[3].startswith(
        "It is in the plan at its upper bound, 10 kg: its cost 0.35 EUR per kg less what it uses "
        "at the dual values, 0.65 EUR per kg, is -0.3 EUR per kg. One kg more on that upper bound "
        "improves the objective by at most 0.3 EUR; one kg less worsens it by at least 0.3 EUR, "
        "or leaves no plan."
    )


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("mint", "Each unit of it that is forced in worsens the objective by at least 2.66667 EUR"),
        ("chard", "It is in the plan at 40 crate, where no bound holds it: its cost 6 EUR per "),
    ],
)
def test_columns_of_the_glasshouse(name, words):
    found = labelled_glasshouse()
    assert words in " ".join(meaning(found, ledger(found, line_of(found.head.model, name))))


def test_what_is_to_spare_is_counted_in_units():
    lp = model("maximize", {"x": 1}, {"r": (-INF, {"x": 1}, 5), "s": (-INF, {"x": 1}, 8)}, {})
    found = labelled(examined(lp), {"s": Label("", "kWh")})
    assert meaning(found, ledger(found, 1)) == ("It does not hold the plan back: 3 kWh to spare.",)
    assert heading(ledger(found, 1), found.head) == "row s <= 8 kWh"


def test_sentences_on_prices():
    found = labelled_glasshouse()
    known = prices_of(found)
    assert price_sentences(found, 0, known.line(0))[:2] == (
        "Its dual value is any number from 2 to 3.33333 EUR per m2; the answer shown has "
        f"{amount(found.measurement.rows.price[0], '')}.",
        "Each m2 more on its upper side improves the objective by 2 EUR, for 40 m2, then the rate "
        "changes; each m2 less worsens the objective by 3.33333 EUR, for 45 m2, then the rate "
        "changes.",
    )
    # From the head of models/spring.csv; the ranges of costs were solved again.
    chard = price_sentences(found, 4, known.line(4))
    assert chard[0] == "Its reduced cost 0 EUR per crate is the only one."
    assert "Each EUR per crate more on its cost improves the objective by 40 EUR, for " in chard[2]
    assert chard[-1] == "It is 40 crate in every optimal plan."


# What one unit is worth ------------------------------------------------------


@pytest.mark.parametrize(
    ("sense", "name", "sentence"),
    [
        ("maximize", "bench", "One m2 more earns 2 EUR; one m2 less costs 3.33333 EUR."),
        ("minimize", "bench", "One m2 more saves 2 EUR; one m2 less costs 3.33333 EUR."),
        ("maximize", "hours", "One h more changes nothing; one h less costs 1.33333 EUR."),
        ("maximize", "water", "One hl more changes nothing; one hl less costs 4 EUR."),
        ("maximize", "cucumber", ""),
    ],
)
def test_the_last_sentence_of_the_screen_goes_by_the_rates_up_and_down(sense, name, sentence):
    found = labelled_glasshouse(sense)
    line = line_of(found.head.model, name)
    assert step_sentence(found, line, prices_of(found).line(line)) == sentence


@pytest.mark.parametrize(
    ("name", "sentence"),
    [
        ("energy", "One MJ more required costs 0.15 EUR; one MJ less saves 0.15 EUR."),
        ("weight", "One kg more required saves 1 EUR; one kg less costs 1 EUR."),
        ("oats", "One kg more on its upper bound saves 0.3 EUR; one kg less costs 0.3 EUR."),
        ("salt", "One g more on its fixed value costs 0.01 EUR; one g less saves 0.01 EUR."),
        ("hay", ""),
    ],
)
def test_the_last_sentence_for_each_kind_of_limit(name, sentence):
    found = labelled_mixture()
    line = line_of(found.head.model, name)
    assert step_sentence(found, line, prices_of(found).line(line)) == sentence


def test_the_last_sentence_where_less_than_a_unit_holds_and_where_no_plan_is_left():
    found = labelled_mixture()
    prices = prices_of(found).line(0)
    short = replace(prices.lower.up, distance=0.25)
    none = Move(INF, 0.0, Then.INFEASIBLE)
    lost = Move(0.15, 0.0, Then.NOT_FOUND)
    for up, down, sentence in (
        (
            short,
            prices.lower.down,
            "Each MJ more required costs 0.15 EUR, for up to 0.25 MJ more, ",
        ),
        (none, prices.lower.down, "Any more required leaves no plan; one MJ less saves 0.15 EUR."),
        (
            lost,
            prices.lower.down,
            "Each MJ more required costs 0.15 EUR, but how far that holds was not found out; one ",
        ),
    ):
        moved = replace(prices, lower=replace(prices.lower, up=up, down=down))
        assert step_sentence(found, 0, moved).startswith(sentence)


def test_no_last_sentence_without_the_unit_of_the_objective():
    found = labelled(examined(mixture()), MIXTURE, Label())
    assert step_sentence(found, 0, prices_of(found).line(0)) == ""


# Reports on prices and plans -------------------------------------------------


def test_tables_of_prices():
    priced = everything(labelled_glasshouse())
    said = text.render(prices_report(priced)).split("\n\n")[1]
    lines = said.splitlines()
    assert lines[0].endswith(": 3 of 3; prices in EUR per unit of the line")
    assert lines[1].split()[:5] == ["row", "label", "unit", "dual", "value"]
    assert "bench  bench space   m2" in said and "packing hall  h " in said
    facts = dict(check_facts(priced))
    assert "row bench up 2 and down 3.33333 EUR per m2" in facts["widest prices"]
    assert "row bench (bench space) <= 100 m2\n" in text.render(lines_report(priced, [0]))


def test_plans():
    lp = model("maximize", {"x": 1, "y": 1}, {"r": (-INF, {"x": 1, "y": 1}, 5)}, {})
    found = labelled(examined(lp), {"x": Label("first", "t"), "y": Label("", "t")})
    known = prices_of(found)
    intervals = {1: known.value_interval(1), 2: known.value_interval(2)}
    said = text.render(plans_report(found, known.partition, intervals, None))
    assert "column  label  unit  value in the answer  least  greatest\n" in said
    assert "x       first  t " in said
    assert end_sentence(found, 1, True, 5.0, False).endswith("of all optimal plans here: 5 t")


def test_rows_moved_together():
    found = labelled_glasshouse()
    moves = [(0, 1.0), (2, -1.0)]
    said = text.render(together_report(found, move_together(prices_of(found), moves)))
    assert "each unit of t worsens the objective by 2 EUR, for t up to " in said
    assert (
        "row    label        unit  amount  moved       change for each unit of t, alone in EUR\n"
        in said
    )


def test_other_reports_on_a_model():
    found = labelled_mixture()
    assert "hay kg " in narrow(shown(*interior_blocks(found, find_interior(found, ask))))
    rows = redundant_sides(found, warm_model, nothing_between)
    assert shown(*redundant_blocks(found, rows))
    full = shown(*digits_blocks(found, digits(found), True))
    assert "oats    rolled oats " in full and "energy  metabolizable energy " in full


def test_redundant_rows_have_labels():
    lp = model("maximize", {"x": 1}, {"r": (-INF, {"x": 1}, 5), "s": (-INF, {"x": 1}, 8)}, {})
    found = labelled(examined(lp), {"s": Label("spare room", "m2")})
    said = shown(*redundant_blocks(found, redundant_sides(found, warm_model, nothing_between)))
    assert "row  label       unit  relation  side  nearest row value  distance\n" in said
    assert "s    spare room  m2    <=           8                  5         3" in said


def test_a_value_curve_as_it_stands():
    found = labelled_glasshouse()
    for moving, words in (
        (number_of(found, row="bench"), "100 m2, optimal objective 480 EUR"),
        (number_of(found, cost="chard"), "6 EUR per crate, optimal objective 480 EUR"),
    ):
        said = text.render(curve_report(found, curve_of(found, moving), False, True))
        assert f"as it stands  {words}\n" in said


def test_certificates_have_labels_and_units():
    lp = model(
        "minimize",
        {"x": 1},
        {"heat": (5, {"x": 1}, INF), "bench": (-INF, {"x": 1}, 3)},
        {},
    )
    found = labelled(examined(lp), {"heat": Label("heating", "kWh"), "bench": Label("", "m2")})
    said = text.render(report(found))
    cells = narrow(said)
    assert "\nline label multiplier limit kind\nrow heat heating 1 >= 5 kWh side\n" in cells
    assert "\nrow bench -1 <= 3 m2 side\n" in cells
    free = model("maximize", {"x": 1}, {"r": (0, {"x": 1}, INF)}, {})
    gone = labelled(examined(free), {"x": Label("power sold", "kWh")})
    said = text.render(report(gone))
    assert "each step along the ray changes the objective by 1 EUR and" in said
    assert "x       power sold  kWh " in said


# Warnings --------------------------------------------------------------------

RELAXED = Scope(InPlace.RELAXED, 2)
SCOPE = "linear relaxation: 2 integer columns taken as continuous"
NOTED = {"scope": RELAXED, "remarks": ("costs, negated", "row \x1b[31mbench"), "empty_costs": 2}
WARNING = "noticed while reading: 2 empty costs read as 0; costs, negated; row \\x1b[31mbench"


def reports_of_an_answer():
    found = labelled_glasshouse(**NOTED)
    priced = everything(found)
    known = prices_of(found)
    return {
        "check": report(found),
        "families": families_report(found),
        "ledger": ledger_report(found, [0]),
        "prices": prices_report(priced),
        "prices of a line": lines_report(priced, [0]),
        "no prices": no_prices_report(found, NoPrices("there is no basis")),
        "plans": plans_report(found, known.partition, {}, None),
        "together": together_report(found, move_together(known, [(0, 1.0)])),
        "curve": curve_report(found, curve_of(found, number_of(found, row="bench")), False, True),
        "summary": summary_report(found, priced),
    }


def reports_without_an_answer():
    head = labelled_glasshouse(**NOTED).head
    infeasible = model("minimize", {"x": 1}, {"r": (5, {"x": 1}, 6), "s": (7, {"x": 1}, 8)}, {})
    unbounded = model("maximize", {"x": 1}, {"r": (0, {"x": 1}, INF)}, {})
    outcomes = {
        "infeasible": labelled(examined(infeasible), {}, **NOTED),
        "unbounded": labelled(examined(unbounded), {}, **NOTED),
        "not established": NotEstablished(head, "it was lost."),
        "stopped": Stopped(head),
    }
    made = {name: report(found) for name, found in outcomes.items()}
    return made | {f"summary, {name}": summary_report(one) for name, one in outcomes.items()}


DOCUMENTS = reports_of_an_answer() | reports_without_an_answer()


@pytest.mark.parametrize("name", DOCUMENTS)
def test_scope_and_warnings_stand_on_every_report(name):
    said = text.render(DOCUMENTS[name])
    assert said.startswith(f"model.csv ({SCOPE}): ")
    on_the_page = "Noticed while reading: costs, negated; row \\x1b[31mbench.\n"
    assert on_the_page in said if name.startswith("summary") else WARNING in said
    assert "\x1b" not in said and "\x1b" not in markdown.render(DOCUMENTS[name])


def test_a_model_read_without_remarks_has_no_warning():
    assert "noticed" not in text.render(report(labelled_glasshouse()))


# JSON ------------------------------------------------------------------------


def test_json_has_notes_and_labels_where_there_are_any():
    found = labelled_glasshouse(scope=RELAXED, remarks=("costs, negated",))
    said = reader.loads(json.render(found))
    assert said["model"]["scope"] == SCOPE and said["model"]["labels_sha256"] == "0a" * 32
    assert said["noticed"]["remarks"] == ["costs, negated"]
    assert said["objective"]["unit"] == "EUR" and "label" not in said["objective"]
    bench, hours, water = said["constraints"]
    assert (bench["label"], bench["unit"], bench["group"]) == ("bench space", "m2", "place")
    assert hours["unit"] == "h" and "group" not in hours
    assert "label" not in water and water["unit"] == "hl"
    assert "unit" not in said["variables"][2]
    curve = reader.loads(as_json(found, None))
    assert curve["model"]["scope"] == SCOPE and curve["noticed"]["remarks"] == ["costs, negated"]


def test_json_of_a_model_without_them_is_as_it_was():
    said = reader.loads(json.render(examined(glasshouse())))
    assert "scope" not in said["model"] and "labels_sha256" not in said["model"]
    assert "remarks" not in said["noticed"]
    assert not any("unit" in line for line in [*said["constraints"], said["objective"]])
    assert "noticed" not in reader.loads(as_json(examined(glasshouse()), None))


# Families --------------------------------------------------------------------


def test_groups_are_families_and_the_others_go_by_their_names():
    names = ("heat 1", "bench", "flow[a]", "flow[b]", "heat 2", "water")
    made = families(names, {1: "heat", 3: "roads", 5: "flow[b]"})
    members = {label: made.members(k).tolist() for k, label in enumerate(made.labels)}
    assert members == {"heat": [0, 1, 4], "flow": [2], "roads": [3], "flow[b]": [5]}
    assert made.labels == ("heat", "flow", "roads", "flow[b]")


def test_no_groups_are_the_families_of_the_names():
    names = ("heat_1", "heat 2", "-1", "[x", "7")
    assert families(names).labels == families(names, {}).labels == ("heat", "-", "[", "0-9")


def test_families_of_an_answer_go_by_groups():
    found = labelled_glasshouse()
    made = summarize(found, Kind.ROW)
    assert made.families.labels == ("place", "hours")
    assert made.count.tolist() == [2, 1]
    assert "\nplace 2 2 " in narrow(text.render(families_report(found)))
    assert summarize(found, Kind.COLUMN).families.labels == ("cucumber", "chard", "mint")


# The dual --------------------------------------------------------------------


def test_turned_lines_keep_their_labels_and_no_units():
    found = labelled_mixture()
    dual = turn(found)
    lp, labels = dual.found.head.model, dual.found.head.labels
    for line, own in enumerate(dual.to_primal.tolist()):
        there = labels.row(line) if line < lp.m else labels.column(line - lp.m)
        head = found.head
        m = head.model.m
        here = head.labels.row(own) if own < m else head.labels.column(own - m)
        assert there == Label(here.label)
    assert {label.label for label in labels.rows.values()} == {"rolled oats"}
    assert {label.label for label in labels.columns.values()} == {
        "metabolizable energy",
        "rolled oats",  # the bounds of oats are columns of the dual too
    }
    assert labels.objective == Label() and labels.sha256 == ""


def test_a_model_without_labels_turns_without_them():
    assert turn(examined(mixture())).found.head.labels is NO_LABELS


def test_an_answer_with_other_prices_keeps_its_labels():
    found = labelled_glasshouse()
    lp, y = found.head.model, np.array([2.0, 0.0, 4.0])
    again = check_answer(found.head, Answer(found.answer.x, y, lp.c - lp.A.T @ y, None))
    assert again.passed and "bench  bench space " in text.render(report(again))
