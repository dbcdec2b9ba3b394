"""``check --prove``, ``prove`` and ``verify``: what they print, write and return."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from lpview import cli

MODELS = Path(__file__).resolve().parents[2] / "models"

# x >= 1 and x <= 0.9999999999: feasible at every usual tolerance, and not in truth.
NEARLY = """[c],minimize
column,cost
x,1
[A]
row,column,coefficient
least,x,1
most,x,1
[b]
row,relation,rhs
least,>=,1
most,<=,0.9999999999
"""

# The slack of "tight" is 1e-12: it only looks like zero.
LOOKS = """[c],maximize
column,cost
x,1
y,-1
[A]
row,column,coefficient
limit,x,3
tight,x,1
tight,y,1
[b]
row,relation,rhs
limit,<=,1
tight,<=,0.333333333334
"""


def run(capsys: pytest.CaptureFixture[str], *words: str) -> tuple[int, str, str]:
    status = cli.main(list(words))
    done = capsys.readouterr()
    return status, done.out, done.err


def file(folder: Path, text: str) -> str:
    path = folder / "model.csv"
    path.write_text(text, encoding="utf-8")
    return str(path)


def test_a_proved_optimum(capsys: pytest.CaptureFixture[str]) -> None:
    status, out, _ = run(capsys, "prove", str(MODELS / "winter.csv"))
    assert status == 0
    first, *_ = out.splitlines()
    assert first.endswith("winter.csv: proved optimal in exact arithmetic")
    assert "proof        exact objective 1085.4; numbers of up to 8 bits" in out
    assert out.count("\n") <= 40


def test_a_report_with_everything_fits_a_page(capsys: pytest.CaptureFixture[str]) -> None:
    for name in ("winter.csv", "season.csv"):
        _, out, _ = run(capsys, "prove", str(MODELS / name), "--prices")
        assert out.count("\n") <= 40


def test_prove_is_short_for_check_prove(capsys: pytest.CaptureFixture[str]) -> None:
    short = run(capsys, "prove", str(MODELS / "spring.csv"))
    assert short == run(capsys, "check", str(MODELS / "spring.csv"), "--prove")
    assert f"reproduce  lpview check {MODELS / 'spring.csv'} --prove\n" in short[1]


def test_a_proof_decides_against_the_solver(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    model = file(tmp_path, NEARLY)
    assert run(capsys, "check", model)[0] == 0
    status, out, _ = run(capsys, "check", model, "--prove")
    assert status == 3
    assert "proved infeasible in exact arithmetic, although the solver says optimal" in out
    assert "the lines contradict each other by 1e-10" in out
    status, out, _ = run(capsys, "prove", model, "--format", "json")
    found = json.loads(out)
    assert (status, found["status"]) == (3, "infeasible")
    assert found["proof"]["verdict"] == "proved infeasible"
    assert found["passed"] is None
    status, out, _ = run(capsys, "prove", model, "--row", "most")
    assert "exact multipliers  row least 1, row most -1" in out
    assert "What follows is what the solver answered; by the proof it settles nothing." in out


def test_json_of_a_proved_optimum(capsys: pytest.CaptureFixture[str]) -> None:
    _, out, _ = run(capsys, "prove", str(MODELS / "winter.csv"), "--format", "json")
    proof = json.loads(out)["proof"]
    assert set(proof) == {
        "verdict", "objective_numerator", "objective_denominator", "seconds", "steps",
        "primal_violation", "dual_violation", "bits", "interval_lower", "interval_upper", "reason",
    }  # fmt: skip
    assert (proof["objective_numerator"], proof["objective_denominator"]) == ("5427", "5")
    assert (proof["steps"], proof["primal_violation"], proof["dual_violation"]) == (1, 0, 0)


def test_without_prove_there_is_no_proof(capsys: pytest.CaptureFixture[str]) -> None:
    _, out, _ = run(capsys, "check", str(MODELS / "winter.csv"), "--format", "json")
    assert "proof" not in json.loads(out)


def test_what_only_looks_like_zero(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    status, out, _ = run(capsys, "prove", file(tmp_path, LOOKS))
    assert status == 0
    assert "only look like zero: slack of row tight" in out
    status, out, _ = run(capsys, "prove", file(tmp_path, LOOKS), "--row", "tight")
    assert (
        "Exactly: row value 1/3 = 0.333333333333333333333333333333, slack to its upper end " in out
    )
    assert "dual value 0." in out


@pytest.mark.parametrize(
    ("name", "status", "claim"),
    [
        ("winter.csv", 0, "optimal objective 1085.4"),
        ("winter-infeasible.csv", 3, "contradiction 4/9 = 0.444444444444444444444444444444"),
        ("winter-unbounded.csv", 3, "unbounded at rate 0.2"),
    ],
)
def test_a_certificate_is_written_and_accepted(
    name: str, status: int, claim: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    written = str(tmp_path / "proof.txt")
    model = str(MODELS / name)
    assert run(capsys, "prove", model, "--certificate", written)[0] == status
    assert run(capsys, "verify", model, written) == (
        0,
        f"{written}: accepted as a proof: {claim}\n",
        "",
    )


def test_a_changed_certificate_and_another_model_are_refused(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    written = tmp_path / "proof.txt"
    run(capsys, "prove", str(MODELS / "winter.csv"), "--certificate", str(written))
    status, out, _ = run(capsys, "verify", str(MODELS / "spring.csv"), str(written))
    assert status == 1
    assert "REFUSED as a proof of this model: it is about another model" in out
    written.write_text(written.read_text().replace("heat,20", "heat,21"))
    status, out, _ = run(capsys, "verify", str(MODELS / "winter.csv"), str(written))
    assert (status, "REFUSED" in out) == (1, True)


def test_a_missing_certificate_is_a_mistake_of_use(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    status, out, err = run(capsys, "verify", str(MODELS / "winter.csv"), str(tmp_path / "no.txt"))
    assert (status, out) == (2, "")
    assert err.endswith(
        "no.txt: expected a certificate that lpview prove writes, got: No such file or directory\n"
    )


def test_a_certificate_needs_a_proof_and_one_model(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    model = str(MODELS / "winter.csv")
    for words in (("check", model), ("prove", model, model)):
        with pytest.raises(SystemExit) as left:
            cli.main([*words, "--certificate", str(tmp_path / "proof.txt")])
        assert left.value.code == 2
        assert "--certificate together with --prove and one MODEL" in capsys.readouterr().err


def test_stopped_by_the_time_limit(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    readings = iter(range(0, 10**9, 100))
    monkeypatch.setattr("lpview.commands.proof.time.monotonic", lambda: float(next(readings)))
    status, out, _ = run(capsys, "prove", str(MODELS / "winter.csv"), "--time-limit", "50")
    assert status == 4
    assert "verified: every condition passed at 1e-9 scaled; not proved" in out
    assert "not reached: time limit reached" in out
    assert "what is rigorous  " in out


def test_no_certificate_of_nothing(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    readings = iter(range(0, 10**9, 100))
    monkeypatch.setattr("lpview.commands.proof.time.monotonic", lambda: float(next(readings)))
    target = tmp_path / "proof.txt"
    words = ("prove", str(MODELS / "winter.csv"), "--time-limit", "50")
    status, _, err = run(capsys, *words, "--certificate", str(target))
    assert (status, target.exists()) == (4, False)
    assert err == f"{target}: not written, for nothing was proved: time limit reached\n"


def test_a_proof_of_families_is_refused(capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit) as left:
        cli.main(["prove", str(MODELS / "winter.csv"), "--families"])
    assert left.value.code == 2
    assert "expected --prove or --families, got both" in capsys.readouterr().err
