"""Certificates in plain text, which `lpview.proof.kernel` checks and anyone can.

A certificate has UTF-8 text, line feeds, commas, and names in quotes where blocks have them in
quotes. That of an optimum is::

    lpview certificate,1
    model SHA-256,ac71...          of the model's canonical blocks, in hexadecimal digits
    optimal objective,21/4         offset included

    denominator of x,2
    column,x
    x1,15                          x1 = 15/2; columns that are left out have 0
    x2,9

    denominator of y,10
    row,y
    r1,-5                          signs as in `lpview.model`; rows that are left out have 0
    r2,11

    SHA-256 of the lines above,1bee...

without these remarks. It is a proof, since x is within all sides and bounds, every price (``y``
of a row, ``z = c - A'y`` of a column) names a side or bound that exists, and ``c'x`` equals the
sum of prices times what they name. The other two kinds have the same first and last lines:

``contradiction,1/3``
    No plan exists. Only y follows: multipliers, in both senses positive for lower sides and
    negative for upper ones. The number, which is positive, is the sum of multipliers times
    sides less the greatest value that ``(A'y)'x`` can take within the bounds.
``unbounded at rate,-2``
    The objective improves for ever. A plan x follows, and in place of y a direction: its lines
    are ``denominator of ray``, ``column,ray`` and the columns. The number is the change of the
    objective for each unit of the direction, negative when minimizing; no line leaves its sides
    or bounds however far the direction is followed.

Denominators are positive, numerators are integers other than 0, no name stands in one table
twice, and an empty line ends each table. The last line is the digest of all bytes before it.
"""

from __future__ import annotations

import hashlib
import sys
from collections.abc import Iterator, Sequence
from math import gcd

from lpview.model import LinearProgram
from lpview.proof.results import ExactVector, ProvedInfeasible, ProvedOptimal, ProvedUnbounded

Proved = ProvedOptimal | ProvedInfeasible | ProvedUnbounded


def write_certificate(lp: LinearProgram, sha256: str, proof: Proved) -> str:
    """The certificate of a proof.

    Lifts Python's limit on the digits of integers, since exact numbers can be long.

    Parameters
    ----------
    lp
        The model that the proof is about.
    sha256
        Digest of its canonical blocks, in hexadecimal digits.
    proof
        What was proved, with vectors of ``n`` or ``m`` entries.
    """
    sys.set_int_max_str_digits(0)
    head = ["lpview certificate,1", f"model SHA-256,{sha256}"]
    text = "\n".join([*head, *_contents(lp, proof), ""]) + "\n"
    return f"{text}SHA-256 of the lines above,{hashlib.sha256(text.encode()).hexdigest()}\n"


def _contents(lp: LinearProgram, proof: Proved) -> Iterator[str]:
    """What is claimed, and the tables that prove it."""
    if isinstance(proof, ProvedOptimal):
        yield f"optimal objective,{proof.objective}"
        yield from _table("column", "x", lp.columns, proof.x)
        yield from _table("row", "y", lp.rows, proof.y)
    elif isinstance(proof, ProvedInfeasible):
        yield f"contradiction,{proof.contradiction}"
        yield from _table("row", "y", lp.rows, proof.y)
    else:
        yield f"unbounded at rate,{proof.rate}"
        yield from _table("column", "x", lp.columns, proof.x)
        yield from _table("column", "ray", lp.columns, proof.ray)


def _table(kind: str, word: str, names: Sequence[str], vector: ExactVector) -> Iterator[str]:
    """An empty line, the denominator, and the numerators other than 0, in lowest terms."""
    common = gcd(vector.denominator, *vector.numerators)
    yield from ("", f"denominator of {word},{vector.denominator // common}", f"{kind},{word}")
    for name, numerator in zip(names, vector.numerators, strict=True):
        if numerator:
            yield f"{_cell(name)},{numerator // common}"


def _cell(name: str) -> str:
    """The name as canonical blocks have it."""
    return '"' + name.replace('"', '""') + '"' if "," in name or '"' in name else name
