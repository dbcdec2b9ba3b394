"""What ``check --prove``, ``prove`` and ``verify`` do."""

from __future__ import annotations

import argparse
import sys
import time
from fractions import Fraction
from pathlib import Path

from lpview import exit_status
from lpview.blocks import write_blocks
from lpview.commands import arriving, leaving
from lpview.outcomes import Examination, Head, Optimal, Stopped
from lpview.progress import watched
from lpview.proof import kernel
from lpview.proof.certificate import write_certificate
from lpview.proof.prove import StoppedError, prove
from lpview.proof.results import NotProved, Proof, ProvedOptimal
from lpview.report.exact_numbers import exact_text
from lpview.run import Claim, Watch, within
from lpview.solver import solve

WORKING = ("proving", "step")
"""What the progress line says."""


def proved(found: Examination, options: argparse.Namespace, watch: Watch, started: float) -> Proof:
    """Prove what an examined model comes to, and write the certificate if one was asked for.

    The command's time limit counts from ``started``, a reading of `time.monotonic`.
    """
    head = found.head
    if isinstance(found, Stopped):
        proof: Proof = NotProved(head.run.claim.value, None, None, False, None)
        if options.certificate:
            _write_certificate(head, proof, options.certificate)
        return proof
    limit = options.time_limit
    ask = within(solve, watch, limit, started)

    def between() -> None:
        watch.iterations += 1
        if watch.stop.is_set():
            raise StoppedError(Claim.INTERRUPTED.value)
        if limit is not None and time.monotonic() - started > limit:
            raise StoppedError(Claim.TIME_LIMIT.value)

    def work() -> Proof:
        answer = found.answer if isinstance(found, Optimal) else None
        basis, guess = (answer.basis, answer.y) if answer else (None, None)
        return prove(head.model, basis, ask, head.request.solve, between, guess)

    watch.iterations = 0
    proof = watched(work, watch, head.model.name, WORKING)
    if options.certificate:
        _write_certificate(head, proof, options.certificate)
    return proof


def _write_certificate(head: Head, proof: Proof, target: str) -> None:
    """Write what was proved; nothing is written where nothing was."""
    if isinstance(proof, NotProved):
        sys.stderr.write(f"{target}: not written, for nothing was proved: {proof.reason}\n")
        return
    text = write_certificate(head.model, head.sha256, proof)
    leaving.replace_file(Path(target), text.encode())


def proof_status(found: Examination, proof: Proof) -> int:
    """The exit status: a proof decides; without one, the check may still have failed."""
    if isinstance(proof, ProvedOptimal):
        return exit_status.DONE
    if isinstance(proof, NotProved):
        return exit_status.worst([leaving.status(found), exit_status.NOT_ESTABLISHED])
    return exit_status.NO_OPTIMUM


def verify(options: argparse.Namespace) -> list[int]:
    """``lpview verify``: check a certificate with the kernel, which shares nothing with us."""
    reading, _ = arriving.read(options.model, options)
    leaving.tell_notes(options.model, reading.notes)
    canonical = write_blocks(reading.model)
    try:
        certificate = Path(options.certificate).read_bytes()
    except OSError as error:
        problem = error.strerror or str(error)
        expected = "expected a certificate that lpview prove writes"
        sys.stderr.write(f"{options.certificate}: {expected}, got: {problem}\n")
        return [exit_status.USAGE]
    try:
        verdict = kernel.verify(canonical.encode(), certificate)
    except ValueError as refusal:
        words = f"REFUSED as a proof of this model: {refusal}"
        leaving.write(f"{options.certificate}: {words}\n", options.output)
        return [exit_status.FAILED]
    claim, _, value = verdict.rpartition(" ")
    words = f"{claim} {exact_text(Fraction(value))}"
    leaving.write(f"{options.certificate}: accepted as a proof: {words}\n", options.output)
    return [exit_status.DONE]
