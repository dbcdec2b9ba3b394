"""Mutations: without a new last line all are refused; with one, only proofs are accepted.

Models are drawn together with a proof: plans, prices and rays first, then ends and costs that
make them one. What a mutated certificate proves is judged in fractions by `judge`, which shares
nothing with the kernel.
"""

from __future__ import annotations

import hashlib
from dataclasses import replace
from fractions import Fraction
from math import isinf, lcm

import numpy as np
import pytest
from hypothesis import assume, event, given
from hypothesis import strategies as st
from scipy.sparse import csr_array

from lpview.blocks.writer import write_blocks
from lpview.decimals import exact_value
from lpview.model import LinearProgram, Sense, frozen_odd
from lpview.proof import kernel
from lpview.proof.results import ExactVector, ProvedInfeasible, ProvedOptimal, ProvedUnbounded
from tests.proof.test_certificate import (
    TEXTBOOK,
    certified,
    column_sums,
    cost_of,
    judge,
    line_values,
    proved,
    reading,
    signed,
    stated,
)
from tests.reading import INF, Model
from tests.strategies import names

FRACTIONS = st.sampled_from(
    [Fraction(text) for text in ("0", "0", "1", "-1", "2", "-3", "1/3", "-7/2", "0.1", "22/7")]
)
ROOM = st.sampled_from([Fraction(text) for text in ("0", "1", "5/3", "0.25")])


@st.composite
def skeletons(draw):
    """A model without costs and ends: names, coefficients, sense."""
    m, n = draw(st.integers(1, 3)), draw(st.integers(1, 3))
    rows, columns = draw(names(m, True, "r")), draw(names(n, True, "x"))
    model = Model(sense=draw(st.sampled_from(["minimize", "maximize"])), offset=draw(FRACTIONS))
    model.costs = dict.fromkeys(columns, Fraction(0))
    model.rows = {row: {column: draw(FRACTIONS) for column in columns} for row in rows}
    return model


def vector(draw, table):
    return {name: draw(FRACTIONS) for name in table}


def ends_around(draw, value, lower=False, upper=False, far=()):
    """Ends that hold a value: at it where asked for, infinite where it moves far."""
    low = value if lower else draw(st.sampled_from([-INF, value - draw(ROOM)]))
    high = value if upper else draw(st.sampled_from([INF, value + draw(ROOM)]))
    return -INF if "lower" in far else low, INF if "upper" in far else high


@st.composite
def optima(draw):
    """A model, and a plan and prices that prove each other."""
    model = draw(skeletons())
    x, y = vector(draw, model.costs), vector(draw, model.rows)
    z = vector(draw, model.costs)
    sums = column_sums(model, y)
    model.costs = {column: z[column] + sums[column] for column in model.costs}
    values, sign = line_values(model, x), 1 if model.sense == "minimize" else -1
    for kind, prices, ends in (("row", y, model.sides), ("column", z, model.bounds)):
        for name, price in prices.items():
            at = {"lower": price * sign > 0, "upper": price * sign < 0}
            ends[name] = ends_around(draw, values[kind, name], **at)
    objective = cost_of(model, x) + model.offset
    parts = {"x": over_one(x.values()), "y": over_one(y.values())}
    return model, proved(ProvedOptimal, objective=objective, **parts)


@st.composite
def contradictions(draw):
    """A model and multipliers that show that it has no plan."""
    model = draw(skeletons())
    y = vector(draw, model.rows)
    assume(any(y.values()))
    model.costs = vector(draw, model.costs)
    reach = Fraction(0)
    for column, total in column_sums(model, y).items():
        bound = draw(FRACTIONS)
        at = {"upper": total > 0, "lower": total < 0}
        model.bounds[column] = ends_around(draw, bound, **at)
        reach += total * bound
    contradiction = 1 + draw(ROOM)
    side = vector(draw, model.rows)
    last = next(row for row in y if y[row])
    side[last] = (reach + contradiction) / y[last]
    side[last] -= sum(y[row] * side[row] for row in y if row != last) / y[last]
    for row, factor in y.items():
        at = {"lower": factor > 0, "upper": factor < 0}
        model.sides[row] = ends_around(draw, side[row], **at)
    parts = {"y": over_one(y.values()), "contradiction": contradiction}
    return model, proved(ProvedInfeasible, **parts)


@st.composite
def unbounded(draw):
    """A model, a plan and a ray."""
    model = draw(skeletons())
    x, ray = vector(draw, model.costs), vector(draw, model.costs)
    assume(any(ray.values()))
    costs = vector(draw, model.costs)
    sign = 1 if model.sense == "minimize" else -1
    rate = sum(costs[name] * ray[name] for name in ray)
    if rate * sign >= 0:
        costs = {name: -sign * step for name, step in ray.items()}
    model.costs = costs
    values, speeds = line_values(model, x), line_values(model, ray)
    for (kind, name), value in values.items():
        speed = speeds[kind, name]
        far = ("upper",) if speed > 0 else ("lower",) if speed < 0 else ()
        ends = model.sides if kind == "row" else model.bounds
        ends[name] = ends_around(draw, value, far=far)
    parts = {"x": over_one(x.values()), "ray": over_one(ray.values())}
    return model, proved(ProvedUnbounded, rate=cost_of(model, ray), **parts)


PROVED = st.one_of(optima(), contradictions(), unbounded())


def over_one(values):
    values = list(values)
    common = lcm(*(value.denominator for value in values))
    return ExactVector(tuple(int(value * common) for value in values), common)


def program(model: Model) -> LinearProgram:
    """The model as the package holds it, every number exactly."""
    columns, rows = list(model.costs), list(model.rows)
    terms = [model.rows[row][column] for row in rows for column in columns]
    exact = {
        "c": [model.costs[column] for column in columns],
        "row_lower": [model.sides[row][0] for row in rows],
        "row_upper": [model.sides[row][1] for row in rows],
        "lower": [model.bounds[column][0] for column in columns],
        "upper": [model.bounds[column][1] for column in columns],
        "A": [a for a in terms if a],
        "offset": [model.offset],
    }
    matrix = np.array([float(a) for a in terms]).reshape(len(rows), len(columns))
    arrays = {part: np.array([float(v) for v in values]) for part, values in exact.items()}
    offset, _ = float(arrays.pop("offset")[0]), arrays.pop("A")
    odd = {
        part: {k: v for k, v in enumerate(values) if not isinf(v) and is_odd(v)}
        for part, values in exact.items()
    }
    return LinearProgram(
        name="drawn",
        sense=Sense(model.sense),
        columns=tuple(columns),
        rows=tuple(rows),
        A=csr_array(matrix),
        offset=offset,
        odd=frozen_odd(odd),
        **arrays,
    )


def is_odd(value: Fraction) -> bool:
    return exact_value(float(value)) != value


def accepted(blocks: bytes, text: bytes) -> bool:
    """Whether the kernel accepts; anything but a refusal in words is an error."""
    try:
        assert kernel.verify(blocks, text)
    except ValueError as refused:
        assert type(refused) in (ValueError, UnicodeDecodeError)
        assert str(refused)
        return False
    return True


@given(PROVED)
def test_drawn_proofs_are_accepted(drawn) -> None:
    model, proof = drawn
    blocks, text = certified(program(model), proof)
    assert judge(model, text.decode())
    assert accepted(blocks, text)
    event(stated(text.decode())[0])


@st.composite
def spoilt(draw, data: bytes) -> bytes:
    """Accidents: bytes changed, lost or added, lines lost, doubled or exchanged, an end lost."""
    place = draw(st.integers(0, len(data) - 1))
    lines = data.split(b"\n")
    i, j = draw(st.integers(0, len(lines) - 1)), draw(st.integers(0, len(lines) - 1))
    byte = bytes([draw(st.one_of(st.sampled_from(b'0123456789-,"\n\r /e'), st.integers(0, 255)))])
    exchanged = [*lines]
    exchanged[i], exchanged[j] = lines[j], lines[i]
    flipped = bytes([data[place] ^ (1 << draw(st.integers(0, 7)))])
    return draw(
        st.sampled_from(
            [
                data[:place] + byte + data[place + 1 :],
                data[:place] + flipped + data[place + 1 :],
                data[:place] + byte + data[place:],
                data[:place] + data[place + 1 :],
                data[:place],
                data + data[place:],
                b"\n".join([*lines[:i], *lines[i + 1 :]]),
                b"\n".join([*lines[:i], lines[i], *lines[i:]]),
                b"\n".join(exchanged),
            ]
        )
    )


@given(st.data(), PROVED)
def test_every_accident_is_refused(data, drawn) -> None:
    model, proof = drawn
    blocks, text = certified(program(model), proof)
    wrong = data.draw(spoilt(text))
    assert wrong == text or not accepted(blocks, wrong)


@pytest.mark.parametrize(("lp", "proof"), TEXTBOOK[::6])
def test_every_single_byte_counts(lp: LinearProgram, proof) -> None:
    blocks, text = certified(lp, proof)
    for place in range(len(text)):
        for bit in (1, 2, 16, 128):
            wrong = bytearray(text)
            wrong[place] ^= bit
            assert not accepted(blocks, bytes(wrong))
        assert not accepted(blocks, text[:place] + text[place + 1 :])


@given(st.data(), PROVED)
def test_an_accident_with_a_new_last_line_is_accepted_only_as_a_proof(data, drawn) -> None:
    model, proof = drawn
    blocks, text = certified(program(model), proof)
    wrong = data.draw(spoilt(text)).decode("utf-8", "replace")
    wrong = signed(wrong)
    if accepted(blocks, wrong.encode()):
        assert judge(model, wrong)
        event("still a proof" if wrong.encode() != text else "no change")
    else:
        event("refused")


def rewritten(draw, text: str) -> str:
    """A certificate in its proper form that states something else."""
    lines = text.rstrip("\n").split("\n")
    entries = [k for k, line in enumerate(lines[:-1]) if is_entry(lines, k)]
    numbers = [*entries, *(k for k, line in enumerate(lines) if line.startswith("denominator"))]
    change = draw(
        st.sampled_from(["number", "number", "claim", "drop", "exchange", "scale", "turn"])
    )
    if change == "claim" or not entries:
        value = Fraction(lines[2].rpartition(",")[2]) + draw(FRACTIONS)
        lines[2] = f"{lines[2].rpartition(',')[0]},{value}"
    elif change == "number":
        k = draw(st.sampled_from(numbers))
        step = draw(st.sampled_from([-7, -2, -1, 1, 2, 10]))
        value = int(lines[k].rpartition(",")[2]) + step
        positive = lines[k].startswith("denominator")
        assume(value > 0 or (value and not positive))
        lines[k] = f"{lines[k].rpartition(',')[0]},{value}"
    elif change == "drop":
        del lines[draw(st.sampled_from(entries))]
    elif change == "exchange":
        i, j = draw(st.sampled_from(entries)), draw(st.sampled_from(entries))
        first, second = (lines[k].rpartition(",") for k in (i, j))
        lines[i], lines[j] = f"{first[0]},{second[2]}", f"{second[0]},{first[2]}"
    else:
        factor = draw(st.sampled_from([2, 3])) if change == "scale" else -1
        for k in entries:
            name, _, number = lines[k].rpartition(",")
            lines[k] = f"{name},{int(number) * factor}"
        value = Fraction(lines[2].rpartition(",")[2]) * factor
        if draw(st.booleans()):
            lines[2] = f"{lines[2].rpartition(',')[0]},{value}"
    return signed("\n".join([*lines, ""]))


def is_entry(lines: list[str], place: int) -> bool:
    """Whether a line stands in a table, below the two lines that begin one."""
    start = place
    while lines[start] and lines[start - 1]:
        start -= 1
    return lines[start].startswith("denominator of ") and start + 1 < place


@given(st.data(), PROVED)
def test_another_statement_is_accepted_exactly_where_it_is_a_proof(data, drawn) -> None:
    model, proof = drawn
    blocks, text = certified(program(model), proof)
    other = rewritten(data.draw, text.decode())
    good = judge(model, other)
    assert accepted(blocks, other.encode()) is good
    event("no change" if other.encode() == text else "still a proof" if good else "refused")


@given(st.data(), PROVED)
def test_another_kind_of_proof_is_refused(data, drawn) -> None:
    """The claim of one kind above the tables of another."""
    model, proof = drawn
    blocks, text = certified(program(model), proof)
    own = stated(text.decode())[0]
    for claim in ("optimal objective", "contradiction", "unbounded at rate"):
        other = signed(text.decode().replace(f"\n{own},", f"\n{claim},", 1))
        assert accepted(blocks, other.encode()) is (claim == own)


def other_models(draw, model: Model) -> Model:
    """The model with one number or its sense changed."""
    step = draw(FRACTIONS.filter(bool))
    part = draw(st.sampled_from(["sense", "offset", "costs", "rows", "sides", "bounds"]))
    table = getattr(model, part)
    if part == "sense":
        return replace(model, sense="maximize" if table == "minimize" else "minimize")
    if part == "offset":
        return replace(model, offset=table + step)
    name = draw(st.sampled_from(list(table)))
    if part == "costs":
        return replace(model, costs={**table, name: table[name] + step})
    if part == "rows":
        column = draw(st.sampled_from(list(model.costs)))
        changed = {**table[name], column: table[name][column] + step}
        return replace(model, rows={**table, name: changed})
    low, high = table[name]
    ends = draw(st.sampled_from([(low + step, high), (low, high + step), (-INF, high), (low, INF)]))
    assume(ends[0] <= ends[1])
    return replace(model, **{part: {**table, name: ends}})


@given(st.data(), PROVED)
def test_another_model_is_refused_and_judged_when_it_is_named(data, drawn) -> None:
    model, proof = drawn
    blocks, text = certified(program(model), proof)
    other = other_models(data.draw, model)
    changed = write_blocks(program(other)).encode()
    assert accepted(changed, text) is (changed == blocks)
    _, renamed = certified(program(other), proof)
    good = judge(other, renamed.decode())
    assert accepted(changed, renamed) is good
    event("no change" if changed == blocks else "still a proof" if good else "refused")


PLAIN = [case.values for case in TEXTBOOK]


@given(data=st.data(), which=st.sampled_from(range(len(PLAIN))))
def test_spoilt_blocks_are_accepted_only_as_the_model_that_others_read(
    data, which: int, tmp_path_factory
) -> None:
    """Certificate and last line are about the spoilt blocks; the reader shares nothing."""
    lp, proof = PLAIN[which]
    blocks, text = certified(lp, proof)
    wrong = data.draw(spoilt(blocks))
    lines = text.decode().split("\n")
    lines[1] = f"model SHA-256,{hashlib.sha256(wrong).hexdigest()}"
    named = signed("\n".join(lines))
    if accepted(wrong, named.encode()):
        assert judge(reading(wrong, tmp_path_factory.getbasetemp()), named)
        event("still a proof" if wrong != blocks else "no change")
    else:
        event("refused")


@pytest.mark.parametrize(("lp", "proof"), TEXTBOOK[::2])
def test_every_entry_of_the_textbook_proofs_counts(lp: LinearProgram, proof, tmp_path) -> None:
    blocks, text = certified(lp, proof)
    model = reading(blocks, tmp_path)
    lines = text.decode().rstrip("\n").split("\n")
    for k in [k for k in range(len(lines) - 1) if is_entry(lines, k)]:
        name, _, number = lines[k].rpartition(",")
        for changed in ([], *([f"{name},{int(number) + s}"] for s in (-1, 1) if int(number) + s)):
            other = signed("\n".join([*lines[:k], *changed, *lines[k + 1 :], ""]))
            assert accepted(blocks, other.encode()) is judge(model, other)
