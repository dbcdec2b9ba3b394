"""What is known of the optimal faces of the Netlib LP test set, from other software.

Dimensions were computed by maximal-support linear programs on both optimal faces (Freund,
Roundy and Todd 1985, "Identifying the set of always-active constraints in a system of linear
inequalities by a single linear program") and ranks by elimination modulo 2305843009213693951;
nothing of this package took part. Counts of rows come from the least and greatest dual value of
every row over the optimal dual face, by linear programs.
"""

from __future__ import annotations

from typing import NamedTuple


class Faces(NamedTuple):
    """One model of the table."""

    plan: int | None
    """Dimension of the optimal plans; None where the table does not settle it."""
    price: int | None
    """Dimension of the optimal dual solutions."""
    always_tight: int
    """Inequalities, bounds among them, that every feasible plan meets with equality."""
    dependent: int
    """Rows too many: rows less the rank of coefficients and slacks."""

    @property
    def is_endless(self) -> bool:
        """Whether some price has no end.

        Multipliers are bounded exactly where equality rows are independent and some plan is
        strict in all inequalities (Gauvin 1977, Mathematical Programming 12).
        """
        return bool(self.always_tight or self.dependent)


FACES = {
    "25fv47": Faces(18, 69, 0, 1),
    "adlittle": Faces(16, 1, 1, 0),
    "afiro": Faces(2, 7, 0, 0),
    "agg": Faces(8, 34, 70, 0),
    "agg2": Faces(40, 6, 2, 0),
    "beaconfd": Faces(4, 51, 78, 0),
    "blend": Faces(2, 6, 0, 0),
    "bnl2": Faces(504, 457, 111, 0),
    "brandy": Faces(5, 72, 43, 27),
    "czprob": Faces(60, 52, 347, 0),
    "d6cube": Faces(21, 299, 0, 11),
    "degen2": Faces(0, 209, 247, 2),
    "dfl001": Faces(None, None, 45, 13),
    "fffff800": Faces(51, 125, 19, 0),
    "fit1d": Faces(0, 0, 0, 0),
    "fit1p": Faces(0, 0, 0, 0),
    "fit2d": Faces(3, 0, 0, 0),
    "fit2p": Faces(0, 3, 0, 0),
    "gfrd-pnc": Faces(0, 274, 26, 0),
    "greenbea": Faces(236, 1437, 1182, 3),
    "grow22": Faces(409, 0, 0, 0),
    "grow7": Faces(97, 0, 0, 0),
    "israel": Faces(19, 0, 0, 0),
    "maros": Faces(14, 384, 463, 1),
    "maros-r7": Faces(0, 0, 0, 0),
    "modszk1": Faces(0, 21, 1, 1),
    "pilot": Faces(None, None, 78, 0),
    "pilot-we": Faces(0, 43, 31, 0),
    "pilot87": Faces(16, 46, 40, 0),
    "qap8": Faces(55, 311, 0, 170),
    "recipe": Faces(58, 20, 17, 5),
    "sc205": Faces(0, 14, 2, 0),
    "sc50a": Faces(0, 5, 1, 0),
    "sc50b": Faces(0, 2, 2, 0),
    "scagr25": Faces(0, 44, 0, 0),
    "scfxm1": Faces(12, 34, 14, 0),
    "scfxm3": Faces(34, 70, 42, 0),
    "scorpion": Faces(0, 129, 67, 30),
    "scrs8": Faces(16, 189, 41, 0),
    "scsd1": Faces(12, 58, 0, 0),
    "scsd8": Faces(174, 20, 0, 0),
    "sctap1": Faces(101, 64, 0, 0),
    "sctap3": Faces(278, 482, 0, 0),
    "share2b": Faces(6, 10, 0, 0),
    "shell": Faces(1, 151, 0, 1),
    "ship04l": Faces(1, 126, 201, 42),
    "ship04s": Faces(1, 107, 89, 42),
    "ship08l": Faces(0, 338, 1126, 66),
    "ship12l": Faces(1, 427, 1066, 109),
    "ship12s": Faces(0, 405, 360, 109),
    "standmps": Faces(14, 256, 56, 0),
    "stocfor1": Faces(0, 10, 0, 0),
    "stocfor3": Faces(0, 3124, 0, 0),
    "truss": Faces(101, 299, 0, 0),
    "wood1p": Faces(0, 205, 792, 1),
}
"""By file; the table has nothing on the other files of the set."""

NOT_UNIQUE = {
    "adlittle": 1,
    "afiro": 7,
    "beaconfd": 51,
    "blend": 6,
    "brandy": 72,
    "israel": 0,
    "recipe": 25,
    "sc50a": 5,
    "sc50b": 2,
    "share2b": 10,
    "stocfor1": 14,
}
"""Rows whose dual value is not the same in all optimal dual solutions (ends 1e-7 apart)."""

ENDLESS = {
    "adlittle": 1,
    "afiro": 0,
    "beaconfd": 50,
    "blend": 0,
    "brandy": 65,
    "israel": 0,
    "recipe": 16,
    "sc50a": 1,
    "sc50b": 2,
    "share2b": 0,
    "stocfor1": 0,
}
"""Rows whose dual value has no least or no greatest."""
