"""The yardstick: what a person writes in ten minutes to solve a file of CSV blocks.

    python tests/benchmarks/bare.py FILE

Reads tall blocks with the csv module, calls scipy, prints the objective and believes
it. Nothing is validated, checked or reported. It shares no code with the package.
"""

import csv
import sys
from pathlib import Path

import numpy as np
from scipy.optimize import linprog
from scipy.sparse import csr_array


def read_blocks(path: str) -> dict[str, list[list[str]]]:
    """The lines of every block: the block line, the header, the data."""
    blocks: dict[str, list[list[str]]] = {}
    with Path(path).open(newline="", encoding="utf-8-sig") as stream:
        for line in csv.reader(stream):
            if not line or line[0] == "#" or line[0].startswith("# "):
                continue
            if line[0].startswith("[") and line[0].endswith("]"):
                block = blocks[line[0]] = []
            block.append(line)
    return blocks


def matrix(lines: list[list[str]], rows: dict[str, int], columns: dict[str, int]) -> csr_array:
    """The coefficients of triplets."""
    row = [rows[line[0]] for line in lines]
    column = [columns[line[1]] for line in lines]
    values = [float(line[2]) for line in lines]
    return csr_array((values, (row, column)), shape=(len(rows), len(columns)))


def bounds_of(lines: list[list[str]]) -> np.ndarray:
    """Bounds of columns from the lines of ``[c]``."""
    if len(lines[0]) < 4:
        return np.tile([0.0, np.inf], (len(lines), 1))
    pairs = [(float(line[2] or "0"), float(line[3] or "inf")) for line in lines]
    return np.array(pairs)


def answer(path: str) -> float:
    """The optimal objective of a file, by the solver's word."""
    blocks = read_blocks(path)
    costs, sides = blocks["[c]"][2:], blocks["[b]"][2:]
    columns = {line[0]: place for place, line in enumerate(costs)}
    rows = {line[0]: place for place, line in enumerate(sides)}
    A = matrix(blocks["[A]"][2:], rows, columns)
    sign = -1.0 if blocks["[c]"][0][1] == "maximize" else 1.0
    c = sign * np.array([float(line[1]) for line in costs])
    relation = np.array([line[1] for line in sides])
    rhs = np.array([float(line[2]) for line in sides])
    bounds = bounds_of(costs)
    for line in blocks.get("[bounds]", [])[2:]:
        bounds[columns[line[0]]] = float(line[1] or "0"), float(line[2] or "inf")
    equal, turned = relation == "=", np.where(relation == ">=", -1.0, 1.0)
    A_ub = A[~equal].multiply(turned[~equal, None])
    result = linprog(c, A_ub, (turned * rhs)[~equal], A[equal], rhs[equal], bounds, method="highs")
    return sign * float(result.fun) + float(blocks.get("[offset]", [["", "0"]])[0][1])


if __name__ == "__main__":
    print(repr(answer(sys.argv[1])))
