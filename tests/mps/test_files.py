"""Files of the trade.

The files of ``tests/data/mps`` are test instances of the HiGHS repository
(``check/instances``, MIT license, `LICENSE-HiGHS.txt` beside them), unchanged. Among them
are AFIRO, ADLITTLE and E226 of the Netlib LP test set collected by David M. Gay.
"""

from __future__ import annotations

import csv
import gzip
import os
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest

from lpview.blocks import InputError, read_model
from lpview.examination import examine
from lpview.model import LinearProgram, Sense
from lpview.mps import looks_like_mps, read_mps, read_mps_bytes
from lpview.outcomes import NoOptimum, Optimal, Request
from lpview.proof.prove import prove
from lpview.proof.results import ProvedOptimal
from lpview.reading import Reading
from lpview.repair.search import Infeasible
from lpview.run import Solved, SolveSettings
from lpview.solver import solve
from lpview.solver.mps_file import read_mps_text

DATA = Path(__file__).parents[1] / "data"
FILES = DATA / "mps"


def objective(reading: Reading) -> float:
    found = examine(reading, Request(source="model.mps", command="lpview check"), solve)
    assert isinstance(found, Optimal)
    assert found.passed
    return found.measurement.primal_objective


@pytest.mark.parametrize(
    ("name", "value"),
    [
        ("afiro", -406659 / 875),  # tests/data/netlib/values.csv
        ("adlittle", 225494.96316238038228),  # the same
        ("avgas", -31 / 4),  # cases.toml A15
        ("blending", -3200.0),  # by hand: all of P1, 400 at -8 each
        ("comment", -4.0),  # the file's first line
        # The published list of exact optima (Koch 2004) has -18.751929066370549 without the
        # constant of 7.113 that the file's right-hand side of the objective stands for.
        ("e226", -18.751929066370549 + 7.113),
        ("silly-names", -1.0),  # by hand: five equal columns whose sum is at most 1
    ],
)
def test_the_optimum_is_the_published_one(name: str, value: float) -> None:
    assert objective(read_mps(FILES / f"{name}.mps")) == pytest.approx(value, rel=1e-12)


def test_a_model_is_named_after_its_file(tmp_path: Path) -> None:
    assert read_mps(FILES / "afiro.mps").model.name == "afiro"
    packed = tmp_path / "week.7.mps.gz"
    packed.write_bytes(gzip.compress((FILES / "afiro.mps").read_bytes()))
    assert read_mps(packed).model.name == "week.7"
    assert read_mps_bytes(packed.read_bytes(), "standard input").model.name == "standard input"


@pytest.mark.parametrize("name", ["afiro", "adlittle"])
def test_the_numbers_are_those_of_the_blocks(name: str) -> None:
    """The blocks of the same models came another way, under other names and in another order."""
    ours = read_mps(FILES / f"{name}.mps").model
    theirs = read_model(DATA / "netlib" / f"{name}.csv").model
    assert by_row(ours) == by_row(theirs)
    assert by_column(ours) == by_column(theirs)
    assert ours.offset == theirs.offset == 0


@pytest.mark.parametrize("name", ["afiro", "adlittle"])
def test_the_exact_optimum_is_that_of_the_blocks(name: str) -> None:
    with (DATA / "netlib" / "values.csv").open(encoding="utf-8", newline="") as table:
        values = {row["file"]: Fraction(row["exact_fraction"]) for row in csv.DictReader(table)}
    lp = read_mps(FILES / f"{name}.mps").model
    found = solve(lp)
    assert isinstance(found, Solved)
    assert found.answer.basis is not None
    basis = found.answer.basis
    optimum = prove(lp, basis, lambda lp, settings: solve(lp, settings), SolveSettings())
    assert isinstance(optimum, ProvedOptimal)
    assert optimum.objective == values[name]


def turned(lp: LinearProgram) -> np.ndarray:
    """-1 for rows with a lower side alone, which say the same turned round; else 1."""
    return np.where(np.isinf(lp.row_upper), -1.0, 1.0)


def by_row(lp: LinearProgram) -> list[tuple[list[float], list[float]]]:
    """Sides and coefficients of every row, both sorted, ``>=`` turned round."""
    signs, A = turned(lp)[:, None], lp.A.toarray()
    ends = np.sort(signs * np.stack([lp.row_lower, lp.row_upper], axis=1), axis=1)
    numbers = np.sort(signs * A, axis=1)
    return sorted(zip((ends + 0.0).tolist(), (numbers + 0.0).tolist(), strict=True))


def by_column(lp: LinearProgram) -> list[tuple[list[float], list[float]]]:
    """Cost, bounds and sorted coefficients of every column, ``>=`` turned round."""
    head = np.stack([lp.c, lp.lower, lp.upper], axis=1)
    numbers = np.sort(turned(lp)[:, None] * lp.A.toarray(), axis=0).T
    return sorted(zip(head.tolist(), (numbers + 0.0).tolist(), strict=True))


@pytest.mark.parametrize("name", ["afiro", "adlittle", "avgas", "e226", "flugpl", "galenet"])
def test_the_solver_reads_the_file_itself_likewise(name: str) -> None:
    """With the file's own names, in fixed columns, and not from our copy."""
    path = FILES / f"{name}.mps"
    reading, other = read_mps(path), read_mps_text(path.read_text(encoding="ascii"))
    lp = reading.model
    assert other is not None
    assert (tuple(other.columns), tuple(other.rows)) == (lp.columns, lp.rows)
    assert (other.sense, other.offset) == (lp.sense, lp.offset)
    for part in ("c", "lower", "upper", "row_lower", "row_upper"):
        assert getattr(other, part).tolist() == getattr(lp, part).tolist()
    assert (lp.A_by_column != other.A).nnz == 0
    assert other.integers == set(reading.integers)


def test_the_textbook_file_is_the_textbook_model() -> None:
    ours = read_mps(FILES / "avgas.mps").model
    theirs = read_model(DATA / "textbook" / "a15.csv").model
    assert ours.A.toarray().tolist() == theirs.A.toarray().tolist()
    assert ours.rows == theirs.rows
    for part in ("c", "row_lower", "row_upper", "lower", "upper"):
        assert getattr(ours, part).tolist() == getattr(theirs, part).tolist()


def test_names_like_section_words_are_names() -> None:
    """The solver's own reader finds one column here."""
    lp = read_mps(FILES / "silly-names.mps").model
    assert lp.columns == ("C0", "OBJSENSE", "RANGES", "RHS", "C1")
    assert lp.rows == ("R0",)
    assert lp.sense is Sense.MINIMIZE
    assert lp.A.toarray().tolist() == [[-1.0] * 5]


def test_comments_at_the_ends_of_lines() -> None:
    """The solver's own reader gives up here."""
    reading = read_mps(FILES / "comment.mps")
    lp = reading.model
    assert (lp.row_lower.tolist(), lp.row_upper.tolist()) == (
        [1, -2, -2],
        [2, np.inf, np.inf],
    )
    assert lp.upper.tolist() == [1, np.inf]
    assert reading.notes.remarks == ("13 comments at the ends of lines left out: first on line 5",)


def test_the_constant_of_the_objective_has_the_opposite_sign() -> None:
    assert read_mps(FILES / "e226.mps").model.offset == 7.113


def test_an_infeasible_file() -> None:
    found = examine(read_mps(FILES / "galenet.mps"), Request("galenet.mps", "lpview"), solve)
    assert isinstance(found, NoOptimum)
    assert isinstance(found.certificate, Infeasible)


def test_integer_columns_are_noted() -> None:
    reading = read_mps(FILES / "flugpl.mps")
    names = [reading.model.columns[j] for j in reading.integers]
    assert names == [
        *("ANM1", "STM2", "ANM2", "STM3", "ANM3", "STM4"),
        *("ANM4", "STM5", "ANM5", "STM6", "ANM6"),
    ]
    assert reading.notes.remarks == ()
    # "LP SOLN" in the file's head; the objective is linear, so is its relaxation.
    assert objective(reading) == pytest.approx(1167185.73, abs=0.005)


def test_integer_columns_without_bounds_are_binary() -> None:
    """As the comment at the top of the file says."""
    reading = read_mps(FILES / "small_mip.mps")
    lp = reading.model
    assert [lp.columns[j] for j in reading.integers] == ["COL03", "COL04"]
    inf = np.inf
    assert lp.lower.tolist() == [2.5, 0, 0, 0, 0.5, 0, 0, 0]
    assert lp.upper.tolist() == [inf, 4.1, 1, 1, 4, inf, inf, 4.3]
    assert lp.row_lower.tolist() == [2.5, -inf, 4, 1.8, 3]
    assert lp.row_upper.tolist() == [inf, 2.1, 4, 5, 15]
    assert reading.notes.remarks == (
        "2 integer columns without bounds, taken as 0 to 1 (readers differ here): first 'COL03' "
        "on line 62",
    )


REFUSED = {
    "garbage": """\
garbage.mps:2: expected a section such as NAME or ROWS, got \
'dvhfalkmnthry6v54y76m87yq,x,^%(^%(T&*)(lksz'""",
    "nan0": "nan0.mps:8: [COLUMNS] number: expected a number, got 'nan'",
    "semi-continuous": """\
semi-continuous.mps:22: [BOUNDS] expected a linear program, got 1 semi-continuous column, \
such as 'x3'""",
    "warnings": """\
warnings.mps:12: [COLUMNS] row: expected a row of ROWS, got 'R11'; did you mean 'R1'?
warnings.mps:12: [COLUMNS] row: expected a row of ROWS, got 'R12'; did you mean 'R2'?
warnings.mps:13: [COLUMNS] row: expected a row of ROWS, got 'R13'; did you mean 'R3'?
warnings.mps:13: [COLUMNS] row: expected a row of ROWS, got 'R14'; did you mean 'R4'?
warnings.mps:14: [COLUMNS] row: expected a row of ROWS, got 'R15'; did you mean 'R5'?
warnings.mps:14: [COLUMNS] expected every pair of a column and a row once, got 'C0' in 'COST' \
6 times; line 11 has it too
warnings.mps:17: [COLUMNS] expected every pair of a column and a row once, got 'C0' in 'R0' \
7 times; line 11 has it too
warnings.mps:31: [RHS] row: expected a row of ROWS, got 'R11'; did you mean 'R1'?
warnings.mps:32: [RHS] row: expected a row of ROWS, got 'R12'; did you mean 'R2'?
warnings.mps:32: [RHS] row: expected a row of ROWS, got 'R13'; did you mean 'R3'?
warnings.mps:33: [RHS] row: expected a row of ROWS, got 'R14'; did you mean 'R4'?
warnings.mps:33: [RHS] row: expected a row of ROWS, got 'R15'; did you mean 'R5'?
warnings.mps:34: [RHS] row: expected every row once, got 'R0' 6 times; line 31 has it too
warnings.mps:39: [BOUNDS] column: expected one upper bound of a column, got 'C0' 6 times; \
line 38 has it too
warnings.mps:44: [BOUNDS] column: expected a column of COLUMNS, got 'C10'; did you mean 'C1'?
warnings.mps:45: [BOUNDS] number: expected a whole number with LI, got '1.1'
warnings.mps:46: [BOUNDS] number: expected a whole number with UI, got '2.1'
warnings.mps:47: [BOUNDS] expected a linear program, got 1 semi-integer column, such as 'C3'
warnings.mps:48: [BOUNDS] number: expected a whole number with LI, got '4.1'
warnings.mps:49: [BOUNDS] number: expected a whole number with UI, got '5.1'
and 13 more""",
}


@pytest.mark.parametrize("name", REFUSED)
def test_refused(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(FILES)
    with pytest.raises(InputError) as caught:
        read_mps(f"{name}.mps")
    assert str(caught.value) == REFUSED[name]


def test_nothing_is_printed(capfd: pytest.CaptureFixture[str]) -> None:
    for name in ("afiro", "small_mip", "e226"):
        read_mps(FILES / f"{name}.mps")
    with pytest.raises(InputError):
        read_mps(FILES / "warnings.mps")
    assert capfd.readouterr() == ("", "")


def test_files_look_like_what_they_are() -> None:
    looks = {path.stem: looks_like_mps(path.read_bytes()) for path in FILES.glob("*.mps")}
    assert [name for name, like in looks.items() if not like] == ["garbage"]
    assert not any(looks_like_mps(p.read_bytes()) for p in (DATA / "netlib").glob("*.csv"))
    assert looks_like_mps(gzip.compress((FILES / "e226.mps").read_bytes()))


@pytest.mark.slow
@pytest.mark.skipif("LPVIEW_MPS" not in os.environ, reason="LPVIEW_MPS names no folder")
def test_every_file_of_a_folder_is_read_or_refused() -> None:
    paths = sorted(Path(os.environ["LPVIEW_MPS"]).glob("*.mps"))
    assert paths
    outcomes = set()
    for path in paths:
        try:
            reading = read_mps(path)
        except InputError as error:
            print(f"{path.name:24} refused  {str(error).splitlines()[0]}")
            continue
        found = examine(reading, Request(path.name, "lpview"), solve)
        value = found.measurement.primal_objective if isinstance(found, Optimal) else ""
        print(f"{path.name:24} {type(found).__name__:10} {value!r} {reading.notes.remarks}")
        outcomes.add(type(found))
    assert outcomes <= {Optimal, NoOptimum}


def test_the_offset_of_a_decimal_is_exact() -> None:
    lp = read_mps_bytes(b"ROWS\n N o\nCOLUMNS\n x o 1\nRHS\n o .1\nENDATA", "m").model
    assert (lp.offset, dict(lp.odd)) == (-0.1, {})
    long = b"ROWS\n N o\nCOLUMNS\n x o 1\nRHS\n o .10000000000000000000001\nENDATA"
    assert read_mps_bytes(long, "m").model.odd["offset"][0] == -Fraction(10**22 + 1, 10**23)
