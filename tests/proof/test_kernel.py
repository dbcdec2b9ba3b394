"""The kernel by itself: its size, what it stands on, and files that it has to refuse."""

from __future__ import annotations

import ast
import hashlib
import subprocess
import sys
import time
from dataclasses import replace
from fractions import Fraction
from math import lcm
from pathlib import Path

import numpy as np
import pytest

from lpview.blocks import read_model, read_model_bytes
from lpview.proof import kernel
from lpview.proof.results import ExactVector, ProvedInfeasible, ProvedOptimal, ProvedUnbounded
from tests.dual.models import INF, model
from tests.proof.test_certificate import CASES, FOLDER, certified, proofs_of, proved, signed

SOURCE = Path(kernel.__file__)


def case(name):
    """Canonical blocks and certificate of one textbook case, as text."""
    (found,) = [found for found in CASES if found["id"] == name]
    lp = read_model(FOLDER / found["file"]).model
    blocks, text = certified(lp, proofs_of(found, lp)[0])
    return blocks.decode(), text.decode()


def refusal(blocks, text):
    with pytest.raises(ValueError) as refused:
        kernel.verify(blocks.encode(), text.encode())
    assert type(refused.value) is ValueError
    return str(refused.value)


def about(blocks, text):
    """The certificate about other blocks, signed anew."""
    lines = text.split("\n")
    lines[1] = f"model SHA-256,{hashlib.sha256(blocks.encode()).hexdigest()}"
    return signed("\n".join(lines))


def test_the_kernel_has_fewer_than_150_lines() -> None:
    lines = SOURCE.read_text("utf-8").splitlines()
    assert len(lines) < 150
    assert max(map(len, lines)) <= 100


def test_the_kernel_imports_the_standard_library_alone() -> None:
    names = set()
    for node in ast.walk(ast.parse(SOURCE.read_text("utf-8"))):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0
            names.add(node.module)
    assert names
    assert {name.split(".")[0] for name in names} <= set(sys.stdlib_module_names)


def run(folder, *arguments):
    copy = folder / "copied.py"
    copy.write_bytes(SOURCE.read_bytes())
    command = [sys.executable, "-I", "-S", copy, *arguments]
    return subprocess.run(command, cwd=folder, capture_output=True, text=True, check=False)


def test_a_copy_of_the_kernel_runs_by_itself(tmp_path: Path) -> None:
    blocks, text = case("A2")
    (tmp_path / "canonical.csv").write_text(blocks, "utf-8", newline="")
    (tmp_path / "certificate.txt").write_text(text, "utf-8", newline="")
    (tmp_path / "wrong.txt").write_text(text.replace("15", "16"), "utf-8", newline="")
    done = run(tmp_path, "canonical.csv", "certificate.txt")
    assert (done.returncode, done.stdout) == (0, "Proved: optimal objective 21/4\n")
    done = run(tmp_path, "canonical.csv", "wrong.txt")
    assert (done.returncode, done.stdout) == (1, "")
    assert done.stderr.startswith("Refused: the last line is not the SHA-256")


CERTIFICATE_FAULTS = [
    ("lpview certificate,1", "lpview certificate,2", "line 1 of the certificate"),
    ("model SHA-256,", "model SHA-512,", "line 2 of the certificate"),
    ("optimal objective,21/4\n", "", "incomplete or out of order"),
    ("optimal objective,21/4\n", "optimal objective,21/4\n" * 2, "line 4 of the certificate"),
    ("objective,21/4", "objective,5.25", "line 3 of the certificate"),
    ("objective,21/4", "objective,21/0", "line 3 of the certificate"),
    ("objective,21/4", "objective,nan", "line 3 of the certificate"),
    ("objective,21/4", "objective,42/8", None),
    ("objective,21/4", "objective,5", "comes to 21/4"),
    ("optimal objective,", "contradiction,", "incomplete or out of order"),
    ("optimal objective,", "unbounded at rate,", "incomplete or out of order"),
    ("denominator of x,2", "denominator of x,0", "line 5 of the certificate"),
    ("denominator of x,2", "denominator of x,-2", "line 5 of the certificate"),
    ("denominator of x,2", "denominator of x,4", "beyond its ends"),
    ("denominator of x,2\n", "", "incomplete or out of order"),
    ("column,x\n", "", "line 6 of the certificate"),
    ("column,x\n", "row,x\n", "line 7 of the certificate"),
    ("column,x\n", "column,ray\n", "incomplete or out of order"),
    ("column,x\n", "column,cost\n", "incomplete or out of order"),
    ("column,x\n", "column\n", "line 7 of the certificate"),
    ("column,x\n", "column,z\n", "line 7 of the certificate"),
    ("x1,15\n", "\ncolumn,x\nx1,15\n", "line 8 of the certificate"),
    ("column,x\n", "column,x,x\n", "line 6 of the certificate"),
    ("x1,15\n", "x1,15\nx1,15\n", "line 8 of the certificate"),
    ("x1,15\n", "x1,15\nx3,1\n", "unknown: [('column', 'x3')]"),
    ("x1,15\n", "x1,15\nr1,1\n", "unknown: [('column', 'r1')]"),
    ("x1,15\n", "x1,15\n\n", "line 9 of the certificate"),
    ("x1,15\n", "x1,15,1\n", "line 7 of the certificate"),
    ("x1,15\n", "x1\n", "line 7 of the certificate"),
    ("x1,15\n", '"x1,15\n', "line 7 of the certificate"),
    ("x1,15\n", '"x"1,15\n', "line 7 of the certificate"),
    ("x1,15\n", '"x1",15\n', None),
    *(
        ("x1,15\n", f"x1,{text}\n", "line 7 of the certificate")
        for text in ("0", "-0", "015", "+15", "15.0", "15/1", "1_5", "1e1", " 15", "15 ", "١٥", "")
    ),
    ("x1,15\n", "x1,15\r\n", "line 7 of the certificate"),
    ("\n\ndenominator of y,", "\ndenominator of y,", "line 10 of the certificate"),
    ("denominator of y,", "\ndenominator of y,", None),
    ("r1,-5\n", "r1,5\n", "a price but no such end: ('row', 'r1')"),
    ("r1,-5\n", "", "a price but no such end"),
    ("r1,-5\n", "r1,-6\n", "y does not come to 21/4"),
]


@pytest.mark.parametrize(("old", "new", "words"), CERTIFICATE_FAULTS)
def test_a_certificate_with_one_fault_is_refused(old: str, new: str, words: str | None) -> None:
    """Signed anew, so that the fault itself is found; None where it stays a proof."""
    blocks, text = case("A2")
    assert text.count(old) == 1
    changed = signed(text.replace(old, new))
    if words is None:
        assert kernel.verify(blocks.encode(), changed.encode()) == "optimal objective 21/4"
    else:
        assert words in refusal(blocks, changed)


def test_the_last_line_is_the_digest_of_all_bytes_above() -> None:
    blocks, text = case("A2")
    digest = text[-65:-1]
    for wrong in (
        *("", "\n", "\n\n", text[:-1], text + "\n", text + text, text[: -len("SHA") - 92]),
        *(text.replace("\n", "\r\n"), "\ufeff" + text, text.replace(digest, digest.upper())),
        *(text.replace("of the lines above", "of the Lines above"), text.replace("15", "16")),
    ):
        assert "the last line is not" in refusal(blocks, wrong)


def test_bytes_that_are_no_text_are_refused() -> None:
    blocks, text = case("A2")
    body = text.encode().replace(b"x1,15", b"x\xff,15").rpartition(b"SHA-256")[0]
    last = f"SHA-256 of the lines above,{hashlib.sha256(body).hexdigest()}\n"
    with pytest.raises(ValueError, match="utf-8"):
        kernel.verify(blocks.encode(), body + last.encode())


def test_another_model_is_refused_by_its_digest() -> None:
    blocks, text = case("A2")
    other, _ = case("A1")
    for wrong in (other, "", blocks + "\n", blocks.replace("\n", "\r\n")):
        assert "about another model" in refusal(wrong, text)


MODEL = """[c],minimize
column,cost
x,1
y,2

[offset],5

[A]
row,column,coefficient
r,x,1
r,y,1

[b]
row,relation,rhs
r,>=,4

[bounds]
column,lower,upper
x,0,3
"""
PROOF = """lpview certificate,1
model SHA-256,
optimal objective,10

denominator of x,1
column,x
x,3
y,1

denominator of y,1
row,y
r,2

SHA-256 of the lines above,
"""


def test_a_model_and_a_proof_by_hand() -> None:
    """3 of x cost 3, the fourth unit is y and costs 2; 5 more for nothing: 10."""
    assert kernel.verify(MODEL.encode(), about(MODEL, PROOF).encode()) == "optimal objective 10"


MODEL_FAULTS = [
    ("[c],minimize", "[c],Minimize", "line 1 of the model"),
    ("[c],minimize", "[c]", "line 1 of the model"),
    ("[c],minimize\ncolumn,cost\nx,1\ny,2\n\n", "", "incomplete or out of order"),
    ("column,cost\n", "column,price\n", "line 3 of the model"),
    ("column,cost\n", "", "line 2 of the model"),
    ("column,cost\n", "row,cost\n", "line 3 of the model"),
    ("x,1\ny,2\n", "x,1\ny,2\nx,1\n", "line 5 of the model"),
    ("x,1\ny,2\n", "x,1\n", "[A]: unknown row or column: ('r', 'y')"),
    ("x,1\ny,2\n", "x,1\n\ny,2\n", "line 5 of the model"),
    ("x,1\ny,2\n", "x,1\n# remark\ny,2\n", "line 4 of the model"),
    ("[offset],5\n", "[offset]\n", "line 6 of the model"),
    ("[offset],5\n", "[offset],5\n[offset],5\n", "line 7 of the model"),
    ("[offset],5\n\n", "", "comes to 5"),
    ("[A]\n", "[B]\n", "line 8 of the model"),
    ("[A]\n", "[A],1\n", "line 8 of the model"),
    ("r,x,1\n", "r,x,1\nr,x,1\n", "line 11 of the model"),
    ("r,x,1\n", "q,x,1\n", "[A]: unknown row or column: ('q', 'x')"),
    ("r,x,1\n", "r,x,inf\n", "line 10 of the model"),
    ("r,x,1\n", "r,x\n", "line 10 of the model"),
    ("row,relation,rhs\nr,>=,4\n", "row,relation\nr,>=\n", "incomplete or out of order"),
    ("row,relation,rhs\nr,>=,4\n", "row,rhs\nr,4\n", "incomplete or out of order"),
    (
        "row,relation,rhs\nr,>=,4\n",
        "row,relation\nr,>=\n\nrow,rhs\ns,4\n",
        "[b] is incomplete",
    ),
    (
        "r,>=,4\n",
        "r,>=,4\n\n[b]\nrow,lower,upper\nr,1,2\n",
        "line 17 of the model",
    ),
    ("r,>=,4\n", "r,>=,4\n\nrow,lower,upper\nr,1,2\n", "incomplete or out of order"),
    ("r,>=,4\n", "r,>,4\n", "line 15 of the model"),
    ("r,>=,4\n", "r,>=,inf\n", "line 15 of the model"),
    ("r,>=,4\n", "r,>=,4\nr,<=,5\n", "line 16 of the model"),
    ("row,relation,rhs\nr,>=,4\n", "row,lower,upper\nr,4,inf\n", None),
    ("row,relation,rhs\nr,>=,4\n", "row,lower,upper\nr,inf,4\n", "line 15 of the model"),
    ("row,relation,rhs\nr,>=,4\n", "row,lower,upper\nr,4,-inf\n", "line 15 of the model"),
    ("row,relation,rhs\nr,>=,4\n", "row,lower,upper\nr,4,\n", "line 15 of the model"),
    ("row,relation,rhs\nr,>=,4\n", "row,upper,lower\nr,inf,4\n", "out of order"),
    ("x,0,3\n", "x,0,3\nx,0,3\n", "line 20 of the model"),
    ("x,0,3\n", "w,0,3\n", "bounds of no column"),
    ("column,lower,upper\n", "column,lower,upper\n\nrow,lower,upper\nr,0,3\n", "out of order"),
    ("column,lower,upper\n", "column,lower,lower\n", "line 18 of the model"),
    ("[bounds]\n", "", "incomplete or out of order"),
    ("r,>=,4\n", "r,>=\r,4\n", "line 15 of the model"),
    ("row,relation,rhs", "row\r,relation,rhs", "line 14 of the model"),
    *(
        ("r,x,1\n", f"r,x,{text}\n", "line 10 of the model")
        for text in ("nan", "1e999999999", "1e-1000", "1/0", "1/00", "1/-1", "0x1", "1_0", "")
    ),
    *(("r,x,1\n", f"r,x,{text}\n", None) for text in ("1.0", "1e0", "0.1e1", "10e-1", "3/3")),
]


@pytest.mark.parametrize(("old", "new", "words"), MODEL_FAULTS)
def test_a_model_with_one_fault_is_refused(old: str, new: str, words: str | None) -> None:
    assert MODEL.count(old) == 1
    changed = MODEL.replace(old, new)
    text = about(changed, PROOF)
    if words is None:
        assert kernel.verify(changed.encode(), text.encode()) == "optimal objective 10"
    else:
        assert words in refusal(changed, text)


def test_what_could_take_for_ever_is_refused_at_once() -> None:
    started = time.perf_counter()
    for text in ("1e999999999", "1e-999999999", "9" * 2_000_000, "1/" + "9" * 2_000_000):
        changed = MODEL.replace("r,x,1\n", f"r,x,{text}\n")
        words = refusal(changed, about(changed, PROOF))
        assert words.startswith("line 10 of the model")
        assert len(words) < 1000
        assert "line 7 of the certificate" in refusal(
            MODEL, about(MODEL, PROOF.replace("x,3\n", f"x,{text}\n"))
        )
    assert time.perf_counter() - started < 5


def test_exponents_and_fractions_of_the_model_are_exact() -> None:
    changed = MODEL.replace("x,1\n", "x,1e-300\n", 1).replace("y,2", "y,1/3")
    text = PROOF.replace("objective,10", f"objective,{Fraction('3e-300') + Fraction(16, 3)}")
    text = text.replace("denominator of y,1\nrow,y\nr,2", "denominator of y,3\nrow,y\nr,1")
    assert kernel.verify(changed.encode(), about(changed, text).encode())
    assert "comes to" in refusal(
        changed, about(changed, text.replace("objective,1", "objective,2"))
    )


# 0 <= x <= 2 and x + y >= 4, x - y in -1 .. 1, in both senses.
def between(sense, **changes):
    rows = {"a": (4, {"x": 1, "y": 1}, INF), "b": (-1, {"x": 1, "y": -1}, 1)}
    return replace(model(sense, {"x": 1, "y": 1}, rows, {"x": (0, 2)}), **changes)


def outcome(lp, proof):
    try:
        return kernel.verify(*certified(lp, proof))
    except ValueError as refused:
        return str(refused)


def whole(*numbers):
    return ExactVector(numbers, 1)


def optimal(objective, x, y):
    return proved(ProvedOptimal, objective=Fraction(objective), x=whole(*x), y=whole(*y))


def test_prices_name_the_side_that_the_sense_says() -> None:
    """The least x + y is 4; the greatest is 5 at x = 2, y = 3 with prices -1 of b, 2 of x."""
    least, greatest = between("minimize"), between("maximize")
    assert outcome(least, optimal(4, (2, 2), (1, 0))) == "optimal objective 4"
    assert outcome(greatest, optimal(5, (2, 3), (0, -1))) == "optimal objective 5"
    assert "no such end: ('row', 'a')" in outcome(least, optimal(4, (2, 2), (-1, 0)))
    assert "no such end: ('column', 'y')" in outcome(greatest, optimal(5, (2, 3), (0, 1)))
    assert "no such end: ('row', 'a')" in outcome(greatest, optimal(4, (2, 2), (1, 0)))
    assert "no such end: ('column', 'y')" in outcome(greatest, optimal(5, (2, 3), (0, 0)))


def test_a_plan_that_is_not_optimal_or_not_feasible_is_refused() -> None:
    least = between("minimize")
    assert outcome(least, optimal(5, (2, 3), (1, 0))) == "y does not come to 5"
    assert "beyond its ends: ('row', 'a')" in outcome(least, optimal(3, (1, 2), (1, 0)))
    assert "beyond its ends: ('row', 'b')" in outcome(least, optimal(4, (0, 4), (1, 0)))
    assert "beyond its ends: ('column', 'x')" in outcome(least, optimal(5, (3, 2), (1, 0)))


def test_equalities_and_fixed_columns_take_prices_of_any_sign() -> None:
    for sense in ("minimize", "maximize"):
        for cost in (3, -3):
            rows = {"a": (2, {"x": 1}, 2)}
            lp = model(sense, {"x": cost, "f": cost}, rows, {"x": (-INF, INF), "f": (7, 7)})
            found = outcome(lp, optimal(9 * cost, (2, 7), (cost,)))
            assert found == f"optimal objective {9 * cost}"


def farkas(contradiction, *y):
    return proved(ProvedInfeasible, contradiction=Fraction(contradiction), y=whole(*y))


@pytest.mark.parametrize("sense", ["minimize", "maximize"])
def test_multipliers_prove_that_there_is_no_plan(sense: str) -> None:
    """With x <= 2 and y <= x + 1, x + y is 5 at most: 6 is 1 too many."""
    lp = between(sense, row_lower=np.array([6.0, -1]))
    assert outcome(lp, farkas(1, 1, 1)) == "contradiction 1"
    assert outcome(lp, farkas(3, 3, 3)) == "contradiction 3"
    assert "comes to 1" in outcome(lp, farkas(2, 1, 1))
    assert "no such end: ('row', 'a')" in outcome(lp, farkas(1, -1, -1))
    assert "no such end: ('column', 'y')" in outcome(lp, farkas(1, 1, 0))
    touching = between(sense, row_lower=np.array([5.0, -1]))
    assert "contradict nothing" in outcome(touching, farkas(0, 1, 1))
    assert "contradict nothing" in outcome(lp, farkas(0, 0, 0))
    assert "contradict nothing" in outcome(between(sense), farkas(-1, 1, 1))


def ray(rate, x, direction):
    return proved(ProvedUnbounded, rate=Fraction(rate), x=whole(*x), ray=whole(*direction))


@pytest.mark.parametrize("sign", [1, -1])
def test_a_ray_proves_that_the_objective_improves_for_ever(sign: int) -> None:
    """Along (1, 1) with x - y in -1 .. 1 and x + y >= 4."""
    lp = between("maximize" if sign > 0 else "minimize", c=np.array([sign, 0.0]))
    lp = replace(lp, upper=np.array([INF, INF]), offset=3.0)
    assert outcome(lp, ray(sign, (2, 2), (1, 1))) == f"unbounded at rate {sign}"
    assert outcome(lp, ray(5 * sign, (2, 2), (5, 5))) == f"unbounded at rate {5 * sign}"
    assert f"comes to {sign}" in outcome(lp, ray(2 * sign, (2, 2), (1, 1)))
    assert f"comes to {sign}" in outcome(lp, ray(sign + 3, (2, 2), (1, 1)))
    assert "beyond its ends: ('row', 'b')" in outcome(lp, ray(sign, (2, 2), (1, 2)))
    assert "beyond its ends: ('row', 'b')" in outcome(lp, ray(2 * sign, (2, 2), (2, 1)))
    assert "beyond its ends: ('column', 'x')" in outcome(lp, ray(-sign, (2, 2), (-1, -1)))
    assert "beyond its ends: ('row', 'a')" in outcome(lp, ray(sign, (1, 1), (1, 1)))
    assert "improves nothing" in outcome(lp, ray(0, (2, 2), (0, 0)))
    other = replace(lp, c=-lp.c)
    assert f"improves nothing, it comes to {-sign}" in outcome(other, ray(-sign, (2, 2), (1, 1)))
    boxed = replace(lp, upper=np.array([9.0, INF]))
    assert "beyond its ends: ('column', 'x')" in outcome(boxed, ray(sign, (2, 2), (1, 1)))


def test_models_without_rows_or_columns_have_certificates() -> None:
    empty = b"[c],maximize\ncolumn,cost\n[offset],7\n[A]\nrow,column,coefficient\n[b]\n"
    lp = read_model_bytes(empty.replace(b"\n[", b"\n\n[") + b"row,relation,rhs\n", "empty").model
    assert outcome(lp, optimal(7, (), ())) == "optimal objective 7"
    assert "comes to 7" in outcome(lp, optimal(0, (), ()))
    lp = read_model_bytes(
        b"[c],maximize\ncolumn,cost\nx,-1\n\n[A]\nrow,column,coefficient\n\n"
        b"[b]\nrow,relation,rhs\nr,>=,1\n",
        "no coefficients",
    ).model
    assert outcome(lp, farkas(1, 1)) == "contradiction 1"
    assert "beyond its ends: ('row', 'r')" in outcome(lp, optimal(0, (0,), (0,)))


def test_numbers_of_many_thousand_bits_are_read_and_written() -> None:
    """A chain x_k = q_k x_(k - 1) from x_0 = 1, whose last link is minimized."""
    links = [Fraction(3**400 + k, 2**640 + 2 * k + 1) for k in range(32)]
    names = [f"x{k}" for k in range(len(links) + 1)]
    costs = "".join(f"{name},{int(name == names[-1])}\n" for name in names)
    terms = "r0,x0,1\n" + "".join(
        f"r{k + 1},x{k},{-q}\nr{k + 1},x{k + 1},1\n" for k, q in enumerate(links)
    )
    sides = "r0,=,1\n" + "".join(f"r{k + 1},=,0\n" for k in range(len(links)))
    free = "".join(f"{name},-inf,inf\n" for name in names)
    lp = read_model_bytes(
        f"[c],minimize\ncolumn,cost\n{costs}\n[A]\nrow,column,coefficient\n{terms}\n"
        f"[b]\nrow,relation,rhs\n{sides}\n[bounds]\ncolumn,lower,upper\n{free}".encode(),
        "chain",
    ).model
    x, y = [Fraction(1)], [Fraction(1)]
    for q in links:
        x.append(x[-1] * q)
    for q in reversed(links):
        y.insert(0, y[0] * q)
    proof = proved(ProvedOptimal, objective=x[-1], x=over_one(x), y=over_one(y))
    blocks, text = certified(lp, proof)
    assert proof.x.denominator.bit_length() > 20_000
    assert kernel.verify(blocks, text) == f"optimal objective {x[-1]}"
    smallest = replace(proof, objective=x[-1] + Fraction(1, 2**30_000))
    assert "comes to" in outcome(lp, smallest)


def over_one(values):
    common = lcm(*(value.denominator for value in values))
    return ExactVector(tuple(int(value * common) for value in values), common)
