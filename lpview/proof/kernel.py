"""Check a certificate with nothing but Python: ``python kernel.py CANONICAL.csv CERTIFICATE``.

``certificate.py`` describes its form and signs. Every number is an integer or a fraction.
"""

import csv
import hashlib
import re
import sys
from collections import defaultdict
from fractions import Fraction
from pathlib import Path
from typing import Any

FORM = re.compile(  # of a line; in a table, of the words above a cell, a comma and the cell
    r"(?P<text>\[c\],(minimize|maximize)|\[(A|b|bounds)\],|row relation,(<=|>=|=)"
    "|(row|column) (lower,-inf|upper,inf)|lpview certificate,1|model SHA-256,[0-9a-f]{64})"
    r"|(\[offset\]|column cost|row column coefficient|row rhs|(row|column) (lower|upper)),"
    "-?[0-9]+(/0*[1-9][0-9]*|([.][0-9]+)?(e-?[0-9]{1,3})?)"
    "|(optimal objective|contradiction|unbounded at rate),(0|-?[1-9][0-9]*)(/[1-9][0-9]*)?"
    "|denominator of (x|y|ray),[1-9][0-9]*|(column (x|ray)|row y),-?[1-9][0-9]*"
)
MODEL = (  # the order of lines, by their start, and of tables, by their words
    r"\[c\],column cost(,column lower,column upper)?(,\[offset\])?,\[A\],row column coefficient"
    r",\[b\],row (relation,row rhs|lower,row upper)(,\[bounds\],column lower,column upper)?"
)
X, Y, R = "denominator of x,column x", "denominator of y,row y", "denominator of ray,column ray"
PROOF = f"(optimal objective,{X},{Y}|contradiction,{Y}|unbounded at rate,{X},{R})"
SIDES = {"<=": [-1], ">=": [1], "=": [1, -1]}  # 1 is the lower side, -1 the upper
Key = tuple[str, ...]  # ("row", name), ("column", name), ("row", name, name of a column) or ()


def require(holds: object, *otherwise: object) -> None:
    """Refuse the certificate, for a reason, unless something holds."""
    if not holds:
        raise ValueError(" ".join(str(part)[:200] for part in otherwise))


def read(what: str, data: bytes, order: str) -> dict[str, dict[Key, Any]]:
    """Cells of tables, by the words above and by key; other lines, by their first word and ()."""
    found: defaultdict[str, dict[Key, Any]] = defaultdict(dict)
    kind, width, above = "", 1, list[str]()
    for place, line in enumerate(data.decode().removesuffix("\n").split("\n"), 1):
        try:
            require(len(line) < 10**6 and "\r" not in line, "is too long or has a carriage return")
            names, _, last = line.rpartition(",")  # the last cell, a number, is never in quotes
            cells = [*next(csv.reader([names], strict=True)), last]
            key, pairs = Key(), [line.partition(",")[::2]]
            if above and line:
                key, pairs = (kind, *cells[:width]), list(zip(above, cells[width:], strict=True))
            elif not line or cells[0] in ("row", "column"):  # the end of a table, or its header
                kind, width, pairs = cells[0], 1 + (cells[1:2] == ["column"]), []
                above = [" ".join((*cells[:width], word)) for word in cells[width:]]
                require(len({*found, *above}) == len(found) + len(above), "stands there twice")
                found.update({word: {} for word in above})
            for word, text in pairs:
                form = FORM.fullmatch(f"{word},{text}")
                require(form and key not in found[word], "is not what may stand there")
                found[word][key] = text if form and form["text"] else Fraction(text)
        except (ValueError, csv.Error) as error:
            require(False, f"line {place} of the {what},", repr(line), error)
    require(re.fullmatch(order, ",".join(found)), f"the {what} is incomplete or out of order")
    return found


def dot(terms: list[tuple[Fraction, Fraction]]) -> Fraction:
    """The sum of products, as one integer for each denominator as long as possible."""
    sums: defaultdict[int, int] = defaultdict(int)
    for a, b in terms:
        sums[a.denominator * b.denominator] += a.numerator * b.numerator
    return sum((Fraction(top, bottom) for bottom, top in sums.items()), Fraction(0))


class Model:
    """A linear program: costs by column, ends and coefficients by row and column."""

    def __init__(self, data: bytes) -> None:
        found = read("model", data, MODEL)
        self.sign = 1 if found["[c]"][()] == "minimize" else -1
        self.offset, self.cost = found["[offset]"].get((), Fraction(0)), found["column cost"]
        ends: dict[tuple[Key, int], Any] = {(key, 1): Fraction(0) for key in self.cost}
        for word in ("row lower", "column lower", "row upper", "column upper"):
            ends |= {(key, 1 if "lower" in word else -1): end for key, end in found[word].items()}
        require(found["row rhs"].keys() == found["row relation"].keys(), "[b] is incomplete")
        for key, relation in found["row relation"].items():
            ends |= {(key, side): found["row rhs"][key] for side in SIDES[relation]}
        self.ends = {place: end for place, end in ends.items() if not isinstance(end, str)}
        self.terms: dict[Key, list[tuple[Fraction, Key]]] = {key: [] for key, _ in ends}
        require(all(k[0] == "row" or k in self.cost for k in self.terms), "bounds of no column")
        for (_, row, column), a in found["row column coefficient"].items():
            i, j = ("row", row), ("column", column)
            require({i, j} <= self.terms.keys(), "[A]: unknown row or column:", (row, column))
            self.terms[i].append((a, j))
            self.terms[j].append((a, i))

    def products(self, vector: dict[Key, Fraction], kind: str) -> dict[Key, Fraction]:
        """Sums of coefficients times entries, 0 where left out, by row or by column."""
        require(not (new := [key for key in vector if key not in self.terms]), "unknown:", new)
        lines = [(key, terms) for key, terms in self.terms.items() if key[0] == kind]
        return {key: dot([(a, vector[k]) for a, k in terms if k in vector]) for key, terms in lines}

    def objective(self, x: dict[Key, Fraction], scale: Fraction) -> Fraction:
        """The objective, if all is within its ends; these and the offset are taken times scale."""
        values = x | self.products(x, "row")
        for (key, side), end in self.ends.items():
            require((values.get(key, 0) - end * scale) * side >= 0, "beyond its ends:", key)
        return dot([(self.offset, scale), *((self.cost[key], x[key]) for key in x)])

    def bound(self, y: dict[Key, Fraction], scale: Fraction, sign: int) -> Fraction:
        """Prices times the ends they name; costs and the offset are taken times scale."""
        reduced = self.products(y, "column").items()
        prices = y | {key: self.cost[key] * scale - product for key, product in reduced}
        ends = [(key, sign if price > 0 else -sign) for key, price in prices.items() if price]
        for end in ends:
            require(end in self.ends, "a price but no such end:", end[0])
        return dot([(self.offset, scale), *((self.ends[end], prices[end[0]]) for end in ends)])


def verify(blocks: bytes, certificate: bytes) -> str:
    """What a certificate proves; raises ValueError, which says why, where that is nothing."""
    sys.set_int_max_str_digits(0)
    text = certificate[: certificate.rfind(b"\n", 0, -1) + 1]
    last = f"SHA-256 of the lines above,{hashlib.sha256(text).hexdigest()}\n".encode()
    require(certificate == text + last, "the last line is not the SHA-256 of the lines above")
    found = read("certificate", text, f"lpview certificate,model SHA-256,{PROOF}")
    blocks = blocks[: blocks.find(b"\n\n[labels]\n") + 1 or None]  # labels prove nothing
    digest, claim = hashlib.sha256(blocks).hexdigest(), list(found)[2]
    require(found["model SHA-256"][()] == digest, "it is about another model than", digest)
    model, x, y, ray = Model(blocks), found["column x"], found["row y"], found["column ray"]
    of_x, of_y, of_ray = (found[f"denominator of {v}"].setdefault((), 1) for v in ("x", "y", "ray"))
    if claim == "contradiction":
        value = model.bound(y, Fraction(0), 1) / of_y
        require(value > 0, "the multipliers contradict nothing, they come to", value)
    elif claim == "unbounded at rate":
        model.objective(x, of_x)
        value = model.objective(ray, Fraction(0)) / of_ray
        require(value * model.sign < 0, "the ray improves nothing, it comes to", value)
    else:
        value = model.objective(x, of_x) / of_x
        require(value == model.bound(y, of_y, model.sign) / of_y, "y does not come to", value)
    require(value == found[claim][()], "the", claim, "is wrong, it comes to", value)
    return f"{claim} {value}"


if __name__ == "__main__":
    try:
        print("Proved:", verify(*(Path(name).read_bytes() for name in sys.argv[1:3])))
    except ValueError as refusal:
        sys.exit(f"Refused: {refusal}")
